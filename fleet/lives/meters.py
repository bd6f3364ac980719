"""From sessions and placements to the use that had reached each joint and module by any moment, in every clock."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from datetime import datetime

import numpy as np
from numpy.typing import NDArray

from fleet.records.history import History
from fleet.records.ledger import Session, SessionUse
from fleet.records.set_up import Position
from fleet.records.whereabouts import Whereabouts

FloatArray = NDArray[np.float64]

# The clocks that sessions drive; calendar days need no meter.
USE_CLOCKS = ("hours", "load_hours", "turns", "impacts")
_HOURS, _LOAD, _TURNS, _IMPACTS = range(4)


@dataclass(frozen=True, eq=False)
class Meter:
    """Running total of use at one joint's place.

    Parameters
    ----------
    moment : array of float, shape (n,)
        Starts and ends of sessions in order [s since 1970, UTC].
    total : array of float, shape (n, 4)
        Use by then, in the order of USE_CLOCKS [h, h, turns, impacts].
    """

    moment: FloatArray
    total: FloatArray

    def at(self, moments: FloatArray) -> FloatArray:
        """Use by each moment, shape (len(moments), 4); within a session it has grown by the linear share."""
        if self.moment.size == 0:
            return np.zeros((moments.size, len(USE_CLOCKS)))
        columns = [np.interp(moments, self.moment, self.total[:, clock]) for clock in range(len(USE_CLOCKS))]
        return np.column_stack(columns)


@dataclass(frozen=True, eq=False)
class Meters:
    """The meters of all joints, and where each module sat."""

    of_position: Mapping[str, Meter]
    whereabouts: Whereabouts

    def unit_use(self, unit: str, moments: Sequence[datetime]) -> FloatArray:
        """Use that had reached a module by each moment, wherever it sat, shape (len(moments), 4)."""
        at = np.array([moment.timestamp() for moment in moments])
        total = np.zeros((at.size, len(USE_CLOCKS)))
        for stay in self.whereabouts.stays_of_unit.get(unit, ()):
            if stay.position is None:
                continue
            start = stay.start.timestamp()
            end = np.inf if stay.end is None else stay.end.timestamp()
            meter = self.of_position[stay.position]
            total += meter.at(np.clip(at, start, end)) - meter.at(np.array([start]))
        return total


def meters_of(history: History, whereabouts: Whereabouts) -> Meters:
    """The meters of every joint, from the sessions of its robot.

    A joint runs the hours of its robot and takes its impacts; its turns follow from `turns_per_hour`; what a
    `session_use` states for it takes the place of these.
    """
    by_robot: dict[str, list[Session]] = defaultdict(list)
    for session in history.of(Session).values():
        by_robot[session.robot].append(session)
    stated = {(use.session, use.position): use for use in history.of(SessionUse).values()}
    return Meters(
        of_position={
            position.record_id: _meter(position, by_robot.get(position.robot, []), stated)
            for position in history.of(Position).values()
        },
        whereabouts=whereabouts,
    )


def _meter(position: Position, sessions: Sequence[Session], stated: Mapping[tuple[str, str], SessionUse]) -> Meter:
    if not sessions:
        return Meter(np.zeros(0), np.zeros((0, len(USE_CLOCKS))))
    moment = np.array([[s.happened_at.timestamp(), s.ended_at.timestamp()] for s in sessions]).reshape(-1)
    use = np.array(
        [session_use(position, session, stated.get((session.record_id, position.record_id))) for session in sessions]
    )
    total = np.zeros((moment.size, len(USE_CLOCKS)))
    total[1::2] = np.cumsum(use, axis=0)
    total[2::2] = total[1:-1:2]
    return Meter(moment, total)


def session_use(position: Position, session: Session, stated: SessionUse | None) -> tuple[float, float, float, float]:
    """What one session added at one joint, in the order of USE_CLOCKS [h, h, turns, impacts]."""
    run, load, impacts = session.run_seconds, session.run_seconds, session.impacts
    turns = None
    if stated is not None:
        run = session.run_seconds if stated.run_seconds is None else stated.run_seconds
        load = run if stated.load_seconds is None else stated.load_seconds
        impacts = session.impacts if stated.impacts is None else stated.impacts
        turns = stated.turns
    hours = run / 3600
    return hours, load / 3600, hours * position.turns_per_hour if turns is None else float(turns), float(impacts)
