"""The colour of reflected light: tristimulus values, CIELAB, a plain hue word and a patch for the screen.

A coated lens reflects half a per cent or so: truly shown it would be nearly black. The word and the patch therefore
take the *chromaticity* of the reflection and show it at one stated lightness (Y = 0.4 of white). The patch says which
colour, never how bright.
"""

from typing import Literal, get_args

import numpy as np
from numpy.typing import ArrayLike, NDArray

from advisor.optics.photometry import IlluminantName, on_grid, table
from advisor.optics.photometry import illuminant as spectral_power

HueWord = Literal["neutral", "red", "gold", "green", "teal", "blue", "purple", "pink"]
HUE_WORDS: tuple[HueWord, ...] = get_args(HueWord)

DISPLAYED_Y = 0.4  # a modelling choice: light enough to tell hues apart, dark enough for a dark ink border
NEUTRAL_BELOW_CHROMA = 8.0  # CIELAB chroma at the displayed lightness; a modelling choice

# CIELAB hue angle, of the patch as shown, at which each word begins; it holds up to the next, and "pink" runs through
# 0. A modelling choice, laid by how named colours look at that lightness. It is taken of the patch and not of the raw
# chromaticity because CIELAB bends in the blue: there a deep blue and a pale lavender share one angle.
HUE_BANDS_DEG: tuple[tuple[float, HueWord], ...] = (
    (15.0, "red"),
    (55.0, "gold"),
    (105.0, "green"),
    (165.0, "teal"),
    (225.0, "blue"),
    (300.0, "purple"),
    (340.0, "pink"),
)

# IEC 61966-2-1: linear sRGB from XYZ of D65 white (Y = 1).
_SRGB_FROM_XYZ = np.array([[3.2406, -1.5372, -0.4986], [-0.9689, 1.8758, 0.0415], [0.0557, -0.2040, 1.0570]])


def xyz(spectrum: ArrayLike, *, illuminant: IlluminantName = "D65") -> NDArray[np.float64]:
    """Tristimulus values of reflected light, CIE 1931 2-degree observer, sums over 1 nm.

    Parameters
    ----------
    spectrum
        Reflectance (..., 401).
    illuminant
        The light's spectrum.

    Returns
    -------
    (..., 3): X, Y, Z with Y = 100 for a perfect reflector, so Y is 100 rho_v.

    References
    ----------
    CIE 015:2018, section 7.
    """
    values = on_grid(spectrum, name="spectrum")
    weights = table("colour_matching_cie_1931_2deg.csv") * spectral_power(illuminant)
    result: NDArray[np.float64] = values @ (100.0 * weights / weights[1].sum()).T
    return result


def white(illuminant: IlluminantName = "D65") -> NDArray[np.float64]:
    """Tristimulus values of the perfect reflector on this grid.

    Returns
    -------
    (3,). For D65 95.042, 100, 108.861; the printed 95.047, 100, 108.883 also count light outside 380 to 780 nm.
    """
    return xyz(np.ones(401), illuminant=illuminant)


def chromaticity(xyz_values: ArrayLike) -> NDArray[np.float64]:
    """Chromaticity x, y of tristimulus values.

    Parameters
    ----------
    xyz_values
        (..., 3), any scale.

    Returns
    -------
    (..., 2). Where there is no light at all: that of D65 white.

    References
    ----------
    CIE 015:2018, equation 7.9.
    """
    values = _tristimulus(xyz_values)
    total = values.sum(axis=-1, keepdims=True)
    dark = total <= 0.0
    known = np.where(dark, white(), values)
    result: NDArray[np.float64] = known[..., :2] / known.sum(axis=-1, keepdims=True)
    return result


def cielab(xyz_values: ArrayLike, *, white_xyz: ArrayLike | None = None) -> NDArray[np.float64]:
    """CIELAB L*, a*, b* of 1976.

    Parameters
    ----------
    xyz_values
        (..., 3).
    white_xyz
        (3,) on the same scale. Left out: the perfect reflector under D65 on this grid, Y = 100.

    Returns
    -------
    (..., 3). An all-zero colour is 0, 0, 0.

    References
    ----------
    ISO/CIE 11664-4:2019, equations 1 to 8.
    """
    reference = white() if white_xyz is None else _tristimulus(white_xyz)
    ratio = _tristimulus(xyz_values) / reference
    root = np.where(ratio > (6.0 / 29.0) ** 3, np.cbrt(ratio), (841.0 / 108.0) * ratio + 4.0 / 29.0)
    x, y, z = root[..., 0], root[..., 1], root[..., 2]
    return np.stack([116.0 * y - 16.0, 500.0 * (x - y), 200.0 * (y - z)], axis=-1)


def displayed_xyz(xyz_values: ArrayLike) -> NDArray[np.float64]:
    """The same chromaticity raised to the displayed lightness, Y = 100 `DISPLAYED_Y`.

    Parameters
    ----------
    xyz_values
        (..., 3).

    Returns
    -------
    (..., 3). Where there is no light (Y = 0): grey of that lightness.
    """
    values = _tristimulus(xyz_values)
    luminance = values[..., 1:2]
    dark = luminance <= 0.0
    result: NDArray[np.float64] = np.where(dark, white(), values / np.where(dark, 1.0, luminance) * 100.0) * DISPLAYED_Y
    return result


