"""What a plant says of its electrolyte: gap, conductivity, and its table of potentials."""

import sqlalchemy as sa
from alembic import op

revision = "0004"
down_revision = "0003"
branch_labels = None
depends_on = None

REAL = sa.Double().with_variant(sa.REAL(), "sqlite")

OF_A_SECTION = (
    "electrode_gap_m",
    "conductivity_s_m",
    "conductivity_at_k",
    "conductivity_per_k",
    "conductivity_per_metal_g_l",
    "conductivity_per_acid_g_l",
    "conductivity_accuracy",
)


def upgrade() -> None:
    """Add the columns; empty means that the plant says nothing."""
    for name in OF_A_SECTION:
        op.add_column("section_terms", sa.Column(name, REAL, nullable=True))
    op.add_column("house_terms", sa.Column("standard_potentials", sa.Text(), nullable=True))


def downgrade() -> None:
    """Drop them."""
    op.drop_column("house_terms", "standard_potentials")
    for name in reversed(OF_A_SECTION):
        op.drop_column("section_terms", name)
