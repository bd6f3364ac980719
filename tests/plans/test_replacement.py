"""Replacement age: users' story, a printed case, a computed table, laws and verdicts."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import pytest
from numpy.typing import NDArray

from fleet.errors import PlanError
from fleet.fits.posterior import Belief, weibull_posterior
from fleet.fits.weibull import WeibullFit
from fleet.forecasts.hours_life import HoursLife
from fleet.forecasts.life_draws import LifeDraws, ModeDraws
from fleet.lives.life_data import LifeData
from fleet.plans.replacement import replacement_age
from tests.published import case, numbers

NONE = LifeData([], [])
FAILED = [80.0, 110.0, 130.0, 150.0, 170.0]
WEARING = weibull_posterior(LifeData(FAILED, FAILED), Belief(100.0, 3.0, 2.0, 2.0))


def life(shape: float, scale: float = 300.0) -> WeibullFit:
    return WeibullFit(shape, scale, 0.0, 1.0)


class ReliabilityOnly:
    """A Weibull life that tells nothing but its reliability."""

    def __init__(self, shape: float, scale: float) -> None:
        self._fit = life(shape, scale)

    def reliability(self, t: NDArray[np.float64]) -> NDArray[np.float64]:
        return self._fit.reliability(t)


class Uniform:
    """Life uniform on (0, 40000)."""

    def reliability(self, t: NDArray[np.float64]) -> NDArray[np.float64]:
        return np.clip(1 - t / 40_000, 0, 1)


def test_story_11_replace_by_age() -> None:
    steep = replacement_age(life(2.5), 1, 6)
    assert steep.age == pytest.approx(135, abs=0.5)
    assert 100 * steep.cost_rate == pytest.approx(1.258, abs=5e-4)
    assert 100 * steep.run_to_failure_rate == pytest.approx(2.254, abs=5e-4)
    assert steep.saving == pytest.approx(0.44, abs=5e-3)
    assert steep.verdict == "replace at age"
    mild = replacement_age(life(1.3), 1, 6)
    assert mild.age == pytest.approx(248, abs=0.5)
    assert 100 * mild.cost_rate == pytest.approx(2.046, abs=5e-4)
    assert 100 * mild.run_to_failure_rate == pytest.approx(2.165, abs=6e-4)
    assert mild.saving == pytest.approx(0.055, abs=5e-4)
    assert mild.verdict == "not worth a limit"
    early = replacement_age(life(0.8), 1, 6)
    assert early.verdict == "do not replace by age"
    assert np.isinf(early.age)


@pytest.mark.parametrize("row", range(6))
def test_computed_two_ways_agree(row: int) -> None:
    name = "age_replacement_weibull_computed.csv"
    shape, cost, age, rate = (numbers(name, column)[row] for column in (
        "weibull_shape", "planned_over_failure_cost", "optimal_age_over_scale_computed", "cost_rate_computed"
    ))  # fmt: skip
    for source in (life(shape, 1.0), ReliabilityOnly(shape, 1.0)):
        found = replacement_age(source, cost, 1.0)
        assert found.age == pytest.approx(age, abs=1e-6)
        assert found.cost_rate == pytest.approx(rate, abs=1e-6)


def test_agrees_with_the_uniform_life_whose_printed_rates_lie_around_it() -> None:
    found = replacement_age(Uniform(), 100.0, 200.0)
    assert found.age == pytest.approx(case("A01f").recomputed, rel=1e-6)
    assert found.cost_rate < min(numbers("age_replacement_uniform.csv", "cost_rate_published")) + 5e-5
    assert found.run_to_failure_rate == pytest.approx(0.01, rel=1e-9)
    assert found.flat_low < 30_000 < found.flat_high


def test_costs_scale_the_rate_and_the_scale_scales_the_age() -> None:
    base = replacement_age(life(2.5), 1, 6)
    dear, slow = replacement_age(life(2.5), 10, 60), replacement_age(life(2.5, 3000.0), 1, 6)
    assert dear.age == pytest.approx(base.age, rel=1e-6)
    assert dear.cost_rate == pytest.approx(10 * base.cost_rate, rel=1e-9)
    assert slow.age == pytest.approx(10 * base.age, rel=1e-6)


def test_the_flat_range_ends_where_the_rate_is_five_per_cent_up() -> None:
    found = replacement_age(life(2.5), 1, 6)
    for age in (found.flat_low, found.flat_high):
        grid = np.linspace(0, age, 20_001)
        good = life(2.5).reliability(grid)
        rate = (good[-1] + 6 * (1 - good[-1])) / np.trapezoid(good, grid)
        assert rate == pytest.approx(1.05 * found.cost_rate, rel=1e-5)


def test_a_dearer_failure_calls_for_an_earlier_replacement() -> None:
    ages = [replacement_age(life(2.5), 1, cost).age for cost in (3, 6, 20, 100)]
    assert ages == sorted(ages, reverse=True)


def test_over_a_posterior_the_mean_of_the_rate_is_minimised() -> None:
    found = replacement_age(WEARING, 1, 6)

    def mean_rate(age: float) -> float:
        grid = np.linspace(0, age, 4001)[:, None]
        good = np.exp(-((grid / WEARING.scale) ** WEARING.shape))
        return float((good[-1] + 6 * (1 - good[-1])) / np.trapezoid(good, grid, axis=0) @ WEARING.weight)

    assert found.cost_rate == pytest.approx(mean_rate(found.age), rel=1e-4)
    assert found.cost_rate < min(mean_rate(0.97 * found.age), mean_rate(1.03 * found.age))
    assert found.saving_low < found.saving < found.saving_high
    assert found.verdict == "replace at age"


def test_a_shape_more_likely_below_one_forbids_replacement_by_age() -> None:
    posterior = weibull_posterior(NONE, Belief(100.0, 3.0, 0.95, 3.0))
    assert posterior.probability_shape_below(1.0) > 0.5
    assert replacement_age(posterior, 1, 6).verdict == "do not replace by age"


def test_a_constant_rate_has_no_age_that_beats_running_to_failure() -> None:
    assert np.isinf(replacement_age(life(1.0), 1, 6).age)


@pytest.mark.parametrize(("planned", "failure"), [(0, 6), (6, 6), (7, 6), (-1, 6), (1, np.inf), (np.nan, 6)])
def test_costs_that_cannot_be_are_refused(planned: float, failure: float) -> None:
    with pytest.raises(PlanError, match="the first must be above 0 and below the second"):
        replacement_age(life(2.5), planned, failure)


@dataclass(frozen=True, eq=False)
class Nodes:
    """Weighted nodes of a Weibull life."""

    shape: NDArray[np.float64]
    scale: NDArray[np.float64]
    weight: NDArray[np.float64]


class Drawn:
    """Weibull lives known by draws, one a shape and scale."""

    def __init__(self, shape: Sequence[float], scale: Sequence[float]) -> None:
        self._shape, self._scale = np.array(shape)[:, None], np.array(scale)[:, None]

    def cumulative_hazard_by_draw(self, t: NDArray[np.float64]) -> NDArray[np.float64]:
        return (t / self._scale) ** self._shape

    def growth_by_draw(self) -> NDArray[np.float64]:
        return self._shape[:, 0]


def test_story_11_from_draws() -> None:
    steep = replacement_age(Drawn([2.5] * 3, [300.0] * 3), 1, 6)
    assert steep.age == pytest.approx(135, abs=0.5)
    assert 100 * steep.cost_rate == pytest.approx(1.258, abs=5e-4)
    assert 100 * steep.run_to_failure_rate == pytest.approx(2.254, abs=5e-4)
    assert steep.saving == pytest.approx(0.44, abs=5e-3)
    assert steep.verdict == "replace at age"
    mild = replacement_age(Drawn([1.3], [300.0]), 1, 6)
    assert mild.age == pytest.approx(248, abs=0.5)
    assert 100 * mild.cost_rate == pytest.approx(2.046, abs=5e-4)
    assert mild.saving == pytest.approx(0.055, abs=5e-4)
    assert mild.verdict == "not worth a limit"
    assert replacement_age(Drawn([0.8], [300.0]), 1, 6).verdict == "do not replace by age"


@pytest.mark.parametrize(("planned", "failure"), [(1, 6), (1, 2.5), (400, 26_000)])
def test_draws_and_equally_weighted_nodes_of_one_life_agree(planned: float, failure: float) -> None:
    rng = np.random.default_rng(7)
    shape, scale = rng.uniform(1.2, 4.5, 60), 300 * np.exp(rng.normal(0, 0.3, 60))
    nodes = Nodes(shape, scale, np.full(60, 1 / 60))
    drawn, exact = replacement_age(Drawn(shape, scale), planned, failure), replacement_age(nodes, planned, failure)
    assert drawn.cost_rate == pytest.approx(exact.cost_rate, rel=1e-3)
    assert drawn.run_to_failure_rate == pytest.approx(exact.run_to_failure_rate, rel=1e-3)
    assert drawn.age == pytest.approx(exact.age, rel=1e-2), "the rate is flat around its least"
    assert drawn.saving == pytest.approx(exact.saving, abs=1e-3)
    assert drawn.saving_low == pytest.approx(exact.saving_low, abs=2e-3)
    assert drawn.saving_high == pytest.approx(exact.saving_high, abs=2e-3)
    assert drawn.flat_low == pytest.approx(exact.flat_low, rel=1e-2)
    assert drawn.flat_high == pytest.approx(exact.flat_high, rel=1e-2)
    assert drawn.verdict == exact.verdict


def test_draws_of_two_clocks_cost_what_a_plain_integration_says() -> None:
    modes = (ModeDraws("wear", "hours", np.array([3.0]), np.array([250.0])),
             ModeDraws("snap", "turns", np.array([1.6]), np.array([3e5])))  # fmt: skip
    life = HoursLife(LifeDraws(modes), {"hours": 1.0, "turns": 600.0})
    found = replacement_age(life, 1, 6)
    grid = np.linspace(0, found.age, 200_001)
    good = life.reliability(grid)
    rate = (good[-1] + 6 * (1 - good[-1])) / np.trapezoid(good, grid)
    assert found.cost_rate == pytest.approx(rate, rel=1e-3)
    for nearby in (0.9 * found.age, 1.1 * found.age):
        grid = np.linspace(0, nearby, 200_001)
        good = life.reliability(grid)
        assert found.cost_rate < (good[-1] + 6 * (1 - good[-1])) / np.trapezoid(good, grid)


def test_draws_that_scale_scale_the_age_and_nothing_else() -> None:
    rng = np.random.default_rng(8)
    shape, scale = rng.uniform(1.2, 4.5, 30), rng.uniform(100, 400, 30)
    here, there = replacement_age(Drawn(shape, scale), 1, 6), replacement_age(Drawn(shape, 3600 * scale), 1, 6)
    assert there.age == pytest.approx(3600 * here.age, rel=1e-6)
    assert there.saving == pytest.approx(here.saving, abs=1e-6)


def test_draws_whose_hazard_mostly_falls_are_not_replaced_by_age() -> None:
    assert replacement_age(Drawn([0.7, 0.8, 3.0], [300.0] * 3), 1, 6).verdict == "do not replace by age"
    assert replacement_age(Drawn([0.7, 2.8, 3.0], [300.0] * 3), 1, 6).verdict != "do not replace by age"
