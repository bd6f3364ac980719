"""Without a browser the tests of the pages are skipped, unless this run requires one."""

from __future__ import annotations

import shutil

import pytest

from tests.browser_support import REQUIRE, browser_path


def test_without_a_browser_the_tests_are_skipped(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(shutil, "which", lambda name: None)
    monkeypatch.delenv(REQUIRE, raising=False)
    with pytest.raises(pytest.skip.Exception, match="no chromium"):
        browser_path()


def test_without_a_browser_a_run_that_requires_one_fails(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(shutil, "which", lambda name: None)
    monkeypatch.setenv(REQUIRE, "1")
    with pytest.raises(pytest.fail.Exception, match="requires one"):
        browser_path()
