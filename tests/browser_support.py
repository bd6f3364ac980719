"""A real server on a free port and a real browser for the tests of the pages."""

from __future__ import annotations

import os
import shutil
import socket
import subprocess
import sys
import time
import urllib.request
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any
from urllib.parse import urlsplit

import pytest

WIDE, PHONE = 1280, 390
REQUIRE = "WEARBOOK_REQUIRE_BROWSER"
_NAMES = ("chromium", "chromium-browser", "google-chrome", "chrome")
_FLAGS = (
    "--headless",
    "--no-sandbox",
    "--disable-gpu",
    "--disable-quic",
    "--no-first-run",
    "--disable-background-networking",
    "--disable-component-update",
    "--disable-sync",
    "--host-resolver-rules=MAP * ~NOTFOUND, EXCLUDE 127.0.0.1, EXCLUDE localhost",
)
# A page opened by its own address asks for these two files beside itself first; Streamlit then finds them at the root.
_KNOWN_404 = ("/_stcore/health", "/_stcore/host-config")


def browser_path() -> str:
    """The browser on this machine; without one the test is skipped, or fails where a browser is required."""
    found = next((path for name in _NAMES if (path := shutil.which(name)) is not None), None)
    if found is None:
        if os.environ.get(REQUIRE) == "1":
            pytest.fail("no chromium found on the path, and this run requires one")
        pytest.skip("no chromium found on the path")
    return found


def free_port() -> int:
    """A port that nobody listens on."""
    with socket.socket() as probe:
        probe.bind(("127.0.0.1", 0))
        return int(probe.getsockname()[1])


@dataclass
class Server:
    """A dashboard that serves one book."""

    address: str
    process: subprocess.Popen[bytes]

    def stop(self) -> None:
        """End the server, as a lost connection would."""
        self.process.terminate()
        self.process.wait(timeout=20)


@contextmanager
def served(book: Path, log: Path) -> Iterator[Server]:
    """Serve this book until the block ends."""
    port = free_port()
    command = f"from dashboard.serve import serve; serve({str(book)!r}, port={port}, open_browser=False)"
    with log.open("wb") as output:
        process = subprocess.Popen([sys.executable, "-c", command], stdout=output, stderr=subprocess.STDOUT)
    server = Server(f"http://127.0.0.1:{port}", process)
    try:
        _wait_until_healthy(server, log)
        yield server
    finally:
        if process.poll() is None:
            server.stop()


def _wait_until_healthy(server: Server, log: Path) -> None:
    deadline = time.monotonic() + 40
    while time.monotonic() < deadline:
        if server.process.poll() is not None:
            break
        try:
            with urllib.request.urlopen(f"{server.address}/_stcore/health", timeout=2) as answer:
                if answer.status == 200:
                    return
        except OSError:
            time.sleep(0.1)
    raise AssertionError(f"the dashboard did not start: {log.read_text(errors='replace')}")


@dataclass
class Watch:
    """What a page asked for and complained about."""

    outside: list[str] = field(default_factory=list)
    complaints: list[str] = field(default_factory=list)

    def follow(self, page: Any) -> None:
        """Note every request that leaves this machine, and every error on the console."""
        page.on("request", lambda request: self._asked(request.url))
        page.on("console", self._said)
        page.on("pageerror", lambda error: self.complaints.append(str(error)))

    def judge(self) -> None:
        """Fail if a request left this machine or the page complained; then begin anew."""
        outside, complaints = list(self.outside), list(self.complaints)
        self.outside.clear()
        self.complaints.clear()
        assert not outside, f"the page asked other machines: {outside}"
        assert not complaints, f"the page complained: {complaints}"

    def _asked(self, url: str) -> None:
        parts = urlsplit(url)
        if parts.scheme in ("http", "https", "ws", "wss") and parts.hostname not in ("127.0.0.1", "localhost"):
            self.outside.append(url)

    def _said(self, message: Any) -> None:
        if message.type != "error":
            return
        at = urlsplit(str(message.location.get("url", ""))).path
        if "404" in message.text and at.endswith(_KNOWN_404) and at not in _KNOWN_404:
            return
        self.complaints.append(f"{message.text} ({at})")


@contextmanager
def browser() -> Iterator[Any]:
    """A headless browser."""
    path = browser_path()
    playwright = pytest.importorskip("playwright.sync_api")
    with playwright.sync_playwright() as running:
        opened = running.chromium.launch(executable_path=path, headless=True, args=list(_FLAGS))
        try:
            yield opened
        finally:
            opened.close()


@contextmanager
def page_of(opened: Any, width: int, ground: str = "light", watch: Watch | None = None) -> Iterator[Any]:
    """A fresh page of this width; at the end it must have stayed on this machine and kept quiet."""
    phone = width < 600
    context = opened.new_context(
        viewport={"width": width, "height": 844 if phone else 900},
        color_scheme=ground,
        has_touch=phone,
        service_workers="block",
    )
    page = context.new_page()
    page.set_default_timeout(15_000)
    watch = watch or Watch()
    watch.follow(page)
    try:
        yield page
    finally:
        context.close()
    watch.judge()


# As links of our own do: one step in the browser's history, which the app follows without a reload.
_VISIT = "to => { history.pushState({}, '', to); window.dispatchEvent(new PopStateEvent('popstate', { state: {} })); }"
# Drawn to its foot, and quiet for a quarter of a second.
_STILL = """() => {
  const now = performance.now(), app = document.querySelector('.stApp');
  const busy = !document.querySelector('.foot') || app?.dataset.testScriptState !== 'notRunning'
    || document.querySelector('[data-stale="true"], [data-testid="stSpinner"]');
  if (busy || window.busyAt === undefined) window.busyAt = now;
  return now - window.busyAt > 250;
}"""


def visit(page: Any, server: Server, path: str) -> None:
    """Open a page of ours and wait until all of it is drawn."""
    if page.url.startswith(server.address):
        page.evaluate(_VISIT, path)
    else:
        page.goto(server.address + path)
    settled(page)


def settled(page: Any) -> None:
    """Wait until the page is drawn to its foot and nothing runs."""
    page.evaluate("delete window.busyAt")
    page.wait_for_function(_STILL)


def screen(page: Any, name: str) -> Path:
    """Keep a picture of the whole page in tests/screens, which is not part of the project."""
    folder = Path(__file__).parent / "screens"
    folder.mkdir(exist_ok=True)
    size = page.viewport_size
    tall = page.evaluate("document.querySelector('.stMainBlockContainer').scrollHeight + 90")
    page.set_viewport_size({"width": size["width"], "height": min(max(int(tall), size["height"]), 4000)})
    path = folder / f"{name}-{size['width']}.png"
    page.screenshot(path=path)
    page.set_viewport_size(size)
    return path
