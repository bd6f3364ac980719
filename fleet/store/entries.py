"""What people log at the bench: a session, a failure, a swap, a check; each becomes records in one write."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from datetime import datetime, timedelta
from typing import Literal

from fleet.errors import RecordError
from fleet.records.consistency import Problem
from fleet.records.fields import Record, with_plain_offset
from fleet.records.history import History
from fleet.records.ledger import BenchCheck, Failure, Fitment, Hold, Release, Removal, Session
from fleet.records.set_up import Lot, PartMode, PartType, Position, Robot, Slot
from fleet.records.whereabouts import FittedPart, Whereabouts, whereabouts_of
from fleet.store.book import Book
from fleet.store.writing import Entry, Writer, new_record_id, records_of_write, write, written_before

Happened = Literal["failed", "found worn", "replaced while good"]
LATE_AFTER = timedelta(hours=12)
_AHEAD = timedelta(minutes=5)


@dataclass(frozen=True)
class PartEntry:
    """One part with something to say; all but `happened` are record ids, `place` is 1 in a single slot.

    `lot` is where the spare that was put in comes from; None if none was fitted.
    """

    position: str
    slot: str
    happened: Happened
    place: int = 1
    mode: str | None = None
    lot: str | None = None
    cause: str = "unknown"


@dataclass(frozen=True)
class SessionEntry:
    """One session of one robot, with the parts that have something to say."""

    robot: str
    hours: float
    impacts: int = 0
    ended_at: datetime | None = None
    parts: tuple[PartEntry, ...] = ()
    note: str | None = None
    broken_off: bool = False


@dataclass(frozen=True)
class Receipt:
    """What was written: the number of the write, in words, and whether the same draft had been written before."""

    write_number: int
    sentence: str
    already: bool = False
    record_ids: tuple[str, ...] = field(default=())


def log_session(book: Book, session: SessionEntry, now: datetime, entered_by: str, draft: str | None = None) -> Receipt:
    """Write a session, and with it what happened to its parts.

    A failure that stopped the robot happened at the session's end; spares are fitted after it.
    """
    _refuse_the_future(session.ended_at or now, now)
    if not session.hours >= 0 or session.hours > 24 * 31:
        raise RecordError(f"hours is {session.hours:g}; a session has from 0 to 744 hours.")
    with write(book, Entry(now, entered_by, "session", draft)) as writer:
        robot = _robot(writer.history, session.robot)
        ended_at = with_plain_offset(session.ended_at or now.astimezone(writer.history.zone))
        sentence = _session_sentence(robot, session, ended_at, now)
        if writer.written_before is not None:
            return Receipt(writer.written_before, sentence, already=True)
        run_seconds = round(session.hours * 3600)
        session_id = new_record_id()
        records: list[Record] = []
        for number, part in enumerate(session.parts):
            records += _part_records(writer, part, ended_at, session_id, records, number)
        stopped = any(isinstance(record, Failure) and record.finding == "stopped" for record in records)
        outcome = "stopped" if stopped else "broken off" if session.broken_off else "finished"
        logged = Session(
            record_id=session_id,
            happened_at=ended_at - timedelta(seconds=max(run_seconds, 60)),
            ended_at=ended_at,
            robot=session.robot,
            run_seconds=run_seconds,
            impacts=session.impacts,
            outcome=outcome,
            note=session.note,
        )
        _add(writer, [logged, *records])
    return Receipt(writer.write_number, sentence, record_ids=tuple(r.record_id for r in writer.records))


def log_part(
    book: Book, part: PartEntry, happened_at: datetime | None, now: datetime, entered_by: str, draft: str | None = None
) -> Receipt:
    """Write what happened to one part outside a session: a failure, a part found worn, or a swap of a good one."""
    moment = with_plain_offset(happened_at or now)
    _refuse_the_future(moment, now)
    with write(book, Entry(now, entered_by, part.happened, draft)) as writer:
        sentence = _part_sentence(writer.history, part)
        if writer.written_before is not None:
            return Receipt(writer.written_before, sentence, already=True)
        session = _session_ended_at(writer.history, part.position, moment)
        _add(writer, _part_records(writer, part, moment, session))
    return Receipt(writer.write_number, sentence, record_ids=tuple(r.record_id for r in writer.records))


@dataclass(frozen=True)
class SpareEntry:
    """A spare for a place whose part failed earlier, or was taken out; record ids, `place` is 1 in a single slot."""

    position: str
    slot: str
    lot: str
    place: int = 1


def log_spare(
    book: Book,
    spare: SpareEntry,
    happened_at: datetime | None,
    now: datetime,
    entered_by: str,
    draft: str | None = None,
) -> Receipt:
    """Write that a spare was put in; a failed part that still sat there is taken out first, and the joint is free."""
    moment = with_plain_offset(happened_at or now)
    _refuse_the_future(moment, now)
    with write(book, Entry(now, entered_by, "spare put in", draft)) as writer:
        history = writer.history
        position, slot = history.one(Position, spare.position), history.one(Slot, spare.slot)
        robot, part_type = history.one(Robot, position.robot), history.one(PartType, slot.part_type)
        sentence = f"{robot.code} {position.label}: {part_type.label} put in from {history.one(Lot, spare.lot).code}."
        if writer.written_before is not None:
            return Receipt(writer.written_before, sentence, already=True)
        _add(writer, _spare_records(history, spare, moment))
    return Receipt(writer.write_number, sentence, record_ids=tuple(r.record_id for r in writer.records))


def _spare_records(history: History, spare: SpareEntry, moment: datetime) -> list[Record]:
    whereabouts = whereabouts_of(history)
    position, slot = history.one(Position, spare.position), history.one(Slot, spare.slot)
    unit = _unit_in(whereabouts, position, moment)
    _refuse_no_place(slot, spare.place)
    old = whereabouts.part_at(unit, spare.slot, spare.place, moment)
    records: list[Record] = []
    if old is not None and old.removal is None:
        failure = whereabouts.failure_of(old)
        if failure is None:
            raise RecordError(f"{slot.code} of joint {position.code} holds a part that is good: log a swap instead.")
        records.append(_removal(old.fitment, spare.place, _reason_after(failure), moment))
    records.append(_fitting(unit, spare.slot, spare.place, spare.lot, moment))
    return records


def _reason_after(failure: Failure) -> str:
    if failure.cause == "another part's failure":
        return "broken by another part"
    return "found worn" if failure.finding == "found worn" else "failed"


def _removal(fitment: Fitment, place: int, reason: str, moment: datetime, number: int = 0) -> Removal:
    return Removal(
        record_id=new_record_id(),
        happened_at=moment,
        sequence=number,
        fitment=fitment.record_id,
        place=place,
        reason=reason,
    )


def _fitting(unit: str, slot: str, place: int, lot: str, moment: datetime, number: int = 0) -> Fitment:
    return Fitment(
        record_id=new_record_id(),
        happened_at=moment,
        sequence=number,
        unit=unit,
        slot=slot,
        first_place=place,
        lot=lot,
    )


def _refuse_no_place(slot: Slot, place: int) -> None:
    if not 1 <= place <= slot.count:
        raise RecordError(f"{slot.code} has places 1 to {slot.count}; {place} is not one of them.")


@dataclass(frozen=True)
class CheckEntry:
    """A look at a joint on the bench; record ids; without a slot it covers the whole joint."""

    position: str
    slot: str | None
    mode: str | None
    good: bool
    note: str | None = None


def log_check(book: Book, check: CheckEntry, happened_at: datetime | None, now: datetime, entered_by: str) -> Receipt:
    """Write a bench check; a doubtful verdict also holds the joint until a person releases it."""
    moment = with_plain_offset(happened_at or now)
    _refuse_the_future(moment, now)
    with write(book, Entry(now, entered_by, "check")) as writer:
        position = writer.history.one(Position, check.position)
        unit = _unit_in(whereabouts_of(writer.history), position, moment)
        verdict = "good" if check.good else "doubtful"
        records: list[Record] = [
            BenchCheck(
                record_id=new_record_id(),
                happened_at=moment,
                unit=unit,
                slot=check.slot,
                mode=check.mode,
                verdict=verdict,
                note=check.note,
            )
        ]
        if not check.good:
            why = check.note or "looked doubtful at a check"
            records.append(Hold(record_id=new_record_id(), happened_at=moment, unit=unit, why=why))
        _add(writer, records)
        robot = writer.history.one(Robot, position.robot)
    return Receipt(writer.write_number, f"{robot.code} {position.label}: checked, {verdict}.")


def lift_hold(book: Book, hold: str, why: str, now: datetime, entered_by: str) -> Receipt:
    """Release what was held; only a person does this, with a reason."""
    if not why.strip():
        raise RecordError("Say why the hold is lifted; the reason stays in the book.")
    with write(book, Entry(now, entered_by, "release")) as writer:
        if hold not in writer.history.of(Hold):
            raise RecordError("There is no such hold in this book.")
        writer.add(Release(record_id=new_record_id(), happened_at=now, hold=hold, why=why))
    return Receipt(writer.write_number, "Released.")


def open_hold_on(history: History, robot: Robot, position: Position | None) -> str | None:
    """The hold still open on a robot, or on the module in one of its joints; None if nobody holds it."""
    lifted = {release.hold for release in history.of(Release).values()}
    unit = None if position is None else whereabouts_of(history).unit_in(position.record_id, history.as_of)
    for hold in history.of(Hold).values():
        subject = hold.robot if position is None else hold.unit
        wanted = robot.record_id if position is None else unit
        if hold.record_id not in lifted and subject is not None and subject == wanted:
            return hold.record_id
    return None


def receipt_of(book: Book, draft: str) -> Receipt | None:
    """The receipt of a draft that was written before; None if none was."""
    with book.reading() as connection:
        found = written_before(connection, draft)
    return None if found is None else Receipt(found, "", already=True)


def joints_held(history: History, robot: Robot) -> list[Position]:
    """Joints of a robot whose module somebody holds."""
    held = [position for position in history.of(Position).values() if position.robot == robot.record_id]
    return [position for position in held if open_hold_on(history, robot, position) is not None]


def undo(book: Book, write_number: int, now: datetime, entered_by: str, reason: str = "undone") -> Receipt:
    """Take back everything that one write brought in; the records stay in the book as withdrawn."""
    with write(book, Entry(now, entered_by, f"undo of write {write_number}")) as writer:
        with book.reading() as connection:
            found = records_of_write(connection, write_number)
        still_there = [record_id for cls, record_id in found if record_id in writer.history.of(cls)]
        if not still_there:
            raise RecordError(f"Nothing of write {write_number} is left to undo.")
        for record_id in still_there:
            writer.withdraw(record_id, reason)
        writer.explain = lambda problems: RecordError(_built_upon(writer.history, problems))
    return Receipt(writer.write_number, f"Undone: {len(still_there)} records of write {write_number} taken back.")


def _built_upon(history: History, problems: Sequence[Problem]) -> str:
    """Which later writes need what is to be undone."""
    found = {problem.record_id for problem in problems}
    stamps = [entry.stamp for held in history.rows.values() for entry in held.values() if entry.record_id in found]
    later = sorted({stamp.write_number for stamp in stamps if stamp is not None}, reverse=True)
    return f"Later entries build on that one: undo {_numbered(later)} first, the last of them before the others."


def _numbered(numbers: Sequence[int]) -> str:
    """`write 7`, `writes 9 and 7`."""
    if not numbers:
        return "those"
    words = [str(number) for number in numbers]
    return f"write {words[0]}" if len(words) == 1 else f"writes {', '.join(words[:-1])} and {words[-1]}"


def _add(writer: Writer, records: Sequence[Record]) -> None:
    for record in records:
        writer.add(record)


def _robot(history: History, record_id: str) -> Robot:
    if record_id not in history.of(Robot):
        raise RecordError("There is no such robot in this book.")
    return history.one(Robot, record_id)


def _refuse_the_future(moment: datetime, now: datetime) -> None:
    if moment > now + _AHEAD:
        raise RecordError(f"{moment:%Y-%m-%d %H:%M} is in the future: check the date.")


def _unit_in(whereabouts: Whereabouts, position: Position, moment: datetime) -> str:
    unit = whereabouts.unit_in(position.record_id, moment)
    if unit is None:
        raise RecordError(f"Joint {position.code} held no module at {moment:%Y-%m-%d %H:%M}.")
    return unit


def _session_ended_at(history: History, position: str, moment: datetime) -> str | None:
    robot = history.one(Position, position).robot
    for session in history.of(Session).values():
        if session.robot == robot and session.ended_at == moment:
            return session.record_id
    return None


def _part_in(history: History, whereabouts: Whereabouts, part: PartEntry, moment: datetime) -> FittedPart:
    position, slot = history.one(Position, part.position), history.one(Slot, part.slot)
    unit = _unit_in(whereabouts, position, moment)
    _refuse_no_place(slot, part.place)
    found = whereabouts.part_at(unit, part.slot, part.place, moment)
    if found is None or (found.end is not None and found.end < moment):
        raise RecordError(
            f"{slot.code} of joint {position.code} held no part at {moment:%Y-%m-%d %H:%M}; "
            "check the joint, or the date: a part cannot fail before it was fitted."
        )
    return found


def _part_records(
    writer: Writer,
    part: PartEntry,
    moment: datetime,
    session: str | None,
    before: Sequence[Record] = (),
    number: int = 0,
) -> list[Record]:
    """What happened to one part, the `number`th of its write: the sequence keeps the order in which it was told."""
    whereabouts = whereabouts_of(writer.history)
    found = _part_in(writer.history, whereabouts, part, moment)
    failed = part.happened != "replaced while good"
    if not failed and whereabouts.failure_of(found) is not None:
        raise RecordError("That part has failed already and is not good: log the spare that was put in instead.")
    records: list[Record] = []
    if failed:
        stops = _stops(writer.history, whereabouts, part, found, before)
        records.append(_failure(part, found, moment, session, stops, number))
    if failed and part.lot is None:
        return records
    records.append(_removal(found.fitment, part.place, part.happened, moment, number))
    if part.lot is not None:
        records.append(_fitting(found.fitment.unit, part.slot, part.place, part.lot, moment, number))
    return records


def _stops(
    history: History, whereabouts: Whereabouts, part: PartEntry, found: FittedPart, before: Sequence[Record]
) -> bool:
    """Whether this failure stops the robot: with those that had failed before it, too few of the set are left."""
    stops_at = history.one(Slot, part.slot).stops_at
    unit = found.fitment.unit
    in_set = [held[-1] for (at, slot, _), held in whereabouts.parts.items() if (at, slot) == (unit, part.slot)]
    gone = sum(p.removal is None and whereabouts.failure_of(p) is not None for p in in_set)
    of_set = {p.fitment.record_id for p in in_set}
    gone += sum(isinstance(record, Failure) and record.fitment in of_set for record in before)
    return stops_at is not None and gone + 1 >= stops_at


def _failure(
    part: PartEntry, found: FittedPart, moment: datetime, session: str | None, stops: bool, number: int
) -> Failure:
    if part.mode is None:
        raise RecordError("Say how it failed: choose what was seen.")
    # One of several that the robot can do without is past its limit, but did not stop anything.
    finding = "found worn" if part.happened == "found worn" else "stopped" if stops else "over its limit"
    return Failure(
        record_id=new_record_id(),
        happened_at=moment,
        sequence=number,
        fitment=found.fitment.record_id,
        place=part.place,
        mode=part.mode,
        finding=finding,
        cause=part.cause,
        how_found="during the session" if finding == "stopped" else "after the session",
        session=session,
    )


def _session_sentence(robot: Robot, session: SessionEntry, ended_at: datetime, now: datetime) -> str:
    parts = len(session.parts)
    said = f"{robot.code}: {session.hours:g} h, {session.impacts} impacts, {parts} part{'' if parts == 1 else 's'}"
    late = f", late entry for {ended_at:%Y-%m-%d %H:%M}" if now - ended_at > LATE_AFTER else ""
    return f"{said}{late}."


def _part_sentence(history: History, part: PartEntry) -> str:
    position, slot = history.one(Position, part.position), history.one(Slot, part.slot)
    robot, part_type = history.one(Robot, position.robot), history.one(PartType, slot.part_type)
    how = "" if part.mode is None else f" ({history.one(PartMode, part.mode).label})"
    return f"{robot.code} {position.label}: {part_type.label} {part.happened}{how}."
