"""The comparison: arrays with named axes until the edge, where the answer is made."""

import datetime as dt
from collections.abc import Sequence
from dataclasses import dataclass, replace
from functools import cached_property
from typing import Any

from advisor import __version__
from advisor.counsel.advice_answer import advice_content
from advisor.counsel.advise import Counsel, advise
from advisor.counsel.answer import Figures, caution, notice, number, option_answer
from advisor.counsel.case import Case, build_case
from advisor.counsel.cautions import CAUTIONS, LensLight, cautions_for
from advisor.counsel.comparison import Comparison
from advisor.counsel.faults import Faults
from advisor.counsel.form import LensForms, forms_of
from advisor.counsel.form_findings import with_form_findings
from advisor.counsel.ghosts import GhostFigures, figures_of
from advisor.counsel.laid_out import Laid, Refused, lay_out, options_of, without_film
from advisor.counsel.light import Light, light_of
from advisor.counsel.limits import coatings_that_reach, limits_of
from advisor.counsel.phrases import Figure, Phrase, Translator, mark
from advisor.counsel.prescription import EYES
from advisor.counsel.stock import Range
from advisor.counsel.stock_items import Tint
from advisor.counsel.visit import DailyLife, Visit
from advisor.counsel.visit_checks import WARNING_TEXTS, age_faults, prescription_warnings, visit_faults
from advisor.counsel.words import WORD_TEXTS
from advisor.counsel.worn import WornPair, magnification_change_percent, worn_forms, worn_pair
from advisor.counsel.worn_answer import worn_answer
from advisor.optics import prism

Content = dict[str, Any]

OWN_WARNINGS: dict[str, str] = {
    "not-asked": mark("Not asked, and not taken as “never”: %(question_names)s."),
    "defaults-used": mark("Defaults, not measurements: %(field_names)s."),
}


@dataclass(frozen=True)
class Computed:
    """Everything computed for a visit, before it becomes the answer: the case, its options and their arrays."""

    case: Case
    laid: tuple[Laid, ...]
    light: Light
    uncoated: Light
    forms: LensForms
    ghosts: GhostFigures
    vertical_imbalance_prism_d: float

    @cached_property
    def worn_pair(self) -> WornPair | None:
        """The pair worn now as far as it is known; never one of the options."""
        return worn_pair(self.case, first=self.laid[0])

    @cached_property
    def worn_now(self) -> "Computed | None":
        """The worn pair worked out as the options are, for its own prescription; None without its material."""
        pair = self.worn_pair
        return None if pair is None or pair.laid is None else _worked_out(pair.case, [pair.laid])


def compute(visit: Visit, stock: Range, *, today: dt.date | None = None, file: str = "") -> Computed:
    """Work out a visit as arrays.

    Raises
    ------
    Faults
        If the visit names what the range does not hold, or the wearer has an age that nobody has.
    """
    today = today or dt.date.today()
    faults = visit_faults(visit, stock=stock, file=file) + age_faults(visit, today=today, file=file)
    if faults:
        raise Faults(faults)
    case = build_case(visit, stock, today=today)
    found = _worked_out(case, lay_out(case))
    laid = with_form_findings(case, _with_tint_refusals(found.laid, found.light), found.forms)
    return replace(found, laid=tuple(laid))


def _worked_out(case: Case, laid: Sequence[Laid]) -> Computed:
    light = light_of(laid, case.scenes)
    forms = forms_of(case, laid)
    return Computed(
        case=case,
        laid=tuple(laid),
        light=light,
        forms=forms,
        ghosts=figures_of(case, laid, forms=forms, light=light),
        uncoated=light_of([without_film(option, case.stock) for option in laid], ()),  # no scene asks for it
        vertical_imbalance_prism_d=vertical_imbalance(case),
    )


def vertical_imbalance(case: Case) -> float:
    """Return the prism between the eyes 10 mm below the centres: difference of vertical powers x 1 cm (Prentice)."""
    powers = [case.compensated(eye) for eye in EYES]
    return float(
        prism.vertical_imbalance(
            [power.sphere_d for power in powers],
            cylinder_d=[power.cylinder_d for power in powers],
            axis_deg=[power.axis_deg for power in powers],
        )
    )


def _with_tint_refusals(laid: Sequence[Laid], light: Light) -> list[Laid]:
    found = []
    for option, fits in zip(laid, light.tint_fits, strict=True):
        if fits or option.tint is None:
            found.append(option)
            continue
        figures: dict[str, Figure] = {
            "luminous_percent": 100 * lightest(option.tint),
            "material": option.material.label or option.material.key,
        }
        code = "tint-out-of-reach" if option.tint.finished else "tint-too-light"
        found.append(replace(option, refused=(*option.refused, Refused(Phrase(code, figures)))))
    return found


def lightest(tint: Tint) -> float:
    """Return the greater of a tint's two figures: the one that can be out of reach."""
    return max(tint.luminous_transmittance, tint.luminous_transmittance_dark or 0.0)


