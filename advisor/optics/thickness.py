"""Centre and edge thickness of a lens in its rim.

Thickness is measured along the lens's axis: t(x, y) = centre + sag of the back - sag of the front + prism wedge.
The front is a sphere, the back a sphere or a toric surface (`lens_form.curvature_along`). A lens sold as aspheric is
flatter than what is computed here.

One option among many that cannot be made is no exception: it carries a `Refusal` code, and its figures are finite
stand-ins computed with surfaces cut off at their equator. No output is NaN for powers of -30 to 30 D. Refused figures
are for finding the way out (``rule_centre_mm``), not for showing; only ``TOO_THIN`` leaves them true.
"""

from dataclasses import dataclass
from enum import IntEnum

import numpy as np
from numpy.typing import ArrayLike, NDArray

from advisor.optics.centration import CentredRim
from advisor.optics.lens_form import back_curvature, back_power, curvature_along, front_curvature, sag, surface_exists
from advisor.optics.prism import prism_wedge

#: Least edge thickness by rim type, mm (common practice, no source).
LEAST_EDGE_MM = {"full": 1.0, "grooved": 1.8, "drilled": 1.8}
#: Centre below which no lens is made where its material states no limit, mm (our choice).
UNSTATED_CENTRE_MM = 1.0
#: Beyond this centre the search stops: no spectacle lens is made so thick (our choice).
THICKEST_CENTRE_MM = 30.0
#: Names of the sides, by the nearest of the local directions 0, 90, 180, 270 degrees.
SIDES = ("nasal", "up", "temporal", "down")

_ROUNDS = 200
_UNDAMPED_ROUNDS = 20
_SETTLED_MM = 1e-9
_DEPTHS = np.linspace(1.0, 0.0, 12, endpoint=False)


class Refusal(IntEnum):
    """Why a lens cannot be made; the first that applies."""

    NONE = 0
    FRONT_SURFACE = 1  # the front sphere does not reach the rim (or the blank's edge)
    BACK_SURFACE = 2  # the back surface does not
    TOO_THICK = 3  # no centre up to THICKEST_CENTRE_MM gives the least edge
    TOO_THIN = 4  # the edge, or somewhere within the lens, is 0 or less at the centre given


@dataclass(frozen=True)
class LensShape:
    """A batch of lenses as computed; arrays over the batch, with a trailing axis where noted."""

    front_power_d: NDArray[np.float64]
    back_power_d: NDArray[np.float64]  # (..., 2), meridians as given
    front_curvature_per_mm: NDArray[np.float64]
    back_curvature_per_mm: NDArray[np.float64]  # (..., 2)
    first_deg: NDArray[np.float64]  # local direction of the first meridian
    wedge: NDArray[np.float64]  # (..., 2), mm of thickness per mm towards the nose and up
    centre_mm: NDArray[np.float64]
    rule_centre_mm: NDArray[np.float64]  # what the every-lens rule asks for, also where a centre was given
    edge_mm: NDArray[np.float64]  # (..., RIM_ANGLES)
    thickest_mm: NDArray[np.float64]
    thickest_deg: NDArray[np.float64]  # local direction from the optical centre
    thinnest_mm: NDArray[np.float64]
    thinnest_deg: NDArray[np.float64]
    thinnest_inside_mm: NDArray[np.float64]  # least thickness anywhere; with prism not always centre or edge
    below_least_centre: NDArray[np.bool_]  # the given centre is under the material's limit
    below_least_edge: NDArray[np.bool_]  # the given centre leaves the edge under the rim's limit
    refusal: NDArray[np.int64]  # Refusal codes


