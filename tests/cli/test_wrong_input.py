"""Every wrong input gets one sentence on standard error, exit code 2, and leaves the book as it was."""

from __future__ import annotations

import sqlite3
from contextlib import closing
from pathlib import Path

import pytest

from tests.cli.conftest import Answer, Command

SESSION_HEADER = "robot,happened_at,ended_at,hours\n"


def contents(path: Path) -> list[str]:
    """Every row of every table."""
    with closing(sqlite3.connect(path)) as connection:
        return list(connection.iterdump())


def refused(answer: Answer, sentence: str) -> None:
    """One sentence with what was found, nothing else."""
    assert answer.code == 2
    assert answer.out == ""
    assert answer.err.startswith("wearbook: ")
    assert sentence in answer.err
    assert len(answer.err.splitlines()) == 1
    assert "Traceback" not in answer.err
    assert answer.err.rstrip()[-1] in ".)?"


LOG_FAILURE = ("log", "failure", "R1", "hip")
WRONG = {
    "unknown robot": (("log", "session", "R9", "--hours", "1"), "There is no robot 'R9'"),
    "unknown robot in a read-out": (("ages", "--robot", "R9"), "There is no robot 'R9'"),
    "nearly a robot": (("log", "session", "R11", "--hours", "1"), "did you mean R1?"),
    "unknown joint": (("log", "failure", "R1", "elbow", "disc", "--mode", "split"), "There is no joint on R1 'elbow'"),
    "unknown part": ((*LOG_FAILURE, "spring", "--mode", "split"), "There is no part in joint hip 'spring'"),
    "unknown part type": (("lives", "--part", "spring"), "There is no part type 'spring'"),
    "unknown part type of ages": (("ages", "--part", "spring"), "There is no part type 'spring'"),
    "unknown mode": ((*LOG_FAILURE, "disc", "--mode", "melted"), "There is no mode of disc 'melted'"),
    "mode of another part": ((*LOG_FAILURE, "disc", "--mode", "snapped"), "There is no mode of disc 'snapped'"),
    "no mode": ((*LOG_FAILURE, "disc"), "Missing option '--mode'"),
    "unknown lot": ((*LOG_FAILURE, "disc", "--mode", "split", "--spare", "D-7"), "There is no lot of disc 'D-7'"),
    "lot of another part": ((*LOG_FAILURE, "disc", "--mode", "split", "--spare", "P-1"), "no lot of disc 'P-1'"),
    "spare for a part that is good": (("log", "spare", "R1", "hip", "disc", "--spare", "D-2"), "log a swap instead"),
    "spare of no lot": (("log", "spare", "R1", "hip", "disc"), "Missing option '--spare'"),
    "unknown cause": ((*LOG_FAILURE, "disc", "--mode", "split", "--cause", "bad luck"), "'bad luck' is not one of"),
    "no place": ((*LOG_FAILURE, "pins", "--mode", "snapped"), "say which with --place 1 to 13"),
    "place beyond the set": ((*LOG_FAILURE, "pins", "--mode", "snapped", "--place", "14"), "places 1 to 13"),
    "before any module": (
        (*LOG_FAILURE, "disc", "--mode", "split", "--at", "2026-01-04"),
        "Joint hip held no module at 2026-01-04 23:59",
    ),
    "failure in the future": ((*LOG_FAILURE, "disc", "--mode", "split", "--at", "2026-06-02"), "is in the future"),
    "impossible date of a failure": (
        (*LOG_FAILURE, "disc", "--mode", "split", "--at", "2026-02-30"),
        "--at is '2026-02-30', not a date and time",
    ),
    "negative hours": (("log", "session", "R1", "--hours", "-1"), "-1 cannot be: give hours from 0 to 744"),
    "too many hours": (("log", "session", "R1", "--hours", "745"), "745 cannot be: give hours from 0 to 744"),
    "hours with a unit": (("log", "session", "R1", "--hours", "3h"), "'3h' is not a plain number: write hours such as"),
    "hours NaN": (("log", "session", "R1", "--hours", "NaN"), "'NaN' is not a plain number"),
    "hours infinite": (("log", "session", "R1", "--hours", "inf"), "'inf' is not a plain number"),
    "hours with an underscore": (("log", "session", "R1", "--hours", "1_5"), "'1_5' is not a plain number"),
    "half an impact": (("log", "session", "R1", "--hours", "1", "--impacts", "2.5"), "2.5"),
    "negative impacts": (("log", "session", "R1", "--hours", "1", "--impacts", "-2"), "-2"),
    "impossible date": (
        ("log", "session", "R1", "--hours", "1", "--ended", "2026-02-30"),
        "--ended is '2026-02-30', not a date and time such as",
    ),
    "date in the future": (("log", "session", "R1", "--hours", "1", "--ended", "2026-07-01"), "is in the future"),
    "hour in the future": (("log", "session", "R1", "--hours", "1", "--ended", "2026-06-01T21:00"), "is in the future"),
    "clock time that came twice": (
        ("log", "session", "R1", "--hours", "1", "--ended", "2025-10-26T02:30"),
        "a clock time that came twice that night",
    ),
    "before the robot joined": (("log", "session", "R1", "--hours", "1", "--ended", "2025-12-01"), "joined only on"),
    "before all time": (
        ("log", "session", "R1", "--hours", "1", "--ended", "0001-01-01T00:00+23:59"),
        "outside the years 1990 to 2150",
    ),
    "overlapping session": (
        ("log", "session", "R1", "--hours", "1", "--ended", "2026-01-06T12:30"),
        "overlaps the one from",
    ),
    "control character": (("log", "session", "R1", "--hours", "1", "--note", "a\x07b"), "a control character"),
    "nobody entered it": (("log", "session", "R1", "--hours", "1", "--by", ""), "'--by': it is empty"),
    "broken letters": (("log", "session", "R1", "--hours", "1", "--by", "\udcff"), "a control character"),
    "nothing held": (("log", "release", "R1", "--why", "ok"), "R1 itself is not held by anyone"),
    "mode without part": (("log", "check", "R1", "hip", "--mode", "worn"), "--mode needs --part"),
    "undo of nothing": (("log", "undo", "99"), "Nothing of write 99 is left to undo"),
    "undo of no number": (("log", "undo", "last"), "'last' is not a valid integer"),
    "undo beyond all numbers": (("log", "undo", "9" * 30), "is not in the range"),
    "undo of the set-up": (("log", "undo", "1"), "Later entries build on that one"),
    "as of nonsense": (("odds", "--as-of", "yesterday"), "--as-of is 'yesterday', not a date and time such as"),
    "as of an impossible date": (("odds", "--as-of", "2026-02-30"), "--as-of is '2026-02-30'"),
    "as of before all time": (("odds", "--as-of", "1800-01-01"), "outside the years 1990 to 2150"),
    "known by nonsense": (("odds", "--known-by", "-3"), "--known-by is '-3'"),
    "target above 1": (("spares", "--target", "1.2"), "1.2 cannot be: give a chance from 0.5 to 0.9999"),
    "target in per cent": (("spares", "--target", "90%"), "'90%' is not a plain number: write a chance such as 0.9"),
    "no weeks": (("plates", "--weeks", "0"), "0 is not in the range"),
    "session of no hours": (("odds", "--hours", "0"), "0 cannot be: give hours from 0.01 to 744"),
    "missing folder": (("import", "no-such-folder"), "There is no folder no-such-folder"),
    "no folder": (("import",), "Name the folder that holds the CSV files"),
    "missing table": (("fit", "no-such.csv"), "There is no file no-such.csv"),
    "a book that is there": (("new", "bench.db"), "bench.db is there already"),
    "a folder that is not": (("new", "nowhere/x.db"), "The folder nowhere does not exist"),
    "no such zone": (("new", "x.db", "--zone", "Mars/Base"), "'Mars/Base' is not an IANA zone"),
}


