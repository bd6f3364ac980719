"""Demand: users' stories, closed forms and a plain simulation beside the lattice."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import pytest
from numpy.typing import ArrayLike, NDArray
from scipy import stats

from fleet.errors import PlanError
from fleet.fits.posterior import Belief, weibull_posterior
from fleet.fits.weibull import WeibullFit
from fleet.forecasts.demand import (
    AgeLimit,
    constant_rate_demand,
    demand_distribution,
    expected,
    fleet_demand,
    poisson_demand,
    quantile,
)
from fleet.forecasts.life_draws import LifeDraws, ModeDraws, draw_life, fixed_life
from fleet.forecasts.odds import PartsAtRisk
from fleet.forecasts.renewals import renewal_function
from fleet.lives.life_data import LifeData

POSTERIOR = weibull_posterior(LifeData([80, 100, 120], [80, 100, np.inf]), Belief(100.0, 3.0, 2.0, 2.0))


def life(shape: float, scale: float) -> WeibullFit:
    return WeibullFit(shape, scale, 0.0, 1.0)


def simulated(
    shape: float, scale: float, places: list[tuple[float, float]], limit: float, rng: np.random.Generator, runs: int
) -> NDArray[np.float64]:
    """Plain simulation, part by part: distribution of the failures."""
    total = np.zeros(runs, dtype=int)
    for start_age, use in places:
        age = np.full(runs, start_age if start_age < limit else 0.0)
        time, running = np.zeros(runs), np.ones(runs, dtype=bool)
        while running.any():
            left = scale * ((age / scale) ** shape + rng.exponential(size=runs)) ** (1 / shape) - age
            failed = left <= limit - age
            time = np.where(running, time + np.minimum(left, limit - age), time)
            running = running & (time <= use)
            total += running & failed
            age = np.zeros(runs)
    return np.bincount(total) / runs


def largest_gap(first: ArrayLike, second: ArrayLike) -> float:
    """Largest difference of the two distribution functions."""
    a, b = np.asarray(first), np.asarray(second)
    size = max(a.size, b.size)
    return float(np.abs(np.cumsum(np.pad(a, (0, size - a.size))) - np.cumsum(np.pad(b, (0, size - b.size)))).max())


def test_story_7_forecast_from_present_ages() -> None:
    pmf = demand_distribution(life(3, 200), [150] * 12 + [20] * 12, [40] * 24)
    assert expected(pmf) == pytest.approx(4.55, abs=5e-3)
    assert pmf[:8].sum() == pytest.approx(0.950, abs=5e-4)
    assert expected(demand_distribution(life(3, 200), [0] * 24, [40] * 24)) == pytest.approx(0.19, abs=5e-3)


@pytest.mark.parametrize(
    ("shape", "scale", "places", "limit"),
    [
        (3.0, 200.0, [(150, 400)] * 6 + [(20, 400)] * 6, np.inf),
        (0.6, 200.0, [(0, 100), (0, 100), (50, 80), (3, 120)], np.inf),
        (3.0, 200.0, [(150, 400)] * 6 + [(20, 400)] * 6, 130.0),
        (1.5, 50.0, [(10, 400), (30, 300), (70, 333)], 35.0),
        (2.0, 30.0, [(5, 1000), (10, 1000)], np.inf),
    ],
)
def test_agrees_with_a_plain_simulation(
    shape: float, scale: float, places: list[tuple[float, float]], limit: float
) -> None:
    runs = 60_000
    ages, use = zip(*places, strict=True)
    exact = demand_distribution(life(shape, scale), ages, use, None if np.isinf(limit) else limit)
    seen = simulated(shape, scale, places, limit, np.random.default_rng(8), runs)
    assert largest_gap(exact, seen) < 0.002 + 1.63 / np.sqrt(runs)


def test_a_constant_rate_gives_the_poisson_law_whatever_the_ages() -> None:
    pmf = demand_distribution(life(1, 50), [0, 30, 900], [20, 100, 155])
    assert largest_gap(pmf, poisson_demand(275 / 50)) < 5e-4


def test_without_room_for_a_second_failure_it_is_binomial() -> None:
    pmf = demand_distribution(life(40, 100), [95.0] * 10, [5.0] * 10)
    chance = 1 - np.exp(-(1 - 0.95**40))
    np.testing.assert_allclose(pmf[:11], stats.binom.pmf(np.arange(11), 10, chance), atol=1e-9)


def test_a_mixture_over_nodes_is_the_weighted_sum_of_the_demands_of_each() -> None:
    @dataclass(frozen=True, eq=False)
    class Nodes:
        shape: NDArray[np.float64]
        scale: NDArray[np.float64]
        weight: NDArray[np.float64]

    nodes = Nodes(np.array([1.5, 3.0]), np.array([80.0, 150.0]), np.array([0.3, 0.7]))
    mixed = demand_distribution(nodes, [50, 60, 0], [100, 100, 60])
    each = [demand_distribution(life(k, s), [50, 60, 0], [100, 100, 60]) for k, s in ((1.5, 80), (3.0, 150))]
    size = max(mixed.size, each[0].size, each[1].size)
    first, second = (np.pad(pmf, (0, size - pmf.size)) for pmf in each)
    np.testing.assert_allclose(np.pad(mixed, (0, size - mixed.size)), 0.3 * first + 0.7 * second, atol=2e-4)


def test_the_mean_for_new_parts_is_the_renewal_function() -> None:
    pmf = demand_distribution(life(2.2, 70), [0] * 9, [200] * 9)
    assert expected(pmf) == pytest.approx(9 * float(renewal_function(life(2.2, 70), 200.0)), abs=5e-3)


def test_a_posterior_widens_the_demand_beyond_known_parameters() -> None:
    pmf = demand_distribution(POSTERIOR, [40] * 50, [40] * 50)
    variance = float(pmf @ (np.arange(pmf.size) - expected(pmf)) ** 2)
    assert pmf.sum() == pytest.approx(1.0)
    assert variance > 3 * expected(pmf)


def test_a_large_fleet_put_into_groups_has_the_demand_of_its_places() -> None:
    rng = np.random.default_rng(6)
    ages, use = rng.uniform(0, 150, 700), rng.choice([20.0, 40.0], 700)
    chance = 1 - np.exp((ages / 300) ** 3 - ((ages + use) / 300) ** 3)
    pmf = demand_distribution(life(3, 300), ages, use)
    assert expected(pmf) == pytest.approx(chance.sum(), rel=2e-3)
    variance = float(pmf @ (np.arange(pmf.size) - expected(pmf)) ** 2)
    assert variance == pytest.approx((chance * (1 - chance)).sum(), rel=0.01)


def test_replacing_early_cuts_the_failures_of_wearing_parts_and_a_far_limit_changes_nothing() -> None:
    free = demand_distribution(life(4, 100), [30] * 8, [300] * 8)
    assert expected(demand_distribution(life(4, 100), [30] * 8, [300] * 8, 50.0)) < 0.4 * expected(free)
    far = demand_distribution(life(4, 100), [30] * 8, [300] * 8, 1e6)
    assert largest_gap(free, far) < 1e-6


def test_no_parts_or_no_use_demand_nothing() -> None:
    assert demand_distribution(life(2, 100), [], []).tolist() == [1.0]
    assert demand_distribution(life(2, 100), [50.0], [0.0]).tolist() == [1.0]


def test_what_cannot_be_is_refused() -> None:
    for ages, use, limit in (([1, 2], [1], None), ([-1], [1], None), ([1], [np.nan], None), ([1], [1], 0.0)):
        with pytest.raises(PlanError):
            demand_distribution(life(2, 100), ages, use, limit)


def test_of_the_fleet_agrees_with_the_demand_of_one_type_week_by_week() -> None:
    parts = [PartsAtRisk("disc", 12, {"hours": age}, {"hours": 40.0}) for age in (150.0, 20.0)]
    weekly = fleet_demand(parts, {"disc": fixed_life(3, 200)}, np.arange(1, 5) / 4)
    assert weekly.sum(axis=1) == pytest.approx(np.ones(4))
    assert largest_gap(weekly[3], demand_distribution(life(3, 200), [150] * 12 + [20] * 12, [40] * 24)) < 1e-4
    assert largest_gap(weekly[1], demand_distribution(life(3, 200), [150] * 12 + [20] * 12, [20] * 24)) < 2e-4
    assert np.all(np.diff(weekly @ np.arange(weekly.shape[1])) > 0)


def test_shares_that_fall_on_no_common_lattice_are_worked_out_one_by_one() -> None:
    parts = [PartsAtRisk("disc", 12, {"hours": 150.0}, {"hours": 40.0})]
    odd = fleet_demand(parts, {"disc": fixed_life(3, 200)}, [0.123456789, 1.0])
    assert largest_gap(odd[0], demand_distribution(life(3, 200), [150] * 12, [40 * 0.123456789] * 12)) < 1e-6


def test_two_modes_of_equal_shape_and_clock_act_as_one_of_their_joint_scale() -> None:
    both = LifeDraws(tuple(ModeDraws(name, "hours", np.array([2.0]), np.array([100.0])) for name in "ab"))
    parts = [PartsAtRisk("disc", 5, {"hours": 40.0}, {"hours": 150.0})]
    pmf = fleet_demand(parts, {"disc": both}, [1.0])[0]
    assert largest_gap(pmf, demand_distribution(life(2, 100 / 2**0.5), [40] * 5, [150] * 5)) < 1e-4


def test_modes_in_two_clocks_agree_with_a_plain_simulation() -> None:
    hours = ModeDraws("wear", "hours", np.array([3.0]), np.array([80.0]))
    impacts = ModeDraws("hit", "impacts", np.array([1.2]), np.array([40.0]))
    parts = [PartsAtRisk("foot", 3, {"hours": 30.0, "impacts": 10.0}, {"hours": 100.0, "impacts": 60.0})]
    pmf = fleet_demand(parts, {"foot": LifeDraws((hours, impacts))}, [1.0])[0]
    rng, runs = np.random.default_rng(4), 60_000
    total = np.zeros(runs, dtype=int)
    for _ in range(3):
        time, running, age = np.zeros(runs), np.ones(runs, dtype=bool), (30.0, 10.0)
        while running.any():
            wear = 80 * ((age[0] / 80) ** 3 + rng.exponential(size=runs)) ** (1 / 3) - age[0]
            hit = 40 * ((age[1] / 40) ** 1.2 + rng.exponential(size=runs)) ** (1 / 1.2) - age[1]
            time = np.where(running, time + np.minimum(wear / 100, hit / 60), time)
            running = running & (time <= 1)
            total, age = total + running, (0.0, 0.0)
    assert largest_gap(pmf, np.bincount(total) / runs) < 0.002 + 1.63 / np.sqrt(runs)


def test_new_parts_of_another_revision_bring_their_own_life() -> None:
    lives = {"old": fixed_life(8, 100), "new": fixed_life(8, 1e6)}
    parts = [PartsAtRisk("old", 10, {"hours": 80.0}, {"hours": 1000.0})]
    renewed = fleet_demand(parts, lives, [1.0], renewal_life={"old": "new"})[0]
    assert renewed[10] == pytest.approx(1.0, abs=1e-6)
    assert expected(fleet_demand(parts, lives, [1.0])[0]) > 80


def test_a_limit_by_another_clock_replaces_in_time() -> None:
    disc = fixed_life(4, 100)
    parts = [PartsAtRisk("disc", 8, {"hours": 30.0, "days": 3.0}, {"hours": 300.0, "days": 30.0})]
    by_days = fleet_demand(parts, {"disc": disc}, [0.5, 1.0], {"disc": AgeLimit("days", 5.0)})
    by_hours = fleet_demand(parts, {"disc": disc}, [0.5, 1.0], {"disc": AgeLimit("hours", 50.0)})
    np.testing.assert_allclose(by_days, by_hours, atol=1e-12)
    with pytest.raises(PlanError, match="turns"):
        fleet_demand(parts, {"disc": disc}, [1.0], {"disc": AgeLimit("turns", 5.0)})


def test_parts_of_one_life_share_the_draw() -> None:
    lives = {name: draw_life([("w", "hours", POSTERIOR)], 128, np.random.default_rng(i)) for i, name in enumerate("ab")}
    shared = [PartsAtRisk("a", 20, {"hours": 50.0}, {"hours": 30.0})] * 2
    apart = [PartsAtRisk(name, 20, {"hours": 50.0}, {"hours": 30.0}) for name in "ab"]
    spread = []
    for parts in (shared, apart):
        pmf = fleet_demand(parts, lives, [1.0])[0]
        spread.append(float(pmf @ (np.arange(pmf.size) - expected(pmf)) ** 2))
    assert spread[0] > 1.2 * spread[1]


def test_a_share_outside_the_horizon_is_refused() -> None:
    with pytest.raises(PlanError, match="Shares of the horizon"):
        fleet_demand([], {}, [0.0])


def test_constant_rate_demand_is_the_gamma_mixture_of_poisson_laws() -> None:
    pmf = constant_rate_demand(4, 600, 200)
    rates = stats.gamma(4.5, scale=1 / 600).ppf((np.arange(20_000) + 0.5) / 20_000)
    mixed = stats.poisson.pmf(np.arange(12)[:, None], rates * 200).mean(axis=1)
    np.testing.assert_allclose(pmf[:12], mixed, atol=1e-4)
    assert expected(pmf) == pytest.approx(4.5 / 600 * 200)


def test_quantile_is_the_smallest_count_not_exceeded() -> None:
    pmf = np.array([0.5, 0.3, 0.2])
    assert [quantile(pmf, q) for q in (0.2, 0.5, 0.51, 0.8, 0.99)] == [0, 0, 1, 1, 2]
