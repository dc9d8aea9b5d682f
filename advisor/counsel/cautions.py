"""Which cautions apply to a wearer and a lens: one short function a caution, its words in ``caution_texts.py``.

A question that was not asked is never read as "never". A caution that says what is so of this wearer (one good eye,
knocks, new glare) waits for the answer, and the answer's ``not-asked`` warning lists the question; a caution that only
an answer of "never" could make needless (a tint at night) is shown until that answer is given.

Choices made here, where the rule leaves one: frequent impact is the answer "often"; a balance lens stands for one good
eye unless the wearer says otherwise; a tint is judged by the finished lens, mirrored light and all, so a strongly
mirroring face counts as well; a photochromic lens is judged for the night in its clear state, as nothing darkens it
then, and for the rule "never for driving" in its darkest, as the sun or the cold may bring it there on the road; a
tint whose key or label says grey or brown has no strong colour to ask about, and one that names none may have.
"""

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass

from advisor.counsel.case import OLDER_FROM, VERTEX_MATTERS_FROM_D, Case
from advisor.counsel.faces import blue_turned_away
from advisor.counsel.laid_out import Laid
from advisor.counsel.materials import is_glass, is_polycarbonate, softens_with_heat
from advisor.counsel.phrases import Figure, mark
from advisor.counsel.prescription import EYES, SphereCylinder, power_along_d
from advisor.counsel.reach import near_only

NIGHT_DRIVING_LEAST = 0.75  # ISO 12312-1 as quoted in public guidance
DRIVING_LEAST = 0.08
IMBALANCE_FROM_PRISM_D = 1.0
LARGE_CHANGE_D, LARGE_CHANGE_OLDER_D, LARGE_TURN_DEG = 1.0, 0.75, 10.0
BLUE_FROM = 0.08  # mean reflectance of one face from 400 to 440 nm; a modelling choice
UV_CUT_ENOUGH_NM = 380.0
ONE_EYE_CHANGE_D = 0.5  # one eye changed by so much more than the other; a modelling choice
ROUNDING = 1e-9  # a figure that meets a limit exactly is not beyond it
MULTIFOCAL = ("bifocal", "progressive")
PLAIN_COLOURS = ("grey", "gray", "brown")  # tints that say so in their key or label are no strong colour

Figures = Mapping[str, Figure]
Applies = Callable[[Case, Laid, "LensLight"], Figures | None]
NOTHING: Figures = {}


@dataclass(frozen=True)
class LensLight:
    """What a caution needs to know of the finished lens: luminous transmittance clear and dark, imbalance."""

    transmittance: float
    transmittance_dark: float
    imbalance_prism_d: float


@dataclass(frozen=True)
class Applied:
    """A caution that applies, with its figures."""

    key: str
    figures: Figures


def _when(condition: bool, figures: Figures = NOTHING) -> Figures | None:
    return figures if condition else None


def _has_film(option: Laid) -> bool:
    return option.front_face.has_film or option.back_face.has_film


def _is_tinted(option: Laid) -> bool:
    return option.tint is not None


def _kind(option: Laid) -> str:
    return "" if option.tint is None else option.tint.kind


def _not_eye_protection(_case: Case, _option: Laid, _light: LensLight) -> Figures | None:
    return NOTHING


def _coating_adds_no_strength(_case: Case, option: Laid, _light: LensLight) -> Figures | None:
    return _when(_has_film(option))


def _child(case: Case, _option: Laid, _light: LensLight) -> Figures | None:
    return _when(case.is_child)


def _one_eye(case: Case, _option: Laid, _light: LensLight) -> Figures | None:
    return _when(case.relies_on_one_eye)


def _impact(case: Case, _option: Laid, _light: LensLight) -> Figures | None:
    return _when(case.life("impact") == "often")


def _glass_breaks(_case: Case, option: Laid, _light: LensLight) -> Figures | None:
    return _when(is_glass(option.material))


def _not_for_night_driving_tint(_case: Case, _option: Laid, light: LensLight) -> Figures | None:
    dark = not _below(light.transmittance, DRIVING_LEAST) and _below(light.transmittance, NIGHT_DRIVING_LEAST)
    return _when(dark, {"luminous_percent": shown_percent(light.transmittance)})


def _not_for_driving_tint(_case: Case, _option: Laid, light: LensLight) -> Figures | None:
    darkest = min(light.transmittance, light.transmittance_dark)
    return _when(_below(darkest, DRIVING_LEAST), {"luminous_percent": shown_percent(darkest)})


def _below(value: float, limit: float) -> bool:
    return value < limit - ROUNDING


def shown_percent(fraction: float) -> float:
    """Return a percentage cut to a tenth, so that 74.96 never reads "75.0, below 75"."""
    return math.floor(1000 * fraction + ROUNDING) / 10


def _tint_colour_unknown(_case: Case, option: Laid, _light: LensLight) -> Figures | None:
    if option.tint is None:
        return None
    called = f"{option.tint.key} {option.tint.label or ''}".lower()
    return _when(not any(colour in called for colour in PLAIN_COLOURS))


