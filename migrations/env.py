"""Runs migrations on the database that asks for them."""

from alembic import context

from server.storage.database import Database
from server.storage.tables import METADATA


def run() -> None:
    """Climb on the connection of the database that was handed over, or of the settings."""
    database = context.config.attributes.get("database")
    if database is None:
        from server.settings import settings

        database = Database(settings().database_url)
    with database.engine.connect() as connection:
        context.configure(
            connection=connection,
            target_metadata=METADATA,
            render_as_batch=True,
            transaction_per_migration=True,
        )
        with context.begin_transaction():
            context.run_migrations()
        connection.commit()


run()
