"""The advice as the Counter shows it: what is free first, then the pairs, what was excluded, and how it was weighed."""

import json
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass

from advisor.counsel.compare import Computed
from advisor.counsel.comparison import Advice, AdvisedOption, Caution, Comparison, Notice
from advisor.counsel.laid_out import Laid
from advisor.counsel.musts import musts
from advisor.counsel.phrases import mark
from advisor.counsel.stock_items import IN_PLACE, Coating, Material, Tint
from advisor.counsel.value import criteria
from advisor.web.figure_rows import short
from advisor.web.language import Language
from advisor.web.sentences import capital

LAY = "lay:"  # begins the value of a button that lays a pair out; the rest names the fields of the new option
MOST_LENGTH = 20_000  # of such a value; a coating given in place may hold a spectrum

CHEAPEST = mark("Cheapest that meets every must")
RECOMMENDED = mark("Recommended")
BOTH = mark("Recommended, and the cheapest that meets every must")
NEXT_BEST = mark("Next best")
FIRST_OF_TWO, SECOND_OF_TWO = mark("First of two pairs"), mark("Second of two pairs")

# How the figure of a criterion is written: times, digits and unit.
FIGURES: Mapping[str, tuple[float, int, str]] = {
    "second-image": (1.0, 1, mark("visibility level")),
    "from-behind": (1.0, 2, mark("times")),
    "seen-by-others": (1.0, 2, mark("times")),
    "thickness": (1.0, 1, "mm"),
    "weight": (1.0, 1, "g"),
    "fringe": (1.0, 2, "Δ"),
    "transmitted": (100.0, 1, "%"),
    "not-mirrored": (100.0, 1, "%"),
    "care": (1.0, 1, mark("of 3")),
    "in-between": (1.0, 2, "D"),
    "sun": (100.0, 1, "%"),
    "price": (1.0, 0, "EUR"),
}


@dataclass(frozen=True)
class Piece:
    """One pair that advice names; ``lay_out`` is the value of the button that lays it out, where it is not yet.

    The cautions are those of a pair not laid out; the others stand in its column already.
    """

    title: str
    pair: AdvisedOption
    price: str
    gains: tuple[str, ...]
    losses: tuple[str, ...]
    cautions: tuple[str, ...]
    lay_out: str | None
    is_recommended: bool = False


@dataclass(frozen=True)
class Weighed:
    """One criterion: its share of all weight, the figures of the pairs, and its fixed scale with the reason for it."""

    label: str
    share: float
    share_text: str
    figures: tuple[str, ...]
    best: str
    worst: str
    why: str


@dataclass(frozen=True)
class Barred:
    """Why an option laid out is excluded; ``declinable`` is what a wearer may turn down to lift the condition."""

    option: int
    text: str
    source: str
    declinable: str | None


@dataclass(frozen=True)
class AdviceView:
    """Everything the page shows of the advice, in its order."""

    free_first: tuple[str, ...]
    pieces: tuple[Piece, ...]
    none: tuple[str, ...]
    changes: tuple[str, ...]
    robust: str
    share: str
    barred: tuple[Barred, ...]
    weighed: tuple[Weighed, ...]
    limit: str | None
    together: str


def advice_view(computed: Computed, answer: Comparison, *, currency: str, speaker: Language) -> AdviceView | None:
    """Lay out the advice for the page, or return None where none was asked for."""
    advice = answer.advice
    if advice is None:
        return None
    pieces = tuple(_pieces(advice, computed.laid, currency, speaker))
    limit = advice.greatest_reflectance_per_surface
    robust, sure = advice.robust or "", advice.robustness
    return AdviceView(
        free_first=_texts(advice.free_first),
        pieces=pieces,
        none=_texts(advice.because) if advice.recommended is None else (),
        changes=_texts(advice.would_change),
        robust=capital(robust),
        share="" if sure is None else speaker.percent(sure.share, digits=0),
        barred=tuple(_barred(advice)),
        weighed=tuple(_weighed(advice, [piece.pair for piece in pieces], speaker)),
        together=_together(advice, currency, speaker),
        limit=None if limit is None else speaker.percent(limit, digits=2),
    )


def _texts(notices: Sequence[Notice] | None) -> tuple[str, ...]:
    return tuple(notice.text for notice in notices or ())


