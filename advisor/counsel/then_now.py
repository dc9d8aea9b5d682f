"""What was said of a visit when it was saved, beside what would be said of it now: two answers, row by row.

Figures are compared as they are shown, so that nothing differs that cannot be seen. Words that only name something (a
label, a caution) stand as they were written then, in the language of that day; whether they differ is told by their
keys.
"""

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass

from advisor.counsel.comparison import Advice, AdvisedOption, Caution, Comparison, OptionFigures
from advisor.counsel.layout import POINTS, ROWS, Row, parted, two_eyes
from advisor.counsel.lens_figures import FormFigures
from advisor.counsel.phrases import Translator, mark
from advisor.counsel.second_image_words import lead

NOTHING = "–"
SAME = mark("same")
CHANGED = mark("changed")
NEW = mark("new")
GONE = mark("no longer so")
MAIN_ROWS: tuple[Row, ...] = tuple(
    row for key in ("edge_thickest_mm", "centre_mm", "weight_g", "whole_lens") for row in ROWS if row.key == key
)
LABELS: Mapping[str, str] = {
    "lens": mark("lens"),
    "price": mark("price of the pair"),
    "second_image": mark("second image"),
    "refused": mark("what keeps it from being made"),
    "cautions": mark("cautions"),
    "recommended": mark("recommended"),
    "next_best": mark("next best"),
    "cheapest": mark("cheapest that meets every must"),
    "two_pairs": mark("two pairs, since one does not do every job"),
}
OPTION = mark("Option %(number)s")
ADVICE = mark("Advice")

PriceText = Callable[[float | None], str]


@dataclass(frozen=True)
class Prices:
    """How prices are written: in the currency of that day, in today's, and, where both are one, a difference."""

    then: PriceText
    now: PriceText
    difference: PriceText | None = None


@dataclass(frozen=True)
class ThenNow:
    """One row: its words, what was said then, what would be said now, and the difference in words."""

    key: str
    label: str
    then: tuple[str, ...]
    now: tuple[str, ...]
    difference: str
    is_same: bool


@dataclass(frozen=True)
class Part:
    """The rows of one option, or of the advice."""

    title: str
    rows: tuple[ThenNow, ...]

    @property
    def differing(self) -> int:
        """How many rows differ."""
        return sum(not row.is_same for row in self.rows)


@dataclass(frozen=True)
class _Side:
    """What one row says on one of the two days: its texts, and by what it is told whether both say the same."""

    texts: tuple[str, ...] = ()
    marks: object = ()


_Sides = tuple[_Side, _Side]
_Options = tuple[OptionFigures | None, OptionFigures | None]
_ADVISED: Mapping[str, Callable[[Advice], AdvisedOption | None]] = {
    "recommended": lambda advice: advice.recommended,
    "next_best": lambda advice: advice.next_best,
    "cheapest": lambda advice: advice.cheapest_that_meets_every_must,
}


def then_and_now(then: Comparison, now: Comparison, *, prices: Prices, translator: Translator) -> list[Part]:
    """Return the advice and every option of two answers to one visit, row beside row."""
    parts = [Part(translator.gettext(ADVICE), tuple(_advice_rows(then.advice, now.advice, translator)))]
    for index in range(max(len(then.options), len(now.options))):
        options = _at(then.options, index), _at(now.options, index)
        cautions = _cautions(then.advice, index), _cautions(now.advice, index)
        title = translator.gettext(OPTION) % {"number": index + 1}
        parts.append(Part(title, tuple(_option_rows(options, cautions, prices, translator))))
    return [part for part in parts if part.rows]


def _at(options: Sequence[OptionFigures], index: int) -> OptionFigures | None:
    return options[index] if index < len(options) else None


def _row(key: str, sides: _Sides, translator: Translator, *, label: str = "", more: str = "") -> ThenNow:
    """Return a row; ``more`` says by how much it differs, where a number can say it."""
    then, now = sides
    is_same = then.marks == now.marks
    words = SAME if is_same else NEW if not then.texts else GONE if not now.texts else CHANGED
    return ThenNow(
        key,
        translator.gettext(label or LABELS[key]),
        then.texts or (NOTHING,),
        now.texts or (NOTHING,),
        translator.gettext(words) if is_same or not more else more,
        is_same,
    )


