"""From results to tables for a terminal: aligned, with units, a range beside every estimate."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from textwrap import fill
from typing import Any

from rich.cells import cell_len
from rich.console import Console, ConsoleOptions, Group, RenderableType, RenderResult
from rich.table import Table
from rich.text import Text

from fleet.forecasts.next_session import RobotOutlook
from fleet.pipeline import ReadOut
from fleet.plans.spare_list import SpareNeed
from fleet.records.history import History
from fleet.records.set_up import Robot
from fleet.report.documents import GENERAL_CAUTION, ODDS_CAUTION
from fleet.report.wording import capital, chance, count, day, figure, joined, moment_text, percent, saved, span

MOST_JOINTS = 3
_LEAST_TEXT = 24  # a column of text may be folded to this width before others are left out


@dataclass(frozen=True)
class _Column:
    """A column of numbers, or of text that may be folded; `spared` where the terminal is narrow."""

    name: str
    text: bool = False
    spared: bool = False


@dataclass(frozen=True, eq=False)
class _Listing:
    """Rows under columns; a narrow terminal gets them without the columns that can be spared, names on several lines.

    What people typed is shown as it stands, brackets included.
    """

    title: str
    columns: Sequence[_Column]
    rows: Sequence[Sequence[str]]

    def __rich_console__(self, console: Console, options: ConsoleOptions) -> RenderResult:
        """The wide table if there is room for it."""
        widths = [max(map(cell_len, cells)) for cells in zip([c.name for c in self.columns], *self.rows, strict=True)]
        pairs = zip(self.columns, widths, strict=True)
        least = [min(width, _LEAST_TEXT) if column.text else width for column, width in pairs]
        yield self._table(narrow=sum(least) + 2 * len(least) > options.max_width)

    def _table(self, narrow: bool) -> Table:
        gap = 1 if narrow else 2
        table = Table(title=self.title, title_justify="left", title_style="bold", box=None, padding=(0, gap, 0, 0))
        kept = [place for place, column in enumerate(self.columns) if not (narrow and column.spared)]
        for place in kept:
            column, cells = self.columns[place], [row[place] for row in self.rows]
            name = _folded(column.name, max(map(cell_len, cells), default=1)) if narrow else column.name
            table.add_column(name, justify="left" if column.text else "right", no_wrap=not column.text)
        for row in self.rows:
            table.add_row(*(Text(row[place]) for place in kept))
        return table


def _folded(name: str, width: int) -> str:
    """A column's name on lines no wider than its cells, or than its longest word."""
    return fill(name, max(width, *map(len, name.split())))


def _caution(text: str) -> Text:
    return Text(text, style="italic")


def _sentence(text: str) -> Text:
    return Text(text)


def odds_table(read_out: ReadOut) -> RenderableType:
    """Robots before their next session: held first, then lowest odds first."""
    session = read_out.next_session
    if not session.robots:
        return _sentence(_no_robots(read_out.history))
    rows = []
    for robot in session.robots:
        joints = [f"{j.label} {percent(j.stops.mean)} % ({j.word})" for j in robot.joints[:MOST_JOINTS]]
        if robot.held is not None:
            rows.append((robot.code, "held", f"do not run: {robot.held.why}"))
        elif robot.finishes is None:
            rows.append((robot.code, "", "no parts with a known life yet: record what is fitted"))
        else:
            rows.append((robot.code, chance(robot.finishes), f"{joined(joints)}{_doubts(robot)}"))
    lines: list[RenderableType] = [_Listing("Odds of finishing the next session without a stop", _ODDS_COLUMNS, rows)]
    if session.fleet is not None:
        lines.append(_sentence(f"All that are not held finish: {chance(session.fleet)}."))
    lines += [_sentence(said) for said in read_out.cautions]
    lines.append(
        _caution(f"In brackets: how well the chance itself is known (8 times in 10). {ODDS_CAUTION.capitalize()}.")
    )
    return Group(*lines)


