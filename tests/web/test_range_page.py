"""The range is seen, changed item by item, imported whole or not at all, and exported."""

import io
import re

import pytest
from flask.testing import FlaskClient
from werkzeug.test import TestResponse

from advisor.counsel.stock import Range, builtin_range, parse_range, range_to_toml
from advisor.records.store import Store
from advisor.web import range_editing as editing


def stored(store: Store) -> Range:
    current = store.current_range()
    assert current is not None
    return parse_range(current.toml)


def seen(client: FlaskClient) -> str:
    found = re.search(r'name="seen" value="(\w+)"', client.get("/range").text)
    assert found is not None
    return found.group(1)


def form_of(client: FlaskClient, address: str) -> dict[str, str]:
    """Fill in a form as a browser would that changes nothing."""
    page = client.get(address).text
    fields = dict(re.findall(r'<input [^>]*?name="(\w+)" value="([^"]*)"', page))
    fields |= dict(re.findall(r'<textarea [^>]*?name="(\w+)"[^>]*>(.*?)</textarea>', page, re.DOTALL))
    for name, choices in re.findall(r'<select [^>]*?name="(\w+)".*?>(.*?)</select>', page, re.DOTALL):
        chosen = re.search(r'value="([^"]*)" selected', choices)
        fields[name] = chosen.group(1) if chosen else ""
    return {name: text.replace("&#34;", '"').replace("&#39;", "'") for name, text in fields.items()}


def send(client: FlaskClient, text: bytes, *, over: str) -> TestResponse:
    data = {"seen": over, "file": (io.BytesIO(text), "shop.toml")}
    return client.post("/range/import", data=data, content_type="multipart/form-data")


def test_everything_the_shop_sells_is_on_the_page(client: FlaskClient) -> None:
    page = client.get("/range").text
    stock = builtin_range()
    labels = [item.label for item in (*stock.material, *stock.coating, *stock.tint, *stock.design)]
    for label in (*labels, *(scene.label for scene in stock.scene)):
        assert label is not None
        assert label in page.replace("&#39;", "'")
    assert "international" in page


@pytest.mark.parametrize("section", [*editing.SECTIONS])
def test_a_form_sent_unchanged_changes_nothing(client: FlaskClient, store: Store, section: str) -> None:
    stock = builtin_range()
    for place in range(len(editing.items(stock, section))):
        answer = client.post(f"/range/{section}/{place}", data=form_of(client, f"/range/{section}/{place}"))
        assert answer.status_code == 303, (section, place)
        assert stored(store) == stock


def test_an_item_is_changed(client: FlaskClient, store: Store) -> None:
    form = form_of(client, "/range/material/1") | {"price": "25,50", "tough": "yes", "base_powers_d": "[1, 2.5]"}
    assert client.post("/range/material/1", data=form).status_code == 303
    item = stored(store).material[1]
    assert (item.price, item.tough, item.base_powers_d) == (25.5, True, (1.0, 2.5))
    assert len(stored(store).material) == len(builtin_range().material)


def test_a_fault_stands_beside_its_field_and_nothing_changes(client: FlaskClient, store: Store) -> None:
    wrong = {"abbe": "many", "base_powers_d": "[1, ", "density_g_cm3": "0.1"}
    answer = client.post("/range/material/1", data=form_of(client, "/range/material/1") | wrong)
    assert answer.status_code == 422
    assert re.search(r'id="fault-base_powers_d">This is not TOML', answer.text)
    assert 'name="abbe" value="many"' in answer.text
    wrong["base_powers_d"] = ""
    answer = client.post("/range/material/1", data=form_of(client, "/range/material/1") | wrong)
    assert re.search(r'id="fault-abbe">Write a number here\.', answer.text)
    assert re.search(r'id="fault-density_g_cm3">Give 0\.5 or more\.', answer.text)
    assert store.current_range() is None


def test_a_copy_gets_a_key_of_its_own(client: FlaskClient, store: Store) -> None:
    form = form_of(client, "/range/coating/1/copy")
    place = len(builtin_range().coating)
    assert form["key"] == f"{builtin_range().coating[1].key}-copy"
    assert client.post(f"/range/coating/{place}", data=form).status_code == 303
    assert stored(store).coating[place].layers == builtin_range().coating[1].layers
    assert form_of(client, "/range/coating/1/copy")["key"].endswith("-copy-2")


