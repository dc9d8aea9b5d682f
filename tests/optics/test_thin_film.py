"""The transfer matrix against identities, closed forms and a second library."""

from typing import Any

import numpy as np
import pytest
import tmm
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.typing import NDArray

from advisor.optics.fresnel import fresnel_reflectance
from advisor.optics.grid import WAVELENGTHS_NM
from advisor.optics.thin_film import stack_spectra

Floats = NDArray[np.float64]
fixed = settings(derandomize=True, max_examples=40, deadline=None)
layer_lists = st.lists(st.tuples(st.floats(1.3, 2.6), st.floats(0.0, 400.0)), max_size=8)
angles = st.floats(0.0, 85.0)


def same(found: Any, expected: Any) -> None:
    """Hold each value to 1e-12, absolute."""
    np.testing.assert_allclose(found, expected, rtol=0.0, atol=1e-12)


def spectra(layers: list[tuple[Any, float]], **given_: Any) -> tuple[Floats, Floats]:
    """R and T of one stack of (index, thickness), every axis kept."""
    index = np.array([layer[0] for layer in layers]).reshape(len(layers), 1)
    thickness = [layer[1] for layer in layers]
    return stack_spectra(
        given_.pop("wavelength_nm", WAVELENGTHS_NM[::40]), layer_index=index, layer_thickness_nm=thickness, **given_
    )


def reference(
    layers: list[tuple[Any, float]], substrate: complex, incident: float, angle_deg: float, wavelength_nm: float
) -> list[list[float]]:
    """[[R_s, R_p], [T_s, T_p]] by PyPI tmm, whose angle is the one in the incident medium."""
    inside = np.arcsin(np.sin(np.radians(angle_deg)) / incident)
    index = [incident, *(layer[0] for layer in layers), substrate]
    thickness = [np.inf, *(layer[1] for layer in layers), np.inf]
    found = [tmm.coh_tmm(pol, index, thickness, inside, wavelength_nm) for pol in "sp"]
    return [[one[key] for one in found] for key in "RT"]


# ---- against tmm -----------------------------------------------------------------------------------------------------


@pytest.mark.parametrize("absorbing", [False, True])
@pytest.mark.parametrize("from_inside", [False, True])
def test_500_random_stacks_equal_tmm(absorbing: bool, from_inside: bool) -> None:
    random = np.random.default_rng(20260101)
    for _ in range(125 if from_inside else 375):
        count = int(random.integers(0, 9))
        index = random.uniform(1.3, 2.6, count).astype(complex)
        substrate = complex(random.uniform(1.3, 1.9))
        if absorbing:
            index += 1j * random.uniform(0.0, 0.5, count) * (random.random(count) < 0.6)
            substrate += 1j * random.uniform(0.0, 0.3) * (random.random() < 0.5)
        incident = 1.0
        if from_inside:
            incident, substrate = substrate.real, 1.0 + 0j
        layers = list(zip(index if absorbing else index.real, random.uniform(0.0, 400.0, count), strict=True))
        angle, wavelength = random.uniform(0.0, 89.0), random.uniform(380.0, 780.0)
        found = spectra(
            layers, wavelength_nm=wavelength, substrate_index=substrate, incident_index=incident, angle_deg=angle
        )
        expected = reference(layers, substrate, incident, angle, wavelength)
        same(np.array(found)[:, 0, 0, 0], expected)


def test_a_wave_that_is_evanescent_in_a_layer_or_beyond_equals_tmm() -> None:
    random = np.random.default_rng(20260102)
    for _ in range(60):
        layers = [(random.uniform(0.3, 2.4), random.uniform(0.0, 200.0)) for _ in range(3)]
        substrate = random.uniform(0.4, 1.8)
        found = spectra(layers, wavelength_nm=550.0, substrate_index=substrate, angle_deg=60.0)
        same(np.array(found)[:, 0, 0, 0], reference(layers, substrate, 1.0, 60.0, 550.0))


def test_total_reflection_sends_nothing_on() -> None:
    reflectance, transmittance = spectra([(1.38, 99.0)], substrate_index=0.8, incident_index=1.5, angle_deg=70.0)
    same(reflectance, 1.0)
    same(transmittance, 0.0)


