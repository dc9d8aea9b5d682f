"""Files of saved visits for other programs, and the table of visits."""

import csv
import io
import json
from typing import Any

import pytest
from flask.testing import FlaskClient
from werkzeug.test import TestResponse

from advisor.counsel.compare import compare
from advisor.counsel.stock import builtin_range
from advisor.counsel.visit import check_visit, parse_visit, visit_to_json
from advisor.records.store import Store
from advisor.web.demo_wearers import wearer
from advisor.web.language import language
from advisor.web.stock_loader import current_shelf
from advisor.web.table import csv_rows, csv_text

NIGHT = wearer("weak-minus-night-driver")
SMALL: dict[str, Any] = {
    "date": "2026-12-01",
    "prescription": {
        "written": "2026-11-20",
        "right": {"sphere": -4.25, "cylinder": -1.0, "axis": 175, "prism": [{"amount": 1.0, "base": "out"}]},
        "left": {"sphere": -3.75, "add": 1.5},
    },
    "scenes": [],
}


def saved(store: Store, content: dict[str, Any] | None = None) -> str:
    visit = NIGHT if content is None else check_visit(content)
    answer = compare(visit, builtin_range(), translator=language("en"))
    shelf = current_shelf(store)
    return store.save_visit(
        visit_to_json(visit), range_toml=shelf.toml, version="1", answer_json=answer.model_dump_json(exclude_unset=True)
    ).id


def rows_of(answer: TestResponse) -> list[dict[str, str]]:
    assert answer.status_code == 200
    assert answer.headers["Content-Type"].startswith("text/csv; charset=utf-8")
    return list(csv.DictReader(io.StringIO(answer.text, newline="")))


@pytest.mark.parametrize(
    ("end", "name"),
    [("visit.json", "twolight-visit.json"), ("prescription.fhir.json", "twolight-prescription.fhir.json"),
     ("comparison.csv", "twolight-comparison.csv")],
)  # fmt: skip
def test_a_file_is_handed_out_under_a_name_that_tells_nobody_s_name(
    client: FlaskClient, store: Store, end: str, name: str
) -> None:
    answer = client.get(f"/visits/{saved(store)}/{end}")
    assert answer.status_code == 200
    assert answer.headers["Content-Disposition"] == f'attachment; filename="{name}"'


def test_the_visit_file_reads_back_to_the_same_visit(client: FlaskClient, store: Store) -> None:
    assert parse_visit(client.get(f"/visits/{saved(store)}/visit.json").text) == NIGHT


def test_the_prescription_holds_the_name_only_where_it_is_asked_for(client: FlaskClient, store: Store) -> None:
    assert NIGHT.wearer is not None
    assert NIGHT.wearer.name
    address = f"/visits/{saved(store)}/prescription.fhir.json"
    assert client.get(address).headers["Content-Type"] == "application/fhir+json"
    assert NIGHT.wearer.name not in client.get(address).text
    resource = json.loads(client.get(f"{address}?name=yes").text)
    assert resource["patient"] == {"display": NIGHT.wearer.name}
    assert resource["lensSpecification"][0]["sphere"] == NIGHT.prescription.right.sphere


def test_the_page_of_files_says_what_the_prescription_leaves_out(client: FlaskClient, store: Store) -> None:
    page = client.get(f"/visits/{saved(store)}/files").text
    assert "This format has no place for:" in page
    assert page.count(" download>") == 4


def test_the_comparison_is_the_one_that_was_saved(client: FlaskClient, store: Store) -> None:
    answer = compare(NIGHT, builtin_range(), translator=language("en"))
    text = client.get(f"/visits/{saved(store)}/comparison.csv").text
    assert text == csv_text(csv_rows(answer, file=""))


def test_an_answer_that_can_no_longer_be_read_is_worked_out_again(client: FlaskClient, store: Store) -> None:
    toml = current_shelf(store).toml
    old = store.save_visit(visit_to_json(NIGHT), range_toml=toml, version="0", answer_json='{"format": "older"}').id
    rows = rows_of(client.get(f"/visits/{old}/comparison.csv"))
    assert {row["eye"] for row in rows} == {"right", "left", "both"}


def test_what_is_handed_out_is_written_down(client: FlaskClient, store: Store) -> None:
    visit_id = saved(store)
    before = len(store.list_events())
    for end in ("visit.json", "prescription.fhir.json", "comparison.csv"):
        client.get(f"/visits/{visit_id}/{end}")
    client.post("/visits/csv")
    assert [event.what for event in store.list_events()][: -before or None] == ["exported"] * 4
    assert len(store.list_events(visit_id=visit_id)) >= 3


@pytest.mark.parametrize("end", ["files", "visit.json", "prescription.fhir.json", "comparison.csv"])
def test_no_file_is_made_of_a_visit_that_is_not_there(client: FlaskClient, end: str) -> None:
    assert client.get(f"/visits/gone/{end}").status_code == 404


def test_the_table_holds_powers_as_bare_numbers(client: FlaskClient, store: Store) -> None:
    faces = {"front": "bare", "back": "broadband"}
    options = [{}, {"design": "single-vision", "material": "thiourethane-160", "coating": faces}]
    saved(store, {**SMALL, "ordered": 1, "options": options})
    answer = client.post("/visits/csv")
    assert answer.headers["Content-Disposition"] == 'attachment; filename="twolight-visits.csv"'
    (row,) = rows_of(answer)
    assert "note" not in row
    expected = {
        "date": "2026-12-01", "reference": "", "name": "", "written": "2026-11-20",
        "right_sphere": "-4.25", "right_cylinder": "-1.0", "right_axis": "175.0", "right_add": "",
        "right_prism_in": "-1.0", "right_prism_up": "0.0", "left_sphere": "-3.75", "left_cylinder": "",
        "left_axis": "", "left_add": "1.5", "left_prism_in": "", "left_prism_up": "",
        "ordered": "2", "ordered_design": "single-vision", "ordered_material": "thiourethane-160",
        "ordered_coating": "bare / broadband",
    }  # fmt: skip
    assert row == expected


def test_the_table_holds_what_a_search_finds_on_all_its_pages(
    client: FlaskClient, store: Store, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr("advisor.web.exports.PAGE", 2)
    for number in range(5):
        saved(store, {**SMALL, "reference": f"A-{number}", "wearer": {"name": "Nell" if number else "Otto"}})
    assert len(rows_of(client.post("/visits/csv"))) == 5
    found = rows_of(client.post("/visits/csv", data={"search": "nell"}))
    assert [row["reference"] for row in found] == ["A-4", "A-3", "A-2", "A-1"]
    assert rows_of(client.post("/visits/csv", data={"search": "nobody"})) == []


@pytest.mark.parametrize("start", ["=", "+", "-", "@", "\t", "\r", "\n"])
def test_nothing_typed_is_a_formula(client: FlaskClient, store: Store, start: str) -> None:
    # OWASP, CSV Injection: cells that begin so are taken for formulas
    typed = f"{start}HYPERLINK(1)"
    saved(store, {**SMALL, "reference": typed, "note": typed, "wearer": {"name": typed}})
    (row,) = rows_of(client.post("/visits/csv", data={"notes": "1"}))
    assert (row["reference"], row["name"], row["note"]) == (f"'{typed}",) * 3


def test_a_search_is_no_address(client: FlaskClient) -> None:
    assert client.get("/visits/csv").status_code == 404  # no such visit: the table is asked for by a form
