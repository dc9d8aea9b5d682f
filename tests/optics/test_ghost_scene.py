"""Ghosts in scenes: one case worked by hand, identities, and ranges of every input."""

import dataclasses
import math
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.typing import ArrayLike

from advisor.optics.ghost_inputs import LensOnFace, Scene, Wearer
from advisor.optics.ghost_path import PATHS
from advisor.optics.ghost_place import place_ghosts
from advisor.optics.ghost_scene import Ghosts, see_ghosts
from advisor.optics.lens_section import LensSection
from advisor.optics.reflectance_limit import flat_strengths
from advisor.optics.visibility import VERDICTS

INNER, BACK, FRONT = (PATHS.index(path) for path in ("ahead-inner", "behind-back", "behind-front"))


def lens(
    power_d: ArrayLike = (-4.0, -4.0),
    *,
    front_d: float = 4.0,
    index: float = 1.5,
    thickness_mm: float = 2.0,
    **on_face: Any,
) -> LensOnFace:
    front = np.full(2, front_d)
    back = np.asarray(power_d) - front / (1.0 - thickness_mm * 1e-3 / index * front)
    section = LensSection(
        front / (index - 1.0) * 1e-3,
        -back / (index - 1.0) * 1e-3,
        np.array(index),
        np.array(thickness_mm),
        np.array(12.0),
    )
    values: dict[str, Any] = {
        "eye": 0,
        "meridian_deg": 0.0,
        "tilt_deg": 0.0,
        "wrap_deg": 0.0,
        "pupil_offset_mm": [0.0, 0.0],
        "prism_base_d": [0.0, 0.0],
    }
    values.update(on_face)
    return LensOnFace(section, **{name: np.asarray(value) for name, value in values.items()})


