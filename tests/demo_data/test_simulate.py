"""The invented fleet: its promises, the soundness of its files, and that its true lives can be found again in them."""

from __future__ import annotations

import csv
import math
from bisect import bisect_right
from collections import Counter, defaultdict
from dataclasses import dataclass
from datetime import datetime, timedelta
from functools import cache
from pathlib import Path

import pytest
from lifelines import WeibullFitter

from demo_data.files import csv_folder, write_csv
from demo_data.fleet_plan import BAD_LOT
from demo_data.simulate import simulate
from demo_data.truth import KEPT_APART_FACTOR, TRUE_MODES, TrueMode, true_b10, true_modes
from fleet.records.fields import column_of, fields_of, kind_of
from fleet.records.history import KINDS

Row = dict[str, str]
SEEDS = (1, 2, 3, 4)
REFERENCE_COLUMNS = {
    "robot",
    "position",
    "slot",
    "place",
    "from_unit",
    "from_slot",
    "from_place",
    "broken_by_slot",
    "broken_by_place",
    "unit",
    "entered_at",
    "entered_by",
}


@cache
def rows_of(seed: int) -> dict[str, list[Row]]:
    return simulate(seed)


def when(text: str) -> datetime:
    return datetime.fromisoformat(text)


# Ages, computed from the rows alone and not by the simulation's own clocks.


@dataclass(frozen=True)
class Lived:
    """One part's watched life in one mode: ages in the mode's clock, and whether it failed in this mode."""

    mode: TrueMode
    entry: float
    exit: float
    failed: bool


class Clocks:
    """Running totals of every module, from sessions and placements."""

    def __init__(self, files: dict[str, list[Row]]) -> None:
        turns_per_hour = {(r["robot"], r["code"]): float(r["turns_per_hour"]) for r in files["position.csv"]}
        logged = {(r["robot"], r["session"], r["position"]): float(r["turns"]) for r in files["session_use.csv"]}
        sitting: dict[tuple[str, str], list[tuple[datetime, str]]] = defaultdict(list)
        for row in files["placement.csv"]:
            if row["position"]:
                sitting[row["robot"], row["position"]].append((when(row["happened_at"]), row["unit"]))
        self._ends: dict[str, list[datetime]] = defaultdict(list)
        self._totals: dict[str, list[dict[str, float]]] = defaultdict(list)
        for row in sorted(files["session.csv"], key=lambda row: when(row["happened_at"])):
            hours, impacts = float(row["hours"]), float(row["impacts"])
            for (robot, position), stays in sitting.items():
                if robot != row["robot"]:
                    continue
                unit = [unit for since, unit in stays if since <= when(row["happened_at"])][-1]
                turns = logged.get((robot, row["happened_at"], position), hours * turns_per_hour[robot, position])
                self._add(unit, when(row["ended_at"]), {"hours": hours, "turns": turns, "impacts": impacts})

    def _add(self, unit: str, end: datetime, gain: dict[str, float]) -> None:
        before = self._totals[unit][-1] if self._totals[unit] else dict.fromkeys(gain, 0.0)
        self._ends[unit].append(end)
        self._totals[unit].append({clock: before[clock] + gain[clock] for clock in gain})

    def at(self, unit: str, moment: datetime) -> dict[str, float]:
        number = bisect_right(self._ends[unit], moment)
        return self._totals[unit][number - 1] if number else {"hours": 0.0, "turns": 0.0, "impacts": 0.0}


@dataclass
class Held:
    """A part in its place, as the rows tell it."""

    part_type: str
    revision: str
    kept_apart: bool
    known: bool
    unit: str
    age: dict[str, float]
    reading: dict[str, float]
    entry: dict[str, float]
    failed: Row | None = None

    def age_at(self, reading: dict[str, float]) -> dict[str, float]:
        return {clock: self.age[clock] + reading[clock] - self.reading[clock] for clock in self.age}


@cache
def lives_of(seed: int) -> tuple[Lived, ...]:
    return tuple(_lives(rows_of(seed)))


