"""Reads a table of lives (lower, upper, entry, count, mode) from one CSV file, all problems at once."""

from __future__ import annotations

import csv
from dataclasses import dataclass
from pathlib import Path

from fleet.errors import BookError, DataError

COLUMNS = ("lower", "upper", "entry", "count", "mode")
_LARGEST_BYTES = 100_000_000


@dataclass(frozen=True)
class LifeTable:
    """The columns of a table of lives; `upper` is infinite where its cell was empty."""

    lower: list[float]
    upper: list[float]
    entry: list[float]
    count: list[float]
    mode: list[str | None]


def read_life_table(path: Path) -> LifeTable:
    """Read a CSV file with the columns `lower, upper[, entry, count, mode]`; an empty `upper` is a suspension.

    Raises
    ------
    BookError
        If the file cannot be read.
    DataError
        With every cell that is not a number, by line.
    """
    try:
        if path.stat().st_size > _LARGEST_BYTES:
            raise BookError(f"{path} is larger than {_LARGEST_BYTES // 1_000_000} MB; split it.")
        with path.open(encoding="utf-8-sig", newline="") as file:
            return _read(path, list(csv.reader(file, strict=True)))
    except FileNotFoundError:
        raise BookError(f"There is no file {path}: check the name.") from None
    except OSError as error:
        raise BookError(f"{path} cannot be read: {error.strerror}.") from None
    except (UnicodeDecodeError, csv.Error):
        raise DataError(f"{path} is not a CSV file in UTF-8.") from None


def _read(path: Path, lines: list[list[str]]) -> LifeTable:
    header = [cell.strip() for cell in lines[0]] if lines else []
    unknown = [name for name in header if name not in COLUMNS]
    if unknown or "lower" not in header or "upper" not in header or len(set(header)) != len(header):
        raise DataError(
            f"{path} has the header {', '.join(header) or '(none)'}: it needs lower and upper, and may have entry, "
            "count and mode."
        )
    problems: list[str] = []
    columns: dict[str, list[float]] = {"lower": [], "upper": [], "entry": [], "count": []}
    empty = {"upper": float("inf"), "entry": 0.0, "count": 1.0}
    modes: list[str | None] = []
    for line, cells in enumerate(lines[1:], start=2):
        if not any(cell.strip() for cell in cells):
            continue
        if len(cells) != len(header):
            problems.append(f"{path.name} line {line}: has {len(cells)} cells, the header has {len(header)}.")
            continue
        row = dict(zip(header, (cell.strip() for cell in cells), strict=True))
        for name, values in columns.items():
            values.append(_number(path, line, name, row.get(name, ""), empty, problems))
        modes.append(row.get("mode") or None)
    if problems:
        raise DataError("\n".join(problems))
    if not modes:
        raise DataError(f"{path} has no rows: give at least one life.")
    return LifeTable(columns["lower"], columns["upper"], columns["entry"], columns["count"], modes)


def _number(path: Path, line: int, name: str, cell: str, empty: dict[str, float], problems: list[str]) -> float:
    if not cell and name in empty:
        return empty[name]
    try:
        value = float(cell)
    except ValueError:
        value = float("nan")
    if value != value or abs(value) == float("inf"):
        problems.append(f"{path.name} line {line}: {name} is {cell!r}, not a finite number.")
        return 0.0
    return value
