"""A backup is one private file with everything the records held at one moment, whole or not there at all."""

import os
import sqlite3
import stat
import threading
from collections.abc import Callable
from contextlib import closing
from pathlib import Path

import pytest

from advisor.records import backup, checking, engine, parts, tables, trouble
from advisor.records.location import database_file
from advisor.records.schema import REVISIONS
from advisor.records.store import Store
from advisor.records.visits import SavedVisit
from tests.databases import Place
from tests.filled import everything, fill, in_folder, visit_text


def sqlite(file: Path, query: str) -> list[tuple[object, ...]]:
    with closing(sqlite3.connect(file)) as connection:
        return connection.execute(query).fetchall()


@pytest.fixture
def out(tmp_path: Path) -> Path:
    folder = tmp_path / "safe place"
    folder.mkdir()
    return folder / "copy.sqlite3"


def test_a_backup_holds_every_row_of_either_database(place: Place, store: Store, out: Path, tmp_path: Path) -> None:
    fill(store)
    before = everything(place)
    assert {name for name, rows in before.items() if not rows} == set(), "a table without rows proves nothing"
    done = store.backup(out)
    assert done == (out, 12, out.stat().st_size)
    assert everything(in_folder(out, tmp_path / "moved")) == before
    assert everything(place) == before
    assert sqlite(out, "SELECT version_num FROM alembic_version") == [(REVISIONS[-1],)]
    assert sqlite(out, "PRAGMA integrity_check") == [("ok",)]
    assert sqlite(out, "PRAGMA journal_mode") == [("delete",)]


@pytest.mark.skipif(os.name != "posix", reason="file modes are a POSIX matter")
def test_only_the_user_may_read_a_backup_and_nothing_lies_beside_it(store: Store, out: Path) -> None:
    before = os.umask(0)
    try:
        store.backup(out)
    finally:
        os.umask(before)
    assert stat.S_IMODE(out.stat().st_mode) == 0o600
    assert [path.name for path in out.parent.iterdir()] == [out.name]


def test_a_file_that_is_there_stays_unless_it_may_be_replaced(store: Store, out: Path) -> None:
    out.write_text("a letter")
    with pytest.raises(parts.FileExists, match="already; nothing was written"):
        store.backup(out)
    assert out.read_text() == "a letter"
    assert store.backup(out, replace=True).visits == 0
    assert sqlite(out, "SELECT count(*) FROM visit") == [(0,)]


