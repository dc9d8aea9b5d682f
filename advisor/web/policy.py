"""The security policy of the local server, in one place; ``tests/web/test_policy.py`` walks its tables.

Sources:

- Host: the list of trusted hosts stops DNS rebinding, where a foreign name is made to point at this computer.
- Cross-site requests: W3C Fetch Metadata Request Headers (``Sec-Fetch-Site``), and the OWASP Cross-Site Request Forgery
  Prevention Cheat Sheet ("Fetch Metadata", and "Using Standard Headers to Verify Origin" where that header is absent).
- Reading what is written down: the same header, on every method; a server's record is otherwise anybody's to fill.
- Response headers: OWASP HTTP Security Response Headers Cheat Sheet; W3C Content Security Policy Level 3.
"""

from collections.abc import Mapping

from flask import Flask, Request, Response, abort, request
from werkzeug.exceptions import SecurityError

TRUSTED_HOSTS = ["127.0.0.1", "localhost"]

CONTENT_SECURITY_POLICY: Mapping[str, str] = {
    "default-src": "'none'",
    "script-src": "'self'",
    "style-src": "'self'",
    "img-src": "'self'",
    "font-src": "'self'",
    "connect-src": "'self'",
    "object-src": "'none'",
    "base-uri": "'none'",
    "form-action": "'self'",
    "frame-ancestors": "'none'",
}

HEADERS: Mapping[str, str] = {
    "Content-Security-Policy": "; ".join(f"{name} {value}" for name, value in CONTENT_SECURITY_POLICY.items()),
    "X-Content-Type-Options": "nosniff",
    "Referrer-Policy": "no-referrer",
    "Cross-Origin-Opener-Policy": "same-origin",
    "Cross-Origin-Resource-Policy": "same-origin",
    "Permissions-Policy": "camera=(), geolocation=(), microphone=(), payment=(), usb=()",
}

LIMITS: Mapping[str, int] = {
    "MAX_CONTENT_LENGTH": 4 * 1024 * 1024,  # a range file with measured spectra stays well below
    "MAX_FORM_MEMORY_SIZE": 1024 * 1024,  # one field that is not a file
    "MAX_FORM_PARTS": 1000,
}

SAFE_METHODS = frozenset({"GET", "HEAD", "OPTIONS"})


def comes_from_own_page(asked: Request) -> bool:
    """Tell whether a request was sent by one of our own pages, or by the user's own doing.

    ``Sec-Fetch-Site`` decides where it is present: every current browser sends it to 127.0.0.1 and localhost. Else
    ``Origin`` must equal our scheme, host and port. A request with neither is refused: browsers have sent at least one
    of them with every form since 2019, and what is no browser has the command line.
    """
    site = asked.headers.get("Sec-Fetch-Site")
    if site is not None:
        return site in ("same-origin", "none")
    return asked.headers.get("Origin") == f"{asked.scheme}://{asked.host}"


def refuse_foreign_requests() -> None:
    """Answer 400 to a foreign host, before anything else looks at the request, and 403 to a cross-site change."""
    if isinstance(request.routing_exception, SecurityError):
        raise request.routing_exception
    if request.method not in SAFE_METHODS and not comes_from_own_page(request):
        abort(403)


def refuse_foreign_readers() -> None:
    """Answer 403 to another site that makes the browser fetch what is written down when it is handed out.

    A picture or a link there would fill the record of who did what with things that nobody did. What is typed, kept as
    a bookmark or opened by a browser that sends no ``Sec-Fetch-Site`` is answered.
    """
    if request.headers.get("Sec-Fetch-Site", "none") not in ("same-origin", "none"):
        abort(403)


def add_headers(response: Response) -> Response:
    """Put the table's headers on an answer; only the program's own static files may be kept, and are asked for anew."""
    for name, value in HEADERS.items():
        response.headers[name] = value
    found = request.endpoint == "static" and response.status_code < 400
    response.headers["Cache-Control"] = "no-cache" if found else "no-store"
    return response


def apply(app: Flask) -> None:
    """Install the policy; call it before anything else that looks at requests."""
    app.config["TRUSTED_HOSTS"] = list(TRUSTED_HOSTS)
    app.config.update(LIMITS)
    app.before_request(refuse_foreign_requests)
    app.after_request(add_headers)