def test_a_layer_at_its_own_critical_angle_is_the_limit_of_its_neighbours() -> None:
    # sin 30 degrees is 0.5: the wave runs along the layer; continuity in the index is the check
    edge, near = (
        np.array(spectra([(index, 80.0)], substrate_index=1.5, angle_deg=30.0))
        for index in (np.sin(np.radians(30.0)), 0.5 + 1e-9)
    )
    assert np.all(np.isfinite(edge))
    np.testing.assert_allclose(edge, near, rtol=0.0, atol=1e-6)


def test_an_opaque_metal_stays_finite_and_passes_nothing() -> None:
    # R of bulk silver-like 0.05 + 3i by Fresnel for a complex index, ((1-n)/(1+n))^2 in modulus
    reflectance, transmittance = spectra([(0.05 + 3.0j, 1e5)], substrate_index=1.5)
    same(reflectance, abs((1.0 - (0.05 + 3.0j)) / (1.0 + (0.05 + 3.0j))) ** 2)
    np.testing.assert_array_equal(transmittance, 0.0)


# ---- shapes ----------------------------------------------------------------------------------------------------------


@pytest.mark.parametrize("k", [0.0, 0.01])
def test_all_axes_at_once_equal_one_point_at_a_time(k: float) -> None:
    random = np.random.default_rng(20260103)
    wavelength, angle = np.linspace(380.0, 780.0, 401), np.linspace(0.0, 80.0, 23)  # more than one block each way
    index = random.uniform(1.3, 2.5, (5, 3, 401)) + 1j * k
    thickness = random.uniform(0.0, 300.0, (5, 3))
    substrate = random.uniform(1.4, 1.8, (5, 401))
    found = np.array(
        stack_spectra(
            wavelength, layer_index=index, layer_thickness_nm=thickness, substrate_index=substrate, angle_deg=angle
        )
    )
    assert found.shape == (2, 5, 23, 401, 2)
    for stack, at_angle, at_wavelength in [(0, 0, 0), (4, 22, 400), (2, 11, 137), (3, 1, 399), (1, 10, 205)]:
        layers = list(zip(index[stack, :, at_wavelength], thickness[stack], strict=True))
        expected = reference(layers, substrate[stack, at_wavelength], 1.0, angle[at_angle], wavelength[at_wavelength])
        same(found[:, stack, at_angle, at_wavelength], expected)


def test_what_does_not_vary_may_be_given_once() -> None:
    wavelength, thickness = WAVELENGTHS_NM[::100], np.array([[90.0, 20.0], [60.0, 110.0]])
    short = stack_spectra(
        wavelength,
        layer_index=[[1.46], [2.3]],
        layer_thickness_nm=thickness,
        substrate_index=1.6,
        angle_deg=[0.0, 40.0],
    )
    full = stack_spectra(
        wavelength,
        layer_index=np.broadcast_to(np.array([1.46, 2.3])[None, :, None], (2, 2, 5)),
        layer_thickness_nm=thickness,
        substrate_index=np.full((2, 5), 1.6),
        incident_index=np.ones(5),
        angle_deg=[0.0, 40.0],
    )
    np.testing.assert_array_equal(short, full)


def test_a_bare_face_is_fresnel() -> None:
    reflectance, transmittance = stack_spectra(
        [500.0, 600.0], layer_index=[], layer_thickness_nm=[], substrate_index=1.6, angle_deg=[0.0, 56.0]
    )
    expected = fresnel_reflectance([0.0, 56.0], substrate_index=1.6)[None, :, None, :]
    same(reflectance, np.broadcast_to(expected, (1, 2, 2, 2)))
    same(transmittance, 1.0 - np.broadcast_to(expected, (1, 2, 2, 2)))


# ---- identities ------------------------------------------------------------------------------------------------------


@fixed
@given(layer_lists, st.floats(1.3, 1.9), angles)
def test_nothing_is_lost_without_absorption(layers: list[tuple[float, float]], substrate: float, angle: float) -> None:
    reflectance, transmittance = spectra(layers, substrate_index=substrate, angle_deg=angle)
    same(reflectance + transmittance, 1.0)


