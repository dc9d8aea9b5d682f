"""Every change of a form can be taken back and brought back, in steps as a person counts them."""

import re
from html.parser import HTMLParser

import pytest
from flask.testing import FlaskClient
from hypothesis import given
from hypothesis import strategies as st

from advisor.web.form_fields import COUNT, DECLINED, KEPT, OPTION, PLAIN
from advisor.web.language import language
from advisor.web.undo_words import turns
from advisor.web.undoing import MOST_CHARACTERS, MOST_STEPS, Past, difference, is_typed, recorded, redone, undone
from advisor.web.wishes import wished

SPHERE, CYLINDER, RIM = "prescription.right.sphere", "prescription.right.cylinder", "frame.rim"


def changed(fields: dict[str, str], past: Past, **changes: str) -> tuple[dict[str, str], Past]:
    """The form and its past after fields changed (``__`` for a dot)."""
    now = fields | {name.replace("__", "."): text for name, text in changes.items()}
    return now, recorded(past, fields, now)


def test_the_last_change_is_taken_back_and_brought_back() -> None:
    first = {SPHERE: "", CYLINDER: "", COUNT: "1"}
    second, past = changed(first, Past(), prescription__right__sphere="-4.25")
    third, past = changed(second, past, prescription__right__cylinder="-1")
    back, past = undone(third, past)
    assert difference(back, second) == {}
    back, past = undone(back, past)
    assert difference(back, first) == {}
    assert undone(back, past) == (back, past)
    again, past = redone(back, past)
    again, past = redone(again, past)
    assert difference(again, third) == {}
    assert redone(again, past) == (again, past)


def test_typing_on_in_one_field_is_one_step_and_typing_it_back_is_none() -> None:
    fields, past = {SPHERE: "", COUNT: "1"}, Past()
    for typed in ("-", "-4", "-4.", "-4.2", "-4.25"):
        fields, past = changed(fields, past, prescription__right__sphere=typed)
    assert past.before == ({SPHERE: ""},)
    fields, past = changed(fields, past, prescription__right__sphere="")
    assert past == Past()


def test_choosing_twice_in_one_field_is_two_steps() -> None:
    fields, past = changed({RIM: "", COUNT: "1"}, Past(), frame__rim="full")
    fields, past = changed(fields, past, frame__rim="drilled")
    assert past.before == ({RIM: ""}, {RIM: "full"})


def test_typing_after_undo_is_a_step_of_its_own_and_leaves_nothing_to_redo() -> None:
    fields, past = changed({SPHERE: "", CYLINDER: "", COUNT: "1"}, Past(), prescription__right__sphere="-4")
    fields, past = changed(fields, past, prescription__right__cylinder="-1")
    fields, past = undone(fields, past)
    fields, past = changed(fields, past, prescription__right__sphere="-5")
    assert past == Past(({SPHERE: ""}, {SPHERE: "-4"}))


def test_several_words_in_another_order_are_no_change() -> None:
    assert difference({"scenes": "road desk"}, {"scenes": "desk road"}) == {}
    assert difference({"scenes": "road desk"}, {"scenes": "desk"}) == {"scenes": "road desk"}


def test_the_oldest_steps_go_when_there_are_too_many_or_they_are_too_long() -> None:
    fields, past = {COUNT: "1", RIM: ""}, Past()
    for number in range(MOST_STEPS + 10):
        fields, past = changed(fields, past, frame__rim=str(number))
    assert len(past.before) == MOST_STEPS
    assert past.before[-1] == {RIM: str(MOST_STEPS + 8)}
    for number in range(20):
        fields, past = changed(fields, past, frame__rim=str(number) * (MOST_CHARACTERS // 8))
    assert sum(len(text) for step in past.before for text in step.values()) <= MOST_CHARACTERS
    assert len(past.before) >= 3


WISHES = st.sampled_from(
    ["add", "copy-0", "copy-1", "left-1", "left-2", "right-0", "remove-0", "remove-1", "undo", "redo"]
)


@given(st.lists(st.one_of(WISHES, st.tuples(st.sampled_from([SPHERE, RIM, "note"]), st.text("ab", max_size=2)))))
def test_as_many_undos_as_changes_lead_back_and_as_many_redos_forward(acts: list[str | tuple[str, str]]) -> None:
    start = {COUNT: "2", KEPT: "", "baseline": "0", "ordered": "1", **{f"options.{k}.tint": str(k) for k in range(2)}}
    fields, past = dict(start), Past()
    for act in acts:
        if act in ("undo", "redo"):
            fields, past = (undone if act == "undo" else redone)(fields, past)
        else:
            now = wished(fields, act) if isinstance(act, str) else {**fields, act[0]: act[1]}
            past, fields = recorded(past, fields, now), now
    while past.after:
        fields, past = redone(fields, past)
    end = fields
    while past.before:
        fields, past = undone(fields, past)
    assert difference(fields, start) == {}
    while past.after:
        fields, past = redone(fields, past)
    assert difference(fields, end) == {}


class _Controls(HTMLParser):
    """The names of a page's fields, by whether they are typed into."""

    def __init__(self) -> None:
        super().__init__()
        self.typed: set[str] = set()
        self.chosen: set[str] = set()

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        given = dict(attrs)
        name = given.get("name") or ""
        if tag == "select" or (tag == "input" and given.get("type") in ("checkbox", "radio")):
            self.chosen.add(name)
        elif tag == "textarea" or (tag == "input" and given.get("type", "text") == "text"):
            self.typed.add(name)


def test_what_is_typed_and_what_is_chosen_is_as_the_page_has_it(client: FlaskClient) -> None:
    page = _Controls()
    page.feed(client.get("/").text)
    names = {*PLAIN, *DECLINED, *(f"options.0.{name}" for name in OPTION)}
    assert {name for name in names if is_typed(name)} == page.typed & names
    assert {name for name in names if not is_typed(name)} == page.chosen & names


@pytest.mark.parametrize(
    ("before", "now", "undo"),
    [
        ({SPHERE: ""}, {SPHERE: "-4"}, "sphere, right"),
        ({"daily_life.sun": ""}, {"daily_life.sun": "often"}, None),
        ({COUNT: "2"}, {COUNT: "3"}, "adding an option"),
        ({COUNT: "3"}, {COUNT: "2"}, "removing an option"),
        ({"options.0.tint": "a", "baseline": "0"}, {"options.0.tint": "b", "baseline": "1"}, "moving an option"),
        ({SPHERE: "", CYLINDER: ""}, {SPHERE: "-4", CYLINDER: "-1"}, "prescription"),
        ({SPHERE: "", RIM: ""}, {SPHERE: "-4", RIM: "full"}, ""),
    ],
)  # fmt: skip
def test_undo_says_what_it_takes_back_where_a_few_words_say_it(
    before: dict[str, str], now: dict[str, str], undo: str | None
) -> None:
    base = {COUNT: "2"}
    found = turns({**base, **now}, recorded(Past(), {**base, **before}, {**base, **now}), language("en"))
    assert (found.can_undo, found.can_redo) == (True, False)
    assert found.undo == undo if undo is not None else re.fullmatch(r"[a-z ,]*sun[a-z ,]*", found.undo)
    fields, past = undone({**base, **now}, recorded(Past(), {**base, **before}, {**base, **now}))
    then = turns(fields, past, language("en"))
    assert (then.can_undo, then.can_redo, then.redo) == (False, True, found.undo)
