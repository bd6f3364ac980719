"""Imports a folder of CSV files into a book: every problem at once, or everything in one write."""

from __future__ import annotations

from collections import Counter
from collections.abc import Callable, Sequence
from dataclasses import dataclass, field, replace
from datetime import UTC, datetime, timedelta, tzinfo
from pathlib import Path
from typing import Any
from zoneinfo import ZoneInfo, ZoneInfoNotFoundError

from fleet.errors import ImportProblems, RecordError
from fleet.records.consistency import Problem, problems_in
from fleet.records.fields import LATEST, FieldSpec, Record, column_of, fields_of, kind_of
from fleet.records.ledger import (
    BenchCheck,
    Failure,
    Fitment,
    Hold,
    LedgerRecord,
    Placement,
    Plate,
    Purchase,
    Release,
    Removal,
    Session,
    SessionUse,
    StockMove,
)
from fleet.records.set_up import SET_UP, Settings
from fleet.store.book import Book
from fleet.store.csv_cells import parse_cell, parse_moment, states_offset
from fleet.store.csv_references import References
from fleet.store.csv_row_references import RowReferences
from fleet.store.csv_rows import Row, read_folder
from fleet.store.reading import read_history, record_ids_in
from fleet.store.tables import ID_LENGTH
from fleet.store.writing import Claim, Entry, Writer, new_record_id, write

# Later kinds may refer to earlier ones.
ORDER: tuple[type[Record], ...] = (
    *SET_UP,
    Session,
    Placement,
    SessionUse,
    Fitment,
    Removal,
    Failure,
    BenchCheck,
    Hold,
    Release,
    Purchase,
    StockMove,
    Plate,
)
Progress = Callable[[str, int], None]
_ENTERED_AT = FieldSpec("moment", "when the row was first entered", optional=True)
_ENTERED_BY = FieldSpec("code", "who entered it", optional=True)


@dataclass(frozen=True)
class ImportReport:
    """What an import wrote, or would write: number of records by kind, and the zone taken for times without one."""

    counts: dict[str, int]
    zone: str
    zone_assumed_for: int
    write_number: int | None


@dataclass
class _Reading:
    """The state of one import: what was read, and what is wrong."""

    references: References
    zone: tzinfo
    taken: set[str]
    problems: list[str] = field(default_factory=list)
    records: list[Record] = field(default_factory=list)
    claims: dict[str, Claim] = field(default_factory=dict)
    sources: dict[str, Row] = field(default_factory=dict)
    zone_assumed_for: int = 0


def import_folder(
    book: Book, folder: Path, entry: Entry, dry_run: bool = False, progress: Progress | None = None
) -> ImportReport:
    """Read every CSV file of a folder and write all of it, or nothing.

    Raises
    ------
    ImportProblems
        With every problem found, each with its file and line.
    BookError
        If the folder is not there or holds no CSV files.
    """
    reading = _read(book, folder, progress)
    _refuse_the_future(reading, entry.entered_at)
    if reading.problems:
        raise ImportProblems(reading.problems)
    if dry_run:
        problems = problems_in(read_history(book, LATEST).with_records(reading.records))
        if problems:
            raise _explained(reading, problems)
        return _report(reading, None)
    with write(book, entry) as writer:
        _hand_over(reading, writer)
        if progress is not None:
            progress("checking and writing", len(reading.records))
    return _report(reading, writer.write_number)


def _refuse_the_future(reading: _Reading, now: datetime) -> None:
    """A ledger tells what has happened; a day of grace is for clocks and zones that were mistaken."""
    for record in reading.records:
        if isinstance(record, LedgerRecord) and record.happened_at > now + timedelta(days=1):
            row = reading.sources[record.record_id]
            reading.problems.append(f"{row.where}: happened_at is in the future; check the date.")


def _hand_over(reading: _Reading, writer: Writer) -> None:
    writer.explain = lambda problems: _explained(reading, problems)
    for record in reading.records:
        writer.add(record, reading.claims.get(record.record_id))


def _report(reading: _Reading, write_number: int | None) -> ImportReport:
    counts = Counter(kind_of(type(record)) for record in reading.records)
    return ImportReport(dict(counts), str(reading.zone), reading.zone_assumed_for, write_number)


def _explained(reading: _Reading, problems: Sequence[Problem]) -> ImportProblems:
    lines = []
    for problem in problems:
        row = reading.sources.get(problem.record_id)
        lines.append(f"{row.where if row is not None else 'the book'}: {problem.sentence}")
    return ImportProblems(lines)


def _read(book: Book, folder: Path, progress: Progress | None) -> _Reading:
    history = read_history(book, LATEST)
    problems: list[str] = []
    rows = read_folder(folder, problems.append)
    zone, zone_problem = _zone_of(rows.get(Settings, []), history.zone)
    if zone_problem is not None:
        problems.append(zone_problem)
    reading = _Reading(References(history), zone, record_ids_in(book), problems)
    if problems:
        return reading
    for cls in ORDER:
        held = rows.get(cls, [])
        if progress is not None and held:
            progress(f"reading {kind_of(cls).replace('_', ' ')}", len(held))
        _read_kind(reading, cls, held)
    return reading


def _zone_of(settings: Sequence[Row], home: tzinfo) -> tuple[tzinfo, str | None]:
    if not settings:
        return home, None
    row = settings[0]
    name = row.cells.get("zone", "")
    try:
        return ZoneInfo(name), None
    except (ZoneInfoNotFoundError, ValueError, OSError):
        return UTC, f"{row.where}: zone is {name!r}, not an IANA zone such as Europe/Amsterdam."


