"""How a connection to a private SQLite file in the data folder is made; ``server`` makes those to a PostgreSQL server.

Every write on SQLite begins with ``BEGIN IMMEDIATE``: a transaction that reads first and writes later fails at once
when another writer came between, whatever the busy timeout. Reads begin plainly and see one state throughout.
"""

import os
import sqlite3
from pathlib import Path

from sqlalchemy import URL, Connection, Engine, create_engine, event, exc
from sqlalchemy.pool import ConnectionPoolEntry

from advisor.records.trouble import StoreGone

BUSY_TIMEOUT_MS = 10_000
_PRAGMAS = (
    f"busy_timeout = {BUSY_TIMEOUT_MS}",
    "journal_mode = WAL",
    "synchronous = FULL",  # a save that was acknowledged outlives a power cut
    "foreign_keys = ON",
    "secure_delete = ON",  # what is erased is overwritten
)


def make_private(file: Path) -> None:
    """Create the folder (700) and the file (600) if need be; only this user may read them.

    A folder that exists keeps its mode, since it may hold other things; the file is narrowed in any case. SQLite gives
    its side files the mode of the file. Windows keeps its own rules: the user's data folder is private there.
    """
    file.parent.mkdir(mode=0o700, parents=True, exist_ok=True)
    os.close(os.open(file, os.O_RDWR | os.O_CREAT, 0o600))
    if os.name == "posix" and file.stat().st_mode & 0o077:
        file.chmod(0o600)


def _prepare_sqlite(connection: sqlite3.Connection, _entry: ConnectionPoolEntry) -> None:
    connection.isolation_level = None  # transactions are begun below, not by the driver
    for pragma in _PRAGMAS:
        connection.execute(f"PRAGMA {pragma}")


def _identity(file: Path) -> tuple[int, int]:
    """Return what tells a file from another of the same name."""
    try:
        found = file.stat()
    except OSError as error:
        raise StoreGone(str(file)) from error
    return found.st_dev, found.st_ino


def _begin_sqlite(connection: Connection) -> None:
    writing = connection.get_execution_options().get("writing", False)
    connection.exec_driver_sql("BEGIN IMMEDIATE" if writing else "BEGIN")


def sqlite_engine(file: Path) -> Engine:
    """Return an engine on this file, which must exist."""
    engine = create_engine(URL.create("sqlite+pysqlite", database=str(file)), hide_parameters=True)
    event.listen(engine, "connect", _prepare_sqlite)
    event.listen(engine, "begin", _begin_sqlite)
    _watch(engine, file)
    return engine


def _watch(engine: Engine, file: Path) -> None:
    """See before every use that the file is still there: what is written into one that was removed is lost.

    A file that was put in its place by a restore is opened anew; one that is gone is told, and never made again empty.
    """

    @event.listens_for(engine, "do_connect")
    def before_opening(*_arguments: object) -> None:
        _identity(file)

    @event.listens_for(engine, "connect")
    def opened(_connection: sqlite3.Connection, entry: ConnectionPoolEntry) -> None:
        entry.info["file"] = _identity(file)

    @event.listens_for(engine, "checkout")
    def before_use(_connection: object, entry: ConnectionPoolEntry, _proxy: object) -> None:
        if entry.info["file"] != _identity(file):
            raise exc.DisconnectionError
