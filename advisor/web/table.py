"""A comparison as a text table for a terminal and as rows of a CSV file."""

import csv
import io
import re
import unicodedata
from collections.abc import Iterable, Iterator, Sequence

from advisor.counsel.comparison import Advice, AdvisedOption, Caution, Comparison
from advisor.counsel.layout import ROWS, pairs_of, rows_present, two_eyes
from advisor.counsel.lens_figures import LensPair
from advisor.counsel.phrases import mark
from advisor.counsel.second_image_words import beside, lead
from advisor.web.figure_rows import unbroken
from advisor.web.language import Language

WIDTH = 26
SECOND_IMAGE = mark("second image")
WORN_NOW = mark("Worn now")
# OWASP, CSV Injection: how a formula begins, the signs in full width as well, behind spaces, quotation marks and signs
# of no width that a spreadsheet may drop. Where the comma is the decimal sign, a spreadsheet parts cells by semicolons
# and our quotation marks do not hold a cell together, so a formula may also begin behind a semicolon, tab or line end.
_SIGNS = "=+@\uff1d\uff0b\uff0d\uff20-"
_DROPPED = r"[\s\"\x00-\x1f\u200b-\u200f\u2060\ufeff]*"
FORMULA_START = re.compile(rf"[\t\r\n]|{_DROPPED}[{_SIGNS}]")
FORMULA_BEHIND = re.compile(rf"([;\t\r\n]{_DROPPED})(?=[{_SIGNS}])")
PLAIN_NUMBER = re.compile(r"[+-]?\d+([.,]\d+)?", re.ASCII)
CSV_HEAD = ["file", "reference", "option", "eye", "row", "value"]


def shown_width(text: str) -> int:
    """Return how many columns a text takes in a terminal."""
    return sum(2 if unicodedata.east_asian_width(c) in "WF" else not unicodedata.combining(c) for c in text)


def one_line(text: str) -> str:
    """Return a text that cannot move a terminal's cursor or start a line of its own."""
    return "".join(c if c.isprintable() else "\N{REPLACEMENT CHARACTER}" for c in text)


def _padded(text: str, width: int, *, right: bool = False) -> str:
    room = " " * max(0, width - shown_width(text))
    return room + text if right else text + room


def _wrapped(text: str, width: int) -> list[str]:
    lines = [""]
    for word in unbroken(" ".join(text.split())).split(" "):
        if lines[-1] and shown_width(lines[-1]) + 1 + shown_width(word) > width:
            lines.append("")
        lines[-1] = f"{lines[-1]} {word}".strip()
    return [one.replace("\N{NO-BREAK SPACE}", " ") for one in lines]


def text_table(comparison: Comparison, *, title: str, currency: str, language: Language) -> str:
    """Return the comparison as text: one column a pair, one row a figure, then warnings and cautions.

    The pair worn now has the last column, without a price.
    """
    _ = language.gettext
    options, worn, pairs = comparison.options, comparison.worn_now, pairs_of(comparison)
    heads = [_wrapped(f"{option.index + 1}  {option.label}", WIDTH) for option in options]
    heads += [] if worn is None else [_wrapped(f"{_(WORN_NOW)}: {worn.label}", WIDTH)]
    rows = rows_present(comparison)
    labels = [_(row.label) for row in rows] + [_("price of the pair"), _(SECOND_IMAGE)]
    first = max(shown_width(label) for label in labels) + 2

    def line(label: str, cells: Iterable[str]) -> str:
        return (_padded(label, first) + "  ".join(_padded(cell, WIDTH, right=True) for cell in cells)).rstrip()

    title = one_line(title)
    lines = [title, "=" * shown_width(title)]
    for k in range(max(len(head) for head in heads)):
        lines.append(line("", [head[k] if k < len(head) else "" for head in heads]))
    lines.append("-" * (first + (WIDTH + 2) * len(pairs) - 2))
    prices = [language.money(option.price, currency=currency) for option in options]
    lines.append(line(_("price of the pair"), prices + ["–"] * (len(pairs) - len(options))))
    lines += [line(_(row.label), [two_eyes(row, pair, language) for pair in pairs]) for row in rows]
    for label, cells in _second_image(pairs, language):
        broken = [_wrapped(cell, WIDTH) for cell in cells]
        for k in range(max(len(cell) for cell in broken)):
            lines.append(line(label if k == 0 else "", [cell[k] if k < len(cell) else "" for cell in broken]))
    lines.append("")
    for option in options:
        lines += [f"{_('Option')} {option.index + 1}: {refusal.text}" for refusal in option.refused]
        lines += [f"{_('Option')} {option.index + 1}: {note.text}" for note in option.notes]
    if worn is not None:
        lines += [f"{_(WORN_NOW)}: {note.text}" for note in (*worn.basis, *worn.notes)]
    if comparison.advice is not None:
        lines += [*advice_lines(comparison.advice, currency=currency, language=language), ""]
    lines += [f"{_('Warning')}: {warning.text}" for warning in comparison.warnings]
    if comparison.advice is not None:
        for caution in comparison.advice.cautions:
            some = len(caution.options) < len(options)
            which = f" ({', '.join(str(index + 1) for index in caution.options)})" if some else ""
            lines.append(f"{_('Caution')}{which}: {caution.text}")
        lines += [f"{_('Caution')} ({_('as advised')}): {caution.text}" for caution in _of_advised(comparison.advice)]
    if comparison.defaults_used:
        lines.append(f"{_('Defaults used')}: {', '.join(comparison.defaults_used)}")
    return "\n".join(one_line(text) for text in lines).rstrip() + "\n"


