"""Change of a lens's power with its distance from the eye."""

import numpy as np
from numpy.typing import ArrayLike, NDArray


def vertex_change(power_d: ArrayLike, *, from_mm: ArrayLike, to_mm: ArrayLike) -> NDArray[np.float64]:
    """Return the power that does at ``to_mm`` from the cornea what ``power_d`` does at ``from_mm``.

    The step form of the vertex formula, F' = F/(1 - dF), d = from - to in metres (moved towards the eye: d > 0).

    Parameters
    ----------
    power_d : array_like
        Back vertex power along one meridian, dioptres, -30 to 30.
    from_mm, to_mm : array_like
        Vertex distances before and after, mm; 0 is the cornea. They broadcast against ``power_d``.

    Returns
    -------
    ndarray
        Power at the new distance, dioptres.

    Raises
    ------
    ValueError
        If the light would be focused between the two places (dF >= 1), where no power does the same.

    References
    ----------
    Vertex formula of every optics textbook (memory); -10.00 from 12 mm to the cornea is -8.93 D.
    """
    power = np.asarray(power_d, dtype=np.float64)
    moved_m = (np.asarray(from_mm, dtype=np.float64) - np.asarray(to_mm, dtype=np.float64)) / 1000.0
    scale = 1.0 - moved_m * power
    if np.any(scale <= 0.0):
        raise ValueError("from_mm and to_mm: the lens's focus lies between the two distances")
    return np.asarray(power / scale)
