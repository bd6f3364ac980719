"""Opens a book: from a path or URL to a migrated database with the write recipe on every connection."""

from __future__ import annotations

import sqlite3
from collections.abc import Iterator
from contextlib import closing, contextmanager
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from sqlalchemy import Connection, Engine, create_engine, event, func, inspect, select, text
from sqlalchemy.engine import make_url
from sqlalchemy.exc import ArgumentError, DBAPIError

from fleet.errors import BookError
from fleet.store.tables import book_write, metadata

NEWEST_MIGRATION = "0001"
BUSY_TIMEOUT_MS = 10_000
_TABLES_OF_A_BOOK = ("alembic_version", "book_write")
_MIGRATIONS = Path(__file__).parent / "migrations"


@dataclass(frozen=True, eq=False)
class Book:
    """An open book. `where` is what the user named: a path, or a database URL without its password."""

    engine: Engine
    where: str

    def write_number(self) -> int:
        """Number of the last write; 0 for a book nobody has written in."""
        with self.reading() as connection:
            return int(connection.execute(select(func.coalesce(func.max(book_write.c.write_number), 0))).scalar_one())

    @contextmanager
    def reading(self) -> Iterator[Connection]:
        """A connection that sees one state of the book throughout."""
        with _plain_errors(self.where), self.engine.connect() as connection, connection.begin():
            yield connection

    @contextmanager
    def writing(self) -> Iterator[Connection]:
        """A connection in one transaction that no other writer can interleave with; all of it is kept, or none."""
        with _plain_errors(self.where), self.engine.connect() as connection:
            connection = connection.execution_options(wearbook_writer=True)
            with connection.begin():
                if self.engine.dialect.name == "postgresql":
                    connection.execute(text("SELECT pg_advisory_xact_lock(7411)"))
                yield connection

    def close(self) -> None:
        """Let go of the file."""
        self.engine.dispose()


def open_book(where: str | Path) -> Book:
    """Open a book that exists, after bringing its tables up to date (its file is copied first).

    Raises
    ------
    BookError
        If there is no such file, it is not a book, or a newer wearbook wrote it.
    """
    path = _file_of(where)
    if path is not None:
        _refuse_what_is_no_book(path)
    engine = _engine(where, path)
    book = Book(engine, _shown(where, path))
    try:
        with _plain_errors(book.where):
            _bring_up_to_date(book, path)
    except BaseException:
        engine.dispose()
        raise
    return book


def create_book(where: str | Path) -> Book:
    """Make an empty book.

    Raises
    ------
    BookError
        If something is there already, or the place cannot be written.
    """
    path = _file_of(where)
    if path is not None:
        if path.exists():
            raise BookError(f"{path} is there already: name another file, or open that one.")
        if not path.parent.is_dir():
            raise BookError(f"The folder {path.parent} does not exist: make it first, or name another.")
    engine = _engine(where, path)
    book = Book(engine, _shown(where, path))
    with _plain_errors(book.where):
        if path is None and inspect(engine).has_table("book_write"):
            engine.dispose()
            raise BookError(f"{book.where} holds a book already: open that one.")
        _migrate(book)
    return book


def _file_of(where: str | Path) -> Path | None:
    """The file that is meant; None if it is the URL of a database server."""
    if isinstance(where, Path) or "://" not in where:
        return Path(where).expanduser()
    try:
        url = make_url(where)
    except ArgumentError:
        raise BookError(f"{where!r} is neither a path nor a database URL.") from None
    if url.get_backend_name() == "sqlite":
        return Path(url.database or "")
    if url.get_backend_name() != "postgresql":
        raise BookError("A book is kept in a SQLite file or a PostgreSQL database; give the path or URL of one.")
    return None


def _shown(where: str | Path, path: Path | None) -> str:
    return str(path) if path is not None else make_url(str(where)).render_as_string(hide_password=True)


