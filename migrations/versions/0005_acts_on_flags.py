"""What people did about the flags of the watch."""

import sqlalchemy as sa
from alembic import op

revision = "0005"
down_revision = "0004"
branch_labels = None
depends_on = None

WHOLE = sa.BigInteger().with_variant(sa.INTEGER(), "sqlite")


def upgrade() -> None:
    """Make the table."""
    op.create_table(
        "flag_act",
        sa.Column("id", WHOLE, nullable=False),
        sa.Column("cell_id", WHOLE, nullable=False),
        sa.Column("kind", sa.Text(), nullable=False),
        sa.Column("raised_ms", WHOLE, nullable=False),
        sa.Column("at_ms", WHOLE, nullable=False),
        sa.Column("who", sa.Text(), nullable=False),
        sa.Column("act", sa.Text(), nullable=False),
        sa.Column("until_ms", WHOLE, nullable=True),
        sa.Column("reason", sa.Text(), nullable=False),
        sa.Column("assigned_to", sa.Text(), nullable=True),
        sa.Column("find_id", WHOLE, nullable=True),
        sa.ForeignKeyConstraint(["cell_id"], ["cell.id"], name=op.f("fk_flag_act_cell_id")),
        sa.ForeignKeyConstraint(["find_id"], ["find.id"], name=op.f("fk_flag_act_find_id")),
        sa.PrimaryKeyConstraint("id", name=op.f("pk_flag_act")),
        sqlite_strict=True,
    )
    op.create_index("ix_flag_act_raised_ms", "flag_act", ["raised_ms", "cell_id"], unique=False)


def downgrade() -> None:
    """Drop it."""
    op.drop_index("ix_flag_act_raised_ms", table_name="flag_act")
    op.drop_table("flag_act")
