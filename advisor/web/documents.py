"""The slips for supplier and workshop, from a visit to HTML, and pages that stand alone; no application needed."""

import base64
import datetime as dt
import re
from collections.abc import Mapping
from dataclasses import asdict
from typing import Any

from advisor.counsel.bench import HINTS, PLACE_TEXTS, SIDES, bench_of
from advisor.counsel.caution_texts import CAUTION_TEXTS
from advisor.counsel.cautions import cautions_for
from advisor.counsel.compare import Computed, compute, lens_light
from advisor.counsel.order import EYE_WORDS, NotReady, missing, order_of
from advisor.counsel.phrases import Phrase, say
from advisor.counsel.sheet import NothingChosen, choose
from advisor.counsel.stock import Range
from advisor.counsel.visit import Declined, Visit
from advisor.resources import resource_dir
from advisor.web.labels import DECLINABLE, DECLINERS
from advisor.web.language import Language
from advisor.web.logo import ADDRESS
from advisor.web.paper import page
from advisor.web.screen import screen

RIM_WORDS = {"full": "full", "grooved": "grooved (nylon)", "drilled": "drilled (rimless)"}


def order_slip(
    visit: Visit, stock: Range, *, number: int | None = None, today: dt.date | None = None, fonts: str = "print-fonts"
) -> str:
    """Return the order slip as HTML, in the language of the screen.

    Raises
    ------
    advisor.counsel.order.NotReady
        With every reason, while something needed is missing.
    """
    chosen = screen()
    computed = compute(visit, stock, today=today)
    index = _ordered(computed, number, chosen)
    order = order_of(computed, index=index, translator=chosen)
    own = {
        "order": {**asdict(order), "eyes": [_eye_row(eye) for eye in order.eyes]},
        "cautions": _cautions(computed, index, chosen),
        "declined": [_declined(part, chosen) for part in visit.declined or ()],
    }
    return page("paper/order.html", _slip(computed, index, fonts=fonts) | own, code=chosen.language)


def bench_slip(
    visit: Visit, stock: Range, *, number: int | None = None, today: dt.date | None = None, fonts: str = "print-fonts"
) -> str:
    """Return the workshop's bench slip as HTML, in the language of the screen.

    Raises
    ------
    advisor.counsel.order.NotReady
        With every reason, while the order is not ready.
    """
    chosen = screen()
    computed = compute(visit, stock, today=today)
    index = _ordered(computed, number, chosen)
    bench = bench_of(computed, index=index, translator=chosen)
    own = {
        "bench": bench,
        "eyes": [{**vars(eye), "word": EYE_WORDS[eye.order.eye]} for eye in bench.eyes],
        "sides": [word for word, _ in SIDES],
        "places": PLACE_TEXTS,
        "hints": [say(hint, HINTS, chosen) for hint in bench.hints],
    }
    return page("paper/bench.html", _slip(computed, index, fonts=fonts) | own, code=chosen.language)


def _declined(part: Declined, chosen: Language) -> str:
    """Return what was turned down, and by whom, in words where there are some."""
    known = DECLINABLE.get(part.key) or (CAUTION_TEXTS[part.key].rule if part.key in CAUTION_TEXTS else part.key)
    words = chosen.gettext(known)
    return words if part.by is None else f"{words} ({chosen.gettext(DECLINERS.get(part.by, part.by))})"


def _ordered(computed: Computed, number: int | None, chosen: Language) -> int:
    """Return the option to be ordered; where none is marked, everything else that is missing is told with it."""
    try:
        return choose(computed, number=number)
    except NothingChosen as error:
        raise NotReady([*missing(computed), Phrase("nothing-chosen")], translator=chosen) from error


def _slip(computed: Computed, index: int, *, fonts: str) -> dict[str, Any]:
    """Return what the slips for supplier and workshop have in common: the lens, the frame and how it sits."""
    case, laid = computed.case, computed.laid[index]
    return {
        "laid": laid,
        "shop": case.stock.shop,
        "date": case.date,
        "reference": case.visit.reference,
        "keeps_add": laid.design.kind in ("bifocal", "progressive"),
        "tested_vertex_mm": case.tested_vertex_mm,
        "fitted_vertex_mm": case.fitted_vertex_mm,
        "tilt_deg": case.tilt_deg,
        "wrap_deg": case.wrap_deg,
        "a_mm": case.a_mm,
        "b_mm": case.b_mm,
        "dbl_mm": case.dbl_mm,
        "ed_mm": case.ed_mm,
        "rim_word": RIM_WORDS[case.rim],
        "defaults_used": case.defaults_used,
        "fonts": fonts,
    }


def _eye_row(eye: Any) -> Mapping[str, Any]:
    return {**{name: getattr(eye, name) for name in eye.__dataclass_fields__}, "word": EYE_WORDS[eye.eye]}


ORDER_CAUTIONS = (
    "child",
    "one-eye",
    "impact",
    "not-for-driving-design",
    "vertex-differs",
    "heat-soft-material",
    "solvent-soft-material",
    "drilled-caution",
)


def _cautions(computed: Computed, index: int, chosen: Language) -> list[str]:
    """Return the cautions a maker or a workshop must know of."""
    applied = cautions_for(computed.case, computed.laid[index], light=lens_light(computed, index))
    return [
        say(Phrase(a.key, a.figures), {a.key: CAUTION_TEXTS[a.key].text_for(a.figures)}, chosen)
        for a in applied
        if a.key in ORDER_CAUTIONS
    ]


_LINK = re.compile(r'<link rel="stylesheet" href="/static/([^"]+)">')
KINDS = {".ttf": "font/ttf", ".svg": "image/svg+xml"}
_URL = re.compile(r'url\("\.\./([^"]+)"\)')


def standing_alone(html: str, *, logo: bytes | None = None) -> str:
    """Return a page that needs no server: style sheets, fonts, marks and the shop's logo are put inside it."""

    def style(match: re.Match[str]) -> str:
        text = (resource_dir("static") / match.group(1)).read_text(encoding="utf-8")
        return f"<style>{_URL.sub(inside, text)}</style>"

    def inside(match: re.Match[str]) -> str:
        file = resource_dir("static") / match.group(1)
        content = base64.b64encode(file.read_bytes()).decode()
        return f'url("data:{KINDS[file.suffix]};base64,{content}")'

    if logo is not None:
        picture = f"data:image/png;base64,{base64.b64encode(logo).decode()}"
        html = html.replace(f'<img class="logo" src="{ADDRESS}"', f'<img class="logo" src="{picture}"')
    return _LINK.sub(style, html)
