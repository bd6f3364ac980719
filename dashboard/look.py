"""The look: colour tokens for a light and a dark ground in, Streamlit theme options and one style sheet out."""

from __future__ import annotations

from functools import cache
from pathlib import Path
from typing import Literal

Ground = Literal["light", "dark"]

LIGHT = {
    "ground": "#FBFAF6",
    "panel": "#F1EFE8",
    "ink": "#1E2428",
    "soft": "#565C60",
    "rule": "#858072",
    "hair": "#D8D4C8",
    "action": "#1D4F6E",
    "on-action": "#FFFFFF",
    "chosen": "#E4EAEC",
    "care": "#7A2E12",
    "care-ground": "#FBEFE6",
    "faint": "rgba(30, 36, 40, .22)",
    "band": "#8AA6B6",
    "step-0": "#F7F3E3",
    "step-0-ink": "#1E2428",
    "step-1": "#E7D383",
    "step-1-ink": "#1E2428",
    "step-2": "#BD9F5E",
    "step-2-ink": "#1E2428",
    "step-3": "#6A5C74",
    "step-3-ink": "#FFFFFF",
    "step-4": "#15264F",
    "step-4-ink": "#FFFFFF",
}

DARK = {
    "ground": "#14181B",
    "panel": "#1F2529",
    "ink": "#E9E7E1",
    "soft": "#A9AEB2",
    "rule": "#7C8288",
    "hair": "#343B40",
    "action": "#9CC7E0",
    "on-action": "#14181B",
    "chosen": "#243540",
    "care": "#F0A987",
    "care-ground": "#2B1D16",
    "faint": "rgba(233, 231, 225, .26)",
    "band": "#54707F",
    "step-0": "#1E2B3B",
    "step-0-ink": "#E9E7E1",
    "step-1": "#3F4A5C",
    "step-1-ink": "#FFFFFF",
    "step-2": "#747263",
    "step-2-ink": "#FFFFFF",
    "step-3": "#B5A75C",
    "step-3-ink": "#14181B",
    "step-4": "#FBE55C",
    "step-4-ink": "#14181B",
}


def tokens(ground: Ground) -> dict[str, str]:
    """Token name -> colour, for one ground."""
    return DARK if ground == "dark" else LIGHT


def theme_options() -> dict[str, object]:
    """The Streamlit options that put our tokens into its own widgets."""
    options: dict[str, object] = {
        "theme.baseRadius": "6px",
        "theme.buttonRadius": "6px",
        "theme.baseFontSize": 16,
        "theme.headingFontSizes": ["28px", "20px", "17px"],
        "theme.showWidgetBorder": True,
    }
    for ground, palette in (("light", LIGHT), ("dark", DARK)):
        options |= {
            f"theme.{ground}.primaryColor": palette["action"],
            f"theme.{ground}.backgroundColor": palette["ground"],
            f"theme.{ground}.secondaryBackgroundColor": palette["panel"],
            f"theme.{ground}.textColor": palette["ink"],
            f"theme.{ground}.linkColor": palette["action"],
            f"theme.{ground}.borderColor": palette["rule"],
            f"theme.{ground}.grayTextColor": palette["soft"],
        }
    return options


def style_sheet(ground: Ground) -> str:
    """The whole style sheet, in a style element, with the tokens of one ground on :root."""
    paper = f"@media print{{:root{{{_written(LIGHT | {'ground': '#FFFFFF'})}color-scheme:light;}}}}"
    return f"<style>:root{{{_written(tokens(ground))}color-scheme:{ground};}}{paper}{_rules()}</style>"


def _written(palette: dict[str, str]) -> str:
    return "".join(f"--{name}:{value};" for name, value in palette.items())


@cache
def _rules() -> str:
    return Path(__file__).with_name("look.css").read_text(encoding="utf-8")
