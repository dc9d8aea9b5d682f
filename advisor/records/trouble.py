"""What can go wrong with the records, one class a reason, and how the database's own errors map to them.

Each class keeps its sentence in ``text`` and the words to put in as ``figures``, so that the screen can translate it.
"""

import sqlite3
from collections.abc import Iterator, Mapping
from contextlib import contextmanager

from sqlalchemy import exc

from advisor.counsel.phrases import mark
from advisor.errors import TwolightError


class StoreError(TwolightError):
    """The records cannot be read or written."""

    text = mark("The records in %(place)s cannot be used.")

    def __init__(self, place: str) -> None:
        super().__init__(place=place)


class StoreUnreadable(StoreError):
    """The file is damaged, or it is not a records file at all."""

    text = mark("The records in %(place)s are damaged or are not records; put a backup in their place.")


class StoreNewer(StoreError):
    """A later version of the program has written the records."""

    text = mark("The records in %(place)s were written by a newer version of this program; install that version.")


class StoreFull(StoreError):
    """There is no room left to write."""

    text = mark("The disk that holds %(place)s is full; nothing was saved. Make room and save again.")


class StoreLocked(StoreError):
    """Another program kept the records for longer than this one waits."""

    text = mark("Another program is using the records in %(place)s; nothing was saved. Close it and save again.")


class StoreReadOnly(StoreError):
    """The folder or file may not be written, or may not be opened."""

    text = mark("The records in %(place)s may not be opened or written here; choose another data folder.")


class StoreUnreachable(StoreError):
    """The database server does not answer."""

    text = mark("The records at %(place)s do not answer; nothing was saved. Check the network and try again.")


# Primary SQLite result codes (the low byte of the extended code) and PostgreSQL SQLSTATE codes.
_SQLITE: Mapping[int, type[StoreError]] = {
    sqlite3.SQLITE_FULL: StoreFull,
    sqlite3.SQLITE_BUSY: StoreLocked,
    sqlite3.SQLITE_LOCKED: StoreLocked,
    sqlite3.SQLITE_READONLY: StoreReadOnly,
    sqlite3.SQLITE_CANTOPEN: StoreReadOnly,
    sqlite3.SQLITE_PERM: StoreReadOnly,
    sqlite3.SQLITE_CORRUPT: StoreUnreadable,
    sqlite3.SQLITE_NOTADB: StoreUnreadable,
    sqlite3.SQLITE_IOERR: StoreUnreadable,
}
_POSTGRESQL: Mapping[str, type[StoreError]] = {
    "53100": StoreFull,
    "55P03": StoreLocked,
    "40P01": StoreLocked,
    "25006": StoreReadOnly,
    "42501": StoreReadOnly,
}


def reason(error: exc.SQLAlchemyError) -> type[StoreError] | None:
    """Return the class that explains a database error, or None for a fault of this program."""
    if isinstance(error, exc.TimeoutError):
        return StoreLocked
    cause = error.orig if isinstance(error, exc.DBAPIError) else None
    code = getattr(cause, "sqlite_errorcode", None)
    if isinstance(code, int):
        return _SQLITE.get(code & 0xFF)
    state = getattr(cause, "sqlstate", None)
    if isinstance(state, str) and state in _POSTGRESQL:
        return _POSTGRESQL[state]
    lost = isinstance(error, exc.OperationalError) and not isinstance(cause, sqlite3.Error)
    return StoreUnreachable if lost else None


@contextmanager
def explained(place: str) -> Iterator[None]:
    """Turn the database's own errors into sentences that name the place."""
    try:
        yield
    except exc.SQLAlchemyError as error:
        kind = reason(error)
        if kind is None:
            raise
        raise kind(place) from error
    except OSError as error:
        raise StoreReadOnly(place) from error
