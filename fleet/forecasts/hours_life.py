"""The whole part's life in running hours: from the draws of its modes, each in its own clock, to one reliability."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from fleet.forecasts.life_draws import LifeDraws

FloatArray = NDArray[np.float64]


@dataclass(frozen=True)
class HoursLife:
    """A part that fails by the first of its modes, with every clock running in step with the hours.

    `per_hour` is the use of each clock in a running hour of these parts.
    """

    draws: LifeDraws
    per_hour: Mapping[str, float]

    def cumulative_hazard_by_draw(self, hours: FloatArray) -> FloatArray:
        """Cumulative hazard of every draw at each age, shape (n_draws, len(hours)). [h]"""
        return self.draws.cumulative_hazard({clock: hours * self.per_hour[clock] for clock in self.draws.clocks})

    def reliability(self, hours: FloatArray) -> FloatArray:
        """Mean chance of a new part to reach each age, shape (len(hours),). [h]"""
        return np.asarray(np.exp(-self.cumulative_hazard_by_draw(hours)).mean(axis=0))

    def reliability_quantile(self, hours: FloatArray, q: float) -> FloatArray:
        """The chance that is not exceeded with probability q, shape (len(hours),). [h]"""
        return np.asarray(np.quantile(np.exp(-self.cumulative_hazard_by_draw(hours)), q, axis=0))

    def b_life_by_draw(self, percent: float) -> FloatArray:
        """Age by which `percent` of new parts would be gone, of every draw, shape (n_draws,). [h]"""
        wanted = -np.log1p(-percent / 100)
        alone = [np.log(m.scale) + np.log(wanted) / m.shape - np.log(self.per_hour[m.clock]) for m in self.draws.modes]
        # One mode alone would take the longest; all of them together, at their earliest, at least this much less.
        high = np.min(alone, axis=0)
        low = high - np.log(len(alone)) / np.min([m.shape for m in self.draws.modes], axis=0)
        for _ in range(60):
            middle = 0.5 * (low + high)
            too_late = self._hazard_at(np.exp(middle)) > wanted
            low, high = np.where(too_late, low, middle), np.where(too_late, middle, high)
        return np.asarray(np.exp(0.5 * (low + high)))

    def b_life_quantile(self, percent: float, q: float) -> float:
        """Quantile of the age by which `percent` of new parts would be gone. [h]"""
        return float(np.quantile(self.b_life_by_draw(percent), q))

    def growth_by_draw(self) -> FloatArray:
        """How fast the hazard grows at the B10 life: the shape that one Weibull would have there, shape (n_draws,)."""
        age = self.b_life_by_draw(10.0)
        parts = [(age * self.per_hour[m.clock] / m.scale) ** m.shape for m in self.draws.modes]
        weighted = [m.shape * part for m, part in zip(self.draws.modes, parts, strict=True)]
        return np.asarray(np.sum(weighted, axis=0) / np.sum(parts, axis=0))

    def _hazard_at(self, hours: FloatArray) -> FloatArray:
        """Cumulative hazard of each draw at its own age, shape (n_draws,)."""
        parts = [(hours * self.per_hour[m.clock] / m.scale) ** m.shape for m in self.draws.modes]
        return np.asarray(np.sum(parts, axis=0))
