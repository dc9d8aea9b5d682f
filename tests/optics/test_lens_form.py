"""Front power, back power, curvatures and sag."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from advisor.optics.lens_form import (
    back_curvature,
    back_power,
    curvature_along,
    front_curvature,
    nearest_base_power,
    sag,
    surface_exists,
    true_front_power,
    vogel_front_power,
)


def focus_of_an_exact_ray(k1: float, k2: float, thickness: float, n: float, height: float) -> float:
    """Distance in mm from the back vertex at which a ray parallel to the axis crosses it, by Snell's law."""
    z, y, direction = 0.0, height, np.array([1.0, 0.0])
    z = k1 * y * y / (1 + np.sqrt(1 - (k1 * y) ** 2))
    index, after = 1.0, n
    for k, vertex, following in ((k1, 0.0, 1.0), (k2, thickness, None)):
        for _ in range(50):  # the ray's meeting point with the sphere, by stepping along the ray
            surface = vertex + k * y * y / (1 + np.sqrt(1 - (k * y) ** 2))
            step = (surface - z) / direction[0]
            z, y = z + step * direction[0], y + step * direction[1]
        normal = np.array([np.sqrt(1 - (k * y) ** 2), -k * y])
        ratio = index / after
        cosine = normal @ direction
        direction = ratio * direction + (np.sqrt(1 - ratio**2 * (1 - cosine**2)) - ratio * cosine) * normal
        index, after = after, following or 1.0
    return float(z - y * direction[0] / direction[1] - thickness)


@pytest.mark.parametrize(
    ("power", "front", "thickness", "n"),
    [(-4.0, 4.0, 2.0, 1.5), (6.25, 9.0, 4.3, 1.586), (-9.5, 1.25, 1.3, 1.598), (12.0, 12.0, 8.0, 1.735)],
)
def test_the_curves_focus_an_exact_ray_at_the_prescribed_power(
    power: float, front: float, thickness: float, n: float
) -> None:
    # second method: Snell's law for a ray 0.05 mm from the axis; its aberration is below 1e-4 D
    back = back_power(power, front_power_d=front, centre_mm=thickness, index=n)
    k1, k2 = float(front_curvature(front, index=n)), float(back_curvature(back, index=n))
    assert 1000.0 / focus_of_an_exact_ray(k1, k2, thickness, n, 0.05) == pytest.approx(power, abs=1e-3)


def test_an_ordinary_meniscus_has_both_curvatures_positive_and_a_negative_back_power() -> None:
    back = back_power(-2.0, front_power_d=5.0, centre_mm=2.0, index=1.5)
    assert back < 0
    assert front_curvature(5.0, index=1.5) > 0
    assert back_curvature(back, index=1.5) > 0


@pytest.mark.parametrize(
    ("equivalent", "front"),
    # Vogel's rule by hand: SE + 6 for plus, SE/2 + 6 for minus (textbook, memory)
    [(2.0, 8.0), (0.0, 6.0), (-4.0, 4.0), (-9.5, 1.25)],
)
def test_vogels_rule(equivalent: float, front: float) -> None:
    assert vogel_front_power(equivalent) == front


def test_vogels_rule_stays_within_what_can_be_made() -> None:
    np.testing.assert_array_equal(vogel_front_power([-30.0, 30.0]), [0.0, 12.0])
    np.testing.assert_array_equal(vogel_front_power([-30.0, 30.0], lowest_d=-10, highest_d=40), [-9.0, 36.0])


def test_the_nearest_base_power_is_taken_from_lists_of_unlike_length() -> None:
    lists = [[0.5, 2.0, 4.0, 6.0], [3.0, 5.0, np.nan, np.nan], [np.nan] * 4]
    np.testing.assert_array_equal(nearest_base_power([2.9, 4.1, 2.9], base_powers_d=lists), [2.0, 5.0, 2.9])
    assert nearest_base_power(3.0, base_powers_d=[4.0, 2.0]) == 2.0  # the flatter of two as near
    assert nearest_base_power(3.3, base_powers_d=[]) == 3.3


def test_a_nominal_curve_keeps_its_radius() -> None:
    # one curve, two materials: curvature at 1.53 equals the curvature of the true power
    assert front_curvature(true_front_power(6.0, index=1.67), index=1.67) == pytest.approx(
        float(front_curvature(6.0, index=1.53)), rel=1e-14
    )
    assert true_front_power(6.0, index=1.53) == 6.0


@given(st.floats(-0.03, 0.03), st.floats(0.0, 30.0))
def test_sag_lies_on_the_sphere(curvature: float, radius: float) -> None:
    # closed form: (R - s)^2 + rho^2 = R^2, multiplied through by k
    s = float(sag(curvature, radius_mm=radius))
    assert curvature * (s * s + radius * radius) == pytest.approx(2 * s, abs=1e-9)


def test_a_surface_ends_at_its_equator() -> None:
    assert surface_exists(0.04, radius_mm=24.99)
    assert not surface_exists(-0.04, radius_mm=25.0)
    assert np.isfinite(sag(0.04, radius_mm=60.0))


def test_curvature_along_a_toric_surface_departs_from_a_true_toroid_by_at_most_a_tenth_of_a_millimetre() -> None:
    # a -4.00 -2.00 lens of index 1.5: closed form of the surface swept by turning one arc about an axis
    ka, kb, rho = 0.016, 0.020, 30.0
    direction = np.arange(0.0, 180.0, 5.0)
    x, y = rho * np.cos(np.radians(direction)), rho * np.sin(np.radians(direction))
    ra, rb = 1 / ka, 1 / kb
    toroid = rb - np.sqrt((rb - ra + np.sqrt(ra**2 - x**2)) ** 2 - y**2)
    ours = sag(curvature_along(np.array([ka, kb]), first_deg=0.0, direction_deg=direction), radius_mm=rho)
    assert np.abs(ours - toroid).max() <= 0.1
    assert ours[[0, 18]] == pytest.approx(toroid[[0, 18]], abs=1e-12)  # exact in the two meridians


def test_an_index_of_one_is_refused_by_name() -> None:
    with pytest.raises(ValueError, match="index"):
        front_curvature(4.0, index=1.0)
