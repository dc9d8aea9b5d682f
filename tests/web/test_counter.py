"""The Counter answers with figures, keeps what was typed, and says what is wrong beside its field."""

import json
import re
from collections import Counter
from html import unescape

import pytest
from flask.testing import FlaskClient
from werkzeug.test import TestResponse

from advisor.counsel.caution_texts import CAUTION_TEXTS
from advisor.counsel.explanations import EXPLANATIONS
from advisor.counsel.layout import ROWS
from advisor.counsel.musts import musts
from advisor.counsel.questions import FIRST
from advisor.counsel.value import criteria
from advisor.counsel.visit import read_visit
from advisor.records.store import Store
from advisor.resources import resource_dir
from advisor.web import labels
from advisor.web.advice_view import FIGURES
from advisor.web.asked import further_questions
from advisor.web.filled_form import visit_to_fields
from advisor.web.form_fields import DECLINABLE, PLAIN

LIVE = {"HX-Request": "true"}
TWO_SPHERES = {
    "prescription.right.sphere": "-4.25",
    "prescription.left.sphere": "-3.75",
    "option_count": "2",
    "baseline": "0",
    "options.0.material": "hard-resin-150",
    "options.0.coating.front": "bare",
    "options.1.material": "hard-resin-150",
    "options.1.coating.front": "broadband",
}
HOSTILE = "<script>alert(1)</script>\"'"


def draft_id(answer: TestResponse) -> str:
    return answer.headers["HX-Replace-Url"].rsplit("/", 1)[1]


def drafts(store: Store) -> int:
    with store._engine.begin() as connection:
        return int(connection.exec_driver_sql("SELECT count(*) FROM draft").scalar_one())


def test_the_start_page_asks_for_two_spheres_and_keeps_nothing(client: FlaskClient, store: Store) -> None:
    page = client.get("/").text
    assert "Figures appear here as soon as this is typed" in page
    assert "Open a demo wearer" in page
    assert drafts(store) == 0


def test_two_spheres_give_a_comparison(client: FlaskClient) -> None:
    page = client.post("/counter", data=TWO_SPHERES, headers=LIVE).text
    assert "<html" not in page
    for words in ("price of the pair", "second image", "reflection seen by others", "what it cannot do"):
        assert words in page
    # Fresnel at n = 1.498, both faces: 1 - (1 - 0.0397)^2 is 7.8 %; the whole lens with all bounces 2R/(1+R) is 7.6 %.
    assert re.search(r">7\.[67]\d\s%<", page)


def test_a_live_answer_names_the_address_of_the_draft_and_the_draft_holds_what_was_typed(
    client: FlaskClient, store: Store
) -> None:
    first = client.post("/counter", data=TWO_SPHERES, headers=LIVE)
    kept = json.loads(store.get_draft(draft_id(first)).fields_json)["fields"]
    assert kept["prescription.right.sphere"] == "-4.25"
    changed = {**TWO_SPHERES, "draft": draft_id(first), "draft_edit": "1", "prescription.left.sphere": "-3,5"}
    second = client.post("/counter", data=changed, headers=LIVE)
    assert draft_id(second) == draft_id(first)
    assert drafts(store) == 1
    page = client.get(second.headers["HX-Replace-Url"]).text
    assert 'name="prescription.left.sphere" value="-3,5"' in page


def test_without_htmx_the_whole_page_comes_back(client: FlaskClient) -> None:
    answer = client.post("/counter", data=TWO_SPHERES)
    assert answer.status_code == 303
    page = client.get(answer.headers["Location"]).text
    assert "<html" in page
    assert 'value="-4.25"' in page
    assert "second image" in page


def test_a_fault_stands_beside_its_field_and_what_was_typed_stays(client: FlaskClient) -> None:
    wrong = {**TWO_SPHERES, "prescription.right.cylinder": "-1", "frame.a_mm": "wide"}
    live = client.post("/counter", data=wrong, headers=LIVE)
    assert live.status_code == 200
    assert 'data-field="prescription.right.axis"' in live.text
    assert 'class="big"' not in live.text
    page = client.post("/counter", data=wrong, follow_redirects=True).text
    assert re.search(r'id="fault-prescription\.right\.axis">A cylinder of −1 needs an axis from 1 to 180\.<', page)
    assert re.search(r'id="fault-frame\.a_mm">Write a number here\.<', page)
    assert re.search(r'name="frame\.a_mm" value="wide"[^>]*aria-invalid="true"', page)


