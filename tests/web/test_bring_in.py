"""Bringing in files: what is shown, what is kept, and only when it is asked for."""

import html
import json
import re
from typing import Any

import pytest
from flask import Flask
from flask.testing import FlaskClient
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st
from werkzeug.test import TestResponse

from advisor.counsel.visit import Visit, visit_to_json
from advisor.records.store import Store
from advisor.web import drafting, policy
from advisor.web.demo_wearers import wearer
from advisor.web.forms import visit_from_fields
from tests.frame_records import SIZES, WHOLE, trace

LENSES = [
    {"eye": "right", "sphere": -4.25, "cylinder": 1.0, "axis": 190, "prism": [{"amount": 0.5, "base": "down"}]},
    {"eye": "left", "sphere": -3.0, "add": 2.0},
]
PRESCRIPTION = {
    "resourceType": "VisionPrescription", "status": "active", "dateWritten": "2026-11-20",
    "patient": {"reference": "Patient/1"}, "lensSpecification": LENSES,
}  # fmt: skip
PERSON = {"resourceType": "Patient", "id": "1", "name": [{"text": "Nell <b>Ferrow</b>"}], "birthDate": "1974"}
OTHER = {**PRESCRIPTION, "patient": {}, "lensSpecification": [{**lens, "sphere": 1.5} for lens in LENSES]}
BUNDLE = {
    "resourceType": "Bundle",
    "entry": [{"resource": one} for one in (PERSON, PRESCRIPTION, OTHER, {**OTHER, "status": "cancelled"})],
}


def send(client: FlaskClient, content: Any, draft: str = "") -> TestResponse:
    if not isinstance(content, bytes):
        content = (content if isinstance(content, str) else json.dumps(content)).encode()
    head = f'--x\r\nContent-Disposition: form-data; name="draft"\r\n\r\n{draft}\r\n--x\r\n'
    head += 'Content-Disposition: form-data; name="file"; filename="brought.dat"\r\n\r\n'
    body = head.encode() + content + b"\r\n--x--\r\n"
    return client.post("/bring-in", data=body, content_type="multipart/form-data; boundary=x")


def hidden(page: str, name: str) -> list[str]:
    found = re.findall(rf'<input type="hidden" name="{name}" value="(.*?)">', page, re.DOTALL)
    return [html.unescape(text) for text in found]


def draft_of(answer: TestResponse) -> str:
    assert answer.status_code == 303
    return answer.headers["Location"].partition("#")[0].rpartition("/")[2]


def visit_in(store: Store, draft_id: str) -> Visit:
    return visit_from_fields(drafting.of_draft(store.get_draft(draft_id)).fields)


def begun(client: FlaskClient, **fields: str) -> str:
    """The draft of a form with two spheres."""
    form = {"prescription.right.sphere": "-2", "prescription.left.sphere": "-2", "token": "a" * 32, **fields}
    return draft_of(client.post("/counter", data=form))


def drafts_of(store: Store) -> int:
    with store._engine.connect() as connection:
        return int(connection.exec_driver_sql("SELECT count(*) FROM draft").scalar_one())


# --- prescriptions and visits ----------------------------------------------------------------------------------------


def test_a_bundle_is_a_list_to_choose_from_and_nothing_of_it_is_kept(client: FlaskClient, store: Store) -> None:
    answer = send(client, BUNDLE)
    assert answer.status_code == 200
    page = answer.text
    assert "3 prescriptions were found" in page
    assert "Nell &lt;b&gt;Ferrow&lt;/b&gt;, written on 20 November 2026" in page
    assert len(hidden(page, "visit")) == 2
    assert page.count("This one cannot be used") == 1
    assert "this prescription is marked “cancelled”" in page
    assert drafts_of(store) == 0


def test_powers_are_shown_as_they_will_be_used(client: FlaskClient) -> None:
    rows = re.findall(r"<tr><th scope=\"row\">(.*?)</th>(.*?)</tr>", send(client, PRESCRIPTION).text)
    cells = {eye: re.findall(r"<td>(.*?)</td>", rest) for eye, rest in rows}
    assert cells == {
        "right": ["−4.25", "+1.00", "10", "–", "0.50 down"],
        "left": ["−3.00", "–", "–", "+2.00", "–"],
    }
    page = html.unescape(send(client, PRESCRIPTION).text)
    assert "The right axis is written as 190 and is read as 10." in page
    assert "Measure PD, heights, vertex distance, tilt and the frame." in page


def test_a_form_begins_with_the_prescription_that_was_chosen(client: FlaskClient, store: Store) -> None:
    first, second = hidden(send(client, BUNDLE).text, "visit")
    visit = visit_in(store, draft_of(client.post("/bring-in/begin", data={"visit": first})))
    assert visit.wearer is not None
    assert (visit.wearer.name, visit.wearer.birth_year) == ("Nell <b>Ferrow</b>", 1974)
    right = visit.prescription.right
    assert (right.sphere, right.cylinder, right.axis) == (-4.25, 1.0, 10.0)
    other = visit_in(store, draft_of(client.post("/bring-in/begin", data={"visit": second})))
    assert other.prescription.right.sphere == 1.5


