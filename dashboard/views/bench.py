"""What a person at the bench says of one joint: a check, which may hold it, and the lifting of a hold, with why."""

from __future__ import annotations

import streamlit as st

from dashboard import answers
from dashboard.cautions import OPENING, REASSEMBLY
from dashboard.links import show
from dashboard.marks import caution, element
from fleet.errors import FleetError
from fleet.forecasts.next_session import Held, JointOutlook, RobotOutlook
from fleet.pipeline import ReadOut
from fleet.plans.stock import stock_by_lot
from fleet.records.set_up import Slot
from fleet.report.wording import plain
from fleet.store.entries import CheckEntry, SpareEntry, lift_hold, log_check, log_spare

_LABELS = {"good": "looks good", "doubtful": "doubtful"}
_SAID = "said at the bench"


def draw_bench(found: ReadOut, robot: RobotOutlook, joint: JointOutlook) -> None:
    """Draw what can be recorded of this joint."""
    show(element("h2", "At the bench"), OPENING, REASSEMBLY)
    draw_said()
    name = f"{robot.code} {joint.code} at write {found.history.write_number}"
    verdict = st.pills("A look at this joint", list(_LABELS), format_func=_LABELS.__getitem__, key=f"verdict {name}")
    if verdict is not None:
        st.text_input("What was seen", key=f"seen {name}", max_chars=500)
        label = "Save check: good" if verdict == "good" else "Save check: doubtful, and hold this joint"
        st.button(label, key=f"check {name}", on_click=_check, args=(joint.position, name), type="primary")
    if joint.held is not None:
        _draw_spare(found, joint, joint.held, name)
        draw_lift(joint.held)


def _draw_spare(found: ReadOut, joint: JointOutlook, held: Held, name: str) -> None:
    """Where a failed part still sits: the spare that ends it, from the lots that have some left."""
    if held.slot is None or held.place is None:
        return
    part_type = found.history.one(Slot, held.slot).part_type
    lots = {lot.lot: lot for lot in stock_by_lot(found.history) if lot.part_type == part_type and lot.on_hand > 0}
    if not lots:
        show(element("p", "No spare of this part is on the shelf.", class_="soft"))
        return
    key = f"spare {name}"
    chosen = st.pills(
        "Spare put in",
        list(lots),
        format_func=lambda lot: f"{plain(lots[lot].code)} ({lots[lot].on_hand} left)",
        key=key,
    )
    if chosen is not None:
        label = f"Save: spare from {plain(lots[chosen].code)} put in"
        st.button(label, key=f"save {key}", on_click=_put_in, args=(joint.position, held, key), type="primary")


def _put_in(position: str, held: Held, key: str) -> None:
    """Write the spare that is chosen at this press; a second press finds none chosen."""
    lot = st.session_state.pop(key, None)
    if lot is None or held.slot is None or held.place is None:
        return
    spare = SpareEntry(position, held.slot, lot, held.place)
    try:
        receipt = log_spare(answers.book(), spare, None, answers.now(), "dashboard")
    except FleetError as problem:
        st.session_state[_SAID] = (str(problem), False)
        return
    st.session_state[_SAID] = (f"Saved: {receipt.sentence}", True)


def draw_lift(held: Held) -> None:
    """A hold that a person set can be lifted by a person; one that a failed part causes ends with its spare."""
    if held.hold is None:
        return
    why = st.text_input("Why the hold can be lifted", key=f"why {held.hold}", max_chars=500)
    blank = not why.strip()
    if blank:
        show(element("p", "Not yet: say why it can be lifted.", class_="soft not-yet"))
    st.button("Lift the hold", key=f"lift {held.hold}", on_click=_lift, args=(held.hold,), disabled=blank)


def draw_said() -> None:
    """What came of the last entry at the bench, once."""
    said = st.session_state.pop(_SAID, None)
    if said is None:
        return
    sentence, good = said
    show(element("p", sentence, class_="lead", role="status") if good else caution("Not saved", sentence))


def _check(position: str, name: str) -> None:
    """Write the check that the widgets hold at this press; a second press finds them empty."""
    verdict = st.session_state.pop(f"verdict {name}", None)
    if verdict is None:
        return
    seen = str(st.session_state.get(f"seen {name}") or "").strip() or None
    check = CheckEntry(position, None, None, verdict == "good", seen)
    try:
        receipt = log_check(answers.book(), check, None, answers.now(), "dashboard")
    except FleetError as problem:
        st.session_state[f"verdict {name}"] = verdict
        st.session_state[_SAID] = (str(problem), False)
        return
    st.session_state[_SAID] = (f"Saved: {receipt.sentence}", True)


def _lift(hold: str) -> None:
    """Lift a hold with the reason that stands there at this press; a second press finds none."""
    why = str(st.session_state.pop(f"why {hold}", None) or "")
    if not why.strip():
        return
    try:
        lift_hold(answers.book(), hold, why, answers.now(), "dashboard")
    except FleetError as problem:
        st.session_state[f"why {hold}"] = why
        st.session_state[_SAID] = (str(problem), False)
        return
    st.session_state[_SAID] = ("The hold is lifted; the reason stays in the book.", True)
