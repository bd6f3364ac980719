"""Ledger records: what happened, and when: sessions, fittings, removals, failures, checks, stock, plates, purchases."""

from __future__ import annotations

from datetime import datetime

from fleet.records.fields import (
    Record,
    choice,
    flag,
    hours,
    moment,
    number,
    record,
    reference,
    short,
    text,
    whole,
)
from fleet.records.vocabulary import (
    CAUSES,
    FINDINGS,
    HOW_FOUND,
    OUTCOMES,
    PRIOR_AGES,
    REMOVAL_REASONS,
    STOCK_REASONS,
    USE_BASES,
    VERDICTS,
)


@record("ledger")
class LedgerRecord(Record):
    """What every row of the ledger carries: its moment, how vague that is, and its order within the moment."""

    happened_at: datetime = moment("when it happened; a date alone means that day")
    happened_until: datetime | None = moment("end of the time it happened in, if that is vague", default=None)
    sequence: int = whole("order among records of the same moment", 0, 1_000_000, default=0)

    def contradictions(self) -> list[str]:
        """Time runs forward."""
        if self.happened_until is not None and self.happened_until < self.happened_at:
            return ["happened_until is before happened_at"]
        return []


@record("session")
class Session(LedgerRecord):
    """A robot ran."""

    robot: str = reference("robot", "the robot")
    ended_at: datetime = moment("when it ended")
    run_seconds: int = hours("running hours", column="hours", high=24 * 31)
    impacts: int = whole("hard impacts counted", 0, 1_000_000, default=0)
    outcome: str = choice("how it ended", OUTCOMES, default="finished")
    note: str | None = text("anything worth keeping", default=None)

    def contradictions(self) -> list[str]:
        """A session ends after it starts and cannot hold more hours than that."""
        problems = super().contradictions()
        length = (self.ended_at - self.happened_at).total_seconds()
        if length <= 0:
            problems.append("ended_at is not after happened_at")
        elif self.run_seconds > length + 60:
            problems.append(
                f"hours is {self.run_seconds / 3600:g}, but from start to end are only {length / 3600:.2f} h"
            )
        return problems


@record("session_use")
class SessionUse(LedgerRecord):
    """What one joint did in a session, where it is known better than from the robot's hours."""

    session: str = reference("session", "the session")
    position: str = reference("position", "the joint's place on the robot")
    run_seconds: int | None = hours("running hours of this joint", column="hours", high=24 * 31, default=None)
    load_seconds: int | None = hours("hours under load", column="load_hours", high=24 * 31, default=None)
    turns: int | None = whole("output turns", 0, 1_000_000_000, default=None)
    impacts: int | None = whole("hard impacts on this joint", 0, 1_000_000, default=None)
    basis: str = choice("where the figures come from", USE_BASES, default="counted")


@record("placement")
class Placement(LedgerRecord):
    """A joint module was put in a place on a robot, or on the shelf."""

    unit: str = reference("unit", "the joint module")
    position: str | None = reference("position", "where it went; empty for the shelf", default=None)


@record("fitment")
class Fitment(LedgerRecord):
    """A part, or several like parts, were fitted in a slot of a joint module."""

    unit: str = reference("unit", "the joint module")
    slot: str = reference("slot", "the slot of its design")
    first_place: int = whole("first place in the slot that they took, from 1", 1, 1000, default=1)
    count: int = whole("how many parts", 1, 1000, default=1)
    lot: str | None = reference("lot", "the lot; empty if nobody knows", default=None)
    revision: str | None = reference("revision", "the revision, if no lot says it", default=None)
    serial: str | None = short("serial number", default=None)
    comes_from: str | None = reference("fitment", "the fitment it was taken out of: it keeps its age", default=None)
    from_place: int | None = whole("which place of that fitment it was taken out of", 1, 1000, default=None)
    prior: str = choice("its age when fitted", PRIOR_AGES, default="new")
    prior_run_seconds: int | None = hours("hours run before", column="prior_hours", high=1_000_000, default=None)
    prior_load_seconds: int | None = hours(
        "hours under load before", column="prior_load_hours", high=1_000_000, default=None
    )
    prior_turns: int | None = whole("output turns before", 0, 1_000_000_000_000, default=None)
    prior_impacts: int | None = whole("hard impacts before", 0, 1_000_000_000, default=None)
    prior_days: float | None = number("days before", 0, 40_000, default=None)

    @property
    def places(self) -> range:
        """The places in the slot that these parts took."""
        return range(self.first_place, self.first_place + self.count)

    def contradictions(self) -> list[str]:
        """A stated age has hours; any other has none."""
        problems = super().contradictions()
        if self.prior == "stated" and self.prior_run_seconds is None:
            problems.append("prior is stated, but prior_hours is missing")
        stated = (
            self.prior_run_seconds,
            self.prior_load_seconds,
            self.prior_turns,
            self.prior_impacts,
            self.prior_days,
        )
        if self.prior != "stated" and any(value is not None for value in stated):
            problems.append(f"prior is {self.prior}, but an age is given; say prior stated")
        if self.from_place is not None and self.comes_from is None:
            problems.append("from_place is given, but not what the part comes from")
        if self.comes_from is not None and self.prior != "new":
            problems.append("a moved part keeps its age by itself; leave prior empty")
        return problems


