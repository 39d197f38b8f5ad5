"""The plant, its people and their tokens."""

import sqlalchemy as sa
from alembic import op

revision = "0001"
down_revision = None
branch_labels = None
depends_on = None

WHOLE = sa.BigInteger().with_variant(sa.INTEGER(), "sqlite")
SMALL = sa.SmallInteger().with_variant(sa.INTEGER(), "sqlite")
REAL = sa.Double().with_variant(sa.REAL(), "sqlite")


def upgrade() -> None:
    """Make the tables."""
    op.create_table(
        "house_terms",
        sa.Column("from_ms", WHOLE, autoincrement=False, nullable=False),
        sa.Column("energy_price_per_kwh", REAL, nullable=False),
        sa.Column("changed_ms", WHOLE, nullable=False),
        sa.Column("changed_by", sa.Text(), nullable=False),
        sa.Column("why", sa.Text(), nullable=False),
        sa.PrimaryKeyConstraint("from_ms", name=op.f("pk_house_terms")),
        sqlite_strict=True,
    )
    op.create_table(
        "person",
        sa.Column("id", WHOLE, nullable=False),
        sa.Column("name", sa.Text(), nullable=False),
        sa.Column("role", sa.Text(), nullable=False),
        sa.Column("password_hash", sa.Text(), nullable=False),
        sa.Column("session_epoch", WHOLE, nullable=False),
        sa.Column("is_active", SMALL, nullable=False),
        sa.Column("made_ms", WHOLE, nullable=False),
        sa.Column("made_by", sa.Text(), nullable=False),
        sa.PrimaryKeyConstraint("id", name=op.f("pk_person")),
        sa.UniqueConstraint("name", name=op.f("uq_person_name")),
        sqlite_strict=True,
    )
    op.create_table(
        "section",
        sa.Column("id", WHOLE, nullable=False),
        sa.Column("name", sa.Text(), nullable=False),
        sa.Column("process", sa.Text(), nullable=False),
        sa.Column("metal", sa.Text(), nullable=False),
        sa.Column("electrons", SMALL, nullable=False),
        sa.PrimaryKeyConstraint("id", name=op.f("pk_section")),
        sa.UniqueConstraint("name", name=op.f("uq_section_name")),
        sqlite_strict=True,
    )
    op.create_table(
        "tankhouse",
        sa.Column("id", WHOLE, nullable=False),
        sa.Column("name", sa.Text(), nullable=False),
        sa.Column("time_zone", sa.Text(), nullable=False),
        sa.Column("currency", sa.Text(), nullable=False),
        sa.Column("signing_key", sa.Text(), nullable=False),
        sa.Column("made_ms", WHOLE, nullable=False),
        sa.PrimaryKeyConstraint("id", name=op.f("pk_tankhouse")),
        sqlite_strict=True,
    )
    op.create_table(
        "token",
        sa.Column("id", WHOLE, nullable=False),
        sa.Column("name", sa.Text(), nullable=False),
        sa.Column("role", sa.Text(), nullable=False),
        sa.Column("token_hash", sa.Text(), nullable=False),
        sa.Column("made_ms", WHOLE, nullable=False),
        sa.Column("made_by", sa.Text(), nullable=False),
        sa.Column("revoked_ms", WHOLE, nullable=True),
        sa.PrimaryKeyConstraint("id", name=op.f("pk_token")),
        sa.UniqueConstraint("name", name=op.f("uq_token_name")),
        sa.UniqueConstraint("token_hash", name=op.f("uq_token_token_hash")),
        sqlite_strict=True,
    )
    op.create_table(
        "cell",
        sa.Column("id", WHOLE, nullable=False),
        sa.Column("section_id", WHOLE, nullable=False),
        sa.Column("number", WHOLE, nullable=False),
        sa.ForeignKeyConstraint(["section_id"], ["section.id"], name=op.f("fk_cell_section_id")),
        sa.PrimaryKeyConstraint("id", name=op.f("pk_cell")),
        sa.UniqueConstraint("section_id", "number", name=op.f("uq_cell_section_id_number")),
        sqlite_strict=True,
    )
    op.create_table(
        "section_terms",
        sa.Column("section_id", WHOLE, nullable=False),
        sa.Column("from_ms", WHOLE, autoincrement=False, nullable=False),
        sa.Column("cells", WHOLE, nullable=False),
        sa.Column("rows", WHOLE, nullable=False),
        sa.Column("cathodes_per_cell", WHOLE, nullable=False),
        sa.Column("cathode_area_m2", REAL, nullable=False),
        sa.Column("rated_amps", REAL, nullable=False),
        sa.Column("metal_value_per_kg", REAL, nullable=False),
        sa.Column("differential_resistance_ohm", REAL, nullable=True),
        sa.Column("rectifier_efficiency", REAL, nullable=True),
        sa.Column("meter_accuracy_v", REAL, nullable=False),
        sa.Column("current_accuracy", REAL, nullable=False),
        sa.Column("scale_accuracy", REAL, nullable=False),
        sa.Column("walk_order", sa.Text(), nullable=False),
        sa.Column("bus_volts", REAL, nullable=True),
        sa.Column("target_current_efficiency", REAL, nullable=False),
        sa.Column("target_specific_energy_j_kg", REAL, nullable=False),
        sa.Column("low_volts", REAL, nullable=False),
        sa.Column("high_volts", REAL, nullable=False),
        sa.Column("changed_ms", WHOLE, nullable=False),
        sa.Column("changed_by", sa.Text(), nullable=False),
        sa.Column("why", sa.Text(), nullable=False),
        sa.ForeignKeyConstraint(
            ["section_id"], ["section.id"], name=op.f("fk_section_terms_section_id")
        ),
        sa.PrimaryKeyConstraint("section_id", "from_ms", name=op.f("pk_section_terms")),
        sqlite_strict=True,
        sqlite_with_rowid=False,
    )
    op.create_table(
        "shift",
        sa.Column("from_ms", WHOLE, autoincrement=False, nullable=False),
        sa.Column("starts_minute", SMALL, autoincrement=False, nullable=False),
        sa.Column("name", sa.Text(), nullable=False),
        sa.ForeignKeyConstraint(
            ["from_ms"], ["house_terms.from_ms"], name=op.f("fk_shift_from_ms")
        ),
        sa.PrimaryKeyConstraint("from_ms", "starts_minute", name=op.f("pk_shift")),
        sqlite_strict=True,
        sqlite_with_rowid=False,
    )


def downgrade() -> None:
    """Drop the tables."""
    op.drop_table("shift")
    op.drop_table("section_terms")
    op.drop_table("cell")
    op.drop_table("token")
    op.drop_table("tankhouse")
    op.drop_table("section")
    op.drop_table("person")
    op.drop_table("house_terms")
