"""A tiny fleet for the tests: two robots, three joints, a spare module, a set of 13 pins; as records, book or files."""

from __future__ import annotations

import csv
from collections.abc import Iterable, Mapping, Sequence
from datetime import UTC, datetime, timedelta
from functools import cache
from itertools import count
from pathlib import Path
from tempfile import TemporaryDirectory
from typing import Any

from fleet.records.fields import Record
from fleet.records.history import History, history_of
from fleet.records.ledger import BenchCheck, Failure, Fitment, Placement, Removal, Session, SessionUse
from fleet.records.set_up import (
    BeliefAnswer,
    Lot,
    PartMode,
    PartType,
    Position,
    Revision,
    Robot,
    Settings,
    Slot,
    Unit,
    UnitDesign,
)
from fleet.store.book import Book, create_book, open_book
from fleet.store.csv_import import ImportReport, import_folder
from fleet.store.writing import Entry, write

FITTED = datetime(2026, 1, 5, 8, tzinfo=UTC)
END = datetime(2026, 12, 1, tzinfo=UTC)
NOW = datetime(2026, 6, 1, 18, tzinfo=UTC)
ENTRY = Entry(FITTED, "bench", "first entry")
JOINTS = {"R1-hip": "U1", "R1-knee": "U2", "R2-knee": "U3"}
TURNS_PER_HOUR = 600.0

_numbers = count(1)


def new_id(kind: str) -> str:
    """An id that says what it is of."""
    return f"{kind}-{next(_numbers)}"


def day(number: int, hour: int = 10, minute: int = 0) -> datetime:
    """A moment on the day this many days after the parts were fitted."""
    return FITTED.replace(hour=hour, minute=minute) + timedelta(days=number)


def set_up() -> list[Record]:
    """Robots R1 (hip, knee) and R2 (knee), modules U1 to U4, discs, pins and a bearing; record ids are plain words."""
    joined = FITTED - timedelta(days=4)
    records: list[Record] = [
        Settings(record_id="settings", title="Test fleet", zone="Europe/Amsterdam"),
        UnitDesign(record_id="joint", code="joint", label="joint module", reduction=15),
    ]
    records += [
        Robot(record_id=code, code=code, label=f"Robot {code[1]}", in_service_from=joined) for code in ("R1", "R2")
    ]
    for rank, place in enumerate(JOINTS):
        robot, code = place.split("-")
        records.append(
            Position(
                record_id=place,
                robot=robot,
                code=code,
                label=f"left {code}",
                limb="left leg",
                side="left",
                rank=rank,
                unit_design="joint",
                turns_per_hour=TURNS_PER_HOUR,
            )
        )
    records += [Unit(record_id=code, code=code, unit_design="joint") for code in ("U1", "U2", "U3", "U4")]
    records += [part_type("disc", printed=True), part_type("pin"), part_type("bearing")]
    slots = {"disc": ("disc", 1, 1), "pins": ("pin", 13, 2), "bearing": ("bearing", 1, None)}
    for code, (part, holds, stops_at) in slots.items():
        records.append(
            Slot(
                record_id=f"slot-{code}",
                unit_design="joint",
                code=code,
                part_type=part,
                count=holds,
                open_minutes=20,
                replace_minutes=5,
                stops_at=stops_at,
            )
        )
    records += [
        part_mode("disc", "worn", "wear", "hours", 0.5),
        part_mode("disc", "split", "layer split", "impacts", 0.5),
        part_mode("pin", "snapped", "fatigue", "turns", 0.6),
        part_mode("pin", "worn flat", "wear", "hours", 0.4),
        part_mode("bearing", "rough", "wear", "hours", 1.0),
        Revision(record_id="disc-A", part_type="disc", code="A", superseded=True),
        Revision(record_id="disc-B", part_type="disc", code="B"),
        Lot(record_id="D-1", code="D-1", part_type="disc", revision="disc-A"),
        Lot(record_id="D-2", code="D-2", part_type="disc", revision="disc-B"),
        Lot(record_id="D-9", code="D-9", part_type="disc", revision="disc-B", kept_apart=True, note="dull layers"),
        Lot(record_id="P-1", code="P-1", part_type="pin"),
        Lot(record_id="B-1", code="B-1", part_type="bearing"),
        BeliefAnswer(record_id="belief-disc", part_type="disc", t10=100, factor=3),
    ]
    return records


