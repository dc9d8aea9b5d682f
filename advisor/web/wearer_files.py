"""Everything the records hold of one wearer, in one ZIP file; no name of a file in it says whose it is."""

import io
import json
import zipfile
from collections.abc import Iterator, Sequence

from advisor.counsel.faults import Faults
from advisor.counsel.phrases import mark
from advisor.counsel.sheet import NothingChosen
from advisor.counsel.visit import parse_visit
from advisor.records.drafts import SavedDraft
from advisor.records.rechecks import SavedRecheck
from advisor.records.store import Store
from advisor.records.visits import SavedVisit
from advisor.web.documents import standing_alone
from advisor.web.paper_pages import PAPERS
from advisor.web.pdf import PdfFailed, PdfUnavailable, write_pdf
from advisor.web.screen import screen
from advisor.web.stock_loader import shelf_of

MOMENT = (1980, 1, 1, 0, 0, 0)  # of every file, so that the same records make the same ZIP
NO_SHEET = mark("There is no sheet of this visit: nothing was chosen, or it cannot be worked out any more.")
CONTENTS = mark(
    "In each folder: visit.json (what was entered), answer.json (what was worked out), one file for each return visit, "
    "and the wearer's sheet. Forms that were begun and not saved are under “forms”."
)


def wearer_zip(store: Store, visits: Sequence[SavedVisit], drafts: Sequence[SavedDraft]) -> bytes:
    """Return the visits, with return visits and sheets, and the forms in progress as a ZIP file."""
    target = io.BytesIO()
    with zipfile.ZipFile(target, "w", zipfile.ZIP_DEFLATED) as made:
        for name, content in _files(store, visits, drafts):
            made.writestr(zipfile.ZipInfo(name, MOMENT), content, zipfile.ZIP_DEFLATED)
    return target.getvalue()


def _files(
    store: Store, visits: Sequence[SavedVisit], drafts: Sequence[SavedDraft]
) -> Iterator[tuple[str, str | bytes]]:
    yield "contents.txt", screen().gettext(CONTENTS) + "\n"
    for number, saved in enumerate(visits, 1):
        folder = f"visit-{number}"
        yield f"{folder}/visit.json", saved.visit_json
        yield f"{folder}/answer.json", saved.answer_json
        for k, record in enumerate(store.list_rechecks(saved.id), 1):
            yield f"{folder}/return-{k}.json", _record_text(record)
        yield _sheet(store, saved, folder)
    for k, draft in enumerate(drafts, 1):
        yield f"forms/form-{k}.json", draft.fields_json


def _record_text(record: SavedRecheck) -> str:
    content = {"at": record.at, "outcome": record.outcome, "who_pays": record.who_pays}
    return json.dumps(content | {"content": json.loads(record.content_json)}, ensure_ascii=False, indent=1) + "\n"


def _sheet(store: Store, saved: SavedVisit, folder: str) -> tuple[str, str | bytes]:
    """Return the sheet with the range of its day: as PDF, where none can be made as HTML, else why there is none."""
    stock = shelf_of(store, saved.range_hash).stock
    try:
        html = PAPERS["sheet"](parse_visit(saved.visit_json), stock, "print-fonts")
    except (Faults, NothingChosen):
        return f"{folder}/no-sheet.txt", screen().gettext(NO_SHEET) + "\n"
    try:
        return f"{folder}/sheet.pdf", write_pdf(html, logo=store.get_logo())
    except (PdfUnavailable, PdfFailed):
        return f"{folder}/sheet.html", standing_alone(html, logo=store.get_logo())