def _lives(files: dict[str, list[Row]]) -> list[Lived]:
    clocks = Clocks(files)
    held: dict[tuple[str, str, int], Held] = {}
    removed: dict[tuple[str, str, int], Held] = {}
    stays = [(when(r["happened_at"]), r) for r in files["placement.csv"]]
    lives: list[Lived] = []
    moment = when("2025-01-01T00:00:00+00:00")
    for kind, row in _in_order(files, "fitment", "removal", "failure"):
        moment = when(row["happened_at"])
        if kind == "fitment":
            _fit(files, clocks, held, removed, row)
        elif kind == "failure":
            unit = [r["unit"] for at, r in stays if at <= moment and _same_place(r, row)][-1]
            part = held[unit, row["slot"], int(row["place"])]
            assert part.failed is None
            part.failed = row
        else:
            place = (row["unit"], row["slot"], int(row["place"]))
            part = removed[place] = held.pop(place)
            if row["reason"] != "moved":
                lives += _lived(part, clocks, moment)
    end = moment + timedelta(days=1)
    return lives + [life for part in held.values() for life in _lived(part, clocks, end)]


def _in_order(files: dict[str, list[Row]], *kinds: str) -> list[tuple[str, Row]]:
    mixed = [(kind, row) for kind in kinds for row in files[f"{kind}.csv"]]
    return sorted(mixed, key=lambda entry: (when(entry[1]["happened_at"]), int(entry[1]["sequence"])))


def _same_place(placement: Row, row: Row) -> bool:
    return (placement["robot"], placement["position"]) == (row["robot"], row["position"])


def _fit(
    files: dict[str, list[Row]],
    clocks: Clocks,
    held: dict[tuple[str, str, int], Held],
    removed: dict[tuple[str, str, int], Held],
    row: Row,
) -> None:
    lot = next((lot for lot in files["lot.csv"] if lot["code"] == row["lot"]), None)
    design = next(unit["unit_design"] for unit in files["unit.csv"] if unit["code"] == row["unit"])
    slot = next(s for s in files["slot.csv"] if (s["unit_design"], s["code"]) == (design, row["slot"]))
    reading = clocks.at(row["unit"], when(row["happened_at"]))
    age = {clock: float(row[f"prior_{clock}"] or 0) for clock in reading}
    entry = dict(age)
    if row["from_unit"]:
        source = removed[row["from_unit"], row["from_slot"], int(row["from_place"])]
        age = source.age_at(clocks.at(source.unit, when(row["happened_at"])))
        entry = source.entry
    for number in range(int(row["first_place"]), int(row["first_place"]) + int(row["count"])):
        place = (row["unit"], row["slot"], number)
        assert place not in held, f"{place} is fitted twice"
        held[place] = Held(
            slot["part_type"],
            lot["revision"] if lot else row["revision"],
            lot is not None and lot["kept_apart"] == "yes",
            row["prior"] != "unknown",
            row["unit"],
            age,
            reading,
            entry,
        )


def _lived(part: Held, clocks: Clocks, moment: datetime) -> list[Lived]:
    if not part.known:
        return []
    failed = part.failed
    age = part.age_at(clocks.at(part.unit, when(failed["happened_at"]) if failed else moment))
    own_mode = failed["mode"] if failed is not None and failed["cause"] != "another part's failure" else ""
    return [
        Lived(mode, part.entry[mode.clock], age[mode.clock], own_mode == mode.mode)
        for mode in true_modes(part.part_type, part.revision, part.kept_apart)
    ]


def surprise(lives: list[Lived], stretch: float = 1.0) -> float:
    """(failures - expected) / sqrt(expected), expected from the true cumulative hazards, scales stretched."""
    expected: float = sum(
        (life.exit / (life.mode.scale * stretch)) ** life.mode.shape
        - (life.entry / (life.mode.scale * stretch)) ** life.mode.shape
        for life in lives
    )
    return float((sum(life.failed for life in lives) - expected) / math.sqrt(expected))


