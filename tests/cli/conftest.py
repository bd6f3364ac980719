"""The command line as it is really entered, on a stopped clock, and a small book to use it on."""

from __future__ import annotations

import json
import shutil
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import pytest

from fleet.cli import books, logging, options
from fleet.cli.main import main
from fleet.records.fields import Record
from fleet.records.ledger import StockMove
from fleet.records.set_up import Presence, Printer, Spool, UsagePlan
from fleet.records.vocabulary import WEEKDAYS
from tests.books import NOW, day, session, tiny_book


@dataclass(frozen=True)
class Answer:
    """What a command said, and its exit code."""

    code: int
    out: str
    err: str

    @property
    def document(self) -> Any:
        """The JSON document that it printed, without NaN and Infinity."""
        return json.loads(self.out, parse_constant=_no_number)


def _no_number(name: str) -> None:
    raise AssertionError(f"{name} is no JSON")


Command = Callable[..., Answer]


@pytest.fixture
def wearbook(capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> Command:
    """Enter one command, in an empty folder, at the evening of the tiny fleet."""
    monkeypatch.chdir(tmp_path)
    monkeypatch.delenv(options.BOOK_VARIABLE, raising=False)
    for module in (books, logging, options):
        monkeypatch.setattr(module, "now", lambda: NOW)

    def enter(*arguments: object) -> Answer:
        capsys.readouterr()
        code = 0
        try:
            main([str(argument) for argument in arguments])
        except SystemExit as ended:
            code = int(ended.code or 0)
        said = capsys.readouterr()
        return Answer(code, said.out, said.err)

    return enter


def bench_records() -> list[Record]:
    """Forty days of two robots, plans, stock, a printer and what it needs."""
    records: list[Record] = [
        UsagePlan(record_id=f"plan {code}", robot=code, hours_per_week=30, session_hours=3, impacts_per_hour=0.5)
        for code in ("R1", "R2")
    ]
    records += [session(code, day(at), 3, impacts=2) for at in range(1, 41) for code in ("R1", "R2")]
    records += [
        StockMove(record_id=f"count {lot}", happened_at=day(50), lot=lot, quantity=left, reason="counted")
        for lot, left in {"D-2": 2, "D-9": 2, "P-1": 100, "B-1": 4}.items()
    ]
    records += [
        Printer(record_id="PR-1", code="PR-1", label="left printer", nozzle_mm=0.4, change_minutes=10),
        Spool(record_id="SP-1", code="SP-1", material="PA-CF", grams_left=900),
        *(Presence(record_id=name, weekday=name, start_minute=480, end_minute=1020) for name in WEEKDAYS),
    ]
    return records


@pytest.fixture(scope="session")
def _bench_book(tmp_path_factory: pytest.TempPathFactory) -> Path:
    path = tmp_path_factory.mktemp("bench") / "bench.db"
    tiny_book(path, *bench_records()).close()
    return path


@pytest.fixture
def book(_bench_book: Path, tmp_path: Path, wearbook: Command, monkeypatch: pytest.MonkeyPatch) -> Path:
    """The path of an own copy of the bench book, which every command finds by itself."""
    path = Path(shutil.copy(_bench_book, tmp_path / "bench.db"))
    monkeypatch.setenv(options.BOOK_VARIABLE, str(path))
    return path
