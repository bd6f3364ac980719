"""The seeded simulation: fourteen months of the invented fleet, day by day, as the rows of its book."""

from __future__ import annotations

import math
from collections import Counter
from collections.abc import Iterator
from dataclasses import dataclass
from datetime import date, datetime, time, timedelta
from random import Random

from demo_data import fleet_plan as plan
from demo_data.chance import between, one_of, poisson, several_of, whole_between
from demo_data.joint_modules import Crossing, JointModule, Reading
from demo_data.ledger_rows import LedgerRows, Row
from demo_data.part_plan import LEG_JOINT, slot_of
from demo_data.set_up_rows import add_set_up
from demo_data.store_room import StoreRoom
from demo_data.truth import JAMMED_MODE, JAMMED_SLOT, true_modes
from demo_data.workbench import Repair, Workbench

HOURS_GRID = 0.01  # sessions last a whole number of these
CHECK_EVERY_DAYS = (21, 33)
LATEST_SAME_DAY_REPAIR = time(16, 30)


def simulate(seed: int) -> dict[str, list[Row]]:
    """The book of the invented fleet.

    Parameters
    ----------
    seed : int
        The same seed gives the same rows.

    Returns
    -------
    dict
        File name, such as "session.csv" -> its rows, each column name -> text as it stands in the file.
    """
    fleet = _Fleet(seed)
    for day in _days(plan.FIRST_DAY, plan.LAST_DAY):
        fleet.live_through(day)
    return fleet.rows.files()


@dataclass(frozen=True)
class _Run:
    """One session as it was planned, or as it went: hours, hard impacts, and turns by position."""

    start: datetime
    hours: float
    impacts: int
    turns: dict[str, int]
    logged: bool

    def cut_at(self, share: float) -> _Run:
        """The session as it went if it ended when this share of it had passed."""
        steps = max(math.ceil(share * self.hours / HOURS_GRID - 1e-9), 1)
        hours = min(round(steps * HOURS_GRID, 2), self.hours)
        return _Run(
            self.start,
            hours,
            min(math.ceil(share * self.impacts), self.impacts),
            {position: math.ceil(turns * hours / self.hours) for position, turns in self.turns.items()},
            self.logged,
        )

    @property
    def end(self) -> datetime:
        """When it ended; a session has no pauses."""
        return self.start + timedelta(seconds=round(self.hours * 3600))

    def gain(self, position: str) -> Reading:
        """What the clocks of a joint gain."""
        return {"hours": self.hours, "turns": float(self.turns[position]), "impacts": float(self.impacts)}


def _days(first: date, last: date) -> Iterator[date]:
    for number in range((last - first).days + 1):
        yield first + timedelta(days=number)


def _at(day: date, hour: int, minute: int = 0) -> datetime:
    return datetime.combine(day, time(hour, minute), plan.ZONE)


def _make_modules() -> tuple[list[JointModule], dict[tuple[str, str], JointModule], list[JointModule]]:
    """All modules, those meant for each position, and the spare ones."""
    homes, spares = {}, []
    numbers = Counter[str]()

    def make(design: str) -> JointModule:
        numbers[design] += 1
        return JointModule(f"{'L' if design == LEG_JOINT else 'A'}-{numbers[design]:03d}", design)

    for robot in plan.ROBOTS:
        for joint in plan.JOINTS[robot.kind]:
            homes[robot.code, joint.code] = make(joint.unit_design)
    for design, count in plan.SPARE_MODULES.items():
        spares += [make(design) for _ in range(count)]
    return [*homes.values(), *spares], homes, spares


