"""What is read is what was written, as of any moment and as known by any write or time."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from contextlib import closing
from dataclasses import replace
from datetime import UTC, datetime, timedelta, timezone
from pathlib import Path
from zoneinfo import ZoneInfo

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from fleet.records.fields import EARLIEST, LATEST, Record, Stamp
from fleet.records.history import KINDS, History
from fleet.records.ledger import Fitment, Hold, Plate, Purchase, Release, Session, StockMove
from fleet.records.set_up import Presence, Printer, Robot, Spool, UsagePlan
from fleet.store.book import Book
from fleet.store.entries import SessionEntry, log_session
from fleet.store.reading import read_history
from fleet.store.rows import microseconds_of, moment_of, record_of, row_of
from fleet.store.writing import Claim, Entry, write
from tests.books import (
    END,
    FITTED,
    NOW,
    add,
    check,
    day,
    failure,
    first_fitting,
    fitment,
    placement,
    removal,
    session,
    session_use,
    set_up,
    tiny_book,
)


@pytest.fixture
def book(tmp_path: Path) -> Iterator[Book]:
    with closing(tiny_book(tmp_path / "book.db")) as opened:
        yield opened


def plain(history: History) -> Mapping[str, Record]:
    """Every record by id, without stamps."""
    held = (record for kind in history.rows.values() for record in kind.values())
    return {record.record_id: replace(record, stamp=None) for record in held}


def one_of_each_other_kind() -> list[Record]:
    ran = session("R1", day(1), 2.0, impacts=7, outcome="broken off", note="radio lost\nat the wall")
    return [
        Printer(record_id="printer", code="PR-1", label="by the window", nozzle_mm=0.4, change_minutes=12),
        Spool(record_id="spool", code="SP-1", material="PA-CF", grams_left=640.5),
        Presence(record_id="presence", weekday="Monday", start_minute=480, end_minute=1440),
        UsagePlan(
            record_id="plan", robot="R1", hours_per_week=9, session_hours=2, impacts_per_hour=5.5, valid_from=day(3)
        ),
        ran,
        session_use(ran, "R1-hip", run_seconds=7000, load_seconds=3000, turns=1200, impacts=0, basis="from log"),
        removal("U1 pins", day(2), "failed", place=4, looked_bad=True),
        fitment("U1", "pins", day(2), sequence=1, first_place=4, lot="P-1", serial="P-0004"),
        removal("U2 disc", day(2), "moved"),
        fitment("U2", "disc", day(3), prior="stated", prior_run_seconds=216_000, prior_turns=9, prior_days=30.5),
        failure("U1 pins", "pin: snapped", day(2), "over its limit", place=4, session=ran.record_id, note="clean"),
        check("U1", day(3), "doubtful", slot="slot-pins", mode="pin: snapped", note="play"),
        placement("U4", "R2-knee", day(4)),
        Hold(record_id="hold", happened_at=day(4), unit="U1", why="play"),
        Release(record_id="release", happened_at=day(5), hold="hold", why="mended"),
        Purchase(record_id="purchase", happened_at=day(1), code="PO-1", part_type="pin", quantity=100, due_at=day(9)),
        StockMove(
            record_id="move", happened_at=day(9), lot="P-1", quantity=100, reason="received", purchase="purchase"
        ),
        Plate(
            record_id="plate",
            happened_at=day(5),
            code="PL-1",
            printer="printer",
            lot="D-2",
            started=6,
            good=5,
            ended_at=day(5, 20),
        ),
    ]


def test_every_kind_of_record_reads_back_as_it_was_written(book: Book) -> None:
    added = one_of_each_other_kind()
    add(book, added)
    written = [*set_up(), *first_fitting(), *added]
    assert {type(record) for record in written} == set(KINDS)
    assert plain(read_history(book, END)) == {record.record_id: record for record in written}


@given(
    st.datetimes(datetime(1990, 1, 2), datetime(2149, 12, 30)),
    st.integers(-14 * 60, 14 * 60),
)
@settings(derandomize=True, deadline=None)
def test_a_moment_and_its_stated_offset_read_back_exactly(local: datetime, offset: int) -> None:
    moment = local.replace(tzinfo=timezone(timedelta(minutes=offset)))
    back = moment_of(microseconds_of(moment), offset)
    assert back == moment
    assert back.utcoffset() == moment.utcoffset()


@pytest.mark.parametrize(
    "moment", [EARLIEST, LATEST, datetime(2026, 10, 25, 2, 30, fold=1, tzinfo=ZoneInfo("Europe/Amsterdam"))]
)
def test_a_record_goes_through_its_row_unchanged(moment: datetime) -> None:
    stamp = Stamp(version=1, write_number=1, entered_at=NOW, entered_by="bench")
    robot = Robot(record_id="r", code="R9", label="Robot 9", in_service_from=moment, stamp=stamp)
    back = record_of(Robot, row_of(robot, stamp))  # type: ignore[arg-type]
    assert back == robot
    assert back.in_service_from.utcoffset() == moment.utcoffset()


def test_a_session_over_the_night_the_clocks_change_keeps_its_true_length(book: Book) -> None:
    zone = ZoneInfo("Europe/Amsterdam")
    ended = datetime(2026, 10, 25, 3, 30, tzinfo=zone)
    log_session(book, SessionEntry("R1", 3.0, ended_at=ended), datetime(2026, 10, 25, 12, tzinfo=zone), "bench")
    (ran,) = read_history(book, END).of(Session).values()
    assert (ran.ended_at, ran.ended_at - ran.happened_at) == (
        datetime(2026, 10, 25, 2, 30, tzinfo=UTC),
        timedelta(hours=3),
    )


def test_only_what_had_happened_is_read(book: Book) -> None:
    early, late = session("R1", day(1), 1.0), session("R1", day(9), 1.0)
    add(book, [early, late])
    assert set(read_history(book, day(5)).of(Session)) == {early.record_id}


# As known by


def _three_writes(book: Book) -> list[History]:
    """The history after each of the writes 1 to 3; the third one is entered late, for a time before the second."""
    states = [read_history(book, END)]
    add(book, [session("R1", day(5), 2.0, record_id="second")], Entry(day(5, 18), "bench", "session"))
    states.append(read_history(book, END))
    add(book, [session("R1", day(3), 2.0, record_id="third")], Entry(day(6, 9), "bench", "session"))
    states.append(read_history(book, END))
    return states


def test_any_past_state_of_knowledge_reads_back_exactly_by_its_write_number(book: Book) -> None:
    states = _three_writes(book)
    for number, state in enumerate(states, start=1):
        then = read_history(book, END, known_by=number)
        assert then.rows == state.rows
        assert then.write_number == state.write_number == number
    assert read_history(book, END, known_by=0).rows == {}


def test_any_past_state_of_knowledge_reads_back_exactly_by_its_time(book: Book) -> None:
    states = _three_writes(book)
    moments = (FITTED, day(5, 18), day(6, 9))
    for moment, state in zip(moments, states, strict=True):
        assert read_history(book, END, known_by=moment).rows == state.rows
        before = read_history(book, END, known_by=moment - timedelta(microseconds=1))
        assert before.rows != state.rows


def test_a_withdrawn_record_is_still_known_by_the_write_before(book: Book) -> None:
    ran = session("R1", day(1), 1.0)
    number = add(book, [ran])
    before = read_history(book, END)
    with write(book, Entry(NOW, "bench", "withdrawal")) as writer:
        writer.withdraw(ran.record_id, "never happened")
    assert ran.record_id not in read_history(book, END).of(Session)
    assert read_history(book, END, known_by=number).rows == before.rows
    assert read_history(book, END, known_by=NOW - timedelta(seconds=1)).rows == before.rows


def test_the_time_of_entry_may_be_claimed_and_then_decides_what_was_known(book: Book) -> None:
    ran = session("R1", day(1), 1.0)
    with write(book, Entry(NOW, "bench", "import")) as writer:
        writer.add(ran, Claim(day(2), "field lead"))
    assert ran.record_id in read_history(book, END, known_by=day(2)).of(Session)
    assert ran.record_id not in read_history(book, END, known_by=day(1, 23)).of(Session)
    assert ran.record_id not in read_history(book, END, known_by=1).of(Session)


def test_what_names_something_entered_only_later_was_not_known_either(book: Book) -> None:
    late = fitment("U1", "disc", day(2), sequence=1, lot="D-2", record_id="late disc")
    with write(book, Entry(NOW, "bench", "import")) as writer:
        writer.add(removal("U1 disc", day(2)), Claim(day(2), "bench"))
        writer.add(late, Claim(day(9), "bench"))
        writer.add(removal("late disc", day(4)), Claim(day(4), "bench"))
        writer.add(session("R1", day(1), 1.0, record_id="late session"), Claim(day(9), "bench"))
        broke = failure("U2 disc", "disc: split", day(1, 11), session="late session", record_id="broke")
        writer.add(broke, Claim(day(1, 12), "bench"))
    then = plain(read_history(book, END, known_by=day(5)))
    assert "late disc" not in then
    assert not any(getattr(record, "fitment", None) == "late disc" for record in then.values())
    # Its session is not known yet, but that the part failed is.
    assert "broke" in then and "late session" not in then
    assert set(read_history(book, END, known_by=day(9)).of(Fitment)) == set(read_history(book, END).of(Fitment))


def test_before_the_first_entry_nothing_was_known(book: Book) -> None:
    assert read_history(book, END, known_by=datetime(2025, 1, 1, tzinfo=UTC)).rows == {}
