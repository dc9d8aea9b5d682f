"""Weight of a lens inside its rim."""

import numpy as np
from numpy.typing import ArrayLike, NDArray

from advisor.optics.centration import CentredRim
from advisor.optics.lens_form import curvature_along, sag
from advisor.optics.thickness import LensShape, wedge_at

# Gauss-Legendre nodes on 0..1 for v = s^2: a sag is smooth in the square of the radius, so that few nodes do.
_NODES, _SHARES = np.polynomial.legendre.leggauss(6)
_DEPTH = np.sqrt((_NODES + 1.0) / 2.0)
_SHARES = _SHARES / 2.0


def lens_volume_mm3(shape: LensShape, *, rim: CentredRim) -> NDArray[np.float64]:
    """Return the volume inside the rim, cut straight along the lens's axis, without bevel or groove.

    Polar integration about the optical centre: Gauss-Legendre in the square of the radius, the trapezium rule on the
    closed rim. The wedge is linear and is integrated in closed form.

    Parameters
    ----------
    shape : LensShape
        From `thickness.lens_shape`.
    rim : CentredRim
        The rim it was computed for.

    Returns
    -------
    ndarray, shape (...)
        Volume, mm3; a stand-in where ``shape.refusal`` is not 0.
    """
    along = curvature_along(shape.back_curvature_per_mm, first_deg=shape.first_deg, direction_deg=rim.angle_deg)
    front = shape.front_curvature_per_mm[..., None]
    total = shape.centre_mm[..., None] + wedge_at(shape.wedge, radius_mm=rim.radius_mm, angle_deg=rim.angle_deg) * (
        2.0 / 3.0
    )
    for depth, share in zip(_DEPTH, _SHARES, strict=True):
        radius = rim.radius_mm * depth
        total = total + share * (sag(along, radius_mm=radius) - sag(front, radius_mm=radius))
    return np.asarray((rim.sweep_mm2 * total).sum(axis=-1) / 2.0)


def lens_weight_g(shape: LensShape, *, rim: CentredRim, density_g_cm3: ArrayLike) -> NDArray[np.float64]:
    """Return the weight of the edged lens: density times volume.

    Parameters
    ----------
    shape : LensShape
        From `thickness.lens_shape`.
    rim : CentredRim
        The rim it was computed for.
    density_g_cm3 : array_like, shape (...)
        Density of the material, g/cm3.

    Returns
    -------
    ndarray, shape (...)
        Grams, for one lens.
    """
    return np.asarray(np.asarray(density_g_cm3, dtype=np.float64) * lens_volume_mm3(shape, rim=rim) / 1000.0)
