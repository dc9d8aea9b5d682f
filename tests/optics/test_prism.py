"""Prentice's rule, prescribed prism, colour fringe, directions."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from advisor.optics.centration import centred_rim
from advisor.optics.fringe import NOTICE_LEVEL_PRISM_D, colour_fringe, field_fringe, field_height_mm, rim_fringe
from advisor.optics.meridians import local_direction, power_along, principal_meridians
from advisor.optics.prism import prentice_prism, prentice_vector, prism_vector, prism_wedge, vertical_imbalance
from advisor.optics.rim import box_rim


def test_prentices_rule() -> None:
    assert prentice_prism(-4.0, offset_mm=4.0) == pytest.approx(1.6)  # Prentice's rule, 4 mm at -4.00


def test_the_base_lies_towards_the_centre_of_a_plus_lens_and_away_from_that_of_a_minus() -> None:
    # 5 mm towards the nose through +4 and -4: base out and base in, by hand 2.0
    prism = prentice_vector([[4.0, 4.0], [-4.0, -4.0]], first_deg=17.0, offset_mm=(5.0, 0.0))
    np.testing.assert_allclose(prism, [[-2.0, 0.0], [2.0, 0.0]], atol=1e-12)


@given(st.floats(-20, 20), st.floats(-6, 6), st.integers(0, 180), st.floats(-20, 20), st.floats(-20, 20))
def test_the_prism_of_a_toric_lens_agrees_with_the_dioptric_power_matrix(
    sphere: float, cylinder: float, axis: int, x: float, y: float
) -> None:
    # second method: Long's matrix, S + C sin^2, -C sin cos; -C sin cos, S + C cos^2
    s, c = np.sin(np.radians(axis)), np.cos(np.radians(axis))
    matrix = np.array([[sphere + cylinder * s * s, -cylinder * s * c], [-cylinder * s * c, sphere + cylinder * c * c]])
    power, direction = principal_meridians(sphere, cylinder_d=cylinder, axis_deg=axis)
    ours = prentice_vector(power, first_deg=direction[0], offset_mm=(x, y))
    np.testing.assert_allclose(ours, -matrix @ [x / 10, y / 10], atol=1e-9)


def test_prescribed_prisms_add_as_vectors() -> None:
    np.testing.assert_array_equal(prism_vector([(1.0, "in"), (2.5, "down"), (0.5, "out")]), [0.5, -2.5])
    np.testing.assert_array_equal(prism_vector([]), [0.0, 0.0])
    with pytest.raises(ValueError, match="base"):
        prism_vector([(1.0, "sideways")])


def test_the_wedge_of_a_prism() -> None:
    assert prism_wedge(3.0, index=1.5) * 50.0 == pytest.approx(3.0)  # P x width/(100 (n-1)) by hand


def test_vertical_imbalance_at_the_reading_point() -> None:
    # by hand: vertical powers -2 + -1 x cos^2(180) = -3.00 and +1.00, times 1 cm
    assert vertical_imbalance([-2.0, 1.0], cylinder_d=[-1.0, 0.0], axis_deg=[180, 0]) == pytest.approx(4.0)
    assert vertical_imbalance([-2.0, -2.0], cylinder_d=[-1.0, 0.0], axis_deg=[90, 0]) == pytest.approx(0.0, abs=1e-12)


def test_power_along_a_direction() -> None:
    # S along the axis, S + C across it, the mean half way
    np.testing.assert_allclose(
        power_along(-2.0, cylinder_d=-1.0, axis_deg=30, direction_deg=[30, 120, 75]), [-2, -3, -2.5]
    )


@pytest.mark.parametrize(
    ("rx", "powers", "directions"),
    [
        ((-2.0, -1.0, 30.0), [-2.0, -3.0], [30.0, 120.0]),
        ((-3.0, 1.0, 120.0), [-2.0, -3.0], [30.0, 120.0]),
        ((1.0, 0.0, 77.0), [1.0, 1.0], [0.0, 90.0]),
        ((0.0, 2.0, 180.0), [2.0, 0.0], [90.0, 0.0]),
    ],
)
def test_principal_meridians_run_from_the_more_positive(
    rx: tuple[float, float, float], powers: list[float], directions: list[float]
) -> None:
    power, direction = principal_meridians(rx[0], cylinder_d=rx[1], axis_deg=rx[2])
    np.testing.assert_allclose(power, powers)
    np.testing.assert_allclose(direction, directions)


def test_the_nose_is_on_the_viewers_right_for_the_right_eye_and_on_the_left_for_the_left() -> None:
    np.testing.assert_array_equal(local_direction([0.0, 180.0], eye=[0, 1]), [0.0, 0.0])  # three and nine o'clock
    np.testing.assert_array_equal(local_direction([90.0, 90.0], eye=[0, 1]), [90.0, 90.0])
    np.testing.assert_array_equal(local_direction([45.0, 135.0], eye=[0, 1]), [45.0, 45.0])  # up and in, both
    with pytest.raises(ValueError, match="eye"):
        local_direction(0.0, eye=2)


def test_the_colour_fringe_of_a_strong_lens() -> None:
    # by hand: y = 27 tan 30 = 15.588 mm, P = 9.353, over V 30 = 0.3118
    assert field_height_mm(12.0) == pytest.approx(15.588, abs=5e-4)
    assert field_fringe([-6.0, -6.0], first_deg=0.0, abbe=30.0, vertex_mm=12.0) == pytest.approx(0.3118, abs=5e-5)
    assert colour_fringe(-3.0, abbe=30.0) == pytest.approx(NOTICE_LEVEL_PRISM_D)


def test_the_fringe_of_a_toric_lens_is_that_of_its_stronger_meridian_and_prism_adds_to_it() -> None:
    # Prentice by meridian: the greatest is |F| y/V of the stronger one; a prism along that meridian adds P/V
    greatest = 6.0 * float(field_height_mm(12.0)) / 10 / 40
    toric = field_fringe([-2.0, -6.0], first_deg=[0.0, 20.0], abbe=40.0, vertex_mm=12.0)
    np.testing.assert_allclose(toric, greatest, rtol=1e-3)
    prismatic = field_fringe([-2.0, -6.0], first_deg=0.0, abbe=40.0, vertex_mm=12.0, prism_d=(0.0, 4.0))
    assert prismatic == pytest.approx(greatest + 0.1, rel=1e-12)


def test_the_fringe_along_the_rim_is_greatest_at_its_farthest_point() -> None:
    rim = centred_rim(box_rim(50.0, b_mm=50.0, ed_mm=50.0), optical_centre_mm=(4.0, 0.0))
    # by hand: 29 mm, -5 D, V 40: 14.5/40
    assert rim_fringe([-5.0, -5.0], first_deg=0.0, abbe=40.0, rim=rim) == pytest.approx(14.5 / 40, rel=1e-12)


def test_prescribed_prism_adds_to_the_fringe_on_one_side_of_the_rim_and_takes_from_it_on_the_other() -> None:
    rim = centred_rim(box_rim(50.0, b_mm=50.0, ed_mm=50.0), optical_centre_mm=(4.0, 0.0))
    # by hand: the base of -5 D is 14.5 out at the temporal rim and 10.5 in at the nasal rim; 2 out and 2 in on top
    out_and_in = rim_fringe([-5.0, -5.0], first_deg=0.0, abbe=40.0, rim=rim, prism_d=[[-2.0, 0.0], [2.0, 0.0]])
    np.testing.assert_allclose(out_and_in, [16.5 / 40, 12.5 / 40], rtol=1e-3)


@pytest.mark.parametrize("abbe", [0.0, -30.0])
def test_an_abbe_number_must_be_positive(abbe: float) -> None:
    with pytest.raises(ValueError, match="abbe"):
        colour_fringe(1.0, abbe=abbe)


def test_the_field_angle_has_a_range() -> None:
    with pytest.raises(ValueError, match="field_deg"):
        field_height_mm(12.0, field_deg=75.0)