def test_a_sphere_not_typed_yet_is_waited_for(client: FlaskClient) -> None:
    page = client.post("/counter", data={"prescription.right.sphere": "-1"}, headers=LIVE).text
    assert "the left sphere." in page
    assert 'id="faults"' not in page


@pytest.mark.parametrize(
    "name", ["wearer.name", "note", "prescription.right.sphere", "options.0.material", "kept", "token"]
)
def test_hostile_text_is_escaped(client: FlaskClient, name: str) -> None:
    page = client.post("/counter", data={**TWO_SPHERES, "wearer.name": "A", name: HOSTILE}, follow_redirects=True).text
    assert HOSTILE not in page
    assert "<script>alert" not in page


@pytest.mark.parametrize("text", ["{", "[]", '{"options": 3}', '{"format": "other"}', "1e999", "\x00", "{" * 5000])
def test_a_mangled_hidden_field_is_a_fault_and_no_crash(client: FlaskClient, text: str) -> None:
    answer = client.post("/counter", data={**TWO_SPHERES, "kept": text}, headers=LIVE)
    assert answer.status_code == 200
    assert 'id="faults"' in answer.text


def test_the_difference_from_the_baseline_stands_under_each_figure(client: FlaskClient) -> None:
    page = client.post("/counter", data=TWO_SPHERES, headers=LIVE).text
    assert "times weaker" in page
    other = client.post("/counter", data={**TWO_SPHERES, "baseline": "1"}, headers=LIVE).text
    assert "times stronger" in other


def test_an_option_that_cannot_be_made_keeps_its_place_and_says_why(client: FlaskClient) -> None:
    drilled = {**TWO_SPHERES, "frame.rim": "drilled", "options.0.material": "polycarbonate-159"}
    page = client.post("/counter", data=drilled, headers=LIVE).text
    assert "is not sold for a drilled rim" in page
    assert page.count('<span class="which">2</span>') >= 4


def test_options_are_added_and_removed_without_scripting(client: FlaskClient) -> None:
    added = client.post("/counter", data={**TWO_SPHERES, "do": "add"}, follow_redirects=True).text
    assert 'name="options.2.material"' in added
    removed = client.post("/counter", data={**TWO_SPHERES, "do": "remove-0"}, follow_redirects=True).text
    assert 'name="options.1.material"' not in removed
    assert re.search(r'<option value="broadband" selected>', removed)


def test_a_form_changed_in_another_window_is_not_overwritten(client: FlaskClient, store: Store) -> None:
    first = client.post("/counter", data=TWO_SPHERES, headers=LIVE)
    seen = {**TWO_SPHERES, "draft": draft_id(first), "draft_edit": "1"}
    client.post("/counter", data={**seen, "wearer.name": "Here"}, headers=LIVE)
    late = client.post("/counter", data={**seen, "wearer.name": "There"}, headers=LIVE)
    assert late.status_code == 200
    assert "changed in another window" in late.text
    assert json.loads(store.get_draft(draft_id(first)).fields_json)["fields"]["wearer.name"] == "Here"


def test_a_draft_that_is_gone_is_said_to_be_gone(client: FlaskClient) -> None:
    assert client.get("/counter/nowhere").status_code == 404
    live = client.post("/counter", data={**TWO_SPHERES, "draft": "nowhere", "draft_edit": "1"}, headers=LIVE)
    assert (live.status_code, "no longer kept" in live.text) == (200, True)


def test_a_demo_wearer_opens_as_a_draft(client: FlaskClient, store: Store) -> None:
    answer = client.post("/demo", data={"wearer": "strong-cylinder"})
    assert (answer.status_code, drafts(store)) == (303, 1)
    assert 'value="Teo Brandt"' in client.get(answer.headers["Location"]).text
    assert client.post("/demo", data={"wearer": "../secret"}).status_code == 400


