"""A folder of CSV files comes in whole, or not at all with every problem named by file and line."""

from __future__ import annotations

import csv
import os
import socket
from collections.abc import Iterator
from contextlib import closing
from datetime import UTC, datetime, timedelta
from pathlib import Path

import pytest

from fleet.errors import BookError, ImportProblems
from fleet.records.consistency import problems_in
from fleet.records.ledger import Failure, Fitment, Placement, Release, Removal, Session, SessionUse
from fleet.records.set_up import Lot, PartType, Robot, Slot
from fleet.records.whereabouts import whereabouts_of
from fleet.store.book import Book, create_book
from fleet.store.csv_import import ImportReport, import_folder
from fleet.store.csv_rows import columns_of_kind
from fleet.store.reading import read_history
from fleet.store.writing import Entry
from tests.books import END, FITTED, Cells, add, day, imported_book, session, tiny_book, tiny_files, write_files

ENTRY = Entry(END, "bench", "import")


@pytest.fixture
def book(tmp_path: Path) -> Iterator[Book]:
    """The tiny fleet, made from records: the files under test come on top of it."""
    with closing(tiny_book(tmp_path / "book.db")) as opened:
        yield opened


def import_rows(book: Book, folder: Path, dry_run: bool = False, **files: list[Cells]) -> ImportReport:
    """Import files by kind, `session=[...]`."""
    write_files(folder, {f"{kind}.csv": rows for kind, rows in files.items()})
    return import_folder(book, folder, ENTRY, dry_run)


def problems(book: Book, folder: Path, **files: list[Cells]) -> list[str]:
    """The problems of an import; it must have written nothing."""
    before = book.write_number()
    with pytest.raises(ImportProblems) as told:
        import_rows(book, folder, **files)
    assert book.write_number() == before
    return list(told.value.problems)


def ran(start: str = "2026-03-02 10:00", hours: object = 1.5, end: str = "2026-03-02 12:00", **more: object) -> Cells:
    return {"robot": "R1", "happened_at": start, "ended_at": end, "hours": hours, **more}


# What comes in


def test_the_tiny_fleet_comes_in_as_it_was_written(tmp_path: Path) -> None:
    book, report = imported_book(tmp_path / "book.db", tmp_path / "csv")
    with closing(book):
        history = read_history(book, END)
    assert report.write_number == 1
    assert report.counts["fitment"] == 12
    assert problems_in(history) == []
    assert {robot.code for robot in history.of(Robot).values()} == {"R1", "R2"}
    pins = next(slot for slot in history.of(Slot).values() if slot.code == "pins")
    assert (pins.count, pins.stops_at, history.one(PartType, pins.part_type).code) == (13, 2, "pin")
    disc = next(part for part in history.of(PartType).values() if part.code == "disc")
    assert (disc.planned_cost, disc.failure_cost) == (400, 2600)
    assert all(fitted.happened_at == FITTED for fitted in history.of(Fitment).values())
    placed = whereabouts_of(history)
    assert sum(1 for stays in placed.stays_of_unit.values() if stays[-1].position is None) == 1
    assert len(placed.fitted_now()) == 4 * 15


def test_a_session_and_what_its_joints_did(book: Book, tmp_path: Path) -> None:
    use = {
        "robot": "R1",
        "session": "2026-03-02 10:00",
        "position": "hip",
        "turns": 900,
        "happened_at": "2026-03-02 10:00",
    }
    import_rows(book, tmp_path / "csv", session=[ran(impacts=4)], session_use=[use])
    history = read_history(book, END)
    (session_read,), (use_read,) = history.of(Session).values(), history.of(SessionUse).values()
    assert session_read.happened_at == datetime(2026, 3, 2, 9, tzinfo=UTC)
    assert (session_read.run_seconds, session_read.impacts, session_read.outcome) == (5400, 4, "finished")
    assert (use_read.session, use_read.position, use_read.turns) == (session_read.record_id, "R1-hip", 900)


