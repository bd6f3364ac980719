"""Groups of like parts and draws of their lives come in; the failures of each by some times, exactly counted, go out.

Time runs over the horizon from 0 to 1; use is linear in it. For a new part and each draw, the distribution function
B_m of the time to the m-th failure is worked out on a lattice: B_m = dG * B_(m-1), and under replacement at an age the
sum over the planned replacements before the first failure. A part already in use differs in its first life only. All
functions that are read between lattice points are continuous, so that no step need divide the replacement age.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.fft import irfft, next_fast_len

from fleet.forecasts.life_draws import LifeDraws
from fleet.forecasts.renewals import convolve_increments

FloatArray = NDArray[np.float64]

LEAST_STEPS = 64
MOST_STEPS = 1024
_NEGLIGIBLE = 1e-10
_MOST_FAILURES = 600
_STEPS_A_LIFE = 32
_GROUPS_AT_ONCE = 48


@dataclass(frozen=True)
class PartGroup:
    """`count` like parts; `first_limit` is the time of their planned replacement, infinite for none."""

    count: int
    life: LifeDraws
    age: Mapping[str, float]
    first_limit: float


@dataclass(frozen=True)
class RenewalPattern:
    """What a failed part is replaced by: its life, use over the horizon, and time between planned replacements."""

    life: LifeDraws
    use: Mapping[str, float]
    limit: float


@dataclass(frozen=True, eq=False)
class FailureCounts:
    """P(at least m failures) of one part of each group, m = 1, 2, ...

    Attributes
    ----------
    count : array of int, shape (n_groups,)
    at_least : array of float, shape (n_groups, n_draws, n_times, n_failures)
    """

    count: NDArray[np.int64]
    at_least: FloatArray


def lattice_steps(patterns: list[RenewalPattern]) -> int:
    """Steps that give each likely life, and each planned replacement, enough of them."""
    need = float(LEAST_STEPS)
    for pattern in patterns:
        for mode in pattern.life.modes:
            need = max(need, _STEPS_A_LIFE * pattern.use[mode.clock] / float(np.quantile(mode.scale, 0.1)))
        need = max(need, 8.0 / pattern.limit)
    return int(min(np.ceil(need), MOST_STEPS))


def count_failures(
    pattern: RenewalPattern, groups: list[PartGroup], times: NDArray[np.int64], steps: int, weight: FloatArray
) -> list[FailureCounts]:
    """Failures of each group of one renewal pattern by each time.

    Parameters
    ----------
    pattern : RenewalPattern
        Shared by all the groups.
    groups : list of PartGroup
    times : array of int, shape (n_times,)
        Lattice points, 1 to `steps`.
    steps : int
        Lattice steps over the horizon.
    weight : array of float, shape (n_draws,)
        Weights of the draws, sum 1.

    Returns
    -------
    list of FailureCounts
        In chunks of groups, in their order.
    """
    renewed = _renewed_parts(pattern, steps, weight)
    last = np.arange(steps)
    at = times[None, :] - 1 - last[:, None]
    out = []
    for start in range(0, len(groups), _GROUPS_AT_ONCE):
        chunk = groups[start : start + _GROUPS_AT_ONCE]
        first = np.stack([_first_failure(group, pattern, steps, weight.size) for group in chunk], axis=1)
        planned = np.array([group.first_limit for group in chunk])
        kept = (1.0 - first[:, :, -1])[:, :, None]
        increments = np.diff(first, axis=2)
        at_least = [first[:, :, times] + kept * _delayed(renewed[1], planned, times, steps)]
        for m in range(2, len(renewed)):
            before = renewed[m - 1]
            mean = 0.5 * (before[:, 1:] + before[:, :-1])
            later = np.where(at[None] >= 0, mean[:, np.maximum(at, 0)], 0.0)
            at_least.append(increments @ later + kept * _delayed(renewed[m], planned, times, steps))
        stacked = np.moveaxis(np.stack(at_least, axis=-1), 1, 0)
        counts = np.array([group.count for group in chunk], dtype=np.int64)
        out.append(FailureCounts(counts, np.minimum.accumulate(np.clip(stacked, 0.0, 1.0), axis=-1)))
    return out


def _renewed_parts(pattern: RenewalPattern, steps: int, weight: FloatArray) -> list[FloatArray]:
    """B_0, B_1, ... of a new part at the lattice points, each of shape (n_draws, steps + 1), until negligible."""
    new = PartGroup(1, pattern.life, {clock: 0.0 for clock in pattern.life.clocks}, pattern.limit)
    first = _first_failure(new, pattern, steps, weight.size)
    increments, kept = np.diff(first, axis=1), 1.0 - first[:, -1:]
    renewed = [np.ones_like(first)]
    while len(renewed) <= _MOST_FAILURES:
        fresh = first if len(renewed) == 1 else convolve_increments(increments, renewed[-1])
        total, factor = fresh.copy(), kept
        for j in range(1, int(1.0 / pattern.limit) + 1 if np.isfinite(pattern.limit) else 1):
            total += factor * _shifted(fresh, j * pattern.limit * steps)
            factor = factor * kept
        renewed.append(total)
        if float(weight @ total[:, -1]) < _NEGLIGIBLE:
            break
    return renewed


def _first_failure(group: PartGroup, pattern: RenewalPattern, steps: int, n_draws: int) -> FloatArray:
    """Distribution function of the first failure before a planned replacement, shape (n_draws, steps + 1)."""
    time = np.minimum(np.linspace(0.0, 1.0, steps + 1), group.first_limit)
    ages = {clock: group.age[clock] + pattern.use[clock] * time for clock in group.life.clocks}
    hazard = group.life.cumulative_hazard(ages)
    return np.broadcast_to(-np.expm1(hazard[:, :1] - hazard), (n_draws, steps + 1))


def _shifted(values: FloatArray, lag: float) -> FloatArray:
    """Values, 0 at and below time 0, read `lag` steps earlier, shape (n_draws, steps + 1)."""
    whole = int(np.floor(lag))
    part = lag - whole
    size = values.shape[1] - whole
    out = np.zeros_like(values)
    if size > 0:
        out[:, whole:] = (1.0 - part) * values[:, :size]
    if size > 1:
        out[:, whole + 1 :] += part * values[:, : size - 1]
    return out


def _delayed(values: FloatArray, lag: FloatArray, times: NDArray[np.int64], steps: int) -> FloatArray:
    """Values read at each time less each group's lag (in horizons), shape (n_draws, n_groups, n_times)."""
    if not np.isfinite(lag).any():
        return np.zeros((1, 1, 1))
    position = np.maximum(times[None, :] - np.where(np.isfinite(lag), lag, 2.0)[:, None] * steps, 0.0)
    whole = np.minimum(position.astype(np.int64), steps - 1)
    part = position - whole
    return np.asarray((1.0 - part) * values[:, whole] + part * values[:, whole + 1])


