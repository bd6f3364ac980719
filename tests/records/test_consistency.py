"""What contradicts what: one sentence for each problem, about the right record, and all of them together."""

from __future__ import annotations

import dataclasses
from datetime import timedelta

import pytest

from fleet.records.consistency import Problem, problems_in
from fleet.records.fields import Record
from fleet.records.history import history_of
from fleet.records.ledger import Hold, Release, StockMove
from fleet.records.set_up import Lot, PartMode, Position, Robot, Settings, Unit
from tests.books import (
    END,
    day,
    failure,
    first_fitting,
    fitment,
    history_with,
    new_id,
    part_mode,
    part_type,
    placement,
    removal,
    session,
    session_use,
    set_up,
)


def problems(*records: Record) -> list[Problem]:
    return problems_in(history_with(*records))


def only(*records: Record) -> Problem:
    found = problems(*records)
    assert len(found) == 1, found
    return found[0]


def test_the_tiny_fleet_is_sound() -> None:
    assert problems() == []


# Sessions


def test_of_two_sessions_that_overlap_the_sentence_names_both() -> None:
    early, late = session("R1", day(1, 10), 2.0), session("R1", day(1, 11), 2.0)
    for records in ((early, late), (late, early)):
        found = only(*records)
        assert found.record_id == late.record_id
        assert "R1 from 2026-01-06 11:00 to 2026-01-06 13:00" in found.sentence
        assert "overlaps the one from 2026-01-06 10:00 to 2026-01-06 12:00" in found.sentence


def test_a_long_session_is_held_against_all_that_lie_within_it() -> None:
    long, first, second = session("R1", day(1, 8), 8.0), session("R1", day(1, 9), 1.0), session("R1", day(1, 12), 1.0)
    assert {found.record_id for found in problems(long, first, second)} == {first.record_id, second.record_id}


def test_sessions_may_touch_and_two_robots_may_run_at_once() -> None:
    assert (
        problems(session("R1", day(1, 10), 2.0), session("R1", day(1, 12), 1.0), session("R2", day(1, 11), 2.0)) == []
    )


def test_a_robot_runs_only_while_it_is_in_service() -> None:
    early = session("R1", day(-10), 1.0)
    assert "joined only on 2026-01-01" in only(early).sentence
    left = Robot(record_id="R3", code="R3", label="Robot 3", in_service_from=day(-3), in_service_to=day(5))
    assert "R3 left on" in only(left, session("R3", day(6), 1.0)).sentence


def test_what_a_joint_did_belongs_to_its_robot_once_and_within_its_hours() -> None:
    ran = session("R1", day(1), 2.0)
    assert "not on the robot of that session" in only(ran, session_use(ran, "R2-knee", turns=5)).sentence
    twice = only(ran, session_use(ran, "R1-knee", turns=5), session_use(ran, "R1-knee", turns=6))
    assert "has its figures for that session already" in twice.sentence
    assert "cannot have run longer than its robot" in only(ran, session_use(ran, "R1-knee", run_seconds=7300)).sentence


# Parts and places


def test_a_place_that_still_holds_a_part_takes_no_other() -> None:
    new = fitment("U1", "disc", day(3), lot="D-2")
    found = only(new)
    assert found.record_id == new.record_id
    assert found.sentence.startswith("disc of module U1 still held a part fitted 2026-01-05 08:00")
    assert problems(removal("U1 disc", day(3)), new) == []


def test_in_a_set_the_place_that_is_taken_is_named() -> None:
    found = only(fitment("U1", "pins", day(3), first_place=5))
    assert "pins place 5 of module U1 still held a part" in found.sentence


def test_a_part_that_was_taken_out_too_late_for_the_next_one_is_found() -> None:
    assert "still held a part" in only(removal("U1 disc", day(4)), fitment("U1", "disc", day(3), lot="D-2")).sentence