@pytest.mark.parametrize("case", list(WRONG))
def test_a_wrong_input_gets_one_sentence_and_leaves_the_book_as_it_was(
    wearbook: Command, book: Path, case: str
) -> None:
    arguments, sentence = WRONG[case]
    before = contents(book)
    refused(wearbook(*arguments), sentence)
    assert contents(book) == before
    assert not Path("x.db").exists()


def test_a_change_of_the_book_would_be_seen(wearbook: Command, book: Path) -> None:
    before = contents(book)
    assert wearbook("log", "session", "R1", "--hours", "1").code == 0
    assert contents(book) != before


def test_a_failure_while_no_part_was_fitted_is_refused(wearbook: Command, book: Path) -> None:
    assert wearbook("log", "swap", "R1", "hip", "disc", "--at", "2026-05-01T12:00").code == 0
    before = contents(book)
    answer = wearbook(*LOG_FAILURE, "disc", "--mode", "split", "--at", "2026-05-10T12:00")
    refused(answer, "held no part at 2026-05-10 12:00")
    assert "a part cannot fail before it was fitted" in answer.err
    assert contents(book) == before


def test_the_same_part_fails_once(wearbook: Command, book: Path) -> None:
    arguments = (*LOG_FAILURE, "disc", "--mode", "split")
    assert wearbook(*arguments).code == 0
    before = contents(book)
    refused(wearbook(*arguments), "that part has failed already")
    assert contents(book) == before


