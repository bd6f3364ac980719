"""The tables of a book, made from the records' own statements of their fields; Alembic makes them on disk.

Each kind of record has one table with a row for every version: nothing is ever changed or deleted. `record_index`
gives every record_id its kind, so that references are true foreign keys; `book_write` numbers the writes.
"""

from __future__ import annotations

from sqlalchemy import (
    BigInteger,
    Boolean,
    CheckConstraint,
    Column,
    Float,
    ForeignKey,
    Index,
    Integer,
    MetaData,
    SmallInteger,
    String,
    Table,
    Text,
    UniqueConstraint,
)

from fleet.records.fields import LONGEST_CODE, FieldSpec, Record, fields_of, kind_of
from fleet.records.history import KINDS

NAMING = {
    "ix": "ix_%(table_name)s_%(column_0_N_name)s",
    "uq": "uq_%(table_name)s_%(column_0_N_name)s",
    "ck": "ck_%(table_name)s_%(constraint_name)s",
    "fk": "fk_%(table_name)s_%(column_0_N_name)s",
    "pk": "pk_%(table_name)s",
}
ID_LENGTH = 40
OFFSET_SUFFIX = "_offset"

metadata = MetaData(naming_convention=NAMING)

record_index = Table(
    "record_index",
    metadata,
    Column("record_id", String(ID_LENGTH), primary_key=True),
    Column("kind", String(LONGEST_CODE), nullable=False),
)

book_write = Table(
    "book_write",
    metadata,
    Column("write_number", Integer, primary_key=True, autoincrement=True),
    Column("entered_at", BigInteger, nullable=False),
    Column("entered_by", String(LONGEST_CODE), nullable=False),
    Column("what", Text, nullable=False),
    Column("draft", String(ID_LENGTH), nullable=True, unique=True),
    sqlite_autoincrement=True,
)


def columns_of_field(name: str, spec: FieldSpec) -> list[Column[object]]:
    """The columns that keep one field: two for a moment (UTC microseconds, stated offset in minutes)."""
    null = spec.optional
    if spec.kind == "moment":
        return [
            Column(name, BigInteger, nullable=null),
            Column(name + OFFSET_SUFFIX, SmallInteger, nullable=null),
        ]
    if spec.kind == "reference":
        return [Column(name, String(ID_LENGTH), ForeignKey("record_index.record_id"), nullable=null)]
    if spec.kind == "flag":
        return [Column(name, Boolean, nullable=False)]
    if spec.kind == "number":
        return [Column(name, Float, nullable=null)]
    if spec.kind in ("whole", "hours", "money", "daytime"):
        return [Column(name, BigInteger, nullable=null)]
    if spec.kind == "text":
        return [Column(name, Text, nullable=null)]
    return [Column(name, String(LONGEST_CODE), nullable=null)]


def check_of_field(name: str, spec: FieldSpec) -> CheckConstraint | None:
    """The bound or the choice of words that the database itself holds to."""
    if spec.kind == "choice":
        words = ", ".join("'" + word.replace("'", "''") + "'" for word in spec.choices)
        return CheckConstraint(f"{name} IN ({words})", name=name)
    if spec.low is not None and spec.high is not None:
        return CheckConstraint(f"{name} BETWEEN {spec.low!r} AND {spec.high!r}", name=name)
    return None


def _version_table(cls: type[Record]) -> Table:
    fields = fields_of(cls)
    kind = kind_of(cls)
    checks = [check for name, spec in fields.items() if (check := check_of_field(name, spec)) is not None]
    indexed = [name for name, spec in fields.items() if spec.kind == "reference" or name == "happened_at"]
    return Table(
        f"{kind}_version",
        metadata,
        Column("row_number", Integer, primary_key=True, autoincrement=True),
        Column("record_id", String(ID_LENGTH), ForeignKey("record_index.record_id"), nullable=False),
        Column("version", Integer, CheckConstraint("version >= 1", name="version"), nullable=False),
        Column("write_number", Integer, ForeignKey("book_write.write_number"), nullable=False),
        Column("entered_at", BigInteger, nullable=False),
        Column("entered_at_claimed", Boolean, nullable=False),
        Column("entered_by", String(LONGEST_CODE), nullable=False),
        Column(
            "version_reason", Text, CheckConstraint("version = 1 OR version_reason IS NOT NULL", name="version_reason")
        ),
        Column("withdrawn", Boolean, nullable=False),
        *(column for name, spec in fields.items() for column in columns_of_field(name, spec)),
        *checks,
        UniqueConstraint("record_id", "version"),
        Index(f"ix_{kind}_version_write_number", "write_number"),
        *(Index(f"ix_{kind}_version_{name}", name) for name in indexed),
    )


VERSIONS: dict[type[Record], Table] = {cls: _version_table(cls) for cls in KINDS}
