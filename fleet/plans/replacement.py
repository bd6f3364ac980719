"""A life or its posterior and two costs come in; the age at which planned replacement costs least goes out."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Protocol, runtime_checkable

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import brentq, minimize_scalar
from scipy.special import gammainc, gammaln

from fleet.errors import PlanError
from fleet.fits.posterior import WeibullPosterior
from fleet.forecasts.demand import ShapeScale

FloatArray = NDArray[np.float64]

REPLACE = "replace at age"
NO_LIMIT = "not worth a limit"
NOT_BY_AGE = "do not replace by age"

LEAST_SAVING = 0.10
FLAT = 0.05
_GRID = 160
_INTEGRAL_STEPS = 8192
_LIGHTEST = 1e-7
_DRAWN_GRID = 600
_LAST_HAZARD = 60.0
_NOTHING = 1e-12
_TINY = 1e-300
_LARGEST_EXPONENT = 690.0


class Reliability(Protocol):
    """Anything with a reliability at each age of an array."""

    def reliability(self, t: FloatArray, /) -> FloatArray:
        """Reliability at ages t. [1]"""
        ...


@runtime_checkable
class DrawnLife(Protocol):
    """A life known by equally weighted draws: a part with several modes, each in its own clock."""

    def cumulative_hazard_by_draw(self, t: FloatArray, /) -> FloatArray:
        """Cumulative hazard of every draw at ages t, shape (n_draws, len(t)). [1]"""
        ...

    def growth_by_draw(self) -> FloatArray:
        """The shape that one Weibull would have at the draw's B10 life, shape (n_draws,). [1]"""
        ...


@dataclass(frozen=True)
class ReplacementAge:
    """Planned replacement by age, set against running to failure.

    Attributes
    ----------
    age : float
        Age at which the cost rate is least; infinite where no age beats running to failure. [clock]
    cost_rate, run_to_failure_rate : float
        Posterior mean cost rate with replacement at `age`, and without. [currency per clock unit]
    saving : float
        1 - cost_rate / run_to_failure_rate. [1]
    saving_low, saving_high : float
        10 % and 90 % posterior quantile of the saving at `age`; below 0 where the limit would cost. [1]
    flat_low, flat_high : float
        Ages between which the cost rate is within 5 % of its least. [clock]
    verdict : str
        "replace at age", "not worth a limit" (saving below 10 %, or no age beats running to failure) or "do not replace
        by age" (P(shape < 1) above one half).
    """

    age: float
    cost_rate: float
    run_to_failure_rate: float
    saving: float
    saving_low: float
    saving_high: float
    flat_low: float
    flat_high: float
    verdict: str


def replacement_age(
    life_or_posterior: ShapeScale | Reliability | DrawnLife, planned_cost: float, failure_cost: float
) -> ReplacementAge:
    """Age at which planned replacement costs least per unit of the clock.

    For one life the cost rate of replacement at age T is (planned R(T) + failure (1 - R(T))) / integral of R to T. The
    posterior mean of this rate is minimised: the rate is averaged, not its parts.

    Parameters
    ----------
    life_or_posterior : WeibullFit, WeibullPosterior, DrawnLife, or anything with `reliability(array)`
        Life of one part. [clock]
    planned_cost, failure_cost : float
        Cost of one replacement before, and after, failure. [any one currency]

    Returns
    -------
    ReplacementAge

    Raises
    ------
    PlanError
        If `planned_cost` is not above zero and below `failure_cost`.

    References
    ----------
    R. Barlow and L. Hunter, "Optimum preventive maintenance policies", Operations Research 8(1), 1960, 90-100.
    """
    if not 0.0 < planned_cost < failure_cost < np.inf:
        raise PlanError(
            f"Planned replacement costs {planned_cost}, failure {failure_cost}: "
            "the first must be above 0 and below the second."
        )
    if isinstance(life_or_posterior, DrawnLife):
        lives = _drawn_lives(life_or_posterior, planned_cost, failure_cost)
    elif hasattr(life_or_posterior, "shape") and hasattr(life_or_posterior, "scale"):
        lives = _weibull_lives(life_or_posterior, planned_cost, failure_cost)
    else:
        lives = _single_life(life_or_posterior, planned_cost, failure_cost)
    run_rate = float(lives.weight @ lives.run_to_failure)
    age = np.inf if lives.early_failures > 0.5 else _cheapest_age(lives)
    if not np.isfinite(age):
        verdict = NOT_BY_AGE if lives.early_failures > 0.5 else NO_LIMIT
        return ReplacementAge(np.inf, run_rate, run_rate, 0.0, 0.0, 0.0, np.inf, np.inf, verdict)
    node_rates = lives.rates(np.array([age]))[:, 0]
    rate = float(lives.weight @ node_rates)
    saving = 1.0 - rate / run_rate
    low, high = _weighted_quantiles(1.0 - node_rates / lives.run_to_failure, lives.weight, (0.1, 0.9))
    flat_low, flat_high = _flat_range(lives, age, (1.0 + FLAT) * rate)
    verdict = REPLACE if saving >= LEAST_SAVING else NO_LIMIT
    return ReplacementAge(age, rate, run_rate, saving, low, high, flat_low, flat_high, verdict)


