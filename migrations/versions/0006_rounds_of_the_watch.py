"""What the watch makes of each round, what it remembers, and how sure a flag is."""

import sqlalchemy as sa
from alembic import op

revision = "0006"
down_revision = "0005"
branch_labels = None
depends_on = None

WHOLE = sa.BigInteger().with_variant(sa.INTEGER(), "sqlite")
REAL = sa.Double().with_variant(sa.REAL(), "sqlite")


def upgrade() -> None:
    """Make the tables and the column; the next catching-up fills them."""
    op.create_table(
        "watched_round",
        sa.Column("section_id", WHOLE, nullable=False),
        sa.Column("started_ms", WHOLE, autoincrement=False, nullable=False),
        sa.Column("ended_ms", WHOLE, nullable=False),
        sa.Column("amps", REAL, nullable=False),
        sa.Column("cells", sa.LargeBinary(), nullable=False),
        sa.ForeignKeyConstraint(
            ["section_id"], ["section.id"], name=op.f("fk_watched_round_section_id")
        ),
        sa.PrimaryKeyConstraint("section_id", "started_ms", name=op.f("pk_watched_round")),
        sqlite_strict=True,
    )
    op.create_table(
        "watch_state",
        sa.Column("section_id", WHOLE, nullable=False),
        sa.Column("day_ms", WHOLE, autoincrement=False, nullable=False),
        sa.Column("last_ms", WHOLE, nullable=False),
        sa.Column("state", sa.LargeBinary(), nullable=False),
        sa.ForeignKeyConstraint(
            ["section_id"], ["section.id"], name=op.f("fk_watch_state_section_id")
        ),
        sa.PrimaryKeyConstraint("section_id", "day_ms", name=op.f("pk_watch_state")),
        sqlite_strict=True,
    )
    op.add_column("flag", sa.Column("probability", REAL, nullable=True))


def downgrade() -> None:
    """Drop them."""
    op.drop_column("flag", "probability")
    op.drop_table("watch_state")
    op.drop_table("watched_round")
