"""Internal transmittance from quoted figures: closed form, round trips, limits."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from advisor.errors import TwolightError
from advisor.optics.grid import WAVELENGTHS_NM
from advisor.optics.layers import stack_arrays
from advisor.optics.media import lens_index
from advisor.optics.photometry import luminous_mean
from advisor.optics.surface import bare_surface, film_surface, whole_lens
from advisor.optics.tint import (
    TintOutOfReach,
    finished_internal_transmittance,
    polarising_axes,
    tint_internal_transmittance,
)


def closed_form(transmittance: float, r: float) -> float:
    """Positive root of T r^2 tau^2 + (1 - r)^2 tau - T = 0, two equal faces of reflectance r, all bounces."""
    through = (1.0 - r) ** 2
    return float((-through + np.sqrt(through**2 + 4.0 * (transmittance * r) ** 2)) / (2.0 * transmittance * r**2))


def test_a_tint_of_85_percent_on_index_15_has_an_internal_transmittance_of_92_percent() -> None:
    tau = tint_internal_transmittance(0.85, substrate_index=1.5)
    assert tau == pytest.approx(0.92, abs=0.005)  # computed outside this program; half the last digit
    # The root itself loses digits by cancellation to about 1e-13.
    assert tau == pytest.approx(closed_form(0.85, 0.04), rel=1e-11)


@given(st.floats(0.02, 0.85), st.floats(1.45, 1.9))
def test_at_constant_index_it_is_the_closed_form(transmittance: float, index: float) -> None:
    r = ((index - 1.0) / (index + 1.0)) ** 2
    most = (1.0 - r) / (1.0 + r)  # Stokes: untinted, all bounces
    wanted = min(transmittance, most)
    tau = float(tint_internal_transmittance(wanted, substrate_index=index))
    # Cancellation in the reference grows as 1/(T r)^2.
    assert tau == pytest.approx(closed_form(wanted, r), rel=1e-9)


def test_with_dispersion_the_lens_of_that_tint_passes_the_quoted_light() -> None:
    index = lens_index(WAVELENGTHS_NM, index=1.74, abbe=33.0)
    face = bare_surface(index)
    quoted = np.array([0.08, 0.5, 0.8])
    tau = tint_internal_transmittance(quoted, substrate_index=index)
    _, transmittance = whole_lens(face, face, internal_transmittance=tau[:, None])
    np.testing.assert_allclose(luminous_mean(transmittance), quoted, rtol=1e-14)


def test_the_same_figure_means_a_darker_tint_when_it_is_of_the_finished_coated_lens() -> None:
    layers, nm = stack_arrays([("MgF2", 99.6)], wavelength_nm=WAVELENGTHS_NM)
    coated = film_surface(1.6, layer_index=layers, layer_thickness_nm=nm)
    tau = finished_internal_transmittance(0.85, front=coated, back=bare_surface(1.6))
    _, transmittance = whole_lens(coated, bare_surface(1.6), internal_transmittance=tau)
    assert luminous_mean(transmittance) == pytest.approx(0.85, rel=1e-14)
    assert tau < tint_internal_transmittance(0.85, substrate_index=1.6)


def test_an_untinted_lens_is_the_limit_and_no_more_can_be_had() -> None:
    r = 0.04
    most = (1.0 - r) / (1.0 + r)
    assert tint_internal_transmittance(most, substrate_index=1.5) == pytest.approx(1.0, rel=1e-12)
    with pytest.raises(TintOutOfReach, match=r"0\.930 is out of reach.*0\.923.*finished") as caught:
        tint_internal_transmittance(0.93, substrate_index=1.5)
    assert isinstance(caught.value, ValueError)
    assert isinstance(caught.value, TwolightError)
    assert caught.value.greatest == pytest.approx(most, rel=1e-12)


@pytest.mark.parametrize("figure", [0.0, -0.1, float("nan")])
def test_nothing_or_less_is_refused(figure: float) -> None:
    with pytest.raises(ValueError, match="luminous_transmittance"):
        tint_internal_transmittance(figure, substrate_index=1.5)


@given(st.floats(0.0, 1.0), st.floats(1.0, 1e6))
def test_the_two_axes_have_the_tints_mean(tau: float, ratio: float) -> None:
    bright, dark = polarising_axes(tau, axis_ratio=ratio)
    assert (bright + dark) / 2.0 == pytest.approx(tau, abs=1e-15)
    assert dark >= 0.0
    assert dark <= bright + 1e-15
    if bright < 1.0:
        assert bright == pytest.approx(ratio * dark, rel=1e-6, abs=1e-12)


def test_a_perfect_polariser_is_the_limit_of_the_ratio() -> None:
    bright, dark = polarising_axes(0.3, axis_ratio=float("inf"))
    assert (float(bright), float(dark)) == (0.6, 0.0)
    with pytest.raises(ValueError, match="axis_ratio"):
        polarising_axes(0.3, axis_ratio=0.5)
    with pytest.raises(ValueError, match="internal_transmittance"):
        polarising_axes(1.3)
