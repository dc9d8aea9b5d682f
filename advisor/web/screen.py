"""The language of the screen: what this browser chose, else the first of its languages that the program has."""

from flask import g, has_request_context, request

from advisor.web.language import SOURCE_LANGUAGE, Language, language, languages

COOKIE = "screen_language"


def screen() -> Language:
    """Return the language of the screen for this request; outside of one, the language the program is written in."""
    if not has_request_context():
        return language(SOURCE_LANGUAGE)
    if "screen" not in g:
        chosen = request.cookies.get(COOKIE, "")
        known = languages()
        g.screen = language(
            chosen if chosen in known else request.accept_languages.best_match(known) or SOURCE_LANGUAGE
        )
    found: Language = g.screen
    return found