def test_every_row_opens_to_formula_source_and_what_is_left_out(client: FlaskClient) -> None:
    assert {row.key for row in ROWS} <= EXPLANATIONS.keys()
    page = client.post("/counter", data=TWO_SPHERES, headers=LIVE).text
    rows = page.count('<details class="figure"')
    assert rows > 10
    assert page.count("<dt>Formula</dt>") == page.count("<dt>Left out</dt>") == rows
    assert "Numbers put in" in page


def test_a_get_changes_nothing(client: FlaskClient, store: Store) -> None:
    client.post("/counter", data=TWO_SPHERES, headers=LIVE)
    before = store._engine.begin
    with before() as connection:
        rows = connection.exec_driver_sql("SELECT * FROM draft").fetchall()
    for address in ("/", "/visits", "/range", "/range/export", "/range/material/0", "/range/material/new", "/health"):
        assert client.get(address).status_code == 200
    with before() as connection:
        assert connection.exec_driver_sql("SELECT * FROM draft").fetchall() == rows


def test_no_page_needs_what_the_policy_forbids(client: FlaskClient) -> None:
    pages = [client.get(address).text for address in ("/", "/visits", "/range", "/range/coating/3", "/range/shop")]
    pages.append(client.post("/counter", data=TWO_SPHERES, follow_redirects=True).text)
    for page in pages:
        assert not re.search(r"\sstyle=|<style|\son\w+=|hx-on|js:|<script(?! src=)", page)
        assert not re.search(r'(src|href|action)="(?!/|#)', page)


CHILD = "high-plus-child"


def demo_page(client: FlaskClient, name: str) -> str:
    return client.get(client.post("/demo", data={"wearer": name}).headers["Location"]).text


def demo_form(name: str) -> dict[str, str]:
    """The fields a browser would send for a demo wearer."""
    fields = visit_to_fields(read_visit(resource_dir("demo_patients") / f"{name}.json"))
    return {key: text for key, text in fields.items() if text}


def advice_of(page: str) -> str:
    return unescape(page[page.index('id="h-advice"') : page.index('id="why-weighed"')])


def test_advice_stands_in_its_order_with_reasons_and_what_is_given_up(client: FlaskClient) -> None:
    advice = advice_of(client.post("/counter", data=demo_form("hairdresser-price-limit"), headers=LIVE).text)
    words = ("Free first", "Cheapest that meets every must", "Recommended", "Next best", "How sure", "Excluded")
    places = [advice.index(word) for word in words]
    assert places == sorted(places)
    recommended = advice[places[2] : places[3]]
    reasons, gives_up = recommended.split("It gives up")
    assert 1 <= reasons.count("<li>") <= 3
    assert 1 <= gives_up.count("<li>") <= 3
    assert "\N{EURO SIGN}150.00" in recommended
    assert "over the limit of 160.00" in advice.replace("\xa0", " ")
    assert "Turn the desk" in advice[: places[1]]


def test_where_no_option_does_every_job_two_pairs_stand_with_their_price(client: FlaskClient) -> None:
    advice = advice_of(client.post("/counter", data=demo_form("very-unequal-eyes"), headers=LIVE).text)
    assert "No single option does every job" in advice
    assert advice.index("First of two pairs") < advice.index("Second of two pairs") < advice.index("together")
    assert advice.count('<article class="piece') == 2
    assert "\N{EURO SIGN}480.00" in advice  # 2 x 240


def test_how_it_was_weighed_names_weights_scale_and_source(client: FlaskClient) -> None:
    page = client.post("/counter", data=demo_form(CHILD), headers=LIVE).text
    weighed = page[page.index('id="why-weighed"') : page.index('class="sections"')]
    shares = [int(text) for text in re.findall(r"</svg> (\d+) %", weighed)]
    assert abs(sum(shares) - 100) <= len(shares) / 2  # rounded, each by half a point at most
    bars = [float(text) for text in re.findall(r'<svg class="bar" width="([\d.]+)"', weighed)]
    assert all(
        abs(bar - 1.2 * share) <= 0.61 for bar, share in zip(bars, shares, strict=True)
    )  # 120 units are all of it
    assert "Edwards and Barron 1994" in weighed


