"""Joint draws of the lives: like their posteriors, independent between modes."""

from __future__ import annotations

import numpy as np
import pytest

from fleet.errors import PlanError
from fleet.fits.posterior import Belief, weibull_posterior
from fleet.forecasts.life_draws import LifeDraws, ModeDraws, draw_life, fixed_life
from fleet.lives.life_data import LifeData

POSTERIOR = weibull_posterior(LifeData([80, 100, 120], [80, 100, np.inf]), Belief(100.0, 3.0, 2.0, 2.0))


def test_draws_have_the_posteriors_mean_reliability() -> None:
    life = draw_life([("wear", "hours", POSTERIOR)], 1000, np.random.default_rng(1))
    ages = np.array([30.0, 100.0, 200.0])
    mean = np.exp(-life.cumulative_hazard({"hours": ages})).mean(axis=0)
    np.testing.assert_allclose(mean, POSTERIOR.reliability(ages), atol=2e-3)


def test_modes_are_drawn_independently() -> None:
    life = draw_life([("wear", "hours", POSTERIOR), ("split", "impacts", POSTERIOR)], 4000, np.random.default_rng(2))
    wear, split = life.modes
    assert abs(np.corrcoef(np.log(wear.scale), np.log(split.scale))[0, 1]) < 0.06
    assert sorted(wear.scale)[2000] == pytest.approx(sorted(split.scale)[2000], rel=0.02)


def test_the_same_seed_gives_the_same_draws() -> None:
    first, second = (draw_life([("wear", "hours", POSTERIOR)], 50, np.random.default_rng(3)) for _ in range(2))
    np.testing.assert_array_equal(first.modes[0].scale, second.modes[0].scale)


def test_hazards_of_the_modes_add_each_in_its_clock() -> None:
    life = LifeDraws((ModeDraws("a", "hours", np.array([2.0]), np.array([10.0])), *fixed_life(1.0, 4.0, "turns").modes))
    hazard = life.cumulative_hazard({"hours": [0.0, 10.0], "turns": [2.0, 4.0]})
    np.testing.assert_allclose(hazard, [[0.5, 2.0]])
    assert life.clocks == ("hours", "turns")


def test_a_clock_without_ages_and_unequal_draws_are_refused() -> None:
    with pytest.raises(PlanError, match="hours"):
        fixed_life(2.0, 10.0).cumulative_hazard({"turns": [1.0]})
    with pytest.raises(PlanError, match="different numbers of draws"):
        LifeDraws((*fixed_life(1, 1).modes, ModeDraws("b", "hours", np.ones(2), np.ones(2))))
    with pytest.raises(PlanError, match="without modes"):
        LifeDraws(())
    with pytest.raises(PlanError, match="not above 0"):
        fixed_life(0.0, 1.0)


def test_thinning_keeps_pairs_together_and_spreads_over_all_draws() -> None:
    life = LifeDraws((ModeDraws("a", "hours", np.arange(1.0, 11), np.arange(1.0, 11) * 10),))
    thin = life.thinned(5)
    np.testing.assert_allclose(thin.modes[0].scale, thin.modes[0].shape * 10)
    assert thin.modes[0].shape.tolist() == [1.0, 3.0, 5.0, 7.0, 9.0]
    assert life.thinned(10) is life
