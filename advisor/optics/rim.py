"""The rim: the outline of one lens about the centre of its box, made from the box's measures.

Local frame (see `meridians`): x towards the nose, y up, mm. Because x points to the nose on either side, the mirror
image of a right outline is the same array: an outline known for one eye serves both.

A rim is ``RIM_ANGLES`` points at equal steps of angle about the box centre, from x towards y.
"""

import numpy as np
from numpy.typing import ArrayLike, NDArray

from advisor.errors import TwolightError

RIM_ANGLES = 180
#: Exponent of the superellipse for a frame without ED (our choice).
DEFAULT_EXPONENT = 2.5

RIM_ANGLE_RAD = np.arange(RIM_ANGLES) * (2.0 * np.pi / RIM_ANGLES)
RIM_ANGLE_RAD.setflags(write=False)


class OutlineError(TwolightError, ValueError):
    """A frame shape that cannot be used; the text says why."""


def ed_fits_box(ed_mm: ArrayLike, *, a_mm: ArrayLike, b_mm: ArrayLike) -> NDArray[np.bool_]:
    """Return whether a shape in the box can have this ED: max(a, b) <= ED < sqrt(a^2 + b^2)."""
    ed, a, b = (np.asarray(value, dtype=np.float64) for value in (ed_mm, a_mm, b_mm))
    return np.asarray((ed >= np.maximum(a, b)) & (ed < np.hypot(a, b)))


def superellipse_exponent(ed_mm: ArrayLike, *, a_mm: ArrayLike, b_mm: ArrayLike) -> NDArray[np.float64]:
    """Return the exponent p of the superellipse |2x/a|^p + |2y/b|^p = 1 whose longest radius is ED/2.

    Hoelder's inequality gives the longest radius in closed form, (A^(2s) + B^(2s))^(1/(2s)) with s = p/(p-2) and
    A, B the half box; it is solved for p by halving the interval.

    Parameters
    ----------
    ed_mm : array_like
        Effective diameter, twice the longest radius from the box centre, mm.
    a_mm, b_mm : array_like
        Box width and height, mm; all broadcast.

    Returns
    -------
    ndarray
        Exponent, 2 (an ellipse, ED equal to the longer side) or above.

    Raises
    ------
    OutlineError
        If the ED does not fit the box.
    """
    ed, a, b = np.broadcast_arrays(*(np.asarray(value, dtype=np.float64) for value in (ed_mm, a_mm, b_mm)))
    if not np.all(ed_fits_box(ed, a_mm=a, b_mm=b)):
        raise OutlineError("ed_mm must be at least the longer side of the box and less than its diagonal.")
    longer = np.maximum(a, b)
    ratio_log = 2.0 * np.log(np.minimum(a, b) / longer)
    wanted = 2.0 * np.log(ed / longer)
    low, high = np.zeros_like(ed), np.ones_like(ed)
    for _ in range(60):
        middle = 0.5 * (low + high)
        short = middle * np.log1p(np.exp(ratio_log / middle)) < wanted
        low, high = np.where(short, middle, low), np.where(short, high, middle)
    return np.asarray(np.where(wanted == 0.0, 2.0, 2.0 / np.maximum(1.0 - low, 1e-3)))


def box_rim(a_mm: ArrayLike, *, b_mm: ArrayLike, ed_mm: ArrayLike | None = None) -> NDArray[np.float64]:
    """Return the superellipse through the box whose longest radius meets the ED.

    Parameters
    ----------
    a_mm, b_mm : array_like, shape (...)
        Box width and height, mm, above 0.
    ed_mm : array_like, optional
        Effective diameter, mm; where left out or NaN the exponent is 2.5.

    Returns
    -------
    ndarray, shape (..., RIM_ANGLES, 2)
        x and y, mm.

    Raises
    ------
    OutlineError
        If a side is not positive, or an ED does not fit the box.
    """
    ed = np.asarray(np.nan if ed_mm is None else ed_mm, dtype=np.float64)
    a, b, ed = np.broadcast_arrays(np.asarray(a_mm, dtype=np.float64), np.asarray(b_mm, dtype=np.float64), ed)
    if not (np.all(a > 0.0) and np.all(b > 0.0)):
        raise OutlineError("a_mm and b_mm must be above 0.")
    known = np.isfinite(ed)
    # a box of 1 x 1 with ED 1 stands in where there is none, and its answer is thrown away
    solved = superellipse_exponent(np.where(known, ed, 1.0), a_mm=np.where(known, a, 1.0), b_mm=np.where(known, b, 1.0))
    exponent = np.where(known, solved, DEFAULT_EXPONENT)[..., None]
    across, up = (
        np.abs(np.cos(RIM_ANGLE_RAD)) / (a[..., None] / 2.0),
        np.abs(np.sin(RIM_ANGLE_RAD)) / (b[..., None] / 2.0),
    )
    steepest = np.maximum(across, up)  # taken out first, so that a high exponent cannot underflow
    return polar_points(1.0 / (steepest * (1.0 + (np.minimum(across, up) / steepest) ** exponent) ** (1.0 / exponent)))


def polar_points(radius_mm: NDArray[np.float64]) -> NDArray[np.float64]:
    """Return the points at these radii (..., RIM_ANGLES) along the rim's angles."""
    return np.stack([radius_mm * np.cos(RIM_ANGLE_RAD), radius_mm * np.sin(RIM_ANGLE_RAD)], axis=-1)


def smaller_frame(
    a_mm: ArrayLike, *, b_mm: ArrayLike, ed_mm: ArrayLike, by_mm: ArrayLike
) -> tuple[NDArray[np.float64], NDArray[np.float64], NDArray[np.float64]]:
    """Return a, b and ED of the same shape with an eye size ``by_mm`` smaller; DBL does not change.

    Parameters
    ----------
    a_mm, b_mm, ed_mm, by_mm : array_like
        Box width and height, ED (NaN where unknown) and the step, mm; 0 <= by < a.

    Returns
    -------
    a_mm, b_mm, ed_mm : ndarray
        Scaled by (a - by)/a.

    Raises
    ------
    ValueError
        If ``by_mm`` leaves nothing of the box.
    """
    a = np.asarray(a_mm, dtype=np.float64)
    scale = (a - np.asarray(by_mm, dtype=np.float64)) / a
    if not np.all(scale > 0.0):
        raise ValueError("by_mm must be less than a_mm")
    return (
        np.asarray(a * scale),
        np.asarray(np.asarray(b_mm, dtype=np.float64) * scale),
        np.asarray(np.asarray(ed_mm, dtype=np.float64) * scale),
    )
