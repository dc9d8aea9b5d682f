"""Old visits are shown, and erased when somebody confirms it; never by themselves, never one touched meanwhile."""

import datetime as dt
import json

import pytest
from flask.testing import FlaskClient
from sqlalchemy import text

from advisor.counsel.stock import builtin_range, range_to_toml
from advisor.records.store import Store
from advisor.records.visits import SavedVisit
from advisor.web import retention
from advisor.web.retention import AT_ONCE, months_before

LONG_AGO = "2001-02-03T04:05:06.000000+00:00"


def old(store: Store, date: str = "2001-02-03", *, changed: str = LONG_AGO, name: str = "Old Wearer") -> str:
    """Save a visit as it was saved long ago."""
    saved = recent(store, date=date, name=name)
    with store._writing() as connection:
        connection.execute(text("UPDATE visit SET changed_at = :at WHERE id = :id"), {"at": changed, "id": saved.id})
    return saved.id


def recent(store: Store, *, date: str, name: str = "Old Wearer") -> SavedVisit:
    visit = {"date": date, "wearer": {"name": name}, "prescription": {"right": {"sphere": -1}, "left": {"sphere": -1}}}
    return store.save_visit(json.dumps(visit), range_toml=range_to_toml(builtin_range()), version="1", answer_json="{}")


@pytest.mark.parametrize(
    ("day", "months", "expected"),
    [
        ("2026-12-01", 120, "2016-12-01"),
        ("2026-03-31", 1, "2026-02-28"),
        ("2024-03-31", 1, "2024-02-29"),
        ("2026-01-15", 1, "2025-12-15"),
        ("2026-12-31", 12, "2025-12-31"),
    ],
)
def test_months_are_counted_on_the_calendar(day: str, months: int, expected: str) -> None:
    assert months_before(dt.date.fromisoformat(day), months) == dt.date.fromisoformat(expected)


def test_the_page_says_how_many_are_old_and_which_is_the_oldest(client: FlaskClient, store: Store) -> None:
    first, second = old(store, "2001-02-03"), old(store, "2004-05-06")
    recent(store, date="2001-01-01")  # of long ago, and changed just now
    page = client.get("/visits/old").text
    assert "Visits are kept for 120 months." in page
    assert "2 visits are old; the oldest is of 3 February 2001." in page
    assert page.index(first) < page.index(second)
    assert page.count('name="visit"') == 2


def test_the_shops_own_months_count(client: FlaskClient, store: Store) -> None:
    day = dt.date.today()
    visit_id = old(store, months_before(day, 30).isoformat())
    assert "No visit is old." in client.get("/visits/old").text
    store.set_range(range_to_toml(builtin_range()).replace("retention_months = 120", "retention_months = 29"))
    assert visit_id in client.get("/visits/old").text


def test_nothing_is_old_where_the_range_says_no_months(
    client: FlaskClient, store: Store, monkeypatch: pytest.MonkeyPatch
) -> None:
    visit_id = old(store)
    monkeypatch.setattr(retention, "_months", lambda: None)
    assert "none counts as old" in client.get("/visits/old").text
    answer = client.post("/visits/old/erase", data={"visit": visit_id, "confirmed": "yes"})
    assert answer.status_code == 422
    assert store.get_visit(visit_id)


def test_old_visits_are_erased_after_confirming_and_only_those_ticked(client: FlaskClient, store: Store) -> None:
    goes, stays = old(store), old(store, name="Child Wearer")
    asked = client.post("/visits/old/erase", data={"visit": goes})
    assert "1 visit, with what was entered" in asked.text
    assert "daily copies" in asked.text
    assert len(store.list_visits()) == 2
    done = client.post("/visits/old/erase", data={"visit": goes, "confirmed": "yes"})
    assert (done.status_code, done.headers["Location"]) == (303, "/visits/erased")
    assert [line.id for line in store.list_visits()] == [stays]
    assert [event.what for event in store.list_events(limit=1)] == ["erased"]


def test_a_visit_that_was_touched_meanwhile_stays(client: FlaskClient, store: Store) -> None:
    changed, rechecked, young = old(store), old(store), recent(store, date=dt.date.today().isoformat()).id
    saved = store.get_visit(changed)
    store.note_order(saved.visit_json, visit_id=changed, edit_seen=1)
    store.save_recheck("{}", visit_id=rechecked, outcome="clean", who_pays="nobody")
    sent = {"visit": [old(store), changed, rechecked, young], "confirmed": "yes"}
    told = client.post("/visits/old/erase", data=sent)
    assert told.status_code == 409
    assert "3 visits were touched meanwhile or are not old: they were not erased." in told.text
    assert {line.id for line in store.list_visits()} == {changed, rechecked, young}


def test_looking_erases_nothing(client: FlaskClient, store: Store) -> None:
    visit_id = old(store)
    for address in ("/visits/old", "/visits", f"/visits/{visit_id}", "/records"):
        client.get(address)
    assert store.get_visit(visit_id)


def test_no_more_are_listed_and_erased_at_once_than_a_reader_can_look_at(client: FlaskClient, store: Store) -> None:
    ids = [old(store) for _ in range(AT_ONCE + 1)]
    page = client.get("/visits/old").text
    assert page.count('name="visit"') == AT_ONCE
    assert f"Listed are the oldest {AT_ONCE}" in page
    client.post("/visits/old/erase", data={"visit": ids, "confirmed": "yes"})
    assert len(store.list_visits(limit=5)) == 1
