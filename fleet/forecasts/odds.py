"""Parts at risk, planned use and draws of their lives come in; the chance of finishing without a stop goes out."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from math import comb
from typing import TypeVar

import numpy as np
from numpy.typing import NDArray

from fleet.errors import PlanError
from fleet.forecasts.life_draws import LifeDraws

FloatArray = NDArray[np.float64]
SlotKey = tuple[str, str, str]
Key = TypeVar("Key")

_COLUMNS_AT_ONCE = 512


@dataclass(frozen=True)
class PartsAtRisk:
    """Like parts of one age in one slot.

    Parameters
    ----------
    life : str
        Name of their life among the draws.
    count : int
        Number of parts.
    age, use : mapping of clock to float
        Present age of each part, and the use planned for it, in each clock that drives a mode. [clock]
    """

    life: str
    count: int
    age: Mapping[str, float]
    use: Mapping[str, float]


@dataclass(frozen=True)
class SlotAtRisk:
    """One slot and the parts in it.

    Parameters
    ----------
    robot, joint, slot : str
        Where it is.
    stops_at : int or None
        How many of its parts must fail to stop the robot; None: it never does.
    parts : tuple of PartsAtRisk
    """

    robot: str
    joint: str
    slot: str
    stops_at: int | None
    parts: tuple[PartsAtRisk, ...]


@dataclass(frozen=True)
class Chance:
    """A chance, averaged over what is not known of the lives, and the range that the estimate itself has.

    Attributes
    ----------
    mean, low, high : float
        Mean, 10 % and 90 % quantile over the draws, within 0 and 1.
    """

    mean: float
    low: float
    high: float


@dataclass(frozen=True)
class SessionOdds:
    """Chances of finishing the planned use without a stop.

    Attributes
    ----------
    slot : mapping of (robot, joint, slot) to Chance
    joint : mapping of (robot, joint) to Chance
    robot : mapping of robot to Chance
    fleet : Chance
        That every robot finishes.
    """

    slot: Mapping[SlotKey, Chance]
    joint: Mapping[tuple[str, str], Chance]
    robot: Mapping[str, Chance]
    fleet: Chance


def session_odds(slots: Sequence[SlotAtRisk], lives: Mapping[str, LifeDraws]) -> SessionOdds:
    """Chance that each slot, joint, robot and the fleet finish the planned use without a stop.

    A part of age a survives the use u with exp(-(H(a + u) - H(a))). Given the parameters parts fail independently; the
    average is taken last, over draws that all parts of one life share.

    Parameters
    ----------
    slots : sequence of SlotAtRisk
        Each slot once.
    lives : mapping of life to LifeDraws
        All with the same number of draws, or one draw (known parameters).

    Returns
    -------
    SessionOdds

    Raises
    ------
    PlanError
        If a life, a clock or an age is missing or cannot be, or a slot appears twice.
    """
    n_draws = common_draws(lives)
    keys = [(slot.robot, slot.joint, slot.slot) for slot in slots]
    if len(set(keys)) < len(keys):
        twice = sorted({key for key in keys if keys.count(key) > 1})
        raise PlanError(f"The slot {' / '.join(twice[0])} is given twice: give all its parts in one slot.")
    survival = _log_survival([parts for slot in slots for parts in slot.parts], lives, n_draws)
    log_chance = np.zeros((len(slots), n_draws))
    first = 0
    for row, slot in enumerate(slots):
        columns = survival.row[first : first + len(slot.parts)]
        first += len(slot.parts)
        if slot.stops_at is not None:
            log_chance[row] = _slot_log_chance(slot, survival.log_chance[columns])
    joint = _summed([key[:2] for key in keys], log_chance)
    robot = _summed([key[0] for key in keys], log_chance)
    return SessionOdds(
        slot=dict(zip(keys, _chances(log_chance), strict=True)),
        joint=dict(zip(joint, _chances(np.array(list(joint.values())).reshape(-1, n_draws)), strict=True)),
        robot=dict(zip(robot, _chances(np.array(list(robot.values())).reshape(-1, n_draws)), strict=True)),
        fleet=_chances(log_chance.sum(axis=0, keepdims=True))[0],
    )


def common_draws(lives: Mapping[str, LifeDraws]) -> int:
    """Number of draws that the lives share; lives with one draw fit any.

    Raises
    ------
    PlanError
        If two lives have different numbers of draws.
    """
    sizes = {life.n_draws for life in lives.values()} - {1}
    if len(sizes) > 1:
        raise PlanError(f"The lives have different numbers of draws, {sorted(sizes)}: draw the same number of each.")
    return sizes.pop() if sizes else 1


def part_key(parts: PartsAtRisk, lives: Mapping[str, LifeDraws]) -> tuple[str, tuple[tuple[float, float], ...]]:
    """Life, and (age, use) in each of its clocks: parts with the same key have the same chances.

    Raises
    ------
    PlanError
        If the life is unknown, a clock that drives it is missing, or an age, a use or the count cannot be.
    """
    life = lives.get(parts.life)
    if life is None:
        raise PlanError(f"No life is known for {parts.life!r}: fit it, or state a belief about it.")
    missing = [clock for clock in life.clocks if clock not in parts.age or clock not in parts.use]
    if missing:
        raise PlanError(f"Parts of {parts.life!r} have no age or no planned use in the clock {', '.join(missing)}.")
    figures = tuple((float(parts.age[clock]), float(parts.use[clock])) for clock in life.clocks)
    if parts.count < 0 or not all(0.0 <= value < np.inf for pair in figures for value in pair):
        raise PlanError(f"Parts of {parts.life!r}: count {parts.count}, (age, use) {figures}: each must be 0 or more.")
    return parts.life, figures


@dataclass(frozen=True, eq=False)
class _Survival:
    """Log chance of survival of each distinct part, shape (n_distinct, n_draws), and the row of each given part."""

    log_chance: FloatArray
    row: NDArray[np.int64]


def _log_survival(parts: Iterable[PartsAtRisk], lives: Mapping[str, LifeDraws], n_draws: int) -> _Survival:
    """Log chance that one part survives its planned use, each distinct part worked out once."""
    index: dict[tuple[str, tuple[tuple[float, float], ...]], int] = {}
    rows = np.array([index.setdefault(part_key(p, lives), len(index)) for p in parts], dtype=np.int64)
    by_life: dict[str, list[int]] = defaultdict(list)
    figures = list(index)
    for row, (name, _) in enumerate(figures):
        by_life[name].append(row)
    log_chance = np.empty((len(index), n_draws))
    for name, members in by_life.items():
        life = lives[name]
        for start in range(0, len(members), _COLUMNS_AT_ONCE):
            chunk = members[start : start + _COLUMNS_AT_ONCE]
            pairs = np.array([figures[row][1] for row in chunk])
            now = {clock: pairs[:, i, 0] for i, clock in enumerate(life.clocks)}
            then = {clock: pairs[:, i, 0] + pairs[:, i, 1] for i, clock in enumerate(life.clocks)}
            log_chance[chunk] = (life.cumulative_hazard(now) - life.cumulative_hazard(then)).T
    return _Survival(np.minimum(log_chance, 0.0, out=log_chance), rows)


def _slot_log_chance(slot: SlotAtRisk, log_survival: FloatArray) -> FloatArray:
    """Log chance, draw by draw, that fewer than `stops_at` of the slot's parts fail; shape (n_draws,)."""
    limit = slot.stops_at
    if limit is None or limit < 1:
        raise PlanError(f"Slot {slot.robot} / {slot.joint} / {slot.slot} stops at {limit}: give 1 or more, or none.")
    counts = np.array([parts.count for parts in slot.parts], dtype=np.float64)
    if limit == 1:
        return np.asarray(counts @ log_survival, dtype=np.float64)
    if counts.sum() < limit:
        return np.zeros(log_survival.shape[1])
    failed = np.zeros((limit, log_survival.shape[1]))
    failed[0] = 1.0
    for count, log_good in zip(counts.astype(int), log_survival, strict=True):
        good, bad = np.exp(log_good), -np.expm1(log_good)
        before, failed = failed, np.zeros_like(failed)
        for j in range(min(int(count), limit - 1) + 1):
            failed[j:] += comb(int(count), j) * bad**j * good ** (int(count) - j) * before[: limit - j]
    with np.errstate(divide="ignore"):
        return np.asarray(np.log(np.minimum(failed.sum(axis=0), 1.0)))


def _summed(keys: Sequence[Key], rows: FloatArray) -> dict[Key, FloatArray]:
    """Sum of the rows of each key, in order of first appearance."""
    total: dict[Key, FloatArray] = {}
    for key, row in zip(keys, rows, strict=True):
        total[key] = total[key] + row if key in total else row
    return total


def _chances(log_chance: FloatArray) -> list[Chance]:
    """Mean and 10 % and 90 % quantiles over the draws of each row."""
    chance = np.exp(log_chance)
    if chance.size == 0:
        return []
    low, high = np.quantile(chance, [0.1, 0.9], axis=1)
    return [Chance(*map(float, row)) for row in zip(chance.mean(axis=1), low, high, strict=True)]
