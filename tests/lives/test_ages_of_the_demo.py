"""Every age in the invented fleet, worked out a second time by plain loops over sessions and stays."""

from __future__ import annotations

from collections import defaultdict
from dataclasses import dataclass
from datetime import datetime

import pytest

from fleet.lives.ages import Ages, PartSpan, ages_of
from fleet.records.history import History
from fleet.records.ledger import Failure, Fitment, Placement, Removal, Session, SessionUse
from fleet.records.set_up import Position

CLOCKS = ("hours", "load_hours", "turns", "impacts")
Use = dict[str, float]


@pytest.fixture(scope="module")
def ages(demo_history: History) -> Ages:
    return ages_of(demo_history)


@dataclass
class Stay:
    position: str | None
    start: datetime
    end: datetime


class PlainAges:
    """Ages the slow way: for a part, every session of every joint its module sat in while it was fitted."""

    def __init__(self, history: History) -> None:
        self.history = history
        self.stays = self._stays()
        self.sessions: dict[str, list[Session]] = defaultdict(list)
        for session in history.of(Session).values():
            self.sessions[session.robot].append(session)
        self.stated = {(use.session, use.position): use for use in history.of(SessionUse).values()}

    def _stays(self) -> dict[str, list[Stay]]:
        stays: dict[str, list[Stay]] = defaultdict(list)
        placements = sorted(self.history.of(Placement).values(), key=lambda p: (p.happened_at, p.sequence))
        for placed in placements:
            for unit, held in stays.items():
                leaves = unit == placed.unit or (placed.position is not None and held[-1].position == placed.position)
                if held[-1].end == self.history.as_of and leaves:
                    held[-1].end = placed.happened_at
                    if unit != placed.unit:
                        held.append(Stay(None, placed.happened_at, self.history.as_of))
            stays[placed.unit].append(Stay(placed.position, placed.happened_at, self.history.as_of))
        return stays

    def use(self, unit: str, start: datetime, end: datetime) -> Use:
        """What a module gathered between two moments."""
        total = dict.fromkeys(CLOCKS, 0.0)
        for stay in self.stays[unit]:
            since, until = max(start, stay.start), min(end, stay.end)
            if stay.position is None or until <= since:
                continue
            position = self.history.one(Position, stay.position)
            for session in self.sessions[position.robot]:
                within = min(until, session.ended_at) - max(since, session.happened_at)
                if within.total_seconds() <= 0:
                    continue
                share = within / (session.ended_at - session.happened_at)
                for clock, gained in self._gained(session, position).items():
                    total[clock] += share * gained
        return total

    def _gained(self, session: Session, position: Position) -> Use:
        gained = {
            "hours": session.run_seconds / 3600,
            "load_hours": session.run_seconds / 3600,
            "turns": session.run_seconds / 3600 * position.turns_per_hour,
            "impacts": float(session.impacts),
        }
        stated = self.stated.get((session.record_id, position.record_id))
        if stated is not None and stated.turns is not None:
            gained["turns"] = float(stated.turns)
        return gained

    def entry(self, fitment: Fitment) -> Use | None:
        """Age of a part when it was fitted; None if nobody knows."""
        if fitment.comes_from is not None:
            source = self.history.one(Fitment, fitment.comes_from)
            before = self.entry(source)
            if before is None:
                return None
            (out,) = (r for r in self.history.of(Removal).values() if r.fitment == source.record_id)
            gained = self.use(source.unit, source.happened_at, out.happened_at)
            return {clock: before[clock] + gained[clock] for clock in before}
        if fitment.prior == "unknown":
            return None
        if fitment.prior == "new":
            return dict.fromkeys(CLOCKS, 0.0)
        stated = {
            "hours": fitment.prior_run_seconds and fitment.prior_run_seconds / 3600,
            "load_hours": fitment.prior_load_seconds and fitment.prior_load_seconds / 3600,
            "turns": fitment.prior_turns,
            "impacts": fitment.prior_impacts,
        }
        return {clock: float(value) for clock, value in stated.items() if value is not None}

    def end(self, fitment: Fitment, place: int) -> datetime:
        """When the part in one place failed, else was taken out, else now."""
        failed = [
            failure.happened_at
            for failure in self.history.of(Failure).values()
            if failure.fitment == fitment.record_id and failure.place in (None, place)
        ]
        out = [
            removal.happened_at
            for removal in self.history.of(Removal).values()
            if removal.fitment == fitment.record_id and removal.place in (None, place)
        ]
        return min([*failed, *out, self.history.as_of])


def test_every_age_agrees_with_plain_loops_over_sessions_and_stays(demo_history: History, ages: Ages) -> None:
    plain = PlainAges(demo_history)
    off = [worst for span in ages.spans if (worst := _disagreement(plain, span)) > 1e-6]
    assert len(ages.spans) > 1500
    assert off == []


def _disagreement(plain: PlainAges, span: PartSpan) -> float:
    fitment = span.fitment
    entry = plain.entry(fitment)
    assert span.known is (entry is not None)
    if entry is None:
        assert span.age == span.entry == {}
        entry = {}
    end = plain.end(fitment, span.places[0])
    use = plain.use(fitment.unit, fitment.happened_at, end)
    assert set(span.age) - {"days"} == set(entry)
    found = [abs(span.use[clock] - use[clock]) for clock in CLOCKS]
    found += [abs(span.entry[clock] - entry[clock]) for clock in entry]
    found += [abs(span.age[clock] - entry[clock] - use[clock]) for clock in entry]
    if "days" in span.age and fitment.comes_from is None:
        found.append(abs(span.age["days"] - (end - fitment.happened_at).total_seconds() / 86_400))
    return max(found)


def test_the_demo_has_what_makes_ages_hard(demo_history: History, ages: Ages) -> None:
    fitments = demo_history.of(Fitment).values()
    assert {fitment.prior for fitment in fitments} == {"new", "stated", "unknown"}
    assert sum(fitment.comes_from is not None for fitment in fitments) >= 3
    assert sum(len(stays) > 1 for stays in ages.whereabouts.stays_of_unit.values()) >= 10
    assert len(demo_history.of(SessionUse)) > 1000


def test_every_place_of_every_module_is_in_one_span_for_each_fitting(demo_history: History, ages: Ages) -> None:
    counted = sum(span.count for span in ages.spans)
    assert counted == sum(fitment.count for fitment in demo_history.of(Fitment).values())
    running = sum(span.count for span in ages.spans if span.running)
    failed_in_place = sum(span.count for span in ages.spans if span.failure is not None and span.removal is None)
    assert running + failed_in_place == len(ages.whereabouts.fitted_now())
