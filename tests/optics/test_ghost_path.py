"""Ghost paths against published figures, closed forms and an exact ray trace written here.

The trace knows nothing of matrices: real circles, the vector form of Snell's law, mirror reflection, in a plane. Rays
stay near the axis, where it must agree with the paraxial module; offsets, tilts and prism are put in as real geometry.
"""

import dataclasses
from dataclasses import dataclass

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from numpy.typing import NDArray

from advisor.optics.ghost_image import direction_seen
from advisor.optics.ghost_inputs import LensOnFace, Scene, Wearer
from advisor.optics.ghost_path import (
    MAX_MAGNIFICATION,
    MAX_VERGENCE_D,
    PATHS,
    ghost_images,
    held_quotient,
    oblique_mirror_power,
    path_image,
    spread_over_lens,
    thin_ghost_power,
    trace_path,
)
from advisor.optics.ghost_place import place_ghosts
from advisor.optics.lens_section import LensSection

Floats = NDArray[np.float64]


def back_power(back_vertex_power_d: float, *, front_power_d: float, index: float, thickness_mm: float) -> float:
    return back_vertex_power_d - front_power_d / (1.0 - thickness_mm * 1e-3 / index * front_power_d)


def section(
    front_power_d: float | list[float],
    back_power_d: float | list[float],
    *,
    index: float = 1.5,
    thickness_mm: float = 2.0,
    vertex_mm: float = 12.0,
) -> LensSection:
    pair = np.ones(2)
    return LensSection(
        front_curvature_per_mm=np.asarray(front_power_d) * pair / (index - 1.0) * 1e-3,
        back_curvature_per_mm=-np.asarray(back_power_d) * pair / (index - 1.0) * 1e-3,
        index=np.array(index),
        thickness_mm=np.array(thickness_mm),
        vertex_mm=np.array(vertex_mm),
    )


# --- published values -------------------------------------------------------------------------------------------


def test_two_inner_reflections_leave_at_the_vergence_another_program_traced() -> None:
    # PyPI optiland 0.6.3, traced with mirror surfaces: -24.062323 D
    image = path_image(section(6.0, -10.0), path="ahead-inner", distance_m=np.inf)
    assert image.vergence_d == pytest.approx(-24.062323, abs=5e-7)


@pytest.mark.parametrize(
    ("path", "vergence_d"), [("ahead-inner", -25.27), ("behind-back", 32.09), ("behind-front", 8.39)]
)
def test_minus_four_sends_ghosts_where_matrices_and_an_exact_trace_put_them(path: str, vergence_d: float) -> None:
    # -4.00, n 1.5, F1 +4, t 2 mm: computed twice, by matrices and by an exact trace
    lens = section(4.0, back_power(-4.0, front_power_d=4.0, index=1.5, thickness_mm=2.0))
    assert path_image(lens, path=path, distance_m=np.inf).vergence_d == pytest.approx(vergence_d, abs=5e-3)


@pytest.mark.parametrize(
    ("power_d", "index", "front_d", "thick_d", "thin_d"), [(-0.5, 1.498, 5.75, -2.44, -3.51), (0.0, 1.5, 6.0, 0.95, 0)]
)
def test_the_thin_form_is_too_crude_for_weak_lenses(
    power_d: float, index: float, front_d: float, thick_d: float, thin_d: float
) -> None:
    # worked twice: matrices and exact trace; thin figures by F (3n-1)/(n-1)
    back_d = back_power(power_d, front_power_d=front_d, index=index, thickness_mm=2.0)
    image = path_image(section(front_d, back_d, index=index), path="ahead-inner", distance_m=np.inf)
    assert image.vergence_d == pytest.approx(thick_d, abs=5e-3)
    thin = thin_ghost_power(front_d, back_power_d=power_d - front_d, index=index, path="ahead-inner")
    assert thin == pytest.approx(thin_d, abs=5e-3)


@given(
    front=st.floats(-5, 12),
    back=st.floats(-20, 5),
    index=st.floats(1.45, 1.9),
    path=st.sampled_from(["ahead-inner", "behind-back", "behind-front"]),
)
def test_without_thickness_the_trace_gives_the_thin_forms(front: float, back: float, index: float, path: str) -> None:
    image = path_image(section(front, back, index=index, thickness_mm=0.0), path=path, distance_m=np.inf)
    thin = thin_ghost_power(front, back_power_d=back, index=index, path=path)
    assert image.vergence_d == pytest.approx(float(thin), abs=1e-9)


