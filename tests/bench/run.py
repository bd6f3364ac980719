"""Speeds beside plain ways of doing the same, as ratios of medians: python tests/bench/run.py."""

from __future__ import annotations

import shutil
import subprocess
import sys
import time
import warnings
from collections.abc import Callable
from functools import partial
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

sys.path.insert(0, str(Path(__file__).resolve().parents[2]))

from fleet.fits.posterior import Belief, WeibullPosterior, weibull_posterior
from fleet.fits.weibull import bootstrap_fits, fit_weibull
from fleet.forecasts.demand import demand_distribution
from fleet.lives.life_data import LifeData
from tests.bench.demo_fleet import demo_fleet

FloatArray = NDArray[np.float64]
BELIEF = Belief(100.0, 3.0, 2.0, 2.0)


def median_seconds(work: Callable[[], object], repeats: int) -> float:
    """Median wall time of a call, after one to warm up. [s]"""
    work()
    times = []
    for _ in range(repeats):
        start = time.perf_counter()
        work()
        times.append(time.perf_counter() - start)
    return float(np.median(times))


def told(work: str, ours: float, other: float, beside: str) -> None:
    """Print one line."""
    print(f"{work:<44} {1e3 * ours:>10.3f} ms   {beside:<34} {1e3 * other:>11.1f} ms   {other / ours:>8.0f} x")


def parts(n: int, seed: int = 1) -> LifeData:
    """n parts of shape 2.5, scale 300, watched to 250."""
    age = 300 * np.random.default_rng(seed).weibull(2.5, n)
    return LifeData(np.minimum(age, 250), np.where(age < 250, age, np.inf))


def one_fit() -> None:
    """One maximum-likelihood fit beside lifelines, the same answer to 1e-5."""
    from lifelines import WeibullFitter

    for n in (20, 200, 2000):
        data = parts(n)
        failed = data.is_exact
        fit, other = fit_weibull(data), WeibullFitter().fit(data.lower, failed)
        assert abs(fit.shape / other.rho_ - 1) < 1e-5 and abs(fit.scale / other.lambda_ - 1) < 1e-5
        ours = median_seconds(partial(fit_weibull, data), 200)
        theirs = median_seconds(partial(WeibullFitter().fit, data.lower, failed), 7)
        told(f"one Weibull fit, n = {n}", ours, theirs, "lifelines")


def many_refits() -> None:
    """200 bootstrap refits, n = 200, beside a lifelines loop over the same resamples, the same answers to 1e-5."""
    from lifelines import WeibullFitter

    data, runs = parts(200), 200
    ours = median_seconds(lambda: bootstrap_fits(data, runs, np.random.default_rng(3)), 9)
    fits = bootstrap_fits(data, runs, np.random.default_rng(3))
    times = np.random.default_rng(3).multinomial(200, np.full(200, 1 / 200), size=runs)
    start = time.perf_counter()
    for row in range(runs):
        other = WeibullFitter().fit(np.repeat(data.lower, times[row]), np.repeat(data.is_exact, times[row]))
        assert abs(fits.shape[row] / other.rho_ - 1) < 1e-5, row
    told("200 bootstrap refits, n = 200", ours, time.perf_counter() - start, "lifelines in a loop")


def broadcast_posterior(data: LifeData, n: int = 128) -> tuple[float, float]:
    """Posterior mean of ln quantile and ln shape by a plain n x n broadcast over a box known beforehand."""
    fit = fit_weibull(data)
    u = np.log(fit.shape) + np.linspace(-0.3, 0.3, n)[:, None, None]
    y = np.log(fit.b_life(10)) + np.linspace(-0.4, 0.4, n)[None, :, None]
    hazard = BELIEF.hazard * np.exp(np.exp(u) * (np.log(data.lower) - y))
    log_density = np.where(data.is_exact, u + np.log(hazard), 0.0) - hazard
    height = log_density.sum(axis=2)
    height -= 0.5 * ((y[..., 0] - np.log(BELIEF.t10)) / BELIEF.log_t10_sd) ** 2
    height -= 0.5 * ((u[..., 0] - np.log(BELIEF.shape_median)) / BELIEF.log_shape_sd) ** 2
    weight = np.exp(height - height.max())
    weight /= weight.sum()
    return float((weight * y[..., 0]).sum()), float((weight * u[..., 0]).sum())


