"""The true lives behind the invented fleet: what a correct analysis of its records should find again.

Every part lives R(t) = exp(-(t/scale)^shape) in each of its modes, modes independent, t in the mode's own clock.
The finding of a mode is fixed, and so is the way it comes to light:

- "stopped" ends the session at the failing moment, and with it the robot's day;
- "over its limit" lets the robot finish; it is noticed when the session is over. If a slot's `stops_at` parts go in
  one session, the last of them stops the robot, and that one failure is noted as "stopped";
- "found worn" is seen only when the joint is next looked at on the bench; until then the part runs on.

A snapped pin jams a disc in `JAMMING_SHARE` of the cases: the disc splits and the robot stops with it. That is the
pin's failure; the disc is broken by another part, which says nothing of its own life.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from typing import Literal

Endpoint = Literal["stop", "unfit"]


@dataclass(frozen=True)
class TrueMode:
    """One mode of one part type and revision ("" where the type has none); `scale` in units of `clock`."""

    part_type: str
    revision: str
    mode: str
    clock: str
    shape: float
    scale: float
    finding: str
    cause: str

    def b_life(self, percent: float) -> float:
        """Age by which `percent` of the parts would be gone by this mode alone. [clock]"""
        return float(self.scale * (-math.log1p(-percent / 100.0)) ** (1.0 / self.shape))


TRUE_MODES = (
    TrueMode("disc", "B", "lobe wear", "hours", 2.6, 800.0, "found worn", "operation"),
    TrueMode("disc", "B", "layer split", "impacts", 2.0, 4_200.0, "stopped", "design"),
    TrueMode("disc", "C", "lobe wear", "hours", 2.6, 1_250.0, "found worn", "operation"),
    TrueMode("disc", "C", "layer split", "impacts", 2.0, 6_500.0, "stopped", "print"),
    TrueMode("pin", "", "snapped", "turns", 1.8, 4_500_000.0, "over its limit", "operation"),
    TrueMode("pin", "", "worn flat", "hours", 3.0, 2_000.0, "found worn", "operation"),
    TrueMode("small bearing", "", "rough", "hours", 1.4, 7_500.0, "over its limit", "operation"),
    TrueMode("small bearing", "", "dented", "impacts", 2.0, 30_000.0, "found worn", "operation"),
    TrueMode("cam", "", "slipped", "hours", 1.5, 1_500.0, "stopped", "assembly"),
    TrueMode("cam", "", "bore worn", "turns", 2.2, 1_600_000.0, "found worn", "operation"),
    TrueMode("output bearing", "", "play", "hours", 2.5, 4_500.0, "found worn", "operation"),
    TrueMode("leg housing", "", "cracked", "impacts", 1.5, 80_000.0, "stopped", "print"),
    TrueMode("bump stop", "", "torn", "impacts", 2.0, 9_000.0, "found worn", "operation"),
    TrueMode("cable", "", "core broken", "turns", 4.0, 520_000.0, "stopped", "design"),
    TrueMode("belt", "", "teeth worn", "hours", 2.5, 450.0, "found worn", "operation"),
    TrueMode("belt", "", "snapped", "turns", 3.0, 260_000.0, "stopped", "unknown"),
    TrueMode("idler", "", "bore worn", "turns", 2.0, 700_000.0, "found worn", "operation"),
    TrueMode("idler", "", "flange split", "hours", 1.3, 3_000.0, "stopped", "print"),
    TrueMode("arm housing", "", "cracked", "impacts", 1.5, 60_000.0, "stopped", "print"),
    TrueMode("arm bearing", "", "play", "hours", 2.2, 900.0, "found worn", "operation"),
)

KEPT_APART_FACTOR = 0.5  # the bad lot: every scale of its parts is this much of the others'
JAMMING_SHARE = 0.3  # of the snapped pins
JAMMED_SLOT = "discs"
JAMMED_MODE = "layer split"

HOW_FOUND = {
    "stopped": "during the session",
    "over its limit": "after the session",
    "found worn": "at a check",
}


def true_modes(part_type: str, revision: str = "", lot_kept_apart: bool = False) -> tuple[TrueMode, ...]:
    """All modes of a part type and revision; a lot kept apart has its shorter scales.

    Raises
    ------
    KeyError
        If there is no such part type or revision.
    """
    found = tuple(mode for mode in TRUE_MODES if (mode.part_type, mode.revision) == (part_type, revision))
    if not found:
        raise KeyError(f"no true lives for {part_type!r}, revision {revision!r}")
    if not lot_kept_apart:
        return found
    return tuple(replace(mode, scale=mode.scale * KEPT_APART_FACTOR) for mode in found)


def true_b10(
    part_type: str, revision: str = "", lot_kept_apart: bool = False, endpoint: Endpoint = "unfit"
) -> dict[str, float]:
    """Age by which 1 in 10 would be gone, for each mode by itself.

    Parameters
    ----------
    part_type, revision : str
        Codes of the part type and of its revision ("" where the type has none).
    lot_kept_apart : bool
        Whether the parts are of the bad lot.
    endpoint : "stop" or "unfit"
        "stop" counts only the modes that stop the robot, "unfit" counts all.

    Returns
    -------
    dict
        Mode code -> true B10. [clock of the mode]
    """
    modes = true_modes(part_type, revision, lot_kept_apart)
    return {mode.mode: mode.b_life(10.0) for mode in modes if endpoint == "unfit" or mode.finding == "stopped"}
