import json
import os
import subprocess
import sys
import threading
import zlib
from collections.abc import Iterable
from pathlib import Path
from typing import Any

import pytest
from sqlalchemy import Row, inspect, text

from advisor.records import tables
from advisor.records.engine import make_private
from advisor.records.folding import fold
from advisor.records.location import FILE_NAME, data_folder
from advisor.records.schema import MIGRATIONS, REVISIONS, stored_revision, upgrade
from advisor.records.store import Store
from advisor.records.trouble import StoreNewer
from tests.databases import Place, engine_at, execute, rows

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
ROWS |= {
    "0004": (
        *ROWS["0003"],
        "INSERT INTO event VALUES ('e1', '2026-01-06T03:04:05.000000+00:00', 'local', 'saved', 'v1')",
    )
}


ROWS |= {
    "0005": (
        ROWS["0001"][0],
        "INSERT INTO visit VALUES ('v1', '2026-01-02T03:04:05.000000+00:00', '2026-01-03T03:04:05.000000+00:00', 2,"
        " '2026-01-02', '{\"reference\": \"A-1\"}', 'h1', '0.1.0', X'7801010200fdff7b7d017500f9')",
        "INSERT INTO visit_word VALUES ('v1', '2026-01-02'), ('v1', 'a-1'), ('v1', 'ada'), ('v1', 'berg')",
        *ROWS["0004"][2:],
    )
}


def database_at(place: Place, revision: str) -> None:
    if isinstance(place, Path):
        make_private(place / FILE_NAME)
    engine = engine_at(place)
    with engine.execution_options(writing=True).begin() as connection:
        upgrade(connection, to=revision)
        assert stored_revision(connection) == revision
    engine.dispose()


def fill(place: Place, statements: Iterable[str]) -> None:
    """Insert rows by hand; PostgreSQL writes a string of bytes in its own way."""
    bytes_begin = "X'" if isinstance(place, Path) else "'\\x"
    engine = engine_at(place)
    with engine.begin() as connection:
        for statement in statements:
            connection.exec_driver_sql(statement.replace("X'", bytes_begin))
    engine.dispose()


def tables_of(place: Place) -> list[str]:
    engine = engine_at(place)
    try:
        return inspect(engine).get_table_names()
    finally:
        engine.dispose()


def version_of(place: Place) -> list[Row[Any]]:
    return rows(place, "SELECT version_num FROM alembic_version")


def test_every_version_has_rows_to_be_tested_with() -> None:
    assert tuple(ROWS) == REVISIONS


def test_the_list_of_versions_is_the_one_alembic_finds() -> None:
    from alembic.script import ScriptDirectory

    found = ScriptDirectory(str(MIGRATIONS)).walk_revisions()
    assert tuple(script.revision for script in found)[::-1] == REVISIONS


def test_from_empty_the_migrations_make_the_tables_the_program_declares(empty_place: Place) -> None:
    from alembic.autogenerate import compare_metadata
    from alembic.migration import MigrationContext

    Store.open(empty_place).close()
    engine = engine_at(empty_place)
    with engine.connect() as connection:
        context = MigrationContext.configure(connection, opts={"compare_type": True})
        assert compare_metadata(context, tables.metadata) == []
    engine.dispose()


@pytest.mark.parametrize("revision", REVISIONS)
def test_rows_of_every_version_are_read_after_the_upgrade(empty_place: Place, revision: str) -> None:
    database_at(empty_place, revision)
    fill(empty_place, ROWS[revision])
    with Store.open(empty_place) as store:
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
        assert store.visit_of_draft("d0") == ("v1" if revision >= "0003" else None)
        added = store.save_recheck("{}", visit_id="v1", outcome="clean", who_pays="nobody")
        assert store.get_recheck(added.id) == added
    assert version_of(empty_place) == [(REVISIONS[-1],)]


def test_an_upgrade_finds_visits_by_the_words_that_saving_them_would_have_stored(empty_place: Place) -> None:
    name, reference, long = "Zoë  O'Neil-Łukasik", "A-117", "Donaudampfschifffahrtsgesellschaftskapitänsmütze"
    note = " ".join([long, *(f"Wort{number}" for number in range(80))])
    content = json.dumps({"wearer": {"name": name}, "reference": reference, "note": note, "date": "2026-01-02"})
    database_at(empty_place, "0004")
    folded = (fold(name), fold(reference), fold(note))
    fill(empty_place, ROWS["0004"][:1])
    insert = (
        "INSERT INTO visit VALUES"
        " (:id, '2026', '2026', 1, :name, :reference, '2026-01-02', :note, :visit, 'h1', '0', :answer)"
    )
    more = {
        "name": folded[0],
        "reference": folded[1],
        "note": folded[2],
        "visit": content,
        "answer": zlib.compress(b"{}"),
    }
    ids = [f"v{number}" for number in range(1203)]  # more than are filled in at a time
    engine = engine_at(empty_place)
    with engine.begin() as connection:
        connection.execute(text(insert), [{"id": key, **more} for key in ids])
    engine.dispose()
    with Store.open(empty_place) as store:
        saved = store.save_visit(content, range_toml="key = 1", version="0", answer_json="{}")
    found: dict[str, set[str]] = {}
    for row in rows(empty_place, "SELECT visit_id, word FROM visit_word"):
        found.setdefault(row.visit_id, set()).add(row.word)
    assert set(found) == {*ids, saved.id}
    assert {frozenset(words) for words in found.values()} == {frozenset(found[saved.id])}
    first_sixty = {long.casefold().replace("ä", "a").replace("ü", "u")[:40], *(f"wort{number}" for number in range(59))}
    assert found[saved.id] == {"zoe", "o'neil-lukasik", "a-117", "2026-01-02"} | first_sixty


def test_four_desks_that_start_at_once_make_the_tables_once(empty_place: Place) -> None:
    opened: list[int] = []

    def start() -> None:
        with Store.open(empty_place) as store:
            opened.append(len(store.list_visits()))

    threads = [threading.Thread(target=start) for _ in range(4)]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join()
    assert opened == [0] * 4
    assert version_of(empty_place) == [(REVISIONS[-1],)]


def test_a_migration_that_fails_leaves_the_tables_as_they_were(
    empty_place: Place, monkeypatch: pytest.MonkeyPatch
) -> None:
    from alembic import op

    def fail(*_arguments: object, **_options: object) -> None:
        raise RuntimeError("no index today")

    monkeypatch.setattr(op, "create_index", fail)
    with pytest.raises(RuntimeError, match="no index today"):
        Store.open(empty_place)
    assert tables_of(empty_place) == []
    monkeypatch.undo()
    Store.open(empty_place).close()
    assert version_of(empty_place) == [(REVISIONS[-1],)]


def test_records_of_a_newer_program_are_refused_in_one_sentence(place: Place) -> None:
    Store.open(place).close()
    execute(place, "UPDATE alembic_version SET version_num = '9999'")
    with pytest.raises(StoreNewer, match="newer version of this program"):
        Store.open(place)
    assert version_of(place) == [("9999",)]


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
