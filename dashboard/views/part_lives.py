"""Part lives: how long each part type lasts, what is behind that, and whether to replace it while it is good."""

from __future__ import annotations

import math
from collections.abc import Sequence

import streamlit as st

from dashboard import answers
from dashboard.charts import life_chart
from dashboard.curves import LifeCurves, life_curves, listed
from dashboard.frame import empty_book, ground_now, lead, title
from dashboard.links import chosen, show, show_linked
from dashboard.marks import (
    Html,
    address,
    assumption,
    caution,
    element,
    folded,
    html,
    joined_html,
    link,
    table,
)
from fleet.errors import RecordError
from fleet.fits.part_lives import ModeLife, PartLife
from fleet.forecasts.part_outlook import LEAST_FAILURES, AgeRange
from fleet.lives.part_data import LifeKey
from fleet.pipeline import Question, ReadOut
from fleet.plans.replacement import NO_LIMIT, NOT_BY_AGE, ReplacementAge
from fleet.records.set_up import PartType
from fleet.records.vocabulary import CLOCK_UNITS
from fleet.report.wording import NO_BREAK, capital, count, figure, percent, saved, span

_NOT_ASKED = "Nobody has said yet how long these are believed to last: a wide guess stands in."


def draw() -> None:
    """Draw the page."""
    if not answers.history().of(PartType):
        title("Part lives")
        empty_book()
        return
    found = answers.read_out(Question())
    code = chosen("part")
    keys = [key for key in found.lives if code_of(found, key) == code]
    if code is None or not keys:
        _all(found)
        if code is not None:
            raise RecordError(f"There is no part type {code!r} with a way to fail in this book.")
        return
    _one_type(found, keys)


def code_of(found: ReadOut, key: LifeKey) -> str:
    """The code of a life's part type."""
    return found.history.one(PartType, key.part_type).code


def _all(found: ReadOut) -> None:
    title("Part lives")
    known = [life for life in found.lives.values() if not life.mostly_assumption]
    failures = sum(life.data.failures for life in found.lives.values())
    running = sum(life.data.running for life in found.lives.values())
    lead(
        f"{count(len(known), 'life', 'lives')} of {len(found.lives)} mostly known from records: "
        f"{count(failures, 'failure')} and {count(running, 'part')} still running."
    )
    words = "Ages in running hours of a new part. In brackets: the range that should hold it 8 times in 10."
    ordered = sorted(found.lives, key=lambda key: found.outlooks[key].b10.middle)
    rows = [_row(found, key) for key in ordered]
    show_linked(
        table(["Part", "1 in 10 gone by", "Half gone by", "Seen", "Replace while good"], rows, words), key="lives"
    )


def _row(found: ReadOut, key: LifeKey) -> list[str | Html]:
    life, outlook = found.lives[key], found.outlooks[key]
    seen = f"{count(life.data.failures, 'failure')}, {life.data.running:,} running"
    said = assumption(life.data.failures) if life.mostly_assumption else html(seen)
    name = link(life.label, address("lives", part=code_of(found, key)))
    return [name, _age(outlook.b10), _age(outlook.b50), said, _short_advice(_advice(found, key))]


def _age(age: AgeRange) -> str:
    return span(age.low, age.middle, age.high, "h")


def _advice(found: ReadOut, key: LifeKey) -> ReplacementAge | None:
    return next((entry.advice for entry in found.replacements if entry.life == key), None)


def _short_advice(advice: ReplacementAge | None) -> str:
    if advice is None:
        return "none running"
    if advice.verdict == NOT_BY_AGE:
        return "no"
    if advice.verdict == NO_LIMIT:
        return "not worth it"
    return f"at {figure(advice.age)}{NO_BREAK}h ({_saved(advice)})"


def _saved(advice: ReplacementAge) -> str:
    return f"saves {saved(advice)}"


def _one_type(found: ReadOut, keys: Sequence[LifeKey]) -> None:
    """One part type: each of its revisions and lots in a panel of its own, all on the same axes."""
    show_linked(link("All parts", "/lives"), key="lives-up")
    title(capital(found.history.one(PartType, keys[0].part_type).label))
    curves = {key: life_curves(found, key) for key in keys}
    end = max(_end(found, key, curves[key]) for key in keys)
    ordered = sorted(keys, key=lambda key: -found.lives[key].data.running)
    for key in ordered:
        with st.container(border=len(keys) > 1):
            _panel(found, key, curves[key], end, alone=len(keys) == 1)


def _end(found: ReadOut, key: LifeKey, curves: LifeCurves) -> float:
    """Where the axis ends: past everything that was seen, and past half gone where that is not far off."""
    seen = max(curves.steps["hours"].max() if len(curves.steps) else 0.0, _oldest(curves))
    b10, b50 = found.outlooks[key].b10, found.outlooks[key].b50
    wanted = max(1.15 * seen, 1.2 * min(b50.middle, max(3 * seen, b10.high)))
    return float(min(max(wanted, 1.0), found.outlooks[key].hours[-1]))


