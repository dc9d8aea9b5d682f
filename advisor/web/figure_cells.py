"""Cells of the Counter's rows: figures, differences from the baseline, and the numbers that were put in."""

from collections.abc import Callable, Iterable
from dataclasses import dataclass, replace

from advisor.counsel.compare import Computed
from advisor.counsel.comparison import Caution, Comparison, OptionFigures
from advisor.counsel.explanations import EXPLANATIONS, At, Explanation, PutIn
from advisor.counsel.layout import POINTS, ROWS, TIMES, Row, pairs_of, parted, rows_present, two_eyes
from advisor.counsel.lens_figures import FormFigures, LensPair
from advisor.counsel.phrases import mark
from advisor.web.language import Language

SAME = mark("same")
ROW_OF = {row.key: row for row in ROWS}


@dataclass(frozen=True)
class Line:
    """One figure of a cell: small words before it, the figure, and the difference from the baseline."""

    text: str
    words: str = ""
    difference: str = ""


@dataclass(frozen=True)
class Cell:
    """What one pair shows in one row; ``bar_mm`` is a length drawn to scale, ``swatch`` a colour with its word.

    ``is_worn`` marks the pair worn now, which is no option.
    """

    lines: tuple[Line, ...] = ()
    notes: tuple[str, ...] = ()
    bar_mm: float | None = None
    swatch: tuple[str, str] | None = None
    is_worn: bool = False


DASH = Cell((Line("–"),))


@dataclass(frozen=True)
class Given:
    """One number that was put in, pair by pair."""

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
class Desk:
    """What every row needs: the computed visit, its answer, the baseline and the language."""

    computed: Computed
    answer: Comparison
    base: OptionFigures
    currency: str
    speaker: Language

    @property
    def pairs(self) -> list[LensPair]:
        """The options, and last the pair worn now where something of it is known."""
        return pairs_of(self.answer)

    def cells(self, make: Callable[[LensPair], Cell]) -> tuple[Cell, ...]:
        """Make one cell for each pair; a refused option, or a worn pair that cannot be worked out, has only dashes."""
        made = (DASH if pair.right is None else make(pair) for pair in self.pairs)
        return tuple(
            replace(cell, is_worn=pair is self.answer.worn_now) for cell, pair in zip(made, self.pairs, strict=True)
        )

    def option_cells(self, make: Callable[[OptionFigures], Cell]) -> tuple[Cell, ...]:
        """Make one cell for each option, and a dash for the worn pair: it is not for sale."""
        worn = () if self.answer.worn_now is None else (replace(DASH, is_worn=True),)
        return (*(make(option) for option in self.answer.options), *worn)

    def row(self, key: str, label: str, cells: tuple[Cell, ...], cautions: Iterable[Caution] = ()) -> FigureRow:
        """Join cells and explanation."""
        return FigureRow(key, self.speaker.gettext(label), cells, EXPLANATIONS[key], self._given(key), tuple(cautions))

    def _given(self, key: str) -> tuple[Given, ...]:
        explanation = EXPLANATIONS[key]
        found = [self._put_in(part) for part in explanation.put_in]
        present = rows_present(self.answer)
        for row in (ROW_OF[name] for name in explanation.rows):
            if row in present:
                texts = tuple(two_eyes(row, pair, self.speaker) for pair in self.pairs)
                found.append(Given(self.speaker.gettext(row.label), texts))
        return tuple(given for given in found if set(given.texts) != {"–"})

    def _put_in(self, part: PutIn) -> Given:
        texts = [self._both_eyes(part, At(self.computed.case, one, 0)) for one in self.computed.laid]
        if self.answer.worn_now is not None:
            worn = self.computed.worn_now
            texts.append("–" if worn is None else self._both_eyes(part, At(worn.case, worn.laid[0], 0)))
        return Given(self.speaker.gettext(part.label), tuple(texts))

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


def line(desk: Desk, row: Row, pair: LensPair, words: str = "") -> Line:
    """Return one figure of a pair with its difference from the baseline."""
    return Line(two_eyes(row, pair, desk.speaker), words, difference(desk, row, pair))


def difference(desk: Desk, row: Row, pair: LensPair) -> str:
    """Return the difference of both eyes from the baseline, "same" where none shows, nothing where none is known."""
    if pair is desk.base:
        return ""
    eyes = ((pair.right, desk.base.right), (pair.left, desk.base.left))
    pairs = [(figure_of(row, eye), figure_of(row, base)) for eye, base in eyes]
    if any(value is None or base is None for value, base in pairs):
        return ""
    texts = [row.difference(value, base, desk.speaker) for value, base in pairs]
    if not any(texts):
        return desk.speaker.gettext(SAME)
    if row.parts or row.unit == TIMES:
        return parted([text or desk.speaker.gettext(SAME) for text in texts], unit="")
    unit = desk.speaker.gettext(POINTS) if row.unit == "%" else row.unit
    return parted([text or f"0 {unit}".rstrip() for text in texts], unit=unit)


def figure_of(row: Row, eye: FormFigures | None) -> float | None:
    """Return the figure of one lens, None where there is no lens."""
    return None if eye is None else row.value(eye)
