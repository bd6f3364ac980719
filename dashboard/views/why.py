"""What one robot's number is made of, in a drawer at the right: joints, parts and the failures behind them."""

from __future__ import annotations

from collections.abc import Mapping
from typing import cast

import streamlit as st

from dashboard.cautions import ODDS
from dashboard.links import show_linked
from dashboard.marks import Html, Word, address, assumption, caution, element, facts, joined_html, link, state, table
from fleet.forecasts.next_session import JointOutlook, RobotOutlook, SlotOutlook
from fleet.pipeline import ReadOut
from fleet.records.set_up import PartType
from fleet.report.wording import NO_BREAK, chance, count, hours, percent

_SHOWN = 8


def show_why(found: ReadOut, robot: RobotOutlook, choices: Mapping[str, str]) -> None:
    """Open the drawer; closing it goes back to the page with its choices."""

    def close() -> None:
        st.query_params.from_dict({name: value for name, value in choices.items() if value})

    @st.dialog(f"What {robot.code}'s number is made of", width="medium", position="right", on_dismiss=close)
    def drawer() -> None:
        _inside(found, robot)

    drawer()


def _inside(found: ReadOut, robot: RobotOutlook) -> None:
    lives = {
        slot.life: found.lives[slot.life] for joint in robot.joints for slot in joint.slots if slot.life in found.lives
    }
    running = sum(life.data.running for life in lives.values())
    said = "held: no odds" if robot.finishes is None else chance(robot.finishes)
    pairs: list[tuple[str, str | Html]] = [
        (f"Finishes {hours(robot.hours)}", said),
        ("Behind it", f"{count(robot.failures_seen, 'failure')} and {count(running, 'part')} still running"),
        ("Parts of this robot", count(sum(slot.running for joint in robot.joints for slot in joint.slots), "part")),
    ]
    assumed = [life for life in lives.values() if life.mostly_assumption]
    blocks = [
        caution(
            "Mostly assumption",
            f"{life.label}: {count(life.data.failures, 'failure')} seen.",
            link("Open its life", address("lives", part=found.history.one(PartType, life.key.part_type).code)),
        )
        for life in assumed
    ]
    if robot.held is not None:
        blocks.insert(0, caution(f"{robot.code} held", f"{robot.held.why}.", word="held"))
    words = "The joints most likely to stop it first, and the part in each that counts most."
    rows = [_row(robot, joint) for joint in robot.joints[:_SHOWN]]
    show_linked(
        facts(pairs),
        *blocks,
        table(["Joint", "Stops it", "Part", "Age"], rows, words, stack=True),
        ODDS,
        key="why-drawer",
    )


def word_of(joint: JointOutlook) -> Word:
    """The word for a joint, as the marks know it."""
    return cast(Word, joint.word)


def _row(robot: RobotOutlook, joint: JointOutlook) -> list[str | Html]:
    target = address("joints", robot=robot.code, joint=joint.code)
    word = state(word_of(joint))
    stops = "no odds" if joint.held is not None else f"{percent(joint.stops.mean)}{NO_BREAK}%"
    part = _part(joint.slots[0]) if joint.slots else ("nothing fitted", "")
    return [joined_html([link(joint.label, target), element("div", word)]), stops, *part]


def _part(slot: SlotOutlook) -> tuple[Html, str]:
    many = f"{slot.running} x " if slot.running > 1 else ""
    said = assumption(slot.failures_seen) if slot.mostly_assumption else ""
    return joined_html([f"{many}{slot.label} ", said]), ages_text(slot)


def ages_text(slot: SlotOutlook) -> str:
    """Youngest and oldest part of a slot, in running hours."""
    ages = sorted(age.get("hours", 0.0) for age in slot.ages)
    if not ages:
        return ""
    low, high = round(ages[0], 1), round(ages[-1], 1)
    said = hours(high) if low == high else f"{low:g} to {hours(high)}"
    return f"{said}, assumed" if slot.age_assumed else said
