"""Options that many commands share: which book, as of when, as known when, as JSON; and how to show progress."""

from __future__ import annotations

import json
import math
import os
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from datetime import UTC, datetime, timedelta
from typing import TYPE_CHECKING, Any

import click

if TYPE_CHECKING:
    from rich.console import RenderableType

    from fleet.records.history import History
    from fleet.store.book import Book

BOOK_VARIABLE = "WEARBOOK_BOOK"
DEFAULT_BOOK = "wearbook.db"
LAST_WRITE = 2**63 - 1  # the largest number that a database column holds

book_option = click.option(
    "--book", "where", metavar="PATH", help="The book: a file, or a database URL. [WEARBOOK_BOOK, else ./wearbook.db]"
)
json_option = click.option("--json", "as_json", is_flag=True, help="Print a JSON document instead of a table.")
as_of_option = click.option(
    "--as-of", metavar="TIME", help="Look at the book as of this moment, such as 2026-11-30T18:00. [now]"
)
known_by_option = click.option(
    "--known-by", metavar="TIME|WRITE", help="Use only what was entered by this time, or by this write number."
)


def book_of(where: str | None) -> str:
    """The book that is meant."""
    return where or os.environ.get(BOOK_VARIABLE) or DEFAULT_BOOK


@contextmanager
def opened(where: str | None) -> Iterator[Book]:
    """The book that is meant, open."""
    from fleet.store.book import open_book

    book = open_book(book_of(where))
    try:
        yield book
    finally:
        book.close()


def now() -> datetime:
    """This moment."""
    return datetime.now(UTC)


def history_of_book(book: Book, as_of: str | None, known_by: str | None) -> History:
    """What the book holds, as of a moment and as known by a moment."""
    from fleet.errors import RecordError
    from fleet.store.reading import read_history

    today = read_history(book, now())
    if as_of is None and known_by is None:
        return today
    moment = now() if as_of is None else parse_time("--as-of", as_of, today)
    known: int | datetime | None = None
    if known_by is not None:
        known = _write_number(known_by) if known_by.isdecimal() else parse_time("--known-by", known_by, today)
    if moment > now() + timedelta(days=1):
        raise RecordError("--as-of lies in the future: parts do not age before their robots run.")
    if isinstance(known, int) and known > today.write_number:
        raise RecordError(f"--known-by {known}: the last write of this book is {today.write_number}.")
    return read_history(book, moment, known)


def _write_number(written: str) -> int:
    """A write number; one beyond all that a book can hold stands for its last."""
    return min(int(written), LAST_WRITE) if len(written) < 20 else LAST_WRITE


def parse_time(option: str, written: str, history: History) -> datetime:
    """A time as people write it, in the book's home zone unless it states its offset.

    A date alone stands for the end of that day, or for now if the day is not over.
    """
    from fleet.errors import RecordError
    from fleet.records.fields import EARLIEST, LATEST
    from fleet.store.csv_cells import parse_moment

    try:
        start, end = parse_moment(written.strip(), history.zone)
    except RecordError as error:
        raise RecordError(f"{option} {error}.") from None
    if not EARLIEST <= start < LATEST:
        raise RecordError(f"{option} is {written!r}, outside the years 1990 to 2150.")
    if end is None:
        return start
    today = now().astimezone(end.tzinfo)
    return today if start <= today < end else end - timedelta(seconds=1)


class Number(click.ParamType[float]):
    """A plain finite number within bounds; `name` says of what, in words that fit behind "write" and "give"."""

    def __init__(self, name: str, low: float, high: float, example: str = "1.5") -> None:
        self.name = name
        self.low, self.high, self.example = low, high, example

    def convert(self, value: Any, param: click.Parameter | None, ctx: click.Context | None) -> float:
        try:
            number = float(value)
        except (TypeError, ValueError):
            number = math.nan
        if not math.isfinite(number) or "_" in str(value):
            self.fail(f"{value!r} is not a plain number: write {self.name} such as {self.example}.", param, ctx)
        if not self.low <= number <= self.high:
            self.fail(f"{number:g} cannot be: give {self.name} from {self.low:g} to {self.high:g}.", param, ctx)
        return number


class Role(click.ParamType[str]):
    """Who enters something, as short as a book can keep it."""

    name = "role"

    def convert(self, value: Any, param: click.Parameter | None, ctx: click.Context | None) -> str:
        from fleet.records.fields import FieldSpec, field_problem

        problem = field_problem(FieldSpec("code", "who enters it", optional=False), value)
        if problem is not None:
            self.fail(f"it {problem}.", param, ctx)
        return str(value)


by_option = click.option(
    "--by", "entered_by", default="bench", show_default=True, type=Role(), help="Role of who enters this."
)


def show(as_json: bool, document: Callable[[], dict[str, Any]], table: Callable[[], RenderableType]) -> None:
    """Print a result as JSON on plain standard output, or as a table."""
    if as_json:
        click.echo(json.dumps(document(), indent=1))
        return
    print_table(table())


def print_table(table: RenderableType) -> None:
    """Print a table as wide as the terminal, or as wide as it needs to be in a pipe."""
    from rich.console import Console

    console = Console(highlight=False)
    if not console.is_terminal:
        console = Console(highlight=False, width=160)
    console.print(table)


@contextmanager
def progress(what: str) -> Iterator[Callable[[str, int], None]]:
    """A line on standard error that says what is being done; silent in a pipe."""
    from rich.console import Console

    console = Console(stderr=True)
    with console.status(what) as status:
        yield lambda step, size: status.update(f"{what}: {step} ({size:,})")
