"""From parts fitted now and plans to the demand for each part type: by week, and until it can be restocked."""

from __future__ import annotations

import math
from collections import defaultdict
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from fleet.forecasts.demand import expected, fleet_demand, quantile
from fleet.forecasts.life_draws import LifeDraws
from fleet.forecasts.odds import PartsAtRisk
from fleet.forecasts.parts_now import SlotNow
from fleet.forecasts.planned_use import RobotPlan, joint_use
from fleet.lives.ages import Ages
from fleet.lives.part_data import LifeKey
from fleet.records.fields import EARLIEST
from fleet.records.history import History
from fleet.records.set_up import PartType, Revision

FloatArray = NDArray[np.float64]
DAYS_A_WEEK = 7
REVIEW_DAYS = 7


@dataclass(frozen=True)
class WeekDemand:
    """Demand from now until the end of one week: its mean, and the range that should hold 8 times in 10."""

    week: int
    expected: float
    low: int
    high: int


@dataclass(frozen=True, eq=False)
class PartDemand:
    """Demand for one part type.

    `until_restocked` is the distribution of the demand over lead time and review, shape (n,); `by_week` holds one
    distribution a row, counted from now, shape (n_weeks, n). `waiting` places hold a failed part or none and wait for
    theirs already; they are in all of these. `fitted` parts run now, `use_hours` is the mean planned use of one over
    the weeks.
    """

    part_type: str
    fitted: int
    waiting: int
    until_restocked: FloatArray
    by_week: FloatArray
    weeks: tuple[WeekDemand, ...]
    use_hours: float
    days_until_restocked: int


def part_demands(
    history: History,
    ages: Ages,
    slots: Sequence[SlotNow],
    draws: Mapping[LifeKey, LifeDraws],
    plans: Mapping[str, RobotPlan],
    n_weeks: int,
) -> dict[str, PartDemand]:
    """Demand by part type, under run to failure, renewals by parts of the present revision included.

    Parameters
    ----------
    draws : mapping of LifeKey to LifeDraws
        Joint draws of the *unfit* endpoint of each life.
    n_weeks : int
        Weeks ahead.
    """
    by_type: dict[str, list[SlotNow]] = defaultdict(list)
    for slot in slots:
        by_type[slot.slot.part_type].append(slot)
    named = {key.name: life for key, life in draws.items()}
    renewals = {key.name: renewed_by(history, key, draws).name for key in draws}
    return {
        part_type: _demand(history, ages, part_type, by_type[part_type], named, renewals, plans, n_weeks)
        for part_type in history.of(PartType)
    }


def renewed_by(history: History, key: LifeKey, draws: Mapping[LifeKey, LifeDraws]) -> LifeKey:
    """The life of the part that will be put in: the newest revision that is still made, not a lot kept apart."""
    newest = newest_made(history, key.part_type)
    fresh = LifeKey(key.part_type, key.revision if newest is None else newest.record_id)
    return fresh if fresh in draws else LifeKey(key.part_type, key.revision) if key.apart_lot else key


def newest_made(history: History, part_type: str) -> Revision | None:
    """The newest revision of a part type that is still made; of those that hold from one date, the last by its code."""
    made = [r for r in history.of(Revision).values() if r.part_type == part_type and not r.superseded]
    return max(made, key=lambda revision: (revision.valid_from or EARLIEST, revision.code), default=None)


def _demand(
    history: History,
    ages: Ages,
    part_type: str,
    slots: Sequence[SlotNow],
    draws: Mapping[str, LifeDraws],
    renewals: Mapping[str, str],
    plans: Mapping[str, RobotPlan],
    n_weeks: int,
) -> PartDemand:
    days = history.one(PartType, part_type).lead_time_days + REVIEW_DAYS
    horizon = max(n_weeks * DAYS_A_WEEK, days)
    shares = [DAYS_A_WEEK * week / horizon for week in range(1, n_weeks + 1)] + [days / horizon]
    parts = [part for slot in slots for part in _parts(ages, slot, plans, horizon / DAYS_A_WEEK, draws)]
    waiting = sum(slot.empty_places + sum(span.count for span in slot.failed) for slot in slots)
    used = {part.life for part in parts} | {renewals[part.life] for part in parts}
    failures = (
        fleet_demand(
            parts,
            {name: draws[name] for name in used},
            shares,
            renewal_life={name: renewals[name] for name in used},
        )
        if parts
        else np.ones((len(shares), 1))
    )
    distribution = np.pad(failures, ((0, 0), (waiting, 0)))
    fitted = sum(part.count for part in parts)
    hours = sum(part.count * part.use["hours"] for part in parts) * n_weeks * DAYS_A_WEEK / horizon
    return PartDemand(
        part_type=part_type,
        fitted=fitted,
        waiting=waiting,
        until_restocked=distribution[-1],
        by_week=distribution[:-1],
        weeks=tuple(_week(week + 1, row) for week, row in enumerate(distribution[:-1])),
        use_hours=hours / fitted if fitted else 0.0,
        days_until_restocked=days,
    )


def _parts(
    ages: Ages, slot: SlotNow, plans: Mapping[str, RobotPlan], weeks: float, draws: Mapping[str, LifeDraws]
) -> list[PartsAtRisk]:
    plan = plans[slot.position.robot]
    use = joint_use(ages, slot.position, plan, plan.hours_per_week * weeks)
    return [
        PartsAtRisk(part.life.name, part.span.count, part.age, use) for part in slot.running if part.life.name in draws
    ]


def _week(week: int, row: FloatArray) -> WeekDemand:
    return WeekDemand(week, expected(row), quantile(row, 0.1), quantile(row, 0.9))


def chance_of_more_than(distribution: FloatArray, stock: int) -> float:
    """Chance that the demand is above a stock."""
    if stock < 0:
        return 1.0
    return float(max(0.0, 1.0 - math.fsum(distribution[: stock + 1])))
