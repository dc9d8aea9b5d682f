"""Where each ghost forms: thick-lens reduced-angle tracing of the five paths, per principal meridian.

Light travels towards the eye (+z); curvature is positive when its centre lies on the eye side. A ray is the pair
``(y, w)``: height in metres and reduced angle ``n dy/ds``, ``s`` being measured along the travel, so that mirrors
unfold. A surface bends a ray by ``w -= c (k y + tilt)``: ``c = n - 1`` and ``-(n - 1)`` for refraction at front and
back, ``-2n`` and ``+2n`` for a mirror met by light going to the eye and away from it.

Nothing here is ever infinite: a quotient is held to ``MAX_VERGENCE_D`` or ``MAX_MAGNIFICATION`` in size. An image
within a tenth of a millimetre of the back vertex, or a ghost magnified a thousand times, has no place to state anyway.
"""

from collections.abc import Mapping
from dataclasses import dataclass
from types import MappingProxyType

import numpy as np
from numpy.typing import ArrayLike, NDArray

from advisor.optics.ghost_strength import PATHS as PATHS  # one order of the paths for strengths and places
from advisor.optics.lens_section import LensSection

Floats = NDArray[np.float64]

FROM_BEHIND = np.array([path.startswith("behind") for path in PATHS])

CORNEA_RADIUS_MM = 7.8
MAX_VERGENCE_D = 1e4
MAX_MAGNIFICATION = 1e3
LEAST_PUPIL_HEIGHT = 0.3
FARTHEST_PLACE_DEG = 30.0

# F, B refraction at front and back; f, b mirror met inside the lens; m back face as a mirror in air; c cornea;
# g travel through the lens, a travel between lens and cornea. In the order in which light meets them.
_STEPS: Mapping[str, str] = MappingProxyType(
    {
        "direct": "FgB",
        "ahead-inner": "FgbgfgB",
        "behind-back": "m",
        "behind-front": "BgfgB",
        "cornea-back": "FgBacam",
        "cornea-front": "FgBacaBgfgB",
    }
)


@dataclass(frozen=True)
class PathImage:
    """What the light of one path, or of several along an axis, looks like behind the lens; all arrays (..., 2).

    Parameters
    ----------
    pupil_height, slope
        ``y + d w`` and ``w`` of the ray from the middle of the source that meets the first surface at height 1.
    magnification
        Image direction per unit field angle, ``M = 1/(y + d w)``. The field angle is that at the first surface met.
    vergence_d, pupil_vergence_d
        Vergence at the back vertex (``-w/y``) and at the entrance pupil (``-w M``), converging positive.
    shift_rad
        Turn of the direction seen that tilted surfaces (prism, displaced cornea) cause, positive like the field angle.
    """

    pupil_height: Floats
    slope: Floats
    magnification: Floats
    vergence_d: Floats
    pupil_vergence_d: Floats
    shift_rad: Floats


def held_quotient(numerator: ArrayLike, denominator: ArrayLike, *, limit: float) -> Floats:
    """Return numerator / denominator held to plus or minus ``limit``; a zero denominator counts as positive."""
    top, bottom = np.broadcast_arrays(
        np.asarray(numerator, dtype=np.float64), np.asarray(denominator, dtype=np.float64)
    )
    least = np.maximum(np.abs(top) / limit, np.finfo(np.float64).tiny)
    safe = np.where(np.abs(bottom) > least, bottom, np.where(bottom < 0.0, -least, least))
    return np.asarray(top / safe, dtype=np.float64)


