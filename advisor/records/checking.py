"""Whether a file holds records, and whole ones: SQLite's own checks, every row read, and the mark a backup carries.

The mark stands in two numbers of the file's head that SQLite leaves to programs: ``application_id`` says that there is
a sum, ``user_version`` is the sum of the CRC-32 of every row. SQLite's own check looks at the build of a file and not
at its text, so that a letter or a digit that a bad disk has changed is found by nothing else.
"""

import json
import sqlite3
import zlib
from collections.abc import Callable, Iterator, Mapping
from contextlib import closing, contextmanager
from pathlib import Path
from typing import Any, NamedTuple

from advisor.counsel.phrases import mark
from advisor.errors import TwolightError
from advisor.records import tables
from advisor.records.schema import REVISIONS
from advisor.records.trouble import StoreUnreadable, sqlite_reason

MARKED = 0x54774C74  # "TwLt", chosen once
_VERSION = "alembic_version"
_READERS: Mapping[tuple[str, str], Callable[[bytes], Any]] = {
    ("visit", "visit"): json.loads,
    ("visit", "answer"): zlib.decompress,
    ("draft", "fields"): json.loads,
    ("recheck", "content"): json.loads,
}


class FileError(TwolightError):
    """A file cannot be used as a backup."""

    def __init__(self, file: Path) -> None:
        super().__init__(file=str(file))


class FileMissing(FileError):
    """There is no such file."""

    text = mark("There is no file %(file)s.")


class FileDamaged(FileError):
    """The file is not as it was written."""

    text = mark("The file %(file)s is damaged; nothing was changed. Take another copy.")


class NoRecords(FileError):
    """The file is something else."""

    text = mark("The file %(file)s holds no records of this program; nothing was changed.")


class FileNewer(FileError):
    """A later version of the program has written the file."""

    text = mark("The file %(file)s was written by a newer version of this program; install that version.")


class Contents(NamedTuple):
    """What a file holds: how many rows in each table, and the sum over all of them."""

    rows: Mapping[str, int]
    sum: int


def opened(file: Path) -> sqlite3.Connection:
    """Open a file for checking: text comes as it lies there, and nothing that the file brings along is run."""
    connection = sqlite3.connect(file, isolation_level=None)
    connection.text_factory = bytes
    for pragma in ("trusted_schema = OFF", "cell_size_check = ON", "foreign_keys = OFF"):
        connection.execute(f"PRAGMA {pragma}")
    return connection


@contextmanager
def damage_told(file: Path) -> Iterator[None]:
    """Turn what a damaged file makes SQLite, JSON and zlib say into a sentence about the file."""
    try:
        yield
    except sqlite3.Error as error:
        if getattr(error, "sqlite_errorcode", 0) == sqlite3.SQLITE_NOTADB:
            raise NoRecords(file) from error
        kind = sqlite_reason(error)
        if kind is None or kind is StoreUnreadable:
            raise FileDamaged(file) from error
        raise kind(str(file)) from error
    except (ValueError, zlib.error) as error:
        raise FileDamaged(file) from error


def check(part: Path, *, file: Path) -> Contents:
    """Read a whole file and return what it holds; errors name ``file``, which it was copied from or will be.

    Raises
    ------
    NoRecords, FileNewer, FileDamaged
        If it holds no records, was written by a later version, or is not as it was written.
    """
    with damage_told(file), closing(opened(part)) as connection:
        _check_kind(connection, file)
        sound = connection.execute("PRAGMA integrity_check").fetchall() == [(b"ok",)]
        if not sound or connection.execute("PRAGMA foreign_key_check").fetchone() is not None:
            raise FileDamaged(file)
        found = _contents(connection)
        if _number(connection, "application_id") == MARKED and _number(connection, "user_version") != found.sum:
            raise FileDamaged(file)
        return found


def revision(part: Path) -> str:
    """Return the version of the tables in a file that was checked."""
    with closing(opened(part)) as connection:
        found: bytes = connection.execute("SELECT version_num FROM alembic_version").fetchone()[0]
        return found.decode()


def set_mark(part: Path, found: Contents | None) -> None:
    """Write the sum into the head of a file, or take it out of one that will be written to again."""
    with closing(opened(part)) as connection:
        connection.execute(f"PRAGMA application_id = {MARKED if found else 0}")
        connection.execute(f"PRAGMA user_version = {found.sum if found else 0}")


def is_as_declared(part: Path) -> bool:
    """Tell whether a file has the tables and columns that this version of the program writes, and no others."""
    with closing(opened(part)) as connection:
        there = {name: set(_columns(connection, name)) for name in _tables(connection) if name != _VERSION}
    return there == {name: set(table.columns.keys()) for name, table in tables.metadata.tables.items()}


def _check_kind(connection: sqlite3.Connection, file: Path) -> None:
    """Refuse what has no version of ours, and views and triggers, which no version of ours ever made."""
    kinds = {kind for (kind,) in connection.execute("SELECT DISTINCT type FROM sqlite_master")}
    if _VERSION not in _tables(connection) or not kinds <= {b"table", b"index"}:
        raise NoRecords(file)
    versions = connection.execute("SELECT version_num FROM alembic_version").fetchall()
    if len(versions) != 1 or "visit" not in _tables(connection):
        raise NoRecords(file)
    if versions[0][0].decode() not in REVISIONS:
        raise FileNewer(file)


def _tables(connection: sqlite3.Connection) -> list[str]:
    query = "SELECT name FROM sqlite_master WHERE type = 'table' AND name NOT LIKE 'sqlite%' ORDER BY name"
    return [name.decode() for (name,) in connection.execute(query)]


def _columns(connection: sqlite3.Connection, table: str) -> list[str]:
    query = "SELECT name FROM pragma_table_info(?) ORDER BY cid"
    return [name.decode() for (name,) in connection.execute(query, (table,))]


def _number(connection: sqlite3.Connection, pragma: str) -> int:
    found: int = connection.execute(f"PRAGMA {pragma}").fetchone()[0]
    return found


def _contents(connection: sqlite3.Connection) -> Contents:
    rows, total = {}, 0
    for table in _tables(connection):
        rows[table], part = _read_table(connection, table)
        total += part
    return Contents(rows, (total + 2**31) % 2**32 - 2**31)  # as the signed number that the head holds


def _read_table(connection: sqlite3.Connection, table: str) -> tuple[int, int]:
    """Read every row of a table; return how many there are, and the sum of their CRC-32 in whatever order."""
    readers = [(place, _READERS.get((table, name))) for place, name in enumerate(_columns(connection, table))]
    count, total, start = 0, 0, zlib.crc32(table.encode())
    name = table.replace('"', '""')
    for row in connection.execute(f'SELECT * FROM "{name}"'):  # noqa: S608 - the name is quoted, the file's own
        for place, read in readers:
            if read is not None:
                read(row[place])
        cells = (cell if isinstance(cell, bytes) else repr(cell).encode() for cell in row)
        total += zlib.crc32(b"\0".join(cells), start)
        count += 1
    return count, total
