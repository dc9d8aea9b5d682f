"""Ghosts said aloud: one word for each verdict, haze called haze, arm's-length places."""

import re
from itertools import pairwise
from typing import Any

import pytest

from advisor.counsel.comparison import OptionFigures
from advisor.counsel.lens_figures import EyeFigures, Ghost
from advisor.counsel.phrases import say
from advisor.counsel.spoken import (
    EDGES,
    PLACES,
    SPOKEN,
    from_behind,
    ghost_phrase,
    second_image,
    worst_ghost,
)
from advisor.web.language import language

ORDER = ("not noticed", "at the limit", "only if looked for", "noticeable", "plain")


def ghost(**more: Any) -> Ghost:
    content: dict[str, Any] = {
        "path": "ahead-inner", "scene": "lamp", "strength": 0.001, "separation_deg": 2.0, "size_deg": (0.5, 0.4),
        "visibility_level": 2.0, "contrast": 0.05, "verdict": "only if looked for", "haze": False, "spread": False,
    }  # fmt: skip
    return Ghost.model_validate(content | more)


def aloud(**more: Any) -> str:
    return say(ghost_phrase(ghost(**more)), SPOKEN, language("en"))


def option(*ghosts: Ghost, left: tuple[Ghost, ...] = ()) -> OptionFigures:
    """An option with nothing but ghosts: checks of the other figures are left out."""
    return OptionFigures.model_construct(
        right=EyeFigures.model_construct(ghosts=list(ghosts)), left=EyeFigures.model_construct(ghosts=list(left))
    )


@pytest.mark.parametrize("verdict", ORDER)
def test_every_verdict_has_words_and_none_promises(verdict: str) -> None:
    text = aloud(verdict=verdict)
    assert "%(" not in text
    assert "invisible" not in text
    assert "will" not in text.split()
    assert ("no second light" in text) is (verdict == "not noticed")


@pytest.mark.parametrize(
    ("separation", "words"),
    [  # at arm's length a finger covers about 1 degree and a thumb about 2: common practice, no source
        (0.2, "close beside the lamp"),
        (0.5, "half a finger's width beside the lamp"),
        (1.0, "about a finger's width beside the lamp"),
        (2.0, "about a thumb's width beside the lamp"),
        (4.0, "about two thumbs' width beside the lamp"),
        (15.0, "far beside the lamp"),
    ],
)
def test_the_place_is_told_by_a_finger_or_a_thumb(separation: float, words: str) -> None:
    assert words in aloud(separation_deg=separation)


def test_places_have_no_gap_and_grow() -> None:
    limits = [limit for limit, _ in PLACES]
    assert all(a < b for a, b in pairwise(limits))
    assert limits[-1] == float("inf")
    assert len({words for _, words in PLACES}) == len(PLACES)


def test_edges_are_sharp_below_a_quarter_degree() -> None:
    assert "sharp-edged" in aloud(size_deg=(0.2, 0.1))
    assert "soft-edged" in aloud(size_deg=(0.2, 0.3))  # the wider meridian counts
    assert set(EDGES) == {True, False}


@pytest.mark.parametrize("verdict", ORDER)
@pytest.mark.parametrize("spread", [False, True])
def test_haze_is_never_called_a_second_light(verdict: str, spread: bool) -> None:
    text = aloud(haze=True, spread=spread, separation_deg=None if spread else 2.0, verdict=verdict, contrast=0.171)
    assert "second light" not in text
    assert "plain" not in text.split()
    if not spread:
        assert "haze" in text
        assert ("17.1 %" in text) is (verdict != "not noticed")  # haze is told by its contrast


def test_the_worst_of_both_eyes_and_all_scenes_is_told() -> None:
    weak, strong = ghost(visibility_level=0.1, verdict="not noticed"), ghost(visibility_level=5.0, verdict="noticeable")
    other = ghost(path="cornea-back", visibility_level=50.0, verdict="plain")
    pair = option(weak, other, left=(weak, strong))
    assert worst_ghost(pair) == strong
    phrase = second_image(pair)
    assert phrase is not None
    assert phrase.code == "second-noticeable"
    stage = ghost(visibility_level=90.0, verdict="plain", past_range=True)
    assert worst_ghost(option(weak, stage)) == weak  # past the model's range nothing is ranked by it
    assert worst_ghost(option()) is None
    assert second_image(option(ghost(visibility_level=None))) is None


@pytest.mark.parametrize(
    ("contrast", "code"),
    [(0.0199, "behind-unseen"), (0.0201, "behind-seen"), (0.99, "behind-seen"), (1.01, "behind-brighter")],
)
def test_light_from_behind_is_told_from_two_per_cent(contrast: float, code: str) -> None:
    behind = ghost(path="behind-back", separation_deg=None, contrast=contrast)
    fainter = ghost(path="behind-front", separation_deg=None, contrast=contrast / 2)
    phrase = from_behind(option(behind, fainter))
    assert phrase is not None
    assert phrase.code == code


def test_nothing_is_said_of_behind_where_no_such_scene_is_laid_out() -> None:
    assert from_behind(option(ghost())) is None
    assert from_behind(option()) is None


def test_every_text_has_its_figures() -> None:
    names = {name for text in SPOKEN.values() for name in re.findall(r"%\((\w+)\)s", text)}
    assert names <= {"place", "edge", "contrast_percent", "times"}
