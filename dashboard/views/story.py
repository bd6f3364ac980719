"""The story of one joint: its state, its parts on a line of ages, what happened in its module, and its records."""

from __future__ import annotations

import math
from collections.abc import Sequence

from dashboard.cautions import ODDS
from dashboard.frame import lead, title
from dashboard.links import show_linked
from dashboard.marks import (
    Html,
    address,
    assumption,
    caution,
    element,
    folded,
    joined_html,
    link,
    number,
    state,
    table,
)
from dashboard.stories import AgeDot, Event, age_dots, events_of, unit_of
from dashboard.views.bench import draw_bench
from dashboard.views.why import ages_text, word_of
from fleet.forecasts.next_session import JointOutlook, RobotOutlook, SlotOutlook
from fleet.pipeline import ReadOut
from fleet.records.set_up import PartType
from fleet.report.wording import NO_BREAK, chance, count, figure, hours

_SHOWN = 12
_FATES = {"running": "still running", "failed": "failed at that age", "good": "taken out while good"}


def draw_story(found: ReadOut, robot: RobotOutlook, joint: JointOutlook) -> None:
    """Draw the story of one joint."""
    up = [link("All robots", "/joints"), link(f"Joints of {robot.code}", address("joints", robot=robot.code))]
    show_linked(joined_html(up, " / "), key="story-up")
    title(f"{robot.code} {joint.label}")
    if joint.held is None:
        lead(joined_html([state(word_of(joint)), f". Stops a session of {hours(robot.hours)}: {chance(joint.stops)}."]))
    unit = unit_of(found.history, joint.unit)
    log = link(f"Log a session of {robot.code}", address("after", robot=robot.code), class_="button")
    show_linked(
        _held(robot, joint),
        element("div", log),
        element("h2", f"Parts in module {joint.unit}"),
        _parts(found, joint),
        ODDS,
        element("h2", "Ages"),
        _ages(found, unit, joint.slots),
        element("h2", "What happened"),
        _happened(found, events_of(found, unit)),
        key="story",
    )
    draw_bench(found, robot, joint)


def _held(robot: RobotOutlook, joint: JointOutlook) -> Html:
    if joint.held is not None:
        return caution(f"{joint.label} held", f"{joint.held.why}. No odds while it is held.", word="held")
    if robot.held is not None:
        return caution(f"{robot.code} held", f"{robot.held.why}.", word="held")
    return Html("")


def _parts(found: ReadOut, joint: JointOutlook) -> Html:
    words = "Chance that each stops the session. In brackets: how well the chance itself is known (80 %)."
    rows = [_part_row(found, joint, slot) for slot in joint.slots]
    return table(["Part", "Age", "Stops it", "Behind it"], rows, words, stack=True)


def _part_row(found: ReadOut, joint: JointOutlook, slot: SlotOutlook) -> list[str | Html]:
    many = f"{slot.running} x " if slot.count > 1 else ""
    life = link(f"{many}{slot.label}", address("lives", part=found.history.one(PartType, slot.life.part_type).code))
    stops = "no odds" if joint.held is not None else number(slot.stops)
    seen = f"{count(slot.failures_seen, 'failure')} seen"
    return [life, ages_text(slot), stops, assumption(slot.failures_seen) if slot.mostly_assumption else seen]


def _ages(found: ReadOut, unit: str, slots: Sequence[SlotOutlook]) -> Html:
    """Each slot's parts on one line of running hours, over the band of the age by which one in ten is gone."""
    dots = {slot.slot: age_dots(found, unit, slot.slot) for slot in slots}
    bands = {slot.slot: found.outlooks[slot.life].b10 for slot in slots if slot.life in found.outlooks}
    oldest = max((dot.age for held in dots.values() for dot in held), default=0.0)
    end = max([oldest * 1.05, 1.0, *(band.high for band in bands.values() if band.high < 3 * oldest)])
    step = _nice(end / 4)
    lines = []
    for slot in slots:
        band = bands.get(slot.slot)
        drawn = [] if band is None or band.low > end else [_band(band.low, min(band.high, end), end)]
        drawn += [_dot(dot, end) for dot in dots[slot.slot]] or [element("em", "age not known")]
        lines += [element("div", slot.label), element("div", *drawn, class_="line", role="img", aria_label=slot.label)]
    marks = [step * at for at in range(int(end / step) + 1)]
    ticks = [element("span", f"{figure(at)}{NO_BREAK}h", style=f"left:{100 * at / end:.1f}%") for at in marks]
    scale = [element("div"), element("div", *ticks, class_="scale")]
    keys = [_key("running"), _key("failed"), _key("good")]
    keys.append(element("span", Html('<span class="swatch here"></span>'), "age by which one in ten is gone (80 %)"))
    return joined_html([element("div", *lines, *scale, class_="ages"), element("div", *keys, class_="legend")])


def _nice(step: float) -> float:
    """The next round step: 1, 2, 2.5 or 5 times a power of ten."""
    power = 10.0 ** math.floor(math.log10(step))
    return next(power * nice for nice in (1, 2, 2.5, 5, 10) if power * nice >= step * 0.999)


def _band(low: float, high: float, end: float) -> Html:
    style = f"left:{100 * low / end:.1f}%;width:{100 * (high - low) / end:.1f}%"
    return Html(f'<span class="b10" style="{style}"></span>')


def _dot(dot: AgeDot, end: float) -> Html:
    words = f"{count(dot.count, 'part')} {_FATES[dot.fate]}, {hours(dot.age)}"
    return element("span", class_=f"dot {dot.fate}", style=f"left:{100 * dot.age / end:.1f}%", title=words)


def _key(fate: str) -> Html:
    mark = Html(f'<span class="key" aria-hidden="true"><span class="dot {fate}"></span></span>')
    return element("span", mark, _FATES[fate])


def _happened(found: ReadOut, events: Sequence[Event]) -> Html:
    """The newest first; older ones fold. Checks without a finding are folded too: they say little one by one."""
    telling = [event for event in events if event.what != "checked, good"]
    head = ["When", "What", "Part", "Age", "Record"]
    checks = len(events) - len(telling)
    parts = [
        table(
            head,
            [_event_row(found, event) for event in telling[:_SHOWN]],
            f"Newest first, of {len(telling)}.",
            stack=True,
        )
    ]
    if len(telling) > _SHOWN:
        rows = [_event_row(found, event) for event in telling[_SHOWN:]]
        parts.append(folded(f"{count(len(rows), 'older record')}", table(head, rows, "Older records.", stack=True)))
    if checks:
        rows = [_event_row(found, event) for event in events if event.what == "checked, good"]
        parts.append(
            folded(
                f"{count(checks, 'check')} with nothing found", table(head, rows, "Checks, newest first.", stack=True)
            )
        )
    return joined_html(parts)


def _event_row(found: ReadOut, event: Event) -> list[str | Html]:
    record = element("code", event.record_id, class_="soft small")
    when = f"{event.moment.astimezone(found.history.zone):%Y-%m-%d %H:%M}"
    return [when, event.what, event.part, event.age, record]
