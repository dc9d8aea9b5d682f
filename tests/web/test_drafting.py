"""A form being filled in loses nothing: undo outlives a reload and a restart, and no window overwrites another."""

import json
import re
from html import unescape
from pathlib import Path
from typing import Any

import pytest
from flask.testing import FlaskClient

from advisor.records.store import Store
from advisor.web.app import create_app
from advisor.web.desk import desk_of
from advisor.web.drafting import MOST_TEXT
from advisor.web.form_fields import PLAIN
from advisor.web.undoing import is_typed

LIVE = {"HX-Request": "true"}
FORM = {
    "token": "d" * 32,
    "prescription.right.sphere": "-4.25",
    "prescription.left.sphere": "-3.75",
    "option_count": "2",
    "baseline": "0",
    "options.0.material": "hard-resin-150",
    "options.0.coating.front": "bare",
    "options.1.material": "thiourethane-160",
    "options.1.coating.front": "broadband",
}


class Window:
    """A browser window without scripting: it sends what its page shows, and shows what is answered."""

    def __init__(self, client: FlaskClient, path: str) -> None:
        self.client = client
        self.page = client.get(path).text

    def fields(self) -> dict[str, str]:
        found = dict(re.findall(r'<input type="hidden" name="(\w+)" value="([^"]*)">', self.page))
        found |= dict(re.findall(r'<input id="[^"]*" name="([^"]*)" value="([^"]*)"', self.page))
        for name, choices in re.findall(r'<select id="[^"]*" name="([^"]*)".*?>(.*?)</select>', self.page, re.DOTALL):
            if name not in ("wearer", "language"):
                chosen = re.search(r'<option value="([^"]*)" selected>', choices)
                found[name] = chosen[1] if chosen else ""
        for name, text in re.findall(r'<textarea id="[^"]*" name="([^"]*)".*?>(.*?)</textarea>', self.page, re.DOTALL):
            found[name] = text
        for name, value in re.findall(r'<input type="radio" id="[^"]*" name="(\w+)" value="(\d)" checked>', self.page):
            found[name] = value
        return {name: unescape(text) for name, text in found.items()}

    def press(self, wish: str = "", **typed: str) -> int:
        """Press a button after typing (``__`` for a dot); return the status of the answer."""
        changed = {name.replace("__", "."): text for name, text in typed.items()}
        answer = self.client.post("/counter", data={**self.fields(), **changed, "do": wish})
        if answer.status_code == 303:
            self.page = self.client.get(answer.headers["Location"]).text
        else:
            self.page = answer.text
        return answer.status_code

    def undo_says(self) -> str:
        (tag, text), *_ = re.findall(r'<button id="do-undo"([^>]*)>([^<]*)<', self.page)
        return "" if "disabled" in tag else text


def kept(store: Store) -> dict[str, Any]:
    with store._engine.begin() as connection:
        (row,) = connection.exec_driver_sql("SELECT fields FROM draft").fetchall()
    content: dict[str, Any] = json.loads(row[0])
    return content


@pytest.fixture
def window(client: FlaskClient) -> Window:
    """A form with two options, as typed in one go."""
    return Window(client, client.post("/counter", data=FORM).headers["Location"])


def test_every_kind_of_change_is_taken_back_in_its_order_and_brought_back(window: Window, store: Store) -> None:
    steps = [
        ("", {"wearer__name": "Ada"}),
        ("", {"daily_life__sun": "often"}),
        ("add", {}),
        ("copy-0", {}),
        ("left-1", {}),
        ("remove-0", {}),
        ('lay:{"material": "polycarbonate-159", "coating.front": "bare"}', {}),
    ]
    states = [window.fields()]
    for wish, typed in steps:
        assert window.press(wish, **typed) == 303
        states.append(window.fields())
    marks = {"draft_edit"}
    for state in reversed(states[:-1]):
        assert window.press("undo") == 303
        assert {**window.fields(), **dict.fromkeys(marks, "")} == {**state, **dict.fromkeys(marks, "")}
    for state in states[1:]:
        assert window.press("redo") == 303
        assert {**window.fields(), **dict.fromkeys(marks, "")} == {**state, **dict.fromkeys(marks, "")}
    assert len(kept(store)["before"]) == len(steps) + 1  # and the typing in one go
    assert kept(store)["after"] == []


