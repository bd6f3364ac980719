"""A read-out and one joint in; what happened in its module, newest first, and its parts on a line of ages, out."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from datetime import datetime
from typing import Literal

from fleet.lives.ages import PartSpan
from fleet.pipeline import ReadOut
from fleet.records.history import History
from fleet.records.ledger import BenchCheck, Placement
from fleet.records.set_up import Lot, PartMode, PartType, Position, Robot, Slot, Unit
from fleet.report.wording import hours

Fate = Literal["running", "failed", "good"]


@dataclass(frozen=True)
class Event:
    """One thing that happened in a module, with the record that says so."""

    moment: datetime
    what: str
    part: str
    age: str
    record_id: str


@dataclass(frozen=True)
class AgeDot:
    """Parts of one age and one fate; `age` in running hours."""

    age: float
    fate: Fate
    count: int


def unit_of(history: History, code: str) -> str:
    """The record id of the module with this code."""
    return next(unit.record_id for unit in history.of(Unit).values() if unit.code == code)


def age_dots(found: ReadOut, unit: str, slot: str) -> list[AgeDot]:
    """Every part that was ever in a slot of a module, by the age it has or had at its end."""
    counts: dict[tuple[float, Fate], int] = {}
    for span in found.ages.spans:
        if span.fitment.unit == unit and span.fitment.slot == slot and span.known:
            key = (round(span.age["hours"], 1), _fate(span))
            counts[key] = counts.get(key, 0) + span.count
    return [AgeDot(age, fate, number) for (age, fate), number in sorted(counts.items())]


def _fate(span: PartSpan) -> Fate:
    if span.failure is not None:
        return "failed"
    return "running" if span.removal is None else "good"


def events_of(found: ReadOut, unit: str) -> list[Event]:
    """Fittings, failures, removals, checks and moves of one module, newest first."""
    history = found.history
    events = [event for span in found.ages.spans if span.fitment.unit == unit for event in _of_span(history, span)]
    events += [_check(history, check) for check in history.of(BenchCheck).values() if check.unit == unit]
    events += [_move(history, move) for move in history.of(Placement).values() if move.unit == unit]
    return sorted(events, key=lambda event: event.moment, reverse=True)


def _of_span(history: History, span: PartSpan) -> Iterable[Event]:
    fitment = span.fitment
    part = _part(history, span)
    lot = "" if fitment.lot is None else f", lot {history.one(Lot, fitment.lot).code}"
    came = "moved in" if fitment.comes_from is not None else "fitted"
    start = _age(span.entry.get("hours") if span.known else None)
    yield Event(fitment.happened_at, f"{came}{lot}", part, start, fitment.record_id)
    end = _age(span.age.get("hours") if span.known else None)
    if span.failure is not None:
        mode = history.one(PartMode, span.failure.mode).label
        what = f"{span.failure.finding}: {mode}"
        yield Event(span.failure.happened_at, what, part, end, span.failure.record_id)
    elif span.removal is not None:
        yield Event(span.removal.happened_at, span.removal.reason, part, end, span.removal.record_id)


def _age(value: float | None) -> str:
    return "unknown" if value is None else hours(round(value, 1))


def _part(history: History, span: PartSpan) -> str:
    slot = history.one(Slot, span.fitment.slot)
    label = history.one(PartType, slot.part_type).label
    if slot.count == 1:
        return label
    first, last = min(span.places), max(span.places)
    return f"{label} {first}" if first == last else f"{span.count} x {label}"


def _check(history: History, check: BenchCheck) -> Event:
    slot = None if check.slot is None else history.one(Slot, check.slot)
    part = "whole joint" if slot is None else history.one(PartType, slot.part_type).label
    note = f": {check.note}" if check.note else ""
    return Event(check.happened_at, f"checked, {check.verdict}{note}", part, "", check.record_id)


def _move(history: History, move: Placement) -> Event:
    if move.position is None:
        return Event(move.happened_at, "taken to the shelf", "whole module", "", move.record_id)
    position = history.one(Position, move.position)
    robot = history.one(Robot, position.robot)
    return Event(move.happened_at, f"put in {robot.code} {position.label}", "whole module", "", move.record_id)
