"""The rows of the Counter ready to be shown: words, figures, differences from the baseline, and what each opens to."""

import re
from collections.abc import Iterable
from dataclasses import dataclass

from advisor.counsel.compare import Computed
from advisor.counsel.comparison import Caution, Comparison, OptionFigures
from advisor.counsel.layout import Row, rows_present, two_eyes
from advisor.counsel.lens_figures import EyeFigures, LensPair
from advisor.counsel.phrases import mark
from advisor.counsel.words import HUES
from advisor.web.figure_cells import ROW_OF, SAME, Cell, Desk, FigureRow, Line, figure_of, line
from advisor.web.figure_ghost_rows import limit_rows, second_image_rows
from advisor.web.language import Language

SHOWN = frozenset({"edge_thickest_mm", "centre_mm", "weight_g", "smaller_edge_mm", "smaller_weight_g"})  # not folded


@dataclass(frozen=True)
class FigureTable:
    """The open rows, the folded ones, and in short what no option can do."""

    open: tuple[FigureRow, ...]
    folded: tuple[FigureRow, ...]
    for_all: tuple[str, ...] = ()


def figure_table(
    computed: Computed, answer: Comparison, *, baseline: int, currency: str, speaker: Language
) -> FigureTable:
    """Lay out the answer for the page."""
    base = answer.options[min(baseline, len(answer.options) - 1)]
    desk = Desk(computed, answer, base, currency, speaker)
    present = rows_present(answer)
    cautions = answer.advice.cautions if answer.advice else []
    common = tuple(caution for caution in cautions if len(caution.options) == len(answer.options))
    rows = [_price(desk), *_edge_and_centre(desk), *_plain(desk, [row for row in present if row.key == "weight_g"])]
    rows += [*second_image_rows(desk), _seen_by_others(desk), _cannot(desk, cautions, common)]
    folded = [*limit_rows(desk), *_plain(desk, [row for row in present if row.key not in SHOWN])]
    return FigureTable(tuple(rows), tuple(folded), tuple(short(caution.text) for caution in common))


def _price(desk: Desk) -> FigureRow:
    def cell(option: OptionFigures) -> Cell:
        difference = ""
        if option is not desk.base and option.price is not None and desk.base.price is not None:
            more = option.price - desk.base.price
            money = desk.speaker.money(more, currency=desk.currency, signed=True)
            difference = money if more else desk.speaker.gettext(SAME)
        return Cell((Line(desk.speaker.money(option.price, currency=desk.currency), difference=difference),))

    return desk.row("price", mark("price of the pair"), desk.option_cells(cell))


def _plain(desk: Desk, rows: Iterable[Row]) -> list[FigureRow]:
    return [
        desk.row(row.key, row.label, desk.cells(lambda pair, row=row: Cell((line(desk, row, pair),))))  # type: ignore[misc]
        for row in rows
    ]


def _edge_and_centre(desk: Desk) -> list[FigureRow]:
    edge, centre = ROW_OF["edge_thickest_mm"], ROW_OF["centre_mm"]
    if edge not in rows_present(desk.answer):
        return []
    words = desk.speaker.gettext(centre.label)

    def cell(pair: LensPair) -> Cell:
        thick = [value for value in (figure_of(edge, pair.right), figure_of(edge, pair.left)) if value is not None]
        lines = (line(desk, edge, pair), line(desk, centre, pair, words))
        return Cell(lines, _smaller_frame(desk, pair), bar_mm=max(thick, default=None))

    return [desk.row("edge_thickest_mm", mark("thickest edge, and centre"), desk.cells(cell))]


def _smaller_frame(desk: Desk, pair: LensPair) -> tuple[str, ...]:
    """Say what an option comes to in a frame 4 mm smaller, which costs nothing, beside every index."""
    edge, weight = (two_eyes(ROW_OF[key], pair, desk.speaker) for key in ("smaller_edge_mm", "smaller_weight_g"))
    known = isinstance(pair, OptionFigures) and "–" not in (edge, weight)
    figures = {"edge": edge, "weight": weight}
    return (desk.speaker.gettext(mark("in a frame 4 mm smaller: %(edge)s, %(weight)s")) % figures,) if known else ()


def _seen_by_others(desk: Desk) -> FigureRow:
    whole, contrast = ROW_OF["whole_lens"], ROW_OF["observer_contrast"]
    has_contrast = contrast in rows_present(desk.answer)

    def cell(pair: LensPair) -> Cell:
        lines = [line(desk, whole, pair)]
        if has_contrast:
            lines.append(line(desk, contrast, pair, desk.speaker.gettext(contrast.label)))
        colour = pair.right.residual_colour.front if isinstance(pair.right, EyeFigures) else None
        word = desk.speaker.gettext(HUES.get(colour.hue, colour.hue)) if colour else ""
        return Cell(tuple(lines), swatch=(colour.srgb, word) if colour else None)

    return desk.row("seen_by_others", mark("reflection seen by others"), desk.cells(cell))


def _cannot(desk: Desk, cautions: Iterable[Caution], common: Iterable[Caution]) -> FigureRow:
    everywhere = list(common)

    def cell(option: OptionFigures) -> Cell:
        applying = (caution for caution in cautions if option.index in caution.options)
        own = [short(caution.text) for caution in applying if caution not in everywhere]
        return Cell(notes=(*(refusal.text for refusal in option.refused), *own))

    return desk.row("cannot", mark("what it cannot do"), desk.option_cells(cell), cautions)


def short(text: str) -> str:
    """Return the first sentence, or what stands before its semicolon; what follows a colon is what counts."""
    for place, letter in enumerate(text):
        if letter in ".;" and text[place + 1 : place + 2] in ("", " ") and place > 12:
            return text[:place] + "."
    return text


_UNIT = re.compile(
    r"(?<=[\d\u2069]) (?=(?:mm|g|D|Δ|cm|m|%|times|EUR|prism)(?![\w]))"
    r"|(?<=[\d\u2069]) (?=/ )|(?<=[\d\u2069]\u00a0/) (?=[\d\u2066])"
)


# A number kept apart from words that run to the left, and the unit behind it, which belongs inside.
_APART = re.compile(r"\u2069\u00a0(mm|g|D|Δ|cm|m|%)(?!\w)")


def unbroken(text: str) -> str:
    """Return a text in which no line ends between a number and its unit, nor turns the two round."""
    joined = _UNIT.sub("\N{NO-BREAK SPACE}", _UNIT.sub("\N{NO-BREAK SPACE}", text))
    return _APART.sub("\u00a0\\1\u2069", joined)
