"""Spare stock: a textbook problem, a user's story, laws."""

from __future__ import annotations

import numpy as np
import pytest

from fleet.errors import PlanError
from fleet.forecasts.demand import constant_rate_demand, expected, poisson_demand
from fleet.plans.spares import stock_for
from tests.published import agrees, numbers

NAME = "spares_thirty_parts.csv"


def test_reproduces_the_thirty_parts() -> None:
    columns = ("parts_installed", "failures_per_hour", "hours_per_day", "days_between_orders", "required_probability")
    parts, rate, hours, days, target = (numbers(NAME, column)[0] for column in columns)
    demand = poisson_demand(parts * rate * hours * days)
    assert agrees("S01a", expected(demand))
    assert agrees("S01b", stock_for(demand, target))


def test_story_13_spares_from_few_data() -> None:
    assert stock_for(poisson_demand(4 / 600 * 200), 0.95) == 3
    demand = constant_rate_demand(4, 600, 200)
    assert 1 - demand[:4].sum() == pytest.approx(0.091, abs=5e-4)
    assert stock_for(demand, 0.95) == 4


def test_the_stock_meets_its_target_and_one_less_does_not() -> None:
    demand = poisson_demand(3.7)
    for target in (0.5, 0.9, 0.99, 0.9999):
        stock = stock_for(demand, target)
        assert demand[: stock + 1].sum() >= target > demand[:stock].sum()


@pytest.mark.parametrize("target", [0.0, 1.0, -0.1, float("nan")])
def test_a_target_that_cannot_be_is_refused(target: float) -> None:
    with pytest.raises(PlanError, match="target"):
        stock_for(poisson_demand(1.0), target)


def test_figures_that_are_no_distribution_are_refused() -> None:
    with pytest.raises(PlanError, match="not a distribution"):
        stock_for(np.array([0.5, 0.2]), 0.9)
