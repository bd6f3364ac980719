"""From life data and beliefs to the life of every part type: a posterior for each mode and endpoint."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from functools import cache

import numpy as np
from scipy.special import ndtri

from fleet.fits.mechanisms import shape_belief
from fleet.fits.posterior import NORMAL_95, Belief, WeibullPosterior, weibull_posterior
from fleet.fits.weibull_rows import FloatArray
from fleet.lives.part_data import LifeKey, ModeData, PartData
from fleet.records.history import History
from fleet.records.set_up import BeliefAnswer, PartMode, Position, Slot, UsagePlan

# Where nobody has answered the question yet: one in ten gone by 100 h, give or take ten times.
UNASKED_T10_HOURS = 100.0
UNASKED_FACTOR = 10.0
_POINTS = 2048


@dataclass(frozen=True, eq=False)
class ModeLife:
    """Belief, data and posterior of one mode of one life, all in the mode's own clock."""

    mode: PartMode
    belief: Belief
    data: ModeData
    stop: WeibullPosterior
    unfit: WeibullPosterior


@dataclass(frozen=True, eq=False)
class PartLife:
    """The life of one part type, revision or lot kept apart.

    `per_hour` is how much of each clock these parts gather in a running hour; `asked` says whether someone answered
    the belief question; `stretch` is by how much the modes' t10 lie beyond the answer about the part; `data_share` is
    how much of what is said of them comes from records, from 0 to 1.
    """

    key: LifeKey
    label: str
    modes: tuple[ModeLife, ...]
    data: PartData
    per_hour: Mapping[str, float]
    asked: bool
    stretch: float
    data_share: float

    @property
    def mostly_assumption(self) -> bool:
        """Less than half of what is said of these parts comes from records, or none has failed yet."""
        return self.data.failures == 0 or self.data_share < 0.5


def fit_part_lives(history: History, data: Mapping[LifeKey, PartData]) -> dict[LifeKey, PartLife]:
    """Posterior lives of every part type, revision and lot kept apart; part types without modes are left out."""
    rates = {part_type: _rates(history, data, part_type) for part_type in {key.part_type for key in data}}
    answers = {answer.part_type: answer for answer in history.of(BeliefAnswer).values()}
    return {
        key: _part_life(key, held, answers.get(key.part_type), rates[key.part_type])
        for key, held in data.items()
        if held.modes
    }


def _part_life(key: LifeKey, data: PartData, answer: BeliefAnswer | None, rates: Mapping[str, float]) -> PartLife:
    alone = [belief_of_mode(held.mode, answer, rates) for held in data.modes]
    stretch = stretch_of_modes(tuple(alone))
    modes = tuple(_mode_life(held, belief, stretch) for held, belief in zip(data.modes, alone, strict=True))
    weights = [mode.mode.share for mode in modes]
    share = sum(w * mode.unfit.data_share for w, mode in zip(weights, modes, strict=True)) / sum(weights)
    return PartLife(key, data.label, modes, data, rates, answer is not None, stretch, share)


def _mode_life(data: ModeData, alone: Belief, stretch: float) -> ModeLife:
    belief = replace(alone, t10=alone.t10 * stretch)
    unfit = weibull_posterior(data.unfit, belief)
    same = data.stop.failures == data.unfit.failures
    return ModeLife(data.mode, belief, data, unfit if same else weibull_posterior(data.stop, belief), unfit)


def belief_of_mode(mode: PartMode, answer: BeliefAnswer | None, rates: Mapping[str, float]) -> Belief:
    """The answer about the whole part, put in the mode's clock and split by the mode's share.

    Parameters
    ----------
    rates : mapping
        Use of each clock in a running hour of these parts.
    """
    median, factor, _ = shape_belief(mode.mechanism)
    t10, clock, doubt = UNASKED_T10_HOURS, "hours", UNASKED_FACTOR
    if answer is not None:
        t10, clock, doubt = answer.t10, answer.clock, answer.factor
    in_clock = t10 if clock == mode.clock else t10 / rates[clock] * rates[mode.clock]
    return Belief(in_clock, doubt, median, factor, mode.share)


def stretch_of_modes(beliefs: tuple[Belief, ...]) -> float:
    """By what factor the t10 of every mode must grow for the part to have the answered t10 as its median.

    The modes are doubted one by one, and the part goes by the first: the sum of their hazards is more often above its
    middle value than below, and three modes believed to share one answer would be gone a fifth too early.

    Parameters
    ----------
    beliefs : tuple of Belief
        Of all modes of one part, their shares summing to 1.

    Returns
    -------
    float
        1 for a part of one mode.
    """
    like = tuple((belief.share, belief.factor, belief.shape_median, belief.shape_factor) for belief in beliefs)
    return 1.0 if len(like) < 2 else _stretch(tuple(sorted(like)))


@cache
def _stretch(modes: tuple[tuple[float, float, float, float], ...]) -> float:
    share, doubt, median, factor = (column[:, None] for column in np.array(modes).T)
    normal = _normal_points(2 * len(modes))
    log_t10 = np.log(doubt) / NORMAL_95 * normal[::2]
    shape = median * np.exp(np.log(factor) / NORMAL_95 * normal[1::2])
    # One mode alone would take the longest to bring the part to its t10; all of them, at least this much less.
    high = np.min(log_t10 - np.log(share) / shape, axis=0)
    low = high - np.log(len(modes)) / np.min(shape, axis=0)
    for _ in range(40):
        middle = 0.5 * (low + high)
        too_late = np.sum(share * np.exp(shape * (middle - log_t10)), axis=0) > 1.0
        low, high = np.where(too_late, low, middle), np.where(too_late, middle, high)
    return float(np.exp(-np.median(0.5 * (low + high))))


def _normal_points(dimensions: int) -> FloatArray:
    """Points spread evenly over independent normals, shape (dimensions, n): multiples of a generalised golden ratio."""
    ratio = 1.5
    for _ in range(60):
        ratio = (1.0 + ratio) ** (1.0 / (dimensions + 1))
    steps = ratio ** -np.arange(1.0, dimensions + 1)
    return np.asarray(ndtri(np.mod(0.5 + steps[:, None] * np.arange(1, _POINTS + 1), 1.0)))


def _rates(history: History, data: Mapping[LifeKey, PartData], part_type: str) -> dict[str, float]:
    """Use of each clock in a running hour: as recorded for this part type, else as planned for its joints."""
    use: dict[str, float] = {}
    for key, held in data.items():
        if key.part_type == part_type:
            for clock, value in held.use.items():
                use[clock] = use.get(clock, 0.0) + value
    rates = _planned_rates(history, part_type)
    hours = use.get("hours", 0.0)
    if hours > 0:
        rates |= {clock: value / hours for clock, value in use.items() if value > 0}
    return rates


def _planned_rates(history: History, part_type: str) -> dict[str, float]:
    designs = {slot.unit_design for slot in history.of(Slot).values() if slot.part_type == part_type}
    turns = [p.turns_per_hour for p in history.of(Position).values() if p.unit_design in designs and p.turns_per_hour]
    plans = list(history.of(UsagePlan).values())
    impacts = [plan.impacts_per_hour for plan in plans if plan.impacts_per_hour > 0]
    weekly = [plan.hours_per_week for plan in plans if plan.hours_per_week > 0]
    return {
        "hours": 1.0,
        "load_hours": 1.0,
        "turns": _mean(turns, 1000.0),
        "impacts": _mean(impacts, 1.0),
        "days": 7.0 / _mean(weekly, 7.0),
    }


def _mean(values: list[float], if_none: float) -> float:
    return sum(values) / len(values) if values else if_none
