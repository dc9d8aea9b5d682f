"""Two counters on one visit: what the later one has, beside what is stored now, field by field."""

import hashlib
from collections.abc import Mapping
from dataclasses import dataclass, replace

from advisor.counsel.visit import parse_visit
from advisor.records.visits import SavedVisit
from advisor.web.drafting import Editing
from advisor.web.field_words import place_words
from advisor.web.filled_form import visit_to_fields
from advisor.web.form_fields import COUNT, KEPT, LINE, names_of
from advisor.web.forms import visit_from_fields
from advisor.web.names_shown import covered
from advisor.web.saving import dated
from advisor.web.screen import screen
from advisor.web.stock_loader import Shelf
from advisor.web.undoing import difference
from advisor.web.value_words import value_words

NAMED = ("wearer.name", "note")


@dataclass(frozen=True)
class Differing:
    """One field in which both differ: where it stands, what this form has, what is stored."""

    field: str
    place: str
    mine: str
    stored: str


@dataclass(frozen=True)
class Conflict:
    """What is stored now, by its edit, and every field in which the form differs from it."""

    visit_id: str
    edit: int
    changed_at: str
    fields: tuple[Differing, ...]


def conflict_of(sent: Editing, stored: SavedVisit, shelf: Shelf) -> Conflict:
    """Lay a form that can be saved beside the visit that is stored; both are written as a form writes them."""
    options = shelf.stock.shop.default_options or ()
    mine = visit_to_fields(dated(visit_from_fields(sent.fields)), default_options=options)
    theirs = visit_to_fields(parse_visit(stored.visit_json), default_options=options)
    differing = difference(theirs, mine).keys() - {LINE}
    order = [COUNT, *names_of(mine), *names_of(theirs), KEPT]
    places = [name for name in dict.fromkeys(order) if name in differing]
    fields = tuple(_differing(name, mine, theirs, shelf) for name in places)
    return Conflict(stored.id, stored.edit, stored.changed_at, fields)


def _differing(name: str, mine: Mapping[str, str], theirs: Mapping[str, str], shelf: Shelf) -> Differing:
    texts = (value_words(name, fields.get(name, ""), shelf.stock, screen()) for fields in (mine, theirs))
    shown = [covered(text) if name in NAMED else text for text in texts]
    return Differing(name, place_words(name, screen()), *shown)


def over(editing: Editing, visit_id: str, *, edit: int) -> Editing:
    """Return the form as one that has seen this edit of the visit; sent twice, it is the same form both times."""
    token = hashlib.sha256(f"{editing.token} over {visit_id} {edit}".encode()).hexdigest()[:32]
    return replace(editing, token=token, visit_id=visit_id, visit_edit=edit)
