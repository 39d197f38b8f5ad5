"""What is recorded: deliveries, readings, current, lots, outages, assays and finds."""

import sqlalchemy as sa
from alembic import op

revision = "0002"
down_revision = "0001"
branch_labels = None
depends_on = None

WHOLE = sa.BigInteger().with_variant(sa.INTEGER(), "sqlite")
SMALL = sa.SmallInteger().with_variant(sa.INTEGER(), "sqlite")
REAL = sa.Double().with_variant(sa.REAL(), "sqlite")


def upgrade() -> None:
    """Make the tables."""
    op.create_table(
        "delivery",
        sa.Column("id", WHOLE, nullable=False),
        sa.Column("sheet", sa.Text(), nullable=False),
        sa.Column("source", sa.Text(), nullable=False),
        sa.Column("sender", sa.Text(), nullable=False),
        sa.Column("received_ms", WHOLE, nullable=False),
        sa.Column("reason", sa.Text(), nullable=False),
        sa.Column("sha256", sa.Text(), nullable=False),
        sa.Column("dialect", sa.Text(), nullable=False),
        sa.Column("rows", WHOLE, nullable=False),
        sa.Column("stored", WHOLE, nullable=False),
        sa.Column("duplicates", WHOLE, nullable=False),
        sa.Column("held", WHOLE, nullable=False),
        sa.Column("suspect", WHOLE, nullable=False),
        sa.PrimaryKeyConstraint("id", name=op.f("pk_delivery")),
        sqlite_strict=True,
    )
    with op.batch_alter_table("delivery", schema=None) as batch_op:
        batch_op.create_index("ix_delivery_received_ms", ["received_ms"], unique=False)

    op.create_table(
        "counter_sample",
        sa.Column("section_id", WHOLE, nullable=False),
        sa.Column("at_ms", WHOLE, autoincrement=False, nullable=False),
        sa.Column("revision", SMALL, autoincrement=False, nullable=False),
        sa.Column("counter_c", REAL, nullable=True),
        sa.Column("delivery_id", WHOLE, nullable=False),
        sa.ForeignKeyConstraint(
            ["delivery_id"], ["delivery.id"], name=op.f("fk_counter_sample_delivery_id")
        ),
        sa.ForeignKeyConstraint(
            ["section_id"], ["section.id"], name=op.f("fk_counter_sample_section_id")
        ),
        sa.PrimaryKeyConstraint("section_id", "at_ms", "revision", name=op.f("pk_counter_sample")),
        sqlite_strict=True,
        sqlite_with_rowid=False,
    )
    op.create_table(
        "current_sample",
        sa.Column("section_id", WHOLE, nullable=False),
        sa.Column("at_ms", WHOLE, autoincrement=False, nullable=False),
        sa.Column("revision", SMALL, autoincrement=False, nullable=False),
        sa.Column("amps", REAL, nullable=True),
        sa.Column("delivery_id", WHOLE, nullable=False),
        sa.ForeignKeyConstraint(
            ["delivery_id"], ["delivery.id"], name=op.f("fk_current_sample_delivery_id")
        ),
        sa.ForeignKeyConstraint(
            ["section_id"], ["section.id"], name=op.f("fk_current_sample_section_id")
        ),
        sa.PrimaryKeyConstraint("section_id", "at_ms", "revision", name=op.f("pk_current_sample")),
        sqlite_strict=True,
        sqlite_with_rowid=False,
    )
    op.create_table(
        "electrolyte_sample",
        sa.Column("section_id", WHOLE, nullable=False),
        sa.Column("stream", sa.Text(), nullable=False),
        sa.Column("at_ms", WHOLE, autoincrement=False, nullable=False),
        sa.Column("revision", SMALL, autoincrement=False, nullable=False),
        sa.Column("is_void", SMALL, nullable=False),
        sa.Column("metal_g_l", REAL, nullable=True),
        sa.Column("acid_g_l", REAL, nullable=True),
        sa.Column("iron_g_l", REAL, nullable=True),
        sa.Column("ferric_g_l", REAL, nullable=True),
        sa.Column("chloride_mg_l", REAL, nullable=True),
        sa.Column("nickel_g_l", REAL, nullable=True),
        sa.Column("arsenic_g_l", REAL, nullable=True),
        sa.Column("antimony_mg_l", REAL, nullable=True),
        sa.Column("bismuth_mg_l", REAL, nullable=True),
        sa.Column("cobalt_mg_l", REAL, nullable=True),
        sa.Column("manganese_g_l", REAL, nullable=True),
        sa.Column("temperature_degc", REAL, nullable=True),
        sa.Column("flow_m3_h", REAL, nullable=True),
        sa.Column("delivery_id", WHOLE, nullable=False),
        sa.ForeignKeyConstraint(
            ["delivery_id"], ["delivery.id"], name=op.f("fk_electrolyte_sample_delivery_id")
        ),
        sa.ForeignKeyConstraint(
            ["section_id"], ["section.id"], name=op.f("fk_electrolyte_sample_section_id")
        ),
        sa.PrimaryKeyConstraint(
            "section_id", "stream", "at_ms", "revision", name=op.f("pk_electrolyte_sample")
        ),
        sqlite_strict=True,
        sqlite_with_rowid=False,
    )
    op.create_table(
        "held_row",
        sa.Column("id", WHOLE, nullable=False),
        sa.Column("delivery_id", WHOLE, nullable=False),
        sa.Column("sheet", sa.Text(), nullable=False),
        sa.Column("line", WHOLE, nullable=False),
        sa.Column("column_name", sa.Text(), nullable=False),
        sa.Column("found", sa.Text(), nullable=False),
        sa.Column("expected", sa.Text(), nullable=False),
        sa.Column("reason", sa.Text(), nullable=False),
        sa.Column("fields", sa.Text(), nullable=False),
        sa.Column("raw", sa.Text(), nullable=False),
        sa.Column("state", sa.Text(), nullable=False),
        sa.Column("decided_ms", WHOLE, nullable=True),
        sa.Column("decided_by", sa.Text(), nullable=True),
        sa.Column("decided_why", sa.Text(), nullable=True),
        sa.ForeignKeyConstraint(
            ["delivery_id"], ["delivery.id"], name=op.f("fk_held_row_delivery_id")
        ),
        sa.PrimaryKeyConstraint("id", name=op.f("pk_held_row")),
        sqlite_strict=True,
    )
    with op.batch_alter_table("held_row", schema=None) as batch_op:
        batch_op.create_index("ix_held_row_state", ["state", "id"], unique=False)

    op.create_table(
        "lot",
        sa.Column("id", WHOLE, nullable=False),
        sa.Column("section_id", WHOLE, nullable=False),
        sa.Column("name", sa.Text(), nullable=False),
        sa.Column("revision", SMALL, nullable=False),
        sa.Column("is_void", SMALL, nullable=False),
        sa.Column("cells", sa.Text(), nullable=False),
        sa.Column("weighed_ms", WHOLE, nullable=False),
        sa.Column("pulled_ms", WHOLE, nullable=False),
        sa.Column("started_ms", WHOLE, nullable=True),
        sa.Column("cathodes_per_cell", WHOLE, nullable=True),
        sa.Column("net_kg", REAL, nullable=False),
        sa.Column("starter_kg", REAL, nullable=False),
        sa.Column("delivery_id", WHOLE, nullable=False),
        sa.ForeignKeyConstraint(["delivery_id"], ["delivery.id"], name=op.f("fk_lot_delivery_id")),
        sa.ForeignKeyConstraint(["section_id"], ["section.id"], name=op.f("fk_lot_section_id")),
        sa.PrimaryKeyConstraint("id", name=op.f("pk_lot")),
        sa.UniqueConstraint(
            "section_id", "name", "revision", name=op.f("uq_lot_section_id_name_revision")
        ),
        sqlite_strict=True,
    )
    with op.batch_alter_table("lot", schema=None) as batch_op:
        batch_op.create_index(
            "ix_lot_section_id_pulled_ms", ["section_id", "pulled_ms"], unique=False
        )

    op.create_table(
        "outage",
        sa.Column("id", WHOLE, nullable=False),
        sa.Column("section_id", WHOLE, nullable=False),
        sa.Column("cells", sa.Text(), nullable=False),
        sa.Column("from_ms", WHOLE, nullable=False),
        sa.Column("to_ms", WHOLE, nullable=True),
        sa.Column("state", sa.Text(), nullable=False),
        sa.Column("revision", SMALL, nullable=False),
        sa.Column("is_void", SMALL, nullable=False),
        sa.Column("delivery_id", WHOLE, nullable=False),
        sa.ForeignKeyConstraint(
            ["delivery_id"], ["delivery.id"], name=op.f("fk_outage_delivery_id")
        ),
        sa.ForeignKeyConstraint(["section_id"], ["section.id"], name=op.f("fk_outage_section_id")),
        sa.PrimaryKeyConstraint("id", name=op.f("pk_outage")),
        sa.UniqueConstraint(
            "section_id",
            "cells",
            "from_ms",
            "revision",
            name=op.f("uq_outage_section_id_cells_from_ms_revision"),
        ),
        sqlite_strict=True,
    )
    with op.batch_alter_table("outage", schema=None) as batch_op:
        batch_op.create_index(
            "ix_outage_section_id_from_ms", ["section_id", "from_ms"], unique=False
        )

    op.create_table(
        "sent_id",
        sa.Column("id", sa.Text(), nullable=False),
        sa.Column("delivery_id", WHOLE, nullable=False),
        sa.ForeignKeyConstraint(
            ["delivery_id"], ["delivery.id"], name=op.f("fk_sent_id_delivery_id")
        ),
        sa.PrimaryKeyConstraint("id", name=op.f("pk_sent_id")),
        sqlite_strict=True,
        sqlite_with_rowid=False,
    )
    op.create_table(
        "find",
        sa.Column("id", WHOLE, nullable=False),
        sa.Column("section_id", WHOLE, nullable=False),
        sa.Column("cell_id", WHOLE, nullable=False),
        sa.Column("at_ms", WHOLE, nullable=False),
        sa.Column("cathode", WHOLE, nullable=False),
        sa.Column("found", sa.Text(), nullable=False),
        sa.Column("action", sa.Text(), nullable=False),
        sa.Column("revision", SMALL, nullable=False),
        sa.Column("is_void", SMALL, nullable=False),
        sa.Column("delivery_id", WHOLE, nullable=False),
        sa.ForeignKeyConstraint(["cell_id"], ["cell.id"], name=op.f("fk_find_cell_id")),
        sa.ForeignKeyConstraint(["delivery_id"], ["delivery.id"], name=op.f("fk_find_delivery_id")),
        sa.ForeignKeyConstraint(["section_id"], ["section.id"], name=op.f("fk_find_section_id")),
        sa.PrimaryKeyConstraint("id", name=op.f("pk_find")),
        sa.UniqueConstraint(
            "cell_id",
            "at_ms",
            "cathode",
            "revision",
            name=op.f("uq_find_cell_id_at_ms_cathode_revision"),
        ),
        sqlite_strict=True,
    )
    op.create_table(
        "reading",
        sa.Column("cell_id", WHOLE, autoincrement=False, nullable=False),
        sa.Column("at_ms", WHOLE, autoincrement=False, nullable=False),
        sa.Column("revision", SMALL, autoincrement=False, nullable=False),
        sa.Column("microvolts", WHOLE, nullable=True),
        sa.Column("suspect", SMALL, nullable=False),
        sa.Column("delivery_id", WHOLE, nullable=False),
        sa.PrimaryKeyConstraint("cell_id", "at_ms", "revision", name=op.f("pk_reading")),
        sqlite_strict=True,
        sqlite_with_rowid=False,
    )
    op.create_table(
        "suspicion",
        sa.Column("id", WHOLE, nullable=False),
        sa.Column("delivery_id", WHOLE, nullable=False),
        sa.Column("line", WHOLE, nullable=False),
        sa.Column("section_id", WHOLE, nullable=False),
        sa.Column("cell_id", WHOLE, nullable=False),
        sa.Column("at_ms", WHOLE, nullable=False),
        sa.Column("revision", SMALL, nullable=False),
        sa.Column("code", sa.Text(), nullable=False),
        sa.Column("reason", sa.Text(), nullable=False),
        sa.Column("found", sa.Text(), nullable=False),
        sa.Column("expected", sa.Text(), nullable=False),
        sa.Column("suggested", sa.Text(), nullable=True),
        sa.Column("state", sa.Text(), nullable=False),
        sa.Column("decided_ms", WHOLE, nullable=True),
        sa.Column("decided_by", sa.Text(), nullable=True),
        sa.Column("decided_why", sa.Text(), nullable=True),
        sa.ForeignKeyConstraint(["cell_id"], ["cell.id"], name=op.f("fk_suspicion_cell_id")),
        sa.ForeignKeyConstraint(
            ["delivery_id"], ["delivery.id"], name=op.f("fk_suspicion_delivery_id")
        ),
        sa.ForeignKeyConstraint(
            ["section_id"], ["section.id"], name=op.f("fk_suspicion_section_id")
        ),
        sa.PrimaryKeyConstraint("id", name=op.f("pk_suspicion")),
        sqlite_strict=True,
    )
    with op.batch_alter_table("suspicion", schema=None) as batch_op:
        batch_op.create_index("ix_suspicion_cell_id_at_ms", ["cell_id", "at_ms"], unique=False)
        batch_op.create_index("ix_suspicion_state", ["state", "id"], unique=False)


def downgrade() -> None:
    """Drop the tables."""
    with op.batch_alter_table("suspicion", schema=None) as batch_op:
        batch_op.drop_index("ix_suspicion_state")
        batch_op.drop_index("ix_suspicion_cell_id_at_ms")

    op.drop_table("suspicion")
    op.drop_table("reading")
    op.drop_table("find")
    op.drop_table("sent_id")
    with op.batch_alter_table("outage", schema=None) as batch_op:
        batch_op.drop_index("ix_outage_section_id_from_ms")

    op.drop_table("outage")
    with op.batch_alter_table("lot", schema=None) as batch_op:
        batch_op.drop_index("ix_lot_section_id_pulled_ms")

    op.drop_table("lot")
    with op.batch_alter_table("held_row", schema=None) as batch_op:
        batch_op.drop_index("ix_held_row_state")

    op.drop_table("held_row")
    op.drop_table("electrolyte_sample")
    op.drop_table("current_sample")
    op.drop_table("counter_sample")
    with op.batch_alter_table("delivery", schema=None) as batch_op:
        batch_op.drop_index("ix_delivery_received_ms")

    op.drop_table("delivery")