def test_a_part_is_named_by_its_joint_or_its_module_at_that_moment(book: Book, tmp_path: Path) -> None:
    swap = [{"happened_at": "2026-02-01", "unit": "U4", "robot": "R1", "position": "hip"}]
    out = [
        {"happened_at": "2026-01-20 12:00", "robot": "R1", "position": "hip", "slot": "disc", "reason": "failed"},
        {
            "happened_at": "2026-03-01 12:00",
            "robot": "R1",
            "position": "hip",
            "slot": "pins",
            "place": 3,
            "reason": "failed",
        },
        {"happened_at": "2026-03-01 12:00", "unit": "U1", "slot": "bearing", "reason": "unknown"},
    ]
    import_rows(book, tmp_path / "csv", placement=swap, removal=out)
    removed = {r.fitment: r.place for r in read_history(book, END).of(Removal).values()}
    assert removed == {"U1 disc": None, "U4 pins": 3, "U1 bearing": None}


def test_a_removal_without_a_place_empties_a_mixed_set(book: Book, tmp_path: Path) -> None:
    fitted = [{"happened_at": "2026-02-01", "unit": "U1", "slot": "pins", "first_place": 4, "lot": "P-1"}]
    out = [
        {"happened_at": "2026-02-01", "unit": "U1", "slot": "pins", "place": 4, "reason": "failed"},
        {"happened_at": "2026-03-01", "unit": "U1", "slot": "pins", "reason": "replaced while good"},
    ]
    import_rows(book, tmp_path / "csv", fitment=fitted, removal=out)
    left = [p for p in whereabouts_of(read_history(book, END)).fitted_now() if p.fitment.unit == "U1"]
    assert {part.fitment.slot for part in left} == {"slot-disc", "slot-bearing"}


def test_a_part_broken_by_another_finds_the_failure_that_broke_it(book: Book, tmp_path: Path) -> None:
    at = {"happened_at": "2026-03-02 12:00", "robot": "R1", "position": "hip", "finding": "stopped"}
    disc = {**at, "slot": "disc", "mode": "split", "cause": "another part's failure"}
    broken = {**disc, "broken_by_slot": "pins", "broken_by_place": 3}
    pin = {**at, "slot": "pins", "place": 3, "mode": "snapped"}
    import_rows(book, tmp_path / "csv", failure=[broken, pin])
    failed = {failure.fitment: failure for failure in read_history(book, END).of(Failure).values()}
    assert failed["U1 disc"].broken_by == failed["U1 pins"].record_id


def test_a_moved_part_is_found_by_where_it_was_taken_out(book: Book, tmp_path: Path) -> None:
    out = [
        {"happened_at": "2026-02-01 10:00", "unit": "U1", "slot": "disc", "reason": "moved"},
        {"happened_at": "2026-02-01 10:00", "unit": "U2", "slot": "disc", "reason": "failed"},
    ]
    moved = {"happened_at": "2026-02-01 10:00", "sequence": 1, "unit": "U2", "slot": "disc"}
    import_rows(book, tmp_path / "csv", removal=out, fitment=[{**moved, "from_unit": "U1", "from_slot": "disc"}])
    assert list(read_history(book, END).of(Fitment).values())[-1].comes_from == "U1 disc"


@pytest.mark.parametrize(("column", "other"), [("from_unit", "from_slot"), ("from_slot", "from_unit")])
def test_where_a_part_comes_from_is_never_half_said(book: Book, tmp_path: Path, column: str, other: str) -> None:
    out = [{"happened_at": "2026-02-01", "unit": unit, "slot": "disc", "reason": "moved"} for unit in ("U1", "U2")]
    moved = {
        "happened_at": "2026-02-02",
        "unit": "U2",
        "slot": "disc",
        column: {"from_unit": "U1", "from_slot": "disc"}[column],
    }
    found = problems(book, tmp_path / "csv", removal=out, fitment=[moved])
    assert len(found) == 1
    assert found[0].startswith(f"fitment.csv line 2: {other} is empty")


def test_a_hold_is_lifted_by_naming_what_was_held(book: Book, tmp_path: Path) -> None:
    hold = [{"happened_at": "2026-03-01", "robot": "R1", "why": "cracked"}]
    release = [{"happened_at": "2026-03-02", "robot": "R1", "why": "mended"}]
    import_rows(book, tmp_path / "csv", hold=hold, release=release)
    assert len(read_history(book, END).of(Release)) == 1
    found = problems(book, tmp_path / "csv2", release=[{"happened_at": "2026-03-03", "robot": "R1", "why": "again"}])
    assert found == ["release.csv line 2: names something that is not held."]