def trace_path(
    section: LensSection,
    *,
    path: str,
    height: ArrayLike,
    slope: ArrayLike,
    back_tilt: ArrayLike = 0.0,
    cornea_tilt: ArrayLike = 0.0,
) -> tuple[Floats, Floats]:
    """Trace a paraxial ray from the first surface met to the back vertex, on its way to the eye.

    Parameters
    ----------
    section : LensSection
    path : str
        A key of ``PATHS``, or ``"direct"``.
    height, slope : array_like, (..., 2)
        The ray at the first surface met, before it is bent, in air.
    back_tilt, cornea_tilt : array_like, (..., 2)
        Slope ``dz/dy`` of the back surface and of the cornea on the lens's axis, radians.

    Returns
    -------
    height, slope : ndarray, (..., 2)

    References
    ----------
    Reduced-angle (ABCD) matrices, e.g. Hecht, Optics, chapter 6. Here the matrix acts on the ray step by step.
    """
    if path not in _STEPS:
        raise ValueError(f"path must be one of {', '.join(_STEPS)}")
    n = section.index[..., None]
    k1, k2 = section.front_curvature_per_mm * 1e3, section.back_curvature_per_mm * 1e3
    inside_m = section.thickness_mm[..., None] * 1e-3 / n
    gap_m = section.vertex_mm[..., None] * 1e-3
    back, cornea = np.asarray(back_tilt, dtype=np.float64), np.asarray(cornea_tilt, dtype=np.float64)
    y, w = np.asarray(height, dtype=np.float64), np.asarray(slope, dtype=np.float64)
    for step in _STEPS[path]:
        if step == "g":
            y = y + inside_m * w
        elif step == "a":
            y = y + gap_m * w
        elif step == "F":
            w = w - (n - 1.0) * (k1 * y)
        elif step == "f":
            w = w - 2.0 * n * (k1 * y)
        elif step == "B":
            w = w + (n - 1.0) * (k2 * y + back)
        elif step == "b":
            w = w + 2.0 * n * (k2 * y + back)
        elif step == "m":
            w = w - 2.0 * (k2 * y + back)
        else:
            w = w + 2.0 * (y / (CORNEA_RADIUS_MM * 1e-3) + cornea)
    return y, w


def oblique_mirror_power(
    curvature_per_mm: ArrayLike, *, incidence_deg: ArrayLike, meridian_from_plane_deg: ArrayLike = 0.0
) -> Floats:
    """Principal powers of a concave mirror in air met obliquely: 2k/cos i in the plane of incidence, 2k cos i across.

    Parameters
    ----------
    curvature_per_mm : array_like, (..., 2)
        Principal curvatures, positive when concave towards the light.
    incidence_deg : array_like, (...)
        Angle of incidence, 0 to below 90.
    meridian_from_plane_deg : array_like, (...)
        Angle between the first principal meridian and the plane of incidence.

    Returns
    -------
    ndarray, (..., 2)
        Dioptres, the first for the direction nearer to the first principal meridian.

    References
    ----------
    Coddington's equations for reflection; for an oblique principal meridian the curvature matrix is projected on the
    wavefront (in-plane lengths by 1/cos i) and the result brought to its principal axes.
    """
    i_deg = np.asarray(incidence_deg, dtype=np.float64)
    if not ((i_deg >= 0.0) & (i_deg < 90.0)).all():
        raise ValueError("incidence_deg must be from 0 to below 90")
    k = np.asarray(curvature_per_mm, dtype=np.float64) * 1e3
    turn = np.deg2rad(meridian_from_plane_deg)
    cos2, sin2, cos_i = np.cos(turn) ** 2, np.sin(turn) ** 2, np.cos(np.deg2rad(i_deg))
    in_plane = 2.0 * (k[..., 0] * cos2 + k[..., 1] * sin2) / cos_i
    across = 2.0 * (k[..., 0] * sin2 + k[..., 1] * cos2) * cos_i
    mixed = 2.0 * (k[..., 0] - k[..., 1]) * np.sin(turn) * np.cos(turn)
    middle, half = (in_plane + across) / 2.0, np.hypot((in_plane - across) / 2.0, mixed)
    # the matrix along the first meridian minus that across it decides which principal value is the first's
    lean = (in_plane - across) * np.cos(2.0 * turn) + 4.0 * mixed * np.sin(turn) * np.cos(turn)
    half = np.where(lean < 0.0, -half, half)
    return np.stack([middle + half, middle - half], axis=-1)


