"""Demand distributions and stock come in; what to hold, and the chance of running short, goes out."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from fleet.errors import PlanError
from fleet.forecasts.demand import expected

FloatArray = NDArray[np.float64]


@dataclass(frozen=True)
class SpareStock:
    """Stock against demand over lead time and review.

    Attributes
    ----------
    needed : int
        Smallest stock that meets the target.
    short : int
        Parts to order beyond those on hand and on order.
    chance_short : float
        That demand exceeds what is on hand and on order.
    expected : float
        Expected demand.
    """

    needed: int
    short: int
    chance_short: float
    expected: float


def stock_for(demand: FloatArray, target: float) -> int:
    """Smallest stock s with P(demand <= s) >= target.

    Parameters
    ----------
    demand : array of float, shape (n,)
        Probability of 0, 1, 2, ...
    target : float
        In (0, 1).

    Returns
    -------
    int

    Raises
    ------
    PlanError
        If the target is not between 0 and 1, or the demand is not a distribution that reaches it.
    """
    if not 0.0 < target < 1.0:
        raise PlanError(f"The target is {target}: give a chance above 0 and below 1.")
    pmf = np.asarray(demand, dtype=np.float64).reshape(-1)
    if pmf.size == 0 or not np.all(pmf >= 0.0) or abs(float(pmf.sum()) - 1.0) > 1e-6:
        raise PlanError("The demand is not a distribution: its chances must be 0 or more and sum to 1.")
    enough = np.flatnonzero(np.cumsum(pmf) >= target - 1e-12)
    if enough.size == 0:
        raise PlanError(f"The demand is given only up to a chance of {float(pmf.sum()):.10f}, below {target}.")
    return int(enough[0])


def spare_stock(demand: FloatArray, on_hand: int, on_order: int, target: float) -> SpareStock:
    """Stock to hold against a demand, and what is missing.

    Parameters
    ----------
    demand : array of float, shape (n,)
        Probability of 0, 1, 2, ... over lead time and review.
    on_hand, on_order : int
        Usable parts, and parts that will arrive in that time.
    target : float
        In (0, 1).

    Returns
    -------
    SpareStock

    Raises
    ------
    PlanError
        If a figure cannot be.
    """
    if on_hand < 0 or on_order < 0:
        raise PlanError(f"{on_hand} parts on hand, {on_order} on order: a stock is 0 or more, mend its record.")
    needed = stock_for(demand, target)
    beyond = float(np.sum(demand[on_hand + on_order + 1 :]))
    return SpareStock(
        needed=needed,
        short=max(0, needed - on_hand - on_order),
        chance_short=min(beyond, 1.0),
        expected=expected(np.asarray(demand)),
    )
