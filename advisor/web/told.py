"""What is said above the figures, or where they would stand, and what may be done about it."""

from dataclasses import dataclass

from flask import url_for

from advisor.errors import TwolightError
from advisor.records.drafts import DraftChanged, DraftMissing
from advisor.records.store import Store
from advisor.web.conflict import Conflict
from advisor.web.drafting import Editing
from advisor.web.screen import screen
from advisor.web.sentences import sentence_of


@dataclass(frozen=True)
class Told:
    """A sentence, and what it offers.

    ``changed`` where another save of the visit came first, with what is stored by now as ``conflict``; ``then`` is the
    address of what was said on the day of the visit, where that may differ from what is shown; ``reload`` is the
    address of the form as another window left it or saved it; ``apart`` offers to go on here in a form of its own.
    """

    text: str = ""
    changed: bool = False
    reload: str = ""
    apart: bool = False
    conflict: Conflict | None = None
    then: str = ""


NOTHING = Told()


def told_of(store: Store, editing: Editing, error: TwolightError) -> Told:
    """Return what an error says; a form changed or saved in another window may be loaded again or kept apart."""
    apart = isinstance(error, DraftChanged | DraftMissing)
    there = isinstance(error, DraftChanged) or (apart and store.visit_of_draft(editing.draft_id or "") is not None)
    reload = url_for("counter.draft", draft_id=editing.draft_id) if there else ""
    return Told(sentence_of(error, screen()), reload=reload, apart=apart)
