"""The bench slip: figures against closed forms, hints each with a lens that has it and one that has not."""

import datetime as dt
from typing import Any

import pytest

from advisor.counsel.bench import HINTS, PLACE_TEXTS, Bench, bench_of
from advisor.counsel.compare import compute
from advisor.counsel.materials import is_polycarbonate
from advisor.counsel.order import NotReady
from advisor.counsel.stock import builtin_range, check_range
from advisor.counsel.visit import check_visit
from advisor.web.language import language

TODAY = dt.date(2026, 12, 1)
ASKED = {"impact": "never", "one_good_eye": "no", "driving": "never", "child": "no"}
EYE = {"pd_mm": 31.0, "height_mm": 21.0}
FRAME = {"a_mm": 52.0, "b_mm": 38.0, "dbl_mm": 18.0, "rim": "full"}


def bench(material: str = "hard-resin-150", coating: Any = "broadband", *, region: str = "", **visit: Any) -> Bench:
    content: dict[str, Any] = {
        "prescription": {"right": {"sphere": -2.0}, "left": {"sphere": -2.0}},
        "fitting": {"right": EYE, "left": EYE},
        "frame": FRAME,
        "daily_life": ASKED,
        "options": [{"design": "single-vision", "material": material, "coating": coating}],
    } | visit
    stock = check_range({"shop": {"region": region}}) if region else builtin_range()
    computed = compute(check_visit(content), stock, today=TODAY)
    return bench_of(computed, index=0, translator=language("en"))


def hints(*arguments: Any, **visit: Any) -> set[str]:
    return {hint.code for hint in bench(*arguments, **visit).hints}


def test_the_move_from_the_box_centre_is_that_of_the_box_system() -> None:
    # (a + DBL)/2 - PD = 35 - 31 inwards, height - b/2 = 21 - 19 upwards
    for eye in bench().eyes:
        assert (eye.inward_mm, eye.upward_mm) == (4.0, 2.0)


def test_a_lens_for_near_alone_is_moved_to_the_near_pd() -> None:
    # (52 + 18)/2 - 29 = 6 inwards; a reading lens, and single vision made to a near power
    eye = {"pd_mm": 31.0, "near_pd_mm": 29.0, "height_mm": 21.0}
    fitting = {"right": eye, "left": eye}
    made_near = {"for": "near", "right": {"sphere": 1.5}, "left": {"sphere": 1.5}}
    reading = {"for": "near", "right": {"sphere": 1.0, "add": 2.0}, "left": {"sphere": 1.0, "add": 2.0}}
    option = {"design": "reading", "material": "hard-resin-150", "coating": "bare"}
    for found in (
        bench(prescription=made_near, fitting=fitting),
        bench(prescription=reading, fitting=fitting, options=[option]),
    ):
        for lens in found.eyes:
            assert lens.inward_mm == pytest.approx(6.0)
            assert lens.order.near_pd_mm == 29.0
    far = made_near | {"for": "distance"}
    assert bench(prescription=far, fitting=fitting).eyes[0].inward_mm == pytest.approx(4.0)


def test_a_pd_wider_than_the_frame_moves_outwards() -> None:
    wide = {"pd_mm": 36.5, "height_mm": 18.0}
    for eye in bench(fitting={"right": wide, "left": wide}).eyes:
        assert (eye.inward_mm, eye.upward_mm) == (-1.5, -1.0)


def test_the_sides_of_a_minus_lens_are_thickest_where_the_rim_is_furthest() -> None:
    for eye in bench().eyes:
        nose, up, temple, down = eye.sides_mm
        # the centre lies 4 mm towards the nose and 2 mm up: the rim is 22, 17, 30 and 21 mm away
        assert temple > nose > down > up
        assert eye.thinnest_mm <= min(eye.sides_mm)
        assert eye.thickest_mm >= max(eye.sides_mm)
        assert eye.order.centre_mm < up


