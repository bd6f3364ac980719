"""The command itself: what its help teaches, how light it is, and how it refuses."""

from __future__ import annotations

import errno
import os
import subprocess
import sys
from importlib.metadata import entry_points
from io import BytesIO, TextIOWrapper
from pathlib import Path

import pytest

import fleet.cli.main
from fleet.cli.main import COMMANDS, main
from tests.cli.conftest import Command

HEAVY = ("numpy", "pandas", "scipy", "lifelines", "streamlit", "sqlalchemy", "alembic", "altair", "rich.table")
LOG_COMMANDS = ("session", "failure", "swap", "spare", "check", "undo", "release")


def loaded_by(*arguments: str) -> set[str]:
    """The modules that a command loads in a process of its own."""
    script = (
        f"import sys\nfrom fleet.cli.main import main\nmain({list(arguments)!r})\nprint(*sys.modules, file=sys.stderr)"
    )
    done = subprocess.run([sys.executable, "-c", script], capture_output=True, text=True, timeout=60, check=True)
    return set(done.stderr.split())


def test_the_installed_command_is_this_one() -> None:
    (entry,) = entry_points(group="console_scripts", name="wearbook")
    assert entry.load() is main


def test_help_teaches_where_to_start_and_what_there_is() -> None:
    done = subprocess.run(
        [sys.executable, "-m", "fleet.cli.main", "--help"], capture_output=True, text=True, timeout=60, check=True
    )
    text = " ".join(done.stdout.split())
    assert "Start with 'wearbook demo'" in text
    assert "--book PATH" in text and "WEARBOOK_BOOK" in text and "./wearbook.db" in text
    assert "no safety check: inspect before every session" in text
    assert "local codes and licensed practice come first" in text
    for name, (_, line) in COMMANDS.items():
        assert name in text and line in text
    assert done.stderr == ""


def test_help_loads_nothing_heavy() -> None:
    loaded = loaded_by("--help")
    assert "click" in loaded
    assert not loaded & set(HEAVY)
    assert not [name for name in loaded if name.startswith(("fleet.fits", "fleet.store", "dashboard"))]


def test_a_table_of_lives_loads_neither_database_nor_pages(tmp_path: Path) -> None:
    table = tmp_path / "table.csv"
    table.write_text("lower,upper\n10,10\n20,20\n30,\n")
    loaded = loaded_by("fit", str(table), "--json")
    assert "numpy" in loaded, "so that the list of heavy modules is seen to find one"
    assert not loaded & {"sqlalchemy", "alembic", "streamlit"}


@pytest.mark.parametrize("path", [(name,) for name in COMMANDS] + [("log", name) for name in LOG_COMMANDS])
def test_every_command_has_its_help(wearbook: Command, path: tuple[str, ...]) -> None:
    answer = wearbook(*path, "--help")
    assert answer.code == 0
    assert answer.out.startswith(f"Usage: wearbook {' '.join(path)}")
    assert answer.err == ""
    assert max(map(len, answer.out.splitlines())) <= 100


def test_the_version_is_told(wearbook: Command) -> None:
    answer = wearbook("--version")
    assert answer.code == 0
    assert answer.out.startswith("wearbook, version ")


def test_without_a_command_the_help_is_shown_as_a_mistake(wearbook: Command) -> None:
    answer = wearbook()
    assert (answer.code, answer.out) == (2, "")
    assert "Start with 'wearbook demo'" in answer.err


@pytest.mark.parametrize("arguments", [("lgo",), ("log", "sesion"), ("odds", "--hour", "3"), ("log",), ("fit",)])
def test_a_misspelt_or_unfinished_command_is_refused_with_the_way_to_its_help(
    wearbook: Command, arguments: tuple[str, ...]
) -> None:
    answer = wearbook(*arguments)
    assert (answer.code, answer.out) == (2, "")
    assert "--help" in answer.err
    assert "?." not in answer.err


def test_a_full_disk_is_one_sentence(wearbook: Command, monkeypatch: pytest.MonkeyPatch) -> None:
    def full(*_: object, **__: object) -> None:
        raise OSError(errno.ENOSPC, os.strerror(errno.ENOSPC))

    monkeypatch.setattr(fleet.cli.main.wearbook, "main", full)
    answer = wearbook("odds")
    assert (answer.code, answer.out) == (2, "")
    assert answer.err == "wearbook: the answer cannot be written: the disk is full.\n"


def test_any_other_trouble_of_the_machine_keeps_its_traceback(monkeypatch: pytest.MonkeyPatch) -> None:
    def broken(*_: object, **__: object) -> None:
        raise OSError(errno.EIO, os.strerror(errno.EIO))

    monkeypatch.setattr(fleet.cli.main.wearbook, "main", broken)
    with pytest.raises(OSError, match=os.strerror(errno.EIO)):
        main([])


def test_a_terminal_that_cannot_show_a_sign_gets_a_question_mark(monkeypatch: pytest.MonkeyPatch, book: Path) -> None:
    raw = BytesIO()
    monkeypatch.setattr(sys, "stdout", TextIOWrapper(raw, encoding="ascii"))
    main(["odds"])
    sys.stdout.flush()
    assert b"?" in raw.getvalue()
