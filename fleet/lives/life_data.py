"""Ages at failure, suspension and inspection come in; one frozen, self-checked table for every fit goes out."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike, NDArray

from fleet.errors import DataError

FloatArray = NDArray[np.float64]
Mode = str | frozenset[str] | None


@dataclass(frozen=True, eq=False, init=False)
class LifeData:
    """What is known of the life of each part, one row a part (or `count` like parts).

    Parameters
    ----------
    lower, upper : array of float, shape (n,)
        Age at which the part was last known good, and by which it had failed. [clock] Equal: the exact age at failure.
        `upper` infinite: a suspension, still good at `lower`. `lower` zero and `upper` finite: found already failed.
        The interval is half-open, (lower, upper].
    entry : array of float, shape (n,), optional
        Age from which the part was watched. [clock] Default 0. A `lower` below it is raised to it: the part was seen
        good then.
    count : array of float, shape (n,), optional
        Number of like parts behind a row, above 0. Default 1.
    mode : sequence of str, frozenset of str or None, length n, optional
        Failure mode of a row, a set of candidate modes, or None for a suspension. Default: every failure is of one
        unnamed mode.
    clock : str
        Clock in which the ages run.
    lot, revision : sequence of str or None, length n, optional
        Lot and revision of a row. Default: empty.
    records : sequence of sequence of str, length n, optional
        Record ids behind a row. Default: empty.

    Raises
    ------
    DataError
        Lists every row that cannot be, by its number (the first row is 1).
    """

    lower: FloatArray
    upper: FloatArray
    entry: FloatArray
    count: FloatArray
    mode: tuple[Mode, ...]
    clock: str
    lot: tuple[str | None, ...]
    revision: tuple[str | None, ...]
    records: tuple[tuple[str, ...], ...]

    def __init__(
        self,
        lower: ArrayLike,
        upper: ArrayLike,
        entry: ArrayLike | None = None,
        count: ArrayLike | None = None,
        mode: Sequence[Mode] | None = None,
        clock: str = "hours",
        lot: Sequence[str | None] = (),
        revision: Sequence[str | None] = (),
        records: Sequence[Sequence[str]] = (),
    ) -> None:
        low, up = _column(lower, "lower"), _column(upper, "upper")
        start = np.zeros(low.size) if entry is None else _column(entry, "entry")
        number = np.ones(low.size) if count is None else _column(count, "count")
        modes: tuple[Mode, ...] = (None,) * low.size if mode is None else tuple(mode)
        labels = {"lot": tuple(lot), "revision": tuple(revision), "records": tuple(tuple(ids) for ids in records)}
        sizes = {"upper": up.size, "entry": start.size, "count": number.size, "mode": len(modes)}
        sizes |= {name: len(values) for name, values in labels.items() if values}
        _check_sizes(low.size, sizes)
        _check_rows(low, up, start, number, modes)
        columns = {"lower": np.maximum(low, start), "upper": up, "entry": start, "count": number}
        for name, values in columns.items():
            values.setflags(write=False)
            object.__setattr__(self, name, values)
        for name, value in {"mode": modes, "clock": clock, **labels}.items():
            object.__setattr__(self, name, value)

    def __len__(self) -> int:
        """Number of rows."""
        return int(self.lower.size)

    @cached_property
    def is_suspension(self) -> NDArray[np.bool_]:
        """Rows of parts that had not failed, shape (n,)."""
        return _frozen(np.isinf(self.upper))

    @cached_property
    def is_exact(self) -> NDArray[np.bool_]:
        """Rows whose age at failure is known exactly, shape (n,)."""
        return _frozen(self.lower == self.upper)

    @cached_property
    def is_interval(self) -> NDArray[np.bool_]:
        """Rows whose failure lies in (lower, upper], found already failed included, shape (n,)."""
        return _frozen(~self.is_suspension & ~self.is_exact)

    @cached_property
    def has_intervals(self) -> bool:
        """Whether any failure is known only to an interval."""
        return bool(self.is_interval.any())

    @cached_property
    def n(self) -> float:
        """Number of parts, counted."""
        return float(self.count.sum())

    @cached_property
    def failures(self) -> float:
        """Number of failures of any mode, counted."""
        return float(self.count[~self.is_suspension].sum())

    @cached_property
    def suspensions(self) -> float:
        """Number of parts that had not failed, counted."""
        return float(self.count[self.is_suspension].sum())

    @cached_property
    def modes(self) -> tuple[str, ...]:
        """Names of all modes and candidate modes, sorted; empty when the failures are of one unnamed mode."""
        names: set[str] = set()
        for mode in self.mode:
            names |= {mode} if isinstance(mode, str) else (mode or frozenset())
        return tuple(sorted(names))

    @cached_property
    def masked_rows(self) -> tuple[int, ...]:
        """Indices of the rows with more than one candidate mode."""
        return tuple(i for i, mode in enumerate(self.mode) if isinstance(mode, frozenset) and len(mode) > 1)

    def for_mode(self, name: str) -> LifeData:
        """The same parts seen by one mode: failures of the other modes become suspensions.

        An exact failure of another mode is suspended at its age, one known to an interval at the middle of it. This
        serves intervals narrower than about 5 % of the scale; wider ones need a joint fit of the modes.

        Parameters
        ----------
        name : str
            A failure mode.

        Raises
        ------
        DataError
            If a row has several candidate modes, this one among them: neither a failure nor a suspension of it.
        """
        masked = [row + 1 for row in self.masked_rows if name in (self.mode[row] or ())]
        if masked:
            raise DataError(
                f"Rows {', '.join(map(str, masked))} have several candidate modes, {name!r} among them: "
                "fit the candidate modes jointly, or note which mode it was."
            )
        own = np.array([mode == name or mode == frozenset({name}) for mode in self.mode], dtype=bool)
        other = ~own & ~self.is_suspension
        middle = np.where(self.is_exact, self.lower, 0.5 * (self.lower + np.where(other, self.upper, self.lower)))
        return LifeData(
            np.where(other, middle, self.lower),
            np.where(other, np.inf, self.upper),
            self.entry,
            self.count,
            [name if mine else None for mine in own],
            self.clock,
            self.lot,
            self.revision,
            self.records,
        )


def _column(values: ArrayLike, name: str) -> FloatArray:
    """Own copy of one column as floats."""
    try:
        column = np.array(values, dtype=np.float64)
    except (TypeError, ValueError) as error:
        raise DataError(f"The column {name!r} holds something that is not a number: {error}.") from error
    if column.ndim != 1:
        raise DataError(f"The column {name!r} has {column.ndim} dimensions: give one number a row.")
    return column


def _frozen(values: NDArray[np.bool_]) -> NDArray[np.bool_]:
    values.setflags(write=False)
    return values


def _check_sizes(rows: int, sizes: dict[str, int]) -> None:
    wrong = [f"{name!r} has {size}" for name, size in sizes.items() if size != rows]
    if wrong:
        raise DataError(f"'lower' has {rows} rows, but {', '.join(wrong)}: give every column the same length.")


def _check_rows(
    lower: FloatArray, upper: FloatArray, entry: FloatArray, count: FloatArray, mode: tuple[Mode, ...]
) -> None:
    """Raise one DataError with a sentence for every row that cannot be."""
    suspended = np.isposinf(upper)
    with np.errstate(invalid="ignore"):
        rules: list[tuple[NDArray[np.bool_], str]] = [
            (~np.isfinite(lower) | (lower < 0), "`lower` is not an age: give a number of 0 or more"),
            (np.isnan(upper) | (upper < 0), "`upper` is not an age: give a number, or infinity for a part still good"),
            (~np.isfinite(entry) | (entry < 0), "`entry` is not an age: give a number of 0 or more"),
            (~np.isfinite(count) | (count <= 0), "`count` is not above 0: leave the row out or give its parts"),
            (lower > upper, "`lower` is above `upper`: the last good age comes first"),
            ((lower == upper) & (upper == 0), "an exact failure at age 0: give the interval in which it failed"),
            (~suspended & (entry >= upper), "the failure is not after `entry`: a part that had failed was not watched"),
            (suspended & (entry > lower), "`entry` is after the last good age: watching began after it ended"),
        ]
    named = any(m is not None for m in mode)
    has_mode = np.array([m is not None for m in mode], dtype=bool)
    empty = np.array([isinstance(m, frozenset) and not m for m in mode], dtype=bool)
    rules.append((suspended & has_mode, "a part still good names a failure mode: leave its mode empty"))
    rules.append((empty, "the set of candidate modes is empty: name at least one"))
    if named:
        rules.append((~suspended & ~has_mode, "a failure without a mode beside others with one: name its candidates"))
    problems = [(int(row), text) for wrong, text in rules for row in np.flatnonzero(wrong)]
    if problems:
        raise DataError("\n".join(f"Row {row + 1}: {text}." for row, text in sorted(problems)))