@dataclass(frozen=True, eq=False)
class _Lives:
    """Nodes of a life.

    Attributes
    ----------
    rates : function of ages (n_ages,) to cost rates (n_nodes, n_ages)
    run_to_failure, weight : array of float, shape (n_nodes,)
        Cost rate without planned replacement, and weight of each node.
    shortest, longest : float
        Ages between which the cheapest one is looked for.
    early_failures : float
        P(shape < 1); 0 where there is no shape.
    """

    rates: Callable[[FloatArray], FloatArray]
    run_to_failure: FloatArray
    weight: FloatArray
    shortest: float
    longest: float
    early_failures: float

    def mean_rate(self, ages: FloatArray) -> FloatArray:
        """Mean cost rate over the nodes at each age."""
        return np.asarray(self.weight @ self.rates(ages))


def _weibull_lives(life: object, planned: float, failure: float) -> _Lives:
    """Weibull nodes; the integral of R to T is mean life x regularised gamma of (1 / shape, (T / scale)^shape)."""
    shape = np.atleast_1d(np.asarray(getattr(life, "shape"), dtype=np.float64))  # noqa: B009
    scale = np.atleast_1d(np.asarray(getattr(life, "scale"), dtype=np.float64))  # noqa: B009
    weight = np.asarray(getattr(life, "weight", np.full(shape.size, 1.0 / shape.size)), dtype=np.float64)
    kept = weight > _LIGHTEST * weight.max()
    shape, log_scale, weight = shape[kept], np.log(scale[kept]), weight[kept] / weight[kept].sum()
    early = (
        life.probability_shape_below(1.0) if isinstance(life, WeibullPosterior) else float(weight[shape < 1.0].sum())
    )
    mean_life = np.exp(np.minimum(log_scale + gammaln(1.0 + 1.0 / shape), _LARGEST_EXPONENT))

    def rates(ages: FloatArray) -> FloatArray:
        exponent = shape[:, None] * (np.log(ages) - log_scale[:, None])
        hazard = np.exp(np.minimum(exponent, _LARGEST_EXPONENT))
        lived = mean_life[:, None] * gammainc((1.0 / shape)[:, None], hazard)
        return np.asarray((planned - (failure - planned) * np.expm1(-hazard)) / np.maximum(lived, _TINY))

    heavy = weight > 1e-3 * weight.max()
    early_age = float(np.exp(np.min((log_scale + np.log(1e-5) / np.maximum(shape, 1.0))[heavy])))
    late_age = float(np.exp(np.max((log_scale + np.log(25.0) / np.maximum(shape, 0.5))[heavy])))
    return _Lives(rates, failure / mean_life, weight, early_age, late_age, early)


def _drawn_lives(life: DrawnLife, planned: float, failure: float) -> _Lives:
    """Every draw's reliability integrated on one grid of ages, even in their logarithm."""
    shortest = _age_where(life, 1e-5)
    grid = np.exp(np.linspace(np.log(shortest), np.log(_age_where(life, _LAST_HAZARD)), _DRAWN_GRID))
    at = np.exp(-life.cumulative_hazard_by_draw(grid))
    pieces = 0.5 * (at[:, 1:] + at[:, :-1]) * np.diff(grid)
    first = grid[0] * np.ones((at.shape[0], 1))
    lived = np.concatenate([first, first + np.cumsum(pieces, axis=1)], axis=1)

    def rates(ages: FloatArray) -> FloatArray:
        good = np.exp(-life.cumulative_hazard_by_draw(ages))
        cell = np.clip(np.searchsorted(grid, ages, side="right") - 1, 0, grid.size - 1)
        survived = lived[:, cell] + 0.5 * (at[:, cell] + good) * (ages - grid[cell])
        return np.asarray((planned * good + failure * (1.0 - good)) / np.maximum(survived, _TINY))

    growth = life.growth_by_draw()
    weight = np.full(growth.size, 1.0 / growth.size)
    return _Lives(rates, failure / lived[:, -1], weight, shortest, float(grid[-1]), float((growth < 1.0).mean()))


