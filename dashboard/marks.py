"""Words and numbers in, HTML out: state marks, range tracks, cautions, joint tiles, tables; all text is escaped."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass
from html import escape, unescape
from typing import Literal
from urllib.parse import urlencode

from fleet.report.wording import Chance, chance

Word = Literal["settled", "wearing", "due", "held"]

_BARS_FULL = {"settled": 1, "wearing": 2, "due": 3, "held": 3}
STEPS = ("under 1 %", "1 to 3 %", "3 to 10 %", "10 to 25 %", "over 25 %")
_STEP_ENDS = (0.01, 0.03, 0.10, 0.25)


class Html(str):
    """Text that is HTML already and must not be escaped again."""

    __slots__ = ()


def html(text: str | Html) -> Html:
    """Any text as HTML; what is HTML already stays as it is."""
    return text if isinstance(text, Html) else Html(escape(text))


def joined_html(parts: Sequence[str | Html], between: str = "") -> Html:
    """Pieces of text and HTML in one string."""
    return Html(between.join(html(part) for part in parts))


def element(name: str, *inside: str | Html, **attributes: str | None) -> Html:
    """One element; `class_` stands for class, `data_go` for data-go; an attribute that is None is left out."""
    written = "".join(
        f' {key.rstrip("_").replace("_", "-")}="{escape(value)}"'
        for key, value in attributes.items()
        if value is not None
    )
    return Html(f"<{name}{written}>{joined_html(inside)}</{name}>")


def address(page: str, **choices: str | Sequence[str] | None) -> str:
    """The address of a page with its choices, such as /after?robot=R006; several choices repeat their name."""
    chosen = {name: value for name, value in choices.items() if value}
    return f"/{page}?{urlencode(chosen, doseq=True)}" if chosen else f"/{page}"


def link(text: str | Html, href: str, class_: str | None = None) -> Html:
    """A link to a page of ours."""
    return element("a", text, href=href, class_=class_)


def state_mark(word: Word) -> Html:
    """The stack of printed layers that repeats a state's word."""
    full = _BARS_FULL[word]
    bars = "".join("<i></i>" if bar < 3 - full else '<i class="on"></i>' for bar in range(3))
    return Html(f'<span class="mark {word}" aria-hidden="true">{bars}</span>')


def state(word: Word) -> Html:
    """Mark and word together."""
    return element("span", state_mark(word), word, class_="state")


def step_of(stops: float) -> int:
    """Which of the five steps a chance to stop the session falls in."""
    return sum(stops >= end for end in _STEP_ENDS)


def number(value: Chance) -> Html:
    """A chance with its range, in text."""
    return element("span", chance(value), class_="number")


def assumption(failures_seen: int) -> Html:
    """The dashed words beside a number that rests mostly on an assumption."""
    return doubt("1 failure seen" if failures_seen == 1 else f"{failures_seen} failures seen", True)


def doubt(why: str, mostly_assumption: bool) -> Html:
    """Why a number is less sure than it looks; dashed where it rests mostly on an assumption."""
    if not mostly_assumption:
        return element("span", why, class_="soft small")
    return element("span", f"mostly assumption: {why}", class_="assumption")


def track(value: Chance, mostly_assumption: bool = False) -> Html:
    """The range drawn on a line from 0 to 100 % with a tick at half; the number stands beside it in text."""
    places = {
        "--at": min(max(value.mean, 0), 1),
        "--low": min(max(value.low, 0), 1),
        "--high": min(max(value.high, 0), 1),
    }
    style = ";".join(f"{name}:{share * 100:.1f}%" for name, share in places.items())
    kind = "track assumed" if mostly_assumption else "track"
    inside = '<i class="tick"></i><i class="tick"></i><i class="tick"></i><b></b><u></u>'
    return Html(f'<span class="{kind}" style="{style}" aria-hidden="true">{inside}</span>')


def caution(bold: str, sentence: str, action: str | Html = "", word: Word | None = None) -> Html:
    """A caution: hatched edge, a bold first word, one sentence, at most one action; it cannot be dismissed."""
    mark = state_mark(word) if word is not None else ""
    return element("div", mark, element("strong", bold), f": {sentence} ", action, class_="caution", role="note")


