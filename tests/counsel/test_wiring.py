"""What a visit says reaches the optics as it was said: eyes, signs, directions, angles, ages, the scene's own light."""

import datetime as dt
from typing import Any

import numpy as np
import pytest

from advisor.counsel.case import Case, build_case
from advisor.counsel.compare import compute
from advisor.counsel.form import forms_of
from advisor.counsel.ghosts import lens_on_face, scene_arrays, wearer_of
from advisor.counsel.laid_out import lay_out
from advisor.counsel.stock import builtin_range
from advisor.counsel.visit import check_visit

TODAY = dt.date(2026, 12, 1)
STOCK = builtin_range()


def visit(**changes: Any) -> dict[str, Any]:
    return {
        "wearer": {"birth_year": 1961, "eye_colour": "light"},
        "prescription": {
            "vertex_mm": 12,
            "right": {"sphere": -2.0, "cylinder": -1.0, "axis": 30, "add": 2, "prism": [{"amount": 2, "base": "in"}]},
            "left": {"sphere": 1.0, "add": 2, "prism": [{"amount": 1, "base": "down"}]},
        },
        "fitting": {"vertex_mm": 12, "tilt_deg": 9, "wrap_deg": 6},
        "options": [{"design": "single-vision", "material": "hard-resin-150", "coating": "bare"}],
        **changes,
    }


def made(**changes: Any) -> Case:
    return build_case(check_visit(visit(**changes)), STOCK, today=TODAY)


def test_tilt_and_wrap_keep_their_signs_and_prism_points_to_its_base() -> None:
    case = made()
    lens = lens_on_face(case, forms_of(case, lay_out(case)))
    assert float(lens.tilt_deg) == 9.0
    assert float(lens.wrap_deg) == 6.0
    np.testing.assert_allclose(np.squeeze(lens.prism_base_d), [[2.0, 0.0], [0.0, -1.0]])  # towards the nose, up
    np.testing.assert_array_equal(np.squeeze(lens.eye), [0, 1])


def test_oncoming_traffic_comes_on_the_side_of_the_region() -> None:
    # TABO directions: 0 is the wearer's left. Where traffic keeps right, it comes towards the wearer on the left.
    assert set(scene_arrays(made()).azimuth_deg) == {0.0}
    uk = STOCK.model_copy(update={"shop": STOCK.shop.model_copy(update={"region": "uk"})})
    assert set(scene_arrays(build_case(check_visit(visit()), uk, today=TODAY)).azimuth_deg) == {180.0}


def test_the_wearers_age_and_eyes_reach_the_veil() -> None:
    wearer = wearer_of(case := made(), lay_out(case))
    assert float(wearer.age_y) == 65.0
    assert float(wearer.pigment) == 1.0  # light eyes, CIE 146:2002
    assert wearer.far_vergence_d is None


def test_an_eye_behind_a_reading_lens_keeps_its_distance_correction() -> None:
    case = made(options=[{"design": "reading", "material": "hard-resin-150", "coating": "bare"}])
    far = wearer_of(case, lay_out(case)).far_vergence_d
    assert far is not None
    # F/(1 - dF) from the back vertex to the entrance pupil, 12 + 3 mm on
    expected = [[power / (1 - 0.015 * power) for power in pair] for pair in ((-2.0, -3.0), (1.0, 1.0))]
    np.testing.assert_allclose(np.squeeze(far), expected, rtol=1e-9)


def test_light_from_behind_meets_the_lens_at_the_scenes_incidence() -> None:
    computed = compute(check_visit(visit(scenes=["window-behind-desk"])), STOCK, today=TODAY)
    assert STOCK.scenes_of(["window-behind-desk"])[0].incidence_deg == 35
    # Fresnel for unpolarised light on n 1.498 at 35 degrees, against 3.97 % straight on
    outside, inside = np.cos(np.radians(35)), np.sqrt(1 - (np.sin(np.radians(35)) / 1.498) ** 2)
    s = ((outside - 1.498 * inside) / (outside + 1.498 * inside)) ** 2
    p = ((inside - 1.498 * outside) / (inside + 1.498 * outside)) ** 2
    behind_back = computed.light.strengths[0, 0, 1]
    assert behind_back == pytest.approx((s + p) / 2, rel=0.01)  # dispersion moves it by less
    assert behind_back > 1.02 * ((1.498 - 1) / (1.498 + 1)) ** 2


def test_a_lens_for_near_is_centred_at_the_near_pd() -> None:
    fitting = {
        "right": {"pd_mm": 32, "near_pd_mm": 29, "height_mm": 18},
        "left": {"pd_mm": 32, "near_pd_mm": 29.5, "height_mm": 18},
    }
    options = [{"design": design, "material": "hard-resin-150"} for design in ("single-vision", "reading")]
    case = made(fitting=fitting, options=options)
    rim = forms_of(case, lay_out(case)).rim
    # level reach to nose and temple from the optical centre: inset (52 + 18)/2 - PD in a box 52 wide
    for k, e, pd in ((0, 0, 32.0), (0, 1, 32.0), (1, 0, 29.0), (1, 1, 29.5)):
        turned = np.radians(rim.angle_deg[k, e])
        across = rim.radius_mm[k, e] * np.cos(turned)
        assert across.max() == pytest.approx(26 - (35 - pd), abs=0.05)
        assert across.min() == pytest.approx(-26 - (35 - pd), abs=0.05)


def test_a_near_pd_that_was_not_measured_follows_from_the_working_distance() -> None:
    case = made(fitting={"right": {"pd_mm": 32}, "left": {"pd_mm": 31}, "working_distance_cm": [40], "vertex_mm": 12})
    # similar triangles: the eye turns about a point 27 mm behind the lens
    np.testing.assert_allclose(case.near_pd_mm, [32 * 400 / 427, 31 * 400 / 427], rtol=1e-12)


def test_the_box_comes_from_the_outline_where_it_is_left_out() -> None:
    turned = np.radians(np.arange(0, 360, 5))
    points = np.stack([21 * np.cos(turned), 16 * np.sin(turned)], axis=-1).tolist()
    case = made(frame={"outline": {"right": points}})
    assert case.a_mm == pytest.approx(42, abs=0.1)
    assert case.b_mm == pytest.approx(32, abs=0.1)
    assert not case.is_default("frame.a_mm")