def posterior() -> None:
    """Posterior of 2000 parts beside the broadcast, the same means to 1e-3."""
    data = parts(2000)
    mean_y, mean_u = broadcast_posterior(data)
    result = weibull_posterior(data, BELIEF)
    log_b10 = np.log(result.scale) + np.log(-np.log(0.9)) / result.shape
    assert abs(float(log_b10 @ result.weight) - mean_y) < 1e-3
    assert abs(float(np.log(result.shape) @ result.weight) - mean_u) < 1e-3
    ours = median_seconds(lambda: weibull_posterior(data, BELIEF), 25)
    theirs = median_seconds(lambda: broadcast_posterior(data), 3)
    told("posterior, n = 2000", ours, theirs, "128 x 128 broadcast")


def simulated_demand(result: WeibullPosterior, ages: FloatArray, use: float, runs: int) -> FloatArray:
    """Plain vectorised simulation, a draw of the parameters a run."""
    rng = np.random.default_rng(5)
    node = rng.choice(result.weight.size, size=runs, p=result.weight)
    shape, scale = result.shape[node][:, None], result.scale[node][:, None]
    age, time_used = np.broadcast_to(ages, (runs, ages.size)), np.zeros((runs, ages.size))
    total, running = np.zeros(runs), True
    while running:
        left = scale * ((age / scale) ** shape + rng.exponential(size=(runs, ages.size))) ** (1 / shape) - age
        time_used = time_used + left
        failed = time_used <= use
        total += failed.sum(axis=1)
        running, age = bool(failed.any()), np.zeros((runs, ages.size))
    return np.asarray(np.bincount(total.astype(int)) / runs)


def demand() -> None:
    """154 joints of 26 bearings beside a simulation to a standard error of 0.001 in the distribution function."""
    result = weibull_posterior(LifeData([120, 150, 200], [120, 150, np.inf]), Belief(300.0, 2.0, 2.0, 1.5))
    ages = np.repeat(np.random.default_rng(4).uniform(0, 150, 154), 26)
    use, needed, runs = np.full(ages.size, 40.0), 250_000, 2_000
    exact = demand_distribution(result, ages, use)
    start = time.perf_counter()
    seen = simulated_demand(result, ages, 40.0, runs)
    simulated = (time.perf_counter() - start) * needed / runs
    gap = largest_gap(exact, seen)
    assert gap < 1.63 / np.sqrt(runs) + 0.002, gap
    ours = median_seconds(lambda: demand_distribution(result, ages, use), 5)
    told("demand, 154 joints x 26 bearings", ours, simulated, "simulation to s.e. 0.001 (*)")
    print(f"    (*) extrapolated from {runs} of the {needed} runs; largest gap of the two {gap:.4f}")


def demo_demand() -> None:
    """Eight weeks of every part type of the demo fleet beside a plain simulation of the same."""
    fleet, needed, runs = demo_fleet(), 250_000, 1_000
    exact = fleet.exact()
    start = time.perf_counter()
    seen = fleet.simulated(runs, np.random.default_rng(6))
    simulated = (time.perf_counter() - start) * needed / runs
    gap = max(largest_gap(exact[part_type], seen[part_type]) for part_type in exact)
    assert gap < 1.95 / np.sqrt(runs) + 0.002, gap
    ours = median_seconds(fleet.exact, 3)
    told("demand, demo fleet, 12 part types, 8 weeks", ours, simulated, "simulation to s.e. 0.001 (*)")
    print(f"    (*) extrapolated from {runs} of the {needed} runs; largest gap of the two {gap:.4f}")


def largest_gap(one: FloatArray, other: FloatArray) -> float:
    """Largest difference of two distribution functions of counts."""
    size = max(one.size, other.size)
    padded = [np.cumsum(np.pad(pmf, (0, size - pmf.size))) for pmf in (one, other)]
    return float(np.abs(padded[0] - padded[1]).max())


def start_up() -> None:
    """`wearbook --help` beside the import of lifelines, each in a fresh process."""
    command = shutil.which("wearbook", path=str(Path(sys.executable).parent)) or shutil.which("wearbook")
    if command is None or subprocess.run([command, "--help"], capture_output=True, check=False).returncode != 0:
        print("start-up: skipped, there is no working command `wearbook` here (install the project first)")
        return

    def run(arguments: list[str]) -> None:
        subprocess.run(arguments, capture_output=True, check=True)

    ours = median_seconds(lambda: run([command, "--help"]), 5)
    theirs = median_seconds(lambda: run([sys.executable, "-c", "import lifelines"]), 3)
    told("wearbook --help", ours, theirs, "import lifelines")


if __name__ == "__main__":
    warnings.simplefilter("ignore")
    for bench in (one_fit, many_refits, posterior, demand, demo_demand, start_up):
        bench()
