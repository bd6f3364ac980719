"""The chain up to the forecasts, stage by stage, for tests that look between the stages."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from fleet.fits.part_lives import PartLife, fit_part_lives
from fleet.forecasts.life_draws import LifeDraws, draw_life, fixed_life
from fleet.forecasts.next_session import JointOutlook, NextSession, RobotOutlook, next_session
from fleet.forecasts.part_demand import PartDemand, part_demands
from fleet.forecasts.parts_now import SlotNow, slots_now
from fleet.forecasts.planned_use import RobotPlan, robot_plans
from fleet.lives.ages import Ages, ages_of
from fleet.lives.part_data import Endpoint, LifeKey, part_data
from fleet.records.history import History

DRAWS = 200


@dataclass(frozen=True, eq=False)
class Chain:
    """A history, its ages, lives and slots, and what robots are meant to do."""

    history: History
    ages: Ages
    lives: Mapping[LifeKey, PartLife]
    slots: list[SlotNow]
    plans: Mapping[str, RobotPlan]

    def draws(self, endpoint: Endpoint = "stop", seed: int = 1) -> dict[LifeKey, LifeDraws]:
        """Joint draws of every life."""
        rng = np.random.default_rng(seed)
        return {
            key: draw_life([(m.mode.code, m.mode.clock, getattr(m, endpoint)) for m in life.modes], DRAWS, rng)
            for key, life in self.lives.items()
        }

    def known(self, shape: float, scale: float, clock: str = "hours") -> dict[LifeKey, LifeDraws]:
        """The same known life for every part."""
        return {key: fixed_life(shape, scale, clock) for key in self.lives}

    def slot(self, joint: str, code: str) -> SlotNow:
        """One slot of one joint, by the joint's record id and the slot's code."""
        return next(slot for slot in self.slots if (slot.position.record_id, slot.slot.code) == (joint, code))

    def session(self, draws: Mapping[LifeKey, LifeDraws] | None = None) -> NextSession:
        """Odds of the next session."""
        life = self.draws() if draws is None else draws
        return next_session(self.history, self.ages, self.slots, self.lives, life, self.plans)

    def demands(self, weeks: int = 8, draws: Mapping[LifeKey, LifeDraws] | None = None) -> dict[str, PartDemand]:
        """Demand by part type."""
        life = self.draws("unfit") if draws is None else draws
        return part_demands(self.history, self.ages, self.slots, life, self.plans, weeks)


def chain_of(history: History, session_hours: float | None = None) -> Chain:
    """Run the stages before the forecasts."""
    ages = ages_of(history)
    lives = fit_part_lives(history, part_data(history, ages))
    slots = slots_now(history, ages, lives)
    return Chain(history, ages, lives, slots, robot_plans(history, session_hours))


def robot_in(session: NextSession, code: str) -> RobotOutlook:
    """One robot by its code."""
    return next(robot for robot in session.robots if robot.code == code)


def joint_in(session: NextSession, position: str) -> JointOutlook:
    """One joint by its record id."""
    return next(joint for robot in session.robots for joint in robot.joints if joint.position == position)
