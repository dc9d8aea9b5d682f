"""What the Counter shows for a form as typed: the visit it makes, its figures, and every fault beside its field."""

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any

from flask import render_template

from advisor.counsel.compare import answer_of, compute
from advisor.counsel.comparison import Comparison
from advisor.counsel.faults import Fault, Faults
from advisor.counsel.phrases import mark
from advisor.counsel.section_drawing import Section, sections
from advisor.counsel.words import QUESTIONS
from advisor.web import demo_wearers, labels
from advisor.web.advice_view import AdviceView, advice_view
from advisor.web.asked import first_questions, further_questions, opened_by
from advisor.web.drafting import Editing
from advisor.web.field_words import place_words
from advisor.web.figure_rows import FigureTable, figure_table
from advisor.web.form_fields import EYES, MOST_OPTIONS, by_field, names_of, option_count
from advisor.web.forms import visit_from_fields
from advisor.web.pasted_line import said_of
from advisor.web.screen import screen
from advisor.web.sentences import fault_sentence
from advisor.web.stock_loader import Shelf
from advisor.web.told import NOTHING, Told
from advisor.web.traced_frame import frame_in
from advisor.web.undo_words import turns
from advisor.web.undoing import Past

WAITING = {"right": mark("the right sphere"), "left": mark("the left sphere")}


@dataclass(frozen=True)
class Worked:
    """What a form comes to: the figures, or what stands in their way."""

    table: FigureTable | None = None
    answer: Comparison | None = None
    faults: Mapping[str, list[Fault]] = field(default_factory=dict)
    waiting: tuple[str, ...] = ()
    sections: tuple[Section, ...] = ()
    advice: AdviceView | None = None
    opened: frozenset[str] | None = None


def work_out(fields: Mapping[str, str], shelf: Shelf) -> Worked:
    """Work out the figures of a form, or say what stands in their way."""
    speaker = screen()
    try:
        visit = visit_from_fields(fields)
        computed = compute(visit, shelf.stock)
    except Faults as error:
        return _hindered(error, fields)
    answer = answer_of(computed, translator=speaker)
    currency = shelf.stock.currency
    table = figure_table(computed, answer, baseline=visit.baseline or 0, currency=currency, speaker=speaker)
    return Worked(
        table,
        answer,
        sections=tuple(sections(computed)),
        advice=advice_view(computed, answer, currency=currency, speaker=speaker),
        opened=opened_by(computed.case),
    )


def _hindered(error: Faults, fields: Mapping[str, str]) -> Worked:
    """Sort the faults; a sphere that is not typed yet is waited for, not wrong."""
    spheres = {f"prescription.{eye}.sphere": eye for eye in EYES}
    found = by_field(error.faults, names_of(fields))
    missing = [place for place in spheres if not fields.get(place, "").strip()]
    faults = {place: found[place] for place in found if place not in missing}
    return Worked(faults=faults, waiting=tuple(WAITING[spheres[place]] for place in missing))


def context(editing: Editing, shelf: Shelf, *, told: Told = NOTHING, saved: bool = False) -> dict[str, Any]:
    """Return everything the Counter's templates need."""
    worked = work_out(editing.fields, shelf)
    return {
        "editing": editing,
        "fields": editing.fields,
        "worked": worked,
        "faults": {name: [fault_sentence(one, screen()) for one in found] for name, found in worked.faults.items()},
        "places": {name: place_words(name, screen()) for name in worked.faults},
        "notes": _notes(worked.answer),
        "stock": shelf.stock,
        "currency": shelf.stock.currency,
        "count": option_count(editing.fields),
        "most": MOST_OPTIONS,
        "labels": labels,
        "question_words": QUESTIONS,
        "first_questions": first_questions(),
        "further_questions": further_questions(editing.fields, worked.opened or frozenset()),
        "demos": demo_wearers.names(screen()),
        "turns": turns(editing.fields, editing.past or Past(), screen()),
        "line_said": said_of(editing.fields),
        "frame_in": frame_in,
        "told": told,
        "saved": saved,
    }


def _notes(answer: Comparison | None) -> list[str]:
    """Return what should be looked at again."""
    return [] if answer is None else [warning.text for warning in answer.warnings]


def page(editing: Editing, shelf: Shelf, *, told: Told = NOTHING, saved: bool = False) -> str:
    """Return the whole Counter; ``saved`` while a visit is as stored."""
    return render_template("counter.html", live=False, **context(editing, shelf, told=told, saved=saved))


def part(editing: Editing, shelf: Shelf, *, told: Told = NOTHING) -> str:
    """Return what changes while somebody types."""
    return render_template("parts/figures.html", live=True, **context(editing, shelf, told=told))
