"""The whole chain: the invented fleet, its past, and books that hold little or nothing."""

from __future__ import annotations

import json
from contextlib import closing
from datetime import UTC, datetime
from pathlib import Path

import numpy as np
import pytest

from fleet.errors import PlanError
from fleet.forecasts.demand import expected
from fleet.pipeline import Question, ReadOut, look_back, read_out
from fleet.records.fields import Record
from fleet.records.history import History, history_of
from fleet.records.ledger import Failure, Plate, Session
from fleet.records.set_up import BeliefAnswer, Presence, Printer, Settings, Spool, UsagePlan
from fleet.report.documents import lives_document, odds_document, plates_document, spares_document
from fleet.store.book import open_book
from fleet.store.reading import read_history
from tests.books import day, history_with, session, set_up
from tests.demo_book import AS_OF

EARLIER = datetime(2026, 3, 1, 12, tzinfo=UTC)


def said(found: ReadOut) -> str:
    """Everything that is said, as one text."""
    documents = (odds_document, spares_document, plates_document, lives_document)
    return json.dumps([document(found) for document in documents], allow_nan=False)


def failures_in(found: ReadOut) -> float:
    return sum(life.data.failures for life in found.lives.values())


def test_the_demo_fleet_before_its_next_session(demo_read_out: ReadOut) -> None:
    session_now = demo_read_out.next_session
    robots = {robot.code: robot for robot in session_now.robots}
    assert set(robots) == {f"W{n}" for n in range(1, 9)} | {"P1", "P2"}
    held = [robot.code for robot in session_now.robots if robot.held is not None]
    assert held == [robot.code for robot in session_now.robots][: len(held)], "held robots stand first"
    assert "W3" in held
    running = [robot.finishes for robot in session_now.robots if robot.finishes is not None]
    assert len(running) + len(held) == 10
    assert [chance.mean for chance in running] == sorted(chance.mean for chance in running)
    assert all(0 < chance.low <= chance.mean <= chance.high < 1 for chance in running)
    assert session_now.fleet is not None
    product = np.prod([chance.mean for chance in running])
    assert session_now.fleet.mean == pytest.approx(product, rel=0.05), "robots share lives, so not quite the product"


def test_no_robot_is_surer_than_its_weakest_joint(demo_read_out: ReadOut) -> None:
    for robot in demo_read_out.next_session.robots:
        joints = [joint.stops.mean for joint in robot.joints if joint.held is None]
        if robot.finishes is not None:
            assert robot.finishes.mean <= 1 - max(joints)
            assert robot.finishes.mean >= 1 - sum(joints) - 0.01


def test_the_demo_fleets_spares_add_up(demo_read_out: ReadOut) -> None:
    for need in demo_read_out.spares:
        demand = demo_read_out.demands[need.part_type]
        assert need.fitted > 0
        assert need.expected == pytest.approx(expected(demand.until_restocked))
        assert need.short == max(need.needed - need.on_hand - need.on_order, 0)
        assert (need.chance_enough >= 0.9) == (need.short == 0)
        assert [week.week for week in need.weeks] == list(range(1, 9))
        assert need.weeks[-1].low <= need.weeks[-1].expected <= need.weeks[-1].high or need.weeks[-1].expected < 1


def test_parts_that_never_failed_are_mostly_assumption_and_worn_discs_are_not(demo_read_out: ReadOut) -> None:
    by_code = {need.code: need for need in demo_read_out.spares}
    assert by_code["arm housing"].mostly_assumption
    assert by_code["arm housing"].failures_seen < 3
    assert not by_code["disc"].mostly_assumption
    assert by_code["disc"].failures_seen > 30


def test_what_is_printed_is_what_is_short_of_printed_parts(demo_read_out: ReadOut) -> None:
    short = {need.code for need in demo_read_out.spares if need.printed and (need.short or need.short_by_end)}
    assert {need.part for need in demo_read_out.plates.needs} <= short
    printed = {plate.part for plate in demo_read_out.plates.plan.plates}
    assert printed and printed <= short
    assert all(plate.start >= AS_OF for plate in demo_read_out.plates.plan.plates)


def test_the_same_book_gets_the_same_answer(demo_history: History, demo_read_out: ReadOut) -> None:
    assert said(read_out(demo_history, Question())) == said(demo_read_out)


def test_the_past_is_a_smaller_book_that_still_answers(demo_book: Path, demo_read_out: ReadOut) -> None:
    with closing(open_book(demo_book)) as book:
        earlier = read_history(book, EARLIER)
        known = read_history(book, EARLIER, EARLIER)
    now = demo_read_out.history
    assert 0 < len(earlier.of(Session)) < len(now.of(Session))
    assert 0 < len(earlier.of(Failure)) < len(now.of(Failure))
    assert len(known.of(Session)) <= len(earlier.of(Session)), "some of it was entered days late"
    assert len(known.of(Failure)) <= len(earlier.of(Failure))
    then = read_out(known, Question(weeks=2))
    assert 0 < failures_in(then) < failures_in(demo_read_out)
    assert {robot.code for robot in then.next_session.robots} < {r.code for r in demo_read_out.next_session.robots}
    assert said(then)


def test_before_anything_was_entered_there_is_nothing_to_say(demo_book: Path) -> None:
    with closing(open_book(demo_book)) as book:
        for history in (read_history(book, AS_OF, 0), read_history(book, AS_OF, datetime(2020, 1, 1, tzinfo=UTC))):
            found = read_out(history, Question())
            assert found.next_session.robots == ()
            assert found.spares == ()


