import datetime as dt
from typing import Any

import pytest

from advisor.counsel.case import build_case
from advisor.counsel.laid_out import REFUSAL_TEXTS, Laid, lay_out
from advisor.counsel.phrases import say
from advisor.counsel.prescription import SphereCylinder
from advisor.counsel.stock import Range, builtin_range, check_range
from advisor.counsel.visit import check_visit
from advisor.web.language import language

RESIN: dict[str, Any] = {"n_d": 1.498, "abbe": 58.0, "density_g_cm3": 1.32, "label": "Our resin"}
LENS: dict[str, Any] = {"design": "single-vision", "material": "hard-resin-150", "coating": "broadband"}


def laid(*options: dict[str, Any], stock: Range | None = None, **visit: Any) -> list[Laid]:
    content = {"prescription": {"right": {"sphere": -2.0}, "left": {"sphere": -2.0}}, "options": list(options), **visit}
    return lay_out(build_case(check_visit(content), stock or builtin_range(), today=dt.date(2026, 12, 1)))


def codes(option: Laid) -> list[str]:
    return [reason.phrase.code for reason in option.refused]


def sentence(option: Laid) -> str:
    return say(option.refused[0].phrase, REFUSAL_TEXTS, language("en"))


def test_a_pair_beyond_the_material_is_refused_with_the_power_that_breaks_it_and_the_nearest_that_fits() -> None:
    prescription = {"right": {"sphere": 5.0}, "left": {"sphere": -8.0}}
    stock = check_range(
        {
            "material": [
                {**RESIN, "key": "short", "label": "Short", "sphere_range_d": [-10, 4]},
                {**RESIN, "key": "near", "n_d": 1.56, "sphere_range_d": [-8, 5]},
                {**RESIN, "key": "far", "n_d": 1.7},
            ],
            "shop": {"default_options": [LENS | {"material": "near"}]},
        }
    )
    (option,) = laid({**LENS, "material": "short"}, stock=stock, prescription=prescription)
    assert codes(option) == ["sphere-not-made"]
    assert option.refused[0].nearest == {"material": "near"}
    # +5.00 is beyond it; -8.00 is the stronger of the two but within
    assert sentence(option) == "Short is made from −10.00 to +4.00 D; this lens needs +5.00 D."


def test_a_cylinder_beyond_the_material_is_refused_in_minus_writing() -> None:
    eyes = {"right": {"sphere": -2.0, "cylinder": 3.0, "axis": 90}, "left": {"sphere": -2.0}}
    (option,) = laid({**LENS, "material": {**RESIN, "cylinder_max_d": 2.0}}, prescription=eyes)
    assert codes(option) == ["cylinder-not-made"]
    assert sentence(option) == "Our resin is made up to a cylinder of 2.00 D; this lens needs −3.00 D."


def test_the_power_judged_is_that_of_the_design() -> None:
    # a reading pair for -2.00 with an add of 2.00 is plano and within a range that ends at -1.00
    eyes = {eye: {"sphere": -2.0, "add": 2.0} for eye in ("right", "left")}
    material = {**RESIN, "sphere_range_d": [-1, 1]}
    far, near = laid(
        {**LENS, "material": material}, {**LENS, "material": material, "design": "reading"}, prescription=eyes
    )
    assert codes(far) == ["sphere-not-made"]
    assert near.powers == (SphereCylinder(0.0), SphereCylinder(0.0))
    assert codes(near) == []


def test_every_reason_is_given_at_once() -> None:
    material = {**RESIN, "tintable": False, "drillable": False, "sphere_range_d": [-1, 1]}
    (option,) = laid({**LENS, "material": material, "tint": 0.5}, frame={"rim": "drilled"})
    assert codes(option) == ["sphere-not-made", "not-tintable", "not-drillable"]


def test_what_a_material_does_not_state_refuses_nothing() -> None:
    (option,) = laid({**LENS, "material": RESIN, "tint": 0.5}, frame={"rim": "drilled"})
    assert codes(option) == []


def test_an_offer_beats_the_sum_of_the_parts_within_its_limits_only() -> None:
    stock = check_range({"offer": [{**LENS, "price": 99, "sphere_range_d": [-4, 4], "made": "stock"}]})
    (within,) = laid(LENS, stock=stock)
    assert (within.price, within.made) == (99, "stock")
    assert "not-an-offer" not in [note.code for note in within.notes]
    (beyond,) = laid(LENS, stock=stock, prescription={"right": {"sphere": -4.25}, "left": {"sphere": -2.0}})
    assert beyond.offer is None
    assert beyond.price == 150  # 60 design + 20 material + 70 coating of the built-in range
    assert beyond.made == "surfaced"
    assert "not-an-offer" in [note.code for note in beyond.notes]


def test_an_unpriced_offer_is_not_filled_up_with_the_price_of_its_parts() -> None:
    stock = check_range({"offer": [LENS]})
    (option,) = laid(LENS, stock=stock)
    assert option.price is None
    assert "price-unknown" in [note.code for note in option.notes]


@pytest.mark.parametrize(("faces", "bare_side"), [({"back": "broadband"}, "front"), ({"front": "broadband"}, "back")])
def test_a_face_left_out_is_bare(faces: dict[str, str], bare_side: str) -> None:
    (option,) = laid({**LENS, "coating": faces})
    assert getattr(option, bare_side).key == "bare"
    assert not getattr(option, f"{bare_side}_face").has_film


def test_a_shops_own_hard_coat_stands_in_where_a_lens_is_never_sold_bare() -> None:
    own = {"key": "ours", "layers": [], "hard_coat": {"index": 1.55, "thickness_um": 2}, "price": 5}
    stock = check_range({"coating": [own], "shop": {"default_options": [LENS | {"coating": "ours"}]}})
    (option,) = laid({**LENS, "material": "thiourethane-160", "coating": "bare"}, stock=stock)
    assert option.front.key == "ours"
    assert option.price == 175  # 60 + 110 + 5
