"""Ages follow from sessions, modules and fittings; they do not care in which order anyone wrote these down."""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import closing
from datetime import timedelta
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from fleet.lives.ages import Age, Ages, PartSpan, ages_of
from fleet.lives.part_data import LifeKey, part_data
from fleet.records.history import History, history_of
from fleet.records.ledger import Fitment, LedgerRecord, Placement, Removal, Session, SessionUse
from fleet.records.whereabouts import whereabouts_of
from fleet.store.book import Book
from fleet.store.entries import PartEntry, SessionEntry, log_part, log_session
from fleet.store.reading import read_history
from tests.books import (
    END,
    NOW,
    TURNS_PER_HOUR,
    add,
    day,
    failure,
    first_fitting,
    fitment,
    history_with,
    placement,
    removal,
    session,
    session_use,
    set_up,
    tiny_book,
)


@pytest.fixture
def book(tmp_path: Path) -> Iterator[Book]:
    with closing(tiny_book(tmp_path / "book.db")) as opened:
        yield opened


def span_of(ages: Ages, fitment_id: str, place: int = 1) -> PartSpan:
    return next(s for s in ages.spans if s.fitment.record_id == fitment_id and place in s.places)


def hours_of(history: History) -> dict[str, float]:
    """Hours of every part that is fitted, by fitment."""
    return {span.fitment.record_id: span.age["hours"] for span in ages_of(history).spans if span.running}


# What users do


def test_every_part_of_the_robot_that_ran_gains_its_hours_and_no_other_part_does(book: Book) -> None:
    log_session(book, SessionEntry("R2", 1.5), NOW, "bench")
    hours = hours_of(read_history(book, END))
    assert hours == {
        f"{unit} {part}": 1.5 if unit == "U3" else 0.0
        for unit in ("U1", "U2", "U3", "U4")
        for part in ("disc", "pins", "bearing")
    }


def test_a_session_entered_the_next_day_ages_the_parts_of_the_day_it_ran(book: Book) -> None:
    yesterday = NOW - timedelta(days=1)
    log_part(book, PartEntry("R2-knee", "slot-disc", "replaced while good", lot="D-2"), yesterday, NOW, "bench")
    receipt = log_session(book, SessionEntry("R2", 1.5, ended_at=yesterday - timedelta(hours=2)), NOW, "bench")
    assert "late entry for 2026-05-31" in receipt.sentence
    ages = ages_of(read_history(book, END))
    old, new = span_of(ages, "U3 disc"), next(s for s in ages.spans if s.fitment.lot == "D-2")
    assert (old.age["hours"], new.age["hours"]) == (1.5, 0.0)


def test_a_module_moved_with_its_parts_in_one_entry_keeps_their_age(book: Book) -> None:
    add(book, [session("R1", day(n), 3.25) for n in range(1, 27)])
    assert hours_of(read_history(book, day(40)))["U1 disc"] == 84.5
    number = add(book, [placement("U1", "R2-knee", day(40))])
    history = read_history(book, END)
    hours = hours_of(history)
    assert [hours[f"U1 {part}"] for part in ("disc", "pins", "bearing")] == [84.5, 84.5, 84.5]
    stays = whereabouts_of(history).stays_of_unit["U1"]
    assert [(stay.position, stay.end) for stay in stays] == [("R1-hip", day(40)), ("R2-knee", None)]
    # One entry, and nothing was opened: no part was taken out or fitted.
    written = [r for kind in history.rows.values() for r in kind.values() if r.stamp and r.stamp.write_number == number]
    assert [type(record) for record in written] == [Placement]
    assert len(history.of(Removal)) == 0 and len(history.of(Fitment)) == 12


def test_a_moved_module_ages_where_it_is_and_not_where_it_was() -> None:
    ran = [
        session("R1", day(1), 4.0),
        session("R2", day(1), 1.0),
        session("R1", day(5), 2.0),
        session("R2", day(5), 0.5),
    ]
    hours = hours_of(history_with(*ran, placement("U1", "R2-knee", day(3)), placement("U4", "R1-hip", day(3))))
    assert hours["U1 disc"] == 4.0 + 0.5
    assert hours["U3 disc"] == 1.0  # pushed to the shelf
    assert hours["U4 disc"] == 2.0  # from the shelf
    assert hours["U2 disc"] == 6.0


def test_two_modules_swapped_at_one_moment_each_gather_the_use_of_their_new_place() -> None:
    ran = session("R1", day(5), 2.0)
    stated = session_use(ran, "R1-hip", turns=77)
    swap = (placement("U1", "R1-knee", day(3)), placement("U2", "R1-hip", day(3), sequence=1))
    ages = ages_of(history_with(ran, stated, *swap))
    assert span_of(ages, "U2 disc").age["turns"] == 77
    assert span_of(ages, "U1 disc").age["turns"] == 2.0 * TURNS_PER_HOUR