def test_a_file_that_comes_there_meanwhile_stays(store: Store, out: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def slowly(part: Path, *, file: Path) -> checking.Contents:
        file.write_text("a letter")
        return checking.check(part, file=file)

    monkeypatch.setattr(backup, "check", slowly)
    with pytest.raises(parts.FileExists):
        store.backup(out)
    assert [path.read_text() for path in out.parent.iterdir()] == ["a letter"]


def test_on_a_disk_without_links_a_backup_is_put_there_as_well(
    store: Store, out: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    def refused(*_names: object) -> None:
        raise PermissionError(1, "Operation not permitted")

    monkeypatch.setattr(os, "link", refused)
    store.backup(out)
    assert [path.name for path in out.parent.iterdir()] == [out.name]
    with pytest.raises(parts.FileExists):
        parts.put(out, out, replace=False)


@pytest.mark.parametrize("log", ["-wal", "-journal"])
def test_a_place_with_the_log_of_another_database_is_refused(store: Store, out: Path, log: str) -> None:
    beside = out.with_name(out.name + log)
    beside.write_bytes(b"pages of something else")
    for replace in (False, True):
        with pytest.raises(parts.FileInUse, match="Another program"):
            store.backup(out, replace=replace)
    assert [path.name for path in out.parent.iterdir()] == [beside.name]


@pytest.mark.parametrize("replace", [False, True])
def test_the_records_are_never_overwritten_with_their_own_copy(tmp_path: Path, replace: bool) -> None:
    with Store.open(tmp_path) as store:
        fill(store)
        (tmp_path / "other name").symlink_to(database_file(tmp_path))
        for file in (database_file(tmp_path), tmp_path / "other name"):
            with pytest.raises(backup.FileIsRecords, match="the records themselves"):
                store.backup(file, replace=replace)
        assert len(store.list_visits()) == 12


@pytest.mark.parametrize("there", ["none/copy.sqlite3", "letter/copy.sqlite3", "folder"])
def test_a_place_that_cannot_be_written_is_told_in_one_sentence(store: Store, out: Path, there: str) -> None:
    (out.parent / "letter").write_text("a letter")
    (out.parent / "folder").mkdir()
    with pytest.raises(parts.FileNotWritten, match="cannot be written"):
        store.backup(out.parent / there)
    assert sorted(path.name for path in out.parent.iterdir()) == ["folder", "letter"]


def test_a_full_disk_leaves_nothing_behind(store: Store, out: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    fill(store)
    opened = checking.opened

    def small(file: Path) -> sqlite3.Connection:
        connection = opened(file)
        connection.execute("PRAGMA max_page_count = 10")
        return connection

    monkeypatch.setattr(backup, "opened", small)
    monkeypatch.setattr(engine, "_PRAGMAS", (*engine._PRAGMAS, "max_page_count = 10"))
    with pytest.raises(trouble.StoreFull, match="full") as caught:
        store.backup(out)
    assert f"holds {out} is full" in str(caught.value)
    assert list(out.parent.iterdir()) == []


@pytest.mark.parametrize(
    "damage", ["UPDATE visit SET visit = '{'", "UPDATE visit SET answer = X'78'", "DELETE FROM range_version"]
)
def test_damaged_records_are_told_instead_of_copied(tmp_path: Path, out: Path, damage: str) -> None:
    with Store.open(tmp_path) as store:
        fill(store)
        store.backup(out.with_name("before the damage"))
        with closing(sqlite3.connect(database_file(tmp_path))) as connection, connection:
            connection.execute(damage)
        with pytest.raises(trouble.StoreUnreadable, match=r"damaged.*put a backup in their place"):
            store.backup(out)
        assert [path.name for path in out.parent.iterdir()] == ["before the damage"]


def in_threads(work: list[Callable[[], None]]) -> None:
    faults: list[BaseException] = []

    def guarded(one: Callable[[], None]) -> None:
        try:
            one()
        except BaseException as error:  # noqa: BLE001 - carried over to the test's own thread
            faults.append(error)

    threads = [threading.Thread(target=guarded, args=(one,)) for one in work]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join()
    assert faults == []


def test_a_backup_while_four_write_is_one_moment(place: Place, store: Store, out: Path, tmp_path: Path) -> None:
    """Every writer saves numbers in order, so what a moment holds of it are the first so many, without a gap."""
    finished, taken = threading.Event(), 4
    saved: list[list[SavedVisit]] = [[] for _ in range(4)]

    def write(writer: int) -> Callable[[], None]:
        def work() -> None:
            number = 0
            while not finished.is_set():
                made = store.save_visit(
                    visit_text(f"W{writer}-{number}"), range_toml=f"{number}", version="1", answer_json="{}"
                )
                saved[writer].append(made)
                store.save_recheck("{}", visit_id=made.id, outcome="clean", who_pays="nobody")
                number += 1

        return work

    def copy() -> None:
        try:
            for number in range(taken):
                store.backup(out.with_name(f"{number}.sqlite3"))
        finally:
            finished.set()

    in_threads([*(write(writer) for writer in range(4)), copy])
    counts = []
    for number in range(taken):
        found = everything(in_folder(out.with_name(f"{number}.sqlite3"), tmp_path / f"moved {number}"))
        there = {row[0] for row in found["visit"]}
        for writer in saved:
            known = [visit.id in there for visit in writer]
            assert known == sorted(known, reverse=True), "a later save is there without an earlier one"
        assert {row[1] for row in found["recheck"]} <= there
        counts.append(len(there))
    assert counts == sorted(counts)
    assert counts[-1] > counts[0], "nobody wrote meanwhile"
    assert len(everything(place)["visit"]) == sum(len(writer) for writer in saved)


def test_the_mark_tells_every_changed_letter_that_sqlite_does_not_see(store: Store, out: Path) -> None:
    fill(store)
    store.backup(out)
    whole = out.read_bytes()
    place = whole.index(b"note of A-7")
    out.write_bytes(whole[:place] + b"n0te" + whole[place + 4 :])
    assert sqlite(out, "PRAGMA integrity_check") == [("ok",)]
    with pytest.raises(checking.FileDamaged, match="damaged; nothing was changed"):
        checking.check(out, file=out)


def test_every_table_is_counted(store: Store, out: Path) -> None:
    fill(store)
    store.backup(out)
    counted = checking.check(out, file=out).rows
    assert {name: counted[name] for name in tables.metadata.tables} == {
        name: sqlite(out, f"SELECT count(*) FROM {name}")[0][0]  # noqa: S608 - our own names
        for name in tables.metadata.tables
    }