def test_a_visit_file_of_ours_comes_back_whole(client: FlaskClient, store: Store) -> None:
    visit = wearer("weak-minus-night-driver")
    (shown,) = hidden(send(client, visit_to_json(visit)).text, "visit")
    back = visit_in(store, draft_of(client.post("/bring-in/begin", data={"visit": shown})))
    assert back == visit.model_copy(update={"baseline": visit.baseline or 0})


def test_names_that_are_hidden_are_hidden_here_too(client: FlaskClient) -> None:
    client.set_cookie("names", "hidden")
    page = send(client, BUNDLE).text
    shown = page.replace(hidden(page, "visit")[0], "")
    assert "Ferrow" not in re.sub(r'value="[^"]*"', "", shown)


def test_what_is_sent_back_is_checked_again(client: FlaskClient, store: Store) -> None:
    for text in ("", "{", '{"prescription": {}}', "[" * 100_000):
        assert client.post("/bring-in/begin", data={"visit": text}).status_code == 400
    assert drafts_of(store) == 0


# --- frames ----------------------------------------------------------------------------------------------------------


def test_a_frame_is_drawn_with_its_sizes_beside_the_record_and_not_kept(client: FlaskClient, store: Store) -> None:
    draft = begun(client)
    before = store.get_draft(draft)
    page = send(client, WHOLE, draft).text
    assert page.count("<path d=") == 3  # two rims and the nose
    assert "the nose between" in page
    rows = dict(re.findall(r'<th scope="row">(.*?) <span class="unit">mm</span></th>(.*?)</tr>', page))
    assert rows == {
        "box a": "<td>52.0</td><td>52.0</td>", "box b": "<td>38.0</td><td>38.0</td>",
        "DBL": "<td>18.0</td><td>–</td>", "ED": "<td>–</td><td>–</td>",
    }  # fmt: skip
    for words in ("Use this outline", "Mirror it first", "Do not use it"):
        assert words in page
    assert store.get_draft(draft) == before


def used(client: FlaskClient, page: str, draft: str, **changed: str) -> TestResponse:
    form = {"draft": draft, "record": hidden(page, "record")[0], "turned": hidden(page, "turned")[0], "do": "use"}
    return client.post("/bring-in/frame", data=form | changed)


def test_an_outline_that_is_confirmed_stands_in_the_form(client: FlaskClient, store: Store) -> None:
    draft = begun(client, **{"frame.a_mm": "60", "frame.ed_mm": "61", "frame.rim": "grooved"})
    answer = used(client, send(client, WHOLE, draft).text, draft)
    assert answer.headers["Location"] == f"/counter/{draft}#h-frame"
    frame = visit_in(store, draft).frame
    assert frame is not None
    assert (frame.a_mm, frame.b_mm, frame.dbl_mm, frame.ed_mm, frame.rim) == (52.0, 38.0, 18.0, None, "grooved")
    assert frame.outline is not None
    assert frame.outline.right is not None
    assert frame.outline.right[0] == pytest.approx((26.0, 0.0), abs=0.01)
    page = client.get(f"/counter/{draft}").text
    assert "A traced outline is used." in page


def test_a_mirrored_outline_is_shown_first(client: FlaskClient, store: Store) -> None:
    draft = begun(client)
    page = send(client, WHOLE, draft).text
    turned = used(client, page, draft, do="mirror")
    assert turned.status_code == 200
    assert "Mirrored: nasal and temporal are exchanged." in turned.text
    assert re.findall(r'<path d="(.*?)"', turned.text)[0] != re.findall(r'<path d="(.*?)"', page)[0]
    back = used(client, turned.text, draft, do="mirror").text
    assert re.findall(r'<path d="(.*?)"', back) == re.findall(r'<path d="(.*?)"', page)
    used(client, turned.text, draft)
    frame = visit_in(store, draft).frame
    assert frame is not None
    assert frame.outline is not None
    assert frame.outline.right is not None
    assert frame.outline.right[0] == pytest.approx((-26.0, 0.0), abs=0.01)


def test_only_what_is_read_of_a_record_travels_on(client: FlaskClient) -> None:
    assert "Ferrow" not in send(client, WHOLE).text


def test_a_frame_without_a_form_begins_one(client: FlaskClient, store: Store) -> None:
    answer = used(client, send(client, SIZES + trace("L")).text, "")
    fields = drafting.of_draft(store.get_draft(draft_of(answer))).fields
    assert (fields["frame.a_mm"], fields["frame.dbl_mm"]) == ("52", "18")
    assert json.loads(fields["kept"])["frame"]["outline"].keys() == {"left"}


