"""Posterior of a Weibull life: a slow dense integration beside it, laws, and coverage."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import pytest
from numpy.typing import NDArray

from fleet.errors import DataError
from fleet.fits.posterior import Belief, weibull_posterior
from fleet.fits.weibull import fit_weibull
from fleet.lives.life_data import LifeData

INF = np.inf
WIDE = Belief(100.0, 3.0, 2.0, 2.0)
SHARED = Belief(1000.0, 5.0, 1.5, 2.5, share=0.3)
NONE = LifeData([], [])
FAILED = [80.0, 110.0, 130.0, 150.0, 170.0]
GOOD = [40.0, 55, 60, 70, 75, 90, 95, 100, 115, 120, 140, 145, 160, 175, 180]
STORY_6 = LifeData(FAILED + GOOD, FAILED + [INF] * len(GOOD))


def many_parts(n: int = 400) -> LifeData:
    age = 300 * np.random.default_rng(1).weibull(2.5, n)
    return LifeData(np.minimum(age, 200), np.where(age < 200, age, INF))


SETS = {
    "no rows": NONE,
    "no failures": LifeData([100] * 8, [INF] * 8),
    "exact and good": STORY_6,
    "intervals and late": LifeData([80, 0, 100, 50, 60], [120, 50, 100, INF, 60.1], entry=[0, 0, 60, 20, 30]),
    "entered just before the end": LifeData([130, 90, 70], [130, INF, INF], [60, 60, 69.999]),
    "many": many_parts(120),
}


@dataclass(frozen=True, eq=False)
class Dense:
    """Direct integration on a dense grid over eight standard deviations of the belief, row by row."""

    shape: NDArray[np.float64]
    log_b10: NDArray[np.float64]
    weight: NDArray[np.float64]
    hazard: NDArray[np.float64]
    log_quantile: NDArray[np.float64]

    def reliability(self, age: float) -> float:
        hazard = self.hazard * np.exp(np.minimum(self.shape * (np.log(age) - self.log_quantile), 300))
        return float((self.weight * np.exp(-hazard)).sum())

    def b10(self, q: float) -> float:
        order = np.argsort(self.log_b10, axis=None)
        below = np.cumsum(self.weight.ravel()[order])
        return float(np.exp(np.interp(q, below, self.log_b10.ravel()[order])))


def dense(data: LifeData, belief: Belief, n: int = 900) -> Dense:
    z = np.linspace(-8, 8, n)
    u = np.log(belief.shape_median) + belief.log_shape_sd * z[:, None]
    y = np.log(belief.t10) + belief.log_t10_sd * z[None, :]
    k, height = np.exp(u), -0.5 * z[:, None] ** 2 - 0.5 * z[None, :] ** 2

    def added(start: float, end: float) -> NDArray[np.float64]:
        """Cumulative hazard added from one age to another, the clipped part kept apart from the difference."""
        gap = k * (np.log(start) - np.log(end))
        return belief.hazard * np.exp(np.minimum(k * (np.log(end) - y), 300)) * -np.expm1(gap)

    with np.errstate(all="ignore"):
        for low, high, entry, count in zip(data.lower, data.upper, data.entry, data.count, strict=True):
            height = height - count * (added(entry, low) if low > entry else 0.0)
            if low == high:
                height = height + count * (u + np.log(belief.hazard) + k * (np.log(low) - y))
            elif np.isfinite(high):
                height = height + count * np.log(-np.expm1(-added(low, high)))
    weight = np.exp(np.where(np.isnan(height), -INF, height) - np.nanmax(height))
    log_b10 = y + np.log(-np.log(0.9) / belief.hazard) / k
    return Dense(k + 0 * y, log_b10, weight / weight.sum(), np.array(belief.hazard), y)


@pytest.mark.parametrize("belief", [WIDE, SHARED], ids=["whole", "share"])
@pytest.mark.parametrize("name", list(SETS))
def test_agrees_with_a_dense_integration(name: str, belief: Belief) -> None:
    data = SETS[name]
    posterior, direct = weibull_posterior(data, belief), dense(data, belief)
    for q in (0.05, 0.5, 0.95):
        assert posterior.b_life_quantile(10, q) == pytest.approx(direct.b10(q), rel=0.006)
    for age in (50.0, 100.0, 300.0):
        assert float(posterior.reliability(age)) == pytest.approx(direct.reliability(age), abs=3e-4)
    mean = float((direct.weight * direct.log_b10).sum())
    variance = float((direct.weight * (direct.log_b10 - mean) ** 2).sum())
    share = max(0.0, 1 - variance / belief.log_b10_variance)
    assert posterior.data_share == pytest.approx(share, abs=2e-3)
    below = float(direct.weight[direct.shape < 1].sum())
    assert posterior.probability_shape_below(1.0) == pytest.approx(below, abs=2e-3)


def test_no_rows_give_the_belief_back() -> None:
    posterior = weibull_posterior(NONE, WIDE)
    for q, age in ((0.05, 100 / 3), (0.5, 100), (0.95, 300)):
        assert posterior.b_life_quantile(10, q) == pytest.approx(age, rel=2e-3)
    assert posterior.data_share == pytest.approx(0.0, abs=1e-6)
    assert posterior.mostly_assumption
    assert posterior.probability_shape_below(2.0) == pytest.approx(0.5, abs=1e-3)
    assert posterior.probability_shape_below(1.0) == pytest.approx(0.05, abs=1e-3)


def test_the_shares_of_the_modes_together_give_the_answer_about_the_part_back() -> None:
    shares = (0.5, 0.3, 0.2)
    sharp = [Belief(100.0, 1.0001, 2.0, 2.0, share) for share in shares]
    together = np.prod([weibull_posterior(NONE, belief).reliability(100.0) for belief in sharp])
    assert together == pytest.approx(0.9, abs=1e-4)
    whole = weibull_posterior(NONE, Belief(100.0, 1.0001, 2.0, 2.0)).reliability(100.0) ** 3
    assert whole == pytest.approx(0.73, abs=0.005)


def test_many_failures_lead_to_the_maximum_likelihood_life() -> None:
    data = many_parts(5000)
    posterior, fit = weibull_posterior(data, WIDE), fit_weibull(data)
    assert posterior.b_life_quantile(10, 0.5) == pytest.approx(fit.b_life(10), rel=0.01)
    assert posterior.data_share > 0.99
    assert not posterior.mostly_assumption


def test_a_belief_that_many_data_contradict_is_left_behind() -> None:
    age = 2.0 * np.random.default_rng(2).weibull(6.0, 3000)
    posterior = weibull_posterior(LifeData(age, age), Belief(1e5, 1.5, 0.6, 1.3))
    fit = fit_weibull(LifeData(age, age))
    assert posterior.b_life_quantile(10, 0.5) == pytest.approx(fit.b_life(10), rel=0.05)


def test_interpolated_sums_are_as_good_as_direct_ones() -> None:
    data = many_parts(63)
    split = LifeData(np.tile(data.lower, 10), np.tile(data.upper, 10), count=np.full(630, 0.1))
    few, many = weibull_posterior(data, WIDE), weibull_posterior(split, WIDE)
    assert many.b_life_quantile(10, 0.3) == pytest.approx(few.b_life_quantile(10, 0.3), rel=1e-7)


def test_a_narrow_interval_is_as_good_as_the_exact_age() -> None:
    age = np.array(FAILED)
    narrow = weibull_posterior(LifeData([*(age - 1e-4), *GOOD], [*(age + 1e-4), *[INF] * len(GOOD)]), WIDE)
    exact = weibull_posterior(STORY_6, WIDE)
    assert narrow.b_life_quantile(10, 0.5) == pytest.approx(exact.b_life_quantile(10, 0.5), rel=1e-5)


@pytest.mark.parametrize("factor", [3600.0, 1e-12, 1e15])
def test_a_change_of_unit_scales_the_life_and_changes_nothing_else(factor: float) -> None:
    data = SETS["intervals and late"]
    scaled = LifeData(data.lower * factor, data.upper * factor, data.entry * factor)
    here, there = weibull_posterior(data, WIDE), weibull_posterior(scaled, Belief(100 * factor, 3, 2, 2))
    assert there.b_life_quantile(10, 0.2) == pytest.approx(here.b_life_quantile(10, 0.2) * factor, rel=1e-6)
    assert there.data_share == pytest.approx(here.data_share, abs=1e-8)


@pytest.mark.parametrize("shape", [0.15, 1.0, 50.0])
@pytest.mark.parametrize("age", [1e-6, 1.0, 1e9])
def test_flat_and_steep_shapes_and_huge_ages_stay_finite(shape: float, age: float) -> None:
    data = LifeData([age, 0.7 * age, 0.0], [age, INF, 0.5 * age])
    posterior = weibull_posterior(data, Belief(100.0, 3.0, shape, 2.0))
    assert np.all(np.isfinite(posterior.weight)) and np.all(np.isfinite(posterior.scale))
    assert posterior.weight.sum() == pytest.approx(1.0)
    assert 0 < posterior.b_life_quantile(10, 0.05) <= posterior.b_life_quantile(10, 0.95) < INF


def test_good_parts_lengthen_the_believed_life_and_early_failures_shorten_it() -> None:
    prior = weibull_posterior(NONE, WIDE).b_life_quantile(10, 0.5)
    good = weibull_posterior(LifeData([100] * 8, [INF] * 8), WIDE)
    bad = weibull_posterior(LifeData([20] * 8, [20] * 8), WIDE)
    assert bad.b_life_quantile(10, 0.5) < prior < good.b_life_quantile(10, 0.5)
    assert good.failures == 0.0


def test_reliability_quantiles_rise_with_q_and_hold_the_mean() -> None:
    posterior = weibull_posterior(STORY_6, WIDE)
    ages = [0.0, 60.0, 120.0, 400.0]
    low, middle, high = (posterior.reliability_quantile(ages, q) for q in (0.05, 0.5, 0.95))
    assert low[0] == middle[0] == high[0] == 1.0
    assert np.all((low <= middle) & (middle <= high))
    assert np.all((low[1:] < posterior.reliability(ages)[1:]) & (posterior.reliability(ages)[1:] < high[1:]))
    b10 = posterior.b_life_quantile(10, 0.25)
    assert posterior.reliability_quantile(b10, 0.25) == pytest.approx(0.9, abs=1e-6)


def test_a_belief_that_cannot_be_is_refused_with_every_problem() -> None:
    with pytest.raises(DataError, match=r"t10 is -1[\s\S]*factor is 1.0[\s\S]*share is 0"):
        Belief(-1.0, 1.0, 2.0, 2.0, share=0.0)


def test_ninety_per_cent_intervals_cover_lives_drawn_from_the_belief() -> None:
    rng = np.random.default_rng(20)
    held, runs = 0, 200
    for _ in range(runs):
        t10 = 100 * np.exp(WIDE.log_t10_sd * rng.normal())
        shape = 2 * np.exp(WIDE.log_shape_sd * rng.normal())
        age = np.sort(t10 * (rng.exponential(size=8) / -np.log(0.9)) ** (1 / shape))
        posterior = weibull_posterior(LifeData(np.minimum(age, age[1]), [*age[:2], *[INF] * 6]), WIDE)
        held += posterior.b_life_quantile(10, 0.05) < t10 < posterior.b_life_quantile(10, 0.95)
    assert abs(held / runs - 0.9) < 3 * np.sqrt(0.09 / runs)
