"""Tell a page that stays open that the file it asked for has come.

A link to a PDF or a download does not replace the page, and no event says when it has come. The page's script adds
``?ready=<mark>`` to the address; the answer gives the mark back as a short-lived cookie, which the script waits for.
Nothing is stored here and the mark means nothing.
"""

import re

from flask import Response, request

NAME = "ready"
SECONDS = 60
MARK = re.compile(r"[0-9a-z]{8,32}")


def add_mark(answer: Response) -> Response:
    """Give the mark of a request back with its answer; the script reads the cookie, so it cannot be HttpOnly."""
    mark = request.args.get(NAME, "")
    if MARK.fullmatch(mark):
        answer.set_cookie(NAME, mark, max_age=SECONDS, samesite="Strict")
    return answer
