"""The invented grower's fleet: robots, joints, first lots, and what was planned to happen to them on which day."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import date
from typing import Literal
from zoneinfo import ZoneInfo

from demo_data.part_plan import ARM_JOINT, LEG_JOINT

ZONE_NAME = "Europe/Amsterdam"
ZONE = ZoneInfo(ZONE_NAME)
TITLE = "Glasshouse scouts and pickers (an invented fleet)"
CURRENCY = "EUR"
FIRST_DAY = date(2025, 10, 1)
LAST_DAY = date(2026, 11, 30)
KIT_DAY = date(2025, 9, 22)
FITTING_DAY = date(2025, 9, 29)


@dataclass(frozen=True)
class PlannedRobot:
    """A robot, how hard it is used, and what was known of its parts' ages when it joined."""

    code: str
    label: str
    kind: Literal["walker", "arm"]
    site: str
    joined: date
    sessions_per_week: int
    impacts_per_hour: float
    prior: Literal["new", "stated", "unknown"] = "new"


@dataclass(frozen=True)
class PlannedJoint:
    """A position of a kind of robot."""

    code: str
    label: str
    limb: str
    side: str
    rank: int
    unit_design: str
    turns_per_hour: int


@dataclass(frozen=True)
class FirstLot:
    """Parts that came with the robots, before the first session."""

    code: str
    part_type: str
    quantity: int
    revision: str = ""
    kept_apart: bool = False
    note: str = ""


@dataclass(frozen=True)
class ModuleSwap:
    """The module of a joint goes to the shelf; the one that lay there longest takes its place."""

    day: date
    robot: str
    position: str


@dataclass(frozen=True)
class PartMove:
    """The part of a slot is taken out of one robot's joint and fitted in the same joint of another robot."""

    day: date
    from_robot: str
    to_robot: str
    position: str
    slot: str


@dataclass(frozen=True)
class RobotHold:
    """Someone said: do not run this robot; `until` is None while that stands."""

    robot: str
    since: date
    why: str
    until: date | None
    why_lifted: str = ""


ROBOTS = (
    PlannedRobot("W1", "Walker 1", "walker", "house 1, tomatoes", FIRST_DAY, 4, 5.0),
    PlannedRobot("W2", "Walker 2", "walker", "house 1, tomatoes", FIRST_DAY, 4, 6.0),
    PlannedRobot("W3", "Walker 3", "walker", "house 2, peppers", FIRST_DAY, 4, 10.0),
    PlannedRobot("W4", "Walker 4", "walker", "house 2, peppers", FIRST_DAY, 4, 8.0),
    PlannedRobot("W5", "Walker 5", "walker", "house 3, cucumbers", FIRST_DAY, 4, 6.0),
    PlannedRobot("W6", "Walker 6", "walker", "house 3, cucumbers", FIRST_DAY, 4, 3.5),
    PlannedRobot("W7", "Walker 7", "walker", "house 4, seedlings", date(2026, 2, 2), 4, 9.0, "stated"),
    PlannedRobot("W8", "Walker 8", "walker", "house 4, seedlings", date(2026, 5, 4), 4, 6.0, "unknown"),
    PlannedRobot("P1", "Picker 1", "arm", "house 1, tomatoes", FIRST_DAY, 5, 0.6),
    PlannedRobot("P2", "Picker 2", "arm", "house 2, peppers", FIRST_DAY, 5, 0.5),
)

STATED_PRIOR_HOURS = {"discs": 140.0, "bump stop": 140.0}  # by slot, other slots:
STATED_PRIOR_HOURS_ELSE = 310.0
PRIOR_IMPACTS_PER_HOUR = 6.0
HIDDEN_PRIOR_HOURS = (120.0, 420.0)  # true, but nobody wrote it down

_LEG_TURNS = {"hip": 500, "thigh": 1000, "knee": 1500}
_ARM_TURNS = {"base": 450, "shoulder": 600, "elbow": 700, "wrist": 800, "grip": 500}


def _leg_joints() -> tuple[PlannedJoint, ...]:
    return tuple(
        PlannedJoint(
            f"{side[0].upper()}{row[0].upper()}-{joint}",
            f"{side} {row} {joint}",
            f"{side} {row} leg",
            side,
            rank,
            LEG_JOINT,
            turns,
        )
        for side in ("left", "right")
        for row in ("front", "middle", "rear")
        for rank, (joint, turns) in enumerate(_LEG_TURNS.items(), start=1)
    )


JOINTS = {
    "walker": _leg_joints(),
    "arm": tuple(
        PlannedJoint(joint, joint, "arm", "trunk", rank, ARM_JOINT, turns)
        for rank, (joint, turns) in enumerate(_ARM_TURNS.items(), start=1)
    ),
}
SPARE_MODULES = {LEG_JOINT: 3, ARM_JOINT: 1}

