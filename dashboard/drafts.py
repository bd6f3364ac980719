"""What was tapped on the page after a session in; what is still missing, the Save label and the entry to write, out."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from datetime import UTC, date, datetime, time, tzinfo
from typing import Any

from dashboard.offers import JointOffer, LotOffer, ModeOffer, PartOffer
from fleet.report.wording import NO_BREAK, count, day, hours
from fleet.store.entries import Happened, PartEntry, SessionEntry

Values = Mapping[str, Any]

OTHER, NONE_FITTED = "other", "none"
HAPPENED: tuple[Happened, ...] = ("failed", "found worn", "replaced while good")
BROKEN_OFF = "broken off"


@dataclass(frozen=True)
class PartDraft:
    """One part with something to say; None is what has not been said yet."""

    part: PartOffer
    mode: ModeOffer | None
    place: int | None
    lot: LotOffer | None
    spare_said: bool


@dataclass(frozen=True)
class JointDraft:
    """One joint with something to say."""

    joint: JointOffer
    happened: Happened | None
    parts: tuple[PartDraft, ...]


@dataclass(frozen=True)
class SessionDraft:
    """A session as far as it has been said; `ended` holds two moments where the clock showed the time twice."""

    hours: float | None
    impacts: int | None
    joints: tuple[JointDraft, ...]
    another_open: bool
    late: bool
    ended: tuple[datetime, ...]
    broken_off: bool
    note: str | None


def field(joint: JointOffer, *rest: str) -> str:
    """The name of one choice, in the address and among the values."""
    return ".".join((joint.code, *rest))


def read_draft(values: Values, joints: Sequence[JointOffer], zone: tzinfo) -> SessionDraft:
    """The draft that these values make: name of a choice -> what was chosen."""
    picked = [*(values.get("joints") or ()), *(values.get("others") or ())]
    return SessionDraft(
        hours=_hours(values),
        impacts=_impacts(values),
        joints=tuple(_joint(values, joint) for joint in joints if joint.code in picked),
        another_open=OTHER in picked and not values.get("others"),
        late=bool(values.get("late")),
        ended=_ended(values, zone),
        broken_off=values.get("outcome") == BROKEN_OFF,
        note=(str(values.get("note") or "").strip() or None),
    )


def _hours(values: Values) -> float | None:
    said = values.get("hours")
    if said is None:
        return None
    return values.get("hours.other") if said == OTHER else float(said)


def _impacts(values: Values) -> int | None:
    said = values.get("impacts")
    if said is None:
        return None
    return values.get("impacts.other") if said == OTHER else int(said)


def _joint(values: Values, joint: JointOffer) -> JointDraft:
    happened = values.get(field(joint, "what"))
    parts = []
    for part in joint.parts:
        if happened == "replaced while good":
            if part.code in (values.get(field(joint, "parts")) or ()):
                parts.append(_part(values, joint, part, None))
            continue
        code = values.get(field(joint, part.code, "mode"))
        mode = next((offer for offer in part.modes if offer.code == code), None)
        if mode is not None:
            parts.append(_part(values, joint, part, mode))
    return JointDraft(joint, happened if happened in HAPPENED else None, tuple(parts))


def _part(values: Values, joint: JointOffer, part: PartOffer, mode: ModeOffer | None) -> PartDraft:
    said = values.get(field(joint, part.code, "lot"))
    lot = next((offer for offer in part.lots if offer.code == said), None)
    place = 1 if part.count == 1 else values.get(field(joint, part.code, "place"))
    return PartDraft(part, mode, None if place is None else int(place), lot, said is not None)


def moments_of(on: date, at: time, zone: tzinfo) -> tuple[datetime, ...]:
    """The moments at which a clock in this zone showed this time: one, two in the night it is set back, or none."""
    moments = {datetime.combine(on, at, zone).replace(fold=fold).astimezone(UTC) for fold in (0, 1)}
    shown = datetime.combine(on, at)
    return tuple(sorted(moment for moment in moments if moment.astimezone(zone).replace(tzinfo=None) == shown))


def _ended(values: Values, zone: tzinfo) -> tuple[datetime, ...]:
    if not values.get("late") or values.get("day") is None or values.get("clock") is None:
        return ()
    found = moments_of(values["day"], values["clock"], zone)
    if len(found) == 2 and values.get("which") in ("first", "second"):
        return (found[0] if values["which"] == "first" else found[1],)
    return found


def missing(draft: SessionDraft) -> list[str]:
    """What must still be said before this can be saved, one short phrase each."""
    phrases = []
    if draft.hours is None:
        phrases.append("say how many hours it ran")
    if draft.impacts is None:
        phrases.append("say how many hard impacts it took")
    if draft.another_open:
        phrases.append("choose the other joint, or take it off the list")
    for joint in draft.joints:
        phrases += [f"{joint.joint.label}: {phrase}" for phrase in _missing_of(joint)]
    if draft.late and len(draft.ended) != 1:
        phrases.append("say when it ended" if not draft.ended else "say which of the two it was")
    return phrases


def _missing_of(draft: JointDraft) -> list[str]:
    if draft.happened is None:
        return ["say what happened"]
    if not draft.parts:
        return ["say which part" if draft.happened == "replaced while good" else "say how"]
    phrases = []
    for part in draft.parts:
        if part.place is None:
            phrases.append(f"say which {part.part.label} of the {part.part.count}")
        if not part.spare_said:
            phrases.append(f"say which spare {part.part.label} was put in")
    return phrases


def save_label(draft: SessionDraft, zone: tzinfo) -> str:
    """What the Save button will save."""
    parts = sum(len(joint.parts) for joint in draft.joints)
    said = [
        hours(draft.hours) if draft.hours is not None else f"?{NO_BREAK}h",
        count(draft.impacts, "impact") if draft.impacts is not None else f"?{NO_BREAK}impacts",
        count(parts, "part") if draft.joints else "all parts fine",
    ]
    if draft.broken_off:
        said.append("broken off")
    if draft.late and len(draft.ended) == 1:
        said.append(f"on {day(draft.ended[0], zone)}")
    return f"Save {', '.join(said)}"


def entry_of(draft: SessionDraft, robot: str) -> SessionEntry:
    """The entry to write, once nothing is missing."""
    assert draft.hours is not None and draft.impacts is not None
    return SessionEntry(
        robot=robot,
        hours=draft.hours,
        impacts=draft.impacts,
        ended_at=draft.ended[0] if draft.late else None,
        parts=tuple(_part_entry(joint, part) for joint in draft.joints for part in joint.parts),
        note=draft.note,
        broken_off=draft.broken_off,
    )


def _part_entry(joint: JointDraft, part: PartDraft) -> PartEntry:
    assert joint.happened is not None and part.place is not None
    return PartEntry(
        position=joint.joint.position,
        slot=part.part.slot,
        happened=joint.happened,
        place=part.place,
        mode=None if part.mode is None else part.mode.record_id,
        lot=None if part.lot is None else part.lot.record_id,
    )
