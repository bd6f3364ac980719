"""Where every module and part was: swaps, the shelf, and sets of which some were replaced."""

from __future__ import annotations

from collections import Counter
from itertools import pairwise

from hypothesis import given, settings
from hypothesis import strategies as st

from fleet.records.consistency import problems_in
from fleet.records.fields import Record
from fleet.records.ledger import Fitment
from fleet.records.whereabouts import Stay, whereabouts_of
from tests.books import FITTED, day, failure, fitment, history_with, placement, removal

SET = 13


def test_a_module_stays_where_it_was_put() -> None:
    where = whereabouts_of(history_with())
    assert where.stays_of_unit["U1"] == (Stay("U1", "R1-hip", FITTED, None),)
    assert where.stays_of_unit["U4"] == (Stay("U4", None, FITTED, None),)
    assert where.unit_in("R1-hip", day(5)) == "U1"
    assert where.position_of("U4", day(5)) is None
    assert where.unit_in("R1-hip", day(-1)) is None


def test_two_modules_that_swap_at_one_moment_each_end_where_the_other_was() -> None:
    for first, second in ((("U1", "R1-knee"), ("U2", "R1-hip")), (("U2", "R1-hip"), ("U1", "R1-knee"))):
        where = whereabouts_of(history_with(placement(*first, day(3)), placement(*second, day(3), sequence=1)))
        assert where.stays_of_unit["U1"] == (Stay("U1", "R1-hip", FITTED, day(3)), Stay("U1", "R1-knee", day(3), None))
        assert where.stays_of_unit["U2"] == (Stay("U2", "R1-knee", FITTED, day(3)), Stay("U2", "R1-hip", day(3), None))
        assert [stay.unit for stay in where.stays_in_position["R1-hip"]] == ["U1", "U2"]


def test_at_the_moment_of_a_swap_the_module_before_it_is_meant() -> None:
    where = whereabouts_of(history_with(placement("U4", "R1-hip", day(3))))
    assert where.unit_in("R1-hip", day(3)) == "U1"
    assert where.unit_in("R1-hip", day(3, 11)) == "U4"
    assert where.unit_in("R1-hip", FITTED) == "U1"


def test_a_module_whose_place_is_taken_goes_to_the_shelf() -> None:
    where = whereabouts_of(history_with(placement("U4", "R1-hip", day(3))))
    assert where.stays_of_unit["U1"][-1] == Stay("U1", None, day(3), None)
    assert where.position_of("U1", day(2)) == "R1-hip"
    assert where.position_of("U1", day(3)) is None


def test_a_module_moved_to_another_robot_leaves_its_place_empty() -> None:
    where = whereabouts_of(history_with(placement("U1", "R2-knee", day(3))))
    assert where.unit_in("R1-hip", day(4)) is None
    assert where.unit_in("R2-knee", day(4)) == "U1"
    assert where.position_of("U3", day(4)) is None


def test_a_module_put_where_it_is_already_has_lost_nothing() -> None:
    where = whereabouts_of(history_with(placement("U1", "R1-hip", day(3))))
    assert [stay.position for stay in where.stays_of_unit["U1"]] == ["R1-hip", "R1-hip"]
    assert where.unit_in("R1-hip", day(4)) == "U1"


