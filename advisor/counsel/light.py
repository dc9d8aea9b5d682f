"""What the options do with light: mirrored, passed, and sent along the five ghost paths. Arrays with named axes."""

from collections.abc import Hashable, Sequence
from dataclasses import dataclass
from functools import lru_cache
from typing import Any, NamedTuple

import numpy as np
from numpy.typing import NDArray

from advisor.counsel.faces import Face, luminous_reflectance, made, made_reflectance, nominal, shapes
from advisor.counsel.laid_out import Laid
from advisor.counsel.spectra import LensSpectra, lens_spectra, tint_axes
from advisor.counsel.stock_items import Scene
from advisor.optics.as_made import spread
from advisor.optics.ghost_strength import PATHS, lens_transmittance, path_strengths, weighted_strengths
from advisor.optics.photometry import IlluminantName, luminous_mean
from advisor.optics.surface import SurfaceSpectra, whole_lens

Floats = NDArray[np.float64]
DEFAULT_INCIDENCE_DEG = 35.0  # light from behind must pass the head; a modelling choice


@dataclass(frozen=True)
class Light:
    """Figures of light. Axes: (option,) but for ``strengths`` (option, scene, path) and ``passed`` (option, scene)."""

    front: Floats
    back: Floats
    first_pass_loss: Floats
    whole_lens: Floats
    transmittance: Floats
    transmittance_dark: Floats
    second_image: Floats
    strengths: Floats
    passed: Floats
    tint_fits: NDArray[np.bool_]


_KNOWN: dict[Hashable, dict[str, Any]] = {}
MOST_KNOWN = 4096


def light_of(laid: Sequence[Laid], scenes: Sequence[Scene]) -> Light:
    """Return the figures of light of every option in every scene.

    They depend on faces, tint and the scenes' light alone, not on the wearer, and are kept from visit to visit; what is
    not known yet is worked out in one batch.
    """
    lights = tuple(scene_light(scene) for scene in scenes)
    keys = [(option.front_face, option.back_face, option.tint, lights) for option in laid]
    new = {key: option for key, option in zip(keys, laid, strict=True) if key not in _KNOWN}
    rows = {key: _KNOWN[key] for key in keys if key not in new}
    if new:
        worked = _work_out(list(new.values()), scenes)
        rows |= {key: {name: getattr(worked, name)[k] for name in FIGURES} for k, key in enumerate(new)}
        if len(_KNOWN) + len(new) > MOST_KNOWN:
            _KNOWN.clear()
        _KNOWN.update({key: rows[key] for key in new})
    return Light(**{name: np.array([rows[key][name] for key in keys]) for name in FIGURES})


def forget() -> None:
    """Drop what is kept from visit to visit, as a process that has just started has it."""
    _KNOWN.clear()


def _work_out(laid: Sequence[Laid], scenes: Sequence[Scene]) -> Light:
    """Work out the figures of light of some options as arrays."""
    spectra = lens_spectra(laid)
    strengths, through = scene_strengths(laid, scenes, straight=spectra)
    passed = spectra.transmittance()
    clear = luminous_mean(passed)
    return Light(
        front=np.array([luminous_reflectance(option.front_face) for option in laid]),
        back=np.array([luminous_reflectance(option.back_face) for option in laid]),
        first_pass_loss=spectra.first_pass_loss(),
        whole_lens=luminous_mean(spectra.reflectance()),
        transmittance=clear,
        transmittance_dark=luminous_mean(spectra.transmittance(dark=True)) if spectra.darkens else clear,
        second_image=_second_image(spectra, passed),
        strengths=strengths,
        passed=through,
        tint_fits=spectra.tint_fits,
    )


FIGURES = tuple(Light.__dataclass_fields__)


def _second_image(spectra: LensSpectra, passed: Floats) -> Floats:
    """Return the strength of light mirrored twice inside, under D65, (option,)."""
    inner = spectra.strengths()[:, PATHS.index("ahead-inner")]
    return luminous_mean(inner, weight=passed)


def scene_strengths(laid: Sequence[Laid], scenes: Sequence[Scene], *, straight: LensSpectra) -> tuple[Floats, Floats]:
    """Return the strength of each path (option, scene, path) and the light each lens passes (option, scene).

    Light from behind meets the lens at the scene's incidence; both are weighed with the scene's light, in its state of
    the tint.
    """
    spectra = {0.0: straight}
    found: dict[SceneLight, tuple[Floats, Floats]] = {}
    for scene in scenes:
        key = scene_light(scene)
        if key in found:
            continue
        if key.angle_deg not in spectra:
            spectra[key.angle_deg] = lens_spectra(laid, angle_deg=key.angle_deg)
        at_angle = spectra[key.angle_deg]
        passed = straight.transmittance(dark=key.dark)
        strengths = weighted_strengths(
            at_angle.strengths(dark=key.dark), transmittance=passed, illuminant=key.illuminant
        )
        found[key] = strengths, luminous_mean(passed, illuminant=key.illuminant)
    if not scenes:
        return np.empty((len(laid), 0, len(PATHS))), np.empty((len(laid), 0))
    each = [found[scene_light(scene)] for scene in scenes]
    return np.stack([strength for strength, _ in each], axis=1), np.stack([passed for _, passed in each], axis=1)


class SceneLight(NamedTuple):
    """What of a scene decides how strong the paths are."""

    angle_deg: float
    illuminant: IlluminantName
    dark: bool


