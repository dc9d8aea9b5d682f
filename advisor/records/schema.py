"""Bring the tables up to the version this program knows.

Alembic takes a while to import, so it is left alone unless the tables are behind.
"""

from pathlib import Path

from sqlalchemy import Connection, Engine, column, inspect, select, table

from advisor.records.server import StoreForeign, begin_upgrade
from advisor.records.trouble import StoreNewer, StoreUnreadable

MIGRATIONS = Path(__file__).resolve().parent / "migrations"
# Every version of the tables, oldest first; the last is the present one.
REVISIONS = ("0001", "0002", "0003", "0004", "0005")

_VERSION = table("alembic_version", column("version_num"))


def stored_revision(connection: Connection) -> str | None:
    """Return the version the tables have, or None where there are none."""
    if not inspect(connection).has_table(_VERSION.name):
        return None
    return connection.execute(select(_VERSION.c.version_num)).scalar()


def upgrade(connection: Connection, *, to: str = REVISIONS[-1]) -> None:
    """Run the migrations up to a version inside the transaction the connection is in."""
    from alembic import command
    from alembic.config import Config

    config = Config()
    config.set_main_option("script_location", str(MIGRATIONS).replace("%", "%%"))
    config.attributes["connection"] = connection
    command.upgrade(config, to)


def bring_up_to_date(engine: Engine, *, place: str) -> None:
    """Make or upgrade the tables; all of it or nothing.

    Raises
    ------
    StoreNewer
        If the tables have a version this program does not know.
    StoreUnreadable, StoreForeign
        If the file, or the database on a server, holds tables that are not ours.
    StoreEncoding
        If a database on a server cannot keep every letter.
    """
    with engine.connect() as connection:
        found = stored_revision(connection)
    if found == REVISIONS[-1]:
        return
    with engine.execution_options(writing=True).begin() as connection:
        begin_upgrade(connection, place=place)
        found = stored_revision(connection)  # another process may have been quicker
        if found is None and inspect(connection).get_table_names():
            raise (StoreUnreadable if engine.dialect.name == "sqlite" else StoreForeign)(place)
        if found is not None and found not in REVISIONS:
            raise StoreNewer(place)
        if found != REVISIONS[-1]:
            upgrade(connection)
