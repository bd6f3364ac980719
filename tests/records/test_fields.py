"""Records check themselves: what a field may hold, and every problem of a record at once."""

from __future__ import annotations

import dataclasses
import math
from datetime import UTC, datetime, timedelta
from typing import Any
from zoneinfo import ZoneInfo

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from fleet.errors import RecordError
from fleet.records.fields import LONGEST_CODE, LONGEST_TEXT, Record, fields_of, kind_of
from fleet.records.history import KINDS
from fleet.records.ledger import Failure, Fitment, Hold, Plate, Session
from fleet.records.set_up import PartMode, Position, Presence, Robot, Slot, Spool
from tests.books import day, first_fitting, part_type, session, set_up

GOOD_SPOOL: dict[str, Any] = {"record_id": "s", "code": "SP-1", "material": "PA-CF", "grams_left": 640.0}


def problems_of(cls: type[Record], **values: Any) -> str:
    with pytest.raises(RecordError) as told:
        cls(**values)
    return str(told.value)


def test_a_sound_record_is_made_and_cannot_be_changed() -> None:
    spool = Spool(**GOOD_SPOOL)
    with pytest.raises(dataclasses.FrozenInstanceError):
        spool.grams_left = 0.0  # type: ignore[misc]


@pytest.mark.parametrize(
    ("grams", "said"),
    [
        (math.nan, "grams_left is nan, not a finite number"),
        (math.inf, "grams_left is inf, not a finite number"),
        (-math.inf, "grams_left is -inf, not a finite number"),
        (-0.5, "grams_left is -0.5, below 0"),
        (50_001, "grams_left is 50001, above 50000"),
        ("640", "grams_left is '640', not a number"),
        (True, "grams_left is True, not a number"),
        (None, "grams_left is missing"),
    ],
)
def test_a_number_is_finite_and_within_its_bounds(grams: Any, said: str) -> None:
    assert said in problems_of(Spool, **{**GOOD_SPOOL, "grams_left": grams})


@given(st.floats())
@settings(derandomize=True)
def test_no_number_that_is_not_finite_or_is_negative_gets_through(grams: float) -> None:
    try:
        made = Spool(**{**GOOD_SPOOL, "grams_left": grams})
    except RecordError:
        assert not (math.isfinite(grams) and 0 <= grams <= 50_000)
    else:
        assert math.isfinite(made.grams_left) and made.grams_left >= 0


def test_hours_are_told_in_hours_though_kept_in_seconds() -> None:
    with pytest.raises(RecordError, match="hours is 745, above 744"):
        session("R1", day(0), 2.0, run_seconds=745 * 3600)
    with pytest.raises(RecordError, match="hours is -1, below 0"):
        session("R1", day(0), 2.0, run_seconds=-3600)
    with pytest.raises(RecordError, match=r"hours is 1\.5, not a whole number"):
        session("R1", day(0), 2.0, run_seconds=1.5)


def test_a_label_is_neither_empty_nor_too_long() -> None:
    assert "code is empty" in problems_of(Spool, **{**GOOD_SPOOL, "code": "   "})
    assert f"longer than {LONGEST_CODE}" in problems_of(Spool, **{**GOOD_SPOOL, "code": "x" * (LONGEST_CODE + 1)})
    assert Spool(**{**GOOD_SPOOL, "code": "x" * LONGEST_CODE}).code


def test_a_text_has_an_end() -> None:
    robot: dict[str, Any] = {"record_id": "r", "code": "R9", "in_service_from": day(0)}
    assert Robot(label="x" * LONGEST_TEXT, **robot).label
    assert f"label is longer than {LONGEST_TEXT}" in problems_of(Robot, label="x" * (LONGEST_TEXT + 1), **robot)


@pytest.mark.parametrize("letter", ["\x00", "\x07", "\x1b", "\r", "\x7f", "\x85", "\ud800"])
def test_control_characters_and_lone_halves_of_characters_are_refused(letter: str) -> None:
    assert "holds a control character" in problems_of(Spool, **{**GOOD_SPOOL, "code": f"SP{letter}1"})


