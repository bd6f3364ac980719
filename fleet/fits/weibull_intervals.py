"""Life data with interval rows come in; the Weibull likelihood's value, slope and maximum in (shape, c) go out.

H(t) = exp(shape x - c) with x = ln(age / largest age), so c = shape ln(scale / largest age). Without late entries the
log-likelihood is concave in (shape, c): each row is the logarithm of a smallest-extreme-value density, or of its
integral over an interval, at a point linear in them.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from scipy.optimize import minimize

from fleet.errors import FitError
from fleet.fits.weibull_rows import LARGEST_EXPONENT, FloatArray
from fleet.lives.life_data import LifeData

_MOST_STEPS = 100


@dataclass(frozen=True, eq=False)
class Curvature:
    """Log-likelihood, its gradient (2,) and its Hessian (2, 2) in (shape, c)."""

    value: float
    gradient: FloatArray
    hessian: FloatArray


@dataclass(frozen=True, eq=False)
class LikelihoodRows:
    """Rows of life data by what they add to the log-likelihood.

    Attributes
    ----------
    log_reference : float
        Logarithm of the largest age.
    failures, log_age_sum : float
        Exact failures, and the sum of their x.
    x, weight : array of float, shape (m,)
        Survived ages (positive weight) and entries (negative weight) above 0.
    low, high, count : array of float, shape (n_intervals,)
        x of the ends of each interval (low may be -inf), and its count.
    """

    log_reference: float
    failures: float
    log_age_sum: float
    x: FloatArray
    weight: FloatArray
    low: FloatArray
    high: FloatArray
    count: FloatArray

    def curvature(self, shape: float, c: float) -> Curvature:
        """Log-likelihood of x, with slopes; suspension, exact and entry terms, then the intervals."""
        hazard = self.weight * np.exp(np.minimum(shape * self.x - c, LARGEST_EXPONENT))
        h0, h1, h2 = float(hazard.sum()), float(hazard @ self.x), float(hazard @ self.x**2)
        value = self.failures * (np.log(shape) - c) + shape * self.log_age_sum - h0
        gradient = np.array([self.failures / shape + self.log_age_sum - h1, h0 - self.failures])
        hessian = np.array([[-self.failures / shape**2 - h2, h1], [h1, -h0]])
        if self.low.size == 0:
            return Curvature(value, gradient, hessian)
        return self._with_intervals(Curvature(value, gradient, hessian), shape, c)

    def _with_intervals(self, rest: Curvature, shape: float, c: float) -> Curvature:
        """Add ln(1 - exp(-g)) with g = H(high) - H(low); the survival to `low` is among the suspensions."""
        gap = self.low - self.high
        shrunk = np.exp(shape * gap)
        lag = np.where(np.isfinite(gap), gap, 0.0)
        log_g = np.clip(shape * self.high - c + np.log1p(-shrunk), -LARGEST_EXPONENT, 6.0)
        g = np.exp(log_g)
        first = g / np.expm1(g)
        second = first * (1.0 - g - first)
        # d ln g / d shape and its derivative; d ln g / d c = -1.
        odds = shrunk / (1.0 - shrunk)
        slope = self.high - odds * lag
        bend = -odds * (1.0 + odds) * lag**2
        w = self.count
        value = rest.value + float(w @ np.log(-np.expm1(-g)))
        gradient = rest.gradient + np.array([w @ (first * slope), -(w @ first)])
        cross = -float(w @ (second * slope))
        corner = float(w @ (second * slope**2 + first * bend))
        hessian = rest.hessian + np.array([[corner, cross], [cross, float(w @ second)]])
        return Curvature(value, gradient, hessian)


def likelihood_rows(data: LifeData) -> LikelihoodRows:
    """Sort life data by what each row adds to the log-likelihood.

    Parameters
    ----------
    data : LifeData
        With at least one age above 0.

    Returns
    -------
    LikelihoodRows
    """
    exact, interval = data.is_exact, data.is_interval
    finite = np.where(data.is_suspension, data.lower, data.upper)
    reference = float(np.log(finite.max()))
    aged, late = data.lower > 0.0, data.entry > 0.0
    with np.errstate(divide="ignore"):
        low = np.log(data.lower[interval]) - reference
    return LikelihoodRows(
        log_reference=reference,
        failures=float(data.count[exact].sum()),
        log_age_sum=float(data.count[exact] @ (np.log(data.lower[exact]) - reference)),
        x=np.concatenate([np.log(data.lower[aged]), np.log(data.entry[late])]) - reference,
        weight=np.concatenate([data.count[aged], -data.count[late]]),
        low=low,
        high=np.log(data.upper[interval]) - reference,
        count=data.count[interval],
    )


def fit_interval_rows(data: LifeData) -> tuple[float, float]:
    """Shape and ln scale at the maximum of the likelihood, rows of every kind.

    Newton steps, halved until the likelihood rises; if they do not settle, a simplex search in (ln shape, c / shape).

    Parameters
    ----------
    data : LifeData
        With at least one failure.

    Returns
    -------
    tuple of float
        Shape [1] and ln scale.

    Raises
    ------
    FitError
        If neither settles.
    """
    rows = likelihood_rows(data)
    shape, c = 1.5, 0.0
    here = rows.curvature(shape, c)
    for _ in range(_MOST_STEPS):
        step = _rising_step(here)
        size = 1.0
        if step[0] < 0.0:
            size = min(1.0, 0.8 * shape / -step[0])
        for _ in range(50):
            new_shape, new_c = shape + size * step[0], c + size * step[1]
            there = rows.curvature(new_shape, new_c)
            if np.isfinite(there.value) and there.value >= here.value - 1e-12 * abs(here.value):
                break
            size *= 0.5
        moved = max(abs(new_shape - shape) / shape, abs(new_c - c) / (1.0 + abs(c)))
        shape, c, here = float(new_shape), float(new_c), there
        if moved < 1e-10 or not 1e-5 < shape < 1e7:
            return shape, c / shape + rows.log_reference
    return _simplex(rows, shape, c)


def _rising_step(here: Curvature) -> FloatArray:
    """Newton step; the gradient, scaled by the diagonal, where the likelihood is not concave."""
    (a, b), (_, d) = here.hessian.tolist()
    determinant = a * d - b * b
    if a < 0.0 and determinant > 1e-14 * abs(a * d):
        g0, g1 = here.gradient.tolist()
        return np.array([(b * g1 - d * g0) / determinant, (b * g0 - a * g1) / determinant])
    return np.asarray(here.gradient / np.maximum(np.abs(np.diag(here.hessian)), 1e-8))


def _simplex(rows: LikelihoodRows, shape: float, c: float) -> tuple[float, float]:
    """The maximum by a simplex search, for surfaces that late entries have bent."""

    def depth(point: FloatArray) -> float:
        k = float(np.exp(np.clip(point[0], -12.0, 16.0)))
        return -rows.curvature(k, k * float(point[1])).value

    start = np.array([np.log(shape), c / shape])
    found = minimize(depth, start, method="Nelder-Mead", options={"xatol": 1e-9, "fatol": 1e-11, "maxiter": 4000})
    if not found.success:
        raise FitError("The Weibull likelihood of these rows has no maximum that could be found: take the posterior.")
    return float(np.exp(found.x[0])), float(found.x[1]) + rows.log_reference
