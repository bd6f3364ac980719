"""From ages to life data: for each part type, revision and lot kept apart, one table per mode and endpoint."""

from __future__ import annotations

from bisect import bisect_left
from collections import defaultdict
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from datetime import datetime
from typing import Literal

from fleet.lives.ages import Age, Ages, PartSpan
from fleet.lives.life_data import LifeData
from fleet.records.history import History
from fleet.records.ledger import BenchCheck, Failure, Fitment, Session
from fleet.records.set_up import Lot, PartMode, PartType, Position, Revision, Slot
from fleet.records.whereabouts import Whereabouts

Endpoint = Literal["stop", "unfit"]


@dataclass(frozen=True)
class LifeKey:
    """Parts that share one life: a part type, its revision, and a lot if that is fitted on its own. Record ids."""

    part_type: str
    revision: str | None = None
    apart_lot: str | None = None

    @property
    def name(self) -> str:
        """One text for all three, for use as a key."""
        return "/".join(part or "-" for part in (self.part_type, self.revision, self.apart_lot))


@dataclass(frozen=True, eq=False)
class ModeData:
    """Life data of one mode: `stop` counts what stopped the robot, `unfit` also what was worn or over its limit.

    `left_out` counts parts whose age is known, but not in the clock of this mode.
    """

    mode: PartMode
    stop: LifeData
    unfit: LifeData
    left_out: int


@dataclass(frozen=True, eq=False)
class PartData:
    """All life data of one LifeKey.

    `whole` is the part as a whole in running hours, by whatever mode it failed, a failure at the age at which it was
    found: for the steps of a picture, while `modes` serve the fits. `left_out` counts parts whose age nobody knows,
    `failures_left_out` those of them that failed, `no_use` failures before any use: none of these is in the tables.
    `use` is the total use of all parts seen, by clock, from which one clock's rate against another follows.
    """

    key: LifeKey
    label: str
    modes: tuple[ModeData, ...]
    whole: LifeData
    failures: int
    failures_left_out: int
    running: int
    suspended: int
    left_out: int
    no_use: int
    use: Age

    @property
    def failures_seen(self) -> int:
        """All failures that were logged, those of parts of unknown age too."""
        return self.failures + self.failures_left_out


def life_key_of(history: History, fitment: Fitment) -> LifeKey:
    """Which life a fitment belongs to; a moved part keeps the lot and revision it came with."""
    source = fitment
    while source.lot is None and source.revision is None and source.comes_from is not None:
        if source.comes_from not in history.of(Fitment):  # where it came from was entered only later
            break
        source = history.one(Fitment, source.comes_from)
    part_type = history.one(Slot, fitment.slot).part_type
    lot = None if source.lot is None else history.one(Lot, source.lot)
    return life_key_of_lot(part_type, lot, source.revision)


def life_key_of_lot(part_type: str, lot: Lot | None, revision: str | None = None) -> LifeKey:
    """Which life parts of a lot belong to."""
    if lot is None:
        return LifeKey(part_type, revision)
    return LifeKey(part_type, lot.revision or revision, lot.record_id if lot.kept_apart else None)


def part_data(history: History, ages: Ages) -> dict[LifeKey, PartData]:
    """Life data of every part type, revision and lot kept apart that was ever fitted or is in the set-up."""
    spans: dict[LifeKey, list[PartSpan]] = defaultdict(list)
    for span in ages.spans:
        spans[life_key_of(history, span.fitment)].append(span)
    for part_type in history.of(PartType):
        if not any(key.part_type == part_type for key in spans):
            spans[LifeKey(part_type)] = []
    checks = _Checks(history, ages.whereabouts)
    return {key: _part_data(history, ages, checks, key, held) for key, held in spans.items()}


