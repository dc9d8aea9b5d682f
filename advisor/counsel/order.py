"""The order: what the supplier must know, and why it is not ready while something is missing.

Nothing on an order may be a guess: a figure that a default stands in for, or a safety question that was never asked,
holds it back. So does every condition of ``data/musts.toml`` that the chosen pair breaks and no refusal on file lifts.
"""

import math
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass

from advisor.counsel.case import VERTEX_MATTERS_FROM_D, Case
from advisor.counsel.compare import Computed, lens_light
from advisor.counsel.form import least_centre_mm
from advisor.counsel.laid_out import REFUSAL_TEXTS
from advisor.counsel.musts import Finished, broken_by, must_texts, musts
from advisor.counsel.phrases import Phrase, Translator, mark, say
from advisor.counsel.prescription import EYES, Eye, SphereCylinder, written_prism
from advisor.counsel.reach import near_only
from advisor.errors import TwolightError
from advisor.optics.thickness import LEAST_EDGE_MM

SAFETY_QUESTIONS = ("impact", "one_good_eye", "driving")

REASONS: dict[str, str] = {
    "missing-pd": mark("The PD of the %(eye)s eye is a default; measure it."),
    "missing-height": mark("The fitting height of the %(eye)s eye is a default; measure it."),
    "missing-rim": mark("The kind of rim is not given."),
    "missing-box": mark("The box of the frame (a, b, DBL) is not given in full."),
    "missing-tested-vertex": mark(
        "The power reaches 5.00 and the tested vertex distance is not given; ask the prescriber."
    ),
    "missing-fitted-vertex": mark("The power reaches 5.00 and the fitted vertex distance is not measured."),
    "not-asked-impact": mark("Nobody asked whether anything could knock the glasses."),
    "not-asked-one_good_eye": mark("Nobody asked whether one eye is much weaker."),
    "not-asked-driving": mark("Nobody asked whether the wearer drives."),
    "not-asked-child": mark("Neither the age nor whether the wearer is a child is known."),
    "nothing-chosen": mark("No option is marked as to be ordered."),
    "refused": mark("This option cannot be made: %(reason)s"),
}
IF_DECLINED = mark("Choose another pair, or record who turned this down.")
IF_FOR_LESS = mark("Choose another pair, or say what this one is for.")
OF_THE_PURPOSE = ("no-far", "near-alone", "no-near")
EYE_WORDS: Mapping[Eye, str] = {"right": mark("right"), "left": mark("left")}


class NotReady(TwolightError):
    """An order that must wait, with every reason."""

    def __init__(self, reasons: Sequence[Phrase], *, translator: Translator) -> None:
        self.reasons = tuple(reasons)
        self.lines = [_line(reason, translator) for reason in reasons]
        head = translator.gettext(mark("Not ready to order:"))
        super().__init__("\n".join([head, *(f"- {line}" for line in self.lines)]))


def _line(reason: Phrase, translator: Translator) -> str:
    """Return a reason as a sentence; what a wearer may turn down says so."""
    line = say(reason, REASONS | must_texts(), translator)
    liftable = any(must.key == reason.code and must.lifted_by for must in musts())
    hint = IF_DECLINED if liftable else IF_FOR_LESS if reason.code in OF_THE_PURPOSE else ""
    return f"{line} {translator.gettext(hint)}" if hint else line


@dataclass(frozen=True)
class EyeOrder:
    """One lens as ordered. Powers in D, lengths in mm; ``least_thickness_mm`` is the material's least centre."""

    eye: Eye
    written: SphereCylinder
    add_d: float | None
    made: SphereCylinder
    prism: tuple[tuple[float, str], ...]
    balance: bool
    pd_mm: float
    near_pd_mm: float | None
    height_mm: float
    centre_mm: float


@dataclass(frozen=True)
class Order:
    """Everything on the slip."""

    eyes: tuple[EyeOrder, EyeOrder]
    least_centre_mm: float | None
    least_edge_mm: float


def missing(computed: Computed, *, index: int | None = None) -> list[Phrase]:
    """Return every reason why nothing of this visit can be ordered yet; of one option, every must it breaks as well."""
    found = [*_missing_figures(computed.case), *_missing_answers(computed.case)]
    if index is not None and not computed.laid[index].refused:
        found += broken_by(computed.case, computed.laid[index], finished_pair(computed, index))
    return found


def finished_pair(computed: Computed, index: int) -> Finished:
    """Return what the conditions need to know of one option as it would be made."""
    return Finished(lens_light(computed, index), float(computed.forms.shape.centre_mm[index].min()))


def _missing_figures(case: Case) -> Iterable[Phrase]:
    used = case.defaults_used
    for eye in EYES:
        if f"fitting.{eye}.pd_mm" in used:
            yield Phrase("missing-pd", {"eye": EYE_WORDS[eye]})
    for eye in EYES:
        if f"fitting.{eye}.height_mm" in used:
            yield Phrase("missing-height", {"eye": EYE_WORDS[eye]})
    if "frame.rim" in used:
        yield Phrase("missing-rim")
    if {"frame.a_mm", "frame.b_mm", "frame.dbl_mm"} & set(used):
        yield Phrase("missing-box")
    if case.strongest_d >= VERTEX_MATTERS_FROM_D:
        if "prescription.vertex_mm" in used:
            yield Phrase("missing-tested-vertex")
        if "fitting.vertex_mm" in used:
            yield Phrase("missing-fitted-vertex")


def _missing_answers(case: Case) -> Iterable[Phrase]:
    for question in SAFETY_QUESTIONS:
        if case.life(question) == "not-asked":
            yield Phrase(f"not-asked-{question}")
    if case.life("child") == "not-asked" and case.youngest_age is None:
        yield Phrase("not-asked-child")


def order_of(computed: Computed, *, index: int, translator: Translator) -> Order:
    """Return the order of one option.

    Raises
    ------
    NotReady
        With every reason, while something needed is missing or the option cannot be made.
    """
    laid = computed.laid[index]
    reasons = missing(computed, index=index)
    reasons += [Phrase("refused", {"reason": say(r.phrase, REFUSAL_TEXTS, translator)}) for r in laid.refused]
    if reasons:
        raise NotReady(reasons, translator=translator)
    case = computed.case
    right, left = (_eye_order(computed, eye, index=index, k=k) for k, eye in enumerate(EYES))
    least = least_centre_mm(case, laid.material)
    return Order(
        eyes=(right, left),
        least_centre_mm=None if math.isnan(least) else least,
        least_edge_mm=LEAST_EDGE_MM[case.rim],
    )


def _eye_order(computed: Computed, eye: Eye, *, index: int, k: int) -> EyeOrder:
    case, made = computed.case, computed.laid[index].powers[k]
    written = case.eye(eye)
    fitting = case.visit.fitting
    side = None if fitting is None else (fitting.right if eye == "right" else fitting.left)
    measured_mm = None if side is None else side.near_pd_mm
    near_alone = near_only(case, computed.laid[index].design)
    return EyeOrder(
        eye=eye,
        written=written.power,
        add_d=written.add,
        made=made,
        prism=tuple(written_prism(written.prism_vector)),
        balance=bool(written.balance),
        pd_mm=float(case.pd_mm[k]),
        near_pd_mm=float(case.near_pd_mm[k]) if near_alone else measured_mm,  # what the lens is centred at
        height_mm=float(case.height_mm[k]),
        centre_mm=float(computed.forms.shape.centre_mm[index, k]),
    )
