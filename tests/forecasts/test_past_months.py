from __future__ import annotations

from datetime import UTC, datetime

import numpy as np
import pytest
from scipy import stats

from fleet.forecasts.demand import FloatArray, quantile
from fleet.forecasts.past_months import MonthForecast, coverage, verdict

POISSON_TWO = stats.poisson(2).pmf(np.arange(60))


def test_counts_near_their_forecast_read_no_contradiction() -> None:
    """STORIES 17, first series."""
    seen = (2, 1, 3, 2, 2, 0, 4, 1, 2, 3, 2, 2)
    found = verdict([(POISSON_TWO, count) for count in seen])
    assert found.sentence == "No contradiction found."
    assert abs(found.z) < 1


def test_counts_three_times_their_forecast_contest_the_belief() -> None:
    """STORIES 17, second series."""
    seen = (6, 5, 7, 4, 6, 5, 8, 5, 6, 4, 7, 6)
    found = verdict([(POISSON_TWO, count) for count in seen])
    assert found.sentence == "Belief contested: more failures were seen than forecast."
    assert found.z > 3


def test_counts_far_below_their_forecast_say_fewer() -> None:
    many = stats.poisson(9).pmf(np.arange(80))
    assert "fewer" in verdict([(many, 1)] * 12).sentence


def test_no_past_month_is_an_answer() -> None:
    assert verdict([]).forecasts == 0


def test_z_has_mean_nought_and_variance_one_when_the_forecast_is_right() -> None:
    rng = np.random.default_rng(11)
    z = [verdict([(POISSON_TWO, int(count)) for count in rng.poisson(2, 40)]).z for _ in range(1500)]
    assert abs(np.mean(z)) < 4 / np.sqrt(1500)
    assert np.std(z) == pytest.approx(1, abs=0.06)


def test_a_count_beyond_the_distribution_is_no_crash() -> None:
    assert verdict([(np.array([0.5, 0.5]), 7)]).z > 0


def test_coverage_expects_what_the_ranges_hold_themselves() -> None:
    """For small counts a range meant for 8 in 10 holds far more: a plain 80 % would call a right forecast wrong."""
    few = stats.poisson(0.3).pmf(np.arange(20))
    forecasts = [forecast_of(few, seen) for seen in (0, 0, 1, 0, 2, 0, 0, 1, 0, 0)]
    found = coverage(forecasts)
    assert found.inside == 9
    assert found.expected == pytest.approx(10 * few[:2].sum())
    assert found.low <= found.expected <= found.high


def forecast_of(distribution: FloatArray, seen: int) -> MonthForecast:
    start = datetime(2026, 1, 1, tzinfo=UTC)
    low, high = quantile(distribution, 0.1), quantile(distribution, 0.9)
    mass = float(distribution[low : high + 1].sum())
    return MonthForecast(
        start, datetime(2026, 2, 1, tzinfo=UTC), "part", "part", distribution, 0.3, low, high, mass, seen, ()
    )
