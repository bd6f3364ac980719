"""What is wrong between records: from a History to sentences, all at once, each with the record it is about."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from datetime import datetime
from itertools import pairwise
from zoneinfo import ZoneInfo, ZoneInfoNotFoundError

from fleet.records.fields import Record, fields_of, kind_of
from fleet.records.history import KINDS, History
from fleet.records.ledger import Failure, Fitment, Placement, Plate, Purchase, Release, Removal, Session, SessionUse
from fleet.records.set_up import (
    Lot,
    PartMode,
    PartType,
    Position,
    Printer,
    Revision,
    Robot,
    Settings,
    Slot,
    Spool,
    Unit,
    UnitDesign,
)
from fleet.records.whereabouts import FittedPart, Whereabouts, whereabouts_of


@dataclass(frozen=True)
class Problem:
    """One thing that cannot be, with the record it was found in and how to mend it."""

    record_id: str
    sentence: str


def problems_in(history: History) -> list[Problem]:
    """Everything in this history that contradicts itself; empty for a sound book."""
    dangling = list(_dangling_references(history))
    if dangling:
        return dangling
    whereabouts = whereabouts_of(history)
    checks: tuple[Callable[[History, Whereabouts], Iterator[Problem]], ...] = (
        _settings,
        _repeated_codes,
        _shares,
        _lots,
        _sessions,
        _session_uses,
        _placements,
        _fitments,
        _overfull_places,
        _removals,
        _failures,
        _releases,
    )
    return [problem for check in checks for problem in check(history, whereabouts)]


def _clock(moment: datetime) -> str:
    return moment.strftime("%Y-%m-%d %H:%M")


def _from_to(session: Session) -> str:
    return f"from {_clock(session.happened_at)} to {_clock(session.ended_at)}"


def _dangling_references(history: History) -> Iterator[Problem]:
    classes = {kind_of(cls): cls for cls in KINDS}
    for cls in KINDS:
        references = {name: spec.refers_to for name, spec in fields_of(cls).items() if spec.kind == "reference"}
        if not references:
            continue
        for entry in history.of(cls).values():
            for name, kind in references.items():
                target = getattr(entry, name)
                if target is not None and target not in history.of(classes[kind]):
                    yield Problem(entry.record_id, f"its {name} names no {kind.replace('_', ' ')} of this book.")


_TWO_SETTINGS = "the book has its settings already; leave settings.csv out, or make the book with 'new --bare'."


def _settings(history: History, _: Whereabouts) -> Iterator[Problem]:
    for number, settings in enumerate(history.of(Settings).values()):
        if number:
            yield Problem(settings.record_id, _TWO_SETTINGS)
        try:
            ZoneInfo(settings.zone)
        except (ZoneInfoNotFoundError, ValueError, OSError):
            yield Problem(settings.record_id, f"zone {settings.zone!r} is not an IANA zone such as Europe/Amsterdam.")


_ONE_CODE_IN: tuple[tuple[type[Record], tuple[str, ...]], ...] = (
    (Robot, ("code",)),
    (UnitDesign, ("code",)),
    (Unit, ("code",)),
    (PartType, ("code",)),
    (Lot, ("code",)),
    (Printer, ("code",)),
    (Spool, ("code",)),
    (Purchase, ("code",)),
    (Plate, ("code",)),
    (Position, ("robot", "code")),
    (Slot, ("unit_design", "code")),
    (PartMode, ("part_type", "code")),
    (Revision, ("part_type", "code")),
)


def _repeated_codes(history: History, _: Whereabouts) -> Iterator[Problem]:
    for cls, names in _ONE_CODE_IN:
        seen: set[tuple[str, ...]] = set()
        for entry in history.of(cls).values():
            key = tuple(getattr(entry, name) for name in names)
            if key in seen:
                kind = kind_of(cls).replace("_", " ")
                yield Problem(entry.record_id, f"{kind} {key[-1]} is there already; give each its own code.")
            seen.add(key)


def _shares(history: History, _: Whereabouts) -> Iterator[Problem]:
    total: dict[str, float] = defaultdict(float)
    last: dict[str, PartMode] = {}
    for mode in history.of(PartMode).values():
        total[mode.part_type] += mode.share
        last[mode.part_type] = mode
    for part_type, share in total.items():
        if abs(share - 1) > 0.005:
            code = history.one(PartType, part_type).code
            yield Problem(last[part_type].record_id, f"the shares of the modes of {code} sum to {share:g}, not to 1.")


def _lots(history: History, _: Whereabouts) -> Iterator[Problem]:
    for lot in history.of(Lot).values():
        if lot.revision is not None and history.one(Revision, lot.revision).part_type != lot.part_type:
            code = history.one(PartType, lot.part_type).code
            yield Problem(lot.record_id, f"the revision of lot {lot.code} is not one of {code}.")


def _sessions(history: History, _: Whereabouts) -> Iterator[Problem]:
    by_robot: dict[str, list[Session]] = defaultdict(list)
    for session in history.of(Session).values():
        by_robot[session.robot].append(session)
    for robot_id, sessions in by_robot.items():
        robot = history.one(Robot, robot_id)
        longest = sessions[0]
        for later in sessions[1:]:
            if later.happened_at < longest.ended_at:
                yield Problem(
                    later.record_id,
                    f"the session of {robot.code} {_from_to(later)} overlaps the one {_from_to(longest)}; "
                    "correct the times, or leave one out if they are the same.",
                )
            longest = max(longest, later, key=lambda session: session.ended_at)
        for session in sessions:
            if session.happened_at < robot.in_service_from:
                yield Problem(
                    session.record_id, f"{robot.code} joined only on {_clock(robot.in_service_from)}; check the date."
                )
            if robot.in_service_to is not None and session.ended_at > robot.in_service_to:
                yield Problem(session.record_id, f"{robot.code} left on {_clock(robot.in_service_to)}; check the date.")


def _session_uses(history: History, _: Whereabouts) -> Iterator[Problem]:
    seen: set[tuple[str, str]] = set()
    for use in history.of(SessionUse).values():
        position, session = history.one(Position, use.position), history.one(Session, use.session)
        if position.robot != session.robot:
            yield Problem(use.record_id, f"joint {position.code} is not on the robot of that session.")
        if (use.session, use.position) in seen:
            yield Problem(use.record_id, f"joint {position.code} has its figures for that session already.")
        seen.add((use.session, use.position))
        if use.run_seconds is not None and use.run_seconds > session.run_seconds + 60:
            yield Problem(use.record_id, f"joint {position.code} cannot have run longer than its robot.")


def _placements(history: History, _: Whereabouts) -> Iterator[Problem]:
    for placement in history.of(Placement).values():
        if placement.position is None:
            continue
        unit, position = history.one(Unit, placement.unit), history.one(Position, placement.position)
        if unit.unit_design != position.unit_design:
            yield Problem(placement.record_id, f"module {unit.code} is of another design than {position.code} takes.")


def _fitments(history: History, whereabouts: Whereabouts) -> Iterator[Problem]:
    for fitment in history.of(Fitment).values():
        unit, slot = history.one(Unit, fitment.unit), history.one(Slot, fitment.slot)
        if slot.unit_design != unit.unit_design:
            yield Problem(fitment.record_id, f"module {unit.code} has no slot {slot.code}.")
        if fitment.first_place + fitment.count - 1 > slot.count:
            yield Problem(fitment.record_id, f"slot {slot.code} has {slot.count} places; check first_place and count.")
        yield from _part_kind_problems(history, fitment, slot)
        if fitment.comes_from is not None:
            yield from _source_problems(history, whereabouts, fitment)


def _part_kind_problems(history: History, fitment: Fitment, slot: Slot) -> Iterator[Problem]:
    wanted = history.one(PartType, slot.part_type)
    lot = None if fitment.lot is None else history.one(Lot, fitment.lot)
    if lot is not None and lot.part_type != slot.part_type:
        found = history.one(PartType, lot.part_type)
        sentence = f"lot {lot.code} holds {found.code}, but slot {slot.code} takes {wanted.code}."
        yield Problem(fitment.record_id, sentence)
    if fitment.revision is not None and history.one(Revision, fitment.revision).part_type != slot.part_type:
        yield Problem(fitment.record_id, f"that revision is not one of {wanted.code}.")


def _source_problems(history: History, whereabouts: Whereabouts, fitment: Fitment) -> Iterator[Problem]:
    source = history.one(Fitment, fitment.comes_from or "")
    gone = [part for part in whereabouts.parts_of_fitment[source.record_id] if part.removal is not None]
    if not any(part.end <= fitment.happened_at for part in gone if part.end is not None):
        yield Problem(fitment.record_id, "the part it comes from was not taken out before; log its removal first.")
    if history.one(Slot, source.slot).part_type != history.one(Slot, fitment.slot).part_type:
        yield Problem(fitment.record_id, "the part it comes from is of another type.")


def _overfull_places(history: History, whereabouts: Whereabouts) -> Iterator[Problem]:
    for (unit_id, slot_id, place), held in whereabouts.parts.items():
        for earlier, later in pairwise(held):
            if earlier.end is None or earlier.end > later.fitment.happened_at:
                unit, slot = history.one(Unit, unit_id), history.one(Slot, slot_id)
                where = f"{slot.code} place {place}" if slot.count > 1 else slot.code
                yield Problem(
                    later.fitment.record_id,
                    f"{where} of module {unit.code} still held a part fitted {_clock(earlier.fitment.happened_at)} "
                    f"when one was fitted {_clock(later.fitment.happened_at)}; log its removal, or check the times.",
                )


def _removals(history: History, _: Whereabouts) -> Iterator[Problem]:
    taken: set[tuple[str, int]] = set()
    for removal in history.of(Removal).values():
        fitment = history.one(Fitment, removal.fitment)
        if removal.place is not None and removal.place not in fitment.places:
            yield Problem(removal.record_id, f"place {removal.place} is not one of that fitting's places.")
            continue
        if removal.happened_at < fitment.happened_at:
            yield Problem(removal.record_id, f"the part was fitted only on {_clock(fitment.happened_at)}.")
        places = {(fitment.record_id, place) for place in _places_taken(removal, fitment)}
        if places <= taken:
            yield Problem(removal.record_id, "that part was taken out already; leave this row out.")
        taken |= places


def _places_taken(removal: Removal, fitment: Fitment) -> range:
    return fitment.places if removal.place is None else range(removal.place, removal.place + 1)


def _failures(history: History, whereabouts: Whereabouts) -> Iterator[Problem]:
    seen: set[tuple[str, int]] = set()
    for failure in history.of(Failure).values():
        fitment = history.one(Fitment, failure.fitment)
        place = failure.place if failure.place is not None else fitment.first_place
        if failure.place is None and fitment.count > 1:
            yield Problem(failure.record_id, f"{fitment.count} parts sit there; say which place failed.")
            continue
        if place not in fitment.places:
            yield Problem(failure.record_id, f"place {place} is not one of that fitting's places.")
            continue
        if (fitment.record_id, place) in seen:
            yield Problem(failure.record_id, "that part has failed already; a part fails once.")
        seen.add((fitment.record_id, place))
        part = next(part for part in whereabouts.parts_of_fitment[fitment.record_id] if part.place == place)
        yield from _failure_time_problems(failure, part)
        if history.one(PartMode, failure.mode).part_type != history.one(Slot, fitment.slot).part_type:
            yield Problem(failure.record_id, "that mode is not one of this part type.")


def _failure_time_problems(failure: Failure, part: FittedPart) -> Iterator[Problem]:
    until = failure.happened_until or failure.happened_at
    if until <= part.fitment.happened_at:
        yield Problem(
            failure.record_id,
            f"it failed {_clock(failure.happened_at)}, before it was fitted {_clock(part.fitment.happened_at)}; "
            "check both dates.",
        )
    if part.end is not None and failure.happened_at > part.end:
        yield Problem(failure.record_id, f"it was taken out {_clock(part.end)}, before that failure; check both dates.")


def _releases(history: History, _: Whereabouts) -> Iterator[Problem]:
    seen: set[str] = set()
    for release in history.of(Release).values():
        if release.hold in seen:
            yield Problem(release.record_id, "that hold was lifted already.")
        seen.add(release.hold)
