"""A form is saved once, however often and whenever it is sent, and never over what its window had not seen."""

import datetime
import json
import threading
from collections.abc import Callable

import pytest

from advisor.records.drafts import DraftChanged, DraftMissing
from advisor.records.saved_forms import SentForm
from advisor.records.store import Store
from advisor.records.visits import SavedVisit, VisitChanged
from tests.databases import Place, execute, rows

TOKEN = "a" * 32


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


def test_a_form_sent_again_after_a_restart_is_one_row(place: Place) -> None:
    with Store.open(place) as store:
        first = save(store, "one", SentForm(TOKEN, "d", 3))
    with Store.open(place) as store:
        assert save(store, "one", SentForm(TOKEN, "d", 3)) == first
        later = save(store, "two", SentForm(TOKEN, "d", 3))
    assert (later.id, later.edit) == (first.id, 2)
    assert rows(place, "SELECT count(*) FROM visit") == [(1,)]
    assert rows(place, "SELECT * FROM saved_form") == [(TOKEN, first.id, 2, "d", 3)]


def test_saving_takes_the_draft_with_it_and_remembers_what_became_of_it(store: Store) -> None:
    draft = store.save_draft("{}")
    saved = save(store, "one", SentForm(TOKEN, draft.id, draft.edit))
    with pytest.raises(DraftMissing):
        store.get_draft(draft.id)
    assert store.visit_of_draft(draft.id) == saved.id
    assert store.visit_of_draft("nowhere") is None


def test_a_draft_that_another_window_changed_is_neither_saved_nor_dropped(store: Store, place: Place) -> None:
    draft = store.save_draft("1")
    store.save_draft("2", draft_id=draft.id, edit_seen=1)
    with pytest.raises(DraftChanged):
        save(store, "one", SentForm(TOKEN, draft.id, 1))
    assert store.get_draft(draft.id).fields_json == "2"
    assert rows(place, "SELECT (SELECT count(*) FROM visit) + (SELECT count(*) FROM saved_form)") == [(0,)]


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


def test_what_a_form_became_is_forgotten_with_its_visit(store: Store, place: Place) -> None:
    saved = save(store, "one", SentForm(TOKEN, "d", 1))
    store.erase_visit(saved.id)
    assert rows(place, "SELECT * FROM saved_form") == []
    assert save(store, "one", SentForm(TOKEN)).id != saved.id


def test_one_form_sent_by_eight_threads_at_once_is_one_visit(store: Store, place: Place) -> None:
    (found,) = sent_at_once(lambda: save(store, "one", SentForm(TOKEN, "d", 1)))
    assert rows(place, "SELECT id, edit FROM visit") == [(found.id, 1)]


def test_one_change_of_a_visit_sent_by_eight_threads_at_once_is_one_edit(store: Store, place: Place) -> None:
    visit = save(store, "first", SentForm(TOKEN))
    (found,) = sent_at_once(lambda: save(store, "second", SentForm("b" * 32, "d", 1), over=visit))
    assert (found.id, found.edit) == (visit.id, 2)
    assert rows(place, "SELECT id, edit FROM visit") == [(visit.id, 2)]


def sent_at_once(send: Callable[[], SavedVisit]) -> set[SavedVisit]:
    """Send a form from eight threads; return what each was told was saved."""
    told: list[SavedVisit] = []
    threads = [threading.Thread(target=lambda: told.append(send())) for _ in range(8)]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join()
    assert len(told) == len(threads)
    return set(told)


def test_drafts_left_lying_for_thirty_days_go_when_a_new_one_is_begun(store: Store, place: Place) -> None:
    young, old = store.save_draft("young"), store.save_draft("old")
    for draft, days in ((young, 29), (old, 31)):
        moment = datetime.datetime.now(datetime.UTC) - datetime.timedelta(days=days)
        execute(place, "UPDATE draft SET changed_at = :at WHERE id = :id", at=moment.isoformat(), id=draft.id)
    assert len(rows(place, "SELECT id FROM draft")) == 2
    store.save_draft("new")
    assert sorted(rows(place, "SELECT fields FROM draft")) == [("new",), ("young",)]
