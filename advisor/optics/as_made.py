"""What coatings turn out like: layer thicknesses vary from run to run and from layer to layer.

The spread is a modelling choice, not a measurement of any plant: a run's layers are all thicker or thinner together
(standard deviation 2 %), and each layer errs a little on its own (1 %). The samples are drawn by a fixed seed, so that
the same film always gives the same figures.
"""

from collections.abc import Sequence
from typing import Final

import numpy as np
from numpy.typing import ArrayLike, NDArray

from advisor.optics.colour import DISPLAYED_Y, cielab, hue_words, white
from advisor.optics.photometry import IlluminantName, luminous_mean

SEED: Final = 20_120
SAMPLES: Final = 64
PERCENTILES: Final = (5.0, 50.0, 95.0)
MATCH_WITHIN: Final = 10.0
"""Greatest CIELAB difference of two reflections that pass for a pair across a counter (a modelling choice)."""


def thickness_factors(
    layers: int, *, samples: int = SAMPLES, run_sd: float = 0.02, layer_sd: float = 0.01, seed: int = SEED
) -> NDArray[np.float64]:
    """Factors on the nominal thickness of each layer in each sample.

    A factor is 1 + run_sd g + layer_sd e, g drawn once a sample (a coating run), e once a layer, both standard normal.

    Parameters
    ----------
    layers
        Number of layers, 0 or more.
    samples
        1 or more.
    run_sd, layer_sd
        Standard deviations as fractions, 0 to 0.2.
    seed
        The same seed draws the same errors, also for other standard deviations.

    Returns
    -------
    (samples, layers), never below 0.

    Raises
    ------
    ValueError
        Naming the parameter that is out of range.
    """
    if layers < 0:
        raise ValueError("layers must not be negative.")
    if samples < 1:
        raise ValueError("samples must be 1 or more.")
    for name, deviation in (("run_sd", run_sd), ("layer_sd", layer_sd)):
        if not 0.0 <= deviation <= 0.2:
            raise ValueError(f"{name} must lie between 0 and 0.2.")
    generator = np.random.default_rng(seed)
    run = generator.standard_normal((samples, 1))
    own = generator.standard_normal((samples, layers))
    return np.maximum(0.0, 1.0 + run_sd * run + layer_sd * own)


def spread(values: ArrayLike, *, percentiles: Sequence[float] = PERCENTILES) -> NDArray[np.float64]:
    """Percentiles over the samples, which stand on the first axis; linear between ranks.

    Parameters
    ----------
    values
        (samples, ...), such as rho_v of each sample.
    percentiles
        0 to 100.

    Returns
    -------
    (percentiles, ...).
    """
    return np.asarray(np.percentile(np.asarray(values, dtype=np.float64), percentiles, axis=0), dtype=np.float64)


def luminous_spread(spectra: ArrayLike, *, illuminant: IlluminantName = "D65") -> NDArray[np.float64]:
    """5, 50 and 95 % of the luminous reflectance over the samples.

    Parameters
    ----------
    spectra
        (samples, ..., 401).

    Returns
    -------
    (3, ...), fractions.
    """
    return spread(luminous_mean(spectra, illuminant=illuminant))


def hue_shares(xyz_values: ArrayLike) -> dict[str, float]:
    """Share of the samples that carry each hue word, most common first.

    Parameters
    ----------
    xyz_values
        (samples, 3).

    Returns
    -------
    Word to share; the shares add up to 1.
    """
    words, counts = np.unique(hue_words(xyz_values), return_counts=True)
    order = np.argsort(-counts, kind="stable")
    return {str(words[place]): float(counts[place] / counts.sum()) for place in order}


def pair_differences(xyz_values: ArrayLike) -> NDArray[np.float64]:
    """CIELAB difference of every two lenses coated in different runs, as they look side by side.

    The two mirror images are raised together until their mean luminance is the displayed one (Y = 0.4), as the eye
    adapts to the dim pair, then compared by the colour difference of 1976: a brighter reflection counts as well as
    another hue.

    Parameters
    ----------
    xyz_values
        (samples, 3), each sample a lens of its own run; 2 samples or more.

    Returns
    -------
    (samples (samples - 1)/2,).

    Raises
    ------
    ValueError
        When there are fewer than two samples.

    References
    ----------
    ISO/CIE 11664-4:2019 (the difference); the common raising is a modelling choice.
    """
    values = np.asarray(xyz_values, dtype=np.float64)
    if values.ndim != 2 or len(values) < 2:
        raise ValueError("xyz_values must hold two samples or more, (samples, 3).")
    one, other = np.triu_indices(len(values), k=1)
    mean = (values[one, 1:2] + values[other, 1:2]) / 2.0
    scale = np.where(mean > 0.0, DISPLAYED_Y * white()[1] / np.where(mean > 0.0, mean, 1.0), 1.0)
    step = cielab(scale * values[one]) - cielab(scale * values[other])
    difference: NDArray[np.float64] = np.sqrt(np.sum(step**2, axis=-1))
    return difference


def match_probability(xyz_values: ArrayLike, *, within: float = MATCH_WITHIN) -> float:
    """How often two separately coated lenses pass for a pair: the share of pairs that differ by at most `within`.

    Parameters
    ----------
    xyz_values
        (samples, 3): the reflections of the as-made samples.
    within
        CIELAB units, not negative.

    Returns
    -------
    0 to 1. Two lenses of one run share the run's error and match more often.
    """
    if not within >= 0.0:
        raise ValueError("within must not be negative.")
    return float(np.mean(pair_differences(xyz_values) <= within))