def _part_data(history: History, ages: Ages, checks: _Checks, key: LifeKey, spans: Sequence[PartSpan]) -> PartData:
    modes = [mode for mode in history.of(PartMode).values() if mode.part_type == key.part_type]
    modes.sort(key=lambda mode: mode.code)
    known = [span for span in spans if span.known]
    seen = [_observe(history, ages, checks, span, modes) for span in known]
    failed = [row for row in seen if row.failure is not None]
    return PartData(
        key=key,
        label=label_of(history, key),
        modes=tuple(
            ModeData(
                mode,
                stop=_life_data(seen, mode, "stop"),
                unfit=_life_data(seen, mode, "unfit"),
                left_out=sum(span.count for span in known if mode.clock not in span.age),
            )
            for mode in modes
        ),
        whole=_whole_part(seen),
        failures=sum(row.span.count for row in failed),
        failures_left_out=sum(span.count for span in spans if not span.known and _failed_by_itself(span)),
        running=sum(span.count for span in spans if span.running),
        suspended=sum(row.span.count for row in seen) - sum(row.span.count for row in failed),
        left_out=sum(span.count for span in spans) - sum(span.count for span in known),
        no_use=sum(row.span.count for row in failed if row.upper.get("hours", 0.0) <= 0),
        use=_total_use(known),
    )


def label_of(history: History, key: LifeKey) -> str:
    """Name of a life in plain words: part, revision, and the lot if it is kept apart."""
    label = history.one(PartType, key.part_type).label
    if key.revision is not None:
        label += f" {history.one(Revision, key.revision).code}"
    if key.apart_lot is not None:
        label += f", lot {history.one(Lot, key.apart_lot).code} apart"
    return label


def _total_use(spans: Iterable[PartSpan]) -> Age:
    total: dict[str, float] = defaultdict(float)
    for span in spans:
        for clock, use in span.use.items():
            total[clock] += span.count * use
    return dict(total)


def _failed_by_itself(span: PartSpan) -> bool:
    return span.failure is not None and span.failure.cause != "another part's failure"


@dataclass(frozen=True)
class _Observed:
    """One span as the likelihood sees it: in (lower, upper] its failure, exact where both are equal.

    `failure` is None for a suspension, and for a part that another part's failure broke; `stopped` says whether the
    failure counts for the endpoint *stop*. `last_seen_good` holds, for each mode that shows only when looked at, the
    age at which the part was last looked at and had not failed by it.
    """

    span: PartSpan
    failure: Failure | None
    stopped: bool
    lower: Age
    upper: Age
    last_seen_good: Mapping[str, Age]


def _observe(history: History, ages: Ages, checks: _Checks, span: PartSpan, modes: Sequence[PartMode]) -> _Observed:
    failure = span.failure
    own = _failed_by_itself(span)
    hidden = [m for m in modes if m.noticed == "at a check" and not (own and failure and failure.mode == m.record_id)]
    seen_good = {mode.record_id: _age_last_seen_good(ages, checks, span, mode) for mode in hidden}
    if failure is None or not own:
        return _Observed(span, None, False, span.age, span.age, seen_good)
    start = _last_known_good(history, checks, span, failure)
    lower = span.age if start is None else ages.age_of(span, start)
    return _Observed(span, failure, _counts_as_stop(history, span, failure), lower, span.age, seen_good)


def _age_last_seen_good(ages: Ages, checks: _Checks, span: PartSpan, mode: PartMode) -> Age:
    """Age at which a part was last seen to be good in a mode that shows only when looked at.

    A part taken out while good, to be replaced or moved, was in someone's hand. Where no check of the module was ever
    noted, people are taken to look after every session.
    """
    removal = span.removal
    in_hand = removal is not None and removal.reason in ("replaced while good", "moved") and not removal.looked_bad
    if (in_hand and span.failure is None) or not checks.ever(span.fitment):
        return span.age
    end = ages.end_of(span)
    return ages.age_of(span, checks.last_good(span.fitment, mode.record_id, end))


def _counts_as_stop(history: History, span: PartSpan, failure: Failure) -> bool:
    """A part of a set that the robot can partly do without counts towards a stop once it no longer does its work."""
    stops_at = history.one(Slot, span.fitment.slot).stops_at
    shared = stops_at is not None and stops_at > 1
    return failure.finding == "stopped" or (shared and failure.finding == "over its limit")


def _last_known_good(history: History, checks: _Checks, span: PartSpan, failure: Failure) -> datetime | None:
    """The moment after which the failure must have happened; None if its own moment is known exactly."""
    if failure.finding == "found worn" or failure.how_found == "at a check":
        return checks.last_look_before(span.fitment, failure)
    if failure.happened_until is not None:
        return max(failure.happened_at, span.fitment.happened_at)
    session = None if failure.session is None else history.of(Session).get(failure.session)
    if session is None or (failure.finding == "stopped" and failure.happened_at == session.ended_at):
        return None
    return max(session.happened_at, span.fitment.happened_at)


