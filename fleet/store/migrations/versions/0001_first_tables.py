"""The first tables of a book."""

import sqlalchemy as sa
from alembic import op

revision = "0001"
down_revision = None


def upgrade() -> None:
    """Make every table, each in its own function below."""
    _book_write()
    _record_index()
    _belief_version()
    _bench_check_version()
    _failure_version()
    _fitment_version()
    _hold_version()
    _lot_version()
    _part_mode_version()
    _part_type_version()
    _placement_version()
    _plate_version()
    _position_version()
    _presence_version()
    _printer_version()
    _purchase_version()
    _release_version()
    _removal_version()
    _revision_version()
    _robot_version()
    _session_use_version()
    _session_version()
    _settings_version()
    _slot_version()
    _spool_version()
    _stock_move_version()
    _unit_design_version()
    _unit_version()
    _usage_plan_version()


def _book_write() -> None:
    op.create_table(
        "book_write",
        sa.Column("write_number", sa.Integer(), autoincrement=True, nullable=False),
        sa.Column("entered_at", sa.BigInteger(), nullable=False),
        sa.Column("entered_by", sa.String(length=60), nullable=False),
        sa.Column("what", sa.Text(), nullable=False),
        sa.Column("draft", sa.String(length=40), nullable=True),
        sa.PrimaryKeyConstraint("write_number", name=op.f("pk_book_write")),
        sa.UniqueConstraint("draft", name=op.f("uq_book_write_draft")),
        sqlite_autoincrement=True,
    )


def _record_index() -> None:
    op.create_table(
        "record_index",
        sa.Column("record_id", sa.String(length=40), nullable=False),
        sa.Column("kind", sa.String(length=60), nullable=False),
        sa.PrimaryKeyConstraint("record_id", name=op.f("pk_record_index")),
    )


def _belief_version() -> None:
    op.create_table(
        "belief_version",
        sa.Column("row_number", sa.Integer(), autoincrement=True, nullable=False),
        sa.Column("record_id", sa.String(length=40), nullable=False),
        sa.Column("version", sa.Integer(), nullable=False),
        sa.Column("write_number", sa.Integer(), nullable=False),
        sa.Column("entered_at", sa.BigInteger(), nullable=False),
        sa.Column("entered_at_claimed", sa.Boolean(), nullable=False),
        sa.Column("entered_by", sa.String(length=60), nullable=False),
        sa.Column("version_reason", sa.Text(), nullable=True),
        sa.Column("withdrawn", sa.Boolean(), nullable=False),
        sa.Column("valid_from", sa.BigInteger(), nullable=True),
        sa.Column("valid_from_offset", sa.SmallInteger(), nullable=True),
        sa.Column("part_type", sa.String(length=40), nullable=False),
        sa.Column("t10", sa.Float(), nullable=False),
        sa.Column("factor", sa.Float(), nullable=False),
        sa.Column("clock", sa.String(length=60), nullable=False),
        sa.CheckConstraint(
            "clock IN ('hours', 'load_hours', 'turns', 'impacts', 'days')", name=op.f("ck_belief_version_clock")
        ),
        sa.CheckConstraint("factor BETWEEN 1.01 AND 1000", name=op.f("ck_belief_version_factor")),
        sa.CheckConstraint("t10 BETWEEN 1e-09 AND 10000000000000.0", name=op.f("ck_belief_version_t10")),
        sa.ForeignKeyConstraint(["part_type"], ["record_index.record_id"], name=op.f("fk_belief_version_part_type")),
        sa.ForeignKeyConstraint(["record_id"], ["record_index.record_id"], name=op.f("fk_belief_version_record_id")),
        sa.ForeignKeyConstraint(
            ["write_number"], ["book_write.write_number"], name=op.f("fk_belief_version_write_number")
        ),
        sa.CheckConstraint("version >= 1", name=op.f("ck_belief_version_version")),
        sa.CheckConstraint("version = 1 OR version_reason IS NOT NULL", name=op.f("ck_belief_version_version_reason")),
        sa.PrimaryKeyConstraint("row_number", name=op.f("pk_belief_version")),
        sa.UniqueConstraint("record_id", "version", name=op.f("uq_belief_version_record_id_version")),
    )
    op.create_index("ix_belief_version_part_type", "belief_version", ["part_type"], unique=False)
    op.create_index("ix_belief_version_write_number", "belief_version", ["write_number"], unique=False)


def _bench_check_version() -> None:
    op.create_table(
        "bench_check_version",
        sa.Column("row_number", sa.Integer(), autoincrement=True, nullable=False),
        sa.Column("record_id", sa.String(length=40), nullable=False),
        sa.Column("version", sa.Integer(), nullable=False),
        sa.Column("write_number", sa.Integer(), nullable=False),
        sa.Column("entered_at", sa.BigInteger(), nullable=False),
        sa.Column("entered_at_claimed", sa.Boolean(), nullable=False),
        sa.Column("entered_by", sa.String(length=60), nullable=False),
        sa.Column("version_reason", sa.Text(), nullable=True),
        sa.Column("withdrawn", sa.Boolean(), nullable=False),
        sa.Column("happened_at", sa.BigInteger(), nullable=False),
        sa.Column("happened_at_offset", sa.SmallInteger(), nullable=False),
        sa.Column("happened_until", sa.BigInteger(), nullable=True),
        sa.Column("happened_until_offset", sa.SmallInteger(), nullable=True),
        sa.Column("sequence", sa.BigInteger(), nullable=False),
        sa.Column("unit", sa.String(length=40), nullable=False),
        sa.Column("slot", sa.String(length=40), nullable=True),
        sa.Column("mode", sa.String(length=40), nullable=True),
        sa.Column("verdict", sa.String(length=60), nullable=False),
        sa.Column("note", sa.Text(), nullable=True),
        sa.CheckConstraint("verdict IN ('good', 'doubtful')", name=op.f("ck_bench_check_version_verdict")),
        sa.CheckConstraint("sequence BETWEEN 0 AND 1000000", name=op.f("ck_bench_check_version_sequence")),
        sa.ForeignKeyConstraint(["mode"], ["record_index.record_id"], name=op.f("fk_bench_check_version_mode")),
        sa.ForeignKeyConstraint(
            ["record_id"], ["record_index.record_id"], name=op.f("fk_bench_check_version_record_id")
        ),
        sa.ForeignKeyConstraint(["slot"], ["record_index.record_id"], name=op.f("fk_bench_check_version_slot")),
        sa.ForeignKeyConstraint(["unit"], ["record_index.record_id"], name=op.f("fk_bench_check_version_unit")),
        sa.ForeignKeyConstraint(
            ["write_number"], ["book_write.write_number"], name=op.f("fk_bench_check_version_write_number")
        ),
        sa.CheckConstraint("version >= 1", name=op.f("ck_bench_check_version_version")),
        sa.CheckConstraint(
            "version = 1 OR version_reason IS NOT NULL", name=op.f("ck_bench_check_version_version_reason")
        ),
        sa.PrimaryKeyConstraint("row_number", name=op.f("pk_bench_check_version")),
        sa.UniqueConstraint("record_id", "version", name=op.f("uq_bench_check_version_record_id_version")),
    )
    op.create_index("ix_bench_check_version_happened_at", "bench_check_version", ["happened_at"], unique=False)
    op.create_index("ix_bench_check_version_mode", "bench_check_version", ["mode"], unique=False)
    op.create_index("ix_bench_check_version_slot", "bench_check_version", ["slot"], unique=False)
    op.create_index("ix_bench_check_version_unit", "bench_check_version", ["unit"], unique=False)
    op.create_index("ix_bench_check_version_write_number", "bench_check_version", ["write_number"], unique=False)


def _failure_version() -> None:
    op.create_table(
        "failure_version",
        sa.Column("row_number", sa.Integer(), autoincrement=True, nullable=False),
        sa.Column("record_id", sa.String(length=40), nullable=False),
        sa.Column("version", sa.Integer(), nullable=False),
        sa.Column("write_number", sa.Integer(), nullable=False),
        sa.Column("entered_at", sa.BigInteger(), nullable=False),
        sa.Column("entered_at_claimed", sa.Boolean(), nullable=False),
        sa.Column("entered_by", sa.String(length=60), nullable=False),
        sa.Column("version_reason", sa.Text(), nullable=True),
        sa.Column("withdrawn", sa.Boolean(), nullable=False),
        sa.Column("happened_at", sa.BigInteger(), nullable=False),
        sa.Column("happened_at_offset", sa.SmallInteger(), nullable=False),
        sa.Column("happened_until", sa.BigInteger(), nullable=True),
        sa.Column("happened_until_offset", sa.SmallInteger(), nullable=True),
        sa.Column("sequence", sa.BigInteger(), nullable=False),
        sa.Column("fitment", sa.String(length=40), nullable=False),
        sa.Column("place", sa.BigInteger(), nullable=True),
        sa.Column("mode", sa.String(length=40), nullable=False),
        sa.Column("finding", sa.String(length=60), nullable=False),
        sa.Column("cause", sa.String(length=60), nullable=False),
        sa.Column("how_found", sa.String(length=60), nullable=False),
        sa.Column("session", sa.String(length=40), nullable=True),
        sa.Column("broken_by", sa.String(length=40), nullable=True),
        sa.Column("note", sa.Text(), nullable=True),
        sa.CheckConstraint(
            "cause IN ('design', 'print', 'assembly', 'operation', 'maintenance', 'another part''s failure', 'unknown')",
            name=op.f("ck_failure_version_cause"),
        ),
        sa.CheckConstraint(
            "finding IN ('stopped', 'over its limit', 'found worn')", name=op.f("ck_failure_version_finding")
        ),
        sa.CheckConstraint(
            "how_found IN ('during the session', 'after the session', 'at a check', 'unknown')",
            name=op.f("ck_failure_version_how_found"),
        ),
        sa.CheckConstraint("place BETWEEN 1 AND 1000", name=op.f("ck_failure_version_place")),
        sa.CheckConstraint("sequence BETWEEN 0 AND 1000000", name=op.f("ck_failure_version_sequence")),
        sa.ForeignKeyConstraint(["broken_by"], ["record_index.record_id"], name=op.f("fk_failure_version_broken_by")),
        sa.ForeignKeyConstraint(["fitment"], ["record_index.record_id"], name=op.f("fk_failure_version_fitment")),
        sa.ForeignKeyConstraint(["mode"], ["record_index.record_id"], name=op.f("fk_failure_version_mode")),
        sa.ForeignKeyConstraint(["record_id"], ["record_index.record_id"], name=op.f("fk_failure_version_record_id")),
        sa.ForeignKeyConstraint(["session"], ["record_index.record_id"], name=op.f("fk_failure_version_session")),
        sa.ForeignKeyConstraint(
            ["write_number"], ["book_write.write_number"], name=op.f("fk_failure_version_write_number")
        ),
        sa.CheckConstraint("version >= 1", name=op.f("ck_failure_version_version")),
        sa.CheckConstraint("version = 1 OR version_reason IS NOT NULL", name=op.f("ck_failure_version_version_reason")),
        sa.PrimaryKeyConstraint("row_number", name=op.f("pk_failure_version")),
        sa.UniqueConstraint("record_id", "version", name=op.f("uq_failure_version_record_id_version")),
    )
    op.create_index("ix_failure_version_broken_by", "failure_version", ["broken_by"], unique=False)
    op.create_index("ix_failure_version_fitment", "failure_version", ["fitment"], unique=False)
    op.create_index("ix_failure_version_happened_at", "failure_version", ["happened_at"], unique=False)
    op.create_index("ix_failure_version_mode", "failure_version", ["mode"], unique=False)
    op.create_index("ix_failure_version_session", "failure_version", ["session"], unique=False)
    op.create_index("ix_failure_version_write_number", "failure_version", ["write_number"], unique=False)


