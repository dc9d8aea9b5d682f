"""Sheets and slips as HTML: a plain Jinja environment for each language, usable without the web application."""

import re
from collections.abc import Callable, Mapping
from functools import cache
from typing import Any
from unicodedata import bidirectional

from jinja2 import Environment, FileSystemLoader, StrictUndefined
from markupsafe import Markup, escape

from advisor.counsel.names import called
from advisor.counsel.regions import paper_of
from advisor.resources import resource_dir
from advisor.web.language import LABEL, Language, language

_UNIT = re.compile(r"(\d(?:</bdi>)?) (mm|g|D|%)(?![\w%])")


@cache
def environment(code: str) -> Environment:
    """Return the environment of one language; overlays would leak texts from one language into another."""
    chosen = language(code)
    made = Environment(
        loader=FileSystemLoader(resource_dir("templates")),
        autoescape=True,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
        extensions=["jinja2.ext.i18n"],
    )
    install(made, chosen)
    for name in ("number", "percent", "money"):
        made.filters[name] = _as_figure(made.filters[name])
    made.filters["figure"] = figure
    made.filters["apart"] = apart
    made.filters["direction"] = direction
    made.globals["paper_of"] = lambda shop: paper_of(shop.paper, region=shop.region)
    return made


def figure(text: str) -> Markup:
    """Return a figure kept apart from the words about it: it runs left to right, its sign before it, in any script."""
    return Markup('<bdi dir="ltr">{}</bdi>').format(text)


def direction(text: str) -> str:
    """Return which way a text runs, by its first letter; the layout engine of the PDF does not find out by itself."""
    found = (bidirectional(letter) for letter in text)
    return "rtl" if next((kind for kind in found if kind in ("L", "R", "AL")), "L") != "L" else "ltr"


def apart(text: str) -> Markup:
    """Return what somebody typed, or a date, kept apart from the words about it and running its own way."""
    return Markup('<bdi dir="{}">{}</bdi>').format(direction(text), text)


def _as_figure(written: Callable[..., str]) -> Callable[..., Markup]:
    return lambda *given, **named: figure(written(*given, **named))


class OnPaper:
    """A language whose texts are markup: what was typed is escaped, and every figure is kept apart."""

    def __init__(self, chosen: Language) -> None:
        self.language = chosen.language
        self._chosen = chosen

    def gettext(self, message: str, /) -> Markup:
        """Return the text in this language; figures put into it by ``%`` stay markup, anything else is escaped."""
        return escape(self._chosen.gettext(message))

    def number(self, value: float, *, digits: int, signed: bool = False) -> Markup:
        """Return a number as this language writes it, kept apart."""
        return figure(self._chosen.number(value, digits=digits, signed=signed))


def install(made: Environment, chosen: Language) -> None:
    """Give an environment the texts and the number formats of a language."""
    made.install_gettext_callables(chosen.gettext, chosen.ngettext, newstyle=True)  # type: ignore[attr-defined]  # added by the i18n extension
    made.globals["language"] = chosen
    install_filters(made, lambda: chosen)


def install_filters(made: Environment, speaker: Callable[[], Language]) -> None:
    """Give an environment the filters that write numbers, shares, money and dates as the reader's language does."""
    made.filters["number"] = lambda value, digits=0, signed=False: number_text(
        speaker(), value, digits=digits, signed=signed
    )
    made.filters["percent"] = lambda value, digits=1: "–" if value is None else speaker().percent(value, digits=digits)
    made.filters["money"] = lambda value, currency: speaker().money(value, currency=currency)
    made.filters["colon"] = lambda label: escape(speaker().gettext(LABEL)) % {"label": label}
    made.filters["called"] = lambda item: called(item, speaker())
    made.filters["day"] = lambda value: "–" if value is None else speaker().date(value)


def number_text(chosen: Language, value: float | None, *, digits: int, signed: bool) -> str:
    """Return a number as text, or a dash where there is none."""
    return "–" if value is None else chosen.number(value, digits=digits, signed=signed)


def page(template: str, values: Mapping[str, Any], *, code: str) -> str:
    """Render one template in one language."""
    return together(environment(code).get_template(template).render(**values))


def together(html: str) -> str:
    """Return a page in which no line ends between a figure and its unit."""
    return _UNIT.sub("\\1\N{NO-BREAK SPACE}\\2", html)