# Clocks


def test_every_clock_gathers_its_own() -> None:
    age = span_of(ages_of(history_with(session("R1", day(1), 2.0, impacts=9), as_of=day(3, 8))), "U1 disc").age
    assert age == {"hours": 2.0, "load_hours": 2.0, "turns": 1200.0, "impacts": 9.0, "days": 3.0}


def test_what_a_joint_states_for_itself_takes_the_place_of_what_its_robot_did() -> None:
    ran = session("R1", day(1), 2.0, impacts=9)
    stated = session_use(ran, "R1-hip", run_seconds=3600, load_seconds=1800, turns=500, impacts=1)
    ages = ages_of(history_with(ran, stated, as_of=day(3, 8)))
    assert span_of(ages, "U1 disc").age == {
        "hours": 1.0,
        "load_hours": 0.5,
        "turns": 500.0,
        "impacts": 1.0,
        "days": 3.0,
    }
    assert span_of(ages, "U2 disc").age["hours"] == 2.0


def test_what_it_does_not_state_follows_from_what_it_does() -> None:
    ran = session("R1", day(1), 2.0, impacts=9)
    age = span_of(ages_of(history_with(ran, session_use(ran, "R1-hip", run_seconds=3600))), "U1 disc").age
    assert (age["hours"], age["load_hours"], age["turns"], age["impacts"]) == (1.0, 1.0, TURNS_PER_HOUR, 9.0)


def test_a_zero_that_was_counted_is_a_value() -> None:
    ran = session("R1", day(1), 2.0, impacts=9)
    age = span_of(ages_of(history_with(ran, session_use(ran, "R1-hip", turns=0, impacts=0))), "U1 disc").age
    assert (age["turns"], age["impacts"], age["hours"]) == (0.0, 0.0, 2.0)


# Within a session


def test_a_part_swapped_within_a_session_takes_its_linear_share() -> None:
    ran = session("R1", day(1, 10), 4.0, impacts=8)
    swap = (removal("U1 disc", day(1, 11)), fitment("U1", "disc", day(1, 11), lot="D-2", record_id="new disc"))
    ages = ages_of(history_with(ran, *swap))
    old, new = span_of(ages, "U1 disc").age, span_of(ages, "new disc").age
    assert (old["hours"], old["impacts"]) == (1.0, 2.0)
    assert (new["hours"], new["impacts"]) == (3.0, 6.0)


def test_so_does_a_module_moved_within_a_session_and_a_look_in_the_middle_of_one() -> None:
    ran = session("R1", day(1, 10), 4.0)
    ages = ages_of(history_with(ran, placement("U1", None, day(1, 13))))
    assert span_of(ages, "U1 disc").age["hours"] == 3.0
    assert hours_of(history_with(ran, as_of=day(1, 12)))["U1 disc"] == 2.0


def test_a_session_with_pauses_is_shared_by_the_time_it_lasted() -> None:
    ran = session("R1", day(1, 10), 4.0, run_seconds=3600)
    assert hours_of(history_with(ran, as_of=day(1, 12)))["U1 disc"] == 0.5


def test_the_age_at_any_moment_in_between_is_told() -> None:
    ages = ages_of(history_with(session("R1", day(1, 10), 4.0), session("R1", day(2, 10), 1.0)))
    span = span_of(ages, "U1 disc")
    assert [ages.age_of(span, moment)["hours"] for moment in (day(1, 9), day(1, 11), day(1, 23), day(2, 10, 30))] == [
        0.0,
        1.0,
        4.0,
        4.5,
    ]


# Ends


def test_a_part_stops_ageing_when_it_fails_though_it_is_taken_out_later() -> None:
    ran = [session("R1", day(1), 2.0), session("R1", day(3), 2.0)]
    broke, out = failure("U1 disc", "disc: split", day(1, 12)), removal("U1 disc", day(5), "failed")
    ages = ages_of(history_with(*ran, broke, out))
    span = span_of(ages, "U1 disc")
    assert (span.age["hours"], span.running, ages.end_of(span)) == (2.0, False, day(1, 12))


def test_a_failure_known_to_a_day_ends_at_the_latest_when_the_part_was_taken_out() -> None:
    morning, evening = session("R1", day(1, 9), 2.0), session("R1", day(1, 16), 2.0)
    vague = failure("U1 disc", "disc: worn", day(1, 0), happened_until=day(2, 0))
    out = removal("U1 disc", day(1, 13), "failed")
    new = fitment("U1", "disc", day(1, 13), lot="D-2", record_id="new disc")
    ages = ages_of(history_with(morning, evening, vague, out, new))
    assert span_of(ages, "U1 disc").age["hours"] == 2.0
    assert span_of(ages, "new disc").age["hours"] == 2.0
    without = ages_of(history_with(morning, evening, vague))
    assert span_of(without, "U1 disc").age["hours"] == 4.0


