"""The bench is offered the most worn joint first, and the spares that should be used first."""

from __future__ import annotations

import pytest

from dashboard.offers import impact_choices, in_order, joint_offers, planned_of
from fleet.forecasts.planned_use import RobotPlan
from fleet.records.set_up import Robot
from tests.books import history_with

LEFT = {"D-1": 9, "D-2": 3, "D-9": 5, "P-1": 40, "B-1": 0}


def _offers(worn_first: dict[str, list[str]]):  # type: ignore[no-untyped-def]
    history = history_with()
    return joint_offers(history, history.one(Robot, "R1"), LEFT, worn_first)


def test_the_most_worn_joint_and_part_come_first_the_rest_from_the_trunk_outward() -> None:
    assert [joint.code for joint in _offers({})] == ["hip", "knee"]
    offers = _offers({"R1-knee": ["slot-pins", "slot-disc"]})
    assert [joint.code for joint in offers] == ["knee", "hip"]
    assert [part.code for part in offers[0].parts][:2] == ["pins", "disc"]


def test_current_lots_come_before_those_kept_apart_and_superseded_and_empty_ones_are_left_out() -> None:
    (disc,) = [part for part in _offers({})[0].parts if part.code == "disc"]
    assert [lot.code for lot in disc.lots] == ["D-2", "D-9", "D-1"]
    assert disc.lots[1].remark == "revision B, kept apart"
    assert disc.lots[2].remark == "revision A, superseded"
    (bearing,) = [part for part in _offers({})[0].parts if part.code == "bearing"]
    assert bearing.lots == ()


def test_a_part_brings_the_modes_of_its_type_alone() -> None:
    (pins,) = [part for part in _offers({})[0].parts if part.code == "pins"]
    assert pins.count == 13
    assert {mode.code for mode in pins.modes} == {"snapped", "worn flat"}


@pytest.mark.parametrize(("planned", "choices"), [(0, [0, 1, 2, 3, 4]), (4, [0, 1, 2, 3, 4])])
def test_few_impacts_are_counted_one_by_one(planned: int, choices: list[int]) -> None:
    assert impact_choices(planned) == choices


def test_many_impacts_are_offered_round_the_plan() -> None:
    assert impact_choices(16) == [0, 8, 12, 16, 20, 24]
    assert all(planned in impact_choices(planned) for planned in range(60))


def test_a_session_nobody_planned_is_taken_to_the_quarter_of_an_hour() -> None:
    assert planned_of(RobotPlan(1.87, 5, 2, stated=False)).hours == 1.75
    assert planned_of(RobotPlan(0.02, 5, 2, stated=False)).hours == 0.25
    assert planned_of(RobotPlan(1.87, 5, 2, stated=True)).hours == 1.87


def test_codes_are_sorted_as_people_count() -> None:
    assert sorted(["W10", "W2", "P1", "W1"], key=in_order) == ["P1", "W1", "W2", "W10"]
