"""From lives, present ages and plans to the odds that each joint, robot and the fleet finish the next session."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from fleet.fits.part_lives import PartLife
from fleet.forecasts.life_draws import LifeDraws
from fleet.forecasts.odds import Chance, PartsAtRisk, SessionOdds, SlotAtRisk, session_odds
from fleet.forecasts.parts_now import SlotNow
from fleet.forecasts.planned_use import RobotPlan, joint_use, robots_in_service
from fleet.lives.ages import Age, Ages
from fleet.lives.part_data import LifeKey
from fleet.records.history import History
from fleet.records.ledger import Hold, Release
from fleet.records.set_up import PartType, Position, Robot, Unit

SETTLED_BELOW = 0.03
DUE_ABOVE = 0.10


@dataclass(frozen=True)
class Held:
    """Why something must not run; `hold` is the record to release, None where a part waits for its spare.

    `slot` and `place` say where a spare would end it.
    """

    why: str
    record_id: str
    hold: str | None
    slot: str | None = None
    place: int | None = None


@dataclass(frozen=True)
class SlotOutlook:
    """One slot of a joint: its parts, their age, and the chance that they stop the session."""

    slot: str
    code: str
    label: str
    count: int
    running: int
    ages: tuple[Age, ...]
    age_assumed: bool
    life: LifeKey
    stops: Chance
    failures_seen: int
    mostly_assumption: bool
    record_ids: tuple[str, ...]


@dataclass(frozen=True)
class JointOutlook:
    """One joint: the chance that it stops the session, and the word for that."""

    position: str
    code: str
    label: str
    limb: str
    side: str
    rank: int
    unit: str
    held: Held | None
    stops: Chance
    word: str
    slots: tuple[SlotOutlook, ...]


@dataclass(frozen=True)
class RobotOutlook:
    """One robot: its odds of finishing, unless it is held. Joints: the one most likely to stop it first.

    Of its `parts`, `ages_assumed` are of an age that nobody knows.
    """

    robot: str
    code: str
    label: str
    hours: float
    held: Held | None
    finishes: Chance | None
    failures_seen: int
    mostly_assumption: bool
    ages_assumed: int
    parts: int
    joints: tuple[JointOutlook, ...]


@dataclass(frozen=True)
class NextSession:
    """The fleet before its next session: held robots first, then by odds, lowest first."""

    robots: tuple[RobotOutlook, ...]
    fleet: Chance | None


def next_session(
    history: History,
    ages: Ages,
    slots: Sequence[SlotNow],
    lives: Mapping[LifeKey, PartLife],
    draws: Mapping[LifeKey, LifeDraws],
    plans: Mapping[str, RobotPlan],
) -> NextSession:
    """Odds of finishing the next session without a stop.

    Parameters
    ----------
    draws : mapping of LifeKey to LifeDraws
        Joint draws of the *stop* endpoint of each life.
    plans : mapping of robot record id to RobotPlan
    """
    tracked = [slot for slot in slots if slot.running and all(part.life in draws for part in slot.running)]
    use = {slot.position.record_id: _use(ages, slot.position, plans) for slot in slots}
    at_risk = [_slot_at_risk(slot, use[slot.position.record_id]) for slot in tracked]
    held = _held(history, slots)
    named = {key.name: life for key, life in draws.items()}
    odds = session_odds(at_risk, named)
    held_robots = {slot.position.robot for slot in slots if slot.position.robot in held or slot.unit in held}
    running = [slot for slot in at_risk if slot.robot not in held_robots]
    fleet = session_odds(running, named).fleet if running else None
    by_robot: dict[str, list[SlotNow]] = defaultdict(list)
    for slot in slots:
        by_robot[slot.position.robot].append(slot)
    robots = [
        _robot_outlook(history, robot, plans[robot.record_id], by_robot[robot.record_id], odds, held, lives)
        for robot in robots_in_service(history)
    ]
    order = sorted(robots, key=lambda r: (r.held is None, 2.0 if r.finishes is None else r.finishes.mean, r.code))
    return NextSession(tuple(order), fleet)


def word_for(stops: float) -> str:
    """settled, wearing or due, by the chance that a joint stops the planned session."""
    return "settled" if stops < SETTLED_BELOW else "wearing" if stops <= DUE_ABOVE else "due"


def _use(ages: Ages, position: Position, plans: Mapping[str, RobotPlan]) -> dict[str, float]:
    plan = plans[position.robot]
    return joint_use(ages, position, plan, plan.session_hours)


def _slot_at_risk(slot: SlotNow, use: Mapping[str, float]) -> SlotAtRisk:
    parts = tuple(PartsAtRisk(part.life.name, part.span.count, part.age, use) for part in slot.running)
    # What has failed already counts towards the number that stops the robot.
    gone = sum(span.count for span in slot.failed) + slot.empty_places
    stops_at = None if slot.slot.stops_at is None else max(1, slot.slot.stops_at - gone)
    return SlotAtRisk(slot.position.robot, slot.position.record_id, slot.slot.record_id, stops_at, parts)


def _held(history: History, slots: Sequence[SlotNow]) -> dict[str, Held]:
    """By record id of a robot or module: why it is held. A failed part still in, or an empty place, holds it too."""
    lifted = {release.hold for release in history.of(Release).values()}
    held: dict[str, Held] = {}
    for slot in slots:
        label = history.one(PartType, slot.slot.part_type).label
        for span in slot.failed:
            assert span.failure is not None
            when = span.failure.happened_at.astimezone(history.zone)
            why = f"{label} failed {when:%Y-%m-%d} and is not replaced yet"
            held[slot.unit] = Held(why, span.failure.record_id, None, slot.slot.record_id, span.places[0])
        if slot.empty_places and not slot.failed:
            why = f"{label}: {slot.empty_places} of {slot.slot.count} missing"
            held[slot.unit] = Held(why, slot.slot.record_id, None)
    for hold in history.of(Hold).values():
        if hold.record_id not in lifted:
            held[hold.robot or hold.unit or ""] = Held(hold.why, hold.record_id, hold.record_id)
    return held


def _robot_outlook(
    history: History,
    robot: Robot,
    plan: RobotPlan,
    slots: Sequence[SlotNow],
    odds: SessionOdds,
    held: Mapping[str, Held],
    lives: Mapping[LifeKey, PartLife],
) -> RobotOutlook:
    by_joint: dict[str, list[SlotNow]] = defaultdict(list)
    for slot in slots:
        by_joint[slot.position.record_id].append(slot)
    joints = [_joint_outlook(history, held_slots, odds, held, lives) for held_slots in by_joint.values()]
    joints.sort(key=lambda joint: (joint.held is None, -joint.stops.mean, joint.code))
    why = held.get(robot.record_id) or next((joint.held for joint in joints if joint.held is not None), None)
    finishes = odds.robot.get(robot.record_id) if why is None else None
    outlooks = [slot for joint in joints for slot in joint.slots]
    share = _assumed_share(outlooks)
    return RobotOutlook(
        robot=robot.record_id,
        code=robot.code,
        label=robot.label,
        hours=plan.session_hours,
        held=why,
        finishes=finishes,
        failures_seen=sum({slot.life: slot.failures_seen for slot in outlooks}.values()),
        mostly_assumption=share > 0.5,
        ages_assumed=sum(part.span.count for slot in slots for part in slot.running if part.age_assumed),
        parts=sum(part.span.count for slot in slots for part in slot.running),
        joints=tuple(joints),
    )


def _assumed_share(slots: Sequence[SlotOutlook]) -> float:
    """Share of a robot's chance of a stop that comes from parts whose life, or age, is mostly assumption."""
    total = sum(slot.stops.mean for slot in slots)
    assumed = sum(slot.stops.mean for slot in slots if slot.mostly_assumption or slot.age_assumed)
    return assumed / total if total > 0 else 0.0