BAD_LOT = "DC-02"
FIRST_LOTS = (
    FirstLot("DB-01", "disc", 78, "B"),
    FirstLot("DB-02", "disc", 78, "B"),
    FirstLot("DC-01", "disc", 66, "C"),
    FirstLot(BAD_LOT, "disc", 30, "C", True, "dull layers: printed while the enclosure door stood open"),
    FirstLot("PN-01", "pin", 800),
    FirstLot("PN-02", "pin", 850),
    FirstLot("BR-01", "small bearing", 1500),
    FirstLot("BR-02", "small bearing", 1650),
    FirstLot("CM-01", "cam", 121),
    FirstLot("OB-01", "output bearing", 116),
    FirstLot("LH-01", "leg housing", 115),
    FirstLot("BS-01", "bump stop", 121),
    FirstLot("CB-01", "cable", 135),
    FirstLot("BT-01", "belt", 17),
    FirstLot("ID-01", "idler", 29),
    FirstLot("AH-01", "arm housing", 13),
    FirstLot("AB-01", "arm bearing", 15),
)
FIRST_DISCS = {"W1": "DB-01", "W2": "DB-01", "W3": "DB-02", "W4": "DB-02", "W5": "DC-01", "W6": "DC-01"}
BAD_LOT_ROBOT = "W5"
BAD_LOT_LIMBS = ("left front leg", "left middle leg", "left rear leg", "right front leg")

MODULE_SWAPS = (
    ModuleSwap(date(2025, 12, 9), "W2", "RM-knee"),
    ModuleSwap(date(2026, 1, 20), "W4", "LF-thigh"),
    ModuleSwap(date(2026, 2, 10), "P1", "elbow"),
    ModuleSwap(date(2026, 3, 3), "W1", "LR-knee"),
    ModuleSwap(date(2026, 4, 14), "W5", "RF-hip"),
    ModuleSwap(date(2026, 6, 9), "W3", "LM-thigh"),
    ModuleSwap(date(2026, 7, 7), "P2", "wrist"),
    ModuleSwap(date(2026, 8, 4), "W6", "RR-knee"),
    ModuleSwap(date(2026, 9, 15), "W8", "LF-knee"),
    ModuleSwap(date(2026, 10, 20), "W7", "RM-thigh"),
)
PART_MOVES = (
    PartMove(date(2026, 2, 17), "W3", "W6", "LF-hip", "output bearing"),
    PartMove(date(2026, 5, 12), "W1", "W4", "RR-thigh", "cam"),
    PartMove(date(2026, 8, 18), "W6", "W2", "LM-knee", "housing"),
    PartMove(date(2026, 10, 6), "P1", "P2", "base", "bearing"),
)

# Discs of the old revision are taken out of this robot while good, three joints each Monday.
RENEWAL_ROBOT = "W2"
RENEWAL_REVISION = "B"
RENEWAL_MONDAYS = (*(date(2026, 7, day) for day in (6, 13, 20, 27)), date(2026, 8, 3), date(2026, 8, 10))
RENEWAL_JOINTS_A_DAY = 3

HOLDS = (
    RobotHold(
        "W2",
        date(2026, 3, 9),
        "ran into the watering rail, all left legs to be turned by hand before it walks again",
        date(2026, 3, 12),
        "all legs turn freely, short walk behind the barrier without a knock",
    ),
    RobotHold("W3", date(2026, 11, 26), "battery tray cracked, waiting for a new one", None),
)

BROKEN_OFF_SHARE = 0.03
BROKEN_OFF_NOTES = (
    "called in: spraying in the next row",
    "radio link lost at the far wall",
    "battery low too early",
    "row blocked by a trolley",
)
CLOSED_FROM, CLOSED_TO = date(2025, 12, 24), date(2026, 1, 2)
BAD_LOT_SCRAPPED = date(2026, 3, 16)
COUNTING_DAYS = (date(2026, 1, 5), date(2026, 4, 1), date(2026, 7, 1), date(2026, 10, 1), date(2026, 11, 27))
PINS_LOST_DAY, PINS_LOST = date(2026, 7, 1), 3
# A leak over the shelf spoilt most of some bags; what is kept of each part type:
SPOILT_DAY = LAST_DAY
SPOILT_KEPT = {"cable": 2, "disc": 5, "cam": 2, "bump stop": 1, "idler": 1}
LEFT_OPEN_FROM = date(2026, 11, 18)  # the first walker stopped by one part from here on waits for its repair
LAST_CHECKS = (date(2026, 11, 23), date(2026, 11, 24), date(2026, 11, 25), date(2026, 11, 26), date(2026, 11, 27))

PRINTERS = (
    ("PR-1", "printer by the window", 0.4, 12),
    ("PR-2", "printer by the door", 0.4, 12),
    ("PR-3", "large printer", 0.6, 15),
)
SPOOLS = (
    ("SP-31", "PA-CF", 640),
    ("SP-32", "PA-CF", 55),
    ("SP-35", "PA-CF", 1000),
    ("SP-21", "TPU", 310),
    ("SP-22", "TPU", 24),
    ("SP-11", "PETG", 720),
    ("SP-12", "PETG", 38),
)
PRESENT_DAYS = ("Monday", "Tuesday", "Wednesday", "Thursday", "Friday")


def robot(code: str) -> PlannedRobot:
    """The robot with this code."""
    return next(planned for planned in ROBOTS if planned.code == code)