def _no_robots(history: History) -> str:
    joined_from = [robot.in_service_from for robot in history.of(Robot).values()]
    if not joined_from:
        return "No robots yet: import your set-up with 'wearbook import FOLDER'."
    return f"No robot was in service on {history.as_of:%Y-%m-%d}; the first joined {min(joined_from):%Y-%m-%d}."


def _doubts(robot: RobotOutlook) -> str:
    if not robot.mostly_assumption and not robot.ages_assumed:
        return ""
    seen = f"{count(robot.failures_seen, 'failure')} seen"
    why = f"age unknown for {robot.ages_assumed} of {count(robot.parts, 'part')}" if robot.ages_assumed else seen
    return f" [{'mostly assumption: ' if robot.mostly_assumption else ''}{why}]"


_ODDS_COLUMNS = (_Column("robot", text=True), _Column("finishes"), _Column("most likely to stop it", text=True))


def spares_table(read_out: ReadOut) -> RenderableType:
    """Spares: what is short first."""
    if not read_out.spares:
        return _sentence("No parts fitted yet: record what is fitted to see which spares to hold.")
    title = f"Spares that last until restocked with {percent(read_out.question.target)} % (run to failure)"
    rows = [_spare_row(spare) for spare in read_out.spares]
    short = [f"{spare.label}: short by {spare.short}" for spare in read_out.spares if spare.short]
    aside = [f"{spare.set_aside} of {spare.label}" for spare in read_out.spares if spare.set_aside]
    lines: list[RenderableType] = [_Listing(title, _spare_columns(read_out.question.weeks), rows)]
    lines.append(_sentence(capital(f"{joined(short)}.") if short else "Nothing is short."))
    if aside:
        lines.append(_sentence(f"Set aside, of a superseded revision or a lot kept apart: {joined(aside)}."))
    lines += [_sentence(said) for said in read_out.cautions]
    lines.append(_caution(_SPARE_NOTE))
    return Group(*lines)


def _spare_columns(weeks: int) -> tuple[_Column, ...]:
    return (
        _Column("part", text=True),
        _Column("fitted", spared=True),
        _Column("on hand"),
        _Column("on order"),
        _Column("printing"),
        _Column("needed"),
        _Column("short"),
        _Column("enough"),
        _Column("days", spared=True),
        _Column(f"expected in {count(weeks, 'week')}"),
        _Column("short from"),
    )


_SPARE_NOTE = (
    "Needed: for lead time and one week between looks. Planned replacements of good parts come on top. Short: beyond "
    "what is on hand and on order; what still prints is not counted."
)


def _spare_row(spare: SpareNeed) -> list[str]:
    last = spare.weeks[-1]
    return [
        spare.label + (" (mostly assumption)" if spare.mostly_assumption else ""),
        str(spare.fitted),
        str(spare.on_hand),
        str(spare.on_order),
        str(spare.printing) if spare.printing else "-",
        str(spare.needed),
        str(spare.short) if spare.short else "-",
        f"{percent(spare.chance_enough)} %",
        str(spare.days_until_restocked),
        f"{figure(last.expected)} ({last.low}–{last.high})",
        "-" if spare.short_from_week is None else f"week {spare.short_from_week}",
    ]


def plates_table(read_out: ReadOut) -> RenderableType:
    """Plates by printer and start."""
    plan, zone = read_out.plates.plan, read_out.history.zone
    if not plan.plates and not plan.shortages:
        return _sentence("Nothing to print: no printed part is short.")
    rows = [
        (
            plate.printer,
            str(plate.number),
            f"{plate.count} x {plate.label}" + (f" {plate.revision}" if plate.revision else ""),
            moment_text(plate.start, zone),
            moment_text(plate.taken_off_at, zone),
            f"{plate.hours:.1f} h",
            f"{plate.grams:.0f} g",
            f"{day(plate.due, zone)}{' LATE' if plate.late else ''}",
        )
        for plate in sorted(plan.plates, key=lambda plate: (plate.printer, plate.start))
    ]
    lines: list[RenderableType] = [_Listing("Print plates", _PLATE_COLUMNS, rows)] if rows else []
    lines += [_sentence(f"Cannot print: {said}") for said in plan.shortages]
    lines += [_sentence(said) for said in read_out.plates.judged]
    lines.append(_caution(_PLATE_CAUTION))
    return Group(*lines)


