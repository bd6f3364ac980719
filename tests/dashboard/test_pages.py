"""The pages in a real browser: what is logged counts, nothing is written twice, and nothing leaves this machine."""

from __future__ import annotations

import re
from contextlib import closing
from datetime import UTC, datetime, timedelta
from pathlib import Path
from typing import Any
from urllib.parse import parse_qs, urlsplit

import pytest

from fleet.lives.ages import ages_of
from fleet.records.history import History
from fleet.records.ledger import Fitment, Session
from fleet.store.book import open_book
from fleet.store.entries import PartEntry, log_part
from fleet.store.reading import read_history
from tests.browser_support import PHONE, WIDE, Server, Watch, page_of, screen, settled, visit
from tests.dashboard.conftest import NASTY

pytestmark = pytest.mark.browser
expect = pytest.importorskip("playwright.sync_api").expect

PLACES = {
    "before": "/before",
    "which-robot": "/after",
    "after": "/after?robot=R1&joints=hip&hip.what=failed",
    "joints": "/joints",
    "robot": "/joints?robot=R1",
    "joint": "/joints?robot=R1&joint=hip",
    "lives": "/lives",
    "life": "/lives?part=disc",
    "spares": "/spares",
    "plates": "/plates",
    "score": "/score",
}

# Looked through for faults on a phone, too: a table there becomes cards, a form fills the screen.
WIDTH_MATTERS = ("before", "after", "joint")


def history_of_book(path: Path) -> History:
    book = open_book(path)
    try:
        return read_history(book, datetime.now(UTC) + timedelta(minutes=1))
    finally:
        book.close()


def writes(path: Path) -> int:
    return history_of_book(path).write_number


def hours_of_parts(path: Path, robot: str) -> dict[tuple[str, int], float]:
    """Running hours of every part that is fitted in a robot's modules now."""
    units = {"R1": ("U1", "U2"), "R2": ("U3",)}[robot]
    return {
        (span.fitment.record_id, place): span.age["hours"]
        for span in ages_of(history_of_book(path)).spans
        if span.running and span.fitment.unit in units
        for place in span.places
    }


@pytest.mark.parametrize("width", [WIDE, PHONE])
def test_every_page_fits_its_width_carries_the_caution_and_has_no_grave_fault(
    server: Server, chromium: Any, width: int
) -> None:
    axe_runner = pytest.importorskip("axe_playwright_python.sync_playwright").Axe()
    with page_of(chromium, width) as page:
        for name, path in PLACES.items():
            visit(page, server, path)
            assert "life-critical" in page.locator(".foot").inner_text(), name
            assert page.evaluate("document.documentElement.scrollWidth <= innerWidth"), f"{name} is wider than {width}"
            screen(page, name)
            if width == WIDE or name in WIDTH_MATTERS:
                found = axe_runner.run(page).response["violations"]
                grave = [fault["id"] for fault in found if fault["impact"] in ("serious", "critical")]
                assert not grave, f"{name} at {width}: {grave}"


def test_a_dark_browser_gets_the_dark_ground(server: Server, chromium: Any) -> None:
    with page_of(chromium, PHONE, ground="dark") as page:
        visit(page, server, "/joints")
        grounds = page.evaluate(
            "[getComputedStyle(document.documentElement).getPropertyValue('--ground').trim(),"
            " getComputedStyle(document.querySelector('.stApp')).backgroundColor]"
        )
        assert grounds == ["#14181B", "rgb(20, 24, 27)"]
        screen(page, "joints-dark")


def test_the_bare_address_leads_to_the_first_page(server: Server, wide: Any) -> None:
    wide.goto(server.address)
    wide.wait_for_url("**/before")
    settled(wide)
    expect(wide.get_by_role("heading", level=1)).to_have_text("Before a session")


def test_a_session_is_logged_in_four_taps_and_every_fitted_part_gains_its_hours(
    server: Server, phone: Any, bench_book: Path
) -> None:
    before = hours_of_parts(bench_book, "R2")
    visit(phone, server, "/before")
    phone.get_by_role("link", name="R2", exact=True).click()
    phone.get_by_role("radio", name="1.5").click()
    phone.get_by_role("button", name=re.compile("Save 1.5")).click()
    phone.get_by_text(re.compile("^Saved ")).wait_for()
    phone.get_by_text("1.5 h, 1 impact, finished, all parts fine.").wait_for()
    screen(phone, "receipt")
    after = hours_of_parts(bench_book, "R2")
    assert {part: round(after[part] - age, 6) for part, age in before.items()} == dict.fromkeys(before, 1.5)


