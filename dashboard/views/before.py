"""Before a session: who runs and who must not, robots by their odds of finishing, and what to look at before start."""

from __future__ import annotations

from collections.abc import Sequence

from dashboard import answers
from dashboard.cautions import ODDS
from dashboard.choices import Choices
from dashboard.frame import empty_book, lead, title, worked_out
from dashboard.links import chosen, keep_address, show_linked
from dashboard.marks import (
    Html,
    address,
    assumption,
    caution,
    cautions,
    doubt,
    element,
    folded,
    html,
    joined_html,
    link,
    number,
    state,
    table,
    track,
)
from dashboard.views.why import show_why, word_of
from fleet.forecasts.next_session import Held, JointOutlook, RobotOutlook
from fleet.forecasts.odds import Chance
from fleet.forecasts.planned_use import robots_in_service
from fleet.pipeline import Question, ReadOut
from fleet.report.wording import NO_BREAK, chance, count, hours, joined, percent

_AS_PLANNED = "as planned"
_HOURS = (_AS_PLANNED, "1", "2", "3", "4")
_MANY, _QUIET = 6, 0.97


def draw() -> None:
    """Draw the page."""
    title("Before a session")
    if not robots_in_service(answers.history()):
        empty_book()
        return
    choices = Choices("before")
    said = choices.one("hours", "Hours of each robot's session", _HOURS, _AS_PLANNED, _hours_label, required=True)
    found = answers.read_out(Question(session_hours=None if said in (None, _AS_PLANNED) else float(said)))
    robots = found.next_session.robots
    kept = {"hours": None if said == _AS_PLANNED else said, "why": chosen("why")}
    lead(_sentence(found))
    running = [robot for robot in robots if robot.finishes is not None]
    unplanned = cautions([caution("No plan", sentence) for sentence in found.cautions])
    show_linked(unplanned, _held(robots), _odds(running, kept["hours"]), _look_at(running), key="before")
    worked_out(found.history)
    why = next((robot for robot in robots if robot.code == kept["why"]), None)
    if why is not None:
        show_why(found, why, {"hours": kept["hours"] or ""})
    keep_address("before", kept)


def _hours_label(option: str) -> str:
    return option if option == _AS_PLANNED else f"{option}{NO_BREAK}h"


def _sentence(found: ReadOut) -> Html:
    """Who runs, for how long, and the chance that all of them finish."""
    robots = found.next_session.robots
    running = [robot for robot in robots if robot.finishes is not None]
    lengths = sorted({robot.hours for robot in running})
    each = f"{hours(lengths[0])} each" if len(lengths) == 1 else "each as planned"
    said = [f"{count(len(running), 'robot')} can run, {each}" if running else "No robot can run"]
    held = sum(robot.held is not None for robot in robots)
    unknown = len(robots) - len(running) - held
    said += [f"{held} must not"] if held else []
    said += [f"of {unknown} nothing is known"] if unknown else []
    fleet = found.next_session.fleet
    all_of_them = "" if fleet is None else f" All of them finish: {chance(fleet)}."
    return html(f"{'; '.join(said)}.{all_of_them}")


def _held(robots: Sequence[RobotOutlook]) -> Html:
    """Robots that must not run, and those of whose parts nobody has recorded anything."""
    held = [_held_block(robot, robot.held) for robot in robots if robot.held is not None]
    unknown = [
        caution(f"{robot.code} not known", "no part of it is recorded as fitted, so there are no odds.")
        for robot in robots
        if robot.held is None and robot.finishes is None
    ]
    head = element("h2", "Held: do not run") if held else ""
    return joined_html([head, cautions(held), cautions(unknown)])


def _held_block(robot: RobotOutlook, held: Held) -> Html:
    joint = next((joint for joint in robot.joints if joint.held is not None), None)
    where = "" if joint is None else f"{joint.label}: "
    target = address("joints", robot=robot.code, joint=None if joint is None else joint.code)
    return caution(f"{robot.code} held", f"{where}{held.why}.", link(f"Open {robot.code}", target), word="held")