@pytest.mark.parametrize("records", [(), (Settings(record_id="s", title="New", zone="Europe/Amsterdam"),)])
def test_an_empty_book_answers_everything(records: tuple[Record, ...]) -> None:
    found = read_out(history_of(records, AS_OF), Question())
    assert (found.next_session.robots, found.next_session.fleet) == ((), None)
    assert (found.spares, found.replacements, dict(found.demands)) == ((), (), {})
    assert found.plates.plan.plates == found.plates.plan.shortages == ()
    assert json.loads(said(found))
    assert look_back(found.history, []) == ()


def test_a_fleet_that_never_failed_is_mostly_assumption_throughout() -> None:
    ran = [session(robot, day(n), 3.0, impacts=2) for n in range(1, 30) for robot in ("R1", "R2")]
    found = read_out(history_with(*ran), Question())
    assert found.lives and all(life.mostly_assumption for life in found.lives.values())
    assert found.spares and all(need.mostly_assumption for need in found.spares)
    assert found.replacements and all(entry.mostly_assumption for entry in found.replacements)
    for robot in found.next_session.robots:
        assert robot.mostly_assumption
        assert robot.failures_seen == 0
        assert robot.finishes is not None
        assert robot.finishes.low < robot.finishes.mean < robot.finishes.high, "and its range is told"


def test_robots_that_never_ran_and_hold_nothing_are_no_reason_to_fail() -> None:
    found = read_out(history_of(set_up(), AS_OF), Question())
    assert [robot.finishes for robot in found.next_session.robots] == [None, None]
    assert found.spares == ()
    assert json.loads(said(found))


WORKSHOP: tuple[Record, ...] = (
    Printer(record_id="PR-1", code="PR-1", label="PR-1", nozzle_mm=0.4, change_minutes=10),
    Spool(record_id="SP-1", code="SP-1", material="PA-CF", grams_left=900.0),
    Presence(record_id="Monday", weekday="Monday", start_minute=480, end_minute=1080),
    UsagePlan(record_id="plan-R1", robot="R1", hours_per_week=30.0, session_hours=3.0),
    Plate(
        record_id="PL-1",
        happened_at=day(5),
        code="PL-1",
        printer="PR-1",
        lot="D-1",
        started=10,
        good=9,
        ended_at=day(6),
    ),
)


@pytest.mark.parametrize(
    ("missing", "sentence"),
    [
        (None, None),
        (Printer, "no printer has a nozzle"),
        (Spool, "no spool of PA-CF"),
        (Presence, "nobody is there long enough"),
        ((Printer, Spool, Presence), "no printer has a nozzle"),
    ],
)
def test_what_a_workshop_lacks_is_said_in_a_sentence(
    missing: type[Record] | tuple[type[Record], ...] | None, sentence: str | None
) -> None:
    there = [record for record in WORKSHOP if missing is None or not isinstance(record, missing)]
    ran = [session(robot, day(n), 6.0, impacts=9) for n in range(1, 60) for robot in ("R1", "R2")]
    believed = BeliefAnswer(record_id="poor", part_type="disc", t10=60.0, factor=1.5, valid_from=day(1))
    plan = read_out(history_with(*ran, believed, *there), Question()).plates.plan
    if sentence is None:
        assert plan.plates and not plan.shortages
        return
    assert plan.plates == ()
    assert len(plan.shortages) == 1
    assert sentence in plan.shortages[0]


def test_a_longer_look_ahead_leaves_the_weeks_it_shares_as_they_were() -> None:
    ran = [session(robot, day(n), 3.0, impacts=2) for n in range(1, 30) for robot in ("R1", "R2")]
    short, long = (read_out(history_with(*ran), Question(weeks=weeks)) for weeks in (3, 12))
    for part_type, demand in short.demands.items():
        first = [week.expected for week in demand.weeks]
        again = [week.expected for week in long.demands[part_type].weeks[:3]]
        assert again == pytest.approx(first, abs=0.02)


def test_hours_asked_for_change_the_odds_and_not_the_spares() -> None:
    ran = [session(robot, day(n), 3.0, impacts=2) for n in range(1, 30) for robot in ("R1", "R2")]
    usual, long = (read_out(history_with(*ran), Question(session_hours=hours)) for hours in (None, 30.0))
    assert usual.next_session.fleet is not None and long.next_session.fleet is not None
    assert long.next_session.fleet.mean < usual.next_session.fleet.mean
    assert spares_document(long) == spares_document(usual)


@pytest.mark.parametrize(
    "asked",
    [
        {"session_hours": 0.0},
        {"session_hours": -1.0},
        {"session_hours": 745.0},
        {"session_hours": float("nan")},
        {"weeks": 0},
        {"weeks": 53},
        {"target": 1.0},
        {"target": 1.2},
        {"target": 0.49},
        {"target": float("nan")},
    ],
)
def test_a_question_that_cannot_be_answered_is_refused(asked: dict[str, float]) -> None:
    with pytest.raises(PlanError, match="give from"):
        Question(**asked)  # type: ignore[arg-type]


def test_past_months_are_forecast_with_what_was_known_then(demo_book: Path) -> None:
    start, end = datetime(2026, 10, 1, tzinfo=UTC), datetime(2026, 11, 1, tzinfo=UTC)
    with closing(open_book(demo_book)) as book:
        then, now = read_history(book, start, start), read_history(book, end)
    found = look_back(now, [then])
    assert {(forecast.start, forecast.end) for forecast in found} == {(start, end)}
    seen = sum(forecast.seen for forecast in found)
    told = sum(forecast.expected for forecast in found)
    assert 0.6 * told < seen < 1.6 * told
