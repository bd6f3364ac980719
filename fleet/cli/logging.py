"""Commands that log what happened at the bench."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import datetime, timedelta
from typing import TYPE_CHECKING, Literal

import click

from fleet.cli.options import LAST_WRITE, Number, book_option, by_option, now, opened, parse_time

if TYPE_CHECKING:
    from fleet.records.history import History
    from fleet.records.set_up import Position, Robot, Slot
    from fleet.store.entries import Receipt

HOURS = Number("hours", 0, 744)
IMPACTS = click.IntRange(0, 1_000_000)
PLACE = click.IntRange(1, 1000)
SAME_EVENING = timedelta(hours=24)
at_option = click.option("--at", "written_at", metavar="TIME", help="When it happened; a date alone is enough.")
place_option = click.option("--place", type=PLACE, help="Which of several like parts in the joint, from 1.")
spare_option = click.option("--spare", metavar="LOT", help="Lot of the spare that was put in; leave out if none was.")


@click.group("log")
def log_command() -> None:
    """Log what happened: a session, a failure, a swap of a good part, a bench check; or undo an entry.

    Open a joint only with the power off, the battery out, stored charge gone, and limb and robot supported: the limb
    falls when the joint lets go. After reassembly turn by hand, then low power behind a barrier.
    """


@log_command.command("session")
@click.argument("robot")
@click.option("--hours", required=True, type=HOURS, help="Running hours, such as 1.5.")
@click.option("--impacts", default=0, show_default=True, type=IMPACTS, help="Hard impacts counted.")
@click.option("--ended", "written_at", metavar="TIME", help="When it ended; a date alone is enough. [now]")
@click.option("--broken-off", is_flag=True, help="It ended early for another reason than a failed part.")
@click.option("--note", help="Anything worth keeping.")
@book_option
@by_option
def log_session_command(
    robot: str,
    hours: float,
    impacts: int,
    written_at: str | None,
    broken_off: bool,
    note: str | None,
    where: str | None,
    entered_by: str,
) -> None:
    """ROBOT ran some hours: every part fitted in it ages by them."""
    from fleet.records.lookup import find_robot
    from fleet.store.entries import SessionEntry, log_session
    from fleet.store.reading import read_history

    with opened(where) as book:
        history = read_history(book, now())
        ended_at = _now_at_home(history) if written_at is None else parse_time("--ended", written_at, history)
        entry = SessionEntry(
            robot=find_robot(history, robot).record_id,
            hours=hours,
            impacts=impacts,
            ended_at=ended_at,
            note=note,
            broken_off=broken_off,
        )
        _say(log_session(book, entry, now(), entered_by))


@log_command.command("failure")
@click.argument("robot")
@click.argument("joint")
@click.argument("part")
@click.option("--mode", required=True, help="What was seen: one of the modes of that part type.")
@click.option("--found-worn", is_flag=True, help="It was found worn, and did not fail in use.")
@click.option("--cause", default="unknown", show_default=True, help="Why it came to that.")
@place_option
@spare_option
@at_option
@book_option
@by_option
def log_failure_command(
    robot: str,
    joint: str,
    part: str,
    mode: str,
    found_worn: bool,
    cause: str,
    place: int | None,
    spare: str | None,
    written_at: str | None,
    where: str | None,
    entered_by: str,
) -> None:
    """PART of JOINT of ROBOT failed (at the end of the robot's last session, unless --at says otherwise)."""
    told = _Told(robot, joint, part, place, spare, written_at)
    _log_part(where, entered_by, told, "found worn" if found_worn else "failed", mode, cause)


@log_command.command("swap")
@click.argument("robot")
@click.argument("joint")
@click.argument("part")
@place_option
@spare_option
@at_option
@book_option
@by_option
def log_swap_command(
    robot: str,
    joint: str,
    part: str,
    place: int | None,
    spare: str | None,
    written_at: str | None,
    where: str | None,
    entered_by: str,
) -> None:
    """PART of JOINT of ROBOT was replaced while still good."""
    _log_part(where, entered_by, _Told(robot, joint, part, place, spare, written_at), "replaced while good")


@log_command.command("spare")
@click.argument("robot")
@click.argument("joint")
@click.argument("part")
@click.option("--spare", metavar="LOT", required=True, help="Lot of the spare that was put in.")
@place_option
@at_option
@book_option
@by_option
def log_spare_command(
    robot: str,
    joint: str,
    part: str,
    spare: str,
    place: int | None,
    written_at: str | None,
    where: str | None,
    entered_by: str,
) -> None:
    """A spare was put in for PART of JOINT of ROBOT, which had failed earlier or was missing."""
    from fleet.store.entries import SpareEntry, log_spare
    from fleet.store.reading import read_history

    with opened(where) as book:
        history = read_history(book, now())
        at = _placed(history, _Told(robot, joint, part, place, spare, written_at))
        assert at.lot is not None
        entry = SpareEntry(at.position.record_id, at.slot.record_id, at.lot, at.place)
        moment = _now_at_home(history) if written_at is None else parse_time("--at", written_at, history)
        _say(log_spare(book, entry, moment, now(), entered_by))
        _warn_of_spare(history, at.lot)


@dataclass(frozen=True)
class _Told:
    """A part, its place, its spare and when, as they were typed."""

    robot: str
    joint: str
    part: str
    place: int | None
    spare: str | None
    written_at: str | None


@dataclass(frozen=True)
class _Placed:
    """What was typed, found in the book; `lot` is the record id of the spare's lot."""

    robot: Robot
    position: Position
    slot: Slot
    place: int
    lot: str | None


def _placed(history: History, told: _Told) -> _Placed:
    from fleet.errors import RecordError
    from fleet.records.lookup import find_lot, find_position, find_robot, find_slot

    robot = find_robot(history, told.robot)
    position = find_position(history, robot, told.joint)
    slot = find_slot(history, position, told.part)
    if slot.count > 1 and told.place is None:
        raise RecordError(f"{slot.code} holds {slot.count} like parts: say which with --place 1 to {slot.count}.")
    lot = None if told.spare is None else find_lot(history, slot.part_type, told.spare).record_id
    return _Placed(robot, position, slot, told.place or 1, lot)


def _log_part(
    where: str | None,
    entered_by: str,
    told: _Told,
    happened: Literal["failed", "found worn", "replaced while good"],
    mode: str | None = None,
    cause: str = "unknown",
) -> None:
    from fleet.errors import RecordError
    from fleet.records.lookup import find_mode
    from fleet.records.vocabulary import CAUSES
    from fleet.store.entries import PartEntry, log_part
    from fleet.store.reading import read_history

    with opened(where) as book:
        history = read_history(book, now())
        at = _placed(history, told)
        if cause not in CAUSES:
            raise RecordError(f"--cause {cause!r} is not one of: {', '.join(CAUSES)}.")
        part = PartEntry(
            position=at.position.record_id,
            slot=at.slot.record_id,
            happened=happened,
            place=at.place,
            mode=None if mode is None else find_mode(history, at.slot.part_type, mode).record_id,
            lot=at.lot,
            cause=cause,
        )
        _say(log_part(book, part, _when(history, at.robot, told.written_at), now(), entered_by))
        _warn_of_spare(history, at.lot)


def _now_at_home(history: History) -> datetime:
    """This moment on the book's own clock, so that messages read as people there would say them."""
    return now().astimezone(history.zone)


def _when(history: History, robot: Robot, written_at: str | None) -> datetime:
    """As written; else the end of the robot's session of this evening; else now."""
    from fleet.records.ledger import Session

    if written_at is not None:
        return parse_time("--at", written_at, history)
    ended = [session.ended_at for session in history.of(Session).values() if session.robot == robot.record_id]
    return ended[-1] if ended and now() - ended[-1] < SAME_EVENING else _now_at_home(history)


@log_command.command("check")
@click.argument("robot")
@click.argument("joint")
@click.option("--part", help="Only this part of the joint. [the whole joint]")
@click.option("--mode", help="Only this mode of that part could be seen. [all]")
@click.option("--good/--doubtful", default=True, show_default=True, help="What was found; doubtful holds the joint.")
@click.option("--note", help="Anything worth keeping.")
@at_option
@book_option
@by_option
def log_check_command(
    robot: str,
    joint: str,
    part: str | None,
    mode: str | None,
    good: bool,
    note: str | None,
    written_at: str | None,
    where: str | None,
    entered_by: str,
) -> None:
    """JOINT of ROBOT was looked at on the bench."""
    from fleet.errors import RecordError
    from fleet.records.lookup import find_mode, find_position, find_robot, find_slot
    from fleet.store.entries import CheckEntry, log_check
    from fleet.store.reading import read_history

    with opened(where) as book:
        history = read_history(book, now())
        position = find_position(history, find_robot(history, robot), joint)
        slot = None if part is None else find_slot(history, position, part)
        if mode is not None and slot is None:
            raise RecordError("--mode needs --part beside it.")
        found = None if mode is None or slot is None else find_mode(history, slot.part_type, mode).record_id
        entry = CheckEntry(position.record_id, None if slot is None else slot.record_id, found, good, note)
        moment = _now_at_home(history) if written_at is None else parse_time("--at", written_at, history)
        _say(log_check(book, entry, moment, now(), entered_by))


@log_command.command("undo")
@click.argument("write", type=click.IntRange(1, LAST_WRITE))
@click.option("--reason", default="undone", show_default=True, help="Why; it stays in the book.")
@book_option
@by_option
def log_undo_command(write: int, reason: str, where: str | None, entered_by: str) -> None:
    """Take back everything that was entered with WRITE, the number on its receipt."""
    from fleet.store.entries import undo

    with opened(where) as book:
        _say(undo(book, write, now(), entered_by, reason))


@log_command.command("release")
@click.argument("robot")
@click.option("--joint", help="The joint that is held. [the robot itself]")
@click.option("--why", required=True, help="Why it may run again; it stays in the book.")
@book_option
@by_option
def log_release_command(robot: str, joint: str | None, why: str, where: str | None, entered_by: str) -> None:
    """Lift the hold on ROBOT, or on one of its joints: only a person does this, after looking at it."""
    from fleet.errors import RecordError
    from fleet.records.lookup import find_position, find_robot
    from fleet.store.entries import lift_hold, open_hold_on
    from fleet.store.reading import read_history

    with opened(where) as book:
        history = read_history(book, now())
        found = find_robot(history, robot)
        position: Position | None = None if joint is None else find_position(history, found, joint)
        hold = open_hold_on(history, found, position)
        if hold is None:
            raise RecordError(_not_held(history, found, position))
        _say(lift_hold(book, hold, why, now(), entered_by))


def _not_held(history: History, robot: Robot, position: Position | None) -> str:
    from fleet.store.entries import joints_held

    if position is not None:
        return f"{robot.code} {position.code} is not held by anyone."
    held = [joint.code for joint in joints_held(history, robot)]
    hint = f"; its joint {held[0]} is: add --joint {held[0]}." if held else "."
    return f"{robot.code} itself is not held by anyone{hint}"


def _warn_of_spare(history: History, lot: str | None) -> None:
    """Say on standard error what is odd about the lot a spare comes from; it is kept all the same."""
    from fleet.plans.stock import stock_by_lot

    for stock in stock_by_lot(history):
        if stock.lot != lot:
            continue
        if stock.on_hand <= 0:
            click.echo(f"Note: by the records lot {stock.code} had none left; count the shelf.", err=True)
        if stock.superseded:
            click.echo(f"Note: lot {stock.code} is of a revision that is superseded.", err=True)
        if stock.kept_apart:
            click.echo(f"Note: lot {stock.code} is kept apart because something is odd about it.", err=True)


def _say(receipt: Receipt) -> None:
    click.echo(f"Saved as write {receipt.write_number}. {receipt.sentence}")
