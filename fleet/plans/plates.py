"""Wanted prints, printers, spools and the hours when a person is there come in; a first list of plates goes out.

Earliest due date first, each plate on the printer where it would be done first. A plate is loaded, and the one before
it taken off, in one change by the one person; a change lies wholly within the hours of presence.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field, replace
from datetime import datetime, time, timedelta
from zoneinfo import ZoneInfo

from fleet.errors import PlanError
from fleet.plans.yields import starts_for

_FARTHEST_DAYS = 730


@dataclass(frozen=True)
class PrintNeed:
    """Good parts of one part type and revision wanted by a date.

    Parameters
    ----------
    part, label, revision : str
        Part type, its name for people, and its revision.
    good_wanted : int
    due : datetime
        Aware.
    material : str
    nozzle_mm : float
    parts_per_plate : int
        Most parts on one plate.
    minutes_per_part, minutes_per_plate : float
        A plate of n parts takes minutes_per_plate + n x minutes_per_part.
    grams_per_part : float
        Supports and waste included.
    good, started : int
        Yield so far.
    yield_judged : bool
        `good` and `started` are a judgement, no plate of this part has been recorded.
    """

    part: str
    label: str
    revision: str
    good_wanted: int
    due: datetime
    material: str
    nozzle_mm: float
    parts_per_plate: int
    minutes_per_part: float
    minutes_per_plate: float
    grams_per_part: float
    good: int
    started: int
    yield_judged: bool = False


@dataclass(frozen=True)
class PrinterNow:
    """A printer, the minutes of a person that a change of plate takes, and when it is free."""

    code: str
    nozzle_mm: float
    change_minutes: float
    free_from: datetime


@dataclass(frozen=True)
class SpoolNow:
    """A spool and what is left on it. [g]"""

    code: str
    material: str
    grams_left: float


@dataclass(frozen=True)
class PresenceWindow:
    """Weekly hours when a person is there: weekday 0 (Monday) to 6, local minutes of the day, 0 to 1440."""

    weekday: int
    start_minute: int
    end_minute: int


@dataclass(frozen=True)
class Plate:
    """One planned plate of one part type.

    Attributes
    ----------
    number : int
        In order of start, from 1.
    printer, spool, part, label, revision : str
    count : int
        Parts started.
    loaded_from, start, end, taken_off_at : datetime
        Start of the change that loads it, start and end of the print, and start of the change that takes it off. UTC.
    hours, grams : float
        Of printing, and of material.
    due : datetime
    late : bool
        Whether it is taken off after it is due.
    """

    number: int
    printer: str
    spool: str
    part: str
    label: str
    revision: str
    count: int
    loaded_from: datetime
    start: datetime
    end: datetime
    taken_off_at: datetime
    hours: float
    grams: float
    due: datetime
    late: bool


@dataclass(frozen=True)
class PlatePlan:
    """Plates in order of start, the late ones among them, and a sentence for everything that cannot be printed."""

    plates: tuple[Plate, ...]
    late: tuple[Plate, ...]
    shortages: tuple[str, ...]


def plan_plates(
    needs: Sequence[PrintNeed],
    printers: Sequence[PrinterNow],
    spools: Sequence[SpoolNow],
    presence: Sequence[PresenceWindow],
    now: datetime,
    confidence: float = 0.9,
    zone: str = "UTC",
) -> PlatePlan:
    """Plates for the wanted parts, by the yield of each so far.

    Parameters
    ----------
    needs : sequence of PrintNeed
    printers : sequence of PrinterNow
    spools : sequence of SpoolNow
    presence : sequence of PresenceWindow
        In local time of `zone`.
    now : datetime
        Aware; nothing is planned before it.
    confidence : float
        Chance of enough good parts of each need, in (0, 1).
    zone : str
        IANA name.

    Returns
    -------
    PlatePlan

    Raises
    ------
    PlanError
        If a figure cannot be; all problems at once.
    """
    if not 0.0 < confidence < 1.0:
        raise PlanError(f"The confidence is {confidence}: give a chance above 0 and below 1.")
    _check(needs, printers, spools, presence, now)
    shop = _Workshop(printers, spools, _Calendar(presence, now, ZoneInfo(zone)), now)
    shortages: list[str] = []
    unplanned: dict[tuple[str, str], int] = {}
    for need in sorted(needs, key=lambda need: (need.due, need.part, need.revision)):
        name = f"{need.label} ({need.revision})" if need.revision else need.label
        try:
            left = starts_for(need.good_wanted, confidence, need.good, need.started)
        except PlanError as never_enough:  # of one part, which leaves the plates of the others as they are
            shortages.append(f"{name}: {never_enough}")
            continue
        while left > 0:
            problem = shop.add_plate(need, left)
            if problem is not None:
                unplanned[name, problem] = unplanned.get((name, problem), 0) + left
                break
            left -= shop.plates[-1].count
    shortages = list(dict.fromkeys(shortages))
    shortages += [f"{name}: {left} of its prints are not planned: {said}" for (name, said), left in unplanned.items()]
    ordered = sorted(shop.plates, key=lambda plate: (plate.start, plate.printer))
    plates = tuple(replace(plate, number=number) for number, plate in enumerate(ordered, start=1))
    return PlatePlan(plates, tuple(plate for plate in plates if plate.late), tuple(shortages))


class _Calendar:
    """When the one person is there and free."""

    def __init__(self, presence: Sequence[PresenceWindow], now: datetime, zone: ZoneInfo) -> None:
        self.busy: list[tuple[datetime, datetime]] = []
        self._source = _presence_spans(presence, now, zone)
        self._spans: list[tuple[datetime, datetime]] = []

    def earliest(self, after: datetime, minutes: float) -> datetime | None:
        """First moment from `after` at which a change of so many minutes can begin."""
        length = timedelta(minutes=minutes)
        for start, end in self._all_spans():
            moment = max(start, after)
            for busy_from, busy_to in self.busy:
                if moment < busy_to and moment + length > busy_from:
                    moment = busy_to
            if moment + length <= end and moment >= start:
                return moment
        return None

    def book(self, start: datetime, minutes: float) -> None:
        """Keep the person for a change."""
        self.busy.append((start, start + timedelta(minutes=minutes)))
        self.busy.sort()

    def _all_spans(self) -> Iterator[tuple[datetime, datetime]]:
        yield from self._spans
        for span in self._source:
            self._spans.append(span)
            yield span


def _presence_spans(
    presence: Sequence[PresenceWindow], now: datetime, zone: ZoneInfo
) -> Iterator[tuple[datetime, datetime]]:
    """Spans of presence from now on, in UTC, ascending, touching ones joined; none after two years."""
    utc = ZoneInfo("UTC")
    day = now.astimezone(zone).date() - timedelta(days=1)
    open_span: tuple[datetime, datetime] | None = None
    for number in range(_FARTHEST_DAYS if presence else 0):
        date = day + timedelta(days=number)
        today = [window for window in presence if window.weekday == date.weekday()]
        for window in sorted(today, key=lambda window: window.start_minute):
            midnight = datetime.combine(date, time())
            start, end = (
                (midnight + timedelta(minutes=minute)).replace(tzinfo=zone).astimezone(utc)
                for minute in (window.start_minute, window.end_minute)
            )
            if open_span is not None and start <= open_span[1]:
                open_span = (open_span[0], max(open_span[1], end))
                continue
            if open_span is not None and open_span[1] > now:
                yield open_span
            open_span = (start, end)
    if open_span is not None:
        yield open_span


@dataclass
class _Bench:
    """A printer as planned so far: free from `ready`; `changed` is the booked change that frees it, if there is one."""

    printer: PrinterNow
    ready: datetime
    changed: datetime | None = None


@dataclass
class _Reel:
    """A spool as planned so far: what is left, and when it is off its printer."""

    code: str
    material: str
    grams: float
    free_from: datetime


@dataclass(frozen=True)
class _Option:
    """One way to make a plate."""

    bench: _Bench
    reel: _Reel
    loaded_from: datetime
    books_load: bool
    start: datetime
    end: datetime
    taken_off_at: datetime


@dataclass
class _Workshop:
    """Printers, spools and the person, as booked by the plates planned so far."""

    printers: Sequence[PrinterNow]
    spools: Sequence[SpoolNow]
    calendar: _Calendar
    now: datetime
    plates: list[Plate] = field(default_factory=list)

    def __post_init__(self) -> None:
        self.benches = [_Bench(printer, max(printer.free_from, self.now)) for printer in self.printers]
        self.reels = [_Reel(spool.code, spool.material, spool.grams_left, self.now) for spool in self.spools]

    def add_plate(self, need: PrintNeed, left: int) -> str | None:
        """Plan one plate of at most `left` parts; a sentence if that cannot be done."""
        benches = [bench for bench in self.benches if bench.printer.nozzle_mm == need.nozzle_mm]
        if not benches:
            return f"no printer has a nozzle of {need.nozzle_mm:g} mm. Fit one, or plan another part."
        reels = [reel for reel in self.reels if reel.material == need.material]
        most = max((int(reel.grams / need.grams_per_part + 1e-9) for reel in reels), default=0)
        count = min(left, need.parts_per_plate, most)
        if count < 1:
            return f"no spool of {need.material} holds {need.grams_per_part:g} g for one. Get a spool, or enter it."
        grams = count * need.grams_per_part
        minutes = need.minutes_per_plate + count * need.minutes_per_part
        enough = [reel for reel in reels if reel.grams + 1e-9 >= grams]
        options = [self._option(bench, reel, minutes) for bench in benches for reel in enough]
        found = [option for option in options if option is not None]
        if not found:
            return "nobody is there long enough to change plates. Enter when people are present."
        self._book(min(found, key=lambda o: (o.taken_off_at, o.books_load, o.reel.grams)), need, count)
        return None

    def _option(self, bench: _Bench, reel: _Reel, minutes: float) -> _Option | None:
        """Earliest plate on a printer from a spool: in the change that frees the printer, or in one of its own."""
        change = bench.printer.change_minutes
        loaded_from = bench.changed
        books_load = loaded_from is None or reel.free_from > bench.ready
        if loaded_from is None or books_load:
            loaded_from = self.calendar.earliest(max(bench.ready, reel.free_from), change)
        if loaded_from is None:
            return None
        start = loaded_from + timedelta(minutes=change)
        end = start + timedelta(minutes=minutes)
        taken_off_at = self.calendar.earliest(end, change)
        if taken_off_at is None:
            return None
        return _Option(bench, reel, loaded_from, books_load, start, end, taken_off_at)

    def _book(self, option: _Option, need: PrintNeed, count: int) -> None:
        """Take the printer, the grams and the person."""
        bench, change = option.bench, option.bench.printer.change_minutes
        if option.books_load:
            self.calendar.book(option.loaded_from, change)
        self.calendar.book(option.taken_off_at, change)
        bench.changed, bench.ready = option.taken_off_at, option.taken_off_at + timedelta(minutes=change)
        option.reel.grams = max(0.0, option.reel.grams - count * need.grams_per_part)
        option.reel.free_from = bench.ready
        self.plates.append(
            Plate(
                number=0,
                printer=bench.printer.code,
                spool=option.reel.code,
                part=need.part,
                label=need.label,
                revision=need.revision,
                count=count,
                loaded_from=option.loaded_from,
                start=option.start,
                end=option.end,
                taken_off_at=option.taken_off_at,
                hours=(option.end - option.start) / timedelta(hours=1),
                grams=count * need.grams_per_part,
                due=need.due,
                late=option.taken_off_at > need.due,
            )
        )


def _check(
    needs: Sequence[PrintNeed],
    printers: Sequence[PrinterNow],
    spools: Sequence[SpoolNow],
    presence: Sequence[PresenceWindow],
    now: datetime,
) -> None:
    """Raise one PlanError with a sentence for every figure that cannot be."""
    problems = []
    moments = [("now", now), *((f"The due date of {n.label}", n.due) for n in needs)]
    moments += [(f"Printer {p.code}, free from", p.free_from) for p in printers]
    problems += [f"{name}: {at} has no zone: give one." for name, at in moments if at.utcoffset() is None]
    for need in needs:
        figures = (need.parts_per_plate, need.minutes_per_part, need.grams_per_part, need.nozzle_mm)
        if need.good_wanted < 0 or need.minutes_per_plate < 0 or not all(value > 0 for value in figures):
            problems.append(f"{need.label}: parts and minutes a plate, grams and nozzle must be above 0.")
    problems += [f"Printer {p.code}: minutes a change are below 0." for p in printers if not p.change_minutes >= 0]
    problems += [f"Spool {s.code}: grams left are below 0." for s in spools if not s.grams_left >= 0]
    for window in presence:
        if not (0 <= window.weekday <= 6 and 0 <= window.start_minute < window.end_minute <= 1440):
            problems.append(f"{window}: give a weekday 0 to 6 and minutes of the day, the first below the second.")
    if problems:
        raise PlanError("\n".join(problems))
