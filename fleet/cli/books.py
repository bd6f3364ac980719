"""Commands that make, fill and show a book."""

from __future__ import annotations

import os
from pathlib import Path
from typing import TYPE_CHECKING

import click

from fleet.cli.options import (
    BOOK_VARIABLE,
    book_of,
    book_option,
    by_option,
    now,
    opened,
    print_table,
    progress,
)
from fleet.errors import ImportProblems

if TYPE_CHECKING:
    from fleet.store.csv_import import ImportReport

DEMO_BOOK = "demo.db"
MOST_PROBLEMS_SHOWN = 40


@click.command("new")
@click.argument("where", required=False, metavar="[PATH]")
@click.option("--title", default="My fleet", show_default=True, help="What this fleet is called.")
@click.option("--zone", default="UTC", show_default=True, help="Home zone, such as Europe/Amsterdam.")
@click.option("--currency", default="EUR", show_default=True, help="Currency of all costs.")
@click.option("--bare", is_flag=True, help="Leave title, zone and currency to an imported settings.csv.")
def new_command(where: str | None, title: str, zone: str, currency: str, bare: bool) -> None:
    """Make an empty book at PATH (a file, or a database URL)."""
    from zoneinfo import ZoneInfo, ZoneInfoNotFoundError

    from fleet.errors import RecordError
    from fleet.records.set_up import Settings
    from fleet.store.book import create_book
    from fleet.store.writing import Entry, new_record_id, write

    try:
        ZoneInfo(zone)
    except (ZoneInfoNotFoundError, ValueError, OSError):
        raise RecordError(f"--zone {zone!r} is not an IANA zone such as Europe/Amsterdam.") from None
    settings = Settings(record_id=new_record_id(), title=title, zone=zone, currency=currency)
    book = create_book(book_of(where))
    if not bare:
        with write(book, Entry(now(), "planner", "new book")) as writer:
            writer.add(settings)
    book.close()
    click.echo(f"Made {book.where}. Next: 'wearbook import FOLDER --book {book.where}'.")


@click.command("import")
@click.argument("folder", required=False, type=click.Path(path_type=Path))
@book_option
@by_option
@click.option("--dry-run", is_flag=True, help="Check everything, write nothing.")
@click.option("--columns", is_flag=True, help="List the files and columns that can be imported, and stop.")
def import_command(folder: Path | None, where: str | None, entered_by: str, dry_run: bool, columns: bool) -> None:
    """Read every CSV file in FOLDER into the book: all of it, or, with a list of problems, nothing.

    Each kind of record has its file, such as robot.csv or session.csv; 'wearbook import --columns' lists them. Times
    without an offset are in the book's home zone; a date alone means that day; an empty cell means unknown or none.
    """
    from fleet.store.csv_import import import_folder
    from fleet.store.writing import Entry

    if columns:
        _print_columns()
        return
    if folder is None:
        raise click.UsageError("Name the folder that holds the CSV files, or ask for --columns.")
    with opened(where) as book, progress("importing") as step:
        try:
            report = import_folder(book, folder, Entry(now(), entered_by, f"import of {folder.name}"), dry_run, step)
        except ImportProblems as found:
            raise _shortened(found) from None
    click.echo(_imported(report, dry_run))


def _shortened(found: ImportProblems) -> ImportProblems:
    if len(found.problems) <= MOST_PROBLEMS_SHOWN:
        return found
    left = len(found.problems) - MOST_PROBLEMS_SHOWN
    short = ImportProblems((*found.problems[:MOST_PROBLEMS_SHOWN], f"... and {left} more."))
    short.args = (short.args[0].replace(f"{len(short.problems)} problems", f"{len(found.problems)} problems", 1),)
    return short


