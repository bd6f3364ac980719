"""Weibull maximum likelihood: published fits, users' stories, laws, and a second library beside it."""

from __future__ import annotations

import warnings

import numpy as np
import pytest

from fleet.errors import DataError, FitError
from fleet.fits.weibull import (
    bootstrap_fits,
    fit_weibull,
    profile_bounds,
    weibull_log_likelihood,
    zero_failure_limits,
)
from fleet.fits.weibull_intervals import fit_interval_rows
from fleet.lives.life_data import LifeData
from tests.published import agrees, case, numbers

INF = np.inf
FAILED = [80.0, 110.0, 130.0, 150.0, 170.0]
GOOD = [40.0, 55, 60, 70, 75, 90, 95, 100, 115, 120, 140, 145, 160, 175, 180]
STORY_6 = LifeData(FAILED + GOOD, FAILED + [INF] * len(GOOD))


def published(name: str, age: str, failed: str, count: str | None = None, entry: str | None = None) -> LifeData:
    time = numbers(name, age)
    upper = np.where(np.array(numbers(name, failed)) > 0, time, INF)
    counts = None if count is None else numbers(name, count)
    return LifeData(time, upper, None if entry is None else numbers(name, entry), counts)


def mixed_rows(seed: int, n: int = 60) -> LifeData:
    """Exact, suspended, interval and found-failed rows, some entered late."""
    rng = np.random.default_rng(seed)
    entry = np.where(rng.random(n) < 0.4, rng.uniform(0, 120, n), 0.0)
    age = 250.0 * ((entry / 250.0) ** 2.2 + rng.exponential(size=n)) ** (1 / 2.2)
    lower, upper = age.copy(), age.copy()
    kind = rng.integers(0, 4, n)
    lower[kind == 1] = np.maximum(entry, 0.7 * age)[kind == 1]
    upper[kind == 1] = INF
    lower[kind == 2], upper[kind == 2] = np.floor(age[kind == 2] / 30) * 30, np.floor(age[kind == 2] / 30) * 30 + 30
    found = (kind == 3) & (entry == 0)
    lower[found], upper[found] = 0.0, 1.3 * age[found]
    return LifeData(np.maximum(lower, entry), upper, entry, rng.integers(1, 3, n))


def test_reproduces_the_twenty_units_of_the_handbook() -> None:
    fit = fit_weibull(published("nist_weibull_20_units.csv", "time_h", "failed"))
    assert agrees("W01a", fit.shape)
    assert agrees("W01b", fit.scale)
    assert agrees("W01c", fit.log_likelihood)


def test_reproduces_the_ball_bearings() -> None:
    fit = fit_weibull(published("ball_bearing_endurance.csv", "million_revolutions", "failed"))
    assert agrees("W02a", fit.shape)
    assert agrees("W02b", fit.scale)


def test_reproduces_the_shock_absorbers_and_their_profile_interval() -> None:
    data = published("shock_absorber.csv", "distance_km", "failed")
    fit, bounds = fit_weibull(data), profile_bounds(data)
    assert agrees("W03a", np.log(fit.scale))
    assert agrees("W03b", 1 / fit.shape)
    assert agrees("W03i", np.log(bounds.scale[0]))
    assert agrees("W03j", np.log(bounds.scale[1]))


def test_reproduces_the_bearing_cages() -> None:
    data = published("bearing_cage.csv", "hours", "failed", count="count")
    fit = fit_weibull(data)
    assert agrees("W04c", data.n)
    assert agrees("W04a", fit.shape)
    assert agrees("W04b", fit.scale)
    assert fit.b_life(10) == pytest.approx(case("W04d").recomputed, abs=0.05)


def test_reproduces_the_generator_fans() -> None:
    fit = fit_weibull(published("diesel_generator_fan.csv", "hours", "failed"))
    assert agrees("W05a", fit.shape)
    assert agrees("W05b", fit.scale)


def test_agrees_with_two_libraries_on_the_cohort_that_entered_late() -> None:
    data = published("left_truncated_cohort.csv", "exit_years", "event", entry="entry_years")
    fit = fit_weibull(data)
    assert fit.shape == pytest.approx(case("T01g").recomputed, rel=1e-5)
    assert fit.scale == pytest.approx(case("T01h").recomputed, rel=1e-5)


def test_story_4_found_worn_between_two_checks() -> None:
    assert np.exp(weibull_log_likelihood(LifeData([80], [120]), 2.5, 200)) == pytest.approx(0.1471, abs=5e-5)


