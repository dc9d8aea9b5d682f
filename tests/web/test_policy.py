import re
from pathlib import Path

import pytest
from flask import Flask, request
from flask.testing import FlaskClient

from advisor.web import policy
from advisor.web.app import create_app

OWN = "http://127.0.0.1:8437"


@pytest.fixture
def app(tmp_path: Path) -> Flask:
    """The app with one address that changes something, asked by clients that add no header of their own."""
    app = create_app(data_dir=tmp_path, testing=True)
    app.test_client_class = FlaskClient
    app.extensions["changes"] = []

    @app.route("/change", methods=["POST", "PUT", "PATCH", "DELETE"])
    def change() -> str:
        app.extensions["changes"].append(request.method)
        return "done"

    @app.route("/form", methods=["POST"])
    def form() -> str:
        return str(len(request.form) + len(request.files))

    return app


def status(app: Flask, method: str, path: str, headers: dict[str, str]) -> int:
    return app.test_client().open(path, method=method, base_url=OWN, headers=headers).status_code


@pytest.mark.parametrize(
    ("host", "expected"),
    [
        ("127.0.0.1:8437", 200),
        ("localhost:8437", 200),
        ("localhost", 200),
        ("LOCALHOST:8437", 400),  # the same name, but browsers write it in lower case
        ("evil.example", 400),
        ("evil.example:8437", 400),
        ("localhost.evil.example:8437", 400),
        ("127.0.0.1.evil.example", 400),
        ("evil.example@127.0.0.1:8437", 400),
        ("192.168.1.7:8437", 400),
        ("0.0.0.0:8437", 400),
        ("[::1]:8437", 400),
    ],
)
def test_only_our_own_host_names_are_answered(app: Flask, host: str, expected: int) -> None:
    assert status(app, "GET", "/health", {"Host": host}) == expected
    own_page = {"Host": host, "Sec-Fetch-Site": "same-origin"}
    assert status(app, "POST", "/change", own_page) == expected
    assert app.extensions["changes"] == ["POST"] * (expected == 200)


def test_a_foreign_host_reaches_no_other_hook(app: Flask) -> None:
    reached: list[str] = []
    app.before_request(lambda: reached.append(request.path))
    assert status(app, "GET", "/health", {"Host": "evil.example"}) == 400
    assert reached == []
    assert status(app, "GET", "/health", {}) == 200
    assert reached == ["/health"]


# What a browser sends, by the definitions of Sec-Fetch-Site (W3C Fetch Metadata, 2.3) and Origin (RFC 6454, 7).
CHANGES = [
    ("a form on our page", {"Sec-Fetch-Site": "same-origin", "Origin": OWN}, 200),
    ("a form on our page under the other name", {"Host": "localhost:8437", "Sec-Fetch-Site": "same-origin"}, 200),
    ("the user's own doing", {"Sec-Fetch-Site": "none"}, 200),
    ("another site", {"Sec-Fetch-Site": "cross-site", "Origin": "https://evil.example"}, 403),
    ("another port on this computer", {"Sec-Fetch-Site": "same-site", "Origin": "http://127.0.0.1:9000"}, 403),
    ("another site that sets Origin to ours", {"Sec-Fetch-Site": "cross-site", "Origin": OWN}, 403),
    ("a word we do not know", {"Sec-Fetch-Site": "new-word", "Origin": OWN}, 403),
    ("an empty header", {"Sec-Fetch-Site": "", "Origin": OWN}, 403),
    ("an older browser on our page", {"Origin": OWN}, 200),
    ("an older browser elsewhere", {"Origin": "https://evil.example"}, 403),
    ("an older browser, other scheme", {"Origin": "https://127.0.0.1:8437"}, 403),
    ("an older browser, other port", {"Origin": "http://127.0.0.1:8438"}, 403),
    ("an older browser, no port", {"Origin": "http://127.0.0.1"}, 403),
    ("an older browser, our other name", {"Origin": "http://localhost:8437"}, 403),
    ("an older browser, our name as a beginning", {"Origin": f"{OWN}.evil.example"}, 403),
    ("a sandboxed frame", {"Origin": "null"}, 403),
    ("neither header", {}, 403),
    ("a referrer only", {"Referer": f"{OWN}/"}, 403),
]


