"""A joint module as it really is: its clocks, the parts in it, and the ages at which they will really fail."""

from __future__ import annotations

import math
from dataclasses import dataclass, field
from random import Random

from demo_data.chance import weibull_beyond
from demo_data.store_room import BagLabel
from demo_data.truth import JAMMING_SHARE, TrueMode, true_modes

CLOCKS = ("hours", "turns", "impacts")
Reading = dict[str, float]
Place = tuple[str, int]


def no_reading() -> Reading:
    """All clocks at zero."""
    return dict.fromkeys(CLOCKS, 0.0)


@dataclass(frozen=True)
class FittedPart:
    """A part in its place: its age and its module's clocks when it was fitted, and its true age at failure by mode."""

    label: BagLabel
    age_when_fitted: Reading
    reading_when_fitted: Reading
    lives: tuple[tuple[TrueMode, float], ...]
    jams: bool

    def fails_at(self, mode: TrueMode, life: float) -> float:
        """The module's reading at which this part fails in a mode. [clock of the mode]"""
        return self.reading_when_fitted[mode.clock] + life - self.age_when_fitted[mode.clock]


@dataclass(frozen=True)
class Crossing:
    """A part fails when `share` of the session has passed."""

    share: float
    module: JointModule
    place: Place
    mode: TrueMode
    jams: bool


def new_part(label: BagLabel, rng: Random, age: Reading | None = None) -> FittedPart:
    """Draw the true lives of a part that has already lived to `age` (default: new)."""
    age = no_reading() if age is None else age
    modes = true_modes(label.part_type, label.revision, label.kept_apart)
    lives = tuple((mode, weibull_beyond(rng, mode.shape, mode.scale, age[mode.clock])) for mode in modes)
    jams = label.part_type == "pin" and rng.random() < JAMMING_SHARE
    return FittedPart(label, age, no_reading(), lives, jams)


@dataclass(eq=False)
class JointModule:
    """A physical joint module; `robot` and `position` are empty while it lies on the shelf."""

    code: str
    unit_design: str
    robot: str = ""
    position: str = ""
    reading: Reading = field(default_factory=no_reading)
    parts: dict[Place, FittedPart] = field(default_factory=dict)
    _next_due: Reading = field(default_factory=lambda: dict.fromkeys(CLOCKS, math.inf))

    def put_in(self, place: Place, part: FittedPart) -> None:
        """Fit a part; it keeps the age it brings."""
        self.parts[place] = FittedPart(part.label, part.age_when_fitted, dict(self.reading), part.lives, part.jams)
        self._note_next_due()

    def take_out(self, place: Place) -> FittedPart:
        """Remove a part with the age it has now."""
        part = self.parts.pop(place)
        age = {clock: self.age_of(part, clock) for clock in CLOCKS}
        self._note_next_due()
        return FittedPart(part.label, age, no_reading(), part.lives, part.jams)

    def age_of(self, part: FittedPart, clock: str) -> float:
        """Present age of a part in this module. [clock]"""
        return part.age_when_fitted[clock] + self.reading[clock] - part.reading_when_fitted[clock]

    def run(self, gain: Reading) -> None:
        """Move the clocks on."""
        for clock in CLOCKS:
            self.reading[clock] += gain[clock]

    def crossings(self, gain: Reading) -> list[Crossing]:
        """Failures that show while the clocks gain this much (worn parts show only on the bench)."""
        if all(self._next_due[clock] > self.reading[clock] + gain[clock] for clock in CLOCKS):
            return []
        found = []
        for place, part in self.parts.items():
            for mode, life in part.lives:
                left = part.fails_at(mode, life) - self.reading[mode.clock]
                if mode.finding != "found worn" and left <= gain[mode.clock]:
                    share = max(left, 0.0) / gain[mode.clock] if gain[mode.clock] > 0 else 0.0
                    found.append(Crossing(share, self, place, mode, part.jams))
        return found

    def worn(self, place: Place) -> TrueMode | None:
        """The mode by which the part in this place is past its use, to be seen only on the bench; None if good."""
        part = self.parts[place]
        for mode, life in part.lives:
            if mode.finding == "found worn" and part.fails_at(mode, life) <= self.reading[mode.clock]:
                return mode
        return None

    def worn_places(self) -> list[Place]:
        """All places whose part is worn out, in order of fitting."""
        return [place for place in self.parts if self.worn(place) is not None]

    def places_of(self, slot: str) -> list[Place]:
        """The filled places of a slot, in order."""
        return sorted(place for place in self.parts if place[0] == slot)

    def _note_next_due(self) -> None:
        self._next_due = dict.fromkeys(CLOCKS, math.inf)
        for part in self.parts.values():
            for mode, life in part.lives:
                if mode.finding != "found worn":
                    self._next_due[mode.clock] = min(self._next_due[mode.clock], part.fails_at(mode, life))
