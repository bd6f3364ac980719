"""Tables for a terminal: readable at 80 and at 160 columns, honest, and deaf to markup in what people typed."""

from __future__ import annotations

import re
from dataclasses import replace
from io import StringIO

import pytest
from rich.cells import cell_len
from rich.console import Console, RenderableType

from fleet.lives.ages import ages_of
from fleet.pipeline import Question, ReadOut, read_out
from fleet.records.fields import Record
from fleet.records.history import history_of
from fleet.records.ledger import Hold, StockMove
from fleet.records.set_up import PartType, UsagePlan
from fleet.report.documents import ages_document
from fleet.report.tables import ages_table, lives_table, odds_table, plates_table, spares_table
from tests.books import day, failure, fitment, history_with, removal, session
from tests.demo_book import AS_OF

RAN = [session(robot, day(n), 3.0, impacts=2) for n in range(1, 30) for robot in ("R1", "R2")]
AN_OLD_PART = "cable"  # one in every joint: a table that is long enough
TYPED = "see [/b] photo [red]left[/red] :warning:"


def shown(table: RenderableType, width: int = 160) -> str:
    """The table as a terminal of this width shows it."""
    console = Console(file=StringIO(), width=width, highlight=False)
    console.print(table)
    file = console.file
    assert isinstance(file, StringIO)
    return file.getvalue()


def tables_of(found: ReadOut) -> dict[str, RenderableType]:
    return {
        "odds": odds_table(found),
        "spares": spares_table(found),
        "plates": plates_table(found),
        "lives": lives_table(found),
        "ages": ages_table(ages_document(found.history, found.ages, part=AN_OLD_PART)),
    }


@pytest.mark.parametrize("width", [80, 160])
@pytest.mark.parametrize("name", ["odds", "spares", "plates", "lives", "ages"])
def test_a_table_fits_its_terminal_and_cuts_nothing_off(demo_read_out: ReadOut, name: str, width: int) -> None:
    text = shown(tables_of(demo_read_out)[name], width)
    assert all(cell_len(line) <= width for line in text.splitlines())
    assert "…" not in text


@pytest.mark.parametrize("width", [80, 160])
def test_every_robot_part_and_joint_is_named_at_every_width(demo_read_out: ReadOut, width: int) -> None:
    texts = {name: re.sub(r"\s+", " ", shown(table, width)) for name, table in tables_of(demo_read_out).items()}
    for robot in demo_read_out.next_session.robots:
        assert f" {robot.code} " in texts["odds"] and f" {robot.code} " in texts["ages"]
    for need in demo_read_out.spares:
        first, *_ = need.label.split()
        assert first in texts["spares"]
        assert first in texts["lives"]
    assert all(plate.printer in texts["plates"] for plate in demo_read_out.plates.plan.plates)


def test_columns_line_up(demo_read_out: ReadOut) -> None:
    lines = shown(tables_of(demo_read_out)["spares"]).splitlines()
    header, rows = lines[1], lines[2 : 2 + len(demo_read_out.spares)]
    end = header.index("needed") + len("needed")
    assert [int(row[:end].split()[-1]) for row in rows] == [need.needed for need in demo_read_out.spares]


def test_spares_name_the_weeks_that_were_asked_for() -> None:
    for weeks, named in ((1, "expected in 1 week"), (3, "expected in 3 weeks")):
        text = shown(spares_table(read_out(history_with(*RAN), Question(weeks=weeks))))
        assert named in text.replace("\u00a0", " ")


def test_every_estimate_has_its_range_and_every_table_its_caution(demo_read_out: ReadOut) -> None:
    texts = {name: shown(table) for name, table in tables_of(demo_read_out).items()}
    assert re.search(r"W4 +\d+\u00a0% \(\d+–\d+\)", texts["odds"])
    assert re.search(r"\d\u00a0h \([\d,.]+–[\d,.]+\)", texts["lives"])
    assert re.search(r"\d \(\d+–\d+\)", texts["spares"])
    assert "An estimate, no safety check: inspect today." in texts["odds"]
    assert "life-critical" in texts["lives"]
    assert "local fire rules" in texts["plates"]


def test_what_must_not_run_says_so_and_why(demo_read_out: ReadOut) -> None:
    text = shown(odds_table(demo_read_out))
    for robot in demo_read_out.next_session.robots:
        if robot.held is not None:
            assert f"do not run: {robot.held.why}" in text


def test_a_fleet_without_failures_says_mostly_assumption() -> None:
    found = read_out(history_with(*RAN), Question())
    texts = {name: re.sub(r"\s+", " ", shown(table)) for name, table in tables_of(found).items()}
    assert "[mostly assumption: 0 failures seen]" in texts["odds"]
    assert "disc (mostly assumption)" in texts["spares"]
    assert "disc A (mostly assumption)" in texts["lives"]


@pytest.mark.parametrize("width", [80, 160])
def test_markup_that_people_typed_is_shown_as_it_stands(width: int) -> None:
    kept = history_with().one(PartType, "disc")
    typed: list[Record] = [
        Hold(record_id="hold", happened_at=day(31), robot="R1", why=TYPED),
        replace(kept, label="disc [/i]"),
        UsagePlan(record_id="plan", robot="R2", hours_per_week=40.0, session_hours=2.0),
    ]
    found = read_out(history_with(*RAN, *typed), Question())
    texts = {name: shown(table, width) for name, table in tables_of(found).items()}
    assert "[/b]" in texts["odds"] and "[red]left[/red] :warning:" in re.sub(r"\s+", " ", texts["odds"])
    for name in ("spares", "lives", "plates"):
        assert "[/i]" in texts[name], name


def test_a_stock_that_may_not_be_used_is_said_plainly() -> None:
    old = StockMove(record_id="old", happened_at=day(2), lot="D-1", quantity=9, reason="counted")
    text = shown(spares_table(read_out(history_with(*RAN, old), Question())))
    assert "Set aside, of a superseded revision or a lot kept apart: 9 of disc." in text


def test_an_unknown_age_is_told_as_over_what_is_known() -> None:
    unknown = fitment("U1", "disc", day(20), sequence=1, lot="D-1", prior="unknown")
    history = history_with(*RAN, removal("U1 disc", day(20)), unknown)
    text = shown(ages_table(ages_document(history, ages_of(history))))
    assert re.search(r"R1 +hip +disc +1 +over 30\.0 h", text)
    assert "Over: nobody knows how long it ran before it was fitted." in text
    whole = history_with(*RAN)
    assert "over" not in shown(ages_table(ages_document(whole, ages_of(whole)))).lower()


def test_an_empty_book_gets_sentences_that_say_what_to_do() -> None:
    found = read_out(history_of((), AS_OF), Question())
    texts = {name: shown(table) for name, table in tables_of(found).items()}
    assert texts["odds"].startswith("No robots yet: import")
    assert texts["spares"].startswith("No parts fitted yet: record")
    assert texts["plates"].startswith("Nothing to print")
    assert texts["lives"].startswith("No part types with failure modes yet: import")
    assert texts["ages"].startswith("No parts fitted there")


def test_what_cannot_be_printed_is_said_even_when_there_is_no_plate() -> None:
    busy = UsagePlan(record_id="plan", robot="R1", hours_per_week=60.0, session_hours=2.0)
    broken = failure("U1 disc", "disc: split", day(40))
    text = shown(plates_table(read_out(history_with(*RAN, busy, broken), Question())))
    assert text.startswith("Cannot print: disc (B): ")
    assert "no printer has a nozzle of 0.4 mm" in text