def _oldest(curves: LifeCurves) -> float:
    return float(curves.running["hours"].max()) if len(curves.running) else 0.0


def _panel(found: ReadOut, key: LifeKey, curves: LifeCurves, end: float, alone: bool) -> None:
    life, outlook = found.lives[key], found.outlooks[key]
    if not alone:
        show(element("h2", life.label))
    lead(
        f"Half last past {_age(outlook.b50)}; 1 in 10 is gone by {_age(outlook.b10)}. "
        f"{capital(count(life.data.failures, 'failed', 'failed'))}, {count(life.data.running, 'running', 'running')}."
    )
    show(*_cautions(life))
    st.altair_chart(life_chart(curves, end, ground_now()), theme=None, key=f"life {key.name}")
    show(_chart_words(curves), _curve_table(curves, end), _advice_words(_advice(found, key)), _modes(life))


def _cautions(life: PartLife) -> list[Html]:
    blocks = []
    if life.mostly_assumption:
        seen = f"{count(life.data.failures, 'failure')} seen"
        blocks.append(caution("Mostly assumption", f"{seen}; records weigh {percent(life.data_share)} % here."))
    if not life.asked:
        blocks.append(caution("Not asked", _NOT_ASKED))
    if life.data.left_out:
        left = count(life.data.left_out, "part")
        blocks.append(caution("Left out", f"{left} of unknown age: they count for stock, not for this life."))
    return blocks


def _chart_words(curves: LifeCurves) -> Html:
    model = (
        "Thick line and its band: what records and belief say together (80 %). Dashed: the belief before any record."
    )
    if not len(curves.steps):
        return element("p", f"{model} Under {LEAST_FAILURES} failures, so no steps are drawn.", class_="soft small")
    steps = "Thin steps and their band: the records alone. Ticks: parts still running, at their age."
    return element("p", f"{model} {steps}", class_="soft small")


def _curve_table(curves: LifeCurves, end: float) -> Html:
    rows: list[list[str | Html]] = []
    for row in listed(curves, end):
        alone = "no word" if row.records is None else f"{percent(row.records)}{NO_BREAK}%"
        both = f"{percent(row.reliability)}{NO_BREAK}% ({percent(row.low)}–{percent(row.high)})"
        rows.append([f"{figure(row.hours)}{NO_BREAK}h", both, alone, f"{percent(row.believed)}{NO_BREAK}%"])
    head = ["Age", "Reach it (80 %)", "Records alone", "Belief before"]
    return folded("The same in figures", table(head, rows, "Chance of a new part to reach an age."))


def _advice_words(advice: ReplacementAge | None) -> Html:
    head = element("h3", "Replace it while it is good?")
    if advice is None:
        return joined_html([head, element("p", "None of these runs now.")])
    if advice.verdict == NOT_BY_AGE:
        said = "No: an old one is no more likely to fail than a new one."
    elif advice.verdict == NO_LIMIT and not math.isfinite(advice.age):
        said = "Not worth a limit: no age costs less than running to failure."
    elif advice.verdict == NO_LIMIT:
        said = f"Not worth a limit: the best age, {figure(advice.age)} h, {_saved(advice)} of the cost."
    else:
        until = f"from {figure(advice.flat_low)} to {figure(advice.flat_high)} h"
        said = f"Yes, at {figure(advice.age)} h, or anywhere {until}: {_saved(advice)} against running to failure."
    return joined_html([head, element("p", said)])


def _modes(life: PartLife) -> Html:
    head = ["How it fails", "Seen", "1 in 10 gone by", "Believed before", "Records weigh"]
    rows = [_mode_row(mode) for mode in life.modes]
    return joined_html(
        [
            element("h3", "Ways to fail"),
            table(head, rows, "Each as if it were the only one, in the clock that drives it.", stack=True),
        ]
    )


def _mode_row(mode: ModeLife) -> list[str | Html]:
    unit = CLOCK_UNITS[mode.mode.clock]
    low, middle, high = (mode.unfit.b_life_quantile(10, q) for q in (0.1, 0.5, 0.9))
    # The belief is about the whole part; a mode's own share of it is its age at the same hazard.
    own = mode.belief.t10 * mode.belief.share ** (-1 / mode.belief.shape_median)
    return [
        mode.mode.label,
        count(round(mode.unfit.failures), "failure"),
        span(low, middle, high, unit),
        f"{figure(own)}{NO_BREAK}{unit}, give or take {figure(mode.belief.factor)} times",
        assumption(round(mode.unfit.failures))
        if mode.unfit.mostly_assumption
        else f"{percent(mode.unfit.data_share)} %",
    ]
