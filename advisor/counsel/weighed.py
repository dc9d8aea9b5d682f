"""The figures that lenses are weighed by, one a criterion, from the arrays of light, form and ghosts."""

from collections.abc import Mapping, Sequence

import numpy as np
from numpy.typing import NDArray

from advisor.counsel.answer import FACE_CD_M2, WINDOW_CD_M2
from advisor.counsel.case import Case
from advisor.counsel.cautions import CAUTIONS
from advisor.counsel.faces import Face, face_of
from advisor.counsel.laid_out import Laid
from advisor.counsel.musts import UNKNOWN, currency_of
from advisor.counsel.priorities import EXPOSURES
from advisor.counsel.reach import far_is_needed, worst_between_d
from advisor.counsel.spectra import internal_transmittance
from advisor.counsel.stock import BARE
from advisor.counsel.stock_items import Coating, Material, Scene, Tint
from advisor.counsel.value import currency_size
from advisor.counsel.whole_range import WholeRange
from advisor.optics.ghost_path import FROM_BEHIND
from advisor.optics.observer import observer_contrast
from advisor.optics.visibility import ROAD_RANGE_CD_M2

Floats = NDArray[np.float64]
WHOLE, HALF = 1.0, 0.5
SHARE = {"often": WHOLE, "sometimes": HALF}
PLAIN = face_of(Material(n_d=1.5, abbe=58.0, density_g_cm3=1.3), BARE)
MOST_OF_HAZE = 10.0  # a haze is never called plain, however bright


def scenes_that_count(case: Case, laid: Sequence[Laid]) -> tuple[Scene, ...]:
    """Return the scenes advice is judged in: those the visit names, else every one this life may hold.

    Left out then: roads at night for one who never drives at night, or in a near pair; lights behind for one who never
    has them; a dark tint's scene without a tint; and bright lights ahead that no question asks about (a stage).
    """
    if case.visit.scenes is not None:
        return case.scenes
    no_road = case.never_at_night or not far_is_needed(case)
    tinted = any(option.tint is not None for option in laid)
    kept = []
    for scene in case.scenes:
        if scene.tint_state == "dark":
            counts = tinted
        elif scene.where == "behind":
            counts = case.life("lights_behind") != "never"
        else:
            counts = not no_road and scene.background_cd_m2 <= ROAD_RANGE_CD_M2
        if counts:
            kept.append(scene)
    return tuple(kept)


def figures_of(case: Case, computed: WholeRange) -> dict[str, Floats]:
    """Return every criterion's figure for every option, (option,) each; only an unknown price is not a number."""
    light, forms, laid = computed.light, computed.forms, computed.laid
    between = {design: worst_between_d(case, design) for design in {option.design for option in laid}}
    prices = np.array([np.nan if option.price is None else option.price for option in laid])
    return {
        "second-image": worst_ahead(computed),
        "from-behind": worst_behind(computed),
        "seen-by-others": _seen_by_others(computed, light.transmittance),
        "thickness": np.maximum(forms.shape.thickest_mm, forms.shape.centre_mm).max(axis=-1),
        "weight": forms.weight_g.sum(axis=-1),
        "fringe": np.broadcast_to(forms.fringe_prism_d, forms.weight_g.shape).max(axis=-1),
        "transmitted": light.transmittance,
        "not-mirrored": 1.0 - light.first_pass_loss,
        "care": np.array([care_burden(case, option) for option in laid]),
        "in-between": np.array([between[option.design] for option in laid]),
        "sun": np.minimum(light.transmittance, light.transmittance_dark),
        "price": prices / currency_size(currency_of(case)),
    }


