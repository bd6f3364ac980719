"""From results to tables for a terminal: aligned, with units, a range beside every estimate."""

from __future__ import annotations

from collections.abc import Iterable
from typing import Any

from rich.console import Group, RenderableType
from rich.table import Table
from rich.text import Text

from fleet.pipeline import ReadOut
from fleet.plans.spare_list import SpareNeed
from fleet.report.documents import GENERAL_CAUTION, ODDS_CAUTION
from fleet.report.wording import chance, count, day, figure, joined, moment_text, percent, span

MOST_JOINTS = 3


def _table(title: str, columns: Iterable[tuple[str, str]]) -> Table:
    table = Table(title=title, title_justify="left", title_style="bold", box=None, padding=(0, 2, 0, 0))
    for name, side in columns:
        table.add_column(name, justify="right" if side == "right" else "left", no_wrap=side == "right")
    return table


def _caution(text: str) -> Text:
    return Text(text, style="italic")


def _sentence(text: str) -> Text:
    return Text(text)


def odds_table(read_out: ReadOut) -> RenderableType:
    """Robots before their next session: held first, then lowest odds first."""
    session = read_out.next_session
    if not session.robots:
        return _sentence("No robots yet: import your set-up with 'wearbook import FOLDER'.")
    table = _table("Odds of finishing the next session without a stop", _ODDS_COLUMNS)
    for robot in session.robots:
        joints = [f"{j.label} {percent(j.stops.mean)} % ({j.word})" for j in robot.joints[:MOST_JOINTS]]
        if robot.held is not None:
            table.add_row(robot.code, "held", f"do not run: {robot.held.why}")
        elif robot.finishes is None:
            table.add_row(robot.code, "", "no parts with a known life yet: record what is fitted")
        else:
            note = f" [mostly assumption: {robot.failures_seen} failures seen]" if robot.mostly_assumption else ""
            table.add_row(robot.code, chance(robot.finishes), Text(f"{joined(joints)}{note}"))
    lines: list[RenderableType] = [table]
    if session.fleet is not None:
        lines.append(_sentence(f"All that are not held finish: {chance(session.fleet)}."))
    lines.append(
        _caution(f"In brackets: how well the chance itself is known (8 times in 10). {ODDS_CAUTION.capitalize()}.")
    )
    return Group(*lines)


_ODDS_COLUMNS = (("robot", "left"), ("finishes", "right"), ("most likely to stop it", "left"))


def spares_table(read_out: ReadOut) -> RenderableType:
    """Spares: what is short first."""
    if not read_out.spares:
        return _sentence("No parts fitted yet: record what is fitted to see which spares to hold.")
    title = f"Spares that last until restocked with {percent(read_out.question.target)} % (run to failure)"
    table = _table(title, _SPARE_COLUMNS)
    for spare in read_out.spares:
        table.add_row(*_spare_row(spare))
    short = [f"{spare.label}: short by {spare.short}" for spare in read_out.spares if spare.short]
    said = f"{joined(short)}." if short else "Nothing is short."
    return Group(table, _sentence(said[:1].upper() + said[1:]), _caution(_SPARE_NOTE))


_SPARE_COLUMNS = (
    ("part", "left"),
    ("fitted", "right"),
    ("on hand", "right"),
    ("on order", "right"),
    ("needed", "right"),
    ("short", "right"),
    ("enough", "right"),
    ("days", "right"),
    ("expected in 8 weeks", "right"),
    ("short from", "left"),
)
_SPARE_NOTE = "Needed: for lead time and one week between looks. Planned replacements of good parts come on top."


def _spare_row(spare: SpareNeed) -> list[str]:
    last = spare.weeks[-1]
    label = spare.label + (" (mostly assumption)" if spare.mostly_assumption else "")
    return [
        label,
        str(spare.fitted),
        str(spare.on_hand) + (f" +{spare.set_aside} set aside" if spare.set_aside else ""),
        str(spare.on_order + spare.printing),
        str(spare.needed),
        str(spare.short) if spare.short else "-",
        f"{percent(spare.chance_enough)} %",
        str(spare.days_until_restocked),
        f"{figure(last.expected)} ({last.low}-{last.high})",
        "-" if spare.short_from_week is None else f"week {spare.short_from_week}",
    ]


