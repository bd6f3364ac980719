"""A table of lives from one CSV file: empty cells mean something, and every bad cell is named."""

from __future__ import annotations

import math
from pathlib import Path

import pytest

from fleet.errors import BookError, DataError
from fleet.store.life_table import read_life_table


def table(folder: Path, text: str) -> Path:
    path = folder / "lives.csv"
    path.write_text(text, encoding="utf-8")
    return path


def test_an_empty_upper_is_a_suspension_and_other_empty_cells_have_their_defaults(tmp_path: Path) -> None:
    found = read_life_table(table(tmp_path, "\ufefflower,upper,entry,count,mode\n80,120,,,worn\n\n 90 ,,60,3,\n"))
    assert found.lower == [80.0, 90.0]
    assert found.upper == [120.0, math.inf]
    assert (found.entry, found.count, found.mode) == ([0.0, 60.0], [1.0, 3.0], ["worn", None])


def test_two_columns_are_enough(tmp_path: Path) -> None:
    found = read_life_table(table(tmp_path, "upper,lower\n80,80\n"))
    assert (found.lower, found.upper, found.entry, found.count, found.mode) == ([80.0], [80.0], [0.0], [1.0], [None])


def test_every_bad_cell_is_named_with_its_line(tmp_path: Path) -> None:
    with pytest.raises(DataError) as told:
        read_life_table(table(tmp_path, "lower,upper\n80,3h\n,90\nNaN,inf\n5\n"))
    assert str(told.value).splitlines() == [
        "lives.csv line 2: upper is '3h', not a finite number.",
        "lives.csv line 3: lower is '', not a finite number.",
        "lives.csv line 4: lower is 'NaN', not a finite number.",
        "lives.csv line 4: upper is 'inf', not a finite number.",
        "lives.csv line 5: has 1 cells, the header has 2.",
    ]


@pytest.mark.parametrize("header", ["lower", "lower,uper", "lower,upper,upper", "", "lower,upper,colour"])
def test_a_header_that_is_none_is_answered_with_the_right_one(tmp_path: Path, header: str) -> None:
    with pytest.raises(DataError, match="it needs lower and upper, and may have entry, count and mode"):
        read_life_table(table(tmp_path, f"{header}\n1,2\n"))


def test_a_table_without_rows_says_so(tmp_path: Path) -> None:
    with pytest.raises(DataError, match="has no rows"):
        read_life_table(table(tmp_path, "lower,upper\n"))


def test_a_file_that_cannot_be_read_says_why(tmp_path: Path) -> None:
    with pytest.raises(BookError, match="There is no file"):
        read_life_table(tmp_path / "gone.csv")
    with pytest.raises(BookError, match="cannot be read"):
        read_life_table(tmp_path)
    (tmp_path / "latin.csv").write_bytes("lower,upper,mode\n1,2,müde\n".encode("latin-1"))
    with pytest.raises(DataError, match="is not a CSV file in UTF-8"):
        read_life_table(tmp_path / "latin.csv")
