"""Everything sold at once is the same as everything sold one by one."""

import datetime as dt
from dataclasses import fields
from typing import Any

import numpy as np
import pytest

from advisor.counsel import light
from advisor.counsel.case import Case, build_case
from advisor.counsel.choices import Option
from advisor.counsel.compare import compute
from advisor.counsel.laid_out import lay_out_options
from advisor.counsel.stock import builtin_range
from advisor.counsel.visit import check_visit, read_visit
from advisor.counsel.whole_range import WholeRange, whole_range
from advisor.resources import resource_dir

TODAY = dt.date(2026, 12, 1)
STOCK = builtin_range()
MATERIALS = [material.key for material in STOCK.material]
COATINGS = ["bare", "hard-coat-only", "magnesium-fluoride", "broadband", "broadband-wide"]
WEARERS = ["weak-minus-night-driver", "strong-cylinder", "prescribed-prism", "high-plus-child"]


def case_of(name: str) -> Case:
    visit = read_visit(resource_dir("demo_patients") / f"{name}.json")
    return build_case(visit.model_copy(update={"scenes": None}), STOCK, today=TODAY)


def exactly(found: Any, k: int, alone: Any, part: str) -> None:
    one, other = getattr(found, part)[k], getattr(alone, part)[0]
    np.testing.assert_allclose(one, other, rtol=1e-9, atol=1e-12, err_msg=part)


def everything(case: Case, *, design: str = "single-vision") -> WholeRange:
    return whole_range(case, design=design, materials=MATERIALS, coatings=COATINGS)


def test_the_axes_are_option_eye_scene_path() -> None:
    case = case_of("strong-cylinder")
    found = everything(case)
    options, scenes = len(MATERIALS) * len(COATINGS), len(case.scenes)
    assert options == 45
    assert [(option.material.key, option.index) for option in found.laid[:6]] == [
        *[(MATERIALS[0], at) for at in range(5)],
        (MATERIALS[1], 5),
    ]
    assert found.light.first_pass_loss.shape == (options,)
    assert found.light.strengths.shape == (options, scenes, 5)
    assert found.light.passed.shape == (options, scenes)
    for values in (found.forms.weight_g, found.forms.blank_mm, found.forms.shape.thickest_mm):
        assert values.shape == (options, 2)
    assert found.ghosts.relaxed.visibility_level.shape == (options, 2, scenes, 5)
    assert found.ghosts.vergence_d.shape == (options, 2, scenes, 5, 2)


@pytest.mark.parametrize("name", WEARERS)
def test_each_option_is_what_it_is_alone(name: str) -> None:
    case = case_of(name)
    found = everything(case)
    for k in (0, 8, 13, 29, 44):
        option = found.laid[k]
        asked: dict[str, Any] = {
            "design": "single-vision",
            "material": option.material.key,
            "coating": COATINGS[k % len(COATINGS)],
        }
        visit = case.visit.model_copy(update={"options": check_visit(_only(asked)).options})
        alone = compute(visit, STOCK, today=TODAY)
        for part in ("front", "back", "first_pass_loss", "whole_lens", "transmittance", "strengths", "passed"):
            exactly(found.light, k, alone.light, part)
        for part in ("weight_g", "blank_mm", "fringe_prism_d", "magnification_percent", "smaller_thickest_mm"):
            exactly(found.forms, k, alone.forms, part)
        for part in ("centre_mm", "thickest_mm", "thinnest_mm", "back_power_d", "refusal"):
            exactly(found.forms.shape, k, alone.forms.shape, part)
        seen = alone.ghosts.seen
        for part in ("applies", "vergence_d", "pupil_mm", "separation_deg", "background_cd_m2", "spread"):
            exactly(found.ghosts, k, seen, part)
        for part in (field.name for field in fields(seen.relaxed)):
            exactly(found.ghosts.relaxed, k, seen.relaxed, part)


def _only(option: dict[str, Any]) -> dict[str, Any]:
    return {"prescription": {"right": {"sphere": 0.0}, "left": {"sphere": 0.0}}, "options": [option]}


def test_a_visit_with_few_scenes_has_few() -> None:
    visit = read_visit(resource_dir("demo_patients") / "weak-minus-night-driver.json")
    case = build_case(visit, STOCK, today=TODAY)
    assert everything(case).ghosts.relaxed.verdict.shape[2] == len(visit.scenes or ()) == 3


def test_a_reading_lens_is_worked_out_with_the_add() -> None:
    case = case_of("prescribed-prism")
    far, near = everything(case), everything(case, design="reading")
    moved = near.forms.powers.power_d - far.forms.powers.power_d
    np.testing.assert_allclose(moved, 2.0, rtol=0, atol=1e-12)  # the add of the wearer


def test_what_is_kept_from_visit_to_visit_is_what_would_be_worked_out() -> None:
    case = case_of("strong-cylinder")
    options = [Option(design="single-vision", material="hard-resin-150", coating=key) for key in ("bare", "broadband")]
    laid = lay_out_options(case, options)
    light.forget()
    first = light.light_of(laid, case.scenes)
    kept = light.light_of([*laid[::-1], laid[0]], case.scenes)
    for name in light.FIGURES:
        one, other = getattr(first, name), getattr(kept, name)
        np.testing.assert_array_equal(other, one[[1, 0, 0]])
    fewer = light.light_of(laid, case.scenes[:1])  # other scenes are other figures
    assert fewer.strengths.shape[1] == 1