# --- exact trace ------------------------------------------------------------------------------------------------


@dataclass
class Circle:
    """A surface in the plane (z, y): the arc about ``centre`` that passes through ``vertex``."""

    vertex: Floats
    centre: Floats

    @classmethod
    def at(cls, z: float, curvature: float, *, tilt: float = 0.0, offset: float = 0.0) -> "Circle":
        """Centre of curvature on the eye side (+z) for a positive curvature; dz/dy = ``tilt`` at the vertex."""
        radius = 1.0 / curvature
        vertex = np.array([z, offset])
        return cls(vertex, vertex + radius * np.array([np.cos(tilt), -np.sin(tilt)]))

    def turned(self, pivot: Floats, angle: float) -> "Circle":
        c, s = np.cos(angle), np.sin(angle)
        turn = np.array([[c, -s], [s, c]])
        return Circle(pivot + turn @ (self.vertex - pivot), pivot + turn @ (self.centre - pivot))

    def meet(self, point: Floats, direction: Floats) -> tuple[Floats, Floats]:
        """Return the point nearest the vertex where the line meets the arc, and the normal against the ray."""
        radius2 = np.sum((self.vertex - self.centre) ** 2)
        towards = point - self.centre
        b, c = direction @ towards, towards @ towards - radius2
        roots = -b + np.array([-1.0, 1.0]) * np.sqrt(b * b - c)
        hits = point + roots[:, None] * direction
        hit = hits[np.argmin(np.sum((hits - self.vertex) ** 2, axis=1))]
        normal = (hit - self.centre) / np.sqrt(radius2)
        return hit, normal if normal @ direction < 0.0 else -normal


def refracted(direction: Floats, normal: Floats, ratio: float) -> Floats:
    cos_in = -(normal @ direction)
    return ratio * direction + (ratio * cos_in - np.sqrt(1.0 - ratio**2 * (1.0 - cos_in**2))) * normal


@dataclass
class Bench:
    """Lens and cornea in the plane; lengths in mm, the back vertex at the origin."""

    index: float
    front: Circle
    back: Circle
    cornea: Circle

    def turned(self, angle: float) -> "Bench":
        """Turn the lens, not the eye, about the back vertex."""
        origin = np.zeros(2)
        return Bench(self.index, self.front.turned(origin, angle), self.back.turned(origin, angle), self.cornea)

    def trace(self, path: str, point: Floats, direction: Floats) -> tuple[Floats, Floats]:
        n, front, back = self.index, self.front, self.back
        through: list[tuple[Circle, float | None]] = [(front, 1.0 / n), (back, n)]
        off_front: list[tuple[Circle, float | None]] = [(back, 1.0 / n), (front, None), (back, n)]
        events: dict[str, list[tuple[Circle, float | None]]] = {
            "direct": through,
            "ahead-inner": [(front, 1.0 / n), (back, None), (front, None), (back, n)],
            "behind-back": [(back, None)],
            "behind-front": off_front,
            "cornea-back": [*through, (self.cornea, None), (back, None)],
            "cornea-front": [*through, (self.cornea, None), *off_front],
        }
        for surface, ratio in events[path]:
            point, normal = surface.meet(point, direction)
            if ratio is None:
                direction = direction - 2.0 * (direction @ normal) * normal
            else:
                direction = refracted(direction, normal, ratio)
        return point, direction

    def leaving(self, path: str, height: float, slope: float) -> tuple[float, float]:
        """Return height in the plane of the back vertex and slope dy/dz of a ray that starts off the lens.

        ``height`` and ``slope`` (along the travel) are those in the plane of the first vertex met.
        """
        sense = -1.0 if path.startswith("behind") else 1.0
        first = self.back if sense < 0.0 else self.front
        ray = np.array([sense, slope]) / np.hypot(1.0, slope)
        start = np.array([first.vertex[0], height]) - 50.0 * ray
        point, direction = self.trace(path, start, ray)
        out = direction[1] / direction[0]
        return point[1] - point[0] * out, out


@dataclass
class Case:
    k1: float
    k2: float
    index: float
    thickness: float
    vertex: float
    distance: float
    lens: LensSection

    def bench(self, *, back_tilt: float = 0.0, cornea_offset: float = 0.0) -> Bench:
        cornea = Circle.at(self.vertex, 1.0 / 7.8, offset=cornea_offset)
        return Bench(self.index, Circle.at(-self.thickness, self.k1), Circle.at(0.0, self.k2, tilt=back_tilt), cornea)

    @property
    def pupil(self) -> float:
        return self.vertex + 3.0


