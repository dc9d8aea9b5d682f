"""The pair worn now on the Counter: a column beside the options that cannot be chosen, ordered or advised."""

import json
import re
from html import unescape

from flask.testing import FlaskClient

from advisor.counsel.visit import read_visit
from advisor.resources import resource_dir
from advisor.web.filled_form import visit_to_fields

LIVE = {"HX-Request": "true"}


def demo_form(name: str) -> dict[str, str]:
    """The fields a browser would send for a demo wearer."""
    fields = visit_to_fields(read_visit(resource_dir("demo_patients") / f"{name}.json"))
    return {key: text for key, text in fields.items() if text}


def head_of(page: str) -> str:
    (head,) = re.findall(r'<div id="worn-head".*?</div>', page, re.S)
    return unescape(head)


def columns(page: str) -> set[str]:
    """The grids of the rows of figures."""
    return set(re.findall(r'<div class="columns (of-\d)">', page))


def test_the_worn_pair_has_a_head_of_its_own_and_a_cell_in_every_row(client: FlaskClient) -> None:
    form = demo_form("weak-minus-night-driver")
    count = int(form["option_count"])
    page = client.post("/counter", data=form, follow_redirects=True).text
    head = head_of(page)
    assert "Worn now" in head
    assert "Hard resin 1.50, Bare" in head
    assert "its own prescription and today's fitting" in head
    assert "present frame's shape" in head
    assert columns(page) == {f"of-{count + 1}"}
    rows = page.count('<details class="figure"')
    assert page.count('class="cell is-worn"') == rows + 1  # and one under the cross-sections
    assert f'class="columns of-{count} choices"' in page


def test_the_worn_pair_can_be_neither_baseline_nor_ordered_nor_removed(client: FlaskClient) -> None:
    form = demo_form("weak-minus-night-driver")
    count = int(form["option_count"])
    page = client.post("/counter", data=form, follow_redirects=True).text
    assert not re.search(r"<(?:input|select|button|a)\b", head_of(page))
    for name in ("baseline", "ordered"):
        values = set(re.findall(rf'type="radio"[^>]* name="{name}" value="(\d+)"', page))
        assert values == {str(k) for k in range(count)}
    assert f'value="remove-{count}"' not in page
    location = client.post("/visits", data={**form, "do": "save", "token": "w" * 32}).headers["Location"]
    asked, usual = (client.get(f"{location}/order{query}").text for query in (f"?option={count + 1}", ""))
    assert asked == usual  # there is no such option, so none was asked for


def test_the_head_follows_while_somebody_types(client: FlaskClient) -> None:
    form = demo_form("weak-minus-night-driver")
    page = client.post("/counter", data=form, headers=LIVE).text
    assert 'hx-swap-oob="true"' in head_of(page)
    form.pop("worn_now.material")
    without = client.post("/counter", data=form, headers=LIVE).text
    assert "material not known, Bare" in head_of(without)
    assert "Say the worn pair's material to see it beside." in head_of(without)
    form = {key: text for key, text in form.items() if not key.startswith("worn_now.coating")}
    gone = client.post("/counter", data=form, headers=LIVE).text
    assert " hidden" in head_of(gone)
    assert "is-worn" not in gone
    assert columns(gone) == {f"of-{form['option_count']}"}


def test_a_fault_leaves_the_head_as_it_stands(client: FlaskClient) -> None:
    form = {**demo_form("weak-minus-night-driver"), "prescription.right.sphere": "x"}
    assert 'id="worn-head"' not in client.post("/counter", data=form, headers=LIVE).text


def test_a_worn_material_with_a_hostile_name_is_text(client: FlaskClient) -> None:
    own = {"n_d": 1.6, "abbe": 40, "density_g_cm3": 1.3, "label": "<script>alert(1)</script>"}
    form = {**demo_form("weak-minus-night-driver"), "worn_now.material": json.dumps(own)}
    page = client.post("/counter", data=form, headers=LIVE).text
    assert "<script>alert" not in page
    assert "&lt;script&gt;alert" in page


def test_a_saved_visit_keeps_the_column_with_its_figures(client: FlaskClient) -> None:
    form = {**demo_form("office-window-behind"), "do": "save", "token": "v" * 32}
    location = client.post("/visits", data=form).headers["Location"]
    page = client.get(location).text
    assert "worked out at today's prescription and fitting" in head_of(page)
    sheet = client.get(f"{location}/order").text
    assert "Worn now" not in sheet
