"""What the invented joints are made of: part types, their slots in the two joint designs, modes, and stock rules."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class PlannedPart:
    """A part type; costs in currency units, lead time in days. `lot_prefix` starts the labels on its bags.

    A new purchase, or a plate, is started once the stock with what is under way falls to `reorder_at`; a purchase is
    of `order` parts, a plate is full.
    """

    code: str
    label: str
    lot_prefix: str
    planned_cost: str
    failure_cost: str
    mass_g: float
    lead_time_days: int
    reorder_at: int
    order: int
    t10: float
    t10_clock: str = "hours"
    t10_factor: float = 3.0
    pack_size: int = 1


@dataclass(frozen=True)
class PlateFigures:
    """How a part type is printed."""

    material: str
    print_minutes: int
    plate_minutes: int
    parts_per_plate: int
    nozzle_mm: float


@dataclass(frozen=True)
class PlannedSlot:
    """A slot of a joint design; `stops_at` None where even all of its parts never stop the robot."""

    unit_design: str
    code: str
    part_type: str
    count: int
    open_minutes: int
    replace_minutes: int
    stops_at: int | None


@dataclass(frozen=True)
class PlannedMode:
    """How a mode is described in the book, and the share of early failures believed to come from it."""

    part_type: str
    code: str
    label: str
    mechanism: str
    share: float


LEG_JOINT = "leg joint"
ARM_JOINT = "arm joint"
JOINT_DESIGNS = (
    (LEG_JOINT, "walker joint module with a printed cycloidal reducer", 15),
    (ARM_JOINT, "picking arm joint module with a toothed belt", 9),
)

PARTS = (
    PlannedPart("disc", "cycloidal disc", "DC", "14.00", "62.00", 18, 3, 18, 0, 300, t10_factor=2.5),
    PlannedPart("pin", "output pin", "PN", "4.50", "16.00", 3, 10, 150, 200, 900, pack_size=100),
    PlannedPart("small bearing", "small bearing", "BR", "5.00", "15.00", 1, 14, 200, 300, 1200, pack_size=100),
    PlannedPart("cam", "eccentric cam", "CM", "11.00", "55.00", 6, 3, 7, 0, 400),
    PlannedPart("output bearing", "output bearing", "OB", "24.00", "70.00", 41, 12, 2, 4, 2000),
    PlannedPart("leg housing", "leg joint housing", "LH", "38.00", "120.00", 110, 4, 2, 0, 2500),
    PlannedPart("bump stop", "bump stop", "BS", "3.00", "8.00", 7, 3, 6, 0, 3000, "impacts"),
    PlannedPart("cable", "joint cable", "CB", "16.00", "58.00", 22, 12, 20, 20, 450, pack_size=5),
    PlannedPart("belt", "toothed belt", "BT", "13.00", "44.00", 12, 9, 4, 6, 180, t10_factor=2.5, pack_size=2),
    PlannedPart("idler", "belt idler", "ID", "6.00", "40.00", 5, 3, 5, 0, 350),
    PlannedPart("arm housing", "arm joint housing", "AH", "34.00", "110.00", 90, 4, 1, 0, 15000),
    PlannedPart("arm bearing", "arm joint bearing", "AB", "21.00", "60.00", 35, 9, 3, 4, 300, pack_size=2),
)

PLATES = {
    "disc": PlateFigures("PA-CF", 95, 25, 6, 0.4),
    "cam": PlateFigures("PA-CF", 40, 25, 8, 0.4),
    "leg housing": PlateFigures("PA-CF", 390, 30, 2, 0.6),
    "bump stop": PlateFigures("TPU", 30, 20, 10, 0.4),
    "idler": PlateFigures("PETG", 35, 20, 8, 0.4),
    "arm housing": PlateFigures("PA-CF", 360, 30, 2, 0.6),
}
TRUE_YIELD = 0.87  # of the parts on a plate that came out
TRUE_PLATE_LOSS = 0.03  # whole plates lost

REVISIONS = (
    ("disc", "B", True, "thin web between the pin holes"),
    ("disc", "C", False, "web thickened by 0.8 mm, lobes with one more wall"),
)
CURRENT_REVISION = {"disc": "C"}

SLOTS = (
    PlannedSlot(LEG_JOINT, "discs", "disc", 2, 20, 10, 1),
    PlannedSlot(LEG_JOINT, "pins", "pin", 13, 20, 3, 2),
    PlannedSlot(LEG_JOINT, "small bearings", "small bearing", 26, 25, 2, 2),
    PlannedSlot(LEG_JOINT, "cam", "cam", 1, 25, 8, 1),
    PlannedSlot(LEG_JOINT, "output bearing", "output bearing", 1, 30, 12, 1),
    PlannedSlot(LEG_JOINT, "housing", "leg housing", 1, 40, 25, 1),
    PlannedSlot(LEG_JOINT, "bump stop", "bump stop", 1, 0, 4, None),
    PlannedSlot(LEG_JOINT, "cable", "cable", 1, 10, 12, 1),
    PlannedSlot(ARM_JOINT, "belt", "belt", 1, 8, 10, 1),
    PlannedSlot(ARM_JOINT, "idlers", "idler", 2, 8, 6, 1),
    PlannedSlot(ARM_JOINT, "bearing", "arm bearing", 1, 20, 15, 1),
    PlannedSlot(ARM_JOINT, "housing", "arm housing", 1, 30, 20, 1),
    PlannedSlot(ARM_JOINT, "cable", "cable", 1, 8, 12, 1),
)

MODES = (
    PlannedMode("disc", "lobe wear", "lobes worn, the joint has play", "wear", 0.5),
    PlannedMode("disc", "layer split", "split between layers", "layer split", 0.5),
    PlannedMode("pin", "snapped", "pin snapped at the shoulder", "fatigue", 0.4),
    PlannedMode("pin", "worn flat", "a flat worn on the pin", "wear", 0.6),
    PlannedMode("small bearing", "rough", "turns roughly or not at all", "fatigue", 0.7),
    PlannedMode("small bearing", "dented", "race dented by knocks", "overload", 0.3),
    PlannedMode("cam", "slipped", "slipped on the motor shaft", "loosening", 0.6),
    PlannedMode("cam", "bore worn", "bore worn out of round", "wear", 0.4),
    PlannedMode("output bearing", "play", "play over 0.1 mm", "wear", 1.0),
    PlannedMode("leg housing", "cracked", "cracked at the flange", "overload", 1.0),
    PlannedMode("bump stop", "torn", "torn through", "overload", 1.0),
    PlannedMode("cable", "core broken", "core broken at the bend", "fatigue", 1.0),
    PlannedMode("belt", "teeth worn", "teeth worn, the belt jumps", "wear", 0.4),
    PlannedMode("belt", "snapped", "belt snapped", "fatigue", 0.6),
    PlannedMode("idler", "bore worn", "bore worn, the belt runs off", "wear", 0.6),
    PlannedMode("idler", "flange split", "flange split off", "layer split", 0.4),
    PlannedMode("arm housing", "cracked", "cracked at the clamp", "overload", 1.0),
    PlannedMode("arm bearing", "play", "play over 0.1 mm", "wear", 1.0),
)


def slots_of(unit_design: str) -> tuple[PlannedSlot, ...]:
    """The slots of a joint design, in order."""
    return tuple(slot for slot in SLOTS if slot.unit_design == unit_design)


def slot_of(unit_design: str, code: str) -> PlannedSlot:
    """One slot of a joint design."""
    return next(slot for slot in slots_of(unit_design) if slot.code == code)
