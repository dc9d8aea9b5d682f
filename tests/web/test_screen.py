"""The language of the screen: chosen in the head of every page, kept by a cookie, and back to where one stood."""

from collections.abc import Iterator
from pathlib import Path

import pytest
from babel.messages.catalog import Catalog
from babel.messages.mofile import write_mo
from flask import Flask
from flask.testing import FlaskClient
from werkzeug.http import parse_cookie

from advisor.web import language as module
from advisor.web.language import language
from advisor.web.language_switch import local_path

FORM = 'id="screen-language"'


@pytest.fixture
def spanish(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Iterator[None]:
    """A catalogue of two texts, in a folder of its own."""
    folder = tmp_path / "translations" / "es" / "LC_MESSAGES"
    folder.mkdir(parents=True)
    catalogue = Catalog(locale="es")
    catalogue.add("Visits", "Visitas")
    catalogue.add("Language", "Idioma")
    with (folder / "messages.mo").open("wb") as stream:
        write_mo(stream, catalogue)
    monkeypatch.setattr(module, "TRANSLATIONS", tmp_path / "translations")
    language.cache_clear()
    yield
    language.cache_clear()


@pytest.fixture
def english_alone(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(module, "TRANSLATIONS", tmp_path / "nowhere")


@pytest.mark.usefixtures("english_alone")
def test_one_language_leaves_nothing_to_choose(client: FlaskClient) -> None:
    page = client.get("/visits").text
    assert FORM not in page


@pytest.mark.usefixtures("spanish")
def test_languages_are_called_by_their_own_names(client: FlaskClient) -> None:
    # Names of the Unicode CLDR, with a capital.
    page = client.get("/visits").text
    assert '<option value="en" lang="en" selected>English</option>' in page
    assert '<option value="es" lang="es">Español</option>' in page
    assert 'name="back" value="/visits"' in page


@pytest.mark.usefixtures("spanish")
def test_the_choice_is_kept_for_a_year_where_no_script_reads_it(client: FlaskClient) -> None:
    answer = client.post("/language", data={"language": "es", "back": "/visits"})
    assert (answer.status_code, answer.headers["Location"]) == (303, "/visits")
    cookie = answer.headers["Set-Cookie"]
    assert parse_cookie(cookie)["screen_language"] == "es"
    for part in ("HttpOnly", "SameSite=Strict", "Max-Age=31536000", "Path=/"):
        assert part in cookie
    page = client.get("/visits").text
    assert '<html lang="es"' in page
    assert "Visitas" in page
    assert "Idioma" in page
    client.post("/language", data={"language": "en", "back": "/visits"})
    assert '<html lang="en"' in client.get("/visits").text


@pytest.mark.usefixtures("spanish")
def test_a_form_being_filled_in_keeps_what_was_typed(client: FlaskClient) -> None:
    typed = {"prescription.right.sphere": "-4,2x", "option_count": "1"}
    draft = client.post("/counter", data=typed).headers["Location"].partition("#")[0]
    page = client.get(draft).text
    assert f'name="back" value="{draft}"' in page
    back = client.post("/language", data={"language": "es", "back": draft}).headers["Location"]
    page = client.get(back).text
    assert '<html lang="es"' in page
    assert 'value="-4,2x"' in page


@pytest.mark.usefixtures("spanish")
def test_a_form_shown_again_with_faults_leads_back_to_its_draft(client: FlaskClient) -> None:
    answer = client.post("/visits", data={"prescription.right.sphere": "-4.2x", "option_count": "1"})
    assert answer.status_code == 422
    assert 'name="back" value="/counter/' in answer.text


@pytest.mark.usefixtures("spanish")
def test_a_language_without_texts_is_refused_and_not_kept(client: FlaskClient) -> None:
    answer = client.post("/language", data={"language": "xx", "back": "/"})
    assert answer.status_code == 400
    assert "Set-Cookie" not in answer.headers


@pytest.mark.usefixtures("spanish")
def test_looking_changes_nothing_and_another_site_may_not_choose(client: FlaskClient) -> None:
    assert client.get("/language").status_code == 405
    answer = client.post("/language", data={"language": "es"}, headers={"Sec-Fetch-Site": "cross-site"})
    assert answer.status_code == 403
    assert "Set-Cookie" not in answer.headers


# What browsers take for another site, by the WHATWG URL standard: "//" and "/\" begin a host, tabs and newlines are
# dropped before anything is read.
@pytest.mark.parametrize(
    "foreign",
    [
        "https://evil.example/",
        "//evil.example",
        "/\\evil.example",
        "\\\\evil.example",
        "/\t/evil.example",
        "/\n/evil.example",
        " //evil.example",
        "javascript:alert(1)",
        "evil.example",
        "",
        "/" + "a" * 2000,
    ],
)
def test_only_a_path_of_our_own_is_gone_back_to(foreign: str) -> None:
    assert local_path(foreign) == "/"


@pytest.mark.parametrize("own", ["/", "/visits", "/counter/a-B_9", "/visits/x/pictures?option=2", "/range#shop"])
def test_a_path_of_our_own_is_kept(own: str) -> None:
    assert local_path(own) == own


@pytest.mark.usefixtures("spanish")
def test_a_page_that_only_a_form_leads_to_goes_back_to_the_start(app: Flask) -> None:
    page = app.test_client().post("/visits/find", data={"search": "nobody"}).text
    assert FORM in page
    assert 'name="back" value="/"' in page
