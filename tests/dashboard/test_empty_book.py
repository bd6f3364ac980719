"""Every page of an empty book says in one sentence what to do; a book that cannot be opened is one, too."""

from __future__ import annotations

from pathlib import Path

import pytest
from streamlit.testing.v1 import AppTest

from dashboard.serve import BOOK_VARIABLE
from fleet.store.book import create_book

PAGES = ("before", "after", "joints", "part_lives", "spares", "plates", "scoreboard")


def shown(page: str) -> str:
    """The HTML that a page shows."""
    script = f"from dashboard.frame import framed\nfrom dashboard.views import {page}\nframed({page}.draw)()\n"
    run = AppTest.from_string(script, default_timeout=20).run()
    assert not run.exception
    return " ".join(element.proto.body for element in run.get("html"))


@pytest.mark.parametrize("page", PAGES)
def test_an_empty_book_says_what_to_do(page: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    path = tmp_path / "empty.db"
    create_book(path).close()
    monkeypatch.setenv(BOOK_VARIABLE, str(path))
    body = shown(page)
    assert "No robots yet: import your set-up with <code>wearbook import FOLDER</code>" in body
    assert "not for life-critical" in body.lower()


def test_a_book_that_is_not_there_is_one_sentence(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv(BOOK_VARIABLE, str(tmp_path / "none.db"))
    body = shown("before")
    assert "There is no book at" in body
    assert "Traceback" not in body


def test_a_dashboard_without_a_book_says_how_to_name_one(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.delenv(BOOK_VARIABLE, raising=False)
    assert "No book is named" in shown("before")