@given(
    st.lists(
        st.tuples(st.sampled_from(["U1", "U2", "U3", "U4"]), st.sampled_from([None, "R1-hip", "R1-knee", "R2-knee"])),
        max_size=12,
    )
)
@settings(max_examples=60, deadline=None, derandomize=True)
def test_no_module_is_in_two_places_and_no_place_holds_two(moves: list[tuple[str, str | None]]) -> None:
    # Two moves at each moment, so that modules are also pushed about within one.
    puts = [placement(unit, joint, day(1 + n // 2), sequence=n) for n, (unit, joint) in enumerate(moves)]
    where = whereabouts_of(history_with(*puts))
    for stays in where.stays_of_unit.values():
        assert stays[-1].end is None
        assert all(a.end == b.start for a, b in pairwise(stays))
    for stays in where.stays_in_position.values():
        assert all(a.end is not None and a.end <= b.start for a, b in pairwise(stays))
    at_end = [where.position_of(unit, day(90)) for unit in ("U1", "U2", "U3", "U4")]
    held = [joint for joint in at_end if joint is not None]
    assert len(held) == len(set(held))
    assert all(where.unit_in(joint, day(90)) is not None for joint in held)


# Parts


def test_a_part_ends_with_its_removal_and_the_next_one_follows() -> None:
    where = whereabouts_of(
        history_with(removal("U1 disc", day(3)), fitment("U1", "disc", day(3), record_id="new disc"))
    )
    old, new = where.parts["U1", "slot-disc", 1]
    assert (old.end, new.end) == (day(3), None)
    assert where.part_at("U1", "slot-disc", 1, day(3)) is old
    assert where.part_at("U1", "slot-disc", 1, day(4)) is new
    assert where.part_at("U1", "slot-disc", 1, FITTED) is None
    assert where.last_removed("U1", "slot-disc", 1, day(3)) is old
    assert where.last_removed("U1", "slot-disc", 1, day(2)) is None


def test_between_a_removal_and_the_next_fitting_a_place_is_empty() -> None:
    where = whereabouts_of(history_with(removal("U1 disc", day(3)), fitment("U1", "disc", day(5))))
    assert where.part_at("U1", "slot-disc", 1, day(4)) is None


def test_a_removal_without_a_place_takes_only_what_is_left() -> None:
    one, rest = removal("U1 pins", day(3), place=7), removal("U1 pins", day(5))
    parts = whereabouts_of(history_with(one, rest)).parts_of_fitment["U1 pins"]
    assert [part.end for part in parts] == [day(3) if part.place == 7 else day(5) for part in parts]


def test_a_failure_belongs_to_one_place_of_a_set() -> None:
    broke = failure("U1 pins", "pin: snapped", day(3), place=7)
    where = whereabouts_of(history_with(broke))
    failed = [part.place for part in where.parts_of_fitment["U1 pins"] if where.failure_of(part) is not None]
    assert failed == [7]


_REPLACEMENTS = st.lists(
    st.tuples(
        st.sets(st.integers(1, SET), min_size=1, max_size=SET),
        st.booleans(),  # a failure beside it
        st.booleans(),  # fitted one by one, or in runs of neighbours
    ),
    max_size=8,
)


def _replace(pins: dict[int, str], places: set[int], number: int, failed: bool, singly: bool) -> list[Record]:
    """Take out these places of the set and fit new pins; `pins` (place -> fitment) follows."""
    moment = day(number)
    records: list[Record] = [removal(pins[place], moment, place=place) for place in sorted(places)]
    if failed:
        worst = min(places)
        records.append(failure(pins[worst], "pin: snapped", moment, place=worst))
    runs: list[list[int]] = []
    for place in sorted(places):
        if runs and not singly and place == runs[-1][-1] + 1:
            runs[-1].append(place)
        else:
            runs.append([place])
    for run in runs:
        new = fitment("U1", "pins", moment, sequence=1, first_place=run[0], count=len(run), lot="P-1")
        records.append(new)
        pins |= dict.fromkeys(run, new.record_id)
    return records


@given(_REPLACEMENTS)
@settings(max_examples=80, deadline=None, derandomize=True)
def test_a_set_of_13_has_13_fitted_after_any_replacements(replaced: list[tuple[set[int], bool, bool]]) -> None:
    pins = dict.fromkeys(range(1, SET + 1), "U1 pins")
    records: list[Record] = []
    for number, (places, failed, singly) in enumerate(replaced, start=1):
        records += _replace(pins, places, number, failed, singly)
    whole = history_with(*records)
    assert problems_in(whole) == []
    where = whereabouts_of(whole)
    now = {part.place: part.fitment.record_id for part in where.fitted_now() if _is_pin(part.fitment)}
    assert now == pins
    # Every part that was ever fitted is fitted still or was taken out once, and at any moment each place held one.
    ever = sum(f.count for f in whole.of(Fitment).values() if _is_pin(f))
    assert ever == SET + sum(len(places) for places, _, _ in replaced)
    for number in range(1, len(replaced) + 2):
        held = [where.part_at("U1", "slot-pins", place, day(number)) for place in range(1, SET + 1)]
        assert all(part is not None for part in held)


@given(_REPLACEMENTS, st.integers(0, 9))
@settings(max_examples=40, deadline=None, derandomize=True)
def test_a_set_of_13_had_13_fitted_on_any_day(replaced: list[tuple[set[int], bool, bool]], today: int) -> None:
    pins = dict.fromkeys(range(1, SET + 1), "U1 pins")
    records: list[Record] = []
    for number, (places, failed, singly) in enumerate(replaced, start=1):
        records += _replace(pins, places, number, failed, singly)
    then = whereabouts_of(history_with(*records, as_of=day(today, 12)))
    fitted = Counter((part.fitment.unit, part.fitment.slot) for part in then.fitted_now())
    assert fitted == {(f"U{n}", f"slot-{slot}"): k for n in (1, 2, 3, 4) for slot, k in _SLOTS.items()}


_SLOTS = {"disc": 1, "pins": SET, "bearing": 1}


def _is_pin(of: Fitment) -> bool:
    return (of.unit, of.slot) == ("U1", "slot-pins")