def test_an_entry_that_a_file_claims_is_kept_as_claimed(book: Book, tmp_path: Path) -> None:
    claimed = {"entered_at": "2026-03-03 08:00", "entered_by": "field lead"}
    import_rows(book, tmp_path / "csv", session=[ran(**claimed)])
    (read,) = read_history(book, END).of(Session).values()
    assert read.stamp is not None
    assert (read.stamp.entered_at, read.stamp.entered_by) == (datetime(2026, 3, 3, 7, tzinfo=UTC), "field lead")
    assert read.stamp.entered_at_claimed


def test_the_zone_taken_is_told_with_the_number_of_times_it_was_taken_for(book: Book, tmp_path: Path) -> None:
    rows = [
        ran(),
        ran("2026-03-03T10:00Z", end="2026-03-03T12:00+00:00"),
        ran("2026-03-04 10:00", end="2026-03-04T12:00Z"),
    ]
    report = import_rows(book, tmp_path / "csv", session=rows)
    assert (report.zone, report.zone_assumed_for) == ("Europe/Amsterdam", 3)


def test_a_sheet_with_dates_only_gives_each_its_day(book: Book, tmp_path: Path) -> None:
    out = [{"happened_at": "2026-03-29", "unit": "U1", "slot": "disc", "reason": "failed"}]
    broke = [{"happened_at": "2026-03-29", "unit": "U1", "slot": "disc", "mode": "worn", "finding": "found worn"}]
    report = import_rows(book, tmp_path / "csv", removal=out, failure=broke)
    (failed,) = read_history(book, END).of(Failure).values()
    assert failed.happened_at == datetime(2026, 3, 28, 23, tzinfo=UTC)
    assert failed.happened_until is not None
    assert failed.happened_until - failed.happened_at == timedelta(hours=23)
    assert (report.zone, report.zone_assumed_for) == ("Europe/Amsterdam", 2)


@pytest.mark.parametrize(
    "formula", ["=1+1", '=HYPERLINK("http://x","y")', "+1+1", "-1+1", "@SUM(1)", "=cmd|' /C x'!A0"]
)
def test_a_cell_that_looks_like_a_formula_is_plain_text(book: Book, tmp_path: Path, formula: str) -> None:
    import_rows(book, tmp_path / "csv", session=[ran(note=formula)], lot=[{"code": formula, "part_type": "pin"}])
    history = read_history(book, END)
    assert [read.note for read in history.of(Session).values()] == [formula]
    assert formula in {lot.code for lot in history.of(Lot).values()}


def test_a_formula_where_a_number_belongs_is_refused_not_worked_out(book: Book, tmp_path: Path) -> None:
    assert problems(book, tmp_path / "csv", session=[ran(hours="=1+1")]) == [
        "session.csv line 2: hours is '=1+1', not hours as a plain number such as 1.5."
    ]


def test_a_file_as_a_spreadsheet_saves_it(book: Book, tmp_path: Path) -> None:
    header = "\ufeffrobot,happened_at,ended_at,hours,note\r\n"
    text = header + ' R1 ,2026-03-02 10:00,2026-03-02 12:00,1.5,"dry, ""cold"""\r\n,,,,\r\n'
    folder = tmp_path / "csv"
    folder.mkdir()
    (folder / "session.csv").write_bytes(text.encode())
    import_folder(book, folder, ENTRY)
    (read,) = read_history(book, END).of(Session).values()
    assert read.note == 'dry, "cold"'


# Nothing is written unless everything is right


def test_a_dry_run_says_what_it_would_write_and_writes_nothing(book: Book, tmp_path: Path) -> None:
    report = import_rows(book, tmp_path / "csv", dry_run=True, session=[ran()])
    assert (report.counts, report.write_number) == ({"session": 1}, None)
    assert book.write_number() == 1
    assert len(read_history(book, END).of(Session)) == 0


def test_a_dry_run_finds_the_problems_of_the_real_one(book: Book, tmp_path: Path) -> None:
    rows: list[Cells] = [ran(), ran()]
    write_files(tmp_path / "csv", {"session.csv": rows})
    said = []
    for dry_run in (True, False):
        with pytest.raises(ImportProblems) as told:
            import_folder(book, tmp_path / "csv", ENTRY, dry_run)
        said.append(told.value.problems)
    assert said[0] == said[1]
    assert said[0][0].startswith("session.csv line 3: the session of R1")