def test_an_outline_can_be_taken_out_and_brought_back_by_undo(client: FlaskClient, store: Store) -> None:
    draft = begun(client)
    assert "Take the outline out" not in client.get(f"/bring-in/{draft}").text
    used(client, send(client, WHOLE, draft).text, draft)
    assert "Take the outline out" in client.get(f"/bring-in/{draft}").text
    assert draft_of(client.post(f"/bring-in/{draft}/remove")) == draft
    editing = drafting.of_draft(store.get_draft(draft))
    assert editing.fields["kept"] == ""
    assert editing.fields["frame.a_mm"] == "52"
    form = {**editing.fields, "token": editing.token, "draft": draft, "draft_edit": str(editing.draft_edit)}
    client.post("/counter", data={**form, "do": "undo"})
    assert "outline" in drafting.of_draft(store.get_draft(draft)).fields["kept"]


def test_a_record_of_sizes_takes_the_outline_of_another_frame_away(client: FlaskClient, store: Store) -> None:
    draft = begun(client)
    used(client, send(client, WHOLE, draft).text, draft)
    page = send(client, "HBOX=48;48\nVBOX=36;36\n", draft).text
    assert "Use these sizes" in page
    assert "Mirror it first" not in page
    used(client, page, draft)
    frame = visit_in(store, draft).frame
    assert frame is not None
    assert (frame.a_mm, frame.dbl_mm, frame.outline) == (48.0, 18.0, None)


def test_what_the_form_keeps_besides_the_outline_stays(client: FlaskClient, store: Store) -> None:
    kept = json.dumps({"dispensed_by": "K.", "frame": {"outline": {"right": "?"}}})
    draft = begun(client, kept=kept)
    assert client.get(f"/counter/{draft}").status_code == 200
    used(client, send(client, WHOLE, draft).text, draft)
    assert visit_in(store, draft).dispensed_by == "K."


def test_the_counter_keeps_the_form_and_leads_here(client: FlaskClient, store: Store) -> None:
    assert 'formaction="/counter/bring-in"' in client.get("/").text
    assert client.post("/counter/bring-in", data={"token": "a" * 32}).headers["Location"] == "/bring-in"
    form = {"prescription.right.sphere": "-2", "note": "kept", "token": "b" * 32}
    answer = client.post("/counter/bring-in", data=form)
    draft = draft_of(answer)
    assert answer.headers["Location"] == f"/bring-in/{draft}"
    assert drafting.of_draft(store.get_draft(draft)).fields["note"] == "kept"
    stale = {**form, "note": "other", "draft": draft, "draft_edit": "7"}
    assert client.post("/counter/bring-in", data=stale).status_code == 409


def test_a_form_that_is_gone_is_told(client: FlaskClient) -> None:
    assert client.get("/bring-in/gone").status_code == 404
    assert send(client, WHOLE, "gone").status_code == 404
    assert client.post("/bring-in/gone/remove").status_code == 404


# --- what is refused -------------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("content", "told"),
    [
        (b"", "Choose a file first."),
        (b"%PDF-1.7", "neither a FHIR prescription"),
        (b"\xff\xfe{", "neither a FHIR prescription"),
        (b'{"resourceType": "Patient"}', "VisionPrescription, or a Bundle"),
        (b'{"a": 1e400', "this is not JSON"),
        (WHOLE.replace("TRCFMT=1", "TRCFMT=3").encode(), "only format 1, radii as text"),
        (b" " * 2_000_001, "larger than 2 MB"),
    ],
)
def test_a_file_that_cannot_be_used_is_told_on_the_page(client: FlaskClient, content: bytes, told: str) -> None:
    answer = send(client, content)
    assert answer.status_code == 422
    assert told in html.unescape(answer.text)


def test_a_file_above_the_policy_s_limit_is_refused(client: FlaskClient) -> None:
    assert send(client, b" " * (policy.LIMITS["MAX_CONTENT_LENGTH"] + 1)).status_code == 413


def test_a_form_without_a_file_is_told(client: FlaskClient) -> None:
    answer = client.post("/bring-in", data={"draft": ""})
    assert answer.status_code == 422
    assert "Choose a file first." in answer.text


@settings(max_examples=60, suppress_health_check=[HealthCheck.function_scoped_fixture], deadline=None)
@given(
    text=st.binary(max_size=60) | st.text(max_size=40).map(str.encode),
    place=st.integers(0, 900),
    cut=st.integers(0, 40),
)
def test_no_file_breaks_the_page(app: Flask, text: bytes, place: int, cut: int) -> None:
    client = app.test_client()
    for whole in (json.dumps(BUNDLE).encode(), WHOLE.encode()):
        answer = send(client, whole[:place] + text + whole[place + cut :])
        assert answer.status_code in (200, 422)
    assert client.post("/bring-in/frame", data={"record": text, "do": "mirror"}).status_code in (200, 400)
