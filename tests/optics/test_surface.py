"""Faces and whole lenses: printed practice, closed forms, the bounces followed one by one, and the public `tmm`."""

import numpy as np
import pytest
import tmm
from numpy.typing import NDArray

from advisor.optics.grid import WAVELENGTHS_NM
from advisor.optics.layers import HardCoat, stack_arrays
from advisor.optics.media import lens_index
from advisor.optics.photometry import luminous_mean
from advisor.optics.surface import (
    SurfaceSpectra,
    bare_surface,
    film_surface,
    first_pass_loss,
    reflectance_surface,
    whole_lens,
)

FILM = [("SiO2", 90.7), ("Ta2O5", 73.1), ("Al2O3", 60.0)]
SOME_NM = (380, 455, 550, 633, 780)


def film(substrate: float = 1.6, *, angle_deg: float = 0.0, layers: list[tuple[str, float]] = FILM) -> SurfaceSpectra:
    index, thickness = stack_arrays(layers, wavelength_nm=WAVELENGTHS_NM)
    return film_surface(substrate, layer_index=index, layer_thickness_nm=thickness, angle_deg=angle_deg)


# --- bare faces ---------------------------------------------------------------------------------------------------


@pytest.mark.parametrize(("index", "printed"), [(1.498, 7.8), (1.74, 14.1)])
def test_first_pass_loss_is_what_trade_tables_print(index: float, printed: float) -> None:
    # common practice, no source; half the last digit
    face = bare_surface(index)
    assert 100.0 * first_pass_loss(face, face) == pytest.approx(printed, abs=0.05)


@pytest.mark.parametrize(
    ("index", "abbe", "first_pass", "whole"),
    [(1.498, None, 7.79, 7.64), (1.498, 58.0, 7.83, 7.69), (1.74, None, 14.06, None), (1.74, 33.0, 14.18, None)],
)
def test_both_labelled_figures_of_a_bare_lens(
    index: float, abbe: float | None, first_pass: float, whole: float | None
) -> None:
    # Percent, computed outside this program by two methods, D65; half the last digit.
    face = bare_surface(index if abbe is None else lens_index(WAVELENGTHS_NM, index=index, abbe=abbe))
    assert 100.0 * first_pass_loss(face, face) == pytest.approx(first_pass, abs=0.005)
    if whole is not None:
        reflectance, _ = whole_lens(face, face, internal_transmittance=1.0)
        assert 100.0 * luminous_mean(reflectance) == pytest.approx(whole, abs=0.005)


def test_a_bare_lens_reflects_2r_over_1_plus_r() -> None:
    # Stokes 1862: two equal faces without absorption, all bounces: R = 2r/(1+r)
    face = bare_surface(1.6)
    r = (0.6 / 2.6) ** 2
    reflectance, transmittance = whole_lens(face, face, internal_transmittance=1.0)
    np.testing.assert_allclose(reflectance, 2.0 * r / (1.0 + r), rtol=1e-12)
    np.testing.assert_allclose(reflectance + transmittance, 1.0, rtol=1e-12)


def test_at_brewsters_angle_half_the_s_reflectance_is_left() -> None:
    # tan(angle) = n: p vanishes and r_s = cos(2 angle) (Fresnel)
    angle = np.degrees(np.arctan(1.5))
    expected = 0.5 * np.cos(2.0 * np.radians(angle)) ** 2
    np.testing.assert_allclose(bare_surface(1.5, angle_deg=angle).outside, expected, rtol=1e-12)


# --- coated faces -------------------------------------------------------------------------------------------------


