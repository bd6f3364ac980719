"""Odds of finishing a session without a stop."""

from __future__ import annotations

from itertools import pairwise, product

import numpy as np
import pytest

from fleet.errors import PlanError
from fleet.fits.posterior import Belief, weibull_posterior
from fleet.forecasts.life_draws import LifeDraws, ModeDraws, draw_life, fixed_life
from fleet.forecasts.odds import PartsAtRisk, SlotAtRisk, session_odds
from fleet.lives.life_data import LifeData

PINS = {"pin": fixed_life(2.5, 300.0)}
POSTERIOR = weibull_posterior(LifeData([80, 100, 120], [80, 100, np.inf]), Belief(100.0, 3.0, 2.0, 2.0))


def pins(count: int, age: float = 120.0, use: float = 6.0) -> PartsAtRisk:
    return PartsAtRisk("pin", count, {"hours": age}, {"hours": use})


def test_story_9_a_chain_of_pins() -> None:
    one = session_odds([SlotAtRisk("r", "j", "pin", 1, (pins(1),))], PINS)
    assert one.slot["r", "j", "pin"].mean == pytest.approx(0.9870, abs=5e-5)
    chain = session_odds([SlotAtRisk("r", f"j{i}", "pins", 1, (pins(13),)) for i in range(18)], PINS)
    assert chain.joint["r", "j0"].mean == pytest.approx(0.8431, abs=5e-5)
    assert chain.robot["r"].mean == pytest.approx(0.0463, abs=5e-5)
    assert chain.fleet.mean == pytest.approx(chain.robot["r"].mean)
    new = session_odds([SlotAtRisk("r", f"j{i}", "pins", 1, (pins(13, 0.0),)) for i in range(18)], PINS)
    assert new.robot["r"].mean == pytest.approx(0.9869, abs=5e-5)


def test_a_slot_that_never_stops_the_robot_leaves_its_odds_alone() -> None:
    odds = session_odds([SlotAtRisk("r", "j", "pins", None, (pins(13, 2000.0),))], PINS)
    assert odds.robot["r"].mean == odds.fleet.low == 1.0


@pytest.mark.parametrize("stops_at", [1, 2, 3, 5, 6])
def test_k_of_n_agrees_with_counting_every_outcome(stops_at: int) -> None:
    groups = (pins(2, 250.0, 60.0), pins(3, 40.0, 60.0))
    fails = [1 - np.exp(-(((a + 60) / 300) ** 2.5 - (a / 300) ** 2.5)) for a in (250.0, 250.0, 40.0, 40.0, 40.0)]
    finish = sum(
        np.prod([q if failed else 1 - q for q, failed in zip(fails, outcome, strict=True)])
        for outcome in product((0, 1), repeat=5)
        if sum(outcome) < stops_at
    )
    odds = session_odds([SlotAtRisk("r", "j", "s", stops_at, groups)], PINS)
    assert odds.slot["r", "j", "s"].mean == pytest.approx(finish, abs=1e-12)


def test_the_mean_is_that_of_the_product_not_the_product_of_means() -> None:
    lives = {"pin": draw_life([("wear", "hours", POSTERIOR)], 2000, np.random.default_rng(1))}
    slots = [SlotAtRisk("r", f"j{i}", "s", 1, (pins(3, 60.0, 10.0),)) for i in range(4)]
    odds = session_odds(slots, lives)
    log_ratio = np.log(70.0 / POSTERIOR.scale), np.log(60.0 / POSTERIOR.scale)
    hazard = np.exp(POSTERIOR.shape * log_ratio[0]) - np.exp(POSTERIOR.shape * log_ratio[1])
    exact = float(np.exp(-12 * hazard) @ POSTERIOR.weight)
    assert odds.fleet.mean == pytest.approx(exact, abs=2e-3)
    assert odds.fleet.mean > np.prod([chance.mean for chance in odds.slot.values()]) + 0.01


def test_lives_drawn_apart_multiply() -> None:
    rng = np.random.default_rng(5)
    lives = {name: draw_life([("wear", "hours", POSTERIOR)], 4000, rng) for name in ("pin", "disc")}
    disc = PartsAtRisk("disc", 1, {"hours": 90.0}, {"hours": 15.0})
    slots = [SlotAtRisk("r", "a", "s", 1, (pins(1, 60, 20),)), SlotAtRisk("r", "b", "s", 1, (disc,))]
    odds = session_odds(slots, lives)
    alone = [chance.mean for chance in odds.slot.values()]
    assert odds.fleet.mean == pytest.approx(np.prod(alone), abs=2e-3)


def test_the_range_holds_the_middle_and_vanishes_for_known_parameters() -> None:
    lives = {"pin": draw_life([("wear", "hours", POSTERIOR)], 500, np.random.default_rng(1))}
    slot = SlotAtRisk("r", "j", "s", 1, (pins(3, 60.0, 10.0),))
    chance = session_odds([slot], lives).fleet
    assert 0 <= chance.low < chance.mean < chance.high <= 1
    known = session_odds([slot], PINS).fleet
    assert known.low == known.mean == known.high


def test_more_use_never_helps_and_no_use_is_certain() -> None:
    means = [
        session_odds([SlotAtRisk("r", "j", "s", 2, (pins(4, 60.0, use),))], PINS).fleet.mean for use in (0, 1, 50, 5000)
    ]
    assert means[0] == 1.0
    assert all(first > second for first, second in pairwise(means))


def test_a_worn_out_part_gives_nought_without_a_warning() -> None:
    assert session_odds([SlotAtRisk("r", "j", "s", 1, (pins(4, 1e9, 1e9),))], PINS).fleet.mean == 0.0


def test_modes_in_two_clocks_multiply() -> None:
    life = LifeDraws((*fixed_life(2.0, 100.0).modes, ModeDraws("hit", "impacts", np.array([1.0]), np.array([50.0]))))
    parts = PartsAtRisk("foot", 1, {"hours": 10.0, "impacts": 4.0}, {"hours": 5.0, "impacts": 2.0})
    odds = session_odds([SlotAtRisk("r", "j", "s", 1, (parts,))], {"foot": life})
    assert odds.fleet.mean == pytest.approx(np.exp(-(0.15**2 - 0.1**2) - 2 / 50))


def test_what_is_missing_is_named() -> None:
    with pytest.raises(PlanError, match="No life is known for 'pin'"):
        session_odds([SlotAtRisk("r", "j", "s", 1, (pins(1),))], {})
    turned = PartsAtRisk("pin", 1, {"turns": 1.0}, {"turns": 1.0})
    with pytest.raises(PlanError, match="clock hours"):
        session_odds([SlotAtRisk("r", "j", "s", 1, (turned,))], PINS)
    with pytest.raises(PlanError, match="r / j / s is given twice"):
        session_odds([SlotAtRisk("r", "j", "s", 1, (pins(1),))] * 2, PINS)
    with pytest.raises(PlanError, match="stops at 0"):
        session_odds([SlotAtRisk("r", "j", "s", 0, (pins(1),))], PINS)
    with pytest.raises(PlanError, match="must be 0 or more"):
        session_odds([SlotAtRisk("r", "j", "s", 1, (pins(1, -1.0),))], PINS)


def test_an_empty_fleet_finishes() -> None:
    odds = session_odds([], PINS)
    assert odds.fleet.mean == 1.0
    assert not odds.robot
