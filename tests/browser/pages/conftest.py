"""The table of pages: each rule that answers with a page, in every state that looks different."""

import json
from collections.abc import Callable
from dataclasses import dataclass
from typing import TYPE_CHECKING

import pytest
from playwright.sync_api import FilePayload, expect

from tests.frame_records import WHOLE

if TYPE_CHECKING:
    from tests.browser.conftest import Served, Watched

    Path = Callable[[Served], str]
    Step = Callable[[Watched], None]

NIGHT, CHILD, FOUR = "weak-minus-night-driver", "high-plus-child", "very-unequal-eyes"
LONG = {"wearer__name": "Alexandrina Featherstone-Oberlander", "note": "Came back after three weeks, twice. " * 4}


@dataclass(frozen=True)
class Place:
    """A page in one state: the rule that answers, its address, and what is done there before it is looked at."""

    rule: str
    state: str
    path: "Path"
    then: "Step | None" = None
    status: int = 200
    is_new: bool = False  # nothing is saved yet
    unfolded: bool = True  # looked at with every fold open

    def __str__(self) -> str:
        return f"{self.rule} {self.state}".strip()


def at(path: str) -> "Path":
    return lambda _served: path


def draft(wearer: str, end: str = "", **changed: str) -> "Path":
    return lambda served: served.draft(wearer, **changed) + end


def visit(wearer: str, end: str = "", **changed: str) -> "Path":
    return lambda served: served.visit(wearer, **changed) + end


def bringing_in(wearer: str) -> "Path":
    return lambda served: served.draft(wearer).replace("/counter/", "/bring-in/")


def mistyped(watched: "Watched") -> None:
    watched.named("prescription.right.cylinder").fill("-1")
    watched.named("frame.a_mm").fill("wide")
    expect(watched.page.locator("#faults li")).to_have_count(2)


def unknown_wearer(watched: "Watched") -> None:
    watched.page.get_by_label("Open a demo wearer").evaluate("(field) => { field.options[0].value = 'nobody'; }")
    watched.page.get_by_role("button", name="Open", exact=True).click()
    watched.page.get_by_role("link", name="Back to the counter").wait_for()


def not_kept(watched: "Watched") -> None:
    watched.page.locator("#abbe").fill("many")
    watched.page.get_by_role("button", name="Keep").click()
    watched.page.get_by_role("alert").wait_for()


def too_much_said(watched: "Watched") -> None:
    watched.page.get_by_label("a paragraph of your own").fill("Come in. " * 70)
    watched.page.get_by_role("button", name="Keep").click()
    watched.page.get_by_text("mend what is marked").wait_for()


def no_match(watched: "Watched") -> None:
    watched.page.get_by_label("Find by name").fill("nobody of this name")
    watched.page.get_by_text("No visit fits").wait_for()


def unanswered(watched: "Watched") -> None:
    watched.page.get_by_role("button", name="Work out").click()
    watched.page.locator(".offer").wait_for()


def told(watched: "Watched") -> None:
    page = watched.page
    page.get_by_label("All asked; the rest no").check()
    page.get_by_label("in the wearer's words").fill("second light")
    page.locator("#fold-measured > summary").click()
    watched.named("measured.right.sphere").fill("-3.00")
    page.get_by_role("button", name="Work out").click()
    page.locator("#h-causes").wait_for()


def for_today(watched: "Watched") -> None:
    watched.page.locator("[name^='answer.today-'][value='yes']").first.check()
    watched.page.get_by_label("All asked; the rest no").check()
    watched.page.get_by_label("in the wearer's words").fill("second light")
    watched.page.get_by_role("button", name="Work out").click()
    watched.page.locator(".refer").wait_for()


def recorded(watched: "Watched") -> None:
    told(watched)
    watched.page.locator("[name='outcome'][value='remake']").check()
    watched.named("who_pays").select_option("maker")
    watched.named("note").fill("As measured above.")
    watched.page.get_by_role("button", name="Record the outcome").click()
    watched.page.locator("#recorded").wait_for()


