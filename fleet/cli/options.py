"""Options that many commands share: which book, as of when, as known when, as JSON; and how to show progress."""

from __future__ import annotations

import json
import math
import os
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from datetime import UTC, datetime
from typing import TYPE_CHECKING, Any

import click

if TYPE_CHECKING:
    from rich.console import RenderableType

    from fleet.records.history import History
    from fleet.store.book import Book

BOOK_VARIABLE = "WEARBOOK_BOOK"
DEFAULT_BOOK = "wearbook.db"

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
by_option = click.option("--by", "entered_by", default="bench", show_default=True, help="Role of who enters this.")


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
    from fleet.store.reading import read_history

    today = read_history(book, now())
    if as_of is None and known_by is None:
        return today
    moment = now() if as_of is None else parse_time("--as-of", as_of, today)
    known: int | datetime | None = None
    if known_by is not None:
        known = int(known_by) if known_by.isdecimal() else parse_time("--known-by", known_by, today)
    return read_history(book, moment, known)


def parse_time(option: str, written: str, history: History) -> datetime:
    """A time as people write it, in the book's home zone unless it states its offset."""
    from fleet.errors import RecordError
    from fleet.store.csv_cells import parse_moment

    try:
        start, end = parse_moment(written.strip(), history.zone)
    except RecordError as error:
        raise RecordError(f"{option} {error}.") from None
    return start if end is None else end


class Number(click.ParamType[float]):
    """A plain finite number within bounds; says in one sentence what is wrong."""

    def __init__(self, unit: str, low: float, high: float) -> None:
        self.name = unit
        self.low, self.high = low, high

    def convert(self, value: Any, param: click.Parameter | None, ctx: click.Context | None) -> float:
        try:
            number = float(value)
        except (TypeError, ValueError):
            self.fail(f"{value!r} is not a plain number of {self.name}: write it such as 1.5.", param, ctx)
        if not math.isfinite(number):
            self.fail(f"{value!r} is not a finite number of {self.name}.", param, ctx)
        if not self.low <= number <= self.high:
            self.fail(f"{number:g} {self.name} cannot be: give from {self.low:g} to {self.high:g}.", param, ctx)
        return number


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
