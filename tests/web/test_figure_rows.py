"""Figures as they are shown: one for both eyes where they look alike, and differences that add up on the page."""

import pytest

from advisor.counsel.comparison import EyeFigures, OptionFigures, SecondImage
from advisor.counsel.layout import ROWS, parted, second_image_strength, strength_words
from advisor.web.figure_rows import short
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
