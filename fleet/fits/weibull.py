"""Life data come in; the maximum-likelihood Weibull life, its bounds on demand and its bootstrap go out.

With x = ln(age / largest age) and H(t) = exp(shape x - c) the log-likelihood is concave in (shape, c), late entries
apart. Exact, suspended and late rows leave one equation in the shape alone; intervals take Newton steps in both.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from fleet.errors import DataError, FitError
from fleet.fits.weibull_bounds import ProfileBounds, bounds_around
from fleet.fits.weibull_intervals import fit_interval_rows
from fleet.fits.weibull_rows import LARGEST_EXPONENT
from fleet.lives.life_data import FloatArray, LifeData

NO_MAXIMUM = "The Weibull likelihood has no finite maximum: "
_LEAST_SHAPE, _MOST_SHAPE = 1e-4, 1e6
_REFITS_AT_ONCE = 128


@dataclass(frozen=True)
class WeibullFit:
    """A Weibull life, R(t) = exp(-(t / scale)^shape).

    Attributes
    ----------
    shape : float
        [1]
    scale : float
        [clock]
    log_likelihood : float
        Of the density of the age itself, at the maximum.
    failures : float
        Failures behind it, counted.
    """

    shape: float
    scale: float
    log_likelihood: float
    failures: float

    def cumulative_hazard(self, t: ArrayLike) -> FloatArray:
        """Cumulative hazard (t / scale)^shape at ages t of any shape. [1]"""
        with np.errstate(divide="ignore"):
            exponent = self.shape * (np.log(np.asarray(t, dtype=np.float64)) - np.log(self.scale))
        return np.asarray(np.exp(np.minimum(exponent, LARGEST_EXPONENT)))

    def reliability(self, t: ArrayLike) -> FloatArray:
        """Reliability at ages t of any shape. [1]"""
        return np.asarray(np.exp(-self.cumulative_hazard(t)))

    def b_life(self, percent: float) -> float:
        """Age by which `percent` % (in (0, 100)) have failed. [clock]"""
        return float(self.scale * (-np.log1p(-percent / 100.0)) ** (1.0 / self.shape))


@dataclass(frozen=True)
class ZeroFailureLimits:
    """Lower limits on a life of known shape that has shown no failure.

    Attributes
    ----------
    shape : float
        Taken as known. [1]
    scale : float
        Lower limit on the scale. [clock]
    """

    shape: float
    scale: float

    def b_life(self, percent: float) -> float:
        """Lower limit on the age by which `percent` % have failed. [clock]"""
        return float(self.scale * (-np.log1p(-percent / 100.0)) ** (1.0 / self.shape))


@dataclass(frozen=True, eq=False)
class BootstrapFits:
    """Refits to resampled data.

    Attributes
    ----------
    shape, scale : array of float, shape (n,)
        NaN where a resample has no finite maximum; scale in [clock].
    """

    shape: FloatArray
    scale: FloatArray


def fit_weibull(data: LifeData) -> WeibullFit:
    """Maximum-likelihood Weibull life from rows of every kind.

    Parameters
    ----------
    data : LifeData
        Failures of all modes count; take `data.for_mode(name)` for one. [clock]

    Returns
    -------
    WeibullFit

    Raises
    ------
    FitError
        If the likelihood has no finite maximum: no failures, or all failures may lie at the largest age, or the rows
        leave the shape open towards 0.

    References
    ----------
    J. Lawless, Statistical Models and Methods for Lifetime Data, 2nd ed., Wiley, 2003, chapter 5 (details from memory).
    """
    failed = data.is_exact
    if data.has_intervals:
        _refuse_without_maximum(data)
        shape, log_scale = fit_interval_rows(data)
        if not _LEAST_SHAPE < shape < _MOST_SHAPE:
            raise FitError(NO_MAXIMUM + f"the rows leave the shape open (it runs to {shape:.3g}).")
        fit_scale = float(np.exp(log_scale))
        likelihood = weibull_log_likelihood(data, shape, fit_scale)
        return WeibullFit(shape, fit_scale, likelihood, data.failures)
    count_failed = data.count[failed]
    failures = float(count_failed.sum())
    if failures == 0.0:
        raise FitError(NO_MAXIMUM + "no failures yet. Take the posterior, which starts from a belief.")
    x, log_largest, weight = _log_ages(data)
    failed_x = np.log(data.lower[failed]) - log_largest
    log_sum = float(count_failed @ failed_x)
    root, power_sum = _profile_root(x, weight, log_sum / failures)
    if root is None:
        _refuse_without_maximum(data)
        raise FitError(NO_MAXIMUM + "the late entries leave the shape open. Take the posterior.")
    shape = root
    log_scale = (np.log(power_sum / failures)) / shape
    likelihood = failures * (np.log(shape) - shape * log_scale) + (shape - 1.0) * log_sum - failures
    likelihood -= failures * log_largest
    return WeibullFit(shape, float(np.exp(log_scale + log_largest)), float(likelihood), failures)


def profile_bounds(data: LifeData, level: float = 0.95) -> ProfileBounds:
    """Profile-likelihood bounds of the Weibull life, worked out when asked.

    They cover well in small samples, where bounds from the curvature alone do not.

    Parameters
    ----------
    data : LifeData
        Rows of every kind. [clock]
    level : float
        Two-sided, in (0, 1).

    Returns
    -------
    ProfileBounds
        `.shape`, `.scale` and `.b_life(percent)`, each a pair (lower, upper), never outside 0 and infinity.

    Raises
    ------
    FitError
        If the likelihood has no finite maximum.
    DataError
        If the level cannot be.

    References
    ----------
    W. Meeker and L. Escobar, Statistical Methods for Reliability Data, Wiley, 1998, chapter 8 (details from memory).
    """
    if not 0.0 < level < 1.0:
        raise DataError(f"The level is {level}: give a number between 0 and 1.")
    fit = fit_weibull(data)
    return bounds_around(data, fit.shape, fit.scale, level)


def weibull_log_likelihood(data: LifeData, shape: float, scale: float) -> float:
    """Log-likelihood of a Weibull life, late entry conditioned on.

    An exact failure at t gives ln f(t), a suspension ln R(t), an interval ln(R(lower) - R(upper)); each row less
    ln R(entry).

    Parameters
    ----------
    data : LifeData
        [clock]
    shape : float
        Above 0. [1]
    scale : float
        Above 0. [clock]

    Returns
    -------
    float
    """
    with np.errstate(divide="ignore"):
        low, entry = np.log(data.lower / scale), np.log(data.entry / scale)
    hazard_low = np.exp(np.minimum(shape * low, LARGEST_EXPONENT))
    hazard_entry = np.exp(np.minimum(shape * entry, LARGEST_EXPONENT))
    total = -float(data.count @ (hazard_low - hazard_entry))
    exact, interval = data.is_exact, data.is_interval
    log_hazard_rate = np.log(shape / scale) + (shape - 1.0) * low[exact]
    total += float(data.count[exact] @ log_hazard_rate)
    high = np.exp(np.minimum(shape * np.log(data.upper[interval] / scale), LARGEST_EXPONENT))
    with np.errstate(divide="ignore"):
        total += float(data.count[interval] @ np.log(-np.expm1(hazard_low[interval] - high)))
    return total


def zero_failure_limits(exposures: ArrayLike, shape: float, level: float = 0.95) -> ZeroFailureLimits:
    """Lower limit on the scale from parts that have not failed, the shape taken as known.

    scale = (sum of exposure^shape / -ln(1 - level))^(1 / shape); never infinite.

    Parameters
    ----------
    exposures : array of float, shape (n_parts,)
        Ages reached without failure. [clock]
    shape : float
        Above 0. [1]
    level : float
        One-sided confidence, in (0, 1).

    Returns
    -------
    ZeroFailureLimits

    Raises
    ------
    DataError
        If no exposure is above 0, or the shape or level cannot be.

    References
    ----------
    R. Abernethy et al., Weibull Analysis Handbook, AFWAL-TR-83-2079, 1983 (details from memory).
    """
    ages = np.asarray(exposures, dtype=np.float64).reshape(-1)
    if not (ages.size and np.all(np.isfinite(ages) & (ages >= 0.0)) and ages.max() > 0.0):
        raise DataError("No age above 0 was reached, or an exposure is not an age: nothing bounds a life.")
    if not (0.0 < shape < np.inf and 0.0 < level < 1.0):
        raise DataError(f"Shape {shape}, level {level}: give a shape above 0 and a level between 0 and 1.")
    largest = ages.max()
    total = float(np.sum((ages / largest) ** shape)) / -np.log1p(-level)
    return ZeroFailureLimits(shape, float(largest * total ** (1.0 / shape)))


def bootstrap_fits(data: LifeData, n: int, rng: np.random.Generator) -> BootstrapFits:
    """Refits to `n` resamples of the rows with replacement, all by one batch of Newton steps.

    Parameters
    ----------
    data : LifeData
        Exact, suspended and late rows. [clock]
    n : int
        Number of resamples.
    rng : numpy.random.Generator
        Seeded by the caller.

    Returns
    -------
    BootstrapFits

    Raises
    ------
    DataError
        If a failure is known only to an interval.
    """
    if data.has_intervals:
        raise DataError("The bootstrap takes exact failures and suspensions: a row knows its failure to an interval.")
    rows = len(data)
    times = rng.multinomial(rows, np.full(rows, 1.0 / rows), size=n).astype(np.float64) * data.count
    with np.errstate(divide="ignore"):
        log_age, log_entry = np.log(data.lower), np.log(data.entry)
    reference = float(log_age.max())
    failures = times[:, data.is_exact].sum(axis=1)
    with np.errstate(invalid="ignore"):
        mean_x = times[:, data.is_exact] @ (log_age[data.is_exact] - reference) / failures
    late, aged = log_entry > -np.inf, log_age > -np.inf
    x = np.concatenate([log_age[aged], log_entry[late]]) - reference
    weight = np.concatenate([times[:, aged], -times[:, late]], axis=1)
    chunks = [slice(start, start + _REFITS_AT_ONCE) for start in range(0, n, _REFITS_AT_ONCE)]
    roots = [_batched_roots(x, weight[chunk], mean_x[chunk]) for chunk in chunks] or [(mean_x, mean_x)]
    shape, power = (np.concatenate(column) for column in zip(*roots, strict=True))
    with np.errstate(invalid="ignore", divide="ignore"):
        scale = np.exp(np.log(power / failures) / shape + reference)
    return BootstrapFits(shape, np.where(np.isfinite(shape), scale, np.nan))


def _log_ages(data: LifeData) -> tuple[FloatArray, float, FloatArray]:
    """x of every age reached and, with negative weight, of every entry; the reference; the weights."""
    age, count = data.lower, data.count
    largest = float(age.max())
    if age.min() <= 0.0:
        kept = age > 0.0
        age, count = age[kept], count[kept]
    log_largest = float(np.log(largest))
    x = np.log(age) - log_largest
    if data.entry.any():
        late = data.entry > 0.0
        x = np.concatenate([x, np.log(data.entry[late]) - log_largest])
        count = np.concatenate([count, -data.count[late]])
    return x, log_largest, count


def _profile_root(x: FloatArray, weight: FloatArray, mean_x: float) -> tuple[float | None, float]:
    """Root of 1 / k + mean x of the failures - S'(k) / S(k), with S(k) = sum of weight exp(k x); and S there.

    Newton steps in k kept within a bracket; None where the left side keeps one sign.
    """
    table = np.empty((3, x.size))
    table[0] = weight
    np.multiply(weight, x, out=table[1])
    np.multiply(table[1], x, out=table[2])
    low, high = 0.0, np.inf
    k = min(max(-1.0 / mean_x if mean_x < 0.0 else 1.0, 0.05), 50.0)
    for _ in range(200):
        s0, s1, s2 = (table @ np.exp(k * x)).tolist()
        ratio = s1 / s0
        value = 1.0 / k + mean_x - ratio
        if value > 0.0:
            low = k
        else:
            high = k
        slope = -1.0 / (k * k) - (s2 / s0 - ratio * ratio)
        new = k - value / slope if slope < 0.0 else -1.0
        # Far below the root 1 / k bends the Newton step short: growth by at most eight keeps it quick and safe.
        if not low <= new <= high or new <= 0.0:
            new = 0.5 * (low + high) if high < np.inf else 2.0 * k
        new = min(new, 8.0 * k)
        if abs(new - k) <= 1e-11 * k:
            return new, s0
        if new > _MOST_SHAPE or new < _LEAST_SHAPE:
            return None, s0
        k = new
    return None, 0.0


def _batched_roots(x: FloatArray, weight: FloatArray, mean_x: FloatArray) -> tuple[FloatArray, FloatArray]:
    """`_profile_root` for many weights at once, shape (n, m); NaN where there is no root."""
    low, high = np.zeros_like(mean_x), np.full_like(mean_x, np.inf)
    power = np.full_like(mean_x, np.nan)
    powers = np.stack([np.ones_like(x), x, x * x], axis=1)
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        k = np.clip(np.where(mean_x < 0.0, -1.0 / mean_x, np.nan), 0.05, 50.0)
        for _ in range(60):
            term = np.exp(k[:, None] * x)
            term *= weight
            s0, s1, s2 = (term @ powers).T
            ratio = s1 / s0
            value = 1.0 / k + mean_x - ratio
            low, high = np.where(value > 0.0, k, low), np.where(value > 0.0, high, k)
            new = k - value / (-1.0 / k**2 - (s2 / s0 - ratio**2))
            middle = np.where(np.isfinite(high), 0.5 * (low + high), 2.0 * k)
            new = np.minimum(np.where((new >= low) & (new <= high) & (new > 0.0), new, middle), 8.0 * k)
            settled = ~(np.abs(new - k) > 1e-8 * k)  # the step is quadratic: the next one would be nil
            k, power = np.where((new < _MOST_SHAPE) & (new > _LEAST_SHAPE), new, np.nan), s0
            if settled.all():
                break
    return k, power


def _refuse_without_maximum(data: LifeData) -> None:
    """Raise FitError if all failures may lie at one age that no other row has passed: the shape then runs off."""
    failed: NDArray[Any] = ~data.is_suspension
    if not failed.any():
        raise FitError(NO_MAXIMUM + "no failures yet. Take the posterior, which starts from a belief.")
    if data.lower.max() <= data.upper[failed].min():
        raise FitError(
            NO_MAXIMUM + "all failures are, or may be, at the largest age, so that the shape runs to infinity. "
            "Take the posterior, which starts from a belief."
        )