@record("removal")
class Removal(LedgerRecord):
    """A part was taken out."""

    fitment: str = reference("fitment", "the fitting that ends")
    place: int | None = whole("the place in the slot; empty for all that are left", 1, 1000, default=None)
    reason: str = choice("why", REMOVAL_REASONS)
    looked_bad: bool = flag("it looked bad though it had not failed", default=False)


@record("failure")
class Failure(LedgerRecord):
    """A part failed, or was found past its use."""

    fitment: str = reference("fitment", "the fitting that failed")
    place: int | None = whole("the place in the slot, if it holds several parts", 1, 1000, default=None)
    mode: str = reference("part_mode", "what was seen")
    finding: str = choice("what it did to the robot", FINDINGS)
    cause: str = choice("why it came to that", CAUSES, default="unknown")
    how_found: str = choice("how it was found", HOW_FOUND, default="unknown")
    session: str | None = reference("session", "the session in which it happened", default=None)
    broken_by: str | None = reference("failure", "the failure of another part that broke it", default=None)
    note: str | None = text("anything worth keeping", default=None)

    def contradictions(self) -> list[str]:
        """A part broken by another says so in its cause."""
        problems = super().contradictions()
        if self.broken_by is not None and self.cause != "another part's failure":
            problems.append("broken_by is given, so cause must be: another part's failure")
        return problems


@record("bench_check")
class BenchCheck(LedgerRecord):
    """Parts were looked at on the bench."""

    unit: str = reference("unit", "the joint module")
    slot: str | None = reference("slot", "the slot; empty for the whole joint", default=None)
    mode: str | None = reference("part_mode", "the mode it could reveal; empty for all", default=None)
    verdict: str = choice("what was found", VERDICTS)
    note: str | None = text("anything worth keeping", default=None)


@record("hold")
class Hold(LedgerRecord):
    """A person or a check says: do not run this."""

    robot: str | None = reference("robot", "the robot", default=None)
    unit: str | None = reference("unit", "the joint module", default=None)
    why: str = text("why")

    def contradictions(self) -> list[str]:
        """One thing is held at a time."""
        problems = super().contradictions()
        if (self.robot is None) == (self.unit is None):
            problems.append("name either a robot or a joint module")
        return problems


@record("release")
class Release(LedgerRecord):
    """A hold was lifted by a person."""

    hold: str = reference("hold", "the hold")
    why: str = text("why")


@record("stock_move")
class StockMove(LedgerRecord):
    """Spare parts came in, were counted, or were thrown away."""

    lot: str = reference("lot", "the lot")
    quantity: int = whole("how many", 0, 1_000_000)
    reason: str = choice("what happened", STOCK_REASONS)
    purchase: str | None = reference("purchase", "the purchase it came from", default=None)


@record("purchase")
class Purchase(LedgerRecord):
    """Parts were ordered."""

    code: str = short("order label")
    part_type: str = reference("part_type", "the part type")
    revision: str | None = reference("revision", "the revision", default=None)
    quantity: int = whole("how many parts", 1, 1_000_000)
    due_at: datetime = moment("when they are due")


@record("plate")
class Plate(LedgerRecord):
    """A plate was printed: what was started, and what came out good."""

    code: str = short("plate label")
    printer: str = reference("printer", "the printer")
    lot: str = reference("lot", "the lot that it made")
    started: int = whole("parts started", 1, 1000)
    good: int | None = whole("parts that came out good; empty while it prints", 0, 1000, default=None)
    ended_at: datetime | None = moment("when it was done; empty while it prints", default=None)

    def contradictions(self) -> list[str]:
        """No more comes out than went in."""
        problems = super().contradictions()
        if self.good is not None and self.good > self.started:
            problems.append(f"good is {self.good}, more than the {self.started} started")
        if (self.good is None) != (self.ended_at is None):
            problems.append("good and ended_at belong together")
        return problems


LEDGER = (
    Session,
    SessionUse,
    Placement,
    Fitment,
    Removal,
    Failure,
    BenchCheck,
    Hold,
    Release,
    StockMove,
    Purchase,
    Plate,
)