def _read_kind(reading: _Reading, cls: type[Record], rows: Sequence[Row]) -> None:
    """Rows that refer to rows of their own file come after those."""
    if cls is Fitment:
        _read_fitments(reading, rows)
        return
    batches = [rows]
    if cls is Failure:
        batches = [
            [r for r in rows if "broken_by_slot" not in r.cells],
            [r for r in rows if "broken_by_slot" in r.cells],
        ]
    elif cls is Release:
        batches = [[row] for row in rows]
    for batch in batches:
        made = [record for row in batch for record in _records_of_row(reading, cls, row)]
        reading.records += made
        reading.references.add(made)
    if cls is Removal:
        _resolve_moved_parts(reading)


def _read_fitments(reading: _Reading, rows: Sequence[Row]) -> None:
    """Where a moved part comes from is known only once the removals are read."""
    made = []
    for row in rows:
        plain = replace(row, cells={name: cell for name, cell in row.cells.items() if not name.startswith("from_")})
        for record in _records_of_row(reading, Fitment, plain):
            reading.sources[record.record_id] = row
            made.append(record)
    reading.records += made
    reading.references.add(made)


def _resolve_moved_parts(reading: _Reading) -> None:
    moved: list[Record] = []
    for at, record in enumerate(reading.records):
        row = reading.sources[record.record_id]
        if not isinstance(record, Fitment) or not any(name.startswith("from_") for name in row.cells):
            continue
        try:
            context = RowReferences(reading.references, reading.zone, row, record.happened_at)
            source, place = context.source_of_moved_part()
            found = replace(record, comes_from=source, from_place=place)
        except RecordError as error:
            reading.problems.append(f"{row.where}: {error}.")
            continue
        reading.records[at] = found
        moved.append(found)
    reading.references.add(moved)


def _records_of_row(reading: _Reading, cls: type[Record], row: Row) -> list[Record]:
    """The record a row states; several if a removal without a place empties a mixed set. Problems are noted."""
    before = len(reading.problems)
    values = _plain_values(reading, cls, row)
    moment = values.get("happened_at", LATEST)
    context = RowReferences(reading.references, reading.zone, row, moment)
    try:
        targets = context.values_of_references(cls)
    except RecordError as error:
        reading.problems.append(f"{row.where}: {error}.")
        return []
    claim = _claim_of(reading, row)
    own_id = _own_id(reading, row)
    if len(reading.problems) > before:
        return []
    made = []
    for number, target in enumerate(targets):
        record_id = own_id if number == 0 else new_record_id()
        try:
            record = cls(record_id=record_id, **{**values, **target})
        except RecordError as error:
            reading.problems.append(f"{row.where}: {error}")
            return []
        reading.sources[record_id] = row
        if claim is not None:
            reading.claims[record_id] = claim
        made.append(record)
    return made


def _plain_values(reading: _Reading, cls: type[Record], row: Row) -> dict[str, Any]:
    values: dict[str, Any] = {}
    for name, spec in fields_of(cls).items():
        written = row.cells.get(column_of(name, spec))
        if spec.kind == "reference" or written is None:
            continue
        try:
            if name == "happened_at":
                values.update(_moments(reading, spec, written))
            else:
                values[name] = parse_cell(spec, written, reading.zone)
            reading.zone_assumed_for += spec.kind == "moment" and not states_offset(written)
        except RecordError as error:
            reading.problems.append(f"{row.where}: {column_of(name, spec)} {error}.")
    missing = [
        column_of(name, spec)
        for name, spec in fields_of(cls).items()
        if spec.kind != "reference" and column_of(name, spec) not in row.cells and _is_needed(cls, name, spec)
    ]
    reading.problems += [f"{row.where}: {column} is empty." for column in missing]
    return values


def _is_needed(cls: type[Record], name: str, spec: FieldSpec) -> bool:
    return not spec.optional and not hasattr(cls, name)


def _moments(reading: _Reading, spec: FieldSpec, written: str) -> dict[str, datetime]:
    parse_cell(spec, written, reading.zone)
    start, end = parse_moment(written, reading.zone)
    return {"happened_at": start} if end is None else {"happened_at": start, "happened_until": end}


def _claim_of(reading: _Reading, row: Row) -> Claim | None:
    written = row.cells.get("entered_at")
    if written is None and "entered_by" not in row.cells:
        return None
    if written is None:
        reading.problems.append(f"{row.where}: entered_by needs entered_at beside it.")
        return None
    column = "entered_at"
    try:
        entered_at = parse_cell(_ENTERED_AT, written, reading.zone)
        column = "entered_by"
        entered_by = parse_cell(_ENTERED_BY, row.cells.get(column, "import"), reading.zone)
    except RecordError as error:
        reading.problems.append(f"{row.where}: {column} {error}.")
        return None
    return Claim(entered_at.astimezone(UTC), entered_by)


def _own_id(reading: _Reading, row: Row) -> str:
    """The id that a row states for its record, or a new one."""
    record_id = row.cells.get("record_id")
    if record_id is None:
        return new_record_id()
    if len(record_id) > ID_LENGTH or not record_id.isprintable():
        reading.problems.append(f"{row.where}: record_id is no id of at most {ID_LENGTH} characters.")
    elif record_id in reading.taken:
        reading.problems.append(f"{row.where}: record_id {record_id} is there already; leave the row out.")
    reading.taken.add(record_id)
    return record_id