def cautions(blocks: Sequence[Html]) -> Html:
    """Cautions one below the other; more than three fold, with their count in sight."""
    if len(blocks) <= 3:
        return joined_html(blocks)
    summary = element("summary", f"{len(blocks) - 2} more cautions")
    return joined_html([*blocks[:2], element("details", summary, *blocks[2:])])


@dataclass(frozen=True)
class Tile:
    """One joint in the picture of the fleet; `stops` is None for a held joint, which gets no odds."""

    label: str
    full_label: str
    word: Word
    stops: float | None
    href: str


def joint_tile(tile: Tile) -> Html:
    """A tile: its short word in sight, and the rest of the sentence for those who hear the page."""
    if tile.word == "held" or tile.stops is None:
        kind, rest = "tile is-held", f", {tile.full_label}: held, do not run"
    else:
        step = step_of(tile.stops)
        kind, rest = f"tile step-{step}", f", {tile.full_label}: {tile.word}, {STEPS[step]}"
    mark = state_mark(tile.word) if tile.word != "settled" else ""
    inside = (mark, element("span", tile.label), element("span", rest, class_="hidden"))
    return element("a", *inside, href=tile.href, class_=kind, title=tile.full_label)


def limb_tiles(limb: str, tiles: Sequence[Tile]) -> Html:
    """The joints of one limb side by side, under the limb's name."""
    row = element("div", *(joint_tile(tile) for tile in tiles), class_="tilerow", style=f"--tiles:{len(tiles)}")
    return element("div", element("span", limb, class_="cap"), row, class_="limb", style=f"--tiles:{len(tiles)}")


def legend() -> Html:
    """What the five steps and the marks mean."""
    swatches = [
        element("span", Html(f'<span class="swatch step-{step}" aria-hidden="true"></span>'), words)
        for step, words in enumerate(STEPS)
    ]
    words: tuple[Word, ...] = ("settled", "wearing", "due", "held")
    first = element("div", element("span", "Chance that this joint stops the session:"), *swatches, class_="legend")
    return joined_html([first, element("div", *(state(word) for word in words), class_="legend")])


def table(
    head: Sequence[str | Html],
    rows: Sequence[Sequence[str | Html]],
    caption: str,
    stack: bool = False,
) -> Html:
    """A table whose first column names the rows; with `stack`, each row becomes a small card on a phone."""
    labels = [_text_of(words) if stack else None for words in head]
    top = element("tr", *(element("th", words, scope="col") for words in head))
    body = [
        element(
            "tr",
            element("th", row[0], scope="row"),
            *(_cell(label, cell) for label, cell in zip(labels[1:], row[1:], strict=True)),
        )
        for row in rows
    ]
    inside = element("table", element("caption", caption), element("thead", top), element("tbody", *body))
    kind = "scroll stack" if stack else "scroll"
    return element("div", inside, class_=kind, tabindex="0", role="region", aria_label=caption)


def _cell(label: str | None, cell: str | Html) -> Html:
    """One cell; in a card its label stands at the left, and an empty one is left out."""
    if label is None:
        return element("td", cell)
    return element("td", element("span", cell), data_label=label, class_=None if cell else "none")


def _text_of(words: str | Html) -> str:
    """The bare words of a column's head."""
    return unescape(re.sub(r"<[^>]*>", "", words)) if isinstance(words, Html) else words


def facts(pairs: Sequence[tuple[str, str | Html]]) -> Html:
    """Names and values, one pair a line."""
    inside = [joined_html([element("dt", name), element("dd", value)]) for name, value in pairs]
    return element("dl", *inside, class_="facts")


def folded(summary: str, *inside: str | Html, open_: bool = False) -> Html:
    """Something folded away under a line that says what and how many."""
    return element("details", element("summary", summary), *inside, open="" if open_ else None)


def block(*inside: str | Html) -> Html:
    """The wrapper under which our style sheet applies."""
    return element("div", *inside, class_="w")
