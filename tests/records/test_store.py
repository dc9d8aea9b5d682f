import hashlib
import json
import os
import shutil
import sqlite3
import stat
import tempfile
import threading
import zlib
from collections.abc import Callable, Iterator
from pathlib import Path
from typing import Any

import pytest

from advisor.records import engine, trouble
from advisor.records.drafts import DraftChanged, DraftMissing
from advisor.records.location import FILE_NAME
from advisor.records.store import Store
from advisor.records.visits import SavedVisit, VisitChanged, VisitMissing

POSIX = pytest.mark.skipif(os.name != "posix", reason="file modes are a POSIX matter")


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    return tmp_path / "made" / "by us"


@pytest.fixture
def store(folder: Path) -> Iterator[Store]:
    with Store.open(folder) as opened:
        yield opened


def visit_text(name: str = "Zoë Łukasik", **more: Any) -> str:
    visit = {"format": "twolight-visit-1", "date": "2026-12-01", "reference": "A-117", "wearer": {"name": name}}
    return json.dumps(visit | more, ensure_ascii=False)


def save(store: Store, text: str, answer: str = '{"options": []}', **more: Any) -> SavedVisit:
    return store.save_visit(text, range_toml="abc", version="0.1.0", answer_json=answer, **more)


def rows(folder: Path, query: str) -> list[sqlite3.Row]:
    connection = sqlite3.connect(folder / FILE_NAME)
    connection.row_factory = sqlite3.Row
    try:
        return connection.execute(query).fetchall()
    finally:
        connection.close()


# SHA-256 of the three letters "abc", FIPS 180-2 appendix B.1
ABC = "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad"


def test_a_saved_visit_is_one_row_with_everything_it_was_made_of(store: Store, folder: Path) -> None:
    saved = save(store, visit_text(note="Likes  thin RIMS"), answer='{"options": [1, 2]}')
    (row,) = rows(folder, "SELECT * FROM visit")
    assert row["id"] == saved.id
    assert len(row["id"]) == 22
    assert row["edit"] == 1
    assert json.loads(row["visit"])["wearer"] == {"name": "Zoë Łukasik"}
    assert (row["name_folded"], row["reference_folded"], row["date"]) == ("zoe lukasik", "a-117", "2026-12-01")
    assert row["note_folded"] == "likes thin rims"
    assert (row["range_hash"], row["version"]) == (ABC, "0.1.0")
    assert zlib.decompress(row["answer"]) == b'{"options": [1, 2]}'
    assert row["created_at"] == row["changed_at"]
    assert row["created_at"].endswith("+00:00")
    assert len(row["created_at"]) == 32
    assert store.get_visit(saved.id) == saved


def test_a_visit_outlives_closing_and_opening(folder: Path) -> None:
    with Store.open(folder) as first:
        saved = save(first, visit_text())
    with Store.open(folder) as second:
        assert second.get_visit(saved.id) == saved


def test_a_change_is_stored_over_the_edit_that_was_seen(store: Store, folder: Path) -> None:
    first = save(store, visit_text())
    second = save(store, visit_text("Ada Berg"), visit_id=first.id, edit_seen=first.edit)
    (row,) = rows(folder, "SELECT * FROM visit")
    assert (row["id"], row["edit"], row["name_folded"]) == (first.id, 2, "ada berg")
    assert (second.created_at, second.edit) == (first.created_at, 2)
    assert second.changed_at > first.changed_at


def test_a_change_never_overwrites_an_edit_that_was_not_seen(store: Store, folder: Path) -> None:
    first = save(store, visit_text())
    second = save(store, visit_text("Ada Berg"), visit_id=first.id, edit_seen=1)
    with pytest.raises(VisitChanged) as caught:
        save(store, visit_text("Cy Dahl"), visit_id=first.id, edit_seen=1)
    assert caught.value.stored == second
    (row,) = rows(folder, "SELECT * FROM visit")
    assert (row["edit"], row["name_folded"]) == (2, "ada berg")


def test_a_refused_change_leaves_no_range_behind(store: Store, folder: Path) -> None:
    first = save(store, visit_text())
    with pytest.raises(VisitChanged):
        store.save_visit(
            visit_text(), range_toml="other", version="1", answer_json="{}", visit_id=first.id, edit_seen=7
        )
    assert [row["hash"] for row in rows(folder, "SELECT * FROM range_version")] == [ABC]


