"""Plates: four rules over random workshops, and plain cases."""

from __future__ import annotations

from datetime import datetime, timedelta
from itertools import pairwise
from zoneinfo import ZoneInfo

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from fleet.errors import PlanError
from fleet.plans.plates import Plate, PlatePlan, PresenceWindow, PrinterNow, PrintNeed, SpoolNow, plan_plates
from fleet.plans.yields import starts_for

UTC = ZoneInfo("UTC")
ZONE = "Europe/Berlin"
NOW = datetime(2026, 3, 27, 8, 0, tzinfo=UTC)  # Friday; the clocks change on Sunday
WEEK = tuple(PresenceWindow(day, 9 * 60, 18 * 60) for day in range(5))


def need(**changes: object) -> PrintNeed:
    figures: dict[str, object] = {
        "part": "disc", "label": "Cycloid disc", "revision": "D", "good_wanted": 6, "due": NOW + timedelta(days=7),
        "material": "PA-CF", "nozzle_mm": 0.4, "parts_per_plate": 4, "minutes_per_part": 50.0,
        "minutes_per_plate": 15.0, "grams_per_part": 30.0, "good": 40, "started": 42,
    }  # fmt: skip
    return PrintNeed(**{**figures, **changes})  # type: ignore[arg-type]


PRINTER = PrinterNow("P1", 0.4, 15.0, NOW)
SPOOL = SpoolNow("S1", "PA-CF", 900.0)


@st.composite
def workshops(draw: st.DrawFn) -> dict[str, object]:
    materials, nozzles = st.sampled_from(["PA-CF", "TPU"]), st.sampled_from([0.4, 0.6])
    needs = draw(st.lists(st.builds(
        need, part=st.sampled_from("ab"), good_wanted=st.integers(0, 12), material=materials, nozzle_mm=nozzles,
        due=st.integers(0, 240).map(lambda hours: NOW + timedelta(hours=hours)), parts_per_plate=st.integers(1, 6),
        minutes_per_part=st.sampled_from([7.0, 50.0, 400.0]), grams_per_part=st.sampled_from([3.0, 40.0, 260.0]),
        good=st.integers(15, 20), started=st.just(20),
    ), max_size=4))  # fmt: skip
    free = st.integers(-5, 30).map(lambda hours: NOW + timedelta(hours=hours))
    minutes, grams = st.sampled_from([0.0, 5.0, 20.0]), st.sampled_from([0.0, 100.0, 300.0, 1000.0])
    n_printers, n_spools = draw(st.integers(0, 3)), draw(st.integers(0, 4))
    printers = [PrinterNow(f"P{i}", draw(nozzles), draw(minutes), draw(free)) for i in range(n_printers)]
    spools = [SpoolNow(f"S{i}", draw(materials), draw(grams)) for i in range(n_spools)]
    windows = st.builds(
        lambda day, start, length: PresenceWindow(day, start, min(start + length, 1440)),
        st.integers(0, 6), st.integers(0, 1380), st.integers(5, 600),
    )  # fmt: skip
    presence = draw(st.lists(windows, max_size=6))
    return {"needs": needs, "printers": printers, "spools": spools, "presence": presence}


def present(moment: datetime, minutes: float, presence: list[PresenceWindow]) -> bool:
    """Whether somebody is there for so many minutes from a moment on, minute by minute."""
    steps = [moment + timedelta(minutes=i) for i in range(int(minutes))] or [moment]
    for step in steps:
        local = step.astimezone(ZoneInfo(ZONE))
        at = local.hour * 60 + local.minute + local.second / 60
        if not any(w.weekday == local.weekday() and w.start_minute <= at <= w.end_minute for w in presence):
            yesterday = (local.weekday() - 1) % 7
            if at > 0 or not any(w.weekday == yesterday and w.end_minute == 1440 for w in presence):
                return False
    return True


def changes_of(plates: list[Plate], minutes: float) -> set[tuple[datetime, datetime]]:
    length = timedelta(minutes=minutes)
    starts = {plate.loaded_from for plate in plates} | {plate.taken_off_at for plate in plates}
    return {(start, start + length) for start in starts}


@settings(max_examples=60, deadline=None, derandomize=True)
@given(workshops())
def test_four_rules_hold_in_any_workshop(shop: dict[str, object]) -> None:
    plan = plan_plates(**shop, now=NOW, zone=ZONE)  # type: ignore[arg-type]
    printers: list[PrinterNow] = shop["printers"]  # type: ignore[assignment]
    changes: list[tuple[datetime, datetime]] = []
    for printer in printers:
        mine = sorted((p for p in plan.plates if p.printer == printer.code), key=lambda p: p.start)
        for before, after in pairwise(mine):
            assert before.taken_off_at <= after.loaded_from, "two plates overlap on a printer"
        for plate in mine:
            assert max(NOW, printer.free_from) <= plate.loaded_from <= plate.start < plate.end <= plate.taken_off_at
            for change in (plate.loaded_from, plate.taken_off_at):
                assert present(change, printer.change_minutes, shop["presence"]), "a change while nobody is there"  # type: ignore[arg-type]
        changes += changes_of(mine, printer.change_minutes)
    changes = sorted(change for change in changes if change[0] < change[1])
    assert all(first[1] <= second[0] for first, second in pairwise(changes)), "two changes at once"
    for spool in shop["spools"]:  # type: ignore[attr-defined]
        mine = sorted((p for p in plan.plates if p.spool == spool.code), key=lambda p: p.start)
        assert sum(p.grams for p in mine) <= spool.grams_left + 1e-6, "more than the spool holds"
        for first, second in pairwise(mine):
            assert first.taken_off_at <= second.loaded_from, "one spool on two printers"
    assert_all_accounted(plan, shop["needs"])  # type: ignore[arg-type]


