"""Charge of each day that passed through shorts."""

import sqlalchemy as sa
from alembic import op

revision = "0007"
down_revision = "0006"
branch_labels = None
depends_on = None

WHOLE = sa.BigInteger().with_variant(sa.INTEGER(), "sqlite")
REAL = sa.Double().with_variant(sa.REAL(), "sqlite")


def upgrade() -> None:
    """Make the table; the next catching-up of the watch fills it."""
    op.create_table(
        "short_day",
        sa.Column("section_id", WHOLE, nullable=False),
        sa.Column("day_ms", WHOLE, autoincrement=False, nullable=False),
        sa.Column("short_c", REAL, nullable=False),
        sa.Column("watched_c", REAL, nullable=False),
        sa.Column("variance_c2", REAL, nullable=False),
        sa.Column("hours", sa.LargeBinary(), nullable=False),
        sa.ForeignKeyConstraint(
            ["section_id"], ["section.id"], name=op.f("fk_short_day_section_id")
        ),
        sa.PrimaryKeyConstraint("section_id", "day_ms", name=op.f("pk_short_day")),
        sqlite_strict=True,
    )


def downgrade() -> None:
    """Drop it."""
    op.drop_table("short_day")
