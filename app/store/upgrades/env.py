"""Run by Alembic: upgrades use the connection they are given, inside its transaction."""

from __future__ import annotations

from alembic import context

from app.store.schema import metadata

context.configure(
    connection=context.config.attributes["connection"],
    target_metadata=metadata,
    render_as_batch=True,
)
context.run_migrations()
