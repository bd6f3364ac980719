"""Meters: running totals at every joint, and what they had reached at any moment."""

from __future__ import annotations

import numpy as np
import pytest

from fleet.lives.meters import USE_CLOCKS, Meter, Meters, meters_of, session_use
from fleet.records.history import History
from fleet.records.set_up import Position
from fleet.records.whereabouts import whereabouts_of
from tests.books import day, history_with, placement, session
from tests.books import session_use as stated_use


def meters(history: History) -> Meters:
    return meters_of(history, whereabouts_of(history))


def hours_at(meter: Meter, *moments: float) -> list[float]:
    return meter.at(np.array(moments))[:, USE_CLOCKS.index("hours")].tolist()


def test_a_meter_stands_still_between_sessions_and_grows_within_them() -> None:
    first, second = session("R1", day(1, 10), 2.0), session("R1", day(3, 10), 1.0)
    meter = meters(history_with(first, second)).of_position["R1-hip"]
    moments = [day(1, 9), day(1, 11), day(1, 12), day(2), day(3, 10), day(3, 10, 30), day(9)]
    assert hours_at(meter, *(moment.timestamp() for moment in moments)) == [0.0, 1.0, 2.0, 2.0, 2.0, 2.5, 3.0]


def test_sessions_that_touch_lose_nothing_between_them() -> None:
    meter = meters(history_with(session("R1", day(1, 10), 2.0), session("R1", day(1, 12), 3.0))).of_position["R1-hip"]
    assert hours_at(meter, day(1, 12).timestamp(), day(1, 15).timestamp()) == [2.0, 5.0]


def test_a_joint_whose_robot_never_ran_reads_zero() -> None:
    meter = meters(history_with(session("R1", day(1), 2.0))).of_position["R2-knee"]
    assert hours_at(meter, day(5).timestamp()) == [0.0]


def test_a_meter_never_runs_back() -> None:
    ran = [session("R1", day(n, 8 + n % 3), 0.25 * (n % 5 + 1), impacts=n % 4) for n in range(1, 30)]
    meter = meters(history_with(*ran)).of_position["R1-hip"]
    read = meter.at(np.linspace(day(0).timestamp(), day(31).timestamp(), 977))
    assert (np.diff(read, axis=0) >= 0).all()
    assert read[-1].tolist() == pytest.approx(np.sum([_use(s, None) for s in ran], axis=0).tolist(), abs=1e-9)


def test_a_module_on_the_shelf_gathers_nothing() -> None:
    ran = [session("R1", day(n), 1.0) for n in range(1, 6)]
    moves = (placement("U1", None, day(2, 20)), placement("U1", "R1-hip", day(4, 20)))
    use = meters(history_with(*ran, *moves)).unit_use("U1", [day(n, 22) for n in range(6)])
    assert use[:, 0].tolist() == [0.0, 1.0, 2.0, 2.0, 2.0, 3.0]


def test_a_module_nobody_knows_gathers_nothing() -> None:
    assert meters(history_with()).unit_use("U9", [day(1)]).tolist() == [[0.0, 0.0, 0.0, 0.0]]


def _use(ran: object, stated: object) -> tuple[float, float, float, float]:
    hip = next(p for p in history_with().of(Position).values() if p.record_id == "R1-hip")
    return session_use(hip, ran, stated)  # type: ignore[arg-type]


def test_what_one_session_adds() -> None:
    ran = session("R1", day(1), 2.0, impacts=7)
    assert _use(ran, None) == (2.0, 2.0, 1200.0, 7.0)
    assert _use(ran, stated_use(ran, "R1-hip", run_seconds=3600)) == (1.0, 1.0, 600.0, 7.0)
    assert _use(ran, stated_use(ran, "R1-hip", load_seconds=900, turns=10, impacts=0)) == (2.0, 0.25, 10.0, 0.0)
