import os
import sqlite3
import subprocess
import sys
from pathlib import Path
from typing import Any

import pytest
from sqlalchemy.dialects import postgresql
from sqlalchemy.schema import CreateIndex, CreateTable

from advisor.records import tables
from advisor.records.engine import make_private, sqlite_engine
from advisor.records.location import FILE_NAME, data_folder
from advisor.records.schema import MIGRATIONS, REVISIONS, stored_revision, upgrade
from advisor.records.store import Store
from advisor.records.trouble import StoreNewer

# For every version of the tables: rows as that version held them, and what they must read as today.
# A new version adds an entry here and changes none that is there.
ROWS: dict[str, tuple[str, ...]] = {
    "0001": (
        "INSERT INTO range_version VALUES ('h1', 'key = 1', '2026-01-02T03:04:05.000000+00:00')",
        "INSERT INTO visit VALUES ('v1', '2026-01-02T03:04:05.000000+00:00', '2026-01-03T03:04:05.000000+00:00', 2,"
        " 'ada berg', 'a-1', '2026-01-02', '', '{\"reference\": \"A-1\"}', 'h1', '0.1.0',"
        # "{}" by RFC 1950 and 1951 by hand: head 7801, one stored block of two bytes, Adler-32 0175 00f9
        " X'7801010200fdff7b7d017500f9')",
        "INSERT INTO draft VALUES ('d1', '2026-01-04T03:04:05.000000+00:00', 3, '{}', 'v1', 2)",
        "INSERT INTO setting VALUES ('current-range', 'h1')",
    ),
}
ROWS |= {
    "0002": (
        *ROWS["0001"],
        "INSERT INTO recheck VALUES ('r1', 'v1', '2026-01-05T03:04:05.000000+00:00', 'remake', 'maker', 'v1', '{}')",
    ),
}
ROWS |= {"0003": (*ROWS["0002"], "INSERT INTO saved_form VALUES ('t1', 'v1', 2, 'd0', 7)")}


def database_at(folder: Path, revision: str) -> None:
    file = folder / FILE_NAME
    make_private(file)
    engine = sqlite_engine(file)
    with engine.execution_options(writing=True).begin() as connection:
        upgrade(connection, to=revision)
        assert stored_revision(connection) == revision
    engine.dispose()


def query(folder: Path, text: str) -> list[Any]:
    connection = sqlite3.connect(folder / FILE_NAME)
    try:
        return connection.execute(text).fetchall()
    finally:
        connection.close()


def test_every_version_has_rows_to_be_tested_with() -> None:
    assert tuple(ROWS) == REVISIONS


def test_the_list_of_versions_is_the_one_alembic_finds() -> None:
    from alembic.script import ScriptDirectory

    found = ScriptDirectory(str(MIGRATIONS)).walk_revisions()
    assert tuple(script.revision for script in found)[::-1] == REVISIONS


def test_from_empty_the_migrations_make_the_tables_the_program_declares(tmp_path: Path) -> None:
    from alembic.autogenerate import compare_metadata
    from alembic.migration import MigrationContext

    Store.open(tmp_path).close()
    engine = sqlite_engine(tmp_path / FILE_NAME)
    with engine.connect() as connection:
        context = MigrationContext.configure(connection, opts={"compare_type": True})
        assert compare_metadata(context, tables.metadata) == []
    engine.dispose()


@pytest.mark.parametrize("revision", REVISIONS)
def test_rows_of_every_version_are_read_after_the_upgrade(tmp_path: Path, revision: str) -> None:
    database_at(tmp_path, revision)
    connection = sqlite3.connect(tmp_path / FILE_NAME)
    with connection:
        for statement in ROWS[revision]:
            connection.execute(statement)
    connection.close()
    with Store.open(tmp_path) as store:
        visit = store.get_visit("v1")
        assert (visit.edit, visit.date, visit.visit_json) == (2, "2026-01-02", '{"reference": "A-1"}')
        assert visit.answer_json == "{}"
        draft = store.get_draft("d1")
        assert (draft.edit, draft.fields_json, draft.visit_id, draft.visit_edit) == (3, "{}", "v1", 2)
        current = store.current_range()
        assert current is not None
        assert current.toml == "key = 1"
        assert [line.id for line in store.list_visits("ada")] == ["v1"]
        kept = [
            (r.id, r.at[:10], r.outcome, r.who_pays, r.new_visit_id, r.content_json) for r in store.list_rechecks("v1")
        ]
        assert kept == ([] if revision == "0001" else [("r1", "2026-01-05", "remake", "maker", "v1", "{}")])
        assert store.visit_of_draft("d0") == ("v1" if revision == "0003" else None)
        added = store.save_recheck("{}", visit_id="v1", outcome="clean", who_pays="nobody")
        assert store.get_recheck(added.id) == added
    assert query(tmp_path, "SELECT version_num FROM alembic_version") == [(REVISIONS[-1],)]


def test_a_migration_that_fails_leaves_the_tables_as_they_were(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    from alembic import op

    def fail(*_arguments: object, **_options: object) -> None:
        raise RuntimeError("no index today")

    monkeypatch.setattr(op, "create_index", fail)
    with pytest.raises(RuntimeError, match="no index today"):
        Store.open(tmp_path)
    assert query(tmp_path, "SELECT name FROM sqlite_master") == []
    monkeypatch.undo()
    Store.open(tmp_path).close()
    assert query(tmp_path, "SELECT version_num FROM alembic_version") == [(REVISIONS[-1],)]


def test_records_of_a_newer_program_are_refused_in_one_sentence(tmp_path: Path) -> None:
    Store.open(tmp_path).close()
    connection = sqlite3.connect(tmp_path / FILE_NAME)
    with connection:
        connection.execute("UPDATE alembic_version SET version_num = '9999'")
    connection.close()
    with pytest.raises(StoreNewer, match="newer version of this program"):
        Store.open(tmp_path)
    assert query(tmp_path, "SELECT version_num FROM alembic_version") == [("9999",)]


def test_alembic_stays_out_while_the_tables_are_up_to_date(tmp_path: Path) -> None:
    code = (
        "import sys; from advisor.records.store import Store;"
        "Store.open(sys.argv[1]).close(); print('alembic' in sys.modules)"
    )
    said = [
        subprocess.run([sys.executable, "-c", code, str(tmp_path)], capture_output=True, text=True, check=True).stdout
        for _ in range(2)
    ]
    assert said == ["True\n", "False\n"]


def test_the_tables_can_be_written_for_postgresql() -> None:
    dialect = postgresql.dialect()  # type: ignore[no-untyped-call]  # SQLAlchemy leaves it untyped
    texts = [str(CreateTable(table).compile(dialect=dialect)) for table in tables.metadata.sorted_tables]
    texts += [
        str(CreateIndex(index).compile(dialect=dialect))
        for table in tables.metadata.sorted_tables
        for index in table.indexes
    ]
    assert "answer BYTEA NOT NULL" in "".join(texts)


def test_the_data_folder_is_the_one_given_else_the_variable_else_the_users_own(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setenv("TWOLIGHT_DATA", str(tmp_path / "named"))
    assert data_folder(tmp_path / "given") == tmp_path / "given"
    assert data_folder() == tmp_path / "named"
    monkeypatch.setenv("TWOLIGHT_DATA", "  ")
    monkeypatch.setenv("XDG_DATA_HOME", str(tmp_path / "home"))
    if os.name == "posix" and sys.platform != "darwin":
        assert data_folder() == tmp_path / "home" / "twolight"
    assert data_folder().name == "twolight"
