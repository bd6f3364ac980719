"""The whole chain, one line a stage: from a History to ages, lives, odds, spares and plates. Read this file first."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from fleet.errors import PlanError
from fleet.fits.part_lives import PartLife, fit_part_lives
from fleet.forecasts.demand import MOST_DRAWS
from fleet.forecasts.hours_life import HoursLife
from fleet.forecasts.life_draws import LifeDraws, draw_life
from fleet.forecasts.next_session import NextSession, next_session
from fleet.forecasts.part_demand import PartDemand, part_demands
from fleet.forecasts.part_outlook import PartOutlook, part_outlook
from fleet.forecasts.parts_now import slots_now
from fleet.forecasts.past_months import MonthForecast, month_forecasts
from fleet.forecasts.planned_use import robot_plans, unplanned_robots
from fleet.lives.ages import Ages, ages_of
from fleet.lives.part_data import Endpoint, LifeKey, part_data
from fleet.plans.plate_list import PlateList, plate_list
from fleet.plans.replacement_list import Replacement, replacement_list
from fleet.plans.spare_list import SpareNeed, spare_list
from fleet.records.history import History

DRAWS = 1000
SUMMARY_DRAWS = 250
SEED = 20260101


@dataclass(frozen=True)
class Question:
    """What is asked of a book.

    `session_hours` takes the place of each robot's own plan for its next session [h]; `weeks` is how far spares and
    plates look ahead; `target` is the chance with which stock should last.
    """

    session_hours: float | None = None
    weeks: int = 8
    target: float = 0.9

    def __post_init__(self) -> None:
        """Refuse what cannot be answered."""
        if self.session_hours is not None and not 0 < self.session_hours <= 744:
            raise PlanError(f"A session of {self.session_hours:g} h cannot be planned; give from 0 to 744 hours.")
        if not 1 <= self.weeks <= 52:
            raise PlanError(f"{self.weeks} weeks is too short or too long; give from 1 to 52.")
        if not 0.5 <= self.target < 1:
            raise PlanError(
                f"A target of {self.target:g} cannot be met for sure; give from 0.5 to below 1, such as 0.9."
            )


@dataclass(frozen=True, eq=False)
class ReadOut:
    """Everything that is said of a book at one moment; `cautions` are sentences to stand beside all of it."""

    history: History
    question: Question
    ages: Ages
    lives: Mapping[LifeKey, PartLife]
    outlooks: Mapping[LifeKey, PartOutlook]
    next_session: NextSession
    demands: Mapping[str, PartDemand]
    spares: tuple[SpareNeed, ...]
    plates: PlateList
    replacements: tuple[Replacement, ...]
    cautions: tuple[str, ...]


def read_out(history: History, question: Question) -> ReadOut:
    """Run the chain: a pure function of what the book says and what is asked."""
    ages = ages_of(history)
    lives = fit_part_lives(history, part_data(history, ages))
    slots = slots_now(history, ages, lives)
    plans = robot_plans(history, question.session_hours)
    stop, unfit, summary = (
        _draws(lives, "stop"),
        _draws(lives, "unfit", MOST_DRAWS),
        _draws(lives, "unfit", SUMMARY_DRAWS),
    )
    in_hours = {key: HoursLife(summary[key], life.per_hour) for key, life in lives.items()}
    demands = part_demands(history, ages, slots, unfit, plans, question.weeks)
    spares = spare_list(history, demands, lives, question.target)
    return ReadOut(
        history=history,
        question=question,
        ages=ages,
        lives=lives,
        outlooks={key: part_outlook(life, in_hours[key]) for key, life in lives.items()},
        next_session=next_session(history, ages, slots, lives, stop, plans),
        demands=demands,
        spares=spares,
        plates=plate_list(history, spares, question.target),
        replacements=replacement_list(history, lives, in_hours),
        cautions=unplanned_robots(history, plans),
    )


def look_back(now: History, months: Sequence[History]) -> tuple[MonthForecast, ...]:
    """Forecasts of past months, each made with what was known at its start, beside what followed.

    Parameters
    ----------
    months : sequence of History
        What was known at each month's start, oldest first; each month ends where the next starts, the last one now.
    """
    ages_now = ages_of(now)
    ends = [later.as_of for later in (*months, now)][1:]
    found: list[MonthForecast] = []
    for then, end in zip(months, ends, strict=True):
        ages = ages_of(then)
        lives = fit_part_lives(then, part_data(then, ages))
        slots = slots_now(then, ages, lives)
        found += month_forecasts(then, now, end, slots, _draws(lives, "unfit", MOST_DRAWS), ages_now)
    return tuple(found)


def _draws(lives: Mapping[LifeKey, PartLife], endpoint: Endpoint, n_draws: int = DRAWS) -> dict[LifeKey, LifeDraws]:
    """Joint draws of every life; seeded and in order of their labels, so that the same records get the same answer."""
    rng = np.random.default_rng(SEED)
    by_label = sorted(lives.items(), key=lambda item: item[1].label)
    return {
        key: draw_life([(m.mode.code, m.mode.clock, getattr(m, endpoint)) for m in life.modes], n_draws, rng)
        for key, life in by_label
    }
