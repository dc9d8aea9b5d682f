import threading
from typing import Any

import pytest
from sqlalchemy import Row

from advisor.records.rechecks import OwnOrder, RecheckChanged, RecheckMissing
from advisor.records.store import Store
from advisor.records.visits import VisitMissing
from tests.databases import Place, rows

CONTENT = '{"says": "second light"}'


def visit(store: Store) -> str:
    return store.save_visit("{}", range_toml="abc", version="0", answer_json="{}").id


def recorded(place: Place) -> list[Row[Any]]:
    return rows(place, "SELECT visit_id, outcome, who_pays, new_visit_id, content FROM recheck")


def test_an_outcome_is_one_row_beside_its_visit(store: Store, place: Place) -> None:
    old, new = visit(store), visit(store)
    saved = store.save_recheck(CONTENT, visit_id=old, outcome="remake", who_pays="maker", new_visit_id=new)
    assert recorded(place) == [(old, "remake", "maker", new, CONTENT)]
    assert store.get_recheck(saved.id) == saved
    assert store.list_rechecks(new) == []


def test_the_last_recorded_comes_first(store: Store) -> None:
    key = visit(store)
    first = store.save_recheck(CONTENT, visit_id=key, outcome="adjust", who_pays="nobody")
    second = store.save_recheck(CONTENT, visit_id=key, outcome="refer", who_pays="nobody")
    assert [saved.id for saved in store.list_rechecks(key)] == [second.id, first.id]


def test_an_outcome_sent_twice_is_recorded_once(store: Store, place: Place) -> None:
    key = visit(store)
    for _ in range(2):
        store.save_recheck(CONTENT, visit_id=key, outcome="clean", who_pays="shop", recheck_id="once")
    assert len(recorded(place)) == 1


@pytest.mark.parametrize(
    "change",
    [{"outcome": "remake"}, {"who_pays": "maker"}, {"content_json": '{"says": "rings"}'}, {"new_visit_id": True}],
)
def test_another_outcome_under_the_same_identifier_is_refused_not_lost(
    store: Store, place: Place, change: dict[str, Any]
) -> None:
    key, new = visit(store), visit(store)
    first = {"content_json": CONTENT, "visit_id": key, "outcome": "clean", "who_pays": "shop", "recheck_id": "once"}
    store.save_recheck(**first)
    if "new_visit_id" in change:
        change = {"new_visit_id": new}
    with pytest.raises(RecheckChanged, match="nothing was overwritten"):
        store.save_recheck(**first | change)
    assert recorded(place) == [(key, "clean", "shop", None, CONTENT)]


def test_it_goes_with_its_visit_and_only_forgets_an_erased_new_order(store: Store, place: Place) -> None:
    old, new = visit(store), visit(store)
    store.save_recheck(CONTENT, visit_id=old, outcome="remake", who_pays="shop", new_visit_id=new)
    store.erase_visit(new)
    assert recorded(place) == [(old, "remake", "shop", None, CONTENT)]
    store.erase_visit(old)
    assert recorded(place) == []


def test_a_visit_is_never_its_own_new_order(store: Store, place: Place) -> None:
    old, new = visit(store), visit(store)
    with pytest.raises(OwnOrder):
        store.save_recheck(CONTENT, visit_id=old, outcome="remake", who_pays="shop", new_visit_id=old)
    saved = store.save_recheck(CONTENT, visit_id=old, outcome="remake", who_pays="shop")
    store.link_recheck(saved.id, new_visit_id=new)
    with pytest.raises(OwnOrder):
        store.link_recheck(saved.id, new_visit_id=old)
    assert recorded(place) == [(old, "remake", "shop", new, CONTENT)]


def test_nothing_is_recorded_of_a_visit_that_is_not_there(store: Store, place: Place) -> None:
    with pytest.raises(VisitMissing):
        store.save_recheck(CONTENT, visit_id="gone", outcome="none", who_pays="nobody")
    with pytest.raises(VisitMissing):
        store.save_recheck(CONTENT, visit_id=visit(store), outcome="remake", who_pays="shop", new_visit_id="gone")
    assert recorded(place) == []
    with pytest.raises(RecheckMissing, match="no such record"):
        store.get_recheck("gone")


def test_an_outcome_sent_by_eight_threads_at_once_is_recorded_once(store: Store, place: Place) -> None:
    key = visit(store)
    kept: list[str] = []

    def send() -> None:
        kept.append(store.save_recheck(CONTENT, visit_id=key, outcome="clean", who_pays="shop", recheck_id="once").id)

    threads = [threading.Thread(target=send) for _ in range(8)]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join()
    assert kept == ["once"] * 8
    assert len(recorded(place)) == 1
