"""From one answer about a whole part to the beliefs of its modes, and what records make of them."""

from __future__ import annotations

import numpy as np
import pytest

from fleet.fits.mechanisms import shape_belief
from fleet.fits.part_lives import (
    UNASKED_FACTOR,
    UNASKED_T10_HOURS,
    PartLife,
    belief_of_mode,
    fit_part_lives,
    stretch_of_modes,
)
from fleet.fits.posterior import Belief
from fleet.forecasts.hours_life import HoursLife
from fleet.forecasts.life_draws import draw_life
from fleet.lives.ages import ages_of
from fleet.lives.part_data import LifeKey, part_data
from fleet.records.fields import Record
from fleet.records.history import History
from fleet.records.set_up import BeliefAnswer, PartMode, UsagePlan
from tests.books import TURNS_PER_HOUR, day, failure, fitment, history_with, part_mode, removal, session, session_use

DISC, PIN = LifeKey("disc", "disc-A"), LifeKey("pin")
RATES = {"hours": 1.0, "load_hours": 0.5, "turns": 600.0, "impacts": 2.0, "days": 0.7}


def lives_of(history: History) -> dict[LifeKey, PartLife]:
    return fit_part_lives(history, part_data(history, ages_of(history)))


def answer(**changed: object) -> BeliefAnswer:
    values: dict[str, object] = {"record_id": "answer", "part_type": "disc", "t10": 80.0, "factor": 2.0}
    return BeliefAnswer(**{**values, **changed})  # type: ignore[arg-type]


def prior_gone_at(beliefs: tuple[Belief, ...], age: float, n_draws: int = 60_000) -> np.ndarray:
    """Share of parts gone at an age, for parts drawn from the beliefs one by one."""
    rng = np.random.default_rng(12)
    hazard = np.zeros(n_draws)
    for belief in beliefs:
        t10 = belief.t10 * np.exp(belief.log_t10_sd * rng.normal(size=n_draws))
        shape = belief.shape_median * np.exp(belief.log_shape_sd * rng.normal(size=n_draws))
        hazard += belief.hazard * (age / t10) ** shape
    return 1 - np.exp(-hazard)


@pytest.mark.parametrize("clock", ["hours", "turns", "impacts", "days", "load_hours"])
def test_the_answer_is_put_in_the_modes_clock_by_its_use_per_hour(clock: str) -> None:
    mode = part_mode("disc", "any", "wear", clock, 0.5)
    assert belief_of_mode(mode, answer(), RATES).t10 == pytest.approx(80 * RATES[clock])
    in_turns = answer(t10=48_000.0, clock="turns")
    assert belief_of_mode(mode, in_turns, RATES).t10 == pytest.approx(80 * RATES[clock])


def test_doubt_share_and_mechanism_go_into_the_belief() -> None:
    belief = belief_of_mode(part_mode("disc", "split", "layer split", "impacts", 0.3), answer(), RATES)
    median, factor, _ = shape_belief("layer split")
    assert (belief.factor, belief.share) == (2.0, 0.3)
    assert (belief.shape_median, belief.shape_factor) == (median, factor)


def test_nobody_asked_is_a_wide_belief() -> None:
    belief = belief_of_mode(part_mode("pin", "worn", "wear", "turns", 1.0), None, RATES)
    assert belief.t10 == UNASKED_T10_HOURS * RATES["turns"]
    assert belief.factor == UNASKED_FACTOR >= 10


@pytest.mark.parametrize("factor", [1.5, 3.0, 10.0])
@pytest.mark.parametrize("modes", [1, 2, 3])
@pytest.mark.parametrize(("shape", "shape_factor"), [(2.5, 2.0), (1.0, 1.6)])
def test_the_modes_together_give_the_answer_about_the_part_back(
    modes: int, factor: float, shape: float, shape_factor: float
) -> None:
    alone = tuple(Belief(100.0, factor, shape, shape_factor, 1 / modes) for _ in range(modes))
    stretch = stretch_of_modes(alone)
    stretched = tuple(Belief(100.0 * stretch, b.factor, b.shape_median, b.shape_factor, b.share) for b in alone)
    assert np.median(prior_gone_at(stretched, 100.0)) == pytest.approx(0.1, rel=0.1)
    assert stretch == 1.0 if modes == 1 else stretch > 1.0


def test_left_as_they_are_three_modes_would_be_gone_too_early() -> None:
    alone = tuple(Belief(100.0, 3.0, 2.5, 2.0, 1 / 3) for _ in range(3))
    assert np.median(prior_gone_at(alone, 100.0)) > 0.15


def test_the_stretch_grows_with_doubt_and_with_modes_and_vanishes_without_doubt() -> None:
    def stretch(modes: int, factor: float) -> float:
        return stretch_of_modes(tuple(Belief(100.0, factor, 2.0, 2.0, 1 / modes) for _ in range(modes)))

    assert stretch(2, 1.5) < stretch(2, 3.0) < stretch(2, 10.0)
    assert stretch(2, 3.0) < stretch(3, 3.0)
    assert stretch(3, 1.0001) == pytest.approx(1.0, abs=5e-3)


