import datetime as dt
from typing import Any

import pytest

from advisor.counsel.case import Case
from advisor.counsel.changes import changes_from_worn
from advisor.counsel.compare import Computed, answer_of, compute
from advisor.counsel.sheet import choose
from advisor.counsel.sheet_facts import size_change_percent
from advisor.counsel.stock import builtin_range
from advisor.counsel.visit import check_visit
from advisor.web.language import language

TODAY = dt.date(2026, 12, 1)
RESIN = {
    "design": "single-vision",
    "material": "hard-resin-150",
    "coating": "broadband",
    "front_power_d": 4.0,
    "centre_mm": 2.0,
}


def both(sphere: float, **more: Any) -> dict[str, Any]:
    return {"right": {"sphere": sphere, **more}, "left": {"sphere": sphere, **more}}


def content(sphere: float = -2.0, **visit: Any) -> dict[str, Any]:
    return {"prescription": {**both(sphere), "vertex_mm": 12}, "options": [RESIN], **visit}


def build(**visit: Any) -> tuple[Case, float | None]:
    """The case of a visit, and the change of size that the comparison tells of its only option."""
    found = computed(**visit)
    option = answer_of(found, translator=language("en"), with_advice=False).options[0]
    return found.case, size_change_percent(option)


def worn(sphere: float, **more: Any) -> dict[str, Any]:
    lens = {"material": "hard-resin-150", "front_power_d": 4.0, "prescription": {**both(sphere), "vertex_mm": 12}}
    return {**lens, **more}


def codes(case: Case, size_percent: float | None) -> list[str]:
    return [phrase.code for phrase in changes_from_worn(case, size_percent=size_percent)]


def test_without_the_worn_prescription_nothing_is_said() -> None:
    assert codes(*build()) == []
    assert codes(*build(worn_now={"material": "hard-resin-150"})) == []


def test_a_pair_like_the_old_one_is_said_to_be_like_it() -> None:
    assert codes(*build(worn_now=worn(-2.0))) == ["first-same"]


def test_a_change_of_power_and_of_axis_is_told() -> None:
    assert "first-power" in codes(*build(worn_now=worn(-1.5)))
    assert "first-power" not in codes(*build(worn_now=worn(-1.75)))
    turned = {"prescription": {**both(-2.0, cylinder=-1.0, axis=20), "vertex_mm": 12}}
    old = worn(-2.0, prescription={**both(-2.0, cylinder=-1.0, axis=5), "vertex_mm": 12})
    assert "first-axis" in codes(*build(worn_now=old, **turned))


def test_size_changes_by_the_power_factor_where_the_form_stays() -> None:
    # 1/(1 - d F) with d = 12 + 3 mm: from -2 to -4, (1 + 0.030)/(1 + 0.060) = 0.9717, that is 2.8 % smaller; the shape
    # factor of one front curve and about one thickness stays the same within 0.05 %
    case, size = build(sphere=-4.0, worn_now=worn(-2.0))
    assert size == pytest.approx(-2.83, abs=0.05)
    assert "first-smaller" in codes(case, size)


def test_a_flatter_front_makes_things_smaller_by_the_shape_factor() -> None:
    # 1/(1 - (t/n) F1): the worn lens bent to +8 against +4, both 2 mm and 1.498: (1 - 0.01068)/(1 - 0.00534) = 0.9946
    _, size = build(worn_now=worn(-2.0, front_power_d=8.0))
    assert size == pytest.approx(-0.54, abs=0.03)


def computed(**visit: Any) -> Computed:
    return compute(check_visit(content(**visit)), builtin_range(), today=TODAY)


def test_the_sheet_takes_what_is_recommended_where_nothing_is_ordered() -> None:
    plain = {**RESIN, "coating": "bare"}
    glass = {**RESIN, "material": "crown-glass-152"}
    life = {"daily_life": {"night_driving": "often", "impact": "sometimes", "face_to_face": "often"}}
    found = computed(options=[glass, plain, RESIN], **life)
    answer = answer_of(found, translator=language("en"))
    assert choose(found, number=None, answer=answer) == 2
    assert choose(found, number=1, answer=answer) == 0
    ordered = computed(options=[glass, plain, RESIN], ordered=1, **life)
    assert choose(ordered, number=None, answer=answer_of(ordered, translator=language("en"))) == 1