@pytest.mark.parametrize("angle_deg", [0.0, 35.0, 60.0])
def test_a_coated_face_equals_tmm_from_both_sides(angle_deg: float) -> None:
    # PyPI `tmm`; unpolarised mean of s and p. From inside the stack is reversed and the angle follows Snell.
    real, thickness = stack_arrays(FILM, wavelength_nm=WAVELENGTHS_NM)
    index = real + np.array([0.0, 0.004, 0.0])[:, None] * 1j
    face = film_surface(1.6, layer_index=index, layer_thickness_nm=thickness, angle_deg=angle_deg)
    inside_rad = np.arcsin(np.sin(np.radians(angle_deg)) / 1.6)
    for nm in SOME_NM:
        at = nm - 380
        n_list, d_list = [1.0, *index[:, at], 1.6], [np.inf, *thickness, np.inf]
        out = tmm.unpolarized_RT(n_list, d_list, np.radians(angle_deg), nm)
        back = tmm.unpolarized_RT(n_list[::-1], d_list[::-1], inside_rad, nm)
        assert face.outside[at] == pytest.approx(out["R"], abs=1e-12)
        assert face.inside[at] == pytest.approx(back["R"], abs=1e-12)
        assert face.transmittance[at] == pytest.approx(out["T"], abs=1e-12)
        assert face.transmittance[at] == pytest.approx(back["T"], abs=1e-12)  # the same both ways


def test_without_absorption_both_sides_reflect_alike_and_nothing_is_lost() -> None:
    face = film(angle_deg=35.0)
    np.testing.assert_array_equal(face.inside, face.outside)
    np.testing.assert_allclose(face.outside + face.transmittance, 1.0, rtol=1e-15)


def test_the_lossless_shortcut_equals_the_long_way() -> None:
    index, thickness = stack_arrays(FILM, wavelength_nm=WAVELENGTHS_NM)
    long = film_surface(1.6, layer_index=index + 1e-16j, layer_thickness_nm=thickness, angle_deg=35.0)
    short = film(angle_deg=35.0)
    np.testing.assert_allclose(long.inside, short.inside, atol=1e-12)
    np.testing.assert_allclose(long.outside, short.outside, atol=1e-12)
    np.testing.assert_allclose(long.transmittance, short.transmittance, atol=1e-12)


def test_stacks_and_angles_stand_in_front_of_the_wavelength_when_given() -> None:
    index, thickness = stack_arrays(FILM, wavelength_nm=WAVELENGTHS_NM)
    many = np.stack([thickness, 1.02 * thickness, 0.98 * thickness])
    face = film_surface(1.6, layer_index=index, layer_thickness_nm=many, angle_deg=[0.0, 35.0])
    assert face.outside.shape == (3, 2, 401)
    assert bare_surface(1.5, angle_deg=[0.0, 10.0]).outside.shape == (2, 401)
    np.testing.assert_allclose(face.outside[0, 1], film(angle_deg=35.0).outside, rtol=1e-12)


# --- whole lens ---------------------------------------------------------------------------------------------------


def absorbing_face(extinction: float) -> SurfaceSpectra:
    real, thickness = stack_arrays([("SiO2", 90.0), ("TiO2", 30.0)], wavelength_nm=WAVELENGTHS_NM)
    index = real + np.array([0.0, extinction])[:, None] * 1j
    return film_surface(1.67, layer_index=index, layer_thickness_nm=thickness)


def bounce_by_bounce(
    front: SurfaceSpectra, back: SurfaceSpectra, tau: NDArray[np.float64], bounces: int = 60
) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Follow the light itself: what leaves at each meeting with a face, until nothing is left."""
    reflected, passed = front.outside.copy(), np.zeros(401)
    inside = front.transmittance
    for _ in range(bounces):
        inside = inside * tau
        passed = passed + inside * back.transmittance
        inside = inside * back.inside * tau
        reflected = reflected + inside * front.transmittance
        inside = inside * front.inside
    return reflected, passed


def test_the_whole_lens_is_the_sum_of_its_bounces() -> None:
    tau = np.linspace(0.5, 0.95, 401)
    front, back = absorbing_face(0.05), absorbing_face(0.2)
    reflectance, transmittance = whole_lens(front, back, internal_transmittance=tau)
    reflected, passed = bounce_by_bounce(front, back, tau)
    np.testing.assert_allclose(reflectance, reflected, rtol=1e-13)
    np.testing.assert_allclose(transmittance, passed, rtol=1e-13)


def test_transmittance_is_the_same_both_ways_but_reflectance_is_not() -> None:
    front, back = absorbing_face(0.0), absorbing_face(0.2)
    forwards = whole_lens(front, back, internal_transmittance=0.8)
    backwards = whole_lens(back, front, internal_transmittance=0.8)
    np.testing.assert_allclose(forwards[1], backwards[1], rtol=1e-13)
    assert np.max(np.abs(forwards[0] - backwards[0])) > 1e-3


def test_an_opaque_lens_shows_its_front_face_only() -> None:
    front = film()
    reflectance, transmittance = whole_lens(front, bare_surface(1.6), internal_transmittance=0.0)
    np.testing.assert_array_equal(reflectance, front.outside)
    np.testing.assert_array_equal(transmittance, np.zeros(401))


# --- hard coat ----------------------------------------------------------------------------------------------------


def with_hard_coat(layers: list[tuple[float, float]], thicknesses_um: NDArray[np.float64]) -> float:
    """rho_v of layers over a 1.49 coat on 1.67, mean over the coat's thickness so that fringes cancel."""
    values = []
    for thickness_um in thicknesses_um:
        index, nm = stack_arrays(layers, wavelength_nm=WAVELENGTHS_NM, hard_coat=HardCoat(1.49, float(thickness_um)))
        values.append(float(film_surface(1.67, layer_index=index, layer_thickness_nm=nm).luminous_reflectance()))
    return float(np.mean(values))