@pytest.mark.parametrize("method", ["POST", "PUT", "PATCH", "DELETE"])
@pytest.mark.parametrize(("who", "headers", "expected"), CHANGES, ids=[row[0] for row in CHANGES])
def test_only_our_own_pages_change_anything(
    app: Flask, method: str, who: str, headers: dict[str, str], expected: int
) -> None:
    assert status(app, method, "/change", headers) == expected, who
    assert app.extensions["changes"] == [method] * (expected == 200)


@pytest.mark.parametrize(("who", "headers", "expected"), CHANGES, ids=[row[0] for row in CHANGES])
def test_reading_is_open_to_links_from_anywhere(app: Flask, who: str, headers: dict[str, str], expected: int) -> None:
    del who, expected
    assert status(app, "GET", "/health", headers) == 200
    assert status(app, "HEAD", "/health", headers) == 200


@pytest.mark.parametrize(
    ("path", "kept"),
    [
        ("/health", "no-store"),
        ("/nowhere", "no-store"),
        ("/favicon.ico", "no-store"),
        ("/static/nowhere.css", "no-store"),
        ("/static/css/fonts.css", "no-cache"),
        ("/static/js/htmx.min.js", "no-cache"),
    ],
)
def test_every_answer_carries_the_headers(app: Flask, path: str, kept: str) -> None:
    with app.test_client().get(path, base_url=OWN) as answer:
        assert {name: answer.headers.get_all(name) for name in policy.HEADERS} == {
            name: [value] for name, value in policy.HEADERS.items()
        }
        assert answer.headers.get_all("Cache-Control") == [kept]


@pytest.mark.parametrize("refused", [{"Host": "evil.example"}, {"Sec-Fetch-Site": "cross-site"}])
def test_refusals_carry_the_headers_too(app: Flask, refused: dict[str, str]) -> None:
    answer = app.test_client().post("/change", base_url=OWN, headers=refused)
    assert policy.HEADERS.items() <= dict(answer.headers).items()
    assert answer.headers["Cache-Control"] == "no-store"


def test_static_files_are_asked_for_anew_and_not_sent_twice(app: Flask) -> None:
    client = app.test_client()
    with client.get("/static/css/fonts.css", base_url=OWN) as first:
        tag = first.headers["ETag"]
    with client.get("/static/css/fonts.css", base_url=OWN, headers={"If-None-Match": tag}) as second:
        assert second.status_code == 304
        assert second.headers["Cache-Control"] == "no-cache"


def test_the_content_policy_allows_nothing_but_our_own_files() -> None:
    sources = dict(part.split(" ", 1) for part in policy.HEADERS["Content-Security-Policy"].split("; "))
    # What the OWASP cheat sheet lists as needing a value of their own, since default-src does not stand in for them.
    assert {"base-uri", "form-action", "frame-ancestors", "default-src"} <= set(sources)
    assert set(sources.values()) == {"'none'", "'self'"}
    assert sources["default-src"] == sources["object-src"] == sources["frame-ancestors"] == "'none'"


def test_pages_hold_nothing_the_content_policy_refuses(app: Flask) -> None:
    page = app.test_client().get("/nowhere", base_url=OWN).text
    assert not re.search(r"<style|\sstyle=|\son\w+=|<script(?![^>]*\ssrc=)|javascript:|https?://", page)


def multipart(*values: str) -> bytes:
    """Return a form as RFC 7578 writes it, with the boundary "x"."""
    head = "--x\r\nContent-Disposition: form-data; name="
    return "".join(
        [*(f'{head}"{number}"\r\n\r\n{value}\r\n' for number, value in enumerate(values)), "--x--\r\n"]
    ).encode()


@pytest.mark.parametrize(
    ("body", "expected"),
    [
        (multipart(*[""] * 1000), 200),
        (multipart(*[""] * 1001), 413),
        (multipart("n" * 1024 * 1024), 200),
        (multipart("n" * (1024 * 1024 + 70_000)), 413),
        (multipart(*["n" * 900_000] * 5), 413),
    ],
    ids=["as many parts as allowed", "one part more", "a long field", "too long a field", "too long a form"],
)
def test_too_large_a_request_is_refused(app: Flask, body: bytes, expected: int) -> None:
    kind = "multipart/form-data; boundary=x"
    own = {"Sec-Fetch-Site": "same-origin"}
    answer = app.test_client().post("/form", base_url=OWN, headers=own, content_type=kind, data=body)
    assert answer.status_code == expected
