"""What people log at the bench: sessions, parts, checks, releases, and taking one back."""

from __future__ import annotations

import math
from collections.abc import Iterator
from concurrent.futures import ThreadPoolExecutor
from contextlib import closing
from datetime import timedelta
from pathlib import Path

import pytest

from fleet.errors import RecordError
from fleet.records.ledger import BenchCheck, Failure, Fitment, Hold, Release, Removal, Session
from fleet.records.whereabouts import whereabouts_of
from fleet.store.book import Book
from fleet.store.entries import (
    CheckEntry,
    PartEntry,
    Receipt,
    SessionEntry,
    lift_hold,
    log_check,
    log_part,
    log_session,
    open_hold_on,
    undo,
)
from fleet.store.reading import read_history, versions_of
from tests.books import END, NOW, add, day, fitment, removal, tiny_book

DISC = PartEntry("R1-hip", "slot-disc", "failed", mode="disc: split", lot="D-2", cause="print")
PIN_7 = PartEntry("R1-hip", "slot-pins", "failed", place=7, mode="pin: snapped", lot="P-1")


@pytest.fixture
def book(tmp_path: Path) -> Iterator[Book]:
    with closing(tiny_book(tmp_path / "book.db")) as opened:
        yield opened


def log(book: Book, *parts: PartEntry, draft: str | None = None, **changed: object) -> Receipt:
    values: dict[str, object] = {"robot": "R1", "hours": 1.5, "impacts": 4, "ended_at": NOW, "parts": parts}
    return log_session(book, SessionEntry(**{**values, **changed}), NOW, "bench", draft)  # type: ignore[arg-type]


# Sessions


def test_a_session_as_planned_is_one_record(book: Book) -> None:
    receipt = log(book)
    (ran,) = read_history(book, END).of(Session).values()
    assert (ran.robot, ran.run_seconds, ran.impacts, ran.outcome) == ("R1", 5400, 4, "finished")
    assert (ran.happened_at, ran.ended_at) == (NOW - timedelta(hours=1.5), NOW)
    assert receipt.record_ids == (ran.record_id,)
    assert receipt.sentence == "R1: 1.5 h, 4 impacts, 0 parts."
    assert (receipt.write_number, receipt.already) == (2, False)


def test_a_session_logged_when_it_ends_ends_now(book: Book) -> None:
    log(book, ended_at=None)
    (ran,) = read_history(book, END).of(Session).values()
    assert ran.ended_at == NOW


def test_a_late_entry_keeps_its_true_date_and_is_marked_late(book: Book) -> None:
    ended = NOW - timedelta(days=1)
    receipt = log(book, ended_at=ended)
    (ran,) = read_history(book, END).of(Session).values()
    assert (ran.happened_at, ran.ended_at) == (ended - timedelta(hours=1.5), ended)
    assert ran.stamp is not None and ran.stamp.entered_at == NOW
    assert receipt.sentence == "R1: 1.5 h, 4 impacts, 0 parts, late entry for 2026-05-31 18:00."


def test_a_part_that_stopped_the_robot_failed_at_the_end_and_its_spare_came_after(book: Book) -> None:
    log(book, DISC)
    history = read_history(book, END)
    (ran,), (broke,), (out,) = (tuple(history.of(cls).values()) for cls in (Session, Failure, Removal))
    spare = list(history.of(Fitment).values())[-1]
    assert ran.outcome == "stopped"
    assert (broke.fitment, broke.happened_at, broke.finding) == ("U1 disc", ran.ended_at, "stopped")
    assert (broke.mode, broke.cause, broke.session, broke.how_found) == (
        "disc: split",
        "print",
        ran.record_id,
        "during the session",
    )
    assert (out.fitment, out.reason, out.happened_at) == ("U1 disc", "failed", ran.ended_at)
    assert (spare.unit, spare.slot, spare.lot, spare.happened_at) == ("U1", "slot-disc", "D-2", ran.ended_at)


def test_one_of_several_pins_did_not_stop_the_robot(book: Book) -> None:
    log(book, PIN_7)
    history = read_history(book, END)
    (broke,) = history.of(Failure).values()
    assert (broke.place, broke.finding, broke.how_found) == (7, "over its limit", "after the session")
    assert next(iter(history.of(Session).values())).outcome == "finished"
    spare = list(history.of(Fitment).values())[-1]
    assert (spare.first_place, spare.count) == (7, 1)
    assert len([p for p in whereabouts_of(history).fitted_now() if p.fitment.unit == "U1"]) == 15


def test_a_failed_part_without_a_spare_stays_where_it_is(book: Book) -> None:
    log(book, PartEntry("R1-hip", "slot-disc", "failed", mode="disc: split"))
    history = read_history(book, END)
    assert len(history.of(Failure)) == 1
    assert len(history.of(Removal)) == 0


