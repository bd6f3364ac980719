"""From the fit of one table to a JSON document and a text table."""

from __future__ import annotations

from typing import Any

from rich.console import Group, RenderableType
from rich.table import Table
from rich.text import Text

from fleet.fits.table_fit import TableFit
from fleet.lives.life_data import LifeData
from fleet.report.documents import GENERAL_CAUTION
from fleet.report.wording import figure, percent, span


def fit_document(data: LifeData, found: TableFit) -> dict[str, Any]:
    """Keys as listed in `wearbook fit --help`; values that the data do not allow are null."""
    weibull, bounds, posterior = found.weibull, found.bounds, found.posterior
    document: dict[str, Any] = {
        "rows": len(data),
        "parts": data.n,
        "failures": data.failures,
        "shape": None if weibull is None else weibull.shape,
        "scale": None if weibull is None else weibull.scale,
        "log_likelihood": None if weibull is None else weibull.log_likelihood,
        "b10": None if weibull is None else weibull.b_life(10),
        "bounds": None
        if bounds is None
        else {
            "shape": [_finite(end) for end in bounds.shape],
            "scale": [_finite(end) for end in bounds.scale],
            "b10": [_finite(end) for end in bounds.b_life(10)],
        },
        "kaplan_meier": None
        if found.steps is None
        else [
            {"age": float(age), "reliability": float(value)}
            for age, value in zip(found.steps.time, found.steps.estimate, strict=True)
        ],
        "sentence": found.sentence,
        "caution": GENERAL_CAUTION,
    }
    if posterior is not None:
        low, middle, high = (posterior.b_life_quantile(10, q) for q in (0.05, 0.5, 0.95))
        document["posterior"] = {
            "b10": {"low": low, "middle": middle, "high": high},
            "data_share": posterior.data_share,
            "mostly_assumption": posterior.mostly_assumption,
        }
    return document


def _finite(value: float) -> float | None:
    return float(value) if abs(value) < float("inf") else None


def fit_table_text(data: LifeData, found: TableFit, level: float) -> RenderableType:
    """The fit as a table with its bounds, and one sentence on what the data can tell."""
    table = Table(box=None, padding=(0, 2, 0, 0))
    for name in ("", "estimate", f"bounds ({percent(level)} %)"):
        table.add_column(name, justify="left" if not name else "right")
    table.add_row("parts", f"{data.n:g}", "")
    table.add_row("failures", f"{data.failures:g}", "")
    if found.weibull is not None and found.bounds is not None:
        rows = (
            ("shape", found.weibull.shape, found.bounds.shape),
            ("scale", found.weibull.scale, found.bounds.scale),
            ("B10 (1 in 10 gone by)", found.weibull.b_life(10), found.bounds.b_life(10)),
        )
        for name, value, (low, high) in rows:
            table.add_row(name, figure(value, 4), f"{figure(low, 4)} to {figure(high, 4)}")
        table.add_row("log-likelihood", f"{found.weibull.log_likelihood:.3f}", "")
    lines: list[RenderableType] = [table, Text(found.sentence)]
    if found.posterior is not None:
        low, middle, high = (found.posterior.b_life_quantile(10, q) for q in (0.05, 0.5, 0.95))
        basis = "mostly assumption" if found.posterior.mostly_assumption else "mostly records"
        lines.append(
            Text(
                f"With your belief: 1 in 10 gone by {span(low, middle, high)}, 9 times in 10 in the brackets; {basis}."
            )
        )
    return Group(*lines)
