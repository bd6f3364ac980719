"""From ages to life data: what a failure, a look, a removal and an unknown past each say in the likelihood."""

from __future__ import annotations

import dataclasses
import math

import pytest

from fleet.fits.weibull import WeibullFit, weibull_log_likelihood
from fleet.lives.ages import ages_of
from fleet.lives.life_data import LifeData
from fleet.lives.part_data import LifeKey, ModeData, PartData, part_data
from fleet.records.fields import Record
from fleet.records.history import History
from fleet.records.ledger import Failure
from fleet.records.set_up import PartMode
from tests.books import (
    check,
    day,
    failure,
    fitment,
    history_with,
    placement,
    removal,
    session,
    session_use,
    set_up,
)

INF = math.inf
DISC_A, DISC_B = LifeKey("disc", "disc-A"), LifeKey("disc", "disc-B")
PIN, BEARING = LifeKey("pin"), LifeKey("bearing")
LIFE = WeibullFit(shape=2.5, scale=200.0, log_likelihood=0.0, failures=0.0)

# Robot 1 runs 20 h in ten days, ten times: its parts are 20, 40, ... 200 h old at the end of day 10, 20, ... 100.
RUNS = [session("R1", day(n, 9), 2.0, impacts=n % 4) for n in range(1, 101)]


def life_of(history: History, key: LifeKey = DISC_A) -> PartData:
    return part_data(history, ages_of(history))[key]


def mode(data: PartData, code: str) -> ModeData:
    return next(held for held in data.modes if held.mode.code == code)


def rows(data: LifeData) -> list[tuple[float, float, float, float]]:
    """Lower, upper, entry and count of every row, in order."""
    return sorted(zip(*(c.tolist() for c in (data.lower, data.upper, data.entry, data.count)), strict=True))


def own_row(
    history: History, code: str, records: str, key: LifeKey = DISC_A, endpoint: str = "unfit"
) -> tuple[float, ...]:
    """The row in which a record stands, as (lower, upper, entry, count)."""
    data: LifeData = getattr(mode(life_of(history, key), code), endpoint)
    (at,) = (n for n, ids in enumerate(data.records) if records in ids)
    return (data.lower[at], data.upper[at], data.entry[at], data.count[at])


def worn_disc(*checks: Record, found: int = 60, **changed: object) -> History:
    """The disc of U1 is found worn at 120 h (day 60), after these checks."""
    broke = failure(
        "U1 disc", "disc: worn", day(found, 20), "found worn", record_id="worn", how_found="at a check", **changed
    )
    return history_with(*RUNS, *checks, broke, removal("U1 disc", day(found, 20), "found worn"))


# Found worn: after the last look that could have shown it


def test_found_worn_at_120_h_and_good_at_80_failed_in_between() -> None:
    row = own_row(worn_disc(check("U1", day(40, 20))), "worn", "worn")
    assert row == (80.0, 120.0, 0.0, 1.0)
    term = LIFE.reliability(row[0]) - LIFE.reliability(row[1])
    assert float(term) == pytest.approx(0.1471, abs=0.00005)
    data = LifeData([row[0]], [row[1]])
    assert weibull_log_likelihood(data, LIFE.shape, LIFE.scale) == pytest.approx(math.log(term), abs=1e-9)


@pytest.mark.parametrize(
    ("look", "last_good"),
    [
        ({}, 80.0),  # the whole joint, any mode
        ({"slot": "slot-disc"}, 80.0),
        ({"slot": "slot-disc", "mode": "disc: worn"}, 80.0),
        ({"mode": "disc: worn"}, 80.0),
        ({"slot": "slot-disc", "mode": "disc: split"}, 0.0),  # could not have shown wear
        ({"slot": "slot-pins"}, 0.0),  # another part
        ({"verdict": "doubtful"}, 118.0),  # not good: as if none was noted, from the last session on
    ],
)
def test_a_look_counts_only_if_it_could_have_shown_that_mode(look: dict[str, str], last_good: float) -> None:
    assert own_row(worn_disc(check("U1", day(40, 20), **look)), "worn", "worn")[:2] == (last_good, 120.0)


def test_of_many_looks_the_last_one_that_counts_is_taken() -> None:
    looks = [check("U1", day(20, 20)), check("U1", day(40, 20)), check("U1", day(50, 20), mode="disc: split")]
    assert own_row(worn_disc(*looks), "worn", "worn")[:2] == (80.0, 120.0)


