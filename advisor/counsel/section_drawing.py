"""Lenses to scale, all in one common scale of millimetres: cut level through the optical centre, and from in front.

In a cut the front is to the left of the picture's depth axis, the nose side on top. From in front a lens is seen as a
person facing the wearer sees it, its edge thickness laid inwards from the rim. Points are computed here; template
macros print them.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from advisor.counsel.answer import place as edge_place
from advisor.counsel.bench import PLACE_TEXTS
from advisor.counsel.compare import Computed
from advisor.counsel.prescription import EYES, Eye
from advisor.optics.lens_form import curvature_along, sag
from advisor.optics.thickness import Refusal, wedge_at

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
    """Return the section of every lens that can be made, drawn in one common scale and box; the worn pair's last."""
    pairs = [(option.index, computed, option.index) for option in computed.laid if not option.refused]
    worn = computed.worn_now
    if worn is not None and np.all(worn.forms.shape.refusal == Refusal.NONE):
        pairs.append((len(computed.laid), worn, 0))
    cuts = [(index, e, pair.forms.shape, k, *_cut(pair, k, e)) for index, pair, k in pairs for e in range(len(EYES))]
    if not cuts:
        return []
    top = max(float(across.max()) for *_, across, _, _ in cuts) + MARGIN_MM
    bottom = min(float(across.min()) for *_, across, _, _ in cuts) - MARGIN_MM
    least = min(float(front.min()) for *_, front, _ in cuts) - MARGIN_MM
    most = max(float(back.max()) for *_, back in cuts) + MARGIN_MM
    found = []
    for index, e, shape, k, across, front, back in cuts:
        points = [*zip(front, across, strict=True), *zip(back[::-1], across[::-1], strict=True)]
        path = " ".join(f"{x - least:.2f},{top - y:.2f}" for x, y in points)
        found.append(
            Section(
                index=index,
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


@dataclass(frozen=True)
class Outline:
    """One lens from in front: rim, band of edge thickness, optical centre, thickest and thinnest place; sizes in mm."""

    index: int
    eye: Eye
    rim: str
    band: str
    centre: tuple[float, float]
    thickest: tuple[float, float]
    thinnest: tuple[float, float]
    thickest_mm: float
    thinnest_mm: float
    thickest_at: str
    thinnest_at: str
    centre_mm: float
    width_mm: float
    height_mm: float


def outlines(computed: Computed) -> list[Outline]:
    """Return every lens that can be made from in front, in one common scale and box."""
    shape, rims = computed.forms.shape, computed.forms.rim
    found: list[tuple[int, int, NDArray[np.float64], NDArray[np.float64]]] = []
    for option in computed.laid:
        if option.refused:
            continue
        for e in range(len(EYES)):
            k = option.index
            turn = np.radians(rims.angle_deg[k, e])
            inside = np.maximum(rims.radius_mm[k, e] - shape.edge_mm[k, e], 0.0)
            found.append((k, e, _seen(rims.radius_mm[k, e], turn, e), _seen(inside, turn, e)))
    if not found:
        return []
    every = np.concatenate([rim for _, _, rim, _ in found])
    low, high = every.min(axis=0) - MARGIN_MM, every.max(axis=0) + MARGIN_MM
    width, height = (round(float(size), 2) for size in high - low)

    def place(points: NDArray[np.float64]) -> NDArray[np.float64]:
        """Return places on the drawing, down the page."""
        return np.stack([points[..., 0] - low[0], high[1] - points[..., 1]], axis=-1)

    drawn = []
    for k, e, rim, inner in found:
        thick, thin = (
            place(rim[int(np.argmin(np.abs(rims.angle_deg[k, e] - at[k, e])))])
            for at in (shape.thickest_deg, shape.thinnest_deg)
        )
        drawn.append(
            Outline(
                index=k,
                eye=EYES[e],
                rim=_closed(place(rim)),
                band=f"{_closed(place(rim))} {_closed(place(inner)[::-1])}",
                centre=_pair(place(np.zeros(2))),
                thickest=_pair(thick),
                thinnest=_pair(thin),
                thickest_mm=float(shape.thickest_mm[k, e]),
                thinnest_mm=float(shape.thinnest_mm[k, e]),
                thickest_at=PLACE_TEXTS[str(edge_place(shape.thickest_deg[k, e])["word"])],
                thinnest_at=PLACE_TEXTS[str(edge_place(shape.thinnest_deg[k, e])["word"])],
                centre_mm=float(shape.centre_mm[k, e]),
                width_mm=width,
                height_mm=height,
            )
        )
    return drawn


def _seen(radius_mm: NDArray[np.float64], turn_rad: NDArray[np.float64], e: int) -> NDArray[np.float64]:
    """Return points as a person facing the wearer sees them: the nose to the right of the right eye's lens."""
    x = radius_mm * np.cos(turn_rad)
    return np.stack([x if e == 0 else -x, radius_mm * np.sin(turn_rad)], axis=-1)


def _closed(points: NDArray[np.float64]) -> str:
    return "M" + " ".join(f"{x:.2f},{y:.2f}" for x, y in points) + " Z"


def _pair(point: NDArray[np.float64]) -> tuple[float, float]:
    return round(float(point[0]), 2), round(float(point[1]), 2)


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