def _pieces(advice: Advice, laid: Sequence[Laid], currency: str, speaker: Language) -> Iterator[Piece]:
    """Yield the cheapest, the recommended and the next best in this order, or the two pairs where one does not do."""
    common = {caution.key for caution in advice.cautions if len(caution.options) == len(laid)}

    def piece(title: str, pair: AdvisedOption, own: Advice | AdvisedOption, *, recommended: bool = False) -> Piece:
        return Piece(
            title=speaker.gettext(title),
            pair=pair,
            price=speaker.money(pair.price, currency=currency),
            gains=_texts(own.because),
            losses=_texts(own.gives_up),
            cautions=() if pair.index is not None else _cautions(pair.cautions, common),
            lay_out=lay_out_value(pair, laid),
            is_recommended=recommended,
        )

    best, cheapest, after = advice.recommended, advice.cheapest_that_meets_every_must, advice.next_best
    same = best is not None and cheapest is not None and _made_of(best) == _made_of(cheapest)
    if cheapest is not None and not same:
        yield piece(CHEAPEST, cheapest, cheapest)
    if best is not None:
        yield piece(BOTH if same else RECOMMENDED, best, advice, recommended=True)
    if after is not None:
        yield piece(NEXT_BEST, after, after)
    for title, pair in zip((FIRST_OF_TWO, SECOND_OF_TWO), advice.two_pairs or (), strict=False):
        yield piece(title, pair, pair, recommended=True)


def _together(advice: Advice, currency: str, speaker: Language) -> str:
    """Return what two pairs cost together; nothing where there are none, or a price is not known."""
    prices = [pair.price for pair in advice.two_pairs or ()]
    known = [price for price in prices if price is not None]
    return speaker.money(sum(known), currency=currency) if known and len(known) == len(prices) else ""


def _made_of(pair: AdvisedOption) -> tuple[object, ...]:
    return pair.index, pair.design, pair.material, pair.coating, pair.tint


def _cautions(cautions: Sequence[Caution], common: set[str]) -> tuple[str, ...]:
    return tuple(short(caution.text) for caution in cautions if caution.key not in common)


def _barred(advice: Advice) -> Iterator[Barred]:
    lifted = {must.key: must.lifted_by for must in musts()}
    for entry in advice.excluded or ():
        yield Barred(entry.option, entry.text, entry.source or "", lifted.get(entry.code))


def _weighed(advice: Advice, pairs: Sequence[AdvisedOption], speaker: Language) -> Iterator[Weighed]:
    for priority in advice.priorities or ():
        criterion = criteria()[priority.key]
        yield Weighed(
            label=priority.label,
            share=priority.weight,
            share_text=speaker.percent(priority.weight, digits=0),
            figures=tuple(_figure(priority.key, pair.figures.get(priority.key), speaker) for pair in pairs),
            best=_figure(priority.key, criterion.best, speaker),
            worst=_figure(priority.key, criterion.worst, speaker),
            why=speaker.gettext(criterion.why),
        )


def _figure(key: str, value: float | None, speaker: Language) -> str:
    if value is None:
        return "–"
    times, digits, unit = FIGURES[key]
    return f"{speaker.number(times * value, digits=digits)} {speaker.gettext(unit)}"


# Laying a pair out as an option.


def lay_out_value(pair: AdvisedOption, laid: Sequence[Laid]) -> str | None:
    """Return the value of the button that lays a pair out; None where it is laid out, or a part cannot be named."""
    if pair.index is not None:
        return None
    front, back = pair.coating.front, pair.coating.back
    faces = {"coating.front": front} | ({"coating.back": back} if back != front else {})
    fields = {"design": pair.design, "material": pair.material, **faces}
    if isinstance(pair.tint, str):
        fields["tint"] = pair.tint
    elif pair.tint is not None:
        fields["tint_own"] = repr(pair.tint)
    own = {name: _given_in_place(name, laid) for name, key in fields.items() if key == IN_PLACE}
    if None in own.values():
        return None
    return LAY + json.dumps(fields | own, ensure_ascii=False)


def _given_in_place(name: str, laid: Sequence[Laid]) -> str | None:
    """Return the one item of this kind that the options laid out give in place, as a field holds it."""
    items: list[Material | Coating | Tint | None] = []
    for option in laid:
        if name == "material":
            items.append(option.material)
        elif name == "tint":
            items.append(option.tint)
        else:
            items += [option.front, option.back]
    written = {
        item.model_dump_json(by_alias=True, exclude_none=True, exclude={"key"})
        for item in items
        if item is not None and item.key == IN_PLACE
    }
    return written.pop() if len(written) == 1 else None


def laid_out_fields(wish: str) -> dict[str, str]:
    """Return the fields that a button's value names; nothing where it is no such value."""
    if not wish.startswith(LAY) or len(wish) > MOST_LENGTH:
        return {}
    try:
        found = json.loads(wish.removeprefix(LAY))
    except (ValueError, RecursionError):
        return {}
    if not isinstance(found, dict) or not all(isinstance(text, str) for text in found.values()):
        return {}
    return found
