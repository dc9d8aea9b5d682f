"""What stands in a field of the Counter's form, in the words that the form shows for it."""

from collections.abc import Iterable, Mapping

from advisor.counsel.phrases import Translator, mark
from advisor.counsel.stock import Range
from advisor.web import labels
from advisor.web.form_fields import COUNT, KEPT, WORDS

EMPTY = mark("(empty)")
AS_GIVEN = mark("as given in the visit")
YES = mark("yes")

_CHOICES: Mapping[str, Mapping[str, str]] = {
    "frame.rim": labels.RIMS,
    "prescription.for": labels.USES,
    "wearer.eye_colour": labels.EYE_COLOURS,
    "wearer.print": labels.PRINTS,
    "declined": labels.DECLINABLE,
    "daily_life.cleaning": labels.CLEANING,
}


def value_words(name: str, text: str, stock: Range, translator: Translator) -> str:
    """Return what a field's text says to a reader: the label of a choice, the number of an option, or the text."""
    if not text:
        return translator.gettext(EMPTY)
    if name == KEPT or text.startswith("{"):
        return translator.gettext(AS_GIVEN)
    if name in ("baseline", "ordered"):
        return translator.gettext(mark("option %(number)s")) % {"number": int(text) + 1} if text.isdigit() else text
    if name in WORDS:
        return ", ".join(_word(name, word, stock, translator) for word in text.split())
    return _word(name, text, stock, translator)


def _word(name: str, text: str, stock: Range, translator: Translator) -> str:
    end = name.rpartition(".")[2]
    if end == "balance":
        return translator.gettext(YES)
    if name == COUNT:
        return text
    known = _CHOICES.get(name) or _of_range(name, stock) or _of_kind(name, end)
    return translator.gettext(known.get(text, text)) if known else text


def _of_kind(name: str, end: str) -> Mapping[str, str]:
    if end == "base":
        return labels.BASES
    if name.startswith("declined_by."):
        return labels.DECLINERS
    if name.startswith("daily_life.") and end != "price_limit":
        return labels.ANSWERS if end in labels.YES_NO else labels.FREQUENCIES
    return {}


def _of_range(name: str, stock: Range) -> Mapping[str, str]:
    """Return what the range calls the items that a field may name."""
    items: Iterable[tuple[str, str | None]] = ()
    if name == "scenes":
        items = ((one.key, one.label) for one in stock.scene)
    elif name.endswith(".material"):
        items = ((one.key, one.label) for one in stock.material)
    elif name.endswith((".coating.front", ".coating.back")):
        items = ((one.key, one.label) for one in stock.coating)
    elif name.endswith(".design"):
        items = ((one.key, one.label) for one in stock.design)
    elif name.endswith(".tint"):
        items = ((one.key, one.label) for one in stock.tint)
    return {key: label or key for key, label in items}
