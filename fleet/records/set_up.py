"""Set-up records: robots, joints and slots, part types and their modes, lots, printers, plans and beliefs."""

from __future__ import annotations

from datetime import datetime

from fleet.records.fields import (
    Record,
    choice,
    daytime,
    flag,
    moment,
    money,
    number,
    record,
    reference,
    short,
    text,
    whole,
)
from fleet.records.vocabulary import CLOCKS, MECHANISMS, NOTICED, PART_SOURCES, SIDES, WEEKDAYS


@record("set_up")
class SetUpRecord(Record):
    """What every row of the set-up carries: from when it holds."""

    valid_from: datetime | None = moment("from when it holds; empty: always", default=None)


@record("settings")
class Settings(SetUpRecord):
    """The book itself: its title, home zone and currency."""

    title: str = text("what this fleet is called")
    zone: str = short("home zone, a name of the IANA time zone database such as Europe/Amsterdam")
    currency: str = short("currency of all costs, such as EUR", default="EUR")


@record("robot")
class Robot(SetUpRecord):
    """A robot of the fleet."""

    code: str = short("short label, one robot each")
    label: str = text("what people call it")
    site: str | None = text("where it works", default=None)
    in_service_from: datetime = moment("when it joined the fleet")
    in_service_to: datetime | None = moment("when it left the fleet; empty while it runs", default=None)

    def contradictions(self) -> list[str]:
        """A robot leaves after it joined."""
        if self.in_service_to is not None and self.in_service_to <= self.in_service_from:
            return ["in_service_to is not after in_service_from"]
        return []


@record("unit_design")
class UnitDesign(SetUpRecord):
    """A kind of joint module."""

    code: str = short("short label of the design")
    label: str = text("what the design is called")
    reduction: float = number("motor turns per output turn", 1, 10_000)


@record("position")
class Position(SetUpRecord):
    """A place on a robot that holds one joint module."""

    robot: str = reference("robot", "the robot")
    code: str = short("short label, one on each robot")
    label: str = text("name of the joint in plain words")
    limb: str = text("the limb, or trunk")
    side: str = choice("which side of the robot", SIDES)
    rank: int = whole("order from the trunk outward", 0, 1000)
    unit_design: str = reference("unit_design", "the design of module it takes")
    turns_per_hour: float = number("output turns in an hour of running, where no log counted them", 0, 1e6)


@record("unit")
class Unit(SetUpRecord):
    """A physical joint module, wherever it sits."""

    code: str = short("label on the module")
    unit_design: str = reference("unit_design", "its design")


@record("part_type")
class PartType(SetUpRecord):
    """A kind of part, printed or bought, with what it costs and how it is made or ordered."""

    code: str = short("short label")
    label: str = text("name in plain words, for one part")
    source: str = choice("printed here or bought", PART_SOURCES)
    material: str | None = short("print material", default=None)
    planned_cost: int = money("one replacement before it fails, bench time included", column="planned_cost")
    failure_cost: int = money("one replacement after it failed, the lost session included", column="failure_cost")
    mass_g: float = number("mass of one part with its supports [g]", 0, 100_000)
    lead_time_days: int = whole("from ordering, or deciding to print, until it is on the shelf [days]", 0, 1000)
    pack_size: int = whole("parts in a pack, 1 if printed", 1, 100_000, default=1)
    print_minutes: float | None = number("printing one part [min]", 0, 20_000, default=None)
    plate_minutes: float | None = number("heating, levelling and cooling of a plate [min]", 0, 2_000, default=None)
    parts_per_plate: int | None = whole("most parts on one plate", 1, 1000, default=None)
    nozzle_mm: float | None = number("nozzle it is printed with [mm]", 0.05, 3, default=None)

    def contradictions(self) -> list[str]:
        """Costs are ordered and printed parts carry their plate figures."""
        problems = []
        if not 0 < self.planned_cost < self.failure_cost:
            problems.append("planned_cost must be above zero and below failure_cost")
        figures = (self.material, self.print_minutes, self.plate_minutes, self.parts_per_plate, self.nozzle_mm)
        if self.source == "printed" and None in figures:
            problems.append(
                "a printed part needs material, print_minutes, plate_minutes, parts_per_plate and nozzle_mm"
            )
        elif self.source == "printed" and not (self.mass_g > 0 and self.print_minutes):
            problems.append("a printed part has mass_g and print_minutes above zero")
        return problems


