"""Fitting a table of lives at the command line."""

from __future__ import annotations

from pathlib import Path

import pytest

from tests.cli.conftest import Answer, Command
from tests.published import agrees, table

HEADER = "lower,upper,entry,count,mode\n"


def nist(folder: Path) -> Path:
    """The twenty units of the NIST handbook, as a table of lives."""
    units = table("nist_weibull_20_units.csv")
    rows = [f"{t},{t if failed == '1' else ''}" for t, failed in zip(units["time_h"], units["failed"], strict=True)]
    path = folder / "nist.csv"
    path.write_text("\n".join(["lower,upper", *rows]) + "\n")
    return path


def fitted(wearbook: Command, text: str, *options: str) -> Answer:
    Path("table.csv").write_text(text)
    return wearbook("fit", "table.csv", *options)


def test_the_twenty_units_of_the_nist_handbook(wearbook: Command, tmp_path: Path) -> None:
    found = wearbook("fit", nist(tmp_path), "--json").document
    assert found["shape"] == pytest.approx(1.7208, abs=2e-4)
    assert agrees("W01a", found["shape"])
    assert agrees("W01b", found["scale"])
    assert agrees("W01c", found["log_likelihood"])
    assert (found["rows"], found["parts"], found["failures"]) == (20, 20, 10)
    assert found["bounds"]["shape"][0] < found["shape"] < found["bounds"]["shape"][1]
    assert len(found["kaplan_meier"]) == 10
    text = wearbook("fit", nist(tmp_path)).out
    assert "1.721" in text and "606.5" in text and "bounds (95 %)" in text


def test_no_failures_are_an_answer(wearbook: Command) -> None:
    answer = fitted(wearbook, "lower,upper\n100,\n100,\n", "--json")
    assert answer.code == 0
    assert (answer.document["shape"], answer.document["failures"]) == (None, 0)
    assert answer.document["sentence"].startswith("No failures")
    believed = fitted(wearbook, "lower,upper\n100,\n100,\n", "--t10", "100", "--factor", "3", "--json").document
    assert believed["posterior"]["mostly_assumption"]
    assert believed["posterior"]["b10"]["middle"] > 100


def test_counts_intervals_late_entry_and_modes_are_read(wearbook: Command) -> None:
    rows = f"{HEADER}80,80,,3,worn\n90,120,20,,split\n150,,,10,\n"
    document = fitted(wearbook, rows, "--json").document
    assert (document["rows"], document["parts"], document["failures"]) == (3, 14, 4)
    one = fitted(wearbook, rows, "--mode", "worn", "--json").document
    assert one["failures"] == 3
    assert "has no mode 'melted'; it has: split, worn." in fitted(wearbook, rows, "--mode", "melted").err


def test_a_higher_level_widens_the_bounds(wearbook: Command, tmp_path: Path) -> None:
    widths = []
    for level in ("0.5", "0.9", "0.99"):
        low, high = wearbook("fit", nist(tmp_path), "--level", level, "--json").document["bounds"]["shape"]
        widths.append(high - low)
    assert widths == sorted(widths)


@pytest.mark.parametrize(
    ("text", "sentence"),
    [
        ("low,up\n1,1\n", "has the header low, up: it needs lower and upper"),
        ("", "has the header (none)"),
        ("lower,upper\n", "has no rows"),
        ("lower,upper\nNaN,1\n", "line 2: lower is 'NaN', not a finite number"),
        ("lower,upper\n1,inf\n", "line 2: upper is 'inf', not a finite number"),
        ("lower,upper\n3h,4\n", "line 2: lower is '3h', not a finite number"),
        ("lower,upper\n5,2\n", "Row 1: `lower` is above `upper`"),
        ("lower,upper\n-5,2\n", "Row 1: `lower` is not an age"),
        ("lower,upper\n54,0,54,0\n", "line 2: has 4 cells, the header has 2"),
        ("lower,upper,count\n5,5,0\n", "Row 1: `count` is not above 0"),
        ("lower,upper\n\x00\xff", "is not a CSV file"),
    ],
)
def test_a_table_that_cannot_be_is_refused_with_its_line(wearbook: Command, text: str, sentence: str) -> None:
    Path("table.csv").write_bytes(text.encode("latin-1"))
    answer = wearbook("fit", "table.csv", "--json")
    assert (answer.code, answer.out) == (2, "")
    assert answer.err.startswith("wearbook: ")
    assert sentence in answer.err


@pytest.mark.parametrize(
    ("options", "sentence"),
    [
        (("--t10", "100"), "--t10 and --factor belong together"),
        (("--t10", "-5", "--factor", "2"), "-5 cannot be: give an age from"),
        (("--t10", "100", "--factor", "1"), "1 cannot be: give a factor from 1.01 to 1000"),
        (("--level", "95%"), "'95%' is not a plain number: write a confidence such as 0.95"),
        (("--level", "1"), "1 cannot be: give a confidence from 0.01 to 0.9999"),
    ],
)
def test_an_option_that_cannot_be_is_refused(
    wearbook: Command, tmp_path: Path, options: tuple[str, ...], sentence: str
) -> None:
    answer = wearbook("fit", nist(tmp_path), *options)
    assert (answer.code, answer.out) == (2, "")
    assert sentence in answer.err
