"""A reopened visit shows what was said on its day beside what would be said now, and what was ordered."""

import json
import re

import pytest
from flask.testing import FlaskClient

from advisor import __version__
from advisor.counsel.comparison import Comparison
from advisor.counsel.stock import builtin_range, range_to_toml
from advisor.counsel.then_now import Prices, then_and_now
from advisor.records.store import Store
from advisor.web.language import language
from tests.web.test_visits import FORM, saved_id

ENGLISH = language("en")
PRICES = Prices(
    lambda price: f"{price:.2f}", lambda price: f"{price:.2f}", lambda more: "" if more is None else f"{more:+.2f}"
)


def dearer_and_heavier(store: Store) -> None:
    """Sell the hard resin 7 dearer and, for the test, twice as heavy as before."""
    toml = range_to_toml(builtin_range())
    start = toml.index('key = "hard-resin-150"')
    item = toml[start : toml.index("[[", start)]
    price = re.search(r"^price = ([\d.]+)$", item, re.MULTILINE)
    density = re.search(r"^density_g_cm3 = ([\d.]+)$", item, re.MULTILINE)
    assert price
    assert density
    changed = item.replace(price[0], f"price = {float(price[1]) + 7}")
    changed = changed.replace(density[0], f"density_g_cm3 = {2 * float(density[1])}")
    store.set_range(toml.replace(item, changed))


def rows_of(page: str) -> dict[str, list[str]]:
    """Return the cells of every row by the words that lead it."""
    rows = re.findall(r"<tr[^>]*><th scope=\"row\">(.*?)</tr>", page, re.DOTALL)
    cells = [[re.sub(r"<[^>]*>", "", cell).strip() for cell in re.split(r"</t[hd]>", row)] for row in rows]
    return {cell[0].removeprefix("≠ "): cell[1:4] for cell in cells}


def test_nothing_differs_while_range_and_program_are_the_same(client: FlaskClient) -> None:
    visit_id = saved_id(client)
    page = client.get(f"/visits/{visit_id}/then").text
    assert "Nothing differs." in page
    assert "≠" not in page
    assert all(cells[2] == "same" for cells in rows_of(page).values())


def test_a_dearer_and_heavier_lens_is_told_in_figures(client: FlaskClient, store: Store) -> None:
    visit_id = saved_id(client)
    dearer_and_heavier(store)
    rows = rows_of(client.get(f"/visits/{visit_id}/then").text)
    then, now, more = rows["price of the pair"]
    assert float(now.removeprefix("€")) - float(then.removeprefix("€")) == 7
    assert more == "+€7.00"
    assert rows["thickest edge"][2] == "same"
    weights = [[float(part) for part in re.findall(r"[\d.]+", cell)] for cell in rows["weight of the lens"][:2]]
    assert weights[1] == pytest.approx([2 * weight for weight in weights[0]], abs=0.1)  # density doubled


def test_looking_at_both_changes_nothing_that_is_stored(client: FlaskClient, store: Store) -> None:
    visit_id = saved_id(client)
    dearer_and_heavier(store)
    before = store.get_visit(visit_id)
    client.get(f"/visits/{visit_id}/then")
    assert store.get_visit(visit_id) == before


def test_a_reopened_visit_leads_there_and_says_why_where_it_matters(client: FlaskClient, store: Store) -> None:
    visit_id = saved_id(client)
    same = client.get(f"/visits/{visit_id}").text
    assert f'href="/visits/{visit_id}/then"' in same
    assert "The range has changed" not in same
    saved = store.get_visit(visit_id)
    toml = range_to_toml(builtin_range())
    older = store.save_visit(saved.visit_json, range_toml=toml, version="0.0.1", answer_json=saved.answer_json)
    assert "saved with version 0.0.1 of the program" in client.get(f"/visits/{older.id}").text
    assert f"program version {__version__}" in client.get(f"/visits/{older.id}/then").text


def test_an_answer_or_a_visit_that_cannot_be_read_any_more_is_said(client: FlaskClient, store: Store) -> None:
    saved = store.get_visit(saved_id(client))
    toml = range_to_toml(builtin_range())
    odd = store.save_visit(saved.visit_json, range_toml=toml, version="9", answer_json="{}")
    assert "cannot read" in client.get(f"/visits/{odd.id}/then").text
    store.set_range(toml.replace("hard-resin-150", "hard-resin-gone"))
    page = client.get(f"/visits/{saved.id}/then").text
    assert "nothing can be worked out" in page
    assert "hard-resin-150" in page