def _second_image(pairs: Sequence[LensPair], language: Language) -> list[tuple[str, list[str]]]:
    """Return the second image in words, what is seen and where, then how sure it is; no row where nothing is told."""
    _ = language.gettext
    spoken = [lead(pair, language) or "–" for pair in pairs]
    beneath = [beside(pair, language) for pair in pairs]
    if set(spoken) == {"–"} and not any(beneath):
        return []
    rows = [(_(SECOND_IMAGE), spoken)]
    for k in range(max(len(notes) for notes in beneath)):
        rows.append(("", [notes[k] if k < len(notes) else "" for notes in beneath]))
    return rows


def advice_lines(advice: Advice, *, currency: str, language: Language) -> list[str]:
    """Return the advice as text: what is free first, then the three pairs or the two, what they cost and why."""
    _ = language.gettext

    def named(words: str, pair: AdvisedOption) -> str:
        place = _("option %(number)s") % {"number": pair.index + 1} if pair.index is not None else _("not laid out")
        return f"{words}: {pair.label}, {language.money(pair.price, currency=currency)} ({place})"

    lines = [f"{_('Excluded')} ({entry.option + 1}): {entry.text}" for entry in advice.excluded or []]
    lines += [f"{_('Free first')}: {remedy.text}" for remedy in advice.free_first or []]
    if advice.cheapest_that_meets_every_must is not None:
        lines.append(named(_("Cheapest that meets every must"), advice.cheapest_that_meets_every_must))
    if advice.recommended is not None:
        lines.append(named(_("Recommended"), advice.recommended))
        lines += [f"  + {reason.text}" for reason in advice.because or []]
        lines += [f"  - {loss.text}" for loss in advice.gives_up or []]
    else:
        lines += [f"{_('Recommended')}: {reason.text}" for reason in advice.because or []]
    lines += [f"  {pair.text} {named(_('Pair'), pair)}" for pair in advice.two_pairs or []]
    if advice.next_best is not None:
        lines.append(named(_("Next best"), advice.next_best))
    if advice.robust is not None:
        lines.append(f"{_('How sure')}: {advice.robust}.")
    return lines + [f"{_('What would change it')}: {change.text}" for change in advice.would_change or []]


def _of_advised(advice: Advice) -> list[Caution]:
    """Return the cautions of what is recommended that apply to nothing laid out."""
    told = {caution.key for caution in advice.cautions}
    pairs = [advice.recommended, *(advice.two_pairs or [])]
    found = {caution.key: caution for pair in pairs if pair is not None for caution in pair.cautions}
    return [caution for key, caution in found.items() if key not in told]


def harmless(cell: str) -> str:
    """Return a text cell that no spreadsheet takes for a formula (OWASP, CSV Injection); a plain number is none."""
    if PLAIN_NUMBER.fullmatch(cell):
        return cell
    safe = FORMULA_BEHIND.sub(r"\1'", cell)
    return "'" + safe if FORMULA_START.match(safe) else safe


def csv_rows(comparison: Comparison, *, file: str) -> list[list[str | float]]:
    """Return one row for each figure; numbers stay bare numbers in the units of the comparison.

    Options are numbered from 1 on; the pair worn now stands last as ``worn_now`` and has no price.
    """
    found: list[list[str | float]] = []
    start: list[str | float] = [file, comparison.reference or ""]
    for option in comparison.options:
        if option.price is not None:
            found.append([*start, option.index + 1, "both", "price", option.price])
        found += [[*start, option.index + 1, *figure] for figure in _figures(option)]
    if comparison.worn_now is not None:
        found += [[*start, "worn_now", *figure] for figure in _figures(comparison.worn_now)]
    return found


def _figures(pair: LensPair) -> Iterator[tuple[str, str, float]]:
    """Yield the eye, the row and the value of every figure that a pair has."""
    for name, eye in (("right", pair.right), ("left", pair.left)):
        for row in ROWS:
            value = None if eye is None else row.value(eye)
            if value is not None:
                yield name, row.key, value


def csv_text(rows: Iterable[list[str | float]], *, head: bool = True) -> str:
    """Return rows as CSV text (RFC 4180) in which no text is a formula."""
    target = io.StringIO()
    writer = csv.writer(target)
    if head:
        writer.writerow(CSV_HEAD)
    writer.writerows([harmless(cell) if isinstance(cell, str) else cell for cell in row] for row in rows)
    return target.getvalue()