def _refuse_what_is_no_book(path: Path) -> None:
    if path.is_dir():
        raise BookError(f"{path} is a folder, not a book: name the file, such as {path / 'wearbook.db'}.")
    if not path.exists():
        raise BookError(f"There is no book at {path}: make one with 'wearbook new', or name another with --book.")
    try:
        with path.open("rb") as file:
            start = file.read(16)
    except OSError as error:
        raise BookError(f"{path} cannot be read: {error.strerror}.") from None
    if start != b"SQLite format 3\x00":
        raise BookError(f"{path} is not a book: wearbook made no such file. Name another with --book.")
    # Looked at before anything is set on the connection: the file of another program stays as it is.
    with _plain_errors(str(path)), closing(sqlite3.connect(path, timeout=BUSY_TIMEOUT_MS / 1000)) as connection:
        tables = {name for (name,) in connection.execute("SELECT name FROM sqlite_master WHERE type = 'table'")}
    if not tables.issuperset(_TABLES_OF_A_BOOK):
        raise BookError(f"{path} is not a book: it holds other tables. Name another with --book.")


def _engine(where: str | Path, path: Path | None) -> Engine:
    if path is None:
        try:
            return create_engine(str(where))
        except ImportError:
            raise BookError("A book in PostgreSQL needs the package psycopg: install psycopg[binary].") from None
    engine = create_engine("sqlite://", creator=lambda: _connect(path), poolclass=_pool())
    event.listen(engine, "begin", _begin)
    return engine


def _pool() -> Any:
    from sqlalchemy.pool import QueuePool

    return QueuePool


def _connect(path: Path) -> sqlite3.Connection:
    """A connection with the write recipe: write-ahead log, full synchronisation, foreign keys, patience."""
    connection = sqlite3.connect(path, isolation_level=None, check_same_thread=False, timeout=BUSY_TIMEOUT_MS / 1000)
    try:
        connection.execute(f"PRAGMA busy_timeout = {BUSY_TIMEOUT_MS}")
        connection.execute("PRAGMA journal_mode = WAL")
        connection.execute("PRAGMA synchronous = FULL")
        connection.execute("PRAGMA foreign_keys = ON")
    except BaseException:
        connection.close()
        raise
    return connection


def _begin(connection: Connection) -> None:
    writer = connection.get_execution_options().get("wearbook_writer", False)
    connection.exec_driver_sql("BEGIN IMMEDIATE" if writer else "BEGIN")


def _bring_up_to_date(book: Book, path: Path | None) -> None:
    with book.reading() as connection:
        found = inspect(connection)
        if not all(found.has_table(name) for name in _TABLES_OF_A_BOOK):
            raise BookError(f"{book.where} is not a book: it holds other tables. Name another with --book.")
        version = connection.execute(text("SELECT version_num FROM alembic_version")).scalar()
    if version == NEWEST_MIGRATION:
        return
    if str(version) > NEWEST_MIGRATION:
        raise BookError(f"{book.where} was written by a newer wearbook: bring this one up to date to open it.")
    if path is not None:
        _copy_file(path, path.with_name(f"{path.name}.before-{NEWEST_MIGRATION}"))
    _migrate(book)


def _copy_file(path: Path, copy: Path) -> None:
    """A whole copy, with what still lies in the write-ahead log."""
    with closing(sqlite3.connect(path)) as source, closing(sqlite3.connect(copy)) as target:
        source.backup(target)


def _migrate(book: Book) -> None:
    from alembic import command
    from alembic.config import Config

    config = Config()
    config.set_main_option("script_location", str(_MIGRATIONS).replace("%", "%%"))
    with book.writing() as connection:
        config.attributes["connection"] = connection
        config.attributes["metadata"] = metadata
        command.upgrade(config, "head")


@contextmanager
def _plain_errors(where: str) -> Iterator[None]:
    """Turn what a database says about the file or the disk into one sentence."""
    try:
        yield
    except (DBAPIError, sqlite3.Error) as error:
        said = str(error.orig if isinstance(error, DBAPIError) else error)
        for sign, sentence in _SIGNS.items():
            if sign in said:
                raise BookError(f"{where}: {sentence}") from error
        raise


_SIGNS = {
    "file is not a database": "this is not a book.",
    "database disk image is malformed": "the file is damaged; restore the latest copy.",
    "readonly database": "the file may only be read; nothing was written.",
    "unable to open database file": "the file cannot be opened; check the folder and its permissions.",
    "database or disk is full": "the disk is full; nothing was written.",
    "database is locked": "another program is writing; nothing was written, try again.",
    "could not connect": "the database server does not answer.",
    "connection failed": "the database server does not answer.",
}
