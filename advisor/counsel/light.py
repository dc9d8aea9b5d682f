"""What the options do with light: mirrored, passed, and sent along the five ghost paths. Arrays with named axes."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from advisor.counsel.faces import Face, luminous_reflectance, made_reflectance, shapes
from advisor.counsel.laid_out import Laid
from advisor.counsel.spectra import LensSpectra, lens_spectra, tint_axes
from advisor.counsel.stock_items import Scene
from advisor.optics.as_made import spread
from advisor.optics.ghost_strength import PATHS, lens_transmittance, path_strengths, weighted_strengths
from advisor.optics.photometry import luminous_mean
from advisor.optics.surface import SurfaceSpectra

Floats = NDArray[np.float64]


@dataclass(frozen=True)
class Light:
    """Figures of light. Axes: every array (option,) but ``strengths``, which is (option, scene, path)."""

    front: Floats
    back: Floats
    first_pass_loss: Floats
    whole_lens: Floats
    transmittance: Floats
    transmittance_dark: Floats
    strengths: Floats
    tint_fits: NDArray[np.bool_]


def light_of(laid: Sequence[Laid], scenes: Sequence[Scene]) -> Light:
    """Return the figures of light of every option in every scene; the scenes' light falls on straight."""
    spectra = lens_spectra(laid)
    passed = spectra.transmittance()
    return Light(
        front=np.array([luminous_reflectance(option.front_face) for option in laid]),
        back=np.array([luminous_reflectance(option.back_face) for option in laid]),
        first_pass_loss=spectra.first_pass_loss(),
        whole_lens=spectra.reflectance(),
        transmittance=luminous_mean(passed),
        transmittance_dark=luminous_mean(spectra.transmittance(dark=True)),
        strengths=scene_strengths(spectra, scenes),
        tint_fits=spectra.tint_fits,
    )


def scene_strengths(spectra: LensSpectra, scenes: Sequence[Scene]) -> Floats:
    """Return the strength of each path in each scene, (option, scene, path), under the scene's light and tint state."""
    found: dict[tuple[str, bool], Floats] = {}
    for scene in scenes:
        key = (scene.illuminant, scene.tint_state == "dark")
        if key not in found:
            found[key] = weighted_strengths(
                spectra.strengths(dark=key[1]),
                transmittance=spectra.transmittance(dark=key[1]),
                illuminant=scene.illuminant,
            )
    if not scenes:
        return np.empty((len(spectra.tint_fits), 0, len(PATHS)))
    return np.stack([found[scene.illuminant, scene.tint_state == "dark"] for scene in scenes], axis=1)


def as_made_spreads(option: Laid) -> tuple[Floats | None, Floats | None, Floats | None]:
    """Return the 5, 50 and 95 % points of front, back and first-pass loss, (3,) each, or None without layers.

    Both faces of a pair are coated in runs of their own, so the loss of the two takes every front with every back.
    """
    front, back = made_reflectance(option.front_face), made_reflectance(option.back_face)
    both = None
    if front is not None or back is not None:
        one = np.array([luminous_reflectance(option.front_face)]) if front is None else front
        other = np.array([luminous_reflectance(option.back_face)]) if back is None else back
        both = spread((1.0 - (1.0 - one[:, None]) * (1.0 - other[None, :])).ravel())
    return None if front is None else spread(front), None if back is None else spread(back), both


def estimated_ranges(option: Laid, scenes: Sequence[Scene]) -> Floats | None:
    """Return the least and greatest strength over the shapes a declared figure may have, (2, scene, path), or None."""
    front_face, back_face = option.front_face, option.back_face
    if not (front_face.is_estimated or back_face.is_estimated):
        return None
    front, back = _paired(front_face, back_face)
    ranges = []
    for scene in scenes:
        bright, crossed = tint_axes(option, dark=scene.tint_state == "dark") or (1.0, 1.0)
        strengths = weighted_strengths(
            path_strengths(front, back, internal_transmittance=bright, dark_axis_transmittance=crossed),
            transmittance=lens_transmittance(front, back, internal_transmittance=bright, dark_axis_transmittance=crossed),
            illuminant=scene.illuminant,
        )
        ranges.append([strengths.min(axis=0), strengths.max(axis=0)])
    return np.array(ranges).transpose(1, 0, 2)


def _paired(front: Face, back: Face) -> tuple[SurfaceSpectra, SurfaceSpectra]:
    """Return the shapes of both faces side by side: the same shape on both where the coating is the same."""
    one, other = shapes(front), shapes(back)
    if front == back:
        return one, other
    count, times = len(one.outside), len(other.outside)
    first = np.repeat(np.arange(count), times)
    second = np.tile(np.arange(times), count)
    return _taken(one, first), _taken(other, second)


def _taken(surface: SurfaceSpectra, places: NDArray[np.intp]) -> SurfaceSpectra:
    return SurfaceSpectra(surface.outside[places], surface.inside[places], surface.transmittance[places])
