"""Bringing a database to the present schema, at every start."""

from __future__ import annotations

import threading
from pathlib import Path

from alembic import command
from alembic.config import Config
from alembic.runtime.migration import MigrationContext
from alembic.script import ScriptDirectory
from sqlalchemy import Connection

from app.store.connections import Connections
from app.store.errors import NewerDatabaseError, StoreError

UPGRADES = Path(__file__).parent / "upgrades"
_turn = threading.Lock()  # Alembic keeps its context in module globals


def upgrade(connections: Connections) -> None:
    """Run every upgrade the database has not seen, all in one transaction.

    Raises
    ------
    NewerDatabaseError
        When the database was written by a newer release.
    StoreError
        When the database cannot be written, or an upgrade leaves loose ends.
    """
    with _turn, connections.writing(foreign_keys=False) as connection:
        config = _config(connection)
        _check_known(connection, ScriptDirectory.from_config(config))
        command.upgrade(config, "head")
        if connection.exec_driver_sql("PRAGMA foreign_key_check").first() is not None:
            raise StoreError(
                "The database of the studies could not be brought to this release, so it was left "
                "as it was: start the earlier release and make a backup."
            )


def _config(connection: Connection) -> Config:
    config = Config()
    config.set_main_option("script_location", str(UPGRADES).replace("%", "%%"))
    config.set_main_option("path_separator", "os")
    config.attributes["connection"] = connection
    return config


def _check_known(connection: Connection, scripts: ScriptDirectory) -> None:
    known = {script.revision for script in scripts.walk_revisions()}
    found = MigrationContext.configure(connection).get_current_heads()
    if not known.issuperset(found):
        raise NewerDatabaseError(
            "The data folder was written by a newer release of Halfwidth, so it was left as it is: "
            "start that release, or choose another data folder."
        )