@fixed
@given(layer_lists, st.floats(1.3, 1.9), angles)
def test_complex_arithmetic_gives_what_real_arithmetic_gives(
    layers: list[tuple[float, float]], substrate: float, angle: float
) -> None:
    real = spectra(layers, substrate_index=substrate, angle_deg=angle)
    # k = 1e-300 takes the complex path and absorbs nothing
    complex_ = spectra(layers, substrate_index=substrate + 1e-300j, angle_deg=angle)
    same(real, complex_)


@fixed
@given(layer_lists, st.floats(1.3, 1.9), angles)
def test_without_absorption_a_face_reflects_alike_from_inside(
    layers: list[tuple[float, float]], substrate: float, angle: float
) -> None:
    outside = spectra(layers, substrate_index=substrate, angle_deg=angle)
    inside = spectra(layers[::-1], substrate_index=1.0, incident_index=substrate, angle_deg=angle)
    same(outside, inside)


@fixed
@given(layer_lists, st.floats(0.0, 0.4), angles)
def test_a_reversed_absorbing_stack_passes_the_same_light(
    layers: list[tuple[float, float]], k: float, angle: float
) -> None:
    # Reciprocity: T is the same from both sides, R need not be (Macleod, chapter 2)
    absorbing = [(index + 1j * k, thickness) for index, thickness in layers]
    outside = spectra(absorbing, substrate_index=1.6, angle_deg=angle)[1]
    inside = spectra(absorbing[::-1], substrate_index=1.0, incident_index=1.6, angle_deg=angle)[1]
    same(outside, inside)


@fixed
@given(layer_lists, st.integers(0, 8), st.floats(1.3, 2.6), angles)
def test_a_layer_of_no_thickness_is_not_there(
    layers: list[tuple[float, float]], place: int, index: float, angle: float
) -> None:
    padded = [*layers[:place], (index, 0.0), *layers[place:]]
    same(
        spectra(padded, substrate_index=1.6, angle_deg=angle),
        spectra(layers, substrate_index=1.6, angle_deg=angle),
    )


@fixed
@given(layer_lists, st.floats(0.0, 0.3))
def test_s_and_p_agree_at_normal_incidence(layers: list[tuple[float, float]], k: float) -> None:
    absorbing = [(index + 1j * k, thickness) for index, thickness in layers]
    for part in spectra(absorbing, substrate_index=1.6):
        same(part[..., 0], part[..., 1])


@pytest.mark.parametrize("angle", [0.0, 35.0, 70.0])
def test_a_half_wave_is_absent_at_its_wavelength(angle: float) -> None:
    # Phase thickness pi gives the unit matrix with sign -1 (Macleod, chapter 2)
    cosine = np.sqrt(1.0 - (np.sin(np.radians(angle)) / 2.1) ** 2)
    half_wave = (2.1, 550.0 / (2.0 * 2.1 * cosine))
    layers = [(1.38, 70.0), (1.9, 33.0)]
    same(
        spectra([layers[0], half_wave, layers[1]], wavelength_nm=550.0, substrate_index=1.6, angle_deg=angle),
        spectra(layers, wavelength_nm=550.0, substrate_index=1.6, angle_deg=angle),
    )


# ---- closed forms and published values -------------------------------------------------------------------------------


def at_550(layers: list[tuple[float, float]], substrate: float) -> float:
    """R at 550 nm and normal incidence."""
    return float(spectra(layers, wavelength_nm=550.0, substrate_index=substrate)[0][0, 0, 0, 0])


def test_a_quarter_wave_of_magnesium_fluoride_on_crown() -> None:
    # Closed form ((ns - n1^2)/(ns + n1^2))^2: 1.26 % for 1.38 on 1.52 at 550 nm
    found = at_550([(1.38, 550.0 / (4.0 * 1.38))], 1.52)
    assert found == pytest.approx(((1.52 - 1.38**2) / (1.52 + 1.38**2)) ** 2, rel=1e-12)
    assert found == pytest.approx(0.0126, abs=5e-5)


