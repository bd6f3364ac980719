"""From the spares that are short to the first plates: what is wanted, by when, with which yield, on which printer."""

from __future__ import annotations

from dataclasses import replace
from datetime import datetime, timedelta

import pytest

from fleet.plans.plate_list import PlateList, plate_list
from fleet.plans.spare_list import SpareNeed, spare_list
from fleet.plans.yields import starts_for
from fleet.records.fields import Record
from fleet.records.ledger import Plate
from fleet.records.set_up import Presence, Printer, Spool, UsagePlan
from fleet.records.vocabulary import WEEKDAYS
from tests.books import day, history_with, new_id, session
from tests.chain import chain_of

RAN = [session(robot, day(n), 5.0) for n in range(1, 21) for robot in ("R1", "R2")]
PLANS = [
    UsagePlan(record_id=f"plan-{robot}", robot=robot, hours_per_week=15.0, session_hours=2.0) for robot in ("R1", "R2")
]
PRINTERS = [
    Printer(record_id=code, code=code, label=code, nozzle_mm=nozzle, change_minutes=10)
    for code, nozzle in (("PR-1", 0.4), ("PR-2", 0.4), ("PR-9", 0.6))
]
SPOOLS = [
    Spool(record_id=code, code=code, material=material, grams_left=grams)
    for code, material, grams in (("SP-1", "PA-CF", 900.0), ("SP-2", "PETG", 900.0), ("SP-3", "PA-CF", 900.0))
]
PRESENT = [Presence(record_id=name, weekday=name, start_minute=8 * 60, end_minute=18 * 60) for name in WEEKDAYS]
WORKSHOP: list[Record] = [*PRINTERS, *SPOOLS, *PRESENT]
NOW = day(30, 12)
NONE_SHORT = (0,) * 8


def plate(started: int, good: int | None, moment: datetime = NOW - timedelta(days=3), printer: str = "PR-1") -> Plate:
    return Plate(
        record_id=new_id("plate"),
        happened_at=moment,
        code=new_id("PL"),
        printer=printer,
        lot="D-2",
        started=started,
        good=good,
        ended_at=None if good is None else moment + timedelta(hours=9),
    )


def planned(*records: Record, target: float = 0.9, **changed: object) -> tuple[PlateList, dict[str, SpareNeed]]:
    """The plates of a fleet whose parts have a known life; `changed` figures take the place of the disc's own."""
    chain = chain_of(history_with(*RAN, *PLANS, *records, as_of=NOW))
    demands = chain.demands(8, chain.known(2.0, 150.0))
    spares = [
        replace(need, **changed) if need.code == "disc" else need  # type: ignore[arg-type]
        for need in spare_list(chain.history, demands, chain.lives, 0.9)
    ]
    return plate_list(chain.history, spares, target), {need.code: need for need in spares}


def test_printed_parts_that_are_short_are_wanted_and_bought_ones_are_not() -> None:
    found, spares = planned(*WORKSHOP)
    assert {need.part for need in found.needs} == {"disc"}
    assert spares["pin"].short > 0
    assert sum(need.good_wanted for need in found.needs) == max(spares["disc"].short, spares["disc"].short_by_end)
    assert {need.revision for need in found.needs} == {"B"}


def test_what_is_on_the_printers_counts_as_far_as_it_is_likely_to_come_out_good() -> None:
    seen, running = plate(10, 7), plate(6, None, NOW - timedelta(hours=1))
    found, spares = planned(*WORKSHOP, seen, running, short=10, short_by_week=(10,) * 8)
    assert spares["disc"].printing == 6
    assert [need.good_wanted for need in found.needs] == [6], "7 of 10 came out, so 4 of these 6"
    assert planned(*WORKSHOP, printing=500)[0].needs == ()


def test_nothing_short_prints_nothing() -> None:
    found, _ = planned(*WORKSHOP, short=0, short_by_week=NONE_SHORT)
    assert (found.needs, found.plan.plates, found.plan.shortages) == ((), (), ())


def test_story_14_the_yield_of_the_plates_so_far_decides_how_many_to_start() -> None:
    seen = [plate(10, 9), plate(10, 8, printer="PR-2")]
    found, _ = planned(*WORKSHOP, *seen, short=12, short_by_week=NONE_SHORT)
    need = found.needs[0]
    assert (need.good, need.started, need.good_wanted) == (17, 20, 12)
    assert sum(printed.count for printed in found.plan.plates) == 18 == starts_for(12, 0.9, 17, 20)
    assert all(printed.count <= 6 for printed in found.plan.plates)


