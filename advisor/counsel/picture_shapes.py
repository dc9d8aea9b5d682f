"""Plain shapes as coverage, 0 to 1 with soft edges one pixel wide, on a sheet with a scale; a few paints."""

from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

from advisor.optics.tone import steps_above

Floats = NDArray[np.float64]

WIDTH, HEIGHT = 480, 300
LEAST_DISC_PX = 1.5  # a smaller patch is drawn this large, so that none is lost between pixels

# Linear colours; only their ratios count. A modelling choice.
GREY: Floats = np.array([1.0, 1.0, 1.0])
NIGHT: Floats = np.array([0.8, 0.95, 1.35])
PAPER: Floats = np.array([1.08, 1.0, 0.84])
WOOD: Floats = np.array([1.4, 0.95, 0.6])
SKIN: Floats = np.array([1.42, 0.92, 0.68])
LIPS: Floats = np.array([1.8, 0.8, 0.65])
IRIS: dict[float, Floats] = {
    0.0: np.array([1.3, 0.95, 0.7]),
    0.5: np.array([1.5, 0.92, 0.5]),
    1.0: np.array([0.75, 1.0, 1.25]),
    1.2: np.array([0.8, 1.0, 1.2]),
}


@lru_cache(maxsize=16)
def _grid(left: float, top: float, unit: float) -> tuple[Floats, Floats]:
    x = left + (np.arange(WIDTH, dtype=np.float64)[None, :] + 0.5) * unit
    y = top - (np.arange(HEIGHT, dtype=np.float64)[:, None] + 0.5) * unit
    return x, y


@dataclass(frozen=True)
class Sheet:
    """A picture's frame: the place of its left upper corner and how much one pixel is, in degrees or mm; y is up."""

    left: float
    top: float
    unit: float

    @property
    def x(self) -> Floats:
        """Places across, (1, WIDTH)."""
        return _grid(self.left, self.top, self.unit)[0]

    @property
    def y(self) -> Floats:
        """Places upwards, (HEIGHT, 1)."""
        return _grid(self.left, self.top, self.unit)[1]

    def soft(self, inside: Floats, *, edge: float = 0.0) -> Floats:
        """Return the coverage of what lies ``inside`` (a distance, negative outside), over an edge at least a pixel."""
        return np.clip(inside / max(edge, self.unit) + 0.5, 0.0, 1.0)

    def box(self, left: float, right: float, bottom: float, top: float) -> Floats:
        """Return the coverage of an upright rectangle."""
        across = self.soft(np.minimum(self.x - left, right - self.x))
        upwards = self.soft(np.minimum(self.y - bottom, top - self.y))
        return across * upwards

    def ellipse(
        self,
        place: tuple[float, float],
        size: tuple[float, float],
        *,
        turn_deg: float = 0.0,
        edge: float = 0.0,
    ) -> Floats:
        """Return the coverage of an ellipse of two diameters, the first along ``turn_deg``."""
        along, across = (max(value, LEAST_DISC_PX * self.unit) / 2.0 for value in size)
        turn = np.deg2rad(turn_deg)
        x, y = self.x - place[0], self.y - place[1]
        u, v = x * np.cos(turn) + y * np.sin(turn), y * np.cos(turn) - x * np.sin(turn)
        radius = np.hypot(u / along, v / across)
        return self.soft((1.0 - radius) * float(np.sqrt(along * across)), edge=edge)

    def below(self, slope_per_x: float, *, through: tuple[float, float]) -> Floats:
        """Return the coverage of what lies under a straight line."""
        gap = through[1] + slope_per_x * (self.x - through[0]) - self.y
        return self.soft(gap / np.hypot(1.0, slope_per_x))

    def spread_strip(self, middle: float, *, wide: float, blur: float, upright: bool) -> Floats:
        """Return a strip across the sheet blurred by a box, its greatest 1: how an edge looks out of focus."""
        place = (self.x if upright else self.y) - middle
        blur = max(blur, self.unit)
        share = np.minimum(place + blur / 2.0, wide / 2.0) - np.maximum(place - blur / 2.0, -wide / 2.0)
        return np.clip(share / min(blur, wide), 0.0, 1.0)


class Canvas:
    """Luminance and colour of the scene's surfaces, painted over one another."""

    def __init__(self, luminance_cd_m2: float, paint: Floats) -> None:
        self.luminance: Floats = np.full((HEIGHT, WIDTH), luminance_cd_m2)
        self.paint: Floats = np.broadcast_to(paint, (HEIGHT, WIDTH, 3)).copy()

    def lay(self, cover: Floats, luminance_cd_m2: float, paint: Floats) -> None:
        """Paint a surface over what is there."""
        rows, columns = np.flatnonzero(cover.any(axis=1)), np.flatnonzero(cover.any(axis=0))
        if not rows.size:
            return
        part = np.s_[rows[0] : rows[-1] + 1, columns[0] : columns[-1] + 1]
        share = cover[part]
        self.luminance[part] += share * (luminance_cd_m2 - self.luminance[part])
        self.paint[part] += share[..., None] * (paint - self.paint[part])


def with_mirrored(codes: Floats, mirrored: list[tuple[Floats, Floats]]) -> Floats:
    """Return codes with patches of mirrored light upon them: each a level in thresholds, (H, W), and a paint."""
    level = np.zeros((HEIGHT, WIDTH))
    coloured = np.zeros((HEIGHT, WIDTH, 3))
    for one, paint in mirrored:
        level = level + one
        coloured = coloured + one[..., None] * paint
    per_level = steps_above(level) / np.maximum(level, np.finfo(float).tiny)
    return codes + per_level[..., None] * coloured
