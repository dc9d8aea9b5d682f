"""Lines of a wearer's sheet that follow from the lens and the answers alone: purpose, choice, coating, first days."""

import datetime as dt
from calendar import monthrange
from collections.abc import Callable, Collection, Iterator

from advisor.counsel.case import Case
from advisor.counsel.changes import changes_from_worn
from advisor.counsel.laid_out import Laid
from advisor.counsel.lens_figures import EyeFigures
from advisor.counsel.phrases import Phrase
from advisor.counsel.reach import near_only
from advisor.counsel.sheet_facts import is_coated
from advisor.counsel.sheet_texts import OWN_ITEM
from advisor.counsel.stock_items import IN_PLACE, Item
from advisor.counsel.words import HUES

READS_WITH_HELP_FROM = 45  # years; common practice, no source
LEAST_COLOURED = 0.004  # luminous reflectance of a face below which its colour is too faint to name
BACK_AFTER_DAYS = 14  # to look again at a new pair; common practice, no source
CHILD_BACK_AFTER_MONTHS = 3  # common practice, no source
MULTIFOCAL = ("bifocal", "progressive")
_SPECIAL = {"occupational": "for-desk", "bifocal": "for-far-and-near-line", "progressive": "for-far-to-near"}
_WHEN = {"for-near": "wear-near", "for-desk": "wear-desk", "for-far": "wear-far"}


def phrases(*keys: str) -> tuple[Phrase, ...]:
    """Return lines without figures."""
    return tuple(Phrase(key) for key in keys)


def purpose(case: Case, laid: Laid) -> tuple[Phrase, ...]:
    """Tell what the pair is for and when to wear it."""
    made_for = _made_for(case, laid)
    tint = laid.tint
    dark = tint is not None and tint.kind != "photochromic" and laid.goes_dark
    when = _WHEN.get(made_for, "wear-all-day")
    return phrases(made_for, "wear-bright" if dark and not near_only(case, laid.design) else when)


def _made_for(case: Case, laid: Laid) -> str:
    kind, wanted = laid.design.kind, case.visit.prescription.for_
    if kind in _SPECIAL:
        return _SPECIAL[kind]
    if near_only(case, laid.design):
        return "for-desk" if wanted == "intermediate" else "for-near"
    far_alone = case.has_add or wanted == "distance" or case.age_years >= READS_WITH_HELP_FROM
    return "for-far" if far_alone else "for-all"


def _name(item: Item) -> str:
    """Return what an item is called on paper; one given in place has no name of its own."""
    if item.label is not None:
        return item.label
    return OWN_ITEM if item.key == IN_PLACE else item.key


def chosen(case: Case, laid: Laid, *, price: str | None) -> Iterator[Phrase]:
    """Tell what was chosen, its price and warranty, and who supplied it."""
    yield Phrase("chosen-design", {"design": _name(laid.design)})
    yield Phrase("chosen-lens", {"material": _name(laid.material)})
    front, back = _name(laid.front), _name(laid.back)
    if front == back:
        yield Phrase("chosen-coating", {"coating": front})
    else:
        yield Phrase("chosen-coating-front", {"coating": front})
        yield Phrase("chosen-coating-back", {"coating": back})
    if laid.tint is not None:
        yield Phrase("chosen-tint", {"tint": _name(laid.tint)})
    if price is not None:
        yield Phrase("chosen-price", {"price": price})
    warranties = [months for face in (laid.front, laid.back) if (months := face.warranty_months)]
    if warranties:  # of two unlike faces the shorter one is promised
        yield Phrase("chosen-warranty", {"warranty_months": min(warranties)})
    if case.visit.dispensed_by:
        yield Phrase("chosen-by", {"supplied_by": case.visit.dispensed_by})


def coating(eye: EyeFigures, laid: Laid, *, cautions: Collection[str]) -> Iterator[Phrase]:
    """Tell what the coating does, what it does not do, and what stays."""
    if not is_coated(laid):
        yield from phrases("coating-none", "coating-glare")
        return
    yield from phrases("coating-does" if laid.tint is None else "coating-does-tinted", "coating-does-not")
    yield from phrases("coating-glare", "coating-smears")
    if "blue-film-no-relief" in cautions:
        yield Phrase("blue-film-no-relief")
    hue = eye.residual_colour.front.hue
    if laid.front_face.has_film and eye.luminous_reflectance.front >= LEAST_COLOURED and hue != "neutral":
        yield Phrase("coating-colour", {"hue": HUES[hue]})
    else:
        yield Phrase("coating-colour-varies")


def first_days(case: Case, laid: Laid, *, size_percent: float | None, cautions: Collection[str]) -> Iterator[Phrase]:
    """Tell what to expect at first, what has changed, and not to drive before it is steady and clear."""
    yield Phrase("first-wear")
    changes = list(changes_from_worn(case, size_percent=size_percent)) or [Phrase("first-size")]
    if laid.design.kind in _SPECIAL and changes[0].code == "first-same":  # what the worn pair was for is not kept
        changes = [Phrase("first-size")]
    if "large-change" in cautions:  # which says the same, and more strongly
        changes = [change for change in changes if change.code != "first-power"]
    yield from changes
    if laid.design.kind in MULTIFOCAL:
        if case.life("first_multifocal") == "yes":
            yield Phrase("first-of-kind")
        yield Phrase("first-multifocal")
    if not {"not-for-driving-design", "not-for-driving-tint"} & set(cautions):  # which forbid it for good
        yield Phrase("first-drive")
    yield Phrase("first-keep-old")


def come_back_on(case: Case) -> dt.date:
    """Return the day to come back: two weeks on for a new pair, three months on for a child's fit."""
    if not case.is_child:
        return case.date + dt.timedelta(days=BACK_AFTER_DAYS)
    later = case.date.month - 1 + CHILD_BACK_AFTER_MONTHS
    year, month = case.date.year + later // 12, later % 12 + 1
    return dt.date(year, month, min(case.date.day, monthrange(year, month)[1]))


def come_back(case: Case, *, day: Callable[[dt.date], str]) -> Iterator[Phrase]:
    """Tell when to come back: on a day, and for what; ``day`` writes a date as the language does."""
    yield Phrase("back-date-child" if case.is_child else "back-date", {"day": day(come_back_on(case))})
    yield from phrases("back-fit", "back-unclear", "back-sick", "back-second", "back-damage", "back-soon")
