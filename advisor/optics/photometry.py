"""Weights of the eye and of the light, and the luminous mean of a spectrum.

Every spectrum lives on the one grid of :mod:`advisor.optics.grid`; its last axis is the wavelength. Sums over 1 nm
stand for the integrals. Light below 380 and above 780 nm is left out: 0.0005 % of the luminance of D65 or A.
"""

from functools import cache
from typing import Literal, get_args

import numpy as np
from numpy.typing import ArrayLike, NDArray

from advisor.optics.grid import WAVELENGTHS_NM
from advisor.resources import data_file

IlluminantName = Literal["D65", "A", "LED-B4"]
ILLUMINANTS: tuple[IlluminantName, ...] = get_args(IlluminantName)


@cache
def table(name: str) -> NDArray[np.float64]:
    """Read a table of weights on the grid, one row per column of the file.

    Parameters
    ----------
    name
        File in ``advisor/optics/data``: a line with the table's name and edition, a header line, then 401 rows.

    Returns
    -------
    Read-only array (columns without the wavelength, 401).

    Raises
    ------
    ValueError
        When the file's wavelengths are not the grid.
    """
    rows = np.loadtxt(data_file("optics", name), delimiter=",", skiprows=2, ndmin=2)
    if not np.array_equal(rows[:, 0], WAVELENGTHS_NM):
        raise ValueError(f"{name} is not on the grid of 380 to 780 nm in steps of 1 nm.")
    columns = np.ascontiguousarray(rows[:, 1:].T)
    columns.flags.writeable = False
    return columns


def luminous_efficiency() -> NDArray[np.float64]:
    """CIE spectral luminous efficiency for photopic vision, V(lambda).

    Returns
    -------
    Read-only array (401,), 1 at 555 nm. It understates how bright blue light looks to an eye adapted to the night.

    References
    ----------
    CIE 018:2019 (the function of 1924).
    """
    weights: NDArray[np.float64] = table("luminous_efficiency_cie_1924.csv")[0]
    return weights


def illuminant(name: IlluminantName) -> NDArray[np.float64]:
    """Relative spectral power of a CIE illuminant.

    Parameters
    ----------
    name
        ``D65`` daylight, ``A`` filament lamp, ``LED-B4`` white light-emitting diode of about 5100 K.

    Returns
    -------
    Read-only array (401,), in the table's own scale; only ratios mean anything.

    Raises
    ------
    ValueError
        When `name` is none of the three.

    References
    ----------
    ISO/CIE 11664-2:2022 (D65, A); CIE 015:2018 table T.12 (LED-B4).
    """
    if name not in ILLUMINANTS:
        raise ValueError(f"name must be one of {', '.join(ILLUMINANTS)}, not {name!r}.")
    power: NDArray[np.float64] = table("illuminants_cie.csv")[ILLUMINANTS.index(name)]
    return power


_power = illuminant  # the keyword of luminous_mean hides the function inside it


def luminous_mean(
    spectrum: ArrayLike, *, illuminant: IlluminantName = "D65", weight: ArrayLike | None = None
) -> NDArray[np.float64]:
    """Mean of a spectrum as the eye weighs it: sum(spectrum w V S) / sum(w V S).

    With a reflectance and D65 this is the luminous reflectance rho_v, with a transmittance the luminous transmittance.

    Parameters
    ----------
    spectrum
        (..., 401), a fraction per wavelength.
    illuminant
        The light's spectrum S.
    weight
        Extra weight w, (..., 401), such as the transmittance that the light has passed; nothing negative. Left out: 1.

    Returns
    -------
    The leading shape of `spectrum` and `weight` together; 0 where the weight lets no light through.

    Raises
    ------
    ValueError
        When a last axis is not the grid or a weight is negative.

    References
    ----------
    ISO 8980-4 (luminous reflectance); ISO 13666 (luminous transmittance). Known from their use, not seen in print.
    """
    values = on_grid(spectrum, name="spectrum")
    eye = luminous_efficiency() * _power(illuminant)
    if weight is None:
        plain: NDArray[np.float64] = values @ (eye / eye.sum())
        return plain
    weights = on_grid(weight, name="weight")
    if np.any(weights < 0.0):
        raise ValueError("weight must not be negative.")
    total = weights @ eye
    mean: NDArray[np.float64] = np.sum(values * weights * eye, axis=-1) / np.where(total > 0.0, total, 1.0)
    return mean


def on_grid(spectrum: ArrayLike, *, name: str) -> NDArray[np.float64]:
    """Return `spectrum` as an array of floats and check that its last axis is the grid.

    Parameters
    ----------
    spectrum
        (..., 401).
    name
        What the caller calls it, for the message.

    Raises
    ------
    ValueError
        When the last axis does not have 401 samples.
    """
    values = np.asarray(spectrum, dtype=np.float64)
    if values.ndim == 0 or values.shape[-1] != WAVELENGTHS_NM.size:
        raise ValueError(f"{name} must have {WAVELENGTHS_NM.size} samples on its last axis, 380 to 780 nm by 1 nm.")
    return values