def _fitment_version() -> None:
    op.create_table(
        "fitment_version",
        sa.Column("row_number", sa.Integer(), autoincrement=True, nullable=False),
        sa.Column("record_id", sa.String(length=40), nullable=False),
        sa.Column("version", sa.Integer(), nullable=False),
        sa.Column("write_number", sa.Integer(), nullable=False),
        sa.Column("entered_at", sa.BigInteger(), nullable=False),
        sa.Column("entered_at_claimed", sa.Boolean(), nullable=False),
        sa.Column("entered_by", sa.String(length=60), nullable=False),
        sa.Column("version_reason", sa.Text(), nullable=True),
        sa.Column("withdrawn", sa.Boolean(), nullable=False),
        sa.Column("happened_at", sa.BigInteger(), nullable=False),
        sa.Column("happened_at_offset", sa.SmallInteger(), nullable=False),
        sa.Column("happened_until", sa.BigInteger(), nullable=True),
        sa.Column("happened_until_offset", sa.SmallInteger(), nullable=True),
        sa.Column("sequence", sa.BigInteger(), nullable=False),
        sa.Column("unit", sa.String(length=40), nullable=False),
        sa.Column("slot", sa.String(length=40), nullable=False),
        sa.Column("first_place", sa.BigInteger(), nullable=False),
        sa.Column("count", sa.BigInteger(), nullable=False),
        sa.Column("lot", sa.String(length=40), nullable=True),
        sa.Column("revision", sa.String(length=40), nullable=True),
        sa.Column("serial", sa.String(length=60), nullable=True),
        sa.Column("comes_from", sa.String(length=40), nullable=True),
        sa.Column("from_place", sa.BigInteger(), nullable=True),
        sa.Column("prior", sa.String(length=60), nullable=False),
        sa.Column("prior_run_seconds", sa.BigInteger(), nullable=True),
        sa.Column("prior_load_seconds", sa.BigInteger(), nullable=True),
        sa.Column("prior_turns", sa.BigInteger(), nullable=True),
        sa.Column("prior_impacts", sa.BigInteger(), nullable=True),
        sa.Column("prior_days", sa.Float(), nullable=True),
        sa.CheckConstraint("from_place BETWEEN 1 AND 1000", name=op.f("ck_fitment_version_from_place")),
        sa.CheckConstraint("prior IN ('new', 'stated', 'unknown')", name=op.f("ck_fitment_version_prior")),
        sa.CheckConstraint("count BETWEEN 1 AND 1000", name=op.f("ck_fitment_version_count")),
        sa.CheckConstraint("first_place BETWEEN 1 AND 1000", name=op.f("ck_fitment_version_first_place")),
        sa.CheckConstraint("prior_days BETWEEN 0 AND 40000", name=op.f("ck_fitment_version_prior_days")),
        sa.CheckConstraint("prior_impacts BETWEEN 0 AND 1000000000", name=op.f("ck_fitment_version_prior_impacts")),
        sa.CheckConstraint(
            "prior_load_seconds BETWEEN 0 AND 3600000000", name=op.f("ck_fitment_version_prior_load_seconds")
        ),
        sa.CheckConstraint(
            "prior_run_seconds BETWEEN 0 AND 3600000000", name=op.f("ck_fitment_version_prior_run_seconds")
        ),
        sa.CheckConstraint("prior_turns BETWEEN 0 AND 1000000000000", name=op.f("ck_fitment_version_prior_turns")),
        sa.CheckConstraint("sequence BETWEEN 0 AND 1000000", name=op.f("ck_fitment_version_sequence")),
        sa.ForeignKeyConstraint(["comes_from"], ["record_index.record_id"], name=op.f("fk_fitment_version_comes_from")),
        sa.ForeignKeyConstraint(["lot"], ["record_index.record_id"], name=op.f("fk_fitment_version_lot")),
        sa.ForeignKeyConstraint(["record_id"], ["record_index.record_id"], name=op.f("fk_fitment_version_record_id")),
        sa.ForeignKeyConstraint(["revision"], ["record_index.record_id"], name=op.f("fk_fitment_version_revision")),
        sa.ForeignKeyConstraint(["slot"], ["record_index.record_id"], name=op.f("fk_fitment_version_slot")),
        sa.ForeignKeyConstraint(["unit"], ["record_index.record_id"], name=op.f("fk_fitment_version_unit")),
        sa.ForeignKeyConstraint(
            ["write_number"], ["book_write.write_number"], name=op.f("fk_fitment_version_write_number")
        ),
        sa.CheckConstraint("version >= 1", name=op.f("ck_fitment_version_version")),
        sa.CheckConstraint("version = 1 OR version_reason IS NOT NULL", name=op.f("ck_fitment_version_version_reason")),
        sa.PrimaryKeyConstraint("row_number", name=op.f("pk_fitment_version")),
        sa.UniqueConstraint("record_id", "version", name=op.f("uq_fitment_version_record_id_version")),
    )
    op.create_index("ix_fitment_version_comes_from", "fitment_version", ["comes_from"], unique=False)
    op.create_index("ix_fitment_version_happened_at", "fitment_version", ["happened_at"], unique=False)
    op.create_index("ix_fitment_version_lot", "fitment_version", ["lot"], unique=False)
    op.create_index("ix_fitment_version_revision", "fitment_version", ["revision"], unique=False)
    op.create_index("ix_fitment_version_slot", "fitment_version", ["slot"], unique=False)
    op.create_index("ix_fitment_version_unit", "fitment_version", ["unit"], unique=False)
    op.create_index("ix_fitment_version_write_number", "fitment_version", ["write_number"], unique=False)


def _hold_version() -> None:
    op.create_table(
        "hold_version",
        sa.Column("row_number", sa.Integer(), autoincrement=True, nullable=False),
        sa.Column("record_id", sa.String(length=40), nullable=False),
        sa.Column("version", sa.Integer(), nullable=False),
        sa.Column("write_number", sa.Integer(), nullable=False),
        sa.Column("entered_at", sa.BigInteger(), nullable=False),
        sa.Column("entered_at_claimed", sa.Boolean(), nullable=False),
        sa.Column("entered_by", sa.String(length=60), nullable=False),
        sa.Column("version_reason", sa.Text(), nullable=True),
        sa.Column("withdrawn", sa.Boolean(), nullable=False),
        sa.Column("happened_at", sa.BigInteger(), nullable=False),
        sa.Column("happened_at_offset", sa.SmallInteger(), nullable=False),
        sa.Column("happened_until", sa.BigInteger(), nullable=True),
        sa.Column("happened_until_offset", sa.SmallInteger(), nullable=True),
        sa.Column("sequence", sa.BigInteger(), nullable=False),
        sa.Column("robot", sa.String(length=40), nullable=True),
        sa.Column("unit", sa.String(length=40), nullable=True),
        sa.Column("why", sa.Text(), nullable=False),
        sa.CheckConstraint("sequence BETWEEN 0 AND 1000000", name=op.f("ck_hold_version_sequence")),
        sa.ForeignKeyConstraint(["record_id"], ["record_index.record_id"], name=op.f("fk_hold_version_record_id")),
        sa.ForeignKeyConstraint(["robot"], ["record_index.record_id"], name=op.f("fk_hold_version_robot")),
        sa.ForeignKeyConstraint(["unit"], ["record_index.record_id"], name=op.f("fk_hold_version_unit")),
        sa.ForeignKeyConstraint(
            ["write_number"], ["book_write.write_number"], name=op.f("fk_hold_version_write_number")
        ),
        sa.CheckConstraint("version >= 1", name=op.f("ck_hold_version_version")),
        sa.CheckConstraint("version = 1 OR version_reason IS NOT NULL", name=op.f("ck_hold_version_version_reason")),
        sa.PrimaryKeyConstraint("row_number", name=op.f("pk_hold_version")),
        sa.UniqueConstraint("record_id", "version", name=op.f("uq_hold_version_record_id_version")),
    )
    op.create_index("ix_hold_version_happened_at", "hold_version", ["happened_at"], unique=False)
    op.create_index("ix_hold_version_robot", "hold_version", ["robot"], unique=False)
    op.create_index("ix_hold_version_unit", "hold_version", ["unit"], unique=False)
    op.create_index("ix_hold_version_write_number", "hold_version", ["write_number"], unique=False)