def test_an_entry_of_yesterday_keeps_its_date_and_is_marked_late(server: Server, phone: Any, bench_book: Path) -> None:
    yesterday = (datetime.now(UTC) - timedelta(days=1)).date()
    visit(phone, server, f"/after?robot=R2&hours=1&late=yes&day={yesterday}&clock=12:00:00")
    phone.get_by_role("button", name=re.compile(r"Save 1 h, .* on ")).click()
    phone.get_by_text(re.compile("^Late entry: it ended ")).wait_for()
    newest = max(history_of_book(bench_book).of(Session).values(), key=lambda entry: entry.stamp.write_number)  # type: ignore[union-attr]
    assert newest.ended_at.date() == yesterday
    assert newest.stamp is not None
    assert newest.stamp.entered_at.date() > yesterday


def test_a_failure_with_its_spare_changes_the_spares_answer(server: Server, phone: Any, bench_book: Path) -> None:
    visit(phone, server, "/spares?part=disc")
    assert "D-2 6" in phone.locator(".stMain").inner_text()
    before = phone.locator(".stMain").inner_text()
    visit(phone, server, "/after?robot=R1")
    phone.get_by_role("button", name="left hip").click()
    phone.get_by_role("radio", name="failed").click()
    phone.get_by_role("radio", name="disc split").click()
    phone.get_by_role("button", name=re.compile("Save 2 h, 1 impact, 1 part")).click()
    phone.get_by_text(re.compile("^Saved ")).wait_for()
    settled(phone)
    receipt = phone.locator(".stMain").inner_text()
    assert "left hip, disc: stopped, disc split; spare from D-2 fitted." in receipt
    assert "After reassembly" in receipt
    visit(phone, server, "/spares?part=disc")
    after = phone.locator(".stMain").inner_text()
    assert "D-2 5" in after
    assert after != before
    fitted = [entry for entry in history_of_book(bench_book).of(Fitment).values() if entry.lot == "D-2"]
    assert max(fitted, key=lambda entry: entry.happened_at).unit == "U1"


def test_a_double_press_writes_once_a_reload_shows_the_receipt_and_undo_takes_it_back(
    server: Server, phone: Any, bench_book: Path
) -> None:
    ages, first = hours_of_parts(bench_book, "R2"), writes(bench_book)
    then = (datetime.now(UTC) - timedelta(days=5)).date()
    visit(phone, server, f"/after?robot=R2&hours=3&late=yes&day={then}&clock=12:00:00")
    save = phone.get_by_role("button", name=re.compile("Save 3"))
    place = save.bounding_box()
    save.dblclick()
    phone.get_by_text(re.compile("^Saved ")).wait_for()
    settled(phone)
    assert writes(bench_book) == first + 1
    phone.wait_for_url(re.compile("saved="))
    phone.reload()
    settled(phone)
    phone.get_by_text("3 h, 1 impact, finished").wait_for()
    undo = phone.get_by_role("button", name="Undo this entry")
    assert undo.bounding_box()["y"] + undo.bounding_box()["height"] < place["y"]
    undo.click()
    phone.get_by_role("heading", name="Taken back").wait_for()
    assert hours_of_parts(bench_book, "R2") == ages


def test_what_was_tapped_comes_back_from_the_address(server: Server, phone: Any) -> None:
    visit(phone, server, "/after?robot=R1")
    phone.get_by_role("radio", name="1.5").click()
    phone.get_by_role("button", name="left knee").click()
    phone.get_by_role("radio", name="found worn").click()
    phone.get_by_role("radio", name="pin snapped").click()
    phone.get_by_role("radio", name="7", exact=True).click()
    phone.wait_for_url(re.compile("place=7"))
    said = parse_qs(urlsplit(phone.url).query)
    phone.reload()
    settled(phone)
    expect(phone.get_by_role("button", name=re.compile("Save 1.5 h, 1 impact, 1 part"))).to_be_enabled()
    assert parse_qs(urlsplit(phone.url).query) == said


def test_save_is_closed_with_the_reason_above_it_while_something_is_missing(server: Server, phone: Any) -> None:
    visit(phone, server, "/after?robot=R1&joints=knee")
    phone.get_by_text("Not yet: left knee: say what happened.").wait_for()
    expect(phone.get_by_role("button", name=re.compile("^Save"))).to_be_disabled()
    phone.get_by_text("Before you open a joint").wait_for()