def test_what_is_named_elsewhere_is_not_removed(client: FlaskClient, store: Store) -> None:
    keys = [item.key for item in builtin_range().material]
    answer = client.post(f"/range/material/{keys.index('hard-resin-150')}/remove", data={"seen": seen(client)})
    assert answer.status_code == 409
    assert "shop.default_options[0].material" in answer.text
    assert store.current_range() is None
    answer = client.post(f"/range/material/{keys.index('episulfide-174')}/remove", data={"seen": seen(client)})
    assert answer.status_code == 303
    assert "episulfide-174" not in [item.key for item in stored(store).material]


def test_the_shop_is_changed(client: FlaskClient, store: Store) -> None:
    form = form_of(client, "/range/shop") | {"name": "Lens & Light", "currency": "GBP"}
    assert client.post("/range/shop", data=form).status_code == 303
    assert (stored(store).shop.name, stored(store).shop.currency) == ("Lens & Light", "GBP")
    assert stored(store).shop.default_options == builtin_range().shop.default_options
    assert "Lens &amp; Light" in client.get("/range").text


def test_a_change_made_meanwhile_is_not_overwritten(client: FlaskClient, store: Store) -> None:
    late = form_of(client, "/range/material/1") | {"label": "Late"}
    client.post("/range/material/1", data=form_of(client, "/range/material/1") | {"label": "First"})
    answer = client.post("/range/material/1", data=late)
    assert answer.status_code == 400
    assert "nothing was overwritten" in answer.text
    assert stored(store).material[1].label == "First"


def test_the_export_comes_back_as_the_same_range(client: FlaskClient, store: Store) -> None:
    answer = client.get("/range/export")
    assert answer.headers["Content-Disposition"] == 'attachment; filename="twolight-range.toml"'
    assert parse_range(answer.text) == builtin_range()
    own = answer.text.replace('label = "Hard resin 1.50"', 'label = "Plain resin"')
    assert send(client, own.encode(), over=seen(client)).status_code == 303
    assert stored(store).material[1].label == "Plain resin"
    assert client.get("/range/export").text == range_to_toml(stored(store))


@pytest.mark.parametrize(
    ("text", "words"),
    [
        (b"\xff\xfe", "not UTF-8"),
        (b"[[material]\n", "not TOML"),
        (b'[[material]]\nkey = "x"\nabbe = 40\n', "density_g_cm3"),
        (b'[[coating]]\nkey = "<b>"\ndeclared = {luminous_reflectance = 0.01}\n', "a key is made of"),
        (b'[[offer]]\ndesign = "single-vision"\nmaterial = "nothing"\ncoating = "bare"\n', "not in the range"),
    ],
)
def test_a_file_with_faults_is_refused_whole(client: FlaskClient, store: Store, text: bytes, words: str) -> None:
    answer = send(client, text, over=seen(client))
    assert answer.status_code == 422
    assert words in answer.text
    assert "<b>" not in answer.text
    assert store.current_range() is None


def test_an_import_without_a_file_changes_nothing(client: FlaskClient, store: Store) -> None:
    client.post("/range/import", data={"seen": seen(client)}, content_type="multipart/form-data")
    current = store.current_range()
    assert current is None or parse_range(current.toml) == builtin_range()


def test_a_changed_range_shows_at_the_counter_at_once(client: FlaskClient) -> None:
    client.get("/")
    client.post("/range/material/1", data=form_of(client, "/range/material/1") | {"label": "Plain resin"})
    assert "Plain resin" in client.get("/").text


@pytest.mark.parametrize("address", ["/range/material/99", "/range/nothing/0", "/range/nothing/new", "/range/offer/0"])
def test_an_item_that_is_not_there_is_said_not_to_be(client: FlaskClient, address: str) -> None:
    answer = client.get(address)
    assert answer.status_code in (400, 404)
    assert "no such item" in answer.text


def test_hostile_text_is_escaped(client: FlaskClient) -> None:
    form = form_of(client, "/range/material/1") | {"label": "<script>x</script>"}
    assert client.post("/range/material/1", data=form).status_code == 303
    for address in ("/range", "/range/material/1", "/"):
        assert "<script>x" not in client.get(address).text
