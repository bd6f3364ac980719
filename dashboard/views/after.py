"""After a session: hours and impacts as planned, parts with something to say, a button that says what it saves."""

from __future__ import annotations

import re
from collections.abc import Callable
from datetime import date, time, timedelta, tzinfo

import streamlit as st

from dashboard import answers
from dashboard.cautions import OPENING
from dashboard.choices import Choices
from dashboard.drafts import (
    BROKEN_OFF,
    HAPPENED,
    NONE_FITTED,
    OTHER,
    SessionDraft,
    entry_of,
    field,
    missing,
    moments_of,
    read_draft,
    save_label,
)
from dashboard.frame import empty_book, just_arrived, title
from dashboard.links import chosen, keep_address, show, show_linked
from dashboard.marks import Html, address, caution, element, joined_html, link
from dashboard.offers import (
    JointOffer,
    LotOffer,
    PartOffer,
    Planned,
    impact_choices,
    in_order,
    joint_offers,
    planned_of,
)
from dashboard.views.receipt import draft_key, draw_receipt, new_draft, saved_key
from fleet.errors import FleetError
from fleet.forecasts.planned_use import robot_plans, robots_in_service
from fleet.plans.stock import stock_by_lot
from fleet.records.history import History
from fleet.records.lookup import find_robot
from fleet.records.set_up import Robot
from fleet.report.wording import NO_BREAK, plain
from fleet.store.entries import log_session, receipt_of

_SUGGESTED = 5
_HOURS = ("0.5", "1", "1.5", "2", "3")
_DRAFT = re.compile(r"[0-9a-f]{16}")


def draw() -> None:
    """Draw the page."""
    history = answers.history()
    robots = robots_in_service(history)
    if not robots:
        title("After a session")
        empty_book()
        return
    code = chosen("robot")
    if code is None:
        _ask_which(robots)
        return
    try:
        robot = find_robot(history, code)
    except FleetError:
        _ask_which(robots)
        raise
    title(f"{robot.code} after the session")
    draft = _draft_of(robot)
    saved = _saved(draft)
    if saved is not None:
        draw_receipt(history, robot, draft, saved)
    else:
        _form(history, robot, Choices(draft))


def _ask_which(robots: list[Robot]) -> None:
    title("After a session")
    for robot in robots:
        st.session_state.pop(draft_key(robot), None)
    named = sorted(robots, key=lambda robot: in_order(robot.code))
    rows = [link(_named(robot), address("after", robot=robot.code), class_="button") for robot in named]
    show_linked(element("h2", "Which robot ran?"), element("div", *rows, class_="buttons even"), key="which-robot")


def _named(robot: Robot) -> Html:
    name = element("span", f"{NO_BREAK}{robot.label}", class_="soft") if robot.label != robot.code else ""
    return joined_html([robot.code, name])


def _saved(draft: str) -> int | None:
    """The write in which this draft was saved, as this visit or the address knows."""
    said = str(st.session_state.get(saved_key(draft)) or chosen("saved") or "")
    if said.isdecimal() and len(said) < 10:
        return int(said)
    # The answer to a press of Save may have been lost on its way: the book knows.
    kept = receipt_of(answers.book(), draft)
    return None if kept is None else kept.write_number


def _draft_of(robot: Robot) -> str:
    """The token of this entry: with it in the address, a second press or a reload cannot write twice."""
    said = chosen("draft")
    if said is not None and _DRAFT.fullmatch(said):
        return said
    # A visit's own address is only read when a page is opened, so the visit itself remembers the token meanwhile.
    if just_arrived():
        st.session_state.pop(draft_key(robot), None)
    return str(st.session_state.setdefault(draft_key(robot), new_draft()))


def _offers(history: History, robot: Robot) -> tuple[JointOffer, ...]:
    left = {lot.lot: lot.on_hand for lot in stock_by_lot(history)}
    outlook = answers.outlook_of(answers.newest_read_out(), robot.record_id)
    joints = () if outlook is None else outlook.joints
    worn_first = {joint.position: [slot.slot for slot in joint.slots] for joint in joints}
    return joint_offers(history, robot, left, worn_first)


