"""What went wrong, as sentences in the reader's language."""

from dataclasses import replace

from advisor.counsel.faults import Fault, Faults
from advisor.counsel.order import NotReady
from advisor.counsel.phrases import Translator, short_number
from advisor.errors import TwolightError


def sentence_of(error: TwolightError, translator: Translator) -> str:
    """Write an error in the reader's language: its text with its figures put in."""
    if isinstance(error, Faults):
        return "\n".join(error.lines(translator))
    if isinstance(error, NotReady):
        return str(error)  # made in the language of its paper
    figures = {
        name: short_number(figure, translator) if isinstance(figure, float) else figure
        for name, figure in error.figures.items()
    }
    text = translator.gettext(error.text)
    return text % figures if figures else text


def fault_sentence(fault: Fault, translator: Translator) -> str:
    """Write a fault's sentence alone: it stands beside its field."""
    return capital(replace(fault, file="", field="").line(translator))


def capital(text: str) -> str:
    """Return a text that begins with a capital letter."""
    return text[:1].upper() + text[1:]
