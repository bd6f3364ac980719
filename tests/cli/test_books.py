"""Making, filling and showing a book: the demo, an own fleet from files, and nothing half done."""

from __future__ import annotations

import os
import re
import subprocess
import sys
from contextlib import closing
from pathlib import Path

import pytest

from fleet.cli import books
from fleet.pipeline import ReadOut
from fleet.records.history import KINDS, History
from fleet.store.book import open_book
from fleet.store.csv_rows import columns_of_kind
from tests.books import tiny_files, write_files
from tests.cli.conftest import Command
from tests.demo_book import AS_OF


def write_number(path: Path) -> int:
    with closing(open_book(path)) as book:
        return book.write_number()


def test_the_demo_builds_its_book_and_prints_odds_spares_and_plates(
    wearbook: Command, demo_read_out: ReadOut, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr(books, "now", lambda: AS_OF)
    asked: list[History] = []
    monkeypatch.setattr("fleet.pipeline.read_out", lambda history, _: asked.append(history) or demo_read_out)
    answer = wearbook("demo", "--print-only", "--dir", "some/where")
    assert (answer.code, answer.err) == (0, "")
    assert "an invented fleet, not measurements" in answer.out
    titles = ("Odds of finishing the next session", "Spares that last until restocked", "Print plates")
    at = [answer.out.index(title) for title in titles]
    assert at == sorted(at)
    assert os.listdir("some/where") == ["demo.db"]
    assert write_number(Path("some/where/demo.db")) == 1
    assert {kind: len(held) for kind, held in asked[0].rows.items()} == {
        kind: len(held) for kind, held in demo_read_out.history.rows.items()
    }


def test_a_second_demo_takes_the_book_as_it_is(own_demo_book: Path) -> None:
    command = [sys.executable, "-m", "fleet.cli.main", "demo", "--print-only", "--dir", str(own_demo_book.parent)]
    before = own_demo_book.read_bytes()
    done = subprocess.run(command, capture_output=True, text=True, timeout=100, check=True)
    assert "an invented fleet, not measurements" in done.stdout
    assert done.stderr == ""
    assert write_number(own_demo_book) == 1
    assert own_demo_book.read_bytes() == before


def test_a_demo_that_breaks_off_leaves_no_book(wearbook: Command, monkeypatch: pytest.MonkeyPatch) -> None:
    def broken(*_: object, **__: object) -> None:
        raise KeyboardInterrupt

    monkeypatch.setattr("fleet.store.csv_import.import_folder", broken)
    answer = wearbook("demo", "--print-only", "--dir", "demo")
    assert (answer.code, answer.err.strip()) == (2, "wearbook: stopped.")
    assert os.listdir("demo") == []


def test_a_place_where_no_demo_can_be_built_is_refused(wearbook: Command) -> None:
    Path("a-file").write_text("")
    answer = wearbook("demo", "--print-only", "--dir", "a-file")
    assert (answer.code, answer.out) == (2, "")
    assert answer.err == "wearbook: The folder a-file cannot be made: File exists.\n"


def test_a_new_book_is_empty_and_answers(wearbook: Command) -> None:
    made = wearbook("new", "own.db", "--title", "Our scouts", "--zone", "Europe/Amsterdam")
    assert (made.code, made.err) == (0, "")
    assert made.out == "Made own.db. Next: 'wearbook import FOLDER --book own.db'.\n"
    assert write_number(Path("own.db")) == 1
    for name in ("odds", "spares", "plates", "lives", "ages"):
        answer = wearbook(name, "--book", "own.db")
        assert (answer.code, answer.err) == (0, "")
        assert len(answer.out.splitlines()) == 1, "one sentence that says what to do"
        assert wearbook(name, "--book", "own.db", "--json").document["write_number"] == 1


def test_a_bare_book_takes_its_settings_from_the_files(wearbook: Command, tmp_path: Path) -> None:
    folder = write_files(tmp_path / "set-up", tiny_files())
    assert wearbook("new", "own.db", "--bare").code == 0
    tried = wearbook("import", folder, "--book", "own.db", "--dry-run")
    assert (tried.code, tried.err) == (0, "")
    assert tried.out.startswith("No problems; nothing written. It would add: 1 settings, 2 robot")
    assert "times without an offset were taken in Europe/Amsterdam" in tried.out
    assert write_number(Path("own.db")) == 0
    done = wearbook("import", folder, "--book", "own.db", "--by", "planner")
    assert (done.code, done.err) == (0, "")
    assert done.out.startswith("Imported as write 1: 1 settings, 2 robot")
    assert wearbook("ages", "--robot", "R1", "--book", "own.db").code == 0


def test_the_same_files_twice_are_refused_as_a_whole(wearbook: Command, tmp_path: Path) -> None:
    folder = write_files(tmp_path / "set-up", tiny_files())
    wearbook("new", "own.db", "--bare")
    wearbook("import", folder, "--book", "own.db")
    again = wearbook("import", folder, "--book", "own.db")
    assert (again.code, again.out) == (2, "")
    assert "robot R1 is there already; give each its own code." in again.err
    assert write_number(Path("own.db")) == 1


def test_files_without_rows_are_no_reason_to_complain(wearbook: Command, tmp_path: Path) -> None:
    folder = tmp_path / "empty"
    folder.mkdir()
    (folder / "robot.csv").write_text("code,label,in_service_from\n")
    wearbook("new", "own.db")
    answer = wearbook("import", folder, "--book", "own.db")
    assert (answer.code, answer.out) == (0, "No problems; the files hold no rows.\n")


def test_hundreds_of_problems_are_shortened_and_counted(wearbook: Command, tmp_path: Path) -> None:
    folder = tmp_path / "many"
    folder.mkdir()
    rows = "".join(f"R9,2026-05-01 10:{n:02d},2026-05-01 11:00,1\n" for n in range(55))
    (folder / "session.csv").write_text(f"robot,happened_at,ended_at,hours\n{rows}")
    wearbook("new", "own.db")
    lines = wearbook("import", folder, "--book", "own.db").err.splitlines()
    assert lines[0] == "wearbook: 55 problems found, nothing was written:"
    assert len(lines) == 1 + 40 + 1
    assert lines[-1] == "... and 15 more."


def test_the_columns_of_every_file_are_listed_with_their_meaning(wearbook: Command) -> None:
    answer = wearbook("import", "--columns")
    assert (answer.code, answer.err) == (0, "")
    listed = re.split(r"^(\w+)\.csv  ", answer.out, flags=re.MULTILINE)[1:]
    by_file = dict(zip(listed[::2], listed[1::2], strict=True))
    assert set(by_file) == {cls.kind for cls in KINDS}  # type: ignore[attr-defined]
    for cls in KINDS:
        columns = columns_of_kind(cls)
        names = [line.split()[0] for line in by_file[cls.kind].splitlines()[1:]]  # type: ignore[attr-defined]
        assert names == [*columns.needed, *columns.optional]
    assert "inspect" not in answer.out and "None" not in answer.out


def test_the_dashboard_of_no_book_is_refused_before_it_starts(wearbook: Command) -> None:
    answer = wearbook("show", "--book", "missing.db")
    assert (answer.code, answer.out) == (2, "")
    assert "There is no book at missing.db" in answer.err
