"""Kaplan-Meier: published tables, late entry, bounds."""

from __future__ import annotations

import numpy as np
import pytest

from fleet.errors import DataError
from fleet.fits.kaplan_meier import fit_kaplan_meier
from fleet.lives.life_data import LifeData
from tests.published import agrees, numbers, table

INF = np.inf


def exact_or_good(time: list[float], failed: list[float], entry: list[float] | None = None) -> LifeData:
    return LifeData(time, np.where(np.array(failed) > 0, time, INF), entry=entry)


def test_reproduces_the_twenty_units_of_the_handbook() -> None:
    name = "nist_kaplan_meier_20_units.csv"
    fit = fit_kaplan_meier(exact_or_good(numbers(name, "time_h"), numbers(name, "failed")))
    for letter, time in zip("abcdef", (10, 32, 56, 98, 122, 181), strict=True):
        assert agrees(f"K01{letter}", float(fit.reliability(time)))


def test_reproduces_the_remission_times_and_greenwoods_errors() -> None:
    name = "leukaemia_remission_gehan.csv"
    treated = [group == "six_mp" for group in table(name)["group"]]
    time = [t for t, mine in zip(numbers(name, "time_weeks"), treated, strict=True) if mine]
    failed = [f for f, mine in zip(numbers(name, "failed"), treated, strict=True) if mine]
    fit = fit_kaplan_meier(exact_or_good(time, failed))
    for letter, week in zip("abcdefg", (6, 7, 10, 13, 16, 22, 23), strict=True):
        place = int(np.flatnonzero(fit.time == week)[0])
        assert agrees(f"K02{letter}", float(fit.estimate[place]))
        assert agrees(f"K03{letter}", float(fit.standard_error[place]))


def test_reproduces_the_cohort_that_entered_late() -> None:
    name = "left_truncated_cohort.csv"
    data = exact_or_good(numbers(name, "exit_years"), numbers(name, "event"), numbers(name, "entry_years"))
    fit = fit_kaplan_meier(data)
    assert agrees("T01a", fit.time.size)
    for letter, year in (("b", 0.269), ("c", 0.791), ("d", 4.688)):
        assert agrees(f"T01{letter}", float(fit.at_risk[np.argmin(np.abs(fit.time - year))]))
    assert agrees("T01e", float(fit.reliability(0.791)))
    assert agrees("T01f", float(fit.time[np.argmax(fit.estimate <= 0.5)]))


def test_a_count_is_the_same_as_so_many_rows() -> None:
    counted = fit_kaplan_meier(LifeData([5, 7, 9], [5, INF, 9], count=[2, 3, 1]))
    apart = fit_kaplan_meier(LifeData([5, 5, 7, 7, 7, 9], [5, 5, INF, INF, INF, 9]))
    np.testing.assert_allclose(counted.estimate, apart.estimate)
    np.testing.assert_allclose(counted.standard_error, apart.standard_error)


def test_a_part_entering_at_a_failure_is_not_at_risk_and_a_tied_suspension_is() -> None:
    fit = fit_kaplan_meier(LifeData([5, 9, 5], [5, INF, INF], entry=[0, 5, 0]))
    assert fit.at_risk.tolist() == [2.0]


def test_an_emptied_early_risk_set_is_an_answer_and_no_crash() -> None:
    fit = fit_kaplan_meier(LifeData([1, 5, 8], [1, 5, INF], entry=[0, 2, 2]))
    assert fit.estimate.tolist() == [0.0, 0.0]
    lower, upper = fit.bounds([0.5, 1, 6])
    assert np.all((lower >= 0) & (upper <= 1) & (lower <= upper))


def test_bounds_stay_within_nought_and_one_and_around_the_estimate() -> None:
    rng = np.random.default_rng(4)
    age = rng.weibull(2.0, 30)
    fit = fit_kaplan_meier(LifeData(age, np.where(rng.random(30) < 0.6, age, INF)))
    ages = np.linspace(0, 3, 50)
    lower, upper = fit.bounds(ages)
    assert np.all((lower >= 0) & (upper <= 1))
    assert np.all((lower <= fit.reliability(ages) + 1e-12) & (fit.reliability(ages) <= upper + 1e-12))


def test_without_failures_the_reliability_is_one_and_the_bounds_say_nothing() -> None:
    fit = fit_kaplan_meier(LifeData([5, 7], [INF, INF]))
    assert fit.reliability([0, 6]).tolist() == [1.0, 1.0]
    lower, upper = fit.bounds([6])
    assert (lower[0], upper[0]) == (0.0, 1.0)


def test_intervals_are_refused_in_one_sentence() -> None:
    with pytest.raises(DataError, match="Row 2"):
        fit_kaplan_meier(LifeData([5, 7], [5, 9]))
