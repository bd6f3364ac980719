"""Parts found worn on a fleet where nobody ever notes a check: the lives must not come out too short."""

from __future__ import annotations

from datetime import UTC, datetime, timedelta
from random import Random

import pytest

from fleet.fits.part_lives import fit_part_lives
from fleet.lives.ages import ages_of
from fleet.lives.part_data import part_data
from fleet.records.fields import Record
from fleet.records.history import History, history_of
from fleet.records.ledger import Failure, Fitment, Placement, Removal, Session
from fleet.records.set_up import BeliefAnswer, PartMode, PartType, Position, Robot, Slot, Unit, UnitDesign

START = datetime(2026, 1, 1, 8, tzinfo=UTC)
SHAPE, SCALE, SESSIONS = 2.5, 300.0, 160
TRUE_B10 = SCALE * 0.1053605156578263 ** (1 / SHAPE)


def worn_fleet(seed: int, joints: int = 60) -> History:
    """A robot of many joints that runs 2 h a day; each gear is found worn after the session in which it wore out."""
    rng = Random(seed)
    design = {"unit_design": "joint"}
    records: list[Record] = [
        Robot(record_id="R", code="R", label="R", in_service_from=START - timedelta(days=1)),
        UnitDesign(record_id="joint", code="joint", label="joint", reduction=10),
        PartType(
            record_id="gear",
            code="gear",
            label="gear",
            source="bought",
            planned_cost=100,
            failure_cost=500,
            mass_g=1,
            lead_time_days=1,
        ),
        Slot(record_id="slot", code="gear", part_type="gear", count=1, open_minutes=1, replace_minutes=1, **design),
        PartMode(
            record_id="worn", part_type="gear", code="worn", label="worn", mechanism="wear", clock="hours", share=1.0
        ),
        BeliefAnswer(record_id="belief", part_type="gear", t10=120, factor=3),
    ]
    for day in range(SESSIONS):
        began = START + timedelta(days=day)
        records.append(
            Session(
                record_id=f"S{day}",
                happened_at=began,
                ended_at=began + timedelta(hours=2),
                robot="R",
                run_seconds=7200,
            )
        )
    for joint in range(joints):
        records += _joint(f"{joint}", rng)
    return history_of(records, START + timedelta(days=SESSIONS))


def _joint(name: str, rng: Random) -> list[Record]:
    fitted = START - timedelta(hours=1)
    records: list[Record] = [
        Position(
            record_id=f"P{name}",
            robot="R",
            code=name,
            label=name,
            limb="leg",
            side="left",
            rank=1,
            unit_design="joint",
            turns_per_hour=1,
        ),
        Unit(record_id=f"U{name}", code=name, unit_design="joint"),
        Placement(record_id=f"at{name}", happened_at=fitted, unit=f"U{name}", position=f"P{name}"),
        Fitment(record_id=f"F{name}-0", happened_at=fitted, unit=f"U{name}", slot="slot"),
    ]
    session, number = 0, 0
    while True:
        session += int(rng.weibullvariate(SCALE, SHAPE) // 2) + 1
        if session > SESSIONS:
            return records
        found = START + timedelta(days=session - 1, hours=3)
        old = f"F{name}-{number}"
        number += 1
        records += [
            Failure(record_id=f"X{old}", happened_at=found, fitment=old, mode="worn", finding="found worn"),
            Removal(record_id=f"O{old}", happened_at=found, fitment=old, reason="found worn"),
            Fitment(record_id=f"F{name}-{number}", happened_at=found, unit=f"U{name}", slot="slot"),
        ]


@pytest.mark.parametrize("seed", [1, 2, 3])
def test_without_any_check_the_true_b10_lies_within_its_range(seed: int) -> None:
    history = worn_fleet(seed)
    (life,) = fit_part_lives(history, part_data(history, ages_of(history))).values()
    low, high = (life.modes[0].unfit.b_life_quantile(10, q) for q in (0.01, 0.99))
    assert low < TRUE_B10 < high
    assert high / low < 2.5, "a range so wide would hold any truth"
