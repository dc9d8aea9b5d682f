"""What the lens form has to say of an option: why it cannot be made, the nearest that can, and what to watch."""

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import replace

import numpy as np

from advisor.counsel.case import Case
from advisor.counsel.form import LensForms, centred_rims, powers_of, shape_of
from advisor.counsel.laid_out import Laid, Refused, not_sold
from advisor.counsel.phrases import Figure, Phrase
from advisor.counsel.prescription import EYES
from advisor.counsel.stock_items import Material
from advisor.optics.thickness import Refusal
from advisor.optics.tilt import martin_tilt

TILT_CHANGE_FROM_D = 0.12  # half a quarter-dioptre step
CODES = {
    Refusal.FRONT_SURFACE: "front-surface",
    Refusal.BACK_SURFACE: "back-surface",
    Refusal.TOO_THICK: "too-thick",
    Refusal.TOO_THIN: "too-thin",
}


def with_form_findings(case: Case, laid: Sequence[Laid], forms: LensForms) -> list[Laid]:
    """Return the options with their refusals and notes of form added."""
    return [
        replace(
            option,
            refused=(*option.refused, *_refusals(case, option, forms)),
            notes=(*option.notes, *_notes(case, option, forms)),
        )
        for option in laid
    ]


def _refusals(case: Case, option: Laid, forms: LensForms) -> Iterator[Refused]:
    k = option.index
    name = option.material.label or option.material.key
    for e, eye in enumerate(EYES):
        code = Refusal(int(forms.shape.refusal[k, e]))
        if code == Refusal.NONE:
            continue
        figures: dict[str, Figure] = {"material": name, "eye": eye}
        if code == Refusal.TOO_THIN:
            least = float(forms.shape.rule_centre_mm[k].max())  # one that serves both eyes
            yield Refused(Phrase(CODES[code], figures | {"centre_mm": least}), {"centre_mm": least})
        else:
            yield Refused(Phrase(CODES[code], figures), _nearest_form(case, option, forms))
        break
    sold = (option.offer.blank_diameters_mm if option.offer else None) or option.material.blank_diameters_mm
    needed = float(forms.blank_mm[k].max())
    if sold and max(sold) < needed:
        figures = {"material": name, "blank_mm": needed, "largest_mm": max(sold)}
        yield Refused(Phrase("blank-too-small", figures), _nearest_blank(case, option, needed))


def _nearest_form(case: Case, option: Laid, forms: LensForms) -> Mapping[str, Figure] | None:
    """Return the material nearest in index that is sold for this pair and whose lens can be made by the rule.

    Its front curve is named where one serves both eyes.
    """
    needed = float(forms.blank_mm[option.index].max())
    materials = [
        material
        for material in case.stock.material
        if _large_enough(material, needed) and not not_sold(case, case.stock, material, option.tint, option.powers)
    ]
    asked = option.option.model_copy(update={"front_power_d": None, "centre_mm": None})
    tried = [replace(option, index=k, material=material, option=asked) for k, material in enumerate(materials)]
    if not tried:
        return None
    shape = shape_of(case, tried, powers_of(case, tried), centred_rims(case, tried))
    made = [k for k in range(len(tried)) if np.all(shape.refusal[k] == Refusal.NONE)]
    if not made:
        return None
    best = min(made, key=lambda k: abs(materials[k].index - option.material.index))
    right, left = (float(power) for power in shape.front_power_d[best])
    return {"material": materials[best].key} | ({"front_power_d": right} if right == left else {})


def _large_enough(material: Material, needed_mm: float) -> bool:
    return not material.blank_diameters_mm or max(material.blank_diameters_mm) >= needed_mm


def _nearest_blank(case: Case, option: Laid, needed_mm: float) -> Mapping[str, Figure] | None:
    large = [material for material in case.stock.material if _large_enough(material, needed_mm)]
    if not large:
        return None
    return {"material": min(large, key=lambda m: abs(m.index - option.material.index)).key}


def _notes(case: Case, option: Laid, forms: LensForms) -> Iterator[Phrase]:
    k, shape = option.index, forms.shape
    if shape.below_least_centre[k].any():
        yield Phrase("centre-below-limit", {"centre_mm": float(shape.centre_mm[k].min())})
    if shape.below_least_edge[k].any():
        yield Phrase("edge-below-limit", {"edge_mm": float(shape.thinnest_mm[k].min())})
    if option.option.front_power_d is not None:
        yield Phrase("front-given")
    if option.design.form == "aspheric":
        yield Phrase("shown-as-spherical")
    if not forms.rim.encloses_centre[k].all():
        yield Phrase("centre-outside-rim")
    yield from _turned(case, option, index=float(forms.powers.index[k, 0]))


def _turned(case: Case, option: Laid, *, index: float) -> Iterator[Phrase]:
    """Tell what tilt (about a level axis) and wrap (about an upright one) do to the stronger lens, by Martin's rule."""
    means = [power.sphere_d + power.cylinder_d / 2.0 for power in option.powers]
    worst = max(range(len(EYES)), key=lambda e: abs(means[e]))
    for code, name, turn_deg, axis in (
        ("tilt-changes-power", "tilt_deg", case.tilt_deg, 180),
        ("wrap-changes-power", "wrap_deg", case.wrap_deg, 90),
    ):
        sphere, cylinder = martin_tilt(means[worst], tilt_deg=turn_deg, index=index)
        change_d = float(sphere) - means[worst]
        if max(abs(change_d), abs(float(cylinder))) >= TILT_CHANGE_FROM_D:
            figures: dict[str, Figure] = {name: turn_deg, "change_d": change_d, "cylinder_d": float(cylinder)}
            yield Phrase(code, figures | {"axis": axis, "eye": EYES[worst]})
