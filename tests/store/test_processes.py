"""Several programs on one book: two that write at once lose nothing, one that is killed leaves nothing half done."""

from __future__ import annotations

import signal
import subprocess
import sys
from collections import Counter
from contextlib import closing
from pathlib import Path

import pytest
from sqlalchemy import text

from fleet.records.ledger import Session
from fleet.store.book import Book, create_book, open_book
from fleet.store.csv_import import import_folder
from fleet.store.reading import read_history
from fleet.store.writing import Entry
from tests.books import END, Cells, tiny_book, tiny_files, write_files

ROOT = Path(__file__).resolve().parents[2]
LOGGED = 40

LOG_SESSIONS = """
import sys
from datetime import timedelta
from fleet.store.book import open_book
from fleet.store.entries import SessionEntry, log_session
from fleet.store.reading import read_history
from fleet.records.ledger import Session
from tests.books import day

book = open_book(sys.argv[1])
print("ready", flush=True)
sys.stdin.readline()
for number in range(int(sys.argv[3])):
    log_session(book, SessionEntry(sys.argv[2], 1.0, ended_at=day(number)), day(number), "bench")
    for _ in range(3):  # as a page would, while the other program writes
        assert len(read_history(book, day(number)).of(Session)) > number
book.close()
"""


def run(script: str, *arguments: object) -> subprocess.Popen[bytes]:
    command = [sys.executable, "-c", script, *map(str, arguments)]
    pipe = subprocess.PIPE
    return subprocess.Popen(command, cwd=ROOT, stdin=pipe, stdout=pipe, stderr=pipe)


def sound(book: Book) -> bool:
    with book.reading() as connection:
        broken = connection.execute(text("PRAGMA foreign_key_check")).all()
        return connection.execute(text("PRAGMA integrity_check")).scalar_one() == "ok" and not broken


def test_two_programs_that_write_at_once_lose_nothing(tmp_path: Path) -> None:
    path = tmp_path / "book.db"
    tiny_book(path).close()
    writers = [run(LOG_SESSIONS, path, robot, LOGGED) for robot in ("R1", "R2")]
    for writer in writers:
        assert writer.stdout is not None and writer.stdout.readline() == b"ready\n"
    for writer in writers:
        assert writer.stdin is not None
        writer.stdin.write(b"go\n")
        writer.stdin.flush()
    for writer in writers:
        _, said = writer.communicate(timeout=60)
        assert writer.returncode == 0, said.decode()
    with closing(open_book(path)) as book:
        sessions = read_history(book, END).of(Session).values()
        assert sound(book)
        assert Counter(session.robot for session in sessions) == {"R1": LOGGED, "R2": LOGGED}
        numbers = {
            robot: [session.stamp.write_number for session in sessions if session.robot == robot and session.stamp]
            for robot in ("R1", "R2")
        }
        assert sorted(numbers["R1"] + numbers["R2"]) == list(range(2, 2 * LOGGED + 2))
        # They did write at the same time.
        assert min(numbers["R1"]) < max(numbers["R2"]) and min(numbers["R2"]) < max(numbers["R1"])
        assert book.write_number() == 2 * LOGGED + 1


# An import that is killed. A cache of one page makes SQLite put rows into the write-ahead log before the commit.

KILLED_IMPORT = """
import os, signal, sys
from pathlib import Path
from sqlalchemy import event
from fleet.store.book import open_book
from fleet.store.csv_import import import_folder
from fleet.store.writing import Entry
from tests.books import END

def die():
    print("dying", flush=True)
    os.kill(os.getpid(), signal.SIGKILL)

where, folder, when = sys.argv[1:]
book = open_book(where)
book.engine.dispose()
event.listen(book.engine, "connect", lambda connection, _: connection.execute("PRAGMA cache_size = 1").close())
inserted = 0

def before_statement(connection, cursor, statement, *_):
    global inserted
    inserted += statement.startswith("INSERT")
    if when == "half of the rows written" and inserted == 8:
        die()

def progress(stage, count):
    if when == "about to check and write" and stage == "checking and writing":
        die()

event.listen(book.engine, "before_cursor_execute", before_statement)
if when == "about to commit":
    event.listen(book.engine, "commit", lambda connection: die() if inserted else None)
import_folder(book, Path(folder), Entry(END, "bench", "import"), progress=progress)
"""
SESSIONS: list[Cells] = [
    {
        "robot": robot,
        "happened_at": f"2026-0{month}-{number:02d} 10:00",
        "ended_at": f"2026-0{month}-{number:02d} 12:00",
        "hours": 2,
        "note": "between the rows of house 1, dry and cold; " * 8,
    }
    for robot in ("R1", "R2")
    for month in range(2, 7)
    for number in range(1, 29)
]


@pytest.mark.parametrize("when", ["about to check and write", "half of the rows written", "about to commit"])
def test_an_import_that_is_killed_leaves_the_book_as_it_was(tmp_path: Path, when: str) -> None:
    path = tmp_path / "book.db"
    folder = write_files(tmp_path / "csv", {**tiny_files(), "session.csv": SESSIONS})
    create_book(path).close()
    killed = run(KILLED_IMPORT, path, folder, when)
    out, said = killed.communicate(timeout=60)
    assert (killed.returncode, out) == (-signal.SIGKILL, b"dying\n"), said.decode()
    if when != "about to check and write":
        assert path.with_name("book.db-wal").stat().st_size > 100_000  # rows had reached the disk
    with closing(open_book(path)) as book:
        assert book.write_number() == 0
        assert read_history(book, END).rows == {}
        assert sound(book)
        # And the book still takes the same files.
        assert import_folder(book, folder, Entry(END, "bench", "import")).counts["session"] == len(SESSIONS)
