"""The recheck page: signs first, figures beside remedies, an outcome kept once, a slip without anything of health."""

import json
import re
import sqlite3
from pathlib import Path
from typing import Any

import pytest
from flask.testing import FlaskClient

from advisor.counsel.recheck_answer import RecheckRecord
from advisor.counsel.recheck_texts import SIGNS
from advisor.counsel.stock import builtin_range, range_to_toml
from advisor.records.location import FILE_NAME
from advisor.records.store import Store
from advisor.resources import resource_dir
from advisor.web import recheck as recheck_page
from advisor.web.pdf import PdfUnavailable

TOKEN = "a" * 22
NONE_OF_THESE = {"none_of_these": "1", "do": "work"}
WRONG_AXIS = NONE_OF_THESE | {
    "says": "the floor slopes",
    "measured.right.sphere": "\N{MINUS SIGN}1,25",
    "measured.right.cylinder": "-4.25",
    "measured.right.axis": "43",
}
RECORD = {"do": "record", "outcome": "remake", "who_pays": "maker", "remedy": "remake-as-ordered", "token": TOKEN}


def saved(store: Store, name: str, **change: Any) -> str:
    content = json.loads((resource_dir("demo_patients") / f"{name}.json").read_text("utf-8")) | change
    toml = range_to_toml(builtin_range())
    return store.save_visit(json.dumps(content), range_toml=toml, version="0", answer_json="{}").id


def rows(folder: Path) -> list[tuple[Any, ...]]:
    connection = sqlite3.connect(folder / FILE_NAME)
    try:
        return connection.execute("SELECT visit_id, outcome, who_pays, new_visit_id, content FROM recheck").fetchall()
    finally:
        connection.close()


def test_the_signs_are_asked_before_the_words(client: FlaskClient, store: Store) -> None:
    page = client.get(f"/visits/{saved(store, 'strong-cylinder')}/recheck").text
    places = [page.index(f'name="answer.{key}"') for key in SIGNS]
    assert places == sorted(places)
    assert places[-1] < page.index('id="says"')
    assert "checked" not in page  # nothing is answered for the wearer
    assert " style=" not in page
    assert "<style" not in page


def test_a_visit_leads_to_its_recheck_and_its_bench_slip(client: FlaskClient, store: Store) -> None:
    visit_id = saved(store, "strong-cylinder")
    page = client.get(f"/visits/{visit_id}").text
    assert f'href="/visits/{visit_id}/recheck"' in page
    assert f'href="/visits/{visit_id}/bench"' in page
    assert "Bench slip" in client.get(f"/visits/{visit_id}/bench").text
    assert client.get(f"/visits/{visit_id}/bench.pdf").data.startswith(b"%PDF-")


def test_a_sign_ends_with_the_eye_doctor_and_offers_nothing(client: FlaskClient, store: Store) -> None:
    visit_id = saved(store, "weak-minus-night-driver", ordered=0)
    form = {"says": "second light", "answer.today-flashes": "yes", "do": "work"}
    page = client.post(f"/visits/{visit_id}/recheck", data=form).text
    assert "To an eye doctor today." in page
    assert "No lens is offered." in page
    assert 'class="remedy"' not in page


def test_until_every_sign_is_answered_no_lens_is_offered(client: FlaskClient, store: Store) -> None:
    visit_id = saved(store, "weak-minus-night-driver", ordered=0)
    page = client.post(f"/visits/{visit_id}/recheck", data={"says": "second light"}).text
    assert "No lens is offered until every sign is answered" in page
    page = client.post(f"/visits/{visit_id}/recheck", data={"says": "second light"} | NONE_OF_THESE).text
    assert "No lens is offered until" in page  # the cover test is not done
    form = {"says": "second light", "answer.cover-eye": "no"} | NONE_OF_THESE
    page = client.post(f"/visits/{visit_id}/recheck", data=form).text
    assert "A lens may be offered" in page
    assert "Visibility level" in page or "visibility level" in page


