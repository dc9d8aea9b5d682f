"""Run by Alembic: migrate on the connection that was handed over, inside its transaction."""

from alembic import context

context.configure(connection=context.config.attributes["connection"])
context.run_migrations()
