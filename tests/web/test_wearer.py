"""One wearer is exported whole and erased whole, after a page that says what goes and what stays."""

import io
import json
import sqlite3
import zipfile
from pathlib import Path
from types import SimpleNamespace
from typing import Any

import pytest
from flask.testing import FlaskClient

from advisor.records import erasing
from advisor.records.drafts import DraftMissing
from advisor.records.store import Store
from advisor.records.trouble import StoreFull
from advisor.records.visits import VisitMissing
from advisor.web import exports
from tests.web.test_visits import FORM, saved_id

NAME = "Łucja Ábel"


def person(client: FlaskClient, letter: str, **changes: str) -> str:
    return saved_id(client, token=letter * 32, **changes)


def ticked(page: str, visit_id: str) -> bool:
    assert f'value="{visit_id}"' in page
    return f'value="{visit_id}" checked' in page


def draft_of(client: FlaskClient, **changes: str) -> str:
    answer = client.post("/counter", data={**FORM, "token": "9" * 32, **changes}, headers={"HX-Request": "true"})
    return answer.headers["HX-Replace-Url"].rsplit("/", 1)[1]


def erased(client: FlaskClient, visit_id: str, *also: str, **more: str) -> int:
    form = {"visit": [visit_id, *also], "confirmed": "yes", **more}
    return client.post(f"/visits/{visit_id}/wearer/erase", data=form).status_code


def unpacked(content: bytes) -> dict[str, bytes]:
    with zipfile.ZipFile(io.BytesIO(content)) as made:
        assert made.testzip() is None
        return {name: made.read(name) for name in made.namelist()}


def test_visits_of_one_name_are_offered_and_another_birth_year_is_not(client: FlaskClient) -> None:
    born = {"wearer.birth_year": "1950"}
    own = person(client, "a", **born)
    same = person(client, "b", **{"wearer.name": "lucja  ABEL", "wearer.birth_date": "1950-03-01"})
    perhaps = person(client, "c")
    other_year = person(client, "d", **{"wearer.birth_year": "1990"})
    longer_name = person(client, "e", **{"wearer.name": f"{NAME} Berg"}, **born)
    page = client.get(f"/visits/{own}/wearer").text
    assert ticked(page, own)
    assert ticked(page, same)
    assert not ticked(page, perhaps)  # the optician decides
    assert other_year not in page
    assert longer_name not in page


def test_a_visit_without_a_name_stands_alone(client: FlaskClient) -> None:
    own, other = person(client, "a", **{"wearer.name": ""}), person(client, "b", **{"wearer.name": ""})
    page = client.get(f"/visits/{own}/wearer").text
    assert own in page
    assert other not in page


def test_the_export_holds_everything_under_names_that_tell_nobody(client: FlaskClient, store: Store) -> None:
    visit_id = person(client, "a", ordered="0")
    store.save_recheck('{"says": "second light"}', visit_id=visit_id, outcome="clean", who_pays="nobody")
    draft_of(client, note="begun")
    form = {"visit": visit_id, "forms": "1"}
    answer = client.post(f"/visits/{visit_id}/wearer/export", data=form)
    assert answer.headers["Content-Type"] == "application/zip"
    assert answer.headers["Content-Disposition"] == 'attachment; filename="twolight-wearer.zip"'
    files = unpacked(answer.data)
    saved = store.get_visit(visit_id)
    assert files["visit-1/visit.json"].decode() == saved.visit_json
    assert files["visit-1/answer.json"].decode() == saved.answer_json
    assert json.loads(files["visit-1/return-1.json"])["content"] == {"says": "second light"}
    assert json.loads(files["forms/form-1.json"])["fields"]["note"] == "begun"
    sheet = files.get("visit-1/sheet.pdf") or files["visit-1/sheet.html"]
    assert sheet.startswith((b"%PDF", b"<!doctype html>"))
    assert not [name for name in files if "abel" in name.lower() or "A-7" in name or "2026" in name]
    assert store.list_events(visit_id=visit_id)[0].what == "exported"


