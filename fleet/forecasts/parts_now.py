"""From ages and lives to the parts that are fitted now, each slot with its parts' ages in the clocks of their life."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Mapping
from dataclasses import dataclass

from fleet.fits.part_lives import PartLife
from fleet.forecasts.planned_use import median_ages, robots_in_service
from fleet.lives.ages import Ages, PartSpan
from fleet.lives.part_data import LifeKey, life_key_of
from fleet.records.history import History
from fleet.records.set_up import Position, Slot, Unit
from fleet.records.vocabulary import CLOCKS


@dataclass(frozen=True)
class PartsNow:
    """Like parts of one age in one slot.

    `age_assumed` is true where nobody knows their age: it is taken as the middle age of like parts that run.
    """

    span: PartSpan
    life: LifeKey
    age: Mapping[str, float]
    age_assumed: bool


@dataclass(frozen=True)
class SlotNow:
    """One slot of the module that sits in a joint: what runs, what has failed and is still in, what is empty."""

    position: Position
    unit: str
    slot: Slot
    running: tuple[PartsNow, ...]
    failed: tuple[PartSpan, ...]
    empty_places: int


def slots_now(history: History, ages: Ages, lives: Mapping[LifeKey, PartLife]) -> list[SlotNow]:
    """Every slot of every module that sits in a robot in service now and ever held a part."""
    in_service = {robot.record_id for robot in robots_in_service(history)}
    spans: dict[tuple[str, str], list[PartSpan]] = defaultdict(list)
    for span in ages.spans:
        spans[span.fitment.unit, span.fitment.slot].append(span)
    middle = _middle_ages(history, ages)
    slots: dict[str, list[Slot]] = defaultdict(list)
    for slot in history.of(Slot).values():
        slots[slot.unit_design].append(slot)
    found = []
    for position in history.of(Position).values():
        unit = _unit_now(ages, position)
        if position.robot not in in_service or unit is None:
            continue
        for slot in slots[history.one(Unit, unit).unit_design]:
            held = spans.get((unit, slot.record_id), [])
            if held:
                found.append(_slot_now(history, position, slot, held, lives, middle))
    return found


def _unit_now(ages: Ages, position: Position) -> str | None:
    stays = ages.whereabouts.stays_in_position.get(position.record_id, ())
    return stays[-1].unit if stays and stays[-1].end is None else None


def _middle_ages(history: History, ages: Ages) -> dict[str, dict[str, float]]:
    """By part type, the middle age of running parts whose age is known."""
    running: dict[str, list[Mapping[str, float]]] = defaultdict(list)
    for span in ages.spans:
        if span.running and span.known:
            running[history.one(Slot, span.fitment.slot).part_type].append(span.age)
    return {part_type: median_ages(held) for part_type, held in running.items()}


def _slot_now(
    history: History,
    position: Position,
    slot: Slot,
    held: list[PartSpan],
    lives: Mapping[LifeKey, PartLife],
    middle: Mapping[str, Mapping[str, float]],
) -> SlotNow:
    running = [span for span in held if span.running]
    failed = [span for span in held if span.failure is not None and span.removal is None]
    parts = tuple(_parts_now(history, span, slot, lives, middle.get(slot.part_type, {})) for span in running)
    filled = sum(span.count for span in (*running, *failed))
    return SlotNow(position, held[0].fitment.unit, slot, parts, tuple(failed), slot.count - filled)


def _parts_now(
    history: History,
    span: PartSpan,
    slot: Slot,
    lives: Mapping[LifeKey, PartLife],
    middle: Mapping[str, float],
) -> PartsNow:
    key = life_key_of(history, span.fitment)
    if not span.known:
        assumed = {clock: max(use, middle.get(clock, 0.0)) for clock, use in span.use.items()}
        return PartsNow(span, key, assumed, age_assumed=True)
    rates = lives[key].per_hour if key in lives else {}
    age = {clock: span.age.get(clock, span.age["hours"] * rates.get(clock, 1.0)) for clock in CLOCKS}
    return PartsNow(span, key, age, age_assumed=False)
