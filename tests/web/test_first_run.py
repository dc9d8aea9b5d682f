"""First steps: shown to a shop without visits, ticked by facts, skipped or put away for good."""

import json
import re

import pytest
from flask.testing import FlaskClient

from advisor.counsel.stock import builtin_range, range_to_toml
from advisor.records.store import Store
from advisor.web.first_run import KEYS

RANGE = range_to_toml(builtin_range())
VISIT = json.dumps(
    {"format": "twolight-visit-1", "prescription": {"right": {"sphere": -1.0}, "left": {"sphere": -1.0}}}
)
GREETING = "Welcome. What to do first"


def items(page: str) -> dict[str, str]:
    """Each step with its words, by the place its link leads to."""
    part = page[page.index('id="first-run"') : page.index("</section>", page.index('id="first-run"'))]
    found = re.findall(r"<li.*?</li>", part, re.S)
    return {key: " ".join(re.sub(r"<[^>]+>", " ", item).split()) for key, item in zip(KEYS, found, strict=True)}


def test_a_shop_without_visits_is_greeted_and_told_what_to_do_first(client: FlaskClient) -> None:
    page = client.get("/").text
    assert GREETING in page
    found = items(page)
    assert all("Skip" in text and "Done" not in text for text in found.values())
    for address in ("/range/shop", "/range", "#wearer", "#prescription.right.sphere"):
        assert f'href="{address}"' in page


def test_a_range_with_the_shops_name_ticks_the_first_step(client: FlaskClient, store: Store) -> None:
    store.set_range(f'{RANGE}\n[shop]\nname = "Corner optics"\n' if "[shop]" not in RANGE else _named(RANGE))
    found = items(client.get("/").text)
    assert "Done" in found["shop"]
    assert "Skip" not in found["shop"]
    assert "Done" not in found["range"]


def _named(toml: str) -> str:
    return toml.replace("[shop]\n", '[shop]\nname = "Corner optics"\n', 1)


def test_a_price_of_ones_own_ticks_the_second_step_alone(client: FlaskClient, store: Store) -> None:
    stock = builtin_range()
    dearer = stock.material[0].model_copy(update={"price": 61.5})
    store.set_range(range_to_toml(stock.model_copy(update={"material": (dearer, *stock.material[1:])})))
    found = items(client.get("/").text)
    assert ["Done" in found[key] for key in KEYS] == [False, True, False, False]


def test_opening_a_demo_wearer_ticks_the_third_step(client: FlaskClient) -> None:
    client.post("/demo", data={"wearer": "tinted-pair"})
    assert ["Done" in text for text in items(client.get("/").text).values()] == [False, False, True, False]


def test_a_saved_visit_ends_the_greeting(client: FlaskClient, store: Store) -> None:
    store.save_visit(VISIT, range_toml=RANGE, version="0", answer_json="{}")
    assert GREETING not in client.get("/").text


@pytest.mark.parametrize("step", KEYS)
def test_a_step_can_be_skipped_and_the_others_stay(client: FlaskClient, store: Store, step: str) -> None:
    answer = client.post("/first-run/skip", data={"step": step})
    assert (answer.status_code, answer.headers["Location"]) == (303, "/#first-run")
    assert store.get_setting(f"first-run.{step}") == "skipped"
    found = items(client.get("/").text)
    assert [key for key, text in found.items() if "Skipped" in text] == [step]


def test_with_every_step_skipped_the_greeting_goes(client: FlaskClient) -> None:
    for step in KEYS:
        assert GREETING in client.get("/").text
        client.post("/first-run/skip", data={"step": step})
    assert GREETING not in client.get("/").text


def test_the_greeting_can_be_put_away_for_good(client: FlaskClient, store: Store) -> None:
    client.post("/first-run/dismiss")
    assert GREETING not in client.get("/").text
    assert store.get_setting("first-run") == "dismissed"


def test_a_step_that_is_none_stores_nothing(client: FlaskClient, store: Store) -> None:
    assert client.post("/first-run/skip", data={"step": "../shop"}).status_code == 404
    assert store.get_setting("first-run.../shop") is None


@pytest.mark.parametrize("path", ["/first-run/skip", "/first-run/dismiss"])
def test_looking_changes_nothing_and_another_site_may_not(client: FlaskClient, store: Store, path: str) -> None:
    assert client.get(path).status_code == 405
    answer = client.post(path, data={"step": "shop"}, headers={"Sec-Fetch-Site": "cross-site"})
    assert answer.status_code == 403
    client.get("/")
    assert store.get_setting("first-run") is None
    assert store.get_setting("first-run.shop") is None


def test_a_form_being_filled_in_is_not_greeted(client: FlaskClient) -> None:
    draft = client.post("/demo", data={"wearer": "tinted-pair"}).headers["Location"]
    assert GREETING not in client.get(draft).text
