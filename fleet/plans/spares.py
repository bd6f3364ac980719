"""A demand distribution and a target come in; the smallest stock that meets it goes out."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fleet.errors import PlanError

FloatArray = NDArray[np.float64]


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
