from typing import Any

import pytest

from advisor.counsel.caution_texts import CAUTION_TEXTS
from advisor.counsel.compare import OWN_WARNINGS
from advisor.counsel.laid_out import NOTE_TEXTS, REFUSAL_TEXTS
from advisor.counsel.phrases import Figure, Phrase, digits_for, figure_text, mark, say
from advisor.counsel.visit_checks import WARNING_TEXTS
from advisor.counsel.worn_answer import BASIS_TEXTS
from advisor.web.language import language

ENGLISH = language("en")


class Shouting:
    """A made-up language: capitals for words, a comma for the point; shows that nothing escapes the translator."""

    language = "xx"

    def gettext(self, message: str, /) -> str:
        return message.upper().replace("%(KIND)S", "%(kind)s").replace("%(WIDTH_MM)S", "%(width_mm)s")

    def number(self, value: float, *, digits: int, signed: bool = False) -> str:
        return f"{value:{'+' if signed else ''}.{digits}f}".replace(".", ",")


# How the trade writes them: powers signed with two decimals, thickness to a tenth, axes to a degree's tenth.
@pytest.mark.parametrize(
    ("name", "value", "text"),
    [
        ("sphere_d", -2.25, "−2.25"),
        ("sphere_d", 2.25, "+2.25"),
        ("sphere_d", 0.0, "0.00"),
        ("sphere_d", -0.001, "0.00"),
        ("imbalance_prism_d", 1.25, "1.25"),
        ("changed_by_d", 1.25, "1.25"),
        ("most_d", 4.0, "4.00"),
        ("edge_mm", 4.249, "4.2"),
        ("blank_mm", 72.6, "73"),
        ("uv_cut_nm", 355.0, "355"),
        ("weight_g", 1234.5, "1,234.5"),
        ("luminous_percent", 74.9, "74.9"),
        ("count", 3, "3"),
        ("uv_cut_nm", None, "–"),
        ("material", "Hard resin 1.50", "Hard resin 1.50"),
        ("material", "", ""),
    ],
)
def test_a_figure_is_written_by_the_end_of_its_name(name: str, value: Figure, text: str) -> None:
    assert figure_text(name, value, ENGLISH) == text


def test_the_longest_ending_decides_how_many_digits() -> None:
    assert digits_for("edge_mm") == 1
    assert digits_for("blank_mm") == 0
    assert digits_for("of_no_known_kind") == 0


def test_a_marked_text_is_left_as_it_is() -> None:
    assert mark("as it is") == "as it is"


def test_a_phrase_is_said_in_the_language_handed_in_words_and_numbers_alike() -> None:
    texts = {"wide": "a %(kind)s frame, %(width_mm)s mm"}
    phrase = Phrase("wide", {"kind": "full", "width_mm": 52.25})
    assert say(phrase, texts, Shouting()) == "A FULL FRAME, 52,2 MM"
    assert say(phrase, texts, ENGLISH) == "a full frame, 52.2 mm"


def test_a_percent_sign_in_a_text_without_figures_is_one_sign() -> None:
    assert say(Phrase("half"), {"half": "50 %% of it"}, ENGLISH) == "50 % of it"


def test_a_figure_that_a_text_needs_and_does_not_get_is_an_error_at_once() -> None:
    with pytest.raises(KeyError):
        say(Phrase("wide"), {"wide": "%(width_mm)s"}, ENGLISH)


TABLES: dict[str, dict[str, Any]] = {
    "notes": NOTE_TEXTS,
    "refusals": REFUSAL_TEXTS,
    "warnings": WARNING_TEXTS,
    "worn pair": BASIS_TEXTS,
    "own warnings": OWN_WARNINGS,
    "cautions": {key: words.text for key, words in CAUTION_TEXTS.items()},
}


class _Any(dict[str, str]):
    def __missing__(self, key: str) -> str:
        return "x"


@pytest.mark.parametrize("table", TABLES)
def test_every_text_can_be_filled_in(table: str) -> None:
    for code, text in TABLES[table].items():
        assert "%(" not in text % _Any(), code
