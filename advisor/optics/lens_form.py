"""The form of a lens: front power, back power, curvatures, sag.

Signs: light travels towards the eye (+z); a curvature is positive when its centre lies on the eye side. Front power
F1 = (n-1) k1, back power F2 = -(n-1) k2. Curvatures are per millimetre, powers in dioptres for the material's own n_d.
The front surface is a sphere; a cylinder is worked on the back.
"""

import numpy as np
from numpy.typing import ArrayLike, NDArray

#: Index the nominal curve of a surfacing tool is marked for.
NOMINAL_TOOL_INDEX = 1.53
#: Flattest and steepest front a lens is given when its material lists none (common practice, no source).
FLATTEST_FRONT_D = 0.0
STEEPEST_FRONT_D = 12.0


def vogel_front_power(
    spherical_equivalent_d: ArrayLike, *, lowest_d: float = FLATTEST_FRONT_D, highest_d: float = STEEPEST_FRONT_D
) -> NDArray[np.float64]:
    """Return the front power of Vogel's rule: SE + 6 for plus, SE/2 + 6 for minus.

    The rule alone would give a +12.00 a front of 18 D, which cannot span an ordinary rim, so the result is kept
    between ``lowest_d`` and ``highest_d`` (our choice).

    Parameters
    ----------
    spherical_equivalent_d : array_like
        Sphere plus half the cylinder, dioptres.
    lowest_d, highest_d : float
        Limits of the front power, dioptres.

    Returns
    -------
    ndarray
        True front power, dioptres.

    References
    ----------
    Vogel's rule, dispensing textbooks (memory).
    """
    equivalent = np.asarray(spherical_equivalent_d, dtype=np.float64)
    return np.asarray(np.clip(np.where(equivalent > 0.0, equivalent, equivalent / 2.0) + 6.0, lowest_d, highest_d))


def nearest_base_power(front_power_d: ArrayLike, *, base_powers_d: ArrayLike) -> NDArray[np.float64]:
    """Return the front power a material is made in that lies nearest the wanted one (the flatter of two as near).

    Parameters
    ----------
    front_power_d : array_like, shape (...)
        Wanted true front power, dioptres.
    base_powers_d : array_like, shape (..., powers)
        True front powers on offer, broadcasting over the leading axes; NaN pads short lists, and a list of NaN alone
        or of length 0 sets no limit.

    Returns
    -------
    ndarray
        Front power, dioptres.
    """
    wanted = np.asarray(front_power_d, dtype=np.float64)
    offered = np.asarray(base_powers_d, dtype=np.float64)
    if offered.shape[-1] == 0:
        return wanted
    offered = np.sort(np.where(np.isnan(offered), np.inf, offered), axis=-1)
    offered = np.broadcast_to(offered, (*np.broadcast_shapes(wanted.shape, offered.shape[:-1]), offered.shape[-1]))
    best = np.argmin(np.abs(offered - wanted[..., None]), axis=-1)
    chosen = np.take_along_axis(offered, best[..., None], axis=-1)[..., 0]
    return np.asarray(np.where(np.isfinite(chosen), chosen, wanted))


def true_front_power(nominal_power_d: ArrayLike, *, index: ArrayLike) -> NDArray[np.float64]:
    """Return the true power of a curve whose nominal power is marked for an index of 1.53: F (n-1)/0.53.

    Parameters
    ----------
    nominal_power_d : array_like
        Nominal (1.53 tool) power, dioptres.
    index : array_like
        n_d of the material.

    Returns
    -------
    ndarray
        True surface power, dioptres.
    """
    n = np.asarray(index, dtype=np.float64)
    return np.asarray(np.asarray(nominal_power_d, dtype=np.float64) * (n - 1.0) / (NOMINAL_TOOL_INDEX - 1.0))


