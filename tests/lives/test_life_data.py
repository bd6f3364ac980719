"""Life data: what each row says, what cannot be, and one mode at a time."""

from __future__ import annotations

import numpy as np
import pytest

from fleet.errors import DataError
from fleet.lives.life_data import LifeData

INF = np.inf


def test_rows_are_told_apart_and_counted() -> None:
    data = LifeData([10, 20, 0, 30], [10, INF, 40, 50], count=[1, 5, 2, 3])
    assert data.is_exact.tolist() == [True, False, False, False]
    assert data.is_suspension.tolist() == [False, True, False, False]
    assert data.is_interval.tolist() == [False, False, True, True]
    assert (data.failures, data.suspensions, data.n, len(data)) == (6.0, 5.0, 11.0, 4)


def test_no_rows_at_all_are_life_data_too() -> None:
    data = LifeData([], [])
    assert (len(data), data.n, data.failures, data.modes) == (0, 0.0, 0.0, ())


def test_columns_cannot_be_changed_afterwards_nor_through_the_array_given() -> None:
    given = np.array([10.0, 20.0])
    data = LifeData(given, [10.0, INF])
    given[0] = 99.0
    assert data.lower[0] == 10.0
    with pytest.raises(ValueError, match="read-only"):
        data.lower[0] = 5.0


def test_every_problem_is_told_with_its_row() -> None:
    with pytest.raises(DataError) as told:
        LifeData([np.nan, 5, 20, 0, 30, 8], [1, -1, 10, 0, 40, 8], entry=[0, 0, 0, 0, 50, 0], count=[1, 1, 1, 1, 1, 0])
    text = str(told.value)
    for row in range(1, 7):
        assert f"Row {row}:" in text


def test_columns_of_unequal_length_are_refused_in_one_sentence() -> None:
    with pytest.raises(DataError, match="'lower' has 2 rows, but 'upper' has 1, 'count' has 3"):
        LifeData([1, 2], [3], count=[1, 1, 1])


def test_a_suspension_that_ends_as_it_enters_is_allowed_but_a_failure_is_not() -> None:
    assert LifeData([60], [INF], entry=[60]).suspensions == 1.0
    with pytest.raises(DataError, match="Row 1"):
        LifeData([60], [60], entry=[60])


def test_the_last_good_age_is_raised_to_the_entry() -> None:
    assert LifeData([0], [130], entry=[60]).lower.tolist() == [60.0]


def test_a_suspension_with_a_mode_and_a_failure_without_one_beside_others_are_refused() -> None:
    with pytest.raises(DataError, match="Row 2: a part still good names"):
        LifeData([1, 2], [1, INF], mode=["wear", "wear"])
    with pytest.raises(DataError, match="Row 2: a failure without a mode"):
        LifeData([1, 2], [1, 2], mode=["wear", None])


def test_for_one_mode_the_others_are_suspended_at_their_age_or_the_middle_of_their_interval() -> None:
    data = LifeData([10, 20, 30, 40], [10, 20, 50, INF], mode=["wear", "split", "split", None])
    wear = data.for_mode("wear")
    assert wear.lower.tolist() == [10.0, 20.0, 40.0, 40.0]
    assert wear.upper.tolist() == [10.0, INF, INF, INF]
    assert data.modes == ("split", "wear")
    assert sum(data.for_mode(mode).failures for mode in data.modes) == data.failures


def test_a_masked_row_is_never_taken_as_a_suspension_of_its_candidates() -> None:
    data = LifeData([10, 20], [10, 20], mode=[frozenset({"wear", "split"}), "creep"])
    assert data.masked_rows == (0,)
    with pytest.raises(DataError, match="Rows 1 have several candidate modes"):
        data.for_mode("wear")
    assert data.for_mode("creep").upper.tolist() == [INF, 20.0]


def test_a_set_of_one_candidate_is_that_mode() -> None:
    assert LifeData([10], [10], mode=[frozenset({"wear"})]).for_mode("wear").failures == 1.0