@record("slot")
class Slot(SetUpRecord):
    """A place in a joint design for one or several like parts of one type."""

    unit_design: str = reference("unit_design", "the joint design")
    code: str = short("short label, one in each design")
    part_type: str = reference("part_type", "the part type it takes")
    count: int = whole("how many like parts it holds", 1, 1000)
    open_minutes: float = number("opening and closing the joint to reach it [min]", 0, 1000)
    replace_minutes: float = number("replacing one part once open [min]", 0, 1000)
    stops_at: int | None = whole("how many must fail to stop the robot; empty if they never do", 1, 1000, default=None)

    def contradictions(self) -> list[str]:
        """A robot cannot wait for more failures than there are parts."""
        if self.stops_at is not None and self.stops_at > self.count:
            return [f"stops_at is {self.stops_at}, but the slot holds {self.count}"]
        return []


@record("part_mode")
class PartMode(SetUpRecord):
    """A way in which parts of a type fail, with the clock that drives it."""

    part_type: str = reference("part_type", "the part type")
    code: str = short("short label, one in each part type")
    label: str = text("what is seen, in plain words")
    mechanism: str = choice("the physics behind it", MECHANISMS)
    clock: str = choice("what it ages by", CLOCKS)
    share: float = number("share of early failures believed to come from this mode", 0.001, 1)
    noticed: str = choice("whether it shows by itself in use, or only when looked at", NOTICED, default="in use")


@record("revision")
class Revision(SetUpRecord):
    """A revision of a part type."""

    part_type: str = reference("part_type", "the part type")
    code: str = short("short label, one in each part type")
    superseded: bool = flag("no longer made, though some still run", default=False)
    note: str | None = text("what changed", default=None)


@record("lot")
class Lot(SetUpRecord):
    """Parts that were made or bought together."""

    code: str = short("label on the bag")
    part_type: str = reference("part_type", "the part type")
    revision: str | None = reference("revision", "its revision; empty if the type has none", default=None)
    supplier: str | None = text("supplier's own lot number, if bought", default=None)
    kept_apart: bool = flag("fitted on its own, because something is odd about it", default=False)
    note: str | None = text("what is odd about it, or anything else", default=None)


@record("printer")
class Printer(SetUpRecord):
    """A printer."""

    code: str = short("short label")
    label: str = text("what people call it")
    nozzle_mm: float = number("nozzle it carries [mm]", 0.05, 3)
    change_minutes: float = number("taking a plate off and starting the next [min]", 0, 300)


@record("spool")
class Spool(SetUpRecord):
    """A spool of print material."""

    code: str = short("label on the spool")
    material: str = short("material")
    grams_left: float = number("what is left on it [g]", 0, 50_000)


@record("presence")
class Presence(SetUpRecord):
    """A weekly time when someone is there to change plates."""

    weekday: str = choice("day of the week", WEEKDAYS)
    start_minute: int = daytime("from, in the book's zone", column="start")
    end_minute: int = daytime("until, in the book's zone", column="end")

    def contradictions(self) -> list[str]:
        """Times run forward within the day."""
        return ["end is not after start"] if self.end_minute <= self.start_minute else []


@record("usage_plan")
class UsagePlan(SetUpRecord):
    """How much a robot is meant to run."""

    robot: str = reference("robot", "the robot")
    hours_per_week: float = number("running hours a week", 0, 168)
    session_hours: float = number("running hours of one session", 0.01, 168)
    impacts_per_hour: float = number("hard impacts in an hour of running", 0, 10_000, default=0.0)


@record("belief")
class BeliefAnswer(SetUpRecord):
    """The answer to one question: by what age would 1 in 10 of these parts be gone, give or take what factor?"""

    part_type: str = reference("part_type", "the part type")
    t10: float = number("age by which 1 in 10 would be gone [clock]", 1e-9, 1e13)
    factor: float = number("give or take this factor (9 times in 10)", 1.01, 1000)
    clock: str = choice("the clock of that age", CLOCKS, default="hours")


SET_UP = (
    Settings,
    Robot,
    UnitDesign,
    Position,
    Unit,
    PartType,
    Slot,
    PartMode,
    Revision,
    Lot,
    Printer,
    Spool,
    Presence,
    UsagePlan,
    BeliefAnswer,
)
