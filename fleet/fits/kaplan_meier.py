"""Exact ages at failure, suspensions and late entries come in; the Kaplan-Meier reliability goes out."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike
from scipy.special import ndtri

from fleet.errors import DataError
from fleet.lives.life_data import FloatArray, LifeData


@dataclass(frozen=True, eq=False)
class KaplanMeierFit:
    """Product-limit estimate of the reliability.

    Attributes
    ----------
    time : array of float, shape (n_times,)
        Distinct ages at failure, ascending. [clock]
    at_risk, failures : array of float, shape (n_times,)
        Parts at risk just before each age, and failures at it.
    estimate : array of float, shape (n_times,)
        Reliability just after each age.
    standard_error : array of float, shape (n_times,)
        Greenwood's; zero where the estimate is zero.
    """

    time: FloatArray
    at_risk: FloatArray
    failures: FloatArray
    estimate: FloatArray
    standard_error: FloatArray

    def reliability(self, t: ArrayLike) -> FloatArray:
        """Estimated reliability at each age: 1 before the first failure, constant after the last.

        Parameters
        ----------
        t : array of float, any shape
            [clock]
        """
        return self._step(t, self.estimate, 1.0)

    def bounds(self, t: ArrayLike, level: float = 0.95) -> tuple[FloatArray, FloatArray]:
        """Pointwise bounds of the reliability on the log-log scale, always within 0 and 1.

        Parameters
        ----------
        t : array of float, any shape
            [clock]
        level : float
            Two-sided, in (0, 1).

        Returns
        -------
        tuple of array of float, each of the shape of `t`
            Lower and upper. Where the estimate is 1 (no failure yet) or 0 (nobody left) the formula says nothing: the
            bounds are 0 and 1 on the open side.
        """
        with np.errstate(divide="ignore", invalid="ignore"):
            log_estimate = np.log(self.estimate)
            width = ndtri(0.5 + 0.5 * level) * self.standard_error / (self.estimate * -log_estimate)
            lower, upper = np.exp(log_estimate * np.exp(width)), np.exp(log_estimate * np.exp(-width))
        open_ended = (self.estimate <= 0.0) | (self.estimate >= 1.0)
        lower, upper = np.where(open_ended, 0.0, lower), np.where(open_ended, 1.0, upper)
        return self._step(t, lower, 0.0), self._step(t, upper, 1.0)

    def _step(self, t: ArrayLike, values: FloatArray, before: float) -> FloatArray:
        place = np.searchsorted(self.time, np.asarray(t, dtype=np.float64), side="right")
        return np.concatenate([[before], values])[place]


def fit_kaplan_meier(data: LifeData) -> KaplanMeierFit:
    """Kaplan-Meier estimate of the reliability, late entry honoured.

    A part entering exactly at t is not at risk of a failure at t; a suspension at t comes after a failure at t. Where
    late entry lets an early risk set fall to the failures alone, the estimate is zero from there on, as the product
    says, and the standard error with it.

    Parameters
    ----------
    data : LifeData
        Exact failures and suspensions. [clock]

    Returns
    -------
    KaplanMeierFit

    Raises
    ------
    DataError
        If a failure is known only to an interval.

    References
    ----------
    E. Kaplan and P. Meier, "Nonparametric estimation from incomplete observations", Journal of the American
    Statistical Association 53, 1958, 457-481.
    """
    if data.has_intervals:
        first = int(np.flatnonzero(data.is_interval)[0]) + 1
        raise DataError(
            f"Row {first} and {int(data.is_interval.sum()) - 1} others know their failure only to an interval: "
            "take the Turnbull estimate, which is made for them."
        )
    exact = data.is_exact
    time, place = np.unique(data.lower[exact], return_inverse=True)
    failures = np.asarray(np.bincount(place, weights=data.count[exact], minlength=time.size), dtype=np.float64)
    at_risk = _counted(data.entry, data.count, time) - _counted(data.lower, data.count, time)
    at_risk = np.maximum(at_risk, failures)
    with np.errstate(divide="ignore", invalid="ignore"):
        estimate = np.asarray(np.cumprod(1.0 - failures / at_risk), dtype=np.float64)
        greenwood = np.cumsum(failures / (at_risk * (at_risk - failures)))
        error = np.where(estimate > 0.0, estimate * np.sqrt(greenwood), 0.0)
    for values in (time, at_risk, failures, estimate, error):
        values.setflags(write=False)
    return KaplanMeierFit(time, at_risk, failures, estimate, error)


def _counted(ages: FloatArray, count: FloatArray, time: FloatArray) -> FloatArray:
    """Number of parts whose age is strictly below each time, shape of `time`."""
    order = np.argsort(ages, kind="stable")
    total = np.concatenate([[0.0], np.cumsum(count[order])])
    return np.asarray(total[np.searchsorted(ages[order], time, side="left")])
