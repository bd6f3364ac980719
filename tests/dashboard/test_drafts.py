"""What was tapped becomes one entry, and what is missing is said in words."""

from __future__ import annotations

from datetime import UTC, date, datetime, time
from typing import Any
from zoneinfo import ZoneInfo

from dashboard.drafts import entry_of, missing, moments_of, read_draft, save_label
from dashboard.offers import JointOffer, LotOffer, ModeOffer, PartOffer

ZONE = ZoneInfo("Europe/Amsterdam")
DISC = PartOffer(
    "slot-disc",
    "disc",
    "cycloid disc",
    1,
    (ModeOffer("m1", "split", "layers split"),),
    (LotOffer("lot1", "L-19", 4, ""),),
)
PINS = PartOffer("slot-pins", "pins", "pin", 13, (ModeOffer("m2", "broke", "pin broke"),), ())
ANKLE = JointOffer("pos1", "LA", "left ankle", (DISC, PINS))
KNEE = JointOffer("pos2", "LK", "left knee", (DISC,))


def _draft(**values: Any) -> Any:
    named = {name.replace("__", "."): value for name, value in {"hours": "2", "impacts": "0", **values}.items()}
    return read_draft(named, (ANKLE, KNEE), ZONE)


def test_a_session_as_planned_needs_no_word_more() -> None:
    draft = _draft()
    assert missing(draft) == []
    assert save_label(draft, ZONE) == "Save 2\u00a0h, 0\u00a0impacts, all parts fine"
    assert entry_of(draft, "robot1").parts == ()


def test_a_failure_asks_for_what_how_and_the_spare_in_turn() -> None:
    assert missing(_draft(joints=["LA"])) == ["left ankle: say what happened"]
    assert missing(_draft(joints=["LA"], LA__what="failed")) == ["left ankle: say how"]
    told = {"joints": ["LA"], "LA__what": "failed", "LA__disc__mode": "split"}
    assert missing(_draft(**told)) == ["left ankle: say which spare cycloid disc was put in"]
    draft = _draft(**told, LA__disc__lot="L-19")
    assert missing(draft) == []
    assert save_label(draft, ZONE) == "Save 2\u00a0h, 0\u00a0impacts, 1\u00a0part"
    (part,) = entry_of(draft, "robot1").parts
    assert (part.position, part.slot, part.mode, part.lot, part.place) == ("pos1", "slot-disc", "m1", "lot1", 1)


def test_a_set_asks_which_of_them_it_was() -> None:
    told = {"joints": ["LA"], "LA__what": "found worn", "LA__pins__mode": "broke", "LA__pins__lot": "none"}
    assert missing(_draft(**told)) == ["left ankle: say which pin of the 13"]
    draft = _draft(**told, LA__pins__place="7")
    assert missing(draft) == []
    (part,) = entry_of(draft, "r").parts
    assert (part.place, part.lot, part.happened) == (7, None, "found worn")


def test_a_good_part_that_was_replaced_has_no_mode() -> None:
    told = {"joints": ["LA"], "LA__what": "replaced while good"}
    assert missing(_draft(**told)) == ["left ankle: say which part"]
    draft = _draft(**told, LA__parts=["disc"], LA__disc__lot="L-19", LA__pins__mode="broke")
    (part,) = entry_of(draft, "r").parts
    assert (part.slot, part.mode) == ("slot-disc", None)


def test_two_parts_of_one_joint_can_fail_together() -> None:
    told = {"joints": ["LA"], "LA__what": "failed", "LA__disc__mode": "split", "LA__disc__lot": "L-19"}
    draft = _draft(**told, LA__pins__mode="broke", LA__pins__place=2, LA__pins__lot="none")
    assert missing(draft) == []
    assert "2\u00a0parts" in save_label(draft, ZONE)


def test_another_joint_must_be_named() -> None:
    assert missing(_draft(joints=["other"])) == ["choose the other joint, or take it off the list"]
    assert missing(_draft(joints=["other"], others=["LK"])) == ["left knee: say what happened"]


def test_zero_impacts_is_a_value_and_other_hours_are_asked_for() -> None:
    draft = _draft(hours="other", hours__other=0.75, impacts="other", impacts__other=9)
    assert (draft.hours, draft.impacts) == (0.75, 9)
    assert missing(_draft(hours="other")) == ["say how many hours it ran"]
    assert entry_of(_draft(), "r").impacts == 0


def test_a_late_entry_keeps_its_own_date_and_says_so_on_the_button() -> None:
    draft = _draft(late=True, day=date(2026, 8, 3), clock=time(18, 0))
    assert entry_of(draft, "r").ended_at == datetime(2026, 8, 3, 16, 0, tzinfo=UTC)
    assert save_label(draft, ZONE).endswith("on Mon 3 Aug")
    assert missing(_draft(late=True, day=None, clock=None)) == ["say when it ended"]


def test_a_clock_time_that_came_twice_is_asked_about_and_one_that_never_came_is_refused() -> None:
    night, never = date(2026, 10, 25), date(2026, 3, 29)
    assert len(moments_of(night, time(2, 30), ZONE)) == 2
    assert moments_of(never, time(2, 30), ZONE) == ()
    twice = {"late": True, "day": night, "clock": time(2, 30)}
    assert missing(_draft(**twice)) == ["say which of the two it was"]
    first, second = (_draft(**twice, which=which) for which in ("first", "second"))
    assert (second.ended[0] - first.ended[0]).total_seconds() == 3600
