"""From a History to the age of every fitted part in every clock: at its start, its end, and the moments between."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from datetime import datetime
from types import MappingProxyType

import numpy as np
from numpy.typing import NDArray

from fleet.lives.meters import USE_CLOCKS, Meters, meters_of
from fleet.records.history import History
from fleet.records.ledger import Failure, Fitment, Removal
from fleet.records.vocabulary import CLOCKS
from fleet.records.whereabouts import FittedPart, Whereabouts, whereabouts_of

FloatArray = NDArray[np.float64]
Age = Mapping[str, float]
_SECONDS_A_DAY = 86_400.0


@dataclass(frozen=True)
class PartSpan:
    """One or more like parts of one fitment that share their fate.

    `entry` is their age when fitted and `age` the age at their end (failure, removal, or now), by clock; a clock is
    missing where the age is not known in it. `use` is what they gathered since they were fitted. `known` says
    whether the age is known at all.
    """

    fitment: Fitment
    places: tuple[int, ...]
    failure: Failure | None
    removal: Removal | None
    known: bool
    entry: Age
    use: Age
    age: Age

    @property
    def count(self) -> int:
        """How many parts."""
        return len(self.places)

    @property
    def running(self) -> bool:
        """Still fitted, and not failed."""
        return self.failure is None and self.removal is None


@dataclass(frozen=True, eq=False)
class Ages:
    """The ages of all parts that were ever fitted, as of one moment."""

    as_of: datetime
    spans: tuple[PartSpan, ...]
    meters: Meters
    whereabouts: Whereabouts
    starts: Mapping[str, FloatArray]

    def age_of(self, span: PartSpan, moment: datetime) -> Age:
        """Age of these parts at a moment between fitting and end, by clock."""
        return self.ages_of_unit(span.fitment, [moment])[0]

    def end_of(self, span: PartSpan) -> datetime:
        """When these parts failed or were taken out; the moment of these ages while they run."""
        if span.failure is not None:
            return span.failure.happened_at
        return self.as_of if span.removal is None else span.removal.happened_at

    def ages_of_unit(self, fitment: Fitment, moments: Sequence[datetime]) -> list[Age]:
        """Age of a fitment at each moment, by clock."""
        start = self.starts[fitment.record_id]
        use = self.meters.unit_use(fitment.unit, [fitment.happened_at, *moments])
        return [_age(start, use[at + 1] - use[0], fitment.happened_at, moment) for at, moment in enumerate(moments)]


def ages_of(history: History) -> Ages:
    """The age of every part at its end: its failure, its removal, or the history's `as_of`."""
    whereabouts = whereabouts_of(history)
    meters = meters_of(history, whereabouts)
    groups = _groups(whereabouts)
    use = _use_at_ends(groups, meters, history.as_of)
    starts = _starting_ages(history, whereabouts, meters)
    spans = []
    for parts in groups:
        fitment = parts[0].fitment
        start = starts[fitment.record_id]
        failure = whereabouts.failure_of(parts[0])
        end = _end(parts[0], failure, history.as_of)
        first, last = use[fitment.unit][fitment.happened_at], use[fitment.unit][end]
        spans.append(
            PartSpan(
                fitment=fitment,
                places=tuple(part.place for part in parts),
                failure=failure,
                removal=parts[0].removal,
                known=bool(np.isfinite(start[0])),
                entry=_age(start, np.zeros(len(USE_CLOCKS)), end, end),
                use=_age(np.zeros(start.size), last - first, fitment.happened_at, end),
                age=_age(start, last - first, fitment.happened_at, end),
            )
        )
    return Ages(history.as_of, tuple(spans), meters, whereabouts, MappingProxyType(starts))


def _groups(whereabouts: Whereabouts) -> list[list[FittedPart]]:
    """Places of one fitment that ended in the same way, together."""
    groups: dict[tuple[str, str | None, str | None], list[FittedPart]] = defaultdict(list)
    for parts in whereabouts.parts_of_fitment.values():
        for part in parts:
            failure = whereabouts.failure_of(part)
            key = (
                part.fitment.record_id,
                None if part.removal is None else part.removal.record_id,
                None if failure is None else failure.record_id,
            )
            groups[key].append(part)
    return list(groups.values())