def _uv_not_darkness(_case: Case, option: Laid, _light: LensLight) -> Figures | None:
    cut = option.material.uv_cut_nm
    stated = option.tint is not None and option.tint.uv_filter is True
    return _when(
        _is_tinted(option) and not stated and (cut is None or cut < UV_CUT_ENOUGH_NM),
        {"uv_cut_nm": cut},
    )


def _night_tint_no_benefit(case: Case, option: Laid, _light: LensLight) -> Figures | None:
    return _when(_is_tinted(option) and case.life("night_driving") != "never")


def _photochromic(_case: Case, option: Laid, _light: LensLight) -> Figures | None:
    return _when(_kind(option) == "photochromic")


def _polarising(_case: Case, option: Laid, _light: LensLight) -> Figures | None:
    return _when(_kind(option) == "polarising")


def _not_for_driving_design(case: Case, option: Laid, _light: LensLight) -> Figures | None:
    return _when(near_only(case, option.design))


def _no_near(case: Case, option: Laid, _light: LensLight) -> Figures | None:
    return _when(case.has_add and option.design.kind == "single-vision")


def _near_imbalance(case: Case, option: Laid, light: LensLight) -> Figures | None:
    concerned = case.has_add or case.life("first_multifocal") == "yes" or one_eye_changed(case)
    enough = not _below(light.imbalance_prism_d, IMBALANCE_FROM_PRISM_D)
    return _when(
        concerned and enough and not near_only(case, option.design) and not case.has_balance,
        {"imbalance_prism_d": light.imbalance_prism_d},
    )


def one_eye_changed(case: Case) -> bool:
    """Whether the vertical power of one eye changed more than the other's against the worn pair."""
    worn = case.visit.worn_now
    if worn is None or worn.prescription is None:
        return False
    then = (worn.prescription.right.power, worn.prescription.left.power)
    right, left = (_along(case.eye(eye).power, 90) - _along(old, 90) for eye, old in zip(EYES, then, strict=True))
    return not _below(abs(right - left), ONE_EYE_CHANGE_D)


def _height_too_low(case: Case, option: Laid, _light: LensLight) -> Figures | None:
    least = option.design.least_height_mm
    # half of a measured box is a figure to warn by, half of the default box is not
    known = [
        float(height)
        for eye, height in zip(EYES, case.height_mm, strict=True)
        if not (case.is_default(f"fitting.{eye}.height_mm") and case.is_default("frame.b_mm"))
    ]
    if least is None or not known:
        return None
    return _when(_below(min(known), least), {"height_mm": min(known), "least_height_mm": least})


def _decentred_outwards(case: Case, _option: Laid, _light: LensLight) -> Figures | None:
    if case.is_default("frame.a_mm") or case.is_default("frame.dbl_mm"):
        return None
    measured = [
        float(pd) for eye, pd in zip(EYES, case.pd_mm, strict=True) if not case.is_default(f"fitting.{eye}.pd_mm")
    ]
    outward = max(measured, default=0.0) - (case.a_mm + case.dbl_mm) / 2
    return _when(outward > ROUNDING, {"outward_mm": outward})


def _drilled(case: Case, _option: Laid, _light: LensLight) -> Figures | None:
    return _when(case.rim == "drilled")


def _heat_soft(_case: Case, option: Laid, _light: LensLight) -> Figures | None:
    return _when(softens_with_heat(option.material))


def _solvents(case: Case, option: Laid, _light: LensLight) -> Figures | None:
    return _when(is_polycarbonate(option.material) and case.says("sprays_solvents"))


def _no_power(case: Case, _option: Laid, _light: LensLight) -> Figures | None:
    eyes = [case.eye(eye) for eye in EYES]
    none = not any(eye.sphere or eye.cylinder or eye.add for eye in eyes)
    return _when(none and not any(part.amount for eye in eyes for part in eye.prism or ()))


def _vertex_missing(case: Case, _option: Laid, _light: LensLight) -> Figures | None:
    return _when(case.visit.prescription.vertex_mm is None and case.strongest_d >= VERTEX_MATTERS_FROM_D)


def _vertex_differs(case: Case, _option: Laid, _light: LensLight) -> Figures | None:
    tested = case.visit.prescription.vertex_mm is not None
    differs = tested and case.tested_vertex_mm != case.fitted_vertex_mm and case.strongest_d >= VERTEX_MATTERS_FROM_D
    return _when(differs, {"fitted_mm": case.fitted_vertex_mm, "tested_mm": case.tested_vertex_mm})


def _rx_old(case: Case, _option: Laid, _light: LensLight) -> Figures | None:
    written = case.visit.prescription.written
    if written is None:
        return None
    limit = (case.date.year - 2, case.date.month, case.date.day)
    return _when((written.year, written.month, written.day) < limit)


def _unequal_add(case: Case, _option: Laid, _light: LensLight) -> Figures | None:
    right, left = (case.eye(eye).add or 0.0 for eye in EYES)
    return _when(right != left and not case.has_balance)