def test_lines_tabs_and_letters_of_any_script_are_kept() -> None:
    assert session("R1", day(0), 1.0, note="née\n\tŁódź 机器人 🦿").note == "née\n\tŁódź 机器人 🦿"


def test_a_wrong_choice_is_answered_with_the_right_ones() -> None:
    assert "outcome is 'crashed'; it may be: finished, stopped, broken off" in problems_of(
        Session, **(vars(session("R1", day(0), 1.0)) | {"outcome": "crashed"})
    )


def test_a_moment_carries_its_zone_and_lies_in_our_times() -> None:
    robot: dict[str, Any] = {"record_id": "r", "code": "R9", "label": "Robot 9"}
    assert "not a time with a zone" in problems_of(Robot, in_service_from=datetime(2026, 1, 1), **robot)
    assert "outside the years" in problems_of(Robot, in_service_from=datetime(1926, 1, 1, tzinfo=UTC), **robot)
    assert "not a time with a zone" in problems_of(Robot, in_service_from="2026-01-01", **robot)


def test_a_moment_keeps_its_offset_as_a_plain_number() -> None:
    zone = ZoneInfo("Europe/Amsterdam")
    before, after = datetime(2026, 3, 29, 1, tzinfo=zone), datetime(2026, 3, 29, 4, tzinfo=zone)
    # Two hours have passed while the clocks of the zone went on by three.
    with pytest.raises(RecordError, match=r"hours is 3, but from start to end are only 2\.00 h"):
        session("R1", before, 2.0, ended_at=after, run_seconds=3 * 3600)
    kept = session("R1", before, 2.0, ended_at=after)
    assert (kept.ended_at - kept.happened_at, kept.ended_at.utcoffset()) == (timedelta(hours=2), timedelta(hours=2))


def test_a_flag_is_yes_or_no_and_a_reference_is_an_id() -> None:
    hold: dict[str, Any] = {"record_id": "h", "happened_at": day(0), "why": "cracked"}
    assert "robot is 7, not the id of a record" in problems_of(Hold, robot=7, **hold)
    lot = next(record for record in set_up() if record.record_id == "D-9")
    assert "kept_apart is 1, not yes or no" in problems_of(type(lot), **(vars(lot) | {"kept_apart": 1}))


def test_all_problems_of_one_record_come_at_once() -> None:
    said = problems_of(Spool, record_id="s", code="", material="x" * 99, grams_left=math.nan)
    assert said.startswith("spool: ")
    assert "code is empty" in said and "material is longer" in said and "grams_left is nan" in said


def test_a_missing_field_is_told_before_what_follows_from_it() -> None:
    said = problems_of(Session, **(vars(session("R1", day(0), 1.0)) | {"ended_at": None}))
    assert said == "session: ended_at is missing."


# Between the fields of one record


def test_a_session_runs_forward_and_holds_no_more_hours_than_it_lasted() -> None:
    with pytest.raises(RecordError, match="ended_at is not after happened_at"):
        session("R1", day(0), 1.0, ended_at=day(0))
    with pytest.raises(RecordError, match=r"hours is 3, but from start to end are only 2\.00 h"):
        session("R1", day(0), 2.0, run_seconds=3 * 3600)
    assert session("R1", day(0), 2.0, run_seconds=3600).run_seconds == 3600


def test_a_vague_time_ends_after_it_starts() -> None:
    with pytest.raises(RecordError, match="happened_until is before happened_at"):
        session("R1", day(1), 2.0, happened_until=day(0))


FITTED: dict[str, Any] = {"record_id": "f", "happened_at": day(0), "unit": "U1", "slot": "slot-disc"}


