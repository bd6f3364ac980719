"""From plates, receipts, counts and fittings to the good spares on the shelf, by lot, and what is on order."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Mapping
from dataclasses import dataclass
from datetime import datetime

from fleet.records.history import History
from fleet.records.ledger import Fitment, Plate, Purchase, StockMove
from fleet.records.set_up import Lot, Revision


@dataclass(frozen=True)
class LotStock:
    """Spares of one lot on the shelf. `superseded` says that its revision is no longer made."""

    lot: str
    code: str
    part_type: str
    on_hand: int
    superseded: bool
    kept_apart: bool


def stock_by_lot(history: History) -> list[LotStock]:
    """What each lot has left on the shelf, none left included.

    A count is taken as the truth of its moment; before and after it, plates and receipts add, fittings and scrap
    take away. Fittings from before a lot's first stock record do not count against it.
    """
    moves = _moves(history)
    superseded = {r.record_id for r in history.of(Revision).values() if r.superseded}
    return [
        LotStock(
            lot=lot.record_id,
            code=lot.code,
            part_type=lot.part_type,
            on_hand=_on_hand(moves.get(lot.record_id, [])),
            superseded=lot.revision in superseded,
            kept_apart=lot.kept_apart,
        )
        for lot in history.of(Lot).values()
    ]


@dataclass(frozen=True)
class _Move:
    moment: datetime
    order: int
    change: int
    counted: int | None = None
    fitted: bool = False


def _moves(history: History) -> Mapping[str, list[_Move]]:
    moves: dict[str, list[_Move]] = defaultdict(list)
    for plate in history.of(Plate).values():
        if plate.good is not None and plate.ended_at is not None and plate.ended_at <= history.as_of:
            moves[plate.lot].append(_Move(plate.ended_at, 0, plate.good))
    for move in history.of(StockMove).values():
        if move.reason == "counted":
            moves[move.lot].append(_Move(move.happened_at, 3, 0, counted=move.quantity))
        else:
            change = -move.quantity if move.reason == "scrapped" else move.quantity
            moves[move.lot].append(_Move(move.happened_at, 1, change))
    for fitment in history.of(Fitment).values():
        if fitment.lot is not None and fitment.comes_from is None:
            moves[fitment.lot].append(_Move(fitment.happened_at, 2, -fitment.count, fitted=True))
    return moves


def _on_hand(moves: list[_Move]) -> int:
    on_hand, started = 0, False
    for move in sorted(moves, key=lambda move: (move.moment, move.order)):
        if move.fitted and not started:
            continue
        started = True
        on_hand = on_hand + move.change if move.counted is None else move.counted
    return max(on_hand, 0)


@dataclass(frozen=True)
class OpenOrder:
    """Parts that were ordered and have not come yet, and when they are due."""

    part_type: str
    code: str
    quantity: int
    due_at: datetime


def open_orders(history: History) -> list[OpenOrder]:
    """What was ordered and has not come, the first due first."""
    received: dict[str, int] = defaultdict(int)
    for move in history.of(StockMove).values():
        if move.purchase is not None and move.reason == "received":
            received[move.purchase] += move.quantity
    orders = [
        OpenOrder(purchase.part_type, purchase.code, purchase.quantity - received[purchase.record_id], purchase.due_at)
        for purchase in history.of(Purchase).values()
        if purchase.quantity > received[purchase.record_id]
    ]
    return sorted(orders, key=lambda order: order.due_at)


def on_printers(history: History) -> dict[str, int]:
    """Parts of each type that were started on plates still printing; how many come out good is not known yet."""
    started: dict[str, int] = defaultdict(int)
    for plate in history.of(Plate).values():
        if plate.good is None:
            started[history.one(Lot, plate.lot).part_type] += plate.started
    return dict(started)