def test_the_sides_of_a_centred_round_lens_follow_the_sag_formula() -> None:
    # front +5 and back -7 at n 1.5, rho 20 mm: sag = k rho^2/(1 + sqrt(1 - k^2 rho^2)), k = F/((n - 1) 1000)
    round_eye = {"pd_mm": 29.0, "height_mm": 20.0}
    found = bench(
        fitting={"right": round_eye, "left": round_eye},
        frame={"a_mm": 40.0, "b_mm": 40.0, "ed_mm": 40.0001, "dbl_mm": 18.0, "rim": "full"},
        options=[
            {
                "design": "single-vision",
                "material": {"n_d": 1.5, "abbe": 58, "density_g_cm3": 1.3, "least_centre_mm": 2.0},
                "coating": "bare",
                "front_power_d": 5.0,
            }
        ],
    )

    def sag(power_d: float) -> float:
        k = power_d / 500.0
        return float(k * 400.0 / (1.0 + (1.0 - k * k * 400.0) ** 0.5))

    # back vertex power: F2 = -2 - 5/(1 - 0.002/1.5 x 5)
    back = 2.0 + 5.0 / (1.0 - 0.002 / 1.5 * 5.0)
    expected = 2.0 - sag(5.0) + sag(back)
    for eye in found.eyes:
        assert eye.sides_mm == pytest.approx((expected,) * 4, abs=0.02)  # the superellipse is a circle to 0.02 mm


def test_nothing_on_the_slip_is_a_guess() -> None:
    with pytest.raises(NotReady, match="PD of the right eye"):
        bench(fitting=None)
    with pytest.raises(NotReady, match="kind of rim"):
        bench(frame={"a_mm": 52.0, "b_mm": 38.0, "dbl_mm": 18.0})


def test_a_slippery_top_asks_for_a_grip_pad_and_the_axis_again() -> None:
    assert "grip-pad" in hints()
    assert "grip-pad" not in hints("hard-resin-150", "bare")
    assert "check the axis again" in HINTS["grip-pad"]


def test_no_acetone_on_polycarbonate_alone() -> None:
    stock = builtin_range()
    assert [m.key for m in stock.material if is_polycarbonate(m)] == ["polycarbonate-159"]
    assert "no-acetone" in hints("polycarbonate-159")
    assert "no-acetone" not in hints("thiourethane-160")


def test_no_bath_pan_or_warmer_for_a_coated_lens() -> None:
    assert "no-bath" in hints()
    assert "no-bath" not in hints("hard-resin-150", "bare")


def test_a_drilled_pair_stays_out_of_the_bath_even_bare() -> None:
    drilled = FRAME | {"rim": "drilled"}
    assert "rimless-bath" in hints("polyurethane-urea-153", "bare", frame=drilled)
    assert "rimless-bath" not in hints()


def test_a_material_that_heat_softens_is_named() -> None:
    assert "heat-soft" in hints("episulfide-174")
    assert "heat-soft" not in hints("thiourethane-160")
    assert "heat-soft" not in hints("titanium-glass-180")


def test_the_other_hints_come_and_go_with_their_reason() -> None:
    assert "faces-differ" in hints("hard-resin-150", {"back": "broadband"})
    assert "faces-differ" not in hints()
    prism = {"sphere": -2.0, "prism": [{"amount": 2.0, "base": "in"}]}
    assert "prism" in hints(prescription={"right": prism, "left": {"sphere": -2.0}})
    assert "prism" not in hints()
    assert "protective" in hints("polyurethane-urea-153", daily_life=ASKED | {"impact": "often"})
    assert "protective" not in hints()
    assert "us-impact" in hints(region="us")
    assert "us-impact" not in hints(region="uk")
    assert "glass" in hints("crown-glass-152")
    assert "glass" not in hints()
    assert "matt-edge" in hints()
    assert "matt-edge" not in hints(prescription={"right": {"sphere": 2.0}, "left": {"sphere": 2.0}})


def test_every_place_has_its_words() -> None:
    assert {eye.thickest_at for eye in bench().eyes} <= set(PLACE_TEXTS)