def test_a_look_at_another_module_or_before_the_fitting_or_at_the_finding_says_nothing() -> None:
    looks = [check("U2", day(40, 20)), check("U1", day(0, 8)), check("U1", day(60, 20))]
    assert own_row(worn_disc(*looks), "worn", "worn")[:2] == (0.0, 120.0)


def test_a_look_before_the_part_came_says_nothing_of_any_mode() -> None:
    swap = (removal("U1 disc", day(40, 20)), fitment("U1", "disc", day(40, 20), lot="D-1", record_id="new"))
    broke = failure("new", "disc: worn", day(60, 20), "found worn", record_id="worn")
    history = history_with(*RUNS, check("U1", day(20, 20)), *swap, broke)
    assert own_row(history, "worn", "worn")[:2] == (0.0, 40.0)
    assert own_row(history, "split", "worn")[:2] == (sum(n % 4 for n in range(41, 61)) / 2, INF)


def test_a_look_follows_the_module_to_its_next_place() -> None:
    moved = placement("U1", "R2-knee", day(30, 20))
    ran = [session("R2", day(n, 9), 1.0) for n in range(31, 101)]
    broke = failure("U1 disc", "disc: worn", day(60, 20), "found worn", record_id="worn")
    history = history_with(*RUNS, moved, *ran, check("U1", day(40, 20)), broke)
    assert own_row(history, "worn", "worn")[:2] == (60.0 + 10.0, 60.0 + 30.0)


# When a failure happened


def test_a_failure_that_ended_the_session_is_exact() -> None:
    last = session("R1", day(101, 9), 1.0, outcome="stopped")
    broke = failure("U1 disc", "disc: worn", last.ended_at, "stopped", session=last.record_id, record_id="broke")
    assert own_row(history_with(*RUNS, last, broke), "worn", "broke")[:2] == (201.0, 201.0)


def test_one_seen_only_after_the_session_happened_somewhere_in_it() -> None:
    last = session("R1", day(101, 9), 4.0)
    broke = failure("U1 disc", "disc: worn", last.ended_at, "over its limit", session=last.record_id, record_id="broke")
    assert own_row(history_with(*RUNS, last, broke), "worn", "broke")[:2] == (200.0, 204.0)


def test_a_part_fitted_within_that_session_failed_after_its_fitting() -> None:
    last = session("R1", day(101, 9), 4.0, impacts=8)
    swap = (removal("U1 disc", day(101, 10)), fitment("U1", "disc", day(101, 10), lot="D-1", record_id="new"))
    broke = failure("new", "disc: worn", last.ended_at, "over its limit", session=last.record_id, record_id="broke")
    history = history_with(*RUNS, last, *swap, broke)
    assert own_row(history, "worn", "broke")[:2] == (0.0, 3.0)
    assert own_row(history, "split", "broke")[:2] == ((0.0 + 6.0) / 2, INF)


def test_one_known_to_a_day_happened_within_the_use_of_that_day() -> None:
    broke = failure("U1 disc", "disc: worn", day(50, 0), happened_until=day(51, 0), record_id="broke")
    assert own_row(history_with(*RUNS, broke), "worn", "broke")[:2] == (98.0, 100.0)


def test_a_moment_that_nothing_makes_vague_is_exact() -> None:
    broke = failure("U1 disc", "disc: worn", day(50, 20), record_id="broke")
    assert own_row(history_with(*RUNS, broke), "worn", "broke")[:2] == (100.0, 100.0)


# Good parts count


def test_a_part_still_good_and_one_replaced_while_good_are_suspensions() -> None:
    out = removal("U1 disc", day(50, 20))
    new = fitment("U1", "disc", day(50, 20), lot="D-1")
    data = mode(life_of(history_with(*RUNS, out, new)), "worn").unfit
    assert rows(data) == [(100.0, INF, 0.0, 1.0), (100.0, INF, 0.0, 1.0), (200.0, INF, 0.0, 1.0)]
    assert data.failures == 0