def test_what_was_typed_with_the_press_of_a_button_is_a_step_of_its_own(window: Window) -> None:
    window.press("add", wearer__name="Ada")
    assert window.undo_says() == "Undo: adding an option"
    window.press("undo")
    assert (window.fields()["option_count"], window.fields()["wearer.name"]) == ("2", "Ada")
    window.press("undo")
    assert window.fields()["wearer.name"] == ""


def test_undo_takes_back_what_was_typed_with_its_own_press(window: Window) -> None:
    window.press("undo", wearer__name="Ada")
    assert window.fields()["wearer.name"] == ""
    window.press("redo")
    assert window.fields()["wearer.name"] == "Ada"


def test_undo_outlives_a_reload_and_a_restart(window: Window, store: Store, tmp_path: Path) -> None:
    window.press("", prescription__right__sphere="-5")
    path = f"/counter/{window.fields()['draft']}"
    store.close()
    again = create_app(data_dir=tmp_path, testing=True)
    later = Window(again.test_client(), path)
    assert later.undo_says() == "Undo: sphere, right"
    later.press("undo")
    assert later.fields()["prescription.right.sphere"] == "-4.25"
    desk_of(again).close()


def test_the_first_change_of_a_saved_visit_is_taken_back_to_what_was_saved(client: FlaskClient) -> None:
    note = "two\r\nlines"
    saved = client.post("/visits", data={**FORM, "note": note, "scenes": ["stage-lights", "low-sun-behind-dark-tint"]})
    window = Window(client, saved.headers["Location"])
    assert window.undo_says() == ""
    before = window.fields()
    window.press("", wearer__name="Ada", scenes="low-sun-behind-dark-tint stage-lights")
    assert window.undo_says() == "Undo: wearer, name"
    window.press("undo", scenes="low-sun-behind-dark-tint stage-lights")
    assert window.fields()["wearer.name"] == before["wearer.name"] == ""


def test_a_demo_wearer_opens_with_nothing_to_undo(client: FlaskClient) -> None:
    path = client.post("/demo", data={"wearer": "strong-cylinder"}).headers["Location"]
    assert Window(client, path).undo_says() == ""


def test_a_draft_from_before_there_was_undo_opens(client: FlaskClient, store: Store) -> None:
    old = store.save_draft(json.dumps({"fields": {**FORM, "note": "old"}, "token": FORM["token"]}))
    window = Window(client, f"/counter/{old.id}")
    assert window.undo_says() == ""
    window.press("", note="new")
    window.press("undo")
    assert window.fields()["note"] == "old"


def test_a_live_page_gets_the_form_after_a_button_and_its_figures_while_somebody_types(client: FlaskClient) -> None:
    typing = client.post("/counter", data=FORM, headers=LIVE)
    assert 'id="visit-form"' not in typing.text
    assert re.search(r'id="turns"[^>]*hx-swap-oob', typing.text)
    path = typing.headers["HX-Replace-Url"]
    pressed = client.post(
        "/counter", data={**FORM, "draft": path.rsplit("/", 1)[1], "draft_edit": "1", "do": "add"}, headers=LIVE
    )
    assert pressed.status_code == 200
    assert pressed.headers["HX-Replace-Url"] == path
    assert 'id="visit-form"' in pressed.text
    assert 'name="options.2.material"' in pressed.text


def test_only_what_can_be_done_with_an_option_is_offered(window: Window) -> None:
    def offered() -> set[str]:
        return set(re.findall(r'name="do" value="((?:add|copy|left|right|remove)[^"]*)"', window.page))

    assert offered() == {"add", "right-0", "copy-0", "remove-0", "left-1", "copy-1", "remove-1"}
    window.press("remove-0")
    assert offered() == {"add", "copy-0"}
    for _ in range(3):
        window.press("add")
    assert offered() == {f"{kind}-{k}" for k in range(4) for kind in ("left", "right", "remove")} - {
        "left-0",
        "right-3",
    }


