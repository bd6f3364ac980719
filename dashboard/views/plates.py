"""Print plates: what is late, the week of the printers, and whose hand is needed at which printer, and when."""

from __future__ import annotations

from collections.abc import Sequence
from datetime import datetime, timedelta
from itertools import groupby

from dashboard import answers
from dashboard.cautions import PRINTING
from dashboard.frame import empty_book, lead, title, worked_out
from dashboard.links import show, show_linked
from dashboard.marks import Html, address, caution, cautions, element, joined_html, link, table
from dashboard.workshop import (
    DAYS,
    Change,
    Run,
    changes_of,
    content_of,
    first_midnight,
    on_printers_now,
    presence_spans,
    printer_codes,
    runs_of,
    spool_uses,
)
from fleet.pipeline import Question, ReadOut
from fleet.records.set_up import PartType
from fleet.report.wording import NO_BREAK, clock_time, count, day, figure, joined, moment_text

_CLOCK_WIDTH = 6.0


def draw() -> None:
    """Draw the page."""
    title("Print plates")
    if not answers.history().of(PartType):
        empty_book()
        return
    found = answers.read_out(Question())
    plan = found.plates.plan
    lead(_sentence(found))
    runs = runs_of(found)
    show_linked(
        _late(found), _judged(found), *(caution("Cannot print", said) for said in plan.shortages), key="plates-late"
    )
    if runs:
        show(element("h2", "The week of the printers", class_="wide-only"), _week(found, runs))
    show(_now(found), _changes(found, changes_of(found)), _spools(found), PRINTING)
    worked_out(found.history)


def _sentence(found: ReadOut) -> str:
    plates = found.plates.plan.plates
    if not plates:
        weeks = [need for need in found.spares if need.printed and need.short_from_week is not None]
        if not weeks:
            return f"Nothing to print: no printed part runs short within {found.question.weeks} weeks."
        first = min(weeks, key=lambda need: need.short_from_week or 0)
        return f"Nothing to print yet: the first to run short is {first.label}, in week {first.short_from_week}."
    grams = sum(plate.grams for plate in plates)
    total = sum(plate.hours for plate in plates)
    last = moment_text(max(plate.taken_off_at for plate in plates), found.history.zone)
    return (
        f"{count(len(plates), 'plate')}, {total:.0f}{NO_BREAK}h of printing, {figure(grams)}{NO_BREAK}g; done {last}."
    )


def _judged(found: ReadOut) -> Html:
    """Parts whose yield nobody has seen yet."""
    return cautions([caution("Yield", sentence) for sentence in found.plates.judged])


def _late(found: ReadOut) -> Html:
    """What comes too late, and which joints wait for it."""
    late = found.plates.plan.late
    if not late:
        return Html("")
    zone = found.history.zone
    waiting = {need.code: need.waiting for need in found.spares}
    blocks = []
    for plate in late:
        waits = waiting.get(plate.part, 0)
        said = f"needed {moment_text(plate.due, zone)}, off the printer {moment_text(plate.taken_off_at, zone)}."
        joints = f" {count(waits, 'joint waits', 'joints wait')} for it." if waits else " Nothing waits for it yet."
        action = link("Its spares", address("spares", part=plate.part))
        blocks.append(caution(f"{content_of(plate)}, plate {plate.number}", said + joints, action))
    return joined_html([element("h2", f"Late: {count(len(late), 'plate')}"), cautions(blocks)])


def _week(found: ReadOut, runs: Sequence[Run]) -> Html:
    """One row a printer over seven days; the same is said in words under it, so the picture is for eyes only."""
    start = first_midnight(found)
    end = start + timedelta(days=DAYS)
    now = _place(found.history.as_of, start)
    lanes = [_days_lane(found, start)]
    here = [_box("here", a, b, start) for a, b in presence_spans(found)]
    for printer in printer_codes(found):
        own = [run for run in runs if run.printer == printer and run.start < end and run.end > start]
        drawn = [
            *here,
            *_day_lines(),
            *(piece for run in own for piece in _run(run, start)),
            *_clocks(found, own, start),
        ]
        bar = element("div", *drawn, element("div", class_="now", style=f"left:{now:.2f}%"), class_="bar")
        lanes.append(element("div", element("div", printer, class_="name"), bar, class_="lane"))
    picture = element("div", *lanes, class_="week", aria_hidden="true")
    return element("div", _week_legend(), element("div", picture, class_="scroll"), class_="wide-only")


def _days_lane(found: ReadOut, start: datetime) -> Html:
    names = [
        element("div", day(start + timedelta(days=at), found.history.zone), class_="day", style=f"left:{_day(at)}%")
        for at in range(DAYS)
    ]
    return element("div", element("div"), element("div", *names, class_="bar"), class_="lane days")