def _joint_outlook(
    history: History,
    slots: Sequence[SlotNow],
    odds: SessionOdds,
    held: Mapping[str, Held],
    lives: Mapping[LifeKey, PartLife],
) -> JointOutlook:
    position, unit = slots[0].position, slots[0].unit
    outlooks = [_slot_outlook(history, slot, odds, lives) for slot in slots if slot.running]
    stops = _flipped(odds.joint.get((position.robot, position.record_id)))
    why = held.get(unit)
    return JointOutlook(
        position=position.record_id,
        code=position.code,
        label=position.label,
        limb=position.limb,
        side=position.side,
        rank=position.rank,
        unit=history.one(Unit, unit).code,
        held=why,
        stops=stops,
        word="held" if why is not None else word_for(stops.mean),
        slots=tuple(sorted(outlooks, key=lambda slot: -slot.stops.mean)),
    )


def _slot_outlook(history: History, slot: SlotNow, odds: SessionOdds, lives: Mapping[LifeKey, PartLife]) -> SlotOutlook:
    key = slot.running[0].life
    life = lives.get(key)
    return SlotOutlook(
        slot=slot.slot.record_id,
        code=slot.slot.code,
        label=history.one(PartType, slot.slot.part_type).label,
        count=slot.slot.count,
        running=sum(part.span.count for part in slot.running),
        ages=tuple(part.age for part in slot.running),
        age_assumed=any(part.age_assumed for part in slot.running),
        life=key,
        stops=_flipped(odds.slot.get((slot.position.robot, slot.position.record_id, slot.slot.record_id))),
        failures_seen=0 if life is None else life.data.failures_seen,
        mostly_assumption=life is None or life.mostly_assumption,
        record_ids=tuple(part.span.fitment.record_id for part in slot.running),
    )


def _flipped(finishes: Chance | None) -> Chance:
    """From the chance of finishing to the chance of a stop."""
    if finishes is None:
        return Chance(0.0, 0.0, 0.0)
    return Chance(1 - finishes.mean, 1 - finishes.high, 1 - finishes.low)
