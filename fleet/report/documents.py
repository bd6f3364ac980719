"""From a read-out to plain documents for `--json`: the keys below are kept, and more may come.

Every document has `as_of`, `write_number` and `caution`. Chances are from 0 to 1 with `low` and `high`, the range in
which the chance itself is known 8 times in 10; ages are in running hours unless a clock is named.
"""

from __future__ import annotations

from typing import Any

from fleet.forecasts.next_session import JointOutlook, RobotOutlook
from fleet.forecasts.odds import Chance
from fleet.forecasts.part_outlook import AgeRange
from fleet.lives.ages import Ages
from fleet.lives.part_data import LifeKey
from fleet.pipeline import ReadOut
from fleet.plans.spare_list import SpareNeed
from fleet.records.history import History
from fleet.records.set_up import Lot, PartType, Position, Revision, Robot, Slot, Unit

ODDS_CAUTION = "an estimate, no safety check: inspect today"
GENERAL_CAUTION = (
    "not for life-critical, medical, people-carrying or safety functions; local codes and licensed practice come first"
)
Document = dict[str, Any]


def _head(history: History, caution: str) -> Document:
    return {"as_of": history.as_of.isoformat(), "write_number": history.write_number, "caution": caution}


def _chance(chance: Chance | None) -> Document | None:
    if chance is None:
        return None
    return {"mean": round(chance.mean, 6), "low": round(chance.low, 6), "high": round(chance.high, 6)}


def _age(age: AgeRange) -> Document:
    return {"middle": round(age.middle, 3), "low": round(age.low, 3), "high": round(age.high, 3)}


def _number(value: float) -> float | None:
    """JSON knows no infinity."""
    return round(value, 6) if abs(value) < float("inf") else None


def odds_document(read_out: ReadOut) -> Document:
    """`fleet` and `robots` (code, hours, held, finishes, mostly_assumption, failures_seen, joints)."""
    session = read_out.next_session
    return {
        **_head(read_out.history, ODDS_CAUTION),
        "cautions": list(read_out.cautions),
        "fleet": {"finishes": _chance(session.fleet)},
        "robots": [_robot(robot) for robot in session.robots],
    }


def _robot(robot: RobotOutlook) -> Document:
    return {
        "robot": robot.code,
        "label": robot.label,
        "hours": robot.hours,
        "held": None if robot.held is None else robot.held.why,
        "finishes": _chance(robot.finishes),
        "mostly_assumption": robot.mostly_assumption,
        "failures_seen": robot.failures_seen,
        "ages_assumed": robot.ages_assumed,
        "parts": robot.parts,
        "joints": [_joint(joint) for joint in robot.joints],
    }


def _joint(joint: JointOutlook) -> Document:
    return {
        "joint": joint.code,
        "label": joint.label,
        "module": joint.unit,
        "word": joint.word,
        "held": None if joint.held is None else joint.held.why,
        "stops": _chance(joint.stops),
        "parts": [
            {
                "slot": slot.code,
                "part": slot.label,
                "count": slot.running,
                "oldest_hours": round(max(age.get("hours", 0.0) for age in slot.ages), 3),
                "age_assumed": slot.age_assumed,
                "stops": _chance(slot.stops),
                "records": list(slot.record_ids),
            }
            for slot in joint.slots
        ],
    }


def spares_document(read_out: ReadOut) -> Document:
    """`parts`: on_hand, on_order, needed, short, chance_enough, expected, short_from_week, weeks, lots."""
    return {
        **_head(read_out.history, GENERAL_CAUTION),
        "cautions": list(read_out.cautions),
        "target": read_out.question.target,
        "parts": [_spare(spare) for spare in read_out.spares],
    }


def _spare(spare: SpareNeed) -> Document:
    return {
        "part_type": spare.code,
        "label": spare.label,
        "printed": spare.printed,
        "fitted": spare.fitted,
        "waiting": spare.waiting,
        "on_hand": spare.on_hand,
        "on_order": spare.on_order,
        "orders": [
            {"order": order.code, "quantity": order.quantity, "due": order.due_at.isoformat()} for order in spare.orders
        ],
        "printing": spare.printing,
        "set_aside": spare.set_aside,
        "needed": spare.needed,
        "short": spare.short,
        "short_by_end": spare.short_by_end,
        "chance_enough": round(spare.chance_enough, 6),
        "expected": round(spare.expected, 6),
        "days_until_restocked": spare.days_until_restocked,
        "short_from_week": spare.short_from_week,
        "failures_seen": spare.failures_seen,
        "mostly_assumption": spare.mostly_assumption,
        "weeks": [
            {"week": week.week, "expected": round(week.expected, 6), "low": week.low, "high": week.high}
            for week in spare.weeks
        ],
        "lots": [{"lot": lot.code, "on_hand": lot.on_hand, "superseded": lot.superseded} for lot in spare.lots],
    }


