"""What pages draw from a read-out: stories, ages, curves, stock, plates and past months, without a screen."""

from __future__ import annotations

from datetime import date, timedelta
from functools import cache

import pytest

from dashboard.answers import month_starts
from dashboard.curves import life_curves, listed, stock_steps
from dashboard.stories import age_dots, events_of, unit_of
from dashboard.workshop import changes_of, on_printers_now, presence_spans, runs_of, spool_uses
from fleet.lives.part_data import LifeKey
from fleet.pipeline import Question, ReadOut, read_out
from fleet.records.ledger import Plate, Purchase, StockMove
from fleet.records.set_up import Presence, Printer, Spool, UsagePlan
from tests.books import check, day, failure, fitment, history_with, removal, session

AS_OF = day(40, 10)
FAILED = ((12, "U1"), (18, "U2"), (25, "U3"))


@cache
def found() -> ReadOut:
    """Forty days of two robots, three split discs, one printer that is printing."""
    records = [session(robot, day(at, 14), 2) for at in range(1, 40) for robot in ("R1", "R2")]
    swaps = [
        entry
        for at, unit in FAILED
        for entry in (
            failure(f"{unit} disc", "disc: split", day(at, 16)),
            removal(f"{unit} disc", day(at, 16), "failed"),
            fitment(unit, "disc", day(at, 16), record_id=f"{unit} second", sequence=1, lot="D-2"),
        )
    ]
    stock = [
        StockMove(record_id="count", happened_at=day(30), lot="P-1", quantity=7, reason="counted"),
        Purchase(record_id="o", code="O-1", happened_at=day(38), part_type="pin", quantity=50, due_at=day(54)),
    ]
    shop = [
        *(UsagePlan(record_id=f"plan {c}", robot=c, hours_per_week=60, session_hours=2) for c in ("R1", "R2")),
        Printer(record_id="PR-1", code="PR-1", label="printer", nozzle_mm=0.4, change_minutes=10),
        Spool(record_id="SP-1", code="SP-1", material="PA-CF", grams_left=900),
        *(
            Presence(record_id=name, weekday=name, start_minute=480, end_minute=1020)
            for name in ("Monday", "Tuesday", "Wednesday", "Thursday", "Friday", "Saturday", "Sunday")
        ),
        Plate(record_id="p", code="PL-1", happened_at=day(40, 8), printer="PR-1", lot="D-2", started=2),
    ]
    look = [check("U1", day(20), note="felt smooth")]
    return read_out(history_with(*records, *swaps, *stock, *shop, *look, as_of=AS_OF), Question())


def test_a_story_tells_everything_that_happened_in_a_module_newest_first() -> None:
    events = events_of(found(), "U1")
    assert [event.moment for event in events] == sorted((event.moment for event in events), reverse=True)
    said = {(event.what, event.part) for event in events}
    assert ("stopped: disc split", "disc") in said
    assert ("fitted, lot D-2", "disc") in said
    assert ("checked, good: felt smooth", "whole joint") in said
    assert ("put in R1 left hip", "whole module") in said
    assert all(event.record_id for event in events)
    assert unit_of(found().history, "U1") == "U1"


def test_each_part_is_a_dot_at_the_age_it_has_or_had() -> None:
    dots = age_dots(found(), "U1", "slot-disc")
    assert [(dot.fate, dot.age) for dot in dots] == [("failed", 24.0), ("running", 54.0)]
    pins = age_dots(found(), "U1", "slot-pins")
    assert [(dot.fate, dot.count) for dot in pins] == [("running", 13)]


def test_curves_hold_steps_only_from_three_failures_on() -> None:
    discs = life_curves(found(), LifeKey("disc", "disc-A"))
    assert len(discs.steps) > 0
    assert discs.steps["reliability"].is_monotonic_decreasing
    pins = life_curves(found(), LifeKey("pin"))
    assert len(pins.steps) == 0
    assert len(pins.running) > 0


def test_the_table_under_a_curve_says_the_same_as_the_curve() -> None:
    curves = life_curves(found(), LifeKey("disc", "disc-A"))
    rows = listed(curves, 100.0)
    assert rows[0].hours == 0 and rows[0].reliability == pytest.approx(1.0)
    assert rows[-1].hours == 100
    assert all(row.low <= row.reliability <= row.high for row in rows)
    assert rows[0].records == 1.0
    assert rows[-1].records is None, "the records say nothing past the oldest part"


def test_stock_rises_when_the_order_is_due() -> None:
    (pins,) = [need for need in found().spares if need.code == "pin"]
    steps = stock_steps(found(), pins)
    assert steps["parts"].tolist() == [7, 57, 57]
    assert steps["week"].tolist() == [0.0, 2.0, 8.0]


def test_every_planned_plate_is_put_on_and_taken_off_once() -> None:
    plates = found().plates.plan.plates
    assert plates, "three failed discs leave something to print"
    words = [change.words for change in changes_of(found())]
    for plate in plates:
        assert sum(f"put on plate {plate.number} " in said for said in words) == 1
        assert sum(f"take off plate {plate.number} " in said for said in words) == 1
    assert words[-1].endswith("then idle")


def test_a_plate_that_prints_is_shown_until_its_end_is_recorded() -> None:
    (run,) = on_printers_now(found())
    assert (run.kind, run.label, run.end - run.start) == ("printing", "PL-1", timedelta(minutes=25 + 2 * 95))
    assert run in runs_of(found())
    assert len(presence_spans(found())) == 7
    (spool,) = spool_uses(found())
    assert spool.grams_planned == pytest.approx(sum(plate.grams for plate in found().plates.plan.plates))


def test_past_months_are_full_ones_and_none_before_the_first_session() -> None:
    today = date(2026, 3, 15)
    assert month_starts(today, date(2025, 1, 1), 2) == [date(2026, 1, 1), date(2026, 2, 1), date(2026, 3, 1)]
    assert month_starts(today, date(2026, 1, 20), 6) == [date(2026, 2, 1), date(2026, 3, 1)]
    assert month_starts(today, date(2026, 3, 2), 6) == [date(2026, 3, 1)]