def newer(path: Path) -> None:
    with closing(sqlite3.connect(path)) as connection:
        connection.execute("UPDATE alembic_version SET version_num = '9999'")
        connection.commit()


def other_program(path: Path) -> None:
    with closing(sqlite3.connect(path)) as connection:
        connection.execute("CREATE TABLE notes (text TEXT)")
        connection.commit()


@pytest.mark.parametrize("command", [("odds",), ("log", "session", "R1", "--hours", "1"), ("import", ".")])
def test_what_is_no_book_is_refused_by_reading_and_writing_alike(
    wearbook: Command, book: Path, tmp_path: Path, command: tuple[str, ...]
) -> None:
    newer(book)
    (tmp_path / "notes.txt").write_text("not a book\n")
    (tmp_path / "half.db").write_bytes(book.read_bytes()[:30_000])
    other_program(tmp_path / "other.db")
    cases = {
        "missing.db": "There is no book at missing.db",
        "notes.txt": "notes.txt is not a book",
        "half.db": "the file is damaged",
        "other.db": "it holds other tables",
        str(book): "was written by a newer wearbook",
        str(tmp_path): "is a folder, not a book",
        "mysql://host/book": "A book is kept in a SQLite file or a PostgreSQL database",
    }
    for where, sentence in cases.items():
        files = {path: path.read_bytes() for path in tmp_path.glob("*.*") if path.suffix in (".db", ".txt")}
        refused(wearbook(*command, "--book", where), sentence)
        assert {path: path.read_bytes() for path in files} == files
    assert not (tmp_path / "missing.db").exists()


TABLES = {
    "wrong header": ("session.csv", "robot,happened,ended_at,hours\nR1,2026-05-01,2026-05-02,1\n", "did you mean"),
    "NaN": ("session.csv", f"{SESSION_HEADER}R1,2026-05-01 10:00,2026-05-01 12:00,NaN\n", "hours is 'NaN'"),
    "hours with a unit": ("session.csv", f"{SESSION_HEADER}R1,2026-05-01 10:00,2026-05-01 12:00,3h\n", "hours is '3h'"),
    "negative hours": ("session.csv", f"{SESSION_HEADER}R1,2026-05-01 10:00,2026-05-01 12:00,-1\n", "below 0"),
    "impossible date": (
        "session.csv",
        f"{SESSION_HEADER}R1,2026-02-30 10:00,2026-05-01 12:00,1\n",
        "happened_at is '2026-02-30 10:00'",
    ),
    "unknown robot": ("session.csv", f"{SESSION_HEADER}R9,2026-05-01 10:00,2026-05-01 12:00,1\n", "robot 'R9'"),
    "overlap": ("session.csv", f"{SESSION_HEADER}R1,2026-01-06 11:30,2026-01-06 12:30,1\n", "overlaps the one"),
    "short row": ("session.csv", f"{SESSION_HEADER}R1,2026-05-01 10:00,2026-05-01 12:00\n", "has 3 cells"),
    "unknown file": ("sesion.csv", f"{SESSION_HEADER}R1,2026-05-01 10:00,2026-05-01 12:00,1\n", "session.csv"),
    "before it was fitted": (
        "failure.csv",
        "robot,position,slot,happened_at,mode,finding\nR1,hip,disc,2025-05-01 10:00,split,stopped\n",
        "failure.csv line 2",
    ),
}


@pytest.mark.parametrize("dry_run", [(), ("--dry-run",)], ids=["import", "dry run"])
@pytest.mark.parametrize("case", list(TABLES))
def test_a_wrong_file_is_refused_whole_with_file_and_line(
    wearbook: Command, book: Path, tmp_path: Path, case: str, dry_run: tuple[str, ...]
) -> None:
    name, text, sentence = TABLES[case]
    folder = tmp_path / "files"
    folder.mkdir()
    (folder / name).write_text(text)
    (folder / "printer.csv").write_text("code,label,nozzle_mm,change_minutes\nPR-7,spare,0.4,9\n")
    before = contents(book)
    answer = wearbook("import", folder, *dry_run)
    assert (answer.code, answer.out) == (2, "")
    first, *lines = answer.err.splitlines()
    assert first.startswith("wearbook: ") and first.endswith("found, nothing was written:")
    assert len(lines) == int(first.split()[1])
    assert all(line.startswith(name) for line in lines)
    assert sentence in answer.err
    assert contents(book) == before
