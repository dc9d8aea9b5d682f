"""The solved reflectance puts the worst ghost where it was asked to."""

import numpy as np
import pytest
from numpy.typing import NDArray

from advisor.optics.ghost_inputs import LensOnFace, Scene, Wearer
from advisor.optics.ghost_path import FROM_BEHIND
from advisor.optics.ghost_scene import see_ghosts
from advisor.optics.ghost_strength import lens_transmittance, path_strengths
from advisor.optics.lens_section import LensSection
from advisor.optics.reflectance_limit import flat_strengths, reflectance_limit
from advisor.optics.surface import SurfaceSpectra

BARE = 0.04

WEARER = Wearer(np.array(40.0), np.array(0.5), np.array(True), np.array(1.0))


def fitted() -> LensOnFace:
    power, front = np.array([-4.0, -0.5, 1.0]), 5.0
    back = power - front / (1.0 - 0.002 / 1.5 * front)
    section = LensSection(
        np.full((3, 1, 1, 2), front / 0.5 * 1e-3),
        np.broadcast_to(-back[:, None, None, None] / 0.5 * 1e-3, (3, 1, 1, 2)),
        np.array(1.5),
        np.array(2.0),
        np.array(12.0),
    )
    return LensOnFace(
        section, np.array([[0], [1]]), np.array(0.0), np.array(0.0), np.array(0.0), np.zeros(2), np.zeros(2)
    )


def scenes() -> Scene:
    """Lamps at 10 degrees on a dark road, a window behind, and a lamp too weak to matter."""
    return Scene(
        extended=np.array([False, True, False]),
        behind=np.array([False, True, False]),
        intensity_cd=np.array([350.0, 0.0, 1e-6]),
        lamps=np.array([2.0, 1.0, 1.0]),
        spacing_m=np.array([1.3, 0.0, 0.0]),
        luminance_cd_m2=np.array([0.0, 3000.0, 0.0]),
        size_deg=np.array([[0.1, 0.1], [20.0, 20.0], [0.1, 0.1]]),
        distance_m=np.array([50.0, 2.0, 50.0]),
        direction_deg=np.array([10.0, 0.0, 10.0]),
        azimuth_deg=np.zeros(3),
        incidence_deg=np.full(3, 35.0),
        fixation_m=np.array([np.inf, 0.6, np.inf]),
        background_cd_m2=np.array([0.1, 120.0, 100.0]),
        adapting_cd_m2=np.array([0.1, 120.0, 100.0]),
        adapting_field_deg=np.full(3, 60.0),
        exposure_s=np.full(3, 2.0),
    )


def worst(
    reflectance: NDArray[np.float64],
) -> NDArray[np.float64]:
    strengths, through = flat_strengths(reflectance, internal_transmittance=1.0)
    got = see_ghosts(fitted(), scene=scenes(), wearer=WEARER, strengths=strengths, transmittance=through)
    return np.asarray(np.maximum(got.relaxed.visibility_level, got.accommodated.visibility_level).max(axis=-1))


@pytest.mark.parametrize("level", [0.4, 1.0])
def test_at_the_limit_the_worst_ghost_has_the_level(level: float) -> None:
    limit = reflectance_limit(fitted(), scene=scenes(), wearer=WEARER, bare_reflectance=BARE, visibility_level=level)
    assert limit.reflectance.shape == (3, 2, 3)
    solved = ~limit.even_bare
    assert solved[:, :, :2].all()
    # solved to 1e-6 in R, and the level goes with R to the first or second power; overlap of lamps may step, not here
    assert worst(limit.reflectance)[solved] == pytest.approx(level, rel=1e-5)
    assert (worst(np.full((3, 2, 3), BARE))[solved] > level).all()


def test_where_even_bare_keeps_the_level_the_limit_is_the_bare_surface() -> None:
    limit = reflectance_limit(fitted(), scene=scenes(), wearer=WEARER, bare_reflectance=BARE, visibility_level=0.4)
    assert limit.even_bare[:, :, 2].all()
    assert limit.reflectance[:, :, 2] == pytest.approx(BARE)
    assert (worst(np.full((3, 2, 3), BARE))[:, :, 2] < 0.4).all()


def test_from_behind_the_limit_goes_with_the_level_and_from_ahead_with_its_root() -> None:
    """Single reflections grow as R, double as R^2 (transmittance and pupil change a little: 10 %)."""
    at = [
        reflectance_limit(fitted(), scene=scenes(), wearer=WEARER, bare_reflectance=0.2, visibility_level=level)
        for level in (0.4, 1.6)
    ]
    ratio = at[1].reflectance / at[0].reflectance
    assert ratio[0, :, 1] == pytest.approx(4.0, rel=0.1)
    # -4.00 ahead: the inner path is worst, as R^2
    assert ratio[0, :, 0] == pytest.approx(2.0, rel=0.1)


def test_flat_strengths_are_the_products_of_the_table() -> None:
    # R 0.1, tau 0.9, cornea 2.5 %: R^2 tau^2, R, T^2 R tau^2, Rc R, Rc T^2 R tau^2
    strengths, through = flat_strengths(0.1, internal_transmittance=0.9)
    assert strengths == pytest.approx([0.0081, 0.1, 0.06561, 0.0025, 0.00164025])
    # all bounces, summed one by one instead of as a closed form
    bounces = sum(0.9 * 0.9 * 0.9 * (0.1 * 0.1 * 0.81) ** m for m in range(30))
    assert through == pytest.approx(bounces)
    assert list(FROM_BEHIND) == [False, True, True, False, False]


def test_flat_strengths_are_those_of_a_lens_with_two_even_faces() -> None:
    """The strengths used to compare coatings, for faces that reflect alike at every wavelength."""
    flat = np.full(401, 0.03)
    face = SurfaceSpectra(outside=flat, inside=flat, transmittance=1.0 - flat)
    spectra = path_strengths(face, face, internal_transmittance=0.8)
    passed = lens_transmittance(face, face, internal_transmittance=0.8)
    strengths, through = flat_strengths(0.03, internal_transmittance=0.8)
    assert strengths == pytest.approx(spectra[:, 200])
    assert through == pytest.approx(passed[200])


@pytest.mark.parametrize(
    ("field", "value"),
    [("bare_reflectance", 0.4), ("bare_reflectance", 0.0), ("visibility_level", 0.0), ("internal_transmittance", 1.1)],
)
def test_values_outside_the_range_are_refused_by_name(field: str, value: float) -> None:
    values = {"bare_reflectance": BARE, "visibility_level": 1.0, "internal_transmittance": 1.0, field: value}
    with pytest.raises(ValueError, match=field):
        reflectance_limit(
            fitted(),
            scene=scenes(),
            wearer=WEARER,
            bare_reflectance=values["bare_reflectance"],
            visibility_level=values["visibility_level"],
            internal_transmittance=values["internal_transmittance"],
        )
