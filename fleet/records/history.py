"""The History: everything a book holds, as of one moment and as known by one moment; frozen, and all that fits read."""

from __future__ import annotations

import sys
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from datetime import datetime, tzinfo
from types import MappingProxyType
from typing import TypeVar
from zoneinfo import ZoneInfo

from fleet.records.fields import EARLIEST, Record
from fleet.records.ledger import LEDGER, LedgerRecord
from fleet.records.set_up import SET_UP, BeliefAnswer, Presence, Settings, SetUpRecord, UsagePlan

KINDS: tuple[type[Record], ...] = (*SET_UP, *LEDGER)

# Set-up that nothing else refers to and that changes with time: of these, only what holds by then is in a History.
_DATED = (UsagePlan, Presence, BeliefAnswer)

_R = TypeVar("_R", bound=Record)


@dataclass(frozen=True, eq=False)
class History:
    """Current versions of all records that had happened by `as_of`.

    `write_number` is the book's last write that is in here; two histories of one book with the same write number
    and the same `as_of` are the same.
    """

    rows: Mapping[type[Record], Mapping[str, Record]]
    as_of: datetime
    write_number: int

    def of(self, kind: type[_R]) -> Mapping[str, _R]:
        """record_id -> record, for one kind; ledger kinds in order of time, then sequence."""
        return self.rows.get(kind, MappingProxyType({}))  # type: ignore[return-value]

    def one(self, kind: type[_R], record_id: str) -> _R:
        """The record with this id; KeyError if it is not there."""
        return self.of(kind)[record_id]

    @property
    def settings(self) -> Settings | None:
        """The book's own settings, if it has any yet."""
        return next(iter(self.of(Settings).values()), None)

    @property
    def zone_name(self) -> str:
        """Name of the home zone of the book; UTC while it has no settings."""
        settings = self.settings
        return settings.zone if settings is not None else "UTC"

    @property
    def zone(self) -> tzinfo:
        """The home zone of the book."""
        return ZoneInfo(self.zone_name)

    def with_records(self, records: Iterable[Record]) -> History:
        """The history as it would be with these records added (or put in the place of those with the same id)."""
        touched: dict[type[Record], dict[str, Record]] = {}
        for entry in records:
            if type(entry) not in touched:
                touched[type(entry)] = dict(self.of(type(entry)))
            touched[type(entry)][entry.record_id] = entry
        changed = history_of((entry for held in touched.values() for entry in held.values()), self.as_of)
        rows = {**self.rows, **{kind: changed.of(kind) for kind in touched}}
        return History(MappingProxyType(rows), self.as_of, self.write_number)


def history_of(records: Iterable[Record], as_of: datetime, write_number: int = 0) -> History:
    """Put records into a History, in order of time; set-up in the order in which it came to hold.

    Ledger records that happen after `as_of` are left out, and plans, presence and beliefs that hold only later.
    """
    rows: dict[type[Record], list[Record]] = {}
    for entry in records:
        if _comes_later(entry, as_of):
            continue
        rows.setdefault(type(entry), []).append(entry)
    return History(
        rows=MappingProxyType({kind: MappingProxyType(_by_id(held)) for kind, held in rows.items()}),
        as_of=as_of,
        write_number=write_number,
    )


def _comes_later(entry: Record, as_of: datetime) -> bool:
    if isinstance(entry, LedgerRecord):
        return entry.happened_at > as_of
    return isinstance(entry, _DATED) and entry.valid_from is not None and entry.valid_from > as_of


def _by_id(held: list[Record]) -> dict[str, Record]:
    return {entry.record_id: entry for entry in sorted(held, key=_order_of_time)}


def _order_of_time(entry: Record) -> tuple[datetime, int]:
    """By moment and sequence; set-up by when it came to hold, then by when it was entered, what is new last."""
    if isinstance(entry, LedgerRecord):
        return (entry.happened_at, entry.sequence)
    assert isinstance(entry, SetUpRecord)
    return (entry.valid_from or EARLIEST, sys.maxsize if entry.stamp is None else entry.stamp.write_number)