def test_nothing_is_older_than_the_moment_of_the_history() -> None:
    vague = failure("U1 disc", "disc: worn", day(1, 0), happened_until=day(2, 0))
    ages = ages_of(history_with(vague, as_of=day(1, 8)))
    assert span_of(ages, "U1 disc").age["days"] == 1.0


def test_parts_of_one_fitting_with_one_fate_are_one_span() -> None:
    broke = failure("U1 pins", "pin: snapped", day(3), "over its limit", place=4)
    ages = ages_of(
        history_with(broke, removal("U1 pins", day(3), "failed", place=4), removal("U1 pins", day(5), place=9))
    )
    spans = [span for span in ages.spans if span.fitment.record_id == "U1 pins"]
    assert sorted((span.places, span.running) for span in spans) == [
        ((1, 2, 3, 5, 6, 7, 8, 10, 11, 12, 13), True),
        ((4,), False),
        ((9,), False),
    ]
    assert sum(span.count for span in spans) == 13


# Ages that parts bring


def test_a_part_of_a_known_age_starts_from_it_in_the_clocks_that_are_known() -> None:
    old = fitment("U1", "disc", day(2), prior="stated", prior_run_seconds=60 * 3600, prior_impacts=30, record_id="old")
    ages = ages_of(history_with(removal("U1 disc", day(2)), old, session("R1", day(3), 2.0, impacts=5)))
    span = span_of(ages, "old")
    assert span.known
    assert span.entry == {"hours": 60.0, "impacts": 30.0}
    assert span.age == {"hours": 62.0, "impacts": 35.0}
    assert (span.use["turns"], span.use["hours"]) == (1200.0, 2.0)


def test_a_part_of_unknown_age_has_no_age_in_any_clock_but_its_use_is_told() -> None:
    odd = fitment("U1", "disc", day(2), prior="unknown", record_id="odd")
    ages = ages_of(history_with(removal("U1 disc", day(2)), odd, session("R1", day(3), 2.0)))
    span = span_of(ages, "odd")
    assert (span.known, span.age, span.entry, span.use["hours"]) == (False, {}, {}, 2.0)


def test_a_moved_part_keeps_its_age_through_every_move() -> None:
    ran = [session("R1", day(1), 3.0), session("R2", day(3), 2.0), session("R1", day(5), 1.0)]
    there = (
        removal("U1 disc", day(2), "moved"),
        removal("U3 disc", day(2)),
        fitment("U3", "disc", day(2), comes_from="U1 disc", record_id="moved once"),
    )
    back = (
        removal("moved once", day(4), "moved"),
        removal("U2 disc", day(4)),
        fitment("U2", "disc", day(4), comes_from="moved once", record_id="moved twice"),
    )
    ages = ages_of(history_with(*ran, *there, *back))
    assert span_of(ages, "U1 disc").age["hours"] == 3.0
    assert (span_of(ages, "moved once").entry["hours"], span_of(ages, "moved once").age["hours"]) == (3.0, 5.0)
    assert (span_of(ages, "moved twice").entry["hours"], span_of(ages, "moved twice").age["hours"]) == (5.0, 6.0)


def test_a_moved_part_has_not_aged_on_the_shelf() -> None:
    ran = [session("R1", day(1), 3.0), session("R1", day(4), 2.0)]
    shelf = (removal("U1 disc", day(2), "moved"), fitment("U1", "disc", day(2), lot="D-2"))
    again = (removal("U2 disc", day(6)), fitment("U2", "disc", day(6), comes_from="U1 disc", record_id="again"))
    assert span_of(ages_of(history_with(*ran, *shelf, *again)), "again").entry["hours"] == 3.0


def test_of_a_set_the_pin_that_was_moved_is_the_one_that_comes_back() -> None:
    ran = [session("R1", day(n), 1.0) for n in (1, 3, 5)]
    moved, failed = removal("U1 pins", day(2), "moved", place=3), removal("U1 pins", day(4), "failed", place=8)
    broke = failure("U1 pins", "pin: snapped", day(4), "over its limit", place=8)
    new = [fitment("U1", "pins", moment, first_place=place) for place, moment in ((3, day(2)), (8, day(4)))]
    spare = removal("U2 pins", day(6), place=1)
    back = fitment("U2", "pins", day(6), first_place=1, comes_from="U1 pins", record_id="back")
    ages = ages_of(history_with(*ran, moved, failed, broke, *new, spare, back))
    assert span_of(ages, "back").entry["hours"] == 1.0


