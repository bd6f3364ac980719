"""Spares: what is short and from when, what to hold of each part, and the demand ahead against the stock."""

from __future__ import annotations

from collections.abc import Mapping

import pandas as pd
import streamlit as st

from dashboard import answers
from dashboard.charts import demand_chart
from dashboard.choices import Choices
from dashboard.curves import stock_steps
from dashboard.frame import empty_book, ground_now, lead, title, worked_out
from dashboard.links import chosen, keep_address, show, show_linked
from dashboard.marks import Html, address, assumption, caution, cautions, element, folded, joined_html, link, table
from fleet.pipeline import Question, ReadOut
from fleet.plans.spare_list import SpareNeed
from fleet.records.set_up import PartType
from fleet.report.wording import NO_BREAK, capital, count, figure, joined, percent

_WEEKS, _TARGETS = ("4", "8", "12", "26"), ("80", "90", "95")
Kept = Mapping[str, str | None]
_NOTE = "Run to failure: planned replacements of parts that are still good come on top."


def draw() -> None:
    """Draw the page."""
    title("Spares")
    if not answers.history().of(PartType):
        empty_book()
        return
    choices = Choices("spares")
    left, right = st.columns(2)
    with left:
        weeks = choices.one("weeks", "Weeks ahead", _WEEKS, "8", required=True) or "8"
    with right:
        target = choices.one("target", "Chance that the stock lasts", _TARGETS, "90", _share, required=True) or "90"
    found = answers.read_out(Question(weeks=int(weeks), target=int(target) / 100))
    if not found.spares:
        show(element("p", "No parts fitted yet: record what is fitted to see which spares to hold."))
        return
    kept = {"weeks": None if weeks == "8" else weeks, "target": None if target == "90" else target}
    shown = next((need for need in found.spares if need.code == chosen("part")), found.spares[0])
    lead(_sentence(found))
    unplanned = cautions([caution("No plan", sentence) for sentence in found.cautions])
    show_linked(unplanned, _short_list(found, kept), key="spares-short")
    _fan(found, shown)
    everything = folded(f"All {count(len(found.spares), 'part')} in one table", _table(found, kept))
    show_linked(everything, key="spares-all")
    worked_out(found.history)
    keep_address("spares", {**kept, "part": chosen("part")})


def _share(option: str) -> str:
    return f"{option}{NO_BREAK}%"


def _sentence(found: ReadOut) -> str:
    now = [need.label for need in found.spares if need.short]
    later = [need.label for need in found.spares if not need.short and need.short_from_week is not None]
    weeks = found.question.weeks
    said = [f"Short already: {joined(now)}."] if now else ["Nothing is short until it can be restocked."]
    if later:
        said.append(f"Within {weeks} weeks also {joined(later)}.")
    elif not now:
        said.append(f"The stock lasts {weeks} weeks.")
    return " ".join(said)


def _short_list(found: ReadOut, kept: Kept) -> Html:
    """What is short, the first to run out first."""
    short = [need for need in found.spares if need.short or need.short_from_week is not None]
    if not short:
        return Html("")
    return element("ul", *(_short_line(need, found.question.weeks, kept) for need in short), class_="short")


def _short_line(need: SpareNeed, weeks: int, kept: Kept) -> Html:
    head = element("strong", link(capital(need.label), address("spares", **kept, part=need.code)))
    if need.short:
        said = f": {count(need.short, 'part')} short of what must last {count(need.days_until_restocked, 'day')}"
    else:
        said = f": {count(need.short_by_end, 'part')} short by the end of {weeks} weeks"
    week = "" if need.short_from_week is None else f", may run out from week {need.short_from_week}"
    last = need.weeks[-1]
    wanted = f"Wanted in {weeks} weeks: {figure(last.expected, 2)} ({last.low}–{last.high}). {_stock(need)}."
    doing = link("See the plates", address("plates")) if need.printed else Html("Bought: order it.")
    waits = f" {count(need.waiting, 'joint waits', 'joints wait')} for one now." if need.waiting else ""
    return element("li", head, f"{said}{week}.{waits}", element("div", wanted, " ", doing, class_="small"))


def _stock(need: SpareNeed) -> str:
    said = [f"{need.on_hand:,} on hand"]
    said += [f"{need.on_order:,} on order"] if need.on_order else []
    said += [f"{need.printing:,} on a printer"] if need.printing else []
    said += [f"{need.set_aside:,} set aside"] if need.set_aside else []
    return joined(said)


def _table(found: ReadOut, kept: Kept) -> Html:
    weeks = found.question.weeks
    target = percent(found.question.target)
    head = ["Part", "In stock", "Hold", "Enough until restocked", f"Wanted in {weeks} weeks", "Behind it"]
    words = f"Hold: the smallest stock that lasts lead time and a week between looks with {target} %. {_NOTE}"
    return table(head, [_row(need, kept) for need in found.spares], words, stack=True)


def _row(need: SpareNeed, kept: Kept) -> list[str | Html]:
    last = need.weeks[-1]
    seen = count(need.failures_seen, "failure")
    return [
        link(need.label, address("spares", **kept, part=need.code)),
        _stock(need),
        f"{need.needed:,}",
        joined_html([f"{percent(need.chance_enough)}{NO_BREAK}%", _short_word(need)]),
        f"{figure(last.expected, 2)} ({last.low}–{last.high})",
        assumption(need.failures_seen) if need.mostly_assumption else seen,
    ]


def _short_word(need: SpareNeed) -> Html:
    if not need.short:
        return Html("")
    return element("strong", f", short by {need.short:,}")


def _fan(found: ReadOut, need: SpareNeed) -> None:
    """One part: demand by week as a fan, the stock as a staircase, both again in a table, and the lots."""
    show(element("h2", f"{capital(need.label)}, week by week"))
    weeks = pd.DataFrame(
        [{"week": 0, "expected": float(need.waiting), "low": need.waiting, "high": need.waiting}]
        + [{"week": w.week, "expected": w.expected, "low": w.low, "high": w.high} for w in need.weeks]
    )
    st.altair_chart(demand_chart(weeks, stock_steps(found, need), ground_now()), theme=None, key=f"fan {need.code}")
    words = "Thick line and fan: parts wanted by the end of each week (8 times in 10). Dotted stairs: parts there."
    rows: list[list[str | Html]] = [
        [f"week {week.week}", figure(week.expected, 2), f"{week.low}–{week.high}"] for week in need.weeks
    ]
    lots = [_lot_words(lot.code, lot.on_hand, lot.superseded, lot.kept_apart) for lot in need.lots]
    bags = element("p", f"Lots: {joined(lots)}." if lots else "No lot with anything left.")
    in_figures = table(["By the end of", "Wanted", "8 times in 10"], rows, "Parts wanted from now on.")
    show(element("p", words, class_="soft small"), bags, folded("The same in figures", in_figures))
    if need.mostly_assumption:
        show(caution("Mostly assumption", f"{count(need.failures_seen, 'failure')} of this part seen."))


def _lot_words(code: str, on_hand: int, superseded: bool, kept_apart: bool) -> str:
    odd = [word for word, true in (("superseded", superseded), ("kept apart", kept_apart)) if true]
    return f"{code} {on_hand:,}{f' ({joined(odd)}, not counted)' if odd else ''}"
