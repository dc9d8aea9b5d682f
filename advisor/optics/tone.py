"""From luminance to the 256 codes of a screen: the one mapping behind every picture.

A picture has two parts, after Durand & Dorsey's base and detail. The *base* is the scene without anything mirrored:
road and veil, desk, face. It is squeezed by the photographic curve of Reinhard et al., with the key of Krawczyk et al.,
and ends at code `BASE_WHITE_CODE`. The *detail* is what the lens mirrors. It is not squeezed: Ward's rule, a difference
just seen in the scene is one just seen on the screen, turns it into codes by its own threshold.

`STEPS_PER_THRESHOLD` is set so that a patch at visibility level 0.4, which the verdicts call not noticed, is one code:
the least change an 8-bit screen can make. Above level 10 (plain) codes grow with the logarithm (Weber and Fechner), so
that a strong and a very strong patch still differ. Those two are modelling choices.

What no screen shows: a lamp's true brightness and the glare it makes in the viewer's own eye.

References
----------
F. Durand and J. Dorsey, ACM Transactions on Graphics 21(3):257 (2002): base and detail.
E. Reinhard, M. Stark, P. Shirley and J. Ferwerda, ACM Transactions on Graphics 21(3):267 (2002), equation 4.
G. Krawczyk, K. Myszkowski and H.-P. Seidel, Spring Conference on Computer Graphics (2005): the key; as several public
implementations agree on it.
G. Ward, A contrast-based scalefactor for luminance display, Graphics Gems IV (1994).
IEC 61966-2-1:1999: the screen's codes.
"""

import numpy as np
from numpy.typing import ArrayLike, NDArray

from advisor.optics.colour import displayed_srgb
from advisor.optics.visibility import VERDICT_LIMITS

Floats = NDArray[np.float64]

NOT_NOTICED_LEVEL, PLAIN_LEVEL = VERDICT_LIMITS[0], VERDICT_LIMITS[-1]
STEPS_PER_THRESHOLD = 1.0 / NOT_NOTICED_LEVEL
BASE_WHITE_CODE = 190.0
"""Code of the brightest base; what is above is left for what the lens mirrors."""
LEAST_CONTRAST = 0.02
"""Least step of luminance noticed by day, Weber's fraction with some reserve: a customary figure (memory)."""


def key_krawczyk_2005(adapting_cd_m2: ArrayLike) -> Floats:
    """Return the key of a scene, 1.03 - 2/(2 + log10(L + 1)): low for the night, high for the day.

    Parameters
    ----------
    adapting_cd_m2 : array_like
        Luminance the eye is adapted to, 0 or more.

    Raises
    ------
    ValueError
        If it is negative.
    """
    adapting = np.asarray(adapting_cd_m2, dtype=np.float64)
    if not (adapting >= 0.0).all():
        raise ValueError("adapting_cd_m2 must be 0 or more")
    return np.asarray(1.03 - 2.0 / (2.0 + np.log10(adapting + 1.0)))


def photographic_reinhard_2002(
    luminance_cd_m2: ArrayLike, *, adapting_cd_m2: float, white_cd_m2: float = np.inf
) -> Floats:
    """Return linear display luminance, 0 to 1: L (1 + L/W^2)/(1 + L), L and W in units of adapting/key.

    Parameters
    ----------
    luminance_cd_m2 : array_like
        0 or more.
    adapting_cd_m2 : float
        Stands for the log-average of the picture, above 0; it does not change with the lens.
    white_cd_m2 : float
        Least luminance shown as full white; infinity for none.

    Raises
    ------
    ValueError
        If a luminance is negative or the adapting one is not above 0.
    """
    luminance = np.asarray(luminance_cd_m2, dtype=np.float64)
    if not (luminance >= 0.0).all():
        raise ValueError("luminance_cd_m2 must be 0 or more")
    if not adapting_cd_m2 > 0.0:
        raise ValueError("adapting_cd_m2 must be above 0")
    scale = float(key_krawczyk_2005(adapting_cd_m2)) / adapting_cd_m2
    scaled, white = luminance * scale, white_cd_m2 * scale
    return np.asarray(np.minimum(scaled * (1.0 + scaled / white**2) / (1.0 + scaled), 1.0))


def srgb_encoded(linear: ArrayLike) -> Floats:
    """Return values of 0 to 1 through the transfer function of IEC 61966-2-1."""
    value = np.asarray(linear, dtype=np.float64)
    return np.where(value <= 0.0031308, 12.92 * value, 1.055 * np.maximum(value, 0.0) ** (1.0 / 2.4) - 0.055)


def base_codes(luminance_cd_m2: Floats, *, paint: Floats, adapting_cd_m2: float, white_cd_m2: float = np.inf) -> Floats:
    """Return the codes of the base, (..., 3), not rounded.

    Parameters
    ----------
    luminance_cd_m2 : ndarray, (...)
    paint : ndarray, (..., 3)
        Linear colour of the surface; only its ratios count, as it is brought to luminance 1.
    adapting_cd_m2, white_cd_m2 : float
        As in `photographic_reinhard_2002`.
    """
    shown = photographic_reinhard_2002(luminance_cd_m2, adapting_cd_m2=adapting_cd_m2, white_cd_m2=white_cd_m2)
    even = paint / (paint @ np.array([0.2126, 0.7152, 0.0722]))[..., None]
    return BASE_WHITE_CODE * srgb_encoded(np.minimum(shown[..., None] * even, 1.0))


def steps_above(visibility_level: ArrayLike) -> Floats:
    """Return by how many codes a patch stands above its base: in proportion up to plain, then by the logarithm.

    Parameters
    ----------
    visibility_level : array_like
        Luminance over its threshold, 0 or more.

    Raises
    ------
    ValueError
        If a level is negative.
    """
    level = np.asarray(visibility_level, dtype=np.float64)
    if not (level >= 0.0).all():
        raise ValueError("visibility_level must be 0 or more")
    slow = PLAIN_LEVEL * (1.0 + np.log(np.maximum(level, PLAIN_LEVEL) / PLAIN_LEVEL))
    return np.asarray(STEPS_PER_THRESHOLD * np.where(level <= PLAIN_LEVEL, level, slow))


def light_paint(xyz_values: ArrayLike) -> Floats:
    """Return the colour of mirrored light as shares of its codes, (..., 3), the greatest 1.

    A deep colour is shown paler (`colour.shown_xyz`) and, as no channel gets more than the patch's codes, a little
    fainter than white light of the same luminance.
    """
    shown = displayed_srgb(xyz_values)
    return np.asarray(shown / shown.max(axis=-1, keepdims=True))


def finished(codes: Floats) -> NDArray[np.uint8]:
    """Return whole codes of 0 to 255."""
    return np.asarray(np.clip(np.rint(codes), 0.0, 255.0).astype(np.uint8))
