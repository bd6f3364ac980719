"""How many prints to start: a user's story and laws."""

from __future__ import annotations

import pytest
from scipy import stats

from fleet.errors import PlanError
from fleet.plans.yields import YieldRecord, starts_for, starts_for_known_yield


def test_story_14_twelve_good_ones_wanted() -> None:
    assert starts_for_known_yield(12, 0.9, 0.85) == 16
    assert stats.binom.sf(11, 16, 0.85) == pytest.approx(0.921, abs=5e-4)
    assert starts_for(12, 0.9, 17, 20) == 18
    record = YieldRecord(17, 20)
    assert record.chance_of_good(12, 18) == pytest.approx(0.934, abs=5e-4)
    assert record.chance_of_good(12, 17) == pytest.approx(0.894, abs=5e-4)


def test_a_long_record_leads_to_the_known_yield() -> None:
    assert starts_for(12, 0.9, 85_000, 100_000) == starts_for_known_yield(12, 0.9, 0.85)


def test_more_wanted_or_more_certainty_never_needs_fewer_starts() -> None:
    by_number = [starts_for(wanted, 0.9, 17, 20) for wanted in range(12)]
    by_chance = [starts_for(12, chance, 17, 20) for chance in (0.5, 0.8, 0.9, 0.99)]
    assert by_number == sorted(by_number)
    assert by_chance == sorted(by_chance)
    assert by_number[0] == 0


def test_a_record_is_the_mean_of_binomials_over_its_posterior() -> None:
    yields = stats.beta(17.5, 3.5).ppf([(i + 0.5) / 4000 for i in range(4000)])
    assert YieldRecord(17, 20).chance_of_good(12, 18) == pytest.approx(stats.binom.sf(11, 18, yields).mean(), abs=1e-4)


def test_what_cannot_be_is_refused() -> None:
    for call in (
        lambda: YieldRecord(3, 2),
        lambda: starts_for(-1, 0.9, 1, 2),
        lambda: starts_for(1, 1.0, 1, 2),
        lambda: starts_for_known_yield(1, 0.9, 0.0),
        lambda: starts_for(5000, 0.9999, 0, 400),
    ):
        with pytest.raises(PlanError):
            call()