def test_the_stretch_asks_neither_for_the_unit_nor_for_the_order_of_the_modes() -> None:
    first, second = Belief(100.0, 3.0, 2.5, 2.0, 0.7), Belief(100.0, 3.0, 1.2, 2.0, 0.3)
    base = stretch_of_modes((first, second))
    assert stretch_of_modes((second, first)) == base
    assert stretch_of_modes((Belief(6e4, 3.0, 2.5, 2.0, 0.7), second)) == base


@pytest.mark.parametrize("modes", [1, 2, 3])
def test_before_any_record_one_in_ten_of_the_parts_is_gone_at_the_answered_age(modes: int) -> None:
    kept = [mode for mode in history_with().of(PartMode).values() if mode.part_type != "bearing"]
    own: list[Record] = [part_mode("bearing", f"mode {n}", "wear", "hours", round(1 / modes, 4)) for n in range(modes)]
    belief = BeliefAnswer(record_id="answer", part_type="bearing", t10=240.0, factor=3.0)
    history = history_with()
    rows = {**history.rows, PartMode: {mode.record_id: mode for mode in [*kept, *own]}}
    bare = History(rows, history.as_of, 0).with_records([belief])
    life = lives_of(bare)[LifeKey("bearing")]
    assert life.asked and life.mostly_assumption and len(life.modes) == modes
    drawn = draw_life([(m.mode.code, m.mode.clock, m.unfit) for m in life.modes], 4000, np.random.default_rng(2))
    b10 = HoursLife(drawn, life.per_hour).b_life_by_draw(10.0)
    assert np.median(b10) == pytest.approx(240.0, rel=0.04)


def test_a_part_type_nobody_was_asked_about_is_flagged_and_wide() -> None:
    lives = lives_of(history_with())
    assert (lives[DISC].asked, lives[PIN].asked) == (True, False)
    asked, unasked = (lives[key].modes[0].unfit for key in (DISC, PIN))
    assert unasked.b_life_quantile(10, 0.95) / unasked.b_life_quantile(10, 0.05) > 20
    assert asked.b_life_quantile(10, 0.95) / asked.b_life_quantile(10, 0.05) < 20
    assert lives[PIN].mostly_assumption and lives[PIN].data_share == pytest.approx(0.0, abs=1e-6)


def test_use_per_hour_is_what_was_recorded_and_else_what_is_planned() -> None:
    plan = UsagePlan(record_id="plan", robot="R1", hours_per_week=14.0, session_hours=2.0, impacts_per_hour=3.0)
    planned = lives_of(history_with(plan))[DISC]
    assert planned.per_hour["turns"] == TURNS_PER_HOUR
    assert planned.per_hour["impacts"] == 3.0
    ran = session("R1", day(1), 4.0, impacts=2)
    history = history_with(plan, ran, session_use(ran, "R1-hip", turns=1000), session_use(ran, "R1-knee", turns=3000))
    recorded = lives_of(history)[DISC]
    assert recorded.per_hour["turns"] == pytest.approx(500.0)
    assert recorded.per_hour["impacts"] == pytest.approx(0.5)
    assert recorded.per_hour["hours"] == 1.0


def test_every_failure_counts_for_unfit_and_only_those_that_stopped_the_robot_for_stop() -> None:
    ran = [session("R1", day(n), 5.0, impacts=4) for n in range(1, 31)]
    worn = failure("U1 disc", "disc: worn", day(20, 20), "found worn")
    broken = failure("U2 disc", "disc: split", day(25, 20), "stopped")
    new = [
        record
        for failed in (worn, broken)
        for record in (
            removal(failed.fitment, failed.happened_at, "failed"),
            fitment(failed.fitment.split()[0], "disc", failed.happened_at, sequence=1, lot="D-1"),
        )
    ]
    history = history_with(*ran, worn, broken, *new)
    life = lives_of(history)[DISC]
    by_code = {mode.mode.code: mode for mode in life.modes}
    assert (by_code["worn"].unfit.failures, by_code["worn"].stop.failures) == (1, 0)
    assert (by_code["split"].unfit.failures, by_code["split"].stop.failures) == (1, 1)
    assert by_code["split"].stop is by_code["split"].unfit
    assert life.data.failures == 2
    assert 0 < life.data_share < 1


def test_records_raise_the_share_that_comes_from_them_until_it_is_no_longer_mostly_assumption() -> None:
    ran = [session("R1", day(n), 5.0, impacts=4) for n in range(1, 101)]
    records: list[Record] = [*ran]
    shares = []
    for unit in ("U1", "U2"):
        held = f"{unit} disc"
        for number in range(1, 9):
            moment, mode = day(12 * number, 20), ("split", "worn")[number % 2]
            new = fitment(unit, "disc", moment, sequence=1, lot="D-1")
            records += [failure(held, f"disc: {mode}", moment), removal(held, moment, "failed"), new]
            held = new.record_id
        history = history_with(*records)
        shares.append(lives_of(history)[DISC].data_share)
    assert shares[0] < shares[1]
    assert not lives_of(history)[DISC].mostly_assumption


def test_a_part_type_without_modes_has_no_life() -> None:
    history = history_with()
    rows = {**history.rows, PartMode: {k: m for k, m in history.of(PartMode).items() if m.part_type != "pin"}}
    bare = History(rows, history.as_of, 0)
    assert PIN not in lives_of(bare)
