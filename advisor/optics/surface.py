"""A lens face as three spectra, and the whole lens with every bounce between its two faces.

"Outside" always means from air: from in front for the front face, from the wearer's side for the back face. Light is
unpolarised; at an angle the mean of s and p is taken at each face, so that what one face polarises the next does not
know. Between the faces light adds without interference, as a lens is far thicker than light is coherent.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from advisor.optics.grid import WAVELENGTHS_NM
from advisor.optics.photometry import IlluminantName, luminous_mean, on_grid
from advisor.optics.thin_film import stack_spectra

Spectrum = NDArray[np.float64]


@dataclass(frozen=True)
class SurfaceSpectra:
    """Reflectance from air, reflectance from inside the lens, transmittance (the same both ways), each (..., 401)."""

    outside: Spectrum
    inside: Spectrum
    transmittance: Spectrum

    def luminous_reflectance(self, *, illuminant: IlluminantName = "D65") -> NDArray[np.float64]:
        """Return rho_v, the luminous reflectance from outside, in the leading shape."""
        return luminous_mean(self.outside, illuminant=illuminant)


def film_surface(
    substrate_index: ArrayLike,
    *,
    layer_index: ArrayLike,
    layer_thickness_nm: ArrayLike,
    angle_deg: ArrayLike = 0.0,
) -> SurfaceSpectra:
    """Spectra of a coated face, by the characteristic matrix, on the grid.

    Parameters
    ----------
    substrate_index
        Lens material, real: a number, (401,) or (stacks, 401).
    layer_index
        (layers, 401) or (stacks, layers, 401), from air inwards; complex n + ik where a layer absorbs.
    layer_thickness_nm
        (layers,) or (stacks, layers).
    angle_deg
        Angle in air, a number or (angles,); also for light from inside, which leaves at that angle.

    Returns
    -------
    SurfaceSpectra
        (401,), with stacks, angles or both in front where they were given: (stacks, angles, 401).

    Raises
    ------
    ValueError
        When `substrate_index` is complex, or by :func:`advisor.optics.thin_film.stack_spectra`.

    References
    ----------
    Macleod, Thin-Film Optical Filters, chapter 2. Without absorption inside = outside and T = 1 - R (Stokes).
    """
    if np.iscomplexobj(substrate_index):
        raise ValueError("substrate_index must be real: what the lens absorbs is its internal transmittance.")
    index, thickness = np.asarray(layer_index), np.asarray(layer_thickness_nm, dtype=np.float64)
    substrate = np.asarray(substrate_index, dtype=np.float64)
    many_stacks = index.ndim == 3 or thickness.ndim == 2 or substrate.ndim == 2
    many_angles = np.ndim(angle_deg) == 1

    def unpolarised(spectra: Spectrum) -> Spectrum:
        mean: Spectrum = spectra.mean(axis=-1)
        mean = mean if many_angles else mean[:, 0]
        return mean if many_stacks else mean[0]

    reflectance, transmittance = stack_spectra(
        WAVELENGTHS_NM,
        layer_index=index,
        layer_thickness_nm=thickness,
        substrate_index=substrate,
        angle_deg=angle_deg,
    )
    outside = unpolarised(reflectance)
    if not np.any(np.imag(index)):
        return SurfaceSpectra(outside, outside, 1.0 - outside)
    from_inside, _ = stack_spectra(
        WAVELENGTHS_NM,
        layer_index=index[..., ::-1, :],
        layer_thickness_nm=thickness[..., ::-1],
        substrate_index=1.0,
        incident_index=substrate,
        angle_deg=angle_deg,
    )
    return SurfaceSpectra(outside, unpolarised(from_inside), unpolarised(transmittance))


def bare_surface(substrate_index: ArrayLike, *, angle_deg: ArrayLike = 0.0) -> SurfaceSpectra:
    """Spectra of an uncoated face (Fresnel); parameters and shapes as in :func:`film_surface`."""
    return film_surface(
        substrate_index,
        layer_index=np.empty((0, WAVELENGTHS_NM.size)),
        layer_thickness_nm=np.empty(0),
        angle_deg=angle_deg,
    )


def reflectance_surface(reflectance: ArrayLike) -> SurfaceSpectra:
    """Spectra of a face of which only the reflectance from outside is known: taken as free of absorption.

    Parameters
    ----------
    reflectance
        (..., 401), 0 to 1: measured or estimated.

    Raises
    ------
    ValueError
        When a value is outside 0 to 1.
    """
    outside = on_grid(reflectance, name="reflectance")
    if not np.all((outside >= 0.0) & (outside <= 1.0)):
        raise ValueError("reflectance must lie between 0 and 1.")
    return SurfaceSpectra(outside, outside, 1.0 - outside)


def whole_lens(
    front: SurfaceSpectra, back: SurfaceSpectra, *, internal_transmittance: ArrayLike
) -> tuple[Spectrum, Spectrum]:
    """Reflectance seen from in front and transmittance of the lens, all bounces added.

    R = R1 + T1^2 R2i tau^2 / (1 - R1i R2i tau^2) and T = T1 T2 tau / (1 - R1i R2i tau^2), per wavelength.

    Parameters
    ----------
    front, back
        The two faces, (..., 401) broadcast together. Swapped, they give the reflectance from behind.
    internal_transmittance
        tau from face to face, 0 to 1: a number or (..., 401).

    Returns
    -------
    reflectance, transmittance
        (..., 401). The sum of the two mirror images: where the images lie apart it is an upper bound for either.

    Raises
    ------
    ValueError
        When `internal_transmittance` is outside 0 to 1.

    References
    ----------
    Sum of the geometric series of bounces; Macleod, Thin-Film Optical Filters, section on incoherent reflection.
    """
    tau = np.asarray(internal_transmittance, dtype=np.float64)
    if not np.all((tau >= 0.0) & (tau <= 1.0)):
        raise ValueError("internal_transmittance must lie between 0 and 1.")
    once_round = front.inside * back.inside * tau**2
    reflectance = front.outside + front.transmittance**2 * back.inside * tau**2 / (1.0 - once_round)
    transmittance = front.transmittance * back.transmittance * tau / (1.0 - once_round)
    return reflectance, transmittance


def first_pass_loss(
    front: SurfaceSpectra, back: SurfaceSpectra, *, illuminant: IlluminantName = "D65"
) -> NDArray[np.float64]:
    """Loss that trade tables print, 1 - (1 - rho1)(1 - rho2): each face met once, no tint, no bounces.

    Not the reflectance of the lens, which is lower, as some light comes back: see :func:`whole_lens`.

    Parameters
    ----------
    front, back
        The two faces.
    illuminant
        For the two luminous reflectances.

    Returns
    -------
    A fraction in the leading shape.

    References
    ----------
    Common practice, no source.
    """
    rho1 = front.luminous_reflectance(illuminant=illuminant)
    rho2 = back.luminous_reflectance(illuminant=illuminant)
    return 1.0 - (1.0 - rho1) * (1.0 - rho2)
