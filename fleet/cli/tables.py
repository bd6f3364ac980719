"""The command that fits a table of lives without a book."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, Any

import click

from fleet.cli.options import Number, json_option, show

if TYPE_CHECKING:
    from rich.console import RenderableType

    from fleet.lives.life_data import LifeData

AGE = Number("an age", 1e-9, 1e13, "120")
FACTOR = Number("a factor", 1.01, 1000, "3")
LEVEL = Number("a confidence", 0.01, 0.9999, "0.95")


@click.command("fit")
@click.argument("table", type=click.Path(path_type=Path))
@click.option("--mode", help="Fit this mode, the others suspended. [all modes together]")
@click.option("--level", default=0.95, show_default=True, type=LEVEL, help="Confidence of the bounds.")
@click.option("--t10", type=AGE, help="Belief: by what age would 1 in 10 be gone?")
@click.option("--factor", type=FACTOR, help="Belief: give or take what factor (9 times in 10)?")
@click.option(
    "--shape",
    "shape_median",
    default=2.0,
    show_default=True,
    type=Number("a shape", 0.1, 50, "2"),
    help="Belief: middle value of the shape.",
)
@click.option("--shape-factor", default=2.0, show_default=True, type=FACTOR, help="Belief: give or take what factor?")
@json_option
def fit_command(
    table: Path,
    mode: str | None,
    level: float,
    t10: float | None,
    factor: float | None,
    shape_median: float,
    shape_factor: float,
    as_json: bool,
) -> None:
    """Fit a Weibull life to TABLE, a CSV file with the columns lower, upper[, entry, count, mode].

    One row a part (or `count` like parts): equal lower and upper is the age at failure; an empty upper is a part still
    good at `lower`; otherwise it failed in (lower, upper]. `entry` is the age from which it was watched.

    JSON: rows, parts, failures, shape, scale, log_likelihood, bounds{shape, scale, b10}, b10, kaplan_meier[], sentence;
    with --t10 and --factor also posterior{b10{low, middle, high}, data_share, mostly_assumption}.
    """
    from fleet.errors import DataError
    from fleet.fits.table_fit import BeliefAsked, fit_table
    from fleet.lives.life_data import LifeData
    from fleet.store.life_table import read_life_table

    if (t10 is None) != (factor is None):
        raise click.UsageError("--t10 and --factor belong together: give both, or neither.")
    read = read_life_table(table)
    data = LifeData(read.lower, read.upper, read.entry, read.count, read.mode if any(read.mode) else None)
    if mode is not None:
        if mode not in data.modes:
            raise DataError(f"{table} has no mode {mode!r}; it has: {', '.join(data.modes) or 'none'}.")
        data = data.for_mode(mode)
    asked = None if t10 is None or factor is None else BeliefAsked(t10, factor, shape_median, shape_factor)
    found = fit_table(data, level, asked)
    show(as_json, lambda: _document(data, found), lambda: _table(data, found, level))


def _document(data: LifeData, found: Any) -> dict[str, Any]:
    from fleet.report.fit_report import fit_document

    return fit_document(data, found)


def _table(data: LifeData, found: Any, level: float) -> RenderableType:
    from fleet.report.fit_report import fit_table_text

    return fit_table_text(data, found, level)
