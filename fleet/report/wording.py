"""Numbers, counts and times in; the plain words that tables and pages write them in, out. No markup in here."""

from __future__ import annotations

import math
import re
from collections.abc import Sequence
from datetime import datetime, tzinfo
from typing import Protocol

NO_BREAK = "\u00a0"
_MARKDOWN = re.compile(r"([!-/:-@\[-`{-~])")


class Chance(Protocol):
    """A chance and the range in which the chance itself is known, each within 0 and 1."""

    @property
    def mean(self) -> float:
        """The chance."""

    @property
    def low(self) -> float:
        """Lower end of its range."""

    @property
    def high(self) -> float:
        """Upper end of its range."""


def count(number: int, one: str, many: str | None = None) -> str:
    """`1 part`, `3 parts`."""
    return f"{number:,}{NO_BREAK}{one if number == 1 else many or one + 's'}"


def figure(value: float, digits: int = 3) -> str:
    """A number with about this many digits that mean something, never in powers of ten."""
    if not math.isfinite(value):
        return "no limit" if value > 0 else "unknown"
    if value == 0:
        return "0"
    places = max(0, digits - 1 - math.floor(math.log10(abs(value))))
    rounded = round(value, digits - 1 - math.floor(math.log10(abs(value))))
    text = f"{rounded:,.{places}f}"
    return text.rstrip("0").rstrip(".") if "." in text else text


def hours(value: float) -> str:
    """`1.5 h`."""
    return f"{value:.2f}".rstrip("0").rstrip(".") + f"{NO_BREAK}h"


def percent(share: float) -> str:
    """A share as whole per cent, never 0 or 100: nothing is certain."""
    whole = round(share * 100)
    if whole < 1:
        return "under 1"
    return "over 99" if whole > 99 else str(whole)


def chance(value: Chance) -> str:
    """`71 % (62-79)`, with a true dash; `under 1 %` alone where the whole range is."""
    if max(value.mean, value.high) < 0.005:
        return f"under 1{NO_BREAK}%"
    return f"{percent(value.mean)}{NO_BREAK}% ({_end(value.low)}–{_end(value.high)})"


def _end(share: float) -> str:
    """An end of a range: a rounded 100 would claim certainty, a 0 at the low end does not."""
    whole = round(share * 100)
    return "over 99" if whole > 99 else str(whole)


def span(low: float, middle: float, high: float, unit: str = "") -> str:
    """`410 h (330-520)`."""
    gap = NO_BREAK if unit else ""
    return f"{figure(middle)}{gap}{unit} ({figure(low)}–{figure(high)})"


class Saving(Protocol):
    """A share saved, and the range in which it is known; below 0 where it would cost."""

    @property
    def saving(self) -> float:
        """The share."""

    @property
    def saving_low(self) -> float:
        """Lower end of its range."""

    @property
    def saving_high(self) -> float:
        """Upper end of its range."""


def saved(value: Saving) -> str:
    """`16 % (−4 to 29)`, with a true minus."""
    low, high = (f"{share * 100:.0f}".replace("-", "−") for share in (value.saving_low, value.saving_high))
    return f"{percent(value.saving)}{NO_BREAK}% ({low} to {high})"


def joined(words: Sequence[str], last: str = "and") -> str:
    """`a`, `a and b`, `a, b and c`."""
    if len(words) < 2:
        return "".join(words)
    return f"{', '.join(words[:-1])} {last} {words[-1]}"


def clock_time(moment: datetime, zone: tzinfo) -> str:
    """`18:02`, in the book's zone."""
    return f"{moment.astimezone(zone):%H:%M}"


def day(moment: datetime, zone: tzinfo) -> str:
    """`Mon 3 Aug`, in the book's zone."""
    local = moment.astimezone(zone)
    return f"{local:%a} {local.day} {local:%b}"


def moment_text(moment: datetime, zone: tzinfo) -> str:
    """`Mon 3 Aug 18:02`, in the book's zone."""
    return f"{day(moment, zone)} {clock_time(moment, zone)}"


def capital(sentence: str) -> str:
    """The sentence with its first letter large."""
    return sentence[:1].upper() + sentence[1:]


def plain(text: str) -> str:
    """Text that people typed, for a widget's label: its punctuation is shown, never taken as formatting or a link."""
    return _MARKDOWN.sub(r"\\\1", text)
