"""Demand of the demo fleet, every part type, and a plain simulation of the same."""

from __future__ import annotations

import tempfile
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from datetime import UTC, datetime
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from demo_data.files import csv_folder
from fleet.fits.part_lives import fit_part_lives
from fleet.forecasts.demand import fleet_demand
from fleet.forecasts.life_draws import LifeDraws, draw_life
from fleet.forecasts.odds import PartsAtRisk
from fleet.forecasts.part_demand import renewed_by
from fleet.forecasts.parts_now import slots_now
from fleet.forecasts.planned_use import joint_use, robot_plans
from fleet.lives.ages import ages_of
from fleet.lives.part_data import part_data
from fleet.store.book import create_book
from fleet.store.csv_import import import_folder
from fleet.store.reading import read_history
from fleet.store.writing import Entry

FloatArray = NDArray[np.float64]
MOMENT = datetime(2026, 11, 30, 20, tzinfo=UTC)
WEEKS = 8


@dataclass(frozen=True)
class DemoFleet:
    """Parts fitted now by part type, their lives, and what each life is renewed by."""

    parts: Mapping[str, Sequence[PartsAtRisk]]
    lives: Mapping[str, LifeDraws]
    renewals: Mapping[str, str]

    def exact(self) -> dict[str, FloatArray]:
        """The demand over eight weeks by part type, as wearbook computes it."""
        return {
            part_type: fleet_demand(held, self.lives, [1.0], renewal_life=self.renewals)[0]
            for part_type, held in self.parts.items()
        }

    def simulated(self, runs: int, rng: np.random.Generator) -> dict[str, FloatArray]:
        """The same by plain simulation, a draw of all parameters a run."""
        n_draws = next(iter(self.lives.values())).n_draws
        draw = rng.integers(0, n_draws, runs)
        return {part_type: self._runs(held, draw, rng) for part_type, held in self.parts.items()}

    def _runs(self, held: Sequence[PartsAtRisk], draw: NDArray[np.int64], rng: np.random.Generator) -> FloatArray:
        total = np.zeros(draw.size, dtype=np.int64)
        for group in held:
            life, age, spent, running = self.lives[group.life], group.age, np.zeros((draw.size, group.count)), True
            while running:
                spent = spent + _time_to_failure(life, draw, age, group.use, spent.shape, rng)
                failed = spent <= 1.0
                total += failed.sum(axis=1)
                life, age = self.lives[self.renewals[group.life]], dict.fromkeys(group.age, 0.0)
                running = bool(failed.any())
        return np.asarray(np.bincount(total) / draw.size)


def _time_to_failure(
    life: LifeDraws,
    draw: NDArray[np.int64],
    age: Mapping[str, float],
    use: Mapping[str, float],
    size: tuple[int, int],
    rng: np.random.Generator,
) -> FloatArray:
    """Shares of the horizon until the first mode fails, shape `size`."""
    first = np.full(size, np.inf)
    for mode in life.modes:
        shape, scale = mode.shape[draw][:, None], mode.scale[draw][:, None]
        reached = scale * ((age[mode.clock] / scale) ** shape + rng.exponential(size=size)) ** (1 / shape)
        if use[mode.clock] > 0:
            first = np.minimum(first, (reached - age[mode.clock]) / use[mode.clock])
    return first


def demo_fleet(n_draws: int = 128) -> DemoFleet:
    """Build the demo book in a temporary folder and gather what its demand depends on."""
    with tempfile.TemporaryDirectory() as folder:
        book = create_book(Path(folder) / "demo.db")
        import_folder(book, csv_folder(), Entry(MOMENT, "import", "demo fleet"))
        history = read_history(book, MOMENT)
        book.close()
    ages = ages_of(history)
    lives = fit_part_lives(history, part_data(history, ages))
    rng = np.random.default_rng(7)
    draws = {
        key: draw_life([(m.mode.code, m.mode.clock, m.unfit) for m in life.modes], n_draws, rng)
        for key, life in lives.items()
    }
    plans = robot_plans(history)
    parts: dict[str, list[PartsAtRisk]] = {}
    for slot in slots_now(history, ages, lives):
        plan = plans[slot.position.robot]
        use = joint_use(ages, slot.position, plan, plan.hours_per_week * WEEKS)
        held = parts.setdefault(slot.slot.part_type, [])
        held += [PartsAtRisk(part.life.name, part.span.count, part.age, use) for part in slot.running]
    return DemoFleet(
        parts,
        {key.name: life for key, life in draws.items()},
        {key.name: renewed_by(history, key, draws).name for key in draws},
    )