def slip(watched: "Watched") -> None:
    recorded(watched)
    watched.page.get_by_role("link", name="slip").first.click()
    watched.page.locator("h1").wait_for()


def _brought(watched: "Watched", content: str) -> None:
    file: FilePayload = {"name": "brought.txt", "mimeType": "text/plain", "buffer": content.encode()}
    watched.page.get_by_label("file, 2 MB at most").set_input_files(file)
    watched.page.get_by_role("button", name="Read it").click()
    watched.page.get_by_role("heading", name="Choose another file").wait_for()


def prescriptions(watched: "Watched") -> None:
    lenses = [
        {"eye": eye, "sphere": -4.25, "cylinder": -1.0, "axis": 190, "add": 1.5, "brand": "x",
         "prism": [{"amount": 1.5, "base": "in"}, {"amount": 0.5, "base": "down"}]}
        for eye in ("right", "left")
    ]  # fmt: skip
    one = {"resourceType": "VisionPrescription", "dateWritten": "2026-11-20", "lensSpecification": lenses}
    named = {**one, "patient": {"display": "Alexandrina Featherstone-Oberlander"}}
    entries = [{"resource": resource} for resource in (named, one, {**one, "status": "cancelled"})]
    _brought(watched, json.dumps({"resourceType": "Bundle", "entry": entries}))


def saved_elsewhere(watched: "Watched") -> None:
    other = watched.another_tab()
    other.goto(watched.page.url)
    for page, text in ((other, "theirs, and a good deal longer than a line"), (watched.page, "mine")):
        page.locator("#fold-wearer > summary").click()
        page.locator("[name='note']").fill(text)
        page.get_by_role("button", name="Save the visit").click()
        page.locator("#told" if page is watched.page else ".papers:not(.are-behind)").wait_for()


def asked_to_erase(watched: "Watched") -> None:
    watched.page.get_by_role("button", name="Erase what is ticked").click()
    watched.page.get_by_role("button", name="Erase for good").wait_for()


def traced(watched: "Watched") -> None:
    _brought(watched, WHOLE.replace("VBOX=38.00", "VBOX=38.80"))


def in_the_form(watched: "Watched") -> None:
    traced(watched)
    watched.page.get_by_role("button", name="Mirror it first").click()
    watched.page.get_by_role("button", name="Use this outline").click()
    watched.page.get_by_role("button", name="Frame record file").click()
    watched.page.get_by_role("button", name="Take the outline out").wait_for()


START, DRAFT, VISIT = "/", "/counter/<draft_id>", "/visits/<visit_id>"
PAPER, RECHECK = "/visits/<visit_id>/<any(sheet, care, order, bench):paper>", "/visits/<visit_id>/recheck"
ITEM, NEW, COPY = "/range/<section>/<int:place>", "/range/<section>/new", "/range/<section>/<int:place>/copy"