def _lot_version() -> None:
    op.create_table(
        "lot_version",
        sa.Column("row_number", sa.Integer(), autoincrement=True, nullable=False),
        sa.Column("record_id", sa.String(length=40), nullable=False),
        sa.Column("version", sa.Integer(), nullable=False),
        sa.Column("write_number", sa.Integer(), nullable=False),
        sa.Column("entered_at", sa.BigInteger(), nullable=False),
        sa.Column("entered_at_claimed", sa.Boolean(), nullable=False),
        sa.Column("entered_by", sa.String(length=60), nullable=False),
        sa.Column("version_reason", sa.Text(), nullable=True),
        sa.Column("withdrawn", sa.Boolean(), nullable=False),
        sa.Column("valid_from", sa.BigInteger(), nullable=True),
        sa.Column("valid_from_offset", sa.SmallInteger(), nullable=True),
        sa.Column("code", sa.String(length=60), nullable=False),
        sa.Column("part_type", sa.String(length=40), nullable=False),
        sa.Column("revision", sa.String(length=40), nullable=True),
        sa.Column("supplier", sa.Text(), nullable=True),
        sa.Column("kept_apart", sa.Boolean(), nullable=False),
        sa.Column("note", sa.Text(), nullable=True),
        sa.ForeignKeyConstraint(["part_type"], ["record_index.record_id"], name=op.f("fk_lot_version_part_type")),
        sa.ForeignKeyConstraint(["record_id"], ["record_index.record_id"], name=op.f("fk_lot_version_record_id")),
        sa.ForeignKeyConstraint(["revision"], ["record_index.record_id"], name=op.f("fk_lot_version_revision")),
        sa.ForeignKeyConstraint(
            ["write_number"], ["book_write.write_number"], name=op.f("fk_lot_version_write_number")
        ),
        sa.CheckConstraint("version >= 1", name=op.f("ck_lot_version_version")),
        sa.CheckConstraint("version = 1 OR version_reason IS NOT NULL", name=op.f("ck_lot_version_version_reason")),
        sa.PrimaryKeyConstraint("row_number", name=op.f("pk_lot_version")),
        sa.UniqueConstraint("record_id", "version", name=op.f("uq_lot_version_record_id_version")),
    )
    op.create_index("ix_lot_version_part_type", "lot_version", ["part_type"], unique=False)
    op.create_index("ix_lot_version_revision", "lot_version", ["revision"], unique=False)
    op.create_index("ix_lot_version_write_number", "lot_version", ["write_number"], unique=False)


def _part_mode_version() -> None:
    op.create_table(
        "part_mode_version",
        sa.Column("row_number", sa.Integer(), autoincrement=True, nullable=False),
        sa.Column("record_id", sa.String(length=40), nullable=False),
        sa.Column("version", sa.Integer(), nullable=False),
        sa.Column("write_number", sa.Integer(), nullable=False),
        sa.Column("entered_at", sa.BigInteger(), nullable=False),
        sa.Column("entered_at_claimed", sa.Boolean(), nullable=False),
        sa.Column("entered_by", sa.String(length=60), nullable=False),
        sa.Column("version_reason", sa.Text(), nullable=True),
        sa.Column("withdrawn", sa.Boolean(), nullable=False),
        sa.Column("valid_from", sa.BigInteger(), nullable=True),
        sa.Column("valid_from_offset", sa.SmallInteger(), nullable=True),
        sa.Column("part_type", sa.String(length=40), nullable=False),
        sa.Column("code", sa.String(length=60), nullable=False),
        sa.Column("label", sa.Text(), nullable=False),
        sa.Column("mechanism", sa.String(length=60), nullable=False),
        sa.Column("clock", sa.String(length=60), nullable=False),
        sa.Column("share", sa.Float(), nullable=False),
        sa.Column("noticed", sa.String(length=60), nullable=False),
        sa.CheckConstraint(
            "clock IN ('hours', 'load_hours', 'turns', 'impacts', 'days')", name=op.f("ck_part_mode_version_clock")
        ),
        sa.CheckConstraint(
            "mechanism IN ('wear', 'fatigue', 'overload', 'layer split', 'creep', 'loosening', 'corrosion', 'ageing', 'assembly', 'unknown')",
            name=op.f("ck_part_mode_version_mechanism"),
        ),
        sa.CheckConstraint("noticed IN ('in use', 'at a check')", name=op.f("ck_part_mode_version_noticed")),
        sa.CheckConstraint("share BETWEEN 0.001 AND 1", name=op.f("ck_part_mode_version_share")),
        sa.ForeignKeyConstraint(["part_type"], ["record_index.record_id"], name=op.f("fk_part_mode_version_part_type")),
        sa.ForeignKeyConstraint(["record_id"], ["record_index.record_id"], name=op.f("fk_part_mode_version_record_id")),
        sa.ForeignKeyConstraint(
            ["write_number"], ["book_write.write_number"], name=op.f("fk_part_mode_version_write_number")
        ),
        sa.CheckConstraint("version >= 1", name=op.f("ck_part_mode_version_version")),
        sa.CheckConstraint(
            "version = 1 OR version_reason IS NOT NULL", name=op.f("ck_part_mode_version_version_reason")
        ),
        sa.PrimaryKeyConstraint("row_number", name=op.f("pk_part_mode_version")),
        sa.UniqueConstraint("record_id", "version", name=op.f("uq_part_mode_version_record_id_version")),
    )
    op.create_index("ix_part_mode_version_part_type", "part_mode_version", ["part_type"], unique=False)
    op.create_index("ix_part_mode_version_write_number", "part_mode_version", ["write_number"], unique=False)


def _part_type_version() -> None:
    op.create_table(
        "part_type_version",
        sa.Column("row_number", sa.Integer(), autoincrement=True, nullable=False),
        sa.Column("record_id", sa.String(length=40), nullable=False),
        sa.Column("version", sa.Integer(), nullable=False),
        sa.Column("write_number", sa.Integer(), nullable=False),
        sa.Column("entered_at", sa.BigInteger(), nullable=False),
        sa.Column("entered_at_claimed", sa.Boolean(), nullable=False),
        sa.Column("entered_by", sa.String(length=60), nullable=False),
        sa.Column("version_reason", sa.Text(), nullable=True),
        sa.Column("withdrawn", sa.Boolean(), nullable=False),
        sa.Column("valid_from", sa.BigInteger(), nullable=True),
        sa.Column("valid_from_offset", sa.SmallInteger(), nullable=True),
        sa.Column("code", sa.String(length=60), nullable=False),
        sa.Column("label", sa.Text(), nullable=False),
        sa.Column("source", sa.String(length=60), nullable=False),
        sa.Column("material", sa.String(length=60), nullable=True),
        sa.Column("planned_cost", sa.BigInteger(), nullable=False),
        sa.Column("failure_cost", sa.BigInteger(), nullable=False),
        sa.Column("mass_g", sa.Float(), nullable=False),
        sa.Column("lead_time_days", sa.BigInteger(), nullable=False),
        sa.Column("pack_size", sa.BigInteger(), nullable=False),
        sa.Column("print_minutes", sa.Float(), nullable=True),
        sa.Column("plate_minutes", sa.Float(), nullable=True),
        sa.Column("parts_per_plate", sa.BigInteger(), nullable=True),
        sa.Column("nozzle_mm", sa.Float(), nullable=True),
        sa.CheckConstraint("source IN ('printed', 'bought')", name=op.f("ck_part_type_version_source")),
        sa.CheckConstraint("failure_cost BETWEEN 0 AND 100000000000.0", name=op.f("ck_part_type_version_failure_cost")),
        sa.CheckConstraint("lead_time_days BETWEEN 0 AND 1000", name=op.f("ck_part_type_version_lead_time_days")),
        sa.CheckConstraint("mass_g BETWEEN 0 AND 100000", name=op.f("ck_part_type_version_mass_g")),
        sa.CheckConstraint("nozzle_mm BETWEEN 0.05 AND 3", name=op.f("ck_part_type_version_nozzle_mm")),
        sa.CheckConstraint("pack_size BETWEEN 1 AND 100000", name=op.f("ck_part_type_version_pack_size")),
        sa.CheckConstraint("parts_per_plate BETWEEN 1 AND 1000", name=op.f("ck_part_type_version_parts_per_plate")),
        sa.CheckConstraint("planned_cost BETWEEN 0 AND 100000000000.0", name=op.f("ck_part_type_version_planned_cost")),
        sa.CheckConstraint("plate_minutes BETWEEN 0 AND 2000", name=op.f("ck_part_type_version_plate_minutes")),
        sa.CheckConstraint("print_minutes BETWEEN 0 AND 20000", name=op.f("ck_part_type_version_print_minutes")),
        sa.ForeignKeyConstraint(["record_id"], ["record_index.record_id"], name=op.f("fk_part_type_version_record_id")),
        sa.ForeignKeyConstraint(
            ["write_number"], ["book_write.write_number"], name=op.f("fk_part_type_version_write_number")
        ),
        sa.CheckConstraint("version >= 1", name=op.f("ck_part_type_version_version")),
        sa.CheckConstraint(
            "version = 1 OR version_reason IS NOT NULL", name=op.f("ck_part_type_version_version_reason")
        ),
        sa.PrimaryKeyConstraint("row_number", name=op.f("pk_part_type_version")),
        sa.UniqueConstraint("record_id", "version", name=op.f("uq_part_type_version_record_id_version")),
    )
    op.create_index("ix_part_type_version_write_number", "part_type_version", ["write_number"], unique=False)


