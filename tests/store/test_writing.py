"""One write at a time: numbered, whole or not at all, and never repeated by a second press."""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import closing
from datetime import timedelta
from pathlib import Path

import pytest

from fleet.errors import RecordError
from fleet.records.ledger import Session
from fleet.store.book import Book, create_book
from fleet.store.reading import read_history, record_ids_in
from fleet.store.writing import Claim, Entry, new_record_id, records_of_write, write
from tests.books import END, ENTRY, NOW, add, day, fitment, removal, session, set_up, tiny_book


@pytest.fixture
def book(tmp_path: Path) -> Iterator[Book]:
    with closing(tiny_book(tmp_path / "book.db")) as opened:
        yield opened


def test_every_write_raises_the_number(tmp_path: Path) -> None:
    with closing(create_book(tmp_path / "book.db")) as book:
        assert book.write_number() == 0
        assert [add(book, [record]) for record in set_up()[:3]] == [1, 2, 3]
        assert book.write_number() == 3


def test_a_number_is_never_given_twice_even_after_a_refused_write(book: Book) -> None:
    with pytest.raises(RecordError):
        add(book, [fitment("U1", "disc", day(3))])
    first = add(book, [session("R1", day(1), 1.0)])
    assert (first, book.write_number()) == (2, 2)


def test_a_write_that_contradicts_the_book_is_refused_whole(book: Book) -> None:
    with pytest.raises(RecordError, match="Not written: disc of module U1 still held a part"):
        add(book, [session("R1", day(1), 1.0), fitment("U1", "disc", day(3))])
    assert len(read_history(book, END).of(Session)) == 0
    assert book.write_number() == 1


def test_an_error_in_the_block_writes_nothing(book: Book) -> None:
    with pytest.raises(ZeroDivisionError), write(book, ENTRY) as writer:
        writer.add(session("R1", day(1), 1.0))
        raise ZeroDivisionError
    assert book.write_number() == 1


def test_the_writer_sees_the_book_as_it_is(book: Book) -> None:
    ran = session("R1", day(1), 1.0)
    add(book, [ran])
    with write(book, ENTRY) as writer:
        assert ran.record_id in writer.history.of(Session)
        assert writer.written_before is None


def test_a_record_carries_who_entered_it_when_and_in_which_write(book: Book) -> None:
    ran = session("R1", day(1), 1.0)
    number = add(book, [ran], Entry(NOW, "bench", "session"))
    stamp = read_history(book, END).one(Session, ran.record_id).stamp
    assert stamp is not None
    assert (stamp.version, stamp.write_number, stamp.entered_at, stamp.entered_by) == (1, number, NOW, "bench")
    assert not stamp.entered_at_claimed and not stamp.withdrawn


def test_an_imported_time_of_entry_is_marked_as_claimed(book: Book) -> None:
    ran = session("R1", day(1), 1.0)
    with write(book, Entry(NOW, "bench", "import")) as writer:
        writer.add(ran, Claim(day(1, 18), "field lead"))
    stamp = read_history(book, END).one(Session, ran.record_id).stamp
    assert stamp is not None
    assert (stamp.entered_at, stamp.entered_by, stamp.entered_at_claimed) == (day(1, 18), "field lead", True)


def test_a_draft_writes_once(book: Book) -> None:
    def press() -> int:
        with write(book, Entry(NOW, "bench", "session", draft="draft-1")) as writer:
            if writer.written_before is None:
                writer.add(session("R1", day(1), 1.0))
        return writer.write_number

    assert press() == press() == 2
    assert len(read_history(book, END).of(Session)) == 1


def test_what_is_added_to_a_draft_that_was_written_is_not_kept(book: Book) -> None:
    for _ in range(2):
        with write(book, Entry(NOW, "bench", "session", draft="draft-1")) as writer:
            writer.add(session("R1", day(1), 1.0))
    assert len(read_history(book, END).of(Session)) == 1
    assert writer.written_before == 2


def test_the_records_of_a_write_are_found_again(book: Book) -> None:
    out, new = removal("U1 disc", day(3)), fitment("U1", "disc", day(3), lot="D-2")
    number = add(book, [out, new])
    with book.reading() as connection:
        found = records_of_write(connection, number)
    assert {record_id for _, record_id in found} == {out.record_id, new.record_id}


def test_ids_are_unique_and_short_enough_for_the_book() -> None:
    ids = {new_record_id() for _ in range(1000)}
    assert len(ids) == 1000
    assert all(len(record_id) <= 40 for record_id in ids)


def test_the_book_knows_every_id_that_it_ever_held(book: Book) -> None:
    ran = session("R1", day(1), 1.0)
    add(book, [ran])
    with write(book, Entry(NOW + timedelta(days=1), "bench", "withdrawal")) as writer:
        writer.withdraw(ran.record_id, "twice")
    assert ran.record_id in record_ids_in(book)
    assert ran.record_id not in read_history(book, END).of(Session)