def test_what_was_typed_stands_in_the_form_again(client: FlaskClient, store: Store) -> None:
    visit_id = saved(store, "strong-cylinder")
    page = client.post(f"/visits/{visit_id}/recheck", data=WRONG_AXIS | {"answer.marks-off": "no"}).text
    assert 'value="the floor slopes"' in page
    assert 'value="\N{MINUS SIGN}1,25"' in page
    assert re.search(r'name="answer.marks-off" value="no" checked', page)
    assert "Remake as ordered" in page
    assert "from memory; check them against the standard" in page


@pytest.mark.parametrize(
    ("change", "sentence"),
    [
        ({"measured.right.axis": "x"}, "Write a number"),
        ({"measured.right.axis": ""}, "needs an axis"),
    ],
)
def test_what_cannot_be_read_is_told_beside_the_form(
    client: FlaskClient, store: Store, change: dict[str, str], sentence: str
) -> None:
    form = WRONG_AXIS | change
    answer = client.post(f"/visits/{saved(store, 'strong-cylinder')}/recheck", data=form)
    assert answer.status_code == 422
    assert sentence in answer.text


def test_words_nobody_knows_hold_up_no_sign_and_a_referral_can_be_recorded(
    client: FlaskClient, store: Store, tmp_path: Path
) -> None:
    visit_id = saved(store, "strong-cylinder")
    answer = client.post(f"/visits/{visit_id}/recheck", data={"says": "lorem ipsum"})
    assert answer.status_code == 200
    assert "No complaint is understood" in answer.text
    assert 'name="answer.today-loss"' in answer.text
    form = {"says": "lorem ipsum", "do": "record", "outcome": "refer", "token": TOKEN}
    assert client.post(f"/visits/{visit_id}/recheck", data=form).status_code == 303
    assert [row[1] for row in rows(tmp_path)] == ["refer"]


def test_measurements_that_cannot_be_read_hold_up_no_sign(client: FlaskClient, store: Store) -> None:
    form = WRONG_AXIS | {"measured.right.axis": "x", "answer.today-loss": "yes"}
    answer = client.post(f"/visits/{saved(store, 'strong-cylinder')}/recheck", data=form)
    assert answer.status_code == 422
    assert "Write a number" in answer.text
    assert "To an eye doctor today." in answer.text


def test_one_tick_does_not_answer_a_sign_that_was_heard(client: FlaskClient, store: Store) -> None:
    visit_id = saved(store, "weak-minus-night-driver", ordered=0)
    form = NONE_OF_THESE | {"says": "I see flashes and a second light"}
    assert "To an eye doctor today." in client.post(f"/visits/{visit_id}/recheck", data=form).text
    page = client.post(f"/visits/{visit_id}/recheck", data=form | {"answer.today-flashes": "no"}).text
    assert "To an eye doctor today." not in page
    assert "Heard in the words, answered no" in page


def test_one_tick_does_not_answer_a_sign_that_was_heard_in_another_language(client: FlaskClient, store: Store) -> None:
    visit_id = saved(store, "weak-minus-night-driver", ordered=0)
    for says in ("desde ayer veo doble", "je vois des éclairs", "ein dunkler Schatten im Auge"):
        page = client.post(f"/visits/{visit_id}/recheck", data=NONE_OF_THESE | {"says": says}).text
        assert "To an eye doctor today." in page, says


@pytest.mark.parametrize(("outcome", "status"), [("remake", 422), ("adjust", 422), ("refer", 303), ("none", 303)])
def test_a_return_for_today_ends_with_a_referral_or_nothing(
    client: FlaskClient, store: Store, tmp_path: Path, outcome: str, status: int
) -> None:
    visit_id = saved(store, "weak-minus-night-driver", ordered=0)
    form = {"says": "second light", "answer.today-flashes": "yes", "do": "record", "outcome": outcome, "token": TOKEN}
    answer = client.post(f"/visits/{visit_id}/recheck", data=form)
    assert answer.status_code == status
    assert [row[1] for row in rows(tmp_path)] == ([outcome] if status == 303 else [])
    if status == 422:
        assert "record that the wearer was referred" in answer.text
        assert 'name="outcome" value="remake"' not in answer.text


