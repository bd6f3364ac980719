"""Life data and a belief come in; the posterior of a Weibull life, as weighted nodes with quantiles, goes out."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike

from fleet.errors import DataError
from fleet.fits.posterior_grid import THIN, Prior, RidgeGrid, ridge_grid
from fleet.fits.weibull_rows import LARGEST_EXPONENT, FloatArray, weibull_rows
from fleet.lives.life_data import LifeData

NORMAL_95 = 1.6448536269514722
"""95 % quantile of the standard normal: 90 % lie within it on both sides."""

_LOWEST_WEIGHT = 1e-9


@dataclass(frozen=True)
class Belief:
    """What is believed of a part's life before its data.

    Parameters
    ----------
    t10 : float
        Age by which 1 in 10 of the whole parts would be gone. [clock]
    factor : float
        90 % of the belief lies within t10 / factor .. t10 x factor. [1]
    shape_median, shape_factor : float
        The same for the Weibull shape of this mode. [1]
    share : float
        Share w of this mode in the part's cumulative hazard at `t10`, in (0, 1]. The shares of a part's modes sum to
        1, so that the modes together give the answer about the whole part back.

    Raises
    ------
    DataError
        If a figure cannot be.
    """

    t10: float
    factor: float
    shape_median: float
    shape_factor: float
    share: float = 1.0

    def __post_init__(self) -> None:
        """Check every figure."""
        problems = []
        for name, floor in (("t10", 0.0), ("factor", 1.0), ("shape_median", 0.0), ("shape_factor", 1.0)):
            value = getattr(self, name)
            if not (np.isfinite(value) and value > floor):
                problems.append(f"The belief's {name} is {value}: give a number above {floor:g}.")
        if not 0.0 < self.share <= 1.0:
            problems.append(f"The belief's share is {self.share}: give a number above 0, at most 1.")
        if problems:
            raise DataError("\n".join(problems))

    @property
    def hazard(self) -> float:
        """Cumulative hazard of this mode at `t10`. [1]"""
        return float(-self.share * np.log(0.9))

    @property
    def log_t10_sd(self) -> float:
        """Standard deviation of ln t10. [1]"""
        return float(np.log(self.factor) / NORMAL_95)

    @property
    def log_shape_sd(self) -> float:
        """Standard deviation of ln shape. [1]"""
        return float(np.log(self.shape_factor) / NORMAL_95)

    @property
    def log_b10_variance(self) -> float:
        """Variance, before any data, of ln B10 of this mode taken alone. [1]

        ln B10 = ln t10 - ln(share) / shape, with 1 / shape lognormal.
        """
        variance = self.log_shape_sd**2
        inverse_shape = self.shape_median**-2 * np.exp(variance) * np.expm1(variance)
        return float(self.log_t10_sd**2 + np.log(self.share) ** 2 * inverse_shape)


@dataclass(frozen=True, eq=False)
class WeibullPosterior:
    """Posterior of a Weibull life, R(t) = exp(-(t / scale)^shape).

    Attributes
    ----------
    shape, scale, weight : array of float, shape (n_nodes,)
        A few hundred nodes for expectations; scale in [clock], the weights sum to 1.
    data_share : float
        1 - Var(posterior) / Var(prior) of ln B10, within 0 and 1: what the data, not the belief, have said.
    failures : float
        Failures behind it, counted.
    log_shape : array of float, shape (n_shapes,)
        Lines of the fine grid.
    log_scale, fine_weight : array of float, shape (n_shapes, n_scales)
        Fine grid for quantiles; the weights sum to 1.
    """

    shape: FloatArray
    scale: FloatArray
    weight: FloatArray
    data_share: float
    failures: float
    log_shape: FloatArray
    log_scale: FloatArray
    fine_weight: FloatArray

    @property
    def mostly_assumption(self) -> bool:
        """Whether the belief weighs more than the data, or nothing has failed: then only a lower end is known."""
        return self.failures == 0 or self.data_share < 0.5

    def b_life_quantile(self, percent: float, q: float) -> float:
        """Posterior quantile q of the age by which `percent` % have failed.

        Parameters
        ----------
        percent : float
            In (0, 100).
        q : float
            In (0, 1).

        Returns
        -------
        float
            [clock]
        """
        log_hazard = float(np.log(-np.log1p(-percent / 100.0)))
        log_age = self.log_scale + log_hazard * np.exp(-self.log_shape)[:, None]
        low, high = float(log_age.min()) - 1.0, float(log_age.max()) + 1.0
        root = _bisect(lambda age: self._probability_failed(age, log_hazard) - q, low, high)
        return float(np.exp(min(root, LARGEST_EXPONENT)))

    def reliability(self, t: ArrayLike) -> FloatArray:
        """Posterior mean of the reliability.

        Parameters
        ----------
        t : array of float, any shape
            Ages. [clock]

        Returns
        -------
        array of float, shape of `t`
        """
        ages = np.asarray(t, dtype=np.float64)
        return np.asarray(np.exp(-_hazard(ages[..., None], self.shape, np.log(self.scale))) @ self.weight)

    def reliability_quantile(self, t: ArrayLike, q: float) -> FloatArray:
        """Posterior quantile q of the reliability at each age.

        Parameters
        ----------
        t : array of float, any shape
            Ages. [clock]
        q : float
            In (0, 1).

        Returns
        -------
        array of float, shape of `t`
        """
        ages = np.asarray(t, dtype=np.float64)
        out = np.ones(ages.shape)
        for index, age in np.ndenumerate(ages):
            if age > 0.0:
                out[index] = np.exp(-np.exp(self._log_hazard_quantile(float(np.log(age)), 1.0 - q)))
        return out

    def _log_hazard_quantile(self, log_age: float, q: float) -> float:
        """Posterior quantile q of the logarithm of the cumulative hazard at one age."""
        log_hazard = np.exp(self.log_shape)[:, None] * (log_age - self.log_scale)
        low = max(float(log_hazard.min()) - 1.0, -LARGEST_EXPONENT)
        high = min(float(log_hazard.max()) + 1.0, LARGEST_EXPONENT)
        return _bisect(lambda h: 1.0 - q - self._probability_failed(log_age, h), low, high)

    def _probability_failed(self, log_age: float, log_hazard: float) -> float:
        """Posterior probability that the cumulative hazard has reached a value by an age."""
        first = self.log_scale[:, 0]
        step = self.log_scale[:, 1] - first
        position = (log_age - log_hazard * np.exp(-self.log_shape) - first) / step + 0.5
        cells = self.fine_weight.shape[1]
        cell = np.clip(position.astype(np.int64), 0, cells - 1)
        line = np.arange(cell.size)
        below = self._cumulative_weight[line, cell]
        return float(np.sum(below + self.fine_weight[line, cell] * np.clip(position - cell, 0.0, 1.0)))

    @cached_property
    def _cumulative_weight(self) -> FloatArray:
        """Weight below each cell of the fine grid, line by line, shape (n_shapes, n_scales)."""
        return np.asarray(np.cumsum(self.fine_weight, axis=1) - self.fine_weight)

    def probability_shape_below(self, x: float) -> float:
        """Posterior probability that the shape is below x.

        Parameters
        ----------
        x : float
            Above 0. [1]
        """
        line = self.fine_weight.sum(axis=1)
        edges = np.concatenate([[0.0], np.cumsum(line)])
        step = self.log_shape[1] - self.log_shape[0]
        at = np.concatenate([self.log_shape - 0.5 * step, [self.log_shape[-1] + 0.5 * step]])
        return float(np.clip(np.interp(np.log(x), at, edges), 0.0, 1.0))

    @cached_property
    def shape_mean(self) -> float:
        """Posterior mean of the shape. [1]"""
        return float(self.shape @ self.weight)


def weibull_posterior(data: LifeData, belief: Belief) -> WeibullPosterior:
    """Posterior of the Weibull life of one mode from its life data and the belief about it.

    The prior is normal and independent on the logarithm of the age at which this mode's cumulative hazard is its share
    of 0.1054, and on ln shape. The grid is deterministic and adapts itself; no failures, and no rows, are answers too.

    Parameters
    ----------
    data : LifeData
        Rows of every kind. Failures of all modes count: take `data.for_mode(name)` first. [clock]
    belief : Belief
        Its `t10` in the same clock.

    Returns
    -------
    WeibullPosterior

    References
    ----------
    Q. Tian, C. Lewis-Beck, J. Niemi and W. Meeker, "Specifying prior distributions in reliability applications",
    Applied Stochastic Models in Business and Industry 40(1), 2024 (details from memory).
    """
    rows = weibull_rows(data, float(np.log(belief.t10)))
    prior = Prior(
        log_quantile=float(np.log(belief.t10)) - rows.log_reference,
        quantile_sd=belief.log_t10_sd,
        log_shape=float(np.log(belief.shape_median)),
        shape_sd=belief.log_shape_sd,
        hazard=belief.hazard,
    )
    return _summary(ridge_grid(rows, prior), belief, rows.log_reference, data.failures)


def _summary(grid: RidgeGrid, belief: Belief, log_reference: float, failures: float) -> WeibullPosterior:
    """Nodes, quantile grid and data share from the ridge grid."""
    inverse_shape = np.exp(-grid.log_shape)[:, None]
    log_scale = grid.log_quantile + log_reference - np.log(belief.hazard) * inverse_shape
    log_b10 = log_scale + np.log(-np.log(0.9)) * inverse_shape
    mean = float(np.sum(grid.weight * log_b10))
    variance = float(np.sum(grid.weight * (log_b10 - mean) ** 2))
    coarse = (slice(THIN // 2, None, THIN), slice(THIN // 2, None, THIN))
    weight = grid.weight[coarse]
    kept = weight > _LOWEST_WEIGHT * weight.max()
    shape = np.broadcast_to(np.exp(grid.log_shape)[:, None], grid.weight.shape)[coarse][kept]
    scale = np.exp(np.clip(log_scale[coarse][kept], -LARGEST_EXPONENT, LARGEST_EXPONENT))
    nodes = weight[kept] / weight[kept].sum()
    share = float(np.clip(1.0 - variance / belief.log_b10_variance, 0.0, 1.0))
    log_shape, fine = grid.log_shape.copy(), grid.weight
    for values in (shape, scale, nodes, log_shape, log_scale, fine):
        values.setflags(write=False)
    return WeibullPosterior(shape, scale, nodes, share, failures, log_shape, log_scale, fine)


def _hazard(ages: FloatArray, shape: FloatArray, log_scale: FloatArray) -> FloatArray:
    """Cumulative hazard (age / scale)^shape without overflow."""
    with np.errstate(divide="ignore"):
        log_ratio = np.log(np.maximum(ages, 0.0)) - log_scale
    return np.asarray(np.exp(np.minimum(shape * log_ratio, LARGEST_EXPONENT)))


def _bisect(rising: Callable[[float], float], low: float, high: float) -> float:
    """Root of a rising function, to 1e-10 of the bracket."""
    for _ in range(48):
        middle = 0.5 * (low + high)
        low, high = (middle, high) if rising(middle) < 0.0 else (low, middle)
    return 0.5 * (low + high)
