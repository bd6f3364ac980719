"""From the invented fleet's own files back to its true lives: the intervals told are right as often as they say."""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import closing
from dataclasses import dataclass
from datetime import UTC, datetime
from pathlib import Path

import pytest

from demo_data.files import PACKAGED_SEED, write_csv
from demo_data.truth import true_b10
from fleet.fits.part_lives import PartLife, fit_part_lives
from fleet.lives.ages import ages_of
from fleet.lives.part_data import part_data
from fleet.records.history import History
from fleet.records.set_up import PartType, Revision
from fleet.store.book import create_book
from fleet.store.csv_import import import_folder
from fleet.store.reading import read_history
from fleet.store.writing import Entry

SEEDS = (1, 2, 3, 4, 5)
AS_OF = datetime(2026, 11, 30, 20, tzinfo=UTC)
STATED = 0.90
ASKED = 0.80


@dataclass(frozen=True)
class Judged:
    """One mode of one life: the true B10 and what was told of it. [clock of the mode]"""

    seed: int
    label: str
    mode: str
    truth: float
    low: float
    high: float
    middle_low: float
    middle_high: float


def _history(folder: Path, seed: int) -> History:
    write_csv(folder / "csv", seed)
    with closing(create_book(folder / "book.db")) as book:
        import_folder(book, folder / "csv", Entry(AS_OF, "demo", "import"))
        return read_history(book, AS_OF)


def _judged(history: History, seed: int, life: PartLife) -> Iterator[Judged]:
    part_type = history.one(PartType, life.key.part_type).code
    revision = "" if life.key.revision is None else history.one(Revision, life.key.revision).code
    truth = true_b10(part_type, revision, life.key.apart_lot is not None, "unfit")
    for mode in life.modes:
        b10 = [mode.unfit.b_life_quantile(10, q) for q in (0.05, 0.95, 0.45, 0.55)]
        yield Judged(seed, life.label, mode.mode.code, truth[mode.mode.code], *b10)


@pytest.fixture(scope="module")
def judged(demo_history: History, tmp_path_factory: pytest.TempPathFactory) -> list[Judged]:
    found = []
    for seed in SEEDS:
        packaged = seed == PACKAGED_SEED
        history = demo_history if packaged else _history(tmp_path_factory.mktemp(f"seed{seed}"), seed)
        lives = fit_part_lives(history, part_data(history, ages_of(history)))
        found += [told for life in lives.values() for told in _judged(history, seed, life)]
    return found


def coverage(judged: list[Judged], factor: float = 1.0) -> float:
    """Share of the true B10 lives, times a factor, that lie within their 90 % intervals."""
    return sum(told.low <= told.truth * factor <= told.high for told in judged) / len(judged)


def test_at_least_four_in_five_true_lives_lie_within_their_90_percent_intervals(judged: list[Judged]) -> None:
    share = coverage(judged)
    missed = [told for told in judged if not told.low <= told.truth <= told.high]
    print(f"{share:.1%} of {len(judged)} true B10 lives lie within their {STATED:.0%} intervals; outside:")
    for told in missed:
        print(
            f"  seed {told.seed}, {told.label}, {told.mode}: {told.truth:.0f} not in {told.low:.0f} to {told.high:.0f}"
        )
    assert share >= ASKED


def test_every_part_revision_bad_lot_and_mode_was_judged_for_every_seed(judged: list[Judged]) -> None:
    for seed in SEEDS:
        named = {(told.label, told.mode) for told in judged if told.seed == seed}
        assert len(named) == sum(told.seed == seed for told in judged) == 22
        assert {label.split(", ")[-1] for label, _ in named if "lot" in label} == {"lot DC-02 apart"}


@pytest.mark.parametrize("factor", [0.6, 1.6])
def test_lives_that_were_not_the_true_ones_are_found_out(judged: list[Judged], factor: float) -> None:
    assert coverage(judged, factor) < ASKED


def test_intervals_that_say_too_much_are_found_out(judged: list[Judged]) -> None:
    within = sum(told.middle_low <= told.truth <= told.middle_high for told in judged)
    assert within / len(judged) < 0.4