def random_case(seed: int, meridian: int = 0) -> Case:
    """A lens with two unlike meridians, of which the trace follows one; far and near sources in turn."""
    rng = np.random.default_rng(seed)
    index, thickness, vertex = rng.uniform(1.49, 1.75), rng.uniform(1.0, 6.0), rng.uniform(9.0, 16.0)
    front = rng.uniform(0.5, 9.0, 2) * np.where(rng.random(2) < 0.15, -1.0, 1.0)
    power = rng.uniform(-10.0, 6.0, 2)
    back = [
        back_power(p, front_power_d=f, index=index, thickness_mm=thickness) for p, f in zip(power, front, strict=True)
    ]
    lens = section(list(front), back, index=index, thickness_mm=thickness, vertex_mm=vertex)
    k1, k2 = lens.front_curvature_per_mm[meridian], lens.back_curvature_per_mm[meridian]
    distance = np.inf if seed % 2 else rng.uniform(0.15, 5.0)
    return Case(float(k1), float(k2), index, thickness, vertex, distance, lens)


TINY_MM = 1e-3


@pytest.mark.parametrize("meridian", [0, 1])
@pytest.mark.parametrize("seed", range(24))
@pytest.mark.parametrize("path", ["direct", *PATHS])
def test_vergence_equals_an_exact_trace_near_the_axis(path: str, seed: int, meridian: int) -> None:
    case = random_case(seed, meridian)
    height, slope = case.bench().leaving(path, TINY_MM, TINY_MM / (case.distance * 1e3))
    image = path_image(case.lens, path=path, distance_m=case.distance)
    # the trace's own error: aberration ~ (h k)^2 and rounding, both below 1e-6 of the bend of a single surface
    assert image.vergence_d[meridian] == pytest.approx(-slope / height * 1e3, rel=1e-5, abs=1e-4)


def direction_through_pupil(bench: Bench, path: str, *, case: Case, seen: float, pupil_offset: float) -> float:
    """Return the direction (positive up) in which the exact trace sees a source that stands ``seen`` above the axis.

    The source is a point at ``case.distance`` from the first vertex met; the ray through the pupil's middle is found
    by the secant rule.
    """
    distance = case.distance * 1e3

    def miss(height: float) -> tuple[float, float]:
        at_back, out = bench.leaving(path, height, -np.tan(seen) + height / distance)
        return at_back + case.pupil * out - pupil_offset, out

    a, b = 0.0, 0.01
    miss_a, miss_b = miss(a)[0], miss(b)[0]
    for _ in range(4):
        if miss_a == miss_b:
            break
        a, b, miss_a = b, b - miss_b * (b - a) / (miss_b - miss_a), miss_b
        miss_b = miss(b)[0]
    return -miss(b)[1]


@pytest.mark.parametrize("seed", range(24))
@pytest.mark.parametrize("path", ["direct", *PATHS])
def test_direction_seen_equals_an_exact_trace(path: str, seed: int) -> None:
    """Field angle, prism on the back, displaced pupil and displaced cornea, singly and together."""
    case = random_case(seed)
    rng = np.random.default_rng(1000 + seed)
    small = 1e-4
    angle, prism, pupil, cornea = small * rng.uniform(0.3, 1.0, 4) * rng.choice([-1.0, 1.0], 4)
    back_tilt = prism / (case.index - 1.0)
    # lengths: 1e-4 rad at a lens's working distances of 30 mm
    pupil, cornea = pupil * 30.0, cornea * 30.0
    for parts in ([1, 0, 0, 0], [0, 1, 0, 0], [0, 0, 1, 0], [0, 0, 0, 1], [1, 1, 1, 1]):
        a, t, p, c = np.array([angle, back_tilt, pupil, cornea]) * parts
        exact = direction_through_pupil(
            case.bench(back_tilt=t, cornea_offset=c), path, case=case, seen=a, pupil_offset=p
        )
        image = path_image(case.lens, path=path, distance_m=case.distance, back_tilt=t, cornea_tilt=-c / 7.8)
        model = direction_seen(image, field_angle_rad=[a, a], pupil_offset_mm=[p, p])[0]
        # second-order terms are (1e-4)^2 times powers of tens of dioptres and magnifications
        assert model == pytest.approx(exact, rel=2e-3, abs=2e-7 * max(1.0, abs(image.magnification[0]) ** 2))


