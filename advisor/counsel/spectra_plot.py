"""What both faces of an option mirror from 380 to 780 nm, as points to print: lines, as-made bands, the eye behind.

Numbers are computed here; a template macro prints them. Per cent go upwards; the eye's sensitivity V(lambda), which has
no unit, is drawn to the full height.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from advisor.counsel.faces import Face, made, nominal
from advisor.counsel.laid_out import Laid
from advisor.optics.grid import WAVELENGTHS_NM
from advisor.optics.photometry import luminous_efficiency

Floats = NDArray[np.float64]

WIDTH, HEIGHT = 600.0, 240.0
STEP_NM = 2  # a hard coat ripples about every 10 to 25 nm
TABLE_NM = tuple(range(400, 780, 50))
TICKS_NM = tuple(range(400, 781, 50))
TOPS_PERCENT = (1.0, 2.0, 3.0, 5.0, 8.0, 10.0, 15.0, 20.0, 30.0, 50.0, 100.0)
BAND_PERCENTILES = (5.0, 95.0)


@dataclass(frozen=True)
class Curve:
    """One face: its line, its band as made (none without layers), and its values for the table, per cent."""

    face: str
    line: str
    band: str | None
    values: tuple[float, ...]
    low: tuple[float, ...] | None
    high: tuple[float, ...] | None
    estimated: bool


@dataclass(frozen=True)
class SpectraPlot:
    """Both faces of one option on one scale."""

    index: int
    curves: tuple[Curve, Curve]
    sensitivity: str
    top_percent: float
    ticks_nm: tuple[tuple[float, int], ...]
    ticks_percent: tuple[tuple[float, float], ...]
    table_nm: tuple[int, ...] = TABLE_NM
    width: float = WIDTH
    height: float = HEIGHT


def spectra_plot(option: Laid) -> SpectraPlot:
    """Return the plot of one option."""
    faces = (("front", option.front_face), ("back", option.back_face))
    spectra = [(name, face, 100.0 * nominal(face).outside, _band(face)) for name, face in faces]
    most = max(float((line if band is None else np.maximum(line, band[1])).max()) for _, _, line, band in spectra)
    top = next((limit for limit in TOPS_PERCENT if most <= limit), TOPS_PERCENT[-1])
    first, second = (_curve(name, face, line, band, top=top) for name, face, line, band in spectra)
    floor = np.zeros_like(luminous_efficiency())
    return SpectraPlot(
        index=option.index,
        curves=(first, second),
        sensitivity=_area(floor, luminous_efficiency(), top=1.0),
        top_percent=top,
        ticks_nm=tuple((round(_across(float(nm)), 1), nm) for nm in TICKS_NM),
        ticks_percent=tuple(
            (round(HEIGHT * (1.0 - share), 1), top * share) for share in (0.0, 0.2, 0.4, 0.6, 0.8, 1.0)
        ),
    )


def _band(face: Face) -> Floats | None:
    surfaces = made(face)
    return None if surfaces is None else 100.0 * np.percentile(surfaces.outside, BAND_PERCENTILES, axis=0)


def _curve(name: str, face: Face, line: Floats, band: Floats | None, *, top: float) -> Curve:
    return Curve(
        face=name,
        line="M" + _points(line, top=top),
        band=None if band is None else _area(band[0], band[1], top=top),
        values=_at_table(line),
        low=None if band is None else _at_table(band[0]),
        high=None if band is None else _at_table(band[1]),
        estimated=face.is_estimated,
    )


def _across(nm: float) -> float:
    first, last = float(WAVELENGTHS_NM[0]), float(WAVELENGTHS_NM[-1])
    return WIDTH * (nm - first) / (last - first)


def _points(values: Floats, *, top: float, back: bool = False) -> str:
    places = list(zip(WAVELENGTHS_NM[::STEP_NM], values[::STEP_NM], strict=True))
    ordered = places[::-1] if back else places
    return " ".join(f"{_across(float(nm)):.1f},{HEIGHT * (1.0 - float(v) / top):.1f}" for nm, v in ordered)


def _area(low: Floats, high: Floats, *, top: float) -> str:
    return f"M{_points(low, top=top)} {_points(high, top=top, back=True)} Z"


def _at_table(values: Floats) -> tuple[float, ...]:
    return tuple(float(np.interp(nm, WAVELENGTHS_NM, values)) for nm in TABLE_NM)
