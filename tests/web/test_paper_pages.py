"""The paper of a saved visit: previews under the policy, PDFs, and a sentence where a PDF cannot be made."""

import json

import pytest
from flask.testing import FlaskClient

from advisor.counsel.stock import builtin_range, range_to_toml
from advisor.records.store import Store
from advisor.resources import resource_dir
from advisor.web import paper_pages
from advisor.web.pdf import PdfFailed, PdfUnavailable


def saved(store: Store, name: str, *, toml: str = "") -> str:
    text = (resource_dir("demo_patients") / f"{name}.json").read_text("utf-8")
    stock = toml or range_to_toml(builtin_range())
    return store.save_visit(text, range_toml=stock, version="0", answer_json="{}").id


def test_the_preview_is_the_sheet_under_the_same_policy(client: FlaskClient, store: Store) -> None:
    answer = client.get(f"/visits/{saved(store, 'strong-cylinder')}/sheet")
    assert answer.status_code == 200
    assert answer.headers["Content-Security-Policy"].startswith("default-src 'none'")
    assert 'href="/static/css/fonts.css"' in answer.text
    assert "<style" not in answer.text
    assert " style=" not in answer.text


@pytest.mark.parametrize("paper", ["sheet.pdf", "order.pdf", "care.pdf", "sheet.pdf?print=large"])
def test_the_pdfs_are_pdfs(client: FlaskClient, store: Store, paper: str) -> None:
    answer = client.get(f"/visits/{saved(store, 'one-good-eye-drilled')}/{paper}")
    assert answer.status_code == 200, answer.text
    assert answer.mimetype == "application/pdf"
    assert answer.data.startswith(b"%PDF-")


def test_an_option_is_asked_for_by_its_number(client: FlaskClient, store: Store) -> None:
    visit_id = saved(store, "one-good-eye-drilled")
    second = client.get(f"/visits/{visit_id}/order?option=2").text
    assert "Polycarbonate 1.59" in second
    assert "Polycarbonate 1.59" not in client.get(f"/visits/{visit_id}/order?option=1").text
    for text in ("99", "-1", "x", "²"):
        assert client.get(f"/visits/{visit_id}/sheet?option={text}").status_code == 200


def test_an_order_that_is_not_ready_says_every_reason(client: FlaskClient, store: Store) -> None:
    visit = {"prescription": {"right": {"sphere": -1}, "left": {"sphere": -1}}}
    text = json.dumps(visit)
    visit_id = store.save_visit(text, range_toml=range_to_toml(builtin_range()), version="0", answer_json="{}").id
    for paper in ("order", "order.pdf"):
        answer = client.get(f"/visits/{visit_id}/{paper}")
        assert answer.status_code == 409
        for words in ("PD of the right eye", "PD of the left eye", "kind of rim", "whether the wearer drives"):
            assert words in answer.text
    assert f'href="/visits/{visit_id}"' in answer.text


def test_where_no_pdf_can_be_made_the_page_is_offered_instead(
    client: FlaskClient, store: Store, monkeypatch: pytest.MonkeyPatch
) -> None:
    def refuse(_html: str, **_given: object) -> bytes:
        raise PdfUnavailable("No PDF can be made here.")

    monkeypatch.setattr(paper_pages, "write_pdf", refuse)
    visit_id = saved(store, "strong-cylinder")
    answer = client.get(f"/visits/{visit_id}/sheet.pdf?option=2")
    assert answer.status_code == 503
    assert "No PDF can be made here." in answer.text
    assert f'href="/visits/{visit_id}/sheet?option=2"' in answer.text


def test_a_page_that_cannot_be_laid_out_leaves_the_visit_saved_and_says_what_to_do(
    client: FlaskClient, store: Store, monkeypatch: pytest.MonkeyPatch
) -> None:
    def fail(_html: str, **_given: object) -> bytes:
        raise PdfFailed

    monkeypatch.setattr(paper_pages, "write_pdf", fail)
    visit_id = saved(store, "strong-cylinder")
    before = store.get_visit(visit_id)
    for paper in ("sheet.pdf?print=large", "care.pdf", "order.pdf", "bench.pdf"):
        answer = client.get(f"/visits/{visit_id}/{paper}")
        assert answer.status_code == 503
        assert "print it from the browser instead" in answer.text
        assert f'href="/visits/{visit_id}/{paper.partition(".")[0]}' in answer.text
    assert store.get_visit(visit_id) == before
    page = client.get(f"/visits/{visit_id}/sheet")
    assert page.status_code == 200
    assert "Your new glasses" in page.text


def test_the_print_is_asked_for_by_its_name(client: FlaskClient, store: Store) -> None:
    visit_id = saved(store, "strong-cylinder")
    for paper in ("sheet", "care"):
        assert "paper-large.css" in client.get(f"/visits/{visit_id}/{paper}?print=large").text
        assert "paper-standard.css" in client.get(f"/visits/{visit_id}/{paper}?print=standard").text
        assert "paper-standard.css" in client.get(f"/visits/{visit_id}/{paper}?print=x").text


def test_care_is_printed_for_a_wearer_and_for_anybody(client: FlaskClient, store: Store) -> None:
    visit_id = saved(store, "hairdresser-price-limit")
    own, anybody = client.get(f"/visits/{visit_id}/care").text, client.get("/care?print=large").text
    for page in (own, anybody):
        assert "How to care for your glasses" in page
        assert "Rinse the lenses" in page
        assert "What you chose" not in page
    spray, wipe = "Keep hair spray", "Do not wipe a dry"
    assert own.index(spray) < own.index(wipe)  # sprays are her trade
    assert anybody.index(wipe) < anybody.index(spray)
    assert "paper-large.css" in anybody
    answer = client.get("/care.pdf")
    assert answer.mimetype == "application/pdf"
    assert answer.data.startswith(b"%PDF-")


def test_a_reprint_keeps_the_range_the_visit_was_saved_with(client: FlaskClient, store: Store) -> None:
    own = range_to_toml(builtin_range()).replace('label = "Polycarbonate 1.59"', 'label = "Once called so"')
    visit_id = saved(store, "one-good-eye-drilled", toml=own)
    assert "Once called so" in client.get(f"/visits/{visit_id}/order?option=2").text


@pytest.mark.parametrize("paper", ["sheet", "sheet.pdf", "care", "care.pdf", "order", "order.pdf"])
def test_a_visit_that_is_not_there_has_no_paper(client: FlaskClient, paper: str) -> None:
    assert client.get(f"/visits/nowhere/{paper}").status_code == 404
