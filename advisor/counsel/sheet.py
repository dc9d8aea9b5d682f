"""What a wearer's sheet says: blocks of phrases with figures, every figure taken from the comparison."""

import datetime as dt
from collections.abc import Callable, Collection, Mapping
from dataclasses import dataclass, replace
from typing import Literal

from advisor.counsel.care import CARE_TEXTS, care_lines
from advisor.counsel.case import Case
from advisor.counsel.caution_texts import CAUTION_TEXTS
from advisor.counsel.cautions import cautions_for
from advisor.counsel.compare import Computed, lens_light
from advisor.counsel.comparison import Comparison
from advisor.counsel.phrases import Phrase, mark
from advisor.counsel.reach import near_only
from advisor.counsel.sheet_facts import MOST_FACTS, bars, facts, size_change_percent
from advisor.counsel.sheet_lines import chosen, coating, come_back, first_days, phrases, purpose
from advisor.counsel.sheet_switches import DRAWN, MAY_BE_OFF
from advisor.counsel.sheet_texts import CARE_TITLE, HEADINGS, LINES, TITLE
from advisor.errors import TwolightError

Kind = Literal["lines", "do", "dont", "urgent"]
NOT_FOR = (
    "not-for-driving-tint",
    "not-for-night-driving-tint",
    "not-for-driving-design",
    "no-near",
    "not-eye-protection",
)
SAID_ELSEWHERE = ("coating-adds-no-strength", "not-promise-none", "blue-film-no-relief")

SHEET_TEXTS: Mapping[str, str] = LINES | CARE_TEXTS | {key: words.sheet for key, words in CAUTION_TEXTS.items()}


class NoSuchOption(TwolightError):
    """An option that is not laid out was asked for on paper."""

    text = mark("There is no option %(number)s; %(count)s are laid out.")


class OptionNotMade(NoSuchOption):
    """An option that cannot be made was asked for on paper."""

    text = mark("This option cannot be made, so there is nothing to print; choose another one.")


class NothingChosen(NoSuchOption):
    """Several options are laid out and none is marked as to be ordered."""

    text = mark("Nobody has said which option: mark one as to be ordered, or give its number.")


@dataclass(frozen=True)
class Block:
    """One part of a sheet: a heading and its lines."""

    key: str
    kind: Kind
    lines: tuple[Phrase, ...]

    @property
    def heading(self) -> str:
        """The heading, in English, marked for translation."""
        return HEADINGS[self.key]


@dataclass(frozen=True)
class Sheet:
    """Everything a wearer's sheet says; the template only lays it out. ``bars`` are shares of light by their words."""

    title: str
    name: str | None
    reference: str | None
    blocks: tuple[Block, ...]
    urgent: Block | None = None
    bars: tuple[tuple[str, float], ...] = ()


def choose(computed: Computed, *, number: int | None, answer: Comparison | None = None) -> int:
    """Return the index of the option a paper is about.

    ``number`` counts from 1. Left out: what was ordered, else the only one that can be made. A sheet may go on from
    there: with an ``answer``, what it recommends or ranks first among the options laid out. An order never guesses.

    Raises
    ------
    NoSuchOption
        If it is not laid out, cannot be made, or nobody has said which one.
    """
    laid, visit = computed.laid, computed.case.visit
    makeable = [option.index for option in laid if not option.refused]
    if number is not None and number > len(laid):
        raise NoSuchOption(number=number, count=len(laid))
    index = visit.ordered if number is None else number - 1
    if index is None and len(makeable) == 1:
        index = makeable[0]
    if index is None and answer is not None and answer.advice is not None:
        best = answer.advice.recommended
        ranked = [best.index] if best is not None and best.index is not None else answer.advice.ranking or ()
        index = next(iter(ranked), None)
    if index is None and makeable:
        raise NothingChosen
    if index is None or index not in makeable:
        raise OptionNotMade
    return index


def wearer_sheet(
    computed: Computed, answer: Comparison, *, index: int, price: str | None, day: Callable[[dt.date], str]
) -> Sheet:
    """Return the sheet of one option; ``price`` is written as the language does, and ``day`` writes a date so."""
    case, laid, option = computed.case, computed.laid[index], answer.options[index]
    if option.right is None or option.left is None:
        raise OptionNotMade
    applied = cautions_for(case, laid, light=lens_light(computed, index))
    keys = {caution.key for caution in applied}
    cautions = [Phrase(caution.key, caution.figures) for caution in applied if CAUTION_TEXTS[caution.key].sheet]
    first = tuple(first_days(case, laid, size_percent=size_change_percent(option), cautions=keys))
    told = facts(
        option,
        option.right,
        laid,
        drives=not case.never_at_night and not near_only(case, laid.design),
        room=MOST_FACTS - sum("size_percent" in line.figures for line in first),
    )
    blocks = (
        Block("for", "lines", purpose(case, laid)),
        Block("not-for", "dont", tuple(line for line in cautions if line.code in NOT_FOR)),
        Block("notes", "lines", tuple(line for line in cautions if line.code not in (*NOT_FOR, *SAID_ELSEWHERE))),
        Block("chosen", "lines", tuple(chosen(case, laid, price=price))),
        Block("why", "lines", tuple(told)),
        Block("coating", "lines", tuple(coating(option.right, laid, cautions=keys))),
        Block("first-days", "lines", first),
        *care_blocks(case),
        Block("come-back", "lines", tuple(come_back(case, day=day))),
    )
    visit = case.visit
    return Sheet(
        title=TITLE,
        name=visit.wearer.name if visit.wearer else None,
        reference=visit.reference,
        blocks=tuple(block for block in blocks if block.lines),
        urgent=Block("today", "urgent", phrases(*(key for key in LINES if key.startswith("today-")))),
        bars=tuple(bars(option.right, laid)),
    )


def care_sheet(case: Case | None) -> Sheet:
    """Return the page about care alone, for one wearer or for anybody."""
    wearer = None if case is None else case.visit.wearer
    return Sheet(
        title=CARE_TITLE,
        name=wearer.name if wearer else None,
        reference=None if case is None else case.visit.reference,
        blocks=(*care_blocks(case), Block("come-back", "lines", phrases("back-fit", "back-damage"))),
    )


def care_blocks(case: Case | None) -> tuple[Block, Block]:
    """Return what to do and what to leave, in the order that matters for this wearer."""
    answers = {} if case is None else case.answers()
    if case is not None and case.is_child:
        answers = answers | {"child": "yes"}
    do, dont = (care_lines(answers, kind=kind) for kind in ("do", "dont"))
    return Block("do", "do", tuple(do)), Block("dont", "dont", tuple(dont))


def without_lines(sheet: Sheet, off: Collection[str]) -> Sheet:
    """Return a sheet without the lines a shop switched off; what it may not switch off stays, whatever is asked.

    A block without lines goes, and the bars go with the line they draw.
    """
    gone = frozenset(off).intersection(MAY_BE_OFF)
    kept = (
        replace(block, lines=tuple(line for line in block.lines if line.code not in gone)) for block in sheet.blocks
    )
    told = {line.code for block in sheet.blocks for line in block.lines}
    return replace(
        sheet,
        blocks=tuple(block for block in kept if block.lines),
        bars=() if gone.intersection(DRAWN, told) else sheet.bars,
    )
