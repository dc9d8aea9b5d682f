"""The reflectance limit: the most each face may mirror so that this wearer notices no ghost; what reaches it."""

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from advisor.counsel.case import Case
from advisor.counsel.form import LensForms
from advisor.counsel.ghosts import ghosts_of, lens_on_face, scene_arrays, wearer_of
from advisor.counsel.laid_out import Laid
from advisor.counsel.light import light_of
from advisor.counsel.spectra import internal_transmittance
from advisor.counsel.stock import BARE
from advisor.counsel.stock_items import Scene
from advisor.counsel.whole_range import rows_of
from advisor.optics.fresnel import normal_reflectance
from advisor.optics.reflectance_limit import reflectance_limit
from advisor.optics.visibility import ROAD_RANGE_CD_M2

NOT_NOTICED, AT_THE_LIMIT = 0.4, 1.0


@dataclass(frozen=True)
class Limits:
    """Greatest reflectance per face, (option,), the least over eyes and scenes; NaN where even bare is enough.

    ``scenes`` are those judged, ``scene`` (option,) the place of the one that asks for the limit.
    """

    scenes: tuple[Scene, ...]

    not_noticed: NDArray[np.float64]
    at_the_limit: NDArray[np.float64]
    scene: NDArray[np.intp]


def limits_of(case: Case, laid: Sequence[Laid], *, forms: LensForms) -> Limits | None:
    """Solve the limit for every option over the scenes that are judged, or return None where there is none."""
    case = judged(case)
    if not case.scenes:
        return None
    lens, scene, wearer = lens_on_face(case, forms), scene_arrays(case), wearer_of(case, laid)
    bare = np.array([float(normal_reflectance(option.material.index)) for option in laid])[:, None, None]
    states = [scene_.tint_state == "dark" for scene_ in case.scenes]
    tau = np.array([[_tau(option, dark=dark) for dark in states] for option in laid])[:, None, :]
    solved = reflectance_limit(
        lens,
        scene=scene,
        wearer=wearer,
        bare_reflectance=bare,
        visibility_level=np.array([NOT_NOTICED, AT_THE_LIMIT])[:, None, None, None],
        internal_transmittance=tau,
        accommodated=False,  # the verdicts shown are those of the eye on the road
    )
    flat = solved.reflectance.reshape(2, len(laid), -1)
    needless = solved.even_bare.reshape(2, len(laid), -1).all(axis=-1)
    not_noticed, at_the_limit = np.where(needless, np.nan, flat.min(axis=-1))
    return Limits(case.scenes, not_noticed, at_the_limit, scene=flat[0].argmin(axis=-1) % len(case.scenes))


def _tau(option: Laid, *, dark: bool) -> float:
    tau = internal_transmittance(option.front_face, option.back_face, option.tint, dark=dark)
    return 1.0 if tau is None else tau


def judged(case: Case) -> Case:
    """Return the case with the scenes alone that visibility levels are made for: lights ahead on a road by night.

    By day, indoors and on a stage the threshold model is past its range, and light from behind is told by contrast.
    """
    roads = tuple(s for s in case.scenes if s.where == "ahead" and s.background_cd_m2 <= ROAD_RANGE_CD_M2)
    return replace(case, scenes=roads)


def coatings_that_reach(case: Case, laid: Sequence[Laid], *, forms: LensForms) -> list[list[str]]:
    """Return, for each option, the keys of the coatings sold whose worst ghost on it is not noticed, as designed."""
    case = judged(case)
    coatings = [coating for coating in case.stock.coating if coating.key != BARE.key]
    if not case.scenes or not coatings:
        return [[] for _ in laid]
    rows = np.repeat(np.arange(len(laid)), len(coatings))
    tried = [
        replace(laid[row], index=k, front=coating, back=coating)
        for k, (row, coating) in enumerate(zip(rows.tolist(), coatings * len(laid), strict=True))
    ]
    ghosts = ghosts_of(case, tried, forms=rows_of(forms, rows), light=light_of(tried, case.scenes))
    worst = ghosts.relaxed.visibility_level.reshape(len(laid), len(coatings), -1).max(axis=-1)
    return [
        [coating.key for coating, level in zip(coatings, row, strict=True) if level <= NOT_NOTICED] for row in worst
    ]
