"""The spares list: what to hold, what is short and from when, each against its plain definition."""

from __future__ import annotations

from datetime import timedelta

import pytest

from fleet.forecasts.part_demand import PartDemand
from fleet.plans.spare_list import SpareNeed, spare_list
from fleet.records.fields import Record
from fleet.records.ledger import Plate, Purchase, StockMove
from fleet.records.set_up import PartType, UsagePlan
from tests.books import day, failure, fitment, history_with, new_id, removal, session
from tests.chain import Chain, chain_of

RAN = [session(robot, day(n), 5.0) for n in range(1, 21) for robot in ("R1", "R2")]
PLANS = [
    UsagePlan(record_id=f"plan-{robot}", robot=robot, hours_per_week=15.0, session_hours=2.0) for robot in ("R1", "R2")
]
ORDERED = Purchase(record_id="PO-1", happened_at=day(24), code="PO-1", part_type="pin", quantity=6, due_at=day(30))


def received(lot: str, quantity: int) -> StockMove:
    return StockMove(record_id=new_id("move"), happened_at=day(22), lot=lot, quantity=quantity, reason="received")


def listed(
    *records: Record, target: float = 0.9, weeks: int = 8
) -> tuple[Chain, dict[str, PartDemand], list[SpareNeed]]:
    """The spares list of a fleet whose parts have a known life."""
    chain = chain_of(history_with(*RAN, *PLANS, *records))
    demands = chain.demands(weeks, chain.known(2.0, 150.0))
    return chain, demands, list(spare_list(chain.history, demands, chain.lives, target))


def line(code: str, *records: Record, target: float = 0.9, weeks: int = 8) -> SpareNeed:
    return next(need for need in listed(*records, target=target, weeks=weeks)[2] if need.code == code)


def plain_stock_for(demand: PartDemand, target: float) -> int:
    """Count up until the chance of a demand no larger reaches the target."""
    stock, chance = 0, float(demand.until_restocked[0])
    while chance < target:
        stock += 1
        chance += float(demand.until_restocked[stock])
    return stock


@pytest.mark.parametrize("target", [0.5, 0.9, 0.99])
def test_needed_is_the_smallest_stock_that_lasts_until_restocked_with_the_target(target: float) -> None:
    _, demands, found = listed(target=target)
    for need in found:
        assert need.needed == plain_stock_for(demands[need.part_type], target)
        assert need.expected == pytest.approx(
            sum(n * float(p) for n, p in enumerate(demands[need.part_type].until_restocked))
        )
        assert need.days_until_restocked == 5 + 7


def test_a_higher_target_never_needs_fewer() -> None:
    needed = [line("pin", target=target).needed for target in (0.5, 0.8, 0.9, 0.95, 0.99, 0.9999)]
    assert needed == sorted(needed)
    assert needed[0] < needed[-1]


def test_short_is_what_is_missing_beyond_the_shelf_and_the_orders() -> None:
    nothing = line("pin")
    assert nothing.short == nothing.needed > 0
    some = line("pin", received("P-1", 3), ORDERED)
    assert (some.on_hand, some.on_order) == (3, 6)
    assert some.short == max(some.needed - 3, 0), "what is due only later does not help until then"
    assert len(some.orders) == 1 and some.orders[0].quantity == 6
    assert some.needed == nothing.needed
    plenty = line("pin", received("P-1", 200))
    assert (plenty.short, plenty.short_by_end, plenty.short_from_week) == (0, 0, None)
    assert plenty.chance_enough > 0.999


def test_the_chance_that_it_lasts_reaches_the_target_exactly_when_nothing_is_short() -> None:
    needed = line("pin").needed
    enough, one_less = line("pin", received("P-1", needed)), line("pin", received("P-1", needed - 1))
    assert enough.short == 0 and enough.chance_enough >= 0.9
    assert one_less.short == 1 and one_less.chance_enough < 0.9


def test_the_first_short_week_is_the_first_whose_demand_the_stock_may_not_meet() -> None:
    _, demands, found = listed(received("P-1", 8))
    need = next(need for need in found if need.code == "pin")
    chances = [float(row[:9].sum()) for row in demands["pin"].by_week]
    assert need.short_from_week == 1 + next(week for week, chance in enumerate(chances) if chance < 0.9)
    assert need.short_by_end > 0


def test_story_16_parts_of_a_superseded_revision_lie_beside_and_are_not_counted() -> None:
    need = line("disc", received("D-1", 9))
    assert (need.on_hand, need.set_aside) == (0, 9)
    assert need.short == need.needed
    assert [(lot.code, lot.on_hand, lot.superseded) for lot in need.lots] == [("D-1", 9, True)]


def test_parts_of_a_lot_kept_apart_lie_beside_too() -> None:
    need = line("disc", received("D-9", 4), received("D-2", 2))
    assert (need.on_hand, need.set_aside) == (2, 4)


def test_parts_on_a_printer_are_named_and_not_counted_as_stock() -> None:
    printing = Plate(
        record_id="plate", happened_at=day(29), code="PL-1", printer="PR-1", lot="D-2", started=5, good=None
    )
    need = line("disc", printing)
    assert (need.printing, need.on_hand, need.on_order) == (5, 0, 0)
    assert need.short == need.needed


def test_a_part_that_waits_for_its_replacement_is_needed_now() -> None:
    waits = line("disc", failure("U1 disc", "disc: split", day(25)))
    assert waits.waiting == 1
    assert waits.fitted == 2
    assert waits.chance_enough == 0.0
    assert waits.short_from_week == 1
    assert waits.needed >= 1


def test_a_longer_lead_time_needs_more() -> None:
    slow = PartType(
        **{
            name: getattr(history_with().one(PartType, "pin"), name)
            for name in ("record_id", "code", "label", "source", "planned_cost", "failure_cost", "mass_g")
        },
        lead_time_days=60,
    )
    quick, late = line("pin"), line("pin", slow)
    assert late.days_until_restocked == 67
    assert late.needed > quick.needed


def test_what_is_short_stands_first() -> None:
    found = listed(received("P-1", 200), received("B-1", 50))[2]
    assert found[0].code == "disc"
    assert [need.short > 0 for need in found] == sorted((need.short > 0 for need in found), reverse=True)


def test_a_part_type_that_nobody_has_fitted_is_not_listed() -> None:
    spring = PartType(
        record_id="spring",
        code="spring",
        label="spring",
        source="bought",
        planned_cost=1,
        failure_cost=2,
        mass_g=1,
        lead_time_days=1,
    )
    assert {need.code for need in listed(spring)[2]} == {"disc", "pin", "bearing"}


def test_failures_seen_and_the_basis_are_told() -> None:
    worn = failure("U1 disc", "disc: split", day(25))
    spare = [removal("U1 disc", day(25), "failed"), fitment("U1", "disc", day(25), sequence=1, lot="D-2")]
    assert line("disc").failures_seen == 0
    need = line("disc", worn, *spare)
    assert need.failures_seen == 1
    assert need.mostly_assumption


def test_stock_of_the_future_does_not_count_yet() -> None:
    later = received("P-1", 50)
    chain = chain_of(history_with(*RAN, *PLANS, later, as_of=later.happened_at - timedelta(hours=1)))
    demands = chain.demands(2, chain.known(2.0, 150.0))
    need = next(n for n in spare_list(chain.history, demands, chain.lives, 0.9) if n.code == "pin")
    assert need.on_hand == 0
