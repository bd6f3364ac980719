"""Which room may import which, who may touch files, clocks, SQL and pages: checked over the tree, and seen to fail."""

from __future__ import annotations

import ast
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from functools import cached_property
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[1]
TOPS = ("fleet", "dashboard", "demo_data")

STAGES = ("usage", "lives", "fits", "forecasts", "plans")
ROOMS = ("errors", "records", "store", *STAGES, "pipeline", "report", "cli")
# Room -> rooms it may import besides itself, records and errors.
MAY_IMPORT: Mapping[str, tuple[str, ...]] = {
    "errors": (),
    "records": (),
    "store": (),
    "usage": (),
    "lives": (),
    "fits": ("lives",),
    "forecasts": ("fits", "lives"),
    "plans": ("forecasts", "fits", "lives"),
    "pipeline": STAGES,
    "report": ("pipeline", *STAGES),
    "cli": (*ROOMS, "demo_data"),
    "demo_data": (),
    "dashboard": tuple(room for room in ROOMS if room != "cli"),
}
EVERYONES = ("records", "errors")
NOT_EVERYONES = {"errors": (), "records": ("errors",), "demo_data": ()}
LAZILY = {("cli", "dashboard.serve")}

EDGES = ("store", "cli", "demo_data", "dashboard")
LIBRARIES = {"sqlite3": "store", "sqlalchemy": "store", "alembic": "store", "streamlit": "dashboard"}
LOADERS = {"import_module", "__import__"}
FILE_CALLS = {"open", "read_text", "read_bytes", "write_text", "write_bytes", "read_csv", "read_parquet", "to_csv"}
NOW_CALLS = {"now", "utcnow", "today"}
TIME_CALLS = {"time", "time_ns", "localtime", "gmtime"}


@dataclass(frozen=True, eq=False)
class Module:
    """One file, where it belongs, and what it says."""

    path: Path
    root: Path
    tree: ast.Module

    @cached_property
    def nodes(self) -> tuple[ast.AST, ...]:
        return tuple(ast.walk(self.tree))

    @cached_property
    def parts(self) -> tuple[str, ...]:
        return self.path.relative_to(self.root).with_suffix("").parts

    @cached_property
    def room(self) -> str:
        return room_of(self.parts)

    @property
    def in_migrations(self) -> bool:
        return self.parts[:3] == ("fleet", "store", "migrations")

    def at(self, node: ast.AST) -> str:
        line = getattr(node, "lineno", 1)
        return f"{self.path.relative_to(self.root).as_posix()} line {line}"


def room_of(parts: tuple[str, ...]) -> str:
    """The room of a dotted name; a whole package outside fleet is one room."""
    return parts[1] if parts[0] == "fleet" and len(parts) > 1 else parts[0]


def violations(root: Path) -> list[str]:
    """Every breach of the house rules in a tree, each with its file and line."""
    modules = [
        Module(path, root, ast.parse(path.read_text(encoding="utf-8")))
        for top in TOPS
        for path in sorted((root / top).rglob("*.py"))
    ]
    found = [breach for module in modules for rule in RULES for breach in rule(module)]
    return found + list(_second_readers(modules))


def _imports_of_ours(module: Module) -> Iterator[tuple[ast.ImportFrom, str]]:
    for node in module.nodes:
        if isinstance(node, ast.ImportFrom) and node.level == 0 and (node.module or "").split(".")[0] in TOPS:
            yield node, node.module or ""


def _imported_names(module: Module) -> Iterator[tuple[ast.AST, str]]:
    for node in module.nodes:
        if isinstance(node, ast.Import):
            yield from ((node, alias.name) for alias in node.names)
        elif isinstance(node, ast.ImportFrom) and node.module is not None and node.level == 0:
            yield node, node.module


