import logging
import mimetypes
import re
import sqlite3
from pathlib import Path

import pytest
from flask import Flask, abort
from jinja2 import UndefinedError

from advisor import __version__
from advisor.records.location import FILE_NAME
from advisor.records.visits import VisitMissing
from advisor.web.app import create_app
from advisor.web.desk import current_desk, desk_of
from advisor.web.error_pages import TEXTS

WEARER = "Zoë Wearer"


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    return tmp_path / "records"


@pytest.fixture
def app(folder: Path) -> Flask:
    app = create_app(data_dir=folder, testing=True)
    app.config["PROPAGATE_EXCEPTIONS"] = False

    @app.route("/abort/<int:code>")
    def stop(code: int) -> str:
        abort(code, description=WEARER)

    @app.route("/fault")
    def fault() -> str:
        raise RuntimeError(WEARER)

    @app.route("/missing")
    def missing() -> str:
        raise VisitMissing

    @app.route("/list")
    def listing() -> str:
        return str(len(current_desk().store.list_visits()))

    return app


def test_health_names_the_program_and_its_version(app: Flask) -> None:
    health = app.test_client().get("/health").get_json()
    assert (health["program"], health["version"]) == ("twolight", __version__)


def test_health_tells_records_apart_without_saying_where_they_lie(app: Flask, tmp_path: Path) -> None:
    health = app.test_client().get("/health")
    assert str(tmp_path) not in health.text
    other = create_app(data_dir=tmp_path / "other", testing=True).test_client().get("/health")
    assert health.get_json()["records"] != other.get_json()["records"]


def test_the_records_are_opened_when_first_needed(app: Flask, folder: Path) -> None:
    app.test_client().get("/health")
    assert not folder.exists()
    assert app.test_client().get("/list").text == "0"
    assert (folder / FILE_NAME).exists()
    desk_of(app).close()


@pytest.mark.parametrize("code", sorted(set(TEXTS) - {500}))
def test_an_error_page_says_what_happened_and_repeats_nothing(app: Flask, code: int) -> None:
    answer = app.test_client().get(f"/abort/{code}?name={WEARER}")
    assert answer.status_code == code
    title, text = TEXTS[code]
    assert title in answer.text.replace("&#39;", "'")
    assert text in answer.text.replace("&#39;", "'")
    assert WEARER not in answer.text


def test_an_address_that_is_not_there_and_a_method_that_is_not_meant(app: Flask) -> None:
    client = app.test_client()
    assert client.get("/nowhere").status_code == 404
    wrong = client.post("/health")
    assert wrong.status_code == 405
    assert "GET" in wrong.headers["Allow"]


def test_a_fault_of_the_program_shows_and_logs_no_personal_data(app: Flask, caplog: pytest.LogCaptureFixture) -> None:
    with caplog.at_level(logging.ERROR):
        answer = app.test_client().get(f"/fault?name={WEARER}")
    assert answer.status_code == 500
    assert TEXTS[500][0] in answer.text
    assert "RuntimeError in GET /fault" in caplog.text
    assert WEARER not in answer.text + caplog.text


def test_an_error_of_the_records_is_a_page_with_its_sentence(app: Flask, folder: Path) -> None:
    missing = app.test_client().get("/missing")
    assert (missing.status_code, "There is no such visit" in missing.text) == (404, True)
    folder.mkdir()
    connection = sqlite3.connect(folder / FILE_NAME)
    with connection:
        connection.execute("CREATE TABLE recipe (name TEXT)")
    connection.close()
    foreign = app.test_client().get("/list")
    assert foreign.status_code == 503
    assert "are damaged or are not records" in foreign.text
    assert str(folder) in foreign.text


def test_a_name_that_a_template_does_not_know_is_an_error(app: Flask) -> None:
    with app.app_context(), pytest.raises(UndefinedError):
        app.jinja_env.from_string("{{ nobody }}").render()


def test_every_template_escapes_what_it_is_given(app: Flask) -> None:
    with app.app_context():
        assert app.jinja_env.from_string("{{ name }}").render(name="<b>") == "&lt;b&gt;"


def test_the_browser_gets_files_under_their_right_media_types(app: Flask) -> None:
    mimetypes.add_type("text/plain", ".js")  # as some registries have it
    create_app(data_dir=Path("unused"), testing=True)
    client = app.test_client()
    kinds = {
        "/static/js/htmx.min.js": "text/javascript",  # RFC 9239
        "/static/css/fonts.css": "text/css",  # RFC 2318
        "/static/favicon.svg": "image/svg+xml",  # W3C SVG, registered with IANA
        "/favicon.ico": "image/svg+xml",
        "/static/fonts/twolight-text-400.woff2": "font/woff2",  # RFC 8081
    }
    for path, kind in kinds.items():
        with client.get(path) as answer:
            assert (answer.status_code, answer.mimetype) == (200, kind), path


def test_the_script_library_came_with_its_version_and_licence(app: Flask) -> None:
    folder = Path(str(app.static_folder)) / "js"
    script = (folder / "htmx.min.js").read_text("utf-8")
    assert re.search(r'version:"2\.\d+\.\d+"', script)
    assert "Zero-Clause BSD" in (folder / "htmx.LICENSE").read_text("utf-8")