def plates_document(read_out: ReadOut) -> Document:
    """`needs`, `plates` (by printer, with start, end, hours, grams, due, late) and `shortages`."""
    plates = read_out.plates
    return {
        **_head(read_out.history, "unattended printing: see the printer's manual and local fire rules"),
        "needs": [
            {
                "part_type": need.part,
                "label": need.label,
                "revision": need.revision,
                "good_wanted": need.good_wanted,
                "due": need.due.isoformat(),
                "yield": {"good": need.good, "started": need.started, "judged": need.yield_judged},
            }
            for need in plates.needs
        ],
        "plates": [_plain(plate) for plate in plates.plan.plates],
        "late": [_plain(late) for late in plates.plan.late],
        "shortages": list(plates.plan.shortages),
    }


def _plain(entry: Any) -> Any:
    """A result as JSON can hold it."""
    import dataclasses

    if dataclasses.is_dataclass(entry) and not isinstance(entry, type):
        return {field.name: _plain(getattr(entry, field.name)) for field in dataclasses.fields(entry)}
    if isinstance(entry, list | tuple):
        return [_plain(value) for value in entry]
    return entry.isoformat() if hasattr(entry, "isoformat") else entry


def lives_document(read_out: ReadOut) -> Document:
    """`lives`: failures, running, left_out, b10, b50, data_share, replacement, and `modes` in their own clocks."""
    advice = {entry.life: entry.advice for entry in read_out.replacements}
    lives = []
    for key, life in read_out.lives.items():
        outlook, replace = read_out.outlooks[key], advice.get(key)
        lives.append(
            {
                **_key(read_out.history, key),
                "label": life.label,
                "failures": life.data.failures,
                "running": life.data.running,
                "removed_good": life.data.suspended,
                "left_out_age_unknown": life.data.left_out,
                "left_out_failed_before_use": life.data.no_use,
                "b10_hours": _age(outlook.b10),
                "b50_hours": _age(outlook.b50),
                "data_share": round(life.data_share, 4),
                "mostly_assumption": life.mostly_assumption,
                "belief_asked": life.asked,
                "replacement": None
                if replace is None
                else {
                    "verdict": replace.verdict,
                    "age_hours": _number(replace.age),
                    "saving": round(replace.saving, 4),
                    "saving_low": round(replace.saving_low, 4),
                    "saving_high": round(replace.saving_high, 4),
                },
                "modes": [
                    {
                        "mode": mode.mode.code,
                        "label": mode.mode.label,
                        "clock": mode.mode.clock,
                        "failures": mode.unfit.failures,
                        "left_out_age_unknown": mode.data.left_out,
                        "b10": {q: round(mode.unfit.b_life_quantile(10, p), 3) for q, p in _QUANTILES.items()},
                        "data_share": round(mode.unfit.data_share, 4),
                    }
                    for mode in life.modes
                ],
            }
        )
    return {**_head(read_out.history, GENERAL_CAUTION), "lives": lives}


_QUANTILES = {"low": 0.05, "middle": 0.5, "high": 0.95}


def _key(history: History, key: LifeKey) -> Document:
    return {
        "part_type": history.one(PartType, key.part_type).code,
        "revision": None if key.revision is None else history.one(Revision, key.revision).code,
        "lot_apart": None if key.apart_lot is None else history.one(Lot, key.apart_lot).code,
    }


def ages_document(history: History, ages: Ages, robot: str | None = None, part: str | None = None) -> Document:
    """`parts`: robot, joint, module, slot, part_type, places, fitted_at, known, and `age` by clock."""
    parts = [entry for span in ages.spans if span.running and (entry := _age_entry(history, ages, span)) is not None]
    kept = [
        entry
        for entry in parts
        if (robot is None or entry["robot"] == robot) and (part is None or part in (entry["part_type"], entry["slot"]))
    ]
    kept.sort(key=lambda entry: (entry["robot"] or "~", entry["joint"] or "", entry["slot"], entry["places"]))
    return {**_head(history, GENERAL_CAUTION), "parts": kept}


def _age_entry(history: History, ages: Ages, span: Any) -> Document:
    fitment = span.fitment
    slot = history.one(Slot, fitment.slot)
    position_id = ages.whereabouts.position_of(fitment.unit, history.as_of)
    position = None if position_id is None else history.one(Position, position_id)
    return {
        "robot": None if position is None else history.one(Robot, position.robot).code,
        "joint": None if position is None else position.code,
        "module": history.one(Unit, fitment.unit).code,
        "slot": slot.code,
        "part_type": history.one(PartType, slot.part_type).code,
        "places": list(span.places),
        "count": span.count,
        "fitted_at": fitment.happened_at.isoformat(),
        "known": span.known,
        "age": {clock: round(value, 4) for clock, value in (span.age if span.known else span.use).items()},
        "record": fitment.record_id,
    }