def only_where_the_table_allows(module: Module) -> Iterator[str]:
    allowed = {module.room, *MAY_IMPORT.get(module.room, ()), *NOT_EVERYONES.get(module.room, EVERYONES)}
    inside_functions = {
        inner
        for outer in module.nodes
        if isinstance(outer, ast.FunctionDef | ast.AsyncFunctionDef)
        for inner in ast.walk(outer)
    }
    for node, name in _imports_of_ours(module):
        lazy = (module.room, name) in LAZILY
        if lazy and node not in inside_functions:
            yield f"{module.at(node)}: {module.room} may import {name} only inside a function"
        elif not lazy and room_of(tuple(name.split("."))) not in allowed:
            yield f"{module.at(node)}: {module.room} may not import {name}"
        if module.in_migrations:
            yield f"{module.at(node)}: a migration imports nothing of ours"


def every_room_is_in_the_table(module: Module) -> Iterator[str]:
    if module.room not in MAY_IMPORT and module.parts != ("fleet", "__init__"):
        yield f"{module.at(module.tree)}: {module.room} is not in the import table"


def one_import_form(module: Module) -> Iterator[str]:
    for node in module.nodes:
        if isinstance(node, ast.ImportFrom) and node.level > 0:
            yield f"{module.at(node)}: a relative import"
        if isinstance(node, ast.Import):
            for alias in node.names:
                if alias.name.split(".")[0] in TOPS:
                    yield f"{module.at(node)}: write from {alias.name} import ..., not import {alias.name}"
        # The command line loads the module of a command when it runs.
        if module.room != "cli" and isinstance(node, ast.Call) and _name_called(node) in LOADERS:
            yield f"{module.at(node)}: an import that no reader can follow"
    for node, name in _imports_of_ours(module):
        if name.startswith("fleet") and not (module.root / (name.replace(".", "/") + ".py")).is_file():
            yield f"{module.at(node)}: {name} is no module; import a name from the module that holds it"


def init_holds_a_docstring_only(module: Module) -> Iterator[str]:
    if module.path.name != "__init__.py":
        return
    body = module.tree.body
    if len(body) != 1 or ast.get_docstring(module.tree) is None:
        yield f"{module.at(module.tree)}: holds more, or less, than a docstring"


def packages_are_one_level_deep(module: Module) -> Iterator[str]:
    if len(module.parts) > 3 and not module.in_migrations:
        yield f"{module.at(module.tree)}: lies more than one level deep"


def libraries_stay_in_their_room(module: Module) -> Iterator[str]:
    for node, name in _imported_names(module):
        home = LIBRARIES.get(name.split(".")[0])
        if home is not None and module.room != home:
            yield f"{module.at(node)}: only {home} may import {name}"


def only_edges_read_the_clock(module: Module) -> Iterator[str]:
    if module.room in EDGES:
        return
    for node in module.nodes:
        if isinstance(node, ast.ImportFrom) and node.module == "time":
            yield f"{module.at(node)}: {module.room} may not import from time"
        if not isinstance(node, ast.Call) or not isinstance(node.func, ast.Attribute):
            continue
        of_time = isinstance(node.func.value, ast.Name) and node.func.value.id == "time"
        if node.func.attr in NOW_CALLS or (of_time and node.func.attr in TIME_CALLS):
            yield f"{module.at(node)}: {module.room} may not ask for the time"


def only_edges_touch_files(module: Module) -> Iterator[str]:
    if module.room in (*EDGES, "usage"):
        return
    for node in _file_calls(module):
        yield f"{module.at(node)}: {module.room} may not touch files"


def _second_readers(modules: list[Module]) -> Iterator[str]:
    """Only one module of usage reads raw log files."""
    readers = {module.path: node for module in modules if module.room == "usage" for node in _file_calls(module)}
    for module in modules:
        if module.path in sorted(readers)[1:]:
            yield f"{module.at(readers[module.path])}: usage reads files through one module only"


def _file_calls(module: Module) -> Iterator[ast.Call]:
    for node in module.nodes:
        if isinstance(node, ast.Call) and _name_called(node) in FILE_CALLS:
            yield node


def _name_called(call: ast.Call) -> str:
    if isinstance(call.func, ast.Attribute):
        return call.func.attr
    return call.func.id if isinstance(call.func, ast.Name) else ""


RULES = (
    every_room_is_in_the_table,
    only_where_the_table_allows,
    one_import_form,
    init_holds_a_docstring_only,
    packages_are_one_level_deep,
    libraries_stay_in_their_room,
    only_edges_read_the_clock,
    only_edges_touch_files,
)


