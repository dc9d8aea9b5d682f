"""Size, brightness and overlap of ghosts against a Monte Carlo of rays and closed forms."""

import numpy as np
import pytest
from numpy.typing import NDArray

from advisor.optics.ghost_image import (
    along_meridians,
    bare_blur,
    extended_source_luminance,
    extent_along_meridians,
    lamps_overlapping,
    patch_extent,
    small_source_luminance,
)
from advisor.optics.ghost_path import path_image
from advisor.optics.lens_section import LensSection

Floats = NDArray[np.float64]

INDEX, THICKNESS_MM, PUPIL_AT_MM = 1.5, 2.0, 15.0


def shape_of(curvature: Floats, xy: Floats) -> Floats:
    """Sag of z = (k1 x^2 + k2 y^2)/2."""
    return np.asarray((curvature * xy**2).sum(axis=-1) / 2.0)


def on_surface(point: Floats, ray: Floats, curvature: Floats, z: float) -> tuple[Floats, Floats]:
    """Carry rays to the surface by Newton's rule; return place and normal towards -z."""
    for _ in range(5):
        gap = point[:, 2] - z - shape_of(curvature, point[:, :2])
        slope = ray[:, 2] - (curvature * point[:, :2] * ray[:, :2]).sum(axis=-1)
        point = point - (gap / slope)[:, None] * ray
    normal = np.concatenate([curvature * point[:, :2], -np.ones((len(point), 1))], axis=1)
    return point, normal / np.linalg.norm(normal, axis=1, keepdims=True)


def refracted(ray: Floats, normal: Floats, ratio: float) -> Floats:
    cos_in = -(normal * ray).sum(axis=-1)
    cos_out = np.sqrt(1.0 - ratio**2 * (1.0 - cos_in**2))
    return np.asarray(ratio * ray + (ratio * cos_in - cos_out)[:, None] * normal)


def reflected(ray: Floats, normal: Floats) -> Floats:
    return np.asarray(ray - 2.0 * (ray * normal).sum(axis=-1, keepdims=True) * normal)


def retinal_rays(
    section: LensSection, *, pupil_mm: float, focus_d: Floats, size_rad: float, rays: int, half_width_mm: float
) -> tuple[Floats, float]:
    """Send rays of a distant disc of 1 lx by the path ahead-inner into an eye; return directions seen and flux (lm).

    The eye holds the vergence ``focus_d`` in focus: all rays of that vergence go to one place on the retina.
    """
    rng = np.random.default_rng(7)
    start = rng.uniform(-half_width_mm, half_width_mm, (rays, 2))
    radius, turn = size_rad / 2.0 * np.sqrt(rng.random(rays)), rng.uniform(0, 2 * np.pi, rays)
    slopes = np.stack([radius * np.cos(turn), radius * np.sin(turn)], axis=-1)
    ray = np.concatenate([slopes, np.ones((rays, 1))], axis=1)
    ray /= np.linalg.norm(ray, axis=1, keepdims=True)
    k1, k2 = section.front_curvature_per_mm, section.back_curvature_per_mm
    point = np.concatenate([start, np.full((rays, 1), -THICKNESS_MM)], axis=1)
    point, normal = on_surface(point, ray, k1, -THICKNESS_MM)
    ray = refracted(ray, normal, 1.0 / INDEX)
    point, normal = on_surface(point, ray, k2, 0.0)
    ray = reflected(ray, normal)
    point, normal = on_surface(point, ray, k1, -THICKNESS_MM)
    ray = reflected(ray, normal)
    point, normal = on_surface(point, ray, k2, 0.0)
    ray = refracted(ray, normal, INDEX)
    at = point[:, :2] + (PUPIL_AT_MM - point[:, 2:]) * ray[:, :2] / ray[:, 2:]
    enters = np.hypot(at[:, 0], at[:, 1]) < pupil_mm / 2.0
    seen = ray[:, :2] / ray[:, 2:] + focus_d * at * 1e-3
    flux = (2.0 * half_width_mm * 1e-3) ** 2 * enters.mean()
    return np.asarray(seen[enters]), float(flux)


def lens(front_d: float, power_d: tuple[float, float]) -> LensSection:
    front = np.full(2, front_d)
    back = np.array(power_d) - front / (1.0 - THICKNESS_MM * 1e-3 / INDEX * front)
    return LensSection(
        front / (INDEX - 1.0) * 1e-3,
        -back / (INDEX - 1.0) * 1e-3,
        np.array(INDEX),
        np.array(THICKNESS_MM),
        np.array(PUPIL_AT_MM - 3.0),
    )


