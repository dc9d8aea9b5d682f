"""Putting checked records in the place of those that are there, which are kept in a file of their own first.

All of it happens while nobody else can read or write, and as one change: a power cut leaves the old records or the new.
"""

import sqlite3
from collections.abc import Iterator
from contextlib import closing, contextmanager
from pathlib import Path

from sqlalchemy import Connection, Engine, delete, text

from advisor.counsel.phrases import mark
from advisor.records import parts, tables
from advisor.records.backup import copy_table, fill, row_counts
from advisor.records.checking import damage_told
from advisor.records.engine import make_private, sqlite_engine
from advisor.records.trouble import StoreError, StoreLocked, StoreUnreadable, explained, sqlite_reason

PATIENCE_MS = 2_000  # a program that is just ending is waited for
_DAMAGE = frozenset({sqlite3.SQLITE_NOTADB, sqlite3.SQLITE_CORRUPT})


class StoreInUse(StoreError):
    """A program, most likely this one, has the records open."""

    text = mark("The records in %(place)s are in use; nothing was changed. Stop Twolight first, at every desk.")


def in_file(ready: Path, target: Path, *, keep: Path) -> Path | None:
    """Put the content of ``ready`` into the SQLite file ``target``; return where the former content was kept."""
    if not target.exists():
        with explained(str(target)):
            make_private(target)
        keep_former = False
    else:
        keep_former = target.stat().st_size > 0
    try:
        return _page_by_page(ready, target, keep if keep_former else None)
    except sqlite3.Error as error:
        if getattr(error, "sqlite_errorcode", 0) & 0xFF in _DAMAGE:
            return _aside(ready, target, keep)
        raise (sqlite_reason(error) or StoreUnreadable)(str(target)) from error


def _page_by_page(ready: Path, target: Path, keep: Path | None) -> Path | None:
    """Write over the file's own pages in one transaction: whoever waits for the file sees the new ones."""
    with closing(sqlite3.connect(target, timeout=PATIENCE_MS / 1000, isolation_level=None)) as live:
        _lock(live, target)
        if keep is None:
            _overwrite(live, ready)
            return None
        with parts.part_of(keep) as part:
            with damage_told(keep), closing(sqlite3.connect(part)) as former:
                live.backup(former)
            parts.put(part, keep, replace=False)
        try:
            _overwrite(live, ready)
        except BaseException:
            keep.unlink()  # nothing was replaced
            raise
    return keep


def _lock(live: sqlite3.Connection, target: Path) -> None:
    """Take the file for this connection alone, until it is closed; no other may have it open, even idly."""
    try:
        live.execute("PRAGMA locking_mode = EXCLUSIVE")
        live.execute("PRAGMA journal_mode = DELETE")
        live.execute("BEGIN EXCLUSIVE")
        live.execute("COMMIT")
    except sqlite3.OperationalError as error:
        if sqlite_reason(error) is StoreLocked:
            raise StoreInUse(str(target)) from error
        raise


def _overwrite(live: sqlite3.Connection, ready: Path) -> None:
    with closing(sqlite3.connect(ready)) as source:
        source.backup(live)


def _aside(ready: Path, target: Path, keep: Path) -> Path:
    """Give a file that SQLite cannot read another name, with its logs, and put the new one in its place."""
    with explained(str(target)):
        for name in (*parts.LOGS, ""):  # a log that stayed would be played into the new file
            log = target.with_name(target.name + name)
            if log.exists():
                log.rename(keep.with_name(keep.name + name))
        parts.clear(target)
    parts.put(ready, target, replace=False)
    return keep


def in_database(ready: Path, engine: Engine, *, keep: Path, place: str) -> Path | None:
    """Put the rows of ``ready`` in the place of all rows on a server; return where the former rows were kept."""
    with explained(place), engine.begin() as connection:
        _lock_tables(connection, place)
        kept = None
        if any(row_counts(connection).values()):
            kept = _kept(connection, keep, place)
        for table in reversed(tables.metadata.sorted_tables):
            connection.execute(delete(table))
        with _rows_of(ready) as source:
            for table in tables.metadata.sorted_tables:
                copy_table(source, connection, table)
            if row_counts(source) != row_counts(connection):
                raise StoreUnreadable(place)
    return kept


def _kept(connection: Connection, keep: Path, place: str) -> Path:
    with parts.part_of(keep) as part:
        fill(connection, part, file=keep, place=place)
        parts.put(part, keep, replace=False)
    return keep


def _lock_tables(connection: Connection, place: str) -> None:
    """Lock every table at once or not at all, and see that no desk is connected; one just closing is waited for."""
    names = ", ".join(f'"{name}"' for name in tables.metadata.tables)
    with _in_use(place):
        connection.execute(text(f"SET LOCAL lock_timeout = {PATIENCE_MS}"))
        connection.execute(text(f"LOCK TABLE {names} IN ACCESS EXCLUSIVE MODE"))
    others = text(
        "SELECT count(*) FROM pg_stat_activity WHERE datname = current_database()"
        " AND pid <> pg_backend_pid() AND backend_type = 'client backend'"
    )
    for _ in range(PATIENCE_MS // 100):
        connection.execute(text("SELECT pg_stat_clear_snapshot()"))
        if connection.execute(others).scalar_one() == 0:
            return
        connection.execute(text("SELECT pg_sleep(0.1)"))
    raise StoreInUse(place)


@contextmanager
def _in_use(place: str) -> Iterator[None]:
    try:
        with explained(place):
            yield
    except StoreLocked as error:
        raise StoreInUse(place) from error


@contextmanager
def _rows_of(file: Path) -> Iterator[Connection]:
    engine = sqlite_engine(file)
    try:
        with engine.connect() as connection:
            yield connection
    finally:
        engine.dispose()
