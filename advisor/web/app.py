"""Make the Flask app: policy, records, error pages, then one blueprint for each noun."""

import mimetypes
import traceback
from datetime import date
from pathlib import Path
from types import TracebackType
from typing import Any

from flask import Flask, Response, jsonify, request, send_from_directory
from flask.testing import FlaskClient
from jinja2 import StrictUndefined

from advisor.resources import resource_dir
from advisor.web import copies_page, error_pages, number_fields, policy, ready
from advisor.web.bring_in import bring_in
from advisor.web.counter import counter
from advisor.web.desk import EXTENSION, Desk, current_desk
from advisor.web.events import events
from advisor.web.exports import exports
from advisor.web.figure_rows import unbroken
from advisor.web.first_run import first_run, first_steps
from advisor.web.language_switch import choices, language_switch, standing_at
from advisor.web.names_shown import covered, names_hidden, names_shown
from advisor.web.paper import install_filters
from advisor.web.paper_pages import paper_pages
from advisor.web.pasted_line import pasted_line
from advisor.web.pictures_page import pictures_page
from advisor.web.range_page import range_page
from advisor.web.recheck import rechecks
from advisor.web.retention import retention
from advisor.web.screen import screen
from advisor.web.shop_sheet import shop_sheet
from advisor.web.then_now import then_now
from advisor.web.turn_round import turn_round
from advisor.web.visit_story import story_of, visit_story
from advisor.web.visits import visits
from advisor.web.wearer import wearer

# Some Windows registries serve these as text/plain, which nosniff then refuses.
MEDIA_TYPES = {
    ".js": "text/javascript",
    ".css": "text/css",
    ".svg": "image/svg+xml",
    ".woff2": "font/woff2",
    ".ttf": "font/ttf",
}


# What a shop keeps about its visits: what was said and done, and how it is erased.
KEPT = (visit_story, then_now, events, wearer, retention, names_shown, copies_page.daily_copies)


class _App(Flask):
    def log_exception(
        self, exc_info: tuple[type[BaseException], BaseException, TracebackType | None] | tuple[None, None, None]
    ) -> None:
        """Log the kind of an error and where it arose; its message may quote a wearer's data."""
        kind, _, trace = exc_info
        name = kind.__name__ if kind else "error"
        rule = request.url_rule.rule if request.url_rule else "an unknown address"
        self.logger.error("%s in %s %s\n%s", name, request.method, rule, "".join(traceback.format_tb(trace)))


class _OwnPageClient(FlaskClient):
    """A test client that sends what a browser sends from our own pages; a header given in a call wins."""

    def __init__(self, app: Flask, *args: Any, **options: Any) -> None:
        super().__init__(app, *args, **options)
        self.environ_base["HTTP_SEC_FETCH_SITE"] = "same-origin"


def create_app(*, data_dir: Path, database: str | None = None, testing: bool = False) -> Flask:
    """Make the app for the records in a data folder, or in the PostgreSQL database whose address is given.

    The folder, or the tables, are made when something is first read or saved.
    """
    for ending, kind in MEDIA_TYPES.items():
        mimetypes.add_type(kind, ending)
    app = _App(
        "advisor",
        template_folder=str(resource_dir("templates")),
        static_folder=str(resource_dir("static")),
        static_url_path="/static",
    )
    app.testing = testing
    if testing:
        app.test_client_class = _OwnPageClient
    policy.apply(app)
    app.after_request(ready.add_mark)
    app.after_request(copies_page.after_saving)
    app.extensions[EXTENSION] = Desk(data_dir, database=database)
    _prepare_templates(app)
    error_pages.register(app)
    app.add_url_rule("/health", view_func=health)
    app.add_url_rule("/favicon.ico", view_func=favicon)
    _register_blueprints(app)
    return app


def _prepare_templates(app: Flask) -> None:
    app.jinja_env.autoescape = True
    app.jinja_env.undefined = StrictUndefined
    app.jinja_env.trim_blocks = app.jinja_env.lstrip_blocks = True
    app.jinja_env.globals.update(
        _=lambda text: screen().gettext(text), ngettext=lambda one, many, count: screen().ngettext(one, many, count)
    )
    install_filters(app.jinja_env, screen)
    number_fields.install(app.jinja_env)
    app.jinja_env.filters["unbroken"] = unbroken
    app.jinja_env.filters["day_text"] = lambda text: screen().date(date.fromisoformat(text))
    app.context_processor(_page_values)


def _page_values() -> dict[str, Any]:
    """Return what every page may ask for; first steps are looked up by the one page that shows them."""
    return {
        "screen_language": screen().language,
        "screen_direction": screen().direction,
        "screen_languages": choices(),
        "screen_back": standing_at(),
        "first_steps": first_steps,
        "visit_story": story_of,
        "copies_shown": copies_page.copies_shown,
        "names_hidden": names_hidden,
        "covered": covered,
    }


def _register_blueprints(app: Flask) -> None:
    """Register the blueprints, one for each noun."""
    nouns = (counter, pasted_line, visits, paper_pages, pictures_page, turn_round, rechecks, range_page, first_run)
    for noun in (*nouns, shop_sheet, bring_in, exports, *KEPT, language_switch):
        app.register_blueprint(noun)


def health() -> Response:
    """Say which program answers on this port."""
    return jsonify(current_desk().health())


def favicon() -> Response:
    """Serve the icon where browsers look for it unasked."""
    return send_from_directory(resource_dir("static"), "favicon.svg", mimetype="image/svg+xml")
