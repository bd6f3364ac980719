"""What people log at the bench: every entry changes the book as it says, and can be taken back."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import pytest

from fleet.cli.options import now as real_now
from tests.books import NOW
from tests.cli.conftest import Answer, Command


def hours_of(wearbook: Command, slot: str = "disc", robot: str = "R1") -> dict[tuple[str, int], float]:
    """Age by joint and first place."""
    parts = wearbook("ages", "--robot", robot, "--part", slot, "--json").document["parts"]
    return {(part["joint"], part["places"][0]): part["age"]["hours"] for part in parts}


def robot(wearbook: Command, code: str) -> dict[str, Any]:
    document = wearbook("odds", "--json").document
    return next(robot for robot in document["robots"] if robot["robot"] == code)


def saved(answer: Answer) -> int:
    """The number on the receipt."""
    assert (answer.code, answer.err) == (0, "")
    assert answer.out.startswith("Saved as write ")
    return int(answer.out.split()[3].rstrip("."))


def test_a_session_ages_every_part_of_its_robot_and_no_other(wearbook: Command, book: Path) -> None:
    answer = wearbook("log", "session", "R1", "--hours", "1.5", "--impacts", "3")
    assert answer.out == "Saved as write 3. R1: 1.5 h, 3 impacts, 0 parts.\n"
    for slot in ("disc", "pins", "bearing"):
        assert set(hours_of(wearbook, slot).values()) == {121.5}
    assert set(hours_of(wearbook, robot="R2").values()) == {120.0}
    impacts = wearbook("ages", "--robot", "R1", "--part", "disc", "--json").document["parts"][0]["age"]["impacts"]
    assert impacts == 83


def test_a_late_session_keeps_its_true_date_and_is_marked_late(wearbook: Command, book: Path) -> None:
    answer = wearbook("log", "session", "R1", "--hours", "2", "--ended", "2026-05-20 17:45", "--note", "rain")
    assert saved(answer) == 3
    assert answer.out.endswith("late entry for 2026-05-20 17:45.\n")
    before = wearbook("ages", "--robot", "R1", "--part", "disc", "--as-of", "2026-05-20T15:00", "--json").document
    after = wearbook("ages", "--robot", "R1", "--part", "disc", "--as-of", "2026-05-20T18:00", "--json").document
    assert (before["parts"][0]["age"]["hours"], after["parts"][0]["age"]["hours"]) == (120.0, 122.0)


def test_a_date_alone_is_enough_and_todays_is_not_in_the_future(wearbook: Command, book: Path) -> None:
    past = wearbook("log", "session", "R1", "--hours", "2", "--ended", "2026-05-20")
    assert past.out.endswith("late entry for 2026-05-20 23:59.\n")
    assert saved(wearbook("log", "session", "R1", "--hours", "2", "--ended", "2026-06-01")) == 4
    assert saved(wearbook("log", "failure", "R2", "knee", "disc", "--mode", "split", "--at", "2026-06-01")) == 5


def test_messages_tell_the_time_on_the_books_own_clock(wearbook: Command, book: Path) -> None:
    saved(wearbook("log", "session", "R1", "--hours", "2"))
    again = wearbook("log", "session", "R1", "--hours", "1")
    assert "from 2026-06-01 19:00 to 2026-06-01 20:00 overlaps" in again.err, "18:00 UTC is 20:00 in Amsterdam"


def test_a_failure_without_a_spare_holds_the_robot_until_one_is_put_in(wearbook: Command, book: Path) -> None:
    answer = wearbook("log", "failure", "R1", "hip", "disc", "--mode", "split", "--cause", "print")
    assert saved(answer) == 3
    assert "R1 left hip: disc failed (disc split)." in answer.out
    held = robot(wearbook, "R1")
    assert held["held"] == "disc failed 2026-06-01 and is not replaced yet"
    assert held["finishes"] is None
    answer = wearbook("log", "spare", "R1", "hip", "disc", "--spare", "D-2")
    assert saved(answer) == 4
    assert answer.out.endswith("R1 left hip: disc put in from D-2.\n")
    freed = robot(wearbook, "R1")
    assert freed["held"] is None and freed["finishes"]["mean"] > 0
    assert hours_of(wearbook)["hip", 1] == 0.0


def test_a_failure_with_a_spare_is_replaced_in_one_entry_and_takes_it_off_the_shelf(
    wearbook: Command, book: Path
) -> None:
    def on_hand() -> int:
        parts = wearbook("spares", "--json").document["parts"]
        return next(part["on_hand"] for part in parts if part["part_type"] == "disc")

    before = on_hand()
    saved(wearbook("log", "failure", "R1", "hip", "disc", "--mode", "split", "--spare", "D-2"))
    assert on_hand() == before - 1
    assert robot(wearbook, "R1")["held"] is None


def test_a_failure_of_this_evening_ended_its_session(wearbook: Command, book: Path) -> None:
    saved(wearbook("log", "session", "R1", "--hours", "2", "--ended", "2026-06-01T19:00"))
    saved(wearbook("log", "failure", "R1", "hip", "disc", "--mode", "split", "--spare", "D-2"))
    lives = wearbook("lives", "--part", "disc", "--json").document["lives"]
    old = next(life for life in lives if life["revision"] == "A")
    assert old["failures"] == 1
    assert {mode["mode"]: mode["failures"] for mode in old["modes"]} == {"worn": 0, "split": 1}


def test_one_of_several_like_parts_is_named_by_its_place(wearbook: Command, book: Path) -> None:
    saved(wearbook("log", "swap", "R1", "hip", "pins", "--place", "4", "--spare", "P-1"))
    ages = hours_of(wearbook, "pins")
    assert ages["hip", 4] == 0.0
    assert ages["hip", 1] == 120.0
    parts = wearbook("ages", "--robot", "R1", "--part", "pins", "--json").document["parts"]
    assert sorted(part["count"] for part in parts if part["joint"] == "hip") == [1, 12]


def test_found_worn_is_not_a_stop(wearbook: Command, book: Path) -> None:
    saved(wearbook("log", "failure", "R1", "hip", "disc", "--mode", "worn", "--found-worn", "--spare", "D-2"))
    lives = wearbook("lives", "--part", "disc", "--json").document["lives"]
    assert sum(life["failures"] for life in lives) == 1


def test_a_doubtful_check_holds_the_joint_until_a_person_releases_it(wearbook: Command, book: Path) -> None:
    saved(wearbook("log", "check", "R1", "hip", "--part", "disc", "--doubtful", "--note", "ticks"))
    assert robot(wearbook, "R1")["held"] == "ticks"
    assert next(j for j in robot(wearbook, "R1")["joints"] if j["joint"] == "hip")["word"] == "held"
    saved(wearbook("log", "session", "R2", "--hours", "1"))
    assert robot(wearbook, "R1")["held"] == "ticks", "no other entry releases it"
    saved(wearbook("log", "release", "R1", "--joint", "hip", "--why", "a loose screw"))
    assert robot(wearbook, "R1")["held"] is None


def test_a_good_check_holds_nothing(wearbook: Command, book: Path) -> None:
    answer = wearbook("log", "check", "R1", "hip", "--part", "disc", "--mode", "worn")
    assert saved(answer) == 3
    assert "checked, good" in answer.out
    assert robot(wearbook, "R1")["held"] is None


def test_undo_takes_one_write_back_and_the_book_remembers_both(wearbook: Command, book: Path) -> None:
    untouched = wearbook("ages", "--json").document["parts"]
    number = saved(wearbook("log", "session", "R1", "--hours", "2"))
    assert saved(wearbook("log", "undo", str(number), "--reason", "wrong robot")) == number + 1
    assert wearbook("ages", "--json").document["parts"] == untouched
    known = wearbook("ages", "--robot", "R1", "--part", "disc", "--known-by", str(number), "--json").document
    assert known["parts"][0]["age"]["hours"] == 122.0
    assert wearbook("log", "undo", str(number)).err == f"wearbook: Nothing of write {number} is left to undo.\n"


def test_what_later_entries_build_on_is_undone_last(wearbook: Command, book: Path) -> None:
    fitted = saved(wearbook("log", "swap", "R1", "hip", "disc", "--spare", "D-2", "--at", "2026-05-01T12:00"))
    broken = saved(wearbook("log", "failure", "R1", "hip", "disc", "--mode", "split"))
    answer = wearbook("log", "undo", str(fitted))
    assert answer.code == 2
    assert f"Later entries build on that one: undo write {broken} first" in answer.err
    saved(wearbook("log", "undo", str(broken)))
    saved(wearbook("log", "undo", str(fitted)))


def test_who_entered_it_is_kept(wearbook: Command, book: Path) -> None:
    saved(wearbook("log", "session", "R1", "--hours", "2", "--by", "night shift"))
    refused = wearbook("log", "session", "R2", "--hours", "2", "--by", "x" * 300)
    assert refused.code == 2
    assert "'--by': it is longer than 60 characters" in refused.err


def test_the_clock_of_these_tests_stands_still_and_the_real_one_has_a_zone() -> None:
    assert real_now().utcoffset() is not None
    assert real_now() != NOW


@pytest.mark.parametrize("hours", ["0", "744"])
def test_the_ends_of_what_a_session_may_last_are_accepted(wearbook: Command, book: Path, hours: str) -> None:
    saved(wearbook("log", "session", "R1", "--hours", hours))