def test_what_is_short_first_is_due_before_its_week_and_the_rest_before_the_week_it_is_wanted_in() -> None:
    found, _ = planned(*WORKSHOP, short=3, short_by_week=(0, 3, 3, 3, 5, 8, 9, 9))
    assert [(need.good_wanted, (need.due - NOW).days) for need in found.needs] == [(3, 7), (6, 28)]


def test_what_is_short_now_is_due_tomorrow_and_what_no_week_shows_when_it_could_be_restocked() -> None:
    found, _ = planned(*WORKSHOP, short=2, short_by_week=(2, 2, 2, 2, 2, 2, 2, 2))
    assert [(need.good_wanted, (need.due - NOW).days) for need in found.needs] == [(2, 1)]
    found, spares = planned(*WORKSHOP, short=2, short_by_week=NONE_SHORT)
    assert [(need.due - NOW).days for need in found.needs] == [spares["disc"].days_until_restocked]


def test_only_printers_with_the_nozzle_are_used_and_people_change_the_plates() -> None:
    found, _ = planned(*WORKSHOP, plate(40, 38), short=30)
    assert found.plan.plates and not found.plan.shortages
    assert {printed.printer for printed in found.plan.plates} == {"PR-1", "PR-2"}
    assert {printed.spool for printed in found.plan.plates} == {"SP-1", "SP-3"}
    for printed in found.plan.plates:
        for change in (printed.loaded_from, printed.taken_off_at):
            local = change.astimezone(history_with().zone)
            assert 8 <= local.hour < 18, "people are there from 8 to 18, in the book's zone"
        assert printed.end - printed.start == timedelta(minutes=25 + 95 * printed.count)


def test_a_printer_with_a_plate_on_it_is_free_only_when_that_is_done() -> None:
    started = NOW - timedelta(hours=1)
    running = plate(6, None, started, printer="PR-1")
    done = started + timedelta(minutes=25 + 6 * 95)
    found, _ = planned(*WORKSHOP, plate(40, 38), running, short=30)
    first = min(printed.start for printed in found.plan.plates if printed.printer == "PR-1")
    assert first >= done
    assert min(printed.start for printed in found.plan.plates if printed.printer == "PR-2") < done


@pytest.mark.parametrize(
    ("missing", "said"),
    [
        (Printer, "no printer has a nozzle of 0.4 mm"),
        (Spool, "no spool of PA-CF holds 18 g"),
        (Presence, "nobody is there long enough to change plates"),
    ],
)
def test_without_printers_spools_or_people_a_sentence_says_what_cannot_be_printed(
    missing: type[Record], said: str
) -> None:
    found, _ = planned(*(record for record in WORKSHOP if not isinstance(record, missing)), plate(40, 38), short=5)
    assert found.plan.plates == ()
    assert len(found.plan.shortages) == 1
    assert found.plan.shortages[0].startswith("disc (B): ")
    assert said in found.plan.shortages[0]


def test_a_target_that_no_number_of_prints_meets_is_said_and_stops_nothing_else() -> None:
    found, _ = planned(*WORKSHOP, plate(6, 0), target=0.9999, short=3, short_by_week=NONE_SHORT)
    assert found.plan.plates == ()
    assert len(found.plan.shortages) == 1
    assert found.plan.shortages[0].startswith("disc (B): No number of starts")


def test_a_better_yield_never_starts_more() -> None:
    starts = [
        sum(
            printed.count
            for printed in planned(*WORKSHOP, plate(40, good), short=10, short_by_week=NONE_SHORT)[0].plan.plates
        )
        for good in (20, 30, 36, 40)
    ]
    assert starts == sorted(starts, reverse=True)
    assert starts[-1] >= 10


def test_a_part_never_printed_says_that_its_yield_is_judged_and_one_printed_does_not() -> None:
    never, _ = planned(*WORKSHOP, short=3, short_by_week=NONE_SHORT)
    assert never.judged == ("No plate of disc has been recorded: its yield is judged, as if 4 of 4 had come out good.",)
    assert planned(*WORKSHOP, plate(10, 8), short=30)[0].judged == ()