def test_the_house_keeps_its_rules() -> None:
    assert violations(ROOT) == []


def test_the_check_sees_the_whole_house() -> None:
    rooms = {module_room(path) for top in TOPS for path in (ROOT / top).rglob("*.py")}
    assert {"records", "store", "lives", "fits", "demo_data"} <= rooms


def module_room(path: Path) -> str:
    return room_of(path.relative_to(ROOT).with_suffix("").parts)


# Planted trees: each rule is seen to fail

SOUND = {
    "fleet/__init__.py": '"""Sound."""',
    "fleet/errors.py": "class FleetError(Exception): ...",
    "fleet/records/__init__.py": '"""Sound."""',
    "fleet/records/history.py": "from fleet.errors import FleetError\nfrom fleet.records.history import History",
    "fleet/store/book.py": "import sqlite3\nfrom sqlalchemy import select\nopen('x')",
    "fleet/store/writing.py": "from datetime import datetime\nNOW = datetime.now()",
    "fleet/store/migrations/versions/0001_first.py": "from alembic import op",
    "fleet/usage/log_reader.py": "LOG = open('log')",
    "fleet/lives/ages.py": "from fleet.records.history import History",
    "fleet/fits/weibull.py": "from fleet.lives.ages import ages_of",
    "fleet/forecasts/odds.py": "from fleet.fits.weibull import fit\nfrom fleet.lives.ages import ages_of",
    "fleet/plans/tonight.py": "from fleet.forecasts.odds import odds",
    "fleet/pipeline.py": "from fleet.plans.tonight import tonight\nfrom fleet.usage.log_reader import LOG",
    "fleet/report/tables.py": "from fleet.pipeline import read_out",
    "fleet/cli/main.py": "from fleet.store.book import NOW\ndef show():\n    from dashboard.serve import serve",
    "dashboard/serve.py": "import streamlit as st\nfrom fleet.store.book import NOW",
    "demo_data/files.py": "from pathlib import Path\nPath('x').open('w')",
}
PLANTED = {
    "records import a stage": ("fleet/records/odd.py", "from fleet.lives.ages import a", "records may not import"),
    "records import the store": ("fleet/records/odd.py", "from fleet.store.book import a", "records may not import"),
    "the store imports a stage": ("fleet/store/odd.py", "from fleet.lives.ages import a", "store may not import"),
    "usage imports lives": ("fleet/usage/odd.py", "from fleet.lives.ages import a", "usage may not import"),
    "lives import fits": ("fleet/lives/odd.py", "from fleet.fits.weibull import a", "lives may not import"),
    "fits import forecasts": ("fleet/fits/odd.py", "from fleet.forecasts.odds import a", "fits may not import"),
    "forecasts import plans": (
        "fleet/forecasts/odd.py",
        "from fleet.plans.tonight import a",
        "forecasts may not import",
    ),
    "plans import usage": ("fleet/plans/odd.py", "from fleet.usage.log_reader import a", "plans may not import"),
    "a stage imports the store": ("fleet/plans/odd.py", "from fleet.store.book import a", "plans may not import"),
    "the pipeline imports the store": (
        "fleet/pipeline.py",
        "from fleet.store.book import a",
        "pipeline may not import",
    ),
    "the report imports the store": ("fleet/report/odd.py", "from fleet.store.book import a", "report may not import"),
    "the report imports the cli": ("fleet/report/odd.py", "from fleet.cli.main import a", "report may not import"),
    "fleet imports the dashboard": ("fleet/fits/odd.py", "from dashboard.serve import a", "fits may not import"),
    "hidden for type checking": (
        "fleet/lives/odd.py",
        "from typing import TYPE_CHECKING\nif TYPE_CHECKING:\n    from fleet.fits.weibull import a",
        "lives may not import",
    ),
    "hidden in a function": ("fleet/lives/odd.py", "def f():\n    from fleet.fits.weibull import a", "may not import"),
    "the cli imports the dashboard early": ("fleet/cli/odd.py", "from dashboard.serve import a", "inside a function"),
    "the cli imports another page": ("fleet/cli/odd.py", "def f():\n    from dashboard.app import a", "may not import"),
    "the dashboard imports the cli": ("dashboard/odd.py", "from fleet.cli.main import a", "dashboard may not import"),
    "the demo knows the program": ("demo_data/odd.py", "from fleet.lives.ages import a", "demo_data may not import"),
    "a migration imports our types": (
        "fleet/store/migrations/versions/0002_odd.py",
        "from fleet.records.history import a",
        "a migration imports nothing",
    ),
    "a room nobody planned": ("fleet/helpers/odd.py", "A = 1", "helpers is not in the import table"),
    "a relative import": ("fleet/fits/odd.py", "from .weibull import fit", "a relative import"),
    "a plain import": ("fleet/fits/odd.py", "import fleet.lives.ages", "not import fleet.lives.ages"),
    "a module from its package": ("fleet/fits/odd.py", "from fleet.lives import ages", "fleet.lives is no module"),
    "a module that is not there": (
        "fleet/fits/odd.py",
        "from fleet.lives.gone import a",
        "fleet.lives.gone is no module",
    ),
    "an import in a string": (
        "fleet/fits/odd.py",
        "from importlib import import_module\nimport_module('fleet.plans.tonight')",
        "no reader can follow",
    ),
    "an __init__ that does something": ("fleet/fits/__init__.py", '"""Fits."""\nA = 1', "more, or less, than"),
    "an __init__ without a docstring": ("fleet/fits/__init__.py", "", "more, or less, than"),
    "a package in a package": ("fleet/fits/deep/odd.py", "A = 1", "more than one level deep"),
    "SQL outside the store": ("fleet/cli/odd.py", "from sqlalchemy.orm import Session", "only store may import"),
    "SQLite outside the store": ("dashboard/odd.py", "import sqlite3", "only store may import"),
    "a page in the library": ("fleet/report/odd.py", "import streamlit", "only dashboard may import"),
    "now in a fit": ("fleet/fits/odd.py", "from datetime import datetime\ndatetime.now()", "ask for the time"),
    "today in a plan": ("fleet/plans/odd.py", "import datetime as d\nd.date.today()", "ask for the time"),
    "time in lives": ("fleet/lives/odd.py", "import time\ntime.time()", "ask for the time"),
    "from time in lives": ("fleet/lives/odd.py", "from time import time", "may not import from time"),
    "open in records": ("fleet/records/odd.py", "open('x')", "records may not touch files"),
    "Path.open in a report": ("fleet/report/odd.py", "from pathlib import Path\nPath('x').open()", "touch files"),
    "read_text in the pipeline": (
        "fleet/pipeline.py",
        "from pathlib import Path\nPath('x').read_text()",
        "touch files",
    ),
    "pandas reads in a fit": ("fleet/fits/odd.py", "import pandas\npandas.read_csv('x')", "touch files"),
    "a second reader in usage": ("fleet/usage/second_reader.py", "open('x')", "through one module only"),
}


def plant(root: Path, files: Mapping[str, str]) -> Path:
    for name, source in files.items():
        path = root / name
        path.parent.mkdir(parents=True, exist_ok=True)
        path.write_text(source, encoding="utf-8")
    return root


def test_a_sound_tree_passes(tmp_path: Path) -> None:
    assert violations(plant(tmp_path, SOUND)) == []


@pytest.mark.parametrize("name", PLANTED)
def test_a_planted_breach_is_found(tmp_path: Path, name: str) -> None:
    path, source, sentence = PLANTED[name]
    found = violations(plant(tmp_path, {**SOUND, path: source}))
    assert any(sentence in breach and breach.startswith(path) for breach in found), found


def test_every_rule_has_a_breach_planted_for_it(tmp_path: Path) -> None:
    for rule in RULES:
        caught = 0
        for number, (path, source, _) in enumerate(PLANTED.values()):
            root = plant(tmp_path / f"{rule.__name__}-{number}", {path: source})
            caught += bool(list(rule(Module(root / path, root, ast.parse(source)))))
        assert caught, f"nothing planted breaks {rule.__name__}"