def test_one_bad_row_keeps_all_the_good_ones_out(book: Book, tmp_path: Path) -> None:
    rows = [ran(f"2026-03-{n:02d} 10:00", end=f"2026-03-{n:02d} 12:00") for n in range(1, 20)]
    assert (
        len(problems(book, tmp_path / "csv", session=[*rows, ran("2026-03-25 10:00", "3h", "2026-03-25 14:00")])) == 1
    )
    assert len(read_history(book, END).of(Session)) == 0


def test_all_problems_come_at_once_each_with_its_file_and_line(book: Book, tmp_path: Path) -> None:
    found = problems(
        book,
        tmp_path / "csv",
        session=[
            ran(hours="NaN"),
            ran("2026-02-30 10:00"),
            ran("2026-03-05 10:00", "3h", "2026-03-05 14:00", outcome="crashed", impacts=-1),
            {**ran(), "robot": "R7"},
            {**ran(), "ended_at": ""},
        ],
        removal=[{"happened_at": "2026-03-01", "unit": "U1", "slot": "discs", "reason": "failed"}],
        failure=[{"happened_at": "2026-03-01", "unit": "U1", "slot": "pins", "mode": "snapped", "finding": "stopped"}],
    )
    assert found == [
        "session.csv line 2: hours is 'NaN', not a finite number.",
        "session.csv line 3: happened_at is '2026-02-30 10:00', not a date and time such as 2026-11-30 17:45.",
        "session.csv line 4: hours is '3h', not hours as a plain number such as 1.5.",
        "session.csv line 4: impacts is -1, below 0.",
        "session.csv line 4: outcome is 'crashed'; it may be: finished, stopped, broken off.",
        "session.csv line 5: robot names robot 'R7', which this book does not have.",
        "session.csv line 6: ended_at is empty.",
        "removal.csv line 2: slot names slot 'discs', which this book does not have.",
        "failure.csv line 2: place is empty, but 13 parts sit there; say which one failed.",
    ]


def test_contradictions_between_rows_come_at_once_too(book: Book, tmp_path: Path) -> None:
    fitted = {"happened_at": "2026-03-01 10:00", "unit": "U1", "slot": "disc"}
    found = problems(
        book,
        tmp_path / "csv",
        session=[ran(), ran()],
        fitment=[{**fitted, "lot": "D-2"}, {**fitted, "unit": "U2", "lot": "P-1"}],
    )
    assert [sentence.split(":")[0] for sentence in found] == [
        "session.csv line 3",
        "fitment.csv line 3",
        "fitment.csv line 2",
        "fitment.csv line 3",
    ]


def test_a_contradiction_with_the_book_names_both_sides(book: Book, tmp_path: Path) -> None:
    add(book, [session("R1", datetime(2026, 3, 2, 10, tzinfo=UTC), 1.0)])
    (said,) = problems(book, tmp_path / "csv", session=[ran()])
    assert "2026-03-02 10:00 to 2026-03-02 12:00" in said and "2026-03-02 10:00 to 2026-03-02 11:00" in said


def test_the_doubled_hour_asks_for_the_offset(book: Book, tmp_path: Path) -> None:
    (said,) = problems(book, tmp_path / "csv", session=[ran("2026-10-25 02:30", end="2026-10-25 05:00")])
    assert said.startswith("session.csv line 2: happened_at is '2026-10-25 02:30', a clock time that came twice")
    assert (
        import_rows(
            book, tmp_path / "csv", session=[ran("2026-10-25 02:30+02:00", end="2026-10-25 05:00")]
        ).write_number
        == 2
    )


def test_the_same_files_a_second_time_are_refused(tmp_path: Path) -> None:
    book, _ = imported_book(tmp_path / "book.db", tmp_path / "csv", ("session.csv", [ran()]))
    with closing(book):
        before = read_history(book, END)
        with pytest.raises(ImportProblems) as told:
            import_folder(book, tmp_path / "csv", ENTRY)
        after = read_history(book, END)
    said = told.value.problems
    assert "robot.csv line 2: robot R1 is there already; give each its own code." in said
    assert any("settings already" in sentence for sentence in said)
    assert after.rows == before.rows and after.write_number == before.write_number == 1


