"""Ghost strengths: closed forms, the light followed along its path, and limits."""

import numpy as np
import pytest
from numpy.typing import NDArray

from advisor.optics.ghost_strength import (
    CORNEA_REFLECTANCE,
    PATHS,
    lens_transmittance,
    path_strengths,
    weighted_strengths,
)
from advisor.optics.grid import WAVELENGTHS_NM
from advisor.optics.layers import stack_arrays
from advisor.optics.photometry import illuminant, luminous_efficiency, luminous_mean
from advisor.optics.surface import SurfaceSpectra, bare_surface, film_surface, whole_lens

BLUE_FILM = [("SiO2", 70.0), ("TiO2", 90.0), ("SiO2", 25.0), ("TiO2", 12.0)]


def film(extinction: float = 0.0, *, angle_deg: float = 0.0) -> SurfaceSpectra:
    real, thickness = stack_arrays(BLUE_FILM, wavelength_nm=WAVELENGTHS_NM)
    index = real + 1j * extinction * np.array([0.0, 1.0, 0.0, 1.0])[:, None]
    return film_surface(1.6, layer_index=index, layer_thickness_nm=thickness, angle_deg=angle_deg)


def weighted(front: SurfaceSpectra, back: SurfaceSpectra, tau: float, *, dark: float | None = None) -> dict[str, float]:
    strengths = path_strengths(front, back, internal_transmittance=tau, dark_axis_transmittance=dark)
    passed = lens_transmittance(front, back, internal_transmittance=tau, dark_axis_transmittance=dark)
    values = weighted_strengths(strengths, transmittance=passed, illuminant="LED-B4")
    return dict(zip(PATHS, map(float, values), strict=True))


def test_a_bare_lens_of_constant_index_has_the_closed_forms() -> None:
    # r = ((n-1)/(n+1))^2: r^2 tau^2, r, (1-r)^2 r tau^2, Rc r, Rc (1-r)^2 r tau^2, whatever the light
    r, tau, rc = 0.04, 0.9, 0.025
    found = weighted(bare_surface(1.5), bare_surface(1.5), tau)
    expected = {
        "ahead-inner": r**2 * tau**2,
        "behind-back": r,
        "behind-front": (1.0 - r) ** 2 * r * tau**2,
        "cornea-back": rc * r,
        "cornea-front": rc * (1.0 - r) ** 2 * r * tau**2,
    }
    assert found == pytest.approx(expected, rel=1e-12)


def test_with_a_film_the_inner_ghost_is_not_the_product_of_the_luminous_reflectances() -> None:
    face = film()
    found = weighted(face, face, 1.0)["ahead-inner"]
    product = float(luminous_mean(face.outside, illuminant="LED-B4")) ** 2
    assert found > 1.3 * product
    # second method: the sums written out, weight T
    _, passed = whole_lens(face, face, internal_transmittance=1.0)
    eye = luminous_efficiency() * illuminant("LED-B4")
    assert found == pytest.approx(sum(face.inside**2 * passed * eye) / sum(passed * eye), rel=1e-12)


def test_the_lens_weighs_ahead_and_cornea_paths_but_not_those_from_behind() -> None:
    # A lens that passes red only: ahead paths then have the film's strength in the red, behind paths keep the mean.
    face = film()
    strengths = path_strengths(face, face, internal_transmittance=1.0)
    red = (WAVELENGTHS_NM == 640.0).astype(float)
    values = weighted_strengths(strengths, transmittance=red, illuminant="D65")
    at_640 = strengths[:, 260]
    plain = luminous_mean(strengths)
    np.testing.assert_allclose(values[[0, 3, 4]], at_640[[0, 3, 4]], rtol=1e-12)
    np.testing.assert_allclose(values[[1, 2]], plain[[1, 2]], rtol=1e-12)
    assert not np.allclose(at_640, plain, rtol=0.1)


def follow(front: SurfaceSpectra, back: SurfaceSpectra, axes: tuple[float, float]) -> NDArray[np.float64]:
    """Follow both polarisations of unpolarised light along each path, meeting by meeting."""
    tau = np.array(axes)[:, None]
    start = np.full((2, 401), 0.5)
    entered = start * front.transmittance * tau
    direct = entered * back.transmittance
    inner = entered * back.inside * tau * front.inside * tau * back.transmittance
    behind = start * back.outside
    behind_front = start * back.transmittance * tau * front.inside * tau * back.transmittance
    on_cornea = direct * CORNEA_REFLECTANCE
    cornea_back = on_cornea * back.outside
    cornea_front = on_cornea * back.transmittance * tau * front.inside * tau * back.transmittance
    seen = [inner, behind, behind_front, cornea_back, cornea_front]
    total = [light.sum(axis=0) for light in seen]
    for relative in (0, 3, 4):
        total[relative] = total[relative] / direct.sum(axis=0)
    return np.stack(total)


