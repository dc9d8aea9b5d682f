"""A PostgreSQL server that several desks share: its address without the password, and how connections are made."""

from typing import Any

from sqlalchemy import URL, Connection, Engine, create_engine, event, exc, make_url, text

from advisor.counsel.phrases import mark
from advisor.errors import TwolightError
from advisor.records.trouble import StoreError

NAMES = ("postgresql", "postgres", "postgresql+psycopg")
DRIVER = "postgresql+psycopg"
_ADDRESS_KEYS = ("host", "port")  # the rest of an address's query may hold secrets and is never shown
# What is passed to the driver unless the address says otherwise.
_CONNECTING = {
    "application_name": "twolight",
    "client_encoding": "utf8",
    "connect_timeout": 5,  # seconds, for each address the computer's name stands for
    "keepalives_idle": 30,  # seconds without a word before the line is tried
    "tcp_user_timeout": 15_000,  # milliseconds until a line that swallows what is sent counts as cut
    "options": "-c lock_timeout=10s",  # as long as a SQLite file is waited for
}
# Whoever makes or upgrades the tables holds this lock; the number is ours, chosen once.
_UPGRADE_LOCK = 8_437_202_612


class AddressUnreadable(TwolightError):
    """The text is no address of a PostgreSQL database; it is not repeated, since it may hold a password."""

    text = mark("This is no address of a database. Write it as postgresql://name@computer/database.")


class DriverMissing(TwolightError):
    """The package that speaks to PostgreSQL is not installed."""

    text = mark("PostgreSQL needs one more package: install Twolight as “twolight[postgres]”.")


class StoreForeign(StoreError):
    """The database holds tables, and they are not ours."""

    text = mark("The database at %(place)s holds another program's tables; give Twolight a database of its own.")


class StoreEncoding(StoreError):
    """The database cannot keep every letter a name may have."""

    text = mark("The database at %(place)s does not keep its text as UTF-8; make one with the encoding UTF8.")


def is_address(place: object) -> bool:
    """Tell a database's address from a folder."""
    return isinstance(place, str) and "://" in place


def address_of(given: str) -> URL:
    """Read the address of a PostgreSQL database."""
    try:
        address = make_url(given.strip())
    except (exc.ArgumentError, ValueError) as error:
        raise AddressUnreadable from error
    if address.drivername not in NAMES:
        raise AddressUnreadable
    return address.set(drivername=DRIVER)


def shown(address: URL, *, with_user: bool = True) -> str:
    """Return the address as it may be shown and told apart: without the password and without what may hold one."""
    kept = {key: value for key, value in address.query.items() if key in _ADDRESS_KEYS}
    user = address.username if with_user else None
    bare = URL.create(NAMES[0], user, None, address.host, address.port, address.database, kept)
    return bare.render_as_string(hide_password=True)


def _storable(value: Any) -> Any:
    return value.replace("\0", "\N{REPLACEMENT CHARACTER}") if isinstance(value, str) else value


def _without_nul(
    _connection: Connection, _cursor: Any, statement: str, given: Any, _context: Any, _many: bool
) -> tuple[str, Any]:
    """Replace the one character that PostgreSQL refuses: an identifier that holds it is then not found."""
    if isinstance(given, dict):
        return statement, {key: _storable(value) for key, value in given.items()}
    if isinstance(given, list):
        return statement, [{key: _storable(value) for key, value in row.items()} for row in given]
    return statement, given


def server_engine(address: URL) -> Engine:
    """Return an engine on a database server; no error of it repeats what was saved.

    Raises
    ------
    DriverMissing
        If psycopg or the library it needs is not installed.
    """
    arguments = {key: value for key, value in _CONNECTING.items() if key not in address.query}
    try:
        engine = create_engine(
            address,
            pool_pre_ping=True,  # after the server was away, the first connection that is asked for is a new one
            hide_parameters=True,
            isolation_level="READ COMMITTED",  # whatever the server's own default is
            connect_args=arguments,
        )
    except ImportError as error:
        raise DriverMissing from error
    event.listen(engine, "before_cursor_execute", _without_nul, retval=True)
    return engine


def reading(engine: Engine) -> Engine:
    """Return the engine for reading: on a server, too, everything read in one go shows one state of the records."""
    if engine.dialect.name == "sqlite":
        return engine
    return engine.execution_options(isolation_level="REPEATABLE READ", postgresql_readonly=True)


def begin_upgrade(connection: Connection, *, place: str) -> None:
    """Wait for another desk that is making the tables; refuse a database whose text is not UTF-8.

    SQLite has locked the file by now, and its text is always UTF-8.
    """
    if connection.dialect.name == "sqlite":
        return
    if connection.execute(text("SHOW server_encoding")).scalar() != "UTF8":
        raise StoreEncoding(place)
    connection.execute(text("SELECT pg_advisory_xact_lock(:key)"), {"key": _UPGRADE_LOCK})
