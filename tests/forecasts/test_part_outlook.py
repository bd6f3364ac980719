"""What is said of a part type in running hours: ages with their range, and the curve they are read from."""

from __future__ import annotations

import numpy as np
import pytest

from fleet.forecasts.hours_life import HoursLife
from fleet.forecasts.part_outlook import PartOutlook, part_outlook
from fleet.lives.part_data import LifeKey
from fleet.records.fields import Record
from tests.books import day, failure, fitment, history_with, removal, session
from tests.chain import Chain, chain_of

DISC, PIN, BEARING = LifeKey("disc", "disc-A"), LifeKey("pin"), LifeKey("bearing")
RAN = [session(robot, day(n), 5.0, impacts=3) for n in range(1, 41) for robot in ("R1", "R2")]


def worn_discs() -> list[Record]:
    """Disc after disc failed in two joints."""
    records: list[Record] = []
    for unit, lasts in (("U1", 10), ("U2", 13)):
        held = f"{unit} disc"
        for number in range(1, 4):
            moment = day(lasts * number, 20)
            new = fitment(unit, "disc", moment, sequence=1, lot="D-1")
            records += [failure(held, "disc: split", moment), removal(held, moment, "failed"), new]
            held = new.record_id
    return records


def outlook(chain: Chain, key: LifeKey) -> PartOutlook:
    return part_outlook(chain.lives[key], HoursLife(chain.draws("unfit")[key], chain.lives[key].per_hour))


def test_ranges_hold_their_middle_and_half_gone_comes_after_one_in_ten() -> None:
    chain = chain_of(history_with(*RAN, *worn_discs()))
    for key in (DISC, PIN, BEARING):
        found = outlook(chain, key)
        assert 0 < found.b10.low < found.b10.middle < found.b10.high
        assert found.b10.middle < found.b50.middle


def test_the_middle_of_the_curve_meets_the_ages_read_from_it() -> None:
    chain = chain_of(history_with(*RAN, *worn_discs()))
    in_hours = HoursLife(chain.draws("unfit")[DISC], chain.lives[DISC].per_hour)
    found = part_outlook(chain.lives[DISC], in_hours)
    at_b10 = in_hours.reliability_quantile(np.array([found.b10.middle]), 0.5)[0]
    assert at_b10 == pytest.approx(0.9, abs=5e-3)


def test_the_curve_starts_at_one_falls_within_its_band_and_reaches_past_half_and_past_every_age_seen() -> None:
    chain = chain_of(history_with(*RAN, *worn_discs()))
    for key in (DISC, PIN):
        found = outlook(chain, key)
        assert found.reliability[0] == found.low[0] == found.high[0] == 1.0
        assert np.all(np.diff(found.reliability) <= 0)
        assert np.all(found.low <= found.high)
        assert found.hours[-1] >= 1.5 * found.b50.middle
        assert found.hours[-1] >= 200.0
        assert not any(values.flags.writeable for values in (found.hours, found.reliability, found.low, found.high))


def test_records_narrow_the_range() -> None:
    before, after = chain_of(history_with(*RAN[:2])), chain_of(history_with(*RAN, *worn_discs()))
    first, later = outlook(before, DISC), outlook(after, DISC)
    assert later.b10.high / later.b10.low < 0.8 * first.b10.high / first.b10.low


def test_what_was_believed_passes_through_the_answer() -> None:
    found = outlook(chain_of(history_with(*RAN[:2])), DISC)
    assert np.interp(100.0, found.hours, found.believed) == pytest.approx(0.9, abs=2e-3)


def test_the_records_alone_are_shown_from_three_failures_on() -> None:
    assert outlook(chain_of(history_with(*RAN, *worn_discs()[:6])), DISC).steps is None
    steps = outlook(chain_of(history_with(*RAN, *worn_discs())), DISC).steps
    assert steps is not None
    assert 0 < float(steps.reliability(np.array([60.0]))[0]) < 1
