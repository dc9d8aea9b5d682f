"""Refusals and notes of form: each with its reason, and a nearest that can truly be made."""

import copy
import datetime as dt
import math
from typing import Any

import pytest

from advisor.counsel.compare import compare
from advisor.counsel.comparison import Comparison, OptionFigures
from advisor.counsel.stock import Range, builtin_range, check_range
from advisor.counsel.visit import check_visit
from advisor.web.language import language

TODAY = dt.date(2026, 12, 1)
RESIN: dict[str, Any] = {"n_d": 1.498, "abbe": 58.0, "density_g_cm3": 1.32, "least_centre_mm": 2.0}
PLACE = {"pd_mm": 31.0, "height_mm": 20.0}


def visit(right: dict[str, Any] | float, left: dict[str, Any] | float | None = None, **more: Any) -> dict[str, Any]:
    eyes = [right if isinstance(right, dict) else {"sphere": right}]
    eyes.append(eyes[0] if left is None else left if isinstance(left, dict) else {"sphere": left})
    return {
        "prescription": {"vertex_mm": 12.0, "right": eyes[0], "left": eyes[1]},
        "fitting": {"right": PLACE, "left": PLACE, "vertex_mm": 12.0, "tilt_deg": 8, "wrap_deg": 5},
        "frame": {"a_mm": 52.0, "b_mm": 38.0, "dbl_mm": 18.0, "rim": "full"},
        "scenes": [],
        **more,
    }


def answer(content: dict[str, Any], *options: dict[str, Any], stock: Range | None = None) -> Comparison:
    wanted = {"options": [{"design": "single-vision", **option} for option in options]}
    checked = check_visit(copy.deepcopy(content | wanted))
    return compare(checked, stock or builtin_range(), translator=language("en"), with_advice=False, today=TODAY)


def codes(option: OptionFigures) -> list[str]:
    return [reason.code for reason in option.refused]


# what cannot be made: wearer, option, the reason
DRILLED = {"frame": {"a_mm": 52.0, "b_mm": 38.0, "dbl_mm": 18.0, "rim": "drilled"}}
LARGE = {"frame": {"a_mm": 58.0, "b_mm": 50.0, "dbl_mm": 18.0, "rim": "full"}}
RESIN_150, FRONT, BACK, THIN = {"material": "hard-resin-150"}, "front-surface", "back-surface", "too-thin"
CANNOT: dict[str, tuple[dict[str, Any], dict[str, Any], str]] = {
    "a front of 30 D spans no ordinary rim": (visit(-2.0), RESIN_150 | {"front_power_d": 30.0}, FRONT),
    "nor one of 25 D": (visit(1.0), {"material": "thiourethane-160", "front_power_d": 25.0}, FRONT),
    "a back for -20 behind a +6 front": (visit(-20.0), RESIN_150 | {"front_power_d": 6.0}, BACK),
    "unequal eyes, one impossible": (visit(-3.0, -22.0), RESIN_150 | {"front_power_d": 5.0}, BACK),
    "a centre thinner than its plus edge allows": (visit(6.0), RESIN_150 | {"centre_mm": 1.0}, THIN),
    "unequal eyes, the weaker first": (visit(4.0, 7.0), RESIN_150 | {"centre_mm": 1.0}, THIN),
    "unequal eyes, the stronger first": (visit(7.0, 4.0), RESIN_150 | {"centre_mm": 1.0}, THIN),
    "only the weaker eye can take this centre": (visit(2.0, 7.0), RESIN_150 | {"centre_mm": 2.4}, THIN),
    "drilled, a steep front": (visit(-2.0) | DRILLED, {"material": "polycarbonate-159", "front_power_d": 33}, FRONT),
    "drilled, and a back that only glass or a drillable resin reaches": (
        visit(-16.0) | DRILLED, {"material": "polyurethane-urea-153", "front_power_d": 8.0}, BACK
    ),
    "a strong plus in a large frame": (visit(20.0) | LARGE, RESIN_150 | {"front_power_d": 22.0}, FRONT),
}  # fmt: skip


def with_nearest(option: dict[str, Any], nearest: dict[str, Any]) -> dict[str, Any]:
    """Follow the answer's own advice: what it names is taken, what it does not is left as asked for."""
    changed = dict(option)
    if "material" in nearest:  # another form: the front curve is named, the centre is the rule's
        changed.pop("centre_mm", None)
        changed.pop("front_power_d", None)
    return changed | nearest


@pytest.mark.parametrize("name", CANNOT)
def test_a_lens_that_cannot_be_made_names_one_that_can(name: str) -> None:
    content, option, reason = CANNOT[name]
    kept = {"material": "thiourethane-160"}
    found = answer(content, {"material": "hard-resin-150"}, option, kept).options
    assert [figures.index for figures in found] == [0, 1, 2]
    refused = found[1]
    assert codes(refused) == [reason]
    assert refused.right is None
    assert refused.left is None
    assert refused.material == option["material"]
    nearest = refused.refused[0].nearest
    if nearest is None:  # only where nothing on the shelf can be made: try it all
        every = [{"material": material.key} for material in builtin_range().material]
        assert all(again.refused for again in answer(content, *every).options)
        return
    (again,) = answer(content, with_nearest(option, dict(nearest))).options
    assert codes(again) == []
    assert again.right is not None


