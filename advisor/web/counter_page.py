"""What the Counter shows for a form as typed: the visit it makes, its figures, and every fault beside its field."""

import json
import secrets
from collections.abc import Mapping
from dataclasses import dataclass, field, replace
from typing import Any

from flask import render_template
from werkzeug.datastructures import MultiDict

from advisor.counsel.compare import answer_of, compute
from advisor.counsel.comparison import Comparison
from advisor.counsel.faults import Fault, Faults
from advisor.counsel.phrases import mark
from advisor.counsel.section_drawing import Section, sections
from advisor.counsel.visit import Visit
from advisor.counsel.words import PLACES, QUESTIONS
from advisor.records.drafts import SavedDraft
from advisor.records.store import Store
from advisor.records.visits import SavedVisit
from advisor.web import demo_wearers, labels
from advisor.web.advice_view import LAY, AdviceView, advice_view, laid_out_fields
from advisor.web.asked import first_questions, further_questions, opened_by
from advisor.web.figure_rows import FigureTable, figure_table
from advisor.web.forms import (
    COUNT,
    EYES,
    MOST_OPTIONS,
    Fields,
    by_field,
    fields_from_form,
    is_untouched,
    names_of,
    option_count,
    visit_from_fields,
    visit_to_fields,
    with_option_added,
    with_option_laid_out,
    with_option_removed,
)
from advisor.web.screen import screen
from advisor.web.stock_loader import Shelf

WAITING = {"right": mark("the right sphere"), "left": mark("the left sphere")}


@dataclass(frozen=True)
class Editing:
    """A form being filled in: its fields as typed, and where they came from.

    ``token`` is drawn when the form is first shown, so that a form sent twice is saved once.
    """

    fields: Fields
    token: str = field(default_factory=lambda: secrets.token_hex(16))
    draft_id: str | None = None
    draft_edit: int | None = None
    visit_id: str | None = None
    visit_edit: int | None = None


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


def blank(shelf: Shelf) -> Editing:
    """Return an empty form with the shop's default options."""
    options = shelf.stock.shop.default_options or ()
    fields = {COUNT: str(min(max(len(options), 1), MOST_OPTIONS)), "baseline": "0"}
    empty = Visit.model_validate({"prescription": {eye: {"sphere": 0.0} for eye in EYES}})
    filled = visit_to_fields(empty, default_options=options[:MOST_OPTIONS]) | fields
    return Editing(filled | {f"prescription.{eye}.sphere": "" for eye in EYES})


def of_visit(saved: SavedVisit, visit: Visit, shelf: Shelf) -> Editing:
    """Return the form filled with a saved visit."""
    return replace(of_copy(visit, shelf), visit_id=saved.id, visit_edit=saved.edit)


def of_copy(visit: Visit, shelf: Shelf) -> Editing:
    """Return the form filled with a visit that is not saved as such: a copy, or a demo wearer."""
    fields = visit_to_fields(visit, default_options=shelf.stock.shop.default_options or ())
    return Editing({**fields, "baseline": fields["baseline"] or "0"})


def of_draft(draft: SavedDraft) -> Editing:
    """Return the form that a draft keeps."""
    kept = json.loads(draft.fields_json)
    return Editing(kept["fields"], kept["token"], draft.id, draft.edit, draft.visit_id, draft.visit_edit)


def of_form(form: MultiDict[str, str]) -> Editing:
    """Return the form that was sent."""
    return Editing(
        fields_from_form(form),
        form.get("token", "")[:64] or secrets.token_hex(16),
        form.get("draft") or None,
        _whole(form.get("draft_edit", "")),
        form.get("visit") or None,
        _whole(form.get("visit_edit", "")),
    )


def _whole(text: str) -> int | None:
    return int(text) if text.isascii() and text.isdigit() and len(text) < 10 else None


def keep(store: Store, editing: Editing) -> Editing:
    """Keep the form as a draft; an untouched one is not worth keeping."""
    if editing.draft_id is None and is_untouched(editing.fields):
        return editing
    text = json.dumps({"fields": editing.fields, "token": editing.token}, ensure_ascii=False)
    if editing.draft_id is None:
        begun = editing.visit_id is not None and editing.visit_edit is not None
        source = {"visit_id": editing.visit_id, "visit_edit": editing.visit_edit} if begun else {}
        draft = store.save_draft(text, **source)  # type: ignore[arg-type]  # both or neither
    else:
        draft = store.save_draft(text, draft_id=editing.draft_id, edit_seen=editing.draft_edit)
    return replace(editing, draft_id=draft.id, draft_edit=draft.edit)


def changed(editing: Editing, wish: str) -> Editing:
    """Return the form after a button: ``add``, ``remove-2``, ``lay:`` with an option's fields, or none."""
    if wish == "add":
        return replace(editing, fields=with_option_added(editing.fields))
    if wish.startswith(LAY):
        return replace(editing, fields=with_option_laid_out(editing.fields, laid_out_fields(wish)))
    if wish.startswith("remove-") and (place := _whole(wish.removeprefix("remove-"))) is not None:
        return replace(editing, fields=with_option_removed(editing.fields, place))
    return editing


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


def context(
    editing: Editing, shelf: Shelf, *, notice: str = "", saved: bool = False, changed: bool = False
) -> dict[str, Any]:
    """Return everything the Counter's templates need."""
    worked = work_out(editing.fields, shelf)
    return {
        "editing": editing,
        "fields": editing.fields,
        "worked": worked,
        "faults": {name: [sentence(one) for one in found] for name, found in worked.faults.items()},
        "places": {name: _place_words(name) for name in worked.faults},
        "notes": _notes(worked.answer),
        "stock": shelf.stock,
        "currency": shelf.stock.currency,
        "count": option_count(editing.fields),
        "most": MOST_OPTIONS,
        "labels": labels,
        "question_words": QUESTIONS,
        "first_questions": first_questions(),
        "further_questions": further_questions(editing.fields, worked.opened or frozenset()),
        "demos": demo_wearers.names(),
        "notice": notice,
        "saved": saved,
        "changed": changed,
    }


def sentence(one: Fault) -> str:
    """Write a fault's sentence alone: it stands beside its field."""
    words = replace(one, file="", field="").line(screen().gettext)
    return words[:1].upper() + words[1:]


def _place_words(name: str) -> str:
    """Write the place of a field for a reader: ``options.0.coating.front`` is "option 1 coating front"."""
    speak = screen().gettext
    if name in PLACES:
        return speak(PLACES[name])
    parts = name.removesuffix("_mm").removesuffix("_deg").removesuffix("_cm").replace("options.", "option.").split(".")
    return " ".join(str(int(part) + 1) if part.isdigit() else speak(part.replace("_", " ")) for part in parts)


def _notes(answer: Comparison | None) -> list[str]:
    """Return what should be looked at again."""
    return [] if answer is None else [warning.text for warning in answer.warnings]


def page(editing: Editing, shelf: Shelf, *, notice: str = "", saved: bool = False, changed: bool = False) -> str:
    """Return the whole Counter; ``saved`` while a visit is as stored, ``changed`` where another save came first."""
    return render_template(
        "counter.html", live=False, **context(editing, shelf, notice=notice, saved=saved, changed=changed)
    )


def part(editing: Editing, shelf: Shelf, *, notice: str = "") -> str:
    """Return what changes while somebody types."""
    return render_template("parts/figures.html", live=True, **context(editing, shelf, notice=notice))
