"""One fit per failure mode, the others suspended."""

from __future__ import annotations

import numpy as np
import pytest

from fleet.fits.mechanisms import SHAPE_BELIEF, UNKNOWN_SHAPE_BELIEF, shape_belief
from fleet.fits.modes import fit_modes
from fleet.fits.weibull import fit_weibull
from fleet.lives.life_data import LifeData
from tests.published import case, numbers, table

INF = np.inf


def shock_absorbers() -> LifeData:
    distance = numbers("shock_absorber.csv", "distance_km")
    modes = [None if mode == "none" else mode for mode in table("shock_absorber.csv")["failure_mode"]]
    upper = [INF if mode is None else age for age, mode in zip(distance, modes, strict=True)]
    return LifeData(distance, upper, mode=modes)


def test_agrees_with_two_libraries_on_the_modes_of_the_shock_absorbers() -> None:
    fits = fit_modes(shock_absorbers())
    assert list(fits) == ["mode_1", "mode_2"]
    for mode, number in (("mode_1", "R011"), ("mode_2", "R012")):
        assert fits[mode].shape == pytest.approx(case(number + "a").recomputed, rel=1e-6)
        assert fits[mode].scale == pytest.approx(case(number + "b").recomputed, rel=1e-6)


def test_every_failure_belongs_to_one_mode() -> None:
    fits = fit_modes(shock_absorbers())
    assert sum(fit.failures for fit in fits.values()) == shock_absorbers().failures


def test_one_unnamed_mode_is_the_plain_fit() -> None:
    data = LifeData([50, 90, 100], [50, 90, INF])
    assert fit_modes(data)[""].shape == fit_weibull(data).shape


def test_every_mechanism_has_a_judgement_and_an_unknown_one_a_wider_one() -> None:
    for median, factor, basis in SHAPE_BELIEF.values():
        assert median > 0
        assert 1 < factor < UNKNOWN_SHAPE_BELIEF[1]
        assert basis == "judgement"
    assert shape_belief(" Wear ") == SHAPE_BELIEF["wear"]
    assert shape_belief("gremlins") == UNKNOWN_SHAPE_BELIEF
