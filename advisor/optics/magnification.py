"""Spectacle magnification and how it changes from one pair to the next."""

import numpy as np
from numpy.typing import ArrayLike, NDArray

from advisor.optics.eye import ENTRANCE_PUPIL_MM


def spectacle_magnification(
    back_vertex_power_d: ArrayLike,
    *,
    front_power_d: ArrayLike,
    centre_mm: ArrayLike,
    index: ArrayLike,
    vertex_mm: ArrayLike,
) -> NDArray[np.float64]:
    """Return the size of the retinal image with the lens over its size without, distant objects.

    Shape factor 1/(1 - (t/n) F1) times power factor 1/(1 - d Fv), d from the back vertex to the entrance pupil
    (vertex distance + 3 mm).

    Parameters
    ----------
    back_vertex_power_d : array_like
        Power along the meridian asked for, dioptres; a trailing axis of two meridians needs trailing axes of one on
        the others.
    front_power_d : array_like
        Front surface power, dioptres, true for the material's own index.
    centre_mm : array_like
        Centre thickness, mm.
    index : array_like
        Refractive index n_d.
    vertex_mm : array_like
        Vertex distance, mm.

    Returns
    -------
    ndarray
        Magnification as a ratio; 1 is unchanged.

    Raises
    ------
    ValueError
        If either factor has no meaning because light is focused before it reaches the pupil.

    References
    ----------
    Shape and power factors of spectacle magnification, optics textbooks (memory).
    """
    thickness_m = np.asarray(centre_mm, dtype=np.float64) / 1000.0
    shape = 1.0 - thickness_m / np.asarray(index, dtype=np.float64) * np.asarray(front_power_d, dtype=np.float64)
    distance_m = (np.asarray(vertex_mm, dtype=np.float64) + ENTRANCE_PUPIL_MM) / 1000.0
    power = 1.0 - distance_m * np.asarray(back_vertex_power_d, dtype=np.float64)
    if not (np.all(shape > 0.0) and np.all(power > 0.0)):
        raise ValueError("front_power_d, centre_mm, vertex_mm: light is focused before it reaches the pupil")
    return np.asarray(1.0 / (shape * power))


def magnification_percent(magnification: ArrayLike) -> NDArray[np.float64]:
    """Return a magnification ratio as the percentage by which the image is larger (+) or smaller (-)."""
    return np.asarray(100.0 * (np.asarray(magnification, dtype=np.float64) - 1.0))


def magnification_change_percent(magnification: ArrayLike, *, worn_magnification: ArrayLike) -> NDArray[np.float64]:
    """Return by how many per cent things look larger (+) or smaller (-) than through the pair worn now.

    Parameters
    ----------
    magnification, worn_magnification : array_like
        Ratios from `spectacle_magnification`, new pair and worn pair.

    Returns
    -------
    ndarray
        100 (new/worn - 1).
    """
    worn = np.asarray(worn_magnification, dtype=np.float64)
    return magnification_percent(np.asarray(magnification, dtype=np.float64) / worn)
