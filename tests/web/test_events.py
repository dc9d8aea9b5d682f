"""Who did what is written down with every act, without contents, and listed page by page."""

import re

import pytest
from flask import Flask
from flask.testing import FlaskClient
from sqlalchemy import text

from advisor.records.store import Store
from advisor.web import events, opened, operators
from advisor.web.app import create_app
from tests.web.test_visits import FORM, saved_id


def done(store: Store, visit_id: str | None = None) -> list[str]:
    """Return what was done, the first first."""
    return [event.what for event in store.list_events(visit_id=visit_id)][::-1]


def test_every_act_on_a_visit_is_written_down_once(client: FlaskClient, store: Store) -> None:
    visit_id = saved_id(client, ordered="0")
    saved_id(client, ordered="0")  # the same form once more
    saved_id(client, visit=visit_id, visit_edit="1", token="b" * 32, ordered="0", note="new")
    client.post(f"/visits/{visit_id}/copy")
    client.post(f"/visits/{visit_id}/ordered", data={"edit": "2", "option": "1"})
    client.get(f"/visits/{visit_id}/sheet")
    client.get(f"/visits/{visit_id}/care")
    client.get(f"/visits/{visit_id}/sheet.pdf")
    asked = {"token": "a" * 24, "says": "second light", "none_of_these": "1", "do": "record", "outcome": "clean"}
    client.post(f"/visits/{visit_id}/recheck", data=asked)
    client.post(f"/visits/{visit_id}/wearer/export", data={"visit": visit_id})
    expected = ["saved", "changed", "copied", "ordered", "sheet", "care", "sheet", "rechecked", "exported"]
    assert done(store, visit_id) == expected
    assert done(store) == expected


def test_a_refused_act_is_not_written_down(client: FlaskClient, store: Store) -> None:
    visit_id = saved_id(client)
    client.post("/visits", data={**FORM, "prescription.right.sphere": "far", "token": "b" * 32})
    client.post("/visits", data={**FORM, "visit": visit_id, "visit_edit": "7", "token": "c" * 32, "note": "x"})
    assert client.get(f"/visits/{visit_id}/order").status_code == 409  # heights and PDs are missing
    client.get("/visits/nowhere/sheet")
    assert done(store) == ["saved"]


def test_a_change_of_the_range_is_written_down(client: FlaskClient, store: Store) -> None:
    seen = re.search(r'name="seen" value="(\w+)"', client.get("/range").text)
    assert seen
    sent = {"key": "hard-resin-150", "seen": seen[1]}
    assert client.post("/range/tint/0/remove", data=sent).status_code == 303
    assert done(store) == ["range-changed"]


def test_the_table_holds_nothing_but_who_what_when_and_a_link(client: FlaskClient, store: Store) -> None:
    visit_id = saved_id(client)
    with store._reading() as connection:
        (row,) = connection.execute(text("SELECT * FROM event")).mappings().all()
    assert dict(row) == {"id": row["id"], "at": row["at"], "who": "local", "what": "saved", "visit_id": visit_id}


def test_the_list_says_it_in_words_and_names_no_wearer(client: FlaskClient) -> None:
    visit_id = saved_id(client)
    for address in ("/records", f"/records?visit={visit_id}"):
        page = client.get(address).text
        assert "saved a new visit" in page
        assert "this computer" in page
        assert "bel" not in re.sub(r"<[^>]*>", "", page).replace("label", "")
        assert "A-7" not in page
    assert "saved a new visit" not in client.get("/records?visit=nowhere").text


def test_every_kind_of_act_has_words() -> None:
    from typing import get_args

    from advisor.records.events import What

    assert set(events.WORDS) == set(get_args(What))


def test_the_list_goes_on_page_by_page(client: FlaskClient, store: Store) -> None:
    for _ in range(events.LINES):
        store.record_event("copied")
    store.record_event("backup")
    first = client.get("/records").text
    more = re.search(r'href="(/records\?at=[^"]+)"', first)
    assert more
    assert first.count('<th scope="row">') == events.LINES
    second = client.get(more[1].replace("&amp;", "&")).text
    assert second.count('<th scope="row">') == 1
    assert "copied a visit" in second


