"""A backup while the program runs: one SQLite file with everything the records held at one moment, read again.

From SQLite the file is copied page by page by SQLite's own backup; from PostgreSQL every row is read in one snapshot
and written into a new file that the same migrations made.
"""

import sqlite3
from contextlib import closing
from pathlib import Path
from typing import NamedTuple

from sqlalchemy import Connection, Engine, Table, exc, func, insert, select

from advisor.counsel.phrases import mark
from advisor.records import parts, server, tables
from advisor.records.checking import (
    FileDamaged,
    FileError,
    NoRecords,
    check,
    damage_told,
    is_as_declared,
    opened,
    set_mark,
)
from advisor.records.engine import sqlite_engine
from advisor.records.schema import upgrade
from advisor.records.trouble import StoreUnreadable, explained

ROWS_AT_ONCE = 500


class Backup(NamedTuple):
    """A file that was written and read again: how many visits it holds and how large it is."""

    file: Path
    visits: int
    size_bytes: int


class FileIsRecords(FileError):
    """The records themselves were named as the place of their copy, or as what to restore."""

    text = mark("%(file)s is where the records themselves lie; nothing was changed. Name another file.")


def write_backup(source: Engine, file: Path, *, place: str, replace: bool = False) -> Backup:
    """Write everything that the records hold at this moment into one file, and read it again before it is named.

    Raises
    ------
    FileExists, FileInUse, FileNotWritten, FileIsRecords, StoreFull
        If the file cannot be written; nothing is left behind.
    StoreUnreadable
        If the records are damaged; no file is written then.
    """
    file = file.expanduser().absolute()
    refuse_records(source, file)
    parts.refuse_what_is_there(file, replace=replace)
    with parts.part_of(file) as part:
        with explained(place), server.reading(source).connect() as connection:
            visits = fill(connection, part, file=file, place=place)
        parts.put(part, file, replace=replace)
        return Backup(file, visits, file.stat().st_size)


def refuse_records(source: Engine, file: Path) -> None:
    """Refuse the records' own file where another one is wanted."""
    own = Path(source.url.database or "") if source.dialect.name == "sqlite" else None
    if own is not None and own.exists() and file.exists() and own.samefile(file):
        raise FileIsRecords(file)


def fill(connection: Connection, part: Path, *, file: Path, place: str) -> int:
    """Write what a connection sees into an empty file, and check it; return how many visits it holds."""
    rows = row_counts(connection)
    try:
        with damage_told(file):
            (_copy_pages if connection.dialect.name == "sqlite" else _copy_rows)(connection, part)
            _make_one_file(part)
        found = check(part, file=file)
        if not is_as_declared(part) or any(found.rows[name] != count for name, count in rows.items()):
            raise FileDamaged(file)
    except (FileDamaged, NoRecords) as error:
        raise StoreUnreadable(place) from error
    with damage_told(file):
        set_mark(part, found)
    return rows[tables.visit.name]


def row_counts(connection: Connection) -> dict[str, int]:
    """Return how many rows each table has."""
    counts = {table.name: select(func.count()).select_from(table) for table in tables.metadata.sorted_tables}
    return {name: connection.execute(query).scalar_one() for name, query in counts.items()}


def _copy_pages(connection: Connection, part: Path) -> None:
    """Copy a SQLite file as the connection's transaction sees it; others may write meanwhile."""
    live = connection.connection.driver_connection
    if live is None:
        raise ValueError("the connection has been closed")
    with closing(opened(part)) as target:
        live.backup(target)


def _copy_rows(connection: Connection, part: Path) -> None:
    """Write every row that a server's transaction sees into new tables."""
    target = sqlite_engine(part)
    try:
        with target.execution_options(writing=True).begin() as written:
            upgrade(written)
            for table in tables.metadata.sorted_tables:
                copy_table(connection, written, table)
    except exc.DBAPIError as error:
        if isinstance(error.orig, sqlite3.Error):  # of the new file, not of the server
            raise error.orig from error
        raise
    finally:
        target.dispose()


def _make_one_file(part: Path) -> None:
    """Leave no log beside a file."""
    with closing(opened(part)) as connection:
        connection.execute("PRAGMA journal_mode = DELETE")


def copy_table(source: Connection, target: Connection, table: Table) -> None:
    """Copy the rows of one table, a few hundred at a time."""
    found = source.execute(select(table), execution_options={"yield_per": ROWS_AT_ONCE}).mappings()
    for rows in found.partitions():
        target.execute(insert(table), [dict(row) for row in rows])
