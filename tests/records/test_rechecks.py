import sqlite3
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest

from advisor.records.location import FILE_NAME
from advisor.records.rechecks import RecheckChanged, RecheckMissing
from advisor.records.store import Store
from advisor.records.visits import VisitMissing

CONTENT = '{"says": "second light"}'


@pytest.fixture
def store(tmp_path: Path) -> Iterator[Store]:
    with Store.open(tmp_path) as opened:
        yield opened


def visit(store: Store) -> str:
    return store.save_visit("{}", range_toml="abc", version="0", answer_json="{}").id


def rows(folder: Path) -> list[tuple[object, ...]]:
    connection = sqlite3.connect(folder / FILE_NAME)
    try:
        return connection.execute("SELECT visit_id, outcome, who_pays, new_visit_id, content FROM recheck").fetchall()
    finally:
        connection.close()


def test_an_outcome_is_one_row_beside_its_visit(store: Store, tmp_path: Path) -> None:
    old, new = visit(store), visit(store)
    saved = store.save_recheck(CONTENT, visit_id=old, outcome="remake", who_pays="maker", new_visit_id=new)
    assert rows(tmp_path) == [(old, "remake", "maker", new, CONTENT)]
    assert store.get_recheck(saved.id) == saved
    assert store.list_rechecks(new) == []


def test_the_last_recorded_comes_first(store: Store) -> None:
    key = visit(store)
    first = store.save_recheck(CONTENT, visit_id=key, outcome="adjust", who_pays="nobody")
    second = store.save_recheck(CONTENT, visit_id=key, outcome="refer", who_pays="nobody")
    assert [saved.id for saved in store.list_rechecks(key)] == [second.id, first.id]


def test_an_outcome_sent_twice_is_recorded_once(store: Store, tmp_path: Path) -> None:
    key = visit(store)
    for _ in range(2):
        store.save_recheck(CONTENT, visit_id=key, outcome="clean", who_pays="shop", recheck_id="once")
    assert len(rows(tmp_path)) == 1


@pytest.mark.parametrize(
    "change",
    [{"outcome": "remake"}, {"who_pays": "maker"}, {"content_json": '{"says": "rings"}'}, {"new_visit_id": True}],
)
def test_another_outcome_under_the_same_identifier_is_refused_not_lost(
    store: Store, tmp_path: Path, change: dict[str, Any]
) -> None:
    key, new = visit(store), visit(store)
    first = {"content_json": CONTENT, "visit_id": key, "outcome": "clean", "who_pays": "shop", "recheck_id": "once"}
    store.save_recheck(**first)
    if "new_visit_id" in change:
        change = {"new_visit_id": new}
    with pytest.raises(RecheckChanged, match="nothing was overwritten"):
        store.save_recheck(**first | change)
    assert rows(tmp_path) == [(key, "clean", "shop", None, CONTENT)]


def test_it_goes_with_its_visit_and_only_forgets_an_erased_new_order(store: Store, tmp_path: Path) -> None:
    old, new = visit(store), visit(store)
    store.save_recheck(CONTENT, visit_id=old, outcome="remake", who_pays="shop", new_visit_id=new)
    store.erase_visit(new)
    assert rows(tmp_path) == [(old, "remake", "shop", None, CONTENT)]
    store.erase_visit(old)
    assert rows(tmp_path) == []


def test_nothing_is_recorded_of_a_visit_that_is_not_there(store: Store, tmp_path: Path) -> None:
    with pytest.raises(VisitMissing):
        store.save_recheck(CONTENT, visit_id="gone", outcome="none", who_pays="nobody")
    with pytest.raises(VisitMissing):
        store.save_recheck(CONTENT, visit_id=visit(store), outcome="remake", who_pays="shop", new_visit_id="gone")
    assert rows(tmp_path) == []
    with pytest.raises(RecheckMissing, match="no such record"):
        store.get_recheck("gone")
