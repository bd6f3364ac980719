"""Finds set-up records by the codes people use; an unknown code is answered with the ones there are."""

from __future__ import annotations

import difflib
from collections.abc import Iterable
from typing import Protocol, TypeVar

from fleet.errors import RecordError
from fleet.records.history import History
from fleet.records.set_up import Lot, PartMode, PartType, Position, Robot, Slot


class _Coded(Protocol):
    @property
    def code(self) -> str: ...


_C = TypeVar("_C", bound=_Coded)
_MOST_NAMED = 12


def find_robot(history: History, code: str) -> Robot:
    """The robot with this code."""
    return _find("robot", code, history.of(Robot).values())


def find_position(history: History, robot: Robot, code: str) -> Position:
    """The joint of a robot with this code."""
    held = [position for position in history.of(Position).values() if position.robot == robot.record_id]
    return _find(f"joint on {robot.code}", code, held)


def find_slot(history: History, position: Position, code: str) -> Slot:
    """The slot with this code in the design that a joint takes; a part type's code serves as well."""
    held = [slot for slot in history.of(Slot).values() if slot.unit_design == position.unit_design]
    by_part = [slot for slot in held if history.one(PartType, slot.part_type).code == code]
    return by_part[0] if len(by_part) == 1 else _find(f"part in joint {position.code}", code, held)


def find_mode(history: History, part_type: str, code: str) -> PartMode:
    """The mode with this code of a part type."""
    held = [mode for mode in history.of(PartMode).values() if mode.part_type == part_type]
    return _find(f"mode of {history.one(PartType, part_type).code}", code, held)


def find_lot(history: History, part_type: str, code: str) -> Lot:
    """The lot of a part type with this code."""
    held = [lot for lot in history.of(Lot).values() if lot.part_type == part_type]
    return _find(f"lot of {history.one(PartType, part_type).code}", code, held)


def find_part_type(history: History, code: str) -> PartType:
    """The part type with this code."""
    return _find("part type", code, history.of(PartType).values())


def _find(what: str, code: str, held: Iterable[_C]) -> _C:
    by_code = {entry.code: entry for entry in held}
    if code in by_code:
        return by_code[code]
    like = [entry for entry in by_code.values() if entry.code.casefold() == code.casefold()]
    if len(like) == 1:
        return like[0]
    near = difflib.get_close_matches(code, by_code, 1)
    if near:
        hint = f"did you mean {near[0]}?"
    elif not by_code:
        hint = "there is none yet."
    else:
        named = ", ".join(sorted(by_code)[:_MOST_NAMED])
        hint = f"there are: {named}{', ...' if len(by_code) > _MOST_NAMED else '.'}"
    raise RecordError(f"There is no {what} {code!r}; {hint}")
