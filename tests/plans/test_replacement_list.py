"""Replacement ages of the part types that run: the costs of each, and the largest saving first."""

from __future__ import annotations

from dataclasses import replace

import pytest

from fleet.forecasts.hours_life import HoursLife
from fleet.forecasts.life_draws import fixed_life
from fleet.lives.part_data import LifeKey
from fleet.plans.replacement import replacement_age
from fleet.plans.replacement_list import Replacement, replacement_list
from fleet.records.fields import Record
from fleet.records.set_up import PartType
from tests.books import day, history_with, removal, session
from tests.chain import chain_of

DISC, NEW_DISC, PIN, BEARING = LifeKey("disc", "disc-A"), LifeKey("disc", "disc-B"), LifeKey("pin"), LifeKey("bearing")
STORY_11 = {DISC: 2.5, PIN: 1.3, BEARING: 0.8}


def costing(planned: int, failure: int) -> list[Record]:
    """The part types with other costs. [cents]"""
    held = history_with().of(PartType).values()
    return [replace(part_type, planned_cost=planned, failure_cost=failure) for part_type in held]


def listed(*records: Record) -> tuple[Replacement, ...]:
    chain = chain_of(history_with(session("R1", day(1), 4.0), *records))
    in_hours = {
        key: HoursLife(fixed_life(STORY_11.get(key, 2.0), 300.0), {"hours": 1.0, "turns": 600.0, "impacts": 1.0})
        for key in chain.lives
    }
    return replacement_list(chain.history, chain.lives, in_hours)


def test_story_11_by_part_type_the_largest_saving_first() -> None:
    found = listed(*costing(100, 600))
    assert [entry.life for entry in found] == [DISC, PIN, BEARING]
    assert [entry.advice.verdict for entry in found] == [
        "replace at age",
        "not worth a limit",
        "do not replace by age",
    ]
    assert found[0].advice.age == pytest.approx(135, abs=0.5)
    assert found[1].advice.age == pytest.approx(248, abs=0.5)
    assert [entry.advice.saving for entry in found] == sorted((e.advice.saving for e in found), reverse=True)


def test_each_part_type_is_weighed_by_its_own_costs_in_cents() -> None:
    for entry in listed():
        assert (entry.planned_cost, entry.failure_cost) == (400, 2600)
        direct = replacement_age(
            HoursLife(fixed_life(STORY_11[entry.life], 300.0), {"hours": 1.0}), entry.planned_cost, entry.failure_cost
        )
        assert entry.advice == direct


def test_parts_that_no_longer_run_get_no_advice() -> None:
    gone = [removal(f"{unit} bearing", day(5)) for unit in ("U1", "U2", "U3", "U4")]
    assert BEARING not in {entry.life for entry in listed(*gone)}
    assert NEW_DISC not in {entry.life for entry in listed()}


def test_what_is_mostly_assumption_is_marked() -> None:
    assert all(entry.mostly_assumption for entry in listed())


def test_a_dearer_failure_never_lowers_the_saving() -> None:
    savings = [
        next(entry.advice.saving for entry in listed(*costing(100, failure)) if entry.life == DISC)
        for failure in (150, 300, 600, 3000)
    ]
    assert savings == sorted(savings)