def _add_for_age(case: Case, _option: Laid, _light: LensLight) -> Figures | None:
    if case.is_default("wearer.birth_year"):
        return None
    early = case.has_add and case.age_years < 35
    late = not case.has_add and case.age_years > 45 and case.visit.prescription.for_ in (None, "all")
    return _when(early or late)


def power_change(case: Case) -> tuple[float, float] | None:
    """Return the greatest change of power along any meridian (D) and of axis (degrees) against the worn pair."""
    worn = case.visit.worn_now
    if worn is None or worn.prescription is None:
        return None
    change, turn = 0.0, 0.0
    for eye in EYES:
        now = case.eye(eye).power
        then = (worn.prescription.right if eye == "right" else worn.prescription.left).power
        along = range(0, 180, 5)
        change = max(change, *(abs(_along(now, angle) - _along(then, angle)) for angle in along))
        if min(abs(now.cylinder_d), abs(then.cylinder_d)) >= 0.5:
            apart = abs(now.axis_deg - then.axis_deg) % 180
            turn = max(turn, min(apart, 180 - apart))
    return change, turn


def _along(power: SphereCylinder, angle: int) -> float:
    return power_along_d(power, meridian_deg=float(angle))


def is_unsteady(case: Case) -> bool:
    """Whether the wearer is older or has said that falls happen."""
    return case.age_years >= OLDER_FROM or case.life("falls") == "yes"


def _large_change(case: Case, _option: Laid, _light: LensLight) -> Figures | None:
    changed = power_change(case)
    if changed is None:
        return None
    limit = LARGE_CHANGE_OLDER_D if is_unsteady(case) else LARGE_CHANGE_D
    figures: dict[str, Figure] = {}  # what is not changed by much is not told
    if changed[0] > limit + ROUNDING:
        figures["changed_by_d"] = changed[0]
    if changed[1] > LARGE_TURN_DEG + ROUNDING:
        figures["turn_deg"] = changed[1]
    return _when(bool(figures), figures)


def _restricted_supply(case: Case, _option: Laid, _light: LensLight) -> Figures | None:
    return _when(case.stock.shop.region == "uk" and case.is_child)


UNSTEADY, LOOKING_DOWN = mark("Older or unsteady wearers"), mark("Near power below")


def _steps(case: Case, option: Laid, _light: LensLight) -> Figures | None:
    unsteady = is_unsteady(case)
    return _when(unsteady or option.design.kind in MULTIFOCAL, {"why": UNSTEADY if unsteady else LOOKING_DOWN})


def _not_promise_none(_case: Case, option: Laid, _light: LensLight) -> Figures | None:
    return _when(_has_film(option))


def _new_glare(case: Case, _option: Laid, _light: LensLight) -> Figures | None:
    return _when(case.life("new_glare") == "yes")


def _blue_film(_case: Case, option: Laid, _light: LensLight) -> Figures | None:
    most = max(blue_turned_away(face) for face in (option.front_face, option.back_face))
    return _when(_has_film(option) and most >= BLUE_FROM, {"blue_percent": 100 * most})


CAUTIONS: Mapping[str, Applies] = {
    "new-glare-exam": _new_glare,
    "child": _child,
    "one-eye": _one_eye,
    "impact": _impact,
    "glass-breaks": _glass_breaks,
    "not-for-driving-tint": _not_for_driving_tint,
    "not-for-night-driving-tint": _not_for_night_driving_tint,
    "not-for-driving-design": _not_for_driving_design,
    "no-near": _no_near,
    "no-power": _no_power,
    "rx-old": _rx_old,
    "vertex-missing": _vertex_missing,
    "vertex-differs": _vertex_differs,
    "add-for-age": _add_for_age,
    "unequal-add": _unequal_add,
    "large-change": _large_change,
    "near-vertical-imbalance": _near_imbalance,
    "fitting-height-too-low": _height_too_low,
    "decentred-outwards": _decentred_outwards,
    "steps": _steps,
    "drilled-caution": _drilled,
    "heat-soft-material": _heat_soft,
    "solvent-soft-material": _solvents,
    "uv-not-darkness": _uv_not_darkness,
    "night-tint-no-benefit": _night_tint_no_benefit,
    "photochromic-windscreen": _photochromic,
    "polarising": _polarising,
    "tint-colour-unknown": _tint_colour_unknown,
    "blue-film-no-relief": _blue_film,
    "not-promise-none": _not_promise_none,
    "coating-adds-no-strength": _coating_adds_no_strength,
    "restricted-supply": _restricted_supply,
    "not-eye-protection": _not_eye_protection,
}


def cautions_for(case: Case, option: Laid, *, light: LensLight) -> list[Applied]:
    """Return the cautions that apply to this wearer in this lens, the gravest first."""
    found = ((key, applies(case, option, light)) for key, applies in CAUTIONS.items())
    return [Applied(key, figures) for key, figures in found if figures is not None]