def _advice_rows(then: Advice | None, now: Advice | None, translator: Translator) -> list[ThenNow]:
    rows = [_row(key, (_advised(then, read), _advised(now, read)), translator) for key, read in _ADVISED.items()]
    return _told([*rows, _row("two_pairs", (_two_pairs(then), _two_pairs(now)), translator)])


def _two_pairs(advice: Advice | None) -> _Side:
    pairs = [] if advice is None else advice.two_pairs or []
    return _Side(
        tuple(pair.label for pair in pairs),
        tuple((pair.design, pair.material, pair.coating, pair.tint) for pair in pairs),
    )


def _told(rows: Sequence[ThenNow]) -> list[ThenNow]:
    """Return the rows that say something on either day."""
    return [row for row in rows if (row.then, row.now) != ((NOTHING,), (NOTHING,))]


def _advised(advice: Advice | None, read: Callable[[Advice], AdvisedOption | None]) -> _Side:
    pair = None if advice is None else read(advice)
    if pair is None:
        return _Side()
    return _Side((pair.label,), (pair.design, pair.material, pair.coating, pair.tint))


def _cautions(advice: Advice | None, index: int) -> _Side:
    found: list[Caution] = [] if advice is None else [one for one in advice.cautions if index in one.options]
    return _Side(tuple(one.text for one in found), frozenset(one.key for one in found))


def _option_rows(options: _Options, cautions: _Sides, prices: Prices, translator: Translator) -> list[ThenNow]:
    then, now = options
    seen = _second_image(then, translator), _second_image(now, translator)
    rows = [_row("lens", (_lens(then), _lens(now)), translator), _price_row(options, prices, translator)]
    rows += [_figure_row(row, options, translator) for row in MAIN_ROWS]
    rows.append(_row("second_image", seen, translator))
    rows.append(_row("refused", (_refused(then), _refused(now)), translator))
    rows.append(_row("cautions", cautions, translator))
    return _told(rows)


def _lens(option: OptionFigures | None) -> _Side:
    if option is None:
        return _Side()
    return _Side((option.label,), (option.design, option.material, option.coating, option.tint))


def _price_row(options: _Options, prices: Prices, translator: Translator) -> ThenNow:
    old, new = (None if one is None else one.price for one in options)
    more = "" if old is None or new is None or prices.difference is None else prices.difference(new - old)
    return _row("price", (_price(old, prices.then), _price(new, prices.now)), translator, more=more)


def _price(price: float | None, text: PriceText) -> _Side:
    return _Side() if price is None else _Side((text(price),), text(price))


def _figure_row(row: Row, options: _Options, translator: Translator) -> ThenNow:
    then, now = (_figures(row, option, translator) for option in options)
    return _row(row.key, (then, now), translator, label=row.label, more=_more(row, *options, translator))


def _figures(row: Row, option: OptionFigures | None, translator: Translator) -> _Side:
    text = NOTHING if option is None else two_eyes(row, option, translator)
    return _Side() if text == NOTHING else _Side((text,), text)


def _more(row: Row, then: OptionFigures | None, now: OptionFigures | None, translator: Translator) -> str:
    """Return by how much both eyes differ, or nothing where a figure is missing."""
    if then is None or now is None:
        return ""
    pairs = [(_value(row, now.right), _value(row, then.right)), (_value(row, now.left), _value(row, then.left))]
    if any(value is None or base is None for value, base in pairs):
        return ""
    texts = [row.difference(value, base, translator) or translator.gettext(SAME) for value, base in pairs]
    return parted(texts, unit=translator.gettext(POINTS) if row.unit == "%" else row.unit)


def _value(row: Row, eye: FormFigures | None) -> float | None:
    return None if eye is None else row.value(eye)


def _second_image(option: OptionFigures | None, translator: Translator) -> _Side:
    text = None if option is None else lead(option, translator)
    return _Side() if text is None else _Side((text,), text)


def _refused(option: OptionFigures | None) -> _Side:
    found = [] if option is None else option.refused
    return _Side(tuple(one.text for one in found), frozenset(one.code for one in found))
