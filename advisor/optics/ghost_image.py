"""How large, how bright and where a ghost is: blur in the eye, luminance, place beside its source.

Angles in the eye's space are seen through the lens; "bare" angles are those before the lens (divided by the
magnification). The last axis is the two principal meridians of the lens.
"""

import numpy as np
from numpy.typing import ArrayLike, NDArray

from advisor.optics.ghost_path import PathImage

Floats = NDArray[np.float64]

SMALLEST_ANGLE_RAD = 1e-5
"""Least bare size a source is given, 0.03 arcmin: far below what the eye resolves, and it keeps quotients finite."""


def bare_blur(image: PathImage, *, pupil_mm: ArrayLike, focus_d: ArrayLike) -> Floats:
    """Return the blur of a point as a bare angle, b = pupil |w + V (y + d w)|.

    Parameters
    ----------
    image : PathImage, arrays (..., 2)
    pupil_mm : array_like, (...)
        Entrance-pupil diameter.
    focus_d : array_like, (..., 2)
        V, the vergence at the pupil that the eye holds in focus.

    Returns
    -------
    ndarray, (..., 2)
        Radians; times ``|magnification|`` it is the blur seen.
    """
    pupil_m = np.asarray(pupil_mm, dtype=np.float64)[..., None] * 1e-3
    return np.asarray(pupil_m * np.abs(image.slope + np.asarray(focus_d) * image.pupil_height), dtype=np.float64)


def small_source_luminance(
    illuminance_lx: ArrayLike, *, strength: ArrayLike, blur_rad: ArrayLike, size_rad: ArrayLike
) -> Floats:
    """Luminance of the ghost of a lamp, L = E0 s / ((pi/4) sqrt((b1^2 + a1^2)(b2^2 + a2^2))).

    It is exact where blur or source is much the larger; where they are alike it is the mean over the patch and lies
    up to a factor 2 below the middle of the patch.

    Parameters
    ----------
    illuminance_lx : array_like, (...)
        E0 of one lamp before the lens.
    strength : array_like, (...)
        Absolute strength s.
    blur_rad, size_rad : array_like, (..., 2)
        Bare blur and bare size of the lamp.

    Returns
    -------
    ndarray, (...)
        cd/m2.
    """
    spread = np.prod(patch_extent(blur_rad, size_rad=size_rad), axis=-1)
    return np.asarray(np.asarray(illuminance_lx) * np.asarray(strength) / (np.pi / 4.0 * spread), dtype=np.float64)


def extended_source_luminance(
    luminance_cd_m2: ArrayLike, *, strength: ArrayLike, blur_rad: ArrayLike, size_rad: ArrayLike
) -> Floats:
    """Luminance of the ghost of a window or screen, L = Ls s min(1, a1/b1) min(1, a2/b2); arguments as for a lamp."""
    size = np.maximum(np.asarray(size_rad, dtype=np.float64), SMALLEST_ANGLE_RAD)
    share = np.prod(size / np.maximum(size, np.asarray(blur_rad)), axis=-1)
    return np.asarray(np.asarray(luminance_cd_m2) * np.asarray(strength) * share, dtype=np.float64)


def patch_extent(blur_rad: ArrayLike, *, size_rad: ArrayLike) -> Floats:
    """Return the bare extent of the blurred patch, sqrt(b^2 + a^2) with a at least `SMALLEST_ANGLE_RAD`."""
    size = np.maximum(np.asarray(size_rad, dtype=np.float64), SMALLEST_ANGLE_RAD)
    return np.hypot(np.asarray(blur_rad, dtype=np.float64), size)


def lamps_overlapping(
    extent_rad: ArrayLike, *, lamps: ArrayLike, spacing_rad: ArrayLike, meridian_deg: ArrayLike
) -> Floats:
    """Return how many lamps of a level row add up where their ghosts overlap most.

    Parameters
    ----------
    extent_rad : array_like, (..., 2)
        Bare extent of one ghost along the principal meridians.
    lamps, spacing_rad : array_like, (...)
        Count, and bare angle between neighbours (0: all in one place).
    meridian_deg : array_like, (...)
        First principal meridian from the horizontal.

    Returns
    -------
    ndarray, (...)
        From 1 to ``lamps``.
    """
    extent = np.maximum(np.asarray(extent_rad, dtype=np.float64), SMALLEST_ANGLE_RAD)
    turn = np.deg2rad(meridian_deg)
    across = 1.0 / np.hypot(np.cos(turn) / extent[..., 0], np.sin(turn) / extent[..., 1])
    gap = np.maximum(np.asarray(spacing_rad, dtype=np.float64), np.finfo(np.float64).tiny)
    # divided before it is counted, so that a spacing of 0 stays finite
    reach = np.minimum(across, gap * np.asarray(lamps, dtype=np.float64)) / gap
    return np.asarray(np.minimum(1.0 + np.floor(reach), lamps), dtype=np.float64)


def along_meridians(xy: ArrayLike, *, meridian_deg: ArrayLike) -> Floats:
    """Return the components of a vector (..., 2) along and across the first principal meridian."""
    vector, turn = np.asarray(xy, dtype=np.float64), np.deg2rad(meridian_deg)
    cos, sin = np.cos(turn), np.sin(turn)
    x, y = vector[..., 0], vector[..., 1]
    return np.stack(np.broadcast_arrays(x * cos + y * sin, y * cos - x * sin), axis=-1)


def extent_along_meridians(width_height: ArrayLike, *, meridian_deg: ArrayLike) -> Floats:
    """Return the extents, along and across the first principal meridian, of an upright ellipse of width and height."""
    size, turn = np.asarray(width_height, dtype=np.float64), np.deg2rad(meridian_deg)
    cos, sin = np.cos(turn), np.sin(turn)
    width, height = size[..., 0], size[..., 1]
    return np.stack(
        np.broadcast_arrays(np.hypot(width * cos, height * sin), np.hypot(width * sin, height * cos)), axis=-1
    )


def direction_seen(image: PathImage, *, field_angle_rad: ArrayLike, pupil_offset_mm: ArrayLike) -> Floats:
    """Direction in which a source is seen along a path, from the lens's axis.

    Parameters
    ----------
    image : PathImage, arrays (..., 2)
        Its ``shift_rad`` is how far tilted surfaces turn the direction.
    field_angle_rad : array_like, (..., 2)
        Direction of the source from the lens's axis.
    pupil_offset_mm : array_like, (..., 2)
        Pupil from the lens's axis, positive the same way as the angle.

    Returns
    -------
    ndarray, (..., 2)
        ``M angle + y_p L_p + shift``: radians. With angles counted as slopes of travelling rays, which run the other
        way, the middle term has a minus sign.
    """
    offset_m = np.asarray(pupil_offset_mm, dtype=np.float64) * 1e-3
    turned = image.magnification * np.asarray(field_angle_rad) + offset_m * image.pupil_vergence_d
    return np.asarray(turned + image.shift_rad, dtype=np.float64)
