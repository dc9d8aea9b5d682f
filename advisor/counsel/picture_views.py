"""What goes into the pictures of one option: places, sizes, levels and colours of all that its lenses mirror.

Everything is taken from the comparison's arrays; the same lens without a film is worked out here by the same calls.
Picture axes are the wearer's own: x to the right, y up, in degrees from where the wearer looks.
"""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from advisor.counsel.compare import Computed
from advisor.counsel.ghosts import lens_on_face, scene_arrays, wearer_of
from advisor.counsel.laid_out import Laid, without_film
from advisor.counsel.light import light_of, scene_light
from advisor.counsel.spectra import lens_spectra
from advisor.counsel.stock_items import Scene
from advisor.optics.colour import xyz
from advisor.optics.ghost_image import bare_blur
from advisor.optics.ghost_path import FROM_BEHIND
from advisor.optics.ghost_place import GhostPlace, place_ghosts
from advisor.optics.ghost_scene import Ghosts, see_ghosts
from advisor.optics.ghost_strength import PATHS
from advisor.optics.tone import LEAST_CONTRAST, light_paint
from advisor.optics.visibility import ROAD_RANGE_CD_M2

Floats = NDArray[np.float64]
WIDE_WINDOW_DEG = 5.0  # an extended light smaller than this is no window


@dataclass(frozen=True)
class Mirrored:
    """One image mirrored in a lens. ``level`` is its luminance in thresholds; pairs run over the two meridians.

    ``place_deg`` is from the light that makes it (0, 0 for a light behind), ``turn_deg`` the first meridian in picture
    axes; ``source_deg`` is the image of the light alone and ``blur_deg`` what the eye's focus adds to it.
    """

    path: str
    level: float
    paint: Floats
    place_deg: tuple[float, float]
    size_deg: tuple[float, float]
    source_deg: tuple[float, float]
    blur_deg: tuple[float, float]
    turn_deg: float
    spread: bool


@dataclass(frozen=True)
class SeenScene:
    """One scene as one eye sees it through one lens."""

    scene: Scene
    eye: int
    transmittance: float
    eye_lx_per_lamp: float
    source_place_deg: tuple[float, float]
    source_size_deg: float
    age_years: float
    pigment: float
    mirrored: tuple[Mirrored, ...]


@dataclass(frozen=True)
class Seen:
    """Ghosts of every option, as coated or without a film, with what they were worked out from."""

    laid: Sequence[Laid]
    ghosts: Ghosts
    place: GhostPlace
    passed: Floats


def seen_through(computed: Computed, *, film: bool) -> Seen:
    """Return the ghosts of every option as coated, or of the same lenses without a film."""
    case = computed.case
    lens, scene, wearer = lens_on_face(case, computed.forms), scene_arrays(case), wearer_of(case, computed.laid)
    place = place_ghosts(lens, scene=scene, wearer=wearer)
    if film:
        return Seen(computed.laid, computed.ghosts.seen, place, computed.light.passed)
    laid = [without_film(option, case.stock) for option in computed.laid]
    light = light_of(laid, case.scenes)
    strengths, passed = light.strengths, light.passed
    ghosts = see_ghosts(
        lens,
        scene=scene,
        wearer=wearer,
        strengths=strengths[:, None],
        transmittance=np.maximum(passed, np.finfo(float).tiny)[:, None],
        place=place,
    )
    return Seen(laid, ghosts, place, passed)


def notice_level(luminance: float, *, threshold: float, background: float) -> float:
    """Return a luminance in thresholds; by day, past the threshold's range, a step under 2 % counts as less than one.

    The greater of the two thresholds counts there, as for what is said of light from behind.
    """
    if background > ROAD_RANGE_CD_M2:
        threshold = max(threshold, LEAST_CONTRAST * background)
    return luminance / threshold


def road_scene(computed: Computed, k: int) -> tuple[int, int] | None:
    """Return the road scene and the eye with the greatest visibility level, as the words on the page choose them."""
    ahead = [s for s, scene in enumerate(computed.case.scenes) if is_road(scene) and computed.laid[k].is_met_in(scene)]
    if not ahead:
        return None
    level = computed.ghosts.seen.relaxed.visibility_level[k][:, ahead, PATHS.index("ahead-inner")]
    eye, place = np.unravel_index(int(np.argmax(level)), level.shape)
    return ahead[int(place)], int(eye)


def desk_scene(computed: Computed, k: int) -> tuple[int, int] | None:
    """Return the first scene with a window behind, and the eye to which it shows more."""
    behind = [s for s, scene in enumerate(computed.case.scenes) if is_window_behind(scene)]
    if not behind:
        return None
    shown = computed.ghosts.seen.relaxed.luminance_cd_m2[k][:, behind[0], FROM_BEHIND].sum(axis=-1)
    return behind[0], int(np.argmax(shown))


def is_road(scene: Scene) -> bool:
    """Whether a scene is one of lamps ahead by night."""
    return scene.kind == "small-source" and scene.where == "ahead" and scene.background_cd_m2 <= ROAD_RANGE_CD_M2