_PLATE_CAUTION = "Printing with nobody there: follow the printer's manual and the local fire rules, and air the room."
_PLATE_COLUMNS = (
    _Column("printer", text=True),
    _Column("plate", spared=True),
    _Column("parts", text=True),
    _Column("start"),
    _Column("taken off"),
    _Column("prints"),
    _Column("material", spared=True),
    _Column("due"),
)


def lives_table(read_out: ReadOut) -> RenderableType:
    """Lives of all part types, in running hours."""
    if not read_out.lives:
        return _sentence("No part types with failure modes yet: import them to see how long parts last.")
    advice = {entry.life: entry.advice for entry in read_out.replacements}
    rows = []
    for key, life in read_out.lives.items():
        outlook, replace = read_out.outlooks[key], advice.get(key)
        said = "" if replace is None else replace.verdict
        if replace is not None and replace.verdict == "replace at age":
            said = f"at {figure(replace.age)} h, saves {saved(replace)}"
        rows.append(
            (
                life.label + (" (mostly assumption)" if life.mostly_assumption else ""),
                str(life.data.failures),
                str(life.data.running),
                str(life.data.left_out) if life.data.left_out else "-",
                span(outlook.b10.low, outlook.b10.middle, outlook.b10.high, "h"),
                span(outlook.b50.low, outlook.b50.middle, outlook.b50.high, "h"),
                f"{percent(life.data_share)} %",
                said,
            )
        )
    listing = _Listing("Part lives in running hours", _LIFE_COLUMNS, rows)
    return Group(listing, _caution(f"In brackets: 8 times in 10. {GENERAL_CAUTION.capitalize()}."))


_LIFE_COLUMNS = (
    _Column("part", text=True),
    _Column("failed"),
    _Column("running", spared=True),
    _Column("age unknown", spared=True),
    _Column("1 in 10 gone by"),
    _Column("half gone by", spared=True),
    _Column("from records", spared=True),
    _Column("replace while good?", text=True),
)


def ages_table(document: dict[str, Any]) -> RenderableType:
    """Ages of all fitted parts."""
    if not document["parts"]:
        return _sentence("No parts fitted there: record what is fitted, or check robot and part.")
    rows = [_age_row(part) for part in document["parts"]]
    said = f"{count(len(rows), 'line')}."
    if not all(part["known"] for part in document["parts"]):
        said += " Over: nobody knows how long it ran before it was fitted."
    return Group(_Listing("Ages of fitted parts", _AGE_COLUMNS, rows), _sentence(said))


def _age_row(part: dict[str, Any]) -> list[str]:
    age, places = part["age"], part["places"]
    where = "" if len(places) == 1 and places[0] == 1 else f"{places[0]}-{places[-1]}" if places[1:] else str(places[0])
    return [
        part["robot"] or "shelf",
        part["joint"] or "-",
        part["slot"],
        where,
        str(part["count"]),
        ("" if part["known"] else "over ") + f"{age['hours']:.1f} h",
        *(f"{age[clock]:,.0f}" if clock in age else "?" for clock in ("turns", "impacts", "days")),
    ]


_AGE_COLUMNS = (
    _Column("robot", text=True),
    _Column("joint", text=True),
    _Column("slot", text=True),
    _Column("place"),
    _Column("parts"),
    _Column("age"),
    _Column("turns"),
    _Column("impacts"),
    _Column("days"),
)
