"""A page's drawing function in; the same page with our look, the footer, and errors as one sentence, out."""

from __future__ import annotations

from collections.abc import Callable

import streamlit as st

from dashboard.cautions import FOOTER
from dashboard.links import show
from dashboard.look import Ground, style_sheet
from dashboard.marks import Html, caution, element, html
from fleet.errors import FleetError
from fleet.records.history import History
from fleet.report.wording import moment_text

Draw = Callable[[], None]
_ON_PAGE, _ARRIVED = "on page", "just arrived"


def framed(draw: Draw) -> Draw:
    """Wrap a page: style sheet first, then the page, then the footer; what the user can mend becomes a sentence."""

    def page() -> None:
        here = (draw.__module__, st.query_params.to_dict())
        st.session_state[_ARRIVED] = st.session_state.get(_ON_PAGE) != here
        st.session_state[_ON_PAGE] = here
        st.html(style_sheet(ground_now()))
        try:
            draw()
        except FleetError as problem:
            show_problem(problem)
        show(FOOTER)

    page.__name__ = draw.__name__
    return page


def just_arrived() -> bool:
    """Whether this run opened the page, or came by a new address, rather than answering something done on it."""
    return bool(st.session_state.get(_ARRIVED))


def ground_now() -> Ground:
    """Light or dark, as the reader's browser shows it."""
    return "dark" if st.context.theme.type == "dark" else "light"


def show_problem(problem: FleetError) -> None:
    """One sentence for a mistake that the user can mend; what was typed stays where it was."""
    show(problem_block(problem))


def problem_block(problem: FleetError) -> Html:
    """The sentence, its lines kept apart."""
    first, *more = str(problem).splitlines() or [""]
    listed = element("ul", *(element("li", line) for line in more)) if more else ""
    return caution("Not done", first, listed)


def title(words: str) -> None:
    """The page's one heading of the first level."""
    show(element("h1", words))


def lead(sentence: str | Html) -> None:
    """The sentence under the heading that gives the answer."""
    show(element("p", html(sentence), class_="lead"))


def empty_book() -> None:
    """What a page says before there is anything to show."""
    show(element("p", "No robots yet: import your set-up with ", element("code", "wearbook import FOLDER"), "."))


def worked_out(history: History) -> None:
    """When, and up to which write of the book, the page's figures were worked out."""
    when = moment_text(history.as_of, history.zone)
    show(element("p", f"Worked out {when}, up to write {history.write_number} of the book.", class_="soft small"))
