"""Demand by part type: the exact distribution for one mode, what waits already, and what is put in next."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np
import pytest

from fleet.fits.weibull import WeibullFit
from fleet.forecasts.demand import demand_distribution, expected, quantile
from fleet.forecasts.life_draws import LifeDraws, fixed_life
from fleet.forecasts.part_demand import REVIEW_DAYS, chance_of_more_than, newest_made, renewed_by
from fleet.lives.part_data import LifeKey
from fleet.records.fields import Record
from fleet.records.set_up import Revision, UsagePlan
from tests.books import day, failure, history_with, removal, session
from tests.chain import Chain, chain_of

RAN = [session(robot, day(n), 5.0) for n in range(1, 21) for robot in ("R1", "R2")]
PLANS = [
    UsagePlan(record_id=f"plan-{robot}", robot=robot, hours_per_week=weekly, session_hours=2.0)
    for robot, weekly in (("R1", 10.0), ("R2", 25.0))
]
NEW, OLD, ODD = LifeKey("disc", "disc-B"), LifeKey("disc", "disc-A"), LifeKey("disc", "disc-B", "D-9")


def chain_with(*records: Record) -> Chain:
    return chain_of(history_with(*RAN, *PLANS, *records))


def largest_gap(first: np.ndarray, second: np.ndarray) -> float:
    size = max(first.size, second.size)
    a, b = (np.cumsum(np.pad(pmf, (0, size - pmf.size))) for pmf in (first, second))
    return float(np.abs(a - b).max())


def test_for_one_mode_it_is_the_demand_of_the_places_at_their_ages_and_planned_use() -> None:
    chain = chain_with()
    demand = chain.demands(4, chain.known(2.5, 150.0))["disc"]
    life = WeibullFit(2.5, 150.0, 0.0, 1.0)
    ages = np.full(3, 100.0)
    for week in (1, 2, 4):
        exact = demand_distribution(life, ages, np.array([10.0, 10.0, 25.0]) * week)
        assert largest_gap(demand.by_week[week - 1], exact) < 1e-3
    # Five days of lead time and a week between looks.
    assert demand.days_until_restocked == 5 + REVIEW_DAYS
    exact = demand_distribution(life, ages, np.array([10.0, 10.0, 25.0]) * 12 / 7)
    assert largest_gap(demand.until_restocked, exact) < 1e-3


def test_weeks_ahead_name_mean_and_range_of_their_row_and_never_fall() -> None:
    demand = chain_with().demands(6)["pin"]
    assert [week.week for week in demand.weeks] == [1, 2, 3, 4, 5, 6]
    for week, row in zip(demand.weeks, demand.by_week, strict=True):
        assert row.sum() == pytest.approx(1.0)
        assert week.expected == pytest.approx(expected(row))
        assert (week.low, week.high) == (quantile(row, 0.1), quantile(row, 0.9))
    assert np.all(np.diff([week.expected for week in demand.weeks]) > 0)
    assert np.all(np.diff(np.cumsum(demand.by_week, axis=1), axis=0) < 1e-9), "more weeks never need less"


def test_until_restocked_lies_between_the_weeks_around_it() -> None:
    demand = chain_with().demands(6)["pin"]
    assert demand.weeks[0].expected < expected(demand.until_restocked) < demand.weeks[1].expected


def test_a_short_look_ahead_still_covers_the_lead_time() -> None:
    one, six = chain_with().demands(1)["pin"], chain_with().demands(6)["pin"]
    assert one.by_week.shape[0] == 1
    assert largest_gap(one.until_restocked, six.until_restocked) < 2e-3


def test_parts_that_wait_shift_the_whole_distribution() -> None:
    broken = [failure("U1 pins", "pin: snapped", day(25), "over its limit", place=place) for place in (2, 5)]
    chain = chain_with(*broken)
    shifted = chain.demands(3, chain.known(2.5, 150.0))["pin"]
    assert (shifted.waiting, shifted.fitted) == (2, 37)
    uses = np.array([10.0] * 24 + [25.0] * 13)
    running = demand_distribution(WeibullFit(2.5, 150.0, 0.0, 1.0), np.full(37, 100.0), uses)
    assert largest_gap(shifted.by_week[0], np.pad(running, (2, 0))) < 1e-3


def test_an_empty_place_waits_as_a_failed_part_does() -> None:
    demand = chain_with(removal("U1 disc", day(25), "failed")).demands(3)["disc"]
    assert (demand.waiting, demand.fitted) == (1, 2)
    assert demand.until_restocked[0] == 0.0


def test_a_part_of_a_superseded_revision_is_renewed_by_the_one_that_is_made_now() -> None:
    chain = chain_with()

    def demand_if(new: LifeDraws) -> np.ndarray:
        lives: Mapping[LifeKey, LifeDraws] = {**chain.known(2.5, 150.0), OLD: fixed_life(9, 101.0), NEW: new}
        return chain.demands(8, lives)["disc"].by_week[-1]

    lasting, as_short = demand_if(fixed_life(9, 1e6)), demand_if(fixed_life(9, 20.0))
    assert lasting[3] == pytest.approx(1.0, abs=1e-3), "each old disc fails once, and its follower lasts"
    assert expected(as_short) > 10


def test_the_follower_is_the_newest_revision_still_made_never_a_lot_kept_apart() -> None:
    chain = chain_with()
    draws = {key: fixed_life(2.0, 100.0) for key in (OLD, NEW, ODD, LifeKey("pin"))}
    assert {key: renewed_by(chain.history, key, draws) for key in draws} == {
        OLD: NEW,
        NEW: NEW,
        ODD: NEW,
        LifeKey("pin"): LifeKey("pin"),
    }


def test_where_nothing_is_known_of_the_follower_its_like_is_taken() -> None:
    chain = chain_with()
    draws = {key: fixed_life(2.0, 100.0) for key in (OLD, ODD)}
    assert renewed_by(chain.history, OLD, draws) == OLD
    assert renewed_by(chain.history, ODD, draws) == NEW


def test_the_newest_revision_is_the_one_that_holds_last_then_the_last_code() -> None:
    beside = Revision(record_id="a", part_type="disc", code="C")
    later = Revision(record_id="b", part_type="disc", code="A2", valid_from=day(3))
    gone = Revision(record_id="c", part_type="disc", code="Z", superseded=True)
    for records, code in (((), "B"), ((beside,), "C"), ((beside, later, gone), "A2")):
        found = newest_made(history_with(*records), "disc")
        assert found is not None and found.code == code
    assert newest_made(history_with(), "pin") is None


def test_planned_use_is_named_as_the_mean_over_the_parts() -> None:
    demand = chain_with().demands(4)["disc"]
    assert demand.use_hours == pytest.approx(4 * (10 + 10 + 25) / 3)


def test_a_part_type_that_is_not_fitted_demands_nothing() -> None:
    out = [removal(f"{unit} bearing", day(25)) for unit in ("U1", "U2", "U3", "U4")]
    plain = chain_with().demands(3, {})["bearing"]
    assert (plain.fitted, plain.waiting) == (0, 0)
    assert plain.by_week.tolist() == [[1.0]] * 3
    assert chain_with(*out).demands(3)["bearing"].waiting == 3


def test_the_chance_of_more_is_the_tail_of_the_distribution() -> None:
    pmf = np.array([0.5, 0.3, 0.2])
    assert [chance_of_more_than(pmf, stock) for stock in (-1, 0, 1, 2, 9)] == pytest.approx([1.0, 0.5, 0.2, 0.0, 0.0])
