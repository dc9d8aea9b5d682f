"""What can befall the file of records: other readers, damage, a full disk, a lock, a folder that may not be written."""

import json
import os
import shutil
import sqlite3
import stat
import tempfile
from pathlib import Path

import pytest

from advisor.records import engine, trouble
from advisor.records.location import FILE_NAME
from advisor.records.store import Store
from advisor.records.visits import SavedVisit
from tests.databases import execute, rows

POSIX = pytest.mark.skipif(os.name != "posix", reason="file modes are a POSIX matter")


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    return tmp_path / "made" / "by us"


def visit_text(note: str = "") -> str:
    return json.dumps({"format": "twolight-visit-1", "date": "2026-12-01", "note": note})


def save(store: Store, text: str, answer: str = '{"options": []}') -> SavedVisit:
    return store.save_visit(text, range_toml="abc", version="0.1.0", answer_json=answer)


@POSIX
def test_only_the_user_may_read_the_records(folder: Path) -> None:
    before = os.umask(0)
    try:
        with Store.open(folder) as store:
            save(store, visit_text())
            modes = {path.name: stat.S_IMODE(path.stat().st_mode) for path in folder.iterdir()}
    finally:
        os.umask(before)
    assert set(modes) == {FILE_NAME, f"{FILE_NAME}-wal", f"{FILE_NAME}-shm"}
    assert set(modes.values()) == {0o600}
    assert stat.S_IMODE(folder.stat().st_mode) == 0o700


@POSIX
def test_a_file_that_others_may_read_is_narrowed(folder: Path) -> None:
    Store.open(folder).close()
    (folder / FILE_NAME).chmod(0o644)
    Store.open(folder).close()
    assert stat.S_IMODE((folder / FILE_NAME).stat().st_mode) == 0o600


def test_a_file_that_is_no_database_is_named_in_one_sentence(folder: Path) -> None:
    folder.mkdir(parents=True)
    (folder / FILE_NAME).write_bytes(b"these are not records " * 100)
    with pytest.raises(trouble.StoreUnreadable, match="damaged or are not records") as caught:
        Store.open(folder)
    assert str(folder) in str(caught.value)
    assert (folder / FILE_NAME).read_bytes().startswith(b"these are not records")


def test_a_damaged_page_is_named_in_the_same_sentence(folder: Path) -> None:
    with Store.open(folder) as store:
        for number in range(50):
            save(store, visit_text(note="n" * 3000), answer=str(number))
    file = folder / FILE_NAME
    whole = file.read_bytes()
    file.write_bytes(whole[: 4096 * 12] + b"\xa5" * (len(whole) - 4096 * 12))
    with pytest.raises(trouble.StoreUnreadable), Store.open(folder) as store:
        store.list_visits(limit=100)


def test_an_answer_that_cannot_be_unpacked_is_damage(folder: Path) -> None:
    with Store.open(folder) as store:
        saved = save(store, visit_text())
        execute(folder, "UPDATE visit SET answer = X'00'")
        with pytest.raises(trouble.StoreUnreadable):
            store.get_visit(saved.id)


def test_another_programs_database_is_left_alone(folder: Path) -> None:
    folder.mkdir(parents=True)
    connection = sqlite3.connect(folder / FILE_NAME)
    with connection:
        connection.execute("CREATE TABLE recipe (name TEXT)")
    connection.close()
    with pytest.raises(trouble.StoreUnreadable):
        Store.open(folder)
    assert rows(folder, "SELECT name FROM sqlite_master") == [("recipe",)]


def test_a_full_disk_is_said_and_nothing_half_is_saved(folder: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(engine, "_PRAGMAS", (*engine._PRAGMAS, "max_page_count = 32"))
    with Store.open(folder) as store:
        saved: list[SavedVisit] = []

        def fill_up() -> None:
            for _ in range(100):
                saved.append(save(store, visit_text(note="n" * 5000)))

        with pytest.raises(trouble.StoreFull, match="full; nothing was saved"):
            fill_up()
        assert [line.id for line in store.list_visits()] == [visit.id for visit in reversed(saved)]
        assert saved


def test_a_store_that_another_program_holds_is_said(folder: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(engine, "_PRAGMAS", ("busy_timeout = 50", *engine._PRAGMAS[1:]))
    Store.open(folder).close()
    holder = sqlite3.connect(folder / FILE_NAME, isolation_level=None)
    try:
        holder.execute("BEGIN IMMEDIATE")
        with Store.open(folder) as store:
            with pytest.raises(trouble.StoreLocked, match="Another program"):
                save(store, visit_text())
            assert store.list_visits() == []
    finally:
        holder.close()


@POSIX
@pytest.mark.filterwarnings("ignore:.*multi-threaded, use of fork.*:DeprecationWarning")  # the child only opens a file
def test_a_folder_that_may_not_be_written_is_said() -> None:
    place = Path(tempfile.mkdtemp(dir="/tmp"))  # every user may pass through it, unlike pytest's own folder
    place.chmod(0o555)
    ours, theirs = os.pipe()
    try:
        child = os.fork()
        if child == 0:
            try:
                if os.getuid() == 0:
                    os.setuid(65534)  # root may write anywhere
                Store.open(place)
            except trouble.StoreError as error:
                os.write(theirs, f"{type(error).__name__}: {error}".encode())
            finally:
                os._exit(0)
        os.close(theirs)
        said = os.read(ours, 4096).decode()
        os.waitpid(child, 0)
    finally:
        os.close(ours)
        shutil.rmtree(place)
    assert said.startswith("StoreReadOnly: ")
    assert str(place) in said
