"""Odds of the next session: who must not run, in which order robots stand, and a product worked out by hand."""

from __future__ import annotations

from datetime import timedelta

import numpy as np
import pytest
from scipy import stats

from fleet.forecasts.next_session import word_for
from fleet.records.fields import Record
from fleet.records.ledger import Hold, Release
from tests.books import FITTED, day, failure, fitment, history_with, removal, session
from tests.chain import Chain, chain_of, joint_in, robot_in

RAN = [session(robot, day(n), 4.0, impacts=8) for n in range(1, 21) for robot in ("R1", "R2")]
BROKEN = failure("U1 disc", "disc: split", day(25))


def chain_with(*records: Record, hours: float | None = None) -> Chain:
    return chain_of(history_with(*RAN, *records), hours)


def hold(moment_day: int = 22, **on: str) -> Hold:
    return Hold(record_id="hold", happened_at=day(moment_day), why="ticks at low speed", **on)


def release(moment_day: int = 23) -> Release:
    return Release(record_id="release", happened_at=day(moment_day), hold="hold", why="a screw was loose")


@pytest.mark.parametrize(
    ("stops", "word"),
    [(0.0, "settled"), (0.0299, "settled"), (0.03, "wearing"), (0.1, "wearing"), (0.1001, "due"), (1.0, "due")],
)
def test_a_joint_is_settled_under_three_per_cent_and_due_above_ten(stops: float, word: str) -> None:
    assert word_for(stops) == word


def test_a_robot_finishes_if_fewer_parts_fail_in_every_slot_than_stop_it() -> None:
    chain = chain_with(hours=6.0)
    found = chain.session(chain.known(2.5, 300.0))
    part = float(np.exp((80 / 300) ** 2.5 - (86 / 300) ** 2.5))  # discs, pins and bearings ran 80 h each
    pins = float(stats.binom.cdf(1, 13, 1 - part))  # the second pin stops the robot, a bearing never does
    joint = part * pins
    for robot, joints in (("R1", 2), ("R2", 1)):
        finishes = robot_in(found, robot).finishes
        assert finishes is not None
        assert finishes.mean == pytest.approx(joint**joints, rel=1e-9)
    assert joint_in(found, "R2-knee").stops.mean == pytest.approx(1 - joint, rel=1e-9)
    assert found.fleet is not None
    assert found.fleet.mean == pytest.approx(joint**3, rel=1e-9)
    by_slot = {slot.code: slot.stops.mean for slot in joint_in(found, "R2-knee").slots}
    assert by_slot == pytest.approx({"disc": 1 - part, "pins": 1 - pins, "bearing": 0.0}, abs=1e-12)


def test_a_pin_that_failed_already_counts_towards_those_that_stop_the_robot() -> None:
    over = failure("U3 pins", "pin: snapped", day(25), "over its limit", place=4)
    chain = chain_with(over, removal("U3 pins", day(25), "failed", place=4), hours=6.0)
    found = chain.session(chain.known(2.5, 300.0))
    part = float(np.exp((80 / 300) ** 2.5 - (86 / 300) ** 2.5))
    pins = next(slot for slot in joint_in(found, "R2-knee").slots if slot.code == "pins")
    assert pins.running == 12
    assert pins.stops.mean == pytest.approx(1 - part**12, rel=1e-9)


def test_a_held_robot_has_no_odds_and_stands_first() -> None:
    found = chain_with(hold(robot="R2")).session()
    first = found.robots[0]
    assert (first.code, first.finishes) == ("R2", None)
    assert first.held is not None
    assert (first.held.why, first.held.hold) == ("ticks at low speed", "hold")
    other = robot_in(found, "R1")
    assert other.held is None and other.finishes is not None
    assert found.fleet is not None
    assert found.fleet.mean == pytest.approx(other.finishes.mean)


def test_a_held_joint_module_holds_its_robot_and_leaves_the_fleet() -> None:
    found = chain_with(hold(unit="U1")).session()
    assert joint_in(found, "R1-hip").word == "held"
    assert joint_in(found, "R1-knee").word != "held"
    robot = robot_in(found, "R1")
    assert robot.held is not None and robot.held.hold == "hold"
    assert robot.finishes is None
    left = robot_in(found, "R2").finishes
    assert left is not None and found.fleet is not None
    assert found.fleet.mean == pytest.approx(left.mean)