def assert_all_accounted(plan: PlatePlan, needs: list[PrintNeed]) -> None:
    """Every print that is wanted is on a plate, or a shortage is told."""
    wanted = sum(starts_for(n.good_wanted, 0.9, n.good, n.started) for n in needs)
    planned = sum(plate.count for plate in plan.plates)
    assert planned == wanted if not plan.shortages else planned < wanted
    assert [plate.number for plate in plan.plates] == list(range(1, len(plan.plates) + 1))
    assert plan.late == tuple(plate for plate in plan.plates if plate.taken_off_at > plate.due)


def test_a_plain_friday() -> None:
    plan = plan_plates([need()], [PRINTER], [SPOOL], WEEK, NOW, zone=ZONE)
    first, second = plan.plates
    assert (first.count, second.count) == (4, 3)
    assert first.start == NOW + timedelta(minutes=15)
    assert first.hours == pytest.approx((15 + 4 * 50) / 60)
    assert first.grams == 120.0
    assert second.loaded_from == first.taken_off_at
    assert not plan.shortages and not plan.late


def test_a_print_that_ends_after_hours_is_taken_off_when_somebody_is_there_again_after_the_clocks_changed() -> None:
    long = need(good_wanted=1, minutes_per_part=12 * 60.0)
    plan = plan_plates([long], [PRINTER], [SPOOL], WEEK, NOW, zone=ZONE)
    assert plan.plates[0].taken_off_at == datetime(2026, 3, 30, 7, 0, tzinfo=UTC)


def test_the_earliest_due_comes_first_and_the_late_is_named() -> None:
    urgent = need(part="pin", label="Pin", due=NOW + timedelta(hours=1), good_wanted=2)
    plan = plan_plates([need(), urgent], [PRINTER], [SPOOL], WEEK, NOW, zone=ZONE)
    assert plan.plates[0].label == "Pin"
    assert [plate.label for plate in plan.late] == ["Pin"]


def test_two_printers_share_the_one_person_and_not_one_spool() -> None:
    printers = [PRINTER, PrinterNow("P2", 0.4, 15.0, NOW)]
    plan = plan_plates([need()], printers, [SPOOL, SpoolNow("S2", "PA-CF", 500.0)], WEEK, NOW, zone=ZONE)
    assert {(p.printer, p.spool) for p in plan.plates} in ({("P1", "S2"), ("P2", "S1")}, {("P1", "S1"), ("P2", "S2")})
    assert plan.plates[1].loaded_from == plan.plates[0].loaded_from + timedelta(minutes=15)


@pytest.mark.parametrize(
    ("change", "told"),
    [
        ({"presence": ()}, "nobody is there"),
        ({"presence": (PresenceWindow(0, 540, 550),)}, "nobody is there"),
        ({"printers": [PrinterNow("P1", 0.8, 15.0, NOW)]}, "no printer has a nozzle of 0.4 mm"),
        ({"spools": [SpoolNow("S1", "PA-CF", 29.0)]}, "no spool of PA-CF holds 30 g"),
        ({"spools": [SpoolNow("S1", "TPU", 900.0)]}, "no spool of PA-CF holds 30 g"),
    ],
)
def test_what_is_missing_is_told_and_nothing_crashes(change: dict[str, object], told: str) -> None:
    shop: dict[str, object] = {"printers": [PRINTER], "spools": [SPOOL], "presence": WEEK, **change}
    plan = plan_plates([need()], now=NOW, zone=ZONE, **shop)  # type: ignore[arg-type]
    assert not plan.plates
    assert told in plan.shortages[0]
    assert plan.shortages[0].startswith("Cycloid disc (D): 7 of its prints are not planned")


def test_a_short_spool_prints_what_it_can_and_the_rest_is_told() -> None:
    plan = plan_plates([need()], [PRINTER], [SpoolNow("S1", "PA-CF", 100.0)], WEEK, NOW, zone=ZONE)
    assert [plate.count for plate in plan.plates] == [3]
    assert "4 of its prints are not planned" in plan.shortages[0]


def test_figures_that_cannot_be_are_refused_all_at_once() -> None:
    with pytest.raises(PlanError, match=r"has no zone[\s\S]*must be above 0[\s\S]*weekday"):
        plan_plates(
            [need(grams_per_part=0.0, due=datetime(2026, 4, 1))], [PRINTER], [SPOOL], (PresenceWindow(7, 0, 10),), NOW
        )
