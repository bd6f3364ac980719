"""A life out of a read-out in; the tables that its picture is drawn from, in running hours of a new part, out."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import pandas as pd

from fleet.fits.kaplan_meier import KaplanMeierFit
from fleet.lives.ages import PartSpan
from fleet.lives.part_data import LifeKey, life_key_of
from fleet.pipeline import ReadOut
from fleet.plans.spare_list import SpareNeed

_LEVEL = 0.8
_MOST_TICKS = 300
_ROWS = 9


@dataclass(frozen=True, eq=False)
class LifeCurves:
    """What the picture of one life shows; `steps` is empty under three failures, where steps would mislead.

    `model` has columns hours, reliability, low, high, believed; `steps` hours, reliability, low, high; `running` hours,
    parts: the ages of the parts that still run.
    """

    model: pd.DataFrame
    steps: pd.DataFrame
    running: pd.DataFrame


def life_curves(found: ReadOut, key: LifeKey) -> LifeCurves:
    """The tables of one life."""
    outlook = found.outlooks[key]
    model = pd.DataFrame(
        {
            "hours": outlook.hours,
            "reliability": outlook.reliability,
            "low": outlook.low,
            "high": outlook.high,
            "believed": outlook.believed,
        }
    )
    end = float(found.lives[key].data.whole.lower.max(initial=0.0))
    spans = [span for span in found.ages.spans if span.known and life_key_of(found.history, span.fitment) == key]
    return LifeCurves(model, _steps(outlook.steps, end), _running(spans))


def _steps(fit: KaplanMeierFit | None, end: float) -> pd.DataFrame:
    """Steps up to the oldest part that was seen; before the first failure their bounds say nothing."""
    if fit is None:
        return pd.DataFrame({"hours": [], "reliability": [], "low": [], "high": []})
    at = np.concatenate([[0.0], fit.time, [max(end, float(fit.time[-1]))]])
    low, high = fit.bounds(at, level=_LEVEL)
    unsaid = at < fit.time[0]
    return pd.DataFrame(
        {
            "hours": at,
            "reliability": fit.reliability(at),
            "low": np.where(unsaid, np.nan, low),
            "high": np.where(unsaid, np.nan, high),
        }
    )


def _running(spans: list[PartSpan]) -> pd.DataFrame:
    parts: dict[float, int] = {}
    for span in spans:
        if span.running:
            age = round(span.age["hours"], 1)
            parts[age] = parts.get(age, 0) + span.count
    ages = sorted(parts)[:: max(1, len(parts) // _MOST_TICKS)]
    return pd.DataFrame({"hours": ages, "parts": [parts[age] for age in ages]})


@dataclass(frozen=True)
class CurveRow:
    """The curves at one age; `records` is None where the steps say nothing."""

    hours: float
    reliability: float
    low: float
    high: float
    believed: float
    records: float | None


def listed(curves: LifeCurves, end: float) -> list[CurveRow]:
    """The same curves at a few ages, for the table under the picture."""
    at = np.linspace(0.0, end, _ROWS)
    columns = {name: np.interp(at, curves.model["hours"], curves.model[name]) for name in curves.model.columns}
    rows = []
    for place, hours in enumerate(at):
        own = {name: float(values[place]) for name, values in columns.items() if name != "hours"}
        rows.append(CurveRow(hours=float(hours), records=_records_at(curves.steps, float(hours)), **own))
    return rows


def _records_at(steps: pd.DataFrame, hours: float) -> float | None:
    if not len(steps) or hours > steps["hours"].max():
        return None
    return float(steps["reliability"].iloc[int(np.searchsorted(steps["hours"], hours, side="right")) - 1])


def stock_steps(found: ReadOut, need: SpareNeed) -> pd.DataFrame:
    """Parts there from each moment on, in weeks: what is on hand, and each order once it is due."""
    end = float(len(need.weeks))
    steps = [(0.0, need.on_hand)]
    for order in need.orders:
        weeks = (order.due_at - found.history.as_of).total_seconds() / (7 * 86_400)
        if 0.0 <= weeks <= end:
            steps.append((weeks, steps[-1][1] + order.quantity))
    steps.append((end, steps[-1][1]))
    return pd.DataFrame(steps, columns=["week", "parts"])