def test_an_erased_visit_is_gone_with_its_drafts_and_from_the_file(store: Store, folder: Path) -> None:
    saved = save(store, visit_text("Unmistakable Wearer"))
    store.save_draft("{}", visit_id=saved.id, visit_edit=1)
    store.erase_visit(saved.id)
    assert rows(folder, "SELECT id FROM visit UNION SELECT id FROM draft") == []
    with pytest.raises(VisitMissing):
        store.get_visit(saved.id)
    with pytest.raises(VisitMissing):
        save(store, visit_text(), visit_id=saved.id, edit_seen=1)
    store.close()
    assert b"Unmistakable" not in b"".join(path.read_bytes() for path in folder.iterdir())


def test_an_edit_without_a_visit_is_a_fault_of_the_caller(store: Store) -> None:
    with pytest.raises(ValueError, match="visit_id and edit_seen"):
        save(store, visit_text(), edit_seen=1)


@pytest.mark.parametrize(
    ("search", "found"),
    [
        ("", ["Ben O'Neil", "Zoë Łukasik", "Ørjan Weiß"]),
        ("luk", ["Zoë Łukasik"]),
        ("LUKASIK zoe", ["Zoë Łukasik"]),
        ("weiss", ["Ørjan Weiß"]),
        ("orj", ["Ørjan Weiß"]),
        ("rjan", []),
        ("b-2", ["Zoë Łukasik"]),
        ("2026-11", ["Ørjan Weiß"]),
        ("left eye", ["Ben O'Neil"]),
        ("%", []),
        ("_", []),
        ("o'n", ["Ben O'Neil"]),
    ],
)
def test_visits_are_found_by_the_beginnings_of_words(store: Store, search: str, found: list[str]) -> None:
    save(store, visit_text("Ørjan Weiß", reference="B-1", date="2026-11-30"))
    save(store, visit_text("Zoë Łukasik", reference="B-2"))
    save(store, visit_text("Ben O'Neil", reference="B-3", note="weak left eye"))
    assert sorted(line.name for line in store.list_visits(search)) == sorted(found)


def test_the_list_goes_page_by_page_from_the_last_changed(store: Store) -> None:
    saved = [save(store, visit_text(f"Wearer {number}")) for number in range(7)]
    save(store, visit_text("Wearer 0"), visit_id=saved[0].id, edit_seen=1)
    names: list[str] = []
    key = None
    while page := store.list_visits("wear", limit=3, after=key):
        names += [line.name for line in page]
        key = page[-1].key
    assert names == [f"Wearer {number}" for number in (0, 6, 5, 4, 3, 2, 1)]


def test_a_visit_without_a_date_is_of_the_day_it_was_saved_and_stays_so(store: Store, folder: Path) -> None:
    saved = save(store, json.dumps({"wearer": None}))
    (row,) = rows(folder, "SELECT *, date('now', 'localtime') AS today FROM visit")
    assert row["date"] == row["today"]
    assert save(store, "{}", visit_id=saved.id, edit_seen=1).date == saved.date


def test_a_range_is_stored_once_for_each_content(store: Store, folder: Path) -> None:
    assert store.current_range() is None
    assert store.set_range("abc") == ABC
    other = store.set_range("abcd")
    assert store.set_range("abc") == ABC
    save(store, visit_text())
    kept = {row["hash"]: row["toml"] for row in rows(folder, "SELECT * FROM range_version")}
    assert kept == {ABC: "abc", hashlib.sha256(b"abcd").hexdigest(): "abcd"}
    current, former = store.current_range(), store.get_range(other)
    assert current is not None
    assert former is not None
    assert (current.hash, current.toml, former.toml) == (ABC, "abc", "abcd")
    assert [tuple(row) for row in rows(folder, "SELECT * FROM setting")] == [("current-range", ABC)]


def test_a_setting_is_stored_over_the_one_before(store: Store, folder: Path) -> None:
    assert store.get_setting("language") is None
    store.set_setting("language", "es")
    store.set_setting("language", "de")
    assert store.get_setting("language") == "de"
    assert len(rows(folder, "SELECT * FROM setting")) == 1


