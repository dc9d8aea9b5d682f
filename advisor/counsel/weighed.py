"""The figures that lenses are weighed by, one a criterion, from the arrays of light, form and ghosts."""

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from advisor.counsel.answer import FACE_CD_M2, WINDOW_CD_M2
from advisor.counsel.case import Case
from advisor.counsel.cautions import CAUTIONS
from advisor.counsel.faces import Face
from advisor.counsel.laid_out import Laid
from advisor.counsel.musts import UNKNOWN, currency_of
from advisor.counsel.priorities import EXPOSURES
from advisor.counsel.reach import worst_between_d
from advisor.counsel.stock_items import Coating, Scene
from advisor.counsel.value import currency_size
from advisor.counsel.whole_range import WholeRange
from advisor.optics.ghost_path import FROM_BEHIND
from advisor.optics.observer import observer_contrast
from advisor.optics.visibility import ROAD_RANGE_CD_M2

Floats = NDArray[np.float64]
WHOLE, HALF = 1.0, 0.5
SHARE = {"often": WHOLE, "sometimes": HALF}
MOST_OF_HAZE = 10.0  # a haze is never called plain, however bright


def scenes_that_count(case: Case, laid: Sequence[Laid]) -> tuple[Scene, ...]:
    """Return the scenes advice is judged in: those the visit names, else every one this life may hold.

    Left out then: roads at night for one who never drives at night, lights behind for one who never has them, a dark
    tint's scene without a tint, and bright lights ahead that no question asks about (a stage).
    """
    if case.visit.scenes is not None:
        return case.scenes
    never_at_night = "never" in (case.life("night_driving"), case.life("driving"))
    tinted = any(option.tint is not None for option in laid)
    kept = []
    for scene in case.scenes:
        if scene.tint_state == "dark":
            counts = tinted
        elif scene.where == "behind":
            counts = case.life("lights_behind") != "never"
        else:
            counts = not never_at_night and scene.background_cd_m2 <= ROAD_RANGE_CD_M2
        if counts:
            kept.append(scene)
    return tuple(kept)


def figures_of(case: Case, computed: WholeRange) -> dict[str, Floats]:
    """Return every criterion's figure for every option, (option,) each; only an unknown price is not a number."""
    light, forms, laid = computed.light, computed.forms, computed.laid
    # a tint hides the eye on purpose, so a tinted lens is judged as if it were clear
    observer = observer_contrast(
        light.whole_lens,
        transmittance=np.clip(1.0 - light.first_pass_loss, 1e-6, 1.0),
        window_luminance_cd_m2=WINDOW_CD_M2,
        face_luminance_cd_m2=FACE_CD_M2,
    )
    between = {design: worst_between_d(case, design) for design in {option.design for option in laid}}
    at_night = case.life("night_driving") != "never"
    prices = np.array([np.nan if option.price is None else option.price for option in laid])
    return {
        "second-image": worst_ahead(computed),
        "from-behind": worst_behind(computed),
        "seen-by-others": observer,
        "thickness": np.maximum(forms.shape.thickest_mm, forms.shape.centre_mm).max(axis=-1),
        "weight": forms.weight_g.sum(axis=-1),
        "fringe": np.broadcast_to(forms.fringe_prism_d, forms.weight_g.shape).max(axis=-1),
        # by day a tint takes light away on purpose; what the faces take is never wanted
        "transmitted": light.transmittance if at_night else 1.0 - light.first_pass_loss,
        "care": np.array([care_burden(case, option) for option in laid]),
        "in-between": np.array([between[option.design] for option in laid]),
        "sun": np.minimum(light.transmittance, light.transmittance_dark),
        "price": prices / currency_size(currency_of(case)),
    }


def worst_ahead(computed: WholeRange) -> Floats:
    """Return the visibility level of the worst ghost of lights ahead, over eyes, scenes, paths; 0 without a scene."""
    ghosts = computed.ghosts
    level = ghosts.relaxed.visibility_level
    level = np.where(ghosts.relaxed.haze, np.minimum(level, MOST_OF_HAZE), level)
    return _worst(np.where(ghosts.applies & ~FROM_BEHIND, level, 0.0))


def worst_behind(computed: WholeRange) -> Floats:
    """Return the contrast of the worst ghost of lights behind over what is looked at; 0 without a scene.

    By daylight the visibility level is past the range of its model, so the contrast is judged.
    """
    ghosts = computed.ghosts
    return _worst(np.where(ghosts.applies & FROM_BEHIND, ghosts.relaxed.contrast, 0.0))


def _worst(by_ghost: Floats) -> Floats:
    flat = by_ghost.reshape(len(by_ghost), -1)
    return flat.max(axis=-1) if flat.shape[-1] else np.zeros(len(by_ghost))


def care_burden(case: Case, option: Laid) -> float:
    """Return a count of what would harm this lens in this life, or show on it (a modelling choice).

    Heat, sprays, salt and chlorine harm a film; dust scratches a film and a hard coat half as much as bare resin; heat
    harms a material that softens once more; smears show on a film, half as much on one that repels oil. Each counts
    whole where the answer is "often", half where it is "sometimes"; a question not asked counts nothing.
    """
    burden = {exposure: SHARE.get(case.life(exposure), 0.0) for exposure in (*EXPOSURES, "bothered_smears")}
    faces = ((option.front_face, option.front), (option.back_face, option.back))
    total = burden["dust"] * max(_scratches(face, option) for face, _ in faces)
    if any(face.has_film for face, _ in faces):
        total += burden["heat_steam"] + burden["sprays_solvents"] + burden["water_salt_chlorine"]
        total += burden["bothered_smears"] * max(_smears(face, coating) for face, coating in faces)
    if CAUTIONS["heat-soft-material"](case, option, UNKNOWN.light) is not None:
        total += burden["heat_steam"]
    return total


def _scratches(face: Face, option: Laid) -> float:
    hard = face.has_film or face.coating.hard_coat is not None or option.material.hard_coat in ("always", "none")
    return HALF if hard else WHOLE


def _smears(face: Face, coating: Coating) -> float:
    if not face.has_film:
        return 0.0
    return HALF if coating.top is not None and coating.top.oil_repellent else WHOLE