def test_a_failed_part_that_waits_for_replacement_holds_its_joint_and_robot() -> None:
    found = chain_with(BROKEN).session()
    joint, robot = joint_in(found, "R1-hip"), robot_in(found, "R1")
    assert joint.word == "held"
    assert joint.held is not None
    assert joint.held.why == "disc failed 2026-01-30 and is not replaced yet"
    assert (joint.held.record_id, joint.held.hold) == (BROKEN.record_id, None)
    assert robot.held == joint.held
    assert robot.finishes is None


def test_the_replacement_of_a_failed_part_frees_its_robot() -> None:
    spare = [removal("U1 disc", day(25), "failed"), fitment("U1", "disc", day(25), sequence=1, lot="D-2")]
    found = chain_with(BROKEN, *spare).session()
    assert joint_in(found, "R1-hip").held is None
    assert robot_in(found, "R1").finishes is not None


def test_an_empty_place_holds_the_joint_until_it_is_filled() -> None:
    found = chain_with(removal("U1 pins", day(25), "found worn", place=3)).session()
    held = joint_in(found, "R1-hip").held
    assert held is not None
    assert held.why == "pin: 1 of 13 missing"
    assert robot_in(found, "R1").finishes is None


def test_a_release_frees_what_was_held_and_nothing_else() -> None:
    freed = chain_with(hold(robot="R2"), release()).session()
    assert robot_in(freed, "R2").held is None
    assert robot_in(freed, "R2").finishes is not None
    still = chain_with(hold(unit="U1"), release(), BROKEN).session()
    assert robot_in(still, "R1").held is not None, "a failed part waits in there all the same"


def test_no_statistics_release_a_hold() -> None:
    chain = chain_with(hold(unit="U1"))
    found = chain.session(chain.known(1.0, 1e12))
    assert joint_in(found, "R1-hip").word == "held"
    assert robot_in(found, "R1").finishes is None


def test_held_robots_stand_first_then_the_lowest_odds() -> None:
    found = chain_with().session()
    assert [robot.code for robot in found.robots] == ["R1", "R2"], "two joints stop a robot sooner than one"
    fresh = [
        record
        for unit in ("U1", "U2")
        for record in (
            removal(f"{unit} pins", day(24)),
            fitment(unit, "pins", day(24), sequence=1, count=13, lot="P-1"),
            removal(f"{unit} disc", day(24)),
            fitment(unit, "disc", day(24), sequence=1, lot="D-1"),
        )
    ]
    turned = chain_with(*fresh)
    assert [robot.code for robot in turned.session(turned.known(6.0, 120.0)).robots] == ["R2", "R1"]


def test_joints_stand_by_their_chance_of_a_stop_and_held_ones_first() -> None:
    young = [removal("U1 disc", day(24)), fitment("U1", "disc", day(24), sequence=1, lot="D-1")]
    chain = chain_with(*young)
    worn = robot_in(chain.session(chain.known(3.0, 200.0)), "R1")
    assert [joint.code for joint in worn.joints] == ["knee", "hip"]
    held = robot_in(chain_with(*young, hold(unit="U1")).session(), "R1")
    assert [joint.code for joint in held.joints] == ["hip", "knee"]


def test_more_planned_hours_never_raise_the_odds() -> None:
    means = []
    for hours in (0.01, 1.0, 3.0, 10.0, 40.0, 168.0, 744.0):
        finishes = robot_in(chain_with(hours=hours).session(), "R1").finishes
        assert finishes is not None
        assert finishes.low <= finishes.mean <= finishes.high or finishes.high < 1e-3
        means.append(finishes.mean)
    assert means == sorted(means, reverse=True)
    assert means[0] > 0.999


def test_the_same_draws_give_the_same_answer() -> None:
    chain = chain_with()
    first, second = (chain.session(chain.draws(seed=4)) for _ in range(2))
    assert first == second
    assert first != chain.session(chain.draws(seed=5))


def test_without_failures_the_robot_is_mostly_assumption_and_says_how_many_were_seen() -> None:
    robot = robot_in(chain_with().session(), "R1")
    assert robot.mostly_assumption
    assert robot.failures_seen == 0


def test_parts_without_a_known_life_leave_a_robot_without_odds_not_with_certain_ones() -> None:
    chain = chain_with()
    found = chain.session({})
    assert all(robot.finishes is None for robot in found.robots)
    assert found.fleet is None


def test_before_the_first_robot_joined_there_is_nobody() -> None:
    chain = chain_of(history_with(*RAN, as_of=FITTED - timedelta(days=30)))
    found = chain.session()
    assert found.robots == ()
    assert found.fleet is None
