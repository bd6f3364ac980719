"""Good spares on the shelf, by lot: every way in and out, and a plain day-by-day replay beside it."""

from __future__ import annotations

from collections import Counter
from collections.abc import Sequence
from datetime import datetime, timedelta

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from fleet.plans.stock import LotStock, on_printers, open_orders, stock_by_lot
from fleet.records.fields import Record
from fleet.records.history import History, history_of
from fleet.records.ledger import Fitment, Plate, Purchase, StockMove
from fleet.records.set_up import Lot
from tests.books import END, day, fitment, history_with, new_id, removal


def move(reason: str, quantity: int, moment: datetime, lot: str = "D-2", **changed: object) -> StockMove:
    return StockMove(
        record_id=new_id("move"),
        happened_at=moment,
        lot=lot,
        quantity=quantity,
        reason=reason,
        **changed,  # type: ignore[arg-type]
    )


def plate(started: int, good: int | None, moment: datetime, lot: str = "D-2") -> Plate:
    ended_at = None if good is None else moment + timedelta(hours=9)
    return Plate(
        record_id=new_id("plate"),
        happened_at=moment,
        code=new_id("PL"),
        printer="PR-1",
        lot=lot,
        started=started,
        good=good,
        ended_at=ended_at,
    )


def purchase(quantity: int, part_type: str = "pin") -> Purchase:
    number = new_id("PO")
    return Purchase(
        record_id=number, happened_at=day(1), code=number, part_type=part_type, quantity=quantity, due_at=day(20)
    )


def stock(*records: Record, lot: str = "D-2", as_of: datetime = END) -> LotStock:
    return next(held for held in stock_by_lot(history_with(*records, as_of=as_of)) if held.lot == lot)


def test_a_lot_nobody_stocked_has_none() -> None:
    assert {held.code: held.on_hand for held in stock_by_lot(history_with())} == dict.fromkeys(
        ("D-1", "D-2", "D-9", "P-1", "B-1"), 0
    )


def test_plates_and_receipts_add_and_scrap_takes_away() -> None:
    records = [plate(6, 5, day(1)), move("received", 10, day(3)), move("returned", 2, day(4))]
    assert stock(*records).on_hand == 17
    assert stock(*records, move("scrapped", 3, day(5))).on_hand == 14


def test_a_plate_counts_from_when_it_was_done_and_only_its_good_parts() -> None:
    printed = plate(6, 5, day(1, 22))
    assert stock(printed, as_of=day(2, 6)).on_hand == 0
    assert stock(printed, as_of=day(2, 8)).on_hand == 5
    assert stock(plate(6, None, day(1))).on_hand == 0


def test_each_part_fitted_takes_one_away() -> None:
    received = move("received", 20, day(1), lot="P-1")
    set_of_pins = fitment("U1", "pins", day(2), count=13, lot="P-1")
    assert stock(received, set_of_pins, lot="P-1").on_hand == 7


def test_parts_fitted_before_the_first_stock_record_do_not_count_against_it() -> None:
    assert stock(move("counted", 4, day(1)), lot="D-2").on_hand == 4
    assert stock(move("received", 4, day(1), lot="D-1"), lot="D-1").on_hand == 4, "the first fitting took from others"


def test_a_moved_part_takes_nothing_from_the_shelf() -> None:
    moved = fitment("U2", "disc", day(9), sequence=1, lot="D-2", comes_from="U1 disc")
    assert stock(move("received", 4, day(1)), removal("U1 disc", day(9), "moved"), moved).on_hand == 4


def test_a_count_is_the_truth_of_its_moment_and_what_follows_adds_to_it() -> None:
    records = [move("received", 10, day(1)), move("counted", 7, day(5)), move("received", 2, day(6))]
    assert stock(*records).on_hand == 9
    assert stock(*records, as_of=day(5, 12)).on_hand == 7
    assert stock(*records, fitment("U1", "disc", day(5), lot="D-2")).on_hand == 9, "the count saw it gone already"


def test_what_was_entered_late_falls_into_its_place() -> None:
    counted, late = move("counted", 7, day(5)), move("received", 30, day(2))
    assert stock(counted, late).on_hand == stock(late, counted).on_hand == 7


def test_there_is_never_less_than_nothing() -> None:
    assert stock(move("received", 1, day(1)), move("scrapped", 5, day(2))).on_hand == 0


def test_superseded_revisions_and_lots_kept_apart_are_marked() -> None:
    marks = {held.code: (held.superseded, held.kept_apart) for held in stock_by_lot(history_with())}
    assert marks["D-1"] == (True, False)
    assert marks["D-2"] == (False, False)
    assert marks["D-9"] == (False, True)


def test_on_order_is_what_was_ordered_and_has_not_come() -> None:
    first, second = purchase(50), purchase(30)
    came = [move("received", 20, day(5), lot="P-1", purchase=first.record_id)]
    assert ordered(history_with(first, second, *came))["pin"] == 60
    more = move("received", 45, day(6), lot="P-1", purchase=first.record_id)
    assert ordered(history_with(first, second, *came, more))["pin"] == 30, "what came beyond one order closes no other"
    assert ordered(history_with())["pin"] == 0


def test_on_printers_are_the_parts_started_on_plates_not_done() -> None:
    assert on_printers(history_with(plate(6, None, day(1)), plate(5, None, day(2)), plate(4, 4, day(3)))) == {
        "disc": 11
    }


Event = tuple[int, str, int]
EVENTS = st.lists(
    st.tuples(
        st.integers(0, 25),
        st.sampled_from(["printed", "received", "returned", "scrapped", "fitted", "counted"]),
        st.integers(0, 13),
    ),
    max_size=25,
    unique_by=lambda event: event[:2],
)


def replayed(events: Sequence[Event]) -> int:
    """Day by day: what came in, what went out, and at its end what was counted."""
    on_hand, started = 0, False
    for number in range(26):
        today = {what: quantity for at, what, quantity in events if at == number}
        started = started or any(what not in ("fitted", "counted") for what in today)
        came = sum(today.get(what, 0) for what in ("printed", "received", "returned"))
        on_hand += came - today.get("scrapped", 0) - (today.get("fitted", 0) if started else 0)
        if "counted" in today:
            on_hand, started = today["counted"], True
    return max(on_hand, 0)


@settings(max_examples=150, deadline=None, derandomize=True)
@given(EVENTS)
def test_it_agrees_with_a_plain_day_by_day_replay(events: list[Event]) -> None:
    records: list[Record] = [history_with().of(Lot)["D-2"]]
    for at, what, quantity in events:
        moment = day(at)
        if what == "printed":
            records.append(plate(13, quantity, moment - timedelta(hours=9)))
        elif what != "fitted":
            records.append(move(what, quantity, moment))
        elif quantity:
            records.append(
                Fitment(
                    record_id=new_id("fitment"),
                    happened_at=moment,
                    unit="U1",
                    slot="slot-disc",
                    lot="D-2",
                    count=quantity,
                )
            )
    assert stock_by_lot(history_of(records, END))[0].on_hand == replayed(events)


@pytest.mark.parametrize("order", [1, -1])
def test_the_order_of_entry_changes_nothing(order: int) -> None:
    records = [
        plate(6, 6, day(1)),
        move("counted", 3, day(4)),
        move("received", 5, day(4)),
        fitment("U1", "disc", day(8), lot="D-2"),
    ]
    assert stock(*records[::order]).on_hand == 2


def ordered(history: History) -> Counter[str]:
    """Parts of each type that were ordered and have not come."""
    total: Counter[str] = Counter()
    for order in open_orders(history):
        total[order.part_type] += order.quantity
    return total