def with_tints_alike(figures: Mapping[str, Floats], computed: WholeRange) -> dict[str, Floats]:
    """Return the figures to weigh by: a tint is taken as what it is meant to do, and as the same on every material.

    A supplier states one figure for bare faces, and on a higher index, whose bare faces mirror more, the same figure
    would stand for a lighter tint: what is weighed is the tint on an index of 1.5. A tint hides the eye on purpose, so
    for others a tinted lens is weighed as if it were clear. What is shown stays as computed.
    """
    laid = computed.laid
    lightened = {"transmitted": np.ones(len(laid)), "sun": np.ones(len(laid))}
    for k, option in enumerate(laid):
        if option.tint is not None and not option.tint.finished:
            lightened["transmitted"][k] = _lightened(option, option.tint, dark=False)
            lightened["sun"][k] = _lightened(option, option.tint, dark=True)
    found = {key: values / lightened.get(key, 1.0) for key, values in figures.items()}
    tinted = np.array([option.tint is not None for option in laid])
    clear = _seen_by_others(computed, 1.0 - computed.light.first_pass_loss)
    return found | {"seen-by-others": np.where(tinted, clear, figures["seen-by-others"])}


def _seen_by_others(computed: WholeRange, transmittance: Floats) -> Floats:
    return observer_contrast(
        computed.light.whole_lens,
        transmittance=np.maximum(transmittance, 1e-9),
        window_luminance_cd_m2=WINDOW_CD_M2,
        face_luminance_cd_m2=FACE_CD_M2,
    )


def _lightened(option: Laid, tint: Tint, *, dark: bool) -> float:
    """Return how much lighter a tint is taken to be on this material than on an index of 1.5."""
    here = internal_transmittance(option.front_face, option.back_face, tint, dark=dark)
    there = internal_transmittance(PLAIN, PLAIN, tint, dark=dark)
    return 1.0 if here is None or there is None else here / there


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
    return _worst(behind_by_scene(computed))


def behind_by_scene(computed: WholeRange) -> Floats:
    """Return the contrast of the worst ghost of lights behind in each scene, (option, scene)."""
    ghosts = computed.ghosts
    contrast = np.where(ghosts.applies & FROM_BEHIND, ghosts.relaxed.contrast, 0.0)
    return np.asarray(contrast.max(axis=(1, 3)))


def _worst(by_ghost: Floats) -> Floats:
    flat = by_ghost.reshape(len(by_ghost), -1)
    return flat.max(axis=-1) if flat.shape[-1] else np.zeros(len(by_ghost))


def care_burden(case: Case, option: Laid) -> float:
    """Return a count of what would harm this lens in this life, or show on it (a modelling choice).

    Heat and sprays harm a film, salt and chlorine half as much, for they can be rinsed off, and half of that on a top
    that repels water; a film on one face only counts half. Dust scratches a film and a hard coat half as much as bare
    resin; heat harms a material that softens once more, and sprays or solvents one that they craze; smears show on a
    film, half as much on one that repels oil. Each counts whole where the answer is "often", half where it is
    "sometimes"; a question not asked counts nothing.
    """
    burden = {exposure: SHARE.get(case.life(exposure), 0.0) for exposure in (*EXPOSURES, "bothered_smears")}
    faces = ((option.front_face, option.front), (option.back_face, option.back))
    total = burden["dust"] * max(_scratches(face, option) for face, _ in faces)
    for face, coating in faces:
        if face.has_film:
            salt = burden["water_salt_chlorine"] * _salt(coating)
            total += HALF * (burden["heat_steam"] + burden["sprays_solvents"] + salt)
    total += burden["bothered_smears"] * max(_smears(face, coating) for face, coating in faces)
    if CAUTIONS["heat-soft-material"](case, option, UNKNOWN.light) is not None:
        total += burden["heat_steam"]
    if CAUTIONS["solvent-soft-material"](case, option, UNKNOWN.light) is not None:
        total += burden["sprays_solvents"]
    return total


def harms(case: Case) -> tuple[str, ...]:
    """Return the questions of this life that bear on care."""
    return tuple(question for question in (*EXPOSURES, "bothered_smears") if case.life(question) in SHARE)


def _scratches(face: Face, option: Laid) -> float:
    hard = face.has_film or face.coating.hard_coat is not None or option.material.hard_coat in ("always", "none")
    return HALF if hard else WHOLE


def _salt(coating: Coating) -> float:
    return HALF * HALF if coating.top is not None and coating.top.water_repellent else HALF


def _smears(face: Face, coating: Coating) -> float:
    if not face.has_film:
        return 0.0
    return HALF if coating.top is not None and coating.top.oil_repellent else WHOLE
