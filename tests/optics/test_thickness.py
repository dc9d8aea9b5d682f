"""Centre, edge and weight of lenses in their rims."""

from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.typing import ArrayLike, NDArray

from advisor.optics.centration import CentredRim, centred_rim
from advisor.optics.lens_form import vogel_front_power
from advisor.optics.meridians import local_direction, principal_meridians
from advisor.optics.rim import RIM_ANGLES, box_rim
from advisor.optics.thickness import (
    LEAST_EDGE_MM,
    SIDES,
    THICKEST_CENTRE_MM,
    LensShape,
    Refusal,
    lens_shape,
    side_index,
)
from advisor.optics.weight import lens_volume_mm3, lens_weight_g


def rim_of(a: float, b: float, ed: float | None = None, *, inset: float = 0.0, raised: float = 0.0) -> CentredRim:
    return centred_rim(box_rim(a, b_mm=b, ed_mm=ed), optical_centre_mm=(inset, raised))


def lens(
    sphere: ArrayLike,
    *,
    cylinder: ArrayLike = 0.0,
    axis: ArrayLike = 0.0,
    eye: ArrayLike = 0,
    rim: CentredRim,
    **more: Any,
) -> LensShape:
    power, direction = principal_meridians(sphere, cylinder_d=cylinder, axis_deg=axis)
    first = local_direction(direction[..., 0], eye=eye)
    given: dict[str, Any] = {
        "front_power_d": vogel_front_power(power.mean(axis=-1)),
        "index": 1.598,
        "least_centre_mm": 1.3,
        "least_edge_mm": 1.0,
    }
    return lens_shape(power, first_deg=first, rim=rim, **(given | more))


def radius_sag(surface_power: ArrayLike, n: float, rho: ArrayLike) -> NDArray[np.float64]:
    """Sag by the radius of curvature, R - sqrt(R^2 - rho^2); positive for a positive power."""
    power = np.asarray(surface_power, dtype=np.float64)
    radius = 1000 * (n - 1) / np.where(power == 0.0, 1e-12, power)
    return np.asarray(radius - np.sign(radius) * np.sqrt(radius**2 - np.asarray(rho) ** 2))


def edge_in_the_viewers_frame(
    x: NDArray[np.float64],
    y: NDArray[np.float64],
    *,
    rx: tuple[float, float, float],
    front: float,
    centre: float,
    n: float,
) -> NDArray[np.float64]:
    """Thickness at points given as a person facing the wearer sees them, by S + C sin^2(direction - axis)."""
    sphere, cylinder, axis = rx
    along = sphere + cylinder * np.sin(np.arctan2(y, x) - np.radians(axis)) ** 2
    back = along - front / (1 - centre / 1000 / n * front)
    rho = np.hypot(x, y)
    return centre - radius_sag(front, n, rho) - radius_sag(back, n, rho)


@pytest.mark.parametrize("eye", [0, 1])
@pytest.mark.parametrize("rx", [(-4.25, -1.0, 175.0), (1.5, -3.0, 30.0), (-6.0, 2.0, 120.0)])
def test_edges_agree_with_the_prescription_as_a_viewer_sees_it(eye: int, rx: tuple[float, float, float]) -> None:
    # second method: no principal meridians and no nasal frame. The right eye's nose is on the viewer's right.
    rim = rim_of(52, 38, 55, inset=3, raised=1)
    shape = lens(rx[0], cylinder=rx[1], axis=rx[2], eye=eye, rim=rim)
    towards_nose = 1.0 if eye == 0 else -1.0
    turn = np.radians(rim.angle_deg)
    expected = edge_in_the_viewers_frame(
        towards_nose * rim.radius_mm * np.cos(turn), rim.radius_mm * np.sin(turn),
        rx=rx, front=float(shape.front_power_d), centre=float(shape.centre_mm), n=1.598,
    )  # fmt: skip
    np.testing.assert_allclose(shape.edge_mm, expected, atol=1e-9)


powers = st.floats(-30, 30)
cylinders = st.floats(-8, 8)
axes = st.integers(0, 180)


@given(powers, cylinders, axes, st.tuples(st.floats(-6, 6), st.floats(-6, 6)))
def test_mirror_image_eyes_have_mirror_image_edges(
    sphere: float, cylinder: float, axis: int, prism: tuple[float, float]
) -> None:
    rim = rim_of(48, 34, 51, inset=2, raised=1)
    right = lens(sphere, cylinder=cylinder, axis=axis, eye=0, rim=rim, prism_d=prism)
    left = lens(sphere, cylinder=cylinder, axis=180 - axis, eye=1, rim=rim, prism_d=prism)
    np.testing.assert_allclose(left.edge_mm, right.edge_mm, atol=1e-6)
    assert left.refusal == right.refusal


