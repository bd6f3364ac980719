"""The script that Streamlit runs: seven pages under one navigation bar."""

from __future__ import annotations

import streamlit as st

from dashboard.frame import framed
from dashboard.views import after, before, joints, part_lives, plates, scoreboard, spares


def _first() -> None:
    """The bare address leads to the first page, so that each page has one address."""
    st.switch_page(_PAGES["before"])


_PAGES = {
    "before": st.Page(framed(before.draw), title="Before a session", url_path="before"),
    "after": st.Page(framed(after.draw), title="After a session", url_path="after"),
    "joints": st.Page(framed(joints.draw), title="Joints", url_path="joints"),
    "lives": st.Page(framed(part_lives.draw), title="Part lives", url_path="lives"),
    "spares": st.Page(framed(spares.draw), title="Spares", url_path="spares"),
    "plates": st.Page(framed(plates.draw), title="Print plates", url_path="plates"),
    "score": st.Page(framed(scoreboard.draw), title="Scoreboard", url_path="score"),
}

st.set_page_config(page_title="wearbook", layout="wide", initial_sidebar_state="collapsed")
chosen = st.navigation(
    [st.Page(_first, title="wearbook", default=True, visibility="hidden"), *_PAGES.values()], position="top"
)
chosen.run()