def _day_lines() -> list[Html]:
    return [element("div", class_="day", style=f"left:{_day(at)}%") for at in range(DAYS)]


def _day(at: int) -> str:
    return f"{100 * at / DAYS:.2f}"


def _place(moment: datetime, start: datetime) -> float:
    """Where a moment lies in the week. [%]"""
    return min(max(100 * (moment - start) / timedelta(days=DAYS), 0.0), 100.0)


def _box(kind: str, begin: datetime, end: datetime, start: datetime, *inside: str | Html) -> Html:
    left, right = _place(begin, start), _place(end, start)
    return element("div", *inside, class_=kind, style=f"left:{left:.2f}%;width:{right - left:.2f}%")


def _run(run: Run, start: datetime) -> list[Html]:
    label = element("span", element("b", run.label), f" {run.content}")
    return [_box(f"run {run.kind}", run.start, run.end, start, label)]


def _clocks(found: ReadOut, runs: Sequence[Run], start: datetime) -> list[Html]:
    """A triangle and a clock at each change; one that would stand on its neighbour steps down a line."""
    pieces, last, low = [], -100.0, False
    for moment in sorted({run.change for run in runs if run.change is not None}):
        if moment >= start + timedelta(days=DAYS):
            break
        at = _place(moment, start)
        low = at - last < _CLOCK_WIDTH and not low
        kind = "change low" if low else "change"
        pieces.append(element("div", clock_time(moment, found.history.zone), class_=kind, style=f"left:{at:.2f}%"))
        last = at
    return pieces


def _week_legend() -> Html:
    words = (("printing", "on the printer"), ("planned", "planned"), ("late", "late"), ("here", "someone is here"))
    swatches = [element("span", Html(f'<span class="swatch {kind}"></span>'), said) for kind, said in words]
    return element("div", *swatches, element("span", "triangle and clock: plate change"), class_="legend")


def _now(found: ReadOut) -> Html:
    """What stands on the printers, and whether it should be off by now."""
    runs, zone = on_printers_now(found), found.history.zone
    if not runs:
        return Html("")
    lines = []
    for run in runs:
        done = run.end <= found.history.as_of
        when = f"should be done since {moment_text(run.end, zone)}" if done else f"done {moment_text(run.end, zone)}"
        todo = element("div", "Take it off, and record what came out good.", class_="waits") if done else ""
        said = element("div", element("strong", run.printer), f": plate {run.label}, {run.content}, {when}.", todo)
        lines.append(element("li", element("time", clock_time(run.end, zone)), said))
    return joined_html([element("h2", "On the printers"), element("ul", *lines, class_="changes")])


def _changes(found: ReadOut, changes: Sequence[Change]) -> Html:
    """Whose hand is needed where, by day."""
    if not changes:
        return Html("")
    zone = found.history.zone
    parts = [element("h2", "Plate changes")]
    for name, those in groupby(changes, key=lambda change: day(change.moment, zone)):
        parts += [element("h3", name), element("ul", *(_change(found, change) for change in those), class_="changes")]
    return joined_html(parts)


def _change(found: ReadOut, change: Change) -> Html:
    zone = found.history.zone
    said = [element("span", element("strong", change.printer), f": {change.words}")]
    if change.done_at is not None:
        waits = (
            f"done {moment_text(change.done_at, zone)}, nobody free then: waits till {clock_time(change.moment, zone)}"
        )
        said.append(element("div", waits, class_="waits"))
    if change.late:
        said.append(element("div", "late", class_="waits"))
    return element("li", element("time", clock_time(change.moment, zone)), element("div", *said))


def _spools(found: ReadOut) -> Html:
    uses = spool_uses(found)
    if not uses:
        return Html("")
    rows: list[list[str | Html]] = [
        [
            use.code,
            use.material,
            f"{figure(use.grams_left)}{NO_BREAK}g",
            f"{figure(use.grams_planned)}{NO_BREAK}g" if use.grams_planned else "nothing",
            f"{figure(max(use.grams_left - use.grams_planned, 0))}{NO_BREAK}g",
        ]
        for use in uses
    ]
    dry = joined([use.code for use in uses if use.grams_left - use.grams_planned < 100 and use.grams_planned])
    note = element("p", f"Nearly empty after this: {dry}.") if dry else ""
    listed = table(["Spool", "Material", "Left", "These plates take", "After"], rows, "Spools, as entered.", stack=True)
    return joined_html([element("h2", "Spools"), note, listed])