def test_a_set_is_one_row_with_its_count_and_a_failed_pin_a_row_of_its_own() -> None:
    last = session("R1", day(101, 9), 1.0)
    broke = failure("U1 pins", "pin: worn flat", last.ended_at, "found worn", place=3, record_id="broke")
    out = removal("U1 pins", last.ended_at, "found worn", place=3)
    data = mode(life_of(history_with(*RUNS, last, broke, out), PIN), "worn flat").unfit
    assert rows(data) == [(200.0, 201.0, 0.0, 1.0), (201.0, INF, 0.0, 12.0), (201.0, INF, 0.0, 13.0)]
    assert (data.failures, data.suspensions) == (1.0, 25.0)


def test_a_failure_of_one_mode_suspends_the_others_at_the_middle_of_its_interval() -> None:
    history = worn_disc(check("U1", day(40, 20)))
    impacts = [n % 4 for n in range(1, 101)]
    low, high = sum(impacts[:40]), sum(impacts[:60])
    assert own_row(history, "split", "worn")[:2] == ((low + high) / 2, INF)


def test_each_mode_is_told_in_its_own_clock() -> None:
    data = life_of(history_with(*RUNS), PIN)
    assert {held.mode.code: held.unfit.clock for held in data.modes} == {"snapped": "turns", "worn flat": "hours"}
    assert rows(mode(data, "snapped").unfit)[-1] == (200 * 600.0, INF, 0.0, 13.0)


def test_every_row_names_the_records_behind_it() -> None:
    history = worn_disc()
    data = mode(life_of(history), "worn").unfit
    (ids,) = (ids for ids in data.records if "worn" in ids)
    assert ids[:2] == ("U1 disc", "worn") and ids[2].startswith("removal")


def test_parts_that_never_ran_say_nothing_yet() -> None:
    data = life_of(history_with())
    assert len(mode(data, "worn").unfit) == 0
    assert (data.running, data.failures, data.left_out) == (4, 0, 0)


# Two endpoints


def test_found_worn_counts_for_unfit_and_suspends_for_stop_at_its_finding() -> None:
    history = worn_disc(check("U1", day(40, 20)))
    assert own_row(history, "worn", "worn", endpoint="unfit")[:2] == (80.0, 120.0)
    assert own_row(history, "worn", "worn", endpoint="stop")[:2] == (120.0, INF)


@pytest.mark.parametrize(
    ("of", "what", "finding", "stops"),
    [
        ("disc", "disc: split", "stopped", 1),
        ("disc", "disc: split", "over its limit", 0),  # it alone would have stopped the robot, and did not
        ("pins", "pin: snapped", "over its limit", 1),  # the second one stops the robot: each counts towards that
        ("pins", "pin: snapped", "found worn", 0),
        ("bearing", "bearing: rough", "over its limit", 0),  # never stops the robot
    ],
)
def test_what_counts_towards_a_stop_depends_on_the_slot(of: str, what: str, finding: str, stops: int) -> None:
    broke = failure(f"U1 {of}", what, day(101), finding, place=1)
    part, code = what.split(": ")
    key = LifeKey(part, "disc-A" if part == "disc" else None)
    held = mode(life_of(history_with(*RUNS, session("R1", day(100, 20), 0.5, impacts=1), broke), key), code)
    assert (held.stop.failures, held.unfit.failures) == (stops, 1.0)


# Another part's failure


def test_a_pin_that_breaks_and_takes_the_disc_with_it_is_one_failure_and_one_suspension() -> None:
    last = session("R1", day(101, 9), 1.0, impacts=1, outcome="stopped")
    pin = failure(
        "U1 pins", "pin: snapped", last.ended_at, "stopped", place=5, session=last.record_id, record_id="pin 5"
    )
    disc = failure(
        "U1 disc",
        "disc: split",
        last.ended_at,
        "stopped",
        cause="another part's failure",
        broken_by="pin 5",
        session=last.record_id,
        record_id="taken along",
    )
    out = removal("U1 disc", last.ended_at, "broken by another part")
    history = history_with(*RUNS, last, pin, disc, out)
    assert own_row(history, "worn", "taken along") == (201.0, INF, 0.0, 1.0)
    for endpoint in ("stop", "unfit"):
        assert own_row(history, "split", "taken along", endpoint=endpoint)[1] == INF
    discs, pins = life_of(history), life_of(history, PIN)
    assert (discs.failures, discs.suspended) == (0, 4)
    assert (pins.failures, mode(pins, "snapped").stop.failures) == (1, 1.0)
    # The stop of the robot is the pin's.
    stops = [f.record_id for f in history.of(Failure).values() if f.finding == "stopped" and f.broken_by is None]
    assert stops == ["pin 5"]