def test_story_5_parts_that_came_with_sixty_hours() -> None:
    failed = weibull_log_likelihood(LifeData([130], [130], entry=[60]), 2.5, 200)
    good = weibull_log_likelihood(LifeData([90], [INF], entry=[60]), 2.5, 200)
    assert np.exp(failed) == pytest.approx(0.004895, abs=5e-7)
    assert np.exp(good) == pytest.approx(0.9171, abs=5e-5)


def test_story_6_good_parts_count() -> None:
    fit = fit_weibull(STORY_6)
    assert fit.shape == pytest.approx(4.532, abs=5e-4)
    assert fit.scale == pytest.approx(181.85, abs=5e-3)
    assert fit.b_life(10) == pytest.approx(110.7, abs=0.05)
    wrong = fit_weibull(LifeData(FAILED + GOOD, FAILED + GOOD))
    assert wrong.shape == pytest.approx(3.063, abs=5e-4)
    assert wrong.scale == pytest.approx(126.8, abs=0.05)
    dropped = fit_weibull(LifeData(FAILED, FAILED))
    assert dropped.shape == pytest.approx(4.824, abs=5e-4)
    assert dropped.b_life(10) == pytest.approx(87.9, abs=0.05)


def test_story_8_no_failures_yet() -> None:
    limits = zero_failure_limits([100.0] * 8, 2.5, 0.95)
    assert limits.scale == pytest.approx(148.1, abs=0.05)
    assert limits.b_life(10) == pytest.approx(60.2, abs=0.05)
    assert np.isfinite(zero_failure_limits([100.0] * 8, 40.0, 0.999999).scale)


def test_limits_without_any_exposure_are_refused() -> None:
    with pytest.raises(DataError, match="nothing bounds a life"):
        zero_failure_limits([0.0], 2.0)


@pytest.mark.parametrize("seed", range(4))
def test_agrees_with_lifelines_on_suspended_and_late_rows(seed: int) -> None:
    from lifelines import WeibullFitter

    rng = np.random.default_rng(seed)
    n = int(rng.integers(15, 300))
    entry = np.where(rng.random(n) < 0.5 * (seed % 2), rng.uniform(0, 100, n), 0.0)
    age = 300 * ((entry / 300) ** 1.8 + rng.exponential(size=n)) ** (1 / 1.8)
    end = np.maximum(entry + 1.0, 280.0)
    failed = age < end
    age = np.minimum(age, end)
    with warnings.catch_warnings():
        warnings.simplefilter("ignore")
        other = WeibullFitter().fit(age, failed, entry=entry)
    fit = fit_weibull(LifeData(age, np.where(failed, age, INF), entry))
    assert fit.shape == pytest.approx(other.rho_, rel=1e-4)
    assert fit.scale == pytest.approx(other.lambda_, rel=1e-4)
    assert fit.log_likelihood == pytest.approx(other.log_likelihood_, abs=1e-5)


def test_agrees_with_lifelines_on_intervals() -> None:
    from lifelines import WeibullFitter

    rng = np.random.default_rng(11)
    age = 200 * rng.weibull(2.0, 80)
    lower = np.floor(age / 40) * 40
    upper = np.where(lower >= 240, INF, lower + 40)
    lower = np.minimum(lower, 240.0)
    with warnings.catch_warnings():
        warnings.simplefilter("ignore")
        other = WeibullFitter().fit_interval_censoring(lower, upper)
    fit = fit_weibull(LifeData(lower, upper))
    assert fit.shape == pytest.approx(other.rho_, rel=1e-4)
    assert fit.scale == pytest.approx(other.lambda_, rel=1e-4)


@pytest.mark.parametrize("seed", range(5))
def test_no_step_away_from_the_fit_raises_the_likelihood_whatever_the_rows(seed: int) -> None:
    data = mixed_rows(seed)
    fit = fit_weibull(data)
    assert fit.log_likelihood == pytest.approx(weibull_log_likelihood(data, fit.shape, fit.scale), abs=1e-8)
    for shape, scale in ((1.001, 1), (0.999, 1), (1, 1.001), (1, 0.999), (1.001, 1.001)):
        assert weibull_log_likelihood(data, fit.shape * shape, fit.scale * scale) < fit.log_likelihood


def test_the_one_dimensional_and_the_two_dimensional_way_agree() -> None:
    fit = fit_weibull(STORY_6)
    shape, log_scale = fit_interval_rows(STORY_6)
    assert shape == pytest.approx(fit.shape, rel=1e-8)
    assert np.exp(log_scale) == pytest.approx(fit.scale, rel=1e-8)


