"""Life data with failure modes come in; one Weibull fit per mode goes out, the other modes suspended."""

from __future__ import annotations

from fleet.fits.weibull import WeibullFit, fit_weibull
from fleet.lives.life_data import LifeData


def fit_modes(data: LifeData) -> dict[str, WeibullFit]:
    """Maximum-likelihood Weibull life of each failure mode, failures of the others as suspensions.

    Parameters
    ----------
    data : LifeData
        Failures with modes. If they are of one unnamed mode, the mapping holds it under "".

    Returns
    -------
    dict of mode to WeibullFit
        In order of their names. [clock]

    Raises
    ------
    DataError
        If a row has several candidate modes.
    FitError
        If a mode's likelihood has no finite maximum; the sentence names the mode's data.
    """
    if not data.modes:
        return {"": fit_weibull(data)}
    return {name: fit_weibull(data.for_mode(name)) for name in data.modes}
