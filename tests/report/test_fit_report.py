"""The fit of one table in words and figures."""

from __future__ import annotations

from io import StringIO

import pytest
from rich.console import Console

from fleet.fits.table_fit import BeliefAsked, fit_table
from fleet.lives.life_data import LifeData
from fleet.report.fit_report import fit_document, fit_table_text

INF = float("inf")
STORY_6 = LifeData(
    [80, 110, 130, 150, 170, *(good := [40, 55, 60, 70, 75, 90, 95, 100, 115, 120, 140, 145, 160, 175, 180])],
    [80, 110, 130, 150, 170, *[INF] * len(good)],
)


def text_of(data: LifeData, asked: BeliefAsked | None = None, width: int = 80) -> str:
    file = StringIO()
    Console(file=file, width=width, highlight=False).print(fit_table_text(data, fit_table(data, 0.95, asked), 0.95))
    return file.getvalue().replace("\u00a0", " ")


def test_story_6_in_a_table_and_in_a_document() -> None:
    document = fit_document(STORY_6, fit_table(STORY_6, 0.95, None))
    assert document["shape"] == pytest.approx(4.532, abs=5e-4)
    assert document["scale"] == pytest.approx(181.85, abs=5e-3)
    assert document["b10"] == pytest.approx(110.7, abs=0.05)
    assert (document["rows"], document["parts"], document["failures"]) == (20, 20, 5)
    text = text_of(STORY_6)
    assert "4.532" in text and "181.9" in text and "110.7" in text
    assert "bounds (95 %)" in text
    assert "5 failures: the parts wear out" in text


def test_the_steps_of_the_document_are_those_of_the_survivors() -> None:
    data = LifeData([10, 20, 30, 40], [10, 20, 30, INF])
    steps = fit_document(data, fit_table(data, 0.95, None))["kaplan_meier"]
    assert [step["age"] for step in steps] == [10, 20, 30]
    assert [step["reliability"] for step in steps] == pytest.approx([0.75, 0.5, 0.25])


def test_a_belief_is_told_with_its_range_and_basis() -> None:
    asked = BeliefAsked(100.0, 3.0, 2.0, 2.0)
    text = " ".join(text_of(LifeData([100] * 8, [INF] * 8), asked).split())
    assert "With your belief: 1 in 10 gone by" in text
    assert text.endswith("mostly assumption.")
    assert " ".join(text_of(STORY_6, asked).split()).endswith("mostly records.")


@pytest.mark.parametrize("width", [40, 80, 160])
def test_it_fits_its_terminal(width: int) -> None:
    lines = text_of(STORY_6, BeliefAsked(100.0, 3.0, 2.0, 2.0), width).splitlines()
    assert all(len(line) <= width for line in lines)
