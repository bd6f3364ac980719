"""From demand and stock to the spares list: per part type what to hold, what is short, and from which week."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from fleet.fits.part_lives import PartLife
from fleet.forecasts.demand import expected
from fleet.forecasts.part_demand import PartDemand, WeekDemand, chance_of_more_than
from fleet.lives.part_data import LifeKey
from fleet.plans.spares import stock_for
from fleet.plans.stock import LotStock, on_order, on_printers, stock_by_lot
from fleet.records.history import History
from fleet.records.set_up import PartType


@dataclass(frozen=True)
class SpareNeed:
    """One line of the spares list.

    `needed` is the smallest stock that lasts until it can be restocked (lead time and a week between looks) with the
    target; `short` is what is missing to it, open orders counted. `short_by_end` is what is missing to last through
    the weeks shown. `short_from_week` is the first week in which the
    stock on hand and on order falls below the target, None if in none shown. `chance_enough` is the chance that it
    lasts until restocked. Superseded parts and lots kept apart lie beside and are not counted.
    """

    part_type: str
    code: str
    label: str
    printed: bool
    fitted: int
    waiting: int
    on_hand: int
    on_order: int
    printing: int
    set_aside: int
    needed: int
    short: int
    short_by_end: int
    chance_enough: float
    expected: float
    days_until_restocked: int
    weeks: tuple[WeekDemand, ...]
    short_from_week: int | None
    failures_seen: int
    mostly_assumption: bool
    lots: tuple[LotStock, ...]


def spare_list(
    history: History, demands: Mapping[str, PartDemand], lives: Mapping[LifeKey, PartLife], target: float
) -> tuple[SpareNeed, ...]:
    """The spares list, what is short first.

    Parameters
    ----------
    target : float
        Chance with which the stock should last, such as 0.9.
    """
    lots = stock_by_lot(history)
    ordered, printing = on_order(history), on_printers(history)
    needs = [
        _need(history, demand, lives, target, [lot for lot in lots if lot.part_type == part_type], ordered, printing)
        for part_type, demand in demands.items()
        if demand.fitted or demand.waiting
    ]
    return tuple(sorted(needs, key=lambda n: (n.short == 0, n.short_from_week or 10_000, n.chance_enough, n.label)))


def _need(
    history: History,
    demand: PartDemand,
    lives: Mapping[LifeKey, PartLife],
    target: float,
    lots: list[LotStock],
    ordered: Mapping[str, int],
    printing: Mapping[str, int],
) -> SpareNeed:
    part_type = history.one(PartType, demand.part_type)
    usable = sum(lot.on_hand for lot in lots if not lot.superseded and not lot.kept_apart)
    coming = ordered.get(demand.part_type, 0)
    needed = stock_for(demand.until_restocked, target)
    own = [life for key, life in lives.items() if key.part_type == demand.part_type]
    failures = sum(life.data.failures for life in own)
    stock = usable + coming
    short_weeks = [w + 1 for w, row in enumerate(demand.by_week) if chance_of_more_than(row, stock) > 1 - target]
    return SpareNeed(
        part_type=demand.part_type,
        code=part_type.code,
        label=part_type.label,
        printed=part_type.source == "printed",
        fitted=demand.fitted,
        waiting=demand.waiting,
        on_hand=usable,
        on_order=coming,
        printing=printing.get(demand.part_type, 0),
        set_aside=sum(lot.on_hand for lot in lots) - usable,
        needed=needed,
        short=max(needed - stock, 0),
        short_by_end=max(stock_for(demand.by_week[-1], target) - stock, 0),
        chance_enough=1 - chance_of_more_than(demand.until_restocked, stock),
        expected=expected(demand.until_restocked),
        days_until_restocked=demand.days_until_restocked,
        weeks=demand.weeks,
        short_from_week=short_weeks[0] if short_weeks else None,
        failures_seen=failures,
        mostly_assumption=failures == 0 or _share(own) < 0.5,
        lots=tuple(lot for lot in lots if lot.on_hand > 0),
    )


def _share(lives: list[PartLife]) -> float:
    """How much comes from records, weighted by the parts that run."""
    running = [max(life.data.running, 1) for life in lives]
    return sum(n * life.data_share for n, life in zip(running, lives, strict=True)) / sum(running)
