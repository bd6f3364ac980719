"""What is done on the bench: fitting out modules, repairs, checks, renewals, and moves between robots."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from datetime import datetime
from random import Random

from demo_data import fleet_plan as plan
from demo_data.chance import between
from demo_data.joint_modules import JointModule, Place, Reading, new_part, no_reading
from demo_data.ledger_rows import LedgerRows
from demo_data.part_plan import PlannedSlot, slots_of
from demo_data.store_room import BagLabel, StoreRoom
from demo_data.truth import HOW_FOUND, TrueMode

PAIR_AGE_HOURS, PAIR_SHARE = 150.0, 0.5  # the other disc of a pair is then renewed while the joint is open
SET_AGE_HOURS, SET_SHARE = 250.0, 0.2  # as are the other pins of the set
LOOKED_BAD_FROM = 0.85  # of its life in a mode that shows as wear


@dataclass(frozen=True)
class Repair:
    """A failed part that waits for the bench."""

    due: datetime
    module: JointModule
    place: Place
    reason: str


class Workbench:
    """Works on modules, takes parts from the store room, and notes every step."""

    def __init__(self, rows: LedgerRows, store: StoreRoom, rng: Random) -> None:
        self._rows = rows
        self._store = store
        self._rng = rng
        self._failed: set[tuple[str, Place]] = set()  # noted, still in place

    def fit_out(self, module: JointModule, moment: datetime, disc_lot: str) -> None:
        """Fill every slot of a module with new parts."""
        for slot in slots_of(module.unit_design):
            label = self._store.take(slot.part_type, slot.count, disc_lot if slot.part_type == "disc" else "")
            self._fit_set(module, slot, label, moment)

    def fit_inherited(self, module: JointModule, moment: datetime, turns_per_hour: int, stated: bool) -> None:
        """Note the parts that a robot brought with it; their ages are stated, or nobody knows them."""
        hidden_hours = round(between(self._rng, *plan.HIDDEN_PRIOR_HOURS), 2)
        for slot in slots_of(module.unit_design):
            stated_hours = plan.STATED_PRIOR_HOURS.get(slot.code, plan.STATED_PRIOR_HOURS_ELSE)
            hours = stated_hours if stated else hidden_hours
            age = {
                "hours": hours,
                "turns": float(round(hours * turns_per_hour)),
                "impacts": float(round(hours * plan.PRIOR_IMPACTS_PER_HOUR)),
            }
            label = BagLabel("", slot.part_type, "C" if slot.part_type == "disc" else "")
            self._fit_set(module, slot, label, moment, age)
            row = self._rows.happened(
                "fitment", moment, "import", unit=module.code, slot=slot.code, first_place=1, count=slot.count
            )
            row["revision"] = label.revision
            row["prior"] = "stated" if stated else "unknown"
            if stated:
                row.update({f"prior_{clock}": f"{value:.10g}" for clock, value in age.items()})

    def place(self, module: JointModule, moment: datetime, robot: str = "", position: str = "") -> None:
        """Put a module in a position, or on the shelf."""
        module.robot, module.position = robot, position
        self._rows.happened(
            "placement", moment, "bench", unit=module.code, robot=robot or None, position=position or None
        )

    def note_failure(self, module: JointModule, place: Place, mode: TrueMode, moment: datetime, **known: str) -> None:
        """Note that a part failed; `known` overrides or adds columns of the row."""
        columns = {
            "finding": mode.finding,
            "cause": mode.cause,
            "how_found": HOW_FOUND[known.get("finding", mode.finding)],
        } | known
        self._failed.add((module.code, place))
        self._rows.happened(
            "failure",
            moment,
            "field lead" if "session" in known else "bench",
            robot=module.robot,
            position=module.position,
            slot=place[0],
            place=place[1],
            mode=mode.mode,
            **columns,
        )

    def repair(self, repair: Repair, moment: datetime) -> None:
        """Replace a failed part, and its like if the joint is open and they are old."""
        module, (slot, _) = repair.module, repair.place
        age = module.age_of(module.parts[repair.place], "hours")
        like = [place for place in module.places_of(slot) if place != repair.place]
        self._replace(module, repair.place, repair.reason, moment)
        if slot == "discs":
            like = [place for place in like if module.age_of(module.parts[place], "hours") > PAIR_AGE_HOURS]
            if like and self._rng.random() < PAIR_SHARE:
                self.renew(module, like, moment)
        elif slot == "pins" and age > SET_AGE_HOURS and self._rng.random() < SET_SHARE:
            self.renew(module, like, moment)

    def renew(self, module: JointModule, places: Sequence[Place], moment: datetime) -> None:
        """Replace parts while good; one that turns out to be worn is noted as found worn.

        Parts that are already noted as failed are left to their own repair.
        """
        for place in places:
            if (module.code, place) in self._failed:
                continue
            mode = module.worn(place)
            if mode is not None:
                self.note_failure(module, place, mode, moment)
            self._replace(module, place, "replaced while good" if mode is None else "found worn", moment)

    def check(self, modules: Sequence[JointModule], moment: datetime, closed: datetime) -> None:
        """Look at joints: worn parts are noted and replaced, and the joint is looked at again when closed."""
        for module in modules:
            worn = module.worn_places()
            for place in worn:
                mode = module.worn(place)
                if mode is not None:  # else it was renewed with the one before
                    self.note_failure(module, place, mode, moment)
                    self.repair(Repair(moment, module, place, "found worn"), moment)
            self._rows.happened("bench_check", closed if worn else moment, "bench", unit=module.code, verdict="good")

    def move_part(self, giver: JointModule, taker: JointModule, place: Place, moment: datetime) -> None:
        """Take a part out of one module and fit it in another, in the place of one that was still good."""
        if giver.worn(place) is not None or taker.worn(place) is not None:
            return
        self._note_removal(giver, place, "moved", moment)
        moved = giver.take_out(place)
        self._fit_one(giver, place, moved.label.part_type, moment)
        self._note_removal(taker, place, "replaced while good", moment)
        taker.take_out(place)
        taker.put_in(place, moved)
        self._rows.happened(
            "fitment",
            moment,
            "bench",
            unit=taker.code,
            slot=place[0],
            first_place=place[1],
            count=1,
            lot=moved.label.lot,
            from_unit=giver.code,
            from_slot=place[0],
            from_place=place[1],
        )

    def _replace(self, module: JointModule, place: Place, reason: str, moment: datetime) -> None:
        self._note_removal(module, place, reason, moment)
        self._failed.discard((module.code, place))
        gone = module.take_out(place)
        self._fit_one(module, place, gone.label.part_type, moment)

    def _note_removal(self, module: JointModule, place: Place, reason: str, moment: datetime) -> None:
        part = module.parts[place]
        near_end = any(
            mode.finding == "found worn" and module.age_of(part, mode.clock) > LOOKED_BAD_FROM * life
            for mode, life in part.lives
        )
        looked_bad = True if reason == "replaced while good" and near_end else None
        self._rows.happened(
            "removal",
            moment,
            "bench",
            unit=module.code,
            slot=place[0],
            place=place[1],
            reason=reason,
            looked_bad=looked_bad,
        )

    def _fit_one(self, module: JointModule, place: Place, part_type: str, moment: datetime) -> None:
        label = self._store.take(part_type, 1)
        module.put_in(place, new_part(label, self._rng))
        self._rows.happened(
            "fitment",
            moment,
            "bench",
            unit=module.code,
            slot=place[0],
            first_place=place[1],
            count=1,
            lot=label.lot,
        )

    def _fit_set(
        self, module: JointModule, slot: PlannedSlot, label: BagLabel, moment: datetime, age: Reading | None = None
    ) -> None:
        start_age = no_reading() if age is None else age
        for number in range(1, slot.count + 1):
            module.put_in((slot.code, number), new_part(label, self._rng, dict(start_age)))
        if age is None:
            self._rows.happened(
                "fitment",
                moment,
                "bench",
                unit=module.code,
                slot=slot.code,
                first_place=1,
                count=slot.count,
                lot=label.lot,
            )