def test_a_stated_age_has_hours_and_no_other_age_has_any() -> None:
    assert "prior is stated, but prior_hours is missing" in problems_of(Fitment, prior="stated", **FITTED)
    for figure in ("prior_run_seconds", "prior_load_seconds", "prior_turns", "prior_impacts", "prior_days"):
        for prior in ("new", "unknown"):
            said = problems_of(Fitment, prior=prior, **{figure: 0}, **FITTED)
            assert f"prior is {prior}, but an age is given" in said


def test_a_moved_part_is_not_told_its_age() -> None:
    said = problems_of(Fitment, comes_from="g", prior="unknown", **FITTED)
    assert "a moved part keeps its age by itself" in said


def test_what_broke_a_part_is_also_its_cause() -> None:
    said = problems_of(
        Failure, record_id="f", happened_at=day(0), fitment="g", mode="m", finding="stopped", broken_by="other"
    )
    assert "cause must be: another part's failure" in said


def test_a_hold_is_of_one_thing() -> None:
    hold: dict[str, Any] = {"record_id": "h", "happened_at": day(0), "why": "cracked"}
    assert "either a robot or a joint module" in problems_of(Hold, **hold)
    assert "either a robot or a joint module" in problems_of(Hold, robot="R1", unit="U1", **hold)


def test_no_more_parts_come_off_a_plate_than_went_on() -> None:
    plate: dict[str, Any] = {"record_id": "p", "code": "PL-1", "printer": "x", "lot": "l", "happened_at": day(0)}
    assert "good is 7, more than the 6 started" in problems_of(Plate, started=6, good=7, ended_at=day(1), **plate)
    assert "good and ended_at belong together" in problems_of(Plate, started=6, good=5, **plate)


def test_costs_are_ordered_and_a_printed_part_carries_its_plate_figures() -> None:
    with pytest.raises(RecordError, match="planned_cost must be above zero and below failure_cost"):
        part_type("disc", printed=True, planned_cost=2600)
    with pytest.raises(RecordError, match="a printed part needs material"):
        part_type("disc", printed=True, nozzle_mm=None)


def test_a_robot_does_not_wait_for_more_failures_than_there_are_parts() -> None:
    slot = next(record for record in set_up() if isinstance(record, Slot) and record.count == 13)
    assert "stops_at is 14, but the slot holds 13" in problems_of(Slot, **(vars(slot) | {"stops_at": 14}))


def test_people_come_before_they_go() -> None:
    said = problems_of(Presence, record_id="p", weekday="Monday", start_minute=600, end_minute=600)
    assert "end is not after start" in said


# What the records say about themselves


def test_every_field_of_every_kind_is_stated_once_with_its_meaning() -> None:
    for cls in KINDS:
        told = fields_of(cls)
        assert {f.name for f in dataclasses.fields(cls)} - {"record_id", "stamp"} == set(told)
        assert all(spec.meaning for spec in told.values())


def test_every_reference_names_a_kind_that_exists() -> None:
    kinds = {kind_of(cls) for cls in KINDS}
    for cls in KINDS:
        assert all(spec.refers_to in kinds for spec in fields_of(cls).values() if spec.kind == "reference")


def test_kinds_have_different_names_and_every_number_has_both_bounds() -> None:
    assert len({kind_of(cls) for cls in KINDS}) == len(KINDS)
    for cls in KINDS:
        for name, spec in fields_of(cls).items():
            if spec.kind in ("number", "whole", "hours", "money", "daytime"):
                assert spec.low is not None and spec.high is not None, (cls, name)


def test_the_share_of_a_mode_is_above_zero_and_at_most_all() -> None:
    mode = next(record for record in set_up() if isinstance(record, PartMode))
    for share in (0.0, 1.1):
        assert "share is" in problems_of(PartMode, **(vars(mode) | {"share": share}))


def test_the_tiny_fleet_names_every_joint_in_plain_words() -> None:
    assert {record.label for record in set_up() if isinstance(record, Position)} == {"left hip", "left knee"}
    assert len(first_fitting()) == 16
