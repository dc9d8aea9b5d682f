"""Both outlines of a frame to scale, as a person facing the wearer sees them: the right one is on the left."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from advisor.counsel.prescription import EYES
from advisor.counsel.visit import Frame
from advisor.optics.outline import outline_box

MARGIN_MM = 2.0
USUAL_DBL_MM = 18.0
NOSE_MM = 5.0  # half the width of the mark for the nose


@dataclass(frozen=True)
class TraceDrawing:
    """Closed paths of both rims and an open one that marks the nose, with the size of the drawing, mm."""

    rims: tuple[str, str]
    nose: str
    width_mm: float
    height_mm: float


def trace_drawing(frame: Frame) -> TraceDrawing | None:
    """Return the drawing of a frame's outline; the side that is not traced is the other's mirror image."""
    outline = frame.outline
    if outline is None:
        return None
    sides = [np.array(outline.right or outline.left), np.array(outline.left or outline.right)]
    half_dbl = (USUAL_DBL_MM if frame.dbl_mm is None else frame.dbl_mm) / 2.0
    seen = [_seen(points, half_dbl, side) for side, points in enumerate(sides)]
    every = np.concatenate([*seen, [[-half_dbl, 0.0], [half_dbl, 0.0]]])
    low, high = every.min(axis=0) - MARGIN_MM, every.max(axis=0) + MARGIN_MM
    rims = [_path(points, low, high, close=True) for points in seen]
    mark = np.array([[-NOSE_MM, -2.0 * NOSE_MM], [0.0, 0.0], [NOSE_MM, -2.0 * NOSE_MM]])
    size = high - low
    return TraceDrawing((rims[0], rims[1]), _path(mark, low, high), round(float(size[0]), 2), round(float(size[1]), 2))


def _seen(points: NDArray[np.float64], half_dbl: float, side: int) -> NDArray[np.float64]:
    """Return an outline about the middle of the bridge, x to the right of the drawing and y up."""
    width, _, middle, _ = outline_box(points)
    across = points[:, 0] - middle - width / 2.0 - half_dbl  # its nasal side half a bridge from the middle
    return np.stack([across if EYES[side] == "right" else -across, points[:, 1]], axis=-1)


def _path(
    points: NDArray[np.float64], low: NDArray[np.float64], high: NDArray[np.float64], *, close: bool = False
) -> str:
    placed = " ".join(f"{x - low[0]:.2f},{high[1] - y:.2f}" for x, y in points)
    return f"M{placed} Z" if close else f"M{placed}"