@given(powers, cylinders, st.integers(1, 180))
def test_a_transposed_prescription_gives_the_same_lens(sphere: float, cylinder: float, axis: int) -> None:
    rim = rim_of(48, 34, 51, inset=2, raised=1)
    one = lens(sphere, cylinder=cylinder, axis=axis, rim=rim)
    other = lens(sphere + cylinder, cylinder=-cylinder, axis=axis + 90, rim=rim)
    np.testing.assert_allclose(other.edge_mm, one.edge_mm, atol=1e-6)
    np.testing.assert_allclose(other.back_power_d, one.back_power_d, atol=1e-8)
    assert lens_volume_mm3(other, rim=rim) == pytest.approx(float(lens_volume_mm3(one, rim=rim)), rel=1e-6)


@settings(max_examples=300)
@given(
    powers, cylinders, axes, st.floats(-10, 10), st.floats(1.49, 1.81), st.floats(20, 70), st.floats(-12, 12),
    st.sampled_from([None, 60.0, 75.0]), st.sampled_from([None, 0.5, 2.0]),
    st.one_of(st.none(), st.floats(-30, 30)),
)  # fmt: skip
def test_nothing_is_nan_over_the_whole_allowed_input(
    sphere: float, cylinder: float, axis: int, prism: float, n: float, a: float, inset: float,
    blank: float | None, centre: float | None, front: float | None,
) -> None:  # fmt: skip
    rim = rim_of(a, 0.7 * a, inset=inset)
    more: dict[str, Any] = {} if front is None else {"front_power_d": front}
    shape = lens(
        sphere,
        cylinder=cylinder,
        axis=axis,
        rim=rim,
        index=n,
        prism_d=(prism, 1.0),
        blank_mm=blank,
        centre_mm=centre,
        **more,
    )
    for value in vars(shape).values():
        assert np.isfinite(value).all()
    assert np.isfinite(lens_volume_mm3(shape, rim=rim))
    if shape.refusal == Refusal.NONE:
        assert shape.thinnest_inside_mm > 0
        assert shape.centre_mm <= THICKEST_CENTRE_MM


@given(st.floats(-20, 12), st.floats(-4, 0), axes, st.floats(0, 5), st.sampled_from(sorted(LEAST_EDGE_MM)))
def test_the_centre_is_the_least_that_meets_both_limits(
    sphere: float, cylinder: float, axis: int, prism: float, rim_type: str
) -> None:
    limit = LEAST_EDGE_MM[rim_type]
    shape = lens(
        sphere, cylinder=cylinder, axis=axis, rim=rim_of(46, 34, 49, inset=2), prism_d=(prism, 0.0), least_edge_mm=limit
    )
    if shape.refusal == Refusal.NONE:
        assert shape.centre_mm >= 1.3
        assert shape.thinnest_mm >= limit - 1e-8
        assert min(shape.centre_mm - 1.3, shape.thinnest_mm - limit) == pytest.approx(0.0, abs=1e-7)


def test_a_weak_minus_in_a_groove_needs_more_than_its_materials_least_centre() -> None:
    # facts of the trade: a -0.50 in a groove needs more centre than its material's minimum (common practice)
    shape = lens(-0.50, rim=rim_of(50, 36, 53), least_centre_mm=1.3, least_edge_mm=LEAST_EDGE_MM["grooved"])
    assert shape.centre_mm > 1.5
    assert shape.thinnest_mm == pytest.approx(1.8, abs=1e-8)


def test_a_missing_least_centre_counts_as_one_millimetre() -> None:
    shape = lens(-6.0, rim=rim_of(50, 36), least_centre_mm=np.nan)
    assert shape.centre_mm == 1.0


def test_round_plus_lens_against_closed_form_caps() -> None:
    # closed forms: R - sqrt(R^2 - rho^2), and the volume under a spherical cap pi a^2 h - pi h (3 a^2 + h^2)/6
    rim = rim_of(50, 50, 50)
    shape = lens(5.0, rim=rim, front_power_d=9.0, index=1.5)
    centre, back = float(shape.centre_mm), float(shape.back_power_d[0])
    assert back == pytest.approx(5.0 - 9.0 / (1 - centre / 1000 / 1.5 * 9.0), rel=1e-12)
    sags = [float(radius_sag(f, 1.5, 25.0)) for f in (9.0, -back)]
    assert centre == pytest.approx(1.0 + sags[0] - sags[1], abs=1e-8)
    under = [np.pi * 625 * h - np.pi * h * (3 * 625 + h * h) / 6 for h in sags]
    assert lens_volume_mm3(shape, rim=rim) == pytest.approx(np.pi * 625 * centre - under[0] + under[1], rel=1e-7)