def test_a_pair_that_is_advised_can_be_laid_out_without_scripting(client: FlaskClient, store: Store) -> None:
    sent = demo_form(CHILD)
    page = client.post("/counter", data=sent, headers=LIVE).text
    (wish,) = (unescape(text) for text in re.findall(r'name="do" value="(lay:[^"]+)"', page))
    answer = client.post("/counter", data={**sent, "do": wish})
    assert answer.status_code == 303
    kept = json.loads(store.get_draft(re.split("[/#]", answer.headers["Location"])[2]).fields_json)["fields"]
    assert (kept["option_count"], kept["options.3.material"], kept["options.3.coating.front"]) == (
        "4", "polycarbonate-159", "hard-coat-only",
    )  # fmt: skip
    again = client.get(answer.headers["Location"]).text
    assert "Polycarbonate 1.59, Hard coat only" in again
    assert 'value="lay:' not in again  # it is laid out, and there is no room for a fifth
    full = {**kept, "do": wish}
    assert json.loads(wish.removeprefix("lay:"))["material"] == "polycarbonate-159"
    client.post("/counter", data=full)
    assert 'name="options.4.material"' not in client.post("/counter", data=full, follow_redirects=True).text


def test_a_part_given_in_place_is_laid_out_as_it_was_given(client: FlaskClient) -> None:
    own = {"n_d": 1.6, "abbe": 40, "density_g_cm3": 1.0, "price": 1, "label": "Sample"}
    sent = {**TWO_SPHERES, "options.0.material": json.dumps(own), "options.1.material": json.dumps(own)}
    sent["options.0.coating.front"] = sent["options.1.coating.front"] = "hard-coat-only"
    page = client.post("/counter", data=sent, headers=LIVE).text
    wishes = [json.loads(unescape(text)[4:]) for text in re.findall(r'name="do" value="(lay:[^"]+)"', page)]
    given = [json.loads(wish["material"]) for wish in wishes if wish["material"].startswith("{")]
    assert given
    assert all((item["n_d"], item["label"]) == (1.6, "Sample") for item in given)


@pytest.mark.parametrize("wish", ["lay:", "lay:[]", "lay:{", 'lay:{"option_count": "9"}', 'lay:{"material": 3}',
                                  "lay:" + "[" * 9000, 'lay:{"material": "' + "x" * 30000 + '"}'])  # fmt: skip
def test_a_mangled_wish_lays_nothing_out(client: FlaskClient, wish: str) -> None:
    answer = client.post("/counter", data={**TWO_SPHERES, "do": wish}, follow_redirects=True)
    assert answer.status_code == 200
    assert 'name="options.2.material"' not in answer.text


def test_what_is_declined_is_kept_and_lifts_its_condition(client: FlaskClient, store: Store) -> None:
    sent = {**demo_form(CHILD), "token": "c" * 32}
    before = advice_of(client.post("/counter", data=sent, headers=LIVE).text)
    assert "A child: an impact material first" in before
    assert 'href="#declined-tough-material"' in before
    declined = {**sent, "declined": "tough-material", "declined_by.tough-material": "parent"}
    after = advice_of(client.post("/counter", data=declined, headers=LIVE).text)
    assert "A child: an impact material first" not in after
    location = client.post("/visits", data=declined).headers["Location"]
    visit = json.loads(store.get_visit(location.rsplit("/", 1)[1]).visit_json)
    assert visit["declined"] == [{"key": "tough-material", "by": "parent"}]
    page = client.get(location).text
    assert re.search(r'name="declined" value="tough-material" checked', page)
    assert '<option value="parent" selected>' in page


def test_everything_that_may_be_declined_has_words() -> None:
    assert set(labels.DECLINABLE) == set(DECLINABLE) == {must.lifted_by for must in musts()} - {None}
    assert set(labels.DECLINED_CAUTIONS) <= CAUTION_TEXTS.keys()
    assert set(FIGURES) == criteria().keys()