@pytest.mark.parametrize("axes", [(0.7, 0.7), (0.6, 0.1), (0.4, 0.0)])
def test_every_path_equals_the_light_followed_along_it(axes: tuple[float, float]) -> None:
    front, back = film(0.02), film(0.1, angle_deg=35.0)
    found = path_strengths(front, back, internal_transmittance=axes[0], dark_axis_transmittance=axes[1])
    np.testing.assert_allclose(found, follow(front, back, axes), rtol=1e-12)


def test_equal_axes_are_no_polariser() -> None:
    face = film()
    np.testing.assert_allclose(
        path_strengths(face, face, internal_transmittance=0.5, dark_axis_transmittance=0.5),
        path_strengths(face, face, internal_transmittance=0.5),
        rtol=1e-14,
    )


def test_a_perfect_polariser_weakens_the_front_ghost_of_light_from_behind_less_than_an_equal_tint() -> None:
    # mean transmittance 0.4 both: (0.8^2 + 0)/2 = 0.32 against 0.4^2 = 0.16, Malus's law on each axis
    face = bare_surface(1.5)
    polarised = weighted(face, face, 0.8, dark=0.0)["behind-front"]
    tinted = weighted(face, face, 0.4)["behind-front"]
    assert polarised == pytest.approx(2.0 * tinted, rel=1e-12)


def test_a_polarising_lens_passes_the_mean_of_its_two_axes() -> None:
    # (1-r)^2 t/(1 - r^2 t^2) on each axis, r = 0.04
    axes = np.array([0.6, 0.1])
    expected = np.mean(0.96**2 * axes / (1.0 - (0.04 * axes) ** 2))
    face = bare_surface(1.5)
    passed = lens_transmittance(face, face, internal_transmittance=0.6, dark_axis_transmittance=0.1)
    np.testing.assert_allclose(passed, expected, rtol=1e-12)


def test_an_opaque_lens_leaves_only_the_back_face() -> None:
    found = weighted(bare_surface(1.5), bare_surface(1.5), 0.0)
    assert found["behind-back"] == pytest.approx(0.04, rel=1e-12)
    assert found["ahead-inner"] == found["behind-front"] == found["cornea-front"] == 0.0


def test_a_dark_polariser_gives_no_nan() -> None:
    face = bare_surface(1.5)
    assert np.all(np.isfinite(path_strengths(face, face, internal_transmittance=0.0, dark_axis_transmittance=0.0)))


def test_an_absorbing_back_film_counts_from_the_side_it_is_met() -> None:
    back = film(0.2)
    assert np.max(np.abs(back.inside - back.outside)) > 0.005  # the two sides do differ
    strengths = path_strengths(bare_surface(1.6), back, internal_transmittance=1.0)
    r = (0.6 / 2.6) ** 2
    np.testing.assert_allclose(strengths[0], back.inside * r, rtol=1e-12)
    np.testing.assert_allclose(strengths[1], back.outside, rtol=1e-12)


def test_options_stay_in_front_of_paths() -> None:
    index, thickness = stack_arrays(BLUE_FILM, wavelength_nm=WAVELENGTHS_NM)
    faces = film_surface(1.6, layer_index=index, layer_thickness_nm=np.stack([thickness, thickness * 1.02]))
    tau = np.array([1.0, 0.5])[:, None]
    strengths = path_strengths(faces, bare_surface(1.6), internal_transmittance=tau)
    assert strengths.shape == (2, 5, 401)
    passed = lens_transmittance(faces, bare_surface(1.6), internal_transmittance=tau)
    both = weighted_strengths(strengths, transmittance=passed, illuminant="A")
    one = weighted_strengths(strengths[1], transmittance=passed[1], illuminant="A")
    np.testing.assert_allclose(both[1], one, rtol=1e-12)


def test_what_is_out_of_range_is_named() -> None:
    face = bare_surface(1.5)
    with pytest.raises(ValueError, match="cornea_reflectance"):
        path_strengths(face, face, internal_transmittance=1.0, cornea_reflectance=2.5)
    with pytest.raises(ValueError, match="internal_transmittance"):
        path_strengths(face, face, internal_transmittance=85.0)
    with pytest.raises(ValueError, match="dark_axis_transmittance"):
        path_strengths(face, face, internal_transmittance=0.5, dark_axis_transmittance=-0.1)
    with pytest.raises(ValueError, match="5 paths"):
        weighted_strengths(np.ones((4, 401)), transmittance=np.ones(401), illuminant="D65")