def path_image(
    section: LensSection,
    *,
    path: str,
    distance_m: ArrayLike,
    back_tilt: ArrayLike = 0.0,
    cornea_tilt: ArrayLike = 0.0,
    mirror_power_d: ArrayLike | None = None,
) -> PathImage:
    """Return the image that one path makes of a source.

    Parameters
    ----------
    section : LensSection
    path : str
        A key of ``PATHS``, or ``"direct"``.
    distance_m : array_like, (...)
        Source to the first surface met, above 0; infinity for a distant one.
    back_tilt, cornea_tilt : array_like, (..., 2)
        As in `trace_path`.
    mirror_power_d : array_like, (..., 2), optional
        For ``behind-back`` only: the oblique power in place of 2 k2.

    Returns
    -------
    PathImage
    """
    distance = np.asarray(distance_m, dtype=np.float64)
    if not (distance > 0.0).all():
        raise ValueError("distance_m must be above 0")
    inverse = 1.0 / distance[..., None]
    y, w = trace_path(section, path=path, height=1.0, slope=inverse)
    if mirror_power_d is not None:
        if path != "behind-back":
            raise ValueError("mirror_power_d belongs to the path behind-back")
        y, w = np.ones_like(y), inverse - np.asarray(mirror_power_d, dtype=np.float64)
    off_y, off_w = trace_path(section, path=path, height=0.0, slope=0.0, back_tilt=back_tilt, cornea_tilt=cornea_tilt)
    pupil_height = y + section.pupil_m * w
    pupil_height, y, w, off_y, off_w = np.broadcast_arrays(pupil_height, y, w, off_y, off_w)
    magnification = held_quotient(1.0, pupil_height, limit=MAX_MAGNIFICATION)
    return PathImage(
        pupil_height=pupil_height,
        slope=w,
        magnification=magnification,
        vergence_d=held_quotient(-w, y, limit=MAX_VERGENCE_D),
        pupil_vergence_d=np.clip(-w * magnification, -MAX_VERGENCE_D, MAX_VERGENCE_D),
        shift_rad=magnification * (w * off_y - y * off_w),
    )


def ghost_images(
    section: LensSection,
    *,
    distance_m: ArrayLike,
    incidence_deg: ArrayLike = 0.0,
    meridian_from_plane_deg: ArrayLike = 0.0,
    back_tilt: ArrayLike = 0.0,
    cornea_tilt: ArrayLike = 0.0,
) -> PathImage:
    """Return the images of all five paths, stacked on the axis before the last: arrays (..., 5, 2).

    ``behind-back`` takes the oblique power at ``incidence_deg``; ``behind-front`` stays paraxial. See `path_image`.
    """
    oblique = oblique_mirror_power(
        section.back_curvature_per_mm, incidence_deg=incidence_deg, meridian_from_plane_deg=meridian_from_plane_deg
    )
    images = [
        path_image(
            section,
            path=path,
            distance_m=distance_m,
            back_tilt=back_tilt,
            cornea_tilt=cornea_tilt,
            mirror_power_d=oblique if path == "behind-back" else None,
        )
        for path in PATHS
    ]
    stacked = {}
    for name in ("pupil_height", "slope", "magnification", "vergence_d", "pupil_vergence_d", "shift_rad"):
        stacked[name] = np.stack(np.broadcast_arrays(*(getattr(image, name) for image in images)), axis=-2)
    return PathImage(**stacked)


def thin_ghost_power(front_power_d: ArrayLike, *, back_power_d: ArrayLike, index: ArrayLike, path: str) -> Floats:
    """Return a ghost's power for a lens without thickness: a check and an explanation, too crude to decide with.

    Parameters
    ----------
    front_power_d, back_power_d : array_like
        F1 = (n-1) k1 and F2 = -(n-1) k2.
    index : array_like
    path : str
        ``ahead-inner``: F(3n-1)/(n-1); ``behind-back``: -2F2/(n-1); ``behind-front``: 2F2 + 2nF1/(n-1).
    """
    f1, f2, n = (np.asarray(value, dtype=np.float64) for value in (front_power_d, back_power_d, index))
    if path == "ahead-inner":
        return np.asarray((f1 + f2) * (3.0 * n - 1.0) / (n - 1.0))
    if path == "behind-back":
        return np.asarray(-2.0 * f2 / (n - 1.0))
    if path == "behind-front":
        return np.asarray(2.0 * f2 + 2.0 * n * f1 / (n - 1.0))
    raise ValueError("path must be ahead-inner, behind-back or behind-front")


def spread_over_lens(image: PathImage, *, field_angle_rad: ArrayLike) -> NDArray[np.bool_]:
    """Tell where a ghost has no place to state: y + d w at most 0.3 in a meridian, or its direction past 30 degrees.

    Parameters
    ----------
    image : PathImage
    field_angle_rad : array_like, (..., 2)
        Source from the lens's axis; 0 for light from behind, whose ghost has no stated place.

    Returns
    -------
    ndarray of bool, (...)
    """
    direction = np.linalg.norm(image.magnification * np.asarray(field_angle_rad, dtype=np.float64), axis=-1)
    narrow = (image.pupil_height <= LEAST_PUPIL_HEIGHT).any(axis=-1)
    return np.asarray(narrow | (direction > np.deg2rad(FARTHEST_PLACE_DEG)), dtype=np.bool_)
