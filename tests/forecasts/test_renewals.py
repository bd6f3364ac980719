"""Renewal function: printed table, closed forms, laws."""

from __future__ import annotations

import numpy as np
import pytest

from fleet.errors import PlanError
from fleet.fits.weibull import WeibullFit
from fleet.forecasts.renewals import renewal_function
from tests.published import agrees, case, numbers

NAME = "renewal_weibull_cv_quarter.csv"


def test_reproduces_the_printed_table() -> None:
    life = WeibullFit(numbers(NAME, "weibull_shape")[0], numbers(NAME, "weibull_scale")[0], 0.0, 1.0)
    values = renewal_function(life, numbers(NAME, "t"))
    for letter, value in zip("abcdefghij", values, strict=True):
        assert agrees(f"N01{letter}", value)
        assert value == pytest.approx(case(f"N01{letter}").recomputed, abs=1e-6)


def test_a_constant_rate_renews_in_proportion_to_time() -> None:
    np.testing.assert_allclose(renewal_function(WeibullFit(1, 10, 0, 1), [0, 5, 100]), [0, 0.5, 10], atol=1e-5)


class Uniform:
    """Life uniform on (0, 1): the renewal function is exp(t) - 1 up to 1."""

    def reliability(self, t: np.ndarray) -> np.ndarray:
        return np.clip(1 - t, 0, 1)


def test_a_uniform_life_has_its_closed_form() -> None:
    times = np.linspace(0, 1, 7)
    np.testing.assert_allclose(renewal_function(Uniform(), times), np.expm1(times), atol=1e-6)


@pytest.mark.parametrize("shape", [0.6, 1.5, 6.0])
def test_in_the_long_run_it_runs_along_its_asymptote(shape: float) -> None:
    from scipy.special import gamma

    mean, square = gamma(1 + 1 / shape), gamma(1 + 2 / shape)
    late = 25 * mean
    expected = late / mean + square / (2 * mean**2) - 1
    assert renewal_function(WeibullFit(shape, 1, 0, 1), late) == pytest.approx(expected, abs=5e-3)


def test_a_steep_and_an_early_failing_life_agree_with_simulation() -> None:
    rng = np.random.default_rng(3)
    for shape in (0.5, 3.0):
        ends = np.cumsum(rng.weibull(shape, (100_000, 60)), axis=1)
        seen = (ends <= 2.0).sum(axis=1)
        error = seen.std() / np.sqrt(seen.size)
        assert abs(float(renewal_function(WeibullFit(shape, 1, 0, 1), 2.0)) - seen.mean()) < 4 * error


def test_a_time_that_cannot_be_is_refused() -> None:
    with pytest.raises(PlanError):
        renewal_function(Uniform(), [-1.0])
    assert renewal_function(Uniform(), 0.0) == 0.0
