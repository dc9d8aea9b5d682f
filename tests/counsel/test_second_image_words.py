"""The second image as a row of words: the lead, a verdict that is not sure, and bright scenes told by contrast."""

from typing import Any

import pytest

from advisor.counsel.comparison import OptionFigures
from advisor.counsel.lens_figures import EyeFigures, Ghost
from advisor.counsel.second_image_words import beside, lead, past_range, verdict_range
from advisor.web.language import language

ENGLISH = language("en")


def ghost(**more: Any) -> Ghost:
    content: dict[str, Any] = {
        "path": "ahead-inner", "scene": "lamp", "strength": 0.001, "separation_deg": 2.0, "size_deg": (0.5, 0.4),
        "visibility_level": 2.0, "contrast": 0.05, "verdict": "noticeable", "haze": False, "spread": False,
        "past_range": False,
    }  # fmt: skip
    return Ghost.model_validate(content | more)


def option(*right: Ghost, left: tuple[Ghost, ...] = ()) -> OptionFigures:
    return OptionFigures.model_construct(
        right=EyeFigures.model_construct(ghosts=list(right)), left=EyeFigures.model_construct(ghosts=list(left))
    )


def test_a_verdict_that_one_word_says_has_no_range() -> None:
    assert verdict_range(option(ghost(verdict_range=("plain", "plain")))) is None
    assert verdict_range(option(ghost())) is None
    assert verdict_range(option()) is None


def test_the_range_of_the_worst_is_that_of_the_greatest_of_either_end() -> None:
    # The worst of several is monotone in each, so its ends are the greatest of theirs.
    eyes = option(
        ghost(verdict_range=("not noticed", "noticeable")),
        left=(ghost(verdict_range=("at the limit", "at the limit")),),
    )
    assert verdict_range(eyes) == ("at the limit", "noticeable")
    assert "as lenses and eyes vary: at the limit to noticeable" in beside(eyes, ENGLISH)


def test_a_scene_past_the_threshold_is_told_by_contrast_and_not_by_a_verdict() -> None:
    stage = ghost(scene="stage", past_range=True, contrast=0.12, verdict_range=("plain", "plain"), verdict="plain")
    pair = option(stage, ghost(verdict_range=("not noticed", "not noticed"), verdict="not noticed"))
    assert verdict_range(pair) is None
    assert [text for text in beside(pair, ENGLISH) if text.endswith("told by contrast: 12.0 %")]
    assert lead(pair, ENGLISH) == "no second light to be noticed"
    assert past_range(option(ghost())) is None
    assert lead(option(stage), ENGLISH) is None


@pytest.mark.parametrize(("verdict", "words"), [("noticeable", "noticeable"), ("plain", "plain to see")])
def test_where_there_is_no_place_the_verdict_is_said(verdict: str, words: str) -> None:
    spread = ghost(spread=True, separation_deg=None, verdict=verdict)
    assert lead(option(spread), ENGLISH) == f"{words}; spread over the lens: no place to state"


def test_light_from_behind_is_told_beside() -> None:
    behind = ghost(path="behind-back", separation_deg=None, contrast=0.3)
    assert beside(option(behind), ENGLISH) == ["a light or window behind shows at 30.0 % of what is looked at"]
