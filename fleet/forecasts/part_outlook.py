"""From the life of a part type to what is said of it: by what age one in ten, and half, are gone, and its curve."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from fleet.fits.kaplan_meier import KaplanMeierFit, fit_kaplan_meier
from fleet.fits.part_lives import PartLife
from fleet.forecasts.hours_life import HoursLife

FloatArray = NDArray[np.float64]
CURVE_POINTS = 120
LEAST_FAILURES = 3


@dataclass(frozen=True)
class AgeRange:
    """An age in running hours: its middle value, and the range that should hold it 8 times in 10."""

    middle: float
    low: float
    high: float


@dataclass(frozen=True, eq=False)
class PartOutlook:
    """What is said of one life, in running hours of a new part.

    `hours`, `reliability`, `low`, `high` and `believed` are arrays of shape (n,): the mean chance to reach an age, its
    80 % band, and the middle of what was believed before any record. `steps` are the records alone, None under three
    failures, where steps would mislead.
    """

    b10: AgeRange
    b50: AgeRange
    hours: FloatArray
    reliability: FloatArray
    low: FloatArray
    high: FloatArray
    believed: FloatArray
    steps: KaplanMeierFit | None


def part_outlook(life: PartLife, in_hours: HoursLife) -> PartOutlook:
    """Ages and curve of one life."""
    oldest = max(
        (
            float(mode.data.unfit.lower.max()) / life.per_hour[mode.mode.clock]
            for mode in life.modes
            if len(mode.data.unfit)
        ),
        default=0.0,
    )
    b50 = _range(in_hours, 50.0)
    hours = np.linspace(0.0, max(1.2 * oldest, 1.5 * b50.middle), CURVE_POINTS)
    whole = life.data.whole
    return PartOutlook(
        b10=_range(in_hours, 10.0),
        b50=b50,
        hours=_frozen(hours),
        reliability=_frozen(in_hours.reliability(hours)),
        low=_frozen(in_hours.reliability_quantile(hours, 0.1)),
        high=_frozen(in_hours.reliability_quantile(hours, 0.9)),
        believed=_frozen(_believed(life, hours)),
        steps=fit_kaplan_meier(whole) if whole.failures >= LEAST_FAILURES else None,
    )


def _frozen(values: FloatArray) -> FloatArray:
    values.setflags(write=False)
    return values


def _believed(life: PartLife, hours: FloatArray) -> FloatArray:
    """Chance to reach each age by the middle of the belief, all modes together: at the answered age 1 in 10 is gone."""
    hazard = np.zeros_like(hours)
    for mode in life.modes:
        share_of_t10 = hours * life.per_hour[mode.mode.clock] * life.stretch / mode.belief.t10
        hazard += mode.belief.hazard * share_of_t10**mode.belief.shape_median
    return np.asarray(np.exp(-hazard))


def _range(in_hours: HoursLife, percent: float) -> AgeRange:
    ages = in_hours.b_life_by_draw(percent)
    low, middle, high = np.quantile(ages, [0.1, 0.5, 0.9])
    return AgeRange(float(middle), float(low), float(high))