def _imported(report: ImportReport, dry_run: bool) -> str:
    said = ", ".join(f"{number} {kind.replace('_', ' ')}" for kind, number in report.counts.items())
    zone = (
        f" {report.zone_assumed_for} times without an offset were taken in {report.zone}."
        if report.zone_assumed_for
        else ""
    )
    if not said:
        return "No problems; the files hold no rows."
    if dry_run:
        return f"No problems; nothing written. It would add: {said}.{zone}"
    return f"Imported as write {report.write_number}: {said}.{zone}"


def _print_columns() -> None:
    from fleet.records.fields import column_of, fields_of, kind_of
    from fleet.store.csv_import import ORDER
    from fleet.store.csv_rows import columns_of_kind

    for cls in ORDER:
        columns = columns_of_kind(cls)
        click.echo(f"{kind_of(cls)}.csv  {(cls.__doc__ or '').splitlines()[0]}")
        meanings = {column_of(name, spec): spec for name, spec in fields_of(cls).items()}
        for name in (*columns.needed, *columns.optional):
            spec = meanings.get(name)
            said = "" if spec is None else spec.meaning + (f" ({', '.join(spec.choices)})" if spec.choices else "")
            click.echo(f"    {name}{'' if name in columns.needed else ' (may be left out)'}  {said}".rstrip())


@click.command("show")
@book_option
@click.option("--port", default=8642, show_default=True, type=click.IntRange(1024, 65535), help="Port on this machine.")
@click.option("--no-browser", is_flag=True, help="Do not open a browser window.")
def show_command(where: str | None, port: int, no_browser: bool) -> None:
    """Open the dashboard of a book, on this machine only."""
    with opened(where):
        pass
    _serve(book_of(where), port, not no_browser)


@click.command("demo")
@click.option(
    "--dir",
    "folder",
    default="wearbook-demo",
    show_default=True,
    type=click.Path(path_type=Path),
    help="Folder for the demo book.",
)
@click.option("--print-only", is_flag=True, help="Stop after printing; open no dashboard.")
@click.option("--port", default=8642, show_default=True, type=click.IntRange(1024, 65535), help="Port on this machine.")
@click.option("--no-browser", is_flag=True, help="Do not open a browser window.")
def demo_command(folder: Path, print_only: bool, port: int, no_browser: bool) -> None:
    """Build the book of an invented glasshouse fleet (once), print its odds, spares and plates, open the dashboard."""
    from fleet.pipeline import Question, read_out
    from fleet.report.tables import odds_table, plates_table, spares_table
    from fleet.store.book import open_book
    from fleet.store.reading import read_history

    path = folder / DEMO_BOOK
    if not path.exists():
        _build_demo(path)
    book = open_book(path)
    with progress("reading the book, fitting lives, planning"):
        found = read_out(read_history(book, now()), Question())
    book.close()
    click.echo(f"{path}: an invented fleet, not measurements.\n")
    for table in (odds_table(found), spares_table(found), plates_table(found)):
        print_table(table)
        click.echo()
    if not print_only:
        _serve(str(path), port, not no_browser)


def _build_demo(path: Path) -> None:
    """Import the demo's CSV files as a user would, beside the final name first: a broken attempt leaves no book."""
    from demo_data.files import csv_folder
    from fleet.errors import BookError
    from fleet.store.book import create_book
    from fleet.store.csv_import import import_folder
    from fleet.store.writing import Entry

    try:
        path.parent.mkdir(parents=True, exist_ok=True)
    except OSError as error:
        raise BookError(f"The folder {path.parent} cannot be made: {error.strerror}.") from None
    unfinished = path.with_name(f"{path.name}.unfinished-{os.getpid()}")
    book = create_book(unfinished)
    try:
        with progress("building the demo book") as step:
            import_folder(book, csv_folder(), Entry(now(), "import", "demo fleet"), progress=step)
        book.close()
        os.replace(unfinished, path)
    finally:
        book.close()
        unfinished.unlink(missing_ok=True)


def _serve(where: str, port: int, open_browser: bool) -> None:
    from dashboard.serve import serve

    os.environ[BOOK_VARIABLE] = where
    serve(where, port, open_browser)
