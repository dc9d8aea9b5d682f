"""Options are added, copied, moved and removed; baseline and ordered stay with the content they pointed at."""

from collections.abc import Mapping

import pytest
from hypothesis import given
from hypothesis import strategies as st

from advisor.counsel.visit import parse_visit
from advisor.resources import resource_dir
from advisor.web import filled_form
from advisor.web.form_fields import COUNT, MOST_OPTIONS, OPTION, option_count
from advisor.web.option_columns import (
    with_option_added,
    with_option_copied,
    with_option_laid_out,
    with_option_moved,
    with_option_removed,
)
from advisor.web.wishes import wished


def form(letters: str, *, baseline: str = "0", ordered: str = "") -> dict[str, str]:
    """A form with one option a letter, each field of it marked with that letter."""
    fields = {COUNT: str(len(letters)), "baseline": baseline, "ordered": ordered, "wearer.name": "Ada"}
    for k, letter in enumerate(letters):
        fields |= {f"options.{k}.{name}": f"{letter} {name}" for name in OPTION}
    return fields


def letters(fields: Mapping[str, str]) -> str:
    """The options of a form by their letters; every field of one must carry the same letter."""
    found = ""
    for k in range(option_count(fields)):
        (letter,) = {fields[f"options.{k}.{name}"].removesuffix(f" {name}") for name in OPTION}
        found += letter
    assert not any(name.startswith(f"options.{len(found)}.") for name in fields)
    return found


def pointed_at(fields: Mapping[str, str], name: str) -> str:
    return letters(fields)[int(fields[name])] if fields[name] else ""


@pytest.mark.parametrize(
    ("wish", "before", "after"),
    [
        ("add", "abc", "abcc"), ("add", "abcd", "abcd"), ("add", "a", "aa"),
        ("copy-0", "abc", "aabc"), ("copy-1", "abc", "abbc"), ("copy-2", "abc", "abcc"), ("copy-3", "abc", "abc"),
        ("copy-0", "abcd", "abcd"),
        ("left-0", "abc", "abc"), ("left-1", "abc", "bac"), ("left-2", "abc", "acb"), ("left-3", "abc", "abc"),
        ("right-0", "abc", "bac"), ("right-1", "abc", "acb"), ("right-2", "abc", "abc"),
        ("remove-0", "abc", "bc"), ("remove-1", "abc", "ac"), ("remove-2", "abc", "ab"), ("remove-0", "a", "a"),
        ("remove--1", "abc", "abc"), ("remove-", "abc", "abc"), ("copy-²", "abc", "abc"), ("left-99999", "abc", "abc"),
        ("sideways-1", "abc", "abc"), ("", "abc", "abc"),
    ],
)  # fmt: skip
def test_a_button_changes_the_row_and_nothing_else(wish: str, before: str, after: str) -> None:
    changed = wished(form(before), wish)
    assert letters(changed) == after
    assert changed["wearer.name"] == "Ada"


@pytest.mark.parametrize(
    ("wish", "baseline", "ordered", "then"),
    [
        ("copy-0", "0", "2", ("0", "3")),
        ("copy-2", "2", "0", ("2", "0")),
        ("left-1", "1", "0", ("0", "1")),
        ("right-1", "1", "2", ("2", "1")),
        ("remove-0", "2", "1", ("1", "0")),
        ("remove-1", "1", "1", ("0", "")),
        ("add", "2", "", ("2", "")),
        ("remove-0", "0", "5", ("0", "4")),  # the visit holds options that the form does not show
        ("copy-0", "0", "4", ("0", "5")),
        ("left-1", "none", "", ("none", "")),
    ],
)
def test_baseline_and_ordered_point_at_the_same_option(
    wish: str, baseline: str, ordered: str, then: tuple[str, str]
) -> None:
    changed = wished(form("abc", baseline=baseline, ordered=ordered), wish)
    assert (changed["baseline"], changed["ordered"]) == then


