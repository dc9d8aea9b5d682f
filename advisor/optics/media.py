"""Refractive index of lens materials and of film materials over wavelength."""

import csv
import difflib
from functools import cache
from typing import Final, Literal

import numpy as np
from numpy.typing import ArrayLike, NDArray

from advisor.errors import TwolightError
from advisor.resources import data_file

Line = Literal["d", "e"]

# Line of the index, then the shorter and the longer line of its Abbe number, nm (helium d with hydrogen F and C;
# mercury e with cadmium F' and C').
SPECTRAL_LINES_NM: Final[dict[str, tuple[float, float, float]]] = {
    "d": (587.56, 486.13, 656.27),
    "e": (546.07, 479.99, 643.85),
}
FILM_NAMES: Final = ("MgF2", "SiO2", "Al2O3", "TiO2", "Ta2O5", "Nb2O5")
FILM_RANGE_NM: Final = (370.0, 790.0)


class UnknownFilm(TwolightError):
    """A film material that the program has no dispersion for."""

    def __init__(self, name: str) -> None:
        by_lower = {known.lower(): known for known in FILM_NAMES}
        close = difflib.get_close_matches(name.lower(), by_lower, n=1, cutoff=0.0)
        self.name = name
        self.nearest = by_lower[close[0]] if close else FILM_NAMES[0]
        super().__init__(
            f'No film material is called "{name}"; the nearest known name is {self.nearest} '
            f"(known: {', '.join(FILM_NAMES)})."
        )


def cauchy_coefficients(index: float, *, abbe: float, line: Line = "d") -> tuple[float, float]:
    """Coefficients of the two-term Cauchy equation n = A + B / lambda^2 of a lens material.

    Parameters
    ----------
    index : float
        Refractive index at the line, above 1 and at most 3.
    abbe : float
        Abbe number that goes with the line: V_d with n_d, V_e with n_e; 10 to 120.
    line : {"d", "e"}
        Line of both figures: d 587.56 nm (Abbe lines 486.13 and 656.27), e 546.07 nm (479.99 and 643.85).

    Returns
    -------
    tuple[float, float]
        A (no unit) and B (nm^2).

    Raises
    ------
    ValueError
        Naming the parameter that is out of range.

    References
    ----------
    Abbe number V = (n - 1)/(n_short - n_long), ISO 7944; Born and Wolf, Principles of Optics, section 2.3 (Cauchy).
    """
    if not 1.0 < index <= 3.0:
        raise ValueError(f"index must be above 1 and at most 3, not {index}")
    if not 10.0 <= abbe <= 120.0:
        raise ValueError(f"abbe must lie between 10 and 120, not {abbe}")
    if line not in SPECTRAL_LINES_NM:
        raise ValueError(f'line must be "d" or "e", not "{line}"')
    at_nm, short_nm, long_nm = SPECTRAL_LINES_NM[line]
    b = (index - 1.0) / (abbe * (short_nm**-2 - long_nm**-2))
    return index - b / at_nm**2, b


def lens_index(wavelength_nm: ArrayLike, *, index: float, abbe: float, line: Line = "d") -> NDArray[np.float64]:
    """Refractive index of a lens material over wavelength.

    Parameters
    ----------
    wavelength_nm : array_like
        Any shape, 300 to 1100 nm.
    index, abbe, line
        As in `cauchy_coefficients`.

    Returns
    -------
    ndarray
        Same shape as `wavelength_nm`.

    Raises
    ------
    ValueError
        Naming the parameter that is out of range.
    """
    wavelength = np.asarray(wavelength_nm, dtype=np.float64)
    if not np.all((wavelength >= 300.0) & (wavelength <= 1100.0)):
        raise ValueError("wavelength_nm must lie between 300 and 1100")
    a, b = cauchy_coefficients(index, abbe=abbe, line=line)
    return np.asarray(a + b / wavelength**2, dtype=np.float64)


def index_at_line(index: float, *, abbe: float, line: Line, wanted_line: Line = "d") -> float:
    """Index of the same Cauchy material at another line; range and errors as in `cauchy_coefficients`."""
    if wanted_line not in SPECTRAL_LINES_NM:
        raise ValueError(f'wanted_line must be "d" or "e", not "{wanted_line}"')
    if wanted_line == line:
        cauchy_coefficients(index, abbe=abbe, line=line)
        return index
    return float(lens_index(SPECTRAL_LINES_NM[wanted_line][0], index=index, abbe=abbe, line=line))


def abbe_at_line(index: float, *, abbe: float, line: Line, wanted_line: Line = "d") -> float:
    """Abbe number of the same Cauchy material at another line; range and errors as in `cauchy_coefficients`."""
    at_wanted = index_at_line(index, abbe=abbe, line=line, wanted_line=wanted_line)
    if wanted_line == line:
        return abbe
    _, b = cauchy_coefficients(index, abbe=abbe, line=line)
    _, short_nm, long_nm = SPECTRAL_LINES_NM[wanted_line]
    return (at_wanted - 1.0) / (b * (short_nm**-2 - long_nm**-2))


@cache
def _film_table(name: str) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    if name not in FILM_NAMES:
        raise UnknownFilm(name)
    with data_file("optics", f"films/{name}.csv").open(encoding="utf-8", newline="") as handle:
        handle.readline()  # the source
        rows = [(float(row["wavelength_nm"]), float(row["n"])) for row in csv.DictReader(handle)]
    wavelength, index = np.array(rows, dtype=np.float64).T
    return wavelength, index


def film_index(wavelength_nm: ArrayLike, *, name: str) -> NDArray[np.float64]:
    """Refractive index of a film material, linear between the rows of its published table.

    The tables are of deposited films, not of crystals, and each names its source in its first line. Absorption is
    left out on purpose (k = 0): one entry lists k = 0.0019 from a hot process, which would cost 0.5 % a face, and
    films made for lenses are kept clear.

    Parameters
    ----------
    wavelength_nm : array_like
        Any shape, 370 to 790 nm.
    name : str
        One of `FILM_NAMES`.

    Returns
    -------
    ndarray
        Same shape as `wavelength_nm`.

    Raises
    ------
    UnknownFilm
        The name is not known; the error carries the nearest one.
    ValueError
        `wavelength_nm` out of range.
    """
    table_nm, table_index = _film_table(name)
    wavelength = np.asarray(wavelength_nm, dtype=np.float64)
    low, high = FILM_RANGE_NM
    if not np.all((wavelength >= low) & (wavelength <= high)):
        raise ValueError(f"wavelength_nm must lie between {low:g} and {high:g}")
    return np.asarray(np.interp(wavelength, table_nm, table_index), dtype=np.float64)
