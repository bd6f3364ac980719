"""From a folder of CSV files to rows of text with their file and line, and to the columns each kind may have."""

from __future__ import annotations

import csv
import difflib
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path

from fleet.errors import BookError
from fleet.records.fields import Record, column_of, fields_of, kind_of
from fleet.records.history import KINDS
from fleet.records.ledger import LedgerRecord

LARGEST_FILE_BYTES = 200_000_000

# Columns in which a reference is written; a kind that is not named here is written as its own code.
REFERENCE_COLUMNS: dict[str, tuple[str, ...]] = {
    "position": ("robot", "position"),
    "unit": ("unit", "robot", "position"),
    "fitment": ("unit", "robot", "position", "slot", "place"),
    "session": ("robot", "session"),
    "part_mode": ("mode",),
    "hold": ("robot", "unit"),
}
FIELD_COLUMNS: dict[str, tuple[str, ...]] = {
    "comes_from": ("from_unit", "from_slot", "from_place"),
    "broken_by": ("broken_by_slot", "broken_by_place"),
}


@dataclass(frozen=True)
class Row:
    """One line of a file: its non-empty cells by column."""

    file: str
    line: int
    cells: dict[str, str]

    @property
    def where(self) -> str:
        """File and line, as problems name them."""
        return f"{self.file} line {self.line}"


@dataclass(frozen=True)
class KindColumns:
    """The columns a file of one kind must have, and may have."""

    needed: tuple[str, ...]
    optional: tuple[str, ...]


def columns_of_kind(cls: type[Record]) -> KindColumns:
    """What the header of a file of this kind may hold."""
    needed: list[str] = []
    optional: list[str] = ["record_id", "entered_at", "entered_by"]
    for name, spec in fields_of(cls).items():
        if spec.kind == "reference":
            columns = FIELD_COLUMNS.get(name) or REFERENCE_COLUMNS.get(spec.refers_to, (spec.refers_to,))
            only = columns[0] if len(columns) == 1 and not spec.optional else None
            (needed if only else optional).extend(columns)
        elif spec.optional or _has_default(cls, name):
            optional.append(column_of(name, spec))
        else:
            needed.append(column_of(name, spec))
    if issubclass(cls, LedgerRecord):
        optional.append("entered_at")
    return KindColumns(tuple(dict.fromkeys(needed)), tuple(c for c in dict.fromkeys(optional) if c not in needed))


def _has_default(cls: type[Record], name: str) -> bool:
    import dataclasses

    return next(f for f in dataclasses.fields(cls) if f.name == name).default is not dataclasses.MISSING


def read_folder(folder: Path, problem: Callable[[str], None]) -> dict[type[Record], list[Row]]:
    """The rows of every known CSV file in a folder; anything wrong with a file goes to `problem`.

    Only files named after a kind of record are read; nothing outside the folder is.
    """
    if not folder.is_dir():
        raise BookError(f"There is no folder {folder}: name the folder that holds the CSV files.")
    by_name = {f"{kind_of(cls)}.csv": cls for cls in KINDS}
    found: dict[type[Record], list[Row]] = {}
    for path in sorted(folder.glob("*.csv")):
        if path.name not in by_name:
            near = difflib.get_close_matches(path.name, by_name, 1)
            problem(f"{path.name}: no such kind of record{f'; did you mean {near[0]}' if near else ''}.")
        elif path.is_symlink():
            problem(f"{path.name}: is a link to somewhere else; put the file itself there.")
        elif not path.is_file():
            problem(f"{path.name}: is not a plain file.")
        else:
            found[by_name[path.name]] = _read_file(path, by_name[path.name], problem)
    if not found and not any(folder.glob("*.csv")):
        raise BookError(f"{folder} holds no CSV files; 'wearbook import --columns' lists their names and columns.")
    return found


def _read_file(path: Path, cls: type[Record], problem: Callable[[str], None]) -> list[Row]:
    if path.stat().st_size > LARGEST_FILE_BYTES:
        problem(f"{path.name}: is larger than {LARGEST_FILE_BYTES // 1_000_000} MB; split it.")
        return []
    rows: list[Row] = []
    try:
        with path.open(encoding="utf-8-sig", newline="") as file:
            reader = csv.reader(file, strict=True)
            header = [cell.strip() for cell in next(reader, [])]
            if not _header_is_sound(path.name, header, cls, problem):
                return []
            for cells in reader:
                if not any(cell.strip() for cell in cells):
                    continue
                if len(cells) != len(header):
                    problem(
                        f"{path.name} line {reader.line_num}: has {len(cells)} cells, the header has {len(header)}."
                    )
                    continue
                filled = {name: cell.strip() for name, cell in zip(header, cells, strict=True) if cell.strip()}
                rows.append(Row(path.name, reader.line_num, filled))
    except UnicodeDecodeError:
        problem(f"{path.name}: is not UTF-8 text; save it as CSV in UTF-8.")
    except OSError as error:
        problem(f"{path.name}: cannot be read ({error.strerror}).")
    except csv.Error as error:
        problem(f"{path.name}: is not a CSV file that can be read ({error}).")
    return rows


def _header_is_sound(name: str, header: list[str], cls: type[Record], problem: Callable[[str], None]) -> bool:
    columns = columns_of_kind(cls)
    known = (*columns.needed, *columns.optional)
    sound = True
    for column in header:
        if column not in known:
            near = difflib.get_close_matches(column, known, 1)
            hint = f"did you mean {near[0]}?" if near else f"it may have: {', '.join(known)}."
            problem(f"{name} line 1: unknown column {column!r}; {hint}")
            sound = False
    for column in columns.needed:
        if column not in header:
            problem(f"{name} line 1: column {column} is missing.")
            sound = False
    if len(set(header)) != len(header):
        problem(f"{name} line 1: a column stands twice.")
        sound = False
    return sound