def test_what_is_corrected_after_it_was_recorded_is_told_and_can_be_recorded_beside_it(
    client: FlaskClient, store: Store, tmp_path: Path
) -> None:
    visit_id = saved(store, "strong-cylinder")
    client.post(f"/visits/{visit_id}/recheck", data=WRONG_AXIS | RECORD)
    corrected = WRONG_AXIS | RECORD | {"outcome": "adjust", "note": "adjusted instead"}
    answer = client.post(f"/visits/{visit_id}/recheck", data=corrected)
    assert answer.status_code == 409
    assert "nothing was overwritten" in answer.text
    assert "adjusted instead" in answer.text
    assert [row[1] for row in rows(tmp_path)] == ["remake"]
    found = re.search(r'name="token" value="([^"]+)"', answer.text)
    assert found is not None
    assert found[1] != TOKEN
    for _ in range(2):
        answer = client.post(f"/visits/{visit_id}/recheck", data=corrected | {"token": found[1]})
        assert answer.status_code == 303
    assert sorted(row[1] for row in rows(tmp_path)) == ["adjust", "remake"]


def test_what_helps_for_nothing_is_not_headed_by_no_lens(client: FlaskClient, store: Store) -> None:
    form = NONE_OF_THESE | {"says": "they slide down"}
    page = client.post(f"/visits/{saved(store, 'strong-cylinder')}/recheck", data=form).text
    assert "No other lens is called for" in page
    assert "No lens is offered" not in page


def test_an_outcome_is_kept_once_with_what_it_was_made_of(client: FlaskClient, store: Store, tmp_path: Path) -> None:
    visit_id, new = saved(store, "strong-cylinder"), saved(store, "strong-cylinder", reference="A-204")
    form = WRONG_AXIS | RECORD | {"new_visit": new, "new_reference": "A-204", "note": "axis by the focimeter"}
    for _ in range(2):
        answer = client.post(f"/visits/{visit_id}/recheck", data=form)
        assert (answer.status_code, answer.location) == (303, f"/visits/{visit_id}/recheck#recorded")
    ((kept, outcome, payer, new_id, content),) = rows(tmp_path)
    assert (kept, outcome, payer, new_id) == (visit_id, "remake", "maker", new)
    record = RecheckRecord.model_validate_json(content)
    assert (record.says, record.cause, record.remedy) == ("the floor slopes", "wrong-as-made", "remake-as-ordered")
    assert record.date is not None
    assert record.measured is not None
    assert record.measured.eye("right").axis == 43.0
    page = client.get(f"/visits/{visit_id}/recheck").text
    assert f'href="/visits/{new}"' in page
    assert f'href="/visits/{visit_id}/recheck/{TOKEN}"' in page


def test_no_outcome_is_kept_while_none_is_chosen(client: FlaskClient, store: Store, tmp_path: Path) -> None:
    form = WRONG_AXIS | RECORD | {"outcome": ""}
    answer = client.post(f"/visits/{saved(store, 'strong-cylinder')}/recheck", data=form)
    assert answer.status_code == 422
    assert "This is missing" in answer.text
    assert rows(tmp_path) == []


@pytest.mark.parametrize("change", [{"outcome": "sell more"}, {"who_pays": "x"}, {"remedy": "<b>"}])
def test_an_outcome_nobody_knows_is_not_kept(
    client: FlaskClient, store: Store, tmp_path: Path, change: dict[str, str]
) -> None:
    answer = client.post(f"/visits/{saved(store, 'strong-cylinder')}/recheck", data=WRONG_AXIS | RECORD | change)
    assert answer.status_code == 422
    assert rows(tmp_path) == []


