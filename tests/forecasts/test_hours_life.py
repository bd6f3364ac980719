"""The whole part's life in running hours: closed forms, a slow root finder, and the law of scale."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.optimize import brentq

from fleet.fits.weibull import WeibullFit
from fleet.forecasts.hours_life import HoursLife
from fleet.forecasts.life_draws import LifeDraws, ModeDraws, fixed_life

AGES = np.array([0.0, 10.0, 80.0, 250.0, 900.0])


def drawn(seed: int = 3, n_draws: int = 40) -> LifeDraws:
    """Draws of a mode in hours and one in turns."""
    rng = np.random.default_rng(seed)
    wear = ModeDraws("wear", "hours", rng.uniform(0.6, 5, n_draws), rng.uniform(50, 400, n_draws))
    snap = ModeDraws("snap", "turns", rng.uniform(0.6, 5, n_draws), rng.uniform(5e4, 4e5, n_draws))
    return LifeDraws((wear, snap))


def test_one_mode_in_hours_is_the_weibull_life_itself() -> None:
    weibull, life = WeibullFit(2.5, 300.0, 0.0, 1.0), HoursLife(fixed_life(2.5, 300.0), {"hours": 1.0})
    np.testing.assert_allclose(life.reliability(AGES), weibull.reliability(AGES), rtol=1e-12)
    for percent in (1.0, 10.0, 50.0, 99.0):
        assert life.b_life_quantile(percent, 0.5) == pytest.approx(weibull.b_life(percent), rel=1e-9)
    np.testing.assert_allclose(life.growth_by_draw(), 2.5, rtol=1e-9)


def test_a_mode_in_another_clock_takes_its_use_per_hour() -> None:
    life = HoursLife(fixed_life(2.0, 60_000.0, "turns"), {"hours": 1.0, "turns": 600.0})
    assert life.reliability(np.array([100.0]))[0] == pytest.approx(np.exp(-1))
    assert life.b_life_by_draw(10.0)[0] == pytest.approx(100 * (-np.log(0.9)) ** 0.5, rel=1e-9)


def test_modes_in_two_clocks_multiply_their_reliabilities() -> None:
    rates = {"hours": 1.0, "turns": 600.0}
    life = drawn(n_draws=1)
    each = [HoursLife(LifeDraws((mode,)), rates).reliability(AGES) for mode in life.modes]
    np.testing.assert_allclose(HoursLife(life, rates).reliability(AGES), each[0] * each[1], rtol=1e-12)


def test_two_modes_of_one_shape_and_clock_act_as_one_of_their_joint_scale() -> None:
    both = LifeDraws(tuple(ModeDraws(name, "hours", np.array([2.0]), np.array([100.0])) for name in "ab"))
    one = HoursLife(fixed_life(2.0, 100.0 / 2**0.5), {"hours": 1.0})
    assert HoursLife(both, {"hours": 1.0}).b_life_by_draw(10)[0] == pytest.approx(one.b_life_by_draw(10)[0], rel=1e-9)


@pytest.mark.parametrize("percent", [0.1, 10.0, 50.0, 99.9])
def test_the_b_life_of_every_draw_inverts_its_hazard_and_agrees_with_a_slow_root_finder(percent: float) -> None:
    life = HoursLife(drawn(), {"hours": 1.0, "turns": 700.0})
    found = life.b_life_by_draw(percent)
    wanted = -np.log1p(-percent / 100)
    np.testing.assert_allclose(np.diag(life.cumulative_hazard_by_draw(found)), wanted, rtol=1e-9)
    for draw in range(5):
        slow = brentq(
            lambda age, draw=draw: life.cumulative_hazard_by_draw(np.array([age]))[draw, 0] - wanted, 1e-9, 1e7
        )
        assert found[draw] == pytest.approx(slow, rel=1e-6)


def test_the_mean_lies_between_its_quantiles_until_few_draws_are_left_and_all_fall_with_age() -> None:
    life = HoursLife(drawn(), {"hours": 1.0, "turns": 700.0})
    low, mean, high = (
        life.reliability_quantile(AGES, 0.1),
        life.reliability(AGES),
        life.reliability_quantile(AGES, 0.9),
    )
    assert low[0] == mean[0] == high[0] == 1.0
    assert np.all((low <= mean)[:4]) and np.all((mean <= high)[:4])
    assert all(np.all(np.diff(curve) <= 0) for curve in (low, mean, high))


def test_twice_the_scale_or_half_the_use_per_hour_doubles_every_age() -> None:
    life, rates = drawn(), {"hours": 1.0, "turns": 700.0}
    slower = LifeDraws(tuple(ModeDraws(m.mode, m.clock, m.shape, 2 * m.scale) for m in life.modes))
    base = HoursLife(life, rates).b_life_by_draw(10)
    np.testing.assert_allclose(HoursLife(slower, rates).b_life_by_draw(10), 2 * base, rtol=1e-9)
    halved = {clock: rate / 2 for clock, rate in rates.items()}
    np.testing.assert_allclose(HoursLife(life, halved).b_life_by_draw(10), 2 * base, rtol=1e-9)


def test_the_growth_of_several_modes_lies_between_their_shapes() -> None:
    life = drawn()
    growth = HoursLife(life, {"hours": 1.0, "turns": 700.0}).growth_by_draw()
    shapes = np.array([mode.shape for mode in life.modes])
    assert np.all((shapes.min(axis=0) - 1e-9 <= growth) & (growth <= shapes.max(axis=0) + 1e-9))