def _placement_version() -> None:
    op.create_table(
        "placement_version",
        sa.Column("row_number", sa.Integer(), autoincrement=True, nullable=False),
        sa.Column("record_id", sa.String(length=40), nullable=False),
        sa.Column("version", sa.Integer(), nullable=False),
        sa.Column("write_number", sa.Integer(), nullable=False),
        sa.Column("entered_at", sa.BigInteger(), nullable=False),
        sa.Column("entered_at_claimed", sa.Boolean(), nullable=False),
        sa.Column("entered_by", sa.String(length=60), nullable=False),
        sa.Column("version_reason", sa.Text(), nullable=True),
        sa.Column("withdrawn", sa.Boolean(), nullable=False),
        sa.Column("happened_at", sa.BigInteger(), nullable=False),
        sa.Column("happened_at_offset", sa.SmallInteger(), nullable=False),
        sa.Column("happened_until", sa.BigInteger(), nullable=True),
        sa.Column("happened_until_offset", sa.SmallInteger(), nullable=True),
        sa.Column("sequence", sa.BigInteger(), nullable=False),
        sa.Column("unit", sa.String(length=40), nullable=False),
        sa.Column("position", sa.String(length=40), nullable=True),
        sa.CheckConstraint("sequence BETWEEN 0 AND 1000000", name=op.f("ck_placement_version_sequence")),
        sa.ForeignKeyConstraint(["position"], ["record_index.record_id"], name=op.f("fk_placement_version_position")),
        sa.ForeignKeyConstraint(["record_id"], ["record_index.record_id"], name=op.f("fk_placement_version_record_id")),
        sa.ForeignKeyConstraint(["unit"], ["record_index.record_id"], name=op.f("fk_placement_version_unit")),
        sa.ForeignKeyConstraint(
            ["write_number"], ["book_write.write_number"], name=op.f("fk_placement_version_write_number")
        ),
        sa.CheckConstraint("version >= 1", name=op.f("ck_placement_version_version")),
        sa.CheckConstraint(
            "version = 1 OR version_reason IS NOT NULL", name=op.f("ck_placement_version_version_reason")
        ),
        sa.PrimaryKeyConstraint("row_number", name=op.f("pk_placement_version")),
        sa.UniqueConstraint("record_id", "version", name=op.f("uq_placement_version_record_id_version")),
    )
    op.create_index("ix_placement_version_happened_at", "placement_version", ["happened_at"], unique=False)
    op.create_index("ix_placement_version_position", "placement_version", ["position"], unique=False)
    op.create_index("ix_placement_version_unit", "placement_version", ["unit"], unique=False)
    op.create_index("ix_placement_version_write_number", "placement_version", ["write_number"], unique=False)


def _plate_version() -> None:
    op.create_table(
        "plate_version",
        sa.Column("row_number", sa.Integer(), autoincrement=True, nullable=False),
        sa.Column("record_id", sa.String(length=40), nullable=False),
        sa.Column("version", sa.Integer(), nullable=False),
        sa.Column("write_number", sa.Integer(), nullable=False),
        sa.Column("entered_at", sa.BigInteger(), nullable=False),
        sa.Column("entered_at_claimed", sa.Boolean(), nullable=False),
        sa.Column("entered_by", sa.String(length=60), nullable=False),
        sa.Column("version_reason", sa.Text(), nullable=True),
        sa.Column("withdrawn", sa.Boolean(), nullable=False),
        sa.Column("happened_at", sa.BigInteger(), nullable=False),
        sa.Column("happened_at_offset", sa.SmallInteger(), nullable=False),
        sa.Column("happened_until", sa.BigInteger(), nullable=True),
        sa.Column("happened_until_offset", sa.SmallInteger(), nullable=True),
        sa.Column("sequence", sa.BigInteger(), nullable=False),
        sa.Column("code", sa.String(length=60), nullable=False),
        sa.Column("printer", sa.String(length=40), nullable=False),
        sa.Column("lot", sa.String(length=40), nullable=False),
        sa.Column("started", sa.BigInteger(), nullable=False),
        sa.Column("good", sa.BigInteger(), nullable=True),
        sa.Column("ended_at", sa.BigInteger(), nullable=True),
        sa.Column("ended_at_offset", sa.SmallInteger(), nullable=True),
        sa.CheckConstraint("good BETWEEN 0 AND 1000", name=op.f("ck_plate_version_good")),
        sa.CheckConstraint("sequence BETWEEN 0 AND 1000000", name=op.f("ck_plate_version_sequence")),
        sa.CheckConstraint("started BETWEEN 1 AND 1000", name=op.f("ck_plate_version_started")),
        sa.ForeignKeyConstraint(["lot"], ["record_index.record_id"], name=op.f("fk_plate_version_lot")),
        sa.ForeignKeyConstraint(["printer"], ["record_index.record_id"], name=op.f("fk_plate_version_printer")),
        sa.ForeignKeyConstraint(["record_id"], ["record_index.record_id"], name=op.f("fk_plate_version_record_id")),
        sa.ForeignKeyConstraint(
            ["write_number"], ["book_write.write_number"], name=op.f("fk_plate_version_write_number")
        ),
        sa.CheckConstraint("version >= 1", name=op.f("ck_plate_version_version")),
        sa.CheckConstraint("version = 1 OR version_reason IS NOT NULL", name=op.f("ck_plate_version_version_reason")),
        sa.PrimaryKeyConstraint("row_number", name=op.f("pk_plate_version")),
        sa.UniqueConstraint("record_id", "version", name=op.f("uq_plate_version_record_id_version")),
    )
    op.create_index("ix_plate_version_happened_at", "plate_version", ["happened_at"], unique=False)
    op.create_index("ix_plate_version_lot", "plate_version", ["lot"], unique=False)
    op.create_index("ix_plate_version_printer", "plate_version", ["printer"], unique=False)
    op.create_index("ix_plate_version_write_number", "plate_version", ["write_number"], unique=False)


def _position_version() -> None:
    op.create_table(
        "position_version",
        sa.Column("row_number", sa.Integer(), autoincrement=True, nullable=False),
        sa.Column("record_id", sa.String(length=40), nullable=False),
        sa.Column("version", sa.Integer(), nullable=False),
        sa.Column("write_number", sa.Integer(), nullable=False),
        sa.Column("entered_at", sa.BigInteger(), nullable=False),
        sa.Column("entered_at_claimed", sa.Boolean(), nullable=False),
        sa.Column("entered_by", sa.String(length=60), nullable=False),
        sa.Column("version_reason", sa.Text(), nullable=True),
        sa.Column("withdrawn", sa.Boolean(), nullable=False),
        sa.Column("valid_from", sa.BigInteger(), nullable=True),
        sa.Column("valid_from_offset", sa.SmallInteger(), nullable=True),
        sa.Column("robot", sa.String(length=40), nullable=False),
        sa.Column("code", sa.String(length=60), nullable=False),
        sa.Column("label", sa.Text(), nullable=False),
        sa.Column("limb", sa.Text(), nullable=False),
        sa.Column("side", sa.String(length=60), nullable=False),
        sa.Column("rank", sa.BigInteger(), nullable=False),
        sa.Column("unit_design", sa.String(length=40), nullable=False),
        sa.Column("turns_per_hour", sa.Float(), nullable=False),
        sa.CheckConstraint("side IN ('left', 'right', 'trunk')", name=op.f("ck_position_version_side")),
        sa.CheckConstraint("rank BETWEEN 0 AND 1000", name=op.f("ck_position_version_rank")),
        sa.CheckConstraint("turns_per_hour BETWEEN 0 AND 1000000.0", name=op.f("ck_position_version_turns_per_hour")),
        sa.ForeignKeyConstraint(["record_id"], ["record_index.record_id"], name=op.f("fk_position_version_record_id")),
        sa.ForeignKeyConstraint(["robot"], ["record_index.record_id"], name=op.f("fk_position_version_robot")),
        sa.ForeignKeyConstraint(
            ["unit_design"], ["record_index.record_id"], name=op.f("fk_position_version_unit_design")
        ),
        sa.ForeignKeyConstraint(
            ["write_number"], ["book_write.write_number"], name=op.f("fk_position_version_write_number")
        ),
        sa.CheckConstraint("version >= 1", name=op.f("ck_position_version_version")),
        sa.CheckConstraint(
            "version = 1 OR version_reason IS NOT NULL", name=op.f("ck_position_version_version_reason")
        ),
        sa.PrimaryKeyConstraint("row_number", name=op.f("pk_position_version")),
        sa.UniqueConstraint("record_id", "version", name=op.f("uq_position_version_record_id_version")),
    )
    op.create_index("ix_position_version_robot", "position_version", ["robot"], unique=False)
    op.create_index("ix_position_version_unit_design", "position_version", ["unit_design"], unique=False)
    op.create_index("ix_position_version_write_number", "position_version", ["write_number"], unique=False)


def _presence_version() -> None:
    op.create_table(
        "presence_version",
        sa.Column("row_number", sa.Integer(), autoincrement=True, nullable=False),
        sa.Column("record_id", sa.String(length=40), nullable=False),
        sa.Column("version", sa.Integer(), nullable=False),
        sa.Column("write_number", sa.Integer(), nullable=False),
        sa.Column("entered_at", sa.BigInteger(), nullable=False),
        sa.Column("entered_at_claimed", sa.Boolean(), nullable=False),
        sa.Column("entered_by", sa.String(length=60), nullable=False),
        sa.Column("version_reason", sa.Text(), nullable=True),
        sa.Column("withdrawn", sa.Boolean(), nullable=False),
        sa.Column("valid_from", sa.BigInteger(), nullable=True),
        sa.Column("valid_from_offset", sa.SmallInteger(), nullable=True),
        sa.Column("weekday", sa.String(length=60), nullable=False),
        sa.Column("start_minute", sa.BigInteger(), nullable=False),
        sa.Column("end_minute", sa.BigInteger(), nullable=False),
        sa.CheckConstraint(
            "weekday IN ('Monday', 'Tuesday', 'Wednesday', 'Thursday', 'Friday', 'Saturday', 'Sunday')",
            name=op.f("ck_presence_version_weekday"),
        ),
        sa.CheckConstraint("end_minute BETWEEN 0 AND 1440", name=op.f("ck_presence_version_end_minute")),
        sa.CheckConstraint("start_minute BETWEEN 0 AND 1440", name=op.f("ck_presence_version_start_minute")),
        sa.ForeignKeyConstraint(["record_id"], ["record_index.record_id"], name=op.f("fk_presence_version_record_id")),
        sa.ForeignKeyConstraint(
            ["write_number"], ["book_write.write_number"], name=op.f("fk_presence_version_write_number")
        ),
        sa.CheckConstraint("version >= 1", name=op.f("ck_presence_version_version")),
        sa.CheckConstraint(
            "version = 1 OR version_reason IS NOT NULL", name=op.f("ck_presence_version_version_reason")
        ),
        sa.PrimaryKeyConstraint("row_number", name=op.f("pk_presence_version")),
        sa.UniqueConstraint("record_id", "version", name=op.f("uq_presence_version_record_id_version")),
    )
    op.create_index("ix_presence_version_write_number", "presence_version", ["write_number"], unique=False)


