"""From the text of one CSV cell to the value of one field."""

from __future__ import annotations

import re
from datetime import UTC, date, datetime, time, timedelta, tzinfo
from decimal import Decimal, InvalidOperation
from typing import Any

from fleet.errors import RecordError
from fleet.records.fields import FieldSpec, field_problem, with_plain_offset

_YES = {"yes": True, "no": False, "true": True, "false": False, "1": True, "0": False}
_DAYTIME = re.compile(r"(\d{1,2}):(\d{2})")
_SCALE = {"hours": 3600, "money": 100}
_EXAMPLE = {
    "number": "a number such as 1.5",
    "hours": "hours as a plain number such as 1.5",
    "whole": "a whole number such as 3",
    "money": "an amount such as 12.50",
}


def parse_cell(spec: FieldSpec, written: str, zone: tzinfo) -> Any:
    """The value that a non-empty cell states.

    Raises
    ------
    RecordError
        With what is wrong, to be put behind the column's name.
    """
    value = _parse(spec, written, zone)
    problem = field_problem(spec, value)
    if problem is not None:
        raise RecordError(problem)
    return value


def _parse(spec: FieldSpec, written: str, zone: tzinfo) -> Any:
    if spec.kind in _EXAMPLE:
        return _parse_number(spec, written)
    if spec.kind == "moment":
        return parse_moment(written, zone)[0]
    if spec.kind == "daytime":
        return _parse_daytime(written)
    if spec.kind == "flag":
        if written.lower() not in _YES:
            raise RecordError(f"is {written!r}, not yes or no")
        return _YES[written.lower()]
    return written


def _parse_number(spec: FieldSpec, written: str) -> int | float:
    if len(written) > 40:
        raise RecordError(f"is {written[:40]!r}..., not {_EXAMPLE[spec.kind]}")
    try:
        value = Decimal(written)
    except InvalidOperation:
        raise RecordError(f"is {written!r}, not {_EXAMPLE[spec.kind]}") from None
    if not value.is_finite() or abs(value) > Decimal(10) ** 15:
        raise RecordError(f"is {written!r}, not a finite number")
    if spec.kind == "number":
        return float(value)
    scaled = value * _SCALE.get(spec.kind, 1)
    if spec.kind != "hours" and scaled != scaled.to_integral_value():
        raise RecordError(f"is {written!r}, not {_EXAMPLE[spec.kind]}")
    return int(scaled.to_integral_value())


def _parse_daytime(written: str) -> int:
    found = _DAYTIME.fullmatch(written)
    if found is None or int(found[2]) > 59 or int(found[1]) * 60 + int(found[2]) > 24 * 60:
        raise RecordError(f"is {written!r}, not a time of day such as 09:30")
    return int(found[1]) * 60 + int(found[2])


def parse_moment(written: str, zone: tzinfo) -> tuple[datetime, datetime | None]:
    """The moment that was written, and the end of the day if only a date was.

    A time without an offset is taken in `zone`; a clock time that came twice, or never, that night is refused.
    """
    try:
        if len(written) == 10:
            day = date.fromisoformat(written)
            start = datetime.combine(day, time.min, zone)
            return with_plain_offset(start), with_plain_offset(
                datetime.combine(day + timedelta(days=1), time.min, zone)
            )
        moment = datetime.fromisoformat(written)
        return (moment if moment.tzinfo is not None else _in_zone(moment, zone, written)), None
    except (ValueError, OverflowError):
        raise RecordError(f"is {written!r}, not a date and time such as 2026-11-30 17:45") from None


def states_offset(written: str) -> bool:
    """Whether a moment that can be read was written with its offset from UTC."""
    return len(written) != 10 and datetime.fromisoformat(written).tzinfo is not None


def _in_zone(moment: datetime, zone: tzinfo, written: str) -> datetime:
    local = moment.replace(tzinfo=zone)
    if local.utcoffset() != moment.replace(tzinfo=zone, fold=1).utcoffset():
        back = local.astimezone(UTC).astimezone(zone).replace(tzinfo=None)
        came = "twice" if back == moment else "never"
        raise RecordError(f"is {written!r}, a clock time that came {came} that night: write its offset too (+01:00)")
    return with_plain_offset(local)
