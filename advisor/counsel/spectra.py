"""Faces and tints of several options as arrays: the first axis is the option, the last the wavelength."""

from collections.abc import Iterable
from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

from advisor.counsel.faces import Face, nominal, substrate
from advisor.counsel.laid_out import Laid
from advisor.counsel.stock_items import Tint
from advisor.optics.ghost_strength import lens_transmittance, path_strengths
from advisor.optics.surface import SurfaceSpectra, first_pass_loss, whole_lens
from advisor.optics.tint import (
    TintOutOfReach,
    finished_internal_transmittance,
    polarising_axes,
    tint_internal_transmittance,
)

Floats = NDArray[np.float64]


@dataclass(frozen=True)
class LensSpectra:
    """Both faces and the material between them.

    Axes: ``front``, ``back`` (option, wavelength); ``tau`` (state, option, axis), the internal transmittance of the
    tint in its clear and its dark state, along the bright and the dark axis of a polarising lens (alike for others);
    ``tint_fits`` (option,), false where no tint gives the figure asked for.
    """

    front: SurfaceSpectra
    back: SurfaceSpectra
    tau: Floats
    tint_fits: NDArray[np.bool_]

    def transmittance(self, *, dark: bool = False) -> Floats:
        """Return the spectral transmittance of each lens, all bounces, (option, wavelength)."""
        bright_axis, dark_axis = self.axes(dark=dark)
        return lens_transmittance(
            self.front, self.back, internal_transmittance=bright_axis, dark_axis_transmittance=dark_axis
        )

    @property
    def darkens(self) -> bool:
        """Whether any tint has a dark state of its own."""
        return bool((self.tau[0] != self.tau[1]).any())

    def reflectance(self) -> Floats:
        """Return what each whole lens mirrors seen from in front, all bounces, (option, wavelength)."""
        bright_axis, dark_axis = self.axes(dark=False)
        bright, _ = whole_lens(self.front, self.back, internal_transmittance=bright_axis)
        if dark_axis is None:
            return bright
        crossed, _ = whole_lens(self.front, self.back, internal_transmittance=dark_axis)
        return np.asarray((bright + crossed) / 2.0)

    def axes(self, *, dark: bool) -> tuple[Floats, Floats | None]:
        """Return the internal transmittance along the bright and the dark axis, (option, 1) each.

        Without a polarising lens among the options there is one axis for all.
        """
        state = self.tau[1 if dark else 0]
        return state[:, :1], None if (state[:, 0] == state[:, 1]).all() else state[:, 1:]

    def strengths(self, *, dark: bool = False) -> Floats:
        """Return the strength of the five ghost paths at each wavelength, (option, path, wavelength)."""
        bright_axis, dark_axis = self.axes(dark=dark)
        return path_strengths(
            self.front, self.back, internal_transmittance=bright_axis, dark_axis_transmittance=dark_axis
        )

    def first_pass_loss(self) -> Floats:
        """Return the figure trade tables print, (option,)."""
        return first_pass_loss(self.front, self.back)


def stacked(surfaces: Iterable[SurfaceSpectra]) -> SurfaceSpectra:
    """Put single faces (401,) into one array (face, 401)."""
    faces = list(surfaces)
    return SurfaceSpectra(
        np.stack([face.outside for face in faces]),
        np.stack([face.inside for face in faces]),
        np.stack([face.transmittance for face in faces]),
    )


@lru_cache(maxsize=1024)
def internal_transmittance(front: Face, back: Face, tint: Tint | None, *, dark: bool = False) -> float | None:
    """Return the internal transmittance of a tint between two faces, or None where no tint gives its figure."""
    if tint is None:
        return 1.0
    figure = tint.luminous_transmittance
    if dark and tint.luminous_transmittance_dark is not None:
        figure = tint.luminous_transmittance_dark
    try:
        if tint.finished:
            return float(finished_internal_transmittance(figure, front=nominal(front), back=nominal(back)))
        return float(tint_internal_transmittance(figure, substrate_index=substrate(front)))
    except TintOutOfReach:
        return None


def tint_axes(option: Laid, *, dark: bool) -> tuple[float, float] | None:
    """Return the internal transmittance along the two axes of an option's tint, or None where no tint fits."""
    if option.tint is None:
        return 1.0, 1.0
    tau = internal_transmittance(option.front_face, option.back_face, option.tint, dark=dark)
    if tau is None:
        return None
    if option.tint.kind != "polarising":
        return tau, tau
    bright, crossed = polarising_axes(tau)
    return float(bright), float(crossed)


def lens_spectra(options: Iterable[Laid], *, angle_deg: float = 0.0) -> LensSpectra:
    """Return the spectra of every option at one angle in air."""
    laid = list(options)
    axes = [[tint_axes(option, dark=dark) for option in laid] for dark in (False, True)]
    return LensSpectra(
        front=stacked(nominal(option.front_face, angle_deg) for option in laid),
        back=stacked(nominal(option.back_face, angle_deg) for option in laid),
        tau=np.array([[(1.0, 1.0) if pair is None else pair for pair in state] for state in axes]),
        tint_fits=np.array([clear is not None and dark is not None for clear, dark in zip(*axes, strict=True)]),
    )