class _Fleet:
    """The fleet as it is on a day: where its modules are, what waits for repair, who may not run."""

    def __init__(self, seed: int) -> None:
        self._rng = Random(seed)
        self.rows = LedgerRows(self._rng)
        self._store = StoreRoom(self.rows, self._rng)
        self._bench = Workbench(self.rows, self._store, self._rng)
        modules, self._homes, self._shelf = _make_modules()
        self._sitting: dict[tuple[str, str], JointModule] = {}
        self._waiting: list[Repair] = []
        self._left_open: Repair | None = None
        self._run_days: dict[str, list[int]] = {}
        add_set_up(self.rows, modules)
        self._fit_out_first_modules()
        self._next_check = {robot.code: self._first_check(robot) for robot in plan.ROBOTS}

    def live_through(self, day: date) -> None:
        """Everything that happens on a day, in its order."""
        self._store.morning(_at(day, 8))
        self._repair_what_waits(day)
        self._join_robots(day)
        if day.weekday() < 5 and not plan.CLOSED_FROM <= day <= plan.CLOSED_TO:
            self._check_robots(day)
            self._planned_work(day)
            self._run_robots(day)
            self._store.evening(_at(day, 17, 15), last=day == plan.LAST_DAY)
        self._store_work(day)

    def _fit_out_first_modules(self) -> None:
        self._store.receive_first(plan.FIRST_LOTS, _at(plan.KIT_DAY, 10))
        for robot in plan.ROBOTS:
            if robot.prior != "new":
                continue
            for joint in plan.JOINTS[robot.kind]:
                bad = robot.code == plan.BAD_LOT_ROBOT and joint.limb in plan.BAD_LOT_LIMBS
                lot = plan.BAD_LOT if bad else plan.FIRST_DISCS.get(robot.code, "")
                module = self._homes[robot.code, joint.code]
                self._bench.fit_out(module, _at(plan.FITTING_DAY, 9), lot)
                self._put(module, robot.code, joint.code, _at(plan.FITTING_DAY, 15))
        for module in self._shelf:
            self._bench.fit_out(module, _at(plan.FITTING_DAY, 9), "DC-01")
            self._bench.place(module, _at(plan.FITTING_DAY, 15))

    def _put(self, module: JointModule, robot: str, position: str, moment: datetime) -> None:
        self._sitting[robot, position] = module
        self._bench.place(module, moment, robot, position)

    def _modules_of(self, robot: str) -> list[JointModule]:
        joints = plan.JOINTS[plan.robot(robot).kind]
        return [self._sitting[robot, joint.code] for joint in joints]

    # Bench work

    def _repair_what_waits(self, day: date) -> None:
        due = [repair for repair in self._waiting if repair.due.date() == day]
        self._waiting = [repair for repair in self._waiting if repair not in due]
        for repair in due:
            self._bench.repair(repair, repair.due)

    def _join_robots(self, day: date) -> None:
        for robot in plan.ROBOTS:
            if robot.prior == "new" or robot.joined != day:
                continue
            for joint in plan.JOINTS[robot.kind]:
                module = self._homes[robot.code, joint.code]
                self._bench.fit_inherited(module, _at(day, 8, 30), joint.turns_per_hour, robot.prior == "stated")
                self._put(module, robot.code, joint.code, _at(day, 9))

    def _first_check(self, robot: plan.PlannedRobot) -> date:
        return robot.joined + timedelta(days=whole_between(self._rng, 18, 30))

    def _check_robots(self, day: date) -> None:
        for number, robot in enumerate(plan.ROBOTS):
            last_check = plan.LAST_CHECKS[number % len(plan.LAST_CHECKS)]
            regular = self._next_check[robot.code] <= day < plan.LAST_CHECKS[0] - timedelta(days=14)
            if not regular and day != last_check:
                continue
            self._next_check[robot.code] = day + timedelta(days=whole_between(self._rng, *CHECK_EVERY_DAYS))
            broken = None if self._left_open is None else self._left_open.module
            modules = [module for module in self._modules_of(robot.code) if module is not broken]
            self._bench.check(modules, _at(day, 8, 30), _at(day, 9, 10))

    def _planned_work(self, day: date) -> None:
        for swap in plan.MODULE_SWAPS:
            if swap.day == day:
                self._swap_module(swap, _at(day, 9, 20))
        for move in plan.PART_MOVES:
            if move.day == day:
                giver = self._sitting[move.from_robot, move.position]
                taker = self._sitting[move.to_robot, move.position]
                self._bench.move_part(giver, taker, (move.slot, 1), _at(day, 9, 30))
        if day in plan.RENEWAL_MONDAYS:
            self._renew_old_discs(plan.RENEWAL_MONDAYS.index(day), _at(day, 9, 40))
        for hold in plan.HOLDS:
            if hold.since == day:
                self.rows.happened("hold", _at(day, 9, 45), "field lead", robot=hold.robot, why=hold.why)
            if hold.until == day:
                self.rows.happened("release", _at(day, 9, 45), "field lead", robot=hold.robot, why=hold.why_lifted)

    def _swap_module(self, swap: plan.ModuleSwap, moment: datetime) -> None:
        leaving = self._sitting[swap.robot, swap.position]
        coming = next(module for module in self._shelf if module.unit_design == leaving.unit_design)
        self._bench.place(leaving, moment)
        self._put(coming, swap.robot, swap.position, moment)
        self._shelf.remove(coming)
        self._shelf.append(leaving)

    def _renew_old_discs(self, week: int, moment: datetime) -> None:
        first = week * plan.RENEWAL_JOINTS_A_DAY
        for module in self._modules_of(plan.RENEWAL_ROBOT)[first : first + plan.RENEWAL_JOINTS_A_DAY]:
            old = [
                place
                for place in module.places_of("discs")
                if module.parts[place].label.revision == plan.RENEWAL_REVISION
            ]
            self._bench.renew(module, old, moment)

    def _store_work(self, day: date) -> None:
        moment = _at(day, 17, 30)
        if day == plan.BAD_LOT_SCRAPPED:
            self._store.scrap("disc", moment, lot=plan.BAD_LOT)
        if day == plan.SPOILT_DAY:
            for part_type, kept in plan.SPOILT_KEPT.items():
                self._store.scrap(part_type, moment, keep=kept)
        if day in plan.COUNTING_DAYS:
            self._store.count(_at(day, 17, 45), plan.PINS_LOST if day == plan.PINS_LOST_DAY else 0)

    # Sessions

    def _run_robots(self, day: date) -> None:
        for robot in plan.ROBOTS:
            if robot.joined > day or self._may_not_run(robot.code, day):
                continue
            if day.weekday() == 0 or robot.code not in self._run_days:
                self._run_days[robot.code] = several_of(self._rng, range(5), robot.sessions_per_week)
            if day.weekday() in self._run_days[robot.code]:
                self._run_session(robot, day)

    def _may_not_run(self, robot: str, day: date) -> bool:
        if self._left_open is not None and self._left_open.module.robot == robot:
            return True
        return any(
            hold.robot == robot and hold.since <= day and (hold.until is None or day < hold.until)
            for hold in plan.HOLDS
        )

    def _run_session(self, robot: plan.PlannedRobot, day: date) -> None:
        planned = self._planned_run(robot, day)
        broken_off = self._rng.random() < plan.BROKEN_OFF_SHARE
        if broken_off:
            planned = planned.cut_at(between(self._rng, 0.15, 0.9))
        failed, stopped = self._failures(robot.code, planned)
        run = planned.cut_at(failed[-1].share) if stopped else planned
        outcome = "stopped" if stopped else "broken off" if broken_off else "finished"
        note = one_of(self._rng, plan.BROKEN_OFF_NOTES) if outcome == "broken off" else None
        self.rows.happened(
            "session",
            run.start,
            "field lead",
            robot=robot.code,
            ended_at=run.end,
            hours=run.hours,
            impacts=run.impacts,
            outcome=outcome,
            note=note,
        )
        for module in self._modules_of(robot.code):
            module.run(run.gain(module.position))
            if run.logged:
                self._log_turns(robot.code, module.position, run)
        self._note_failures(failed, run, stopped)

    def _planned_run(self, robot: plan.PlannedRobot, day: date) -> _Run:
        quarters = 4 if day == plan.LAST_DAY else 18
        start = _at(day, 10) + timedelta(minutes=15 * whole_between(self._rng, 0, quarters))
        hours = 0.05 * whole_between(self._rng, 30, 60)
        impacts = poisson(self._rng, robot.impacts_per_hour * hours * between(self._rng, 0.6, 1.4))
        logged = robot.kind == "arm"
        turns = {
            joint.code: round(joint.turns_per_hour * hours * (between(self._rng, 0.7, 1.3) if logged else 1.0))
            for joint in plan.JOINTS[robot.kind]
        }
        return _Run(start, round(hours, 2), impacts, turns, logged)

    def _failures(self, robot: str, planned: _Run) -> tuple[list[Crossing], bool]:
        """Failures within a session in order of time; the session ends with the last of them if that stops it."""
        crossings = [
            crossing
            for module in self._modules_of(robot)
            for crossing in module.crossings(planned.gain(module.position))
        ]
        failed: list[Crossing] = []
        gone: Counter[tuple[str, str]] = Counter()
        for crossing in sorted(crossings, key=lambda crossing: crossing.share):
            failed.append(crossing)
            slot = crossing.place[0]
            gone[crossing.module.code, slot] += 1
            stops_at = slot_of(crossing.module.unit_design, slot).stops_at
            enough = gone[crossing.module.code, slot] == stops_at
            if crossing.mode.finding == "stopped" or crossing.jams or enough:
                return failed, True
        return failed, False

    def _log_turns(self, robot: str, position: str, run: _Run) -> None:
        self.rows.happened(
            "session_use",
            run.start,
            "import",
            robot=robot,
            session=run.start,
            position=position,
            turns=run.turns[position],
            basis="from log",
        )

    def _note_failures(self, failed: list[Crossing], run: _Run, stopped: bool) -> None:
        repairs = []
        bench_time = self._bench_time(run.end)
        session = run.start.isoformat()
        for number, crossing in enumerate(failed, start=1):
            known = {"session": session}
            if stopped and number == len(failed):
                known["how_found"] = "during the session"
                if not crossing.jams:
                    known["finding"] = "stopped"
            self._bench.note_failure(crossing.module, crossing.place, crossing.mode, run.end, **known)
            repairs.append(Repair(bench_time, crossing.module, crossing.place, "failed"))
        if stopped and failed[-1].jams:
            repairs.append(self._jammed_disc(failed[-1], run, bench_time))
        self._plan_repairs(repairs, run, stopped)

    def _jammed_disc(self, pin: Crossing, run: _Run, bench_time: datetime) -> Repair:
        """Note the disc that a snapped pin broke."""
        place = one_of(self._rng, pin.module.places_of(JAMMED_SLOT))
        mode = next(mode for mode in true_modes("disc", "C") if mode.mode == JAMMED_MODE)
        self._bench.note_failure(
            pin.module,
            place,
            mode,
            run.end,
            cause="another part's failure",
            session=run.start.isoformat(),
            broken_by_slot=pin.place[0],
            broken_by_place=str(pin.place[1]),
        )
        return Repair(bench_time, pin.module, place, "broken by another part")

    def _bench_time(self, end: datetime) -> datetime:
        if end.time() <= LATEST_SAME_DAY_REPAIR:
            return end + timedelta(minutes=30)
        return _at(end.date() + timedelta(days=1), 8, 15)

    def _plan_repairs(self, repairs: list[Repair], run: _Run, stopped: bool) -> None:
        held = {hold.robot for hold in plan.HOLDS if hold.until is None}
        late = run.start.date() >= plan.LEFT_OPEN_FROM
        if self._left_open is None and stopped and late and len(repairs) == 1:
            robot = plan.robot(repairs[0].module.robot)
            if robot.kind == "walker" and robot.code not in held:
                self._left_open = repairs[0]
                return
        for repair in repairs:
            if repair.due.date() == run.start.date():
                self._bench.repair(repair, repair.due)
            else:
                self._waiting.append(repair)
