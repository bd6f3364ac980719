"""Draws from a seeded generator, made from its plain uniform draws only, so that a seed means the same everywhere."""

from __future__ import annotations

import math
from collections.abc import Sequence
from random import Random
from typing import TypeVar

_T = TypeVar("_T")


def between(rng: Random, low: float, high: float) -> float:
    """Uniform between two values."""
    return low + (high - low) * rng.random()


def whole_between(rng: Random, low: int, high: int) -> int:
    """Uniform whole number, both ends included."""
    return low + int((high - low + 1) * rng.random())


def one_of(rng: Random, choices: Sequence[_T]) -> _T:
    """One of several, all alike likely."""
    return choices[int(len(choices) * rng.random())]


def several_of(rng: Random, choices: Sequence[_T], count: int) -> list[_T]:
    """`count` different ones, in their given order."""
    ranked = sorted(range(len(choices)), key=lambda _: rng.random())
    return [choices[index] for index in sorted(ranked[:count])]


def poisson(rng: Random, mean: float) -> int:
    """Poisson count for a mean below a few hundred (product of uniforms)."""
    limit, count, product = math.exp(-mean), 0, rng.random()
    while product > limit:
        count += 1
        product *= rng.random()
    return count


def successes(rng: Random, trials: int, share: float) -> int:
    """Binomial count."""
    return sum(rng.random() < share for _ in range(trials))


def weibull_beyond(rng: Random, shape: float, scale: float, age: float) -> float:
    """Age at failure of a part that is known to have lived to `age`. [unit of scale]"""
    spent = (age / scale) ** shape
    return float(scale * (spent - math.log(1.0 - rng.random())) ** (1.0 / shape))
