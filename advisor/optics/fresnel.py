"""Reflectance of one bare face."""

import numpy as np
from numpy.typing import ArrayLike, NDArray


def normal_reflectance(index: ArrayLike, *, incident_index: ArrayLike = 1.0) -> NDArray[np.float64]:
    """Fresnel reflectance at normal incidence, R = ((n - n0)/(n + n0))^2, the same from either side.

    Parameters
    ----------
    index, incident_index : array_like
        Real indices of the two media, above 0, broadcast together.

    Returns
    -------
    ndarray
        Fraction of the incident power.

    Raises
    ------
    ValueError
        Naming the index that is not above 0.

    References
    ----------
    Born and Wolf, Principles of Optics, section 1.5.3.
    """
    inside = _positive("index", index)
    outside = _positive("incident_index", incident_index)
    return np.asarray(((inside - outside) / (inside + outside)) ** 2, dtype=np.float64)


def fresnel_reflectance(
    angle_deg: ArrayLike, *, substrate_index: ArrayLike, incident_index: ArrayLike = 1.0
) -> NDArray[np.float64]:
    """Fresnel reflectance of one face at an angle, s and p polarised.

    Parameters
    ----------
    angle_deg : array_like
        Angle in air, whatever the incident medium is; 0 (normal) to below 90.
    substrate_index, incident_index : array_like
        Real indices of the far and the near medium, above 0. The three are broadcast together.

    Returns
    -------
    ndarray, (..., 2)
        Fractions of the incident power, s then p; their mean is the unpolarised reflectance. 1 where the light
        cannot enter the far medium (total reflection).

    Raises
    ------
    ValueError
        Naming the parameter out of range; `incident_index` too where no wave of that angle in air travels in it.

    References
    ----------
    Born and Wolf, Principles of Optics, section 1.5.3, equations 21a and 21b.
    """
    angle = np.asarray(angle_deg, dtype=np.float64)
    if not np.all((angle >= 0.0) & (angle < 90.0)):
        raise ValueError("angle_deg must be at least 0 and below 90")
    near = _positive("incident_index", incident_index)
    far = _positive("substrate_index", substrate_index)
    tangential = np.sin(np.radians(angle)) ** 2
    if np.any(near**2 <= tangential):
        raise ValueError("incident_index is too low for angle_deg: no wave of that angle in air travels in it")
    near_normal = np.sqrt(near**2 - tangential)
    far_normal = np.sqrt(np.maximum(far**2 - tangential, 0.0))  # 0 from the critical angle on, which gives R = 1
    s = (near_normal - far_normal) / (near_normal + far_normal)
    p = (far**2 * near_normal - near**2 * far_normal) / (far**2 * near_normal + near**2 * far_normal)
    return np.stack(np.broadcast_arrays(s, p), axis=-1) ** 2


def _positive(name: str, values: ArrayLike) -> NDArray[np.float64]:
    array = np.asarray(values, dtype=np.float64)
    if not np.all(np.isfinite(array) & (array > 0.0)):
        raise ValueError(f"{name} must be above 0")
    return array
