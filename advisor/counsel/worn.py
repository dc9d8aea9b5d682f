"""The pair the wearer came in with: worked out like an option, and what the new pair is compared with.

It is worked out at its own prescription where that is on file, else at today's; in its own fitting, else in today's; as
single vision, since its design is not kept; and in the present frame's shape, since the old frame's is not kept.
Nothing is guessed: without its material nothing is worked out, without its coating nothing of light, and what is
missing is said.
"""

from dataclasses import dataclass, replace
from typing import TypeVar

import numpy as np
from numpy.typing import NDArray

from advisor.counsel.case import Case, build_case
from advisor.counsel.choices import Option
from advisor.counsel.faces import known_coating
from advisor.counsel.form import LensForms, forms_of
from advisor.counsel.laid_out import Laid, lay_out_options
from advisor.counsel.phrases import mark
from advisor.counsel.stock_items import Coating, Design, Item
from advisor.counsel.visit import WornNow

K = TypeVar("K", bound=Item)

SINGLE_VISION = Design(key="single-vision", kind="single-vision")
NOT_KNOWN = Coating(key="not-known", label=mark("not known"), layers=())
OF_THE_LENS = ("hard-coat-assumed", "estimated-spectrum", "measured-straight-on")  # notes that no shop has a part in


@dataclass(frozen=True)
class WornPair:
    """What is known of the worn pair: the visit as it was for that pair, and the pair laid out for it, unpriced.

    ``laid`` is None where the material is not known. ``mirrors`` tells whether what its faces mirror can be worked out.
    """

    worn: WornNow
    case: Case
    laid: Laid | None = None
    mirrors: bool = False


def worn_pair(case: Case, *, first: Laid) -> WornPair | None:
    """Return the worn pair, or None where neither its material nor its coating is known; ``first`` is an option."""
    worn = case.visit.worn_now
    if worn is None or (worn.material is None and worn.coating is None):
        return None
    if worn.material is None:
        return WornPair(worn, case)
    then = as_worn(case, worn)
    design = _single_vision(then, first)
    if design is SINGLE_VISION:  # the shop sells none
        stock = then.stock.model_copy(update={"design": (design, *then.stock.design)})
        then = replace(then, stock=stock)
    laid = _laid(then, worn, design=design.key)
    mirrors = worn.coating is not None and all(
        known_coating(laid.material, face) is face for face in (laid.front, laid.back)
    )
    return WornPair(worn, then if mirrors else replace(then, scenes=()), _not_for_sale(laid, worn), mirrors)


def as_worn(case: Case, worn: WornNow) -> Case:
    """Return the case with the worn pair's own prescription and fitting, as far as they are on file."""
    own = {"prescription": worn.prescription, "fitting": worn.fitting}
    kept = {name: part for name, part in own.items() if part is not None}
    return build_case(case.visit.model_copy(update=kept), case.stock, today=case.date) if kept else case


def _single_vision(case: Case, first: Laid) -> Design:
    sold = [design for design in (first.design, *case.stock.design) if design.kind == "single-vision"]
    return sold[0] if sold else SINGLE_VISION


def _laid(then: Case, worn: WornNow, *, design: str) -> Laid:
    option = Option(design=design, material=worn.material, coating=worn.coating, front_power_d=worn.front_power_d)
    return lay_out_options(then, [option])[0]


def _not_for_sale(laid: Laid, worn: WornNow) -> Laid:
    """Return a pair without price, without what the shop would refuse, and with notes of the lens itself alone."""
    coated = worn.coating is not None
    return replace(
        laid,
        design=_unpriced(laid.design),
        material=_unpriced(laid.material),
        front=_unpriced(laid.front) if coated else NOT_KNOWN,
        back=_unpriced(laid.back) if coated else NOT_KNOWN,
        price=None,
        refused=(),
        notes=tuple(note for note in laid.notes if coated and note.code in OF_THE_LENS),
    )


def _unpriced(item: K) -> K:
    return item.model_copy(update={"price": None})


def worn_forms(case: Case, *, design: str) -> LensForms | None:
    """Return the form of the worn pair in one design, (1, eye), or None where its material or power is not on file."""
    worn = case.visit.worn_now
    if worn is None or worn.material is None or worn.prescription is None:
        return None
    then = replace(as_worn(case, worn), scenes=())
    return forms_of(then, [_laid(then, worn, design=design)])


def magnification_change_percent(forms: LensForms, worn: LensForms | None) -> NDArray[np.float64]:
    """Return by how many per cent things look larger than in the worn pair, (option, eye); NaN if unknown."""
    now = 100.0 + forms.magnification_percent
    if worn is None:
        return np.full_like(now, np.nan)
    return np.asarray(100.0 * (now / (100.0 + worn.magnification_percent) - 1.0))