def part_type(code: str, printed: bool = False, **changed: Any) -> PartType:
    """A part type; a printed one has its plate figures."""
    figures: dict[str, Any] = {}
    if printed:
        figures = {
            "material": "PA-CF",
            "print_minutes": 95,
            "plate_minutes": 25,
            "parts_per_plate": 6,
            "nozzle_mm": 0.4,
        }
    values: dict[str, Any] = {
        "record_id": code,
        "code": code,
        "label": code,
        "source": "printed" if printed else "bought",
        "planned_cost": 400,
        "failure_cost": 2600,
        "mass_g": 18,
        "lead_time_days": 5,
    }
    return PartType(**{**values, **figures, **changed})


def part_mode(part: str, code: str, mechanism: str, clock: str, share: float) -> PartMode:
    """A mode of a part type, under the id "part: code"."""
    return PartMode(
        record_id=f"{part}: {code}",
        part_type=part,
        code=code,
        label=f"{part} {code}",
        mechanism=mechanism,
        clock=clock,
        share=share,
    )


def first_fitting() -> list[Record]:
    """Modules U1 to U3 in their joints and U4 on the shelf, each with a disc, 13 pins and a bearing, all new."""
    records: list[Record] = []
    for unit in ("U1", "U2", "U3", "U4"):
        place = next((joint for joint, held in JOINTS.items() if held == unit), None)
        records += [
            Fitment(record_id=f"{unit} disc", happened_at=FITTED, unit=unit, slot="slot-disc", lot="D-1"),
            Fitment(record_id=f"{unit} pins", happened_at=FITTED, unit=unit, slot="slot-pins", count=13, lot="P-1"),
            Fitment(record_id=f"{unit} bearing", happened_at=FITTED, unit=unit, slot="slot-bearing", lot="B-1"),
            Placement(record_id=f"{unit} placed", happened_at=FITTED, unit=unit, position=place),
        ]
    return records


def placement(unit: str, position: str | None, moment: datetime, sequence: int = 0) -> Placement:
    """A module put in a joint, or on the shelf."""
    return Placement(record_id=new_id("placement"), happened_at=moment, sequence=sequence, unit=unit, position=position)


def session(robot: str, start: datetime, hours: float, impacts: int = 0, **changed: Any) -> Session:
    """A session without pauses."""
    values: dict[str, Any] = {
        "record_id": new_id("session"),
        "robot": robot,
        "happened_at": start,
        "ended_at": start + timedelta(hours=hours),
        "run_seconds": round(hours * 3600),
        "impacts": impacts,
    }
    return Session(**{**values, **changed})


def session_use(of: Session, position: str, **figures: Any) -> SessionUse:
    """What one joint did in a session."""
    return SessionUse(
        record_id=new_id("use"), happened_at=of.happened_at, session=of.record_id, position=position, **figures
    )


def fitment(unit: str, slot: str, moment: datetime, **changed: Any) -> Fitment:
    """A part fitted in a slot, by the slot's code."""
    values = {"record_id": new_id("fitment"), "happened_at": moment, "unit": unit, "slot": f"slot-{slot}"}
    return Fitment(**{**values, **changed})


def removal(of: str, moment: datetime, reason: str = "replaced while good", **changed: Any) -> Removal:
    """A part taken out."""
    values = {"record_id": new_id("removal"), "happened_at": moment, "fitment": of, "reason": reason}
    return Removal(**{**values, **changed})


def failure(of: str, mode: str, moment: datetime, finding: str = "stopped", **changed: Any) -> Failure:
    """A part that failed."""
    values = {"record_id": new_id("failure"), "happened_at": moment, "fitment": of, "mode": mode, "finding": finding}
    return Failure(**{**values, **changed})


def check(unit: str, moment: datetime, verdict: str = "good", **changed: Any) -> BenchCheck:
    """A look at a joint on the bench."""
    values = {"record_id": new_id("check"), "happened_at": moment, "unit": unit, "verdict": verdict}
    return BenchCheck(**{**values, **changed})


def history_with(*records: Record, as_of: datetime = END) -> History:
    """The tiny fleet as first fitted, and these records."""
    return history_of([*set_up(), *first_fitting(), *records], as_of)


def tiny_book(path: Path, *records: Record, entry: Entry = ENTRY) -> Book:
    """A book of the tiny fleet as first fitted (write 1), and these records, if any, in a second write."""
    path.write_bytes(_first_book())
    book = open_book(path)
    if records:
        add(book, records, entry)
    return book


@cache
def _first_book() -> bytes:
    with TemporaryDirectory() as folder:
        path = Path(folder) / "book.db"
        book = create_book(path)
        add(book, [*set_up(), *first_fitting()])
        book.close()
        return path.read_bytes()


def add(book: Book, records: Iterable[Record], entry: Entry = ENTRY) -> int:
    """Write records; the number of the write."""
    with write(book, entry) as writer:
        for record in records:
            writer.add(record)
    return writer.write_number


# The same fleet as files