def test_a_moved_part_of_unknown_age_stays_unknown() -> None:
    odd = fitment("U1", "disc", day(2), prior="unknown", record_id="odd")
    move = (removal("odd", day(4), "moved"), removal("U2 disc", day(4)))
    again = fitment("U2", "disc", day(4), comes_from="odd", record_id="again")
    ages = ages_of(history_with(removal("U1 disc", day(2)), odd, *move, again))
    assert not span_of(ages, "again").known


def test_of_two_parts_moved_out_of_one_set_each_keeps_the_age_of_its_own_place() -> None:
    records = (
        session("R1", day(1), 2.0),
        removal("U1 pins", day(2), "moved", place=3),
        session("R1", day(3), 4.0),
        removal("U1 pins", day(4), "moved", place=9),
        fitment("U3", "pins", day(5), first_place=1, comes_from="U1 pins", from_place=3, record_id="younger"),
        removal("U3 pins", day(5), place=1),
        fitment("U3", "pins", day(5), first_place=2, comes_from="U1 pins", from_place=9, record_id="older"),
        removal("U3 pins", day(5), place=2),
    )
    ages = ages_of(history_with(*records))
    assert span_of(ages, "younger", 1).entry["hours"] == 2.0
    assert span_of(ages, "older", 2).entry["hours"] == 6.0


def test_a_part_that_comes_from_one_nobody_has_entered_yet_is_of_unknown_age() -> None:
    early = fitment("U1", "disc", day(2), comes_from="entered later", record_id="early")
    history = history_with(removal("U1 disc", day(2)), early, session("R1", day(3), 2.0))
    ages = ages_of(history)
    assert not span_of(ages, "early").known
    assert part_data(history, ages)[LifeKey("disc")].left_out == 1


# Late and out of order


def _a_month() -> list[LedgerRecord]:
    """Sessions, a swap within one, a move, a failure in a set, and a part that goes round."""
    ran = [
        session(robot, day(n, hour), 1.0 + n % 3, impacts=n % 5, record_id=f"{robot} day {n}")
        for n in range(1, 13)
        for robot, hour in (("R1", 9), ("R2", 10))
    ]
    return [
        *ran,
        session_use(ran[4], "R1-hip", turns=123, run_seconds=1800),
        placement("U4", "R1-knee", day(4, 10, 30)),
        removal("U1 disc", day(6), "moved"),
        fitment("U1", "disc", day(6), lot="D-2", record_id="second"),
        removal("U3 disc", day(7)),
        fitment("U3", "disc", day(7), comes_from="U1 disc", record_id="round"),
        failure("U3 pins", "pin: snapped", day(8, 11), "over its limit", place=2),
        removal("U3 pins", day(8, 11), "failed", place=2),
        fitment("U3", "pins", day(8, 11), first_place=2, lot="P-1", record_id="third pin"),
        placement("U2", "R2-knee", day(10)),
    ]


MONTH = _a_month()


def _table(ages: Ages) -> dict[tuple[str, tuple[int, ...]], tuple[Age, Age, Age]]:
    return {(s.fitment.record_id, s.places): (s.entry, s.use, s.age) for s in ages.spans}


@given(st.permutations(MONTH))
@settings(max_examples=25, deadline=None, derandomize=True)
def test_the_order_in_which_things_are_entered_changes_no_age(entered: list[LedgerRecord]) -> None:
    history = history_of([*entered, *first_fitting(), *reversed(set_up())], END)
    assert _table(ages_of(history)) == _table(ages_of(history_with(*MONTH)))


def test_a_book_in_which_sessions_were_entered_last_gives_the_ages_of_one_kept_in_time(tmp_path: Path) -> None:
    moments = sorted({record.happened_at for record in MONTH})
    in_time = [[record for record in MONTH if record.happened_at == moment] for moment in moments]
    bench = [[record for record in held if not isinstance(record, Session | SessionUse)] for held in in_time]
    ran = [[record] for record in reversed(MONTH) if isinstance(record, Session)]
    late = [*(held for held in bench if held), *ran, [r for r in MONTH if isinstance(r, SessionUse)]]
    found = []
    for name, writes in (("in time", in_time), ("late", late)):
        with closing(tiny_book(tmp_path / f"{name}.db")) as book:
            for records in writes:
                add(book, records)
            found.append(_table(ages_of(read_history(book, END))))
    assert found[0] == found[1] == _table(ages_of(history_with(*MONTH)))


def test_ages_follow_the_sessions_that_are_known(book: Book) -> None:
    add(book, [session("R1", day(1), 2.0)])
    add(book, [session("R1", day(2), 3.0)])
    assert [hours_of(read_history(book, END, known_by=n))["U1 disc"] for n in (1, 2, 3)] == [0.0, 2.0, 5.0]
