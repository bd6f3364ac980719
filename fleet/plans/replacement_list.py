"""From lives and costs to the replacement age of every part type that runs."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from fleet.fits.part_lives import PartLife
from fleet.forecasts.hours_life import HoursLife
from fleet.lives.part_data import LifeKey
from fleet.plans.replacement import ReplacementAge, replacement_age
from fleet.records.history import History
from fleet.records.set_up import PartType


@dataclass(frozen=True)
class Replacement:
    """When to replace one kind of part while it is still good. Ages in running hours, costs in cents."""

    life: LifeKey
    label: str
    advice: ReplacementAge
    planned_cost: int
    failure_cost: int
    mostly_assumption: bool


def replacement_list(
    history: History, lives: Mapping[LifeKey, PartLife], in_hours: Mapping[LifeKey, HoursLife]
) -> tuple[Replacement, ...]:
    """The replacement age of every life that has parts running, the largest saving first."""
    found = []
    for key, life in lives.items():
        if life.data.running == 0:
            continue
        part_type = history.one(PartType, key.part_type)
        advice = replacement_age(in_hours[key], part_type.planned_cost, part_type.failure_cost)
        found.append(
            Replacement(key, life.label, advice, part_type.planned_cost, part_type.failure_cost, life.mostly_assumption)
        )
    return tuple(sorted(found, key=lambda entry: -entry.advice.saving))