class _Checks:
    """The good verdicts on each module, in order of time, and when each robot ran."""

    def __init__(self, history: History, whereabouts: Whereabouts) -> None:
        self._history, self._whereabouts = history, whereabouts
        self._sessions: dict[str, list[datetime]] = defaultdict(list)
        for session in history.of(Session).values():
            self._sessions[session.robot].append(session.happened_at)
        self._good: dict[str, list[BenchCheck]] = defaultdict(list)
        for check in history.of(BenchCheck).values():
            if check.verdict == "good":
                self._good[check.unit].append(check)

    def ever(self, fitment: Fitment) -> bool:
        """Whether this module was ever noted as checked."""
        return bool(self._good.get(fitment.unit))

    def last_look_before(self, fitment: Fitment, failure: Failure) -> datetime:
        """When a part that was found to have failed had last been seen to be good.

        Where no check of the module was ever noted, people are taken to look after every session: it was good when the
        last one before the finding began.
        """
        if self.ever(fitment):
            return self.last_good(fitment, failure.mode, failure.happened_at)
        position = self._whereabouts.position_of(fitment.unit, failure.happened_at)
        ran = [] if position is None else self._sessions[self._history.one(Position, position).robot]
        at = bisect_left(ran, failure.happened_at)
        return max(ran[at - 1], fitment.happened_at) if at else fitment.happened_at

    def last_good(self, fitment: Fitment, mode: str, before: datetime) -> datetime:
        """The last check before a moment that could have shown a mode and did not; else when the part was fitted."""
        held = self._good.get(fitment.unit, [])
        at = bisect_left([check.happened_at for check in held], before)
        for check in reversed(held[:at]):
            if check.happened_at <= fitment.happened_at:
                break
            if check.slot in (None, fitment.slot) and check.mode in (None, mode):
                return check.happened_at
        return fitment.happened_at


def _life_data(seen: Sequence[_Observed], mode: PartMode, endpoint: Endpoint) -> LifeData:
    """The rows of one mode: its own failures, everything else as suspensions. Rows without use are left out."""
    clock = mode.clock
    rows = [row for row in (_row(observed, mode, endpoint) for observed in seen) if row is not None]
    return LifeData(
        [row[0] for row in rows],
        [row[1] for row in rows],
        [row[2] for row in rows],
        [row[3] for row in rows],
        mode=[mode.code if row[1] != float("inf") else None for row in rows],
        clock=clock,
        records=[row[4] for row in rows],
    )


def _whole_part(seen: Sequence[_Observed]) -> LifeData:
    used = [row for row in seen if row.upper["hours"] > row.span.entry["hours"]]
    ages = [row.upper["hours"] for row in used]
    return LifeData(
        ages,
        [age if row.failure is not None else float("inf") for age, row in zip(ages, used, strict=True)],
        [row.span.entry["hours"] for row in used],
        [float(row.span.count) for row in used],
    )


_Row = tuple[float, float, float, float, tuple[str, ...]]


def _row(seen: _Observed, mode: PartMode, endpoint: Endpoint) -> _Row | None:
    clock, span = mode.clock, seen.span
    if clock not in seen.upper or clock not in seen.lower:
        return None
    entry, lower, upper = span.entry[clock], seen.lower[clock], seen.upper[clock]
    if upper <= entry:
        return None
    records = tuple(record.record_id for record in (span.fitment, span.failure, span.removal) if record is not None)
    own = seen.failure is not None and seen.failure.mode == mode.record_id
    if own and (endpoint == "unfit" or seen.stopped):
        return max(lower, entry), upper, entry, float(span.count), records
    # A failure of another mode suspends at the middle of its interval; one that does not count here, at its finding.
    suspended = upper if seen.failure is None or own else max(entry, 0.5 * (lower + upper))
    if endpoint == "unfit" and mode.record_id in seen.last_seen_good:
        suspended = seen.last_seen_good[mode.record_id].get(clock, entry)
    if suspended <= entry:
        return None
    return suspended, float("inf"), entry, float(span.count), records
