import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from advisor.counsel.prescription import (
    EYES,
    PrismPolar,
    PrismVector,
    SphereCylinder,
    at_vertex,
    combined_prism,
    in_minus_cylinder,
    in_plus_cylinder,
    normal_axis,
    power_along_d,
    power_for_design,
    principal_meridians,
    prism_polar,
    prism_vector,
    spherical_equivalent_d,
    transposed,
    written_prism,
)

powers = st.builds(
    SphereCylinder,
    st.integers(-120, 120).map(lambda quarters: quarters / 4),
    st.integers(-40, 40).map(lambda quarters: quarters / 4),
    st.integers(1, 180).map(float),
)


def test_a_transposed_prescription_follows_the_textbook_rule() -> None:
    # sphere + cylinder, cylinder's sign changed, axis turned by 90 (the rule every optics textbook gives)
    assert transposed(SphereCylinder(-2.0, 1.5, 80)) == SphereCylinder(-0.5, -1.5, 170)
    assert transposed(SphereCylinder(1.0, -2.0, 135)) == SphereCylinder(-1.0, 2.0, 45)


@given(powers)
def test_transposing_twice_changes_nothing(power: SphereCylinder) -> None:
    assert transposed(transposed(power)) == power


@given(powers, st.floats(0, 360))
def test_both_notations_have_the_same_power_along_every_meridian(power: SphereCylinder, meridian_deg: float) -> None:
    expected = power_along_d(power, meridian_deg=meridian_deg)
    for other in (transposed(power), in_minus_cylinder(power), in_plus_cylinder(power)):
        assert power_along_d(other, meridian_deg=meridian_deg) == pytest.approx(expected, abs=1e-9)


def test_power_along_a_meridian_matches_the_squared_sine_worked_by_hand() -> None:
    # -1.00 -2.00 x 30: along the axis -1; at 60 from it -1 - 2 x 3/4 = -2.5; across it -3
    power = SphereCylinder(-1.0, -2.0, 30)
    assert [power_along_d(power, meridian_deg=m) for m in (30, 90, 120)] == pytest.approx([-1.0, -2.5, -3.0])


@given(powers)
def test_principal_powers_are_the_extremes_and_the_more_positive_comes_first(power: SphereCylinder) -> None:
    first, second = principal_meridians(power)
    scanned = [power_along_d(power, meridian_deg=m) for m in range(1, 181)]  # whole degrees hold both meridians
    assert (first.power_d, second.power_d) == pytest.approx((max(scanned), min(scanned)), abs=1e-9)
    assert power_along_d(power, meridian_deg=first.meridian_deg) == pytest.approx(first.power_d, abs=1e-9)
    assert 0 < first.meridian_deg <= 180
    assert 0 < second.meridian_deg <= 180


@given(powers)
def test_the_spherical_equivalent_is_the_mean_over_all_meridians(power: SphereCylinder) -> None:
    mean = math.fsum(power_along_d(power, meridian_deg=m) for m in range(180)) / 180
    assert spherical_equivalent_d(power) == pytest.approx(mean, abs=1e-9)


@pytest.mark.parametrize(("given_deg", "expected_deg"), [(0, 180), (180, 180), (181, 1), (-10, 170), (360, 180)])
def test_an_axis_of_zero_reads_as_180(given_deg: float, expected_deg: float) -> None:
    assert normal_axis(given_deg) == expected_deg


def test_minus_ten_from_twelve_millimetres_is_minus_8_93_at_the_cornea() -> None:
    # vertex formula F/(1 - dF): -10/(1 + 0.12) = -8.93, a textbook example
    assert at_vertex(SphereCylinder(-10.0), from_mm=12, to_mm=0).sphere_d == pytest.approx(-8.93, abs=0.005)


def test_each_principal_meridian_is_moved_by_itself() -> None:
    # +10.00 -4.00 x 20 from 14 to 10 mm, by hand: 10/(1 - 0.04) = 10.41667, 6/(1 - 0.024) = 6.14754
    moved = at_vertex(SphereCylinder(10.0, -4.0, 20), from_mm=14, to_mm=10)
    assert moved.sphere_d == pytest.approx(10.41667, abs=5e-6)
    assert moved.sphere_d + moved.cylinder_d == pytest.approx(6.14754, abs=5e-6)
    assert moved.axis_deg == 20


