import hashlib
import json
import threading
import time
import zlib
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest

from advisor.records.drafts import DraftChanged, DraftMissing
from advisor.records.store import Store
from advisor.records.visits import SavedVisit, VisitChanged, VisitMissing
from tests.databases import Place, rows


def visit_text(name: str = "Zoë Łukasik", **more: Any) -> str:
    visit = {"format": "twolight-visit-1", "date": "2026-12-01", "reference": "A-117", "wearer": {"name": name}}
    return json.dumps(visit | more, ensure_ascii=False)


def save(store: Store, text: str, answer: str = '{"options": []}', **more: Any) -> SavedVisit:
    return store.save_visit(text, range_toml="abc", version="0.1.0", answer_json=answer, **more)


def words(place: Place) -> set[str]:
    return {row.word for row in rows(place, "SELECT word FROM visit_word")}


# SHA-256 of the three letters "abc", FIPS 180-2 appendix B.1
ABC = "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad"


def test_a_saved_visit_is_one_row_with_everything_it_was_made_of(store: Store, place: Place) -> None:
    saved = save(store, visit_text(note="Likes  thin RIMS"), answer='{"options": [1, 2]}')
    (row,) = rows(place, "SELECT * FROM visit")
    assert row.id == saved.id
    assert len(row.id) == 22
    assert row.edit == 1
    assert json.loads(row.visit)["wearer"] == {"name": "Zoë Łukasik"}
    assert row.date == "2026-12-01"
    assert words(place) == {"zoe", "lukasik", "a-117", "2026-12-01", "likes", "thin", "rims"}
    assert (row.range_hash, row.version) == (ABC, "0.1.0")
    assert zlib.decompress(row.answer) == b'{"options": [1, 2]}'
    assert row.created_at == row.changed_at
    assert row.created_at.endswith("+00:00")
    assert len(row.created_at) == 32
    assert store.get_visit(saved.id) == saved


def test_a_visit_outlives_closing_and_opening(place: Place) -> None:
    with Store.open(place) as first:
        saved = save(first, visit_text())
    with Store.open(place) as second:
        assert second.get_visit(saved.id) == saved


def test_a_change_is_stored_over_the_edit_that_was_seen(store: Store, place: Place) -> None:
    first = save(store, visit_text())
    second = save(store, visit_text("Ada Berg"), visit_id=first.id, edit_seen=first.edit)
    (row,) = rows(place, "SELECT * FROM visit")
    assert (row.id, row.edit, json.loads(row.visit)["wearer"]) == (first.id, 2, {"name": "Ada Berg"})
    assert words(place) == {"ada", "berg", "a-117", "2026-12-01"}
    assert (second.created_at, second.edit) == (first.created_at, 2)
    assert second.changed_at > first.changed_at


def test_a_change_never_overwrites_an_edit_that_was_not_seen(store: Store, place: Place) -> None:
    first = save(store, visit_text())
    second = save(store, visit_text("Ada Berg"), visit_id=first.id, edit_seen=1)
    with pytest.raises(VisitChanged) as caught:
        save(store, visit_text("Cy Dahl"), visit_id=first.id, edit_seen=1)
    assert caught.value.stored == second
    (row,) = rows(place, "SELECT * FROM visit")
    assert (row.edit, json.loads(row.visit)["wearer"]) == (2, {"name": "Ada Berg"})
    assert "dahl" not in words(place)


def test_a_refused_change_leaves_no_range_behind(store: Store, place: Place) -> None:
    first = save(store, visit_text())
    with pytest.raises(VisitChanged):
        store.save_visit(
            visit_text(), range_toml="other", version="1", answer_json="{}", visit_id=first.id, edit_seen=7
        )
    assert [row.hash for row in rows(place, "SELECT * FROM range_version")] == [ABC]


def test_an_erased_visit_is_gone_with_its_drafts_and_from_the_file(store: Store, place: Place) -> None:
    saved = save(store, visit_text("Unmistakable Wearer"))
    store.save_draft("{}", visit_id=saved.id, visit_edit=1)
    store.erase_visit(saved.id)
    assert rows(place, "SELECT id FROM visit UNION SELECT id FROM draft") == []
    with pytest.raises(VisitMissing):
        store.get_visit(saved.id)
    with pytest.raises(VisitMissing):
        save(store, visit_text(), visit_id=saved.id, edit_seen=1)
    assert rows(place, "SELECT * FROM visit_word") == []
    store.close()
    if isinstance(place, Path):  # a server keeps its files to itself
        assert b"unmistakable" not in b"".join(path.read_bytes() for path in place.iterdir()).lower()


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


def test_a_visit_without_a_date_is_of_the_day_it_was_saved_and_stays_so(store: Store, place: Place) -> None:
    saved = save(store, json.dumps({"wearer": None}))
    (row,) = rows(place, "SELECT date FROM visit")
    assert row.date == time.strftime("%Y-%m-%d")
    assert save(store, "{}", visit_id=saved.id, edit_seen=1).date == saved.date


def test_a_range_is_stored_once_for_each_content(store: Store, place: Place) -> None:
    assert store.current_range() is None
    assert store.set_range("abc") == ABC
    other = store.set_range("abcd")
    assert store.set_range("abc") == ABC
    save(store, visit_text())
    kept = {row.hash: row.toml for row in rows(place, "SELECT * FROM range_version")}
    assert kept == {ABC: "abc", hashlib.sha256(b"abcd").hexdigest(): "abcd"}
    current, former = store.current_range(), store.get_range(other)
    assert current is not None
    assert former is not None
    assert (current.hash, current.toml, former.toml) == (ABC, "abc", "abcd")
    assert [tuple(row) for row in rows(place, "SELECT * FROM setting")] == [("current-range", ABC)]


def test_a_setting_is_stored_over_the_one_before(store: Store, place: Place) -> None:
    assert store.get_setting("language") is None
    store.set_setting("language", "es")
    store.set_setting("language", "de")
    assert store.get_setting("language") == "de"
    assert len(rows(place, "SELECT * FROM setting")) == 1


def test_a_draft_is_kept_as_typed_until_it_is_deleted(store: Store, place: Place) -> None:
    draft = store.save_draft('{"sphere": "-4,2"}')
    again = store.save_draft('{"sphere": "-4,25"}', draft_id=draft.id, edit_seen=draft.edit)
    (row,) = rows(place, "SELECT * FROM draft")
    assert (row.fields, row.edit, row.visit_id) == ('{"sphere": "-4,25"}', 2, None)
    assert store.get_draft(draft.id) == again
    store.delete_draft(draft.id)
    store.delete_draft(draft.id)
    assert rows(place, "SELECT * FROM draft") == []
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


def test_eight_threads_that_write_lose_nothing(store: Store, place: Place) -> None:
    def work(thread: int) -> None:
        for number in range(15):
            save(store, visit_text(f"Wearer {thread}-{number}"))

    in_threads(8, work)
    names = {json.loads(row.visit)["wearer"]["name"] for row in rows(place, "SELECT visit FROM visit")}
    assert names == {f"Wearer {thread}-{number}" for thread in range(8) for number in range(15)}
    assert len(rows(place, "SELECT * FROM range_version")) == 1


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
