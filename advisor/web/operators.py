"""Who works at the program: the name somebody signed in by, or whoever sits at this computer."""

from flask import session

from advisor.counsel.phrases import Translator, mark
from advisor.records.events import HERE

OPERATOR = "operator"  # the key under which a session keeps the name
THIS_COMPUTER = mark("this computer")


def current_operator() -> str:
    """Return who is written down for what this request does."""
    name = session.get(OPERATOR)
    return name if isinstance(name, str) and name else HERE


def operator_words(who: str, translator: Translator) -> str:
    """Return how somebody is called in a list."""
    return translator.gettext(THIS_COMPUTER) if who == HERE else who
