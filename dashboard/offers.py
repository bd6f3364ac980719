"""A History in; what can be said of each joint of one robot, out: its parts, their modes, the spares at hand."""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from fleet.forecasts.planned_use import RobotPlan
from fleet.records.history import History
from fleet.records.set_up import Lot, PartMode, PartType, Position, Revision, Robot, Slot


@dataclass(frozen=True)
class ModeOffer:
    """A way in which a part fails, in plain words."""

    record_id: str
    code: str
    label: str


@dataclass(frozen=True)
class LotOffer:
    """A lot of spares and how many are left of it; `remark` says what is odd about it."""

    record_id: str
    code: str
    left: int
    remark: str


@dataclass(frozen=True)
class PartOffer:
    """The parts of one slot: `count` like parts of one type."""

    slot: str
    code: str
    label: str
    count: int
    modes: tuple[ModeOffer, ...]
    lots: tuple[LotOffer, ...]


@dataclass(frozen=True)
class JointOffer:
    """One joint of a robot and the parts in it."""

    position: str
    code: str
    label: str
    parts: tuple[PartOffer, ...]


@dataclass(frozen=True)
class Planned:
    """What the robot's plan says of one session."""

    hours: float
    impacts: int


def in_order(code: str) -> list[tuple[int, str]]:
    """Sorts codes as people count them: W2 before W10."""
    return [(int(piece), "") if piece.isdecimal() else (-1, piece) for piece in re.findall(r"\d+|\D+", code)]


def planned_of(plan: RobotPlan) -> Planned:
    """One session as planned; where nobody planned, what the robot usually does, to the quarter of an hour."""
    length = plan.session_hours if plan.stated else max(round(plan.session_hours * 4) / 4, 0.25)
    return Planned(length, round(length * plan.impacts_per_hour))


def impact_choices(planned: int) -> list[int]:
    """Numbers of hard impacts to choose from: few, or round the plan where the plan is more than a few."""
    if planned < 5:
        return [0, 1, 2, 3, 4]
    return sorted({0, *(round(planned * share / 4) for share in (2, 3, 4, 5, 6))})


def joint_offers(
    history: History, robot: Robot, left: Mapping[str, int], worn_first: Mapping[str, Sequence[str]]
) -> tuple[JointOffer, ...]:
    """The joints of a robot and their parts, the most worn first, the rest from the trunk outward.

    `left` is how many spares are left of each lot; `worn_first` holds positions, and the slots of each, the most worn
    first. All by record id.
    """
    held = [position for position in history.of(Position).values() if position.robot == robot.record_id]
    place = {position: at for at, position in enumerate(worn_first)}
    held.sort(key=lambda joint: (place.get(joint.record_id, len(place)), joint.rank, joint.side, joint.code))
    by_design = {design: _parts(history, design, left) for design in {joint.unit_design for joint in held}}
    return tuple(
        JointOffer(
            at.record_id, at.code, at.label, _ordered(by_design[at.unit_design], worn_first.get(at.record_id, ()))
        )
        for at in held
    )


def _ordered(parts: Sequence[PartOffer], worn_first: Sequence[str]) -> tuple[PartOffer, ...]:
    place = {slot: at for at, slot in enumerate(worn_first)}
    return tuple(sorted(parts, key=lambda part: place.get(part.slot, len(place))))


def _parts(history: History, design: str, left: Mapping[str, int]) -> tuple[PartOffer, ...]:
    slots = [slot for slot in history.of(Slot).values() if slot.unit_design == design]
    times = Counter(slot.part_type for slot in slots)
    offers = []
    for slot in slots:
        part_type = history.one(PartType, slot.part_type)
        label = part_type.label if times[slot.part_type] == 1 else f"{part_type.label}, {slot.code}"
        modes = tuple(
            ModeOffer(mode.record_id, mode.code, mode.label)
            for mode in history.of(PartMode).values()
            if mode.part_type == slot.part_type
        )
        lots = _lots(history, slot.part_type, left)
        offers.append(PartOffer(slot.record_id, slot.code, label, slot.count, modes, lots))
    return tuple(offers)


def _lots(history: History, part_type: str, left: Mapping[str, int]) -> tuple[LotOffer, ...]:
    """Lots with something left: the current revision first, then the ordinary ones, then the fullest."""
    found = []
    for lot in history.of(Lot).values():
        if lot.part_type != part_type or left.get(lot.record_id, 0) < 1:
            continue
        revision = history.of(Revision).get(lot.revision) if lot.revision is not None else None
        superseded = revision is not None and revision.superseded
        remarks = [f"revision {revision.code}"] if revision is not None else []
        remarks += ["superseded"] if superseded else []
        remarks += ["kept apart"] if lot.kept_apart else []
        offer = LotOffer(lot.record_id, lot.code, left[lot.record_id], ", ".join(remarks))
        found.append((superseded, lot.kept_apart, -offer.left, offer.code, offer))
    return tuple(entry[-1] for entry in sorted(found, key=lambda entry: entry[:-1]))