def _form(history: History, robot: Robot, choices: Choices) -> None:
    joints = _offers(history, robot)
    _held_note(history, robot)
    _hours_and_impacts(choices, planned_of(robot_plans(history)[robot.record_id]))
    _joints(choices, joints)
    _late_and_note(choices, history.zone)
    draft = read_draft(choices.values(), joints, history.zone)
    with st.bottom:
        _save_bar(robot, choices, draft, history.zone)
    _keep(robot, choices)


def _held_note(history: History, robot: Robot) -> None:
    newest = answers.newest_read_out()
    outlook = answers.outlook_of(newest, robot.record_id)
    if outlook is not None and outlook.held is not None and newest.history.write_number == history.write_number:
        show(caution(f"{robot.code} held", f"{outlook.held.why}. What it ran can still be logged.", word="held"))


def _hours_and_impacts(choices: Choices, planned: Planned) -> None:
    plan = f"{planned.hours:g}"
    options = sorted({*_HOURS, plan}, key=float)
    if choices.one("hours", "Hours run", [*options, OTHER], plan, required=True) == OTHER:
        key = choices.start("hours.other", None, _at_most(744.0))
        st.number_input("Hours run, as counted", 0.0, 744.0, key=key, step=0.25, placeholder="such as 0.75")
    counts = [str(number) for number in impact_choices(planned.impacts)]
    if choices.one("impacts", "Hard impacts", [*counts, OTHER], str(planned.impacts), required=True) == OTHER:
        key = choices.start("impacts.other", planned.impacts, lambda said: int(_at_most(1e6)(said)))
        st.number_input("Hard impacts, as counted", 0, 1_000_000, key=key, step=1)


def _at_most(most: float) -> Callable[[str], float]:
    """Reads a number from the address, within the bounds of its widget."""

    def read(said: str) -> float:
        value = float(said)
        if not 0 <= value <= most:
            raise ValueError(said)
        return value

    return read


def _joints(choices: Choices, joints: tuple[JointOffer, ...]) -> None:
    """Pills for the most worn joints and another one; a panel for each that was picked."""
    first, rest = joints[:_SUGGESTED], sorted(joints[_SUGGESTED:], key=lambda joint: in_order(joint.code))
    labels = {joint.code: plain(joint.label) for joint in joints} | {OTHER: "another joint"}
    options = [*(joint.code for joint in first), *([OTHER] if rest else [])]
    words = "Parts with something to say, or leave empty. Most worn first."
    picked = choices.several("joints", words, options, labels.__getitem__)
    if OTHER in picked:
        picked += choices.several("others", "Another joint", [joint.code for joint in rest], labels.__getitem__)
    if set(picked) - {OTHER}:
        show(OPENING)
    for joint in joints:
        if joint.code in picked:
            with st.container(border=True):
                _panel(choices, joint)


def _panel(choices: Choices, joint: JointOffer) -> None:
    what = choices.one(field(joint, "what"), f"{plain(joint.label)}: what happened", HAPPENED, pills=True)
    if what == "replaced while good":
        labels = {part.code: plain(part.label) for part in joint.parts}
        good = choices.several(field(joint, "parts"), "Which part", list(labels), labels.__getitem__)
        for part in joint.parts:
            if part.code in good:
                _place_and_spare(choices, joint, part)
    elif what is not None:
        _modes(choices, joint)


def _modes(choices: Choices, joint: JointOffer) -> None:
    """The modes of each part, the part most likely to have failed first; once one is told, the others fold away."""
    told = [part for part in joint.parts if choices.said(field(joint, part.code, "mode")) is not None]
    more = field(joint, "more")
    for part in joint.parts if not told or choices.said(more) else told:
        labels = {mode.code: plain(mode.label) for mode in part.modes}
        name = field(joint, part.code, "mode")
        words = f"How: {plain(part.label)}"
        if labels and choices.one(name, words, list(labels), None, labels.__getitem__, pills=True) is not None:
            _place_and_spare(choices, joint, part)
    if told:
        st.toggle("Another part of this joint too", key=choices.start(more, False, lambda said: said == "yes"))


