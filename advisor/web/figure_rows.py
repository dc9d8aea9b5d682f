"""The rows of the Counter ready to be shown: words, figures, differences from the baseline, and what each opens to."""

import re
from collections.abc import Callable, Iterable
from dataclasses import dataclass

from advisor.counsel.compare import Computed
from advisor.counsel.comparison import Caution, Comparison, EyeFigures, OptionFigures
from advisor.counsel.explanations import EXPLANATIONS, At, Explanation, PutIn
from advisor.counsel.layout import (
    POINTS,
    ROWS,
    TIMES,
    Row,
    parted,
    rows_present,
    second_image_strength,
    strength_words,
    times_apart,
    two_eyes,
)
from advisor.counsel.phrases import mark
from advisor.counsel.second_image_words import beside, lead
from advisor.counsel.stock import Range
from advisor.counsel.words import HUES
from advisor.web.language import MINUS, Language

SAME = mark("same")
ROW_OF = {row.key: row for row in ROWS}
SHOWN = frozenset({"edge_thickest_mm", "centre_mm", "weight_g", "smaller_edge_mm", "smaller_weight_g"})  # not folded


@dataclass(frozen=True)
class Line:
    """One figure of a cell: small words before it, the figure, and the difference from the baseline."""

    text: str
    words: str = ""
    difference: str = ""


@dataclass(frozen=True)
class Cell:
    """What one option shows in one row; ``bar_mm`` is a length drawn to scale, ``swatch`` a colour with its word."""

    lines: tuple[Line, ...] = ()
    notes: tuple[str, ...] = ()
    bar_mm: float | None = None
    swatch: tuple[str, str] | None = None


@dataclass(frozen=True)
class Given:
    """One number that was put in, option by option."""

    label: str
    texts: tuple[str, ...]


@dataclass(frozen=True)
class FigureRow:
    """One row with what it opens to."""

    key: str
    label: str
    cells: tuple[Cell, ...]
    explanation: Explanation
    given: tuple[Given, ...] = ()
    cautions: tuple[Caution, ...] = ()


@dataclass(frozen=True)
class FigureTable:
    """The open rows, the folded ones, and in short what no option can do."""

    open: tuple[FigureRow, ...]
    folded: tuple[FigureRow, ...]
    for_all: tuple[str, ...] = ()


@dataclass(frozen=True)
class _Desk:
    """What every row needs: the computed visit, its answer, the baseline and the language."""

    computed: Computed
    answer: Comparison
    base: OptionFigures
    currency: str
    speaker: Language

    def cells(self, make: Callable[[OptionFigures], Cell]) -> tuple[Cell, ...]:
        """Make one cell for each option; a refused option has only dashes."""
        dash = Cell((Line("–"),))
        return tuple(dash if option.right is None else make(option) for option in self.answer.options)

    def row(self, key: str, label: str, cells: tuple[Cell, ...], cautions: Iterable[Caution] = ()) -> FigureRow:
        """Join cells and explanation."""
        return FigureRow(key, self.speaker.gettext(label), cells, EXPLANATIONS[key], self._given(key), tuple(cautions))

    def _given(self, key: str) -> tuple[Given, ...]:
        explanation = EXPLANATIONS[key]
        found = [self._put_in(part) for part in explanation.put_in]
        present = rows_present(self.answer)
        for row in (ROW_OF[name] for name in explanation.rows):
            if row in present:
                texts = tuple(two_eyes(row, option, self.speaker) for option in self.answer.options)
                found.append(Given(self.speaker.gettext(row.label), texts))
        return tuple(given for given in found if set(given.texts) != {"–"})

    def _put_in(self, part: PutIn) -> Given:
        case, laid = self.computed.case, self.computed.laid
        return Given(self.speaker.gettext(part.label), tuple(self._both_eyes(part, At(case, one, 0)) for one in laid))

    def _both_eyes(self, part: PutIn, at: At) -> str:
        texts = [self._written(part, At(at.case, at.laid, eye)) for eye in (0, 1)]
        return parted(texts, unit=self.speaker.gettext(part.unit))

    def _written(self, part: PutIn, at: At) -> str:
        value = part.read(at)
        if value is None or isinstance(value, str):
            return self.speaker.gettext(value) if value else "–"
        signed = part.unit == "D"
        number = self.speaker.number(value, digits=part.digits, signed=signed)
        return f"{number} {self.speaker.gettext(part.unit)}".rstrip()


