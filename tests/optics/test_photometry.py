"""Luminous means against colour-science (PyPI), which carries the CIE tables on its own."""

import colour
import numpy as np
import pytest
from colour.colorimetry import SDS_LEFS_PHOTOPIC
from numpy.typing import NDArray

from advisor.optics.grid import WAVELENGTHS_NM
from advisor.optics.photometry import (
    ILLUMINANTS,
    IlluminantName,
    illuminant,
    luminous_efficiency,
    luminous_mean,
    table,
)

ROUND_OFF = 1e-13  # relative; sums of 401 products in double precision, the reference agrees to this elsewhere
GRID = colour.SpectralShape(380, 780, 1)


def reference_illuminant(name: str) -> NDArray[np.float64]:
    """The CIE table of colour-science, its 5 nm points joined linearly as the CIE asks."""
    aligned = colour.SDS_ILLUMINANTS[name].copy().align(GRID, interpolator=colour.LinearInterpolator)
    return np.asarray(aligned.values, dtype=np.float64)


def reference_efficiency() -> NDArray[np.float64]:
    aligned = SDS_LEFS_PHOTOPIC["CIE 1924 Photopic Standard Observer"].copy().align(GRID)
    return np.asarray(aligned.values, dtype=np.float64)


def spectra(seed: int = 1) -> NDArray[np.float64]:
    return np.random.default_rng(seed).uniform(0.0, 1.0, (2, 3, 401))


def test_the_eye_is_most_sensitive_at_555_nm() -> None:
    weights = luminous_efficiency()
    assert WAVELENGTHS_NM[np.argmax(weights)] == 555.0
    assert weights.max() == 1.0  # V(555) = 1 by definition, CIE 15


def test_the_efficiency_is_the_cie_table() -> None:
    np.testing.assert_allclose(luminous_efficiency(), reference_efficiency(), rtol=ROUND_OFF)


@pytest.mark.parametrize("name", ILLUMINANTS)
def test_an_illuminant_is_the_cie_table(name: IlluminantName) -> None:
    np.testing.assert_allclose(illuminant(name), reference_illuminant(name), rtol=ROUND_OFF, atol=ROUND_OFF)


@pytest.mark.parametrize("name", ILLUMINANTS)
def test_the_luminous_reflectance_equals_the_reference(name: IlluminantName) -> None:
    cmfs = colour.MSDS_CMFS["CIE 1931 2 Degree Standard Observer"].copy().align(GRID)
    light = colour.SDS_ILLUMINANTS[name].copy().align(GRID, interpolator=colour.LinearInterpolator)
    reflectance = spectra()[0, 0]
    sd = colour.SpectralDistribution(reflectance, GRID.wavelengths)
    expected = colour.sd_to_XYZ(sd, cmfs, light, method="Integration")[1] / 100.0  # y-bar is V(lambda)
    np.testing.assert_allclose(luminous_mean(reflectance, illuminant=name), expected, rtol=ROUND_OFF)


def test_a_weighted_mean_is_the_ratio_of_two_sums() -> None:
    reflectance, weight = spectra()[0, 0], spectra(2)[0, 0]
    eye = reference_efficiency() * reference_illuminant("A")
    expected = sum(reflectance * weight * eye) / sum(weight * eye)
    np.testing.assert_allclose(luminous_mean(reflectance, illuminant="A", weight=weight), expected, rtol=1e-12)


def test_a_flat_weight_changes_nothing_and_a_flat_spectrum_is_its_own_mean() -> None:
    reflectance = spectra()
    np.testing.assert_allclose(
        luminous_mean(reflectance, weight=np.full(401, 0.3)), luminous_mean(reflectance), rtol=ROUND_OFF
    )
    np.testing.assert_allclose(luminous_mean(np.full(401, 0.04), weight=reflectance), 0.04, rtol=ROUND_OFF)


def test_leading_axes_are_kept_and_weights_broadcast() -> None:
    reflectance = spectra()
    assert luminous_mean(reflectance).shape == (2, 3)
    means = luminous_mean(reflectance, weight=spectra(3)[:, :1])
    assert means.shape == (2, 3)
    assert means[1, 2] == pytest.approx(luminous_mean(reflectance[1, 2], weight=spectra(3)[1, 0]), rel=ROUND_OFF)


def test_darkness_gives_zero_and_not_nan() -> None:
    assert luminous_mean(np.zeros(401)) == 0.0
    assert luminous_mean(np.ones(401), weight=np.zeros(401)) == 0.0


def test_what_is_not_on_the_grid_is_refused_by_name() -> None:
    with pytest.raises(ValueError, match="spectrum must have 401"):
        luminous_mean(np.ones(81))
    with pytest.raises(ValueError, match="weight must have 401"):
        luminous_mean(np.ones(401), weight=0.5)
    with pytest.raises(ValueError, match="weight must not be negative"):
        luminous_mean(np.ones(401), weight=np.full(401, -0.1))
    with pytest.raises(ValueError, match="D65, A, LED-B4"):
        illuminant("F11")  # type: ignore[arg-type]  # what a caller without a type checker may pass


def test_the_tables_are_read_once_and_cannot_be_changed() -> None:
    assert table("illuminants_cie.csv") is table("illuminants_cie.csv")
    with pytest.raises(ValueError, match="read-only"):
        luminous_efficiency()[0] = 1.0