def _printer_version() -> None:
    op.create_table(
        "printer_version",
        sa.Column("row_number", sa.Integer(), autoincrement=True, nullable=False),
        sa.Column("record_id", sa.String(length=40), nullable=False),
        sa.Column("version", sa.Integer(), nullable=False),
        sa.Column("write_number", sa.Integer(), nullable=False),
        sa.Column("entered_at", sa.BigInteger(), nullable=False),
        sa.Column("entered_at_claimed", sa.Boolean(), nullable=False),
        sa.Column("entered_by", sa.String(length=60), nullable=False),
        sa.Column("version_reason", sa.Text(), nullable=True),
        sa.Column("withdrawn", sa.Boolean(), nullable=False),
        sa.Column("valid_from", sa.BigInteger(), nullable=True),
        sa.Column("valid_from_offset", sa.SmallInteger(), nullable=True),
        sa.Column("code", sa.String(length=60), nullable=False),
        sa.Column("label", sa.Text(), nullable=False),
        sa.Column("nozzle_mm", sa.Float(), nullable=False),
        sa.Column("change_minutes", sa.Float(), nullable=False),
        sa.CheckConstraint("change_minutes BETWEEN 0 AND 300", name=op.f("ck_printer_version_change_minutes")),
        sa.CheckConstraint("nozzle_mm BETWEEN 0.05 AND 3", name=op.f("ck_printer_version_nozzle_mm")),
        sa.ForeignKeyConstraint(["record_id"], ["record_index.record_id"], name=op.f("fk_printer_version_record_id")),
        sa.ForeignKeyConstraint(
            ["write_number"], ["book_write.write_number"], name=op.f("fk_printer_version_write_number")
        ),
        sa.CheckConstraint("version >= 1", name=op.f("ck_printer_version_version")),
        sa.CheckConstraint("version = 1 OR version_reason IS NOT NULL", name=op.f("ck_printer_version_version_reason")),
        sa.PrimaryKeyConstraint("row_number", name=op.f("pk_printer_version")),
        sa.UniqueConstraint("record_id", "version", name=op.f("uq_printer_version_record_id_version")),
    )
    op.create_index("ix_printer_version_write_number", "printer_version", ["write_number"], unique=False)


def _purchase_version() -> None:
    op.create_table(
        "purchase_version",
        sa.Column("row_number", sa.Integer(), autoincrement=True, nullable=False),
        sa.Column("record_id", sa.String(length=40), nullable=False),
        sa.Column("version", sa.Integer(), nullable=False),
        sa.Column("write_number", sa.Integer(), nullable=False),
        sa.Column("entered_at", sa.BigInteger(), nullable=False),
        sa.Column("entered_at_claimed", sa.Boolean(), nullable=False),
        sa.Column("entered_by", sa.String(length=60), nullable=False),
        sa.Column("version_reason", sa.Text(), nullable=True),
        sa.Column("withdrawn", sa.Boolean(), nullable=False),
        sa.Column("happened_at", sa.BigInteger(), nullable=False),
        sa.Column("happened_at_offset", sa.SmallInteger(), nullable=False),
        sa.Column("happened_until", sa.BigInteger(), nullable=True),
        sa.Column("happened_until_offset", sa.SmallInteger(), nullable=True),
        sa.Column("sequence", sa.BigInteger(), nullable=False),
        sa.Column("code", sa.String(length=60), nullable=False),
        sa.Column("part_type", sa.String(length=40), nullable=False),
        sa.Column("revision", sa.String(length=40), nullable=True),
        sa.Column("quantity", sa.BigInteger(), nullable=False),
        sa.Column("due_at", sa.BigInteger(), nullable=False),
        sa.Column("due_at_offset", sa.SmallInteger(), nullable=False),
        sa.CheckConstraint("quantity BETWEEN 1 AND 1000000", name=op.f("ck_purchase_version_quantity")),
        sa.CheckConstraint("sequence BETWEEN 0 AND 1000000", name=op.f("ck_purchase_version_sequence")),
        sa.ForeignKeyConstraint(["part_type"], ["record_index.record_id"], name=op.f("fk_purchase_version_part_type")),
        sa.ForeignKeyConstraint(["record_id"], ["record_index.record_id"], name=op.f("fk_purchase_version_record_id")),
        sa.ForeignKeyConstraint(["revision"], ["record_index.record_id"], name=op.f("fk_purchase_version_revision")),
        sa.ForeignKeyConstraint(
            ["write_number"], ["book_write.write_number"], name=op.f("fk_purchase_version_write_number")
        ),
        sa.CheckConstraint("version >= 1", name=op.f("ck_purchase_version_version")),
        sa.CheckConstraint(
            "version = 1 OR version_reason IS NOT NULL", name=op.f("ck_purchase_version_version_reason")
        ),
        sa.PrimaryKeyConstraint("row_number", name=op.f("pk_purchase_version")),
        sa.UniqueConstraint("record_id", "version", name=op.f("uq_purchase_version_record_id_version")),
    )
    op.create_index("ix_purchase_version_happened_at", "purchase_version", ["happened_at"], unique=False)
    op.create_index("ix_purchase_version_part_type", "purchase_version", ["part_type"], unique=False)
    op.create_index("ix_purchase_version_revision", "purchase_version", ["revision"], unique=False)
    op.create_index("ix_purchase_version_write_number", "purchase_version", ["write_number"], unique=False)


def _release_version() -> None:
    op.create_table(
        "release_version",
        sa.Column("row_number", sa.Integer(), autoincrement=True, nullable=False),
        sa.Column("record_id", sa.String(length=40), nullable=False),
        sa.Column("version", sa.Integer(), nullable=False),
        sa.Column("write_number", sa.Integer(), nullable=False),
        sa.Column("entered_at", sa.BigInteger(), nullable=False),
        sa.Column("entered_at_claimed", sa.Boolean(), nullable=False),
        sa.Column("entered_by", sa.String(length=60), nullable=False),
        sa.Column("version_reason", sa.Text(), nullable=True),
        sa.Column("withdrawn", sa.Boolean(), nullable=False),
        sa.Column("happened_at", sa.BigInteger(), nullable=False),
        sa.Column("happened_at_offset", sa.SmallInteger(), nullable=False),
        sa.Column("happened_until", sa.BigInteger(), nullable=True),
        sa.Column("happened_until_offset", sa.SmallInteger(), nullable=True),
        sa.Column("sequence", sa.BigInteger(), nullable=False),
        sa.Column("hold", sa.String(length=40), nullable=False),
        sa.Column("why", sa.Text(), nullable=False),
        sa.CheckConstraint("sequence BETWEEN 0 AND 1000000", name=op.f("ck_release_version_sequence")),
        sa.ForeignKeyConstraint(["hold"], ["record_index.record_id"], name=op.f("fk_release_version_hold")),
        sa.ForeignKeyConstraint(["record_id"], ["record_index.record_id"], name=op.f("fk_release_version_record_id")),
        sa.ForeignKeyConstraint(
            ["write_number"], ["book_write.write_number"], name=op.f("fk_release_version_write_number")
        ),
        sa.CheckConstraint("version >= 1", name=op.f("ck_release_version_version")),
        sa.CheckConstraint("version = 1 OR version_reason IS NOT NULL", name=op.f("ck_release_version_version_reason")),
        sa.PrimaryKeyConstraint("row_number", name=op.f("pk_release_version")),
        sa.UniqueConstraint("record_id", "version", name=op.f("uq_release_version_record_id_version")),
    )
    op.create_index("ix_release_version_happened_at", "release_version", ["happened_at"], unique=False)
    op.create_index("ix_release_version_hold", "release_version", ["hold"], unique=False)
    op.create_index("ix_release_version_write_number", "release_version", ["write_number"], unique=False)