def plates_table(read_out: ReadOut) -> RenderableType:
    """Plates by printer and start."""
    plan, zone = read_out.plates.plan, read_out.history.zone
    if not plan.plates and not plan.shortages:
        return _sentence("Nothing to print: no printed part is short.")
    table = _table("Print plates", _PLATE_COLUMNS)
    for plate in sorted(plan.plates, key=lambda plate: (plate.printer, plate.start)):
        table.add_row(
            plate.printer,
            str(plate.number),
            f"{plate.count} x {plate.label}" + (f" {plate.revision}" if plate.revision else ""),
            moment_text(plate.start, zone),
            moment_text(plate.taken_off_at, zone),
            f"{plate.hours:.1f} h",
            f"{plate.grams:.0f} g",
            f"{day(plate.due, zone)}{' LATE' if plate.late else ''}",
        )
    lines: list[RenderableType] = [table, *(_sentence(f"Cannot print: {said}") for said in plan.shortages)]
    lines.append(_caution("Nobody beside a running printer: follow its manual and the local fire rules; air the room."))
    return Group(*lines)


_PLATE_COLUMNS = (
    ("printer", "left"),
    ("plate", "right"),
    ("parts", "left"),
    ("start", "right"),
    ("taken off", "right"),
    ("prints", "right"),
    ("material", "right"),
    ("due", "left"),
)


def lives_table(read_out: ReadOut) -> RenderableType:
    """Lives of all part types, in running hours."""
    if not read_out.lives:
        return _sentence("No part types with failure modes yet: import them to see how long parts last.")
    advice = {entry.life: entry.advice for entry in read_out.replacements}
    table = _table("Part lives in running hours", _LIFE_COLUMNS)
    for key, life in read_out.lives.items():
        outlook, replace = read_out.outlooks[key], advice.get(key)
        said = "" if replace is None else replace.verdict
        if replace is not None and replace.verdict == "replace at age":
            said = f"replace at {figure(replace.age)} h (saves {percent(replace.saving)} %)"
        table.add_row(
            life.label,
            str(life.data.failures),
            str(life.data.running),
            str(life.data.left_out) if life.data.left_out else "-",
            span(outlook.b10.low, outlook.b10.middle, outlook.b10.high, "h"),
            span(outlook.b50.low, outlook.b50.middle, outlook.b50.high, "h"),
            "mostly assumption" if life.mostly_assumption else f"{percent(life.data_share)} % records",
            said,
        )
    return Group(table, _caution(f"In brackets: 8 times in 10. {GENERAL_CAUTION.capitalize()}."))


_LIFE_COLUMNS = (
    ("part", "left"),
    ("failed", "right"),
    ("running", "right"),
    ("age unknown", "right"),
    ("1 in 10 gone by", "right"),
    ("half gone by", "right"),
    ("basis", "left"),
    ("replace while good?", "left"),
)


def ages_table(document: dict[str, Any]) -> RenderableType:
    """Ages of all fitted parts."""
    if not document["parts"]:
        return _sentence("No parts fitted there: record what is fitted, or check robot and part.")
    table = _table("Ages of fitted parts", _AGE_COLUMNS)
    for part in document["parts"]:
        age, places = part["age"], part["places"]
        where = (
            "" if len(places) == 1 and places[0] == 1 else f"{places[0]}-{places[-1]}" if places[1:] else str(places[0])
        )
        table.add_row(
            part["robot"] or "shelf",
            part["joint"] or "-",
            part["slot"],
            where,
            str(part["count"]),
            f"{age['hours']:.1f} h" + ("" if part["known"] else " since fitted; age before unknown"),
            f"{age.get('turns', 0):,.0f}" if "turns" in age else "?",
            f"{age.get('impacts', 0):,.0f}" if "impacts" in age else "?",
            f"{age.get('days', 0):.0f}" if "days" in age else "?",
        )
    return Group(table, _sentence(f"{count(len(document['parts']), 'line')}."))


_AGE_COLUMNS = (
    ("robot", "left"),
    ("joint", "left"),
    ("slot", "left"),
    ("place", "right"),
    ("parts", "right"),
    ("age", "right"),
    ("turns", "right"),
    ("impacts", "right"),
    ("days", "right"),
)