def warnings_of(case: Case) -> list[Phrase]:
    """Return what should be looked at again: slips of the pen, questions not asked, defaults used."""
    found = prescription_warnings(case.visit)
    asked = case.visit.daily_life
    not_asked = asked.not_asked() if asked is not None else tuple(_all_questions())
    if not_asked:
        found.append(Phrase("not-asked", {"question_names": ", ".join(not_asked)}))
    if case.defaults_used:
        found.append(Phrase("defaults-used", {"field_names": ", ".join(case.defaults_used)}))
    return found


def _all_questions() -> Sequence[str]:
    return tuple(DailyLife.model_fields)


def lens_light(computed: Computed, index: int) -> LensLight:
    """Return what the cautions need to know of one option's finished lens."""
    return LensLight(
        transmittance=float(computed.light.transmittance[index]),
        transmittance_dark=float(computed.light.transmittance_dark[index]),
        imbalance_prism_d=computed.vertical_imbalance_prism_d,
    )


def advice_of(computed: Computed) -> Counsel:
    """Return the advice for a visit that has been worked out, before it is put in words."""
    return advise(computed.case, computed.laid, imbalance_prism_d=computed.vertical_imbalance_prism_d)


def _cautions(computed: Computed, translator: Translator) -> list[Content]:
    """Return every caution that applies to some option, the gravest first, with the options it applies to."""
    found: dict[str, Content] = {}
    order = list(CAUTIONS)
    for option in computed.laid:
        for applied in cautions_for(computed.case, option, light=lens_light(computed, option.index)):
            entry = found.setdefault(applied.key, caution(applied, translator) | {"options": []})
            entry["options"].append(option.index)
    return sorted(found.values(), key=lambda entry: order.index(entry["key"]))


def figures_of_answer(computed: Computed, *, worn: LensForms | None = None) -> Figures:
    """Return the arrays that an answer is read from; ``worn`` is what sizes are compared with."""
    return Figures(
        light=computed.light,
        uncoated=computed.uncoated,
        forms=computed.forms,
        ghosts=computed.ghosts,
        scenes=computed.case.scenes,
        size_change_percent=magnification_change_percent(computed.forms, worn),
    )


def _worn_forms(computed: Computed, *, beside: bool) -> LensForms | None:
    """Return the form of the worn pair in the design of the first option: the one laid out beside, where it is."""
    pair, design = computed.worn_pair, computed.laid[0].design.key
    has_power = pair is not None and pair.worn.prescription is not None
    worn = computed.worn_now if beside and has_power else None
    if worn is not None and worn.laid[0].design.key == design:
        return worn.forms
    return worn_forms(computed.case, design=design)


def _worn_answer(computed: Computed, translator: Translator) -> dict[str, Content]:
    """Return the worn pair under its key, or no key where nothing of it is known."""
    pair, worn = computed.worn_pair, computed.worn_now
    if pair is None:
        return {}
    figures = None if worn is None else figures_of_answer(worn)
    return {"worn_now": worn_answer(pair, figures=figures, translator=translator)}


def answer_of(
    computed: Computed, *, translator: Translator, with_advice: bool = True, with_worn_now: bool = True
) -> Comparison:
    """Turn computed arrays into the answer, in the translator's language."""
    case = computed.case
    texts = WARNING_TEXTS | OWN_WARNINGS | WORD_TEXTS
    used = [*case.defaults_used, *(name for option in computed.laid for name in option.defaults_used)]
    if options_of(case)[1]:
        used.append("options")
    figures = figures_of_answer(computed, worn=_worn_forms(computed, beside=with_worn_now))
    content: Content = {
        "format": "twolight-comparison-1",
        "twolight": __version__,
        "defaults_used": used,
        "warnings": [notice(phrase, texts, translator) for phrase in warnings_of(case)],
        "options": [option_answer(option, figures=figures, translator=translator) for option in computed.laid],
        "vertical_imbalance_prism_d": computed.vertical_imbalance_prism_d,
    }
    if with_worn_now:
        content |= _worn_answer(computed, translator)
    if case.visit.reference is not None:
        content["reference"] = case.visit.reference
    if with_advice:
        content["advice"] = advice_content(advice_of(computed), translator=translator)
        content["advice"]["cautions"] = _cautions(computed, translator)
        _add_limits(content["options"], computed)
    return Comparison.model_validate(content)


def _add_limits(options: list[Content], computed: Computed) -> None:
    """Put the reflectance limit into every option that can be made; it is solved only where advice is wanted."""
    case = computed.case
    limits = limits_of(case, computed.laid, forms=computed.forms)
    if limits is None:
        return
    reached = coatings_that_reach(case, computed.laid, forms=computed.forms)
    for k, option in enumerate(options):
        if option["refused"]:
            continue
        option["reflectance_limit"] = {
            "not_noticed": number(limits.not_noticed[k]),
            "at_the_limit": number(limits.at_the_limit[k]),
            "scene": limits.scenes[int(limits.scene[k])].key,
            "reached_by": reached[k],
        }


def compare(
    visit: Visit,
    stock: Range,
    *,
    translator: Translator,
    with_advice: bool = True,
    today: dt.date | None = None,
    file: str = "",
) -> Comparison:
    """Compare the options of a visit: the call behind the page, the command and the sheets.

    Raises
    ------
    Faults
        If the visit names what the range does not hold.
    """
    return answer_of(compute(visit, stock, today=today, file=file), translator=translator, with_advice=with_advice)
