"""The trade's words that records may use: clocks, findings, causes, reasons, outcomes."""

from __future__ import annotations

CLOCKS = ("hours", "load_hours", "turns", "impacts", "days")
CLOCK_UNITS = {"hours": "h", "load_hours": "h under load", "turns": "turns", "impacts": "impacts", "days": "days"}

# What makes a part fail: the physics, one word or two each.
MECHANISMS = (
    "wear",
    "fatigue",
    "overload",
    "layer split",
    "creep",
    "loosening",
    "corrosion",
    "ageing",
    "assembly",
    "unknown",
)

# A failure's finding decides its endpoint: only the first one stopped the robot.
FINDINGS = ("stopped", "over its limit", "found worn")
CAUSES = ("design", "print", "assembly", "operation", "maintenance", "another part's failure", "unknown")
# How a mode comes to light: by itself while the robot runs, or only when someone looks on the bench.
NOTICED = ("in use", "at a check")
HOW_FOUND = ("during the session", "after the session", "at a check", "unknown")

REMOVAL_REASONS = ("failed", "found worn", "replaced while good", "moved", "broken by another part", "unknown")
OUTCOMES = ("finished", "stopped", "broken off")
USE_BASES = ("counted", "from log", "planned")
PRIOR_AGES = ("new", "stated", "unknown")
VERDICTS = ("good", "doubtful")
PART_SOURCES = ("printed", "bought")
STOCK_REASONS = ("received", "counted", "scrapped", "returned")
SIDES = ("left", "right", "trunk")
WEEKDAYS = ("Monday", "Tuesday", "Wednesday", "Thursday", "Friday", "Saturday", "Sunday")