def test_a_draft_is_kept_as_typed_until_it_is_deleted(store: Store, folder: Path) -> None:
    draft = store.save_draft('{"sphere": "-4,2"}')
    again = store.save_draft('{"sphere": "-4,25"}', draft_id=draft.id, edit_seen=draft.edit)
    (row,) = rows(folder, "SELECT * FROM draft")
    assert (row["fields"], row["edit"], row["visit_id"]) == ('{"sphere": "-4,25"}', 2, None)
    assert store.get_draft(draft.id) == again
    store.delete_draft(draft.id)
    store.delete_draft(draft.id)
    assert rows(folder, "SELECT * FROM draft") == []
    with pytest.raises(DraftMissing):
        store.get_draft(draft.id)
    with pytest.raises(DraftMissing):
        store.save_draft("{}", draft_id=draft.id)


def test_a_draft_that_two_windows_write_says_so_to_the_later(store: Store) -> None:
    draft = store.save_draft("1")
    newer = store.save_draft("2", draft_id=draft.id, edit_seen=1)
    with pytest.raises(DraftChanged) as caught:
        store.save_draft("3", draft_id=draft.id, edit_seen=1)
    assert caught.value.stored == newer
    assert store.save_draft("4", draft_id=draft.id).edit == 3


def in_threads(count: int, work: Callable[[int], None]) -> None:
    faults: list[BaseException] = []

    def guarded(number: int) -> None:
        try:
            work(number)
        except BaseException as error:  # noqa: BLE001 - carried over to the test's own thread
            faults.append(error)

    threads = [threading.Thread(target=guarded, args=(number,)) for number in range(count)]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join()
    assert faults == []


def test_eight_threads_that_write_lose_nothing(store: Store, folder: Path) -> None:
    def work(thread: int) -> None:
        for number in range(15):
            save(store, visit_text(f"Wearer {thread}-{number}"))

    in_threads(8, work)
    names = {row["name_folded"] for row in rows(folder, "SELECT name_folded FROM visit")}
    assert names == {f"wearer {thread}-{number}" for thread in range(8) for number in range(15)}
    assert len(rows(folder, "SELECT * FROM range_version")) == 1


def test_eight_threads_that_count_up_one_visit_lose_no_count(store: Store) -> None:
    visit = save(store, json.dumps({"note": "0"}))

    def work(_thread: int) -> None:
        done = 0
        while done < 5:
            seen = store.get_visit(visit.id)
            count = int(json.loads(seen.visit_json)["note"]) + 1
            try:
                save(store, json.dumps({"note": str(count)}), visit_id=visit.id, edit_seen=seen.edit)
            except VisitChanged:
                continue
            done += 1

    in_threads(8, work)
    last = store.get_visit(visit.id)
    assert (json.loads(last.visit_json)["note"], last.edit) == ("40", 41)


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


def test_an_answer_that_cannot_be_unpacked_is_damage(store: Store, folder: Path) -> None:
    saved = save(store, visit_text())
    connection = sqlite3.connect(folder / FILE_NAME)
    with connection:
        connection.execute("UPDATE visit SET answer = X'00'")
    connection.close()
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
    assert [row["name"] for row in rows(folder, "SELECT name FROM sqlite_master")] == ["recipe"]


def test_a_full_disk_is_said_and_nothing_half_is_saved(folder: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(engine, "_PRAGMAS", (*engine._PRAGMAS, "max_page_count = 24"))
    with Store.open(folder) as store:
        saved: list[SavedVisit] = []

        def fill_up() -> None:
            for _ in range(100):
                saved.append(save(store, visit_text(note="n" * 5000)))

        with pytest.raises(trouble.StoreFull, match="full; nothing was saved"):
            fill_up()
        assert [line.id for line in store.list_visits()] == [visit.id for visit in reversed(saved)]
        assert saved


def test_a_store_that_another_program_holds_is_said(
    folder: Path, store: Store, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr(engine, "_PRAGMAS", ("busy_timeout = 50", *engine._PRAGMAS[1:]))
    store.close()
    holder = sqlite3.connect(folder / FILE_NAME, isolation_level=None)
    try:
        holder.execute("BEGIN IMMEDIATE")
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