def test_the_nearest_is_sold_for_this_rim_this_tint_and_this_blank() -> None:
    def material(key: str, n: float, **more: Any) -> dict[str, Any]:
        return RESIN | {"key": key, "n_d": n, **more}

    shelf = check_range(
        {
            "material": [
                material("asked", 1.5, base_powers_d=[30.0]),
                material("not-for-a-drill", 1.51, drillable=False),
                material("not-for-a-tint", 1.52, tintable=False),
                material("small", 1.53, blank_diameters_mm=[50.0]),
                material("weak", 1.54, sphere_range_d=[-1.0, 1.0]),
                material("the-one", 1.60),
                material("farther", 1.70),
            ]
        }
    )
    (option,) = answer(visit(-4.0) | DRILLED, {"material": "asked", "tint": 0.5}, stock=shelf).options
    (reason,) = option.refused
    assert reason.code == FRONT
    assert reason.nearest == {"material": "the-one", "front_power_d": 4.0}  # Vogel: -4/2 + 6


def test_the_refusal_says_what_is_wrong_in_a_sentence() -> None:
    (option,) = answer(visit(6.0), {"material": "hard-resin-150", "centre_mm": 1.0}).options
    assert option.refused[0].nearest is not None
    least = option.refused[0].nearest["centre_mm"]
    assert isinstance(least, float)
    assert option.refused[0].text == f"The centre asked for is too thin; the least is {least:.1f} mm."


BLANKS = check_range(
    {
        "material": [
            RESIN | {"key": "small", "n_d": 1.5, "blank_diameters_mm": [55.0, 60.0]},
            RESIN | {"key": "far", "n_d": 1.7, "blank_diameters_mm": [80.0]},
            RESIN | {"key": "near", "n_d": 1.56, "blank_diameters_mm": [70.0, 75.0]},
            RESIN | {"key": "tiny", "n_d": 1.51, "blank_diameters_mm": [50.0]},
        ],
        "offer": [
            {"design": "single-vision", "material": "near", "coating": "bare", "blank_diameters_mm": [50.0], "price": 9}
        ],
    }
)


def test_a_blank_that_is_too_small_is_refused_with_the_nearest_that_is_not() -> None:
    small, near = answer(
        visit(-2.0), {"material": "small"}, {"material": "near", "coating": "broadband"}, stock=BLANKS
    ).options
    (reason,) = small.refused
    assert (reason.code, reason.nearest) == (
        "blank-too-small",
        {"material": "near"},
    )  # by index: 1.51 is too small as well
    assert "60.0 mm" in reason.text
    assert codes(near) == []
    assert near.right is not None
    assert 60 < (near.right.blank_mm or 0) <= 70


def test_the_blanks_of_an_offer_count_before_those_of_its_material() -> None:
    (option,) = answer(visit(-2.0), {"material": "near", "coating": "bare"}, stock=BLANKS).options
    assert codes(option) == ["blank-too-small"]


# --- notes ------------------------------------------------------------------------------------------------------------


def notes(content: dict[str, Any], option: dict[str, Any]) -> dict[str, dict[str, Any]]:
    (found,) = answer(content, option).options
    assert found.refused == []
    return {note.code: dict(note.figures) for note in found.notes}


def test_what_was_asked_for_is_made_and_noted() -> None:
    plain = notes(visit(-4.0), {"material": "hard-resin-150"})
    assert not {"front-given", "centre-below-limit", "edge-below-limit", "shown-as-spherical"} & set(plain)
    asked = notes(visit(-4.0), {"material": "hard-resin-150", "front_power_d": 2.0, "centre_mm": 1.25})
    assert "front-given" in asked
    assert asked["centre-below-limit"] == {"centre_mm": 1.25}
    assert "edge-below-limit" not in asked
    aspheric = notes(visit(-4.0), {"material": "hard-resin-150", "design": "single-vision-aspheric"})
    assert "shown-as-spherical" in aspheric


def test_a_given_centre_may_leave_the_edge_under_its_limit() -> None:
    (ruled,) = answer(visit(4.0), {"material": "hard-resin-150"}).options
    assert ruled.right is not None
    assert ruled.right.centre_mm is not None
    found = notes(visit(4.0), {"material": "hard-resin-150", "centre_mm": ruled.right.centre_mm - 0.5})
    assert 0.4 < found["edge-below-limit"]["edge_mm"] < 0.5  # 1.0 less what was taken away, and a flatter back
    assert "edge-below-limit" not in notes(
        visit(4.0), {"material": "hard-resin-150", "centre_mm": ruled.right.centre_mm}
    )


@pytest.mark.parametrize(("power", "tilt"), [(-8.0, 15.0), (8.0, 10.0), (-4.0, 8.0), (-3.0, -14.0)])
def test_a_tilt_is_noted_by_martins_formula(power: float, tilt: float) -> None:
    content = visit(power)
    content["fitting"]["tilt_deg"] = tilt
    found = notes(content, {"material": RESIN})
    sine2 = math.sin(math.radians(tilt)) ** 2  # S' = S (1 + sin^2/2n), C = S' tan^2
    tilted = power * (1 + sine2 / (2 * 1.498))
    cylinder = tilted * math.tan(math.radians(tilt)) ** 2
    if max(abs(tilted - power), abs(cylinder)) < 0.12:
        assert "tilt-changes-power" not in found
        return
    figures = found["tilt-changes-power"]
    assert figures["change_d"] == pytest.approx(tilted - power, abs=1e-9)
    assert figures["cylinder_d"] == pytest.approx(cylinder, abs=1e-9)
    assert figures["tilt_deg"] == tilt


def test_both_sides_of_the_tilt_note_are_met() -> None:
    weak, strong = visit(-4.0), visit(-8.0)
    strong["fitting"]["tilt_deg"] = 15.0
    assert "tilt-changes-power" not in notes(weak, {"material": RESIN})
    assert "tilt-changes-power" in notes(strong, {"material": RESIN})
