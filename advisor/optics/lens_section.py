"""The lens as ghosts meet it: curvatures in the two principal meridians, index, thickness, place before the eye."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from advisor.optics.eye import ENTRANCE_PUPIL_MM

Floats = NDArray[np.float64]


@dataclass(frozen=True)
class LensSection:
    """The lens in its two principal meridians.

    Parameters
    ----------
    front_curvature_per_mm, back_curvature_per_mm : ndarray, (..., 2)
        Curvature of each face in the two principal meridians, 1/mm; both positive for an ordinary meniscus.
    index : ndarray, (...)
        Refractive index at the d line, above 1.
    thickness_mm : ndarray, (...)
        Centre thickness, 0 or more.
    vertex_mm : ndarray, (...)
        Back vertex to cornea, 0 or more.

    Raises
    ------
    ValueError
        When a value lies outside its range or is not finite.
    """

    front_curvature_per_mm: Floats
    back_curvature_per_mm: Floats
    index: Floats
    thickness_mm: Floats
    vertex_mm: Floats

    def __post_init__(self) -> None:
        for name in ("front_curvature_per_mm", "back_curvature_per_mm", "index", "thickness_mm", "vertex_mm"):
            value = np.asarray(getattr(self, name), dtype=np.float64)
            if not np.isfinite(value).all():
                raise ValueError(f"{name} must be finite")
            object.__setattr__(self, name, value)
        for name in ("front_curvature_per_mm", "back_curvature_per_mm"):
            if getattr(self, name).shape[-1:] != (2,):
                raise ValueError(f"{name} must end in an axis of two principal meridians")
        if (self.index <= 1.0).any():
            raise ValueError("index must be above 1")
        for name in ("thickness_mm", "vertex_mm"):
            if (getattr(self, name) < 0.0).any():
                raise ValueError(f"{name} must be 0 or more")

    @property
    def pupil_m(self) -> Floats:
        """Back vertex to the eye's entrance pupil, metres, with an axis for the meridians: (..., 1)."""
        return np.asarray((self.vertex_mm + ENTRANCE_PUPIL_MM)[..., None] * 1e-3, dtype=np.float64)
