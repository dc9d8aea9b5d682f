"""The wearer's eye: pupil, accommodation and the veil that light scattered inside it lays over the scene."""

import numpy as np
from numpy.typing import ArrayLike, NDArray

Floats = NDArray[np.float64]

ENTRANCE_PUPIL_MM = 3.0
"""Cornea to entrance pupil, as seen from in front."""

DEG2_PER_SR = (180.0 / np.pi) ** 2


def _age(age_y: ArrayLike) -> Floats:
    age = np.asarray(age_y, dtype=np.float64)
    if not ((age >= 0.0) & (age <= 130.0)).all():
        raise ValueError("age_y must be from 0 to 130")
    return age


def pupil_watson_yellott_2012(flux_cd_m2_deg2: ArrayLike, *, age_y: ArrayLike, both_eyes: ArrayLike = True) -> Floats:
    """Pupil diameter of Watson & Yellott's unified formula.

    Parameters
    ----------
    flux_cd_m2_deg2 : array_like
        Luminance times the **area** of the adapting field, cd/m2 deg^2, 0 or more. A lamp of illuminance E at the
        eye adds `DEG2_PER_SR` E (an addition of this program).
    age_y : array_like
        Years; clamped to 20..83, the range of the formula.
    both_eyes : array_like of bool
        One eye alone counts a tenth of the flux.

    Returns
    -------
    ndarray
        Diameter, mm.

    References
    ----------
    A. B. Watson and J. I. Yellott, Journal of Vision 12(10):12 (2012).
    """
    flux = np.asarray(flux_cd_m2_deg2, dtype=np.float64)
    if not (flux >= 0.0).all():
        raise ValueError("flux_cd_m2_deg2 must be 0 or more")
    age = np.clip(_age(age_y), 20.0, 83.0)
    x = (flux * np.where(both_eyes, 1.0, 0.1) / 846.0) ** 0.41
    standard_mm = 7.75 - 5.75 * x / (x + 2.0)
    return np.asarray(standard_mm + (age - 28.58) * (0.02132 - 0.009562 * standard_mm), dtype=np.float64)


def accommodation_hofstetter_1950(age_y: ArrayLike) -> Floats:
    """Least expected amplitude of accommodation, 15 - 0.25 age, dioptres, not below 0.

    References
    ----------
    H. W. Hofstetter, American Journal of Optometry 27 (1950); the lowest of the three lines (minimum amplitude).
    """
    return np.asarray(np.maximum(15.0 - 0.25 * _age(age_y), 0.0), dtype=np.float64)


def veil_cie146_2002(separation_deg: ArrayLike, *, age_y: ArrayLike, pigment: ArrayLike) -> Floats:
    """Equivalent veiling luminance per illuminance at the eye: CIE general disability glare.

    Parameters
    ----------
    separation_deg : array_like
        Angle from the light, degrees; held to 0.1..100, the range of the equation.
    age_y : array_like
        Years.
    pigment : array_like
        0 black, 0.5 brown, 1.0 light, 1.2 very light eyes.

    Returns
    -------
    ndarray
        (cd/m2)/lx, that is 1/sr.

    References
    ----------
    CIE 146:2002, equation of general disability glare. The cubic term stands outside the age bracket.
    """
    p = np.asarray(pigment, dtype=np.float64)
    if not ((p >= 0.0) & (p <= 1.2)).all():
        raise ValueError("pigment must be from 0 to 1.2")
    theta = np.clip(np.asarray(separation_deg, dtype=np.float64), 0.1, 100.0)
    older = 1.0 + (_age(age_y) / 62.5) ** 4
    return np.asarray(10.0 / theta**3 + (5.0 / theta**2 + 0.1 * p / theta) * older + 0.0025 * p, dtype=np.float64)


def accommodation_for(defocus_d: ArrayLike, *, amplitude_d: ArrayLike, in_use_d: ArrayLike) -> Floats:
    """Focus the eye can change to see an image more clearly, from what it holds now.

    Parameters
    ----------
    defocus_d : array_like
        Image vergence less the vergence in focus, both at the pupil. Negative asks for more accommodation.
    amplitude_d, in_use_d : array_like
        Amplitude A and the part u of it in use (held to 0..A): the change reaches from -(A - u) to +u.

    Returns
    -------
    ndarray
        The change, with the sign of the defocus; what remains is ``defocus_d`` less this.
    """
    amplitude = np.asarray(amplitude_d, dtype=np.float64)
    if not (amplitude >= 0.0).all():
        raise ValueError("amplitude_d must be 0 or more")
    used = np.clip(np.asarray(in_use_d, dtype=np.float64), 0.0, amplitude)
    return np.asarray(np.clip(np.asarray(defocus_d, dtype=np.float64), used - amplitude, used), dtype=np.float64)