@given(powers, st.floats(5, 20), st.floats(5, 20))
def test_moving_there_and_back_changes_nothing(power: SphereCylinder, from_mm: float, to_mm: float) -> None:
    back = at_vertex(at_vertex(power, from_mm=from_mm, to_mm=to_mm), from_mm=to_mm, to_mm=from_mm)
    assert (back.sphere_d, back.cylinder_d) == pytest.approx((power.sphere_d, power.cylinder_d), abs=1e-6)


def test_a_focus_between_the_two_places_is_refused() -> None:
    with pytest.raises(ValueError, match="from_mm"):
        at_vertex(SphereCylinder(30.0), from_mm=40, to_mm=0)


def test_prisms_add_up_as_vectors() -> None:
    # 3 in with 4 up is the 3-4-5 triangle: 5 prism dioptres
    prism = combined_prism([(2.0, "in"), (4.0, "up"), (1.0, "in")])
    assert prism == PrismVector(3.0, 4.0)
    assert prism_polar(prism, eye="right").amount_prism_d == pytest.approx(5.0)
    assert prism_polar(prism, eye="right").base_deg == pytest.approx(53.1301, abs=5e-5)  # atan 4/3
    assert prism_polar(prism, eye="left").base_deg == pytest.approx(126.8699, abs=5e-5)  # seen from the front: mirrored


@pytest.mark.parametrize(
    ("base", "right_deg", "left_deg"), [("in", 0, 180), ("up", 90, 90), ("out", 180, 0), ("down", 270, 270)]
)
def test_base_directions_are_those_a_person_facing_the_wearer_sees(base: str, right_deg: int, left_deg: int) -> None:
    prism = combined_prism([(1.0, base)])  # type: ignore[list-item]  # parametrised text
    seen = [prism_polar(prism, eye=eye).base_deg for eye in EYES]
    assert seen == pytest.approx([right_deg, left_deg])


parts = st.floats(-20, 20).map(lambda amount: round(amount, 2))


@given(parts, parts, st.sampled_from(EYES))
def test_a_prism_survives_every_way_of_writing_it(inward: float, upward: float, eye: str) -> None:
    prism = PrismVector(inward, upward)
    assert combined_prism(written_prism(prism)) == prism
    polar = prism_polar(prism, eye=eye)  # type: ignore[arg-type]  # sampled from EYES
    assert 0 <= polar.base_deg < 360
    again = prism_vector(polar, eye=eye)  # type: ignore[arg-type]  # sampled from EYES
    assert (again.inward_prism_d, again.upward_prism_d) == pytest.approx((inward, upward), abs=1e-9)


def test_a_prism_given_by_its_direction_has_the_parts_of_the_triangle() -> None:
    # 2 prism dioptres, base at 30 degrees in a right eye: 2 cos 30 = 1.732 in, 2 sin 30 = 1 up
    vector = prism_vector(PrismPolar(2.0, 30.0), eye="right")
    assert (vector.inward_prism_d, vector.upward_prism_d) == pytest.approx((1.7320508, 1.0), abs=1e-7)


@pytest.mark.parametrize(
    ("kind", "share", "sphere_d"),
    [
        ("single-vision", None, -1.0),
        ("bifocal", None, -1.0),
        ("progressive", None, -1.0),
        ("reading", None, 1.0),
        ("occupational", 0.5, 0.0),
    ],
)
def test_a_design_is_computed_at_its_share_of_the_add(kind: str, share: float | None, sphere_d: float) -> None:
    made = power_for_design(SphereCylinder(-1.0, -0.5, 90), kind=kind, add_d=2.0, near_share=share)  # type: ignore[arg-type]  # parametrised text
    assert made == SphereCylinder(sphere_d, -0.5, 90)


def test_an_occupational_lens_without_its_share_is_refused() -> None:
    with pytest.raises(ValueError, match="near_share"):
        power_for_design(SphereCylinder(0.0), kind="occupational", add_d=2.0)
