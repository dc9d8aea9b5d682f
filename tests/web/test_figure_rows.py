"""Figures as they are shown: one for both eyes where they look alike, and differences that add up on the page."""

from typing import Any

import pytest

from advisor.counsel.compare import answer_of, compute
from advisor.counsel.comparison import OptionFigures
from advisor.counsel.layout import ROWS, parted, second_image_strength, strength_words
from advisor.counsel.lens_figures import EyeFigures, SecondImage
from advisor.counsel.stock import builtin_range
from advisor.counsel.visit import check_visit
from advisor.web.figure_cells import FigureRow
from advisor.web.figure_rows import figure_table, short
from advisor.web.language import language

EDGE = next(row for row in ROWS if row.key == "edge_thickest_mm")
LOSS = next(row for row in ROWS if row.key == "first_pass_loss")
ENGLISH = language("en")


@pytest.mark.parametrize(
    ("value", "base", "text"),
    [(4.94, 4.56, "+0.3 mm"), (4.56, 4.94, "−0.3 mm"), (4.94, 4.86, ""), (None, 4.0, ""), (4.0, None, "")],
)
def test_a_difference_is_that_of_the_figures_shown(value: float | None, base: float | None, text: str) -> None:
    # 4.94 is shown as 4.9 and 4.56 as 4.6: what the page shows differs by 0.3.
    assert EDGE.difference(value, base, ENGLISH) == text


def test_percentages_differ_by_points() -> None:
    assert LOSS.difference(0.0784, 0.0064, ENGLISH) == "+7.20 points"


def test_both_eyes_share_their_unit() -> None:
    assert parted(["5.8 mm", "5.7 mm"], unit="mm") == "5.8 / 5.7 mm"
    assert parted(["5.8 mm", "5.8 mm"], unit="mm") == "5.8 mm"
    assert parted(["5.8 mm", "–"], unit="mm") == "5.8 mm / –"
    assert parted(["4.5", "4.4"], unit="") == "4.5 / 4.4"


def test_a_strength_is_a_part_of_the_light_that_makes_it() -> None:
    # 0.0397 x 0.0397 for bare faces of index 1.498 (Fresnel) is 1 part in 634, known to two digits.
    assert strength_words(0.0397**2, ENGLISH) == "1 part in 630 of the light itself"
    assert "∞" in strength_words(0.0, ENGLISH)


def test_the_stronger_eye_counts() -> None:
    right, left = (EyeFigures.model_construct(second_image=SecondImage(strength=part)) for part in (0.001, 0.002))
    assert second_image_strength(OptionFigures.model_construct(right=right, left=left)) == 0.002
    assert second_image_strength(OptionFigures.model_construct(right=None, left=None)) is None


def test_a_caution_is_shortened_to_its_first_sentence() -> None:
    assert short("An ordinary lens is no shield. Ask.") == "An ordinary lens is no shield."
    assert short("Child: a tough lens first, 2.0 mm or more; ask.") == "Child: a tough lens first, 2.0 mm or more."
    text = "Reading lenses: not for driving, walking or stairs. Never."
    assert short(text) == "Reading lenses: not for driving, walking or stairs."  # a heading alone says nothing
    assert short("No stop at all") == "No stop at all"


def rows_with(worn: dict[str, Any] | None) -> dict[str, FigureRow]:
    """The rows of two options, bare and coated, with a worn pair beside them."""
    eyes = {"right": {"sphere": -2.0}, "left": {"sphere": -2.0}}
    lens = {"design": "single-vision", "material": "hard-resin-150"}
    options = [{**lens, "coating": "bare"}, {**lens, "coating": "broadband"}]
    visit = {"prescription": eyes, "options": options, **({"worn_now": worn} if worn else {})}
    computed = compute(check_visit(visit), builtin_range())
    answer = answer_of(computed, translator=ENGLISH)
    table = figure_table(computed, answer, baseline=0, currency="EUR", speaker=ENGLISH)
    return {row.key: row for row in (*table.open, *table.folded)}


BARE = {"material": "hard-resin-150", "coating": "bare"}


def test_the_worn_pair_is_the_last_cell_of_every_row_and_marked() -> None:
    for row in rows_with(BARE).values():
        assert [cell.is_worn for cell in row.cells] == [False, False, True], row.key
        assert {len(given.texts) for given in row.given} <= {3}, row.key
    for row in rows_with(None).values():
        assert [cell.is_worn for cell in row.cells] == [False, False], row.key


def test_the_worn_pair_differs_from_the_baseline_like_an_option_and_has_no_price_or_caution() -> None:
    rows = rows_with({**BARE, "material": "thiourethane-160"})
    worn = {key: row.cells[-1] for key, row in rows.items()}
    edge = worn["edge_thickest_mm"].lines[0]
    assert edge.difference.endswith(" mm")
    assert edge.difference.startswith("\N{MINUS SIGN}")  # a higher index is thinner
    assert not worn["edge_thickest_mm"].notes  # nobody orders it in a smaller frame
    assert rows["edge_thickest_mm"].cells[0].notes
    for key in ("price", "cannot", "reflectance_limit"):
        assert [line.text for line in worn[key].lines] == ["\N{EN DASH}"], key
        assert not worn[key].notes
    assert all(given.texts[-1] == "\N{EN DASH}" for given in rows["price"].given)
    same = rows_with(BARE)["first_pass_loss"].cells[-1].lines[0]
    assert (same.text, same.difference) == ("7.83 %", "same")


def test_what_is_missing_of_the_worn_pair_is_dashes() -> None:
    rows = rows_with({"material": "hard-resin-150"})
    assert rows["edge_thickest_mm"].cells[-1].lines[0].text.endswith(" mm")
    for key in ("second_image", "seen_by_others", "first_pass_loss", "luminous_transmittance"):
        cell = rows[key].cells[-1]
        assert {line.text for line in cell.lines} == {"\N{EN DASH}"}, key
        assert cell.swatch is None
    films = [given.texts for given in rows["reflectance_front"].given if given.label == "front coating"]
    assert films == [("Bare", "Broadband", "not known")]
    for row in rows_with({"coating": "broadband"}).values():
        assert [line.text for line in row.cells[-1].lines] == ["\N{EN DASH}"], row.key
