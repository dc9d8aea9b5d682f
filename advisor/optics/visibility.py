"""Whether a patch of light is seen: Adrian's threshold, the level above it and the words for the level."""

import numpy as np
from numpy.typing import ArrayLike, NDArray

Floats = NDArray[np.float64]

NEAR_CERTAIN_K = 2.6
"""Adrian's factor for near-certain detection; 50 % detection is 1/2.6 of it, visibility level 0.385."""

VERDICTS = ("not noticed", "at the limit", "only if looked for", "noticeable", "plain")
VERDICT_LIMITS = (0.4, 1.0, 3.0, 10.0)
"""Visibility levels at which the next word begins; a modelling choice of this program."""

HAZE_VERDICT_CAP = VERDICTS.index("noticeable")
LARGEST_TARGET_ARCMIN = 60.0
SMALLEST_TARGET_ARCMIN = 0.1
DARKEST_BACKGROUND_CD_M2 = 1e-6
ROAD_RANGE_CD_M2 = 10.0
"""Background above which the threshold model is past the road scenes it was made for; a modelling choice."""


def _flux_and_luminance_functions(background_cd_m2: Floats) -> tuple[Floats, Floats]:
    """Return Adrian's square roots of Phi and of L, in the three pieces of the background luminance."""
    log = np.log10(background_cd_m2)
    bright, dim = background_cd_m2 >= 0.6, background_cd_m2 <= 0.00418
    root_phi = np.where(
        bright,
        np.log10(4.1925 * background_cd_m2**0.1556) + 0.1684 * background_cd_m2**0.5867,
        10.0 ** np.where(dim, 0.028 + 0.173 * log, -0.072 + 0.3372 * log + 0.0866 * log**2),
    )
    root_l = np.where(
        bright,
        0.05946 * background_cd_m2**0.466,
        10.0 ** np.where(dim, -0.891 + 0.5275 * log + 0.0227 * log**2, -1.256 + 0.319 * log),
    )
    return root_phi, root_l


def _exposure_term(size_arcmin: Floats, background_cd_m2: Floats) -> Floats:
    """Return Adrian's a(alpha, L), seconds: the threshold grows by (a + t)/t."""
    size = np.log10(size_arcmin) + 0.523
    a_size = 0.36 - 0.0972 * size**2 / (size**2 - 2.513 * size + 2.7895)
    level = np.log10(background_cd_m2) + 6.0
    a_level = 0.355 - 0.1217 * level**2 / (level**2 - 10.4 * level + 52.28)
    return np.asarray(np.hypot(a_size, a_level) / 2.1, dtype=np.float64)


def _age_factor(age_y: ArrayLike) -> Floats:
    age = np.clip(np.asarray(age_y, dtype=np.float64), 23.0, 75.0)
    return np.where(age <= 64.0, (age - 19.0) ** 2 / 2160.0 + 0.99, (age - 56.6) ** 2 / 116.3 + 1.43)


def threshold_adrian_1989(
    background_cd_m2: ArrayLike, *, size_arcmin: ArrayLike, age_y: ArrayLike, exposure_s: ArrayLike = 2.0
) -> Floats:
    """Least luminance difference of a brighter disc (positive contrast) that is seen almost surely.

    Parameters
    ----------
    background_cd_m2 : array_like
        Luminance behind the target, 0 or more; the log terms take it as at least 1e-6.
    size_arcmin : array_like
        Diameter of the target, taken as 0.1..60.
    age_y : array_like
        Years, clamped to 23..75.
    exposure_s : array_like
        Time to look, above 0.

    Returns
    -------
    ndarray
        cd/m2.

    Notes
    -----
    The three pieces do not join smoothly at 0.00418 and 0.6 cd/m2, nor does the age factor at 64 years.

    References
    ----------
    W. Adrian, Lighting Research & Technology 21:181 (1989); the equations as two public implementations agree on them.
    """
    background = np.asarray(background_cd_m2, dtype=np.float64)
    size, exposure = np.asarray(size_arcmin, dtype=np.float64), np.asarray(exposure_s, dtype=np.float64)
    if not (background >= 0.0).all():
        raise ValueError("background_cd_m2 must be 0 or more")
    if not (size >= 0.0).all():
        raise ValueError("size_arcmin must be 0 or more")
    if not (exposure > 0.0).all():
        raise ValueError("exposure_s must be above 0")
    background = np.maximum(background, DARKEST_BACKGROUND_CD_M2)
    size = np.clip(size, SMALLEST_TARGET_ARCMIN, LARGEST_TARGET_ARCMIN)
    root_phi, root_l = _flux_and_luminance_functions(background)
    steady = NEAR_CERTAIN_K * (root_phi / size + root_l) ** 2
    slow = 1.0 + _exposure_term(size, background) / exposure
    return np.asarray(steady * slow * _age_factor(age_y), dtype=np.float64)


def verdict_code(visibility_level: ArrayLike, *, haze: ArrayLike = False) -> NDArray[np.intp]:
    """Return the place in ``VERDICTS`` for a visibility level; haze is never called more than "noticeable".

    Parameters
    ----------
    visibility_level : array_like
        Ghost luminance over threshold, 0 or more.
    haze : array_like of bool
    """
    code = np.searchsorted(VERDICT_LIMITS, np.asarray(visibility_level, dtype=np.float64), side="right")
    return np.asarray(np.where(haze, np.minimum(code, HAZE_VERDICT_CAP), code), dtype=np.intp)


def is_haze(size_deg: ArrayLike, *, separation_deg: ArrayLike) -> NDArray[np.bool_]:
    """Tell where a ghost is haze: wider than 60 arcmin (geometric mean), or reaching over its own source.

    Parameters
    ----------
    size_deg : array_like, (..., 2)
    separation_deg : array_like, (...)
        Middle of the ghost to the source; infinity where the source is not in view (light from behind).
    """
    diameter = np.sqrt(np.prod(np.asarray(size_deg, dtype=np.float64), axis=-1))
    too_wide = diameter * 60.0 > LARGEST_TARGET_ARCMIN
    return np.asarray(too_wide | (diameter / 2.0 > np.asarray(separation_deg)), dtype=np.bool_)
