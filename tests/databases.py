"""The two kinds of database the records may lie in: a file, and a PostgreSQL server that the tests start themselves."""

import contextlib
import os
import shutil
import signal
import socket
import subprocess
import tempfile
import time
from collections.abc import Iterator
from pathlib import Path
from typing import Any, TypeAlias

from sqlalchemy import URL, Engine, Row, create_engine, text

from advisor.records.engine import sqlite_engine
from advisor.records.location import database_file
from advisor.records.server import address_of, is_address, server_engine

Place: TypeAlias = Path | str

PASSWORD = "open-sesame-in-tests"  # noqa: S105 - of a server that lives as long as the tests and answers this computer
USER = "desk"
AS_POSTGRES = ("setpriv", "--reuid=postgres", "--regid=postgres", "--clear-groups", "--")
# The newest installed; Debian and Ubuntu keep each version in a folder of its own.
PROGRAMS = max(Path("/usr/lib/postgresql").glob("*/bin"), key=lambda path: int(path.parent.name), default=None)


def engine_at(place: Place) -> Engine:
    """Return an engine of the caller's own on the records."""
    if is_address(place):
        return server_engine(address_of(str(place)))
    return sqlite_engine(database_file(Path(place)))


def rows(place: Place, query: str, **given: Any) -> list[Row[Any]]:
    """Return the rows of a query, read past the store."""
    engine = engine_at(place)
    try:
        with engine.connect() as connection:
            return list(connection.execute(text(query), given))
    finally:
        engine.dispose()


def execute(place: Place, *statements: str, **given: Any) -> None:
    """Carry out statements past the store, all or none."""
    engine = engine_at(place)
    try:
        with engine.begin() as connection:
            for statement in statements:
                connection.execute(text(statement), given)
    finally:
        engine.dispose()


def free_port() -> int:
    """Return a port of this computer that nobody uses now."""
    with socket.socket() as probe:
        probe.bind(("127.0.0.1", 0))
        return int(probe.getsockname()[1])


class Postgres:
    """A PostgreSQL server on a port of this computer, in a folder of its own; it refuses to run as root."""

    def __init__(self, programs: Path) -> None:
        self._programs = programs
        self._folder = Path(tempfile.mkdtemp(prefix="twolight-", dir=tempfile.gettempdir()))
        # By a program of its own rather than by Popen: that would fork, and a fork while other threads multiply
        # matrices can leave these waiting for ever.
        self._as = [*AS_POSTGRES] if os.geteuid() == 0 else []
        self._quietly: dict[str, Any] = {"cwd": self._folder, "stdin": subprocess.DEVNULL}
        self._databases = 0
        self._shared: str | None = None
        self.port = free_port()
        secret = self._folder / "secret"
        secret.write_text(PASSWORD)
        if self._as:
            shutil.chown(self._folder, "postgres")
            shutil.chown(secret, "postgres")
        options = (
            "-U",
            USER,
            "-A",
            "scram-sha-256",
            f"--pwfile={secret}",
            "-E",
            "UTF8",
            "--locale=C.UTF-8",
            "--no-sync",
        )
        made = subprocess.run(
            [*self._as, str(programs / "initdb"), "-D", str(self._data), *options],
            **self._quietly, stdout=subprocess.PIPE, stderr=subprocess.STDOUT, text=True, check=False,
        )  # fmt: skip
        assert made.returncode == 0, made.stdout
        self._server = self._started()

    @property
    def _data(self) -> Path:
        return self._folder / "data"

    def _started(self) -> subprocess.Popen[bytes]:
        """Start the server, a child of ours, and wait until it answers; after a crash it mends itself first."""
        settings = ("listen_addresses=127.0.0.1", f"port={self.port}", "unix_socket_directories=", "max_connections=80")
        options = [part for setting in settings for part in ("-c", setting)]
        with (self._folder / "log").open("ab") as log:
            server = subprocess.Popen(
                [*self._as, str(self._programs / "postgres"), "-D", str(self._data), *options],
                **self._quietly,
                stdout=log,
                stderr=log,
            )
        ready = [str(self._programs / "pg_isready"), "-q", "-h", "127.0.0.1", "-p", str(self.port)]
        for _ in range(1200):
            if subprocess.run(ready, check=False).returncode == 0:
                return server
            assert server.poll() is None, (self._folder / "log").read_text()
            time.sleep(0.025)
        raise TimeoutError((self._folder / "log").read_text())

    def start(self) -> None:
        """Start the server again."""
        self._server = self._started()

    def stop(self, number: signal.Signals) -> None:
        """Stop it: SIGINT in good order, SIGQUIT at once and without tidying up."""
        self._server.send_signal(number)
        self._server.wait(60)

    def kill(self) -> None:
        """Kill the server and every process it started, as a power cut would."""
        children = _children(self._server.pid)
        self._server.kill()
        for process in children:
            with contextlib.suppress(ProcessLookupError):
                os.kill(process, signal.SIGKILL)
        self._server.wait(60)

    def url(self, database: str = "postgres") -> str:
        """Return the address of a database."""
        address = URL.create("postgresql", USER, PASSWORD, "127.0.0.1", self.port, database)
        return address.render_as_string(hide_password=False)

    def new_database(self, like: str | None = None, *, more: str = "") -> str:
        """Make a database, empty or with the content of another, and return its address."""
        self._databases += 1
        name = f"test_{self._databases}"
        engine = create_engine(address_of(self.url()), isolation_level="AUTOCOMMIT")
        try:
            with engine.connect() as connection:
                template = f" TEMPLATE {like}" if like else ""
                connection.execute(text(f"CREATE DATABASE {name}{template} {more}"))
        finally:
            engine.dispose()
        return self.url(name)

    def emptied(self) -> str:
        """Return the address of the database that tests use one after the other, with nothing left in it.

        A new one for each test would be some three hundred files each time.
        """
        self._shared = self._shared or self.new_database()
        engine = create_engine(address_of(self._shared))
        others = "SELECT pg_terminate_backend(pid) FROM pg_stat_activity WHERE datname = current_database()"
        try:
            with engine.begin() as connection:
                connection.execute(text(f"{others} AND pid <> pg_backend_pid()"))
                connection.execute(text("DROP SCHEMA public CASCADE"))
                connection.execute(text("CREATE SCHEMA public"))
        finally:
            engine.dispose()
        return self._shared

    def remove(self) -> None:
        """Stop the server and remove its folder."""
        self.stop(signal.SIGQUIT)
        shutil.rmtree(self._folder)


def _children(process: int) -> list[int]:
    listed = Path(f"/proc/{process}/task/{process}/children").read_text()
    return [int(child) for child in listed.split()]


def started_postgres() -> Iterator[Postgres]:
    """Start a server, yield it, remove it; for a fixture."""
    assert PROGRAMS is not None
    server = Postgres(PROGRAMS)
    try:
        yield server
    finally:
        server.remove()
