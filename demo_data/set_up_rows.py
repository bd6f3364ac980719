"""The rows of the set-up records: robots, joints, slots, part types, modes, printers, plans and beliefs."""

from __future__ import annotations

from datetime import datetime, time

from demo_data import fleet_plan as plan
from demo_data.joint_modules import JointModule
from demo_data.ledger_rows import LedgerRows
from demo_data.part_plan import JOINT_DESIGNS, MODES, PARTS, PLATES, REVISIONS, SLOTS
from demo_data.truth import TRUE_MODES

MEAN_SESSION_HOURS = 2.25


def add_set_up(rows: LedgerRows, modules: list[JointModule]) -> None:
    """Add every set-up row except lots, which come as they are made or bought."""
    rows.add("settings", title=plan.TITLE, zone=plan.ZONE_NAME, currency=plan.CURRENCY)
    for code, label, reduction in JOINT_DESIGNS:
        rows.add("unit_design", code=code, label=label, reduction=reduction)
    _add_robots(rows)
    for module in modules:
        rows.add("unit", code=module.code, unit_design=module.unit_design)
    _add_parts(rows)
    _add_workshop(rows)


def _add_robots(rows: LedgerRows) -> None:
    for robot in plan.ROBOTS:
        first_day = min(robot.joined, plan.FITTING_DAY) if robot.prior == "new" else robot.joined
        in_service = datetime.combine(first_day, time(), plan.ZONE)
        rows.add("robot", code=robot.code, label=robot.label, site=robot.site, in_service_from=in_service)
        for joint in plan.JOINTS[robot.kind]:
            rows.add(
                "position",
                robot=robot.code,
                code=joint.code,
                label=joint.label,
                limb=joint.limb,
                side=joint.side,
                rank=joint.rank,
                unit_design=joint.unit_design,
                turns_per_hour=joint.turns_per_hour,
            )
        rows.add(
            "usage_plan",
            robot=robot.code,
            hours_per_week=robot.sessions_per_week * MEAN_SESSION_HOURS,
            session_hours=2.0,
            impacts_per_hour=robot.impacts_per_hour,
        )


def _add_parts(rows: LedgerRows) -> None:
    clocks = {(mode.part_type, mode.mode): mode.clock for mode in TRUE_MODES}
    hidden = {(mode.part_type, mode.mode) for mode in TRUE_MODES if mode.finding == "found worn"}
    for part in PARTS:
        figures = PLATES.get(part.code)
        rows.add(
            "part_type",
            code=part.code,
            label=part.label,
            source="bought" if figures is None else "printed",
            planned_cost=part.planned_cost,
            failure_cost=part.failure_cost,
            mass_g=part.mass_g,
            lead_time_days=part.lead_time_days,
            pack_size=part.pack_size,
            **({} if figures is None else vars(figures)),
        )
        rows.add("belief", part_type=part.code, t10=part.t10, factor=part.t10_factor, clock=part.t10_clock)
    for slot in SLOTS:
        rows.add("slot", **vars(slot))
    for mode in MODES:
        found = (mode.part_type, mode.code)
        rows.add("part_mode", **vars(mode), clock=clocks[found], noticed="at a check" if found in hidden else "in use")
    for part_type, code, superseded, note in REVISIONS:
        rows.add("revision", part_type=part_type, code=code, superseded=superseded, note=note)


def _add_workshop(rows: LedgerRows) -> None:
    for code, label, nozzle, change in plan.PRINTERS:
        rows.add("printer", code=code, label=label, nozzle_mm=nozzle, change_minutes=change)
    for code, material, grams in plan.SPOOLS:
        rows.add("spool", code=code, material=material, grams_left=grams)
    for weekday in plan.PRESENT_DAYS:
        rows.add("presence", weekday=weekday, start="08:00", end="18:00")
