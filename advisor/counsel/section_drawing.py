"""Cross-sections of lenses to scale: a level cut through the optical centre, all in one common scale of millimetres.

The front is to the left of the picture's depth axis, the nose side on top. Points are computed here; a template macro
prints them.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from advisor.counsel.compare import Computed
from advisor.counsel.prescription import EYES, Eye
from advisor.optics.lens_form import curvature_along, sag
from advisor.optics.thickness import wedge_at

POINTS = 41
MARGIN_MM = 1.0


@dataclass(frozen=True)
class Section:
    """One lens cut level: a closed path in mm, and the sizes of all sections, which share one box."""

    index: int
    eye: Eye
    path: str
    width_mm: float
    height_mm: float
    centre_mm: float
    nose_edge_mm: float
    temple_edge_mm: float
    thickest_mm: float
    thinnest_mm: float


def sections(computed: Computed) -> list[Section]:
    """Return the section of every lens that can be made, drawn in one common scale and box."""
    forms, found = computed.forms, []
    outlines: list[tuple[int, int, NDArray[np.float64], NDArray[np.float64], NDArray[np.float64]]] = []
    for option in computed.laid:
        if not option.refused:
            outlines += [(option.index, e, *_cut(computed, option.index, e)) for e in range(len(EYES))]
    if not outlines:
        return []
    top = max(float(across.max()) for _, _, across, _, _ in outlines) + MARGIN_MM
    bottom = min(float(across.min()) for _, _, across, _, _ in outlines) - MARGIN_MM
    least = min(float(front.min()) for _, _, _, front, _ in outlines) - MARGIN_MM
    most = max(float(back.max()) for _, _, _, _, back in outlines) + MARGIN_MM
    shape = forms.shape
    for k, e, across, front, back in outlines:
        points = [*zip(front, across, strict=True), *zip(back[::-1], across[::-1], strict=True)]
        path = " ".join(f"{x - least:.2f},{top - y:.2f}" for x, y in points)
        found.append(
            Section(
                index=k,
                eye=EYES[e],
                path=f"M{path} Z",
                width_mm=round(most - least, 2),
                height_mm=round(top - bottom, 2),
                centre_mm=float(shape.centre_mm[k, e]),
                nose_edge_mm=float(back[-1] - front[-1]),
                temple_edge_mm=float(back[0] - front[0]),
                thickest_mm=float(shape.thickest_mm[k, e]),
                thinnest_mm=float(shape.thinnest_mm[k, e]),
            )
        )
    return found


def _cut(computed: Computed, k: int, e: int) -> tuple[NDArray[np.float64], NDArray[np.float64], NDArray[np.float64]]:
    """Return places across (temple to nose), and the depth of front and back there, all in mm."""
    forms, shape = computed.forms, computed.forms.shape
    nose, temple = _reach(forms.rim.angle_deg[k, e], forms.rim.radius_mm[k, e])
    across = np.linspace(-temple, nose, POINTS)
    direction = np.where(across >= 0.0, 0.0, 180.0)
    radius = np.abs(across)
    front = sag(shape.front_curvature_per_mm[k, e], radius_mm=radius)
    along = curvature_along(shape.back_curvature_per_mm[k, e], first_deg=shape.first_deg[k, e], direction_deg=direction)
    bent = sag(along, radius_mm=radius) + wedge_at(shape.wedge[k, e], radius_mm=radius, angle_deg=direction)
    return across, front, shape.centre_mm[k, e] + bent


def _reach(angle_deg: NDArray[np.float64], radius_mm: NDArray[np.float64]) -> tuple[float, float]:
    """Return how far the rim reaches level towards the nose and towards the temple."""
    order = np.argsort(angle_deg)
    at = np.interp([0.0, 180.0], angle_deg[order], radius_mm[order], period=360.0)
    return float(at[0]), float(at[1])
