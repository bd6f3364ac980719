"""Choices of a draft: what was preset or picked is not lost when a quick tap overtakes the browser."""

from __future__ import annotations

from streamlit.testing.v1 import AppTest


def _page() -> None:
    import streamlit as st

    from dashboard.choices import Choices

    choices = Choices("draft")
    choices.one("hours", "Hours", ["1", "2"], "2", required=True)
    choices.one("what", "What", ["failed", "worn"])
    st.session_state["said"] = choices.values()


def test_a_first_value_that_a_quick_tap_overtook_comes_back() -> None:
    page = AppTest.from_function(_page).run()
    page.session_state["draft:hours"] = None
    page.run()
    assert not page.exception
    assert page.session_state["said"]["hours"] == "2"


def test_what_was_picked_comes_back_and_not_what_was_preset() -> None:
    page = AppTest.from_function(_page).run()
    page.session_state["draft:hours"] = "1"
    page.run()
    page.session_state["draft:hours"] = None
    page.run()
    assert page.session_state["said"]["hours"] == "1"


def test_a_choice_that_may_be_empty_stays_empty() -> None:
    page = AppTest.from_function(_page).run()
    page.session_state["draft:what"] = "worn"
    page.run()
    page.session_state["draft:what"] = None
    page.run()
    assert page.session_state["said"]["what"] is None