def is_window_behind(scene: Scene) -> bool:
    """Whether a scene is one of a window behind a desk, without a dark tint."""
    size = scene.size_deg if isinstance(scene.size_deg, tuple) else (scene.size_deg, scene.size_deg)
    wide = min(value or 0.0 for value in size) >= WIDE_WINDOW_DEG
    return scene.kind == "extended" and scene.where == "behind" and scene.tint_state == "clear" and wide


def scene_seen(computed: Computed, seen: Seen, k: int, *, scene_index: int, eye: int) -> SeenScene:
    """Return one scene through one lens, with every image that the lens mirrors there."""
    case, scenes = computed.case, scene_arrays(computed.case)
    scene = case.scenes[scene_index]
    shape = seen.ghosts.applies.shape

    def at(values: Floats, ends: int = 0) -> Floats:
        """Return the entry of this option, eye and scene of an array (..., path or nothing, ends)."""
        wanted = shape[:3] + values.shape[values.ndim - ends :] if ends else shape[:3]
        return np.asarray(np.broadcast_to(values, wanted)[k, eye, scene_index])

    passed = float(seen.passed[k, scene_index])
    lamp_lx = 0.0
    if scene.kind == "small-source":
        lamp_lx = float(scenes.intensity_cd[scene_index] / scenes.distance_m[scene_index] ** 2)
    along = np.deg2rad(scenes.azimuth_deg[scene_index])
    direction = float(scenes.direction_deg[scene_index])
    return SeenScene(
        scene=scene,
        eye=eye,
        transmittance=passed,
        eye_lx_per_lamp=lamp_lx * passed * float(at(seen.place.direct_area)),
        source_place_deg=(-direction * float(np.cos(along)), direction * float(np.sin(along))),
        source_size_deg=float(np.rad2deg(np.sqrt(np.prod(at(seen.place.source_seen_rad, 1))))),
        age_years=case.age_years,
        pigment=case.pigment,
        mirrored=_mirrored(computed, seen, k, scene_index, eye),
    )


def _mirrored(computed: Computed, seen: Seen, k: int, s: int, eye: int) -> tuple[Mirrored, ...]:
    ghosts, place, found = seen.ghosts, seen.place, []
    shape = ghosts.applies.shape
    blur = bare_blur(place.ghosts, pupil_mm=ghosts.pupil_mm, focus_d=place.focus_d[..., None, :])
    larger = np.abs(place.ghosts.magnification)
    blur_deg = np.rad2deg(np.broadcast_to(larger * blur, (*shape, 2)))[k, eye, s]
    source_deg = np.rad2deg(np.broadcast_to(larger * place.source_rad[..., None, :], (*shape, 2)))[k, eye, s]
    apart = np.rad2deg(np.broadcast_to(place.separation_rad, (*shape, 2)))[k, eye, s]
    first_deg = float(computed.forms.powers.first_deg[k, eye])
    paints = _paints(seen.laid[k], computed.case.scenes[s])
    for p, path in enumerate(PATHS):
        at = (k, eye, s, p)
        if not ghosts.applies[at]:
            continue
        found.append(
            Mirrored(
                path=path,
                level=notice_level(
                    float(ghosts.relaxed.luminance_cd_m2[at]),
                    threshold=float(ghosts.relaxed.threshold_cd_m2[at]),
                    background=float(ghosts.background_cd_m2[at]) if ghosts.past_range[at] else 0.0,
                ),
                paint=paints[p],
                place_deg=_in_picture(apart[p], first_deg=first_deg, eye=eye),
                size_deg=_pair(ghosts.relaxed.size_deg[at]),
                source_deg=_pair(source_deg[p]),
                blur_deg=_pair(blur_deg[p]),
                turn_deg=180.0 - first_deg if eye == 0 else first_deg,
                spread=bool(ghosts.spread[at]),
            )
        )
    return tuple(found)


def _pair(values: Floats) -> tuple[float, float]:
    return float(values[0]), float(values[1])


def _in_picture(along: Floats, *, first_deg: float, eye: int) -> tuple[float, float]:
    """Return a vector along the two meridians in picture axes; the nose is to the left of a right eye."""
    turn = np.deg2rad(first_deg)
    nosewards = float(along[0] * np.cos(turn) - along[1] * np.sin(turn))
    up = float(along[0] * np.sin(turn) + along[1] * np.cos(turn))
    return (-nosewards if eye == 0 else nosewards), up


def _paints(option: Laid, scene: Scene) -> Floats:
    """Return the colour of each path's light under daylight, (path, 3)."""
    light = scene_light(scene)
    spectra = lens_spectra([option], angle_deg=light.angle_deg)
    passed = np.where(FROM_BEHIND[:, None], 1.0, lens_spectra([option]).transmittance(dark=light.dark))
    return light_paint(xyz(spectra.strengths(dark=light.dark)[0] * passed))