# W3C Fetch Metadata Request Headers, Sec-Fetch-Site; another port of this computer is another origin of the same site
@pytest.mark.parametrize("site", ["cross-site", "same-site"])
@pytest.mark.parametrize(
    "end", ["sheet", "sheet.pdf", "care", "visit.json", "prescription.fhir.json", "comparison.csv"]
)
def test_another_site_can_neither_open_a_paper_nor_fill_the_list(
    client: FlaskClient, store: Store, site: str, end: str
) -> None:
    visit_id = saved_id(client, ordered="0")
    picture = {"Sec-Fetch-Site": site, "Sec-Fetch-Mode": "no-cors", "Sec-Fetch-Dest": "image"}
    ahead = {"Sec-Fetch-Site": site, "Sec-Purpose": "prefetch"}
    for headers in (picture, ahead):
        answers = [ask(f"/visits/{visit_id}/{end}", headers=headers) for ask in (client.get, client.head)]
        assert [answer.status_code for answer in answers] == [403, 403]
    assert done(store, visit_id) == ["saved"]


def test_a_paper_that_is_typed_or_kept_as_a_bookmark_is_opened_and_written_down(app: Flask, store: Store) -> None:
    visit_id = saved_id(app.test_client(), ordered="0")
    typed = app.test_client()
    assert typed.get(f"/visits/{visit_id}/sheet", headers={"Sec-Fetch-Site": "none"}).status_code == 200
    del typed.environ_base["HTTP_SEC_FETCH_SITE"]  # a browser that does not send it
    assert typed.get(f"/visits/{visit_id}/care").status_code == 200
    assert done(store, visit_id) == ["saved", "sheet", "care"]


def test_who_is_signed_in_is_written_down(app: Flask, store: Store, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(operators, "session", {operators.OPERATOR: "Front desk"})
    saved_id(app.test_client())
    assert [event.who for event in store.list_events()] == ["Front desk"]


def test_paper_is_printed_where_nothing_can_be_written_down(
    client: FlaskClient, store: Store, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    from advisor.records.trouble import StoreFull

    def full(*_given: object, **_named: object) -> None:
        raise StoreFull("/somewhere")

    visit_id = saved_id(client)
    monkeypatch.setattr(type(store), "record_event", full)
    assert client.get(f"/visits/{visit_id}/sheet").status_code == 200
    assert capsys.readouterr().err == opened.NOT_NOTED % "StoreFull" + "\n"


def test_no_address_and_no_log_holds_personal_data(
    client: FlaskClient, caplog: pytest.LogCaptureFixture, capsys: pytest.CaptureFixture[str]
) -> None:
    visit_id = saved_id(client, note="Secretnote")
    found = client.post("/visits/find", data={"search": "abel"}, headers={"HX-Request": "true"})
    assert "HX-Push-Url" not in found.headers
    pages = [client.get(f"/visits/{visit_id}{end}").text for end in ("", "/wearer", "/then", "/recheck")]
    addresses = " ".join(re.findall(r'(?:href|action|hx-\w+)="([^"]*)"', " ".join(pages)))
    for personal in ("bel", "A-7", "Secretnote", "4.25"):
        assert personal not in addresses.replace("label", "")

    typed = FORM["wearer.name"] + "note".join(("Secret", ""))  # written so that no line of the program holds it

    def broken() -> str:
        raise RuntimeError(typed)

    other = create_app(data_dir=client.application.extensions["twolight"].data_dir)
    other.add_url_rule("/broken", view_func=broken)
    answer = other.test_client().get("/broken")
    assert answer.status_code == 500
    said = answer.text + caplog.text + capsys.readouterr().err
    assert "RuntimeError in GET /broken" in said
    assert typed not in said
