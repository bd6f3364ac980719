"""Commands that read a book and say what follows from it."""

from __future__ import annotations

from typing import TYPE_CHECKING

import click

from fleet.cli.options import (
    Number,
    as_of_option,
    book_option,
    history_of_book,
    json_option,
    known_by_option,
    opened,
    progress,
    show,
)

if TYPE_CHECKING:
    from fleet.pipeline import ReadOut

HOURS = Number("hours", 0.01, 744)
TARGET = Number("a chance", 0.5, 0.9999, "0.9")
weeks_option = click.option("--weeks", default=8, show_default=True, type=click.IntRange(1, 52), help="Weeks ahead.")
target_option = click.option(
    "--target", default=0.9, show_default=True, type=TARGET, help="Chance with which the stock should last."
)


def _read(
    where: str | None,
    as_of: str | None,
    known_by: str | None,
    hours: float | None = None,
    weeks: int = 8,
    target: float = 0.9,
) -> ReadOut:
    from fleet.pipeline import Question, read_out

    with opened(where) as book, progress("reading the book, fitting lives, planning"):
        return read_out(history_of_book(book, as_of, known_by), Question(hours, weeks, target))


@click.command("odds")
@book_option
@click.option("--hours", type=HOURS, help="Running hours of the next session. [each robot's plan]")
@as_of_option
@known_by_option
@json_option
def odds_command(
    where: str | None, hours: float | None, as_of: str | None, known_by: str | None, as_json: bool
) -> None:
    """Odds that each robot finishes its next session without a stop; held robots first, then lowest odds first.

    JSON: fleet.finishes; robots[]: robot, hours, held, finishes{mean, low, high}, mostly_assumption, failures_seen,
    joints[]: joint, word, held, stops{mean, low, high}, parts[]: slot, count, oldest_hours, stops, records.
    """
    from fleet.report.documents import odds_document
    from fleet.report.tables import odds_table

    found = _read(where, as_of, known_by, hours)
    show(as_json, lambda: odds_document(found), lambda: odds_table(found))


@click.command("spares")
@book_option
@weeks_option
@target_option
@as_of_option
@known_by_option
@json_option
def spares_command(
    where: str | None, weeks: int, target: float, as_of: str | None, known_by: str | None, as_json: bool
) -> None:
    """How many spares to hold of each part type, what is short, and from which week.

    JSON: target; parts[]: part_type, fitted, waiting, on_hand, on_order, needed, short, chance_enough, expected,
    days_until_restocked, short_from_week, weeks[]{week, expected, low, high}, lots[]{lot, on_hand, superseded}.
    """
    from fleet.report.documents import spares_document
    from fleet.report.tables import spares_table

    found = _read(where, as_of, known_by, None, weeks, target)
    show(as_json, lambda: spares_document(found), lambda: spares_table(found))


@click.command("plates")
@book_option
@weeks_option
@target_option
@as_of_option
@known_by_option
@json_option
def plates_command(
    where: str | None, weeks: int, target: float, as_of: str | None, known_by: str | None, as_json: bool
) -> None:
    """What to print for the spares that are short: plates by printer, with start, hours and grams.

    JSON: needs[]: part_type, revision, good_wanted, due, yield; plates[]: number, printer, spool, part, count, start,
    end, taken_off_at, hours, grams, due, late; shortages[] in words.
    """
    from fleet.report.documents import plates_document
    from fleet.report.tables import plates_table

    found = _read(where, as_of, known_by, None, weeks, target)
    show(as_json, lambda: plates_document(found), lambda: plates_table(found))


@click.command("lives")
@book_option
@click.option("--part", help="Only this part type.")
@as_of_option
@known_by_option
@json_option
def lives_command(where: str | None, part: str | None, as_of: str | None, known_by: str | None, as_json: bool) -> None:
    """How long each part type lasts, how much of that is records, and whether to replace it while good.

    JSON: lives[]: part_type, revision, lot_apart, failures, running, left_out_age_unknown, b10_hours and b50_hours
    {middle, low, high}, data_share, mostly_assumption, replacement{verdict, age_hours, saving}, modes[]: mode, clock,
    failures, b10 (5, 50 and 95 % in the mode's clock), data_share.
    """
    from dataclasses import replace

    from fleet.records.lookup import find_part_type
    from fleet.report.documents import lives_document
    from fleet.report.tables import lives_table

    found = _read(where, as_of, known_by)
    if part is not None:
        wanted = find_part_type(found.history, part).record_id
        found = replace(found, lives={key: life for key, life in found.lives.items() if key.part_type == wanted})
    show(as_json, lambda: lives_document(found), lambda: lives_table(found))


@click.command("ages")
@book_option
@click.option("--robot", help="Only this robot.")
@click.option("--part", help="Only this part type or slot.")
@as_of_option
@known_by_option
@json_option
def ages_command(
    where: str | None, robot: str | None, part: str | None, as_of: str | None, known_by: str | None, as_json: bool
) -> None:
    """Age of every fitted part in every clock, wherever it has been.

    JSON: parts[]: robot, joint, module, slot, part_type, places, count, fitted_at, known, age{hours, load_hours, turns,
    impacts, days}, record.
    """
    from fleet.lives.ages import ages_of
    from fleet.records.lookup import find_part_type, find_robot
    from fleet.records.set_up import Slot
    from fleet.report.documents import ages_document
    from fleet.report.tables import ages_table

    with opened(where) as book:
        history = history_of_book(book, as_of, known_by)
    if robot is not None:
        find_robot(history, robot)
    if part is not None and not any(slot.code == part for slot in history.of(Slot).values()):
        find_part_type(history, part)
    document = ages_document(history, ages_of(history), robot, part)
    show(as_json, lambda: document, lambda: ages_table(document))
