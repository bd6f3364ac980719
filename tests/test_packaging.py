"""The wheel that people install: every module, migration, table, style and script that the program reads is in it."""

from __future__ import annotations

import importlib.util
import re
import subprocess
import sys
from pathlib import Path
from zipfile import ZipFile

import pytest

ROOT = Path(__file__).resolve().parents[1]
PACKAGES = ("fleet", "dashboard", "demo_data", "shared")
NO_WAY_OUT = ("No matching distribution found", "Could not find a version", "Connection", "Temporary failure")


@pytest.fixture(scope="module")
def wheel(tmp_path_factory: pytest.TempPathFactory) -> ZipFile:
    """The wheel, built as an installer builds it."""
    folder = tmp_path_factory.mktemp("wheel")
    command = [sys.executable, "-m", "pip", "wheel", "--quiet", "--no-deps", "--disable-pip-version-check"]
    if importlib.util.find_spec("hatchling") is not None:
        command.append("--no-build-isolation")
    done = subprocess.run(
        [*command, "--retries", "0", "--timeout", "10", "--wheel-dir", str(folder), str(ROOT)],
        capture_output=True,
        text=True,
        timeout=120,
    )
    if done.returncode and any(sign in done.stderr for sign in NO_WAY_OUT):
        pytest.skip("hatchling is not installed, and there is no network to fetch it from")
    assert done.returncode == 0, done.stderr
    (path,) = folder.glob("*.whl")
    return ZipFile(path)


def names(wheel: ZipFile) -> set[str]:
    return set(wheel.namelist())


@pytest.mark.parametrize(
    "pattern",
    [
        "fleet/store/migrations/versions/*.py",
        "fleet/store/migrations/env.py",
        "demo_data/csv/*.csv",
        "shared/*.csv",
        "dashboard/*.css",
        "dashboard/*.js",
        "dashboard/views/*.py",
    ],
)
def test_what_the_program_reads_is_in_the_wheel(wheel: ZipFile, pattern: str) -> None:
    wanted = {path.relative_to(ROOT).as_posix() for path in ROOT.glob(pattern)}
    assert wanted
    assert wanted <= names(wheel)


def test_every_module_of_the_program_is_in_the_wheel_and_no_test(wheel: ZipFile) -> None:
    modules = {path.relative_to(ROOT).as_posix() for package in PACKAGES for path in (ROOT / package).rglob("*.py")}
    assert modules <= names(wheel)
    assert {name.split("/")[0] for name in names(wheel)} - set(PACKAGES) == {"wearbook-0.1.0.dist-info"}
    assert not [name for name in names(wheel) if name.endswith((".db", ".pyc"))]


def test_the_wheel_brings_the_command_and_the_licence(wheel: ZipFile) -> None:
    assert "wearbook = fleet.cli.main:main" in wheel.read("wearbook-0.1.0.dist-info/entry_points.txt").decode()
    assert "wearbook-0.1.0.dist-info/licenses/LICENSE" in names(wheel)


def test_an_installer_fetches_what_the_program_imports(wheel: ZipFile) -> None:
    metadata = wheel.read("wearbook-0.1.0.dist-info/METADATA").decode()
    needed = set(re.findall(r"^Requires-Dist: ([\w-]+)(?!.*extra ==)", metadata, flags=re.MULTILINE))
    assert {"numpy", "pandas", "scipy", "lifelines", "sqlalchemy", "alembic", "streamlit", "click", "rich"} <= needed
    assert not needed & {"pytest", "hypothesis", "ruff"}
