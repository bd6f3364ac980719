"""Marks are words first, escape what people typed, and never claim certainty."""

from __future__ import annotations

from dataclasses import dataclass

import pytest

from dashboard.marks import (
    Html,
    Tile,
    address,
    assumption,
    caution,
    cautions,
    doubt,
    element,
    joint_tile,
    limb_tiles,
    link,
    number,
    state,
    state_mark,
    step_of,
    table,
    track,
)

NASTY = '<img src=x onerror="alert(1)">'


@dataclass(frozen=True)
class Odds:
    mean: float
    low: float
    high: float


def test_markup_in_a_label_is_shown_as_text_everywhere() -> None:
    tile = Tile(NASTY, NASTY, "due", 0.3, address("joints", robot=NASTY))
    drawn = [
        element("p", NASTY, title=NASTY),
        link(NASTY, address("after", robot=NASTY)),
        caution(NASTY, NASTY, NASTY),
        joint_tile(tile),
        table([NASTY, NASTY], [[NASTY, NASTY]], NASTY, stack=True),
    ]
    for piece in drawn:
        assert "<img" not in piece
        assert "&lt;img" in piece


def test_html_is_not_escaped_twice() -> None:
    assert element("p", element("b", "a & b")) == "<p><b>a &amp; b</b></p>"


@pytest.mark.parametrize(("word", "full"), [("settled", 1), ("wearing", 2), ("due", 3), ("held", 3)])
def test_a_state_is_a_stack_of_bars_and_its_word(word: str, full: int) -> None:
    drawn = state(word)  # type: ignore[arg-type]
    assert drawn.count('class="on"') == full
    assert drawn.endswith(f"{word}</span>")


def test_only_a_held_mark_has_the_strap() -> None:
    assert 'class="mark held"' in state_mark("held")
    assert "held" not in state_mark("due")


@pytest.mark.parametrize(
    ("stops", "step"),
    [(0, 0), (0.0099, 0), (0.01, 1), (0.0299, 1), (0.03, 2), (0.1, 3), (0.25, 4), (1, 4)],
)
def test_a_chance_falls_in_one_of_five_steps(stops: float, step: int) -> None:
    assert step_of(stops) == step


def test_a_number_carries_its_range() -> None:
    assert "71\u00a0% (62–79)" in number(Odds(0.71, 0.62, 0.79))


def test_a_number_that_is_mostly_assumption_is_drawn_hollow_and_says_so() -> None:
    odds = Odds(0.71, 0.62, 0.79)
    assert "assumed" in track(odds, mostly_assumption=True)
    assert "assumed" not in track(odds)
    assert "mostly assumption: 0 failures seen" in assumption(0)
    assert "mostly assumption: age unknown" in doubt("age unknown", True)
    assert "mostly" not in doubt("age unknown for 2 of 40 parts", False)
    assert "1 failure seen" in assumption(1)


def test_a_track_stays_on_its_line() -> None:
    assert "--at:100.0%;--low:0.0%;--high:100.0%" in track(Odds(1.2, -0.1, 1.4))


def test_a_held_joint_shows_no_odds() -> None:
    drawn = joint_tile(Tile("ankle", "left ankle", "held", 0.4, "/joints"))
    assert "held, do not run" in drawn
    assert "%" not in drawn
    assert "step-" not in drawn


def test_the_visible_word_of_a_tile_starts_its_name() -> None:
    drawn = joint_tile(Tile("ankle", "left ankle", "wearing", 0.05, "/joints"))
    assert ">ankle</span>" in drawn
    assert "left ankle: wearing, 3 to 10 %" in drawn


def test_a_limb_is_as_wide_as_its_joints_are_many() -> None:
    tile = Tile("a", "a", "settled", 0.0, "/joints")
    drawn = limb_tiles("left <arm>", [tile, tile])
    assert drawn.count("--tiles:2") == 2
    assert "left &lt;arm&gt;" in drawn


def test_more_than_three_cautions_fold_and_their_count_stays_in_sight() -> None:
    blocks = [caution(str(at), "text") for at in range(5)]
    assert "<details>" not in cautions(blocks[:3])
    folded = cautions(blocks)
    assert "3 more cautions" in folded
    assert all(block in folded for block in blocks)


def test_an_address_escapes_what_it_carries() -> None:
    assert address("after", robot="R 1&x", joint=None) == "/after?robot=R+1%26x"
    assert isinstance(link("a", "/after"), Html)
