"""Fixtures that more than one room of the tests uses."""

from __future__ import annotations

from tests.demo_book import demo_book, demo_history, demo_read_out, own_demo_book

__all__ = ["demo_book", "demo_history", "demo_read_out", "own_demo_book"]
