"""From the spares list, yields, printers and spools to the first plate list."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from datetime import datetime, timedelta

from fleet.forecasts.part_demand import DAYS_A_WEEK, newest_made
from fleet.plans.plates import PlatePlan, PresenceWindow, PrinterNow, PrintNeed, SpoolNow, plan_plates
from fleet.plans.spare_list import SpareNeed
from fleet.records.history import History
from fleet.records.ledger import Plate
from fleet.records.set_up import Lot, PartType, Presence, Printer, Spool
from fleet.records.vocabulary import WEEKDAYS

# Judgement: a part type that was never printed is counted as if 4 of 4 had come out good.
_UNSEEN_YIELD = (4, 4)


@dataclass(frozen=True)
class PlateList:
    """What to print: the needs behind it, and the plates by printer."""

    needs: tuple[PrintNeed, ...]
    plan: PlatePlan

    @property
    def judged(self) -> tuple[str, ...]:
        """A sentence for every part whose yield is a judgement, since no plate of it has been recorded."""
        labels = dict.fromkeys(need.label for need in self.needs if need.yield_judged)
        good, started = _UNSEEN_YIELD
        return tuple(
            f"No plate of {label} has been recorded: its yield is judged, as if {good} of {started} had come out good."
            for label in labels
        )


def plate_list(history: History, spares: Sequence[SpareNeed], target: float) -> PlateList:
    """Plates for every printed part that is short, the first due first.

    Parameters
    ----------
    target : float
        Chance with which enough good parts should come off the plates.
    """
    needs = tuple(need for spare in spares if spare.printed for need in _needs(history, spare))
    plan = plan_plates(
        needs,
        _printers(history),
        [SpoolNow(spool.code, spool.material, spool.grams_left) for spool in history.of(Spool).values()],
        [
            PresenceWindow(WEEKDAYS.index(window.weekday), window.start_minute, window.end_minute)
            for window in history.of(Presence).values()
        ],
        history.as_of,
        confidence=target,
        zone=history.zone_name,
    )
    return PlateList(needs, plan)


def _need(history: History, spare: SpareNeed, wanted: int, due: datetime) -> PrintNeed:
    part_type = history.one(PartType, spare.part_type)
    assert part_type.parts_per_plate is not None and part_type.print_minutes is not None
    assert part_type.plate_minutes is not None and part_type.nozzle_mm is not None and part_type.material is not None
    newest = newest_made(history, spare.part_type)
    good, started = _yield(history, spare.part_type)
    return PrintNeed(
        part=spare.code,
        label=spare.label,
        revision="" if newest is None else newest.code,
        good_wanted=wanted,
        due=due,
        material=part_type.material,
        nozzle_mm=part_type.nozzle_mm,
        parts_per_plate=part_type.parts_per_plate,
        minutes_per_part=part_type.print_minutes,
        minutes_per_plate=part_type.plate_minutes,
        grams_per_part=part_type.mass_g,
        good=good,
        started=started,
        yield_judged=not _finished(history, spare.part_type),
    )


def _needs(history: History, spare: SpareNeed) -> list[PrintNeed]:
    """What must be ready before the first short week, and the rest before the week for which that is too little.

    What is on the printers counts as far as it is likely to come out good.
    """
    good, started = _yield(history, spare.part_type)
    coming = math.floor(spare.printing * good / started)
    missing = [max(short - coming, 0) for short in spare.short_by_week]
    first = next((short for short in missing if short), 0)
    urgent = max(first, spare.short - coming)
    needs = []
    for wanted, covered in ((urgent, 0), (missing[-1] - urgent, urgent)):
        if wanted > 0:
            week = next((week for week, short in enumerate(missing) if short > covered), None)
            days = spare.days_until_restocked if week is None else week * DAYS_A_WEEK
            needs.append(_need(history, spare, wanted, history.as_of + timedelta(days=max(days, 1))))
    return needs


def _yield(history: History, part_type: str) -> tuple[int, int]:
    """Good parts and parts started on all finished plates of a part type; as judged where there is none yet."""
    plates = _finished(history, part_type)
    if not plates:
        return _UNSEEN_YIELD
    return sum(plate.good or 0 for plate in plates), sum(plate.started for plate in plates)


def _finished(history: History, part_type: str) -> list[Plate]:
    return [
        plate
        for plate in history.of(Plate).values()
        if plate.good is not None and history.one(Lot, plate.lot).part_type == part_type
    ]


def expected_end(history: History, plate: Plate) -> datetime:
    """When a plate that is on a printer should be done, by the minutes of its parts."""
    part_type = history.one(PartType, history.one(Lot, plate.lot).part_type)
    minutes = (part_type.plate_minutes or 0) + plate.started * (part_type.print_minutes or 0)
    return plate.happened_at + timedelta(minutes=minutes)


def _printers(history: History) -> list[PrinterNow]:
    """Each printer, free now unless a plate is still on it: then after its expected end."""
    busy = {p.printer: expected_end(history, p) for p in history.of(Plate).values() if p.good is None}
    return [
        PrinterNow(
            printer.code,
            printer.nozzle_mm,
            printer.change_minutes,
            max(busy.get(printer.record_id, history.as_of), history.as_of),
        )
        for printer in history.of(Printer).values()
    ]
