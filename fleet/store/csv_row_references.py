"""Resolves the references of one CSV row, each from its own columns."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from datetime import datetime, tzinfo
from typing import Any

from fleet.errors import RecordError
from fleet.records.fields import FieldSpec, Record, fields_of
from fleet.records.ledger import Failure, Hold, Release
from fleet.records.set_up import Unit
from fleet.store.csv_cells import parse_moment
from fleet.store.csv_references import References
from fleet.store.csv_rows import Row


@dataclass
class RowReferences:
    """Resolves the references of one row, each from its own columns."""

    references: References
    zone: tzinfo
    row: Row
    moment: datetime

    def values_of_references(self, cls: type[Record]) -> list[dict[str, Any]]:
        """One set of reference values for each record the row states."""
        values: dict[str, Any] = {}
        parts: list[dict[str, Any]] = [{}]
        for name, spec in fields_of(cls).items():
            if spec.kind != "reference" or name == "comes_from":
                continue
            if spec.refers_to == "fitment":
                parts = self._fitted_parts(cls)
            else:
                values[name] = self._reference(cls, name, spec)
                if values[name] is None and not spec.optional:
                    raise RecordError(f"{spec.refers_to.replace('_', ' ')} is empty")
        return [{**values, **part} for part in parts]

    def _code(self, kind: str, column: str, scope: str | None = None) -> str | None:
        written = self.row.cells.get(column)
        if written is None:
            return None
        try:
            return self.references.by_code(kind, written, scope)
        except RecordError as error:
            raise RecordError(f"{column} {error}") from None

    def _reference(self, cls: type[Record], name: str, spec: FieldSpec) -> str | None:
        special: dict[str, Callable[[], str | None]] = {
            "position": self._position,
            "unit": self._unit_if_any if cls in (Hold, Release) else self._unit,
            "slot": self._slot,
            "session": self._session,
            "part_mode": self._mode,
            "revision": lambda: self._revision(cls),
            "hold": self._hold,
        }
        if name == "broken_by":
            return self._broken_by()
        if spec.refers_to in special:
            return special[spec.refers_to]()
        if cls is Hold and spec.refers_to == "robot" and "position" in self.row.cells:
            return None
        return self._code(spec.refers_to, spec.refers_to)

    def _robot(self) -> str | None:
        return self._code("robot", "robot")

    def _position(self) -> str | None:
        if "position" not in self.row.cells:
            return None
        robot = self._robot()
        if robot is None:
            raise RecordError("position needs robot beside it")
        return self._code("position", "position", robot)

    def _unit_if_any(self) -> str | None:
        if "unit" in self.row.cells:
            return self._code("unit", "unit")
        position = self._position()
        return None if position is None else self.references.unit_in(position, self.moment)

    def _unit(self) -> str:
        unit = self._unit_if_any()
        if unit is None:
            raise RecordError("unit is empty; name the module, or robot and position")
        return unit

    def _slot(self) -> str | None:
        if "slot" not in self.row.cells:
            return None
        design = self.references.history.one(Unit, self._unit()).unit_design
        return self._code("slot", "slot", design)

    def _part_type(self) -> str | None:
        if "part_type" in self.row.cells:
            return self._code("part_type", "part_type")
        slot = self._slot()
        return None if slot is None else self.references.part_type_of_slot(slot)

    def _mode(self) -> str | None:
        part_type = self._part_type()
        if part_type is None and "mode" in self.row.cells:
            raise RecordError("mode needs slot beside it")
        return self._code("part_mode", "mode", part_type)

    def _revision(self, cls: type[Record]) -> str | None:
        return self._code("revision", "revision", self._part_type()) if "revision" in self.row.cells else None

    def _session(self) -> str | None:
        written, robot = self.row.cells.get("session"), self._robot()
        if written is None:
            return None
        if robot is None:
            raise RecordError("session needs robot beside it")
        try:
            return self.references.session(robot, parse_moment(written, self.zone)[0])
        except RecordError as error:
            raise RecordError(f"session {error}") from None

    def _hold(self) -> str:
        unit = self._unit_if_any()
        return self.references.open_hold(None if unit else self._robot(), unit, self.moment)

    def _place(self, column: str) -> int | None:
        written = self.row.cells.get(column)
        if written is None:
            return None
        if not written.isdecimal() or not 1 <= int(written) <= 1000:
            raise RecordError(f"{column} is {written!r}, not a whole number from 1")
        return int(written)

    def _fitted_parts(self, cls: type[Record]) -> list[dict[str, Any]]:
        slot = self._slot()
        if slot is None:
            raise RecordError("slot is empty")
        place = self._place("place")
        parts = self.references.parts_at(self._unit(), slot, place, self.moment)
        if place is not None:
            return [{"fitment": parts[0].fitment.record_id, "place": place}]
        if cls is Failure and len(parts) > 1:
            raise RecordError(f"place is empty, but {len(parts)} parts sit there; say which one failed")
        return [{"fitment": fitment} for fitment in dict.fromkeys(part.fitment.record_id for part in parts)]

    def source_of_moved_part(self) -> tuple[str, int]:
        """The fitment that a moved part was taken out of, and its place there."""
        unit = self._code("unit", "from_unit")
        if unit is None:
            raise RecordError("from_unit is empty; name the module that a moved part comes from")
        slot = self._code("slot", "from_slot", self.references.history.one(Unit, unit).unit_design)
        if slot is None:
            raise RecordError("from_slot is empty; name the slot that a moved part comes from")
        place = self._place("from_place") or 1
        return self.references.last_removed(unit, slot, place, self.moment), place

    def _broken_by(self) -> str | None:
        if "broken_by_slot" not in self.row.cells:
            return None
        unit = self._unit()
        design = self.references.history.one(Unit, unit).unit_design
        slot = self._code("slot", "broken_by_slot", design)
        assert slot is not None
        return self.references.failure_in(unit, slot, self._place("broken_by_place") or 1, self.moment)