def test_what_came_and_what_went_is_said_in_words() -> None:
    option = {"index": 0, "label": "A", "design": "d", "material": "m", "coating": {"front": "c", "back": "c"}}
    answer = {"twolight": "1", "defaults_used": [], "warnings": []}
    caution = {"key": "child", "text": "Tough first.", "rule": "r", "source": "s", "options": [0]}
    then = Comparison.model_validate(
        answer | {"options": [option | {"price": 10.0}], "advice": {"cautions": [caution]}}
    )
    now = Comparison.model_validate(
        answer | {"options": [option | {"price": None, "material": "n", "label": "B"}, option | {"price": 1.0}]}
    )
    first, second = then_and_now(then, now, prices=PRICES, translator=ENGLISH)
    said = {row.key: (row.then, row.now, row.difference) for row in first.rows}
    assert said["lens"] == (("A",), ("B",), "changed")
    assert said["price"] == (("10.00",), ("–",), "no longer so")
    assert said["cautions"] == (("Tough first.",), ("–",), "no longer so")
    assert {row.difference for row in second.rows} == {"new"}
    assert first.differing == 3


def test_what_was_ordered_is_marked_and_written_down(client: FlaskClient, store: Store) -> None:
    visit_id = saved_id(client)
    before = store.get_visit(visit_id)
    answer = client.post(f"/visits/{visit_id}/ordered", data={"edit": "1", "option": "1"})
    assert answer.status_code == 303
    after = store.get_visit(visit_id)
    assert json.loads(after.visit_json) == json.loads(before.visit_json) | {"ordered": 0}
    assert (after.edit, after.answer_json, after.range_hash) == (2, before.answer_json, before.range_hash)
    assert store.list_events(visit_id=visit_id)[0].what == "ordered"
    assert "Ordered: option 1, marked on" in client.get(f"/visits/{visit_id}").text


@pytest.mark.parametrize(("sent", "status"), [({"edit": "7", "option": "1"}, 409), ({"edit": "1", "option": "2"}, 400)])
def test_an_order_is_marked_on_nothing_unseen(
    client: FlaskClient, store: Store, sent: dict[str, str], status: int
) -> None:
    visit_id = saved_id(client)
    assert client.post(f"/visits/{visit_id}/ordered", data=sent).status_code == status
    assert "ordered" not in json.loads(store.get_visit(visit_id).visit_json)


def test_a_new_order_and_the_return_it_came_of_lead_to_each_other(client: FlaskClient, store: Store) -> None:
    old, new = saved_id(client), saved_id(client, token="b" * 32, reference="A-8")
    record = store.save_recheck(
        json.dumps({"says": "second light", "outcome": "remake"}), visit_id=old, outcome="remake", who_pays="shop"
    )
    assert f'action="/visits/{old}/recheck/{record.id}/new-order"' in client.get(f"/visits/{old}/recheck").text
    linked = client.post(f"/visits/{old}/recheck/{record.id}/new-order", data={"new_visit": new})
    assert linked.status_code == 303
    assert store.get_recheck(record.id).new_visit_id == new
    assert f'href="/visits/{new}">See the new order' in client.get(f"/visits/{old}").text
    assert f'href="/visits/{old}">See the pair that came back' in client.get(f"/visits/{new}").text
    assert client.post(f"/visits/{new}/recheck/{record.id}/new-order", data={"new_visit": old}).status_code == 404


def test_no_title_holds_a_name_or_a_reference(client: FlaskClient) -> None:
    visit_id = saved_id(client)
    draft = client.post(f"/visits/{visit_id}/copy").headers["Location"]
    ends = ("", "/then", "/wearer", "/recheck", "/sheet", "/order", "/bench", "/care", "/pictures", "/turn")
    for address in (draft, "/visits", "/records", *(f"/visits/{visit_id}{end}" for end in ends)):
        page = client.get(address, follow_redirects=True).text
        title = re.search(r"<title>(.*?)</title>", page, re.DOTALL)
        assert title, address
        assert "bel" not in title[1], address
        assert FORM["reference"] not in title[1], address


def test_hidden_names_stand_in_no_list_and_no_heading(client: FlaskClient) -> None:
    visit_id = saved_id(client, note="Łucja said so")
    switched = client.post("/names", data={"names": "hidden", "back": "/visits"})
    assert (switched.status_code, switched.headers["Location"]) == (303, "/visits")
    listed = client.get("/visits").text
    assert "Łucja" not in listed
    assert "•••" in listed
    assert "A-7" in listed
    for end in ("", "/recheck", "/wearer"):
        page = client.get(f"/visits/{visit_id}{end}").text
        assert "Łucja" not in " ".join(re.findall(r"<h1[^>]*>.*?</h1>|<td[^>]*>.*?</td>", page, re.DOTALL))
    assert 'value="Łucja Ábel"' in client.get(f"/visits/{visit_id}").text  # the field stays, for whoever types there
    client.post("/names", data={"names": "shown", "back": "//elsewhere.example"})
    assert "Łucja" in client.get("/visits").text


def test_the_switch_leads_back_to_the_form_it_was_pressed_on(client: FlaskClient) -> None:
    draft = client.post("/counter", data=FORM, headers={"HX-Request": "true"}).headers["HX-Replace-Url"]
    page = client.get(draft).text
    switch = re.search(r'<form class="names-switch".*?</form>', page, re.DOTALL)
    assert switch
    assert f'name="back" value="{draft}"' in switch[0]
    assert client.post("/names", data={"names": "hidden", "back": draft}).headers["Location"] == draft
    assert 'class="names-hidden"' in client.get(draft).text
