"""Collects the rows of the book, file by file, as a person or a log would have entered them."""

from __future__ import annotations

from collections import Counter
from datetime import datetime, time, timedelta
from random import Random

from demo_data.chance import between, whole_between
from demo_data.fleet_plan import KIT_DAY, LAST_DAY, ZONE

Row = dict[str, str]
Value = str | int | float | bool | datetime | None

SET_UP_ENTERED = datetime.combine(KIT_DAY, time(9), ZONE)
LATE_SHARE = {"session": 0.04, "failure": 0.03, "removal": 0.02, "fitment": 0.02}
LATE_DAYS = (1, 6)
_ORDERED = ("placement", "fitment", "removal", "failure", "bench_check", "stock_move")


def written(value: Value) -> str:
    """A value as it stands in a CSV file."""
    if value is None:
        return ""
    if isinstance(value, bool):
        return "yes" if value else "no"
    if isinstance(value, datetime):
        return value.isoformat()
    if isinstance(value, float):
        return f"{value:.10g}"
    return str(value)


class LedgerRows:
    """All rows so far, by kind of record."""

    def __init__(self, rng: Random) -> None:
        self._rng = rng
        self._rows: dict[str, list[Row]] = {}
        self._sequences: Counter[datetime] = Counter()

    def add(self, kind: str, **values: Value) -> Row:
        """Add a row of a set-up record, entered by the planner; None and "" leave the column empty."""
        return self._put(kind, {**values, "entered_at": SET_UP_ENTERED, "entered_by": "planner"})

    def _put(self, kind: str, values: dict[str, Value]) -> Row:
        row = {column: written(value) for column, value in values.items()}
        self._rows.setdefault(kind, []).append(row)
        return row

    def happened(self, kind: str, moment: datetime, entered_by: str, **values: Value) -> Row:
        """Add a row of the ledger; a few are entered days late, by the field lead."""
        ordered: dict[str, Value] = {}
        if kind in _ORDERED:
            ordered["sequence"] = self._sequences[moment]
            self._sequences[moment] += 1
        row = self._put(kind, {"happened_at": moment, **ordered, **values})
        ended = values.get("ended_at")
        known_from = ended if isinstance(ended, datetime) else moment
        entered_at, who = self._entry(kind, known_from, entered_by)
        row["entered_at"], row["entered_by"] = written(entered_at), who
        return row

    def files(self) -> dict[str, list[Row]]:
        """File name -> rows, each with all columns of its file."""
        files = {}
        for kind, rows in self._rows.items():
            columns = list(dict.fromkeys(column for row in rows for column in row))
            filled = [column for column in columns if any(row.get(column) for row in rows)]
            files[f"{kind}.csv"] = [{column: row.get(column, "") for column in filled} for row in rows]
        return files

    def _entry(self, kind: str, known_from: datetime, entered_by: str) -> tuple[datetime, str]:
        in_time = known_from.date() < LAST_DAY - timedelta(days=LATE_DAYS[1] + 1)
        if in_time and self._rng.random() < LATE_SHARE.get(kind, 0.0):
            days = whole_between(self._rng, *LATE_DAYS)
            return known_from + timedelta(days=days, minutes=int(between(self._rng, 0, 30))), "field lead"
        return known_from, entered_by
