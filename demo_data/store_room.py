"""The grower's store room: bags of parts, what is ordered, and what the printers make overnight."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from datetime import UTC, datetime, timedelta
from random import Random

from demo_data.chance import successes, whole_between
from demo_data.fleet_plan import FIRST_LOTS, PRINTERS, ZONE, FirstLot
from demo_data.ledger_rows import LedgerRows
from demo_data.part_plan import CURRENT_REVISION, PARTS, PLATES, TRUE_PLATE_LOSS, TRUE_YIELD, PlannedPart

PRINTED_AHEAD = 6  # on the last evening, for the quiet weeks that follow


@dataclass(frozen=True)
class BagLabel:
    """What the bag says: lot, part type, revision; `lot` is empty where nobody knows."""

    lot: str
    part_type: str
    revision: str = ""
    kept_apart: bool = False


@dataclass(frozen=True)
class _OnItsWay:
    """Parts that come at a moment: from a purchase, or off a plate."""

    arrives: datetime
    label: BagLabel
    quantity: int
    purchase: str = ""
    printer: str = ""
    supplier: str = ""


class StoreRoom:
    """On hand by lot, oldest lot first."""

    def __init__(self, rows: LedgerRows, rng: Random) -> None:
        self._rows = rows
        self._rng = rng
        self._on_hand: dict[BagLabel, int] = {}
        self._coming: list[_OnItsWay] = []
        self._lots_made = {part.code: sum(lot.part_type == part.code for lot in FIRST_LOTS) for part in PARTS}
        self._lots_made["disc"] -= sum(lot.revision == "B" for lot in FIRST_LOTS)
        self._lot_of_month: dict[tuple[str, int, int], BagLabel] = {}
        self._purchases = 0
        self._plates = 0

    def receive_first(self, lots: Iterable[FirstLot], moment: datetime) -> None:
        """Book in the parts that came with the robots."""
        for first in lots:
            label = BagLabel(first.code, first.part_type, first.revision, first.kept_apart)
            self._new_lot(label, note=first.note)
            self._receive(label, first.quantity, moment)

    def take(self, part_type: str, count: int, lot: str = "") -> BagLabel:
        """Take parts from one bag: the named lot, or the oldest that is not kept apart and holds enough.

        Raises
        ------
        RuntimeError
            If no bag holds enough: the stock rules of the plan are then too tight.
        """
        for label, left in self._on_hand.items():
            fits = label.lot == lot if lot else (label.part_type == part_type and not label.kept_apart)
            if fits and left >= count:
                self._on_hand[label] = left - count
                return label
        raise RuntimeError(f"no bag holds {count} of {part_type} {lot}: raise reorder_at in the plan")

    def on_hand(self, part_type: str) -> int:
        """Parts of a type that may be fitted now."""
        return sum(n for label, n in self._on_hand.items() if label.part_type == part_type and not label.kept_apart)

    def scrap(self, part_type: str, moment: datetime, keep: int = 0, lot: str = "") -> None:
        """Throw parts away, of one lot if named, until `keep` are left."""
        labels = [label for label in self._on_hand if label.part_type == part_type and lot in ("", label.lot)]
        excess = sum(self._on_hand[label] for label in labels) - keep
        for label in labels:
            gone = min(max(excess, 0), self._on_hand[label])
            if gone:
                self._on_hand[label] -= gone
                excess -= gone
                self._rows.happened("stock_move", moment, "bench", lot=label.lot, quantity=gone, reason="scrapped")

    def count(self, moment: datetime, pins_lost: int = 0) -> None:
        """Count every bag that is not empty; a few pins may turn out to be lost."""
        for label, left in list(self._on_hand.items()):
            if left == 0:
                continue
            if label.part_type == "pin":
                left, pins_lost = max(left - pins_lost, 0), max(pins_lost - left, 0)
                self._on_hand[label] = left
            self._rows.happened("stock_move", moment, "bench", lot=label.lot, quantity=left, reason="counted")

    def morning(self, moment: datetime) -> None:
        """Put away what has come by now."""
        for batch in [batch for batch in self._coming if batch.arrives <= moment]:
            self._coming.remove(batch)
            if batch.purchase:
                self._new_lot(batch.label, supplier=batch.supplier)
                self._receive(batch.label, batch.quantity, batch.arrives, batch.purchase)
            else:
                self._on_hand[batch.label] = self._on_hand.get(batch.label, 0) + batch.quantity

    def evening(self, moment: datetime, last: bool = False) -> None:
        """Order what runs low, and start a plate on each idle printer; the last evening's plates still print."""
        for part in PARTS:
            under_way = sum(batch.quantity for batch in self._coming if batch.label.part_type == part.code)
            ahead = PRINTED_AHEAD if last and part.code in PLATES else 0
            if self.on_hand(part.code) + under_way > part.reorder_at + ahead:
                continue
            if part.code in PLATES:
                self._start_plate(part, moment, last)
            else:
                self._buy(part, moment)

    def _buy(self, part: PlannedPart, moment: datetime) -> None:
        self._purchases += 1
        code = f"PO-{self._purchases:03d}"
        due = (moment + timedelta(days=part.lead_time_days)).replace(hour=12, minute=0)
        self._rows.happened(
            "purchase", moment, "planner", code=code, part_type=part.code, quantity=part.order, due_at=due
        )
        arrives = (due + timedelta(days=whole_between(self._rng, -2, 2))).replace(hour=7, minute=45)
        supplier = f"S{whole_between(self._rng, 10_000, 99_999)}"
        self._coming.append(_OnItsWay(arrives, self._next_label(part), part.order, code, supplier=supplier))

    def _start_plate(self, part: PlannedPart, moment: datetime, last: bool) -> None:
        figures = PLATES[part.code]
        busy = {batch.printer for batch in self._coming}
        idle = [code for code, _, nozzle, _ in PRINTERS if nozzle == figures.nozzle_mm and code not in busy]
        if not idle:
            return
        started = figures.parts_per_plate
        lost = self._rng.random() < TRUE_PLATE_LOSS
        good = 0 if lost else successes(self._rng, started, TRUE_YIELD)
        minutes = figures.plate_minutes + figures.print_minutes * started
        ended = (moment.astimezone(UTC) + timedelta(minutes=minutes)).astimezone(ZONE)
        label = self._label_of_month(part, moment)
        self._plates += 1
        self._rows.happened(
            "plate",
            moment,
            "bench",
            code=f"PL-{self._plates:03d}",
            printer=idle[0],
            lot=label.lot,
            started=started,
            good=None if last else good,
            ended_at=None if last else ended,
        )
        self._coming.append(_OnItsWay(ended, label, good, printer=idle[0]))

    def _label_of_month(self, part: PlannedPart, moment: datetime) -> BagLabel:
        key = (part.code, moment.year, moment.month)
        if key not in self._lot_of_month:
            label = self._next_label(part)
            self._new_lot(label)
            self._lot_of_month[key] = label
        return self._lot_of_month[key]

    def _next_label(self, part: PlannedPart) -> BagLabel:
        self._lots_made[part.code] += 1
        code = f"{part.lot_prefix}-{self._lots_made[part.code]:02d}"
        return BagLabel(code, part.code, CURRENT_REVISION.get(part.code, ""))

    def _new_lot(self, label: BagLabel, supplier: str = "", note: str = "") -> None:
        self._rows.add(
            "lot",
            code=label.lot,
            part_type=label.part_type,
            revision=label.revision,
            supplier=supplier,
            kept_apart=True if label.kept_apart else None,
            note=note,
        )

    def _receive(self, label: BagLabel, quantity: int, moment: datetime, purchase: str = "") -> None:
        self._on_hand[label] = self._on_hand.get(label, 0) + quantity
        self._rows.happened(
            "stock_move",
            moment,
            "bench",
            lot=label.lot,
            quantity=quantity,
            reason="received",
            purchase=purchase,
        )