def test_a_session_broken_off_and_one_stopped_are_told_apart(book: Book) -> None:
    log(book, broken_off=True)
    log(book, DISC, broken_off=True, ended_at=NOW - timedelta(hours=5))
    assert [ran.outcome for ran in read_history(book, END).of(Session).values()] == ["stopped", "broken off"]


@pytest.mark.parametrize("hours", [math.nan, math.inf, -1.0, 745.0])
def test_hours_that_cannot_be_are_refused(book: Book, hours: float) -> None:
    with pytest.raises(RecordError, match="hours is"):
        log(book, hours=hours)
    assert book.write_number() == 1


def test_the_future_is_refused_but_not_a_clock_a_little_ahead(book: Book) -> None:
    with pytest.raises(RecordError, match="is in the future"):
        log(book, ended_at=NOW + timedelta(minutes=6))
    assert log(book, ended_at=NOW + timedelta(minutes=4)).write_number == 2


def test_an_overlapping_session_is_refused_and_names_the_other(book: Book) -> None:
    log(book)
    with pytest.raises(RecordError, match=r"overlaps the one from 2026-06-01 16:30 to 2026-06-01 18:00"):
        log(book, ended_at=NOW + timedelta(minutes=1))
    with pytest.raises(RecordError, match=r"R1 from 2026-06-01 16:30 to 2026-06-01 18:00 overlaps the one from"):
        log(book, ended_at=NOW - timedelta(minutes=1))
    assert book.write_number() == 2


def test_a_robot_nobody_knows_is_refused(book: Book) -> None:
    with pytest.raises(RecordError, match="no such robot"):
        log(book, robot="R9")


def test_a_draft_pressed_twice_is_written_once(book: Book) -> None:
    first, second = log(book, DISC, draft="d"), log(book, DISC, draft="d")
    assert (first.already, second.already) == (False, True)
    assert first.write_number == second.write_number == book.write_number()
    assert first.sentence == second.sentence
    assert len(read_history(book, END).of(Session)) == 1


def test_a_draft_pressed_by_two_hands_at_once_is_written_once(book: Book) -> None:
    with ThreadPoolExecutor(4) as hands:
        receipts = list(hands.map(lambda _: log(book, draft="d"), range(8)))
    assert sorted(receipt.already for receipt in receipts) == [False] + [True] * 7
    assert len(read_history(book, END).of(Session)) == 1


# Parts outside a session


def swap(book: Book, part: PartEntry, moment: object = None) -> Receipt:
    return log_part(book, part, moment, NOW, "bench")  # type: ignore[arg-type]


def test_a_good_part_replaced_is_a_removal_and_no_failure(book: Book) -> None:
    receipt = swap(book, PartEntry("R1-hip", "slot-disc", "replaced while good", lot="D-2"))
    history = read_history(book, END)
    (out,) = history.of(Removal).values()
    assert (out.reason, out.happened_at, len(history.of(Failure))) == ("replaced while good", NOW, 0)
    assert receipt.sentence == "R1 left hip: disc replaced while good."


def test_a_part_found_worn_stopped_nothing(book: Book) -> None:
    receipt = swap(book, PartEntry("R1-hip", "slot-disc", "found worn", mode="disc: worn", lot="D-2"), day(3))
    (broke,) = read_history(book, END).of(Failure).values()
    (out,) = read_history(book, END).of(Removal).values()
    assert (broke.finding, broke.happened_at, broke.session, out.reason) == ("found worn", day(3), None, "found worn")
    assert receipt.sentence == "R1 left hip: disc found worn (disc worn)."


def test_a_failure_logged_at_the_end_of_a_session_belongs_to_it(book: Book) -> None:
    log(book)
    swap(book, DISC, NOW)
    history = read_history(book, END)
    (broke,), (ran,) = history.of(Failure).values(), history.of(Session).values()
    assert broke.session == ran.record_id


@pytest.mark.parametrize(
    ("part", "said"),
    [
        (PartEntry("R1-hip", "slot-pins", "failed", place=14, mode="pin: snapped"), "places 1 to 13; 14 is not one"),
        (PartEntry("R1-hip", "slot-disc", "failed"), "Say how it failed"),
        (PartEntry("R1-hip", "slot-disc", "failed", mode="pin: snapped"), "not one of this part type"),
        (PartEntry("R1-hip", "slot-disc", "failed", mode="disc: split", lot="P-1"), "holds pin, but slot disc takes"),
    ],
)
def test_what_cannot_be_is_refused_in_a_sentence(book: Book, part: PartEntry, said: str) -> None:
    with pytest.raises(RecordError, match=said):
        swap(book, part)
    assert book.write_number() == 1


def test_a_part_cannot_fail_before_it_was_fitted(book: Book) -> None:
    add(book, [removal("U1 disc", day(3)), fitment("U1", "disc", day(5), lot="D-2")])
    with pytest.raises(RecordError, match=r"held no part at .* a part cannot fail before it was fitted"):
        swap(book, DISC, day(4))
    with pytest.raises(RecordError, match="held no module at"):
        swap(book, DISC, day(-2))


