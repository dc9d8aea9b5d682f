"""Files of saved visits for other programs: the visit, its prescription, its figures, and a table of visits.

No file's name tells whose it is. A search for a table of visits travels in the body of a request, never in an address.
"""

import datetime as dt
import sys
from collections.abc import Iterator

from flask import Blueprint, Response, make_response, render_template, request
from pydantic import ValidationError

from advisor.counsel.compare import compare
from advisor.counsel.comparison import Comparison
from advisor.counsel.fhir_writing import Written, to_fhir
from advisor.counsel.visit import parse_visit
from advisor.records.store import Store
from advisor.records.trouble import StoreError
from advisor.records.visits import SavedVisit
from advisor.web.brought import said
from advisor.web.desk import current_desk
from advisor.web.operators import current_operator
from advisor.web.policy import refuse_foreign_readers
from advisor.web.screen import screen
from advisor.web.stock_loader import shelf_of
from advisor.web.table import csv_rows, csv_text
from advisor.web.visits_csv import HEAD, visit_row

exports = Blueprint("exports", __name__)
exports.before_request(refuse_foreign_readers)

JSON, FHIR, CSV = "application/json", "application/fhir+json", "text/csv; charset=utf-8; header=present"
NOT_NOTED = "twolight: a file was handed out, but that could not be written down: %s"
PAGE = 200  # visits that are looked up at a time


@exports.get("/visits/<visit_id>/files")
def files(visit_id: str) -> str:
    """Show which files there are of a visit, and what each leaves out."""
    saved = current_desk().store.get_visit(visit_id)
    notes = said(_fhir(saved, with_name=True).notes, screen())
    return render_template("exports.html", visit_id=visit_id, notes=notes)


@exports.get("/visits/<visit_id>/visit.json")
def visit_file(visit_id: str) -> Response:
    """Hand out a visit as a file that this program reads."""
    return _file(_handed_out(visit_id).visit_json, kind=JSON, name="twolight-visit.json")


@exports.get("/visits/<visit_id>/prescription.fhir.json")
def fhir_file(visit_id: str) -> Response:
    """Hand out the prescription as HL7 FHIR; with the wearer's name only where that is asked for."""
    written = _fhir(_handed_out(visit_id), with_name=request.args.get("name") == "yes")
    return _file(written.text(), kind=FHIR, name="twolight-prescription.fhir.json")


@exports.get("/visits/<visit_id>/comparison.csv")
def comparison_file(visit_id: str) -> Response:
    """Hand out the figures that were worked out when the visit was saved."""
    answer = _answer(_handed_out(visit_id))
    return _file(csv_text(csv_rows(answer, file="")), kind=CSV, name="twolight-comparison.csv")


@exports.post("/visits/csv")
def visits_file() -> Response:
    """Hand out the visits that a search finds as a table, with their notes only where those are asked for."""
    store, with_notes = current_desk().store, request.form.get("notes") == "1"
    found = _found(store, request.form.get("search", "")[:200])
    rows = [visit_row(parse_visit(saved.visit_json), with_note=with_notes) for saved in found]
    note_handed_out()
    head: list[str | float] = [*HEAD, "note"] if with_notes else [*HEAD]
    return _file(csv_text([head, *rows], head=False), kind=CSV, name="twolight-visits.csv")


def _handed_out(visit_id: str) -> SavedVisit:
    saved = current_desk().store.get_visit(visit_id)
    note_handed_out(visit_id)
    return saved


def note_handed_out(visit_id: str | None = None) -> None:
    """Write down that a file was handed out, as a server writes its log; where there is no room, hand it out still."""
    try:
        current_desk().store.record_event("exported", who=current_operator(), visit_id=visit_id)
    except StoreError as error:
        print(NOT_NOTED % type(error).__name__, file=sys.stderr)


def _answer(saved: SavedVisit) -> Comparison:
    """Return what was worked out on the day; one that an older program wrote otherwise is worked out again."""
    try:
        return Comparison.model_validate_json(saved.answer_json)
    except ValidationError:
        stock = shelf_of(current_desk().store, saved.range_hash).stock
        return compare(parse_visit(saved.visit_json), stock, translator=screen())


def _fhir(saved: SavedVisit, *, with_name: bool) -> Written:
    return to_fhir(parse_visit(saved.visit_json), created=dt.date.today(), with_name=with_name)


def _found(store: Store, search: str) -> Iterator[SavedVisit]:
    """Yield every visit that a search finds, the last changed first."""
    after = None
    while lines := store.list_visits(search, limit=PAGE, after=after):
        yield from (store.get_visit(line.id) for line in lines)
        after = lines[-1].key


def _file(content: str, *, kind: str, name: str) -> Response:
    answer = make_response(content)
    answer.headers["Content-Type"] = kind
    answer.headers["Content-Disposition"] = f'attachment; filename="{name}"'
    return answer
