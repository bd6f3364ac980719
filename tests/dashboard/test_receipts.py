"""A receipt says what the book holds of one write, and nothing once it was taken back."""

from __future__ import annotations

from datetime import timedelta
from pathlib import Path

from dashboard.receipts import told
from fleet.store.entries import PartEntry, SessionEntry, log_session, undo
from fleet.store.reading import read_history
from tests.books import NOW, tiny_book

LATER = NOW + timedelta(minutes=5)


def test_a_receipt_tells_hours_parts_and_spares(tmp_path: Path) -> None:
    book = tiny_book(tmp_path / "book.db")
    parts = (
        PartEntry("R1-hip", "slot-disc", "failed", mode="disc: split", lot="D-2"),
        PartEntry("R1-hip", "slot-pins", "found worn", place=7, mode="pin: worn flat"),
        PartEntry("R1-knee", "slot-bearing", "replaced while good", lot="B-1"),
    )
    receipt = log_session(book, SessionEntry("R1", 1.5, impacts=1, parts=parts), NOW, "bench")
    said = told(read_history(book, LATER), receipt.write_number)
    assert said is not None
    assert said.sentence == "1.5\u00a0h, 1\u00a0impact, stopped."
    assert said.opened
    assert said.parts == (
        "left hip, disc: stopped, disc split; spare from D-2 fitted.",
        "left hip, pin 7 of\u00a013: found worn, pin worn flat; no spare fitted.",
        "left knee, bearing: replaced while good; spare from B-1 fitted.",
    )
    undo(book, receipt.write_number, LATER, "bench")
    assert told(read_history(book, LATER), receipt.write_number) is None
    book.close()


def test_a_session_without_a_word_about_parts_says_they_are_fine(tmp_path: Path) -> None:
    book = tiny_book(tmp_path / "book.db")
    receipt = log_session(book, SessionEntry("R2", 2), NOW, "bench")
    said = told(read_history(book, LATER), receipt.write_number)
    assert said is not None
    assert said.sentence == "2\u00a0h, 0\u00a0impacts, finished, all parts fine."
    assert not said.opened
    assert told(read_history(book, LATER), 1) is None
    book.close()
