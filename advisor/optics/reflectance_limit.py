"""The greatest reflectance per surface that keeps the worst ghost of a scene at a chosen visibility level."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from advisor.optics.ghost_inputs import LensOnFace, Scene, Wearer
from advisor.optics.ghost_place import place_ghosts
from advisor.optics.ghost_scene import see_ghosts
from advisor.optics.ghost_strength import CORNEA_REFLECTANCE

Floats = NDArray[np.float64]

LEAST_REFLECTANCE = 1e-7
GREATEST_BARE_REFLECTANCE = 0.2
_HALVINGS = 24


@dataclass(frozen=True)
class ReflectanceLimit:
    """``reflectance`` per surface; ``even_bare`` where the bare surface already keeps the level (then it is that)."""

    reflectance: Floats
    even_bare: NDArray[np.bool_]


def flat_strengths(reflectance: ArrayLike, *, internal_transmittance: ArrayLike) -> tuple[Floats, Floats]:
    """Return the strengths (..., 5) and the transmittance (...) of a lens whose two faces reflect R alike.

    Without absorption in the faces R is the same from both sides and T = 1 - R; all bounces are in the transmittance.
    """
    r, tau = np.broadcast_arrays(
        np.asarray(reflectance, dtype=np.float64), np.asarray(internal_transmittance, dtype=np.float64)
    )
    twice = r * tau**2
    front = (1.0 - r) ** 2 * twice
    strengths = np.stack([r * twice, r, front, CORNEA_REFLECTANCE * r, CORNEA_REFLECTANCE * front], axis=-1)
    return strengths, np.asarray((1.0 - r) ** 2 * tau / (1.0 - r * twice), dtype=np.float64)


def reflectance_limit(
    lens: LensOnFace,
    *,
    scene: Scene,
    wearer: Wearer,
    bare_reflectance: ArrayLike,
    visibility_level: ArrayLike,
    internal_transmittance: ArrayLike = 1.0,
    accommodated: bool = True,
) -> ReflectanceLimit:
    """Return the greatest R, the same on both faces and at all wavelengths, that keeps the worst ghost at a level.

    The worst is over the paths of the scene, with the eye relaxed and, unless left out, accommodated on the ghost.
    Solved by halving the logarithm
    of R: with R change not only the strengths but the transmittance, and with it background, veil, and the pupil.

    Parameters
    ----------
    lens, scene, wearer
        As in `see_ghosts`.
    bare_reflectance : array_like, (...)
        Of the bare surface, above 0, at most 0.2 (index 2.6): up to there every ghost grows with R.
    visibility_level : array_like, (...)
        Above 0; 0.4 for "not noticed", 1 for "at the limit". Several are solved together in little more than the time
        of one: give them an axis of their own before those of the lens.
    internal_transmittance : array_like, (...)
        Of the material with its tint, above 0, at most 1.
    accommodated : bool
        False to judge the ghost only as it looks while the eye stays focused on what the scene fixates.

    Returns
    -------
    ReflectanceLimit
        Arrays (..., option, eye, scene), within 1 part in 10^6.
    """
    bare = np.asarray(bare_reflectance, dtype=np.float64)
    tau = np.asarray(internal_transmittance, dtype=np.float64)
    if not ((bare > LEAST_REFLECTANCE) & (bare <= GREATEST_BARE_REFLECTANCE)).all():
        raise ValueError("bare_reflectance must be above 0, at most 0.2")
    wanted = np.asarray(visibility_level, dtype=np.float64)
    if not (wanted > 0.0).all():
        raise ValueError("visibility_level must be above 0")
    if not ((tau > 0.0) & (tau <= 1.0)).all():
        raise ValueError("internal_transmittance must be above 0, at most 1")
    place = place_ghosts(lens, scene=scene, wearer=wearer)

    def kept(log_reflectance: Floats) -> NDArray[np.bool_]:
        strengths, through = flat_strengths(np.exp(log_reflectance), internal_transmittance=tau)
        ghosts = see_ghosts(lens, scene=scene, wearer=wearer, strengths=strengths, transmittance=through, place=place)
        level = ghosts.relaxed.visibility_level
        if accommodated:
            level = np.maximum(level, ghosts.accommodated.visibility_level)
        return np.asarray(level.max(axis=-1) <= wanted, dtype=np.bool_)

    even_bare = kept(np.log(bare))
    high = np.broadcast_to(np.log(bare), even_bare.shape)
    low = np.full_like(high, np.log(LEAST_REFLECTANCE))
    for _ in range(_HALVINGS):
        middle = (low + high) / 2.0
        good = kept(middle)
        low, high = np.where(good, middle, low), np.where(good, high, middle)
    return ReflectanceLimit(reflectance=np.where(even_bare, bare, np.exp(low)), even_bare=even_bare)