def _removal_version() -> None:
    op.create_table(
        "removal_version",
        sa.Column("row_number", sa.Integer(), autoincrement=True, nullable=False),
        sa.Column("record_id", sa.String(length=40), nullable=False),
        sa.Column("version", sa.Integer(), nullable=False),
        sa.Column("write_number", sa.Integer(), nullable=False),
        sa.Column("entered_at", sa.BigInteger(), nullable=False),
        sa.Column("entered_at_claimed", sa.Boolean(), nullable=False),
        sa.Column("entered_by", sa.String(length=60), nullable=False),
        sa.Column("version_reason", sa.Text(), nullable=True),
        sa.Column("withdrawn", sa.Boolean(), nullable=False),
        sa.Column("happened_at", sa.BigInteger(), nullable=False),
        sa.Column("happened_at_offset", sa.SmallInteger(), nullable=False),
        sa.Column("happened_until", sa.BigInteger(), nullable=True),
        sa.Column("happened_until_offset", sa.SmallInteger(), nullable=True),
        sa.Column("sequence", sa.BigInteger(), nullable=False),
        sa.Column("fitment", sa.String(length=40), nullable=False),
        sa.Column("place", sa.BigInteger(), nullable=True),
        sa.Column("reason", sa.String(length=60), nullable=False),
        sa.Column("looked_bad", sa.Boolean(), nullable=False),
        sa.CheckConstraint(
            "reason IN ('failed', 'found worn', 'replaced while good', 'moved', 'broken by another part', 'unknown')",
            name=op.f("ck_removal_version_reason"),
        ),
        sa.CheckConstraint("place BETWEEN 1 AND 1000", name=op.f("ck_removal_version_place")),
        sa.CheckConstraint("sequence BETWEEN 0 AND 1000000", name=op.f("ck_removal_version_sequence")),
        sa.ForeignKeyConstraint(["fitment"], ["record_index.record_id"], name=op.f("fk_removal_version_fitment")),
        sa.ForeignKeyConstraint(["record_id"], ["record_index.record_id"], name=op.f("fk_removal_version_record_id")),
        sa.ForeignKeyConstraint(
            ["write_number"], ["book_write.write_number"], name=op.f("fk_removal_version_write_number")
        ),
        sa.CheckConstraint("version >= 1", name=op.f("ck_removal_version_version")),
        sa.CheckConstraint("version = 1 OR version_reason IS NOT NULL", name=op.f("ck_removal_version_version_reason")),
        sa.PrimaryKeyConstraint("row_number", name=op.f("pk_removal_version")),
        sa.UniqueConstraint("record_id", "version", name=op.f("uq_removal_version_record_id_version")),
    )
    op.create_index("ix_removal_version_fitment", "removal_version", ["fitment"], unique=False)
    op.create_index("ix_removal_version_happened_at", "removal_version", ["happened_at"], unique=False)
    op.create_index("ix_removal_version_write_number", "removal_version", ["write_number"], unique=False)


def _revision_version() -> None:
    op.create_table(
        "revision_version",
        sa.Column("row_number", sa.Integer(), autoincrement=True, nullable=False),
        sa.Column("record_id", sa.String(length=40), nullable=False),
        sa.Column("version", sa.Integer(), nullable=False),
        sa.Column("write_number", sa.Integer(), nullable=False),
        sa.Column("entered_at", sa.BigInteger(), nullable=False),
        sa.Column("entered_at_claimed", sa.Boolean(), nullable=False),
        sa.Column("entered_by", sa.String(length=60), nullable=False),
        sa.Column("version_reason", sa.Text(), nullable=True),
        sa.Column("withdrawn", sa.Boolean(), nullable=False),
        sa.Column("valid_from", sa.BigInteger(), nullable=True),
        sa.Column("valid_from_offset", sa.SmallInteger(), nullable=True),
        sa.Column("part_type", sa.String(length=40), nullable=False),
        sa.Column("code", sa.String(length=60), nullable=False),
        sa.Column("superseded", sa.Boolean(), nullable=False),
        sa.Column("note", sa.Text(), nullable=True),
        sa.ForeignKeyConstraint(["part_type"], ["record_index.record_id"], name=op.f("fk_revision_version_part_type")),
        sa.ForeignKeyConstraint(["record_id"], ["record_index.record_id"], name=op.f("fk_revision_version_record_id")),
        sa.ForeignKeyConstraint(
            ["write_number"], ["book_write.write_number"], name=op.f("fk_revision_version_write_number")
        ),
        sa.CheckConstraint("version >= 1", name=op.f("ck_revision_version_version")),
        sa.CheckConstraint(
            "version = 1 OR version_reason IS NOT NULL", name=op.f("ck_revision_version_version_reason")
        ),
        sa.PrimaryKeyConstraint("row_number", name=op.f("pk_revision_version")),
        sa.UniqueConstraint("record_id", "version", name=op.f("uq_revision_version_record_id_version")),
    )
    op.create_index("ix_revision_version_part_type", "revision_version", ["part_type"], unique=False)
    op.create_index("ix_revision_version_write_number", "revision_version", ["write_number"], unique=False)


def _robot_version() -> None:
    op.create_table(
        "robot_version",
        sa.Column("row_number", sa.Integer(), autoincrement=True, nullable=False),
        sa.Column("record_id", sa.String(length=40), nullable=False),
        sa.Column("version", sa.Integer(), nullable=False),
        sa.Column("write_number", sa.Integer(), nullable=False),
        sa.Column("entered_at", sa.BigInteger(), nullable=False),
        sa.Column("entered_at_claimed", sa.Boolean(), nullable=False),
        sa.Column("entered_by", sa.String(length=60), nullable=False),
        sa.Column("version_reason", sa.Text(), nullable=True),
        sa.Column("withdrawn", sa.Boolean(), nullable=False),
        sa.Column("valid_from", sa.BigInteger(), nullable=True),
        sa.Column("valid_from_offset", sa.SmallInteger(), nullable=True),
        sa.Column("code", sa.String(length=60), nullable=False),
        sa.Column("label", sa.Text(), nullable=False),
        sa.Column("site", sa.Text(), nullable=True),
        sa.Column("in_service_from", sa.BigInteger(), nullable=False),
        sa.Column("in_service_from_offset", sa.SmallInteger(), nullable=False),
        sa.Column("in_service_to", sa.BigInteger(), nullable=True),
        sa.Column("in_service_to_offset", sa.SmallInteger(), nullable=True),
        sa.ForeignKeyConstraint(["record_id"], ["record_index.record_id"], name=op.f("fk_robot_version_record_id")),
        sa.ForeignKeyConstraint(
            ["write_number"], ["book_write.write_number"], name=op.f("fk_robot_version_write_number")
        ),
        sa.CheckConstraint("version >= 1", name=op.f("ck_robot_version_version")),
        sa.CheckConstraint("version = 1 OR version_reason IS NOT NULL", name=op.f("ck_robot_version_version_reason")),
        sa.PrimaryKeyConstraint("row_number", name=op.f("pk_robot_version")),
        sa.UniqueConstraint("record_id", "version", name=op.f("uq_robot_version_record_id_version")),
    )
    op.create_index("ix_robot_version_write_number", "robot_version", ["write_number"], unique=False)


def _session_use_version() -> None:
    op.create_table(
        "session_use_version",
        sa.Column("row_number", sa.Integer(), autoincrement=True, nullable=False),
        sa.Column("record_id", sa.String(length=40), nullable=False),
        sa.Column("version", sa.Integer(), nullable=False),
        sa.Column("write_number", sa.Integer(), nullable=False),
        sa.Column("entered_at", sa.BigInteger(), nullable=False),
        sa.Column("entered_at_claimed", sa.Boolean(), nullable=False),
        sa.Column("entered_by", sa.String(length=60), nullable=False),
        sa.Column("version_reason", sa.Text(), nullable=True),
        sa.Column("withdrawn", sa.Boolean(), nullable=False),
        sa.Column("happened_at", sa.BigInteger(), nullable=False),
        sa.Column("happened_at_offset", sa.SmallInteger(), nullable=False),
        sa.Column("happened_until", sa.BigInteger(), nullable=True),
        sa.Column("happened_until_offset", sa.SmallInteger(), nullable=True),
        sa.Column("sequence", sa.BigInteger(), nullable=False),
        sa.Column("session", sa.String(length=40), nullable=False),
        sa.Column("position", sa.String(length=40), nullable=False),
        sa.Column("run_seconds", sa.BigInteger(), nullable=True),
        sa.Column("load_seconds", sa.BigInteger(), nullable=True),
        sa.Column("turns", sa.BigInteger(), nullable=True),
        sa.Column("impacts", sa.BigInteger(), nullable=True),
        sa.Column("basis", sa.String(length=60), nullable=False),
        sa.CheckConstraint("basis IN ('counted', 'from log', 'planned')", name=op.f("ck_session_use_version_basis")),
        sa.CheckConstraint("impacts BETWEEN 0 AND 1000000", name=op.f("ck_session_use_version_impacts")),
        sa.CheckConstraint("load_seconds BETWEEN 0 AND 2678400", name=op.f("ck_session_use_version_load_seconds")),
        sa.CheckConstraint("run_seconds BETWEEN 0 AND 2678400", name=op.f("ck_session_use_version_run_seconds")),
        sa.CheckConstraint("sequence BETWEEN 0 AND 1000000", name=op.f("ck_session_use_version_sequence")),
        sa.CheckConstraint("turns BETWEEN 0 AND 1000000000", name=op.f("ck_session_use_version_turns")),
        sa.ForeignKeyConstraint(["position"], ["record_index.record_id"], name=op.f("fk_session_use_version_position")),
        sa.ForeignKeyConstraint(
            ["record_id"], ["record_index.record_id"], name=op.f("fk_session_use_version_record_id")
        ),
        sa.ForeignKeyConstraint(["session"], ["record_index.record_id"], name=op.f("fk_session_use_version_session")),
        sa.ForeignKeyConstraint(
            ["write_number"], ["book_write.write_number"], name=op.f("fk_session_use_version_write_number")
        ),
        sa.CheckConstraint("version >= 1", name=op.f("ck_session_use_version_version")),
        sa.CheckConstraint(
            "version = 1 OR version_reason IS NOT NULL", name=op.f("ck_session_use_version_version_reason")
        ),
        sa.PrimaryKeyConstraint("row_number", name=op.f("pk_session_use_version")),
        sa.UniqueConstraint("record_id", "version", name=op.f("uq_session_use_version_record_id_version")),
    )
    op.create_index("ix_session_use_version_happened_at", "session_use_version", ["happened_at"], unique=False)
    op.create_index("ix_session_use_version_position", "session_use_version", ["position"], unique=False)
    op.create_index("ix_session_use_version_session", "session_use_version", ["session"], unique=False)
    op.create_index("ix_session_use_version_write_number", "session_use_version", ["write_number"], unique=False)


