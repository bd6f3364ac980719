"""Between records and rows: one record to the columns of its table, and back."""

from __future__ import annotations

from datetime import UTC, datetime, timedelta, timezone
from functools import cache
from typing import Any, TypeVar

from sqlalchemy import RowMapping

from fleet.records.fields import Record, Stamp, fields_of
from fleet.store.tables import OFFSET_SUFFIX

_EPOCH = datetime(1970, 1, 1, tzinfo=UTC)
_MICROSECOND = timedelta(microseconds=1)
_R = TypeVar("_R", bound=Record)


def microseconds_of(moment: datetime) -> int:
    """Microseconds since 1970 in UTC, exactly."""
    return (moment - _EPOCH) // _MICROSECOND


def moment_of(microseconds: int, offset_minutes: int = 0) -> datetime:
    """The time, in the offset it was stated in."""
    return _epoch_in(offset_minutes) + timedelta(microseconds=microseconds)


@cache
def _epoch_in(offset_minutes: int) -> datetime:
    return _EPOCH.astimezone(timezone(timedelta(minutes=offset_minutes)) if offset_minutes else UTC)


def row_of(record: Record, stamp: Stamp) -> dict[str, Any]:
    """The columns of one version of a record."""
    row: dict[str, Any] = {
        "record_id": record.record_id,
        "version": stamp.version,
        "write_number": stamp.write_number,
        "entered_at": microseconds_of(stamp.entered_at),
        "entered_at_claimed": stamp.entered_at_claimed,
        "entered_by": stamp.entered_by,
        "version_reason": stamp.reason,
        "withdrawn": stamp.withdrawn,
    }
    for name, spec in fields_of(type(record)).items():
        value = getattr(record, name)
        if spec.kind == "moment":
            row[name] = None if value is None else microseconds_of(value)
            offset = None if value is None else value.utcoffset()
            row[name + OFFSET_SUFFIX] = None if offset is None else round(offset / timedelta(minutes=1))
        else:
            row[name] = value
    return row


def record_of(cls: type[_R], row: RowMapping) -> _R:
    """The record that a row keeps."""
    values: dict[str, Any] = {}
    for name, spec in fields_of(cls).items():
        value = row[name]
        if spec.kind == "moment" and value is not None:
            value = moment_of(value, row[name + OFFSET_SUFFIX] or 0)
        values[name] = value
    stamp = Stamp(
        version=row["version"],
        write_number=row["write_number"],
        entered_at=moment_of(row["entered_at"]),
        entered_by=row["entered_by"],
        entered_at_claimed=bool(row["entered_at_claimed"]),
        reason=row["version_reason"],
        withdrawn=bool(row["withdrawn"]),
    )
    # Checked when it was written, and held to its bounds by the tables: not checked again on every reading.
    record = cls.__new__(cls)
    record.__dict__.update(values, record_id=row["record_id"], stamp=stamp)
    return record