def figure_table(
    computed: Computed, answer: Comparison, *, baseline: int, currency: str, speaker: Language
) -> FigureTable:
    """Lay out the answer for the page."""
    base = answer.options[min(baseline, len(answer.options) - 1)]
    desk = _Desk(computed, answer, base, currency, speaker)
    present = rows_present(answer)
    cautions = answer.advice.cautions if answer.advice else []
    common = tuple(caution for caution in cautions if len(caution.options) == len(answer.options))
    rows = [_price(desk), *_edge_and_centre(desk), *_plain(desk, [row for row in present if row.key == "weight_g"])]
    rows += [*_second_image(desk), _seen_by_others(desk), _cannot(desk, cautions, common)]
    folded = [*_limit(desk), *_plain(desk, [row for row in present if row.key not in SHOWN])]
    return FigureTable(tuple(rows), tuple(folded), tuple(short(caution.text) for caution in common))


def _price(desk: _Desk) -> FigureRow:
    def cell(option: OptionFigures) -> Cell:
        difference = ""
        if option is not desk.base and option.price is not None and desk.base.price is not None:
            more = option.price - desk.base.price
            money = desk.speaker.money(abs(more), currency=desk.currency)
            difference = f"{'+' if more > 0 else MINUS}{money}" if more else desk.speaker.gettext(SAME)
        return Cell((Line(desk.speaker.money(option.price, currency=desk.currency), difference=difference),))

    return desk.row("price", mark("price of the pair"), tuple(cell(option) for option in desk.answer.options))


def _line(desk: _Desk, row: Row, option: OptionFigures, words: str = "") -> Line:
    return Line(two_eyes(row, option, desk.speaker), words, _difference(desk, row, option))


def _difference(desk: _Desk, row: Row, option: OptionFigures) -> str:
    """Return the difference of both eyes from the baseline, "same" where none shows, nothing where none is known."""
    if option is desk.base:
        return ""
    eyes = ((option.right, desk.base.right), (option.left, desk.base.left))
    pairs = [(_value(row, eye), _value(row, base)) for eye, base in eyes]
    if any(value is None or base is None for value, base in pairs):
        return ""
    texts = [row.difference(value, base, desk.speaker) for value, base in pairs]
    if not any(texts):
        return desk.speaker.gettext(SAME)
    if row.parts or row.unit == TIMES:
        return parted([text or desk.speaker.gettext(SAME) for text in texts], unit="")
    unit = desk.speaker.gettext(POINTS) if row.unit == "%" else row.unit
    return parted([text or f"0 {unit}".rstrip() for text in texts], unit=unit)


def _value(row: Row, eye: EyeFigures | None) -> float | None:
    return None if eye is None else row.value(eye)


def _plain(desk: _Desk, rows: Iterable[Row]) -> list[FigureRow]:
    return [
        desk.row(row.key, row.label, desk.cells(lambda option, row=row: Cell((_line(desk, row, option),))))  # type: ignore[misc]
        for row in rows
    ]


def _edge_and_centre(desk: _Desk) -> list[FigureRow]:
    edge, centre = ROW_OF["edge_thickest_mm"], ROW_OF["centre_mm"]
    if edge not in rows_present(desk.answer):
        return []
    words = desk.speaker.gettext(centre.label)

    def cell(option: OptionFigures) -> Cell:
        thick = [value for value in (_value(edge, option.right), _value(edge, option.left)) if value is not None]
        lines = (_line(desk, edge, option), _line(desk, centre, option, words))
        return Cell(lines, _smaller_frame(desk, option), bar_mm=max(thick, default=None))

    return [desk.row("edge_thickest_mm", mark("thickest edge, and centre"), desk.cells(cell))]


def _smaller_frame(desk: _Desk, option: OptionFigures) -> tuple[str, ...]:
    """Say what the same lens comes to in a frame 4 mm smaller, which costs nothing, beside every index."""
    edge, weight = (two_eyes(ROW_OF[key], option, desk.speaker) for key in ("smaller_edge_mm", "smaller_weight_g"))
    known = option.right is not None and option.right.smaller_frame is not None and "–" not in (edge, weight)
    figures = {"edge": edge, "weight": weight}
    return (desk.speaker.gettext(mark("in a frame 4 mm smaller: %(edge)s, %(weight)s")) % figures,) if known else ()


def _second_image(desk: _Desk) -> list[FigureRow]:
    if all(second_image_strength(option) is None for option in desk.answer.options):
        return []
    return [desk.row("second_image", mark("second image"), desk.cells(lambda option: _ghost_cell(desk, option)))]


