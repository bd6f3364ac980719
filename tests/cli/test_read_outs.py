"""Commands that read a book: tables and documents, the past, and what a new failure changes."""

from __future__ import annotations

import json
import subprocess
import sys
from pathlib import Path

import pytest

from fleet.cli.options import BOOK_VARIABLE
from fleet.cli.read_outs import ages_command, lives_command, odds_command, plates_command, spares_command
from tests.cli.conftest import Command
from tests.report.test_documents import keys_in, promised

READ_OUTS = {c.name: c for c in (odds_command, spares_command, plates_command, lives_command, ages_command)}


@pytest.mark.parametrize("name", list(READ_OUTS))
def test_each_prints_a_table_or_the_document_that_its_help_promises(wearbook: Command, book: Path, name: str) -> None:
    before = book.read_bytes()
    table, document = wearbook(name), wearbook(name, "--json")
    assert (table.code, table.err) == (document.code, document.err) == (0, "")
    assert len(table.out.splitlines()) > 3
    assert {"as_of", "write_number", "caution"} <= set(document.document)
    wanted = promised(READ_OUTS[name])
    if name == "plates":  # nothing is late on the bench
        wanted -= {"late"}
    assert wanted <= keys_in(document.document)
    assert book.read_bytes() == before, "reading writes nothing"


def test_the_book_is_found_by_option_then_by_variable_then_here(
    wearbook: Command, book: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    book.rename("named.db")
    monkeypatch.setenv(BOOK_VARIABLE, "no-such.db")
    assert wearbook("ages", "--book", "named.db").code == 0
    assert "no-such.db" in wearbook("ages").err
    monkeypatch.delenv(BOOK_VARIABLE)
    assert "There is no book at wearbook.db" in wearbook("ages").err
    Path("named.db").rename("wearbook.db")
    assert wearbook("ages").code == 0
    assert wearbook("ages", "--book", "sqlite:///wearbook.db").code == 0


def test_the_same_question_gets_the_same_answer(wearbook: Command, book: Path) -> None:
    assert wearbook("odds", "--json") == wearbook("odds", "--json")


def test_a_new_failure_changes_the_spares(wearbook: Command, book: Path) -> None:
    def disc() -> dict[str, object]:
        parts = wearbook("spares", "--json").document["parts"]
        return next(part for part in parts if part["part_type"] == "disc")

    before = disc()
    assert wearbook("log", "failure", "R1", "hip", "disc", "--mode", "split").code == 0
    after = disc()
    assert (before["failures_seen"], after["failures_seen"]) == (0, 1)
    assert (before["waiting"], after["waiting"]) == (0, 1)
    assert after["expected"] > before["expected"] + 0.9  # type: ignore[operator]
    assert after["needed"] > before["needed"]  # type: ignore[operator]


def test_longer_sessions_have_lower_odds(wearbook: Command, book: Path) -> None:
    fleet = [
        wearbook("odds", "--hours", hours, "--json").document["fleet"]["finishes"]["mean"] for hours in ("1", "8", "80")
    ]
    assert fleet == sorted(fleet, reverse=True)
    assert fleet[0] > fleet[-1]


def test_weeks_and_target_reach_the_answer(wearbook: Command, book: Path) -> None:
    few = wearbook("spares", "--weeks", "2", "--target", "0.5", "--json").document
    many = wearbook("spares", "--weeks", "12", "--target", "0.99", "--json").document
    assert (few["target"], many["target"]) == (0.5, 0.99)
    assert [len(part["weeks"]) for part in few["parts"]] == [2, 2, 2]
    needed = [{part["part_type"]: part["needed"] for part in document["parts"]} for document in (few, many)]
    assert all(needed[1][code] > needed[0][code] for code in needed[0])


def test_a_target_that_no_plate_can_meet_stops_no_answer(wearbook: Command, book: Path) -> None:
    (said,) = wearbook("plates", "--weeks", "20", "--target", "0.9999", "--json").document["shortages"]
    assert said.startswith("disc (B): ") and "no spool of PA-CF" in said
    assert wearbook("spares", "--weeks", "20", "--target", "0.9999").code == 0


def test_the_past_is_read_as_it_was_and_as_it_was_known(wearbook: Command, book: Path) -> None:
    def oldest(*asked: str) -> float:
        parts = wearbook("ages", "--robot", "R1", "--part", "disc", "--json", *asked).document["parts"]
        return max((part["age"]["hours"] for part in parts), default=0.0)

    assert oldest() == pytest.approx(120.0)
    assert oldest("--as-of", "2026-01-15T23:00") == pytest.approx(30.0)
    assert oldest("--as-of", "2026-01-15") == pytest.approx(30.0), "a date alone is the end of that day"
    assert oldest("--known-by", "2") == pytest.approx(120.0)
    assert oldest("--known-by", "1") == pytest.approx(0.0), "the sessions came with the second write"
    assert "the last write of this book is 2" in wearbook("ages", "--known-by", "99999999999999999999999").err
    assert "lies in the future" in wearbook("ages", "--as-of", "2100-01-01").err
    assert (
        "There is no robot 'R1'; there is none yet."
        in wearbook("ages", "--robot", "R1", "--known-by", "2020-01-01").err
    )


def test_ages_are_told_of_one_robot_one_part_type_or_one_slot(wearbook: Command, book: Path) -> None:
    def parts(*asked: str) -> set[tuple[object, object]]:
        document = wearbook("ages", "--json", *asked).document
        return {(part["robot"], part["slot"]) for part in document["parts"]}

    assert parts("--robot", "R2") == {("R2", "disc"), ("R2", "pins"), ("R2", "bearing")}
    assert parts("--part", "pin") == parts("--part", "pins") == {("R1", "pins"), ("R2", "pins"), (None, "pins")}


def test_lives_are_told_of_one_part_type(wearbook: Command, book: Path) -> None:
    document = wearbook("lives", "--part", "disc", "--json").document
    assert {life["part_type"] for life in document["lives"]} == {"disc"}
    assert {life["part_type"] for life in wearbook("lives", "--json").document["lives"]} == {"disc", "pin", "bearing"}


def test_a_doubtful_joint_with_markup_in_its_note_is_still_told(wearbook: Command, book: Path) -> None:
    assert wearbook("log", "check", "R1", "hip", "--doubtful", "--note", "see [/b] photo").code == 0
    assert "do not run: see [/b] photo" in wearbook("odds").out


def test_a_real_process_answers_as_this_one_does(wearbook: Command, book: Path) -> None:
    asked = ["odds", "--as-of", "2026-06-01T20:00", "--json"]
    command = [sys.executable, "-m", "fleet.cli.main", *asked]
    done = subprocess.run(command, capture_output=True, text=True, timeout=60, check=True)
    assert done.stderr == ""
    assert json.loads(done.stdout) == wearbook(*asked).document
