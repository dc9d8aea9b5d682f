"""Drafts: the form as typed, kept while it is being filled in."""

from dataclasses import astuple, dataclass

from sqlalchemy import Connection, delete, insert, select, update

from advisor.counsel.phrases import mark
from advisor.errors import TwolightError
from advisor.records import tables

_DRAFT = tables.draft.c
KEPT_DAYS = 30  # a draft that nobody changed for so long, and that was never saved, is dropped


@dataclass(frozen=True)
class SavedDraft:
    """A draft as stored; ``visit_id`` and ``visit_edit`` say which state of which visit it began from."""

    id: str
    changed_at: str
    edit: int
    fields_json: str
    visit_id: str | None
    visit_edit: int | None


class DraftChanged(TwolightError):
    """The draft was changed elsewhere after the editor saw it; ``stored`` is what is there now."""

    text = mark("This form was changed in another window; nothing was overwritten. Reload it here.")

    def __init__(self, stored: SavedDraft) -> None:
        self.stored = stored
        super().__init__()


class DraftMissing(TwolightError):
    """There is no such draft, or it has been saved or erased."""

    text = mark("This form is no longer kept; it may have been saved or erased in another window.")


def find(connection: Connection, draft_id: str) -> SavedDraft:
    """Return a draft, or raise DraftMissing."""
    row = connection.execute(select(tables.draft).where(_DRAFT.id == draft_id)).first()
    if row is None:
        raise DraftMissing
    return SavedDraft(*row)


def every(connection: Connection) -> list[SavedDraft]:
    """Return every draft there is."""
    return [SavedDraft(*row) for row in connection.execute(select(tables.draft))]


def add(connection: Connection, fields_json: str, *, visit_id: str | None, visit_edit: int | None) -> SavedDraft:
    """Store a new draft, and drop those that were left lying."""
    erase_left_lying(connection)
    draft = SavedDraft(tables.new_id(), tables.now(), 1, fields_json, visit_id, visit_edit)
    connection.execute(insert(tables.draft).values(astuple(draft)))
    return draft


def change(connection: Connection, fields_json: str, *, draft_id: str, edit_seen: int | None) -> SavedDraft:
    """Store a draft over the one the editor saw, or over any where the editor does not say."""
    wanted = _DRAFT.id == draft_id
    if edit_seen is not None:
        wanted &= _DRAFT.edit == edit_seen
    row = {"fields": fields_json, "changed_at": tables.now(), "edit": _DRAFT.edit + 1}
    done = connection.execute(update(tables.draft).where(wanted).values(row))
    stored = find(connection, draft_id)
    if done.rowcount == 0:
        raise DraftChanged(stored)
    return stored


def take(connection: Connection, draft_id: str, *, edit_seen: int | None) -> None:
    """Remove the draft that a form was saved from; one that is gone is no error, one changed meanwhile is."""
    wanted = _DRAFT.id == draft_id
    seen = wanted if edit_seen is None else wanted & (_DRAFT.edit == edit_seen)
    if connection.execute(delete(tables.draft).where(seen)).rowcount == 0:
        row = connection.execute(select(tables.draft).where(wanted)).first()
        if row is not None:
            raise DraftChanged(SavedDraft(*row))


def erase_left_lying(connection: Connection) -> None:
    """Remove the drafts that were last changed more than ``KEPT_DAYS`` ago."""
    connection.execute(delete(tables.draft).where(_DRAFT.changed_at < tables.days_ago(KEPT_DAYS)))


def erase(connection: Connection, draft_id: str) -> None:
    """Remove a draft; one that is not there is no error."""
    connection.execute(delete(tables.draft).where(_DRAFT.id == draft_id))
