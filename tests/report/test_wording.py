"""Numbers in plain words: sensible digits, ranges, no certainty, the book's own clock."""

from __future__ import annotations

from datetime import UTC, datetime
from zoneinfo import ZoneInfo

import pytest

from fleet.forecasts.odds import Chance
from fleet.report.wording import (
    NO_BREAK,
    capital,
    chance,
    clock_time,
    count,
    day,
    figure,
    hours,
    joined,
    moment_text,
    percent,
    plain,
    span,
)

AMSTERDAM = ZoneInfo("Europe/Amsterdam")


@pytest.mark.parametrize(
    ("value", "text"),
    [
        (0.0, "0"),
        (0.012345, "0.0123"),
        (1.0, "1"),
        (1.234, "1.23"),
        (9.999, "10"),
        (99.96, "100"),
        (123.4, "123"),
        (999.6, "1,000"),
        (1234.0, "1,230"),
        (4_512_345.0, "4,510,000"),
        (-2.5, "-2.5"),
        (float("inf"), "no limit"),
        (float("nan"), "unknown"),
    ],
)
def test_a_figure_has_three_digits_that_mean_something(value: float, text: str) -> None:
    assert figure(value) == text


def test_a_figure_is_never_written_in_powers_of_ten() -> None:
    for power in range(-9, 13):
        text = figure(1.23456 * 10.0**power)
        assert "e" not in text
        assert float(text.replace(",", "")) == pytest.approx(1.23456 * 10.0**power, rel=5e-3)


@pytest.mark.parametrize(
    ("share", "text"),
    [
        (0.0, "under 1"),
        (0.004, "under 1"),
        (0.01, "1"),
        (0.503, "50"),
        (0.99, "99"),
        (0.996, "over 99"),
        (1.0, "over 99"),
    ],
)
def test_no_chance_is_certain(share: float, text: str) -> None:
    assert percent(share) == text


def test_a_chance_stands_beside_its_range() -> None:
    assert chance(Chance(0.71, 0.62, 0.79)) == f"71{NO_BREAK}% (62–79)"
    assert chance(Chance(0.999, 0.98, 1.0)) == f"over 99{NO_BREAK}% (98–over 99)"
    assert chance(Chance(0.001, 0.0, 0.02)) == f"under 1{NO_BREAK}% (0–2)"


def test_a_range_stands_beside_its_middle() -> None:
    assert span(330, 410, 520, "h") == f"410{NO_BREAK}h (330–520)"
    assert span(330, 410, 520) == "410 (330–520)"


def test_one_part_two_parts() -> None:
    assert [count(n, "part").replace(NO_BREAK, " ") for n in (0, 1, 2, 1500)] == [
        "0 parts",
        "1 part",
        "2 parts",
        "1,500 parts",
    ]
    assert count(2, "joint waits", "joints wait").replace(NO_BREAK, " ") == "2 joints wait"


def test_words_are_joined_as_people_say_them() -> None:
    assert [joined(list(words)) for words in ("", "a", "ab", "abc")] == ["", "a", "a and b", "a, b and c"]
    assert joined(["a", "b"], "or") == "a or b"


def test_hours_lose_their_idle_zeros() -> None:
    assert [hours(value).replace(NO_BREAK, " ") for value in (1.5, 2.0, 0.25, 10.0)] == [
        "1.5 h",
        "2 h",
        "0.25 h",
        "10 h",
    ]


def test_moments_are_told_on_the_books_own_clock() -> None:
    summer, winter = datetime(2026, 8, 3, 22, 2, tzinfo=UTC), datetime(2026, 12, 1, 7, 5, tzinfo=UTC)
    assert moment_text(summer, AMSTERDAM) == "Tue 4 Aug 00:02"
    assert (day(winter, AMSTERDAM), clock_time(winter, AMSTERDAM)) == ("Tue 1 Dec", "08:05")


def test_only_the_first_letter_grows() -> None:
    assert [capital(text) for text in ("", "a", "the W4", "PLA left")] == ["", "A", "The W4", "PLA left"]


def test_what_people_typed_is_shown_as_it_stands() -> None:
    assert plain("[x](y) *a* 1_2") == r"\[x\]\(y\) \*a\* 1\_2"
    assert plain("left knee 3") == "left knee 3"
