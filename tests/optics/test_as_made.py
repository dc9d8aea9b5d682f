"""As-made spread: statistics against theory, repeatability, and what a pair is."""

import colour
import numpy as np
import pytest
from numpy.typing import NDArray

from advisor.optics.as_made import (
    hue_shares,
    luminous_spread,
    match_probability,
    pair_differences,
    spread,
    thickness_factors,
)
from advisor.optics.colour import white, xyz
from advisor.optics.grid import WAVELENGTHS_NM
from advisor.optics.layers import stack_arrays
from advisor.optics.surface import film_surface

LAYERS = [("SiO2", 90.0), ("TiO2", 110.0), ("SiO2", 33.0), ("TiO2", 12.0)]


def spectra(scale: float = 1.0) -> NDArray[np.float64]:
    """Reflectance of 64 samples of one film, the spread scaled."""
    index, thickness = stack_arrays(LAYERS, wavelength_nm=WAVELENGTHS_NM)
    factors = thickness_factors(4, run_sd=0.02 * scale, layer_sd=0.01 * scale)
    return film_surface(1.6, layer_index=index, layer_thickness_nm=factors * thickness).outside


def test_the_errors_have_the_stated_mean_spread_and_correlation() -> None:
    samples = 200_000
    factors = thickness_factors(3, samples=samples, run_sd=0.02, layer_sd=0.01, seed=3)
    # Theory: mean 1, variance 0.02^2 + 0.01^2, covariance of two layers 0.02^2. Bounds: five standard errors of each
    # (mean: sd/sqrt(N); variance: var sqrt(2/N); covariance: sqrt((var^2 + cov^2)/N)).
    variance, common = 0.02**2 + 0.01**2, 0.02**2
    np.testing.assert_allclose(factors.mean(axis=0), 1.0, atol=5.0 * np.sqrt(variance / samples))
    covariance = np.cov(factors.T)
    np.testing.assert_allclose(np.diag(covariance), variance, atol=5.0 * variance * np.sqrt(2.0 / samples))
    off = covariance[np.triu_indices(3, k=1)]
    np.testing.assert_allclose(off, common, atol=5.0 * np.sqrt((variance**2 + common**2) / samples))


def test_a_run_moves_all_layers_together_when_no_layer_errs_alone() -> None:
    factors = thickness_factors(4, layer_sd=0.0)
    np.testing.assert_array_equal(factors, np.repeat(factors[:, :1], 4, axis=1))
    assert factors[:, 0].std() > 0.01


def test_the_default_sample_repeats_and_another_seed_does_not() -> None:
    np.testing.assert_array_equal(thickness_factors(5), thickness_factors(5))
    assert thickness_factors(5).shape == (64, 5)
    assert not np.allclose(thickness_factors(5), thickness_factors(5, seed=1))


def test_no_spread_is_the_design_itself() -> None:
    np.testing.assert_array_equal(thickness_factors(3, run_sd=0.0, layer_sd=0.0), np.ones((64, 3)))
    low, middle, high = luminous_spread(spectra(0.0))
    assert low == middle == high
    index, thickness = stack_arrays(LAYERS, wavelength_nm=WAVELENGTHS_NM)
    nominal = film_surface(1.6, layer_index=index, layer_thickness_nm=thickness).luminous_reflectance()
    assert middle == pytest.approx(nominal, rel=1e-12)
    assert match_probability(xyz(spectra(0.0))) == 1.0


def test_a_wider_spread_of_thickness_is_a_wider_spread_of_reflectance_and_fewer_pairs() -> None:
    scales = (0.0, 0.5, 1.0, 2.0)
    widths = [float(np.ptp(luminous_spread(spectra(scale)))) for scale in scales]
    pairs = [match_probability(xyz(spectra(scale))) for scale in scales]
    assert widths == sorted(widths)
    assert len(set(widths)) == 4
    assert pairs == sorted(pairs, reverse=True)


def test_percentiles_are_those_of_the_normal_distribution() -> None:
    # 5 and 95 % of a normal distribution lie 1.6449 standard deviations out; sampling error of such a percentile
    # sqrt(p(1-p)/N)/density, density 0.1031 there: five of them.
    samples = 200_000
    factors = thickness_factors(1, samples=samples, run_sd=0.02, layer_sd=0.0, seed=5)[:, 0]
    bound = 5.0 * 0.02 * np.sqrt(0.05 * 0.95 / samples) / 0.1031
    np.testing.assert_allclose(spread(factors), [1 - 1.6449 * 0.02, 1.0, 1 + 1.6449 * 0.02], atol=bound)


def test_spread_keeps_the_axes_behind_the_samples() -> None:
    values = np.arange(101.0)[:, None] * np.array([1.0, 2.0])
    np.testing.assert_allclose(spread(values), [[5.0, 10.0], [50.0, 100.0], [95.0, 190.0]])


def test_hue_shares_count_the_words() -> None:
    rgb = [(255, 0, 0), (65, 105, 225), (65, 105, 225), (128, 128, 128)]  # CSS red, royalblue twice, gray
    shares = hue_shares(np.stack([colour.sRGB_to_XYZ(np.array(one) / 255.0) for one in rgb]))
    assert shares == {"blue": 0.5, "neutral": 0.25, "red": 0.25}
    assert next(iter(shares)) == "blue"


def test_the_difference_of_a_pair_is_cie_1976_after_a_common_raise() -> None:
    # colour-science, delta_E CIE 1976, on XYZ scaled by hand so that the two have a mean Y of 0.4
    pair = np.stack([white() * 0.004, white() * 0.006 * np.array([1.05, 1.0, 0.9])])
    xy = white()[:2] / white().sum()
    one, other = (colour.XYZ_to_Lab(values / 100.0 * 0.4 / 0.005, xy) for values in pair)
    expected = colour.difference.delta_E_CIE1976(one, other)
    np.testing.assert_allclose(pair_differences(pair), [expected], rtol=1e-9)
    assert match_probability(pair, within=float(expected) + 0.001) == 1.0
    assert match_probability(pair, within=float(expected) - 0.001) == 0.0


def test_every_pair_counts_once_and_dark_pairs_match() -> None:
    assert pair_differences(np.ones((64, 3))).shape == (64 * 63 // 2,)
    np.testing.assert_array_equal(pair_differences(np.zeros((3, 3))), np.zeros(3))


@pytest.mark.parametrize(
    ("arguments", "named"),
    [({"samples": 0}, "samples"), ({"run_sd": -0.1}, "run_sd"), ({"layer_sd": 0.5}, "layer_sd")],
)
def test_what_is_out_of_range_is_named(arguments: dict[str, float], named: str) -> None:
    with pytest.raises(ValueError, match=named):
        thickness_factors(3, **arguments)  # type: ignore[arg-type]  # one table of keywords of several types
    with pytest.raises(ValueError, match="layers"):
        thickness_factors(-1)
    with pytest.raises(ValueError, match="xyz_values"):
        pair_differences(np.ones((1, 3)))
    with pytest.raises(ValueError, match="within"):
        match_probability(np.ones((2, 3)), within=-1.0)
