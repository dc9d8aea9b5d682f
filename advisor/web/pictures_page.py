"""Pictures of a visit or of a form being filled in: stills with the coating and without, and how they were made."""

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

from flask import Blueprint, Response, abort, make_response, render_template, request, url_for

from advisor.counsel import picture_texts
from advisor.counsel.answer import label_of
from advisor.counsel.compare import Computed, answer_of, compute
from advisor.counsel.faults import Faults
from advisor.counsel.ghost_grid import PATHS, ghost_grid
from advisor.counsel.layout import ROWS, VERDICTS
from advisor.counsel.names import coating_name
from advisor.counsel.phrases import mark
from advisor.counsel.pictures import HEIGHT, WIDTH, Name, draw, has_film, names_of, road_wide_deg, words
from advisor.counsel.section_drawing import outlines
from advisor.counsel.spectra_plot import spectra_plot
from advisor.counsel.visit import parse_visit
from advisor.web import drafting
from advisor.web.desk import current_desk
from advisor.web.forms import visit_from_fields
from advisor.web.language import Language
from advisor.web.png import encode_png
from advisor.web.screen import screen
from advisor.web.stock_loader import current_shelf, shelf_of

pictures_page = Blueprint("pictures_page", __name__)

PNG = "<any(road, desk, face):name>-<int:number>-<any(with, without):film>.png"
WITHOUT = mark("without a film")
HARD_COAT_ONLY = mark("without a film (hard coat only)")


@dataclass(frozen=True)
class Still:
    """One still: where it is fetched, its caption and what it shows in words."""

    address: str
    caption: str
    alt: str


@dataclass(frozen=True)
class Shown:
    """One picture with its stills: with the coating and without, or one alone where there is no film."""

    name: str
    title: str
    limits: str
    stills: tuple[Still, ...]


@pictures_page.get("/visits/<visit_id>/pictures")
def of_visit(visit_id: str) -> str:
    """Show the pictures of a saved visit."""
    computed, ordered = _visit(visit_id)
    return _page(computed, ordered, f"/visits/{visit_id}", _address("visit_png", visit_id=visit_id))


@pictures_page.get(f"/visits/<visit_id>/pictures/{PNG}")
def visit_png(visit_id: str, name: Name, number: int, film: str) -> Response:
    """Return one picture of a saved visit."""
    return _png(_visit(visit_id)[0], name, number, film)


@pictures_page.get("/counter/<draft_id>/pictures")
def of_draft(draft_id: str) -> Response | str:
    """Show the pictures of a form being filled in."""
    try:
        computed, ordered = _draft(draft_id)
    except Faults:
        return make_response(render_template("pictures_wait.html", back=f"/counter/{draft_id}"), 409)
    return _page(computed, ordered, f"/counter/{draft_id}", _address("draft_png", draft_id=draft_id))


@pictures_page.get(f"/counter/<draft_id>/pictures/{PNG}")
def draft_png(draft_id: str, name: Name, number: int, film: str) -> Response:
    """Return one picture of a form being filled in."""
    try:
        return _png(_draft(draft_id)[0], name, number, film)
    except Faults:
        abort(404)


def _visit(visit_id: str) -> tuple[Computed, int | None]:
    """Return a saved visit worked out with the range it was saved with."""
    store = current_desk().store
    saved = store.get_visit(visit_id)
    visit = parse_visit(saved.visit_json)
    return compute(visit, shelf_of(store, saved.range_hash).stock), visit.ordered


def _draft(draft_id: str) -> tuple[Computed, int | None]:
    store = current_desk().store
    visit = visit_from_fields(drafting.of_draft(store.get_draft(draft_id)).fields)
    return compute(visit, current_shelf(store).stock), visit.ordered


def _address(view: str, **place: Any) -> Callable[..., str]:
    return lambda **values: url_for(f"pictures_page.{view}", **place, **values)


def _png(computed: Computed, name: Name, number: int, film: str) -> Response:
    if name not in names_of(computed, number - 1):
        abort(404)
    content = encode_png(draw(computed, name, option=number - 1, film=film == "with"), width=WIDTH, height=HEIGHT)
    answer = make_response(content)
    answer.headers["Content-Type"] = "image/png"
    return answer


def _chosen(computed: Computed, ordered: int | None) -> int | None:
    """Return the option to show: the one asked for, else the one ordered, else the first that has a film."""
    made = [option.index for option in computed.laid if not option.refused]
    text = request.args.get("option", "")
    asked = int(text) - 1 if text.isascii() and text.isdigit() and len(text) < 3 else None
    filmed = [k for k in made if has_film(computed, k)]
    return next((k for k in (asked, ordered, *filmed, *made) if k in made), None)


def _page(computed: Computed, ordered: int | None, back: str, address: Callable[..., str]) -> str:
    speaker = screen()
    k = _chosen(computed, ordered)
    content: dict[str, Any] = {
        "back": back,
        "chosen": k,
        "options": [(option.index, label_of(option, speaker), bool(option.refused)) for option in computed.laid],
        "texts": picture_texts,
    }
    if k is None:
        return render_template("pictures.html", shown=(), **content)
    answer = answer_of(computed, translator=speaker, with_advice=False)
    return render_template(
        "pictures.html",
        shown=_shown(computed, k, speaker, address),
        film=has_film(computed, k),
        missing=[picture_texts.MISSING[name] for name in picture_texts.MISSING if name not in names_of(computed, k)],
        wide_deg=road_wide_deg(computed, k) if "road" in names_of(computed, k) else None,
        width=WIDTH,
        height=HEIGHT,
        plot=spectra_plot(computed.laid[k]),
        grid=ghost_grid(answer.options[k], computed.case.scenes),
        paths={row.key: row.label for row in ROWS if row.key in PATHS},
        verdicts=VERDICTS,
        outlines=[one for one in outlines(computed) if one.index == k],
        **content,
    )


def _shown(computed: Computed, k: int, speaker: Language, address: Callable[..., str]) -> list[Shown]:
    option = computed.laid[k]
    front, back = (coating_name(coating, speaker) for coating in (option.front, option.back))
    coated = (
        front
        if front == back
        else speaker.gettext(mark("%(front)s in front, %(back)s behind")) % {"front": front, "back": back}
    )
    bare = speaker.gettext(HARD_COAT_ONLY if option.material.hard_coat == "always" else WITHOUT)
    sides = [("with", coated)] + ([("without", bare)] if has_film(computed, k) else [])
    return [
        Shown(
            name,
            picture_texts.TITLES[name],
            picture_texts.LIMITS[name],
            tuple(
                Still(
                    address(name=name, number=k + 1, film=side),
                    caption,
                    words(computed, name, option=k, film=side == "with", translator=speaker),
                )
                for side, caption in sides
            ),
        )
        for name in names_of(computed, k)
    ]
