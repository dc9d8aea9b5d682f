"""Vertex distance, tilt and magnification: what wearing a lens does to it."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from advisor.optics.magnification import magnification_change_percent, magnification_percent, spectacle_magnification
from advisor.optics.tilt import martin_tilt
from advisor.optics.vertex import vertex_change


def test_minus_ten_from_12_mm_to_the_cornea() -> None:
    assert vertex_change(-10.0, from_mm=12.0, to_mm=0.0) == pytest.approx(-8.93, abs=0.005)  # vertex formula


@given(st.floats(-30, 30), st.floats(5, 20), st.floats(5, 20))
def test_a_vertex_change_there_and_back_is_none(power: float, near: float, far: float) -> None:
    there = vertex_change(power, from_mm=far, to_mm=near)
    assert vertex_change(there, from_mm=near, to_mm=far) == pytest.approx(power, abs=1e-9)


def test_the_focus_stays_where_it_was() -> None:
    # the far point is 100 mm behind a +10 at 14 mm from the cornea, so 98 mm behind a lens 2 mm closer
    assert vertex_change(10.0, from_mm=14.0, to_mm=12.0) == pytest.approx(1000 / 98)


def test_a_focus_between_the_two_places_is_refused() -> None:
    with pytest.raises(ValueError, match="from_mm"):
        vertex_change(60.0, from_mm=20.0, to_mm=0.0)


@pytest.mark.parametrize("tilt", [5.0, 10.0, 20.0])
@pytest.mark.parametrize("n", [1.5, 1.74])
def test_martins_formula_is_coddingtons_for_a_thin_lens(tilt: float, n: float) -> None:
    # second method: Coddington's equations, thin lens, stop at the lens: sagittal F (n cos i' - cos i)/(n - 1),
    # tangential that over cos^2 i. Martin drops the fourth order in the angle, under sin^4 of it.
    i = np.radians(tilt)
    sagittal = -10.0 * (n * np.sqrt(1 - (np.sin(i) / n) ** 2) - np.cos(i)) / (n - 1)
    tangential = sagittal / np.cos(i) ** 2
    sphere, cylinder = martin_tilt(-10.0, tilt_deg=tilt, index=n)
    assert sphere == pytest.approx(sagittal, rel=np.sin(i) ** 4)
    assert sphere + cylinder == pytest.approx(tangential, rel=np.sin(i) ** 4)


@pytest.mark.parametrize(("tilt", "index", "name"), [(50.0, 1.5, "tilt_deg"), (10.0, 1.0, "index")])
def test_tilt_outside_its_range_is_refused_by_name(tilt: float, index: float, name: str) -> None:
    with pytest.raises(ValueError, match=name):
        martin_tilt(-4.0, tilt_deg=tilt, index=index)


@pytest.mark.parametrize(("power", "front", "thickness"), [(-8.0, 2.0, 1.3), (6.25, 9.0, 4.3), (0.0, 6.0, 2.0)])
def test_magnification_agrees_with_a_paraxial_trace(power: float, front: float, thickness: float) -> None:
    # second method: a chief ray traced backwards from the entrance pupil's centre through both surfaces; the angle it
    # leaves by over the angle it set out with is 1/M
    n, pupil = 1.6, 15.0
    back = power - front / (1 - thickness / 1000 / n * front)
    angle, height = 0.01, 0.0
    height += pupil / 1000 * angle
    angle_in_glass = (angle - height * back) / n
    height += thickness / 1000 * angle_in_glass
    outside = n * angle_in_glass - height * front
    ours = spectacle_magnification(power, front_power_d=front, centre_mm=thickness, index=n, vertex_mm=12.0)
    assert ours == pytest.approx(angle / outside, rel=1e-12)


def test_minus_lenses_make_things_smaller_and_changes_are_relative_to_the_worn_pair() -> None:
    # by hand: power factor alone, 1/(1 + 0.015 x 4) = 0.9434; from 0.95 to 0.9405 is 1 % smaller
    flat = spectacle_magnification([-4.0, 4.0], front_power_d=0.0, centre_mm=2.0, index=1.5, vertex_mm=12.0)
    np.testing.assert_allclose(flat, [1 / 1.06, 1 / 0.94])
    assert magnification_percent(flat)[0] == pytest.approx(-5.660, abs=5e-4)
    assert magnification_change_percent(0.9405, worn_magnification=0.95) == pytest.approx(-1.0)


def test_a_lens_that_focuses_before_the_pupil_has_no_magnification() -> None:
    with pytest.raises(ValueError, match="vertex_mm"):
        spectacle_magnification(30.0, front_power_d=10.0, centre_mm=5.0, index=1.5, vertex_mm=40.0)