def _place_and_spare(choices: Choices, joint: JointOffer, part: PartOffer) -> None:
    if part.count > 1:
        places = [str(place) for place in range(1, part.count + 1)]
        choices.one(field(joint, part.code, "place"), f"Which {plain(part.label)} of the {part.count}", places)
    lots = {lot.code: f"{plain(lot.code)} ({_left(lot)})" for lot in part.lots} | {NONE_FITTED: "none fitted"}
    first = next(iter(lots))
    words = f"Spare put in: {plain(part.label)}"
    name = field(joint, part.code, "lot")
    choices.one(name, words, list(lots), first, lots.__getitem__, pills=True, required=True)


def _left(lot: LotOffer) -> str:
    return plain(f"{lot.left} left, {lot.remark}" if lot.remark else f"{lot.left} left")


def _late_and_note(choices: Choices, zone: tzinfo) -> None:
    with st.expander("Late entry, broken off, or a note"):
        if st.toggle("It ended earlier, not just now", key=choices.start("late", False, lambda said: said == "yes")):
            _when(choices, zone)
        choices.one("outcome", "How it ended", ["as planned", BROKEN_OFF], "as planned", required=True)
        st.text_area("Note", key=choices.start("note", ""), max_chars=2000, height=100)
        st.text_input("Your name or initials", key=choices.start("by", ""), max_chars=60)


def _when(choices: Choices, zone: tzinfo) -> None:
    local = answers.now().astimezone(zone)
    on, at = choices.start("day", local.date(), date.fromisoformat), choices.start("clock", None, time.fromisoformat)
    left, right = st.columns(2)
    left.date_input("Day it ended", key=on, max_value=local.date(), format="YYYY-MM-DD")
    right.time_input("Clock time it ended", key=at, step=timedelta(minutes=15))
    values = choices.values()
    if values.get("day") is None or values.get("clock") is None:
        return
    moments = moments_of(values["day"], values["clock"], zone)
    if not moments:
        show(caution("Not a time", "the clock was set forward that night and never showed this time."))
    if len(moments) == 2:
        choices.one("which", "The clock showed this time twice that night: which one", ["first", "second"])


def _save_bar(robot: Robot, choices: Choices, draft: SessionDraft, zone: tzinfo) -> None:
    """What keeps it from being saved, and the button that says what it will save."""
    phrases = missing(draft)
    problem = st.session_state.pop(_problem_key(choices), None)
    if problem is not None:
        show(caution("Not saved", problem))
    if phrases:
        more = f", and {len(phrases) - 1} more" if len(phrases) > 1 else ""
        show(element("p", f"Not yet: {phrases[0]}{more}.", class_="soft not-yet", role="status"))
    st.button(
        save_label(draft, zone),
        key=f"save {choices.draft}",
        type="primary",
        width="stretch",
        disabled=bool(phrases),
        on_click=_save,
        args=(robot.record_id, choices.draft),
    )


def _problem_key(choices: Choices) -> str:
    return f"problem of {choices.draft}"


def _save(robot_id: str, draft_token: str) -> None:
    """Write what the widgets hold at this press, not what the page held when it was drawn."""
    choices = Choices(draft_token)
    values = choices.values()
    try:
        history = answers.history()
        robot = history.one(Robot, robot_id)
        draft = read_draft(values, _offers(history, robot), history.zone)
        if missing(draft):
            return
        by = str(values.get("by") or "").strip() or "dashboard"
        receipt = log_session(answers.book(), entry_of(draft, robot_id), answers.now(), by, draft_token)
    except FleetError as problem:
        st.session_state[_problem_key(choices)] = str(problem)
        return
    st.session_state[saved_key(draft_token)] = receipt.write_number


def _keep(robot: Robot, choices: Choices) -> None:
    said: dict[str, str | list[str]] = {}
    for name, value in sorted(choices.values().items()):
        if isinstance(value, list):
            said[name] = [str(one) for one in value]
        elif value not in (None, False, "", "as planned"):
            said[name] = "yes" if value is True else str(value)
    keep_address("after", {"robot": robot.code, **said, "draft": choices.draft})
