"""What the tests in a real browser share: one server for all, a browser a module, and a page that is watched."""

import json
import re
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from urllib.parse import urlsplit

import pytest
from flask import Flask
from flask.testing import FlaskClient
from playwright.sync_api import Browser, BrowserContext, ConsoleMessage, Locator, Page, Route, expect

from advisor.web.app import create_app
from advisor.web.desk import desk_of
from advisor.web.stock_loader import current_shelf
from advisor.web.visits import LINES
from tests.chromium import chromium
from tests.chromium import served as served_at


class Served:
    """The program on an empty data folder, and forms laid in its records without a browser."""

    def __init__(self, app: Flask, address: str) -> None:
        self.address = address
        self._app = app
        self._client: FlaskClient = app.test_client()
        self._client.environ_base["HTTP_SEC_FETCH_SITE"] = "same-origin"

    def draft(self, wearer: str, **changed: str) -> str:
        """Begin a form with a demo wearer, change fields of it (``__`` for a dot), and return its path."""
        path = self._posted("/demo", {"wearer": wearer})
        return self._posted("/counter", self._form(path) | _dotted(changed)) if changed else path

    def visit(self, wearer: str, **changed: str) -> str:
        """Save such a form and return the visit's path."""
        return self._posted("/visits", self._form(self.draft(wearer)) | _dotted(changed))

    def many_visits(self, wearer: str, **changed: str) -> str:
        """Save more visits than one page of the list holds, and return the list's path."""
        store = desk_of(self._app).store
        one = store.get_visit(self.visit(wearer, **changed).rpartition("/")[2])
        shelf = current_shelf(store)
        for _ in range(LINES):
            store.save_visit(one.visit_json, range_toml=shelf.toml, version="1", answer_json="{}")
        return "/visits"

    def _form(self, path: str) -> dict[str, str]:
        draft = desk_of(self._app).store.get_draft(path.rpartition("/")[2])
        kept = json.loads(draft.fields_json)
        return {**kept["fields"], "token": kept["token"], "draft": draft.id, "draft_edit": str(draft.edit)}

    def _posted(self, path: str, form: dict[str, str]) -> str:
        answer = self._client.post(path, data=form)
        assert answer.status_code == 303, (path, answer.status_code)
        return urlsplit(answer.headers["Location"]).path


def _dotted(changed: dict[str, str]) -> dict[str, str]:
    return {name.replace("__", "."): text for name, text in changed.items()}


@contextmanager
def serving(folder: Path) -> Iterator[Served]:
    """Serve the program on a data folder for as long as the block runs."""
    app = create_app(data_dir=folder)
    with served_at(app) as address:
        yield Served(app, address)


@pytest.fixture(scope="session")
def served(tmp_path_factory: pytest.TempPathFactory) -> Iterator[Served]:
    """Serve the program for every test of this folder; each opens a visit of its own."""
    with serving(tmp_path_factory.mktemp("records")) as program:
        yield program


@pytest.fixture(scope="session")
def untouched(tmp_path_factory: pytest.TempPathFactory) -> Iterator[Served]:
    """Serve the program on records in which nothing is ever saved."""
    with serving(tmp_path_factory.mktemp("untouched")) as program:
        yield program


@pytest.fixture(scope="module")
def browser() -> Iterator[Browser]:
    """Start the system's browser; where there is none, skip, unless everything is required."""
    with chromium() as started:
        yield started


class Watched:
    """A page whose console, errors and requests are written down, and what tests do with it time and again."""

    def __init__(self, context: BrowserContext, served: Served) -> None:
        self.served = served
        self.trouble: list[str] = []
        self.hosts: set[str] = set()
        context.route("**/*", self._route)
        self.page = self._listened(context.new_page())
        self._context = context

    def _listened(self, page: Page) -> Page:
        page.on("console", self._console)
        page.on("pageerror", lambda error: self.trouble.append(str(error)))
        return page

    def _console(self, message: ConsoleMessage) -> None:
        if message.type in ("error", "warning"):
            self.trouble.append(message.text)

    def _route(self, route: Route) -> None:
        self.hosts.add(urlsplit(route.request.url).hostname or "")
        if urlsplit(route.request.url).hostname == "127.0.0.1":
            route.continue_()
        else:
            route.abort()

    def is_clean(self) -> None:
        """Nothing was complained of, and nothing was asked for elsewhere."""
        assert self.trouble == []
        assert self.hosts == {"127.0.0.1"}

    def another_tab(self) -> Page:
        """Open a second page in the same browser, watched as well."""
        return self._listened(self._context.new_page())

    def go(self, path: str) -> Page:
        """Show a page of the program."""
        self.page.goto(self.served.address + path)
        return self.page

    def open_demo(self, wearer: str) -> Page:
        """Open a demo wearer at the Counter, figures and all."""
        page = self.go("/")
        page.get_by_label("Open a demo wearer").select_option(wearer)
        page.get_by_role("button", name="Open", exact=True).click()
        expect(page.locator("#why-price")).to_be_visible()
        return page

    def named(self, name: str) -> Locator:
        """Find a field by its name."""
        return self.page.locator(f"[name='{name}']")

    def figures(self, row: str) -> list[str]:
        """Read the big figures of one row, once they are current."""
        expect(self.page.locator("#figures")).not_to_have_class(re.compile("behind|htmx-request"))
        return self.page.locator(f"#why-{row} .big").all_inner_texts()


@pytest.fixture
def watched(browser: Browser, served: Served) -> Iterator[Watched]:
    """A watched page of the size of a counter's screen."""
    context = browser.new_context(viewport={"width": 1366, "height": 768})
    yield Watched(context, served)
    context.close()
