"""The reflectance limit: the most each face may mirror so that this wearer notices no ghost; what reaches it."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from advisor.counsel.case import Case
from advisor.counsel.faces import Face, face_of, luminous_reflectance, made_reflectance
from advisor.counsel.form import LensForms
from advisor.counsel.ghosts import lens_on_face, scene_arrays, wearer_of
from advisor.counsel.laid_out import Laid
from advisor.counsel.spectra import internal_transmittance
from advisor.counsel.stock import BARE, Range
from advisor.optics.fresnel import normal_reflectance
from advisor.optics.reflectance_limit import reflectance_limit

NOT_NOTICED, AT_THE_LIMIT = 0.4, 1.0


@dataclass(frozen=True)
class Limits:
    """Greatest reflectance per face, (option,), the least over eyes and scenes; NaN where even bare is enough.

    ``scene`` (option,) is the place of the scene that asks for it.
    """

    not_noticed: NDArray[np.float64]
    at_the_limit: NDArray[np.float64]
    scene: NDArray[np.intp]


def limits_of(case: Case, laid: Sequence[Laid], *, forms: LensForms) -> Limits | None:
    """Solve the limit for every option, or return None where no scene is laid out."""
    if not case.scenes:
        return None
    lens, scene, wearer = lens_on_face(case, forms), scene_arrays(case), wearer_of(case, laid)
    bare = np.array([float(normal_reflectance(option.material.index)) for option in laid])[:, None, None]
    states = [scene_.tint_state == "dark" for scene_ in case.scenes]
    tau = np.array([[_tau(option, dark=dark) for dark in states] for option in laid])[:, None, :]
    solved = [
        reflectance_limit(
            lens,
            scene=scene,
            wearer=wearer,
            bare_reflectance=bare,
            visibility_level=level,
            internal_transmittance=tau,
            accommodated=False,  # the verdicts shown are those of the eye on the road
        )
        for level in (NOT_NOTICED, AT_THE_LIMIT)
    ]
    flat = [found.reflectance.reshape(len(laid), -1) for found in solved]
    needless = [found.even_bare.reshape(len(laid), -1).all(axis=-1) for found in solved]
    not_noticed, at_the_limit = (
        np.where(bare_is_enough, np.nan, most.min(axis=-1)) for bare_is_enough, most in zip(needless, flat, strict=True)
    )
    return Limits(not_noticed, at_the_limit, scene=flat[0].argmin(axis=-1) % len(case.scenes))


def _tau(option: Laid, *, dark: bool) -> float:
    tau = internal_transmittance(option.front_face, option.back_face, option.tint, dark=dark)
    return 1.0 if tau is None else tau


def most_as_made(face: Face) -> float:
    """Return the 95 % point of the luminous reflectance as made, or the plain figure of a face without layers."""
    samples = made_reflectance(face)
    return luminous_reflectance(face) if samples is None else float(np.percentile(samples, 95.0))


def coatings_that_reach(limit: float, option: Laid, stock: Range) -> list[str]:
    """Return the keys of the coatings sold that stay under a limit on this material, as made; all where it has none."""
    most = np.inf if np.isnan(limit) else limit
    return [
        coating.key
        for coating in stock.coating
        if coating.key != BARE.key and most_as_made(face_of(option.material, coating)) <= most
    ]
