"""Parts of a pair are called as the shop calls them, or by what they are; never by an inner key."""

from typing import Any

import pytest

from advisor.counsel.compare import compare
from advisor.counsel.stock import builtin_range
from advisor.counsel.visit import check_visit
from advisor.web.language import language

OWN = {"n_d": 1.6, "abbe": 40, "density_g_cm3": 1.3}
LAYERS = {"layers": [["SiO2", 90.7]]}


def label(**option: Any) -> str:
    content = {
        "prescription": {"right": {"sphere": -2.0}, "left": {"sphere": -2.0}},
        "options": [{"design": "single-vision", "material": "hard-resin-150", "coating": "bare", **option}],
        "scenes": [],
    }
    answer = compare(check_visit(content), builtin_range(), translator=language("en"), with_advice=False)
    return answer.options[0].label


@pytest.mark.parametrize(
    ("option", "words"),
    [
        ({"material": OWN}, "own material n 1.60, Bare"),
        ({"material": OWN | {"label": "Sample 7"}}, "Sample 7, Bare"),
        ({"coating": LAYERS}, "Hard resin 1.50, own coating"),
        ({"coating": {"front": "bare", "back": LAYERS}}, "Hard resin 1.50, Bare in front, own coating behind"),
        ({"tint": 0.85}, "Hard resin 1.50, Bare, tint 85 %"),
        ({"tint": {"luminous_transmittance": 0.4}}, "Hard resin 1.50, Bare, tint 40 %"),
        ({"tint": {"luminous_transmittance": 0.4, "label": "Dusk"}}, "Hard resin 1.50, Bare, Dusk"),
        ({}, "Hard resin 1.50, Bare"),
    ],
)
def test_a_part_is_called_by_its_label_or_by_what_it_is(option: dict[str, Any], words: str) -> None:
    assert label(**option) == words
