"""From one table of lives to everything that is said of it without a book: Weibull, bounds, steps, posterior, words."""

from __future__ import annotations

from dataclasses import dataclass

from fleet.errors import DataError, FitError
from fleet.fits.kaplan_meier import KaplanMeierFit, fit_kaplan_meier
from fleet.fits.posterior import Belief, WeibullPosterior, weibull_posterior
from fleet.fits.weibull import WeibullFit, fit_weibull, profile_bounds
from fleet.fits.weibull_bounds import ProfileBounds
from fleet.lives.life_data import LifeData

FEW_FAILURES = 5


@dataclass(frozen=True)
class BeliefAsked:
    """The belief that the user stated: age by which 1 in 10 are gone, and shape, each give or take a factor."""

    t10: float
    factor: float
    shape_median: float
    shape_factor: float


@dataclass(frozen=True, eq=False)
class TableFit:
    """What one table of lives says; a part that the data do not allow is None, and `sentence` says why."""

    weibull: WeibullFit | None
    bounds: ProfileBounds | None
    steps: KaplanMeierFit | None
    posterior: WeibullPosterior | None
    sentence: str


def fit_table(data: LifeData, level: float, asked: BeliefAsked | None) -> TableFit:
    """Fit whatever the table allows; too little data is an answer, not an error.

    Parameters
    ----------
    level : float
        Confidence of the bounds, such as 0.95.
    asked : BeliefAsked or None
        A belief to combine with the data; without one there is no posterior.
    """
    weibull, bounds, sentence = _weibull(data, level)
    try:
        steps = fit_kaplan_meier(data)
    except DataError:
        steps = None
    posterior = None
    if asked is not None:
        belief = Belief(asked.t10, asked.factor, asked.shape_median, asked.shape_factor)
        posterior = weibull_posterior(data, belief)
    return TableFit(weibull, bounds, steps, posterior, sentence)


def _weibull(data: LifeData, level: float) -> tuple[WeibullFit | None, ProfileBounds | None, str]:
    if data.failures == 0:
        said = "No failures: the data alone set no life, only that it is long; state a belief with --t10 and --factor."
        return None, None, said
    try:
        fit = fit_weibull(data)
    except FitError as error:
        return None, None, str(error)
    bounds = profile_bounds(data, level)
    failures = f"{data.failures:g} failure{'' if data.failures == 1 else 's'}"
    if data.failures < FEW_FAILURES:
        return fit, bounds, f"Only {failures}: read the bounds, not the middle."
    low, high = bounds.shape
    if low > 1:
        return fit, bounds, f"{failures}: the parts wear out (shape above 1 within its bounds)."
    if high < 1:
        return fit, bounds, f"{failures}: early failures prevail (shape below 1 within its bounds)."
    return fit, bounds, f"{failures}: these data do not tell wear-out from failures at random."
