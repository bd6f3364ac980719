"""The physics behind a failure mode comes in; what is believed of its Weibull shape before any data goes out."""

from __future__ import annotations

from collections.abc import Mapping
from types import MappingProxyType

SHAPE_BELIEF: Mapping[str, tuple[float, float, str]] = MappingProxyType(
    {
        "wear": (2.5, 2.0, "judgement"),
        "fatigue": (2.0, 2.0, "judgement"),
        "overload": (1.0, 1.6, "judgement"),
        "layer split": (1.5, 2.2, "judgement"),
        "creep": (3.0, 2.0, "judgement"),
        "loosening": (1.2, 2.0, "judgement"),
        "corrosion": (2.0, 2.0, "judgement"),
        "ageing": (3.0, 2.0, "judgement"),
        "assembly": (0.7, 1.8, "judgement"),
    }
)
"""Mechanism -> (median of the shape, factor that holds 90 % of the belief about it, basis). No source is claimed."""

UNKNOWN_SHAPE_BELIEF: tuple[float, float, str] = (1.5, 3.0, "judgement")
"""Where the mechanism is not known: from early failures (0.5) to steep wear (4.5)."""


def shape_belief(mechanism: str) -> tuple[float, float, str]:
    """Belief about the Weibull shape of a mode from its mechanism.

    Parameters
    ----------
    mechanism : str
        As in `SHAPE_BELIEF`; capitals and outer blanks do not matter.

    Returns
    -------
    tuple of (float, float, str)
        Median and factor [1], and the basis; the wide belief for an unknown mechanism.
    """
    return SHAPE_BELIEF.get(mechanism.strip().lower(), UNKNOWN_SHAPE_BELIEF)