def _age_where(life: DrawnLife, hazard: float) -> float:
    """Age at which the middle draw's cumulative hazard reaches a value, by bisection in the logarithm."""
    low, high = np.log(1e-9), np.log(1e13)
    for _ in range(60):
        middle = 0.5 * (low + high)
        reached = np.median(life.cumulative_hazard_by_draw(np.array([np.exp(middle)]))) > hazard
        low, high = (low, middle) if reached else (middle, high)
    return float(np.exp(high))


def _single_life(life: object, planned: float, failure: float) -> _Lives:
    """One life known by its reliability, integrated on a fine grid up to where it has fallen to nothing."""
    reliability: Callable[[FloatArray], FloatArray] = getattr(life, "reliability")  # noqa: B009
    end = 1.0
    while float(reliability(np.array([end]))[0]) < _NOTHING and end > 1e-30:
        end *= 0.5
    while float(reliability(np.array([end]))[0]) >= _NOTHING:
        end *= 2.0
        if end > 1e30:
            raise PlanError("The reliability never falls to 0, so there is no mean life: give a whole distribution.")
    grid = np.linspace(0.0, end, _INTEGRAL_STEPS + 1)
    middle = np.asarray(reliability(0.5 * (grid[1:] + grid[:-1])), dtype=np.float64)
    at = np.asarray(reliability(grid), dtype=np.float64)
    step = grid[1]
    lived = np.concatenate([[0.0], np.cumsum(step * (at[:-1] + 4.0 * middle + at[1:]) / 6.0)])

    def rates(ages: FloatArray) -> FloatArray:
        good = np.asarray(reliability(ages), dtype=np.float64)
        cell = np.minimum((ages / step).astype(np.int64), _INTEGRAL_STEPS - 1)
        rest = ages - grid[cell]
        half = np.asarray(reliability(grid[cell] + 0.5 * rest), dtype=np.float64)
        survived = lived[cell] + rest * (at[cell] + 4.0 * half + good) / 6.0
        return np.asarray((planned * good + failure * (1.0 - good)) / np.maximum(survived, _TINY))[None, :]

    return _Lives(rates, np.array([failure / lived[-1]]), np.ones(1), end * 1e-6, end, 0.0)


def _cheapest_age(lives: _Lives) -> float:
    """Age of the least mean cost rate; infinite if none is below that of running to failure."""
    grid = np.linspace(np.log(lives.shortest), np.log(lives.longest), _GRID)
    rate = lives.mean_rate(np.exp(grid))
    best = int(np.argmin(rate))
    if best == _GRID - 1 or rate[best] >= float(lives.weight @ lives.run_to_failure) * (1.0 - 1e-9):
        return np.inf
    span = (float(grid[max(best - 1, 0)]), float(grid[best + 1]))
    found = minimize_scalar(
        lambda x: float(lives.mean_rate(np.exp(np.array([x])))[0]),
        bounds=span,
        method="bounded",
        options={"xatol": 1e-9},
    )
    return float(np.exp(found.x))


def _flat_range(lives: _Lives, age: float, ceiling: float) -> tuple[float, float]:
    """Ages around the cheapest one up to which the mean cost rate stays below a ceiling; infinite for always."""

    def excess(log_age: float) -> float:
        return float(lives.mean_rate(np.exp(np.array([log_age])))[0]) - ceiling

    ends = []
    for limit in (lives.shortest, lives.longest):
        walk = np.linspace(np.log(age), np.log(limit), _GRID)
        above = np.flatnonzero(lives.mean_rate(np.exp(walk)) > ceiling)
        if above.size == 0:
            ends.append(0.0 if limit < age else np.inf)
        else:
            ends.append(float(np.exp(brentq(excess, walk[above[0] - 1], walk[above[0]]))))
    return ends[0], ends[1]


def _weighted_quantiles(values: FloatArray, weight: FloatArray, levels: tuple[float, float]) -> tuple[float, float]:
    """Quantiles of weighted values, each value's weight centred on it."""
    order = np.argsort(values)
    below = np.cumsum(weight[order]) - 0.5 * weight[order]
    low, high = np.interp(levels, below, values[order])
    return float(low), float(high)
