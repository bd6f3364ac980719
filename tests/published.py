"""Published values and data sets from shared/, by case id and file name."""

from __future__ import annotations

import csv
from dataclasses import dataclass
from functools import cache
from pathlib import Path

SHARED = Path(__file__).resolve().parents[1] / "shared"


@dataclass(frozen=True)
class Case:
    """One check: the printed value (None where nothing was printed), its tolerance, and the recomputed value."""

    case_id: str
    quantity: str
    published: float | None
    tolerance: float | None
    recomputed: float


@cache
def _cases() -> dict[str, Case]:
    found = {}
    with (SHARED / "cases.csv").open(newline="", encoding="utf-8") as file:
        for row in csv.DictReader(file):
            published = float(row["published_value"]) if row["published_value"] else None
            tolerance = float(row["tolerance"]) if row["tolerance"] else None
            case_id = row["case_id"]
            found[case_id] = Case(case_id, row["quantity"], published, tolerance, float(row["recomputed_value"]))
    return found


def case(case_id: str) -> Case:
    """The check of this id."""
    return _cases()[case_id]


def agrees(case_id: str, value: float) -> bool:
    """Whether a value lies within the tolerance of the printed one."""
    check = _cases()[case_id]
    assert check.published is not None and check.tolerance is not None, f"{case_id} has no printed value"
    return abs(value - check.published) <= check.tolerance + 1e-12 * abs(check.published)


@cache
def table(name: str) -> dict[str, list[str]]:
    """A data file of shared/ by columns of text."""
    with (SHARED / name).open(newline="", encoding="utf-8") as file:
        rows = list(csv.DictReader(file))
    return {column: [row[column] for row in rows] for column in rows[0]}


def numbers(name: str, column: str) -> list[float]:
    """One column of a data file as numbers."""
    return [float(text) for text in table(name)[column]]
