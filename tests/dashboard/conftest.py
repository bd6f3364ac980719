"""One book, one server and one browser for all tests of the pages."""

from __future__ import annotations

from collections.abc import Iterator
from datetime import UTC, datetime, timedelta
from pathlib import Path
from typing import Any

import pytest

from fleet.records.fields import Record
from fleet.records.ledger import Session, StockMove
from fleet.records.set_up import PartMode, Presence, Printer, Robot, Slot, Spool, UsagePlan
from tests.books import day, failure, fitment, part_type, removal, session, tiny_book
from tests.browser_support import PHONE, WIDE, Server, Watch, browser, browser_path, page_of, served

# What people type may hold markup; every page must show it as it was typed.
NASTY = '<b>worn</b> ![x](http://outside.example/x.png) :red[hot] $x$ *y* "q"'


def bench_records() -> list[Record]:
    """A few months of two robots: sessions, three discs that split, stock, a printer and what it needs."""
    now = datetime.now(UTC)
    records: list[Record] = [
        UsagePlan(record_id=f"plan {code}", robot=code, hours_per_week=6, session_hours=2, impacts_per_hour=0.5)
        for code in ("R1", "R2")
    ]
    sessions: list[Session] = [session(code, day(at, 14), 2, impacts=1) for at in range(1, 60) for code in ("R1", "R2")]
    records += [*sessions, *_typed()]
    for unit, fitted, at in (("U1", "U1 disc", 12), ("U3", "U3 disc", 20), ("U1", "second disc", 31)):
        moment = day(at, 16)
        new = {"U1 disc": "second disc"}.get(fitted, f"new disc {at}")
        records += [
            failure(fitted, "disc: split", moment),
            removal(fitted, moment, "failed"),
            fitment(unit, "disc", moment, record_id=new, sequence=1, lot="D-2"),
        ]
    stock = {"D-2": 6, "D-9": 2, "P-1": 100, "B-1": 4}
    records += [
        StockMove(record_id=f"count {lot}", happened_at=day(60), lot=lot, quantity=left, reason="counted")
        for lot, left in stock.items()
    ]
    records += [
        Printer(record_id="PR-1", code="PR-1", label="left printer", nozzle_mm=0.4, change_minutes=10),
        Spool(record_id="SP-1", code="SP-1", material="PA-CF", grams_left=900),
        *(
            Presence(record_id=name, weekday=name, start_minute=480, end_minute=1020)
            for name in ("Monday", "Tuesday", "Wednesday", "Thursday", "Friday")
        ),
    ]
    assert now > day(60) + timedelta(days=1), "the clock of this machine is behind the tiny fleet's first months"
    return records


def _typed() -> list[Record]:
    """A robot, a part and its mode whose names hold markup."""
    slot: dict[str, Any] = {"unit_design": "joint", "count": 1, "open_minutes": 20, "replace_minutes": 5}
    return [
        Robot(record_id="R9", code="R9", label=NASTY, in_service_from=day(0)),
        part_type("guard", label=NASTY),
        PartMode(
            record_id="typed", part_type="guard", code="typed", label=NASTY, mechanism="wear", clock="hours", share=1
        ),
        Slot(record_id="slot-guard", code="guard", part_type="guard", **slot),
        *(fitment(unit, "guard", day(0)) for unit in ("U1", "U2", "U3")),
    ]


@pytest.fixture(scope="session")
def bench_book(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """The path of a book that the tests may write in; each compares with what it found."""
    path = tmp_path_factory.mktemp("books") / "bench.db"
    tiny_book(path, *bench_records()).close()
    return path


@pytest.fixture(scope="session")
def server(bench_book: Path, tmp_path_factory: pytest.TempPathFactory) -> Iterator[Server]:
    """The dashboard of that book."""
    browser_path()
    with served(bench_book, tmp_path_factory.mktemp("server") / "log.txt") as running:
        yield running


@pytest.fixture(scope="session")
def chromium() -> Iterator[Any]:
    """One browser for all tests."""
    with browser() as opened:
        yield opened


@pytest.fixture(scope="session")
def _phone(chromium: Any) -> Iterator[tuple[Any, Watch]]:
    watch = Watch()
    with page_of(chromium, PHONE, watch=watch) as page:
        yield page, watch


@pytest.fixture(scope="session")
def _wide(chromium: Any) -> Iterator[tuple[Any, Watch]]:
    watch = Watch()
    with page_of(chromium, WIDE, watch=watch) as page:
        yield page, watch


@pytest.fixture
def phone(_phone: tuple[Any, Watch]) -> Iterator[Any]:
    """One visit on a phone that all tests share, judged after each."""
    yield _phone[0]
    _phone[1].judge()


@pytest.fixture
def wide(_wide: tuple[Any, Watch]) -> Iterator[Any]:
    """One visit at a desk that all tests share, judged after each."""
    yield _wide[0]
    _wide[1].judge()