PLACES = (
    Place(START, "empty", at("/")),
    Place(START, "an unknown demo wearer", at("/"), unknown_wearer, status=400),
    Place(DRAFT, "with figures", draft(NIGHT)),
    Place(DRAFT, "four options", draft(FOUR, do="add", **LONG), unfolded=False),
    Place(DRAFT, "with faults", draft(NIGHT), mistyped, unfolded=False),
    Place(DRAFT, "none such", at("/counter/gone"), status=404),
    Place("/counter/<draft_id>/pictures", "", draft("office-window-behind", "/pictures")),
    Place("/counter/<draft_id>/pictures", "nothing to draw", draft(NIGHT, "/pictures", frame__a_mm="wide"), status=409),
    Place(VISIT, "saved", visit(CHILD), unfolded=False),
    Place(VISIT, "none such", at("/visits/gone"), status=404),
    Place("/counter/<draft_id>/turn", "", draft(FOUR, "/turn")),
    Place("/visits/<visit_id>/turn", "", visit(CHILD, "/turn")),
    Place("/visits", "none yet", at("/visits"), is_new=True),
    Place("/visits", "more than one page", lambda served: served.many_visits(NIGHT, **LONG)),
    Place("/visits", "none that fits", at("/visits"), no_match),
    Place("/visits/<visit_id>/pictures", "", visit(NIGHT, "/pictures")),
    Place("/visits/<visit_id>/pictures", "no film", visit("hairdresser-price-limit", "/pictures?option=1")),
    Place(PAPER, "sheet", visit(NIGHT, "/sheet")),
    Place(PAPER, "sheet in large print", visit(CHILD, "/sheet", wearer__print="large")),
    Place(PAPER, "care", visit(NIGHT, "/care")),
    Place("/care", "", at("/care")),
    Place(PAPER, "order", visit(NIGHT, "/order")),
    Place(PAPER, "order held back", visit(NIGHT, "/order", fitting__right__pd_mm=""), status=409),
    Place(PAPER, "bench slip", visit("one-good-eye-drilled", "/bench")),
    Place(RECHECK, "empty", visit(NIGHT, "/recheck")),
    Place(RECHECK, "nothing asked", visit(NIGHT, "/recheck"), unanswered),
    Place(RECHECK, "causes", visit(NIGHT, "/recheck"), told),
    Place(RECHECK, "a sign for today", visit(NIGHT, "/recheck"), for_today),
    Place(RECHECK, "recorded", visit(NIGHT, "/recheck"), recorded),
    Place("/visits/<visit_id>/recheck/<recheck_id>", "slip", visit(NIGHT, "/recheck"), slip),
    Place("/visits/<visit_id>/then", "", visit(NIGHT, "/then")),
    Place("/visits/<visit_id>/wearer", "", visit(NIGHT, "/wearer")),
    Place("/visits/<visit_id>/wearer", "to be erased", visit(NIGHT, "/wearer"), asked_to_erase),
    Place(VISIT, "saved elsewhere", visit(CHILD), saved_elsewhere, status=409, unfolded=False),
    Place("/visits/old", "", at("/visits/old")),
    Place("/visits/erased", "", at("/visits/erased")),
    Place("/records", "none yet", at("/records"), is_new=True),
    Place("/records", "lines", at("/records")),
    Place("/bring-in", "empty", at("/bring-in")),
    Place("/bring-in", "prescriptions", at("/bring-in"), prescriptions),
    Place("/bring-in/<draft_id>", "a traced frame", bringing_in(NIGHT), traced),
    Place("/bring-in/<draft_id>", "an outline in the form", bringing_in(NIGHT), in_the_form),
    Place("/visits/<visit_id>/files", "", visit(NIGHT, "/files")),
    Place("/range", "", at("/range")),
    Place("/range/shop", "", at("/range/shop")),
    Place("/range/sheet", "", at("/range/sheet")),
    Place("/range/sheet", "with a fault", at("/range/sheet"), too_much_said, status=422),
    Place(ITEM, "material", at("/range/material/1")),
    Place(ITEM, "coating", at("/range/coating/3")),
    Place(ITEM, "with a fault", at("/range/material/1"), not_kept, status=422),
    Place(ITEM, "scene", at("/range/scene/1")),
    Place(NEW, "offer", at("/range/offer/new")),
    Place(COPY, "tint", at("/range/tint/0/copy")),
)
# Rules that answer with something else than a page.
DOWNLOADS = {f"{VISIT}/{file}" for file in ("visit.json", "prescription.fhir.json", "comparison.csv")}
NO_PAGES = frozenset({"/static/<path:filename>", "/health", "/favicon.ico", "/range/export", *DOWNLOADS})


@pytest.fixture(params=PLACES, ids=str)
def place(request: pytest.FixtureRequest) -> Place:
    """Each page in each state, one after the other."""
    found: Place = request.param
    return found


@pytest.fixture
def listed() -> frozenset[str]:
    """Every rule that the table names, as a page or as none."""
    return NO_PAGES | {place.rule for place in PLACES}