# Promises


def test_the_same_seed_gives_the_same_rows_and_another_seed_others() -> None:
    assert simulate(1) == rows_of(1)
    assert rows_of(2)["session.csv"] != rows_of(1)["session.csv"]


def test_the_packaged_files_are_those_of_seed_1_and_small(tmp_path: Path) -> None:
    written = write_csv(tmp_path)
    assert {path.name for path in written} == {path.name for path in csv_folder().glob("*.csv")}
    for path in written:
        assert path.read_bytes() == (csv_folder() / path.name).read_bytes(), path.name
    assert sum(path.stat().st_size for path in written) < 1_500_000


def test_eight_walkers_of_eighteen_joints_and_two_arms_of_five() -> None:
    files = rows_of(1)
    joints = Counter(row["robot"] for row in files["position.csv"])
    assert sorted(joints.values()) == [5, 5] + [18] * 8
    assert len(files["unit_design.csv"]) == 2
    assert len(files["part_type.csv"]) == 12
    first, last = (
        min(r["happened_at"] for r in files["session.csv"]),
        max(r["ended_at"] for r in files["session.csv"]),
    )
    assert (first[:7], last[:7]) == ("2025-10", "2026-11")
    assert {row["prior"] for row in files["fitment.csv"]} == {"", "stated", "unknown"}


@pytest.mark.parametrize("seed", SEEDS)
def test_several_hundred_failures_and_most_parts_have_not_failed(seed: int) -> None:
    files = rows_of(seed)
    fitted = sum(int(row["count"]) for row in files["fitment.csv"])
    assert 300 <= len(files["failure.csv"]) <= 700
    assert len(files["failure.csv"]) < 0.1 * fitted
    arms = {"P1", "P2"}
    assert not [r for r in files["failure.csv"] if r["slot"] == "housing" and r["robot"] in arms]


@pytest.mark.parametrize("seed", SEEDS)
def test_sessions_of_a_robot_never_overlap_and_hold_their_hours(seed: int) -> None:
    last_end: dict[str, datetime] = {}
    for row in sorted(rows_of(seed)["session.csv"], key=lambda row: when(row["happened_at"])):
        start, end = when(row["happened_at"]), when(row["ended_at"])
        assert last_end.get(row["robot"], start) <= start < end
        assert float(row["hours"]) * 3600 == pytest.approx((end - start).total_seconds(), abs=1)
        last_end[row["robot"]] = end


@pytest.mark.parametrize("seed", SEEDS)
def test_a_session_stopped_exactly_when_a_part_stopped_it_at_its_end(seed: int) -> None:
    files = rows_of(seed)
    stopped = {(r["robot"], r["happened_at"], r["ended_at"]) for r in files["session.csv"] if r["outcome"] == "stopped"}
    noted = {(r["robot"], r["session"], r["happened_at"]) for r in files["failure.csv"] if r["finding"] == "stopped"}
    assert stopped == noted


@pytest.mark.parametrize("seed", SEEDS)
def test_every_failed_part_is_replaced_by_the_next_day_except_one_at_the_end(seed: int) -> None:
    files = rows_of(seed)
    replaced = Counter(r["reason"] for r in files["removal.csv"])
    repaired = replaced["failed"] + replaced["found worn"] + replaced["broken by another part"]
    assert len(files["failure.csv"]) - repaired == 1
    assert len(files["hold.csv"]) - len(files["release.csv"]) == 1


@pytest.mark.parametrize("seed", SEEDS)
def test_no_bag_ever_holds_less_than_nothing_and_counts_are_what_is_left(seed: int) -> None:
    files = rows_of(seed)
    events = [(when(r["happened_at"]), 0, r["lot"], r["reason"], int(r["quantity"])) for r in files["stock_move.csv"]]
    events += [(when(r["ended_at"]), 0, r["lot"], "received", int(r["good"])) for r in files["plate.csv"] if r["good"]]
    events += [
        (when(r["happened_at"]), 1, r["lot"], "fitted", int(r["count"]))
        for r in files["fitment.csv"]
        if r["lot"] and not r["from_unit"]
    ]
    on_hand: Counter[str] = Counter()
    for _, _, lot, what, quantity in sorted(events, key=lambda event: event[:2]):
        if what == "counted":
            assert on_hand[lot] - 3 <= quantity <= on_hand[lot]
            on_hand[lot] = quantity
        else:
            on_hand[lot] += quantity if what == "received" else -quantity
        assert on_hand[lot] >= 0


