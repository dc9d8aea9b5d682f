"""From what a shop calls a coating to the spectra of one face, cached by film and substrate.

A face is nominal (as designed) or 64 faces as made. A measured spectrum and a supplier's declared figure have no
layers, so they have no as-made spread; a declared figure borrows the shape of the nearest built-in film and says so.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from functools import lru_cache
from typing import Any

import numpy as np
from numpy.typing import NDArray

from advisor.counsel.stock import BARE, Range, builtin_range
from advisor.counsel.stock_items import Coating, Material
from advisor.optics import as_made, colour
from advisor.optics.grid import WAVELENGTHS_NM
from advisor.optics.layers import HardCoat, stack_arrays
from advisor.optics.media import lens_index
from advisor.optics.photometry import luminous_mean
from advisor.optics.spectrum_input import DeclaredOutOfReach, EstimatedSpectrum, measured_spectrum, scaled_shape
from advisor.optics.surface import SurfaceSpectra, film_surface, reflectance_surface

SAMPLES = 64
ASLANT_DEG = 45.0
BLUE_BAND_NM = (400.0, 440.0)
MOST_MIRRORED = 1.0 - 1e-6  # a numerical guard, far beyond any lens


@dataclass(frozen=True)
class Face:
    """What one face is made of: everything its spectra depend on, and nothing else."""

    index: float
    abbe: float
    line: str
    coating: Coating

    @property
    def is_estimated(self) -> bool:
        """Whether its spectrum is a supplier's declared figure on a borrowed shape."""
        return self.coating.declared is not None

    @property
    def has_film(self) -> bool:
        """Whether there is anything on it but a hard coat."""
        return bool(self.coating.layers) or self.coating.layers is None


def face_of(material: Material, coating: Coating) -> Face:
    """Return the face that a material and a coating make; labels and prices are left behind."""
    return Face(material.index, material.abbe, material.line, optical(coating))


@lru_cache(maxsize=1024)
def optical(coating: Coating) -> Coating:
    """Return a coating without its label, price and care: what its spectra depend on."""
    return Coating(
        hard_coat=coating.hard_coat, layers=coating.layers, declared=coating.declared, spectrum=coating.spectrum
    )


def sold_coating(material: Material, coating: Coating, stock: Range) -> Coating:
    """Return what a bare face is in the shop: a material never sold without a hard coat has a hard coat only."""
    if coating.key != BARE.key or material.hard_coat != "always":
        return coating
    for candidate in (*stock.coating, *builtin_range().coating):
        if candidate.layers == () and candidate.hard_coat is not None:
            return candidate
    return coating


def known_coating(material: Material, coating: Coating) -> Coating:
    """Return the coating, or bare where its declared figure fits no built-in film on this material."""
    return coating if _is_known(face_of(material, coating)) else BARE


@lru_cache(maxsize=4096)
def _is_known(face: Face) -> bool:
    if face.coating.declared is None:
        return True
    try:
        _declared(face)
    except DeclaredOutOfReach:
        return False
    return True


def substrate(face: Face) -> NDArray[np.float64]:
    """Return the index of the lens material on the grid, (401,)."""
    return lens_index(WAVELENGTHS_NM, index=face.index, abbe=face.abbe, line="e" if face.line == "e" else "d")


@lru_cache(maxsize=4096)
def nominal(face: Face, angle_deg: float = 0.0) -> SurfaceSpectra:
    """Return the three spectra of a face as designed, each (401,).

    A measured spectrum holds straight on and is taken for every angle; a declared figure takes on the angle of the
    film whose shape it borrows.
    """
    if face.coating.spectrum is not None:
        return _bounded(reflectance_surface(measured_spectrum(face.coating.spectrum)))
    if face.coating.declared is not None:
        estimate = _declared(face)
        return reflectance_surface(_scaled(face, estimate, (estimate.shape,), angle_deg)[0])
    index, thickness_nm = _stack(face)
    return _bounded(
        film_surface(substrate(face), layer_index=index, layer_thickness_nm=thickness_nm, angle_deg=angle_deg)
    )


def _bounded(surface: SurfaceSpectra) -> SurfaceSpectra:
    """Return a surface that mirrors at most nearly everything, so that the bounces between two of them have a sum.

    Stacks of very many layers reach 1 within rounding and beyond it, where nothing is left to pass.
    """
    return SurfaceSpectra(
        np.minimum(surface.outside, MOST_MIRRORED),
        np.minimum(surface.inside, MOST_MIRRORED),
        np.maximum(surface.transmittance, 0.0),
    )


