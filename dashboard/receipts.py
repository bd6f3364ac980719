"""A History and the number of a write in; what that write says happened, in sentences, out."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from datetime import datetime
from typing import TypeVar

from fleet.records.history import History
from fleet.records.ledger import Failure, Fitment, LedgerRecord, Removal, Session
from fleet.records.set_up import Lot, PartMode, PartType, Position, Robot, Slot
from fleet.records.whereabouts import whereabouts_of
from fleet.report.wording import NO_BREAK, count, hours

_L = TypeVar("_L", bound=LedgerRecord)


@dataclass(frozen=True)
class Told:
    """One session as the book holds it, with what happened to the parts in the same write."""

    robot: Robot
    session: Session
    entered_at: datetime
    parts: tuple[str, ...]
    opened: bool

    @property
    def sentence(self) -> str:
        """Hours, impacts and outcome."""
        said = [hours(self.session.run_seconds / 3600), count(self.session.impacts, "impact"), self.session.outcome]
        return ", ".join([*said, *([] if self.parts else ["all parts fine"])]) + "."


def told(history: History, write_number: int) -> Told | None:
    """What one write says; None if it holds no session, or was taken back."""
    sessions = _of_write(history, Session, write_number)
    if not sessions:
        return None
    session = sessions[0]
    fitted = _of_write(history, Fitment, write_number)
    removed = _of_write(history, Removal, write_number)
    assert session.stamp is not None
    return Told(
        robot=history.one(Robot, session.robot),
        session=session,
        entered_at=session.stamp.entered_at,
        parts=tuple(_sentences(history, _of_write(history, Failure, write_number), removed, fitted)),
        opened=bool(fitted or removed),
    )


def _of_write(history: History, kind: type[_L], write_number: int) -> list[_L]:
    return [entry for entry in history.of(kind).values() if entry.stamp and entry.stamp.write_number == write_number]


def _sentences(
    history: History, failures: Iterable[Failure], removals: Iterable[Removal], fitted: Iterable[Fitment]
) -> Iterable[str]:
    spare = {(entry.unit, entry.slot, entry.first_place): entry for entry in fitted}
    failed = {(entry.fitment, entry.place): entry for entry in failures}
    removed = {(entry.fitment, entry.place): entry for entry in removals}
    for at in dict.fromkeys([*failed, *removed]):
        old = history.one(Fitment, at[0])
        place = at[1] or old.first_place
        new = spare.get((old.unit, old.slot, place))
        what = _what(history, failed.get(at), removed.get(at))
        yield f"{_where(history, old, place)}: {what}; {_put_in(history, new)}."


def _what(history: History, failure: Failure | None, removal: Removal | None) -> str:
    if failure is not None:
        return f"{failure.finding}, {history.one(PartMode, failure.mode).label}"
    return removal.reason if removal is not None else ""


def _put_in(history: History, fitment: Fitment | None) -> str:
    if fitment is None:
        return "no spare fitted"
    return f"spare from {history.one(Lot, fitment.lot).code} fitted" if fitment.lot is not None else "spare fitted"


def _where(history: History, fitment: Fitment, place: int) -> str:
    slot = history.one(Slot, fitment.slot)
    label = history.one(PartType, slot.part_type).label
    position = whereabouts_of(history).position_of(fitment.unit, history.as_of)
    joint = f"{history.one(Position, position).label}, " if position is not None else ""
    return f"{joint}{label}{f' {place} of{NO_BREAK}{slot.count}' if slot.count > 1 else ''}"
