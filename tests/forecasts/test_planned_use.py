"""What robots are meant to do: as planned, else as they did, in every clock."""

from __future__ import annotations

from datetime import timedelta

import pytest

from fleet.forecasts.planned_use import (
    UNPLANNED_SESSION_HOURS,
    RobotPlan,
    joint_use,
    median_ages,
    robot_plans,
    robots_in_service,
)
from fleet.lives.ages import ages_of
from fleet.records.fields import Record
from fleet.records.history import History
from fleet.records.set_up import Position, Robot, UsagePlan
from tests.books import END, TURNS_PER_HOUR, day, history_with, session, session_use

PLAN = UsagePlan(
    record_id="plan-R1", robot="R1", hours_per_week=12.0, session_hours=3.0, impacts_per_hour=4.0, valid_from=None
)


def use_of(history: History, joint: str, plan: RobotPlan, hours: float) -> dict[str, float]:
    return joint_use(ages_of(history), history.one(Position, joint), plan, hours)


def test_a_stated_plan_is_taken_and_marked_as_stated() -> None:
    plan = robot_plans(history_with(PLAN))["R1"]
    assert plan == RobotPlan(3.0, 12.0, 4.0, stated=True)


def test_without_a_plan_the_robots_own_average_is_taken() -> None:
    history = history_with(
        session("R1", day(1), 1.0, impacts=6), session("R1", day(3), 3.0, impacts=2), as_of=day(0, 8) + timedelta(52)
    )
    plan = robot_plans(history)["R1"]
    assert plan.session_hours == pytest.approx(2.0)
    assert plan.hours_per_week == pytest.approx(4.0 / 8)  # it joined four days before the parts were fitted
    assert plan.impacts_per_hour == pytest.approx(2.0)
    assert not plan.stated


def test_a_robot_that_never_ran_gets_a_usual_session_and_no_weekly_hours() -> None:
    plan = robot_plans(history_with())["R2"]
    assert plan == RobotPlan(UNPLANNED_SESSION_HOURS, 0.0, 0.0, stated=False)


def test_hours_that_were_asked_for_take_the_place_of_the_session_and_of_nothing_else() -> None:
    history = history_with(PLAN)
    asked, planned = robot_plans(history, 7.5), robot_plans(history)
    assert {robot: plan.session_hours for robot, plan in asked.items()} == {"R1": 7.5, "R2": 7.5}
    assert asked["R1"].hours_per_week == planned["R1"].hours_per_week


def test_of_two_plans_the_one_that_came_to_hold_last_is_taken_and_none_before_it_holds() -> None:
    later = UsagePlan(record_id="a-later-plan", robot="R1", hours_per_week=20.0, session_hours=5.0, valid_from=day(100))
    assert robot_plans(history_with(PLAN, later))["R1"].session_hours == 5.0
    assert robot_plans(history_with(PLAN, later, as_of=day(99)))["R1"].session_hours == 3.0


@pytest.mark.parametrize(("left", "there"), [(None, True), (END + timedelta(1), True), (END, False), (day(3), False)])
def test_a_robot_is_in_service_from_when_it_joined_until_it_left(left: object, there: bool) -> None:
    guest: Record = Robot(
        record_id="R9",
        code="R9",
        label="guest",
        in_service_from=day(0),
        in_service_to=left,  # type: ignore[arg-type]
    )
    assert ("R9" in {robot.code for robot in robots_in_service(history_with(guest))}) == there
    assert "R9" not in {robot.code for robot in robots_in_service(history_with(guest, as_of=day(-1)))}


def test_a_joint_that_never_ran_turns_as_its_set_up_says() -> None:
    use = use_of(history_with(PLAN), "R1-hip", RobotPlan(3.0, 12.0, 4.0, stated=True), 6.0)
    assert use == {
        "hours": 6.0,
        "load_hours": 6.0,
        "turns": 6 * TURNS_PER_HOUR,
        "impacts": 24.0,
        "days": pytest.approx(3.5),
    }


def test_a_joint_that_ran_turns_and_loads_as_it_did() -> None:
    ran = session("R1", day(1), 4.0)
    history = history_with(ran, session_use(ran, "R1-hip", load_seconds=3600, turns=10_000))
    use = use_of(history, "R1-hip", RobotPlan(3.0, 12.0, 0.0, stated=True), 2.0)
    assert use["turns"] == pytest.approx(5_000)
    assert use["load_hours"] == pytest.approx(0.5)
    assert use_of(history, "R1-knee", RobotPlan(3.0, 12.0, 0.0, stated=True), 2.0)["turns"] == 2 * TURNS_PER_HOUR


def test_days_pass_at_the_planned_pace_and_at_least_as_fast_as_the_clock() -> None:
    history = history_with()
    assert use_of(history, "R1-hip", RobotPlan(2, 0.0, 0, stated=False), 48.0)["days"] == pytest.approx(2.0)
    assert use_of(history, "R1-hip", RobotPlan(2, 168.0, 0, stated=True), 48.0)["days"] == pytest.approx(2.0)


def test_use_grows_in_proportion_to_the_hours_in_every_clock() -> None:
    ran = session("R1", day(1), 4.0, impacts=9)
    history, plan = history_with(ran), RobotPlan(3.0, 12.0, 4.0, stated=True)
    once, thrice = use_of(history, "R1-hip", plan, 2.0), use_of(history, "R1-hip", plan, 6.0)
    assert thrice == pytest.approx({clock: 3 * use for clock, use in once.items()})


def test_the_middle_age_is_taken_clock_by_clock_over_those_that_know_it() -> None:
    assert median_ages([{"hours": 1.0, "turns": 10.0}, {"hours": 5.0}, {"hours": 30.0, "turns": 30.0}]) == {
        "hours": 5.0,
        "turns": 20.0,
    }
    assert median_ages([]) == {}