def test_names_that_hold_markup_are_shown_as_they_were_typed(server: Server, wide: Any) -> None:
    visit(wide, server, "/after?robot=R1&joints=hip&hip.what=failed")
    wide.get_by_role("radio", name=NASTY).wait_for()
    for path in ("/after", "/joints?robot=R1&joint=hip", "/lives", "/spares"):
        visit(wide, server, path)
        assert NASTY in wide.locator(".stMain").text_content(), path
        expect(wide.locator(".stMain img")).to_have_count(0)


def test_a_number_opens_what_it_is_made_of_and_closes_again(server: Server, wide: Any) -> None:
    visit(wide, server, "/before?hours=3")
    wide.locator("a:has(.number)").first.click()
    drawer = wide.get_by_role("dialog")
    drawer.get_by_text("still running").wait_for()
    wide.keyboard.press("Escape")
    drawer.wait_for(state="hidden")
    wide.wait_for_url(re.compile(r"/before\?hours=3$"))
    assert wide.get_by_role("radio", name="3 h").get_attribute("aria-checked") == "true"


def test_arrows_move_between_tiles_enter_opens_and_back_comes_back(server: Server, wide: Any) -> None:
    visit(wide, server, "/joints")
    tiles = wide.locator("a.tile")
    assert tiles.evaluate_all("all => all.filter(one => one.tabIndex === 0).length") == 1
    tiles.first.focus()
    wide.keyboard.press("ArrowRight")
    target = wide.evaluate("document.activeElement.getAttribute('href')")
    wide.keyboard.press("Enter")
    wide.wait_for_url(f"**{target}")
    wide.get_by_role("heading", name=re.compile("^Parts in module")).wait_for()
    wide.go_back()
    wide.wait_for_url(re.compile("/joints$"))
    tiles.first.wait_for()


def test_a_robot_that_is_not_there_gets_one_sentence(server: Server, wide: Any) -> None:
    visit(wide, server, "/after?robot=R7")
    wide.get_by_text("There is no robot 'R7'").wait_for()
    wide.get_by_text("Which robot ran?").wait_for()
    assert "Traceback" not in wide.content()


def test_a_doubtful_check_holds_the_joint_until_a_person_lifts_it(server: Server, wide: Any) -> None:
    visit(wide, server, "/joints?robot=R2&joint=knee")
    wide.get_by_role("radio", name="doubtful").click()
    wide.get_by_label("What was seen").fill("clicks at full bend")
    wide.get_by_role("button", name="Save check: doubtful, and hold this joint").click()
    wide.get_by_text("left knee held").wait_for()
    wide.get_by_label("Why the hold can be lifted").fill("screw was loose, tightened")
    wide.get_by_label("Why the hold can be lifted").press("Enter")
    wide.get_by_role("button", name="Lift the hold").click()
    wide.get_by_text("The hold is lifted").wait_for()
    settled(wide)
    expect(wide.get_by_text("left knee held")).to_have_count(0)


def test_a_spare_put_in_frees_a_joint_whose_part_had_failed(server: Server, wide: Any, bench_book: Path) -> None:
    now = datetime.now(UTC)
    failed = PartEntry("R1-knee", "slot-bearing", "failed", mode="bearing: rough")
    with closing(open_book(bench_book)) as book:
        log_part(book, failed, now, now, "bench")
    visit(wide, server, "/joints?robot=R1&joint=knee")
    wide.get_by_text("left knee held").wait_for()
    wide.get_by_role("radio", name="B-1").click()
    wide.get_by_role("button", name="Save: spare from B-1 put in").click()
    wide.get_by_text("put in from B-1").wait_for()
    settled(wide)
    expect(wide.get_by_text("left knee held")).to_have_count(0)


def test_a_page_that_asks_another_machine_or_complains_is_caught(server: Server, chromium: Any) -> None:
    watch = Watch()
    with (
        pytest.raises(AssertionError, match=re.escape("asked other machines: ['http://outside.example/x']")),
        page_of(chromium, WIDE, watch=watch) as page,
    ):
        visit(page, server, "/score")
        page.evaluate("fetch('http://outside.example/x').catch(() => 0)")
    with pytest.raises(AssertionError, match="complained"):
        watch.complaints.append("an error on the console")
        watch.judge()
