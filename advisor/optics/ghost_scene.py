"""How a wearer sees ghosts in scenes: pupil, brightness, background, threshold, verdict.

Axes are (..., option, eye, scene, path) in the order of ``ghost_path.PATHS``, and a last one of the two principal
meridians where said. No value is infinite or not a number. A path that carries no light of a scene (a ghost from
behind in a scene ahead) has ``applies`` false, luminance 0 and verdict 0.

Left out: the ghost of a ghost, chromatic spread, aberrations off the axis, the eye's own blur, the turn of the eye
towards a ghost from behind, and the edge of the lens.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from advisor.optics.eye import (
    DEG2_PER_SR,
    accommodation_for,
    accommodation_hofstetter_1950,
    pupil_watson_yellott_2012,
    veil_cie146_2002,
)
from advisor.optics.ghost_image import (
    SMALLEST_ANGLE_RAD,
    bare_blur,
    extended_source_luminance,
    lamps_overlapping,
    patch_extent,
    small_source_luminance,
)
from advisor.optics.ghost_inputs import LensOnFace, Scene, Wearer
from advisor.optics.ghost_path import FROM_BEHIND, MAX_VERGENCE_D
from advisor.optics.ghost_place import GhostPlace, on_source, place_ghosts, separation_deg
from advisor.optics.visibility import (
    DARKEST_BACKGROUND_CD_M2,
    ROAD_RANGE_CD_M2,
    is_haze,
    threshold_adrian_1989,
    verdict_code,
)

Floats = NDArray[np.float64]
LARGEST_SIZE_DEG = 180.0


@dataclass(frozen=True)
class GhostView:
    """Ghosts at one state of focus; arrays (..., path), ``defocus_d`` and ``size_deg`` (..., path, 2).

    ``contrast`` is ghost over background; ``verdict`` is a place in ``visibility.VERDICTS``.
    """

    defocus_d: Floats
    size_deg: Floats
    luminance_cd_m2: Floats
    threshold_cd_m2: Floats
    visibility_level: Floats
    contrast: Floats
    haze: NDArray[np.bool_]
    verdict: NDArray[np.intp]


@dataclass(frozen=True)
class Ghosts:
    """All ghosts; arrays (..., path), ``vergence_d`` (..., path, 2).

    ``vergence_d`` is at the back vertex. ``separation_deg`` has no meaning (0) for paths from behind. ``spread`` marks
    ghosts with no place to state, ``past_range`` scenes brighter than the roads of the threshold model.
    ``relaxed`` is the eye as it looks at what the scene fixates, ``accommodated`` the eye focusing on the ghost as far
    as it can; one change of focus serves both meridians, to the middle of the two.
    """

    applies: NDArray[np.bool_]
    vergence_d: Floats
    pupil_mm: Floats
    separation_deg: Floats
    background_cd_m2: Floats
    spread: NDArray[np.bool_]
    past_range: NDArray[np.bool_]
    relaxed: GhostView
    accommodated: GhostView


def see_ghosts(
    lens: LensOnFace,
    *,
    scene: Scene,
    wearer: Wearer,
    strengths: ArrayLike,
    transmittance: ArrayLike,
    place: GhostPlace | None = None,
) -> Ghosts:
    """Return how the wearer sees the five ghosts in every scene.

    Parameters
    ----------
    lens : LensOnFace
    scene : Scene
    wearer : Wearer
    strengths : array_like, (..., 5)
        Of each path in the order of ``PATHS``, under the scene's illuminant; of ahead and cornea paths relative to
        the direct light.
    transmittance : array_like, (...)
        Luminous transmittance of the whole lens, above 0, at most 1.
    place : GhostPlace, optional
        From `place_ghosts` with the same lens, scene and wearer, where only reflectances change between calls.

    Returns
    -------
    Ghosts

    Raises
    ------
    ValueError
        When a strength or the transmittance is outside its range.
    """
    strength = np.asarray(strengths, dtype=np.float64)
    through = np.asarray(transmittance, dtype=np.float64)
    if strength.shape[-1:] != (5,) or not ((strength >= 0.0) & (strength < np.inf)).all():
        raise ValueError("strengths must be 0 or more, five along the last axis")
    if not ((through > 0.0) & (through <= 1.0)).all():
        raise ValueError("transmittance must be above 0, at most 1")
    if place is None:
        place = place_ghosts(lens, scene=scene, wearer=wearer)

    bare = np.prod(np.maximum(place.source_rad, SMALLEST_ANGLE_RAD), axis=-1) * np.pi / 4.0
    one_lamp_lx = scene.intensity_cd / scene.distance_m**2
    source_cd_m2 = np.where(scene.extended, scene.luminance_cd_m2, one_lamp_lx / bare)
    all_lx = np.where(scene.extended, scene.luminance_cd_m2 * bare, one_lamp_lx * scene.lamps)
    eye_lx = np.where(scene.behind, 0.0, all_lx * through * place.direct_area)

    field_deg2 = np.pi / 4.0 * scene.adapting_field_deg**2
    pupil_mm = wearer.pupil_scale * pupil_watson_yellott_2012(
        through * scene.adapting_cd_m2 * field_deg2 + DEG2_PER_SR * eye_lx,
        age_y=wearer.age_y,
        both_eyes=wearer.both_eyes,
    )

    apart_deg = separation_deg(place)
    through_path = through[..., None]
    veil = eye_lx[..., None] * veil_cie146_2002(
        apart_deg, age_y=wearer.age_y[..., None], pigment=wearer.pigment[..., None]
    )
    around = through_path * scene.background_cd_m2[..., None]
    ahead = np.where(on_source(place), through_path * source_cd_m2[..., None], around + veil)
    background = np.where(FROM_BEHIND, around, ahead)

    light = _Light(
        scene=scene,
        wearer=wearer,
        place=place,
        meridian_deg=lens.meridian_deg,
        strength=np.where(place.applies, strength * np.where(FROM_BEHIND, 1.0, through_path), 0.0),
        one_lamp_lx=one_lamp_lx,
        pupil_mm=pupil_mm,
        background_cd_m2=background,
        apart_deg=apart_deg,
    )
    defocus = np.clip(place.ghosts.pupil_vergence_d - place.focus_d[..., None, :], -MAX_VERGENCE_D, MAX_VERGENCE_D)
    change = accommodation_for(
        defocus.mean(axis=-1),
        amplitude_d=accommodation_hofstetter_1950(wearer.age_y)[..., None],
        in_use_d=place.in_use_d[..., None],
    )[..., None]
    relaxed = _view(light, defocus_d=defocus, change_d=np.zeros_like(change))
    accommodated = _view(light, defocus_d=defocus, change_d=change)
    shape = relaxed.luminance_cd_m2.shape
    return Ghosts(
        applies=np.broadcast_to(place.applies, shape),
        vergence_d=np.broadcast_to(place.ghosts.vergence_d, (*shape, 2)),
        pupil_mm=np.broadcast_to(pupil_mm[..., None], shape),
        separation_deg=np.broadcast_to(apart_deg, shape),
        background_cd_m2=np.broadcast_to(background, shape),
        spread=np.broadcast_to(place.spread, shape),
        past_range=np.broadcast_to(around > ROAD_RANGE_CD_M2, shape),
        relaxed=relaxed,
        accommodated=accommodated,
    )


@dataclass(frozen=True)
class _Light:
    """What both states of focus share; ``strength``, ``background_cd_m2`` and ``apart_deg`` have the path axis."""

    scene: Scene
    wearer: Wearer
    place: GhostPlace
    meridian_deg: Floats
    strength: Floats
    one_lamp_lx: Floats
    pupil_mm: Floats
    background_cd_m2: Floats
    apart_deg: Floats


def _view(light: _Light, *, defocus_d: Floats, change_d: Floats) -> GhostView:
    """Return the ghosts as seen when the eye has changed its focus by ``change_d`` (..., path, 1)."""
    scene, ghosts = light.scene, light.place.ghosts
    source = light.place.source_rad[..., None, :]
    blur = bare_blur(ghosts, pupil_mm=light.pupil_mm[..., None], focus_d=light.place.focus_d[..., None, :] + change_d)
    extent = patch_extent(blur, size_rad=source)
    of_lamp = small_source_luminance(
        light.one_lamp_lx[..., None], strength=light.strength, blur_rad=blur, size_rad=source
    ) * lamps_overlapping(
        extent,
        lamps=scene.lamps[..., None],
        spacing_rad=(scene.spacing_m / scene.distance_m)[..., None],
        meridian_deg=light.meridian_deg[..., None],
    )
    of_window = extended_source_luminance(
        scene.luminance_cd_m2[..., None], strength=light.strength, blur_rad=blur, size_rad=source
    )
    size_deg = np.minimum(np.rad2deg(np.abs(ghosts.magnification) * extent), LARGEST_SIZE_DEG)
    luminance, background, diameter_deg = np.broadcast_arrays(
        np.where(scene.extended[..., None], of_window, of_lamp),
        light.background_cd_m2,
        np.sqrt(np.prod(size_deg, axis=-1)),
    )
    threshold = threshold_adrian_1989(
        background,
        size_arcmin=diameter_deg * 60.0,
        age_y=light.wearer.age_y[..., None],
        exposure_s=scene.exposure_s[..., None],
    )
    haze = light.place.spread | is_haze(size_deg, separation_deg=np.where(FROM_BEHIND, np.inf, light.apart_deg))
    haze = light.place.applies & haze
    level = luminance / threshold
    return GhostView(
        defocus_d=np.broadcast_to(defocus_d - change_d, (*level.shape, 2)),
        size_deg=np.broadcast_to(size_deg, (*level.shape, 2)),
        luminance_cd_m2=luminance,
        threshold_cd_m2=threshold,
        visibility_level=level,
        contrast=luminance / np.maximum(background, DARKEST_BACKGROUND_CD_M2),
        haze=np.broadcast_to(haze, level.shape),
        verdict=np.broadcast_to(verdict_code(level, haze=haze), level.shape),
    )
