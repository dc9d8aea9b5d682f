"""What tilting a lens before the eye does to its power."""

import numpy as np
from numpy.typing import ArrayLike, NDArray


def martin_tilt(
    power_d: ArrayLike, *, tilt_deg: ArrayLike, index: ArrayLike
) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Return the sphere and the induced cylinder of a tilted spherical lens by Martin's formula.

    S' = S (1 + sin^2 tilt / (2n)), C = S' tan^2 tilt. The cylinder's axis is the axis of rotation: 180 for a
    pantoscopic tilt, 90 for a wrap.

    Parameters
    ----------
    power_d : array_like
        Power of the lens, dioptres.
    tilt_deg : array_like
        Angle between the line of sight and the lens's axis, degrees, -45 to 45 (good to about 1 % below 20).
    index : array_like
        Refractive index n_d of the material, above 1.

    Returns
    -------
    sphere_d, cylinder_d : ndarray
        Power along the axis of rotation, and the power added at right angles to it, dioptres.

    Raises
    ------
    ValueError
        If ``tilt_deg`` or ``index`` is outside its range.

    References
    ----------
    Martin's formula as optics textbooks print it (memory). It is the thin-lens form of Coddington's equations with
    the stop at the lens, to fourth order in the angle.
    """
    tilt = np.asarray(tilt_deg, dtype=np.float64)
    n = np.asarray(index, dtype=np.float64)
    if not np.all(np.abs(tilt) <= 45.0):
        raise ValueError("tilt_deg must lie between -45 and 45")
    if not np.all(n > 1.0):
        raise ValueError("index must be above 1")
    angle = np.radians(tilt)
    sphere = np.asarray(power_d, dtype=np.float64) * (1.0 + np.sin(angle) ** 2 / (2.0 * n))
    return np.asarray(sphere), np.asarray(sphere * np.tan(angle) ** 2)
