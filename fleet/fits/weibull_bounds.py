"""Life data and the maximum of their Weibull likelihood come in; profile-likelihood bounds go out."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from scipy.optimize import brentq, minimize_scalar
from scipy.special import chdtri

from fleet.fits.weibull_intervals import LikelihoodRows, likelihood_rows
from fleet.lives.life_data import LifeData

_FARTHEST = 600.0
_SHAPE_REACH = (-9.0, 6.0)


@dataclass(frozen=True, eq=False)
class ProfileBounds:
    """Bounds of a Weibull life where the profile likelihood has fallen by half the chi-square quantile.

    Attributes
    ----------
    shape : pair of float
        Lower and upper. [1]
    scale : pair of float
        Lower and upper. [clock]
    """

    shape: tuple[float, float]
    scale: tuple[float, float]
    _profile: _Profile

    def b_life(self, percent: float) -> tuple[float, float]:
        """Bounds of the age by which `percent` % (in (0, 100)) have failed, worked out when asked. [clock]"""
        return self._profile.quantile_bounds(float(-np.log1p(-percent / 100.0)))


def bounds_around(data: LifeData, shape: float, scale: float, level: float) -> ProfileBounds:
    """Profile-likelihood bounds around a maximum.

    Parameters
    ----------
    data : LifeData
        [clock]
    shape, scale : float
        At the maximum. [1], [clock]
    level : float
        Two-sided, in (0, 1).

    Returns
    -------
    ProfileBounds
        A side that the likelihood leaves open is 0 or infinite.
    """
    rows = likelihood_rows(data)
    c = shape * (float(np.log(scale)) - rows.log_reference)
    floor = rows.curvature(shape, c).value - 0.5 * float(chdtri(1.0, 1.0 - level))
    profile = _Profile(rows, shape, c, floor)
    return ProfileBounds(profile.shape_bounds(), profile.quantile_bounds(1.0), profile)


@dataclass(frozen=True, eq=False)
class _Profile:
    """The likelihood's maximum along lines of fixed shape or fixed quantile, less the floor."""

    rows: LikelihoodRows
    shape: float
    c: float
    floor: float

    def shape_bounds(self) -> tuple[float, float]:
        at = float(np.log(self.shape))

        def excess(move: float) -> float:
            return self._best_at_shape(float(np.exp(at + move))) - self.floor

        return _both_sides(excess, at, 0.2)

    def quantile_bounds(self, hazard: float) -> tuple[float, float]:
        """Bounds of the age at which the cumulative hazard is `hazard`."""
        log_hazard = float(np.log(hazard))
        at = (self.c + log_hazard) / self.shape

        def excess(move: float) -> float:
            return self._best_at_quantile(at + move, log_hazard) - self.floor

        return _both_sides(excess, at + self.rows.log_reference, 0.2 / self.shape)

    def _best_at_shape(self, shape: float) -> float:
        """Maximum over c: the slope in c falls through zero once."""
        low = high = self.c * shape / self.shape

        def slope(c: float) -> float:
            return float(self.rows.curvature(shape, c).gradient[1])

        step = 1.0
        while slope(low) < 0.0:
            low, step = low - step, 2.0 * step
        step = 1.0
        while slope(high) > 0.0:
            high, step = high + step, 2.0 * step
        c = low if low == high else float(brentq(slope, low, high, xtol=1e-10))
        return self.rows.curvature(shape, c).value

    def _best_at_quantile(self, log_age: float, log_hazard: float) -> float:
        """Maximum over the shape along the line where the quantile stays."""

        def depth(log_shape: float) -> float:
            shape = float(np.exp(log_shape))
            return -self.rows.curvature(shape, shape * log_age - log_hazard).value

        centre = float(np.log(self.shape))
        reach = (centre + _SHAPE_REACH[0], centre + _SHAPE_REACH[1])
        return -float(minimize_scalar(depth, bounds=reach, method="bounded", options={"xatol": 1e-8}).fun)


def _both_sides(excess: Callable[[float], float], log_centre: float, step: float) -> tuple[float, float]:
    """exp(log centre + move) where the excess falls through zero, below and above; 0 or infinity where it does not."""
    found = []
    for side, open_end in ((-1.0, 0.0), (1.0, np.inf)):
        inner, outer = 0.0, side * step
        while excess(outer) > 0.0 and abs(outer) < _FARTHEST:
            inner, outer = outer, 2.0 * outer
        if abs(outer) >= _FARTHEST:
            found.append(open_end)
            continue
        found.append(float(np.exp(log_centre + brentq(excess, inner, outer, xtol=1e-10))))
    return found[0], found[1]