# Ages that parts bring


def test_an_inherited_part_enters_late() -> None:
    """60 h old when it came; failure at 130 h, and another one still good at 90 h."""
    old = {"prior": "stated", "prior_run_seconds": 60 * 3600, "lot": "D-2"}
    history = history_with(
        *RUNS[:35],
        removal("U1 disc", day(0, 9)),
        fitment("U1", "disc", day(0, 9), record_id="old", **old),
        failure("old", "disc: worn", day(35, 20), record_id="broke"),
        removal("U2 disc", day(0, 9)),
        fitment("U2", "disc", day(0, 9), record_id="good", **old),
        removal("good", day(15, 20)),
    )
    failed, good = own_row(history, "worn", "broke", DISC_B), own_row(history, "worn", "good", DISC_B)
    assert failed == (130.0, 130.0, 60.0, 1.0)
    assert good == (90.0, INF, 60.0, 1.0)
    terms = [weibull_log_likelihood(LifeData([r[0]], [r[1]], [r[2]]), LIFE.shape, LIFE.scale) for r in (failed, good)]
    assert math.exp(terms[0]) == pytest.approx(0.004895, abs=5e-7)
    assert math.exp(terms[1]) == pytest.approx(0.9171, abs=5e-5)
    assert float(LIFE.reliability(90) / LIFE.reliability(60)) == pytest.approx(0.9171, abs=5e-5)


def test_a_clock_in_which_the_age_is_not_stated_has_no_row() -> None:
    old = fitment("U1", "disc", day(0, 9), lot="D-2", prior="stated", prior_run_seconds=60 * 3600)
    data = life_of(history_with(*RUNS, removal("U1 disc", day(0, 9)), old), DISC_B)
    assert (len(mode(data, "worn").unfit), len(mode(data, "split").unfit)) == (1, 0)


def test_a_part_of_unknown_age_is_left_out_and_counted() -> None:
    odd = fitment("U1", "disc", day(0, 9), lot="D-2", prior="unknown", record_id="odd")
    broke = failure("odd", "disc: worn", day(50))
    data = life_of(history_with(*RUNS, removal("U1 disc", day(0, 9)), odd, broke), DISC_B)
    assert (data.left_out, data.failures, data.suspended) == (1, 0, 0)
    assert len(mode(data, "worn").unfit) == 0
    assert data.use == {}


def test_a_moved_part_keeps_its_age_and_its_terms_multiply_to_one_life() -> None:
    move = (
        removal("U1 disc", day(40, 20), "moved"),
        removal("U3 disc", day(40, 20)),
        fitment("U3", "disc", day(40, 20), comes_from="U1 disc", record_id="moved"),
    )
    ran = [session("R2", day(n, 9), 5.0) for n in range(41, 51)]
    broke = failure("moved", "disc: worn", day(50, 20), record_id="broke")
    history = history_with(*RUNS, *move, *ran, broke)
    before, after = own_row(history, "worn", "U1 disc"), own_row(history, "worn", "broke")
    assert before == (80.0, INF, 0.0, 1.0)
    assert after == (130.0, 130.0, 80.0, 1.0)  # under the revision of the lot that it came from
    both = LifeData([before[0], after[0]], [before[1], after[1]], [before[2], after[2]])
    whole = LifeData([130.0], [130.0])
    assert weibull_log_likelihood(both, 2.5, 200.0) == pytest.approx(
        weibull_log_likelihood(whole, 2.5, 200.0), abs=1e-12
    )


# Whose life it is


def test_revisions_and_lots_kept_apart_are_lives_of_their_own() -> None:
    swap = [
        record
        for unit, lot in (("U1", "D-2"), ("U2", "D-9"))
        for record in (removal(f"{unit} disc", day(50, 20)), fitment(unit, "disc", day(50, 20), lot=lot))
    ]
    history = history_with(*RUNS, *swap)
    found = part_data(history, ages_of(history))
    apart = LifeKey("disc", "disc-B", "D-9")
    assert {key: held.label for key, held in found.items()} == {
        DISC_A: "disc A",
        DISC_B: "disc B",
        apart: "disc B, lot D-9 apart",
        PIN: "pin",
        BEARING: "bearing",
    }
    assert [found[key].running for key in (DISC_A, DISC_B, apart)] == [2, 1, 1]


