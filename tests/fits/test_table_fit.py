"""What one table of lives says without a book: published fits, and an answer however little the table allows."""

from __future__ import annotations

import numpy as np
import pytest

from fleet.fits.table_fit import BeliefAsked, TableFit, fit_table
from fleet.lives.life_data import LifeData
from tests.published import agrees, case, numbers

INF = float("inf")
ASKED = BeliefAsked(t10=100.0, factor=3.0, shape_median=2.0, shape_factor=2.0)
STORY_6 = LifeData(
    [80, 110, 130, 150, 170, *(good := [40, 55, 60, 70, 75, 90, 95, 100, 115, 120, 140, 145, 160, 175, 180])],
    [80, 110, 130, 150, 170, *[INF] * len(good)],
)


def table(name: str) -> LifeData:
    """A published table whose last column says whether a unit failed."""
    time = numbers(name, "time_h")
    failed = numbers(name, "failed")
    return LifeData(time, [t if f else INF for t, f in zip(time, failed, strict=True)])


def fitted(data: LifeData, level: float = 0.95) -> TableFit:
    return fit_table(data, level, None)


def test_the_twenty_units_of_the_nist_handbook() -> None:
    found = fitted(table("nist_weibull_20_units.csv"))
    assert found.weibull is not None and found.bounds is not None and found.steps is not None
    assert agrees("W01a", found.weibull.shape)
    assert agrees("W01b", found.weibull.scale)
    assert agrees("W01c", found.weibull.log_likelihood)
    low, high = found.bounds.shape
    assert low < case("W01a").recomputed < high
    assert found.sentence == "10 failures: these data do not tell wear-out from failures at random."


def test_story_6_good_parts_count() -> None:
    found = fitted(STORY_6)
    assert found.weibull is not None
    assert found.weibull.shape == pytest.approx(4.532, abs=5e-4)
    assert found.weibull.scale == pytest.approx(181.85, abs=5e-3)
    assert found.weibull.b_life(10) == pytest.approx(110.7, abs=0.05)
    assert found.sentence == "5 failures: the parts wear out (shape above 1 within its bounds)."


def test_story_8_no_failures_set_no_life_and_a_belief_gives_one() -> None:
    none = LifeData([100] * 8, [INF] * 8)
    found = fitted(none)
    assert (found.weibull, found.bounds, found.posterior) == (None, None, None)
    assert found.sentence.startswith("No failures: the data alone set no life")
    with_belief = fit_table(none, 0.95, ASKED)
    assert with_belief.posterior is not None
    assert with_belief.posterior.mostly_assumption
    assert with_belief.posterior.b_life_quantile(10, 0.5) > 100.0, "eight good parts of 100 h lengthen the belief"


def test_one_failure_and_failures_at_one_age_are_answers_too() -> None:
    for data in (LifeData([50], [50]), LifeData([50, 50], [50, 50])):
        found = fitted(data)
        assert found.weibull is None
        assert "no finite maximum" in found.sentence
    few = fitted(LifeData([50, 80, 90], [50, 80, INF]))
    assert few.weibull is not None
    assert few.sentence == "Only 2 failures: read the bounds, not the middle."


def test_early_failures_are_named() -> None:
    ages = 100 * np.random.default_rng(5).weibull(0.5, 60)
    assert fitted(LifeData(ages, ages)).sentence.endswith("early failures prevail (shape below 1 within its bounds).")


def test_random_failures_are_not_called_wear() -> None:
    ages = 100 * np.random.default_rng(6).weibull(1.0, 30)
    assert fitted(LifeData(ages, ages)).sentence.endswith("do not tell wear-out from failures at random.")


def test_intervals_have_no_steps_but_a_fit() -> None:
    found = fitted(LifeData([0, 50, 80, 90], [60, 100, 120, INF]))
    assert found.steps is None
    assert found.weibull is not None


def test_a_higher_level_widens_the_bounds_and_moves_no_estimate() -> None:
    narrow, wide = fitted(STORY_6, 0.5), fitted(STORY_6, 0.95)
    assert narrow.weibull is not None and wide.weibull is not None
    assert narrow.bounds is not None and wide.bounds is not None
    assert narrow.weibull.shape == wide.weibull.shape
    assert wide.bounds.shape[0] < narrow.bounds.shape[0] < narrow.bounds.shape[1] < wide.bounds.shape[1]
    low, high = wide.bounds.b_life(10)
    assert low < wide.weibull.b_life(10) < high
