import re

import pytest

from advisor.counsel.care import CARE, CARE_TEXTS, CareLine, care_lines
from advisor.counsel.visit import DailyLife


def keys(*answered: str, kind: str = "dont", **answers: str) -> list[str]:
    given = dict.fromkeys(answered, "sometimes") | answers
    return [phrase.code for phrase in care_lines(given, kind="do" if kind == "do" else "dont")]


def test_cleaning_is_told_in_the_order_it_is_done() -> None:
    for answered in ((), ("dust", "bothered_smears"), tuple(DailyLife.model_fields)):
        order = keys(*answered, kind="do")
        assert order.index("rinse-first") < order.index("soap") < order.index("soft-cloth")


@pytest.mark.parametrize(
    ("answer", "first"),
    [
        ("sprays_solvents", "aerosol"),  # hairdressers, painters, nail technicians
        ("heat_steam", "heat"),  # cooks, bakers, sauna
        ("dust", "dry-wipe"),  # dusty trades
        ("water_salt_chlorine", "pool"),  # swimmers
    ],
)
def test_a_trades_own_harm_comes_first(answer: str, first: str) -> None:
    assert keys(answer)[0] == first
    assert keys()[0] != first or answer == "dust"


def test_what_is_met_often_comes_before_what_is_met_at_times() -> None:
    assert keys(sprays_solvents="sometimes", heat_steam="often")[:2] == ["heat", "aerosol"]
    assert keys(sprays_solvents="often", heat_steam="sometimes")[0] == "aerosol"
    assert keys(sprays_solvents="never") == keys()


def test_a_parent_reads_of_two_hands_and_the_strap_first() -> None:
    assert keys(child="yes", kind="do")[:3] == ["put-down", "child-strap", "rinse-first"]
    assert keys(kind="do")[0] == "rinse-first"


@pytest.mark.parametrize(
    ("answer", "kind", "line"),
    [
        ("water_salt_chlorine", "dont", "pool"),
        ("water_salt_chlorine", "do", "salt-sand"),
        ("child", "do", "child-strap"),
    ],
)
def test_a_line_for_some_wearers_is_left_out_for_others(answer: str, kind: str, line: str) -> None:
    assert line in keys(kind=kind, **{answer: "yes"})
    assert line not in keys(kind=kind)


def test_nothing_but_those_lines_is_ever_left_out() -> None:
    general = {line.key for line in CARE if not line.only_for}
    assert set(keys(kind="do")) | set(keys(kind="dont")) == general


def test_every_answer_a_line_waits_for_is_a_question_that_is_asked() -> None:
    asked = set(DailyLife.model_fields)
    assert {answer for line in CARE for answer in (*line.first_for, *line.only_for)} <= asked


@pytest.mark.parametrize("line", CARE, ids=lambda line: line.key)
def test_a_line_is_short_plain_and_without_doubtful_figures(line: CareLine) -> None:
    sentences = [sentence for sentence in re.split(r"(?<=[.!?])\s+", line.text) if sentence]
    assert all(len(sentence.split()) <= 20 for sentence in sentences)
    assert line.text.endswith(".")
    assert not re.search(r"\d", line.text)  # safe temperatures rest on trade pages alone and stay off the sheet


def test_keys_are_unique_and_what_sources_disagree_on_is_left_to_the_optician() -> None:
    assert len(CARE_TEXTS) == len(CARE)
    everything = " ".join(CARE_TEXTS.values())
    assert "hot water" not in everything
    assert "dish soap" not in everything
    assert "only a cleaner your optician supplies" in everything


# What sources agree harms the lenses (facts of the trade, "Care").
@pytest.mark.parametrize(
    "harm",
    ["hair spray", "perfume", "window cleaner", "vinegar", "bleach", "ammonia", "sauna", "car", "oven", "insect",
     "sun cream", "alcohol wipes", "glue", "paper", "shirt", "softener"],
)  # fmt: skip
def test_every_agreed_harm_is_named(harm: str) -> None:
    assert harm in " ".join(CARE_TEXTS.values())