@lru_cache(maxsize=256)
def shapes(face: Face, angle_deg: float = 0.0) -> SurfaceSpectra:
    """Return the spectra a declared figure may stand for, (shapes, 401); a face that is known has one shape."""
    if face.coating.declared is None:
        known = nominal(face, angle_deg)
        return SurfaceSpectra(known.outside[None], known.inside[None], known.transmittance[None])
    estimate = _declared(face)
    return reflectance_surface(_scaled(face, estimate, estimate.shapes, angle_deg))


@lru_cache(maxsize=256)
def made(face: Face, angle_deg: float = 0.0) -> SurfaceSpectra | None:
    """Return the spectra of 64 faces as made, (64, 401), or None for a face without layers to vary."""
    if not face.coating.layers:
        return None
    index, thickness_nm = _stack(face)
    factors = as_made.thickness_factors(len(thickness_nm), samples=SAMPLES)
    return _bounded(
        film_surface(substrate(face), layer_index=index, layer_thickness_nm=thickness_nm * factors, angle_deg=angle_deg)
    )


@lru_cache(maxsize=4096)
def luminous_reflectance(face: Face) -> float:
    """Return rho_v of a face as designed."""
    return float(nominal(face).luminous_reflectance())


@lru_cache(maxsize=1024)
def made_reflectance(face: Face) -> NDArray[np.float64] | None:
    """Return rho_v of the 64 faces as made, (64,), or None."""
    surfaces = made(face)
    return None if surfaces is None else surfaces.luminous_reflectance()


@lru_cache(maxsize=1024)
def residual_colour(face: Face) -> dict[str, Any]:
    """Return the colour a face mirrors under D65 as the answer writes it: as designed, aslant and as made."""
    values = colour.xyz(nominal(face).outside)
    x, y = colour.chromaticity(values)
    samples = made(face)
    return {
        "hue": colour.hue_word(values),
        "srgb": colour.display_srgb(values),
        "xy": (float(x), float(y)),
        "hue_at_45_deg": colour.hue_word(colour.xyz(nominal(face, ASLANT_DEG).outside)),
        "as_made_hues": None if samples is None else as_made.hue_shares(colour.xyz(samples.outside)),
    }


@lru_cache(maxsize=1024)
def blue_turned_away(face: Face) -> float:
    """Return the mean reflectance from 400 to 440 nm."""
    low, high = BLUE_BAND_NM
    inside = (low <= WAVELENGTHS_NM) & (high >= WAVELENGTHS_NM)
    return float(np.mean(nominal(face).outside[inside]))


def _stack(face: Face) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    hard_coat = face.coating.hard_coat
    return stack_arrays(
        face.coating.layers or (),
        wavelength_nm=WAVELENGTHS_NM,
        hard_coat=None if hard_coat is None else HardCoat(hard_coat.index, hard_coat.thickness_um),
    )


def _films_on(face: Face) -> list[Face]:
    """Return the built-in films on this lens material, whose shapes a declared figure may borrow."""
    films = [coating for coating in builtin_range().coating if coating.layers]
    return [Face(face.index, face.abbe, face.line, optical(film)) for film in films]


def _scaled(face: Face, estimate: EstimatedSpectrum, places: Sequence[int], angle_deg: float) -> NDArray[np.float64]:
    """Return these shapes at an angle, (shapes, 401), each scaled as straight on it has the declared figure."""
    films, declared = _films_on(face), luminous_mean(estimate.spectrum)
    chosen = [films[place] for place in places]
    factors = np.array([float(declared) / luminous_reflectance(film) for film in chosen])
    scaled = factors[:, None] * np.stack([nominal(film, angle_deg).outside for film in chosen])
    return np.asarray(np.minimum(scaled, 1.0))


@lru_cache(maxsize=256)
def _declared(face: Face) -> EstimatedSpectrum:
    """Return the spectrum a declared figure is taken for, on this lens material."""
    declared = face.coating.declared
    if declared is None:
        raise ValueError("face has no declared figure.")
    outsides = np.stack([nominal(film).outside for film in _films_on(face)])
    hues = [colour.hue_word(colour.xyz(outside)) for outside in outsides]
    return scaled_shape(outsides, hues, declared=declared.luminous_reflectance, hue=declared.hue)