def shown_xyz(xyz_values: ArrayLike) -> NDArray[np.float64]:
    """The displayed colour brought inside what a screen can show.

    A colour outside sRGB is moved along the straight line towards white of the same luminance, just far enough; its hue
    stays nearly, its saturation falls.

    Parameters
    ----------
    xyz_values
        (..., 3) under D65.

    Returns
    -------
    (..., 3) with Y = 100 `DISPLAYED_Y`.
    """
    displayed, grey = displayed_xyz(xyz_values), white() * DISPLAYED_Y
    level = _linear_srgb(grey)
    step = _linear_srgb(displayed) - level
    away = np.where(step == 0.0, 1.0, step)
    room = np.where(step > 0.0, (1.0 - level) / away, np.where(step < 0.0, -level / away, np.inf))
    share = np.minimum(1.0, room.min(axis=-1, keepdims=True))
    shown: NDArray[np.float64] = grey + share * (displayed - grey)
    return shown


def hue_words(xyz_values: ArrayLike) -> NDArray[np.str_]:
    """Plain hue words of many reflections, by the one table `HUE_BANDS_DEG`.

    Parameters
    ----------
    xyz_values
        (..., 3) under D65.

    Returns
    -------
    Array of words in the leading shape: of the colour as the patch shows it. "neutral" where its CIELAB chroma is below
    `NEUTRAL_BELOW_CHROMA`, and where there is no light.
    """
    lab = cielab(shown_xyz(xyz_values))
    chroma = np.hypot(lab[..., 1], lab[..., 2])
    hue_deg = np.degrees(np.arctan2(lab[..., 2], lab[..., 1])) % 360.0
    starts = np.array([start for start, _ in HUE_BANDS_DEG])
    # Angles before the first band belong to the last one; index -1 is just that.
    band = np.searchsorted(starts, hue_deg, side="right") - 1
    words = np.array([word for _, word in HUE_BANDS_DEG])[band]
    return np.where(chroma < NEUTRAL_BELOW_CHROMA, "neutral", words)


def hue_word(xyz_values: ArrayLike) -> HueWord:
    """Plain hue word of one reflection, (3,); see :func:`hue_words`."""
    found = str(hue_words(np.asarray(xyz_values, dtype=np.float64).reshape(3)))
    return next(word for word in HUE_WORDS if word == found)


def displayed_srgb(xyz_values: ArrayLike) -> NDArray[np.float64]:
    """Encoded sRGB of the colour as shown, see :func:`shown_xyz`.

    Parameters
    ----------
    xyz_values
        (..., 3) under D65.

    Returns
    -------
    (..., 3), 0 to 1, gamma-encoded.

    References
    ----------
    IEC 61966-2-1:1999, with the matrix as the standard prints it (four decimals).
    """
    return _encode_srgb(np.clip(_linear_srgb(shown_xyz(xyz_values)), 0.0, 1.0))


def display_srgb(xyz_values: ArrayLike) -> str:
    """Patch colour ``#rrggbb`` of one reflection, (3,): its chromaticity at Y = 0.4, not its brightness.

    See :func:`displayed_srgb`. A true reflection of 0.5 % would be nearly black on the screen.
    """
    encoded = displayed_srgb(np.asarray(xyz_values, dtype=np.float64).reshape(3))
    return "#" + "".join(f"{round(255.0 * float(channel)):02x}" for channel in encoded)


def hue_shift(spectra: ArrayLike) -> NDArray[np.float64]:
    """Distance in the CIELAB a*b* plane of each spectrum from the first, both as the patch shows them.

    Parameters
    ----------
    spectra
        (angles, 401): one surface at several viewing angles, the reference direction first.

    Returns
    -------
    (angles,), 0 for the first. Below about 10 the shift is hard to name (a modelling choice).
    """
    lab = cielab(shown_xyz(xyz(spectra)))
    plane = lab[..., 1:]
    shift: NDArray[np.float64] = np.hypot(plane[..., 0] - plane[0, 0], plane[..., 1] - plane[0, 1])
    return shift


def _linear_srgb(xyz_values: NDArray[np.float64]) -> NDArray[np.float64]:
    """Linear sRGB of XYZ with Y = 100 for white; outside 0 to 1 where the screen cannot show it."""
    linear: NDArray[np.float64] = xyz_values / 100.0 @ _SRGB_FROM_XYZ.T
    return linear


def _encode_srgb(linear: NDArray[np.float64]) -> NDArray[np.float64]:
    """Transfer function of IEC 61966-2-1 on values of 0 to 1."""
    return np.where(linear <= 0.0031308, 12.92 * linear, 1.055 * linear ** (1.0 / 2.4) - 0.055)


def _tristimulus(xyz_values: ArrayLike) -> NDArray[np.float64]:
    """Return tristimulus values as floats with three of them on the last axis."""
    values = np.asarray(xyz_values, dtype=np.float64)
    if values.ndim == 0 or values.shape[-1] != 3:
        raise ValueError("xyz_values must have three values on its last axis.")
    return values
