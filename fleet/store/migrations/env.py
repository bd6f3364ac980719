"""Runs migrations on the connection that the opening of a book hands over."""

from alembic import context

connection = context.config.attributes["connection"]
context.configure(connection=connection, target_metadata=context.config.attributes.get("metadata"))
context.run_migrations()
