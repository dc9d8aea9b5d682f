"""Rims from a traced outline, in the local frame about the box centre (see `rim`)."""

import numpy as np
from numpy.typing import ArrayLike, NDArray

from advisor.optics.rim import RIM_ANGLE_RAD, OutlineError, polar_points

#: Fewest points of a traced outline.
LEAST_POINTS = 36


def traced_rim(points_mm: ArrayLike) -> NDArray[np.float64]:
    """Return a traced outline resampled at equal angles about the box centre.

    The radius is a piecewise cubic in the angle with slopes from the three nearest points, held within 10 % of the
    two points it joins.

    Parameters
    ----------
    points_mm : array_like, shape (points, 2)
        x (towards the nose) and y (up) about the box centre, mm, 36 or more in order, either way round; the first
        may be repeated at the end.

    Returns
    -------
    ndarray, shape (RIM_ANGLES, 2)
        x and y, mm.

    Raises
    ------
    OutlineError
        If the points are too few, not numbers, or do not go once round the box centre.
    """
    points = np.asarray(points_mm, dtype=np.float64)
    if points.ndim != 2 or points.shape[1] != 2 or not np.all(np.isfinite(points)):
        raise OutlineError("The outline must be a list of x and y in millimetres.")
    if len(points) > 1 and np.array_equal(points[0], points[-1]):
        points = points[:-1]
    if len(points) < LEAST_POINTS:
        raise OutlineError(f"The outline needs {LEAST_POINTS} points or more.")
    angle = np.unwrap(np.arctan2(points[:, 1], points[:, 0]))
    if angle[-1] < angle[0]:
        points, angle = points[::-1], angle[::-1]
    angle = angle - 2.0 * np.pi * np.floor(angle[0] / (2.0 * np.pi))
    step = np.diff(angle, append=angle[0] + 2.0 * np.pi)
    if not np.all((step > 0.0) & (step < np.pi / 2.0)):
        raise OutlineError("The outline must go once round the centre of the box, point after point.")
    radius = np.hypot(points[:, 0], points[:, 1])
    return polar_points(_periodic_cubic(angle, radius=radius, step=step))


def _periodic_cubic(
    angle: NDArray[np.float64], *, radius: NDArray[np.float64], step: NDArray[np.float64]
) -> NDArray[np.float64]:
    """Return the radius at the rim's angles by a closed piecewise cubic through the traced points."""
    rise = (np.roll(radius, -1) - radius) / step
    step_before, rise_before = np.roll(step, 1), np.roll(rise, 1)
    slope = (rise_before * step + rise * step_before) / (step_before + step)
    wanted = angle[0] + (RIM_ANGLE_RAD - angle[0]) % (2.0 * np.pi)
    here = np.clip(np.searchsorted(angle, wanted, side="right") - 1, 0, len(angle) - 1)
    after = (here + 1) % len(angle)
    h, start, end = step[here], radius[here], radius[after]
    u = (wanted - angle[here]) / h
    cubic = (
        start * (1 + 2 * u) * (1 - u) ** 2
        + end * u**2 * (3 - 2 * u)
        + h * (slope[here] * u * (1 - u) ** 2 - slope[after] * u**2 * (1 - u))
    )
    return np.asarray(np.clip(cubic, 0.9 * np.minimum(start, end), 1.1 * np.maximum(start, end)))


def outline_box(points_mm: ArrayLike) -> tuple[float, float, float, float]:
    """Return width, height and centre (x, y) of the box round a traced outline, mm, to compare with a and b."""
    points = np.asarray(points_mm, dtype=np.float64)
    low, high = points.min(axis=0), points.max(axis=0)
    middle = (low + high) / 2.0
    return float(high[0] - low[0]), float(high[1] - low[1]), float(middle[0]), float(middle[1])
