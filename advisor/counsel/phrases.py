"""Keys with figures, and the marker that finds every text a person may read.

The domain never builds sentences. It returns :class:`Phrase` objects; a translator that the caller passes in turns them
into text. Texts are written once, in English, inside ``mark(...)``, which is how the catalogues find them. Figures keep
their numbers until :func:`say`, where the one table of digits decides how each is written.
"""

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Protocol

from advisor.errors import mark as mark  # the domain marks its texts where it makes its phrases

Figure = float | int | str | None

# How many decimals a figure is shown with, by the end of its name; the longest ending that fits counts.
DIGITS: Mapping[str, int] = {
    "_mm": 1,
    "_nm": 0,
    "_cm": 0,
    "_g": 1,
    "pair_g": 0,
    "_d": 2,
    "_prism_d": 2,
    "_prism": 2,
    "_percent": 1,
    "_deg": 1,
    "_cd_m2": 2,
    "_level": 1,
    "_per_mille": 1,
    "_years": 0,
    "_fraction": 2,
    "pd_mm": 1,
    "blank_mm": 0,
    "magnification_percent": 1,
    "price": 2,
    "_times": 1,
}
# Figures that always carry a sign.
SIGNED = ("_d",)
UNSIGNED = ("_prism_d", "changed_by_d", "most_d", "blur_d")  # sizes, not powers


WORD = "word:"  # begins the keys of words for names, see ``words.py``


@dataclass(frozen=True)
class Phrase:
    """A warning, reason, caution or row: a stable code and the figures that its text needs."""

    code: str
    figures: Mapping[str, Figure] = field(default_factory=dict)


class Translator(Protocol):
    """What the domain needs to know of a language; made by ``advisor.web.language``."""

    language: str

    def gettext(self, message: str, /) -> str:
        """Return the text in this language."""

    def number(self, value: float, *, digits: int, signed: bool = False) -> str:
        """Return a number as this language writes it."""


def digits_for(name: str) -> int:
    """Return how many decimals the figure of this name is shown with (0 for a name the table does not know)."""
    fitting = [ending for ending in DIGITS if name.endswith(ending)]
    return DIGITS[max(fitting, key=len)] if fitting else 0


def figure_text(name: str, value: Figure, translator: Translator) -> str:
    """Return one figure as text: numbers by the table of digits, words translated."""
    if value is None:
        return "–"
    if isinstance(value, str):
        return translator.gettext(value) if value else ""
    signed = name.endswith(SIGNED) and not name.endswith(UNSIGNED)
    return translator.number(value, digits=digits_for(name), signed=signed)


def short_number(value: float, translator: Translator) -> str:
    """Return a number with as many decimals as it needs, six figures at most."""
    plain = f"{value:g}"
    return plain if "e" in plain else translator.number(value, digits=len(plain.partition(".")[2]))


def say(phrase: Phrase, texts: Mapping[str, str], translator: Translator) -> str:
    """Return the sentence of a phrase: its text in the translator's language with its figures put in.

    A figure whose name ends in ``_names`` is a list of names parted by commas; each is put into words by ``texts``.
    """
    words = {}
    for name, value in phrase.figures.items():
        if name.endswith("_names"):
            listed = [part for part in str(value or "").split(", ") if part]
            words[name] = ", ".join(translator.gettext(texts.get(WORD + part, part)) for part in listed)
        else:
            words[name] = figure_text(name, value, translator)
    return translator.gettext(texts[phrase.code]) % words
