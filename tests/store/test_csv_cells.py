"""One cell of a CSV file: what it may say, and that whatever it says is a value or a sentence."""

from __future__ import annotations

import math
from datetime import UTC, datetime, timedelta
from typing import Any
from zoneinfo import ZoneInfo

import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st

from fleet.errors import RecordError
from fleet.records.fields import FieldKind, FieldSpec, fields_of
from fleet.records.history import KINDS
from fleet.records.ledger import Session
from fleet.store.csv_cells import parse_cell, parse_moment, states_offset

HOME = ZoneInfo("Europe/Amsterdam")


def spec(kind: FieldKind, low: float | None = 0, high: float | None = 100, **more: Any) -> FieldSpec:
    return FieldSpec(kind, "a test", optional=True, low=low, high=high, **more)


HOURS = fields_of(Session)["run_seconds"]


def refusal(of: FieldSpec, written: str) -> str:
    with pytest.raises(RecordError) as told:
        parse_cell(of, written, HOME)
    return str(told.value)


@pytest.mark.parametrize(
    ("of", "written", "value"),
    [
        (spec("number"), "1.5", 1.5),
        (spec("number"), "1e1", 10.0),
        (spec("whole"), "3", 3),
        (spec("whole"), "3.0", 3),
        (HOURS, "1.5", 5400),
        (HOURS, "0.1", 360),
        (spec("money", 0, 1e6), "12.50", 1250),
        (spec("money", 0, 1e6), "0.07", 7),
        (spec("daytime", 0, 1440), "9:30", 570),
        (spec("daytime", 0, 1440), "24:00", 1440),
        (spec("flag"), "Yes", True),
        (spec("flag"), "no", False),
        (spec("text"), "=1+1", "=1+1"),
    ],
)
def test_a_cell_says_its_value(of: FieldSpec, written: str, value: object) -> None:
    assert parse_cell(of, written, HOME) == value


def test_hours_with_a_unit_are_refused_with_an_example() -> None:
    assert refusal(HOURS, "3h") == "is '3h', not hours as a plain number such as 1.5"


@pytest.mark.parametrize("written", ["NaN", "nan", "sNaN", "inf", "-Infinity", "1e400", "-1e99"])
def test_no_number_that_is_not_finite_gets_in(written: str) -> None:
    for of in (spec("number", -1e300, 1e300), HOURS, spec("money"), spec("whole")):
        assert "not a finite number" in refusal(of, written)


@pytest.mark.parametrize(
    ("of", "written", "said"),
    [
        (spec("number"), "1,5", "not a number such as 1.5"),
        (spec("number"), "-1", "below 0"),
        (spec("whole"), "2.5", "not a whole number such as 3"),
        (spec("whole"), "=2+1", "not a whole number such as 3"),
        (spec("money", 0, 1e6), "1.005", "not an amount such as 12.50"),
        (spec("daytime", 0, 1440), "24:01", "not a time of day such as 09:30"),
        (spec("daytime", 0, 1440), "09:75", "not a time of day such as 09:30"),
        (spec("flag"), "maybe", "not yes or no"),
        (spec("number"), "9" * 41, "not a number such as 1.5"),
        (spec("choice", choices=("good", "doubtful")), "fine", "it may be: good, doubtful"),
    ],
)
def test_what_cannot_be_is_said_with_how_to_write_it(of: FieldSpec, written: str, said: str) -> None:
    assert said in refusal(of, written)


# Times


def test_a_time_without_an_offset_is_in_the_home_zone() -> None:
    winter, summer = parse_moment("2026-01-05 09:00", HOME), parse_moment("2026-07-05T09:00", HOME)
    assert winter == (datetime(2026, 1, 5, 8, tzinfo=UTC), None)
    assert summer == (datetime(2026, 7, 5, 7, tzinfo=UTC), None)
    assert summer[0].utcoffset() == timedelta(hours=2)


def test_a_stated_offset_is_kept() -> None:
    moment, _ = parse_moment("2026-01-05T09:00:00-05:00", HOME)
    assert (moment, moment.utcoffset()) == (datetime(2026, 1, 5, 14, tzinfo=UTC), timedelta(hours=-5))
    assert parse_moment("2026-01-05T09:00Z", HOME)[0] == datetime(2026, 1, 5, 9, tzinfo=UTC)


@pytest.mark.parametrize(("day", "hours"), [("2026-01-05", 24), ("2026-03-29", 23), ("2026-10-25", 25)])
def test_a_date_alone_is_that_day_however_long_it_was(day: str, hours: int) -> None:
    start, end = parse_moment(day, HOME)
    assert end is not None
    assert end - start == timedelta(hours=hours)
    assert start.astimezone(HOME).strftime("%Y-%m-%d %H:%M") == f"{day} 00:00"


def test_a_clock_time_that_came_twice_asks_for_its_offset() -> None:
    with pytest.raises(RecordError, match="a clock time that came twice that night: write its offset too"):
        parse_moment("2026-10-25 02:30", HOME)
    both = [parse_moment(f"2026-10-25 02:30{offset}", HOME)[0] for offset in ("+02:00", "+01:00")]
    assert both[1] - both[0] == timedelta(hours=1)


def test_a_clock_time_that_never_came_is_refused() -> None:
    with pytest.raises(RecordError, match="came never that night"):
        parse_moment("2026-03-29 02:30", HOME)


@pytest.mark.parametrize("written", ["2026-02-30", "2026-02-30 10:00", "30.11.2026", "yesterday", "2026-11-30 25:00"])
def test_a_date_that_is_none_is_refused(written: str) -> None:
    with pytest.raises(RecordError, match="not a date and time such as 2026-11-30 17:45"):
        parse_moment(written, HOME)


@pytest.mark.parametrize("written", ["0001-01-01", "0001-01-01 00:00", "9999-12-31", "1889-06-01 12:00", "2999-01-01"])
def test_a_time_far_out_is_refused_in_a_sentence(written: str) -> None:
    said = refusal(spec("moment"), written)
    assert "outside the years" in said or "not a date and time" in said


@pytest.mark.parametrize(
    ("written", "stated"),
    [("2026-01-05", False), ("2026-01-05 09:00", False), ("2026-01-05T09:00Z", True), ("2026-01-05T09:00+01:00", True)],
)
def test_whether_an_offset_was_written(written: str, stated: bool) -> None:
    assert states_offset(written) is stated


_CELLS = st.one_of(
    st.text(min_size=1, max_size=30),
    st.datetimes().map(str),
    st.datetimes(timezones=st.timezones()).map(lambda moment: moment.isoformat()),
    st.floats().map(str),
    st.decimals(allow_nan=True).map(str),
)


ONE_OF_EACH_KIND = {spec.kind: spec for cls in KINDS for spec in fields_of(cls).values() if spec.kind != "reference"}


@given(_CELLS)
@example("0001-01-01 00:00")
@example("0001-01-01T00:00:00+14:00")
@example("9999-12-31T23:59:59-14:00")
@example("1_000")
@example("٣")
@settings(derandomize=True, deadline=None, max_examples=150)
def test_any_text_is_a_value_within_bounds_or_a_sentence(written: str) -> None:
    for of in ONE_OF_EACH_KIND.values():
        try:
            value = parse_cell(of, written, HOME)
        except RecordError as error:
            assert str(error).startswith(("is ", "holds "))
        else:
            assert not isinstance(value, float) or math.isfinite(value)
