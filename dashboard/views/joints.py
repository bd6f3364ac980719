"""Joints: the whole fleet as one picture, one robot, or the story of one joint, as the address says."""

from __future__ import annotations

from collections import Counter
from collections.abc import Sequence

from dashboard import answers
from dashboard.cautions import ODDS
from dashboard.frame import empty_book, lead, title, worked_out
from dashboard.links import chosen, show, show_linked
from dashboard.marks import (
    Html,
    Tile,
    address,
    caution,
    element,
    folded,
    joined_html,
    legend,
    limb_tiles,
    link,
    number,
    state,
    table,
)
from dashboard.views.bench import draw_lift, draw_said
from dashboard.views.story import draw_story
from dashboard.views.why import ages_text, word_of
from fleet.errors import RecordError
from fleet.forecasts.next_session import JointOutlook, RobotOutlook
from fleet.forecasts.planned_use import robots_in_service
from fleet.pipeline import Question, ReadOut
from fleet.report.wording import NO_BREAK, chance, count, hours, joined, percent

_MANY_JOINTS = 400
_WORDS = ("held", "due", "wearing", "settled")
_SIDES = ("trunk", "left", "right")


def draw() -> None:
    """Draw the page."""
    if not robots_in_service(answers.history()):
        title("Joints")
        empty_book()
        return
    found = answers.read_out(Question())
    robot, joint = chosen("robot"), chosen("joint")
    if robot is None:
        _fleet(found)
        return
    outlook = next((held for held in found.next_session.robots if held.code == robot), None)
    if outlook is None:
        _fleet(found)
        raise RecordError(f"There is no robot {robot!r} in service.")
    story = next((held for held in outlook.joints if held.code == joint), None)
    if joint is not None and story is not None:
        draw_story(found, outlook, story)
        return
    _robot(outlook)
    if joint is not None:
        raise RecordError(f"{robot} has no joint {joint!r} with a module in it.")


def _fleet(found: ReadOut) -> None:
    title("Joints")
    robots = found.next_session.robots
    words = Counter(joint.word for robot in robots for joint in robot.joints)
    total = sum(words.values())
    said = joined([f"{words[word]} {word}" for word in _WORDS if words[word]])
    held = [robot.code for robot in robots if robot.held is not None]
    stay = f" {joined(held)} must not run." if held else ""
    lead(f"{count(total, 'joint')} in {count(len(robots), 'robot')}: {said}.{stay}")
    show(legend(), element("p", "Worst robot first. Left side above, right side below, trunk outward.", class_="note"))
    if total <= _MANY_JOINTS:
        picture = element("div", *(_block(robot, _said(robot)) for robot in robots), class_="blocks")
    else:
        picture = _grouped(robots)
    show_linked(picture, ODDS, key="fleet")
    worked_out(found.history)


def _grouped(robots: Sequence[RobotOutlook]) -> Html:
    """Many joints: small tiles, robots under the worst word among their joints, the settled ones folded away."""
    parts = []
    for word in _WORDS:
        those = [robot for robot in robots if _worst(robot) == word]
        if not those:
            continue
        blocks = element("div", *(_block(robot, _short(robot)) for robot in those), class_="blocks small-tiles")
        if word == "settled":
            parts.append(folded(f"All settled: {count(len(those), 'robot')}", blocks))
        else:
            parts += [element("h2", f"{word.capitalize()}: {count(len(those), 'robot')}"), blocks]
    return joined_html(parts)


def _worst(robot: RobotOutlook) -> str:
    if robot.held is not None:
        return "held"
    return next((word for word in _WORDS if any(joint.word == word for joint in robot.joints)), "settled")


def _said(robot: RobotOutlook) -> str | Html:
    """A robot's odds, or why it must not run."""
    if robot.held is not None:
        return joined_html([state("held"), f": {robot.held.why}"])
    return "no odds" if robot.finishes is None else f"finishes {percent(robot.finishes.mean)}{NO_BREAK}%"


def _short(robot: RobotOutlook) -> str:
    """The same in a word."""
    if robot.held is not None:
        return "held"
    return "no odds" if robot.finishes is None else f"{percent(robot.finishes.mean)}{NO_BREAK}%"


def _block(robot: RobotOutlook, said: str | Html) -> Html:
    """One robot: its name, its odds, and its joints by side and limb."""
    name = element("h3", link(robot.code, address("joints", robot=robot.code)))
    head = element("div", name, element("span", said, class_="soft"), class_="head")
    return element("section", head, *_sides(robot), class_="block", aria_label=robot.code)


def _sides(robot: RobotOutlook) -> list[Html]:
    rows = []
    for side in _SIDES:
        limbs: dict[str, list[JointOutlook]] = {}
        for joint in sorted(robot.joints, key=lambda joint: (joint.rank, joint.code)):
            if joint.side == side:
                limbs.setdefault(joint.limb, []).append(joint)
        if limbs:
            drawn = [limb_tiles(limb, [_tile(robot, at) for at in held]) for limb, held in sorted(limbs.items())]
            rows.append(element("div", *drawn, class_="side"))
    return rows


def _tile(robot: RobotOutlook, joint: JointOutlook) -> Tile:
    return Tile(
        label=short_label(joint),
        full_label=f"{robot.code} {joint.label}",
        word=word_of(joint),
        stops=None if joint.held is not None else joint.stops.mean,
        href=address("joints", robot=robot.code, joint=joint.code),
    )


def short_label(joint: JointOutlook) -> str:
    """The joint's name without the words that its side and limb say already."""
    known = {*joint.limb.split(), joint.side}
    return " ".join(word for word in joint.label.split() if word not in known) or joint.label


def _robot(robot: RobotOutlook) -> None:
    """One robot: its block, and its joints in a list."""
    show_linked(link("All robots", "/joints"), key="robot-up")
    title(f"Joints of {robot.code}")
    if robot.finishes is not None:
        lead(f"Finishes {hours(robot.hours)} without a stop: {chance(robot.finishes)}.")
    rows = [_row(robot, joint) for joint in robot.joints]
    held = "" if robot.held is None else caution(f"{robot.code} held", f"{robot.held.why}.", word="held")
    log = element("div", link(f"Log a session of {robot.code}", address("after", robot=robot.code), class_="button"))
    words = "Chance that each joint stops the session, most likely first. In brackets: how well it is known (80 %)."
    listed = table(["Joint", "State", "Stops it", "Part that counts most", "Age"], rows, words, stack=True)
    show_linked(
        held, legend(), element("div", _block(robot, _said(robot)), class_="blocks"), log, listed, ODDS, key="robot"
    )
    draw_said()
    if robot.held is not None and all(joint.held is None for joint in robot.joints):
        draw_lift(robot.held)


def _row(robot: RobotOutlook, joint: JointOutlook) -> list[str | Html]:
    name = link(joint.label, address("joints", robot=robot.code, joint=joint.code))
    stops: str | Html = "no odds" if joint.held is not None else number(joint.stops)
    part = [joint.slots[0].label, ages_text(joint.slots[0])] if joint.slots else ["nothing fitted", ""]
    return [name, state(word_of(joint)), stops, *part]