def _ghost_cell(desk: _Desk, option: OptionFigures) -> Cell:
    """Say aloud what is seen of the second image, where a light ahead is laid out; how strong it is stands under it."""
    strength, base = second_image_strength(option), second_image_strength(desk.base)
    if strength is None:
        return Cell((Line("–"),))
    difference = ""
    if base is not None and option is not desk.base:
        difference = times_apart(strength, base, desk.speaker) or desk.speaker.gettext(SAME)
    words, spoken = strength_words(strength, desk.speaker), lead(option, desk.speaker)
    notes = tuple(beside(option, desk.speaker))
    if spoken is None:
        return Cell((Line(words, difference=difference),), notes)
    return Cell((Line(capital(spoken)), Line(words, difference=difference)), notes)


def _limit(desk: _Desk) -> list[FigureRow]:
    """Return how much each face may mirror before the second image is noticed, and which coatings stay below."""
    if all(option.reflectance_limit is None for option in desk.answer.options):
        return []

    def cell(option: OptionFigures) -> Cell:
        limit = option.reflectance_limit
        if limit is None:
            return Cell((Line("–"),))
        if limit.not_noticed is None:
            return Cell((Line(desk.speaker.gettext(mark("even bare faces are not noticed"))),))
        most = desk.speaker.gettext(mark("at most %(percent)s %% a face"))
        first = Line(most % {"percent": desk.speaker.number(100.0 * limit.not_noticed, digits=2)})
        reached = coating_words(limit.reached_by, desk.computed.case.stock) or desk.speaker.gettext(mark("none sold"))
        scenes = {scene.key: scene.label or scene.key for scene in desk.computed.case.scenes}
        notes = [f"{desk.speaker.gettext(mark('reached by'))}: {reached}", scenes.get(limit.scene, limit.scene)]
        return Cell((first,), tuple(notes))

    return [desk.row("reflectance_limit", mark("reflectance limit, second image not noticed"), desk.cells(cell))]


def coating_words(keys: Iterable[str], stock: Range) -> str:
    """Return the names of coatings sold, as the shop calls them."""
    labels = {coating.key: coating.label or coating.key for coating in stock.coating}
    return ", ".join(labels.get(key, key) for key in keys)


def capital(text: str) -> str:
    """Return a text that begins with a capital letter."""
    return text[:1].upper() + text[1:]


def _seen_by_others(desk: _Desk) -> FigureRow:
    whole, contrast = ROW_OF["whole_lens"], ROW_OF["observer_contrast"]
    has_contrast = contrast in rows_present(desk.answer)

    def cell(option: OptionFigures) -> Cell:
        lines = [_line(desk, whole, option)]
        if has_contrast:
            lines.append(_line(desk, contrast, option, desk.speaker.gettext(contrast.label)))
        colour = option.right.residual_colour.front if option.right else None
        word = desk.speaker.gettext(HUES.get(colour.hue, colour.hue)) if colour else ""
        return Cell(tuple(lines), swatch=(colour.srgb, word) if colour else None)

    return desk.row("seen_by_others", mark("reflection seen by others"), desk.cells(cell))


def _cannot(desk: _Desk, cautions: Iterable[Caution], common: Iterable[Caution]) -> FigureRow:
    everywhere = list(common)

    def cell(option: OptionFigures) -> Cell:
        applying = (caution for caution in cautions if option.index in caution.options)
        own = [short(caution.text) for caution in applying if caution not in everywhere]
        return Cell(notes=(*(refusal.text for refusal in option.refused), *own))

    cells = tuple(cell(option) for option in desk.answer.options)
    return desk.row("cannot", mark("what it cannot do"), cells, cautions)


def short(text: str) -> str:
    """Return the first sentence, or what stands before its semicolon; what follows a colon is what counts."""
    for place, letter in enumerate(text):
        if letter in ".;" and text[place + 1 : place + 2] in ("", " ") and place > 12:
            return text[:place] + "."
    return text


_UNIT = re.compile(r"(?<=\d) (?=(?:mm|g|D|Δ|cm|m|%|times|EUR|prism)(?![\w]))|(?<=\d) (?=/ )|(?<=\d\u00a0/) (?=\d)")


def unbroken(text: str) -> str:
    """Return a text in which no line ends between a number and its unit."""
    return _UNIT.sub("\N{NO-BREAK SPACE}", _UNIT.sub("\N{NO-BREAK SPACE}", text))