def total_failures(counts: list[FailureCounts], weight: FloatArray) -> FloatArray:
    """Distribution of the failures of all groups together at each time, mixed over the draws.

    The characteristic function of the total, given a draw, is the product over its parts. It is inverted in a window of
    18 standard deviations around each mean, which is exact to rounding: the mass outside is nil.

    Parameters
    ----------
    counts : list of FailureCounts
        At least one.
    weight : array of float, shape (n_draws,)

    Returns
    -------
    array of float, shape (n_times, n_failures)
        Rows sum to 1.
    """
    mean, spread = _moments(counts)
    half = int(np.ceil(9.0 * spread.max() + 12.0))
    window = int(next_fast_len(2 * half, real=True))
    product = np.ones((*mean.shape, window // 2 + 1), dtype=np.complex128)
    for number in np.unique(np.concatenate([chunk.count for chunk in counts])):
        like = np.ones_like(product)
        for chunk in counts:
            for at_least in chunk.at_least[chunk.count == number]:
                like *= _characteristic(at_least, window)
        product *= _power(like, int(number))
    mass = np.maximum(irfft(product, window, axis=-1), 0.0)
    start = np.maximum(np.floor(mean).astype(np.int64) - half, 0)
    place = np.arange(window)
    index = start[..., None] + np.mod(place - start[..., None], window)
    return _mixed(mass * weight[:, None, None], index)


def _moments(counts: list[FailureCounts]) -> tuple[FloatArray, FloatArray]:
    """Mean and standard deviation of the total, each of shape (n_draws, n_times)."""
    mean = variance = np.zeros(counts[0].at_least.shape[1:3])
    for chunk in counts:
        part = chunk.at_least.sum(axis=-1)
        odd = 2.0 * np.arange(chunk.at_least.shape[-1]) + 1.0
        mean = mean + np.tensordot(chunk.count, part, axes=1)
        variance = variance + np.tensordot(chunk.count, chunk.at_least @ odd - part**2, axes=1)
    return mean, np.sqrt(np.maximum(variance, 0.0))


def _characteristic(at_least: FloatArray, window: int) -> NDArray[np.complex128]:
    """1 + sum over m of (z^m - z^(m - 1)) P(at least m), at the roots of unity; shape (n_draws, n_times, n_roots)."""
    turn = -2.0 * np.pi * np.arange(window // 2 + 1) / window
    root = np.exp(1j * turn)
    powers = root ** np.arange(at_least.shape[-1])[:, None] * (root - 1.0)
    out = np.empty((*at_least.shape[:-1], root.size), dtype=np.complex128)
    out.real = at_least @ powers.real
    out.imag = at_least @ powers.imag
    out.real += 1.0
    return out


def _power(base: NDArray[np.complex128], exponent: int) -> NDArray[np.complex128]:
    """Integer power by repeated squaring."""
    result = np.ones_like(base)
    while exponent:
        if exponent & 1:
            result *= base
        exponent >>= 1
        if exponent:
            base = base * base
    return result


def _mixed(mass: FloatArray, index: NDArray[np.int64]) -> FloatArray:
    """Sum over draws of masses at their places, shape (n_times, n_failures), trailing nothing cut off."""
    length = int(index.max()) + 1
    rows = [
        np.bincount(index[:, time].ravel(), weights=mass[:, time].ravel(), minlength=length)
        for time in range(mass.shape[1])
    ]
    out = np.array(rows, dtype=np.float64)
    out = out / out.sum(axis=1, keepdims=True)
    tail = np.cumsum(out[:, ::-1], axis=1)[:, ::-1].max(axis=0)
    return np.asarray(out[:, : max(1, int(np.sum(tail > 1e-13)))])
