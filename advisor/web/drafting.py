"""A form being filled in: where its fields came from, and the draft it is kept in with what can be undone."""

import json
import re
import secrets
from collections.abc import Mapping
from dataclasses import asdict, dataclass, field, replace

from werkzeug.datastructures import MultiDict

from advisor.counsel.visit import Visit, parse_visit
from advisor.records.drafts import SavedDraft
from advisor.records.store import Store
from advisor.records.visits import SavedVisit, VisitMissing
from advisor.web.filled_form import visit_to_fields
from advisor.web.form_fields import COUNT, EYES, MOST_OPTIONS, Fields, fields_from_form, is_untouched
from advisor.web.stock_loader import Shelf, current_shelf
from advisor.web.undoing import Past, difference, is_typed, recorded, redone, undone
from advisor.web.wishes import REDO, UNDO, wished

MOST_TEXT = 20_000  # characters of one field that a draft keeps
MOST_OBJECT = 500_000  # of what a visit file gave in place, or the form has no field for

_TURNS = {UNDO: undone, REDO: redone}


def new_token() -> str:
    """Draw a token for a form that is shown for the first time."""
    return secrets.token_hex(16)


@dataclass(frozen=True)
class Editing:
    """A form being filled in: its fields as typed, and where they came from.

    ``token`` is drawn when the form is first shown, so that a form sent twice is saved once. ``past`` is None for a
    form that was just sent: what it changed is found out when it is kept. A form that is not ``is_whole`` holds a text
    too long to be kept.
    """

    fields: Fields
    token: str = field(default_factory=new_token)
    draft_id: str | None = None
    draft_edit: int | None = None
    visit_id: str | None = None
    visit_edit: int | None = None
    past: Past | None = None
    is_whole: bool = True


def blank(shelf: Shelf) -> Editing:
    """Return an empty form with the shop's default options."""
    options = shelf.stock.shop.default_options or ()
    fields = {COUNT: str(min(max(len(options), 1), MOST_OPTIONS)), "baseline": "0"}
    empty = Visit.model_validate({"prescription": {eye: {"sphere": 0.0} for eye in EYES}})
    filled = visit_to_fields(empty, default_options=options[:MOST_OPTIONS]) | fields
    return Editing(filled | {f"prescription.{eye}.sphere": "" for eye in EYES}, past=Past())


def of_visit(saved: SavedVisit, visit: Visit, shelf: Shelf) -> Editing:
    """Return the form filled with a saved visit."""
    return replace(of_copy(visit, shelf), visit_id=saved.id, visit_edit=saved.edit)


def of_copy(visit: Visit, shelf: Shelf) -> Editing:
    """Return the form filled with a visit that is not saved as such: a copy, or a demo wearer."""
    fields = visit_to_fields(visit, default_options=shelf.stock.shop.default_options or ())
    return Editing({**fields, "baseline": fields["baseline"] or "0"}, past=Past())


def of_draft(draft: SavedDraft) -> Editing:
    """Return the form that a draft keeps; one kept before there was undo has nothing to undo."""
    kept = json.loads(draft.fields_json)
    past = Past(tuple(kept.get("before", ())), tuple(kept.get("after", ())))
    return Editing(kept["fields"], kept["token"], draft.id, draft.edit, draft.visit_id, draft.visit_edit, past)


def of_form(form: MultiDict[str, str]) -> Editing:
    """Return the form that was sent."""
    token = form.get("token", "")
    return Editing(
        fields_from_form(form),
        token if re.fullmatch("[0-9a-f]{32}", token) else new_token(),
        _key(form.get("draft", "")),
        _whole(form.get("draft_edit", "")),
        _key(form.get("visit", "")),
        _whole(form.get("visit_edit", "")),
    )


def apart(editing: Editing, *, cut_loose: bool = False) -> Editing:
    """Return the form as one of its own, in no draft yet; cut loose from its visit as well where that is gone."""
    own = Editing(editing.fields, past=Past())
    return own if cut_loose else replace(own, visit_id=editing.visit_id, visit_edit=editing.visit_edit)


def _key(text: str) -> str | None:
    """Return what may be an identifier of the records; a longer one would not go into a column."""
    return text if re.fullmatch(r"[\w-]{1,32}", text, re.ASCII) else None


