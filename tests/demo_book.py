"""The book of the invented fleet, built once for all tests that read it, and what is said of it."""

from __future__ import annotations

import shutil
from contextlib import closing
from datetime import UTC, datetime
from pathlib import Path

import pytest

from demo_data.files import csv_folder
from fleet.pipeline import Question, ReadOut, read_out
from fleet.records.history import History
from fleet.store.book import create_book, open_book
from fleet.store.csv_import import import_folder
from fleet.store.reading import read_history
from fleet.store.writing import Entry

AS_OF = datetime(2026, 12, 1, 12, tzinfo=UTC)


@pytest.fixture(scope="session")
def demo_book(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """The path of the book; only read it."""
    path = tmp_path_factory.mktemp("demo-book") / "demo.db"
    with closing(create_book(path)) as book:
        import_folder(book, csv_folder(), Entry(AS_OF, "import", "demo fleet"))
    return path


@pytest.fixture
def own_demo_book(demo_book: Path, tmp_path: Path) -> Path:
    """The path of a copy that one test may write in."""
    return Path(shutil.copy(demo_book, tmp_path / "demo.db"))


@pytest.fixture(scope="session")
def demo_history(demo_book: Path) -> History:
    """Everything in the book."""
    with closing(open_book(demo_book)) as book:
        return read_history(book, AS_OF)


@pytest.fixture(scope="session")
def demo_read_out(demo_history: History) -> ReadOut:
    """What is said of it to the usual question."""
    return read_out(demo_history, Question())
