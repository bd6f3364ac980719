"""From a book to a History: what had happened by one moment, as it was known by one moment."""

from __future__ import annotations

from datetime import datetime
from typing import Any

from sqlalchemy import ColumnElement, Connection, func, select

from fleet.records.fields import Record, fields_of, kind_of
from fleet.records.history import KINDS, History, history_of
from fleet.records.ledger import LEDGER
from fleet.store.book import Book
from fleet.store.rows import microseconds_of, record_of
from fleet.store.tables import VERSIONS, book_write, record_index

KnownBy = int | datetime | None


def read_history(book: Book, as_of: datetime, known_by: KnownBy = None) -> History:
    """Everything that had happened by `as_of`, as the book knew it by `known_by`.

    Parameters
    ----------
    as_of : datetime
        Aware moment; later ledger records are left out.
    known_by : int, datetime or None
        A write number, or a time of entry; None: all that is known now.
    """
    with book.reading() as connection:
        return history_in(connection, as_of, known_by)


def history_in(connection: Connection, as_of: datetime, known_by: KnownBy = None) -> History:
    """The same, inside a transaction that is open already."""
    last = select(func.coalesce(func.max(book_write.c.write_number), 0))
    if isinstance(known_by, int):
        last = last.where(book_write.c.write_number <= known_by)
    write_number = int(connection.execute(last).scalar_one())
    records = [record for cls in KINDS for record in _current(connection, cls, known_by)]
    if isinstance(known_by, datetime):
        records = _without_unknown_names(records)
    return history_of(records, as_of, write_number)


def record_ids_in(book: Book) -> set[str]:
    """Every record_id that the book has ever held."""
    with book.reading() as connection:
        return set(connection.execute(select(record_index.c.record_id)).scalars())


def _without_unknown_names(records: list[Record]) -> list[Record]:
    """Leave out records that name others which were entered only later (files may say so), and what names those.

    An optional name within the ledger, such as the session of a failure, is no reason to leave one out.
    """
    while True:
        known = {record.record_id for record in records}
        kept = [record for record in records if known.issuperset(_names_needed(record))]
        if len(kept) == len(records):
            return kept
        records = kept


def _names_needed(record: Record) -> list[str]:
    names = []
    for name, spec in fields_of(type(record)).items():
        target = getattr(record, name) if spec.kind == "reference" else None
        if target is not None and not (spec.optional and spec.refers_to in _LEDGER_KINDS):
            names.append(target)
    return names


_LEDGER_KINDS = {kind_of(cls) for cls in LEDGER}


def versions_of(connection: Connection, cls: type[Record], record_id: str) -> list[Record]:
    """Every version of one record, oldest first."""
    table = VERSIONS[cls]
    found = connection.execute(select(table).where(table.c.record_id == record_id).order_by(table.c.version))
    return [record_of(cls, row) for row in found.mappings()]


def _current(connection: Connection, cls: type[Record], known_by: KnownBy) -> list[Record]:
    """The newest known version of each record of a kind, unless it was withdrawn."""
    table = VERSIONS[cls]
    query = select(table).order_by(table.c.record_id, table.c.version)
    condition = _known(table, known_by)
    if condition is not None:
        query = query.where(condition)
    newest: dict[str, Any] = {}
    for row in connection.execute(query).mappings():
        newest[row["record_id"]] = row
    return [record_of(cls, row) for row in newest.values() if not row["withdrawn"]]


def _known(table: Any, known_by: KnownBy) -> ColumnElement[bool] | None:
    if known_by is None:
        return None
    if isinstance(known_by, datetime):
        known: ColumnElement[bool] = table.c.entered_at <= microseconds_of(known_by)
    else:
        known = table.c.write_number <= known_by
    return known