def _odds(robots: Sequence[RobotOutlook], hours_said: str | None) -> Html:
    """The table of robots, lowest odds first; when there are many, those that hardly ever stop fold away."""
    if not robots:
        return Html("")
    quiet = [r for r in robots if r.finishes is not None and r.finishes.mean >= _QUIET and len(robots) > _MANY]
    rest = [robot for robot in robots if robot not in quiet]
    words = (
        "Chance that a robot ends its session without a stop. In brackets: how well the chance itself is known (80 %)."
    )
    parts = [element("h2", "Odds that each robot finishes"), ODDS]
    if rest:
        parts.append(_table(rest, hours_said, f"{words} Lowest first."))
    if quiet:
        names = joined([robot.code for robot in quiet])
        inside = _table(quiet, hours_said, "The same figures for these robots.")
        parts.append(folded(f"{count(len(quiet), 'robot')} at {round(_QUIET * 100)} % or more: {names}", inside))
    return joined_html(parts)


def _table(robots: Sequence[RobotOutlook], hours_said: str | None, caption: str) -> Html:
    wide = element("span", f"0{NO_BREAK}%, half, 100{NO_BREAK}%", class_="wide-only")
    return table(
        ["Robot", "Finishes", wide, "Most likely to stop it"],
        [_row(robot, hours_said) for robot in robots],
        caption,
    )


def _row(robot: RobotOutlook, hours_said: str | None) -> list[str | Html]:
    assert robot.finishes is not None
    drawn = track(robot.finishes, robot.mostly_assumption)
    name = element("span", robot.label, class_="soft small wide-only") if robot.label != robot.code else ""
    first = joined_html([link(robot.code, address("after", robot=robot.code)), " ", name])
    why = link(number(robot.finishes), address("before", hours=hours_said, why=robot.code))
    under = element("div", drawn, class_="phone-only")
    said = element("div", _doubt(robot)) if robot.mostly_assumption or robot.ages_assumed else ""
    top = robot.joints[0] if robot.joints else None
    return [
        first,
        joined_html([why, under, said]),
        element("span", drawn, class_="wide-only"),
        "" if top is None else _joint(robot, top),
    ]


def _doubt(robot: RobotOutlook) -> Html:
    """Why these odds are less sure than they look: ages that nobody knows, or few failures."""
    if not robot.ages_assumed:
        return assumption(robot.failures_seen)
    return doubt(f"age unknown for {robot.ages_assumed:,} of {count(robot.parts, 'part')}", robot.mostly_assumption)


def _joint(robot: RobotOutlook, joint: JointOutlook) -> Html:
    target = address("joints", robot=robot.code, joint=joint.code)
    stops = element("span", f" {_stops(joint.stops)}", class_="soft small nowrap")
    return joined_html([link(joint.label, target), " ", element("span", state(word_of(joint)), stops, class_="nowrap")])


def _stops(value: Chance) -> str:
    return f"{percent(value.mean)}{NO_BREAK}%"


def _look_at(robots: Sequence[RobotOutlook]) -> Html:
    """The joints that are wearing or due, in running order: what hands and eyes should go to first."""
    head = element("h2", "Look at before start")
    lines = [
        element(
            "li",
            element("strong", link(robot.code, address("joints", robot=robot.code)), " "),
            _joint(robot, joint),
            _oldest(joint),
        )
        for robot in robots
        for joint in robot.joints
        if joint.word != "settled"
    ]
    if not robots:
        return Html("")
    if not lines:
        words = "No joint is wearing or due for these hours. Turn every joint by hand all the same, and listen."
        return joined_html([head, element("p", words)])
    words = "Turn these by hand, feel for play and listen; then the others."
    first = element("ul", *lines[:_MANY], class_="short")
    if len(lines) <= _MANY:
        return joined_html([head, element("p", words), first])
    rest = folded(f"{len(lines) - _MANY} more", element("ul", *lines[_MANY:], class_="short"))
    return joined_html([head, element("p", words), first, rest])


def _oldest(joint: JointOutlook) -> Html:
    """The part of a joint that is most likely to stop it, with its age."""
    if not joint.slots:
        return Html("")
    slot = joint.slots[0]
    oldest = max((age.get("hours", 0.0) for age in slot.ages), default=0.0)
    about = " (age assumed)" if slot.age_assumed else ""
    return element("div", f"{slot.label}, {hours(round(oldest, 1))} old{about}", class_="soft small")