def _whole(text: str) -> int | None:
    return int(text) if text.isascii() and text.isdigit() and len(text) < 10 else None


def keep(store: Store, sent: Editing, *, wish: str = "") -> Editing:
    """Keep the form as a draft, after what a button asked for; an untouched one is not worth keeping.

    A form sent twice is kept once. One that another window has changed raises DraftChanged, one that is gone
    DraftMissing; nothing is overwritten.
    """
    known = _known(store, sent)
    held, done = _after(known, sent, wish)
    if sent.draft_id is None:
        return done if is_untouched(done.fields) else _marked(done, _begin(store, done, held))
    came_late = sent.draft_edit not in (None, known.draft_edit)
    if _is_there(known, sent, held, wish) and (came_late or known.past == done.past):
        fields = known.fields if done.is_whole else done.fields
        return replace(done, fields=fields, draft_edit=known.draft_edit, past=known.past)
    seen = known.draft_edit if sent.draft_edit is None else sent.draft_edit
    return _marked(done, store.save_draft(_text(done, held), draft_id=sent.draft_id, edit_seen=seen))


def _is_there(known: Editing, sent: Editing, held: Fields, wish: str) -> bool:
    """Tell whether the draft says already what this form comes to: the same press came twice, or nothing changed."""
    if wish == REDO and not difference(undone(known.fields, known.past or Past())[0], sent.fields):
        return True
    return not difference(known.fields, held)


def _known(store: Store, sent: Editing) -> Editing:
    """Return the form as it was before this one was sent: its draft, the visit it began from, or an empty one."""
    if sent.draft_id is not None:
        return of_draft(store.get_draft(sent.draft_id))
    if sent.past is not None:
        return sent
    shelf = current_shelf(store)
    if sent.visit_id is None or sent.visit_edit is None:
        return blank(shelf)
    try:
        saved = store.get_visit(sent.visit_id)
    except VisitMissing:
        return replace(sent, past=Past())
    seen = saved.edit == sent.visit_edit
    return of_visit(saved, parse_visit(saved.visit_json), shelf) if seen else replace(sent, past=Past())


def _after(known: Editing, sent: Editing, wish: str) -> tuple[Fields, Editing]:
    """Return what is kept of the form after a button, and the form itself with what can now be undone."""
    held = _held(sent.fields, known.fields)
    past = recorded(known.past or Past(), known.fields, held)
    if wish in _TURNS:
        held, past = _TURNS[wish](held, past)
        fields = held
    else:
        fields, before = wished(sent.fields, wish), held
        held = _held(fields, before)
        past = recorded(past, before, held)
    token = sent.token if sent.draft_id is None else known.token
    return held, replace(sent, fields=fields, past=past, token=token, is_whole=held == fields)


def _held(fields: Mapping[str, str], earlier: Mapping[str, str]) -> Fields:
    """Return the fields with the earlier text in place of one too long to be kept; its own fault says so."""
    return {name: earlier.get(name, "") if _is_too_long(name, text) else text for name, text in fields.items()}


def _is_too_long(name: str, text: str) -> bool:
    given_in_place = text.startswith("{") and not is_typed(name)
    return len(text) > (MOST_OBJECT if given_in_place else MOST_TEXT)


def _text(editing: Editing, held: Fields) -> str:
    content = {"fields": held, "token": editing.token, **asdict(editing.past or Past())}
    return json.dumps(content, ensure_ascii=False)


def _begin(store: Store, editing: Editing, held: Fields) -> SavedDraft:
    """Begin a draft; one of a visit that has been erased meanwhile is a form of its own."""
    text = _text(editing, held)
    if editing.visit_id is None or editing.visit_edit is None:
        return store.save_draft(text)
    try:
        store.get_visit(editing.visit_id)
    except VisitMissing:
        return store.save_draft(text)
    return store.save_draft(text, visit_id=editing.visit_id, visit_edit=editing.visit_edit)


def _marked(editing: Editing, draft: SavedDraft) -> Editing:
    return replace(
        editing, draft_id=draft.id, draft_edit=draft.edit, visit_id=draft.visit_id, visit_edit=draft.visit_edit
    )
