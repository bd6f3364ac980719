"""Makes the README's picture of the running dashboard from the demo book: python tests/bench/pictures.py."""

from __future__ import annotations

import sys
import tempfile
from datetime import UTC, datetime
from pathlib import Path

sys.path.insert(0, str(Path(__file__).resolve().parents[2]))

from demo_data.files import csv_folder
from fleet.store.book import create_book
from fleet.store.csv_import import import_folder
from fleet.store.writing import Entry
from tests.browser_support import WIDE, browser, page_of, served, settled, visit

PICTURES = Path(__file__).resolve().parents[2] / "dashboard" / "pictures"


def make_pictures(folder: Path) -> None:
    """Photograph the first page of the demo book's dashboard."""
    folder.mkdir(exist_ok=True)
    with tempfile.TemporaryDirectory() as place:
        path = Path(place) / "demo.db"
        book = create_book(path)
        import_folder(book, csv_folder(), Entry(datetime.now(UTC), "import", "demo fleet"))
        book.close()
        with served(path, Path(place) / "log") as server, browser() as chromium, page_of(chromium, WIDE) as page:
            visit(page, server, "/before")
            settled(page)
            page.screenshot(path=str(folder / "before.png"))


if __name__ == "__main__":
    make_pictures(PICTURES)
