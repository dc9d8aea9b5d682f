"""What a supplier gives instead of layers: a measured spectrum, or only a figure and a hue word.

A measured spectrum is refused, with the remedy, rather than repaired by guessing. A declared figure borrows the shape
of a built-in film and everything that follows from it is an estimate.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Final

import numpy as np
from numpy.typing import ArrayLike, NDArray

from advisor.errors import TwolightError, mark
from advisor.optics.colour import HUE_BANDS_DEG, HUE_WORDS
from advisor.optics.grid import WAVELENGTHS_NM
from advisor.optics.photometry import luminous_mean, on_grid

GREATEST_GAP_NM: Final = 10.0
GREATEST_FACTOR: Final = 2.0
NEUTRAL_STEP_DEG: Final = 90.0
"""How far "neutral" counts from any hue when the nearest shape is looked for (a modelling choice)."""


class SpectrumFault(TwolightError):
    """A measured or declared reflectance that cannot be used; the text says what to do."""

    text = mark("The reflectance cannot be used.")


class SpectrumRowsUnreadable(SpectrumFault):
    """Not a list of two or more pairs of numbers."""

    text = mark(
        "The spectrum needs two or more rows of two numbers each: wavelength in nm and reflectance as a fraction."
    )


class SpectrumNotANumber(SpectrumFault):
    """A value that is missing or infinite."""

    text = mark("Row %(row)s of the spectrum is not a number; remove the row or fill it in.")


class SpectrumOutOfOrder(SpectrumFault):
    """A wavelength that does not rise from the row before, or stands twice."""

    text = mark(
        "The wavelength %(wavelength_nm)s nm in row %(row)s does not rise; sort the rows and keep each one once."
    )


class SpectrumInPercent(SpectrumFault):
    """A reflectance above 1, which can only be percent."""

    text = mark(
        "The reflectance %(reflectance)s at %(wavelength_nm)s nm is above 1; give fractions, so 0.005 for 0.5 %%."
    )


class SpectrumNegative(SpectrumFault):
    """A reflectance below 0."""

    text = mark(
        "The reflectance %(reflectance)s at %(wavelength_nm)s nm is negative; correct it, or write 0 for noise."
    )


class SpectrumNotCovered(SpectrumFault):
    """Rows that begin after 380 nm or end before 780 nm."""

    text = mark(
        "The spectrum covers %(first_nm)s to %(last_nm)s nm; it must reach from 380 or below to 780 nm or above."
    )


class SpectrumGap(SpectrumFault):
    """Neighbouring rows too far apart."""

    text = mark(
        "Between %(from_nm)s and %(to_nm)s nm there is no row; measure at least every 10 nm from 380 to 780 nm."
    )


class DeclaredOutOfReach(SpectrumFault):
    """A declared luminous reflectance that no built-in film can be scaled to."""

    text = mark(
        "No built-in film can be scaled to a luminous reflectance of %(declared)s; the most is %(greatest)s. "
        "Give the layers or a measured spectrum instead."
    )


def measured_spectrum(rows: ArrayLike) -> NDArray[np.float64]:
    """Put a measured reflectance on the grid, joined linearly between rows.

    Parameters
    ----------
    rows
        (points, 2): wavelength in nm, rising, and reflectance as a fraction 0 to 1. From 380 nm or below to 780 nm or
        above; within that range neighbours at most 10 nm apart.

    Returns
    -------
    Reflectance (401,).

    Raises
    ------
    SpectrumFault
        One subclass for each reason.
    """
    wavelength, reflectance = _columns(rows)
    if np.any(reflectance > 1.0):
        worst = int(np.argmax(reflectance))
        raise SpectrumInPercent(wavelength_nm=float(wavelength[worst]), reflectance=float(reflectance[worst]))
    if np.any(reflectance < 0.0):
        worst = int(np.argmin(reflectance))
        raise SpectrumNegative(wavelength_nm=float(wavelength[worst]), reflectance=float(reflectance[worst]))
    first, last = float(WAVELENGTHS_NM[0]), float(WAVELENGTHS_NM[-1])
    if wavelength[0] > first or wavelength[-1] < last:
        raise SpectrumNotCovered(first_nm=float(wavelength[0]), last_nm=float(wavelength[-1]))
    inside = (wavelength[1:] > first) & (wavelength[:-1] < last)
    wide = np.flatnonzero(inside & (np.diff(wavelength) > GREATEST_GAP_NM + 1e-9))
    if wide.size:
        raise SpectrumGap(from_nm=float(wavelength[wide[0]]), to_nm=float(wavelength[wide[0] + 1]))
    return np.asarray(np.interp(WAVELENGTHS_NM, wavelength, reflectance), dtype=np.float64)


def _columns(rows: ArrayLike) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Check that the rows are rising pairs of numbers and return the two columns."""
    try:
        table = np.asarray(rows, dtype=np.float64)
    except (TypeError, ValueError):
        raise SpectrumRowsUnreadable from None
    if table.ndim != 2 or table.shape[1] != 2 or len(table) < 2:
        raise SpectrumRowsUnreadable
    bad = np.flatnonzero(~np.all(np.isfinite(table), axis=1))
    if bad.size:
        raise SpectrumNotANumber(row=int(bad[0]) + 1)
    falling = np.flatnonzero(np.diff(table[:, 0]) <= 0.0)
    if falling.size:
        row = int(falling[0]) + 1
        raise SpectrumOutOfOrder(row=row + 1, wavelength_nm=float(table[row, 0]))
    return table[:, 0], table[:, 1]