HEADLAMPS: dict[str, Any] = {
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
WINDOW_BEHIND: dict[str, Any] = {
    **HEADLAMPS,
    "extended": True,
    "behind": True,
    "luminance_cd_m2": 3000.0,
    "size_deg": [30.0, 20.0],
    "distance_m": 2.0,
    "fixation_m": 0.6,
    "background_cd_m2": 120.0,
    "adapting_cd_m2": 120.0,
}


def scene(base: dict[str, Any] = HEADLAMPS, **changes: Any) -> Scene:
    return Scene(**{name: np.asarray(value) for name, value in {**base, **changes}.items()})


def wearer(age_y: float = 45.0, *, pigment: float = 0.5, both_eyes: bool = True, pupil_scale: float = 1.0) -> Wearer:
    return Wearer(np.array(age_y), np.array(pigment), np.array(both_eyes), np.array(pupil_scale))


def seen(
    on_face: LensOnFace, where: Scene, who: Wearer | None = None, *, reflectance: ArrayLike = 0.04, tau: float = 1.0
) -> Ghosts:
    strengths, through = flat_strengths(reflectance, internal_transmittance=tau)
    return see_ghosts(on_face, scene=where, wearer=who or wearer(), strengths=strengths, transmittance=through)


def test_oncoming_headlamps_worked_by_hand_from_the_published_vergence() -> None:
    """-4.00, n 1.5, F1 +4, t 2 mm, 4 % a face; every step again from its formula, with plain numbers.

    The distant vergences start from the closed forms of a thick lens; 50 m is near enough to infinity to change
    the defocus by a few hundredths, so the lamp is put at 5000 m with its light scaled.
    """
    where = scene(distance_m=5000.0, intensity_cd=350.0 * 1e4, spacing_m=130.0)
    got = seen(lens(), where)

    through = 0.96**2 / (1.0 - 0.04**2)
    strength = 0.04**2
    d = 0.015
    # direct: shape factor of the front, then the back vertex power
    shape = 1.0 - 0.002 / 1.5 * 4.0
    direct_m = 1.0 / (shape * (1.0 + d * 4.0))
    # ghost: -25.2727 D at the back vertex (two methods); y there by walking a ray through the four bends
    y, w, step = 1.0, -4.0, 0.002 / 1.5
    f2 = -4.0 - 4.0 / shape
    y += step * w
    w -= -2.0 * 1.5 * (-f2 / 0.5) * y
    y += step * w
    w -= 2.0 * 1.5 * (4.0 / 0.5) * y
    y += step * w
    w -= f2 * y
    assert -w / y == pytest.approx(-25.27, abs=5e-3)
    ghost_m = 1.0 / (y + d * w)
    defocus = -w * ghost_m - (-4.0 / (1.0 + d * 4.0))
    separation = 4.0 * abs(ghost_m - direct_m)

    eye_lx = 2.0 * 350.0 / 2500.0 * through * direct_m**2
    flux = through * 0.1 * math.pi / 4.0 * 3600.0 + (180.0 / math.pi) ** 2 * eye_lx
    x = (flux / 846.0) ** 0.41
    standard = 7.75 - 5.75 * x / (x + 2.0)
    pupil = standard + (45.0 - 28.58) * (0.02132 - 0.009562 * standard)
    theta = pupil * 1e-3 * abs(defocus)
    lamp = math.radians(0.1) * ghost_m
    # both lamps overlap: blur in front of the lens far above their 0.026 rad
    assert theta / ghost_m > 1.3 / 50.0
    luminance = 2.0 * 350.0 / 2500.0 * strength * through * ghost_m**2 / (math.pi / 4.0 * (theta**2 + lamp**2))
    veil = eye_lx * (10.0 / separation**3 + (5.0 / separation**2 + 0.05 / separation) * (1 + 0.72**4) + 0.00125)
    background = through * 0.1 + veil

    assert got.pupil_mm[INNER] == pytest.approx(pupil, rel=1e-3)
    assert got.separation_deg[INNER] == pytest.approx(separation, rel=1e-3)
    assert got.relaxed.defocus_d[INNER] == pytest.approx([defocus, defocus], rel=1e-3)
    assert got.relaxed.size_deg[INNER, 0] == pytest.approx(math.degrees(math.hypot(theta, lamp)), rel=2e-3)
    assert got.relaxed.luminance_cd_m2[INNER] == pytest.approx(luminance, rel=5e-3)
    assert got.background_cd_m2[INNER] == pytest.approx(background, rel=5e-3)
    assert got.relaxed.haze[INNER]
    assert got.relaxed.contrast[INNER] == pytest.approx(luminance / background, rel=1e-2)


def test_a_lamp_and_a_window_of_its_luminance_are_one_source() -> None:
    """The same disc, once as candela and once as luminance: same veil and pupil, and where sharp the same ghost."""
    size = math.radians(1.0)
    luminance = 5.0
    candela = luminance * math.pi / 4.0 * size**2 * 4.0  # at 2 m
    common: dict[str, Any] = {"size_deg": [1.0, 1.0], "distance_m": 2.0, "lamps": 1.0}
    lamp = seen(lens(), scene(intensity_cd=candela, **common))
    window = seen(lens(), scene(extended=True, luminance_cd_m2=luminance, **common))
    assert lamp.pupil_mm == pytest.approx(window.pupil_mm)
    assert lamp.background_cd_m2 == pytest.approx(window.background_cd_m2)
    plano = lens((0.0, 0.0), front_d=0.0)
    at_the_lamp: dict[str, Any] = {**common, "fixation_m": 2.0}
    sharp_lamp = seen(plano, scene(intensity_cd=candela, **at_the_lamp)).relaxed.luminance_cd_m2[INNER]
    sharp_window = seen(plano, scene(extended=True, luminance_cd_m2=luminance, **at_the_lamp))
    # flat plate: the ghost's source is 4/3 mm deeper in 2 m, a blur of microradians; strength R^2 T
    assert sharp_lamp == pytest.approx(sharp_window.relaxed.luminance_cd_m2[INNER], rel=1e-4)
    assert sharp_lamp == pytest.approx(luminance * 0.04**2 * 0.96**2 / (1 - 0.04**2), rel=1e-4)


def test_a_ghost_on_its_source_has_the_source_behind_it() -> None:
    # a flat plate leaves the ghost on the lamp: background T_v x lamp's luminance, so contrast is R^2
    got = seen(lens((0.0, 0.0), front_d=0.0), scene(distance_m=1e5, fixation_m=1e5, size_deg=[0.2, 0.2]))
    assert got.separation_deg[INNER] < 1e-3
    assert got.relaxed.contrast[INNER] == pytest.approx(0.04**2 * 2.0, rel=1e-6)  # two lamps in one place
    assert VERDICTS[got.relaxed.verdict[INNER]] == "not noticed"


def test_light_from_behind_stands_on_what_is_looked_at_without_veil() -> None:
    got = seen(lens(), scene(WINDOW_BEHIND))
    through = 0.96**2 / (1 - 0.04**2)
    assert got.background_cd_m2[[BACK, FRONT]] == pytest.approx(through * 120.0)
    # no lamp at the eye: the pupil is that of the screen alone
    bright = seen(lens(), scene(WINDOW_BEHIND, luminance_cd_m2=1e6))
    assert bright.pupil_mm[BACK] == got.pupil_mm[BACK]
    assert got.applies.tolist() == [False, True, True, False, False]
    assert got.past_range[BACK]
    # wider than 60 arcmin: haze, never plain
    assert got.relaxed.haze[BACK]
    assert got.relaxed.luminance_cd_m2[INNER] == 0.0
    assert got.relaxed.verdict[INNER] == 0


def test_the_back_face_alone_coated_leaves_the_front_ghost_alike() -> None:
    strengths, through = flat_strengths(0.04, internal_transmittance=1.0)
    back_coated = strengths * np.array([0.1, 0.1, (0.996 / 0.96) ** 2, 0.1, (0.996 / 0.96) ** 2])
    bare = see_ghosts(lens(), scene=scene(WINDOW_BEHIND), wearer=wearer(), strengths=strengths, transmittance=through)
    coated = see_ghosts(
        lens(), scene=scene(WINDOW_BEHIND), wearer=wearer(), strengths=back_coated, transmittance=through
    )
    assert coated.relaxed.luminance_cd_m2[BACK] == pytest.approx(0.1 * bare.relaxed.luminance_cd_m2[BACK])
    assert coated.relaxed.luminance_cd_m2[FRONT] > bare.relaxed.luminance_cd_m2[FRONT]


def test_accommodation_sharpens_a_diverging_ghost_for_the_young_only() -> None:
    # -0.50, F1 +5.75, n 1.498: ghost at -2.44 D, about -1.9 D of defocus
    weak = lens((-0.5, -0.5), front_d=5.75, index=1.498)
    young, old = seen(weak, scene(), wearer(20.0)), seen(weak, scene(), wearer(65.0))
    assert young.relaxed.defocus_d[INNER, 0] == pytest.approx(-1.9, abs=0.1)
    assert young.accommodated.defocus_d[INNER] == pytest.approx(0.0, abs=1e-9)
    assert young.accommodated.luminance_cd_m2[INNER] > 10.0 * young.relaxed.luminance_cd_m2[INNER]
    assert old.accommodated.defocus_d[INNER] == pytest.approx(old.relaxed.defocus_d[INNER])


def test_one_change_of_focus_serves_both_meridians() -> None:
    toric = seen(lens((-0.5, -1.5), front_d=5.75, index=1.498), scene(), wearer(15.0))
    first, second = toric.accommodated.defocus_d[INNER]
    assert first == pytest.approx(-second)
    relaxed = toric.relaxed.defocus_d[INNER]
    assert first - second == pytest.approx(relaxed[0] - relaxed[1])


def test_a_reading_lens_is_focused_by_the_eye_it_is_worn_by() -> None:
    """A far point given from outside leaves accommodation in use, which can be relaxed onto a converging ghost."""
    near = scene(WINDOW_BEHIND, fixation_m=0.4)
    young = wearer(20.0)
    # +2.50 reading lens on an eye that needs none far away: nothing in use at 0.4 m, or all of it
    reading = lens((2.5, 2.5), front_d=6.0)
    in_use = place_ghosts(reading, scene=near, wearer=young).in_use_d
    assert in_use == pytest.approx(2.5, rel=0.1)
    relaxed = dataclasses.replace(young, far_vergence_d=np.zeros(2))
    assert place_ghosts(reading, scene=near, wearer=relaxed).in_use_d == pytest.approx(0.0, abs=0.15)


def test_prescribed_prism_throws_the_ghost_clear_of_the_veil() -> None:
    none = seen(lens((-0.5, -0.5), front_d=5.75), scene())
    prism = seen(lens((-0.5, -0.5), front_d=5.75, prism_base_d=[0.0, -3.0]), scene())
    # thin rule at n 1.5: 7 x 3 - 3 prism dioptres, M near 1: about 0.17 rad; here 9 to 11 degrees
    assert 9.0 < prism.separation_deg[INNER] < 11.0
    assert prism.background_cd_m2[INNER] < none.background_cd_m2[INNER] / 50.0
    assert prism.relaxed.visibility_level[INNER] > none.relaxed.visibility_level[INNER]
    # base down: apex up, the ghost stands above; x is untouched
    place = place_ghosts(
        lens((-0.5, -0.5), front_d=5.75, prism_base_d=[0.0, -3.0]), scene=scene(direction_deg=0.0), wearer=wearer()
    )
    assert place.separation_rad[INNER, 1] > 0.15
    assert place.separation_rad[INNER, 0] == pytest.approx(0.0, abs=1e-12)


@pytest.mark.parametrize(
    ("eye", "azimuth_deg", "shape"),
    [
        # wrap turns the front of a lens outwards: the right eye's to the wearer's right (180 as seen from in front)
        (0, 180.0, {"wrap_deg": 10.0, "offset": [1.0, 0.0]}),
        (1, 0.0, {"wrap_deg": 10.0, "offset": [1.0, 0.0]}),
        # tilt turns it down
        (0, 270.0, {"tilt_deg": 10.0, "offset": [0.0, 1.0]}),
        (1, 270.0, {"tilt_deg": 10.0, "offset": [0.0, 1.0]}),
    ],
)
def test_a_source_on_the_turned_axis_with_the_pupil_on_it_keeps_its_ghost(
    eye: int, azimuth_deg: float, shape: dict[str, Any]
) -> None:
    """Ahead the axis goes outwards or down, so behind the lens it goes nasally or up; 15 mm on stands the pupil."""
    on_axis = 15.0 * math.radians(10.0) * np.array(shape["offset"])
    turned = {name: value for name, value in shape.items() if name != "offset"}
    fitted = lens(eye=eye, pupil_offset_mm=on_axis, meridian_deg=40.0, **turned)
    place = place_ghosts(fitted, scene=scene(direction_deg=10.0, azimuth_deg=azimuth_deg), wearer=wearer())
    assert place.separation_rad[INNER] == pytest.approx(0.0, abs=1e-12)


@pytest.mark.parametrize(("eye", "azimuth_deg"), [(0, 30.0), (1, 150.0)])
def test_light_from_behind_meets_the_meridian_that_lies_along_it(eye: int, azimuth_deg: float) -> None:
    # Coddington: 2 k/cos 60 in the plane of incidence, 2 k cos 60 across it; distant light
    fitted = lens((-3.0, -5.0), eye=eye, meridian_deg=30.0)
    behind = scene(WINDOW_BEHIND, azimuth_deg=azimuth_deg, incidence_deg=60.0, distance_m=np.inf)
    k = fitted.section.back_curvature_per_mm * 1e3
    vergence = seen(fitted, behind).vergence_d[BACK]
    assert vergence == pytest.approx([2.0 * k[0] / 0.5, 2.0 * k[1] * 0.5])


def test_eyes_that_mirror_each_other_see_mirrored_scenes_alike() -> None:
    shape: dict[str, Any] = {
        "meridian_deg": 25.0,
        "tilt_deg": 9.0,
        "wrap_deg": 6.0,
        "pupil_offset_mm": [1.0, -2.0],
        "prism_base_d": [1.0, 0.5],
    }
    right = seen(lens((-3.0, -5.0), eye=0, **shape), scene(azimuth_deg=20.0))
    left = seen(lens((-3.0, -5.0), eye=1, **shape), scene(azimuth_deg=160.0))
    assert right.separation_deg == pytest.approx(left.separation_deg)
    assert right.relaxed.visibility_level == pytest.approx(left.relaxed.visibility_level)


def test_swapping_the_meridians_with_a_quarter_turn_changes_nothing() -> None:
    shape: dict[str, Any] = {"tilt_deg": 9.0, "wrap_deg": 6.0, "pupil_offset_mm": [1.0, -2.0]}
    one = seen(lens((-3.0, -5.0), meridian_deg=25.0, **shape), scene(azimuth_deg=20.0, size_deg=[1.0, 0.3]))
    two = seen(lens((-5.0, -3.0), meridian_deg=115.0, **shape), scene(azimuth_deg=20.0, size_deg=[1.0, 0.3]))
    assert one.separation_deg == pytest.approx(two.separation_deg)
    assert one.relaxed.luminance_cd_m2 == pytest.approx(two.relaxed.luminance_cd_m2)
    assert one.relaxed.size_deg == pytest.approx(two.relaxed.size_deg[:, ::-1])


def test_leaving_out_the_veil_would_overstate_visibility_as_said() -> None:
    # the veil matters from hardly (a ghost far away from the lamp) to over 1000 times (close to it)
    got = seen(lens((-0.25, -0.25), front_d=5.0), scene())
    bare_background = 0.1 * 0.96**2 / (1 - 0.04**2)
    assert got.background_cd_m2[INNER] / bare_background > 1000.0


def test_axes_broadcast_and_perturbations_ride_on_a_leading_axis() -> None:
    """(2 perturbations, 3 options, 2 eyes, 2 scenes, 5 paths) equals the single calls."""
    rng = np.random.default_rng(3)
    front = rng.uniform(3.0, 7.0, (3, 1, 1, 1)) * np.ones(2)
    power = rng.uniform(-5.0, 2.0, (3, 2, 1, 2))
    index, thickness = rng.uniform(1.5, 1.74, (3, 1, 1)), rng.uniform(1.5, 4.0, (2, 3, 2, 1))
    bend = index[..., None] - 1.0
    back = power - front / (1.0 - (thickness * 1e-3 / index)[..., None] * front)
    section = LensSection(front / bend * 1e-3, -back / bend * 1e-3, index, thickness, np.array(13.0))
    eye = np.array([[0], [1]])
    offset = rng.uniform(-2.0, 2.0, (2, 1, 2))
    turn = rng.uniform(0.0, 180.0, (2, 1))
    whole = LensOnFace(section, eye, turn, np.array(8.0), np.array(5.0), offset, np.array([0.5, 0.0]))
    pair = {name: np.stack([np.asarray(HEADLAMPS[name]), np.asarray(WINDOW_BEHIND[name])]) for name in HEADLAMPS}
    reflectance = rng.uniform(0.001, 0.05, (3, 1, 1))
    strengths, through = flat_strengths(reflectance, internal_transmittance=1.0)
    got = see_ghosts(whole, scene=Scene(**pair), wearer=wearer(), strengths=strengths, transmittance=through)
    assert got.relaxed.visibility_level.shape == (2, 3, 2, 2, 5)
    for p, o, e, s in np.ndindex(2, 3, 2, 2):
        one = LensOnFace(
            LensSection(
                front[o, 0, 0] / bend[o, 0, 0] * 1e-3,
                -back[p, o, e, 0] / bend[o, 0, 0] * 1e-3,
                index[o, 0, 0],
                thickness[p, o, e, 0],
                np.array(13.0),
            ),
            np.array(e),
            turn[e, 0],
            np.array(8.0),
            np.array(5.0),
            offset[e, 0],
            np.array([0.5, 0.0]),
        )
        single = seen(one, scene((HEADLAMPS, WINDOW_BEHIND)[s]), reflectance=reflectance[o, 0, 0])
        assert single.relaxed.visibility_level == pytest.approx(got.relaxed.visibility_level[p, o, e, s], rel=1e-9)
        assert single.separation_deg == pytest.approx(got.separation_deg[p, o, e, s], rel=1e-9)


lenses = st.builds(
    lambda power, cylinder, front, index, thickness, turn, tilt, wrap, offset, prism, eye: lens(
        (power, power + cylinder),
        front_d=front,
        index=index,
        thickness_mm=thickness,
        meridian_deg=turn,
        tilt_deg=tilt,
        wrap_deg=wrap,
        pupil_offset_mm=[offset, -offset],
        prism_base_d=[prism, prism / 2.0],
        eye=eye,
    ),
    power=st.floats(-30, 30),
    cylinder=st.floats(-10, 10),
    front=st.floats(-10, 25),
    index=st.floats(1.45, 1.9),
    thickness=st.floats(0, 12),
    turn=st.floats(0, 180),
    tilt=st.floats(-20, 25),
    wrap=st.floats(-10, 25),
    offset=st.floats(-8, 8),
    prism=st.floats(-10, 10),
    eye=st.sampled_from([0, 1]),
)
scenes = st.builds(
    lambda extended, behind, cd, lum, lamps, size, distance, angle, azimuth, incidence, fixation, dark: scene(
        extended=extended,
        behind=behind,
        intensity_cd=cd,
        luminance_cd_m2=lum,
        lamps=float(lamps),
        size_deg=[size, size / 2.0],
        distance_m=distance,
        direction_deg=angle,
        azimuth_deg=azimuth,
        incidence_deg=incidence,
        fixation_m=fixation,
        background_cd_m2=dark,
        adapting_cd_m2=dark,
    ),
    extended=st.booleans(),
    behind=st.booleans(),
    cd=st.floats(0, 1e6),
    lum=st.floats(0, 2e9),
    lamps=st.integers(1, 12),
    size=st.floats(0, 60),
    distance=st.one_of(st.just(math.inf), st.floats(0.05, 1e5)),
    angle=st.floats(0, 60),
    azimuth=st.floats(0, 360),
    incidence=st.floats(0, 80),
    fixation=st.one_of(st.just(math.inf), st.floats(0.1, 1e4)),
    dark=st.floats(0, 1e4),
)
ages = st.floats(5, 100)


@settings(max_examples=300)
@given(on_face=lenses, where=scenes, age=ages, reflectance=st.floats(0, 0.3))
def test_nothing_is_infinite_or_missing(on_face: LensOnFace, where: Scene, age: float, reflectance: float) -> None:
    got = seen(on_face, where, wearer(age), reflectance=reflectance)
    for view in (got, got.relaxed, got.accommodated):
        for name, value in vars(view).items():
            if isinstance(value, np.ndarray):
                assert np.isfinite(value).all(), name
                assert value.shape[:1] == (5,), name
    assert (got.relaxed.luminance_cd_m2[~got.applies] == 0.0).all()


@settings(max_examples=200)
@given(on_face=lenses, where=scenes, age=ages, reflectance=st.floats(0, 0.3))
def test_focusing_on_a_ghost_never_dims_it(on_face: LensOnFace, where: Scene, age: float, reflectance: float) -> None:
    # of one lamp: the blurred ghosts of several lie over each other and may add up to more than one sharp ghost
    got = seen(on_face, dataclasses.replace(where, lamps=np.array(1.0)), wearer(age), reflectance=reflectance)
    assert (got.accommodated.luminance_cd_m2 >= got.relaxed.luminance_cd_m2 * (1 - 1e-9))[
        got.relaxed.defocus_d[:, 0] == got.relaxed.defocus_d[:, 1]
    ].all()


@settings(max_examples=200)
@given(on_face=lenses, where=scenes, age=ages, bare=st.floats(0.001, 0.2), share=st.floats(0.01, 0.99))
def test_less_reflection_on_both_faces_never_raises_a_ghost(
    on_face: LensOnFace, where: Scene, age: float, bare: float, share: float
) -> None:
    more = seen(on_face, where, wearer(age), reflectance=bare)
    less = seen(on_face, where, wearer(age), reflectance=bare * share)
    assert (less.relaxed.luminance_cd_m2 <= more.relaxed.luminance_cd_m2 * (1 + 1e-9)).all()
    # a shade less light can cross one of the threshold's uneven joins; half the reflectance outweighs any
    if share < 0.5:
        assert (less.relaxed.visibility_level <= more.relaxed.visibility_level).all()


@pytest.mark.parametrize(
    ("part", "field", "value"),
    [
        ("lens", "eye", 2),
        ("lens", "tilt_deg", 60.0),
        ("lens", "pupil_offset_mm", 1.0),
        ("lens", "prism_base_d", [np.nan, 0.0]),
        ("scene", "distance_m", 0.0),
        ("scene", "fixation_m", -1.0),
        ("scene", "lamps", 0.0),
        ("scene", "incidence_deg", 90.0),
        ("scene", "size_deg", 1.0),
        ("scene", "luminance_cd_m2", -1.0),
        ("wearer", "age_y", -1.0),
        ("wearer", "pigment", 1.3),
        ("wearer", "pupil_scale", 0.0),
        ("wearer", "far_vergence_d", 1.0),
    ],
)
def test_inputs_outside_their_range_are_refused_by_name(part: str, field: str, value: ArrayLike) -> None:
    whole = {"lens": lens(), "scene": scene(), "wearer": wearer()}[part]
    with pytest.raises(ValueError, match=field):
        dataclasses.replace(whole, **{field: np.asarray(value)})  # type: ignore[type-var]


def test_strengths_and_transmittance_outside_their_range_are_refused_by_name() -> None:
    strengths, through = flat_strengths(0.04, internal_transmittance=1.0)
    with pytest.raises(ValueError, match="strengths"):
        see_ghosts(lens(), scene=scene(), wearer=wearer(), strengths=strengths[:4], transmittance=through)
    with pytest.raises(ValueError, match="transmittance"):
        see_ghosts(lens(), scene=scene(), wearer=wearer(), strengths=strengths, transmittance=0.0)