@given(index=st.floats(1.45, 1.9), power=st.floats(-4, 4), prism=st.floats(-8, 8), front=st.floats(0, 9))
def test_prism_parts_the_ghost_by_the_thin_rule(index: float, power: float, prism: float, front: float) -> None:
    # thin prism: P [((3n-1)/(n-1)) M_ghost - M_direct] towards the apex, that is away from the base
    lens = section(front, power - front, index=index, thickness_mm=0.0)
    tilt = prism / 100.0 / (index - 1.0)
    inner = path_image(lens, path="ahead-inner", distance_m=np.inf, back_tilt=tilt)
    direct = path_image(lens, path="direct", distance_m=np.inf, back_tilt=tilt)
    if inner.pupil_height[0] < 1e-2:
        return
    factor = (3.0 * index - 1.0) / (index - 1.0)
    thin = -prism / 100.0 * (factor * inner.magnification - direct.magnification)
    assert inner.shift_rad - direct.shift_rad == pytest.approx(thin, rel=1e-9, abs=1e-12)


def scene(**changes: object) -> Scene:
    values: dict[str, object] = {
        "extended": False,
        "behind": False,
        "intensity_cd": 350.0,
        "lamps": 2.0,
        "spacing_m": 1.3,
        "luminance_cd_m2": 0.0,
        "size_deg": [0.1, 0.1],
        "distance_m": 50.0,
        "direction_deg": 4.0,
        "azimuth_deg": 0.0,
        "incidence_deg": 35.0,
        "fixation_m": np.inf,
        "background_cd_m2": 0.1,
        "adapting_cd_m2": 0.1,
        "adapting_field_deg": 60.0,
        "exposure_s": 2.0,
    }
    values.update(changes)
    return Scene(**values)  # type: ignore[arg-type]  # the fields convert what they are given


WEARER = Wearer(np.array(45.0), np.array(0.5), np.array(True), np.array(1.0))


@pytest.mark.parametrize("seed", range(1, 24, 2))
@pytest.mark.parametrize("path", ["ahead-inner", "cornea-back", "cornea-front"])
def test_a_tilted_decentred_lens_parts_ghost_and_source_as_the_exact_trace_does(path: str, seed: int) -> None:
    """The lens is really turned about its back vertex before an eye that stays; small angles, so that it is exact."""
    case = random_case(seed)
    rng = np.random.default_rng(2000 + seed)
    up_deg, tilt_deg, offset = 1e-2 * rng.uniform(0.3, 1.0, 3)
    offset = float(offset) * rng.choice([-1.0, 1.0])
    # light goes to +z and y is up: lower rim towards the eye turns the axis, seen from the lens forwards, downwards
    bench = case.bench(cornea_offset=offset).turned(np.deg2rad(tilt_deg))
    case = dataclasses.replace(case, distance=np.inf)

    def seen(which: str) -> float:
        return direction_through_pupil(bench, which, case=case, seen=np.deg2rad(up_deg), pupil_offset=offset)

    lens = LensOnFace(
        case.lens,
        eye=np.array(0),
        meridian_deg=np.array(90.0),
        tilt_deg=np.array(tilt_deg),
        wrap_deg=np.array(0.0),
        pupil_offset_mm=np.array([0.0, offset]),
        prism_base_d=np.zeros(2),
    )
    above = scene(direction_deg=up_deg, azimuth_deg=90.0, distance_m=np.inf)
    place = place_ghosts(lens, scene=above, wearer=WEARER)
    model = place.separation_rad[PATHS.index(path)]
    assert model[0] == pytest.approx(seen(path) - seen("direct"), rel=2e-3, abs=1e-7)
    assert model[1] == pytest.approx(0.0, abs=1e-12)


