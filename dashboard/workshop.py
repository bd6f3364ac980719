"""A read-out in; what stands on each printer over the next week, and every change of plates by day, out."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from datetime import date, datetime, time, timedelta, tzinfo
from typing import Literal

from fleet.pipeline import ReadOut
from fleet.plans.plate_list import expected_end
from fleet.plans.plates import Plate as PlannedPlate
from fleet.records.ledger import Plate
from fleet.records.set_up import Lot, PartType, Presence, Printer, Spool
from fleet.records.vocabulary import WEEKDAYS

DAYS = 7
Kind = Literal["printing", "planned", "late"]


@dataclass(frozen=True)
class Run:
    """One plate on one printer; `change` is when a person takes it off, None if that is not planned."""

    printer: str
    label: str
    content: str
    start: datetime
    end: datetime
    change: datetime | None
    kind: Kind


@dataclass(frozen=True)
class Change:
    """One thing that a person does at a printer, and how long the printer waited for that."""

    moment: datetime
    printer: str
    words: str
    late: bool
    done_at: datetime | None


def runs_of(found: ReadOut) -> list[Run]:
    """Everything on the printers and planned for them, in order of start."""
    planned = [
        Run(
            plate.printer,
            str(plate.number),
            content_of(plate),
            plate.start,
            plate.end,
            plate.taken_off_at,
            "late" if plate.late else "planned",
        )
        for plate in found.plates.plan.plates
    ]
    return sorted([*_printing(found), *planned], key=lambda run: (run.start, run.printer))


def content_of(plate: PlannedPlate) -> str:
    """`8 x cycloidal disc C`."""
    return f"{plate.count} x {plate.label}" + (f" {plate.revision}" if plate.revision else "")


def _printing(found: ReadOut) -> Iterator[Run]:
    """Plates that were started and are not done, until they should be."""
    history = found.history
    for plate in history.of(Plate).values():
        if plate.good is not None:
            continue
        part = history.one(PartType, history.one(Lot, plate.lot).part_type)
        printer, end = history.one(Printer, plate.printer).code, expected_end(history, plate)
        yield Run(printer, plate.code, f"{plate.started} x {part.label}", plate.happened_at, end, None, "printing")


def changes_of(found: ReadOut) -> list[Change]:
    """Every change of plates, in order of time: what comes off, what goes on, and whether the printer waited."""
    plates = found.plates.plan.plates
    off = {(plate.printer, plate.taken_off_at): plate for plate in plates}
    on = {(plate.printer, plate.loaded_from): plate for plate in plates}
    changes = []
    for printer, moment in sorted({*off, *on}, key=lambda key: (key[1], key[0])):
        old, new = off.get((printer, moment)), on.get((printer, moment))
        said = [] if old is None else [f"take off plate {old.number} ({content_of(old)})"]
        said.append("then idle" if new is None else f"put on plate {new.number} ({content_of(new)}, {new.spool})")
        waited = old is not None and moment - old.end > timedelta(minutes=1)
        late = (old is not None and old.late) or False
        changes.append(Change(moment, printer, ", ".join(said), late, old.end if waited and old is not None else None))
    return changes


def on_printers_now(found: ReadOut) -> list[Run]:
    """Plates whose end nobody has recorded yet, the first to be done first."""
    return sorted(_printing(found), key=lambda run: run.end)


def printer_codes(found: ReadOut) -> list[str]:
    """All printers, by code."""
    return sorted(printer.code for printer in found.history.of(Printer).values())


def first_midnight(found: ReadOut) -> datetime:
    """The start of today in the book's zone."""
    return datetime.combine(found.history.as_of.astimezone(found.history.zone), time(), found.history.zone)


def presence_spans(found: ReadOut) -> list[tuple[datetime, datetime]]:
    """When someone is there in the week from today on."""
    today, zone = first_midnight(found).date(), found.history.zone
    spans = []
    for ahead in range(DAYS):
        day = today + timedelta(days=ahead)
        for window in found.history.of(Presence).values():
            if WEEKDAYS.index(window.weekday) == day.weekday():
                spans.append((_clock(day, window.start_minute, zone), _clock(day, window.end_minute, zone)))
    return sorted(spans)


def _clock(on: date, minute: int, zone: tzinfo) -> datetime:
    """Local wall time; 24:00 is the next midnight."""
    return datetime.combine(on, time()).replace(tzinfo=zone) + timedelta(minutes=minute)


@dataclass(frozen=True)
class SpoolUse:
    """A spool, what is left on it, and what the planned plates take. [g]"""

    code: str
    material: str
    grams_left: float
    grams_planned: float


def spool_uses(found: ReadOut) -> list[SpoolUse]:
    """Every spool, those that the plan uses first."""
    planned: dict[str, float] = {}
    for plate in found.plates.plan.plates:
        planned[plate.spool] = planned.get(plate.spool, 0.0) + plate.grams
    uses = [
        SpoolUse(spool.code, spool.material, spool.grams_left, planned.get(spool.code, 0.0))
        for spool in found.history.of(Spool).values()
    ]
    return sorted(uses, key=lambda use: (-use.grams_planned, use.code))
