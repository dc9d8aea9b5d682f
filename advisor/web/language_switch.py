"""The language of the screen, chosen: a form in the head of every page, kept by the browser for a year."""

import re
from functools import cache

from flask import Blueprint, current_app, has_request_context, redirect, request
from werkzeug.wrappers import Response as AnyResponse

from advisor.web.language import language, languages
from advisor.web.screen import COOKIE

language_switch = Blueprint("language_switch", __name__)

YEAR_S = 365 * 24 * 60 * 60
# One stroke, then neither another nor a backslash, which browsers take for one; no blanks or control characters.
LOCAL = re.compile(r"/(?![/\\])[^\\\s\x00-\x1f\x7f]*")
LONGEST = 1000


@cache
def own_name(code: str) -> str:
    """Return what a language calls itself, beginning with a capital."""
    from babel import Locale

    name = Locale.parse(code, sep="-").get_display_name() or code
    return name[:1].upper() + name[1:]


def choices() -> list[tuple[str, str]]:
    """Return the languages of the program with their own names."""
    return [(code, own_name(code)) for code in languages()]


def local_path(text: str) -> str:
    """Return a path of this program, or the start page's where the text is anything else."""
    return text if len(text) <= LONGEST and LOCAL.fullmatch(text) else "/"


def standing_at() -> str:
    """Return the address of the page being shown; where only a form leads there, the start page's."""
    if not has_request_context():
        return "/"
    rule = request.url_rule
    alike = [] if rule is None else [one for one in current_app.url_map.iter_rules() if one.rule == rule.rule]
    is_read = request.method == "GET" or any("GET" in (one.methods or ()) for one in alike)
    return request.full_path.removesuffix("?") if is_read else "/"


@language_switch.post("/language")
def use() -> AnyResponse:
    """Keep the language chosen and go back to where the form stood."""
    chosen = language(request.form.get("language", ""))
    answer = redirect(local_path(request.form.get("back", "")), 303)
    answer.set_cookie(COOKIE, chosen.language, max_age=YEAR_S, httponly=True, samesite="Strict")
    return answer