def test_the_same_ledger_a_second_time_is_refused(book: Book, tmp_path: Path) -> None:
    rows: list[Cells] = [ran(), ran("2026-03-03 10:00", end="2026-03-03 12:00")]
    import_rows(book, tmp_path / "csv", session=rows)
    said = problems(book, tmp_path / "csv", session=rows)
    assert [sentence.split(" of R1")[0] for sentence in said] == [
        "session.csv line 2: the session",
        "session.csv line 3: the session",
    ]


def test_ids_that_a_file_states_are_kept_and_refused_when_they_come_again(book: Book, tmp_path: Path) -> None:
    first = {**ran(), "record_id": "abc"}
    import_rows(book, tmp_path / "csv", session=[first])
    assert "abc" in read_history(book, END).of(Session)
    other = {**ran("2026-03-09 10:00", end="2026-03-09 12:00"), "record_id": "abc"}
    assert problems(book, tmp_path / "csv2", session=[other]) == [
        "session.csv line 2: record_id abc is there already; leave the row out."
    ]
    twice = [{**ran(f"2026-04-0{n} 10:00", end=f"2026-04-0{n} 12:00"), "record_id": "def"} for n in (1, 2)]
    assert problems(book, tmp_path / "csv3", session=twice) == [
        "session.csv line 3: record_id def is there already; leave the row out."
    ]
    (said,) = problems(
        book, tmp_path / "csv4", session=[{**ran("2026-04-05", end="2026-04-06"), "record_id": "x" * 41}]
    )
    assert "no id of at most 40 characters" in said


@pytest.mark.parametrize(
    ("claim", "said"),
    [
        ({"entered_by": "bench"}, "entered_by needs entered_at beside it"),
        ({"entered_at": "0001-01-01T00:00+14:00"}, "entered_at is"),
        ({"entered_at": "2999-01-01"}, "entered_at is 2999-01-01T00:00:00+01:00, outside the years"),
        ({"entered_at": "soon"}, "entered_at is 'soon', not a date and time"),
        ({"entered_at": "2026-03-03", "entered_by": "x" * 61}, "entered_by is longer than 60"),
    ],
)
def test_a_claim_of_entry_that_cannot_be_is_refused(book: Book, tmp_path: Path, claim: Cells, said: str) -> None:
    (found,) = problems(book, tmp_path / "csv", session=[ran(**claim)])
    assert found.startswith(f"session.csv line 2: {said}")


# Files and headers


def test_a_wrong_column_is_answered_with_the_nearest_one(book: Book, tmp_path: Path) -> None:
    found = problems(book, tmp_path / "csv", session=[{"robot": "R1", "hapened_at": "x", "ended_at": "x", "hours": 1}])
    assert found == [
        "session.csv line 1: unknown column 'hapened_at'; did you mean happened_at?",
        "session.csv line 1: column happened_at is missing.",
    ]


def test_a_column_that_is_like_none_is_answered_with_all(book: Book, tmp_path: Path) -> None:
    (said,) = problems(book, tmp_path / "csv", session=[{**ran(), "zzz": 1}])
    assert said.startswith("session.csv line 1: unknown column 'zzz'; it may have: happened_at, robot, ended_at, hours")


def test_a_column_that_stands_twice_is_refused(book: Book, tmp_path: Path) -> None:
    folder = tmp_path / "csv"
    folder.mkdir()
    (folder / "unit.csv").write_text("code,unit_design,code\nU9,joint,U9\n")
    with pytest.raises(ImportProblems, match="a column stands twice"):
        import_folder(book, folder, ENTRY)


def test_a_row_with_too_few_cells_is_named(book: Book, tmp_path: Path) -> None:
    folder = tmp_path / "csv"
    folder.mkdir()
    (folder / "unit.csv").write_text("code,unit_design\nU9\nU8,joint\n")
    with pytest.raises(ImportProblems, match=r"unit\.csv line 2: has 1 cells, the header has 2"):
        import_folder(book, folder, ENTRY)


def test_an_unknown_file_is_answered_with_the_nearest_name(book: Book, tmp_path: Path) -> None:
    assert problems(book, tmp_path / "csv", sessions=[ran()]) == [
        "sessions.csv: no such kind of record; did you mean session.csv."
    ]
    assert problems(book, tmp_path / "csv2", zzz=[ran()]) == ["zzz.csv: no such kind of record."]


