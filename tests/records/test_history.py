"""A History: in order of time, as of a moment, frozen; and what people's codes mean in it."""

from __future__ import annotations

import pytest

from fleet.errors import RecordError
from fleet.records.history import history_of
from fleet.records.ledger import Fitment, Session
from fleet.records.lookup import find_lot, find_mode, find_part_type, find_position, find_robot, find_slot
from fleet.records.set_up import BeliefAnswer, Position, Robot, UsagePlan
from tests.books import END, day, history_with, session, set_up


def test_ledger_records_come_in_order_of_time_and_then_of_their_sequence() -> None:
    late, early = session("R1", day(5), 1.0), session("R1", day(2), 1.0)
    second, first = session("R2", day(3), 1.0, sequence=1), session("R2", day(3), 1.0, sequence=0)
    found = history_with(late, second, early, first).of(Session)
    assert list(found) == [early.record_id, first.record_id, second.record_id, late.record_id]


def test_what_happens_after_the_moment_is_left_out_and_set_up_is_kept() -> None:
    then = history_with(session("R1", day(5), 1.0), as_of=day(4))
    assert len(then.of(Session)) == 0
    assert len(then.of(Robot)) == 2
    assert len(history_with(as_of=day(-1)).of(Fitment)) == 0


def test_a_plan_or_belief_that_holds_only_later_is_left_out_but_a_robot_is_not() -> None:
    robot = Robot(record_id="R9", code="R9", label="Robot 9", in_service_from=day(0), valid_from=day(5))
    plan = UsagePlan(record_id="plan", robot="R9", hours_per_week=9, session_hours=2, valid_from=day(5))
    belief = BeliefAnswer(record_id="later", part_type="disc", t10=50, factor=2, valid_from=day(5))
    before, after = history_with(robot, plan, belief, as_of=day(4)), history_with(robot, plan, belief, as_of=day(5))
    assert (set(before.of(UsagePlan)), set(before.of(BeliefAnswer))) == (set(), {"belief-disc"})
    assert set(after.of(UsagePlan)) == {"plan"}
    assert "R9" in before.of(Robot)


def test_of_several_beliefs_the_one_that_came_to_hold_last_comes_last() -> None:
    new, old = (
        BeliefAnswer(record_id=f"day {n}", part_type="disc", t10=n, factor=2, valid_from=day(n)) for n in (9, 3)
    )
    assert list(history_with(new, old).of(BeliefAnswer)) == ["belief-disc", "day 3", "day 9"]


def test_a_history_cannot_be_changed() -> None:
    with pytest.raises(TypeError):
        history_with().rows[Session] = {}  # type: ignore[index]
    with pytest.raises(TypeError):
        history_with().of(Robot)["R9"] = None  # type: ignore[index]


def test_a_record_added_again_takes_the_place_of_the_one_with_its_id() -> None:
    ran = session("R1", day(5), 1.0)
    longer = session("R1", day(5), 3.0, record_id=ran.record_id)
    before = history_with(ran)
    after = before.with_records([longer])
    assert after.one(Session, ran.record_id).run_seconds == 3 * 3600
    assert before.one(Session, ran.record_id).run_seconds == 3600


def test_a_record_put_off_until_later_is_gone_from_the_history() -> None:
    ran = session("R1", day(5), 1.0)
    put_off = history_with(ran, as_of=day(6)).with_records([session("R1", day(9), 1.0, record_id=ran.record_id)])
    assert len(put_off.of(Session)) == 0
    assert len(put_off.of(Robot)) == 2


def test_records_added_later_stand_in_the_same_order_as_records_read_at_once() -> None:
    late, early = session("R1", day(5), 1.0), session("R1", day(2), 1.0)
    stepwise = history_with(late).with_records([early, session("R2", day(3), 1.0, record_id="between")])
    assert list(stepwise.of(Session)) == [early.record_id, "between", late.record_id]
    assert stepwise.rows.keys() == history_with(late).rows.keys()


def test_an_empty_book_lives_in_utc_until_it_says_otherwise() -> None:
    assert str(history_of([], END).zone) == "UTC"
    assert str(history_with().zone) == "Europe/Amsterdam"


# Codes


def test_codes_lead_to_records() -> None:
    history = history_with()
    robot = find_robot(history, "R1")
    knee = find_position(history, robot, "knee")
    assert knee.record_id == "R1-knee"
    assert find_slot(history, knee, "pins").record_id == "slot-pins"
    assert find_slot(history, knee, "pin").record_id == "slot-pins"
    assert find_mode(history, "pin", "snapped").record_id == "pin: snapped"
    assert find_lot(history, "disc", "D-2").record_id == "D-2"


def test_an_unknown_code_is_answered_with_the_nearest_one_or_with_all() -> None:
    history = history_with()
    with pytest.raises(RecordError, match="There is no part type 'bering'; did you mean bearing"):
        find_part_type(history, "bering")
    with pytest.raises(RecordError, match=r"There is no robot 'walker'; there are: R1, R2\."):
        find_robot(history, "walker")
    with pytest.raises(RecordError, match="there is none yet"):
        find_robot(history_of([], END), "R1")


def test_a_code_is_looked_for_within_its_robot_only() -> None:
    history = history_with()
    with pytest.raises(RecordError, match="There is no joint on R2 'hip'"):
        find_position(history, find_robot(history, "R2"), "hip")


def test_of_many_codes_a_dozen_are_named() -> None:
    knee = next(record for record in set_up() if isinstance(record, Position))
    many = [Robot(record_id=f"A{n}", code=f"A{n:02d}", label="x", in_service_from=day(0)) for n in range(20)]
    with pytest.raises(RecordError, match=r"there are: A00, A01.*A11, \.\.\."):
        find_robot(history_of([knee, *many], END), "qq")