@pytest.mark.parametrize(
    ("rx", "prism"),
    [((-6.0, -2.0, 30.0), (0.0, 0.0)), ((3.0, 1.5, 100.0), (2.0, -3.0)), ((-0.5, 0.0, 0.0), (0.0, 4.0))],
)
def test_the_volume_agrees_with_a_fine_grid(rx: tuple[float, float, float], prism: tuple[float, float]) -> None:
    # second method: thickness summed over a 0.1 mm square grid inside the superellipse; the grid itself is good to 2e-4
    rim = rim_of(50, 36, inset=3, raised=2)
    shape = lens(rx[0], cylinder=rx[1], axis=rx[2], rim=rim, prism_d=prism)
    line = np.arange(-30, 30, 0.1) + 0.05
    x, y = np.meshgrid(line, line)
    inside = (np.abs(x) / 25) ** 2.5 + (np.abs(y) / 18) ** 2.5 < 1
    x, y = x[inside] - 3, y[inside] - 2
    thickness = edge_in_the_viewers_frame(
        x, y, rx=rx, front=float(shape.front_power_d), centre=float(shape.centre_mm), n=1.598
    ) + (prism[0] * x + prism[1] * y) / (100 * 0.598)
    assert lens_volume_mm3(shape, rim=rim) == pytest.approx(thickness.sum() * 0.01, rel=5e-4)


def test_thickest_and_thinnest_edge_agree_with_a_fine_walk_round_the_rim() -> None:
    # second method: 36 000 points of the superellipse's own equation; 2 degree steps may miss up to 0.02 mm
    shape = lens(-5.0, cylinder=-1.5, axis=60, rim=rim_of(52, 38, inset=4, raised=1))
    turn = np.linspace(0, 2 * np.pi, 36_000)
    radius = ((np.abs(np.cos(turn)) / 26) ** 2.5 + (np.abs(np.sin(turn)) / 19) ** 2.5) ** (-1 / 2.5)
    x, y = radius * np.cos(turn) - 4, radius * np.sin(turn) - 1
    walk = edge_in_the_viewers_frame(
        x, y, rx=(-5.0, -1.5, 60.0), front=float(shape.front_power_d), centre=float(shape.centre_mm), n=1.598
    )
    assert shape.thickest_mm == pytest.approx(walk.max(), abs=0.02)
    assert shape.thinnest_mm == pytest.approx(walk.min(), abs=0.02)
    where = np.degrees(np.arctan2(y, x))[walk.argmax()] % 360
    assert shape.thickest_deg == pytest.approx(where, abs=2.5)
    assert SIDES[int(side_index(shape.thickest_deg))] == "temporal"


@pytest.mark.parametrize(
    ("direction", "side"),
    [(0.0, "nasal"), (359.0, "nasal"), (80.0, "up"), (200.0, "temporal"), (271.0, "down")],
)
def test_sides_are_named_from_the_nose(direction: float, side: str) -> None:
    assert SIDES[int(side_index(direction))] == side


