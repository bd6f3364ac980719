"""From the codes written in a row to the records they mean: robots, joints, modules, slots, parts at a moment."""

from __future__ import annotations

from datetime import datetime

from fleet.errors import RecordError
from fleet.records.fields import Record, kind_of
from fleet.records.history import History
from fleet.records.ledger import Failure, Fitment, Hold, Release, Session
from fleet.records.set_up import PartMode, Position, Revision, Slot, Unit
from fleet.records.whereabouts import FittedPart, Whereabouts, whereabouts_of


class References:
    """Looks up what a row's codes mean, in a history that grows while files are read."""

    def __init__(self, history: History) -> None:
        self.history = history
        self._codes: dict[tuple[str, ...], str] = {}
        self._whereabouts: Whereabouts | None = None
        for held in history.rows.values():
            for entry in held.values():
                self._index(entry)

    def add(self, records: list[Record]) -> None:
        """Let later rows refer to these."""
        self.history = self.history.with_records(records)
        self._whereabouts = None
        for entry in records:
            self._index(entry)

    @property
    def whereabouts(self) -> Whereabouts:
        """Where everything was, as far as read."""
        if self._whereabouts is None:
            self._whereabouts = whereabouts_of(self.history)
        return self._whereabouts

    def _index(self, entry: Record) -> None:
        kind = kind_of(type(entry))
        if isinstance(entry, Position):
            self._codes[kind, entry.robot, entry.code] = entry.record_id
        elif isinstance(entry, Slot):
            self._codes[kind, entry.unit_design, entry.code] = entry.record_id
        elif isinstance(entry, PartMode | Revision):
            self._codes[kind, entry.part_type, entry.code] = entry.record_id
        elif isinstance(entry, Session):
            self._codes[kind, entry.robot, _moment_key(entry.happened_at)] = entry.record_id
        elif (code := getattr(entry, "code", None)) is not None:
            self._codes[kind, code] = entry.record_id

    def by_code(self, kind: str, code: str, scope: str | None = None, where: str = "") -> str:
        """The id of the record of a kind with this code, within its scope."""
        key = (kind, code) if scope is None else (kind, scope, code)
        if key not in self._codes:
            raise RecordError(f"names {kind.replace('_', ' ')} {code!r}, which {where or 'this book'} does not have")
        return self._codes[key]

    def session(self, robot: str, started: datetime) -> str:
        """The session of a robot that started at this moment."""
        key = ("session", robot, _moment_key(started))
        if key not in self._codes:
            raise RecordError(f"names a session started {started:%Y-%m-%d %H:%M}, which that robot does not have")
        return self._codes[key]

    def unit_in(self, position: str, moment: datetime) -> str:
        """The module in a position at a moment."""
        unit = self.whereabouts.unit_in(position, moment)
        if unit is None:
            code = self.history.one(Position, position).code
            raise RecordError(f"joint {code} held no module at {moment:%Y-%m-%d %H:%M}")
        return unit

    def parts_at(self, unit: str, slot: str, place: int | None, moment: datetime) -> list[FittedPart]:
        """The part in one place just before a moment; with no place, all parts of the slot."""
        places = range(1, self.history.one(Slot, slot).count + 1) if place is None else (place,)
        found = [part for p in places if (part := self.whereabouts.part_at(unit, slot, p, moment)) is not None]
        if not found:
            raise RecordError(f"{self._place_name(unit, slot, place)} held no part before {moment:%Y-%m-%d %H:%M}")
        return found

    def last_removed(self, unit: str, slot: str, place: int, moment: datetime) -> str:
        """The fitment of the part last taken out of a place."""
        part = self.whereabouts.last_removed(unit, slot, place, moment)
        if part is None:
            name = self._place_name(unit, slot, place)
            raise RecordError(f"no part was taken out of {name} by {moment:%Y-%m-%d %H:%M}")
        return part.fitment.record_id

    def failure_in(self, unit: str, slot: str, place: int, moment: datetime) -> str:
        """The failure at this very moment of the part in a place."""
        for failure in self.history.of(Failure).values():
            fitment = self.history.one(Fitment, failure.fitment)
            found = (fitment.unit, fitment.slot, failure.place or fitment.first_place, failure.happened_at)
            if found == (unit, slot, place, moment):
                return failure.record_id
        raise RecordError(f"{self._place_name(unit, slot, place)} has no failure at {moment:%Y-%m-%d %H:%M}")

    def open_hold(self, robot: str | None, unit: str | None, moment: datetime) -> str:
        """The hold still open on a robot or module."""
        lifted = {release.hold for release in self.history.of(Release).values()}
        for hold in self.history.of(Hold).values():
            still_open = hold.record_id not in lifted and hold.happened_at <= moment
            if still_open and (hold.robot, hold.unit) == (robot, unit):
                return hold.record_id
        raise RecordError("names something that is not held")

    def part_type_of_slot(self, slot: str) -> str:
        """The part type that a slot takes."""
        return self.history.one(Slot, slot).part_type

    def _place_name(self, unit: str, slot: str, place: int | None) -> str:
        found = self.history.one(Slot, slot)
        where = f"{found.code} place {place}" if place is not None and found.count > 1 else found.code
        return f"{where} of module {self.history.one(Unit, unit).code}"


def _moment_key(moment: datetime) -> str:
    return str(moment.timestamp())