def test_more_parts_than_places_are_refused() -> None:
    found = problems(removal("U1 pins", day(3)), fitment("U1", "pins", day(3), first_place=2, count=13))
    assert [problem.sentence for problem in found] == ["slot pins has 13 places; check first_place and count."]


def test_a_part_is_taken_out_once_and_after_it_was_fitted() -> None:
    again = removal("U1 disc", day(4))
    found = only(removal("U1 disc", day(3)), again)
    assert (found.record_id, found.sentence) == (
        again.record_id,
        "that part was taken out already; leave this row out.",
    )
    assert "the part was fitted only on 2026-01-05" in only(removal("U1 disc", day(-1))).sentence
    assert "place 14 is not one of that fitting's places" in only(removal("U1 pins", day(3), place=14)).sentence


def test_single_pins_and_then_the_rest_of_the_set_may_be_taken_out() -> None:
    assert problems(removal("U1 pins", day(3), place=4), removal("U1 pins", day(4))) == []
    assert "taken out already" in only(removal("U1 pins", day(3)), removal("U1 pins", day(4), place=4)).sentence


def test_a_slot_takes_parts_of_its_type_only() -> None:
    out = removal("U1 disc", day(3))
    assert "lot P-1 holds pin, but slot disc takes disc" in only(out, fitment("U1", "disc", day(3), lot="P-1")).sentence
    said = only(removal("U1 pins", day(3)), fitment("U1", "pins", day(3), count=13, revision="disc-A")).sentence
    assert said == "that revision is not one of pin."


def test_a_module_has_the_slots_of_its_design_and_sits_where_it_fits() -> None:
    arm = dataclasses.replace(set_up()[1], record_id="arm", code="arm")
    odd = Unit(record_id="A1", code="A1", unit_design="arm")
    found = problems(arm, odd, fitment("A1", "disc", day(1)), placement("A1", "R1-hip", day(1)))
    assert [problem.sentence for problem in found] == [
        "module A1 is of another design than hip takes.",
        "module A1 has no slot disc.",
    ]


def test_a_moved_part_was_taken_out_before_and_stays_what_it_is() -> None:
    free = removal("U1 disc", day(3))
    early = fitment("U1", "disc", day(3), comes_from="U2 disc")
    assert "log its removal first" in only(free, early).sentence
    assert problems(free, removal("U2 disc", day(2), "moved"), early) == []
    pin = removal("U2 pins", day(2), "moved", place=1)
    found = only(free, pin, fitment("U1", "disc", day(3), comes_from="U2 pins"))
    assert found.sentence == "the part it comes from is of another type."


# Failures


def test_a_part_does_not_fail_before_it_was_fitted() -> None:
    found = only(failure("U1 disc", "disc: worn", day(-1)))
    assert found.sentence.startswith("it failed 2026-01-04 10:00, before it was fitted 2026-01-05 08:00")


def test_a_part_does_not_fail_after_it_was_taken_out() -> None:
    assert "it was taken out" in only(removal("U1 disc", day(3)), failure("U1 disc", "disc: worn", day(4))).sentence


def test_a_failure_known_to_a_day_may_start_before_the_fitting_of_that_day() -> None:
    vague = failure("U1 disc", "disc: worn", day(0, 0), happened_until=day(1, 0))
    assert problems(vague) == []


def test_a_mode_of_another_part_type_is_refused() -> None:
    assert only(failure("U1 disc", "pin: snapped", day(3))).sentence == "that mode is not one of this part type."


def test_a_part_fails_once_and_in_a_set_its_place_is_said() -> None:
    first, second = failure("U1 disc", "disc: worn", day(3)), failure("U1 disc", "disc: split", day(4))
    assert only(first, second).record_id == second.record_id
    assert "13 parts sit there; say which place failed" in only(failure("U1 pins", "pin: snapped", day(3))).sentence
    assert "place 14 is not one" in only(failure("U1 pins", "pin: snapped", day(3), place=14)).sentence
    two = (failure("U1 pins", "pin: snapped", day(3), place=1), failure("U1 pins", "pin: snapped", day(3), place=2))
    assert problems(*two) == []


