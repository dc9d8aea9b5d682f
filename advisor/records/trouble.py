"""What can go wrong with the records, one class a reason, and how the database's own errors map to them.

Each class keeps its sentence in ``text`` and the words to put in as ``figures``, so that the screen can translate it.
"""

import errno
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


class StoreGone(StoreError):
    """The file, or the folder or disk it lay on, has been taken away while the program ran."""

    text = mark("The records in %(place)s are no longer there; nothing was saved. Bring them back and save again.")


class StoreUnreachable(StoreError):
    """The database server does not answer, or stopped before it said whether it had saved."""

    text = mark(
        "The records at %(place)s do not answer; nothing that was saved before is lost. "
        "Check the network and the server, and save again."
    )


class StoreRefused(StoreError):
    """The database server answers and does not let us in."""

    text = mark("The server of %(place)s lets nobody in so; check the name, the password and the database's own name.")


class StoreSetting(StoreError):
    """The database's address asks for a setting that the driver does not know or cannot read; it may be a secret."""

    text = mark("The address of %(place)s has a setting behind its “?” that nobody knows; mend it or leave it out.")


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
    "XX001": StoreUnreadable,
    "XX002": StoreUnreadable,
}


def sqlite_reason(error: sqlite3.Error) -> type[StoreError] | None:
    """Return the class that explains an error of SQLite; text that is no UTF-8 comes without a code."""
    code = getattr(error, "sqlite_errorcode", None)
    if isinstance(code, int):
        return _SQLITE.get(code & 0xFF)
    return StoreUnreadable if "decode to UTF-8" in str(error) else None


def reason(error: exc.SQLAlchemyError) -> type[StoreError] | None:
    """Return the class that explains a database error, or None for a fault of this program."""
    if isinstance(error, exc.TimeoutError):
        return StoreLocked
    cause = error.orig if isinstance(error, exc.DBAPIError) else None
    if isinstance(cause, sqlite3.Error):
        return sqlite_reason(cause)
    state = getattr(cause, "sqlstate", None)
    if isinstance(state, str) and state in _POSTGRESQL:
        return _POSTGRESQL[state]
    if isinstance(error, exc.ProgrammingError) and error.statement is None and state is None:
        return StoreSetting  # nothing was asked of a server yet
    if not isinstance(error, exc.OperationalError):
        return None
    connecting = getattr(cause, "pgconn", None)  # there only where no connection came about
    asked = connecting is not None and (connecting.needs_password or connecting.used_password)
    return StoreRefused if asked else StoreUnreachable


def _leading_to(error: exc.SQLAlchemyError) -> Iterator[exc.SQLAlchemyError]:
    """Yield an error, then those that were being handled when it arose.

    A disk that fills up ends a whole transaction of SQLite's, and the savepoint that is then to be left is gone.
    """
    found: BaseException | None = error
    while found is not None:
        if isinstance(found, exc.SQLAlchemyError):
            yield found
        found = found.__context__


@contextmanager
def explained(place: str) -> Iterator[None]:
    """Turn the database's own errors into sentences that name the place."""
    try:
        yield
    except exc.SQLAlchemyError as error:
        kind = next(filter(None, map(reason, _leading_to(error))), None)
        if kind is None:
            raise
        raise kind(place) from error
    except OSError as error:
        raise (StoreFull if error.errno == errno.ENOSPC else StoreReadOnly)(place) from error
