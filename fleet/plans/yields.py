"""Good and started prints come in; how many to start for a wanted number of good ones goes out."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from scipy import stats

from fleet.errors import PlanError

_MOST_STARTS = 100_000


@dataclass(frozen=True)
class YieldRecord:
    """Prints of one part so far.

    Parameters
    ----------
    good, started : int
        Good parts among those started.

    Raises
    ------
    PlanError
        If there are more good than started, or fewer than none.
    """

    good: int
    started: int

    def __post_init__(self) -> None:
        """Check the counts."""
        if not 0 <= self.good <= self.started:
            raise PlanError(f"{self.good} good of {self.started} started: give 0 or more, not more good than started.")

    def chance_of_good(self, good_wanted: int, starts: int) -> float:
        """Chance that `starts` prints give `good_wanted` good ones or more, the yield known by this record only.

        Jeffreys prior Beta(1/2, 1/2): the number of good ones is beta-binomial.
        """
        if good_wanted <= 0:
            return 1.0
        law = stats.betabinom(starts, self.good + 0.5, self.started - self.good + 0.5)
        return float(law.sf(good_wanted - 1))


def starts_for(good_wanted: int, confidence: float, good: int, started: int) -> int:
    """Fewest prints to start for enough good ones, the yield known from a record (beta-binomial, Jeffreys prior).

    Parameters
    ----------
    good_wanted : int
        0 or more.
    confidence : float
        In (0, 1).
    good, started : int
        Good ones among those started so far; 0 of 0 is an answer, too, and a costly one.

    Returns
    -------
    int

    Raises
    ------
    PlanError
        If a figure cannot be, or no number up to 100,000 is enough.
    """
    record = YieldRecord(good, started)
    _check(good_wanted, confidence)
    return _first(lambda starts: record.chance_of_good(good_wanted, starts), good_wanted, confidence)


def starts_for_known_yield(good_wanted: int, confidence: float, chance: float) -> int:
    """Fewest prints to start for enough good ones, the yield taken as known (binomial).

    Parameters
    ----------
    good_wanted : int
        0 or more.
    confidence : float
        In (0, 1).
    chance : float
        Chance that one print is good, in (0, 1].

    Returns
    -------
    int

    Raises
    ------
    PlanError
        If a figure cannot be.
    """
    _check(good_wanted, confidence)
    if not 0.0 < chance <= 1.0:
        raise PlanError(f"The yield is {chance}: give a chance above 0, at most 1.")
    return _first(lambda starts: float(stats.binom.sf(good_wanted - 1, starts, chance)), good_wanted, confidence)


def _check(good_wanted: int, confidence: float) -> None:
    if good_wanted < 0 or not 0.0 < confidence < 1.0:
        raise PlanError(f"{good_wanted} good ones with a chance of {confidence}: give 0 or more, a chance in (0, 1).")


def _first(chance: Callable[[int], float], good_wanted: int, confidence: float) -> int:
    """Smallest number, from `good_wanted` on, whose chance (rising) reaches the confidence, by doubling and halving."""
    if good_wanted == 0:
        return 0
    low, high = good_wanted - 1, good_wanted
    while chance(high) < confidence:
        low, high = high, 2 * high
        if high > _MOST_STARTS:
            raise PlanError(
                f"No number of starts up to {_MOST_STARTS} gives {good_wanted} good ones "
                f"with a chance of {confidence}: mend the process, or ask for less."
            )
    while high - low > 1:
        middle = (low + high) // 2
        low, high = (low, middle) if chance(middle) >= confidence else (middle, high)
    return high