def lens_shape(
    power_d: ArrayLike,
    *,
    first_deg: ArrayLike,
    front_power_d: ArrayLike,
    index: ArrayLike,
    rim: CentredRim,
    least_centre_mm: ArrayLike,
    least_edge_mm: ArrayLike,
    prism_d: ArrayLike = (0.0, 0.0),
    blank_mm: ArrayLike | None = None,
    centre_mm: ArrayLike | None = None,
) -> LensShape:
    """Return the thickness of lenses by the every-lens rule, or with the centre given.

    The centre is the greater of the material's least centre and what brings the thinnest point to the rim type's
    least edge; the back power is solved again with each centre until it settles. Made to shape, that point lies on
    the rim; cut from a round blank, on the blank's edge as well.

    Parameters
    ----------
    power_d : array_like, shape (..., 2)
        Back vertex powers of the principal meridians, dioptres, -30 to 30.
    first_deg : array_like, shape (...)
        Local direction of the first meridian (`meridians.local_direction`); the second is at right angles.
    front_power_d : array_like, shape (...)
        True front power for the material's index, dioptres.
    index : array_like, shape (...)
        n_d, above 1.
    rim : CentredRim
        Leading axes broadcast with all the rest.
    least_centre_mm : array_like, shape (...)
        The material's limit, mm; NaN (no limit stated) is taken as 1.0.
    least_edge_mm : array_like, shape (...)
        From `LEAST_EDGE_MM`.
    prism_d : array_like, shape (..., 2)
        Prescribed prism, base towards the nose and base up positive, prism dioptres (`prism.prism_vector`).
    blank_mm : array_like, shape (...), optional
        Diameter of the finished round blank the lens is cut from, centred on the optical centre; None or NaN for a
        lens surfaced for its rim.
    centre_mm : array_like, shape (...), optional
        Centre thickness asked for; None or NaN for the rule's.

    Returns
    -------
    LensShape

    Raises
    ------
    ValueError
        If ``index`` is not above 1.

    References
    ----------
    Back vertex power of a thick lens and the sag of a sphere; the limits are common practice.
    """
    lens, least_centre, least_edge, blank, given = _batch(
        power_d, first_deg, front_power_d, index, prism_d, rim, least_centre_mm, least_edge_mm, blank_mm, centre_mm
    )
    radius, angle = _places(rim, blank_mm=blank)
    rule = _rule_centre(lens, least_centre=least_centre, least_edge=least_edge, radius=radius, angle=angle)
    auto = np.isnan(given)
    centre = np.where(auto, rule, given)
    back, k_back = lens.back(centre)
    points = rim.radius_mm.shape[-1]
    gain = lens.gain(k_back, radius=radius[..., :points], angle=angle[..., :points])
    edge = centre[..., None] + gain
    thickest, thinnest = edge.argmax(axis=-1), edge.argmin(axis=-1)
    least = edge.min(axis=-1)
    inside = np.minimum(np.minimum(centre, least), _thinnest_within(lens, k_back=k_back, centre=centre, rim=rim))
    refusal = _refusal(
        lens, k_back=k_back, radius=radius, angle=angle, too_thick=auto & (rule >= THICKEST_CENTRE_MM), thinnest=inside
    )
    angles = np.broadcast_to(rim.angle_deg, edge.shape)
    return LensShape(
        front_power_d=lens.front,
        back_power_d=back,
        front_curvature_per_mm=lens.k_front,
        back_curvature_per_mm=k_back,
        first_deg=lens.first,
        wedge=lens.wedge,
        centre_mm=centre,
        rule_centre_mm=rule,
        edge_mm=edge,
        thickest_mm=edge.max(axis=-1),
        thickest_deg=np.take_along_axis(angles, thickest[..., None], axis=-1)[..., 0],
        thinnest_mm=least,
        thinnest_deg=np.take_along_axis(angles, thinnest[..., None], axis=-1)[..., 0],
        thinnest_inside_mm=inside,
        below_least_centre=np.asarray(~auto & (centre < least_centre - _SETTLED_MM)),
        below_least_edge=np.asarray(~auto & (least < least_edge - _SETTLED_MM)),
        refusal=refusal,
    )


def side_index(direction_deg: ArrayLike) -> NDArray[np.int64]:
    """Return the index into `SIDES` of the side a local direction points to."""
    return np.asarray(np.round(np.asarray(direction_deg, dtype=np.float64) / 90.0).astype(np.int64) % 4)


@dataclass(frozen=True)
class _Batch:
    """The given of a batch, broadcast to its shape (index keeps its own)."""

    power: NDArray[np.float64]
    first: NDArray[np.float64]
    front: NDArray[np.float64]
    index: NDArray[np.float64]
    wedge: NDArray[np.float64]
    k_front: NDArray[np.float64]

    def back(self, centre: NDArray[np.float64]) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
        """Return back powers and back curvatures (..., 2) at this centre."""
        n = self.index[..., None]
        power = back_power(self.power, front_power_d=self.front[..., None], centre_mm=centre[..., None], index=n)
        return power, back_curvature(power, index=n)

    def gain(
        self, k_back: NDArray[np.float64], *, radius: NDArray[np.float64], angle: NDArray[np.float64]
    ) -> NDArray[np.float64]:
        """Return thickness minus centre thickness at polar points (..., points)."""
        along = curvature_along(k_back, first_deg=self.first, direction_deg=angle)
        bent = sag(along, radius_mm=radius) - sag(self.k_front[..., None], radius_mm=radius)
        return np.asarray(bent + wedge_at(self.wedge, radius_mm=radius, angle_deg=angle))


def wedge_at(
    wedge: NDArray[np.float64], *, radius_mm: NDArray[np.float64], angle_deg: NDArray[np.float64]
) -> NDArray[np.float64]:
    """Return the thickness a wedge (..., 2) adds at polar points (..., points), mm."""
    turn = np.radians(angle_deg)
    return np.asarray(radius_mm * (wedge[..., 0, None] * np.cos(turn) + wedge[..., 1, None] * np.sin(turn)))


