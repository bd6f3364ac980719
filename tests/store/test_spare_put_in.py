"""A spare for a part that failed earlier, and the receipt that a draft left."""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import closing
from dataclasses import replace
from pathlib import Path

import pytest

from fleet.errors import RecordError
from fleet.records.ledger import Removal
from fleet.records.whereabouts import whereabouts_of
from fleet.store.book import Book
from fleet.store.entries import PartEntry, SpareEntry, log_part, log_spare, receipt_of
from fleet.store.reading import read_history
from tests.books import END, NOW, day, tiny_book

FAILED = PartEntry("R1-hip", "slot-disc", "failed", mode="disc: split", lot=None)
SPARE = SpareEntry("R1-hip", "slot-disc", "D-2")


@pytest.fixture
def book(tmp_path: Path) -> Iterator[Book]:
    with closing(tiny_book(tmp_path / "book.db")) as opened:
        yield opened


def test_a_spare_for_a_failed_part_takes_it_out_with_its_true_reason(book: Book) -> None:
    log_part(book, FAILED, day(60), NOW, "bench")
    log_spare(book, SPARE, day(61), NOW, "bench")
    history = read_history(book, END)
    (removal,) = history.of(Removal).values()
    assert removal.reason == "failed"
    fitted = whereabouts_of(history).fitted_now()
    (part,) = [p for p in fitted if p.fitment.slot == "slot-disc" and p.fitment.happened_at == day(61)]
    assert part.fitment.lot == "D-2"


def test_a_worn_part_is_taken_out_as_found_worn(book: Book) -> None:
    log_part(book, replace(FAILED, happened="found worn"), day(60), NOW, "bench")
    log_spare(book, SPARE, day(61), NOW, "bench")
    assert [removal.reason for removal in read_history(book, END).of(Removal).values()] == ["found worn"]


def test_a_spare_for_a_part_that_is_good_is_refused_and_says_what_to_do(book: Book) -> None:
    before = book.write_number()
    with pytest.raises(RecordError, match="log a swap instead"):
        log_spare(book, SPARE, day(61), NOW, "bench")
    assert book.write_number() == before


def test_an_empty_place_takes_a_spare_without_a_removal(book: Book) -> None:
    log_part(book, PartEntry("R1-hip", "slot-disc", "replaced while good"), day(60), NOW, "bench")
    log_spare(book, SPARE, day(61), NOW, "bench")
    assert len(read_history(book, END).of(Removal)) == 1


def test_the_receipt_of_a_draft_is_found_again_and_of_another_is_not(book: Book) -> None:
    written = log_spare_after_failure(book, "draft-1")
    found = receipt_of(book, "draft-1")
    assert found is not None and found.write_number == written and found.already
    assert receipt_of(book, "draft-2") is None


def log_spare_after_failure(book: Book, draft: str) -> int:
    log_part(book, FAILED, day(60), NOW, "bench")
    return log_spare(book, SPARE, day(61), NOW, "bench", draft).write_number