COATS_UM = np.linspace(2.0, 4.0, 81)
MISMATCH = ((1.67 - 1.49) / (1.67 + 1.49)) ** 2  # Fresnel, coat against lens: 0.324 %


def test_a_hard_coat_of_149_under_a_film_on_167_adds_about_0_32_percent() -> None:
    # Broadband film of quarter, half and quarter wave at 520 nm on 1.49; "about": half the last digit, 0.005 %.
    layers = [(1.38, 130.0 / 1.38), (2.0, 260.0 / 2.0), (1.65, 130.0 / 1.65)]
    index, nm = stack_arrays(layers, wavelength_nm=WAVELENGTHS_NM)
    matched = film_surface(1.49, layer_index=index, layer_thickness_nm=nm)
    added = 100.0 * (with_hard_coat(layers, COATS_UM) - float(matched.luminous_reflectance()))
    assert added == pytest.approx(0.32, abs=0.005)


def test_a_hard_coat_lowers_an_uncoated_167_lens_from_6_30_to_about_4_2_percent() -> None:
    assert 100.0 * float(bare_surface(1.67).luminous_reflectance()) == pytest.approx(6.30, abs=0.005)
    r = (0.49 / 2.49) ** 2
    mean = with_hard_coat([], COATS_UM)
    assert 100.0 * mean == pytest.approx(4.2, abs=0.05)
    # second method: the same two faces without interference, 2r-series
    assert mean == pytest.approx(r + (1.0 - r) ** 2 * MISMATCH / (1.0 - r * MISMATCH), abs=2e-5)


def test_the_fringes_of_a_4_um_coat_are_resolved_by_the_grid() -> None:
    # Fringes in 1/lambda repeat every 1/(2 n d): at 400 nm 13.4 nm wide, so 1 nm samples show 5 or more points each.
    index, nm = stack_arrays([], wavelength_nm=WAVELENGTHS_NM, hard_coat=HardCoat(1.49, 4.0))
    outside = film_surface(1.67, layer_index=index, layer_thickness_nm=nm).outside
    peaks = WAVELENGTHS_NM[1:-1][(outside[1:-1] > outside[:-2]) & (outside[1:-1] > outside[2:])]
    near = peaks[peaks < 420]
    expected = near[:-1] * near[1:] / (2.0 * 1.49 * 4000.0)
    np.testing.assert_allclose(np.diff(near), expected, atol=1.0)  # each peak is read to the nearest nm, twice 0.5


# --- known reflectance only, and refusals -------------------------------------------------------------------------


def test_a_measured_face_is_taken_as_free_of_absorption() -> None:
    face = reflectance_surface(np.full(401, 0.01))
    np.testing.assert_array_equal(face.inside, face.outside)
    np.testing.assert_array_equal(face.transmittance, np.full(401, 0.99))


def test_what_cannot_be_is_refused_by_name() -> None:
    with pytest.raises(ValueError, match="reflectance"):
        reflectance_surface(np.full(401, 1.2))
    with pytest.raises(ValueError, match="internal_transmittance"):
        whole_lens(film(), film(), internal_transmittance=1.1)
    with pytest.raises(ValueError, match="substrate_index must be real"):
        bare_surface(1.5 + 0.1j)
