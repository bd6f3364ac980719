"""From usage plans and what robots really did to the planned use of each joint, in every clock."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from fleet.lives.ages import Ages
from fleet.lives.meters import USE_CLOCKS
from fleet.records.history import History
from fleet.records.ledger import Session
from fleet.records.set_up import Position, Robot, UsagePlan

UNPLANNED_SESSION_HOURS = 2.0


@dataclass(frozen=True)
class RobotPlan:
    """What a robot is meant to do: hours of the next session, and a week. `stated` is false where nobody planned."""

    session_hours: float
    hours_per_week: float
    impacts_per_hour: float
    stated: bool


def robot_plans(history: History, session_hours: float | None = None) -> dict[str, RobotPlan]:
    """The plan of every robot in service; without one, what it did on average since it joined.

    Parameters
    ----------
    session_hours : float, optional
        Hours of the next session of every robot, in place of each one's own plan. [h]
    """
    stated = {plan.robot: plan for plan in history.of(UsagePlan).values()}
    return {
        robot.record_id: _plan(history, robot, stated.get(robot.record_id), session_hours)
        for robot in robots_in_service(history)
    }


def robots_in_service(history: History) -> list[Robot]:
    """Robots that have joined and not left."""
    now = history.as_of
    return [
        robot
        for robot in history.of(Robot).values()
        if robot.in_service_from <= now and (robot.in_service_to is None or robot.in_service_to > now)
    ]


def unplanned_robots(history: History, plans: Mapping[str, RobotPlan]) -> tuple[str, ...]:
    """A sentence for every robot that has no usage plan: what was taken for it instead."""
    return tuple(
        f"{history.one(Robot, robot).code} has no usage plan: taken as {plan.hours_per_week:.3g} h a week, "
        "as it ran so far; enter one."
        for robot, plan in plans.items()
        if not plan.stated
    )


def _plan(history: History, robot: Robot, stated: UsagePlan | None, session_hours: float | None) -> RobotPlan:
    if stated is not None:
        hours = stated.session_hours if session_hours is None else session_hours
        return RobotPlan(hours, stated.hours_per_week, stated.impacts_per_hour, stated=True)
    sessions = [session for session in history.of(Session).values() if session.robot == robot.record_id]
    hours = sum(session.run_seconds for session in sessions) / 3600
    weeks = max((history.as_of - robot.in_service_from).total_seconds() / (7 * 86_400), 1.0)
    impacts = sum(session.impacts for session in sessions)
    usual = hours / len(sessions) if sessions else UNPLANNED_SESSION_HOURS
    return RobotPlan(
        session_hours=usual if session_hours is None else session_hours,
        hours_per_week=hours / weeks,
        impacts_per_hour=impacts / hours if hours > 0 else 0.0,
        stated=False,
    )


def joint_use(ages: Ages, position: Position, plan: RobotPlan, hours: float) -> dict[str, float]:
    """Planned use of one joint over some running hours of its robot, by clock.

    Load hours and turns follow the joint's own records where it has run, else its `turns_per_hour`.
    """
    meter = ages.meters.of_position[position.record_id]
    total = dict(zip(USE_CLOCKS, meter.total[-1].tolist(), strict=True)) if meter.moment.size else {}
    ran = total.get("hours", 0.0)
    return {
        "hours": hours,
        "load_hours": hours * (total["load_hours"] / ran if ran > 0 else 1.0),
        "turns": hours * (total["turns"] / ran if ran > 0 else position.turns_per_hour),
        "impacts": hours * plan.impacts_per_hour,
        "days": hours * 7 / plan.hours_per_week if plan.hours_per_week > 0 else hours / 24,
    }


def median_ages(ages: list[Mapping[str, float]]) -> dict[str, float]:
    """The middle age of some parts, by clock."""
    clocks = {clock for age in ages for clock in age}
    return {clock: float(np.median([age[clock] for age in ages if clock in age])) for clock in clocks}
