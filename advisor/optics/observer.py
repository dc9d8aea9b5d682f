"""What others see of the lens: a window mirrored in front of the eye behind it."""

import numpy as np
from numpy.typing import ArrayLike, NDArray


def observer_contrast(
    lens_reflectance: ArrayLike,
    *,
    transmittance: ArrayLike,
    window_luminance_cd_m2: ArrayLike,
    face_luminance_cd_m2: ArrayLike,
) -> NDArray[np.float64]:
    """Luminance of a window mirrored in the lens over that of the eye and skin seen through it, "reflection / eye".

    Parameters
    ----------
    lens_reflectance : array_like
        Luminous reflectance of the whole lens from in front, all bounces, 0..1. They add up only where the images
        in the two faces overlap, so with this figure the contrast is an upper bound; with that of the front face
        alone it is that of the front image.
    transmittance : array_like
        Luminous transmittance of the whole lens, above 0, at most 1; the face is lit and seen through the lens.
    window_luminance_cd_m2, face_luminance_cd_m2 : array_like
        0 or more; above 0, without the lens.

    Returns
    -------
    ndarray
        R L_window / (T^2 L_face).
    """
    reflectance, through = np.asarray(lens_reflectance, np.float64), np.asarray(transmittance, np.float64)
    window, face = np.asarray(window_luminance_cd_m2, np.float64), np.asarray(face_luminance_cd_m2, np.float64)
    if not ((reflectance >= 0.0) & (reflectance <= 1.0)).all():
        raise ValueError("lens_reflectance must be from 0 to 1")
    if not ((through > 0.0) & (through <= 1.0)).all():
        raise ValueError("transmittance must be above 0, at most 1")
    if not (window >= 0.0).all():
        raise ValueError("window_luminance_cd_m2 must be 0 or more")
    if not (face > 0.0).all():
        raise ValueError("face_luminance_cd_m2 must be above 0")
    return np.asarray(reflectance * window / (through**2 * face), dtype=np.float64)