DAYLIGHT = SceneLight(0.0, "D65", False)


def scene_light(scene: Scene) -> SceneLight:
    """Return what of a scene decides how strong the paths are; light from ahead falls on straight."""
    angle = 0.0
    if scene.where == "behind":
        angle = DEFAULT_INCIDENCE_DEG if scene.incidence_deg is None else scene.incidence_deg
    return SceneLight(angle, scene.illuminant, scene.tint_state == "dark")


def as_made_spreads(option: Laid) -> tuple[Floats | None, Floats | None, Floats | None]:
    """Return the 5, 50 and 95 % points of front, back and first-pass loss, (3,) each, or None without layers.

    Both faces of a pair are coated in runs of their own, so the loss of the two takes every front with every back.
    """
    return _spreads(option.front_face, option.back_face)


@lru_cache(maxsize=4096)
def _spreads(front_face: Face, back_face: Face) -> tuple[Floats | None, Floats | None, Floats | None]:
    front, back = made_reflectance(front_face), made_reflectance(back_face)
    both = None
    if front is not None or back is not None:
        one = np.array([luminous_reflectance(front_face)]) if front is None else front
        other = np.array([luminous_reflectance(back_face)]) if back is None else back
        both = spread((1.0 - (1.0 - one[:, None]) * (1.0 - other[None, :])).ravel())
    return None if front is None else spread(front), None if back is None else spread(back), both


def as_made_whole(option: Laid) -> Floats | None:
    """Return the 5, 50 and 95 % points of what the whole lens mirrors, (3,), or None without layers."""
    return _whole(option.front_face, option.back_face, tint_axes(option, dark=False) or (1.0, 1.0))


@lru_cache(maxsize=4096)
def _whole(front_face: Face, back_face: Face, axes: tuple[float, float]) -> Floats | None:
    pair = _made_pair(front_face, back_face, 0.0)
    if pair is None:
        return None
    fronts, backs = pair
    both = [whole_lens(fronts, backs, internal_transmittance=tau)[0] for tau in axes]
    return spread(luminous_mean((both[0] + both[1]) / 2.0))


def _made_pair(front: Face, back: Face, angle_deg: float) -> tuple[SurfaceSpectra, SurfaceSpectra] | None:
    """Return both faces of lenses as made, each coated in a run of its own, or None where neither has layers."""
    one, other = made(front, angle_deg), made(back, angle_deg)
    if one is None and other is None:
        return None
    return nominal(front, angle_deg) if one is None else one, nominal(back, angle_deg) if other is None else _rolled(
        other
    )


def estimated_ranges(option: Laid, scenes: Sequence[Scene]) -> Floats | None:
    """Return the least and greatest strength over the shapes a declared figure may have, (2, scene, path), or None."""
    front_face, back_face = option.front_face, option.back_face
    if not scenes or not (front_face.is_estimated or back_face.is_estimated):
        return None
    ranges = []
    for scene in scenes:
        key = scene_light(scene)
        bright, crossed = tint_axes(option, dark=key.dark) or (1.0, 1.0)
        front, back = _paired(front_face, back_face, angle_deg=key.angle_deg)
        strengths = weighted_strengths(
            path_strengths(front, back, internal_transmittance=bright, dark_axis_transmittance=crossed),
            transmittance=lens_transmittance(
                front, back, internal_transmittance=bright, dark_axis_transmittance=crossed
            ),
            illuminant=scene.illuminant,
        )
        ranges.append([strengths.min(axis=0), strengths.max(axis=0)])
    return np.array(ranges).transpose(1, 0, 2)


@lru_cache(maxsize=4096)
def made_strengths(front: Face, back: Face, axes: tuple[float, float], light: SceneLight) -> Floats | None:
    """Return the 5 and 95 % points of the strength of each path over lenses as made, (2, path), or None."""
    pair = _made_pair(front, back, light.angle_deg)
    if pair is None:
        return None
    fronts, backs = pair
    bright, crossed = axes
    strengths = weighted_strengths(
        path_strengths(fronts, backs, internal_transmittance=bright, dark_axis_transmittance=crossed),
        transmittance=lens_transmittance(fronts, backs, internal_transmittance=bright, dark_axis_transmittance=crossed),
        illuminant=light.illuminant,
    )
    return spread(strengths, percentiles=(5.0, 95.0))


def _rolled(surface: SurfaceSpectra) -> SurfaceSpectra:
    """Return the samples in another order: the two faces of a lens are coated in runs of their own."""
    return _taken(surface, np.roll(np.arange(len(surface.outside)), len(surface.outside) // 2))


def _paired(front: Face, back: Face, *, angle_deg: float) -> tuple[SurfaceSpectra, SurfaceSpectra]:
    """Return the shapes of both faces side by side: the same shape on both where the coating is the same."""
    one, other = shapes(front, angle_deg), shapes(back, angle_deg)
    if front == back:
        return one, other
    count, times = len(one.outside), len(other.outside)
    first = np.repeat(np.arange(count), times)
    second = np.tile(np.arange(times), count)
    return _taken(one, first), _taken(other, second)


def _taken(surface: SurfaceSpectra, places: NDArray[np.intp]) -> SurfaceSpectra:
    return SurfaceSpectra(surface.outside[places], surface.inside[places], surface.transmittance[places])
