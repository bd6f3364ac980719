"""What is fitted now: running, failed and still in, missing; and the age taken where nobody knows it."""

from __future__ import annotations

from datetime import timedelta

import pytest

from fleet.lives.part_data import LifeKey
from fleet.records.ledger import Fitment
from fleet.records.set_up import Robot
from tests.books import FITTED, TURNS_PER_HOUR, day, failure, fitment, history_with, placement, removal, session
from tests.chain import chain_of


def test_every_slot_of_every_placed_module_is_there_and_the_shelf_is_not() -> None:
    chain = chain_of(history_with())
    assert len(chain.slots) == 9
    assert {slot.unit for slot in chain.slots} == {"U1", "U2", "U3"}
    pins = chain.slot("R1-hip", "pins")
    assert sum(part.span.count for part in pins.running) == 13
    assert (pins.failed, pins.empty_places) == ((), 0)


def test_a_module_put_on_the_shelf_or_on_a_robot_that_left_is_not_there() -> None:
    chain = chain_of(history_with(placement("U1", None, day(5))))
    assert {slot.unit for slot in chain.slots} == {"U2", "U3"}
    gone = Robot(record_id="R2", code="R2", label="gone", in_service_from=FITTED - timedelta(4), in_service_to=day(9))
    assert {slot.unit for slot in chain_of(history_with(gone)).slots} == {"U1", "U2"}


def test_a_module_that_moved_brings_its_parts_and_their_age() -> None:
    ran = [session("R1", day(n), 4.0) for n in range(1, 6)]
    chain = chain_of(history_with(*ran, placement("U1", "R2-knee", day(9))))
    disc = chain.slot("R2-knee", "disc")
    assert disc.unit == "U1"
    assert disc.running[0].age["hours"] == pytest.approx(20.0)
    assert disc.running[0].age["turns"] == pytest.approx(20 * TURNS_PER_HOUR)


def test_a_failed_part_that_is_still_in_does_not_run() -> None:
    chain = chain_of(history_with(failure("U1 pins", "pin: snapped", day(3), "over its limit", place=4)))
    pins = chain.slot("R1-hip", "pins")
    assert [span.places for span in pins.failed] == [(4,)]
    assert sum(part.span.count for part in pins.running) == 12
    assert pins.empty_places == 0


def test_a_part_taken_out_leaves_its_place_empty_until_another_is_fitted() -> None:
    out = [removal("U1 pins", day(4), "found worn", place=place) for place in (2, 9)]
    assert chain_of(history_with(*out)).slot("R1-hip", "pins").empty_places == 2
    refilled = fitment("U1", "pins", day(4), sequence=1, first_place=2, lot="P-1")
    pins = chain_of(history_with(*out, refilled)).slot("R1-hip", "pins")
    assert pins.empty_places == 1
    assert sorted(part.span.count for part in pins.running) == [1, 11]


def unknown(unit: str = "U1") -> Fitment:
    return fitment(unit, "disc", day(30), sequence=1, lot="D-1", prior="unknown")


def test_an_unknown_age_is_taken_as_the_middle_age_of_like_running_parts_and_flagged() -> None:
    ran = [session(robot, day(n), 5.0) for n in range(1, 21) for robot in ("R1", "R2")]
    chain = chain_of(history_with(*ran, removal("U1 disc", day(30)), unknown()))
    disc = chain.slot("R1-hip", "disc").running[0]
    assert disc.age_assumed
    # Like discs of known age: 100 h in R1's knee, 100 h in R2's, 0 h in the module on the shelf.
    assert disc.age["hours"] == pytest.approx(100.0)
    assert disc.age["turns"] == pytest.approx(100.0 * TURNS_PER_HOUR)
    assert not chain.slot("R1-knee", "disc").running[0].age_assumed


def test_an_unknown_age_is_never_below_what_the_part_ran_since() -> None:
    ran = [session("R1", day(n), 5.0) for n in range(31, 61)]
    chain = chain_of(history_with(*ran, removal("U1 disc", day(30)), removal("U2 disc", day(59)), unknown()))
    disc = chain.slot("R1-hip", "disc").running[0]
    assert disc.age["hours"] == pytest.approx(150.0)


def test_without_any_like_part_of_known_age_only_the_use_since_is_left() -> None:
    ran = [session("R1", day(31), 5.0)]
    out = [removal(f"{unit} disc", day(29)) for unit in ("U1", "U2", "U3", "U4")]
    disc = chain_of(history_with(*ran, *out, unknown())).slot("R1-hip", "disc").running[0]
    assert disc.age_assumed
    assert disc.age["hours"] == pytest.approx(5.0)


def test_a_clock_in_which_a_stated_age_is_silent_follows_the_usual_use_per_hour() -> None:
    ran = [session("R1", day(n), 5.0, impacts=10) for n in range(1, 11)]
    used = fitment("U1", "disc", day(30), sequence=1, lot="D-1", prior="stated", prior_run_seconds=40 * 3600)
    chain = chain_of(history_with(*ran, removal("U1 disc", day(30)), used))
    disc = chain.slot("R1-hip", "disc").running[0]
    assert not disc.age_assumed
    assert disc.age["hours"] == pytest.approx(40.0)
    assert disc.age["impacts"] == pytest.approx(80.0)


def test_a_lot_kept_apart_has_a_life_of_its_own() -> None:
    odd = fitment("U1", "disc", day(30), sequence=1, lot="D-9")
    chain = chain_of(history_with(removal("U1 disc", day(30)), odd))
    assert chain.slot("R1-hip", "disc").running[0].life == LifeKey("disc", "disc-B", "D-9")
    assert chain.slot("R1-knee", "disc").running[0].life == LifeKey("disc", "disc-A")
