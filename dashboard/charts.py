"""Tables and the ground in; Altair pictures in our colours out. Every picture has a table beside it on its page."""

from __future__ import annotations

from typing import Any

import altair as alt
import pandas as pd

from dashboard.curves import LifeCurves
from dashboard.look import Ground, tokens

_FONT = '"Source Sans", "Source Sans Pro", sans-serif'
_HEIGHT = 300


def life_chart(curves: LifeCurves, end: float, ground: Ground) -> Any:
    """Chance to reach an age: steps and band of the records, curve and band of the model, dashed belief, ticks."""
    colours = tokens(ground)
    x = alt.X(
        "hours:Q",
        title="age [running hours]",
        scale=alt.Scale(domain=[0, end], nice=False),
        axis=alt.Axis(tickCount=6, labelOverlap=True),
    )
    model = alt.Chart(curves.model[curves.model["hours"] <= end])
    chance = alt.Y("reliability:Q", title="chance to reach it", scale=alt.Scale(domain=[0, 1]), axis=_percent())
    layers = [
        model.mark_area(color=colours["action"], opacity=0.16).encode(x=x, y=alt.Y("low:Q"), y2="high:Q"),
        model.mark_line(color=colours["soft"], strokeDash=[6, 5], strokeWidth=1.5).encode(x=x, y="believed:Q"),
        model.mark_line(color=colours["action"], strokeWidth=2.5).encode(x=x, y=chance),
    ]
    if len(curves.steps):
        steps, bounded = alt.Chart(curves.steps), alt.Chart(curves.steps.dropna())
        band = bounded.mark_area(color=colours["ink"], opacity=0.10, interpolate="step-after")
        line = steps.mark_line(color=colours["ink"], strokeWidth=1.5, interpolate="step-after")
        layers += [band.encode(x=x, y=alt.Y("low:Q"), y2="high:Q"), line.encode(x=x, y=chance)]
    if len(curves.running):
        ticks = alt.Chart(curves.running[curves.running["hours"] <= end])
        layers.append(
            ticks.mark_tick(color=colours["rule"], thickness=1, size=12, yOffset=-8).encode(x=x, y=alt.datum(0))
        )
    return _dressed(alt.layer(*layers).properties(height=_HEIGHT), ground)


def demand_chart(weeks: pd.DataFrame, stock: pd.DataFrame, ground: Ground) -> Any:
    """Parts wanted by the end of each week, as a fan, against the stock as a staircase.

    `weeks` has columns week, expected, low, high; `stock` week, parts.
    """
    colours = tokens(ground)
    last = int(weeks["week"].max())
    axis = alt.Axis(values=list(range(0, last + 1)), format="d")
    x = alt.X("week:Q", title="week from now", scale=alt.Scale(domain=[0, last], nice=False), axis=axis)
    y = alt.Y("expected:Q", title="parts", axis=alt.Axis(tickMinStep=1))
    fan = alt.Chart(weeks)
    layers = [
        fan.mark_area(color=colours["action"], opacity=0.18).encode(x=x, y=alt.Y("low:Q"), y2="high:Q"),
        fan.mark_line(color=colours["action"], strokeWidth=2.5).encode(x=x, y=y),
        alt.Chart(stock)
        .mark_line(color=colours["ink"], strokeWidth=2, interpolate="step-after", strokeDash=[2, 2])
        .encode(x=x, y=alt.Y("parts:Q")),
    ]
    return _dressed(alt.layer(*layers).properties(height=220), ground)


def score_chart(counts: pd.DataFrame, ground: Ground) -> Any:
    """Failures seen against failures forecast, one row a month; columns month, expected, low, high, seen."""
    colours = tokens(ground)
    x = alt.X("month:N", title=None, sort=None, axis=alt.Axis(labelAngle=0))
    rows = alt.Chart(counts)
    layers = [
        rows.mark_bar(color=colours["band"], width=10, cornerRadius=3).encode(
            x=x, y=alt.Y("low:Q", title="failures"), y2="high:Q"
        ),
        rows.mark_tick(color=colours["action"], thickness=2, width=18).encode(x=x, y="expected:Q"),
        rows.mark_point(color=colours["ink"], filled=True, size=70, opacity=1).encode(x=x, y="seen:Q"),
    ]
    return _dressed(alt.layer(*layers).properties(height=220), ground)


def _percent() -> alt.Axis:
    return alt.Axis(values=[0, 0.25, 0.5, 0.75, 1], labelExpr="round(datum.value * 100) + ' %'")


def _dressed(chart: Any, ground: Ground) -> Any:
    colours = tokens(ground)
    return (
        chart.configure(font=_FONT, background="transparent")
        .configure_axis(
            labelColor=colours["soft"],
            titleColor=colours["soft"],
            labelFontSize=13,
            titleFontSize=14,
            titleFontWeight="normal",
            gridColor=colours["hair"],
            domainColor=colours["rule"],
            tickColor=colours["rule"],
        )
        .configure_view(stroke=None)
    )