def _batch(
    power_d: ArrayLike,
    first_deg: ArrayLike,
    front_power_d: ArrayLike,
    index: ArrayLike,
    prism_d: ArrayLike,
    rim: CentredRim,
    *others: ArrayLike | None,
) -> tuple[_Batch, NDArray[np.float64], NDArray[np.float64], NDArray[np.float64], NDArray[np.float64]]:
    """Return the batch and least centre, least edge, blank, given centre (NaN where there is none)."""
    power, prism = np.asarray(power_d, dtype=np.float64), np.asarray(prism_d, dtype=np.float64)
    first, front, n, least_centre, least_edge, blank, given = (
        np.asarray(np.nan if value is None else value, dtype=np.float64)
        for value in (first_deg, front_power_d, index, *others)
    )
    singles = (first, front, n, least_centre, least_edge, blank, given)
    shape = np.broadcast_shapes(
        power.shape[:-1], prism.shape[:-1], rim.radius_mm.shape[:-1], *(value.shape for value in singles)
    )
    lens = _Batch(
        power=np.broadcast_to(power, (*shape, 2)),
        first=np.broadcast_to(first, shape),
        front=np.broadcast_to(front, shape),
        index=n,
        wedge=np.broadcast_to(prism_wedge(prism, index=n[..., None]), (*shape, 2)),
        k_front=np.broadcast_to(front_curvature(front, index=n), shape),
    )
    least_centre = np.where(np.isnan(least_centre), UNSTATED_CENTRE_MM, least_centre)
    return lens, np.broadcast_to(least_centre, shape), least_edge, blank, np.broadcast_to(given, shape)


def _places(rim: CentredRim, *, blank_mm: NDArray[np.float64]) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Return radius and angle of the rim and, where there are blanks, of the blank's edge after it."""
    radius, angle = rim.radius_mm, rim.angle_deg
    if np.all(np.isnan(blank_mm)):
        return radius, angle
    blank_radius = np.where(np.isnan(blank_mm)[..., None], radius, blank_mm[..., None] / 2.0)
    radius = np.broadcast_to(radius, blank_radius.shape)
    angle = np.broadcast_to(angle, blank_radius.shape)
    return np.concatenate([radius, blank_radius], axis=-1), np.concatenate([angle, angle], axis=-1)


def _rule_centre(
    lens: _Batch,
    *,
    least_centre: NDArray[np.float64],
    least_edge: NDArray[np.float64],
    radius: NDArray[np.float64],
    angle: NDArray[np.float64],
) -> NDArray[np.float64]:
    """Return the least centre that satisfies both limits, to 1e-9 mm."""
    centre = least_centre
    for turn in range(_ROUNDS):
        gain = lens.gain(lens.back(centre)[1], radius=radius, angle=angle)
        wanted = np.minimum(np.maximum(least_centre, least_edge - gain.min(axis=-1)), THICKEST_CENTRE_MM)
        if turn >= _UNDAMPED_ROUNDS:  # only forms near the limit overshoot by as much as they correct
            wanted = (wanted + centre) / 2.0
        moved = np.abs(wanted - centre).max(initial=0.0)
        centre = wanted
        if moved < _SETTLED_MM:
            break
    return centre


def _thinnest_within(
    lens: _Batch, *, k_back: NDArray[np.float64], centre: NDArray[np.float64], rim: CentredRim
) -> NDArray[np.float64]:
    """Return the least thickness along the radii; without prism it lies at centre or rim and is not searched."""
    if not np.any(lens.wedge):
        return centre
    levels = [lens.gain(k_back, radius=rim.radius_mm * depth, angle=rim.angle_deg).min(axis=-1) for depth in _DEPTHS]
    return np.asarray(centre + np.min(levels, axis=0))


def _refusal(
    lens: _Batch,
    *,
    k_back: NDArray[np.float64],
    radius: NDArray[np.float64],
    angle: NDArray[np.float64],
    too_thick: NDArray[np.bool_],
    thinnest: NDArray[np.float64],
) -> NDArray[np.int64]:
    along = curvature_along(k_back, first_deg=lens.first, direction_deg=angle)
    front = np.all(surface_exists(lens.k_front[..., None], radius_mm=radius), axis=-1)
    back = np.all(surface_exists(along, radius_mm=radius), axis=-1)
    return np.select(
        [~front, ~back, too_thick, thinnest <= 0.0],
        [Refusal.FRONT_SURFACE, Refusal.BACK_SURFACE, Refusal.TOO_THICK, Refusal.TOO_THIN],
        default=Refusal.NONE,
    ).astype(np.int64)
