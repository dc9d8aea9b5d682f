"""Reflectance of bare faces."""

import numpy as np
import pytest
import tmm

from advisor.optics.fresnel import fresnel_reflectance, normal_reflectance


# Two bare faces at constant index, 1 - (1 - R)^2: 7.79 % at 1.498 and 14.1 % at 1.74 (common practice, no source).
@pytest.mark.parametrize(("index", "loss", "tolerance"), [(1.498, 0.0779, 5e-5), (1.74, 0.141, 5e-4)])
def test_first_pass_loss_of_two_bare_faces(index: float, loss: float, tolerance: float) -> None:
    assert 1.0 - (1.0 - float(normal_reflectance(index))) ** 2 == pytest.approx(loss, abs=tolerance)


def test_a_face_reflects_alike_from_both_sides() -> None:
    index = np.array([1.33, 1.5, 1.9])
    np.testing.assert_allclose(normal_reflectance(index), normal_reflectance(1.0, incident_index=index), rtol=1e-14)
    np.testing.assert_allclose(
        fresnel_reflectance(50.0, substrate_index=index),
        fresnel_reflectance(50.0, substrate_index=1.0, incident_index=index),
        rtol=1e-12,  # Stokes' reversal of a ray
    )


def test_s_and_p_agree_at_normal_incidence() -> None:
    s, p = fresnel_reflectance(0.0, substrate_index=1.6)
    assert s == pytest.approx(float(normal_reflectance(1.6)), rel=1e-14)
    assert p == pytest.approx(s, rel=1e-14)


def test_p_vanishes_at_brewsters_angle() -> None:
    s, p = fresnel_reflectance(np.degrees(np.arctan(1.6)), substrate_index=1.6)  # Brewster: tan = n
    assert p < 1e-30
    assert s == pytest.approx(np.cos(2.0 * np.arctan(1.6)) ** 2, rel=1e-12)  # then r_s = cos(2 Brewster)


@pytest.mark.parametrize("angle", [0.0, 20.0, 45.0, 70.0, 88.0])
@pytest.mark.parametrize(("near", "far"), [(1.0, 1.5), (1.5, 1.0), (1.6, 1.74)])
def test_any_angle_equals_tmm(angle: float, near: float, far: float) -> None:
    # PyPI tmm; the angle there is in the near medium
    inside = np.arcsin(np.sin(np.radians(angle)) / near)
    beyond = np.arcsin(np.sin(np.radians(angle)) / far)
    expected = [tmm.interface_R(pol, near, far, inside, beyond) for pol in "sp"]
    np.testing.assert_allclose(
        fresnel_reflectance(angle, substrate_index=far, incident_index=near), expected, rtol=0.0, atol=1e-12
    )


def test_light_that_cannot_enter_is_reflected_whole() -> None:
    # A far medium below the sine of the angle in air: Snell's law has no real angle
    np.testing.assert_array_equal(fresnel_reflectance(70.0, substrate_index=0.9, incident_index=1.5), [1.0, 1.0])


@pytest.mark.parametrize("angle", [-1.0, 90.0, float("nan")])
def test_an_angle_out_of_range_is_refused(angle: float) -> None:
    with pytest.raises(ValueError, match="angle_deg"):
        fresnel_reflectance(angle, substrate_index=1.5)


def test_an_index_out_of_range_is_refused_by_name() -> None:
    with pytest.raises(ValueError, match=r"^index"):
        normal_reflectance(0.0)
    with pytest.raises(ValueError, match="incident_index"):
        normal_reflectance(1.5, incident_index=float("nan"))
    with pytest.raises(ValueError, match="substrate_index"):
        fresnel_reflectance(0.0, substrate_index=-1.5)
    with pytest.raises(ValueError, match="incident_index is too low"):
        fresnel_reflectance(70.0, substrate_index=1.5, incident_index=0.9)
