"""Posteriors of the modes of one life come in; joint, equally weighted draws of all their parameters go out."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from fleet.errors import PlanError
from fleet.fits.posterior import WeibullPosterior

FloatArray = NDArray[np.float64]

_LARGEST_EXPONENT = 700.0


@dataclass(frozen=True, eq=False)
class ModeDraws:
    """Draws of the Weibull parameters of one mode.

    Parameters
    ----------
    mode : str
    clock : str
        Clock that drives the mode.
    shape, scale : array of float, shape (n_draws,)
        Scale in [clock].

    Raises
    ------
    PlanError
        If the draws are empty, of unequal number or not above 0.
    """

    mode: str
    clock: str
    shape: FloatArray
    scale: FloatArray

    def __post_init__(self) -> None:
        """Check the draws and make them read-only."""
        for name in ("shape", "scale"):
            values = np.array(getattr(self, name), dtype=np.float64).reshape(-1)
            values.setflags(write=False)
            object.__setattr__(self, name, values)
        if self.shape.size == 0 or self.shape.size != self.scale.size:
            raise PlanError(
                f"The mode {self.mode!r} has {self.shape.size} shapes and {self.scale.size} scales: give pairs."
            )
        if not (np.all(self.shape > 0.0) and np.all(self.scale > 0.0)):
            raise PlanError(f"The mode {self.mode!r} has a shape or scale that is not above 0.")

    def cumulative_hazard(self, ages: ArrayLike) -> FloatArray:
        """Cumulative hazard (age / scale)^shape of each draw at each age.

        Parameters
        ----------
        ages : array of float, shape (n,)
            [clock]

        Returns
        -------
        array of float, shape (n_draws, n)
        """
        with np.errstate(divide="ignore"):
            log_age = np.log(np.asarray(ages, dtype=np.float64))
        exponent = self.shape[:, None] * (log_age - np.log(self.scale)[:, None])
        return np.asarray(np.exp(np.minimum(exponent, _LARGEST_EXPONENT, out=exponent), out=exponent))


@dataclass(frozen=True)
class LifeDraws:
    """Joint draws for one life: the modes of a part type, revision or lot, each in its clock.

    Parameters
    ----------
    modes : tuple of ModeDraws
        All with the same number of draws: draw i of each belongs together.

    Raises
    ------
    PlanError
        If there is no mode, or the numbers of draws differ.
    """

    modes: tuple[ModeDraws, ...]

    def __post_init__(self) -> None:
        """Check that the modes have the same number of draws."""
        sizes = {mode.mode: mode.shape.size for mode in self.modes}
        if not self.modes:
            raise PlanError("A life without modes cannot be forecast: give at least one mode.")
        if len(set(sizes.values())) > 1:
            raise PlanError(f"The modes of one life have different numbers of draws: {sizes}.")

    @property
    def n_draws(self) -> int:
        """Number of draws."""
        return int(self.modes[0].shape.size)

    @property
    def clocks(self) -> tuple[str, ...]:
        """Clocks of the modes, each once, sorted."""
        return tuple(sorted({mode.clock for mode in self.modes}))

    def cumulative_hazard(self, ages: Mapping[str, ArrayLike]) -> FloatArray:
        """Cumulative hazard of the part by any of its modes, at each age.

        Parameters
        ----------
        ages : mapping of clock to array of float, shape (n,)
            Ages of n parts in each clock of the life. [clock]

        Returns
        -------
        array of float, shape (n_draws, n)

        Raises
        ------
        PlanError
            If a clock of the life has no ages.
        """
        missing = [clock for clock in self.clocks if clock not in ages]
        if missing:
            raise PlanError(f"No ages in the clock {', '.join(missing)}, which drives a mode of this life.")
        total = self.modes[0].cumulative_hazard(ages[self.modes[0].clock])
        for mode in self.modes[1:]:
            total += mode.cumulative_hazard(ages[mode.clock])
        return total

    def thinned(self, n_draws: int) -> LifeDraws:
        """At most `n_draws` of the draws, taken at even steps, the same ones of every mode.

        Parameters
        ----------
        n_draws : int
            Above 0.

        Returns
        -------
        LifeDraws
        """
        if self.n_draws <= n_draws:
            return self
        kept = (np.arange(n_draws) * self.n_draws) // n_draws
        return LifeDraws(tuple(ModeDraws(m.mode, m.clock, m.shape[kept], m.scale[kept]) for m in self.modes))


def draw_life(modes: Sequence[tuple[str, str, WeibullPosterior]], n_draws: int, rng: np.random.Generator) -> LifeDraws:
    """Joint draws from the posteriors of a part's modes, which are independent of one another.

    The cells of each posterior's fine grid are resampled systematically (one random start, even steps through the
    weights), then permuted mode by mode. Quantiles of the draws are then as good as their number; the few nodes that
    serve expectations stand in columns too far apart for that.

    Parameters
    ----------
    modes : sequence of (mode, clock, WeibullPosterior)
        Each scale in [clock].
    n_draws : int
        Above 0.
    rng : numpy.random.Generator
        Seeded by the caller.

    Returns
    -------
    LifeDraws

    Raises
    ------
    PlanError
        If there is no mode or no draw.
    """
    if n_draws < 1:
        raise PlanError(f"{n_draws} draws asked for: take at least 1.")
    drawn = []
    for mode, clock, posterior in modes:
        level = (np.arange(n_draws) + rng.random()) / n_draws
        cell = np.searchsorted(np.cumsum(posterior.fine_weight), level, side="right")
        cell = rng.permutation(np.minimum(cell, posterior.fine_weight.size - 1))
        line, column = np.unravel_index(cell, posterior.fine_weight.shape)
        log_scale = np.clip(posterior.log_scale[line, column], -_LARGEST_EXPONENT, _LARGEST_EXPONENT)
        drawn.append(ModeDraws(mode, clock, np.exp(posterior.log_shape[line]), np.exp(log_scale)))
    return LifeDraws(tuple(drawn))


def fixed_life(shape: float, scale: float, clock: str = "hours") -> LifeDraws:
    """A life of one mode whose parameters are taken as known.

    Parameters
    ----------
    shape : float
        [1]
    scale : float
        [clock]
    clock : str

    Returns
    -------
    LifeDraws
        With one draw.
    """
    return LifeDraws((ModeDraws("any", clock, np.array([shape]), np.array([scale])),))
