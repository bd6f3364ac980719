"""Where every module and part was at any moment: from placements, fitments and removals to spans of time."""

from __future__ import annotations

from bisect import bisect_left, bisect_right
from collections import defaultdict
from collections.abc import Mapping
from dataclasses import dataclass
from datetime import datetime

from fleet.records.history import History
from fleet.records.ledger import Failure, Fitment, Placement, Removal


@dataclass(frozen=True)
class Stay:
    """A module in one position (None: on the shelf) from `start` until `end` (None: still there)."""

    unit: str
    position: str | None
    start: datetime
    end: datetime | None


@dataclass(frozen=True)
class FittedPart:
    """One place of one fitment, until the removal that ended it (None: still fitted)."""

    fitment: Fitment
    place: int
    removal: Removal | None

    @property
    def end(self) -> datetime | None:
        """When it was taken out; None while it is fitted."""
        return None if self.removal is None else self.removal.happened_at


@dataclass(frozen=True, eq=False)
class Whereabouts:
    """All stays of modules and all fitted parts of one history.

    `parts` is keyed by (unit, slot, place) and ordered by time of fitting.
    """

    stays_of_unit: Mapping[str, tuple[Stay, ...]]
    stays_in_position: Mapping[str, tuple[Stay, ...]]
    parts: Mapping[tuple[str, str, int], tuple[FittedPart, ...]]
    parts_of_fitment: Mapping[str, tuple[FittedPart, ...]]
    failures_of: Mapping[tuple[str, int], tuple[Failure, ...]]

    def unit_in(self, position: str, moment: datetime) -> str | None:
        """The module in this position at this moment; at the moment of a swap, the one that was there before."""
        for stay in self.stays_in_position.get(position, ()):
            if stay.start < moment and (stay.end is None or moment <= stay.end):
                return stay.unit
        first = self.stays_in_position.get(position, ())
        return next((stay.unit for stay in first if stay.start == moment), None)

    def position_of(self, unit: str, moment: datetime) -> str | None:
        """The position of this module just after this moment; None on the shelf."""
        stays = self.stays_of_unit.get(unit, ())
        at = bisect_right([stay.start for stay in stays], moment) - 1
        return stays[at].position if at >= 0 else None

    def part_at(self, unit: str, slot: str, place: int, moment: datetime) -> FittedPart | None:
        """The part that was in this place just before this moment."""
        held = self.parts.get((unit, slot, place), ())
        at = bisect_left([part.fitment.happened_at for part in held], moment) - 1
        if at < 0 or (held[at].end is not None and held[at].end < moment):  # type: ignore[operator]
            return None
        return held[at]

    def last_removed(self, unit: str, slot: str, place: int, moment: datetime) -> FittedPart | None:
        """The part that was last taken out of this place, at or before this moment."""
        gone = [p for p in self.parts.get((unit, slot, place), ()) if p.end is not None and p.end <= moment]
        return gone[-1] if gone else None

    def fitted_now(self) -> list[FittedPart]:
        """Every part that is still fitted."""
        return [held[-1] for held in self.parts.values() if held[-1].removal is None]

    def failure_of(self, part: FittedPart) -> Failure | None:
        """The failure that ended this part's life, if it failed."""
        failures = self.failures_of.get((part.fitment.record_id, part.place), ())
        return failures[0] if failures else None


def whereabouts_of(history: History) -> Whereabouts:
    """Work out where everything was, from one history."""
    of_unit, in_position = _stays(history)
    removals = _removals_by_place(history)
    parts: dict[tuple[str, str, int], list[FittedPart]] = defaultdict(list)
    of_fitment: dict[str, list[FittedPart]] = defaultdict(list)
    for fitment in history.of(Fitment).values():
        for place in fitment.places:
            part = FittedPart(fitment, place, removals.get((fitment.record_id, place)))
            parts[fitment.unit, fitment.slot, place].append(part)
            of_fitment[fitment.record_id].append(part)
    failures: dict[tuple[str, int], list[Failure]] = defaultdict(list)
    for failure in history.of(Failure).values():
        failed = history.of(Fitment).get(failure.fitment)
        if failed is not None:
            failures[failure.fitment, failure.place or failed.first_place].append(failure)
    return Whereabouts(
        stays_of_unit=of_unit,
        stays_in_position=in_position,
        parts={key: tuple(held) for key, held in parts.items()},
        parts_of_fitment={key: tuple(held) for key, held in of_fitment.items()},
        failures_of={key: tuple(held) for key, held in failures.items()},
    )


def _stays(history: History) -> tuple[dict[str, tuple[Stay, ...]], dict[str, tuple[Stay, ...]]]:
    """A placement ends the module's earlier stay and the stay of whoever was in the position."""
    open_stay: dict[str, Stay] = {}
    occupant: dict[str, str] = {}
    closed: dict[str, list[Stay]] = defaultdict(list)

    def close(unit: str, moment: datetime) -> None:
        stay = open_stay.pop(unit, None)
        if stay is None:
            return
        if stay.position is not None and occupant.get(stay.position) == unit:
            del occupant[stay.position]
        closed[unit].append(Stay(unit, stay.position, stay.start, moment))

    for placement in history.of(Placement).values():
        moment, unit, position = placement.happened_at, placement.unit, placement.position
        pushed_out = occupant.get(position) if position is not None else None
        if pushed_out is not None and pushed_out != unit:
            close(pushed_out, moment)
            open_stay[pushed_out] = Stay(pushed_out, None, moment, None)
        close(unit, moment)
        open_stay[unit] = Stay(unit, position, moment, None)
        if position is not None:
            occupant[position] = unit
    for unit, stay in open_stay.items():
        closed[unit].append(stay)
    in_position: dict[str, list[Stay]] = defaultdict(list)
    for stays in closed.values():
        for stay in stays:
            if stay.position is not None and stay.end != stay.start:
                in_position[stay.position].append(stay)
    return (
        {unit: tuple(stay for stay in stays if stay.end != stay.start) for unit, stays in closed.items()},
        {position: tuple(sorted(stays, key=lambda stay: stay.start)) for position, stays in in_position.items()},
    )


def _removals_by_place(history: History) -> dict[tuple[str, int], Removal]:
    """The first removal of each place of each fitment; a removal without a place takes all that are left."""
    first: dict[tuple[str, int], Removal] = {}
    fitments = history.of(Fitment)
    for removal in history.of(Removal).values():
        fitment = fitments.get(removal.fitment)
        if fitment is None:
            continue
        places = fitment.places if removal.place is None else (removal.place,)
        for place in places:
            first.setdefault((removal.fitment, place), removal)
    return first
