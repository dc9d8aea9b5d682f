"""Where the optical centre lies in the rim, the rim as seen from there, and the blank it needs."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray


def optical_centre(
    a_mm: ArrayLike,
    *,
    b_mm: ArrayLike,
    dbl_mm: ArrayLike,
    monocular_pd_mm: ArrayLike,
    height_mm: ArrayLike | None = None,
) -> NDArray[np.float64]:
    """Return where the optical centre lies from the box centre: inset (a + DBL)/2 - PD, raise height - b/2.

    Parameters
    ----------
    a_mm, b_mm, dbl_mm : array_like
        Box and bridge, mm.
    monocular_pd_mm : array_like
        From the middle of the bridge to the pupil, mm.
    height_mm : array_like, optional
        From the lowest line of the box, mm; where left out or NaN, half the box.

    Returns
    -------
    ndarray, shape (..., 2)
        Inset towards the nose (negative: outwards) and raise, mm.
    """
    a, b = np.asarray(a_mm, dtype=np.float64), np.asarray(b_mm, dtype=np.float64)
    inset = (a + np.asarray(dbl_mm, dtype=np.float64)) / 2.0 - np.asarray(monocular_pd_mm, dtype=np.float64)
    height = np.asarray(np.nan if height_mm is None else height_mm, dtype=np.float64)
    raised = np.where(np.isnan(height), 0.0, height - b / 2.0)
    return np.stack(np.broadcast_arrays(inset, raised), axis=-1)


@dataclass(frozen=True)
class CentredRim:
    """A rim in polar form about the optical centre; arrays (..., RIM_ANGLES) unless said otherwise.

    ``sweep_mm2`` is twice the (signed) area of the wedge each point stands for, so that the integral of f over the
    lens is sum(sweep x integral of f(s q) s ds, s 0..1); this holds for an optical centre anywhere.
    ``encloses_centre`` (...) is false where the optical centre lies outside the rim.
    """

    radius_mm: NDArray[np.float64]
    angle_deg: NDArray[np.float64]
    sweep_mm2: NDArray[np.float64]
    encloses_centre: NDArray[np.bool_]


def centred_rim(rim_mm: NDArray[np.float64], *, optical_centre_mm: ArrayLike) -> CentredRim:
    """Return the rim about its optical centre.

    Parameters
    ----------
    rim_mm : ndarray, shape (..., RIM_ANGLES, 2)
        From `box_rim` or `traced_rim`.
    optical_centre_mm : array_like, shape (..., 2)
        From `optical_centre`; leading axes broadcast.

    Returns
    -------
    CentredRim
    """
    offset = rim_mm - np.asarray(optical_centre_mm, dtype=np.float64)[..., None, :]
    x, y = offset[..., 0], offset[..., 1]
    sweep = x * _step(y) - y * _step(x)
    angle = np.arctan2(y, x)
    turned = (np.roll(angle, -1, axis=-1) - angle + np.pi) % (2.0 * np.pi) - np.pi
    return CentredRim(
        radius_mm=np.hypot(x, y),
        angle_deg=np.degrees(angle) % 360.0,
        sweep_mm2=sweep,
        encloses_centre=np.asarray(np.abs(turned.sum(axis=-1)) > np.pi),
    )


def _step(values: NDArray[np.float64]) -> NDArray[np.float64]:
    """Return the change per point along a closed curve, fourth-order central differences."""
    near = np.roll(values, -1, axis=-1) - np.roll(values, 1, axis=-1)
    far = np.roll(values, -2, axis=-1) - np.roll(values, 2, axis=-1)
    return np.asarray((8.0 * near - far) / 12.0)


def minimum_blank(rim: CentredRim, *, allowance_mm: float = 2.0) -> NDArray[np.float64]:
    """Return the smallest round blank: twice the longest radius from the optical centre, plus the allowance.

    Parameters
    ----------
    rim : CentredRim
    allowance_mm : float
        For chips at the blank's edge, mm (common practice, no source).

    Returns
    -------
    ndarray, shape (...)
        Diameter, mm.
    """
    return np.asarray(2.0 * rim.radius_mm.max(axis=-1) + allowance_mm)
