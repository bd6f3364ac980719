"""Weibull rows and a prior on (ln quantile, ln shape) come in; a grid that follows the posterior's ridge goes out.

For each log shape u the log posterior is concave in the log quantile y, so its top and the range within 28 of it are
found by bracketed steps; the grid is laid over that range, row by row, and shifted a little from row to row so that no
two nodes share a quantile.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from fleet.fits.weibull_rows import FloatArray, WeibullRows

DEPTH = 28.0
LINES = 72
THIN = 3
_SCAN = 33
_LARGEST = 300.0  # of exponents: their squares and sums must not overflow either
_CHUNK = 2_000_000
_GOLDEN = 0.6180339887498949


@dataclass(frozen=True)
class Prior:
    """Independent normals on y = ln(quantile / reference), where H(quantile) = hazard, and on u = ln shape."""

    log_quantile: float
    quantile_sd: float
    log_shape: float
    shape_sd: float
    hazard: float


@dataclass(frozen=True, eq=False)
class RidgeGrid:
    """Fine grid of the posterior: one line of log shape a row.

    Attributes
    ----------
    log_shape : array of float, shape (n_shapes,)
    log_quantile : array of float, shape (n_shapes, n_quantiles)
        Relative to the reference age of the rows.
    weight : array of float, shape (n_shapes, n_quantiles)
        Sums to 1.
    """

    log_shape: FloatArray
    log_quantile: FloatArray
    weight: FloatArray


class _Lines:
    """The log posterior on lines of fixed log shape."""

    def __init__(self, rows: WeibullRows, prior: Prior, log_shape: FloatArray, smooth: bool = False) -> None:
        self.rows, self.prior, self.log_shape = rows, prior, log_shape
        self.shape = np.exp(log_shape)
        self.survived = rows.smooth_survived_sum(log_shape) if smooth else rows.survived_sum(self.shape)
        self.width = rows.log_interval_widths(self.shape) + np.log(prior.hazard)

    def value(self, y: FloatArray) -> FloatArray:
        """Log posterior, without constants, at y of shape (n_shapes, m)."""
        rows, prior = self.rows, self.prior
        k, u = self.shape[:, None], self.log_shape[:, None]
        total = rows.exact_failures * (u + np.log(prior.hazard) - k * y) + rows.log_age_sum * k
        total -= prior.hazard * self.survived[:, None] * np.exp(np.minimum(-k * y, _LARGEST))
        total -= 0.5 * ((y - prior.log_quantile) / prior.quantile_sd) ** 2
        total -= 0.5 * ((u - prior.log_shape) / prior.shape_sd) ** 2
        step = max(1, _CHUNK // max(1, y.size))
        for start in range(0, rows.low.size, step):
            part = slice(start, start + step)
            log_gap = self.width[part, :, None] - (k * y)[None]
            gap = np.exp(np.clip(log_gap, -_LARGEST, 5.0))
            total += np.tensordot(rows.interval_weight[part], np.log(-np.expm1(-gap)), axes=1)
        return np.asarray(total)

    def slopes(self, y: FloatArray) -> tuple[FloatArray, FloatArray]:
        """First and second derivative in y at y of shape (n_shapes,)."""
        rows, prior, k = self.rows, self.prior, self.shape
        hazard = prior.hazard * self.survived * np.exp(np.minimum(-k * y, _LARGEST))
        first = k * (hazard - rows.exact_failures) - (y - prior.log_quantile) / prior.quantile_sd**2
        second = -(k**2) * hazard - 1.0 / prior.quantile_sd**2
        if rows.low.size:
            gap = np.exp(np.clip(self.width - k * y, -_LARGEST, 5.0))
            ratio = gap / np.expm1(gap)
            first = first - k * (rows.interval_weight @ ratio)
            second = second + k**2 * (rows.interval_weight @ (ratio * (1.0 - gap - ratio)))
        return first, second

    def bracket(self) -> tuple[FloatArray, FloatArray]:
        """Values of y below and above the top of each line."""
        rows, prior, k = self.rows, self.prior, self.shape
        failures, m, s = rows.failures, prior.log_quantile, prior.quantile_sd
        below = m - s**2 * k * failures
        most = self.survived
        if rows.low.size:
            most = most + rows.interval_weight @ np.exp(self.width - np.log(prior.hazard))
        with np.errstate(divide="ignore"):
            if failures > 0.0:
                least = np.log(prior.hazard * self.survived / failures) / k
                below = np.maximum(below, np.minimum(m, least))
                above = np.log(prior.hazard * most / failures) / k
            else:
                above = np.log(prior.hazard * most * k * s) / k
        return below - 1e-9, np.maximum(m + s, above) + 1e-9

    def tops(self) -> tuple[FloatArray, FloatArray]:
        """Top of each line and the second derivative there, by Newton steps kept within a bracket."""
        low, high = self.bracket()
        y = np.clip(np.full_like(low, self.prior.log_quantile), low, high)
        for _ in range(60):
            first, second = self.slopes(y)
            low, high = np.where(first > 0.0, y, low), np.where(first > 0.0, high, y)
            step = y - first / second
            new = np.where((step >= low) & (step <= high), step, 0.5 * (low + high))
            done = np.abs(new - y).max() < 1e-7
            y = new
            if done:
                break
        return y, self.slopes(y)[1]

    def ends(self, top: FloatArray) -> tuple[FloatArray, FloatArray]:
        """Values of y on both sides of each top where the log posterior has fallen by `DEPTH`."""
        floor = self.value(top[:, None])[:, 0] - DEPTH
        reach = np.sqrt(2.0 * DEPTH) * self.prior.quantile_sd
        ends = []
        for side in (-1.0, 1.0):
            inner, outer = np.zeros_like(top), np.full_like(top, reach)
            for _ in range(14):
                middle = 0.5 * (inner + outer)
                inside = self.value((top + side * middle)[:, None])[:, 0] > floor
                inner, outer = np.where(inside, middle, inner), np.where(inside, outer, middle)
            ends.append(top + side * outer)
        return ends[0], ends[1]


def _heights(rows: WeibullRows, prior: Prior, log_shape: FloatArray) -> FloatArray:
    """Laplace estimate of the log marginal posterior of each log shape."""
    lines = _Lines(rows, prior, log_shape)
    top, curvature = lines.tops()
    return lines.value(top[:, None])[:, 0] - 0.5 * np.log(-curvature)


def shape_box(rows: WeibullRows, prior: Prior) -> tuple[float, float]:
    """Range of log shape where the log posterior is within `DEPTH` of its top, scanned from the prior."""
    half = np.sqrt(2.0 * DEPTH) * prior.shape_sd
    low, high = prior.log_shape - half, prior.log_shape + half
    for _ in range(12):
        grid = np.linspace(low, high, _SCAN)
        height = _heights(rows, prior, grid)
        kept = np.flatnonzero(height > height.max() - DEPTH)
        first, last = int(kept[0]), int(kept[-1])
        open_low, open_high = height[[0, -1]] > height.max() - DEPTH + 1.0
        width, spacing = high - low, float(grid[1] - grid[0])
        low = float(grid[first]) - (0.5 * width if open_low else spacing)
        high = float(grid[last]) + (0.5 * width if open_high else spacing)
        if not (open_low or open_high) and last - first >= _SCAN // 3:
            break
    return low, high


def ridge_grid(rows: WeibullRows, prior: Prior) -> RidgeGrid:
    """Fine grid of the posterior.

    Parameters
    ----------
    rows : WeibullRows
        The data; none at all give the prior back.
    prior : Prior
        The belief, relative to the reference age of the rows.

    Returns
    -------
    RidgeGrid
    """
    low, high = shape_box(rows, prior)
    fraction = (np.arange(LINES) + 0.5) / LINES
    lines = _Lines(rows, prior, low + (high - low) * fraction, smooth=True)
    left, right = lines.ends(lines.tops()[0])
    shift = np.mod(np.arange(LINES) * _GOLDEN, 1.0)[:, None]
    y = left[:, None] + (right - left)[:, None] * (np.arange(LINES) + shift) / LINES
    height = lines.value(y)
    weight = np.exp(height - height.max()) * (right - left)[:, None]
    return RidgeGrid(lines.log_shape, y, weight / weight.sum())
