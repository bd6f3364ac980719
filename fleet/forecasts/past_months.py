"""How past forecasts did: from what was known at a month's start to the counts forecast, beside what followed."""

from __future__ import annotations

import math
from collections import defaultdict
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from datetime import datetime

import numpy as np
from numpy.typing import NDArray

from fleet.forecasts.demand import expected, fleet_demand, quantile
from fleet.forecasts.life_draws import LifeDraws
from fleet.forecasts.odds import PartsAtRisk
from fleet.forecasts.part_demand import renewed_by
from fleet.forecasts.parts_now import SlotNow
from fleet.lives.ages import Ages
from fleet.lives.meters import USE_CLOCKS
from fleet.lives.part_data import LifeKey
from fleet.records.history import History
from fleet.records.ledger import Failure, Fitment
from fleet.records.set_up import PartType, Position, Slot

FloatArray = NDArray[np.float64]
CONTESTED_BEYOND = 3.0


@dataclass(frozen=True, eq=False)
class MonthForecast:
    """Failures of one part type forecast for one month with what was known at its start, and those that were seen.

    `distribution` has shape (n,); the forecast is made for the use that really happened. `mass` is the chance that
    the forecast gave to its own range, `low` and `high` included: for small counts well above 8 in 10.
    """

    start: datetime
    end: datetime
    part_type: str
    label: str
    distribution: FloatArray
    expected: float
    low: int
    high: int
    mass: float
    seen: int
    records: tuple[str, ...]


@dataclass(frozen=True)
class Verdict:
    """What many forecasts of counts say about the beliefs behind them.

    `z` is near 0 when seen and forecast agree, positive when more was seen; beyond 3 either way the belief is
    contested.
    """

    forecasts: int
    z: float
    sentence: str


def month_forecasts(
    then: History,
    now: History,
    end: datetime,
    slots_then: Sequence[SlotNow],
    draws: Mapping[LifeKey, LifeDraws],
    ages_now: Ages,
) -> tuple[MonthForecast, ...]:
    """Forecast every part type over one month, and count what followed.

    Parameters
    ----------
    then, now : History
        What was known at the month's start (its `as_of`), and what is known today.
    slots_then, draws
        Fitted parts and lives (*unfit*) worked out from `then`.
    ages_now : Ages
        From `now`, for the use that really happened.
    """
    start = then.as_of
    parts: dict[str, list[PartsAtRisk]] = defaultdict(list)
    for slot in slots_then:
        use = _real_use(ages_now, slot.position.record_id, start, end)
        held = [PartsAtRisk(p.life.name, p.span.count, p.age, use) for p in slot.running if p.life in draws]
        parts[slot.slot.part_type] += held
    robots = {slot.position.robot for slot in slots_then}
    seen = _seen(now, ages_now, start, end, robots)
    named = {key.name: life for key, life in draws.items()}
    renewals = {key.name: renewed_by(then, key, draws).name for key in draws}
    found = []
    for part_type, held in parts.items():
        distribution = fleet_demand(held, named, [1.0], renewal_life=renewals)[0]
        found.append(_forecast(now, (start, end), part_type, distribution, seen.get(part_type, ())))
    return tuple(found)


def _forecast(
    now: History, month: tuple[datetime, datetime], part_type: str, distribution: FloatArray, records: Sequence[str]
) -> MonthForecast:
    low, high = quantile(distribution, 0.1), quantile(distribution, 0.9)
    return MonthForecast(
        start=month[0],
        end=month[1],
        part_type=part_type,
        label=now.one(PartType, part_type).label,
        distribution=distribution,
        expected=expected(distribution),
        low=low,
        high=high,
        mass=float(distribution[low : high + 1].sum()),
        seen=len(records),
        records=tuple(records),
    )


def _real_use(ages: Ages, position: str, start: datetime, end: datetime) -> dict[str, float]:
    meter = ages.meters.of_position[position]
    use = np.diff(meter.at(np.array([start.timestamp(), end.timestamp()])), axis=0)[0]
    days = (end - start).total_seconds() / 86_400
    return dict(zip((*USE_CLOCKS, "days"), [*use.tolist(), days], strict=True))


def _seen(now: History, ages: Ages, start: datetime, end: datetime, robots: set[str]) -> Mapping[str, Sequence[str]]:
    """By part type, the failures of the month in these robots; parts broken by another part are not among them."""
    seen: dict[str, list[str]] = defaultdict(list)
    for failure in now.of(Failure).values():
        if not start < failure.happened_at <= end or failure.cause == "another part's failure":
            continue
        fitment = now.one(Fitment, failure.fitment)
        position = ages.whereabouts.position_of(fitment.unit, failure.happened_at)
        if position is not None and now.one(Position, position).robot in robots:
            seen[now.one(Slot, fitment.slot).part_type].append(failure.record_id)
    return seen


def verdict(forecasts: Sequence[tuple[FloatArray, int]]) -> Verdict:
    """Whether counts that were seen contradict the distributions forecast for them.

    Parameters
    ----------
    forecasts : sequence of (array of float, shape (n,), int)
        Probability of 0, 1, 2, ... and the count that was seen.

    References
    ----------
    C. Czado, T. Gneiting and L. Held, "Predictive model assessment for count data", Biometrics 65, 2009, 1254-1261
    (details from memory), for the mid-PIT; its variance for a distribution p is (1 - sum p^3) / 12.
    """
    off = math.fsum(_mid_pit(distribution, seen) - 0.5 for distribution, seen in forecasts)
    variance = math.fsum((1 - float(np.sum(distribution**3))) / 12 for distribution, _ in forecasts)
    z = off / math.sqrt(variance) if variance > 0 else 0.0
    if not forecasts:
        return Verdict(0, 0.0, "No past month to compare with yet.")
    if abs(z) <= CONTESTED_BEYOND:
        return Verdict(len(forecasts), z, "No contradiction found.")
    more = "more" if z > 0 else "fewer"
    return Verdict(len(forecasts), z, f"Belief contested: {more} failures were seen than forecast.")


def _mid_pit(distribution: FloatArray, seen: int) -> float:
    below = float(distribution[:seen].sum())
    return below + (0.5 * float(distribution[seen]) if seen < distribution.size else 0.0)


@dataclass(frozen=True)
class Coverage:
    """How many counts fell in the range of their forecast, and how many should: `low` to `high`, 8 times in 10."""

    forecasts: int
    inside: int
    expected: float
    low: int
    high: int


def coverage(forecasts: Sequence[MonthForecast]) -> Coverage:
    """Counts within their range beside the chance that the forecasts gave to their own ranges."""
    inside = sum(forecast.low <= forecast.seen <= forecast.high for forecast in forecasts)
    hits = np.ones(1)
    for forecast in forecasts:
        hits = np.convolve(hits, [1 - forecast.mass, forecast.mass])
    return Coverage(len(forecasts), inside, expected(hits), quantile(hits, 0.1), quantile(hits, 0.9))


def misses(forecasts: Sequence[MonthForecast], most: int) -> list[MonthForecast]:
    """The forecasts that were furthest off, the worst first."""

    def off(forecast: MonthForecast) -> float:
        return -abs(_mid_pit(forecast.distribution, forecast.seen) - 0.5)

    return sorted(forecasts, key=off)[:most]
