"""Widgets whose first value comes from the address and whose state belongs to one draft."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import Any

import streamlit as st

from dashboard.links import chosen, chosen_all

Format = Callable[[str], str]


@dataclass(frozen=True)
class Choices:
    """The choices of one draft; their names are the same in the address and among the values."""

    draft: str

    def key(self, name: str) -> str:
        """The widget's key."""
        return f"{self.draft}:{name}"

    def values(self) -> dict[str, Any]:
        """Everything chosen in this draft so far, by name; safe to call in a callback."""
        start = f"{self.draft}:"
        kept = {str(key): value for key, value in st.session_state.items() if str(key).startswith(start)}
        return {key[len(start) :]: self._last(key) if value is None else value for key, value in kept.items()}

    def said(self, name: str) -> Any:
        """What was chosen before the widget is drawn: in this visit, or by the address."""
        key = self.key(name)
        return st.session_state[key] if key in st.session_state else chosen(name)

    def one(
        self,
        name: str,
        label: str,
        options: Sequence[str],
        default: str | None = None,
        format_func: Format = str,
        pills: bool = False,
        required: bool = False,
    ) -> str | None:
        """One of a few."""
        key = self.key(name)
        last = self._last(key) if required else None
        self._start(
            name, chosen(name), last or default, lambda value: value in options or (value is None and not required)
        )
        if required:
            st.session_state[_last_key(key)] = st.session_state[key]
        widget = st.pills if pills else st.segmented_control
        return widget(label, options, key=key, format_func=format_func, required=required, wrap=True)

    def several(self, name: str, label: str, options: Sequence[str], format_func: Format = str) -> list[str]:
        """Any of several."""
        known = [value for value in chosen_all(name) if value in options]
        key = self._start(name, known, known, lambda value: all(one in options for one in value))
        return list(st.pills(label, options, selection_mode="multi", key=key, format_func=format_func, wrap=True))

    def start(self, name: str, default: Any, read: Callable[[str], Any] = str) -> str:
        """Key of any other widget, after giving it its first value; `read` makes a value of what the address says."""
        said = chosen(name)
        try:
            value = None if said is None else read(said)
        except ValueError:
            value = None
        return self._start(name, value, default, lambda _: True)

    def _last(self, key: str) -> Any:
        """The last choice of a widget that always has one.

        A quick tap on another widget can reach the server before the browser has taken up this one's first value; it
        then sends none, and the first value would be lost.
        """
        return st.session_state.get(_last_key(key))

    def _start(self, name: str, said: Any, default: Any, fits: Callable[[Any], bool]) -> str:
        """Give a widget its first value, and take back one that is no longer on offer."""
        key = self.key(name)
        if key not in st.session_state:
            st.session_state[key] = said if said is not None and fits(said) else default
        elif not fits(st.session_state[key]):
            st.session_state[key] = default
        return key


def _last_key(key: str) -> str:
    return f"last of {key}"