def test_every_field_of_a_visit_stands_once_in_the_form(client: FlaskClient) -> None:
    page = client.get("/").text
    places = Counter(re.findall(r'<(?:select|textarea|input)[^>]* name="([^"]+)"', page))
    alone = [name for name in PLAIN if name not in ("daily_life.cleaning", "scenes", "baseline", "ordered")]
    assert {name: places[name] for name in alone} == dict.fromkeys(alone, 1)


def test_six_questions_come_first_and_the_rest_opens_by_answers(client: FlaskClient) -> None:
    page = unescape(client.get("/").text)
    places = [page.index(question.text) for question in FIRST]
    assert places == sorted(places)
    more = page[page.index('id="asked-more"') :]
    assert "Is the glare at night new" in more
    assert "Are they for a child?" in more
    answered = client.post("/counter", data={**TWO_SPHERES, "daily_life.night_driving": "often"}, follow_redirects=True)
    shown = unescape(answered.text)
    shown = shown[shown.index('id="asked-next"') : shown.index('id="asked-more"')]
    assert "Is the glare at night new" in shown
    assert "Are they for a child?" in shown  # no age is known
    assert "rides" not in shown
    live = client.post("/counter", data={**TWO_SPHERES, "daily_life.night_driving": "often"}, headers=LIVE).text
    (keys,) = re.findall(r'id="opened" data-keys="([^"]*)"', live)
    assert {"new-glare", "child"} <= set(keys.split())
    assert "two-wheeler" not in keys


def test_a_question_not_asked_stays_an_empty_choice(client: FlaskClient) -> None:
    page = client.post("/counter", data=TWO_SPHERES, follow_redirects=True).text
    for name in ("driving", "impact", "child", "sun"):
        (field,) = re.findall(rf'<select id="daily_life\.{name}".*?</select>', page, flags=re.DOTALL)
        assert "selected" not in field
        assert field.index("not asked") < field.index("</option>")


def test_an_answered_question_stays_shown_though_nothing_opens_it() -> None:
    (two_wheeler,) = (one for one in further_questions({}, frozenset()) if one.key == "two-wheeler")
    assert not two_wheeler.is_shown
    answered = further_questions({"daily_life.two_wheeler": "no"}, frozenset())
    assert next(one for one in answered if one.key == "two-wheeler").is_shown


def test_the_second_image_leads_with_words_and_its_strength_stands_under_them(client: FlaskClient) -> None:
    page = client.post("/counter", data=demo_form("weak-minus-night-driver"), headers=LIVE).text
    row = unescape(page[page.index('id="why-second_image"') : page.index('id="why-seen_by_others"')])
    cell = row[row.index('class="cell"') :]
    assert cell.index("A plain second light") < cell.index("1 part in 630")
    assert "as lenses and eyes vary: noticeable to plain to see" in cell


def test_bright_scenes_are_told_by_contrast(client: FlaskClient) -> None:
    page = client.post("/counter", data={**TWO_SPHERES, "scenes": "stage-lights"}, headers=LIVE).text
    assert "on a stage or by day, told by contrast" in page


def test_the_same_lens_in_a_smaller_frame_stands_beside_every_index(client: FlaskClient) -> None:
    sent = {**TWO_SPHERES, "options.1.material": "thiourethane-167"}
    page = client.post("/counter", data=sent, headers=LIVE).text.replace("\xa0", " ")
    assert len(re.findall(r"in a frame 4 mm smaller: \d\.\d", page)) == 2


def test_the_reflectance_limit_is_folded_with_what_reaches_it(client: FlaskClient) -> None:
    page = client.post("/counter", data=demo_form("weak-minus-night-driver"), headers=LIVE).text.replace("\xa0", " ")
    row = page[page.index('id="why-reflectance_limit"') :]
    assert page.index('id="why-rest"') < page.index('id="why-reflectance_limit"')
    # the limit is 0.61 % (bisection against the threshold model, checked in tests/optics/test_reflectance_limit.py)
    assert re.search(r"at most 0\.6\d % a face", row)
    assert "reached by: Broadband, Broadband, widest" in row