@pytest.mark.parametrize("factor", [2.0, 1e-9, 1e12])
def test_scaling_every_age_scales_the_scale_and_keeps_the_shape(factor: float) -> None:
    data = mixed_rows(3)
    scaled = LifeData(data.lower * factor, data.upper * factor, data.entry * factor, data.count)
    fit, other = fit_weibull(data), fit_weibull(scaled)
    assert other.shape == pytest.approx(fit.shape, rel=1e-7)
    assert other.scale == pytest.approx(fit.scale * factor, rel=1e-7)


def test_a_narrow_interval_is_as_good_as_the_exact_age() -> None:
    age = np.array(FAILED)
    narrow = fit_weibull(LifeData([*(age - 1e-5), *GOOD], [*(age + 1e-5), *[INF] * len(GOOD)]))
    assert narrow.shape == pytest.approx(fit_weibull(STORY_6).shape, rel=1e-6)


def test_a_count_is_the_same_as_so_many_rows() -> None:
    counted = fit_weibull(LifeData([50, 90, 100], [50, 90, INF], count=[2, 1, 4]))
    apart = fit_weibull(LifeData([50, 50, 90, 100, 100, 100, 100], [50, 50, 90, INF, INF, INF, INF]))
    assert counted.shape == pytest.approx(apart.shape, rel=1e-10)
    assert counted.log_likelihood == pytest.approx(apart.log_likelihood, rel=1e-10)


@pytest.mark.parametrize(
    "data",
    [
        LifeData([], []),
        LifeData([5, 8], [INF, INF]),
        LifeData([10, 10, 5], [10, 10, INF]),
        LifeData([10, 8, 5], [12, 11, INF]),
        LifeData([0, 100], [50, INF]),
        LifeData([5], [5], entry=[4]),
    ],
)
def test_without_a_finite_maximum_it_says_so(data: LifeData) -> None:
    with pytest.raises(FitError, match="no finite maximum"):
        fit_weibull(data)


def test_very_steep_and_very_flat_lives_are_fitted() -> None:
    rng = np.random.default_rng(9)
    for shape in (0.15, 50.0, 400.0):
        age = 1e4 * rng.weibull(shape, 400)
        assert fit_weibull(LifeData(age, age)).shape == pytest.approx(shape, rel=0.15)


def test_profile_bounds_lie_where_the_likelihood_has_fallen_by_the_chi_square_quantile() -> None:
    bounds, fit = profile_bounds(STORY_6, 0.90), fit_weibull(STORY_6)
    for shape in bounds.shape:
        x = np.log(np.array(FAILED + GOOD))
        scale = np.exp(np.log(np.exp(shape * x).sum() / 5) / shape)
        drop = fit.log_likelihood - weibull_log_likelihood(STORY_6, shape, float(scale))
        assert 2 * drop == pytest.approx(2.70554, abs=1e-4)


@pytest.mark.parametrize("seed", range(3))
def test_profile_bounds_hold_the_estimate_and_widen_with_the_level(seed: int) -> None:
    data = mixed_rows(seed, 25)
    fit, narrow, wide = fit_weibull(data), profile_bounds(data, 0.5), profile_bounds(data, 0.95)
    for pick, value in (("shape", fit.shape), ("scale", fit.scale)):
        inner, outer = getattr(narrow, pick), getattr(wide, pick)
        assert 0 < outer[0] < inner[0] < value < inner[1] < outer[1]
    b10 = wide.b_life(10)
    assert 0 < b10[0] < fit.b_life(10) < b10[1]


def test_profile_bounds_from_one_failure_stay_above_nought() -> None:
    bounds = profile_bounds(LifeData([50, 60, 70], [50, INF, INF]))
    for low, high in (bounds.shape, bounds.scale, bounds.b_life(10)):
        assert 0 < low < high


def test_a_bootstrap_refit_is_the_fit_of_the_resampled_rows() -> None:
    data = LifeData(STORY_6.lower, STORY_6.upper, entry=np.where(np.arange(20) % 3 == 0, 30.0, 0.0))
    fits = bootstrap_fits(data, 30, np.random.default_rng(5))
    times = np.random.default_rng(5).multinomial(20, np.full(20, 1 / 20), size=30)
    for row in range(30):
        kept = times[row] > 0
        resampled = LifeData(data.lower[kept], data.upper[kept], data.entry[kept], times[row][kept])
        try:
            expected = fit_weibull(resampled)
        except FitError:
            assert np.isnan(fits.shape[row])
            continue
        assert fits.shape[row] == pytest.approx(expected.shape, rel=1e-8)
        assert fits.scale[row] == pytest.approx(expected.scale, rel=1e-8)
