"""A form is saved once, however often and whenever it is sent, and never over what its window had not seen."""

import json
import sqlite3
import threading
from collections.abc import Iterator
from pathlib import Path

import pytest

from advisor.records.drafts import DraftChanged, DraftMissing
from advisor.records.location import FILE_NAME
from advisor.records.saved_forms import SentForm
from advisor.records.store import Store
from advisor.records.visits import SavedVisit, VisitChanged

TOKEN = "a" * 32


@pytest.fixture
def store(tmp_path: Path) -> Iterator[Store]:
    with Store.open(tmp_path) as opened:
        yield opened


def save(store: Store, note: str, form: SentForm, over: SavedVisit | None = None) -> SavedVisit:
    return store.save_visit(
        json.dumps({"note": note}),
        range_toml="abc",
        version="1",
        answer_json="{}",
        visit_id=over.id if over else None,
        edit_seen=over.edit if over else None,
        form=form,
    )


def rows(folder: Path, query: str) -> list[tuple[object, ...]]:
    connection = sqlite3.connect(folder / FILE_NAME)
    try:
        return connection.execute(query).fetchall()
    finally:
        connection.close()


def test_a_form_sent_again_after_a_restart_is_one_row(tmp_path: Path) -> None:
    with Store.open(tmp_path) as store:
        first = save(store, "one", SentForm(TOKEN, "d", 3))
    with Store.open(tmp_path) as store:
        assert save(store, "one", SentForm(TOKEN, "d", 3)) == first
        later = save(store, "two", SentForm(TOKEN, "d", 3))
    assert (later.id, later.edit) == (first.id, 2)
    assert rows(tmp_path, "SELECT count(*) FROM visit") == [(1,)]
    assert rows(tmp_path, "SELECT * FROM saved_form") == [(TOKEN, first.id, 2, "d", 3)]


def test_saving_takes_the_draft_with_it_and_remembers_what_became_of_it(store: Store) -> None:
    draft = store.save_draft("{}")
    saved = save(store, "one", SentForm(TOKEN, draft.id, draft.edit))
    with pytest.raises(DraftMissing):
        store.get_draft(draft.id)
    assert store.visit_of_draft(draft.id) == saved.id
    assert store.visit_of_draft("nowhere") is None


def test_a_draft_that_another_window_changed_is_neither_saved_nor_dropped(store: Store, tmp_path: Path) -> None:
    draft = store.save_draft("1")
    store.save_draft("2", draft_id=draft.id, edit_seen=1)
    with pytest.raises(DraftChanged):
        save(store, "one", SentForm(TOKEN, draft.id, 1))
    assert store.get_draft(draft.id).fields_json == "2"
    assert rows(tmp_path, "SELECT (SELECT count(*) FROM visit) + (SELECT count(*) FROM saved_form)") == [(0,)]


def test_a_window_that_had_not_seen_what_was_saved_of_its_form_is_told(store: Store) -> None:
    saved = save(store, "theirs", SentForm(TOKEN, "d", 6))
    with pytest.raises(VisitChanged) as caught:
        save(store, "mine", SentForm(TOKEN, "d", 5))
    assert caught.value.stored == saved
    assert store.get_visit(saved.id) == saved


def test_a_form_sent_again_after_another_form_changed_its_visit_is_told(store: Store) -> None:
    saved = save(store, "mine", SentForm(TOKEN))
    theirs = save(store, "theirs", SentForm("b" * 32), over=saved)
    with pytest.raises(VisitChanged):
        save(store, "mine again", SentForm(TOKEN))
    assert store.get_visit(saved.id) == theirs


def test_a_change_of_a_visit_is_sent_again_and_changed_again_from_its_own_form(store: Store) -> None:
    visit = save(store, "first", SentForm(TOKEN))
    form = SentForm("b" * 32, "d", 2)
    assert save(store, "second", form, over=visit) == save(store, "second", form, over=visit)
    assert save(store, "third", form, over=visit).edit == 3


def test_what_a_form_became_is_forgotten_with_its_visit(store: Store, tmp_path: Path) -> None:
    saved = save(store, "one", SentForm(TOKEN, "d", 1))
    store.erase_visit(saved.id)
    assert rows(tmp_path, "SELECT * FROM saved_form") == []
    assert save(store, "one", SentForm(TOKEN)).id != saved.id


def test_one_form_sent_by_eight_threads_at_once_is_one_visit(store: Store, tmp_path: Path) -> None:
    found: set[str] = set()

    def send() -> None:
        found.add(save(store, "one", SentForm(TOKEN, "d", 1)).id)

    threads = [threading.Thread(target=send) for _ in range(8)]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join()
    assert len(found) == 1
    assert rows(tmp_path, "SELECT id, edit FROM visit") == [(found.pop(), 1)]


def test_drafts_left_lying_for_thirty_days_go_when_a_new_one_is_begun(store: Store, tmp_path: Path) -> None:
    young, old = store.save_draft("young"), store.save_draft("old")
    connection = sqlite3.connect(tmp_path / FILE_NAME)
    with connection:
        for draft, days in ((young, 29), (old, 31)):
            aged = "UPDATE draft SET changed_at = strftime('%Y-%m-%dT%H:%M:%f000+00:00', 'now', ?) WHERE id = ?"
            connection.execute(aged, [f"-{days} days", draft.id])
    connection.close()
    assert len(rows(tmp_path, "SELECT id FROM draft")) == 2
    store.save_draft("new")
    assert sorted(rows(tmp_path, "SELECT fields FROM draft")) == [("new",), ("young",)]