def test_a_hold_is_lifted_once() -> None:
    hold = Hold(record_id="hold", happened_at=day(1), robot="R1", why="cracked")
    lifted = [Release(record_id=new_id("release"), happened_at=day(n), hold="hold", why="mended") for n in (2, 3)]
    assert "that hold was lifted already" in only(hold, *lifted).sentence


# Set-up


def test_shares_of_the_modes_of_a_part_type_sum_to_one() -> None:
    extra = part_mode("disc", "creep", "creep", "days", 0.2)
    assert only(extra).sentence == "the shares of the modes of disc sum to 1.2, not to 1."
    assert problems(dataclasses.replace(extra, share=0.004)) == []


@pytest.mark.parametrize(
    "again",
    [
        Robot(record_id="again", code="R1", label="Robot 1 again", in_service_from=day(0)),
        Unit(record_id="again", code="U1", unit_design="joint"),
        Lot(record_id="again", code="D-1", part_type="disc"),
        part_type("disc", record_id="again", printed=True),
        dataclasses.replace(next(r for r in set_up() if isinstance(r, Position)), record_id="again"),
    ],
    ids=lambda record: type(record).__name__,
)
def test_a_code_that_is_there_already_is_refused(again: Record) -> None:
    found = only(again)
    assert found.record_id == "again"
    assert "is there already; give each its own code" in found.sentence


def test_the_same_joint_code_on_two_robots_is_no_repetition() -> None:
    codes = [record.code for record in set_up() if isinstance(record, Position)]
    assert sorted(codes) == ["hip", "knee", "knee"]
    assert problems() == []


def test_a_book_has_one_row_of_settings_and_a_zone_that_exists() -> None:
    second = Settings(record_id="second", title="Again", zone="Europe/Amsterdam")
    assert only(second).record_id == "second"
    odd = dataclasses.replace(second, record_id="settings", zone="Mars/Olympus")
    assert "zone 'Mars/Olympus' is not an IANA zone" in only(odd).sentence


def test_a_name_that_leads_nowhere_is_found_before_anything_else() -> None:
    move = StockMove(record_id="move", happened_at=day(1), lot="gone", quantity=3, reason="received")
    overlapping = [session("R1", day(1), 2.0), session("R1", day(1), 2.0)]
    assert problems(move, *overlapping) == [Problem("move", "its lot names no lot of this book.")]


def test_a_reference_to_a_record_of_another_kind_leads_nowhere_too() -> None:
    assert only(removal("U1", day(1))).sentence == "its fitment names no fitment of this book."


def test_all_problems_come_at_once() -> None:
    found = problems(
        session("R1", day(1), 2.0),
        session("R1", day(1) + timedelta(hours=1), 2.0),
        failure("U1 disc", "pin: snapped", day(-1)),
        fitment("U2", "disc", day(3)),
        part_mode("pin", "bent", "overload", "impacts", 0.5),
    )
    assert len(found) == 5


def test_what_has_not_happened_yet_contradicts_nothing() -> None:
    later = fitment("U1", "disc", day(30))
    records = [*set_up(), *first_fitting(), later]
    assert problems_in(history_of(records, day(20))) == []
    assert len(problems_in(history_of(records, END))) == 1


def test_every_mode_names_a_part_type_that_is_there() -> None:
    kept = [record for record in set_up() if not (isinstance(record, PartMode) or record.record_id == "pin")]
    found = problems_in(history_of(kept, END))
    assert {problem.sentence for problem in found} == {"its part_type names no part type of this book."}


def test_the_revision_of_a_lot_is_one_of_its_part_type() -> None:
    found = only(Lot(record_id="odd", code="P-7", part_type="pin", revision="disc-B"))
    assert (found.record_id, found.sentence) == ("odd", "the revision of lot P-7 is not one of pin.")
