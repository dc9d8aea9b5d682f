"""What the ghosts' place and vergence are, before any reflectance is known: the geometry of lens, source and eye."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from advisor.optics.eye import accommodation_hofstetter_1950
from advisor.optics.ghost_image import SMALLEST_ANGLE_RAD, along_meridians, direction_seen, extent_along_meridians
from advisor.optics.ghost_inputs import LensOnFace, Scene, Wearer
from advisor.optics.ghost_path import (
    CORNEA_RADIUS_MM,
    FARTHEST_PLACE_DEG,
    FROM_BEHIND,
    PathImage,
    ghost_images,
    path_image,
    spread_over_lens,
)
from advisor.optics.meridians import local_direction

Floats = NDArray[np.float64]

FARTHEST_DIRECTION_RAD = np.pi / 2.0


@dataclass(frozen=True)
class GhostPlace:
    """Geometry of all ghosts; axes (..., option, eye, scene, path, meridian), or fewer where said.

    Parameters
    ----------
    ghosts : PathImage, arrays (..., 5, 2)
    direct_area : ndarray, (...)
        ``|M_direct,1 M_direct,2|``, the source's image area over its bare area.
    source_rad, source_seen_rad : ndarray, (..., 2)
        Bare extent of the source along the principal meridians, and that of its image.
    focus_d, in_use_d : ndarray, (..., 2) and (...)
        V, the vergence at the pupil of light from what is looked at, and the accommodation this takes.
    separation_rad : ndarray, (..., 5, 2)
        Ghost from its source, 0 for paths from behind.
    spread : ndarray of bool, (..., 5)
        The ghost has no place to state.
    applies : ndarray of bool, (..., 5)
        The path carries light of this scene.
    """

    ghosts: PathImage
    direct_area: Floats
    source_rad: Floats
    source_seen_rad: Floats
    focus_d: Floats
    in_use_d: Floats
    separation_rad: Floats
    spread: NDArray[np.bool_]
    applies: NDArray[np.bool_]


def place_ghosts(lens: LensOnFace, *, scene: Scene, wearer: Wearer) -> GhostPlace:
    """Return where the ghosts form and where they stand beside their source.

    Tilt and wrap turn the lens's axis: a source is then further from the axis by the turn, and the pupil, behind the
    lens by d, is off the axis by d times the turn. For a thin lens the two nearly cancel, as they must: a tilted thin
    lens does not part a ghost from its source. The cornea's centre is off the axis in the same way.
    """
    section = lens.section
    local = np.deg2rad(local_direction(scene.azimuth_deg, eye=lens.eye))
    angle = np.deg2rad(scene.direction_deg)
    direction = np.stack(np.broadcast_arrays(angle * np.cos(local), angle * np.sin(local)), axis=-1)
    turn = np.deg2rad(np.stack(np.broadcast_arrays(lens.wrap_deg, lens.tilt_deg), axis=-1))
    cornea_m = (section.vertex_mm[..., None] + CORNEA_RADIUS_MM) * 1e-3
    field = along_meridians(direction + turn, meridian_deg=lens.meridian_deg)
    pupil_mm = along_meridians(lens.pupil_offset_mm - section.pupil_m * 1e3 * turn, meridian_deg=lens.meridian_deg)
    cornea_offset_m = along_meridians(lens.pupil_offset_mm * 1e-3 - cornea_m * turn, meridian_deg=lens.meridian_deg)
    cornea_tilt = -cornea_offset_m / (CORNEA_RADIUS_MM * 1e-3)
    prism = along_meridians(lens.prism_base_d, meridian_deg=lens.meridian_deg) / 100.0
    back_tilt = prism / (section.index[..., None] - 1.0)

    direct = path_image(section, path="direct", distance_m=scene.distance_m, back_tilt=back_tilt)
    ghosts = ghost_images(
        section,
        distance_m=scene.distance_m,
        incidence_deg=scene.incidence_deg,
        meridian_from_plane_deg=lens.meridian_deg - np.rad2deg(local),
        back_tilt=back_tilt,
        cornea_tilt=cornea_tilt,
    )
    seen = direction_seen(ghosts, field_angle_rad=field[..., None, :], pupil_offset_mm=pupil_mm[..., None, :])
    source_seen = direction_seen(direct, field_angle_rad=field, pupil_offset_mm=pupil_mm)
    separation = np.where(FROM_BEHIND[:, None], 0.0, seen - source_seen[..., None, :])
    looked_at = path_image(section, path="direct", distance_m=scene.fixation_m).pupil_vergence_d
    far = wearer.far_vergence_d
    if far is None:
        far = path_image(section, path="direct", distance_m=np.inf).pupil_vergence_d
    # An eye that can no longer focus as near as the scene fixates stays as near as it can.
    nearest = far - accommodation_hofstetter_1950(wearer.age_y)[..., None]
    focus = np.maximum(looked_at, nearest)
    source = extent_along_meridians(np.deg2rad(scene.size_deg), meridian_deg=lens.meridian_deg)
    return GhostPlace(
        ghosts=ghosts,
        direct_area=np.abs(np.prod(direct.magnification, axis=-1)),
        source_rad=source,
        source_seen_rad=np.abs(direct.magnification) * source,
        focus_d=focus,
        in_use_d=np.mean(far - focus, axis=-1),
        separation_rad=np.clip(separation, -FARTHEST_DIRECTION_RAD, FARTHEST_DIRECTION_RAD),
        spread=spread_over_lens(ghosts, field_angle_rad=np.where(FROM_BEHIND[:, None], 0.0, field[..., None, :])),
        applies=scene.behind[..., None] == FROM_BEHIND,
    )


def separation_deg(place: GhostPlace) -> Floats:
    """Return the length of the separation, degrees, (..., 5); a ghost with no place counts as at most 30 away."""
    length = np.rad2deg(np.linalg.norm(place.separation_rad, axis=-1))
    return np.asarray(np.where(place.spread, np.minimum(length, FARTHEST_PLACE_DEG), length), dtype=np.float64)


def on_source(place: GhostPlace) -> NDArray[np.bool_]:
    """Tell which ghosts, (..., 5), stand under half the source's image from its middle."""
    half = np.maximum(place.source_seen_rad[..., None, :] / 2.0, SMALLEST_ANGLE_RAD)
    return np.asarray(np.sum((place.separation_rad / half) ** 2, axis=-1) < 1.0, dtype=np.bool_)