WISHES = st.one_of(
    st.just("add"), st.builds("{}-{}".format, st.sampled_from(["copy", "left", "right", "remove"]), st.integers(0, 4))
)


@given(st.integers(1, MOST_OPTIONS), st.data())
def test_any_series_of_presses_keeps_baseline_and_ordered_on_the_same_content(count: int, data: st.DataObject) -> None:
    fields = form("abcd"[:count], baseline=str(data.draw(st.integers(0, count - 1))))
    fields["ordered"] = data.draw(st.sampled_from(["", *map(str, range(count))]))
    for wish in data.draw(st.lists(WISHES, max_size=12)):
        taken = int(wish.removeprefix("remove-")) if wish.startswith("remove-") else None
        before, fields = fields, wished(fields, wish)
        assert 1 <= len(letters(fields)) <= MOST_OPTIONS
        was_taken = len(letters(fields)) < len(letters(before))
        for name, otherwise in (("baseline", letters(fields)[0]), ("ordered", "")):
            gone = was_taken and before[name] == str(taken)
            assert pointed_at(fields, name) == (otherwise if gone else pointed_at(before, name))


@given(st.lists(st.tuples(st.integers(0, 3), st.sampled_from([-1, 1])), max_size=12))
def test_moving_keeps_every_option(moves: list[tuple[int, int]]) -> None:
    fields = form("abcd", baseline="1", ordered="3")
    for place, by in moves:
        fields = with_option_moved(fields, place, by=by)
    assert sorted(letters(fields)) == list("abcd")
    assert (pointed_at(fields, "baseline"), pointed_at(fields, "ordered")) == ("b", "d")


@given(st.integers(0, 3), st.sampled_from([-1, 1]))
def test_a_move_and_the_move_back_change_nothing(place: int, by: int) -> None:
    fields = form("abcd", baseline="2", ordered="1")
    moved = with_option_moved(fields, place, by=by)
    assert with_option_moved(moved, place + by, by=-by) == fields


def test_what_an_option_takes_from_the_first_it_keeps_when_another_is_first() -> None:
    fields = {**form("ab"), "options.1.design": "", "options.1.material": "", "options.1.tint": ""}
    for changed, place in ((with_option_moved(fields, 1, by=-1), 0), (with_option_removed(fields, 0), 0)):
        assert changed[f"options.{place}.design"] == "a design"
        assert changed[f"options.{place}.material"] == "a material"
        assert changed[f"options.{place}.tint"] == ""  # nobody takes a tint from the first
    assert with_option_copied(fields, 1)["options.2.design"] == ""  # the first stays the first


def test_options_are_added_as_copies_and_removed_with_what_points_at_them() -> None:
    visit = parse_visit((resource_dir("demo_patients") / "strong-cylinder.json").read_text("utf-8"))
    fields = {**filled_form.visit_to_fields(visit), "baseline": "2", "ordered": "1"}
    more = with_option_added(fields)
    assert option_count(more) == 4
    assert more["options.3.material"] == fields["options.2.material"]
    assert with_option_added(more) == more
    less = with_option_removed(fields, 1)
    assert option_count(less) == 2
    assert (less["baseline"], less["ordered"]) == ("1", "")
    assert less["options.1.material"] == fields["options.2.material"]
    one = with_option_removed(less, 0)
    assert with_option_removed(one, 0) == one


def test_an_option_is_laid_out_at_the_end_with_nothing_of_its_neighbour() -> None:
    laid = with_option_laid_out(form("ab", baseline="1"), {"material": "c material"})
    assert (option_count(laid), laid["options.2.material"], laid["options.2.tint"]) == (3, "c material", "")
    assert laid["baseline"] == "1"
    assert with_option_laid_out(form("ab"), {"wearer.name": "c"}) == form("ab")
    assert with_option_laid_out(form("abcd"), {"material": "e"}) == form("abcd")
