"""The server listens to this machine alone, phones nobody and shows no code."""

from __future__ import annotations

import re
import socket

import pytest
from streamlit import config

from dashboard.look import DARK, LIGHT, style_sheet, theme_options
from dashboard.serve import ADDRESS, serve, server_options
from fleet.errors import BookError


def test_the_server_listens_to_this_machine_alone_and_tells_nobody() -> None:
    options = server_options(8501, open_browser=False)
    assert options["server.address"] == "127.0.0.1"
    assert options["browser.gatherUsageStats"] is False
    assert options["client.showErrorDetails"] == "none"
    assert options["client.showErrorLinks"] is False
    assert options["server.headless"] is True


def test_every_option_is_known_to_this_streamlit() -> None:
    known = config.get_config_options()
    assert set(server_options(8501, True)) <= set(known)


def test_a_port_that_is_taken_is_one_sentence() -> None:
    with socket.socket() as taken:
        taken.bind((ADDRESS, 0))
        taken.listen()
        port = taken.getsockname()[1]
        with pytest.raises(BookError, match=f"Port {port} is in use"):
            serve("book.db", port=port, open_browser=False)


def test_both_grounds_have_the_same_tokens_and_every_one_that_the_style_sheet_asks_for() -> None:
    assert LIGHT.keys() == DARK.keys()
    own = {"low", "high", "at", "tiles", "mark-ink", "mark-faint", "mark-ground"}
    asked = set(re.findall(r"var\(--([a-z0-9-]+)", style_sheet("light"))) - own
    assert asked <= LIGHT.keys()
    assert theme_options()["theme.dark.backgroundColor"] == DARK["ground"]


def _luminance(colour: str) -> float:
    parts = [int(colour[at : at + 2], 16) / 255 for at in (1, 3, 5)]
    linear = [part / 12.92 if part <= 0.03928 else ((part + 0.055) / 1.055) ** 2.4 for part in parts]
    return 0.2126 * linear[0] + 0.7152 * linear[1] + 0.0722 * linear[2]


def _contrast(one: str, other: str) -> float:
    light, dark = sorted((_luminance(one), _luminance(other)), reverse=True)
    return (light + 0.05) / (dark + 0.05)


@pytest.mark.parametrize("palette", [LIGHT, DARK])
def test_text_stands_out_from_its_ground(palette: dict[str, str]) -> None:
    pairs = [("ink", "ground"), ("soft", "ground"), ("soft", "panel"), ("action", "ground"), ("care", "care-ground")]
    pairs += [("on-action", "action"), ("action", "chosen"), *((f"step-{at}-ink", f"step-{at}") for at in range(5))]
    for ink, ground in pairs:
        assert _contrast(palette[ink], palette[ground]) >= 4.5, (ink, ground)
    assert _contrast(palette["rule"], palette["ground"]) >= 3