@pytest.mark.parametrize(
    ("power_d", "front_d", "thickness_mm"), [(-0.5, 5.75, 2.0), (-4.0, 4.0, 2.0), (-1.0, 5.0, 1.5), (2.0, 7.0, 4.0)]
)
def test_at_real_angles_the_paraxial_separation_is_near_the_exact_one(
    power_d: float, front_d: float, thickness_mm: float
) -> None:
    """A lamp 4 degrees up, tilt 8 degrees: within 8 % of the exact trace (tilt as angle alone: 40 % and more off)."""
    back_d = back_power(power_d, front_power_d=front_d, index=1.5, thickness_mm=thickness_mm)
    on_face = LensOnFace(
        section(front_d, back_d, thickness_mm=thickness_mm),
        eye=np.array(0),
        meridian_deg=np.array(90.0),
        tilt_deg=np.array(8.0),
        wrap_deg=np.array(0.0),
        pupil_offset_mm=np.zeros(2),
        prism_base_d=np.zeros(2),
    )
    k1, k2 = on_face.section.front_curvature_per_mm[0], on_face.section.back_curvature_per_mm[0]
    case = Case(float(k1), float(k2), 1.5, thickness_mm, 12.0, np.inf, on_face.section)
    bench = case.bench().turned(np.deg2rad(8.0))
    exact = [
        direction_through_pupil(bench, path, case=case, seen=np.deg2rad(4.0), pupil_offset=0.0)
        for path in ("ahead-inner", "direct")
    ]
    up = scene(direction_deg=4.0, azimuth_deg=90.0, distance_m=np.inf)
    model = place_ghosts(on_face, scene=up, wearer=WEARER).separation_rad[0, 0]
    assert model == pytest.approx(exact[0] - exact[1], rel=0.08)


def test_tilting_a_thin_lens_leaves_the_inner_ghost_on_a_source_straight_ahead() -> None:
    """A ray through the middle of a thin tilted lens meets parallel faces: ghost and source coincide."""
    for tilt, wrap in ((10.0, 0.0), (0.0, 12.0)):
        lens = LensOnFace(
            section(4.0, -6.0, thickness_mm=0.0),
            eye=np.array(1),
            meridian_deg=np.array(30.0),
            tilt_deg=np.array(tilt),
            wrap_deg=np.array(wrap),
            pupil_offset_mm=np.zeros(2),
            prism_base_d=np.zeros(2),
        )
        ahead = scene(direction_deg=0.0, distance_m=np.inf)
        place = place_ghosts(lens, scene=ahead, wearer=WEARER)
        assert place.separation_rad[0] == pytest.approx(0.0, abs=1e-12)


# --- oblique mirror ---------------------------------------------------------------------------------------------


@pytest.mark.parametrize("turn_deg", [0.0, 25.0, 90.0, 140.0])
@pytest.mark.parametrize("incidence_deg", [0.0, 35.0, 60.0])
def test_oblique_mirror_powers_equal_those_of_a_traced_beam(incidence_deg: float, turn_deg: float) -> None:
    """Parallel light on z = -(k1 u^2 + k2 v^2)/2, reflected; slopes across the reflected beam give its vergences."""
    k = np.array([14.0, 9.0])
    i, turn = np.deg2rad(incidence_deg), np.deg2rad(turn_deg)
    # plane of incidence x, z; first meridian u is `turn` from x
    u, v = np.array([np.cos(turn), np.sin(turn), 0.0]), np.array([-np.sin(turn), np.cos(turn), 0.0])
    shape = k[0] * np.outer(u, u) + k[1] * np.outer(v, v)
    come = np.array([np.sin(i), 0.0, np.cos(i)])  # travelling to +z, towards a mirror hollow to the light
    gone = np.array([np.sin(i), 0.0, -np.cos(i)])
    e1, e2 = np.array([np.cos(i), 0.0, np.sin(i)]), np.array([0.0, 1.0, 0.0])

    def reflected(place: Floats) -> Floats:
        normal = np.array([0.0, 0.0, -1.0]) - shape @ place  # gradient of -(z + place.shape.place/2)
        normal /= np.linalg.norm(normal)
        out: Floats = come - 2.0 * (come @ normal) * normal
        return out

    h = 1e-7
    columns = []
    for step in (np.array([h / np.cos(i), 0.0, 0.0]), np.array([0.0, h, 0.0])):
        change = (reflected(step) - reflected(-step)) / (2.0 * h)
        columns.append([change @ e1, change @ e2])
    powers = np.sort(-np.linalg.eigvalsh((np.array(columns) + np.array(columns).T) / 2.0))
    assert np.allclose(gone, reflected(np.zeros(3)))
    model = oblique_mirror_power(k * 1e-3, incidence_deg=incidence_deg, meridian_from_plane_deg=turn_deg)
    assert np.sort(model) == pytest.approx(powers, rel=1e-6)