def test_every_column_is_a_field_of_its_record_or_names_another_record() -> None:
    classes: dict[str, type] = {f"{kind_of(cls)}.csv": cls for cls in KINDS}
    assert set(rows_of(1)) == set(classes)
    for name, rows in rows_of(1).items():
        allowed = {column_of(field, spec) for field, spec in fields_of(classes[name]).items()} | REFERENCE_COLUMNS
        assert set(rows[0]) <= allowed, name


def test_the_header_of_a_packaged_file_has_no_empty_column() -> None:
    for path in csv_folder().glob("*.csv"):
        with path.open(encoding="utf-8", newline="") as stream:
            rows = list(csv.DictReader(stream))
        assert all(any(row[column] for row in rows) for column in rows[0]), path.name


# The truth can be found again


def test_one_in_ten_is_gone_at_the_true_b10() -> None:
    for mode in TRUE_MODES:
        b10 = true_b10(mode.part_type, mode.revision)[mode.mode]
        assert math.exp(-((b10 / mode.scale) ** mode.shape)) == pytest.approx(0.9)


def test_the_lot_kept_apart_has_half_the_b10_and_stop_leaves_out_the_worn() -> None:
    usual, bad = true_b10("disc", "C"), true_b10("disc", "C", lot_kept_apart=True)
    assert {mode: bad[mode] / usual[mode] for mode in usual} == pytest.approx(dict.fromkeys(usual, KEPT_APART_FACTOR))
    assert set(true_b10("disc", "C", endpoint="stop")) == {"layer split"}
    kept_apart = [row["code"] for row in rows_of(1)["lot.csv"] if row["kept_apart"] == "yes"]
    assert kept_apart == [BAD_LOT]


@pytest.mark.parametrize("seed", SEEDS)
def test_a_weibull_fit_of_the_recorded_ages_finds_the_true_scale_again(seed: int) -> None:
    truth = next(mode for mode in true_modes("disc", "B") if mode.mode == "lobe wear")
    lives = [life for life in lives_of(seed) if life.mode == truth]
    fit = WeibullFitter().fit([life.exit for life in lives], [life.failed for life in lives])
    assert fit.lambda_ == pytest.approx(truth.scale, rel=0.25)


@pytest.mark.parametrize("truth", TRUE_MODES, ids=lambda mode: f"{mode.part_type} {mode.revision} {mode.mode}")
def test_failures_in_each_mode_are_as_many_as_its_true_hazard_at_the_recorded_ages_expects(truth: TrueMode) -> None:
    lives = [life for seed in SEEDS for life in lives_of(seed) if life.mode == truth]
    assert abs(surprise(lives)) < 3.5


def test_the_bad_lot_fails_as_its_shorter_scales_expect() -> None:
    for truth in true_modes("disc", "C", lot_kept_apart=True):
        lives = [life for seed in SEEDS for life in lives_of(seed) if life.mode == truth]
        assert abs(surprise(lives)) < 3.5
        assert surprise(lives, stretch=1 / KEPT_APART_FACTOR) > 3.5


def test_a_truth_stated_a_third_too_long_would_be_noticed() -> None:
    for part_type, revision, mode in (("disc", "B", "lobe wear"), ("disc", "B", "layer split"), ("pin", "", "snapped")):
        truth = next(true for true in true_modes(part_type, revision) if true.mode == mode)
        lives = [life for seed in SEEDS for life in lives_of(seed) if life.mode == truth]
        assert surprise(lives, stretch=1.33) > 3.5
