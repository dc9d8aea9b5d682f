"""Directions: the prescription's axis notation, the eye's own x and y, and powers along them.

Two frames are used, and this is the one place that joins them.

* **TABO**, the prescription's: degrees anticlockwise from three o'clock as seen by a person facing the wearer, the same
  for both eyes.
* **Local**, the lens's own: x towards the nose, y up, degrees from x towards y. Rims, edges and prism bases use it.

Seen from the front, the wearer's right eye has the nose on the viewer's right, so x points to three o'clock and a
local angle equals the TABO angle. The left eye has the nose on the viewer's left, so the local angle is 180 minus the
TABO angle. Eyes that mirror each other therefore have the same local angles.

Eye axis: index 0 is the right eye, 1 the left.
"""

import numpy as np
from numpy.typing import ArrayLike, NDArray

RIGHT = 0
LEFT = 1


def power_along(
    sphere_d: ArrayLike, *, cylinder_d: ArrayLike, axis_deg: ArrayLike, direction_deg: ArrayLike
) -> NDArray[np.float64]:
    """Return S + C sin^2(direction - axis), the power along a direction.

    Parameters
    ----------
    sphere_d, cylinder_d : array_like
        Sphere and cylinder, dioptres, any sign.
    axis_deg, direction_deg : array_like
        Axis and direction in one frame, degrees. All arguments broadcast.

    Returns
    -------
    ndarray
        Power, dioptres.
    """
    turn = np.radians(np.asarray(direction_deg, dtype=np.float64) - np.asarray(axis_deg, dtype=np.float64))
    sphere, cylinder = np.asarray(sphere_d, dtype=np.float64), np.asarray(cylinder_d, dtype=np.float64)
    return np.asarray(sphere + cylinder * np.sin(turn) ** 2)


def principal_meridians(
    sphere_d: ArrayLike, *, cylinder_d: ArrayLike = 0.0, axis_deg: ArrayLike = 0.0
) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Return the two principal powers, the more positive first, and the directions they lie along.

    A prescription written with plus or with minus cylinder gives the same pair.

    Parameters
    ----------
    sphere_d, cylinder_d : array_like
        Dioptres, any sign.
    axis_deg : array_like
        Cylinder axis, TABO; disregarded where the cylinder is 0.

    Returns
    -------
    power_d : ndarray, shape (..., 2)
        Principal powers, dioptres.
    direction_deg : ndarray, shape (..., 2)
        TABO direction of each, 0 <= direction < 180; 0 and 90 for a sphere.
    """
    sphere, cylinder, axis = np.broadcast_arrays(
        np.asarray(sphere_d, dtype=np.float64),
        np.asarray(cylinder_d, dtype=np.float64),
        np.asarray(axis_deg, dtype=np.float64),
    )
    axis = np.where(cylinder == 0.0, 0.0, axis)
    along = sphere
    across = sphere + cylinder
    first = np.where(cylinder > 0.0, axis + 90.0, axis)
    power = np.stack([np.maximum(along, across), np.minimum(along, across)], axis=-1)
    direction = np.stack([first, first + 90.0], axis=-1) % 180.0
    return power, direction


def local_direction(tabo_deg: ArrayLike, *, eye: ArrayLike) -> NDArray[np.float64]:
    """Return a TABO direction in the eye's own frame (x towards the nose).

    Parameters
    ----------
    tabo_deg : array_like
        Direction as a person facing the wearer sees it, degrees.
    eye : array_like of int
        0 right, 1 left; broadcasts.

    Returns
    -------
    ndarray
        Local direction, 0 <= angle < 360. For an axis, which has no sense, take it modulo 180.

    Raises
    ------
    ValueError
        If ``eye`` holds anything but 0 and 1.
    """
    side = np.asarray(eye)
    if not np.all((side == RIGHT) | (side == LEFT)):
        raise ValueError("eye must be 0 (right) or 1 (left)")
    tabo = np.asarray(tabo_deg, dtype=np.float64)
    return np.asarray(np.where(side == RIGHT, tabo, 180.0 - tabo) % 360.0)