def test_a_spherical_mirror_has_twice_k_over_cos_and_twice_k_times_cos() -> None:
    # Coddington's equations, closed form
    model = oblique_mirror_power([0.010, 0.010], incidence_deg=60.0)
    assert model == pytest.approx([40.0, 10.0])
    across_first = oblique_mirror_power([0.010, 0.010], incidence_deg=60.0, meridian_from_plane_deg=90.0)
    assert across_first == pytest.approx([10.0, 40.0])
    assert oblique_mirror_power([0.014, 0.009], incidence_deg=0.0) == pytest.approx([28.0, 18.0])


# --- edges ------------------------------------------------------------------------------------------------------


def test_a_quotient_never_passes_its_limit() -> None:
    values = held_quotient([1.0, -1.0, 1.0, 1.0, 0.0, 3.0], [0.0, 0.0, -1e-300, 1e-9, 0.0, 2.0], limit=1e3)
    assert values == pytest.approx([1e3, -1e3, -1e3, 1e3, 0.0, 1.5])


@given(
    front=st.floats(-30, 30),
    power=st.floats(-30, 30),
    index=st.floats(1.4, 2.0),
    thickness=st.floats(0, 20),
    vertex=st.floats(0, 40),
    distance=st.one_of(st.just(float("inf")), st.floats(0.01, 1e6)),
    incidence=st.floats(0, 89),
)
def test_nothing_is_infinite_or_missing(
    front: float, power: float, index: float, thickness: float, vertex: float, distance: float, incidence: float
) -> None:
    lens = section(front, power - front, index=index, thickness_mm=thickness, vertex_mm=vertex)
    image = ghost_images(lens, distance_m=distance, incidence_deg=incidence, back_tilt=0.05, cornea_tilt=0.1)
    for name, value in vars(image).items():
        assert np.isfinite(value).all(), name
    assert np.abs(image.vergence_d).max() <= MAX_VERGENCE_D
    assert np.abs(image.magnification).max() <= MAX_MAGNIFICATION * (1.0 + 1e-12)


def test_a_strong_plus_lens_spreads_its_inner_ghost_over_the_lens() -> None:
    # thin +10 at 15 mm from the pupil: ghost power 70 D, y + d w = 1 - 0.015 x 70 = -0.05, at most 0.3
    image = path_image(section(10.0, 0.0, thickness_mm=0.0), path="ahead-inner", distance_m=np.inf)
    assert image.pupil_height == pytest.approx(-0.05)
    assert spread_over_lens(image, field_angle_rad=np.zeros(2))
    # thin +5: y + d w = 1 - 0.015 x 35 = 0.475, M 2.105; the direction passes 30 degrees at 14.25
    image = path_image(section(5.0, 0.0, thickness_mm=0.0), path="ahead-inner", distance_m=np.inf)
    assert not spread_over_lens(image, field_angle_rad=np.deg2rad([14.2, 0.0]))
    assert spread_over_lens(image, field_angle_rad=np.deg2rad([14.3, 0.0]))


@pytest.mark.parametrize(
    ("field", "value"),
    [("index", 1.0), ("thickness_mm", -1.0), ("vertex_mm", -0.1), ("front_curvature_per_mm", [np.nan, 0.0])],
)
def test_a_lens_outside_its_range_is_refused_by_name(field: str, value: float | list[float]) -> None:
    with pytest.raises(ValueError, match=field):
        dataclasses.replace(section(4.0, -6.0), **{field: np.asarray(value)})


def test_bad_calls_are_refused_by_name() -> None:
    lens = section(4.0, -6.0)
    with pytest.raises(ValueError, match="path"):
        trace_path(lens, path="sideways", height=1.0, slope=0.0)
    with pytest.raises(ValueError, match="distance_m"):
        path_image(lens, path="direct", distance_m=0.0)
    with pytest.raises(ValueError, match="mirror_power_d"):
        path_image(lens, path="direct", distance_m=1.0, mirror_power_d=[1.0, 1.0])
    with pytest.raises(ValueError, match="incidence_deg"):
        ghost_images(lens, distance_m=1.0, incidence_deg=90.0)
    with pytest.raises(ValueError, match="path"):
        thin_ghost_power(4.0, back_power_d=-6.0, index=1.5, path="cornea-back")
    with pytest.raises(ValueError, match="two principal meridians"):
        LensSection(np.zeros(3), np.zeros(2), np.array(1.5), np.array(2.0), np.array(12.0))
