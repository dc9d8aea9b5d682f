"""Every page in every state, looked at by machine: room, reach, contrast in light and dark; policy and network."""

from pathlib import Path
from typing import TYPE_CHECKING

from axe_playwright_python.sync_playwright import Axe

from advisor.web.app import create_app

if TYPE_CHECKING:
    from tests.browser.conftest import Served, Watched
    from tests.browser.pages.conftest import Place

LOOK = (Path(__file__).parent / "look.js").read_text(encoding="utf-8")
SIZES = ((1366, 768), (820, 1180), (683, 384), (320, 640))  # the third is the first at 200 %
# All that a scheme changes is colours.
RULES = {"light": ["wcag2a", "wcag2aa", "wcag21a", "wcag21aa", "wcag22aa"], "dark": ["color-contrast"]}
FOLDS = "(opened) => document.querySelectorAll('details').forEach((one) => { one.open = opened; })"


def test_every_rule_that_answers_with_a_page_stands_in_the_table(listed: frozenset[str], tmp_path: Path) -> None:
    rules = {
        rule.rule
        for rule in create_app(data_dir=tmp_path).url_map.iter_rules()
        if "GET" in (rule.methods or ()) and not rule.rule.endswith((".png", ".pdf"))
    }
    assert rules == listed


def test_no_page_is_cut_or_crowded_or_out_of_reach(watched: "Watched", untouched: "Served", place: "Place") -> None:
    page = watched.page
    served = untouched if place.is_new else watched.served
    answer = page.goto(served.address + place.path(served))
    if place.then is not None:
        place.then(watched)
    page.wait_for_load_state("load")
    assert answer is not None
    assert place.then is not None or answer.status == place.status
    found = []
    # what is folded must fit as well, and uses the same colours, so all is looked at opened
    page.evaluate(FOLDS, place.unfolded)
    for width, height in SIZES:
        page.set_viewport_size({"width": width, "height": height})
        found += [f"{width} px: {line}" for line in page.evaluate(LOOK)]
    page.set_viewport_size({"width": 1366, "height": 768})
    for scheme, rules in RULES.items():
        page.emulate_media(color_scheme=scheme)  # type: ignore[arg-type]  # one of the two words
        report = Axe().run(page, options={"runOnly": rules})
        found += [f"{scheme}: {report.generate_report()}"] if report.violations_count else []
        page.evaluate(FOLDS, False)
    assert not found, "\n".join(found)
    expected = [] if place.status == 200 else [f"status of {place.status} "]
    assert [line for line in watched.trouble if not any(part in line for part in expected)] == []
    assert watched.hosts == {"127.0.0.1"}
