"""Prism: what decentring makes (Prentice) and what a prescription asks for."""

from collections.abc import Iterable

import numpy as np
from numpy.typing import ArrayLike, NDArray

from advisor.optics.meridians import power_along

#: Local direction of a prism's base: towards the nose and up.
BASE_VECTOR = {"in": (1.0, 0.0), "out": (-1.0, 0.0), "up": (0.0, 1.0), "down": (0.0, -1.0)}


def prentice_prism(power_d: ArrayLike, *, offset_mm: ArrayLike) -> NDArray[np.float64]:
    """Return Prentice's prism P = c F, with c in centimetres, as an amount.

    Parameters
    ----------
    power_d : array_like
        Power along the direction of the offset, dioptres.
    offset_mm : array_like
        Distance from the optical centre, mm.

    Returns
    -------
    ndarray
        Prism dioptres, 0 or more.

    References
    ----------
    Prentice's rule; 4 mm at -4.00 makes 1.6.
    """
    return np.abs(np.asarray(power_d, dtype=np.float64) * np.asarray(offset_mm, dtype=np.float64) / 10.0)


def prentice_vector(power_d: ArrayLike, *, first_deg: ArrayLike, offset_mm: ArrayLike) -> NDArray[np.float64]:
    """Return the prism of a spherical or toric lens at a point, as a vector towards the base.

    Each principal meridian makes its own share; the base lies towards the centre of a plus lens.

    Parameters
    ----------
    power_d : array_like, shape (..., 2)
        Principal powers, dioptres.
    first_deg : array_like, shape (...)
        Local direction of the first meridian.
    offset_mm : array_like, shape (..., 2)
        Point looked through, from the optical centre, towards the nose and up.

    Returns
    -------
    ndarray, shape (..., 2)
        Prism dioptres, base towards the nose and base up positive.

    References
    ----------
    Prentice's rule by meridian (the power matrix of a toric lens).
    """
    power = np.asarray(power_d, dtype=np.float64)
    offset = np.asarray(offset_mm, dtype=np.float64)
    turn = np.radians(np.asarray(first_deg, dtype=np.float64))
    cos, sin = np.cos(turn), np.sin(turn)
    along = power[..., 0] * (offset[..., 0] * cos + offset[..., 1] * sin) / 10.0
    across = power[..., 1] * (offset[..., 1] * cos - offset[..., 0] * sin) / 10.0
    return -np.stack([along * cos - across * sin, along * sin + across * cos], axis=-1)


def prism_vector(amounts: Iterable[tuple[float, str]]) -> NDArray[np.float64]:
    """Return the sum of one eye's prescribed prisms as a vector.

    Parameters
    ----------
    amounts : iterable of (amount, base)
        Prism dioptres and ``in``, ``out``, ``up`` or ``down``.

    Returns
    -------
    ndarray, shape (2,)
        Base towards the nose and base up positive.

    Raises
    ------
    ValueError
        If a base has another name.
    """
    total = np.zeros(2)
    for amount, base in amounts:
        if base not in BASE_VECTOR:
            raise ValueError(f"base must be one of {', '.join(BASE_VECTOR)}, not {base!r}")
        total += amount * np.array(BASE_VECTOR[base])
    return total


def prism_wedge(prism_d: ArrayLike, *, index: ArrayLike) -> NDArray[np.float64]:
    """Return how fast a prism's thickness grows towards its base: P/(100 (n-1)), mm per mm.

    Parameters
    ----------
    prism_d : array_like
        Prism dioptres, an amount or vector components.
    index : array_like
        n_d; broadcasts.

    Returns
    -------
    ndarray
        Times the width in mm it is the thickness difference across the lens, P x width/(100 (n-1)).

    References
    ----------
    Deviation of a thin prism, (n-1) times its angle.
    """
    return np.asarray(np.asarray(prism_d, dtype=np.float64) / (100.0 * (np.asarray(index, dtype=np.float64) - 1.0)))


def vertical_imbalance(
    sphere_d: ArrayLike, *, cylinder_d: ArrayLike = 0.0, axis_deg: ArrayLike = 0.0, below_mm: ArrayLike = 10.0
) -> NDArray[np.float64]:
    """Return the difference in vertical prism between the eyes, looking below the optical centres.

    Parameters
    ----------
    sphere_d, cylinder_d, axis_deg : array_like, shape (..., 2)
        Prescription of the right and the left eye on the last axis (a number serves both); axis TABO.
    below_mm : array_like, shape (...)
        How far below the optical centres the wearer looks, mm.

    Returns
    -------
    ndarray, shape (...)
        Prism dioptres, 0 or more: the difference of the powers along the vertical times the distance.

    References
    ----------
    Prentice's rule; 10 mm is the customary reading point (common practice, no source).
    """
    vertical = power_along(sphere_d, cylinder_d=cylinder_d, axis_deg=axis_deg, direction_deg=90.0)
    return prentice_prism(vertical[..., 0] - vertical[..., 1], offset_mm=below_mm)