def _session_version() -> None:
    op.create_table(
        "session_version",
        sa.Column("row_number", sa.Integer(), autoincrement=True, nullable=False),
        sa.Column("record_id", sa.String(length=40), nullable=False),
        sa.Column("version", sa.Integer(), nullable=False),
        sa.Column("write_number", sa.Integer(), nullable=False),
        sa.Column("entered_at", sa.BigInteger(), nullable=False),
        sa.Column("entered_at_claimed", sa.Boolean(), nullable=False),
        sa.Column("entered_by", sa.String(length=60), nullable=False),
        sa.Column("version_reason", sa.Text(), nullable=True),
        sa.Column("withdrawn", sa.Boolean(), nullable=False),
        sa.Column("happened_at", sa.BigInteger(), nullable=False),
        sa.Column("happened_at_offset", sa.SmallInteger(), nullable=False),
        sa.Column("happened_until", sa.BigInteger(), nullable=True),
        sa.Column("happened_until_offset", sa.SmallInteger(), nullable=True),
        sa.Column("sequence", sa.BigInteger(), nullable=False),
        sa.Column("robot", sa.String(length=40), nullable=False),
        sa.Column("ended_at", sa.BigInteger(), nullable=False),
        sa.Column("ended_at_offset", sa.SmallInteger(), nullable=False),
        sa.Column("run_seconds", sa.BigInteger(), nullable=False),
        sa.Column("impacts", sa.BigInteger(), nullable=False),
        sa.Column("outcome", sa.String(length=60), nullable=False),
        sa.Column("note", sa.Text(), nullable=True),
        sa.CheckConstraint("outcome IN ('finished', 'stopped', 'broken off')", name=op.f("ck_session_version_outcome")),
        sa.CheckConstraint("impacts BETWEEN 0 AND 1000000", name=op.f("ck_session_version_impacts")),
        sa.CheckConstraint("run_seconds BETWEEN 0 AND 2678400", name=op.f("ck_session_version_run_seconds")),
        sa.CheckConstraint("sequence BETWEEN 0 AND 1000000", name=op.f("ck_session_version_sequence")),
        sa.ForeignKeyConstraint(["record_id"], ["record_index.record_id"], name=op.f("fk_session_version_record_id")),
        sa.ForeignKeyConstraint(["robot"], ["record_index.record_id"], name=op.f("fk_session_version_robot")),
        sa.ForeignKeyConstraint(
            ["write_number"], ["book_write.write_number"], name=op.f("fk_session_version_write_number")
        ),
        sa.CheckConstraint("version >= 1", name=op.f("ck_session_version_version")),
        sa.CheckConstraint("version = 1 OR version_reason IS NOT NULL", name=op.f("ck_session_version_version_reason")),
        sa.PrimaryKeyConstraint("row_number", name=op.f("pk_session_version")),
        sa.UniqueConstraint("record_id", "version", name=op.f("uq_session_version_record_id_version")),
    )
    op.create_index("ix_session_version_happened_at", "session_version", ["happened_at"], unique=False)
    op.create_index("ix_session_version_robot", "session_version", ["robot"], unique=False)
    op.create_index("ix_session_version_write_number", "session_version", ["write_number"], unique=False)


def _settings_version() -> None:
    op.create_table(
        "settings_version",
        sa.Column("row_number", sa.Integer(), autoincrement=True, nullable=False),
        sa.Column("record_id", sa.String(length=40), nullable=False),
        sa.Column("version", sa.Integer(), nullable=False),
        sa.Column("write_number", sa.Integer(), nullable=False),
        sa.Column("entered_at", sa.BigInteger(), nullable=False),
        sa.Column("entered_at_claimed", sa.Boolean(), nullable=False),
        sa.Column("entered_by", sa.String(length=60), nullable=False),
        sa.Column("version_reason", sa.Text(), nullable=True),
        sa.Column("withdrawn", sa.Boolean(), nullable=False),
        sa.Column("valid_from", sa.BigInteger(), nullable=True),
        sa.Column("valid_from_offset", sa.SmallInteger(), nullable=True),
        sa.Column("title", sa.Text(), nullable=False),
        sa.Column("zone", sa.String(length=60), nullable=False),
        sa.Column("currency", sa.String(length=60), nullable=False),
        sa.ForeignKeyConstraint(["record_id"], ["record_index.record_id"], name=op.f("fk_settings_version_record_id")),
        sa.ForeignKeyConstraint(
            ["write_number"], ["book_write.write_number"], name=op.f("fk_settings_version_write_number")
        ),
        sa.CheckConstraint("version >= 1", name=op.f("ck_settings_version_version")),
        sa.CheckConstraint(
            "version = 1 OR version_reason IS NOT NULL", name=op.f("ck_settings_version_version_reason")
        ),
        sa.PrimaryKeyConstraint("row_number", name=op.f("pk_settings_version")),
        sa.UniqueConstraint("record_id", "version", name=op.f("uq_settings_version_record_id_version")),
    )
    op.create_index("ix_settings_version_write_number", "settings_version", ["write_number"], unique=False)


def _slot_version() -> None:
    op.create_table(
        "slot_version",
        sa.Column("row_number", sa.Integer(), autoincrement=True, nullable=False),
        sa.Column("record_id", sa.String(length=40), nullable=False),
        sa.Column("version", sa.Integer(), nullable=False),
        sa.Column("write_number", sa.Integer(), nullable=False),
        sa.Column("entered_at", sa.BigInteger(), nullable=False),
        sa.Column("entered_at_claimed", sa.Boolean(), nullable=False),
        sa.Column("entered_by", sa.String(length=60), nullable=False),
        sa.Column("version_reason", sa.Text(), nullable=True),
        sa.Column("withdrawn", sa.Boolean(), nullable=False),
        sa.Column("valid_from", sa.BigInteger(), nullable=True),
        sa.Column("valid_from_offset", sa.SmallInteger(), nullable=True),
        sa.Column("unit_design", sa.String(length=40), nullable=False),
        sa.Column("code", sa.String(length=60), nullable=False),
        sa.Column("part_type", sa.String(length=40), nullable=False),
        sa.Column("count", sa.BigInteger(), nullable=False),
        sa.Column("open_minutes", sa.Float(), nullable=False),
        sa.Column("replace_minutes", sa.Float(), nullable=False),
        sa.Column("stops_at", sa.BigInteger(), nullable=True),
        sa.CheckConstraint("count BETWEEN 1 AND 1000", name=op.f("ck_slot_version_count")),
        sa.CheckConstraint("open_minutes BETWEEN 0 AND 1000", name=op.f("ck_slot_version_open_minutes")),
        sa.CheckConstraint("replace_minutes BETWEEN 0 AND 1000", name=op.f("ck_slot_version_replace_minutes")),
        sa.CheckConstraint("stops_at BETWEEN 1 AND 1000", name=op.f("ck_slot_version_stops_at")),
        sa.ForeignKeyConstraint(["part_type"], ["record_index.record_id"], name=op.f("fk_slot_version_part_type")),
        sa.ForeignKeyConstraint(["record_id"], ["record_index.record_id"], name=op.f("fk_slot_version_record_id")),
        sa.ForeignKeyConstraint(["unit_design"], ["record_index.record_id"], name=op.f("fk_slot_version_unit_design")),
        sa.ForeignKeyConstraint(
            ["write_number"], ["book_write.write_number"], name=op.f("fk_slot_version_write_number")
        ),
        sa.CheckConstraint("version >= 1", name=op.f("ck_slot_version_version")),
        sa.CheckConstraint("version = 1 OR version_reason IS NOT NULL", name=op.f("ck_slot_version_version_reason")),
        sa.PrimaryKeyConstraint("row_number", name=op.f("pk_slot_version")),
        sa.UniqueConstraint("record_id", "version", name=op.f("uq_slot_version_record_id_version")),
    )
    op.create_index("ix_slot_version_part_type", "slot_version", ["part_type"], unique=False)
    op.create_index("ix_slot_version_unit_design", "slot_version", ["unit_design"], unique=False)
    op.create_index("ix_slot_version_write_number", "slot_version", ["write_number"], unique=False)


def _spool_version() -> None:
    op.create_table(
        "spool_version",
        sa.Column("row_number", sa.Integer(), autoincrement=True, nullable=False),
        sa.Column("record_id", sa.String(length=40), nullable=False),
        sa.Column("version", sa.Integer(), nullable=False),
        sa.Column("write_number", sa.Integer(), nullable=False),
        sa.Column("entered_at", sa.BigInteger(), nullable=False),
        sa.Column("entered_at_claimed", sa.Boolean(), nullable=False),
        sa.Column("entered_by", sa.String(length=60), nullable=False),
        sa.Column("version_reason", sa.Text(), nullable=True),
        sa.Column("withdrawn", sa.Boolean(), nullable=False),
        sa.Column("valid_from", sa.BigInteger(), nullable=True),
        sa.Column("valid_from_offset", sa.SmallInteger(), nullable=True),
        sa.Column("code", sa.String(length=60), nullable=False),
        sa.Column("material", sa.String(length=60), nullable=False),
        sa.Column("grams_left", sa.Float(), nullable=False),
        sa.CheckConstraint("grams_left BETWEEN 0 AND 50000", name=op.f("ck_spool_version_grams_left")),
        sa.ForeignKeyConstraint(["record_id"], ["record_index.record_id"], name=op.f("fk_spool_version_record_id")),
        sa.ForeignKeyConstraint(
            ["write_number"], ["book_write.write_number"], name=op.f("fk_spool_version_write_number")
        ),
        sa.CheckConstraint("version >= 1", name=op.f("ck_spool_version_version")),
        sa.CheckConstraint("version = 1 OR version_reason IS NOT NULL", name=op.f("ck_spool_version_version_reason")),
        sa.PrimaryKeyConstraint("row_number", name=op.f("pk_spool_version")),
        sa.UniqueConstraint("record_id", "version", name=op.f("uq_spool_version_record_id_version")),
    )
    op.create_index("ix_spool_version_write_number", "spool_version", ["write_number"], unique=False)


