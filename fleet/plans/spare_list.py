"""From demand and stock to the spares list: per part type what to hold, what is short, and from which week."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from datetime import datetime, timedelta

from fleet.fits.part_lives import PartLife
from fleet.forecasts.demand import expected
from fleet.forecasts.part_demand import DAYS_A_WEEK, PartDemand, WeekDemand, chance_of_more_than
from fleet.lives.part_data import LifeKey
from fleet.plans.spares import stock_for
from fleet.plans.stock import LotStock, OpenOrder, on_printers, open_orders, stock_by_lot
from fleet.records.history import History
from fleet.records.set_up import PartType


@dataclass(frozen=True)
class SpareNeed:
    """One line of the spares list.

    `needed` is the smallest stock that lasts until it can be restocked (lead time and a week between looks) with the
    target; `short` is what is missing to it, orders due by then counted. `short_by_week` is what is
    missing to last to the end of each week shown, `short_from_week` the first of them in which something is, None if
    in none. `chance_enough` is the chance that it lasts until restocked. Superseded
    parts and lots kept apart lie beside and are not counted; nor is what an overdue order should have brought.
    """

    part_type: str
    code: str
    label: str
    printed: bool
    fitted: int
    waiting: int
    on_hand: int
    on_order: int
    orders: tuple[OpenOrder, ...]
    printing: int
    set_aside: int
    needed: int
    short: int
    short_by_week: tuple[int, ...]
    chance_enough: float
    expected: float
    days_until_restocked: int
    weeks: tuple[WeekDemand, ...]
    short_from_week: int | None
    failures_seen: int
    mostly_assumption: bool
    lots: tuple[LotStock, ...]

    @property
    def short_by_end(self) -> int:
        """What is missing to last through all the weeks shown."""
        return self.short_by_week[-1]


def spare_list(
    history: History, demands: Mapping[str, PartDemand], lives: Mapping[LifeKey, PartLife], target: float
) -> tuple[SpareNeed, ...]:
    """The spares list, what is short first.

    Parameters
    ----------
    target : float
        Chance with which the stock should last, such as 0.9.
    """
    lots, orders, printing = stock_by_lot(history), open_orders(history), on_printers(history)
    needs = []
    for part_type, demand in demands.items():
        if demand.fitted or demand.waiting:
            own = [life for key, life in lives.items() if key.part_type == part_type]
            stock = _Stock(
                now=history.as_of,
                lots=tuple(lot for lot in lots if lot.part_type == part_type),
                orders=tuple(order for order in orders if order.part_type == part_type),
                printing=printing.get(part_type, 0),
            )
            needs.append(_need(history.one(PartType, part_type), demand, own, stock, target))
    return tuple(sorted(needs, key=lambda n: (n.short == 0, n.short_from_week or 10_000, n.chance_enough, n.label)))


@dataclass(frozen=True)
class _Stock:
    """Spares of one part type: on the shelf, ordered, and on printers."""

    now: datetime
    lots: tuple[LotStock, ...]
    orders: tuple[OpenOrder, ...]
    printing: int

    @property
    def on_hand(self) -> int:
        """What may be fitted now."""
        return sum(lot.on_hand for lot in self.lots if not lot.superseded and not lot.kept_apart)

    def within(self, days: float) -> int:
        """What is there by then: on hand, and due from now on; nobody knows when an overdue order comes."""
        end = self.now + timedelta(days=days)
        return self.on_hand + sum(order.quantity for order in self.orders if self.now <= order.due_at <= end)


def _need(part_type: PartType, demand: PartDemand, own: list[PartLife], stock: _Stock, target: float) -> SpareNeed:
    needed = stock_for(demand.until_restocked, target)
    until_restocked = stock.within(demand.days_until_restocked)
    short_by_week = tuple(
        max(stock_for(row, target) - stock.within(week * DAYS_A_WEEK), 0)
        for week, row in enumerate(demand.by_week, start=1)
    )
    return SpareNeed(
        part_type=demand.part_type,
        code=part_type.code,
        label=part_type.label,
        printed=part_type.source == "printed",
        fitted=demand.fitted,
        waiting=demand.waiting,
        on_hand=stock.on_hand,
        on_order=sum(order.quantity for order in stock.orders),
        orders=stock.orders,
        printing=stock.printing,
        set_aside=sum(lot.on_hand for lot in stock.lots) - stock.on_hand,
        needed=needed,
        short=max(needed - until_restocked, 0),
        short_by_week=short_by_week,
        chance_enough=1 - chance_of_more_than(demand.until_restocked, until_restocked),
        expected=expected(demand.until_restocked),
        days_until_restocked=demand.days_until_restocked,
        weeks=demand.weeks,
        short_from_week=next((week for week, short in enumerate(short_by_week, start=1) if short), None),
        failures_seen=sum(life.data.failures_seen for life in own),
        mostly_assumption=not any(life.data.failures for life in own) or _share(own) < 0.5,
        lots=tuple(lot for lot in stock.lots if lot.on_hand > 0),
    )


def _share(lives: list[PartLife]) -> float:
    """How much comes from records, weighted by the parts that run."""
    running = [max(life.data.running, 1) for life in lives]
    return sum(n * life.data_share for n, life in zip(running, lives, strict=True)) / sum(running)
