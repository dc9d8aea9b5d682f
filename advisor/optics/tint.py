"""Internal transmittance of a tinted lens, solved from the one number a supplier quotes.

The number is the luminous transmittance of a lens of that tint with bare faces; a coated lens of the same tint lets
more light through. The tint's colour is not known from one number: the internal transmittance is taken as flat over
wavelength.
"""

from typing import Final

import numpy as np
from numpy.typing import ArrayLike, NDArray

from advisor.errors import TwolightError
from advisor.optics.photometry import luminous_mean
from advisor.optics.surface import SurfaceSpectra, bare_surface

LEAST_AXIS_RATIO: Final = 8.0
"""Bright to dark axis of a polarising lens, the least for a sun lens (ISO 12312-1, from memory; a modelling choice)."""


class TintOutOfReach(TwolightError, ValueError):
    """A luminous transmittance that no tint can give with these faces."""

    def __init__(self, wanted: float, *, greatest: float) -> None:
        self.wanted = wanted
        self.greatest = greatest
        super().__init__(
            f"A luminous transmittance of {wanted:.3f} is out of reach: untinted, a lens with these faces passes "
            f"{greatest:.3f}. Give a lower figure, or mark the tint as finished if the figure is of a coated lens."
        )


def tint_internal_transmittance(
    luminous_transmittance: ArrayLike, *, substrate_index: ArrayLike
) -> NDArray[np.float64]:
    """Internal transmittance of a tint quoted by the luminous transmittance of a lens with bare faces.

    Parameters
    ----------
    luminous_transmittance
        (...), above 0, of the lens with bare faces under D65.
    substrate_index
        Lens material, a number or (401,).

    Returns
    -------
    tau (...), 0 to 1, face to face, for every wavelength.

    Raises
    ------
    TintOutOfReach
        When even an untinted lens with bare faces passes less.
    ValueError
        When `luminous_transmittance` is not above 0.

    References
    ----------
    Inverse of the luminous mean of T = T1 T2 tau/(1 - R1i R2i tau^2), :func:`advisor.optics.surface.whole_lens`. At
    constant index r it is the positive root of T r^2 tau^2 + (1 - r)^2 tau - T = 0.
    """
    face = bare_surface(substrate_index)
    return finished_internal_transmittance(luminous_transmittance, front=face, back=face)


def finished_internal_transmittance(
    luminous_transmittance: ArrayLike, *, front: SurfaceSpectra, back: SurfaceSpectra
) -> NDArray[np.float64]:
    """Internal transmittance from the luminous transmittance of the finished lens with its real faces.

    Parameters
    ----------
    luminous_transmittance
        (...), above 0, of the finished lens under D65.
    front, back
        The lens's own faces, (401,) each.

    Returns
    -------
    tau (...), 0 to 1.

    Raises
    ------
    TintOutOfReach
        When the lens passes less even without a tint.
    ValueError
        When `luminous_transmittance` is not above 0.

    References
    ----------
    As :func:`tint_internal_transmittance`. The luminous transmittance rises with tau and ever faster, so Newton's rule
    from tau = 1 comes down to the one root without overshooting.
    """
    wanted = np.asarray(luminous_transmittance, dtype=np.float64)
    if not np.all(wanted > 0.0):
        raise ValueError("luminous_transmittance must be above 0.")
    passed = front.transmittance * back.transmittance
    bounced = front.inside * back.inside
    greatest = float(luminous_mean(passed / (1.0 - bounced)))
    if np.any(wanted > greatest * (1.0 + 1e-12)):
        raise TintOutOfReach(float(wanted.max()), greatest=greatest)
    tau = np.ones(wanted.shape)
    for _ in range(30):
        once_round = bounced * tau[..., None] ** 2
        value = luminous_mean(passed * tau[..., None] / (1.0 - once_round))
        slope = luminous_mean(passed * (1.0 + once_round) / (1.0 - once_round) ** 2)
        step = (value - wanted) / slope
        tau = tau - step
        if np.all(np.abs(step) <= 4e-16 * tau):
            break
    return np.clip(tau, 0.0, 1.0)


def polarising_axes(
    internal_transmittance: ArrayLike, *, axis_ratio: float = LEAST_AXIS_RATIO
) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Transmittances of the bright and the dark axis of a polarising tint of a given mean.

    Parameters
    ----------
    internal_transmittance
        tau (...), 0 to 1, for unpolarised light: the mean of the two.
    axis_ratio
        Bright over dark, 1 or more. Where the bright axis would pass 1 it is held at 1 and the dark one takes the rest.

    Returns
    -------
    bright, dark
        (...) each.

    Raises
    ------
    ValueError
        When either parameter is out of range.

    References
    ----------
    A modelling choice; a shop that knows its lens's ratio should give it.
    """
    mean = np.asarray(internal_transmittance, dtype=np.float64)
    if not np.all((mean >= 0.0) & (mean <= 1.0)):
        raise ValueError("internal_transmittance must lie between 0 and 1.")
    if not axis_ratio >= 1.0:
        raise ValueError("axis_ratio must be 1 or more.")
    bright: NDArray[np.float64] = np.minimum(1.0, 2.0 * mean / (1.0 + 1.0 / axis_ratio))
    return bright, np.maximum(0.0, 2.0 * mean - bright)