Cells = Mapping[str, object]


def tiny_files() -> dict[str, list[Cells]]:
    """File name -> rows, for the same set-up and first fitting, with times in the book's zone."""
    joined, fitted = "2026-01-01 00:00", "2026-01-05 09:00"
    files: dict[str, list[Cells]] = {
        "settings.csv": [{"title": "Test fleet", "zone": "Europe/Amsterdam"}],
        "unit_design.csv": [{"code": "joint", "label": "joint module", "reduction": 15}],
        "robot.csv": [{"code": code, "label": f"Robot {code[1]}", "in_service_from": joined} for code in ("R1", "R2")],
        "unit.csv": [{"code": code, "unit_design": "joint"} for code in ("U1", "U2", "U3", "U4")],
        "lot.csv": [
            {"code": "D-1", "part_type": "disc", "revision": "A"},
            {"code": "D-2", "part_type": "disc", "revision": "B"},
            {"code": "P-1", "part_type": "pin"},
            {"code": "B-1", "part_type": "bearing"},
        ],
        "revision.csv": [{"part_type": "disc", "code": "A"}, {"part_type": "disc", "code": "B"}],
    }
    files["position.csv"] = [
        {
            "robot": place.split("-")[0],
            "code": place.split("-")[1],
            "label": "left joint",
            "limb": "left leg",
            "side": "left",
            "rank": rank,
            "unit_design": "joint",
            "turns_per_hour": 600,
        }
        for rank, place in enumerate(JOINTS)
    ]
    costs = {"planned_cost": "4.00", "failure_cost": "26.00", "mass_g": 18, "lead_time_days": 5}
    plate = {"material": "PA-CF", "print_minutes": 95, "plate_minutes": 25, "parts_per_plate": 6, "nozzle_mm": 0.4}
    files["part_type.csv"] = [
        {"code": "disc", "label": "disc", "source": "printed", **costs, **plate},
        {"code": "pin", "label": "pin", "source": "bought", **costs},
        {"code": "bearing", "label": "bearing", "source": "bought", **costs},
    ]
    slots: tuple[tuple[str, str, int, object], ...] = (
        ("disc", "disc", 1, 1),
        ("pins", "pin", 13, 2),
        ("bearing", "bearing", 1, ""),
    )
    files["slot.csv"] = [
        {
            "unit_design": "joint",
            "code": code,
            "part_type": part,
            "count": holds,
            "open_minutes": 20,
            "replace_minutes": 5,
            "stops_at": stops_at,
        }
        for code, part, holds, stops_at in slots
    ]
    modes = (
        ("disc", "worn", "wear", "hours", 0.5),
        ("disc", "split", "layer split", "impacts", 0.5),
        ("pin", "snapped", "fatigue", "turns", 0.6),
        ("pin", "worn flat", "wear", "hours", 0.4),
        ("bearing", "rough", "wear", "hours", 1),
    )
    files["part_mode.csv"] = [
        {"part_type": part, "code": code, "label": code, "mechanism": mechanism, "clock": clock, "share": share}
        for part, code, mechanism, clock, share in modes
    ]
    files["fitment.csv"] = [
        {"happened_at": fitted, "unit": unit, "slot": slot, "count": holds, "lot": lot}
        for unit in ("U1", "U2", "U3", "U4")
        for slot, holds, lot in (("disc", 1, "D-1"), ("pins", 13, "P-1"), ("bearing", 1, "B-1"))
    ]
    places = {unit: place.split("-") for place, unit in JOINTS.items()} | {"U4": ["", ""]}
    files["placement.csv"] = [
        {"happened_at": fitted, "unit": unit, "robot": robot, "position": position}
        for unit, (robot, position) in places.items()
    ]
    return files


def write_files(folder: Path, files: Mapping[str, Sequence[Cells]]) -> Path:
    """Write rows as CSV files; the folder."""
    folder.mkdir(parents=True, exist_ok=True)
    for name, rows in files.items():
        columns = list(dict.fromkeys(column for row in rows for column in row))
        with (folder / name).open("w", encoding="utf-8", newline="") as file:
            writer = csv.DictWriter(file, columns, restval="")
            writer.writeheader()
            writer.writerows(rows)
    return folder


def imported_book(path: Path, folder: Path, *ledger: tuple[str, Sequence[Cells]]) -> tuple[Book, ImportReport]:
    """A book of the tiny fleet read from CSV files in `folder`, with more rows by file name."""
    files = {name: list(rows) for name, rows in tiny_files().items()}
    for name, rows in ledger:
        files.setdefault(name, []).extend(rows)
    book = create_book(path)
    return book, import_folder(book, write_files(folder, files), Entry(END, "bench", "import"))