def _stock_move_version() -> None:
    op.create_table(
        "stock_move_version",
        sa.Column("row_number", sa.Integer(), autoincrement=True, nullable=False),
        sa.Column("record_id", sa.String(length=40), nullable=False),
        sa.Column("version", sa.Integer(), nullable=False),
        sa.Column("write_number", sa.Integer(), nullable=False),
        sa.Column("entered_at", sa.BigInteger(), nullable=False),
        sa.Column("entered_at_claimed", sa.Boolean(), nullable=False),
        sa.Column("entered_by", sa.String(length=60), nullable=False),
        sa.Column("version_reason", sa.Text(), nullable=True),
        sa.Column("withdrawn", sa.Boolean(), nullable=False),
        sa.Column("happened_at", sa.BigInteger(), nullable=False),
        sa.Column("happened_at_offset", sa.SmallInteger(), nullable=False),
        sa.Column("happened_until", sa.BigInteger(), nullable=True),
        sa.Column("happened_until_offset", sa.SmallInteger(), nullable=True),
        sa.Column("sequence", sa.BigInteger(), nullable=False),
        sa.Column("lot", sa.String(length=40), nullable=False),
        sa.Column("quantity", sa.BigInteger(), nullable=False),
        sa.Column("reason", sa.String(length=60), nullable=False),
        sa.Column("purchase", sa.String(length=40), nullable=True),
        sa.CheckConstraint(
            "reason IN ('received', 'counted', 'scrapped', 'returned')", name=op.f("ck_stock_move_version_reason")
        ),
        sa.CheckConstraint("quantity BETWEEN 0 AND 1000000", name=op.f("ck_stock_move_version_quantity")),
        sa.CheckConstraint("sequence BETWEEN 0 AND 1000000", name=op.f("ck_stock_move_version_sequence")),
        sa.ForeignKeyConstraint(["lot"], ["record_index.record_id"], name=op.f("fk_stock_move_version_lot")),
        sa.ForeignKeyConstraint(["purchase"], ["record_index.record_id"], name=op.f("fk_stock_move_version_purchase")),
        sa.ForeignKeyConstraint(
            ["record_id"], ["record_index.record_id"], name=op.f("fk_stock_move_version_record_id")
        ),
        sa.ForeignKeyConstraint(
            ["write_number"], ["book_write.write_number"], name=op.f("fk_stock_move_version_write_number")
        ),
        sa.CheckConstraint("version >= 1", name=op.f("ck_stock_move_version_version")),
        sa.CheckConstraint(
            "version = 1 OR version_reason IS NOT NULL", name=op.f("ck_stock_move_version_version_reason")
        ),
        sa.PrimaryKeyConstraint("row_number", name=op.f("pk_stock_move_version")),
        sa.UniqueConstraint("record_id", "version", name=op.f("uq_stock_move_version_record_id_version")),
    )
    op.create_index("ix_stock_move_version_happened_at", "stock_move_version", ["happened_at"], unique=False)
    op.create_index("ix_stock_move_version_lot", "stock_move_version", ["lot"], unique=False)
    op.create_index("ix_stock_move_version_purchase", "stock_move_version", ["purchase"], unique=False)
    op.create_index("ix_stock_move_version_write_number", "stock_move_version", ["write_number"], unique=False)


def _unit_design_version() -> None:
    op.create_table(
        "unit_design_version",
        sa.Column("row_number", sa.Integer(), autoincrement=True, nullable=False),
        sa.Column("record_id", sa.String(length=40), nullable=False),
        sa.Column("version", sa.Integer(), nullable=False),
        sa.Column("write_number", sa.Integer(), nullable=False),
        sa.Column("entered_at", sa.BigInteger(), nullable=False),
        sa.Column("entered_at_claimed", sa.Boolean(), nullable=False),
        sa.Column("entered_by", sa.String(length=60), nullable=False),
        sa.Column("version_reason", sa.Text(), nullable=True),
        sa.Column("withdrawn", sa.Boolean(), nullable=False),
        sa.Column("valid_from", sa.BigInteger(), nullable=True),
        sa.Column("valid_from_offset", sa.SmallInteger(), nullable=True),
        sa.Column("code", sa.String(length=60), nullable=False),
        sa.Column("label", sa.Text(), nullable=False),
        sa.Column("reduction", sa.Float(), nullable=False),
        sa.CheckConstraint("reduction BETWEEN 1 AND 10000", name=op.f("ck_unit_design_version_reduction")),
        sa.ForeignKeyConstraint(
            ["record_id"], ["record_index.record_id"], name=op.f("fk_unit_design_version_record_id")
        ),
        sa.ForeignKeyConstraint(
            ["write_number"], ["book_write.write_number"], name=op.f("fk_unit_design_version_write_number")
        ),
        sa.CheckConstraint("version >= 1", name=op.f("ck_unit_design_version_version")),
        sa.CheckConstraint(
            "version = 1 OR version_reason IS NOT NULL", name=op.f("ck_unit_design_version_version_reason")
        ),
        sa.PrimaryKeyConstraint("row_number", name=op.f("pk_unit_design_version")),
        sa.UniqueConstraint("record_id", "version", name=op.f("uq_unit_design_version_record_id_version")),
    )
    op.create_index("ix_unit_design_version_write_number", "unit_design_version", ["write_number"], unique=False)


def _unit_version() -> None:
    op.create_table(
        "unit_version",
        sa.Column("row_number", sa.Integer(), autoincrement=True, nullable=False),
        sa.Column("record_id", sa.String(length=40), nullable=False),
        sa.Column("version", sa.Integer(), nullable=False),
        sa.Column("write_number", sa.Integer(), nullable=False),
        sa.Column("entered_at", sa.BigInteger(), nullable=False),
        sa.Column("entered_at_claimed", sa.Boolean(), nullable=False),
        sa.Column("entered_by", sa.String(length=60), nullable=False),
        sa.Column("version_reason", sa.Text(), nullable=True),
        sa.Column("withdrawn", sa.Boolean(), nullable=False),
        sa.Column("valid_from", sa.BigInteger(), nullable=True),
        sa.Column("valid_from_offset", sa.SmallInteger(), nullable=True),
        sa.Column("code", sa.String(length=60), nullable=False),
        sa.Column("unit_design", sa.String(length=40), nullable=False),
        sa.ForeignKeyConstraint(["record_id"], ["record_index.record_id"], name=op.f("fk_unit_version_record_id")),
        sa.ForeignKeyConstraint(["unit_design"], ["record_index.record_id"], name=op.f("fk_unit_version_unit_design")),
        sa.ForeignKeyConstraint(
            ["write_number"], ["book_write.write_number"], name=op.f("fk_unit_version_write_number")
        ),
        sa.CheckConstraint("version >= 1", name=op.f("ck_unit_version_version")),
        sa.CheckConstraint("version = 1 OR version_reason IS NOT NULL", name=op.f("ck_unit_version_version_reason")),
        sa.PrimaryKeyConstraint("row_number", name=op.f("pk_unit_version")),
        sa.UniqueConstraint("record_id", "version", name=op.f("uq_unit_version_record_id_version")),
    )
    op.create_index("ix_unit_version_unit_design", "unit_version", ["unit_design"], unique=False)
    op.create_index("ix_unit_version_write_number", "unit_version", ["write_number"], unique=False)


def _usage_plan_version() -> None:
    op.create_table(
        "usage_plan_version",
        sa.Column("row_number", sa.Integer(), autoincrement=True, nullable=False),
        sa.Column("record_id", sa.String(length=40), nullable=False),
        sa.Column("version", sa.Integer(), nullable=False),
        sa.Column("write_number", sa.Integer(), nullable=False),
        sa.Column("entered_at", sa.BigInteger(), nullable=False),
        sa.Column("entered_at_claimed", sa.Boolean(), nullable=False),
        sa.Column("entered_by", sa.String(length=60), nullable=False),
        sa.Column("version_reason", sa.Text(), nullable=True),
        sa.Column("withdrawn", sa.Boolean(), nullable=False),
        sa.Column("valid_from", sa.BigInteger(), nullable=True),
        sa.Column("valid_from_offset", sa.SmallInteger(), nullable=True),
        sa.Column("robot", sa.String(length=40), nullable=False),
        sa.Column("hours_per_week", sa.Float(), nullable=False),
        sa.Column("session_hours", sa.Float(), nullable=False),
        sa.Column("impacts_per_hour", sa.Float(), nullable=False),
        sa.CheckConstraint("hours_per_week BETWEEN 0 AND 168", name=op.f("ck_usage_plan_version_hours_per_week")),
        sa.CheckConstraint("impacts_per_hour BETWEEN 0 AND 10000", name=op.f("ck_usage_plan_version_impacts_per_hour")),
        sa.CheckConstraint("session_hours BETWEEN 0.01 AND 168", name=op.f("ck_usage_plan_version_session_hours")),
        sa.ForeignKeyConstraint(
            ["record_id"], ["record_index.record_id"], name=op.f("fk_usage_plan_version_record_id")
        ),
        sa.ForeignKeyConstraint(["robot"], ["record_index.record_id"], name=op.f("fk_usage_plan_version_robot")),
        sa.ForeignKeyConstraint(
            ["write_number"], ["book_write.write_number"], name=op.f("fk_usage_plan_version_write_number")
        ),
        sa.CheckConstraint("version >= 1", name=op.f("ck_usage_plan_version_version")),
        sa.CheckConstraint(
            "version = 1 OR version_reason IS NOT NULL", name=op.f("ck_usage_plan_version_version_reason")
        ),
        sa.PrimaryKeyConstraint("row_number", name=op.f("pk_usage_plan_version")),
        sa.UniqueConstraint("record_id", "version", name=op.f("uq_usage_plan_version_record_id_version")),
    )
    op.create_index("ix_usage_plan_version_robot", "usage_plan_version", ["robot"], unique=False)
    op.create_index("ix_usage_plan_version_write_number", "usage_plan_version", ["write_number"], unique=False)
