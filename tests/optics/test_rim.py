"""Rims from the box, traced rims, and the optical centre in them."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from numpy.typing import NDArray

from advisor.errors import TwolightError
from advisor.optics.centration import centred_rim, minimum_blank, optical_centre
from advisor.optics.outline import outline_box, traced_rim
from advisor.optics.rim import RIM_ANGLES, box_rim, ed_fits_box, smaller_frame, superellipse_exponent


def ellipse(points: int, *, a: float, b: float, start: float = 0.0) -> NDArray[np.float64]:
    turn = start + np.arange(points) * 2 * np.pi / points
    return np.stack([a / 2 * np.cos(turn), b / 2 * np.sin(turn)], axis=-1)


@given(st.floats(30, 65), st.floats(0.55, 1.4), st.floats(0.02, 0.9))
def test_the_longest_radius_of_the_superellipse_is_half_the_ed(a: float, proportion: float, part: float) -> None:
    # second method: the greatest of 200 001 radii of the curve's equation in one quadrant
    b = a * proportion
    ed = max(a, b) + part * (np.hypot(a, b) - max(a, b))
    p = float(superellipse_exponent(ed, a_mm=a, b_mm=b))
    turn = np.linspace(0, np.pi / 2, 200_001)
    log_sum = np.logaddexp(
        p * np.log(np.maximum(np.cos(turn), 1e-300) / (a / 2)), p * np.log(np.maximum(np.sin(turn), 1e-300) / (b / 2))
    )
    assert 2 * np.exp(-log_sum / p).max() == pytest.approx(ed, abs=1e-3)


def test_the_rim_touches_its_box_and_nearly_its_ed() -> None:
    rim = box_rim(52.0, b_mm=38.0, ed_mm=55.0)
    assert rim.shape == (RIM_ANGLES, 2)
    assert rim[:, 0].max() == pytest.approx(26.0)
    assert rim[:, 1].min() == pytest.approx(-19.0)
    # the longest radius falls between two of the 180 points: the loss is under 0.02 mm
    assert 2 * np.hypot(rim[:, 0], rim[:, 1]).max() == pytest.approx(55.0, abs=0.02)


def test_without_ed_the_exponent_is_two_and_a_half() -> None:
    x, y = np.abs(box_rim([50.0, 40.0], b_mm=30.0, ed_mm=[np.nan, np.nan])[0].T)
    np.testing.assert_allclose((x / 25.0) ** 2.5 + (y / 15.0) ** 2.5, 1.0, rtol=1e-12)
    np.testing.assert_array_equal(box_rim(50.0, b_mm=30.0), box_rim(50.0, b_mm=30.0, ed_mm=np.nan))


def test_a_round_frame_has_an_ed_equal_to_its_box() -> None:
    rim = box_rim(46.0, b_mm=46.0, ed_mm=46.0)
    np.testing.assert_allclose(np.hypot(rim[:, 0], rim[:, 1]), 23.0, rtol=1e-12)


@pytest.mark.parametrize("ed", [51.9, np.hypot(52.0, 38.0), 80.0])
def test_an_ed_outside_the_box_is_refused(ed: float) -> None:
    assert not ed_fits_box(ed, a_mm=52.0, b_mm=38.0)
    with pytest.raises(TwolightError, match="ed_mm"):
        box_rim(52.0, b_mm=38.0, ed_mm=ed)


def test_an_ed_just_below_the_diagonal_gives_finite_points() -> None:
    assert np.isfinite(box_rim(52.0, b_mm=38.0, ed_mm=np.nextafter(np.hypot(52.0, 38.0), 0))).all()


def test_a_box_without_width_is_refused() -> None:
    with pytest.raises(TwolightError, match="a_mm"):
        box_rim(0.0, b_mm=38.0)


@pytest.mark.parametrize(("points", "tolerance"), [(36, 0.02), (72, 0.002), (400, 1e-4)])
def test_a_traced_ellipse_is_resampled_onto_the_ellipse(points: int, tolerance: float) -> None:
    x, y = traced_rim(ellipse(points, a=52.0, b=40.0, start=0.4)).T
    radius = 1 / np.hypot(np.cos(np.arctan2(y, x)) / 26.0, np.sin(np.arctan2(y, x)) / 20.0)
    np.testing.assert_allclose(np.hypot(x, y), radius, atol=tolerance)


def test_a_trace_of_uneven_steps_is_resampled_as_closely() -> None:
    turn = np.cumsum(np.tile([0.02, 0.10], 60)) * 2 * np.pi / 7.2
    x, y = traced_rim(np.stack([26 * np.cos(turn), 20 * np.sin(turn)], axis=-1)).T
    np.testing.assert_allclose((x / 26) ** 2 + (y / 20) ** 2, 1.0, atol=2e-4)  # the equation of the ellipse


def test_a_trace_may_run_either_way_and_may_close_itself() -> None:
    points = ellipse(60, a=52.0, b=40.0, start=-2.0)
    once = traced_rim(points)
    np.testing.assert_allclose(traced_rim(points[::-1]), once, atol=1e-9)
    np.testing.assert_allclose(traced_rim(np.vstack([points, points[:1]])), once, atol=1e-12)


@pytest.mark.parametrize(
    ("points", "reason"),
    [
        (ellipse(35, a=50.0, b=40.0), "36 points"),
        (ellipse(60, a=50.0, b=40.0) + np.array([60.0, 0.0]), "once round"),
        (np.vstack([ellipse(60, a=50.0, b=40.0)] * 2), "once round"),
        (np.full((40, 2), np.nan), "list of x and y"),
        (np.zeros((40, 3)), "list of x and y"),
        (np.zeros((40, 2)), "once round"),
    ],
)
def test_a_trace_that_is_no_outline_is_refused(points: NDArray[np.float64], reason: str) -> None:
    with pytest.raises(TwolightError, match=reason):
        traced_rim(points)


def test_the_box_of_a_trace_is_measured() -> None:
    assert outline_box(ellipse(360, a=52.0, b=40.0) + np.array([1.0, -2.0])) == pytest.approx((52.0, 40.0, 1.0, -2.0))


def test_a_smaller_frame_keeps_its_proportions() -> None:
    assert [float(v) for v in smaller_frame(52.0, b_mm=39.0, ed_mm=56.0, by_mm=4.0)] == pytest.approx(
        [48.0, 36.0, 56.0 * 48 / 52]
    )
    with pytest.raises(ValueError, match="by_mm"):
        smaller_frame(52.0, b_mm=39.0, ed_mm=56.0, by_mm=52.0)


def test_the_optical_centre_is_inset_and_raised_by_the_box_formulas() -> None:
    # by hand: (52 + 18)/2 - 31.5 = 3.5 in; 20 - 38/2 = 1 up
    centre = optical_centre(52.0, b_mm=38.0, dbl_mm=18.0, monocular_pd_mm=[31.5, 36.0], height_mm=[20.0, np.nan])
    np.testing.assert_allclose(centre, [[3.5, 1.0], [-1.0, 0.0]])


def test_the_minimum_blank_of_the_published_exercise_is_76_mm() -> None:
    # published worked exercise: round outline of 63 mm centred on the box, a 60, DBL 20, PD 69, allowance 2
    centre = optical_centre(60.0, b_mm=63.0, dbl_mm=20.0, monocular_pd_mm=34.5)
    rim = centred_rim(box_rim(63.0, b_mm=63.0, ed_mm=63.0), optical_centre_mm=centre)
    assert minimum_blank(rim, allowance_mm=2.0) == pytest.approx(76.0, abs=1e-9)


@pytest.mark.parametrize("centre", [(0.0, 0.0), (4.0, 2.0), (-11.0, 7.0), (60.0, 0.0)])
def test_the_sweep_adds_up_to_the_area_wherever_the_centre_lies(centre: tuple[float, float]) -> None:
    # closed form: the area of an ellipse
    rim = centred_rim(box_rim(52.0, b_mm=40.0, ed_mm=52.0), optical_centre_mm=centre)
    assert rim.sweep_mm2.sum() / 2 == pytest.approx(np.pi * 26 * 20, rel=1e-5)
    assert bool(rim.encloses_centre) is (centre != (60.0, 0.0))