@dataclass(frozen=True)
class EstimatedSpectrum:
    """A spectrum made from a declared figure: the nearest shape, and what every other shape would give.

    `spectrum` (401,) has the declared luminous reflectance; `candidates` (shapes, 401) are all built-in shapes that can
    be scaled to it, `shape` and `shapes` their places in the list that was given, and `factor` what the shape was
    multiplied by.
    """

    spectrum: NDArray[np.float64]
    factor: float
    shape: int
    candidates: NDArray[np.float64]
    shapes: tuple[int, ...]


def scaled_shape(shapes: ArrayLike, shape_hues: Sequence[str], *, declared: float, hue: str) -> EstimatedSpectrum:
    """Estimate a spectrum from a declared luminous reflectance and hue word.

    The built-in film whose hue is nearest is scaled to the declared figure. Of films equally near in hue the one that
    needs the least scaling is taken. Scaling by more than 2 or beyond a reflectance of 1 is not done; scaling down is
    not limited.

    Parameters
    ----------
    shapes
        Reflectances (shapes, 401) of the built-in films, none of them dark.
    shape_hues
        Hue word of each.
    declared
        Luminous reflectance (D65), above 0 and at most 1.
    hue
        Declared hue word.

    Returns
    -------
    EstimatedSpectrum
        Label every result of it "estimated spectrum" and state the range over `candidates`.

    Raises
    ------
    DeclaredOutOfReach
        When no shape can be scaled that far.
    ValueError
        When a hue word is unknown, their number does not fit, or `declared` is out of range.

    References
    ----------
    A modelling choice of this program.
    """
    films = np.atleast_2d(on_grid(shapes, name="shapes"))
    if len(shape_hues) != len(films):
        raise ValueError("shape_hues must hold one word for each shape.")
    for name, word in (*(("shape_hues", word) for word in shape_hues), ("hue", hue)):
        if word not in HUE_WORDS:
            raise ValueError(f"{name} must be one of {', '.join(HUE_WORDS)}, not {word!r}.")
    if not 0.0 < declared <= 1.0:
        raise ValueError("declared must be above 0 and at most 1.")
    own = luminous_mean(films)
    if np.any(own <= 0.0):
        raise ValueError("shapes must reflect some light.")
    factors = declared / own
    limits = np.minimum(GREATEST_FACTOR, 1.0 / films.max(axis=1))
    usable = [int(place) for place in np.flatnonzero(factors <= limits * (1.0 + 1e-12))]
    if not usable:
        raise DeclaredOutOfReach(declared=declared, greatest=float(f"{np.max(own * limits):.3g}"))
    best = min(usable, key=lambda place: (hue_distance_deg(hue, shape_hues[place]), abs(np.log(factors[place]))))
    candidates = np.minimum(1.0, films[usable] * factors[usable, None])
    return EstimatedSpectrum(
        spectrum=candidates[usable.index(best)],
        factor=float(factors[best]),
        shape=best,
        candidates=candidates,
        shapes=tuple(usable),
    )


def hue_distance_deg(one: str, other: str) -> float:
    """Angle between the middles of two hue words on the CIELAB circle; "neutral" is 90 degrees from every hue."""
    if one == other:
        return 0.0
    if "neutral" in (one, other):
        return NEUTRAL_STEP_DEG
    middles = _band_middles_deg()
    apart = abs(middles[one] - middles[other]) % 360.0
    return min(apart, 360.0 - apart)


def _band_middles_deg() -> dict[str, float]:
    """Middle of each word's band of CIELAB hue angles."""
    starts = [start for start, _ in HUE_BANDS_DEG]
    ends = [*starts[1:], starts[0] + 360.0]
    return {
        str(word): (start + end) / 2.0 % 360.0
        for (_, word), start, end in zip(HUE_BANDS_DEG, starts, ends, strict=True)
    }


def square_ratio(reflectance: ArrayLike) -> NDArray[np.float64]:
    """Luminous mean of R^2 over rho_v^2: how much stronger a ghost of two such reflections is than rho_v^2.

    Parameters
    ----------
    reflectance
        (..., 401), not all dark.

    Returns
    -------
    (...), 1 or more (1 for a flat spectrum), by the Cauchy-Schwarz inequality.
    """
    values = on_grid(reflectance, name="reflectance")
    rho = luminous_mean(values)
    if np.any(rho <= 0.0):
        raise ValueError("reflectance must not be dark.")
    ratio: NDArray[np.float64] = luminous_mean(values**2) / rho**2
    return ratio
