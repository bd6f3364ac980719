"""The tables on disk are the tables in code, and the comparison sees a difference."""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import closing
from pathlib import Path
from typing import Any

import pytest
from alembic.autogenerate import compare_metadata
from alembic.config import Config
from alembic.migration import MigrationContext
from alembic.script import ScriptDirectory
from sqlalchemy import Column, Connection, Integer, MetaData, create_engine, inspect, text

import fleet.store.migrations
from fleet.store.book import NEWEST_MIGRATION, create_book
from fleet.store.tables import metadata


@pytest.fixture
def migrated(tmp_path: Path) -> Iterator[Connection]:
    with closing(create_book(tmp_path / "book.db")) as book, book.reading() as connection:
        yield connection


def _differences(connection: Connection, wanted: MetaData) -> list[Any]:
    return compare_metadata(MigrationContext.configure(connection), wanted)


def _constraints(connection: Connection) -> dict[str, object]:
    """What the comparison of Alembic does not look at."""
    found = inspect(connection)
    held: dict[str, object] = {}
    for table in sorted(found.get_table_names()):
        if table == "alembic_version":
            continue
        held[table] = (
            sorted((c["name"], c["sqltext"]) for c in found.get_check_constraints(table)),
            sorted((c["name"], tuple(c["column_names"])) for c in found.get_unique_constraints(table)),
            sorted((c["name"], c["constrained_columns"], c["referred_table"]) for c in found.get_foreign_keys(table)),
            found.get_pk_constraint(table),
        )
    return held


def test_the_migrated_tables_are_the_tables_in_code(migrated: Connection) -> None:
    assert _differences(migrated, metadata) == []


def test_so_are_their_checks_keys_and_names(migrated: Connection) -> None:
    engine = create_engine("sqlite://")
    with engine.begin() as connection:
        metadata.create_all(connection)
        wanted = _constraints(connection)
    engine.dispose()
    assert _constraints(migrated) == wanted


def test_a_column_that_no_migration_made_is_seen(migrated: Connection) -> None:
    other = MetaData(naming_convention=metadata.naming_convention)
    for table in metadata.tables.values():
        table.to_metadata(other)
    other.tables["robot_version"].append_column(Column("colour", Integer))
    assert [difference[0] for difference in _differences(migrated, other)] == ["add_column"]


def test_a_check_that_is_missing_on_disk_is_seen(migrated: Connection) -> None:
    before = _constraints(migrated)
    migrated.execute(text("CREATE TABLE plain AS SELECT * FROM hold_version"))
    migrated.execute(text("DROP TABLE hold_version"))
    migrated.execute(text("ALTER TABLE plain RENAME TO hold_version"))
    assert _constraints(migrated) != before


def test_the_newest_migration_is_the_one_that_books_are_brought_to(migrated: Connection) -> None:
    config = Config()
    config.set_main_option("script_location", str(Path(fleet.store.migrations.__path__[0])).replace("%", "%%"))
    scripts = ScriptDirectory.from_config(config)
    assert scripts.get_heads() == [NEWEST_MIGRATION]
    assert migrated.execute(text("SELECT version_num FROM alembic_version")).scalar_one() == NEWEST_MIGRATION


def test_every_table_has_a_name_for_every_constraint() -> None:
    for table in metadata.tables.values():
        assert all(constraint.name is not None for constraint in table.constraints), table.name
