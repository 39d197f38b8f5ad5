"""What is worked out of the records: charge, energy, summaries, crops and flags."""

import sqlalchemy as sa
from alembic import op

revision = "0003"
down_revision = "0002"
branch_labels = None
depends_on = None

WHOLE = sa.BigInteger().with_variant(sa.INTEGER(), "sqlite")
SMALL = sa.SmallInteger().with_variant(sa.INTEGER(), "sqlite")
REAL = sa.Double().with_variant(sa.REAL(), "sqlite")


def upgrade() -> None:
    """Make the tables."""
    op.create_table(
        "charge_day",
        sa.Column("section_id", WHOLE, nullable=False),
        sa.Column("day_ms", WHOLE, autoincrement=False, nullable=False),
        sa.Column("total_c", REAL, nullable=False),
        sa.Column("estimated_c", REAL, nullable=False),
        sa.Column("before_c", REAL, nullable=False),
        sa.Column("estimated_before_c", REAL, nullable=False),
        sa.ForeignKeyConstraint(
            ["section_id"], ["section.id"], name=op.f("fk_charge_day_section_id")
        ),
        sa.PrimaryKeyConstraint("section_id", "day_ms", name=op.f("pk_charge_day")),
        sqlite_strict=True,
        sqlite_with_rowid=False,
    )
    op.create_table(
        "charge_knot",
        sa.Column("section_id", WHOLE, nullable=False),
        sa.Column("at_ms", WHOLE, autoincrement=False, nullable=False),
        sa.Column("amps", REAL, nullable=False),
        sa.Column("basis", SMALL, nullable=False),
        sa.Column("since_day_c", REAL, nullable=False),
        sa.Column("estimated_since_day_c", REAL, nullable=False),
        sa.ForeignKeyConstraint(
            ["section_id"], ["section.id"], name=op.f("fk_charge_knot_section_id")
        ),
        sa.PrimaryKeyConstraint("section_id", "at_ms", name=op.f("pk_charge_knot")),
        sqlite_strict=True,
        sqlite_with_rowid=False,
    )
    op.create_table(
        "energy_day",
        sa.Column("section_id", WHOLE, nullable=False),
        sa.Column("day_ms", WHOLE, autoincrement=False, nullable=False),
        sa.Column("charge_c", REAL, nullable=False),
        sa.Column("cell_charge_c", REAL, nullable=False),
        sa.Column("measured_charge_c", REAL, nullable=False),
        sa.Column("energy_j", REAL, nullable=True),
        sa.Column("hours", sa.LargeBinary(), nullable=False),
        sa.Column("cells", sa.LargeBinary(), nullable=False),
        sa.ForeignKeyConstraint(
            ["section_id"], ["section.id"], name=op.f("fk_energy_day_section_id")
        ),
        sa.PrimaryKeyConstraint("section_id", "day_ms", name=op.f("pk_energy_day")),
        sqlite_strict=True,
    )
    op.create_table(
        "stale",
        sa.Column("id", WHOLE, nullable=False),
        sa.Column("section_id", WHOLE, nullable=False),
        sa.Column("kind", sa.Text(), nullable=False),
        sa.Column("from_ms", WHOLE, nullable=False),
        sa.Column("to_ms", WHOLE, nullable=False),
        sa.ForeignKeyConstraint(["section_id"], ["section.id"], name=op.f("fk_stale_section_id")),
        sa.PrimaryKeyConstraint("id", name=op.f("pk_stale")),
        sqlite_strict=True,
    )
    with op.batch_alter_table("stale", schema=None) as batch_op:
        batch_op.create_index(
            "ix_stale_section_id_from_ms", ["section_id", "from_ms"], unique=False
        )

    op.create_table(
        "summary",
        sa.Column("section_id", WHOLE, nullable=False),
        sa.Column("level", sa.Text(), nullable=False),
        sa.Column("start_ms", WHOLE, autoincrement=False, nullable=False),
        sa.Column("end_ms", WHOLE, nullable=False),
        sa.Column("name", sa.Text(), nullable=False),
        sa.Column("cells_read", WHOLE, nullable=False),
        sa.Column("readings", WHOLE, nullable=False),
        sa.Column("sum_uv", WHOLE, nullable=False),
        sa.Column("cells", sa.LargeBinary(), nullable=False),
        sa.ForeignKeyConstraint(["section_id"], ["section.id"], name=op.f("fk_summary_section_id")),
        sa.PrimaryKeyConstraint("section_id", "level", "start_ms", name=op.f("pk_summary")),
        sqlite_strict=True,
    )
    op.create_table(
        "bypassed_cell",
        sa.Column("cell_id", WHOLE, nullable=False),
        sa.Column("from_ms", WHOLE, autoincrement=False, nullable=False),
        sa.Column("to_ms", WHOLE, nullable=False),
        sa.ForeignKeyConstraint(["cell_id"], ["cell.id"], name=op.f("fk_bypassed_cell_cell_id")),
        sa.PrimaryKeyConstraint("cell_id", "from_ms", name=op.f("pk_bypassed_cell")),
        sqlite_strict=True,
        sqlite_with_rowid=False,
    )
    op.create_table(
        "crop",
        sa.Column("cell_id", WHOLE, nullable=False),
        sa.Column("pulled_ms", WHOLE, autoincrement=False, nullable=False),
        sa.Column("lot_id", WHOLE, nullable=False),
        sa.Column("section_id", WHOLE, nullable=False),
        sa.Column("started_ms", WHOLE, nullable=False),
        sa.Column("cathodes", WHOLE, nullable=False),
        sa.Column("share", REAL, nullable=False),
        sa.Column("charge_c", REAL, nullable=False),
        sa.Column("estimated_c", REAL, nullable=False),
        sa.Column("metal_kg", REAL, nullable=False),
        sa.Column("is_shared", SMALL, nullable=False),
        sa.ForeignKeyConstraint(["cell_id"], ["cell.id"], name=op.f("fk_crop_cell_id")),
        sa.ForeignKeyConstraint(["lot_id"], ["lot.id"], name=op.f("fk_crop_lot_id")),
        sa.ForeignKeyConstraint(["section_id"], ["section.id"], name=op.f("fk_crop_section_id")),
        sa.PrimaryKeyConstraint("cell_id", "pulled_ms", "lot_id", name=op.f("pk_crop")),
        sqlite_strict=True,
        sqlite_with_rowid=False,
    )
    with op.batch_alter_table("crop", schema=None) as batch_op:
        batch_op.create_index("ix_crop_lot_id", ["lot_id"], unique=False)
        batch_op.create_index(
            "ix_crop_section_id_pulled_ms", ["section_id", "pulled_ms"], unique=False
        )

    op.create_table(
        "flag",
        sa.Column("cell_id", WHOLE, nullable=False),
        sa.Column("kind", sa.Text(), nullable=False),
        sa.Column("raised_ms", WHOLE, autoincrement=False, nullable=False),
        sa.Column("section_id", WHOLE, nullable=False),
        sa.Column("tier", sa.Text(), nullable=False),
        sa.Column("ended_ms", WHOLE, nullable=True),
        sa.Column("raised_by_ms", WHOLE, nullable=False),
        sa.Column("volts", REAL, nullable=True),
        sa.Column("expected_volts", REAL, nullable=True),
        sa.Column("deviation_v", REAL, nullable=True),
        sa.Column("short_amps", REAL, nullable=True),
        sa.Column("u_short_amps", REAL, nullable=True),
        sa.Column("lost_kg_per_day", REAL, nullable=True),
        sa.Column("lost_value_per_day", REAL, nullable=True),
        sa.Column("evidence", sa.Text(), nullable=False),
        sa.ForeignKeyConstraint(["cell_id"], ["cell.id"], name=op.f("fk_flag_cell_id")),
        sa.ForeignKeyConstraint(["section_id"], ["section.id"], name=op.f("fk_flag_section_id")),
        sa.PrimaryKeyConstraint("cell_id", "kind", "raised_ms", name=op.f("pk_flag")),
        sqlite_strict=True,
        sqlite_with_rowid=False,
    )
    with op.batch_alter_table("flag", schema=None) as batch_op:
        batch_op.create_index(
            "ix_flag_section_id_ended_ms", ["section_id", "ended_ms"], unique=False
        )
        batch_op.create_index(
            "ix_flag_section_id_raised_ms", ["section_id", "raised_ms"], unique=False
        )

    op.create_table(
        "latest_reading",
        sa.Column("cell_id", WHOLE, nullable=False),
        sa.Column("at_ms", WHOLE, nullable=False),
        sa.Column("microvolts", WHOLE, nullable=False),
        sa.ForeignKeyConstraint(["cell_id"], ["cell.id"], name=op.f("fk_latest_reading_cell_id")),
        sa.PrimaryKeyConstraint("cell_id", name=op.f("pk_latest_reading")),
        sqlite_strict=True,
        sqlite_with_rowid=False,
    )
    op.create_table(
        "lot_figure",
        sa.Column("section_id", WHOLE, nullable=False),
        sa.Column("pulled_ms", WHOLE, autoincrement=False, nullable=False),
        sa.Column("lot_id", WHOLE, nullable=False),
        sa.Column("metal_kg", REAL, nullable=False),
        sa.Column("net_kg", REAL, nullable=False),
        sa.Column("charge_c", REAL, nullable=False),
        sa.Column("estimated_c", REAL, nullable=False),
        sa.Column("cathodes", WHOLE, nullable=False),
        sa.ForeignKeyConstraint(["lot_id"], ["lot.id"], name=op.f("fk_lot_figure_lot_id")),
        sa.ForeignKeyConstraint(
            ["section_id"], ["section.id"], name=op.f("fk_lot_figure_section_id")
        ),
        sa.PrimaryKeyConstraint("section_id", "pulled_ms", "lot_id", name=op.f("pk_lot_figure")),
        sqlite_strict=True,
        sqlite_with_rowid=False,
    )


def downgrade() -> None:
    """Drop the tables."""
    op.drop_table("lot_figure")
    op.drop_table("latest_reading")
    with op.batch_alter_table("flag", schema=None) as batch_op:
        batch_op.drop_index("ix_flag_section_id_raised_ms")
        batch_op.drop_index("ix_flag_section_id_ended_ms")

    op.drop_table("flag")
    with op.batch_alter_table("crop", schema=None) as batch_op:
        batch_op.drop_index("ix_crop_section_id_pulled_ms")
        batch_op.drop_index("ix_crop_lot_id")

    op.drop_table("crop")
    op.drop_table("bypassed_cell")
    op.drop_table("summary")
    with op.batch_alter_table("stale", schema=None) as batch_op:
        batch_op.drop_index("ix_stale_section_id_from_ms")

    op.drop_table("stale")
    op.drop_table("energy_day")
    op.drop_table("charge_knot")
    op.drop_table("charge_day")