def test_a_press_that_comes_twice_is_done_once(window: Window, store: Store) -> None:
    for wish, count in (("copy-1", "3"), ("undo", "2"), ("redo", "3"), ("remove-0", "2")):
        sent = {**window.fields(), "do": wish}
        first, second = (window.client.post("/counter", data=sent) for _ in range(2))
        assert (first.status_code, second.status_code) == (303, 303)
        assert kept(store)["fields"]["option_count"] == count
        window.page = window.client.get(first.headers["Location"]).text


def test_a_form_that_says_nothing_new_is_not_written_again(window: Window, store: Store) -> None:
    edit = window.fields()["draft_edit"]
    window.press()
    assert window.fields()["draft_edit"] == edit
    assert store.get_draft(window.fields()["draft"]).edit == int(edit)


def test_a_second_window_is_told_and_may_load_again_or_go_on_apart(
    window: Window, client: FlaskClient, store: Store
) -> None:
    draft = window.fields()["draft"]
    other = Window(client, f"/counter/{draft}")
    other.press("", note="theirs")
    assert window.press("", note="mine") == 409
    assert "changed in another window" in window.page
    assert f'href="/counter/{draft}"' in window.page
    assert window.fields()["note"] == "mine"
    live = client.post("/counter", data={**window.fields(), "do": "add"}, headers=LIVE)
    assert (live.status_code, live.headers["HX-Retarget"], live.headers["HX-Reselect"]) == (200, "#figures", "#figures")
    assert 'value="apart"' in live.text
    assert json.loads(store.get_draft(draft).fields_json)["fields"]["note"] == "theirs"
    assert window.press("apart") == 303
    assert (window.fields()["note"], window.fields()["draft"] == draft) == ("mine", False)
    assert json.loads(store.get_draft(draft).fields_json)["fields"]["note"] == "theirs"
    assert window.fields()["token"] != FORM["token"]


def test_a_window_whose_form_was_saved_in_another_is_led_to_the_visit(window: Window, client: FlaskClient) -> None:
    saved = client.post("/visits", data=window.fields()).headers["Location"]
    draft = window.fields()["draft"]
    live = client.post("/counter", data={**window.fields(), "note": "late"}, headers=LIVE).text
    assert "no longer kept" in live
    assert f'href="/counter/{draft}"' in live
    assert client.get(f"/counter/{draft}").headers["Location"] == saved
    assert window.press("", note="late") == 404
    assert window.fields()["note"] == "late"
    assert window.press("apart") == 303
    assert window.fields()["note"] == "late"


@pytest.mark.parametrize("worn", [False, True])  # one request holds a million characters at most
def test_a_text_too_long_to_be_kept_is_a_fault_of_its_field_and_is_not_kept(
    window: Window, store: Store, worn: bool
) -> None:
    names = [name for name in PLAIN if is_typed(name) and name.startswith("worn_now.") == worn]
    before = kept(store)
    digits = {name: "8" if name.endswith(".left") else "9" for name in names}  # alike, the two eyes would be one value
    texts = {name: digit * (MOST_TEXT + 1) for name, digit in digits.items()}
    assert window.press("", daily_life__sun="often", **texts) == 200
    assert [name for name in names if not re.search(rf'id="fault-{re.escape(name)}">[^<]+<', window.page)] == []
    assert all(f">{text}<" in window.page or f'value="{text}"' in window.page for text in texts.values())
    content = kept(store)
    assert content["fields"] == {**before["fields"], "daily_life.sun": "often"}
    assert content["before"] == [*before["before"], {"daily_life.sun": ""}]


def test_a_draft_stays_small_however_often_a_long_note_is_written(window: Window, store: Store) -> None:
    for number in range(45):
        window.press("", note=str(number % 10) * 19_000, reference=str(number))
    assert 200_000 < len(json.dumps(kept(store))) < 300_000
    window.press("", note="x" * 900_000)
    assert len(json.dumps(kept(store))) < 300_000


def test_going_back_to_the_start_page_begins_a_form_of_its_own(window: Window, client: FlaskClient) -> None:
    start = Window(client, "/")
    assert start.fields()["draft"] == ""
    assert start.undo_says() == ""
    assert start.fields()["token"] != window.fields()["token"]