def test_a_file_that_is_not_utf8_says_so(book: Book, tmp_path: Path) -> None:
    folder = write_files(tmp_path / "csv", {})
    (folder / "unit.csv").write_bytes("code,unit_design\nmödule,joint\n".encode("latin-1"))
    with pytest.raises(ImportProblems, match=r"unit\.csv: is not UTF-8 text; save it as CSV in UTF-8"):
        import_folder(book, folder, ENTRY)


def test_a_quote_that_never_ends_is_told(book: Book, tmp_path: Path) -> None:
    folder = write_files(tmp_path / "csv", {})
    (folder / "unit.csv").write_text('code,unit_design\n"U9,joint\n')
    with pytest.raises(ImportProblems, match=r"unit\.csv: is not a CSV file that can be read"):
        import_folder(book, folder, ENTRY)


def test_a_link_out_of_the_folder_is_refused_unread(book: Book, tmp_path: Path) -> None:
    outside = write_files(tmp_path / "outside", {"unit.csv": [{"code": "U9", "unit_design": "joint"}]})
    folder = write_files(tmp_path / "csv", {})
    os.symlink(outside / "unit.csv", folder / "unit.csv")
    with pytest.raises(ImportProblems, match=r"unit\.csv: is a link to somewhere else"):
        import_folder(book, folder, ENTRY)


def test_a_folder_or_a_socket_with_the_name_of_a_file_is_refused(
    book: Book, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    folder = tmp_path / "csv"
    (folder / "unit.csv").mkdir(parents=True)
    monkeypatch.chdir(folder)  # the name of a socket must be short
    with closing(socket.socket(socket.AF_UNIX)) as listening, pytest.raises(ImportProblems) as told:
        listening.bind("robot.csv")
        import_folder(book, folder, ENTRY)
    assert told.value.problems == ("robot.csv: is not a plain file.", "unit.csv: is not a plain file.")


def test_no_folder_and_a_folder_without_files_are_told_apart(book: Book, tmp_path: Path) -> None:
    with pytest.raises(BookError, match="There is no folder"):
        import_folder(book, tmp_path / "gone", ENTRY)
    with pytest.raises(BookError, match="holds no CSV files"):
        import_folder(book, write_files(tmp_path / "empty", {}), ENTRY)


def test_an_empty_file_lacks_its_columns(book: Book, tmp_path: Path) -> None:
    folder = write_files(tmp_path / "csv", {})
    (folder / "unit.csv").write_text("")
    with pytest.raises(ImportProblems, match=r"unit\.csv line 1: column code is missing"):
        import_folder(book, folder, ENTRY)


def test_a_zone_that_is_none_stops_the_import_before_any_time_is_read(tmp_path: Path) -> None:
    files = tiny_files() | {"settings.csv": [{"title": "Test", "zone": "Mars/Olympus"}]}
    with closing(create_book(tmp_path / "book.db")) as book:
        with pytest.raises(ImportProblems) as told:
            import_folder(book, write_files(tmp_path / "csv", files), ENTRY)
        assert book.write_number() == 0
    assert told.value.problems == (
        "settings.csv line 2: zone is 'Mars/Olympus', not an IANA zone such as Europe/Amsterdam.",
    )


def test_progress_is_told_by_kind_and_before_writing(book: Book, tmp_path: Path) -> None:
    told: list[tuple[str, int]] = []
    folder = write_files(tmp_path / "csv", {"session.csv": [ran()]})
    import_folder(book, folder, ENTRY, progress=lambda what, count: told.append((what, count)))
    assert told == [("reading session", 1), ("checking and writing", 1)]


def test_every_column_that_a_kind_may_have_is_told_once() -> None:
    for cls in (Session, SessionUse, Fitment, Failure, Placement, Robot):
        columns = columns_of_kind(cls)
        named = [*columns.needed, *columns.optional]
        assert len(named) == len(set(named))
        assert {"record_id", "entered_at", "entered_by"} <= set(columns.optional)
    assert columns_of_kind(Session).needed == ("happened_at", "robot", "ended_at", "hours")
    assert {"from_unit", "from_slot", "from_place"} <= set(columns_of_kind(Fitment).optional)


def test_the_builder_of_these_tests_writes_what_the_reader_reads(tmp_path: Path) -> None:
    folder = write_files(tmp_path / "csv", tiny_files())
    with (folder / "slot.csv").open(newline="") as file:
        assert [row["count"] for row in csv.DictReader(file)] == ["1", "13", "1"]
    assert day(0, 8) == FITTED