def _end(part: FittedPart, failure: Failure | None, as_of: datetime) -> datetime:
    if failure is None:
        return as_of if part.end is None else part.end
    end = failure.happened_until or failure.happened_at
    if part.removal is not None:
        end = min(end, part.removal.happened_until or part.removal.happened_at)
    return max(min(end, as_of), part.fitment.happened_at)


def _use_at_ends(
    groups: Sequence[Sequence[FittedPart]], meters: Meters, as_of: datetime
) -> dict[str, dict[datetime, FloatArray]]:
    """For each module, its use at every moment that matters, worked out in one go."""
    moments: dict[str, set[datetime]] = defaultdict(set)
    for parts in groups:
        fitment = parts[0].fitment
        failure = meters.whereabouts.failure_of(parts[0])
        moments[fitment.unit] |= {fitment.happened_at, _end(parts[0], failure, as_of)}
    return {unit: _use_by_moment(meters, unit, sorted(held)) for unit, held in moments.items()}


def _use_by_moment(meters: Meters, unit: str, moments: Sequence[datetime]) -> dict[datetime, FloatArray]:
    return dict(zip(moments, meters.unit_use(unit, moments), strict=True))


def _starting_ages(history: History, whereabouts: Whereabouts, meters: Meters) -> dict[str, FloatArray]:
    """Age of each fitment when fitted, in USE_CLOCKS and days; NaN where unknown. A moved part brings its age."""
    starts: dict[str, FloatArray] = {}
    for fitment in history.of(Fitment).values():
        if fitment.comes_from is None:
            starts[fitment.record_id] = _stated_age(fitment)
            continue
        if fitment.comes_from not in starts:  # where it came from was entered only later
            starts[fitment.record_id] = np.full(len(USE_CLOCKS) + 1, np.nan)
            continue
        source = history.one(Fitment, fitment.comes_from)
        parts = whereabouts.parts_of_fitment[source.record_id]
        end = _taken_out([p for p in parts if fitment.from_place in (None, p.place)], fitment.happened_at)
        use = meters.unit_use(source.unit, [source.happened_at, end])
        days = (end - source.happened_at).total_seconds() / _SECONDS_A_DAY
        starts[fitment.record_id] = starts[source.record_id] + np.append(use[1] - use[0], days)
    return starts


def _taken_out(parts: Sequence[FittedPart], refitted: datetime) -> datetime:
    """When one of these was taken out to be fitted again: the last that was moved, else the last taken out by then."""
    gone = [part.removal for part in parts if part.removal is not None and part.removal.happened_at <= refitted]
    moved = [removal for removal in gone if removal.reason == "moved"]
    return max((removal.happened_at for removal in moved or gone), default=refitted)


def _stated_age(fitment: Fitment) -> FloatArray:
    if fitment.prior == "new":
        return np.zeros(len(USE_CLOCKS) + 1)
    if fitment.prior == "unknown" or fitment.prior_run_seconds is None:
        return np.full(len(USE_CLOCKS) + 1, np.nan)
    hours = fitment.prior_run_seconds / 3600
    load = fitment.prior_load_seconds
    return np.array(
        [
            hours,
            np.nan if load is None else load / 3600,
            np.nan if fitment.prior_turns is None else float(fitment.prior_turns),
            np.nan if fitment.prior_impacts is None else float(fitment.prior_impacts),
            np.nan if fitment.prior_days is None else fitment.prior_days,
        ]
    )


def _age(start: FloatArray, use: FloatArray, since: datetime, moment: datetime) -> Age:
    """Starting age plus use, by clock; clocks in which the start is unknown are left out."""
    days = (moment - since).total_seconds() / _SECONDS_A_DAY
    total = start + np.append(use, days)
    named = zip((*USE_CLOCKS, "days"), total.tolist(), strict=True)
    return {clock: value for clock, value in named if value == value}


assert set(CLOCKS) == {*USE_CLOCKS, "days"}