def test_prescribed_prism_thickens_the_base_by_its_rule() -> None:
    # closed form: P x width/(100 (n-1)), here 3 x 50/(100 x 0.5) = 3.0 mm, on a plane-parallel plate
    shape = lens(0.0, rim=rim_of(50, 50, 50), index=1.5, front_power_d=0.0, prism_d=(3.0, 0.0))
    assert shape.edge_mm[0] - shape.edge_mm[RIM_ANGLES // 2] == pytest.approx(3.0, abs=1e-12)
    assert SIDES[int(side_index(shape.thickest_deg))] == "nasal"
    assert shape.thinnest_mm == pytest.approx(1.0)
    assert shape.centre_mm == pytest.approx(2.5)


def test_a_minus_lens_with_prism_is_thinnest_beside_its_centre() -> None:
    # closed form of the parabola: t0 + F rho^2/2(n-1) - w rho dips by w^2 (n-1)/(2 F), 0.1^2 x 500/12 = 0.417 mm
    shape = lens(-6.0, rim=rim_of(56, 56, 56), index=1.5, front_power_d=0.0, prism_d=(5.0, 0.0), least_centre_mm=2.0)
    assert shape.centre_mm == 2.0
    assert shape.thinnest_inside_mm == pytest.approx(2.0 - 0.417, abs=0.02)


def test_weight_is_density_times_volume_and_grows_with_the_frame() -> None:
    small, large = rim_of(44, 32), rim_of(52, 40)
    for sphere in (-6.0, 0.0, 6.0):
        light = lens_weight_g(lens(sphere, rim=small), rim=small, density_g_cm3=[1.3, 2.6])
        assert light[1] == pytest.approx(2 * light[0], rel=1e-14)
        assert lens_weight_g(lens(sphere, rim=large), rim=large, density_g_cm3=1.3) > light[0]


def test_frame_first_a_smaller_eye_beats_a_higher_index() -> None:
    # facts of the trade (common practice, rough): for -9.50 a 46 instead of 56 mm eye takes about 5.5 mm off the edge,
    # 1.74 instead of 1.60 about 2.5 mm. Assumed: one shape, b 3/4 of a, the 46 centred, DBL alike: the 56 is inset 5.
    large = rim_of(56, 42, 59, inset=5)
    small = rim_of(46, 34.5, 59 * 46 / 56)
    thick = lens(-9.5, rim=large).thickest_mm
    assert thick - lens(-9.5, rim=small).thickest_mm == pytest.approx(5.5, abs=0.5)
    assert thick - lens(-9.5, rim=large, index=1.735).thickest_mm == pytest.approx(2.5, abs=0.3)


def test_a_childs_plus_lens_is_far_thinner_made_to_shape_than_cut_from_a_blank() -> None:
    # facts of the trade (common practice, rough): +6.25, 42 mm eye, polycarbonate: 4.3 mm made to shape, 6.9 mm cut
    # from a 65 mm blank. Assumed: front +9, ED 44, inset 2.5, edge 1.0 mm.
    shape = lens(
        6.25,
        rim=rim_of(42, 34, 44, inset=2.5),
        index=1.586,
        front_power_d=9.0,
        least_centre_mm=1.5,
        blank_mm=[np.nan, 65.0],
    )
    assert shape.centre_mm[0] == pytest.approx(4.3, abs=0.25)
    assert shape.centre_mm[1] == pytest.approx(6.9, abs=0.25)


def test_a_blank_makes_no_difference_to_a_minus_lens() -> None:
    shape = lens(-4.0, rim=rim_of(50, 36, inset=3), blank_mm=[np.nan, 70.0])
    assert shape.centre_mm[0] == shape.centre_mm[1] == 1.3


def test_a_given_front_and_centre_are_honoured_and_marked() -> None:
    shape = lens([3.0, -3.0], rim=rim_of(50, 36), front_power_d=[6.0, 2.0], centre_mm=[2.0, 1.0])
    np.testing.assert_array_equal(shape.centre_mm, [2.0, 1.0])
    np.testing.assert_array_equal(shape.front_power_d, [6.0, 2.0])
    np.testing.assert_array_equal(shape.below_least_centre, [False, True])
    np.testing.assert_array_equal(shape.below_least_edge, [True, False])
    assert shape.rule_centre_mm[0] > 2.0
    assert not shape.refusal.any()


def test_one_bad_option_spoils_none_of_the_others() -> None:
    # front +20 of index 1.5 is a sphere of 25 mm radius and cannot reach a rim 28 mm away; a +6 with a 0.5 mm centre
    # has no edge; -30 of index 1.5 behind a front of 10 bends the back to 12.5 mm; each by hand
    rim = rim_of(56, 56, 56)
    shape = lens(
        [2.0, 2.0, 6.0, -30.0, -3.0],
        rim=rim,
        index=1.5,
        front_power_d=[6.0, 20.0, 8.0, 10.0, 3.0],
        centre_mm=[np.nan, np.nan, 0.5, np.nan, np.nan],
    )
    assert list(shape.refusal) == [
        Refusal.NONE, Refusal.FRONT_SURFACE, Refusal.TOO_THIN, Refusal.BACK_SURFACE, Refusal.NONE,
    ]  # fmt: skip
    assert shape.rule_centre_mm[2] > 4.0  # the way out
    alone = lens(-3.0, rim=rim, index=1.5, front_power_d=3.0)
    np.testing.assert_array_equal(shape.edge_mm[4], alone.edge_mm)


def test_a_lens_that_no_centre_serves_is_refused_as_too_thick() -> None:
    shape = lens(12.0, rim=rim_of(50, 50, 50, inset=0), index=1.5, prism_d=(80.0, 0.0), front_power_d=8.0)
    assert shape.refusal == Refusal.TOO_THICK
    assert shape.centre_mm == THICKEST_CENTRE_MM


def test_options_and_eyes_broadcast_as_if_computed_one_by_one() -> None:
    rim = centred_rim(box_rim(52.0, b_mm=38.0, ed_mm=55.0), optical_centre_mm=[[3.5, 1.0], [4.0, 0.5]])
    index = np.array([1.498, 1.598, 1.735])
    batch = lens([-4.25, 5.0], cylinder=[-1.0, -0.5], axis=[175, 10], eye=[0, 1], rim=rim, index=index[:, None])
    assert batch.edge_mm.shape == (3, 2, RIM_ANGLES)
    one = lens(
        5.0, cylinder=-0.5, axis=10, eye=1, index=1.735,
        rim=centred_rim(box_rim(52.0, b_mm=38.0, ed_mm=55.0), optical_centre_mm=(4.0, 0.5)),
    )  # fmt: skip
    np.testing.assert_allclose(batch.edge_mm[2, 1], one.edge_mm, atol=1e-8)
