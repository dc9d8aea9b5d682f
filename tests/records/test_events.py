"""Who did what is stored beside what was done, outlives what was erased, and is dropped after 24 months."""

import json

import pytest
from sqlalchemy import text

from advisor.records import tables
from advisor.records.events import HERE, KEPT_DAYS
from advisor.records.store import Store
from advisor.records.visits import SavedVisit, VisitChanged, VisitMissing


def save(store: Store, **more: object) -> SavedVisit:
    content = json.dumps({"date": "2026-12-01", "wearer": {"name": "Ada Berg"}})
    return store.save_visit(content, range_toml="abc", version="1", answer_json="{}", **more)  # type: ignore[arg-type]  # options of one call


def what(store: Store) -> list[tuple[str, str, str | None]]:
    return [(event.what, event.who, event.visit_id) for event in store.list_events()][::-1]


def test_saving_and_changing_are_written_down_with_who_did_it(store: Store) -> None:
    first = save(store, who="Front desk")
    save(store, visit_id=first.id, edit_seen=1)
    assert what(store) == [("saved", "Front desk", first.id), ("changed", HERE, first.id)]


def test_a_save_that_is_refused_leaves_no_line(store: Store) -> None:
    first = save(store)
    with pytest.raises(VisitChanged):
        save(store, visit_id=first.id, edit_seen=7)
    with pytest.raises(VisitChanged):
        store.note_order("{}", visit_id=first.id, edit_seen=7)
    with pytest.raises(VisitMissing):
        store.note_order("{}", visit_id="nowhere", edit_seen=1)
    assert [line[0] for line in what(store)] == ["saved"]


def test_an_erased_visit_leaves_lines_without_a_link(store: Store) -> None:
    first, second = save(store), save(store)
    gone = store.erase([first.id, "nowhere"], who="Front desk")
    assert (gone.visits, gone.rechecks, gone.drafts) == (1, 0, 0)
    assert what(store) == [("saved", HERE, None), ("saved", HERE, second.id), ("erased", "Front desk", None)]


def test_a_line_about_a_visit_that_is_gone_is_kept_without_the_link(store: Store) -> None:
    store.record_event("sheet", visit_id="nowhere")
    assert what(store) == [("sheet", HERE, None)]


def test_lines_older_than_24_months_are_dropped(store: Store) -> None:
    store.record_event("backup")
    store.record_event("restored")
    with store._writing() as connection:
        change = text("UPDATE event SET at = :at WHERE what = :what")
        connection.execute(change, {"at": tables.days_ago(KEPT_DAYS + 1), "what": "backup"})
        connection.execute(change, {"at": tables.days_ago(KEPT_DAYS - 1), "what": "restored"})
    store.record_event("signed-in")
    assert [line[0] for line in what(store)] == ["restored", "signed-in"]


def test_lines_are_paged_by_key_without_a_gap(store: Store) -> None:
    visit = save(store)
    for _ in range(5):
        store.record_event("copied", visit_id=visit.id)
    seen, after = [], None
    while lines := store.list_events(visit_id=visit.id, limit=4, after=after):
        seen += lines
        after = lines[-1].key
    assert len({event.id for event in seen}) == len(seen) == 6
    assert [event.at for event in seen] == sorted((event.at for event in seen), reverse=True)


def test_a_return_visit_and_the_order_it_led_to_are_found_from_both_ends(store: Store) -> None:
    old, new = save(store), save(store)
    record = store.save_recheck("{}", visit_id=old.id, outcome="remake", who_pays="shop")
    linked = store.link_recheck(record.id, new_visit_id=new.id)
    assert store.rechecks_leading_to(new.id) == store.list_rechecks(old.id) == [linked]
    with pytest.raises(VisitMissing):
        store.link_recheck(record.id, new_visit_id="nowhere")
    store.erase([new.id])
    assert store.get_recheck(record.id).new_visit_id is None


def test_old_visits_are_told_by_day_change_and_return(store: Store) -> None:
    def of(date: str) -> SavedVisit:
        return store.save_visit(json.dumps({"date": date}), range_toml="abc", version="1", answer_json="{}")

    ids = {date: of(date).id for date in ("2001-02-03", "2004-05-06", "2003-01-01", "2026-12-01")}
    rechecked = store.save_recheck("{}", visit_id=ids["2003-01-01"], outcome="clean", who_pays="nobody")
    assert store.old_visits(before_day="2010-01-01").count == 0  # changed today
    with store._writing() as connection:
        connection.execute(text("UPDATE visit SET changed_at = '2005-01-01T00:00:00.000000+00:00'"))
    found = store.old_visits(before_day="2010-01-01", limit=1)
    assert (found.count, found.oldest, [line.id for line in found.lines]) == (2, "2001-02-03", [ids["2001-02-03"]])
    gone = store.erase_old(list(ids.values()), before_day="2010-01-01")
    assert gone.visits == 2
    assert {line.date for line in store.list_visits()} == {"2003-01-01", "2026-12-01"}
    assert store.get_recheck(rechecked.id) == rechecked


def test_what_goes_is_counted_before_it_goes(store: Store) -> None:
    visit, other = save(store), save(store)
    store.save_recheck("{}", visit_id=visit.id, outcome="clean", who_pays="nobody")
    store.save_draft("{}", visit_id=visit.id, visit_edit=1)
    loose = store.save_draft("{}")
    expected = store.count_of([visit.id, "nowhere"], [loose.id])
    assert (expected.visits, expected.rechecks, expected.drafts) == (1, 1, 2)
    assert store.erase([visit.id, "nowhere"], draft_ids=[loose.id]) == expected
    assert store.list_drafts() == []
    assert [line.id for line in store.list_visits()] == [other.id]