def test_a_part_fails_once(book: Book) -> None:
    swap(book, PartEntry("R1-hip", "slot-disc", "failed", mode="disc: split"))
    with pytest.raises(RecordError, match="a part fails once"):
        swap(book, PartEntry("R1-hip", "slot-disc", "failed", mode="disc: split"))


# Checks and holds


def test_a_good_check_holds_nothing(book: Book) -> None:
    receipt = log_check(book, CheckEntry("R1-hip", None, None, good=True), day(3), NOW, "bench")
    history = read_history(book, END)
    (looked,) = history.of(BenchCheck).values()
    assert (looked.unit, looked.verdict, looked.happened_at) == ("U1", "good", day(3))
    assert len(history.of(Hold)) == 0
    assert receipt.sentence == "R1 left hip: checked, good."


def test_a_doubtful_check_holds_the_joint_until_a_person_says_why_not(book: Book) -> None:
    log_check(book, CheckEntry("R1-hip", "slot-pins", "pin: snapped", good=False, note="play"), None, NOW, "bench")
    history = read_history(book, NOW)
    robot, hip = history.rows[_kind(history, "R1")]["R1"], history.rows[_kind(history, "R1-hip")]["R1-hip"]
    (hold,) = history.of(Hold).values()
    assert (hold.unit, hold.why) == ("U1", "play")
    assert open_hold_on(history, robot, hip) == hold.record_id  # type: ignore[arg-type]
    assert open_hold_on(history, robot, None) is None  # type: ignore[arg-type]
    with pytest.raises(RecordError, match="Say why"):
        lift_hold(book, hold.record_id, "  ", NOW, "bench")
    lift_hold(book, hold.record_id, "tightened", NOW, "bench")
    (release,) = read_history(book, END).of(Release).values()
    assert (release.hold, release.why) == (hold.record_id, "tightened")
    assert open_hold_on(read_history(book, NOW), robot, hip) is None  # type: ignore[arg-type]
    with pytest.raises(RecordError, match="that hold was lifted already"):
        lift_hold(book, hold.record_id, "again", NOW, "bench")
    with pytest.raises(RecordError, match="no such hold"):
        lift_hold(book, "gone", "why not", NOW, "bench")


def _kind(history: object, record_id: str) -> type:
    return next(kind for kind, held in history.rows.items() if record_id in held)  # type: ignore[attr-defined]


# Undo


def test_undo_withdraws_the_whole_write_and_leaves_the_old_part_fitted(book: Book) -> None:
    before = read_history(book, END)
    receipt = log(book, DISC)
    said = undo(book, receipt.write_number, NOW, "bench", "wrong robot")
    after = read_history(book, END)
    assert {kind: held for kind, held in after.rows.items() if held} == dict(before.rows)
    assert said.sentence == f"Undone: 4 records of write {receipt.write_number} taken back."
    assert book.write_number() == receipt.write_number + 1


def test_what_was_undone_stays_in_the_book_with_its_reason(book: Book) -> None:
    receipt = log(book)
    undo(book, receipt.write_number, NOW + timedelta(minutes=1), "bench", "wrong robot")
    with book.reading() as connection:
        first, last = versions_of(connection, Session, receipt.record_ids[0])
    assert first.stamp is not None and last.stamp is not None
    assert (last.stamp.version, last.stamp.withdrawn, last.stamp.reason) == (2, True, "wrong robot")
    assert (last.stamp.entered_at, last.stamp.entered_by) == (NOW + timedelta(minutes=1), "bench")
    assert (first.stamp.version, first.stamp.withdrawn) == (1, False)
    assert receipt.record_ids[0] in read_history(book, END, known_by=receipt.write_number).of(Session)


def test_a_write_is_undone_once(book: Book) -> None:
    receipt = log(book)
    undo(book, receipt.write_number, NOW, "bench")
    with pytest.raises(RecordError, match="Nothing of write 2 is left to undo"):
        undo(book, receipt.write_number, NOW, "bench")
    with pytest.raises(RecordError, match="Nothing of write 99"):
        undo(book, 99, NOW, "bench")


def test_what_later_entries_build_on_is_not_undone_under_them(book: Book) -> None:
    first = swap(book, PartEntry("R1-hip", "slot-disc", "replaced while good", lot="D-2"), day(3))
    second = swap(book, PartEntry("R1-hip", "slot-disc", "replaced while good", lot="D-2"), day(4))
    with pytest.raises(RecordError, match=f"build on that one: undo write {second.write_number} first"):
        undo(book, first.write_number, NOW, "bench")
    undo(book, second.write_number, NOW, "bench")
    undo(book, first.write_number, NOW, "bench")
    assert len(read_history(book, END).of(Removal)) == 0
