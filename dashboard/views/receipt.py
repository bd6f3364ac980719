"""What was saved after a session: time, content and a way back, at the top of the page, away from where Save was."""

from __future__ import annotations

import secrets

import streamlit as st

from dashboard import answers
from dashboard.cautions import BATTERY, REASSEMBLY
from dashboard.links import keep_address, show, show_linked
from dashboard.marks import address, caution, element, link
from dashboard.receipts import Told, told
from fleet.errors import FleetError
from fleet.records.history import History
from fleet.records.set_up import Robot
from fleet.report.wording import moment_text
from fleet.store.entries import LATE_AFTER, undo


def saved_key(draft: str) -> str:
    """Where this visit remembers in which write a draft was saved."""
    return f"write of {draft}"


def draft_key(robot: Robot) -> str:
    """Where this visit remembers the token of a robot's open entry."""
    return f"draft of {robot.record_id}"


def new_draft() -> str:
    """A token for one entry."""
    return secrets.token_hex(8)


def draw_receipt(history: History, robot: Robot, draft: str, write_number: int) -> None:
    """Draw the receipt of one write; a reload draws the same."""
    problem = st.session_state.pop(f"problem of write {write_number}", None)
    if problem is not None:
        show(caution("Not undone", problem))
    said = told(history, write_number)
    if said is None or said.robot.record_id != robot.record_id:
        show(element("h2", "Taken back"), element("p", f"Write {write_number} does not count any more."))
    else:
        _receipt(said, history, write_number)
    fresh = str(st.session_state.setdefault(f"draft after {draft}", new_draft()))
    again = link(
        f"Log another session of {robot.code}", address("after", robot=robot.code, draft=fresh), class_="button"
    )
    others = [
        link("Another robot", "/after", class_="button"),
        link("Before a session", "/before", class_="button"),
        link(f"Joints of {robot.code}", address("joints", robot=robot.code), class_="button"),
    ]
    show_linked(element("div", again, *others, class_="buttons"), key="after-receipt")
    if said is not None:
        show(*([REASSEMBLY] if said.opened else []), BATTERY)
    choices = {"robot": robot.code, "draft": draft, "saved": str(write_number)}
    keep_address("after", choices, top=f"write {write_number} of {draft}{' taken back' if said is None else ''}")


def _receipt(said: Told, history: History, write_number: int) -> None:
    entered, ended = said.entered_at, said.session.ended_at
    late = entered - ended > LATE_AFTER
    lines = [element("p", said.sentence, class_="lead")]
    if late:
        lines.append(element("p", element("strong", "Late entry"), f": it ended {moment_text(ended, history.zone)}."))
    lines += [element("p", line) for line in said.parts]
    if said.session.note:
        lines.append(element("p", f"Note: {said.session.note}", class_="soft"))
    head = element("h2", f"Saved {moment_text(entered, history.zone)}")
    show(element("div", head, *lines, element("p", f"Write {write_number}.", class_="soft small"), role="status"))
    st.button("Undo this entry", key=f"undo {write_number}", on_click=_undo, args=(write_number,))


def _undo(write_number: int) -> None:
    """Take the write back; a second press finds nothing left to take back, which is what was wanted."""
    try:
        if told(answers.history(), write_number) is not None:
            undo(answers.book(), write_number, answers.now(), "dashboard", "undone on the page after a session")
    except FleetError as problem:
        st.session_state[f"problem of write {write_number}"] = str(problem)