def test_a_new_order_that_is_not_there_is_told_beside_its_field(
    client: FlaskClient, store: Store, tmp_path: Path
) -> None:
    form = WRONG_AXIS | RECORD | {"new_visit": "gone", "note": "kept in the form"}
    answer = client.post(f"/visits/{saved(store, 'strong-cylinder')}/recheck", data=form)
    assert answer.status_code == 422
    assert re.search(r'id="fault-new_visit">There is no such visit', answer.text)
    assert "kept in the form" in answer.text
    assert rows(tmp_path) == []


def test_the_makers_slip_holds_the_figures_and_nothing_of_health(client: FlaskClient, store: Store) -> None:
    visit_id = saved(store, "strong-cylinder")
    client.post(f"/visits/{visit_id}/recheck", data=WRONG_AXIS | RECORD)
    page = client.get(f"/visits/{visit_id}/recheck/{TOKEN}").text
    assert "Return slip" in page
    assert "the maker" in page
    assert "43°" in page
    assert "at most 2.0°" in page
    for text in SIGNS.values():
        assert text not in page
    assert "Teo Brandt" not in page
    pdf = client.get(f"/visits/{visit_id}/recheck/{TOKEN}.pdf")
    assert pdf.data.startswith(b"%PDF-")


def test_a_slip_of_a_referral_repeats_no_words(client: FlaskClient, store: Store) -> None:
    visit_id = saved(store, "weak-minus-night-driver", ordered=0)
    form = {"says": "suddenly double vision", "do": "record", "outcome": "refer", "token": TOKEN}
    assert client.post(f"/visits/{visit_id}/recheck", data=form).status_code == 303
    assert f"recheck/{TOKEN}" not in client.get(f"/visits/{visit_id}/recheck").text
    page = client.get(f"/visits/{visit_id}/recheck/{TOKEN}").text
    assert "double" not in page


def test_a_slip_is_found_only_under_its_own_visit(client: FlaskClient, store: Store) -> None:
    one, other = saved(store, "strong-cylinder"), saved(store, "strong-cylinder", reference="A-205")
    client.post(f"/visits/{one}/recheck", data=WRONG_AXIS | RECORD)
    assert client.get(f"/visits/{one}/recheck/{TOKEN}").status_code == 200
    assert client.get(f"/visits/{other}/recheck/{TOKEN}").status_code == 404
    assert client.get(f"/visits/{one}/recheck/gone").status_code == 404
    assert client.get("/visits/gone/recheck").status_code == 404


def test_without_a_layout_engine_the_slip_can_be_printed_from_the_browser(
    client: FlaskClient, store: Store, monkeypatch: pytest.MonkeyPatch
) -> None:
    def missing(_html: str) -> bytes:
        raise PdfUnavailable("no Pango")

    visit_id = saved(store, "strong-cylinder")
    client.post(f"/visits/{visit_id}/recheck", data=WRONG_AXIS | RECORD)
    monkeypatch.setattr(recheck_page, "write_pdf", missing)
    answer = client.get(f"/visits/{visit_id}/recheck/{TOKEN}.pdf")
    assert answer.status_code == 503
    assert f'href="/visits/{visit_id}/recheck/{TOKEN}"' in answer.text


def test_markup_in_the_words_stays_words(client: FlaskClient, store: Store) -> None:
    visit_id = saved(store, "strong-cylinder")
    form = NONE_OF_THESE | {"says": "second light <script>x</script>"}
    assert "<script>x" not in client.post(f"/visits/{visit_id}/recheck", data=form).text


def test_a_form_from_another_site_changes_nothing(client: FlaskClient, store: Store, tmp_path: Path) -> None:
    visit_id = saved(store, "strong-cylinder")
    answer = client.post(
        f"/visits/{visit_id}/recheck", data=WRONG_AXIS | RECORD, headers={"Sec-Fetch-Site": "cross-site"}
    )
    assert answer.status_code == 403
    assert rows(tmp_path) == []