def test_every_part_is_in_one_life_and_is_counted_once() -> None:
    history = history_with(*RUNS, removal("U1 disc", day(50)), fitment("U1", "disc", day(50), lot="D-9"))
    found = part_data(history, ages_of(history)).values()
    assert sum(held.running for held in found) == 4 * 15
    assert sum(held.suspended + held.failures + held.left_out for held in found) == 4 * 15 + 1


def test_a_part_type_that_was_never_fitted_is_there_without_rows() -> None:
    belt = next(record for record in set_up() if record.record_id == "bearing")
    history = history_with(dataclasses.replace(belt, record_id="belt", code="belt", label="belt"))
    data = life_of(history, LifeKey("belt"))
    assert (data.label, data.running, data.failures, data.modes) == ("belt", 0, 0, ())


def test_total_use_is_counted_by_part() -> None:
    data = life_of(history_with(*RUNS[:10]), PIN)
    assert data.use["hours"] == pytest.approx(2 * 13 * 20.0)
    assert data.use["turns"] == pytest.approx(2 * 13 * 20.0 * 600)


def test_a_failure_before_any_use_is_counted_and_has_no_row() -> None:
    broke = failure("U3 disc", "disc: worn", day(2), "found worn")
    data = life_of(history_with(broke, session("R2", day(5), 1.0)))
    assert (data.no_use, data.failures, len(mode(data, "worn").unfit)) == (1, 1, 0)


def test_what_one_joint_did_is_what_its_parts_are_told_by() -> None:
    ran = session("R1", day(1), 2.0, impacts=9)
    history = history_with(ran, session_use(ran, "R1-hip", impacts=3))
    assert rows(mode(life_of(history), "split").unfit) == [(3.0, INF, 0.0, 1.0), (9.0, INF, 0.0, 1.0)]


# Modes that show only when looked at


def hidden_wear() -> list[Record]:
    worn = next(record for record in set_up() if record.record_id == "disc: worn")
    return [dataclasses.replace(worn, noticed="at a check")]  # type: ignore[call-arg]


def test_a_running_part_is_known_good_in_a_hidden_mode_only_up_to_the_last_look() -> None:
    looked = [*hidden_wear(), *RUNS, check("U1", day(40, 20))]
    assert own_row(history_with(*looked), "worn", "U1 disc")[:2] == (80.0, INF)
    assert own_row(history_with(*looked), "split", "U1 disc")[:2] == (150.0, INF)
    assert own_row(history_with(*looked), "worn", "U1 disc", endpoint="stop")[:2] == (200.0, INF)
    # Nobody noted any look at this module: people are taken to look after every session.
    assert own_row(history_with(*looked), "worn", "U2 disc")[:2] == (200.0, INF)


@pytest.mark.parametrize(("reason", "age"), [("replaced while good", 120.0), ("moved", 120.0), ("unknown", 80.0)])
def test_a_part_taken_out_as_good_was_in_someones_hand(reason: str, age: float) -> None:
    out = removal("U1 disc", day(60, 20), reason)
    history = history_with(*hidden_wear(), *RUNS, check("U1", day(40, 20)), out)
    assert own_row(history, "worn", "U1 disc")[:2] == (age, INF)


def test_a_part_that_failed_otherwise_was_last_seen_unworn_at_the_last_look() -> None:
    last = session("R1", day(101, 9), 1.0, outcome="stopped")
    broke = failure("U1 disc", "disc: split", last.ended_at, session=last.record_id, record_id="broke")
    history = history_with(*hidden_wear(), *RUNS, check("U1", day(40, 20)), last, broke)
    assert own_row(history, "worn", "broke")[:2] == (80.0, INF)


def test_a_mode_shows_in_use_unless_it_is_said_to_be_hidden() -> None:
    assert {record.noticed for record in set_up() if isinstance(record, PartMode)} == {"in use"}
    assert own_row(history_with(*RUNS, check("U1", day(40, 20))), "worn", "U1 disc")[:2] == (200.0, INF)
