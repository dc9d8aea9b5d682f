"""What the tests of the records share: both kinds of database, each test with fresh tables of its own."""

import os
from collections.abc import Iterator
from pathlib import Path

import pytest
from sqlalchemy import text

from advisor.records import tables
from advisor.records.schema import REVISIONS
from advisor.records.store import Store
from tests.databases import PROGRAMS, Place, Postgres, engine_at, started_postgres

KINDS = ("sqlite", "postgresql")


@pytest.fixture(scope="session")
def needs_postgres() -> None:
    """Skip where PostgreSQL is not installed, or fail where everything is required."""
    if PROGRAMS is None:
        if os.environ.get("TWOLIGHT_REQUIRE_ALL"):
            raise RuntimeError("PostgreSQL is missing and TWOLIGHT_REQUIRE_ALL is set")
        pytest.skip("PostgreSQL is not installed")


@pytest.fixture(scope="session")
def postgres(needs_postgres: None) -> Iterator[Postgres]:  # noqa: ARG001 - it skips
    """A PostgreSQL server for this run of the tests."""
    yield from started_postgres()


@pytest.fixture
def server_place(postgres: Postgres) -> str:
    """A database on a server, with the tables and nothing in them."""
    url = postgres.emptied()
    engine = engine_at(url)
    with engine.begin() as connection:
        tables.metadata.create_all(connection)  # the same as the migrations make, as a test of theirs says
        connection.execute(text("CREATE TABLE alembic_version (version_num VARCHAR(32) PRIMARY KEY)"))
        connection.execute(text("INSERT INTO alembic_version VALUES (:last)"), {"last": REVISIONS[-1]})
    engine.dispose()
    return url


@pytest.fixture(params=KINDS)
def empty_place(request: pytest.FixtureRequest, tmp_path: Path) -> Place:
    """A place for records where there are none yet: a folder, then a database on a server."""
    if request.param == "sqlite":
        return tmp_path / "records"
    server: Postgres = request.getfixturevalue("postgres")
    return server.emptied()


@pytest.fixture(params=KINDS)
def place(request: pytest.FixtureRequest, tmp_path: Path) -> Place:
    """A place whose records are opened for the first time, or hold nothing: a folder, then a database on a server."""
    if request.param == "sqlite":
        return tmp_path / "records"
    server: str = request.getfixturevalue("server_place")
    return server


@pytest.fixture
def store(place: Place) -> Iterator[Store]:
    """Open records without anything in them."""
    with Store.open(place) as opened:
        yield opened
