"""One write: records checked against the whole book, stamped and kept in one transaction, or not at all."""

from __future__ import annotations

import secrets
from collections.abc import Callable, Iterator, Mapping, Sequence
from contextlib import contextmanager
from dataclasses import dataclass, field, replace
from datetime import datetime

from sqlalchemy import Connection, insert, select

from fleet.errors import RecordError
from fleet.records.consistency import Problem, problems_in
from fleet.records.fields import LATEST, Record, Stamp, kind_of
from fleet.records.history import KINDS, History
from fleet.store.book import Book
from fleet.store.reading import history_in, versions_of
from fleet.store.rows import microseconds_of, row_of
from fleet.store.tables import VERSIONS, book_write, record_index


def new_record_id() -> str:
    """A stable random id, unique without asking anyone."""
    return secrets.token_hex(8)


@dataclass(frozen=True)
class Entry:
    """Who writes, when and what for; `draft` makes a second press of the same button write nothing."""

    entered_at: datetime
    entered_by: str
    what: str
    draft: str | None = None


@dataclass(frozen=True)
class Claim:
    """When and by whom an imported row says it was first entered."""

    entered_at: datetime
    entered_by: str


@dataclass
class Writer:
    """Gathers what one write adds; everything is checked and kept when the `with` block ends."""

    history: History
    records: list[Record] = field(default_factory=list)
    claims: dict[str, Claim] = field(default_factory=dict)
    withdrawals: dict[str, str] = field(default_factory=dict)
    written_before: int | None = None
    write_number: int = 0
    explain: Callable[[Sequence[Problem]], Exception] | None = None

    def add(self, record: Record, claim: Claim | None = None) -> None:
        """Add one new record."""
        self.records.append(record)
        if claim is not None:
            self.claims[record.record_id] = claim

    def withdraw(self, record_id: str, reason: str) -> None:
        """Take one record back; all its versions stay in the book."""
        self.withdrawals[record_id] = reason


@contextmanager
def write(book: Book, entry: Entry) -> Iterator[Writer]:
    """One transaction: read the book, let the caller add, check everything, keep it.

    If the draft of `entry` was written before, `written_before` is that write's number and nothing is added.

    Raises
    ------
    RecordError
        If what was added contradicts the book; nothing is written then.
    """
    with book.writing() as connection:
        before = written_before(connection, entry.draft)
        writer = Writer(history=history_in(connection, LATEST), written_before=before)
        if before is not None:
            writer.write_number = before
            yield writer
            return
        yield writer
        _check(writer)
        writer.write_number = _keep(connection, entry, writer)


def records_of_write(connection: Connection, write_number: int) -> list[tuple[type[Record], str]]:
    """Kind and id of every record that first came in with this write."""
    found: list[tuple[type[Record], str]] = []
    for cls in KINDS:
        table = VERSIONS[cls]
        query = select(table.c.record_id).where(table.c.write_number == write_number, table.c.version == 1)
        found += [(cls, record_id) for record_id in connection.execute(query).scalars()]
    return found


def written_before(connection: Connection, draft: str | None) -> int | None:
    """The write in which a draft was kept; None if it was not."""
    if draft is None:
        return None
    query = select(book_write.c.write_number).where(book_write.c.draft == draft)
    return connection.execute(query).scalar()


def _check(writer: Writer) -> None:
    after = _without(writer.history, writer.withdrawals).with_records(writer.records)
    problems = problems_in(after)
    if not problems:
        return
    if writer.explain is not None:
        raise writer.explain(problems)
    raise RecordError(f"Not written: {problems[0].sentence}")


def _without(history: History, withdrawals: Mapping[str, str]) -> History:
    rows = {
        cls: {record_id: entry for record_id, entry in held.items() if record_id not in withdrawals}
        for cls, held in history.rows.items()
    }
    return replace(history, rows=rows)


def _keep(connection: Connection, entry: Entry, writer: Writer) -> int:
    result = connection.execute(
        insert(book_write).values(
            entered_at=microseconds_of(entry.entered_at),
            entered_by=entry.entered_by,
            what=entry.what,
            draft=entry.draft,
        )
    )
    assert result.inserted_primary_key is not None
    write_number = int(result.inserted_primary_key[0])
    by_kind: dict[type[Record], list[Record]] = {}
    for record in writer.records:
        by_kind.setdefault(type(record), []).append(record)
    index = [{"record_id": record.record_id, "kind": kind_of(type(record))} for record in writer.records]
    if index:
        connection.execute(insert(record_index), index)
    for cls, records in by_kind.items():
        rows = [
            row_of(record, _first_stamp(entry, write_number, writer.claims.get(record.record_id))) for record in records
        ]
        connection.execute(insert(VERSIONS[cls]), rows)
    for record_id, reason in writer.withdrawals.items():
        _withdraw(connection, entry, write_number, record_id, reason)
    return write_number


def _first_stamp(entry: Entry, write_number: int, claim: Claim | None) -> Stamp:
    return Stamp(
        version=1,
        write_number=write_number,
        entered_at=entry.entered_at if claim is None else claim.entered_at,
        entered_by=entry.entered_by if claim is None else claim.entered_by,
        entered_at_claimed=claim is not None,
    )


def _withdraw(connection: Connection, entry: Entry, write_number: int, record_id: str, reason: str) -> None:
    kind = connection.execute(select(record_index.c.kind).where(record_index.c.record_id == record_id)).scalar_one()
    cls = next(cls for cls in KINDS if kind_of(cls) == kind)
    last = versions_of(connection, cls, record_id)[-1]
    assert last.stamp is not None
    stamp = Stamp(
        version=last.stamp.version + 1,
        write_number=write_number,
        entered_at=entry.entered_at,
        entered_by=entry.entered_by,
        reason=reason,
        withdrawn=True,
    )
    connection.execute(insert(VERSIONS[cls]), [row_of(last, stamp)])
