"""HTML with links to our own pages in; the page that is pressed, without a reload, and an address that keeps up."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from pathlib import Path
from typing import Any

import streamlit as st

from dashboard.marks import Html, address, block


@st.cache_resource(show_spinner=False)
def _linked() -> Any:
    return st.components.v2.component("wearbook_linked", js=_script("linked.js"), isolate_styles=False)


@st.cache_resource(show_spinner=False)
def _kept() -> Any:
    return st.components.v2.component("wearbook_address", js=_script("address.js"), isolate_styles=False)


def _script(name: str) -> str:
    return Path(__file__).with_name(name).read_text(encoding="utf-8")


def show(*inside: str | Html) -> None:
    """Show HTML without links."""
    st.html(block(*inside))


def show_linked(*inside: str | Html, key: str) -> None:
    """Show HTML, and follow the links in it when they are pressed."""
    _linked()(key=key, data={"html": str(block(*inside))})


def keep_address(page: str, choices: Mapping[str, str | Sequence[str] | None], top: str = "") -> None:
    """Make the address say what the page shows, so that a reload, a bookmark or a lost connection brings it back.

    `top` names something new, such as a receipt, that must be seen from its beginning.
    """
    said = {"page": f"/{page}", "address": address(page, **choices), "top": top}
    with st.container(key="kept-address"):
        _kept()(key=f"address-of-{page}", data=said)


def chosen(name: str) -> str | None:
    """What the address says under this name."""
    return st.query_params.get(name) or None


def chosen_all(name: str) -> list[str]:
    """Everything the address says under this name."""
    return st.query_params.get_all(name)
