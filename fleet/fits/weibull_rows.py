"""Life data come in; the Weibull likelihood as sums over logarithms of ages goes out, safe from overflow.

Ages are taken relative to the largest one, x = ln(age / reference) <= 0, so that no power of an age can overflow. An
interval row (a, b] is a suspension at a times 1 - exp(-(H(b) - H(a))); that keeps narrow intervals exact.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from fleet.lives.life_data import LifeData

FloatArray = NDArray[np.float64]

LARGEST_EXPONENT = 700.0
_DIRECT_ROWS = 64
_CHEBYSHEV_NODES = 20


@dataclass(frozen=True, eq=False)
class WeibullRows:
    """Life data prepared for the Weibull likelihood.

    Attributes
    ----------
    log_reference : float
        Logarithm of the largest finite age, the reference of all others.
    exact_failures, log_age_sum : float
        Number of exact failures, and the sum of x over them.
    interval_failures : float
        Number of failures known to an interval.
    survived, survived_weight, survived_entry : array of float, shape (m,)
        x of the age to which each row is known to have survived, its count, and x of its entry (-inf for 0).
    low, high, interval_weight : array of float, shape (n_intervals,)
        x of both ends of each interval (low may be -inf), and its count.
    """

    log_reference: float
    exact_failures: float
    log_age_sum: float
    interval_failures: float
    survived: FloatArray
    survived_weight: FloatArray
    survived_entry: FloatArray
    low: FloatArray
    high: FloatArray
    interval_weight: FloatArray

    @property
    def failures(self) -> float:
        """Number of failures, exact or not."""
        return self.exact_failures + self.interval_failures

    def survived_sum(self, shape: FloatArray) -> FloatArray:
        """Sum of count x (age^shape - entry^shape), in units of reference^shape, at each shape.

        Parameters
        ----------
        shape : array of float, shape (m,)

        Returns
        -------
        array of float, shape (m,)
        """
        if self.survived.size == 0:
            return np.zeros_like(shape)
        power = np.exp(shape[:, None] * self.survived)
        late = self.survived_entry > -np.inf
        if late.any():
            gap = self.survived_entry[late] - self.survived[late]
            power[:, late] *= -np.expm1(shape[:, None] * gap)
        return np.asarray(power @ self.survived_weight, dtype=np.float64)

    def smooth_survived_sum(self, log_shape: FloatArray) -> FloatArray:
        """`survived_sum` over an interval of log shape by Chebyshev interpolation of its logarithm.

        Parameters
        ----------
        log_shape : array of float, shape (m,), ascending

        Returns
        -------
        array of float, shape (m,)
        """
        low, high = float(log_shape[0]), float(log_shape[-1])
        nodes = max(_CHEBYSHEV_NODES, int(np.ceil(10.0 * (high - low))))
        if self.survived.size <= _DIRECT_ROWS or nodes >= log_shape.size:
            return self.survived_sum(np.exp(log_shape))
        angle = np.pi * (np.arange(nodes) + 0.5) / nodes
        at = np.cos(angle)
        log_sum = np.log(self.survived_sum(np.exp(0.5 * (low + high) + 0.5 * (high - low) * at)))
        order = np.arange(nodes)
        coefficients = (2.0 / nodes) * (np.cos(order[:, None] * angle) @ log_sum)
        coefficients[0] *= 0.5
        position = (2.0 * log_shape - low - high) / (high - low)
        return np.exp(np.cos(np.arccos(np.clip(position, -1.0, 1.0))[:, None] * order) @ coefficients)

    def log_interval_widths(self, shape: FloatArray) -> FloatArray:
        """Logarithm of high^shape - low^shape of each interval, in units of reference^shape.

        Parameters
        ----------
        shape : array of float, shape (m,)

        Returns
        -------
        array of float, shape (n_intervals, m)
        """
        gap = self.low - self.high
        return self.high[:, None] * shape + np.log(-np.expm1(gap[:, None] * shape))


def weibull_rows(data: LifeData, log_reference: float | None = None) -> WeibullRows:
    """Prepare life data for the Weibull likelihood.

    Parameters
    ----------
    data : LifeData
        Any rows.
    log_reference : float, optional
        Logarithm of the reference age where the data hold no age above 0. Default 0.

    Returns
    -------
    WeibullRows
    """
    finite = np.where(data.is_suspension, data.lower, data.upper)
    largest = float(finite.max(initial=0.0))
    reference = float(np.log(largest)) if largest > 0.0 else (log_reference or 0.0)
    with np.errstate(divide="ignore"):
        survived, entry = np.log(data.lower) - reference, np.log(data.entry) - reference
        high = np.log(finite) - reference
    interval, exact = data.is_interval, data.is_exact
    informs = data.lower > data.entry
    return WeibullRows(
        log_reference=reference,
        exact_failures=float(data.count[exact].sum()),
        log_age_sum=float(data.count[exact] @ high[exact]),
        interval_failures=float(data.count[interval].sum()),
        survived=survived[informs],
        survived_weight=data.count[informs],
        survived_entry=entry[informs],
        low=survived[interval],
        high=high[interval],
        interval_weight=data.count[interval],
    )