@pytest.mark.parametrize("power_d", [(-0.5, -0.5), (-4.0, -4.0), (1.0, -1.5)])
@pytest.mark.parametrize("size_deg", [0.0, 0.6, 4.0])
def test_brightness_and_size_equal_a_monte_carlo_of_rays(power_d: tuple[float, float], size_deg: float) -> None:
    """The model's patch is the uniform ellipse with the flux and the second moments of the rays in the eye."""
    section, pupil_mm, size_rad = lens(5.0, power_d), 4.0, np.deg2rad(size_deg)
    image = path_image(section, path="ahead-inner", distance_m=np.inf)
    focus_d = path_image(section, path="direct", distance_m=np.inf).pupil_vergence_d
    seen, flux = retinal_rays(
        section, pupil_mm=pupil_mm, focus_d=focus_d, size_rad=size_rad, rays=120_000, half_width_mm=3.0
    )
    blur = bare_blur(image, pupil_mm=pupil_mm, focus_d=focus_d)
    size = np.abs(image.magnification) * patch_extent(blur, size_rad=size_rad)
    # a uniform ellipse has a standard deviation of a quarter of its extent; 1 % covers aberration and chance
    assert size == pytest.approx(4.0 * seen.std(axis=0), rel=0.01)
    pupil_area = np.pi / 4.0 * (pupil_mm * 1e-3) ** 2
    traced = flux / pupil_area / (np.pi / 4.0 * np.prod(4.0 * seen.std(axis=0)))
    model = small_source_luminance(1.0, strength=1.0, blur_rad=blur, size_rad=[size_rad, size_rad])
    assert model == pytest.approx(traced, rel=0.025)


@pytest.mark.parametrize("size_deg", [0.0, 4.0])
def test_middle_of_a_patch_is_as_bright_as_its_larger_part_alone(size_deg: float) -> None:
    """Two discs folded: the middle is that of the larger alone, so the model is below it by 1 + (small/large)^2."""
    section, pupil_mm, size_rad = lens(5.0, (-0.5, -0.5)), 4.0, np.deg2rad(size_deg)
    image = path_image(section, path="ahead-inner", distance_m=np.inf)
    focus_d = path_image(section, path="direct", distance_m=np.inf).pupil_vergence_d
    seen, flux = retinal_rays(
        section, pupil_mm=pupil_mm, focus_d=focus_d, size_rad=size_rad, rays=120_000, half_width_mm=3.0
    )
    blur = bare_blur(image, pupil_mm=pupil_mm, focus_d=focus_d)
    size = np.abs(image.magnification) * patch_extent(blur, size_rad=size_rad)
    inner = np.hypot(seen[:, 0], seen[:, 1]) < size[0] / 4.0
    pupil_area = np.pi / 4.0 * (pupil_mm * 1e-3) ** 2
    middle = flux * inner.mean() / pupil_area / (np.pi / 4.0 * (size[0] / 2.0) ** 2)
    model = small_source_luminance(1.0, strength=1.0, blur_rad=blur, size_rad=[size_rad, size_rad])
    small, large = sorted([float(blur[0]), float(size_rad)])
    # 10 000 rays in the middle: chance 1 %, aberration 1 %
    assert middle / model == pytest.approx(1.0 + (small / large) ** 2, rel=0.03)


def test_a_ghost_in_focus_has_the_luminance_of_its_source_times_the_strength() -> None:
    # brightness is conserved: closed form. Lamp of 350 cd and 10 cm at 50 m: 350 / (pi/4 0.1^2) cd/m2
    size = np.full(2, 0.1 / 50.0)
    lamp = small_source_luminance(350.0 / 2500.0, strength=1e-3, blur_rad=np.zeros(2), size_rad=size)
    assert lamp == pytest.approx(1e-3 * 350.0 / (np.pi / 4.0 * 0.01))
    assert extended_source_luminance(3000.0, strength=0.04, blur_rad=np.zeros(2), size_rad=size) == pytest.approx(120.0)


def test_an_extended_source_loses_what_its_blur_spreads() -> None:
    bright = extended_source_luminance(100.0, strength=0.5, blur_rad=[0.2, 0.05], size_rad=[0.1, 0.1])
    assert bright == pytest.approx(25.0)


@pytest.mark.parametrize(
    ("spacing_rad", "lamps", "count"),
    [(0.011, 2, 1), (0.009, 2, 2), (0.0, 2, 2), (0.004, 9, 3), (0.004, 2, 2), (0.0, 1, 1)],
)
def test_lamps_add_where_their_discs_overlap(spacing_rad: float, lamps: int, count: int) -> None:
    # discs of 0.01 rad side by side: neighbours nearer than 0.01 overlap; at 0.004 three discs share a place
    extent = np.full(2, 0.01)
    assert lamps_overlapping(extent, lamps=lamps, spacing_rad=spacing_rad, meridian_deg=33.0) == count


@pytest.mark.parametrize(("meridian_deg", "across"), [(0.0, 0.02), (90.0, 0.01), (45.0, 0.0126491)])
def test_overlap_counts_the_ellipse_along_the_row(meridian_deg: float, across: float) -> None:
    # diameter of an ellipse 0.02 x 0.01 along the row; at 45 degrees 1/sqrt((50^2 + 100^2)/2)
    near, far = lamps_overlapping(
        [0.02, 0.01], lamps=2.0, spacing_rad=[across * 0.999, across * 1.001], meridian_deg=meridian_deg
    )
    assert (near, far) == (2, 1)


def test_vectors_and_extents_turn_with_the_meridians() -> None:
    # up, seen along a meridian at 90 degrees: all along; along one at 30 degrees: sin 30 and cos 30
    assert along_meridians([0.0, 1.0], meridian_deg=90.0) == pytest.approx([1.0, 0.0])
    assert along_meridians([0.0, 1.0], meridian_deg=30.0) == pytest.approx([0.5, 0.75**0.5])
    assert extent_along_meridians([4.0, 1.0], meridian_deg=90.0) == pytest.approx([1.0, 4.0])
    assert extent_along_meridians([4.0, 4.0], meridian_deg=17.0) == pytest.approx([4.0, 4.0])
