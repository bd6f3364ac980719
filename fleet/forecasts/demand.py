"""Present ages, planned use and life draws come in; the distribution of failures, renewals included, goes out."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Protocol

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy import stats

from fleet.errors import PlanError
from fleet.forecasts.demand_lattice import (
    PartGroup,
    RenewalPattern,
    count_failures,
    lattice_steps,
    total_failures,
)
from fleet.forecasts.life_draws import LifeDraws, ModeDraws
from fleet.forecasts.odds import PartsAtRisk, common_draws, part_key

FloatArray = NDArray[np.float64]

MOST_DRAWS = 128
_MOST_GROUPS = 256
_LIGHTEST = 1e-7


class ShapeScale(Protocol):
    """Weibull parameters: scalars, or arrays of nodes with a `weight` beside them."""

    @property
    def shape(self) -> float | FloatArray:
        """Shape, or shapes of the nodes. [1]"""
        ...

    @property
    def scale(self) -> float | FloatArray:
        """Scale, or scales of the nodes. [clock]"""
        ...


@dataclass(frozen=True)
class AgeLimit:
    """Age at which a part is replaced while still good.

    Parameters
    ----------
    clock : str
    age : float
        [clock]
    """

    clock: str
    age: float


@dataclass(frozen=True, eq=False)
class FleetPlan:
    """How failed and old parts of a fleet are replaced.

    Parameters
    ----------
    replace_at : mapping of life to AgeLimit
        Lives not named run to failure.
    renewal_life : mapping of life to life
        Life of the new part; lives not named are replaced by their like.
    """

    replace_at: Mapping[str, AgeLimit]
    renewal_life: Mapping[str, str]


def fleet_demand(
    parts: Sequence[PartsAtRisk],
    lives: Mapping[str, LifeDraws],
    horizon_shares: ArrayLike,
    replace_at: Mapping[str, AgeLimit] | None = None,
    renewal_life: Mapping[str, str] | None = None,
) -> FloatArray:
    """Distribution of the number of failures of all parts by each share of the horizon.

    Use is linear in time. A failed part is replaced at once by a new one, of age 0 in every clock and the same use; it
    fails by the first of its modes. Given the draw, parts fail independently; all parts of one life share the draw. No
    simulation; the lattice's error in the distribution function is below 0.002. Lives with more than 128 draws are
    thinned to 128 at even steps.

    Parameters
    ----------
    parts : sequence of PartsAtRisk
        `use` is the use over the whole horizon.
    lives : mapping of life to LifeDraws
        All with the same number of draws, or one.
    horizon_shares : array of float, shape (n_shares,)
        In (0, 1]; weeks 1 to W of W are w / W.
    replace_at : mapping of life to AgeLimit, optional
        Planned replacement of parts of a life, not counted as failures. A part past its limit is replaced at the start.
    renewal_life : mapping of life to life, optional
        Life of the part that replaces one of a life. Default: the same life.

    Returns
    -------
    array of float, shape (n_shares, n_failures)
        Probability of 0, 1, 2, ... failures; rows sum to 1.

    Raises
    ------
    PlanError
        If a life, clock, age, use, share or limit is missing or cannot be.
    """
    thin = {name: life.thinned(MOST_DRAWS) for name, life in lives.items()}
    n_draws = common_draws(thin)
    weight = np.full(n_draws, 1.0 / n_draws)
    return _mixed_demand(parts, thin, weight, horizon_shares, FleetPlan(replace_at or {}, renewal_life or {}))


def demand_distribution(
    posterior: ShapeScale, ages: ArrayLike, use: ArrayLike, replace_at: float | None = None
) -> FloatArray:
    """Distribution of the number of failures of parts of one life over a horizon, renewals included.

    Mixed over all nodes of the posterior. With more than 256 different (age, use) the places are grouped by near age
    and use, and stand at the mean of their group: the error is of second order in the width of a group.

    Parameters
    ----------
    posterior : WeibullPosterior, WeibullFit or anything with `shape`, `scale` and perhaps `weight`
        Scale in [clock].
    ages, use : array of float, shape (n_places,)
        Present age, and planned use over the horizon, of each place. [clock]
    replace_at : float, optional
        Age of planned replacement, not counted as a failure. [clock] Default: none, parts run to failure.

    Returns
    -------
    array of float, shape (n_failures,)
        Probability of 0, 1, 2, ... failures.

    Raises
    ------
    PlanError
        If ages and uses are not numbers of 0 or more, of equal length, or `replace_at` is not above 0.
    """
    age, planned = np.atleast_1d(np.asarray(ages, dtype=float)), np.atleast_1d(np.asarray(use, dtype=float))
    if age.shape != planned.shape or age.ndim != 1:
        raise PlanError(f"{age.size} ages and {planned.size} planned uses given: give one of each a place.")
    if not np.all(np.isfinite(age) & np.isfinite(planned) & (age >= 0.0) & (planned >= 0.0)):
        raise PlanError("An age or a planned use is not a number of 0 or more: mend it.")
    shape, scale = np.atleast_1d(posterior.shape), np.atleast_1d(posterior.scale)
    weight = np.atleast_1d(np.asarray(getattr(posterior, "weight", np.full(shape.size, 1.0 / shape.size))))
    kept = weight > _LIGHTEST * weight.max()
    life = LifeDraws((ModeDraws("any", "clock", shape[kept], scale[kept]),))
    parts = [
        PartsAtRisk("part", count, {"clock": mean_age}, {"clock": mean_use})
        for count, mean_age, mean_use in _grouped(age, planned)
    ]
    limit = {} if replace_at is None else {"part": AgeLimit("clock", replace_at)}
    nodes = weight[kept] / weight[kept].sum()
    return np.asarray(_mixed_demand(parts, {"part": life}, nodes, [1.0], FleetPlan(limit, {}))[0])


def constant_rate_demand(failures: float, exposure: float, horizon: float) -> FloatArray:
    """Distribution of the failures over a horizon at a constant rate known from few data (Jeffreys gamma posterior).

    The rate is Gamma(failures + 1/2, exposure); the count is negative binomial.

    Parameters
    ----------
    failures : float
        Failures seen, 0 or more.
    exposure, horizon : float
        Time watched, and time ahead, above 0. [any one clock]

    Returns
    -------
    array of float, shape (n_failures,)

    Raises
    ------
    PlanError
        If a figure cannot be.

    References
    ----------
    H. Jeffreys, "An invariant form for the prior probability in estimation problems", Proceedings of the Royal Society
    A 186, 1946 (details from memory).
    """
    if not (0.0 <= failures < np.inf and 0.0 < exposure < np.inf and 0.0 < horizon < np.inf):
        raise PlanError(f"{failures} failures in {exposure}, horizon {horizon}: give 0 or more, and times above 0.")
    law = stats.nbinom(failures + 0.5, exposure / (exposure + horizon))
    return np.asarray(law.pmf(np.arange(int(law.isf(1e-13)) + 2)))


def poisson_demand(mean: float) -> FloatArray:
    """Poisson distribution of a demand whose mean is known.

    Parameters
    ----------
    mean : float
        0 or more.

    Returns
    -------
    array of float, shape (n_failures,)

    Raises
    ------
    PlanError
        If the mean is not a number of 0 or more.
    """
    if not 0.0 <= mean < np.inf:
        raise PlanError(f"The mean demand is {mean}: give a number of 0 or more.")
    law = stats.poisson(mean)
    return np.asarray(law.pmf(np.arange(int(law.isf(1e-13)) + 2)))


def expected(pmf: FloatArray) -> float:
    """Mean of a count.

    Parameters
    ----------
    pmf : array of float, shape (n,)
        Probability of 0, 1, 2, ...
    """
    return float(pmf @ np.arange(pmf.size))


def quantile(pmf: FloatArray, q: float) -> int:
    """Smallest count that is not exceeded with probability q or more.

    Parameters
    ----------
    pmf : array of float, shape (n,)
        Probability of 0, 1, 2, ...
    q : float
        In (0, 1).
    """
    return min(int(np.searchsorted(np.cumsum(pmf), q - 1e-12)), pmf.size - 1)


def _mixed_demand(
    parts: Sequence[PartsAtRisk],
    lives: Mapping[str, LifeDraws],
    weight: FloatArray,
    horizon_shares: ArrayLike,
    plan: FleetPlan,
) -> FloatArray:
    """`fleet_demand` with given weights of the draws."""
    shares = np.atleast_1d(np.asarray(horizon_shares, dtype=np.float64))
    if shares.size == 0 or not np.all((shares > 0.0) & (shares <= 1.0)):
        raise PlanError(f"Shares of the horizon {shares.tolist()}: give numbers above 0, at most 1.")
    grouped = _by_pattern(parts, lives, plan)
    if not grouped:
        return np.ones((shares.size, 1))
    steps = _dividing_steps(shares, lattice_steps([pattern for pattern, _ in grouped]))
    if steps is None:
        return _padded([_mixed_demand(_scaled(parts, s), lives, weight, [1.0], plan)[0] for s in shares])
    times = np.rint(shares * steps).astype(np.int64)
    counts = []
    for pattern, groups in grouped:
        counts += count_failures(pattern, groups, times, steps, weight)
    return total_failures(counts, weight)


def _by_pattern(
    parts: Sequence[PartsAtRisk], lives: Mapping[str, LifeDraws], plan: FleetPlan
) -> list[tuple[RenewalPattern, list[PartGroup]]]:
    """Like parts added up, under what they are renewed by; parts that are not used are left out."""
    numbers: dict[tuple[object, ...], tuple[PartsAtRisk, PartsAtRisk, int]] = {}
    for part in parts:
        name = plan.renewal_life.get(part.life, part.life)
        new = PartsAtRisk(name, 1, dict.fromkeys(part.use, 0.0), part.use)
        limits = tuple(_clock_use(p, plan) for p in (part, new))
        key: tuple[object, ...] = (part_key(new, lives), part_key(part, lives), limits)
        numbers[key] = (part, new, part.count + (numbers[key][2] if key in numbers else 0))
    patterns: dict[tuple[object, ...], tuple[RenewalPattern, list[PartGroup]]] = {}
    for key, (part, new, count) in numbers.items():
        life = lives[part.life]
        if count == 0 or not any(part.use[clock] > 0.0 for clock in life.clocks):
            continue
        pattern_key = (key[0], _limit(new, plan), tuple(sorted(part.use.items())))
        pattern = RenewalPattern(lives[new.life], part.use, _limit(new, plan))
        groups = patterns.setdefault(pattern_key, (pattern, []))[1]
        groups.append(PartGroup(count, life, part.age, _limit(part, plan)))
    return list(patterns.values())


def _limit(part: PartsAtRisk, plan: FleetPlan) -> float:
    """Time until planned replacement, in horizons; infinite for none."""
    limit = plan.replace_at.get(part.life)
    if limit is None or part.use[limit.clock] == 0.0:
        return np.inf
    return max(limit.age - part.age[limit.clock], 0.0) / part.use[limit.clock]


def _clock_use(part: PartsAtRisk, plan: FleetPlan) -> tuple[float, float] | None:
    """Age and use in the clock of the limit, checked."""
    limit = plan.replace_at.get(part.life)
    if limit is None:
        return None
    if not limit.age > 0.0:
        raise PlanError(f"Parts of {part.life!r} are replaced at age {limit.age}: give an age above 0.")
    if limit.clock not in part.age or limit.clock not in part.use:
        raise PlanError(f"Parts of {part.life!r} are replaced by {limit.clock}, but have no age or use in that clock.")
    return float(part.age[limit.clock]), float(part.use[limit.clock])


def _dividing_steps(shares: FloatArray, least: int) -> int | None:
    """Smallest number of steps, from `least` to twice it, on which every share falls; None if there is none."""
    for steps in range(least, 2 * least + 1):
        if np.all(np.abs(shares * steps - np.rint(shares * steps)) < 1e-9):
            return steps
    return None


def _scaled(parts: Sequence[PartsAtRisk], share: float) -> list[PartsAtRisk]:
    """The same parts over a share of the horizon."""
    return [PartsAtRisk(p.life, p.count, p.age, {c: share * use for c, use in p.use.items()}) for p in parts]


def _padded(rows: list[FloatArray]) -> FloatArray:
    """Rows of unequal length, filled with zeros."""
    out = np.zeros((len(rows), max(row.size for row in rows)))
    for target, row in zip(out, rows, strict=True):
        target[: row.size] = row
    return out


def _grouped(age: FloatArray, use: FloatArray) -> list[tuple[int, float, float]]:
    """Number, mean age and mean use of places of like age and use, at most about 256 groups."""
    pairs, number = np.unique(np.stack([age, use], axis=1), axis=0, return_counts=True)
    if len(pairs) <= _MOST_GROUPS:
        return [(int(n), float(a), float(u)) for n, (a, u) in zip(number, pairs, strict=True)]
    uses = np.unique(use)
    n_uses = uses.size if uses.size <= 16 else 16
    bin_use = np.searchsorted(uses, use) if uses.size <= 16 else _bins(use, n_uses)
    label = bin_use * _MOST_GROUPS + _bins(age, max(16, _MOST_GROUPS // n_uses))
    number = np.bincount(label)
    used = np.flatnonzero(number)
    mean_age, mean_use = np.bincount(label, weights=age), np.bincount(label, weights=use)
    return [(int(number[i]), float(mean_age[i] / number[i]), float(mean_use[i] / number[i])) for i in used]


def _bins(values: FloatArray, n_bins: int) -> NDArray[np.int64]:
    """Bin of equal width that each value falls into."""
    low, high = float(values.min()), float(values.max())
    if high == low:
        return np.zeros(values.size, dtype=np.int64)
    return np.minimum(((values - low) / (high - low) * n_bins).astype(np.int64), n_bins - 1)
