"""Remedies that cost nothing, told before any lens: each with computed figures where a figure says how much it does."""

from collections.abc import Iterator

import numpy as np

from advisor.counsel.advice_texts import CLEANING_TEXTS
from advisor.counsel.advise import Counsel
from advisor.counsel.form import SMALLER_BY_MM
from advisor.counsel.materials import is_glass
from advisor.counsel.musts import currency_of
from advisor.counsel.phrases import Figure, Phrase
from advisor.counsel.reasons import Label, behind_told

THICK_FROM_MM = 6.0  # an edge that is seen, whoever asks; a modelling choice
LEAST_SAVING_MM = 0.5


def free_first(counsel: Counsel, k: int, label: Label) -> list[Phrase]:
    """Return the free remedies for this wearer, beside the pair that is recommended."""
    found = []
    if counsel.field.case.life("new_glare") == "yes":
        found.append(Phrase("examination-first"))
    if counsel.field.case.life("cataract_planned") == "yes":
        found.append(Phrase("operation-planned"))
    return [*found, *_turn_desk(counsel, k), *_smaller_frame(counsel, k, label), *_clean_right(counsel)]


def _turn_desk(counsel: Counsel, k: int) -> Iterator[Phrase]:
    """Yield what to do about the light that shows most: a window before a lamp, for the desk can be turned."""
    field = counsel.field
    if not field.case.says("lights_behind"):
        return
    windows = {scene.label or scene.key for scene in field.scenes if scene.kind == "extended"}
    for scene, (shown,) in behind_told(field, k)[:1]:
        code = "turn-desk" if scene in windows else "move-lamp"
        yield Phrase(code, {"scene": scene, "this_percent": 100.0 * shown})


def _smaller_frame(counsel: Counsel, k: int, label: Label) -> Iterator[Phrase]:
    """Yield what a smaller frame does for a thick edge, beside the next thinner material that may be had."""
    field, case = counsel.field, counsel.field.case
    forms = field.computed.forms
    edge, centre = float(forms.shape.thickest_mm[k].max()), float(forms.shape.centre_mm[k].max())
    bothered = case.says("bothered_thickness")
    thick = edge >= THICK_FROM_MM or (bothered and edge >= THICK_FROM_MM - 1.0)
    unwanted = case.life("bothered_thickness") == "never"
    if case.is_default("frame.a_mm") or unwanted or not thick or edge < centre or not forms.smaller_fits[k].all():
        return
    small = float(forms.smaller_thickest_mm[k].max())
    if edge - small < LEAST_SAVING_MM:
        return
    figures: dict[str, Figure] = {"by_mm": SMALLER_BY_MM, "edge_mm": edge, "smaller_edge_mm": small}
    thinner = _thinner(counsel, k)
    if thinner is None:
        yield Phrase("smaller-frame", figures)
        return
    other = float(forms.shape.thickest_mm[thinner].max())
    more = field.price(thinner) - field.price(k)
    figures |= {"label": label(field, thinner), "other_mm": other, "more_price": more, "currency": currency_of(case)}
    yield Phrase("smaller-frame-or-material", figures)


def _thinner(counsel: Counsel, k: int) -> int | None:
    """Return the best pair of the same design and faces that is thinner by as much as counts, and dearer."""
    field = counsel.field
    own, edges = field.pool.laid[k], field.computed.forms.shape.thickest_mm.max(axis=-1)
    found = [
        j
        for j in np.flatnonzero(field.eligible).tolist()
        if edges[j] <= edges[k] - LEAST_SAVING_MM
        and np.isfinite(field.price(j))
        and field.price(j) > field.price(k)
        and (field.pool.laid[j].design.key, field.pool.laid[j].front.key, field.pool.laid[j].back.key)
        == (own.design.key, own.front.key, own.back.key)
        and field.pool.laid[j].tint == own.tint
        and is_glass(field.pool.laid[j].material) == is_glass(own.material)
    ]
    return field.top(found)


def _clean_right(counsel: Counsel) -> Iterator[Phrase]:
    case = counsel.field.case
    life = case.visit.daily_life
    wrong = [word for word in (life.cleaning if life else None) or () if word in CLEANING_TEXTS]
    if case.says("bothered_smears") and wrong:
        yield Phrase("clean-right", {"cleaning": CLEANING_TEXTS[wrong[0]]})