def test_a_quarter_wave_is_99_6_nm_of_index_1_38() -> None:
    # Quarter-wave of 550 nm: optical 137.5 nm, physical 99.6 nm (common practice, no source): R is least there
    thickness = np.arange(80.0, 120.0, 0.1)
    reflectance, _ = stack_spectra(550.0, layer_index=1.38, layer_thickness_nm=thickness[:, None], substrate_index=1.52)
    assert thickness[reflectance[:, 0, 0, 0].argmin()] == pytest.approx(99.6, abs=0.05)


@pytest.mark.parametrize(("film", "substrate"), [(1.234, 1.523), (1.38, 1.904)])
def test_the_ideal_single_film_is_the_root_of_the_index(film: float, substrate: float) -> None:
    # 1.234 for 1.523, and a substrate of 1.904 for 1.38 (common practice, no source): R vanishes where ns = n1^2;
    # the last printed digit leaves R below (0.0005 x 1.5 / 3)^2
    assert at_550([(film, 550.0 / (4.0 * film))], substrate) < 2.5e-7


def test_a_v_coat_reflects_nothing_at_its_wavelength() -> None:
    # Orfanidis, Electromagnetic Waves and Antennas (from memory): optical thickness 0.3294 and 0.0453 wave
    assert at_550([(1.38, 0.3294 * 550.0 / 1.38), (2.45, 0.0453 * 550.0 / 2.45)], 1.50) < 1e-7


@pytest.mark.parametrize("pairs", [1, 4, 8])
def test_a_quarter_wave_mirror_follows_its_closed_form(pairs: int) -> None:
    # Macleod, chapter on quarter-wave multilayers: R = ((1 - Y)/(1 + Y))^2, Y = (nH/nL)^(2p) nH^2/ns, stack H(LH)^p
    high, low, substrate = (2.35, 550.0 / (4.0 * 2.35)), (1.35, 550.0 / (4.0 * 1.35)), 1.52
    admittance = (high[0] / low[0]) ** (2 * pairs) * high[0] ** 2 / substrate
    found = at_550([high, *[low, high] * pairs], substrate)
    assert found == pytest.approx(((1.0 - admittance) / (1.0 + admittance)) ** 2, rel=1e-12)


# ---- refusals --------------------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("wrong", "named"),
    [
        ({"layer_thickness_nm": [-1.0]}, "layer_thickness_nm"),
        ({"layer_thickness_nm": [np.nan]}, "layer_thickness_nm"),
        ({"layer_thickness_nm": [10.0 + 1.0j]}, "layer_thickness_nm"),
        ({"layer_index": [[0.0]]}, "layer_index"),
        ({"layer_index": [[np.nan]]}, "layer_index"),
        ({"layer_index": [[1.5 - 0.1j]]}, "layer_index"),
        ({"layer_index": [1.5]}, "layer_index"),
        ({"layer_index": [[1.5], [1.6]]}, "layer_index"),
        ({"layer_index": [["SiO2"]]}, "layer_index"),
        ({"layer_index": np.full((3, 1, 1), 1.5), "layer_thickness_nm": np.ones((2, 1))}, "holds 2 stacks"),
        ({"substrate_index": -1.5}, "substrate_index"),
        ({"substrate_index": [1.5, 1.6]}, "substrate_index"),
        ({"incident_index": 0.0}, "incident_index"),
        ({"incident_index": 1.5 + 0.1j}, "incident_index must be real"),
        ({"incident_index": 0.5, "angle_deg": 40.0}, "incident_index is too low"),
        ({"angle_deg": 90.0}, "angle_deg"),
        ({"angle_deg": -1.0}, "angle_deg"),
        ({"wavelength_nm": 0.0}, "wavelength_nm"),
        ({"wavelength_nm": [[550.0]]}, "wavelength_nm"),
    ],
)
def test_what_is_out_of_range_is_refused_by_name(wrong: dict[str, Any], named: str) -> None:
    good: dict[str, Any] = {"layer_index": [[1.46]], "layer_thickness_nm": [90.0], "substrate_index": 1.6}
    arguments = {"wavelength_nm": 550.0, **good, **wrong}
    with pytest.raises(ValueError, match=named):
        stack_spectra(arguments.pop("wavelength_nm"), **arguments)
