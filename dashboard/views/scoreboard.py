"""Scoreboard: what was forecast at the start of each past month, beside what followed, and the worst misses."""

from __future__ import annotations

from collections.abc import Sequence

import pandas as pd
import streamlit as st

from dashboard import answers
from dashboard.charts import score_chart
from dashboard.frame import empty_book, ground_now, lead, title
from dashboard.links import chosen, show, show_linked
from dashboard.marks import Html, address, element, facts, folded, joined_html, link, table
from fleet.forecasts.past_months import MonthForecast, coverage, misses, verdict
from fleet.forecasts.planned_use import robots_in_service
from fleet.records.history import History
from fleet.records.set_up import PartType
from fleet.report.wording import capital, count, figure

_LEAST, _WORST = 20, 5


def draw() -> None:
    """Draw the page."""
    title("Scoreboard")
    history = answers.history()
    if not robots_in_service(history):
        empty_book()
        return
    forecasts = answers.past_months()
    if not forecasts:
        lead("No full month has been logged yet. After the first one, this page compares each forecast with what came.")
        return
    judged = verdict([(forecast.distribution, forecast.seen) for forecast in forecasts])
    held = coverage(forecasts)
    lead(
        f"{judged.sentence} Of {held.forecasts} monthly counts, {held.inside} fell in the range forecast for them "
        f"(expect {held.low}–{held.high})."
    )
    show(
        element(
            "p",
            "Each forecast is made anew with what was known at the start of its month, "
            "for the hours that were really run.",
            class_="note",
        )
    )
    code = chosen("part")
    by_part = _by_part(history, forecasts)
    shown = code if code in by_part else max(by_part, key=lambda at: sum(f.seen for f in by_part[at]))
    if len(forecasts) >= _LEAST:
        _picture(history, by_part[shown])
    show_linked(_worst(history, forecasts), _parts(by_part), key="score")


def _by_part(history: History, forecasts: Sequence[MonthForecast]) -> dict[str, list[MonthForecast]]:
    """Part code -> its forecasts, oldest first."""
    found: dict[str, list[MonthForecast]] = {}
    for forecast in forecasts:
        found.setdefault(history.one(PartType, forecast.part_type).code, []).append(forecast)
    return found


def _month(history: History, forecast: MonthForecast) -> str:
    return f"{forecast.start.astimezone(history.zone):%b %Y}"


def _picture(history: History, forecasts: Sequence[MonthForecast]) -> None:
    """One part type: bars for the range, a line for what was expected, a dot for what came."""
    show(element("h2", f"{capital(forecasts[0].label)}, month by month"))
    counts = pd.DataFrame(
        [
            {"month": _month(history, f), "expected": f.expected, "low": f.low, "high": f.high, "seen": f.seen}
            for f in forecasts
        ]
    )
    st.altair_chart(score_chart(counts, ground_now()), theme=None, key=f"score {forecasts[0].part_type}")
    rows = [_row(_month(history, forecast), forecast) for forecast in forecasts]
    words = "Bar: the range meant for 8 in 10. Line: what was expected. Dot: failures seen."
    listed = table(["Month", "Expected", "Range", "Seen"], rows, "Failures by month.")
    show(element("p", words, class_="soft small"), folded("The same in figures", listed))


def _row(name: str | Html, forecast: MonthForecast) -> list[str | Html]:
    return [name, figure(forecast.expected, 2), f"{forecast.low}–{forecast.high}", str(forecast.seen)]


def _worst(history: History, forecasts: Sequence[MonthForecast]) -> Html:
    """The forecasts that were furthest off, with the records of what came."""
    drawn = [element("h2", "Furthest off")]
    for forecast in misses(forecasts, _WORST):
        said = [
            ("Expected", f"{figure(forecast.expected, 2)} ({forecast.low}–{forecast.high})"),
            ("Seen", count(forecast.seen, "failure")),
        ]
        records = element("ul", *(element("li", element("code", record)) for record in forecast.records))
        head = element("h3", f"{capital(forecast.label)}, {_month(history, forecast)}")
        drawn += [head, facts(said)]
        if forecast.records:
            drawn.append(folded(f"Records of {count(len(forecast.records), 'failure')}", records))
    return joined_html(drawn)


def _parts(by_part: dict[str, list[MonthForecast]]) -> Html:
    """All part types over all months together."""
    rows = []
    for code, held in sorted(by_part.items(), key=lambda item: item[1][0].label):
        expected = sum(forecast.expected for forecast in held)
        in_range = coverage(held)
        name = link(held[0].label, address("score", part=code))
        seen = sum(forecast.seen for forecast in held)
        rows.append(
            [
                name,
                figure(expected, 2),
                str(seen),
                f"{in_range.inside} of {in_range.forecasts} (expect {figure(in_range.expected, 2)})",
            ]
        )
    head = ["Part", "Expected", "Seen", "Months in range"]
    return joined_html([element("h2", "By part"), table(head, rows, "All these months together.", stack=True)])