def back_power(
    back_vertex_power_d: ArrayLike, *, front_power_d: ArrayLike, centre_mm: ArrayLike, index: ArrayLike
) -> NDArray[np.float64]:
    """Return the back surface power that gives a back vertex power: F2 = Fv - F1/(1 - (t/n) F1).

    Parameters
    ----------
    back_vertex_power_d : array_like
        Prescribed power along one meridian, dioptres.
    front_power_d, centre_mm, index : array_like
        True front power (dioptres), centre thickness (mm) and n_d; all broadcast.

    Returns
    -------
    ndarray
        Back surface power, dioptres. Where (t/n) F1 reaches 0.9, far beyond any lens, the divisor is held at 0.1 so
        that the result stays finite.

    References
    ----------
    Back vertex power of a thick lens, Gaussian optics.
    """
    front = np.asarray(front_power_d, dtype=np.float64)
    reduced_m = np.asarray(centre_mm, dtype=np.float64) / 1000.0 / np.asarray(index, dtype=np.float64)
    return np.asarray(back_vertex_power_d, dtype=np.float64) - front / np.maximum(1.0 - reduced_m * front, 0.1)


def front_curvature(front_power_d: ArrayLike, *, index: ArrayLike) -> NDArray[np.float64]:
    """Return the front curvature k1 = F1/(n-1), per mm.

    Parameters
    ----------
    front_power_d, index : array_like
        True front power (dioptres) and n_d, above 1.

    Returns
    -------
    ndarray
        Curvature, 1/mm.

    Raises
    ------
    ValueError
        If ``index`` is not above 1.
    """
    n = np.asarray(index, dtype=np.float64)
    if not np.all(n > 1.0):
        raise ValueError("index must be above 1")
    return np.asarray(np.asarray(front_power_d, dtype=np.float64) / (n - 1.0) / 1000.0)


def back_curvature(back_power_d: ArrayLike, *, index: ArrayLike) -> NDArray[np.float64]:
    """Return the back curvature k2 = -F2/(n-1), per mm; arguments as in `front_curvature`."""
    return np.asarray(-front_curvature(back_power_d, index=index))


def curvature_along(
    curvature_per_mm: NDArray[np.float64], *, first_deg: ArrayLike, direction_deg: ArrayLike
) -> NDArray[np.float64]:
    """Return the curvature of a toric surface along a direction: k_a cos^2 + k_b sin^2.

    Taking a circular arc of this curvature in every direction departs from a true toroid by up to 0.1 mm of sag at
    30 mm from the centre.

    Parameters
    ----------
    curvature_per_mm : ndarray, shape (..., 2)
        Principal curvatures.
    first_deg : array_like, shape (...)
        Direction of the first of them.
    direction_deg : array_like, shape (..., directions)
        Directions asked for, same frame.

    Returns
    -------
    ndarray, shape (..., directions)
        Curvature, 1/mm.

    References
    ----------
    Euler's theorem on normal curvature.
    """
    turn = np.radians(np.asarray(direction_deg, dtype=np.float64) - np.asarray(first_deg, dtype=np.float64)[..., None])
    first, second = curvature_per_mm[..., 0, None], curvature_per_mm[..., 1, None]
    return np.asarray(second + (first - second) * np.cos(turn) ** 2)


def surface_exists(curvature_per_mm: ArrayLike, *, radius_mm: ArrayLike) -> NDArray[np.bool_]:
    """Return whether a sphere of this curvature reaches ``radius_mm`` from its axis (|k| rho < 1)."""
    reach = np.abs(np.asarray(curvature_per_mm, dtype=np.float64)) * np.asarray(radius_mm, dtype=np.float64)
    return np.asarray(reach < 1.0)


def sag(curvature_per_mm: ArrayLike, *, radius_mm: ArrayLike) -> NDArray[np.float64]:
    """Return the sag s = k rho^2/(1 + sqrt(1 - k^2 rho^2)) of a sphere, positive towards the eye for k > 0.

    Parameters
    ----------
    curvature_per_mm, radius_mm : array_like
        Curvature (1/mm) and distance from the axis (mm); they broadcast.

    Returns
    -------
    ndarray
        Sag, mm. Beyond the sphere's equator, where `surface_exists` is false, the root is taken as 0: a finite
        stand-in, never a surface.
    """
    curvature = np.asarray(curvature_per_mm, dtype=np.float64)
    radius = np.asarray(radius_mm, dtype=np.float64)
    bent = curvature * radius
    return np.asarray(bent * radius / (1.0 + np.sqrt(np.maximum(1.0 - bent * bent, 0.0))))
