"""The one module that knows WeasyPrint; it is imported when the first PDF is asked for.

Only files below ``static/`` can be fetched, by the address ``http://twolight.invalid/static/...``, and the shop's logo
where its bytes were handed over; everything else is refused and the page is not written. Where the Pango libraries are
missing there is no PDF, and the caller offers the browser's own print instead.
"""

import mimetypes
import sys
from contextlib import redirect_stderr, redirect_stdout
from functools import cache
from io import BytesIO, StringIO
from threading import Lock
from typing import Any
from urllib.parse import unquote, urljoin, urlsplit

from advisor.counsel.phrases import mark
from advisor.errors import TwolightError
from advisor.resources import resource_dir
from advisor.web.logo import ADDRESS

BASE_URL = "http://twolight.invalid/"
LOGO_URL = urljoin(BASE_URL, ADDRESS)
_RENDERING = Lock()


class PdfUnavailable(TwolightError):
    """The libraries that lay out a PDF are not on this machine."""

    text = mark(
        "No PDF can be made here because the Pango libraries are missing (see the README); "
        "write the page as .html and print it from the browser."
    )


class PdfFailed(TwolightError):
    """A page could not be laid out."""

    text = mark("The page could not be laid out; print it from the browser instead.")


class FileOutside(PdfFailed):
    """A page asked for a file that is not one of the program's."""

    text = mark("The page asked for a file outside the program and was not written.")


@cache
def _weasyprint() -> Any:
    """Import WeasyPrint, keeping the banner it prints about missing libraries off the screen."""
    try:
        with redirect_stdout(StringIO()), redirect_stderr(StringIO()):
            import weasyprint
    except OSError as error:
        raise PdfUnavailable from error
    return weasyprint


def is_available() -> bool:
    """Tell whether a PDF can be made on this machine."""
    try:
        _weasyprint()
    except PdfUnavailable:
        return False
    return True


@cache
def _fetcher_class() -> Any:
    weasyprint_urls = _weasyprint().urls
    base: Any = weasyprint_urls.URLFetcher

    class StaticOnly(base):  # type: ignore[misc]  # the base class has no types
        """Answers from ``static/`` and with the one picture handed over, and remembers what it refused."""

        def __init__(self, logo: bytes | None) -> None:
            super().__init__(allowed_protocols=("http",), allow_redirects=False)
            self.refused: list[str] = []
            self._logo = logo

        def fetch(self, url: str, headers: object = None) -> Any:  # noqa: ARG002  # the base class's signature
            if url == LOGO_URL and self._logo is not None:
                return weasyprint_urls.URLFetcherResponse(url, self._logo, {"Content-Type": "image/png"})
            static = resource_dir("static").resolve()
            parts = urlsplit(url)
            path = unquote(parts.path)
            ours = parts.netloc == "twolight.invalid" and parts.scheme == "http"
            ours = ours and path.startswith("/static/") and "\0" not in path
            wanted = (static / path.removeprefix("/static/")).resolve() if ours else static
            if not wanted.is_relative_to(static) or not wanted.is_file():
                self.refused.append(url)
                raise ValueError("Only files of the program itself may be fetched.")
            kind = mimetypes.guess_type(wanted.name)[0] or "application/octet-stream"
            return weasyprint_urls.URLFetcherResponse(url, wanted.read_bytes(), {"Content-Type": kind})

    return StaticOnly


def write_pdf(html: str, *, logo: bytes | None = None) -> bytes:
    """Lay out a page as a tagged PDF (PDF/UA-1 variant, not certified) and return its bytes.

    ``logo`` is the picture, as PNG, that stands where the page asks for the shop's logo.

    Raises
    ------
    PdfUnavailable
        If Pango is not on this machine.
    PdfFailed
        If the page asks for anything else than the logo and files of ``static/``, or cannot be laid out.
    """
    weasyprint = _weasyprint()
    fetcher = _fetcher_class()(logo)
    target = BytesIO()
    with _RENDERING:
        try:
            weasyprint.HTML(string=html, base_url=BASE_URL, url_fetcher=fetcher).write_pdf(
                target, pdf_variant="pdf/ua-1", pdf_tags=True
            )
        except Exception as error:  # whatever the layout engine raises, the visit must survive it
            print(f"twolight: the page layout failed: {type(error).__name__}", file=sys.stderr)
            raise PdfFailed from error
    if fetcher.refused:
        raise FileOutside
    return target.getvalue()