def test_a_wearer_is_exported_where_nothing_can_be_written_down(
    client: FlaskClient, store: Store, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    def full(*_given: object, **_named: object) -> None:
        raise StoreFull("/somewhere")

    visit_id = person(client, "a")
    monkeypatch.setattr(type(store), "record_event", full)
    answer = client.post(f"/visits/{visit_id}/wearer/export", data={"visit": visit_id})
    assert "visit-1/visit.json" in unpacked(answer.data)
    assert capsys.readouterr().err == exports.NOT_NOTED % "StoreFull" + "\n"


def test_what_was_not_ticked_is_neither_exported_nor_erased(client: FlaskClient, store: Store) -> None:
    own, same = person(client, "a"), person(client, "b")
    stranger = person(client, "c", **{"wearer.name": "Teo Brandt"})
    files = unpacked(client.post(f"/visits/{own}/wearer/export", data={"visit": [own, stranger]}).data)
    assert [name for name in files if name.endswith("visit.json")] == ["visit-1/visit.json"]
    assert erased(client, own, stranger) == 303
    assert {line.id for line in store.list_visits()} == {same, stranger}


@pytest.mark.parametrize("end", ["export", "erase"])
def test_nothing_ticked_does_nothing(client: FlaskClient, store: Store, end: str) -> None:
    visit_id = person(client, "a")
    answer = client.post(f"/visits/{visit_id}/wearer/{end}", data={"confirmed": "yes"})
    assert answer.status_code == 422
    assert "Nothing was ticked" in answer.text
    assert store.get_visit(visit_id)


def test_nothing_is_erased_before_it_is_confirmed_on_a_page_that_says_what_stays(
    client: FlaskClient, store: Store
) -> None:
    own, same = person(client, "a"), person(client, "b")
    store.save_recheck("{}", visit_id=own, outcome="clean", who_pays="nobody")
    page = client.post(f"/visits/{own}/wearer/erase", data={"visit": [own, same]}).text
    assert "2 visits, with what was entered" in page
    assert "1 record of a return visit" in page
    for words in ("daily copies", "Paper", "supplier", "Who did what"):
        assert words in page
    assert len(store.list_visits()) == 2


def test_an_erased_wearer_is_gone_whole_and_from_the_files(client: FlaskClient, store: Store, tmp_path: Path) -> None:
    name = {"wearer.name": "Unmistakable Wearer"}
    own = person(client, "a", **name)
    other = person(client, "b", **{"wearer.name": "Teo Brandt"})
    record = store.save_recheck('{"says": "Unmistakable words"}', visit_id=own, outcome="clean", who_pays="nobody")
    lead = store.save_recheck("{}", visit_id=other, outcome="remake", who_pays="shop", new_visit_id=own)
    copied = client.post(f"/visits/{own}/copy").headers["Location"].rsplit("/", 1)[1]
    begun = draft_of(client, visit=own, visit_edit="1", note="changed", **name)
    kept = draft_of(client, token="8" * 32, **{"wearer.name": "Teo Brandt"})
    assert erased(client, own, forms="1") == 303
    with pytest.raises(VisitMissing):
        store.get_visit(own)
    assert store.list_rechecks(own) == []
    assert store.get_recheck(lead.id).new_visit_id is None
    for draft in (copied, begun):
        with pytest.raises(DraftMissing):
            store.get_draft(draft)
    assert store.get_draft(kept)
    assert client.get(f"/visits/{own}").status_code == 404
    assert record.id
    left = b"".join(file.read_bytes() for file in tmp_path.rglob("*") if file.is_file())  # while the program runs
    assert b"Teo Brandt" in left
    assert b"Unmistakable" not in left
    assert b"unmistakable" not in left


def test_an_erasing_that_cannot_overwrite_the_file_is_done_and_says_what_stays(
    client: FlaskClient, store: Store, monkeypatch: pytest.MonkeyPatch
) -> None:
    class FullDisk:
        def cursor(self) -> "FullDisk":
            return self

        def execute(self, _statement: str) -> None:
            raise sqlite3.OperationalError("database or disk is full")

        def close(self) -> None:
            pass

    visit_id = person(client, "a")
    broken: Any = SimpleNamespace(dialect=store._engine.dialect, raw_connection=FullDisk)
    settle = erasing.settle
    monkeypatch.setattr(erasing, "settle", lambda _engine, *, place: settle(broken, place=place))
    answer = client.post(f"/visits/{visit_id}/wearer/erase", data={"visit": visit_id, "confirmed": "yes"})
    assert answer.status_code == 507
    assert "is erased, but there was no room to overwrite it" in answer.text
    assert store.list_visits() == []


def test_the_record_of_what_was_done_keeps_no_link_to_what_was_erased(client: FlaskClient, store: Store) -> None:
    visit_id = person(client, "a")
    assert erased(client, visit_id) == 303
    found = store.list_events()
    assert [event.what for event in found] == ["erased", "saved"]
    assert {event.visit_id for event in found} == {None}


def test_a_name_that_can_only_be_brought_back_by_undo_is_found(client: FlaskClient, store: Store) -> None:
    visit_id = person(client, "a")
    draft = draft_of(client)
    renamed = {"draft": draft, "draft_edit": "1", "wearer.name": "Teo Brandt"}
    client.post("/counter", data={**FORM, **renamed}, headers={"HX-Request": "true"})
    assert erased(client, visit_id, forms="1") == 303
    with pytest.raises(DraftMissing):
        store.get_draft(draft)


def test_a_form_typed_over_for_the_next_wearer_is_found_by_each_step_back(client: FlaskClient, store: Store) -> None:
    born = {"wearer.birth_date": "1950-03-01"}
    visit_id = person(client, "a", **born)
    draft = draft_of(client, **born)
    sent = {**FORM, **born, "token": "9" * 32, "draft": draft}
    steps = ({"wearer.birth_date": "1990-12-24"}, {"note": "next"}, {"wearer.name": "Teo Brandt"}, {"note": "again"})
    for edit, step in enumerate(steps, 1):
        sent |= {"draft_edit": str(edit), **step}
        client.post("/counter", data=sent, headers={"HX-Request": "true"})
    assert json.loads(store.get_draft(draft).fields_json)["fields"]["wearer.name"] == "Teo Brandt"
    assert erased(client, visit_id, forms="1") == 303
    with pytest.raises(DraftMissing):
        store.get_draft(draft)


@pytest.mark.parametrize("typed", ["1.3.1950", "1950", "March"])
def test_a_form_whose_birth_date_cannot_be_read_is_found_by_its_name(
    client: FlaskClient, store: Store, typed: str
) -> None:
    visit_id = person(client, "a", **{"wearer.birth_date": "1950-03-01"})
    draft = draft_of(client, **{"wearer.birth_date": typed})
    assert erased(client, visit_id, forms="1") == 303
    with pytest.raises(DraftMissing):
        store.get_draft(draft)


def test_erasing_twice_is_told_and_harms_nobody(client: FlaskClient) -> None:
    visit_id = person(client, "a")
    assert [erased(client, visit_id), erased(client, visit_id)] == [303, 404]
    assert "gone from the records" in client.get("/visits/erased").text
