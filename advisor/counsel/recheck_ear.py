"""What is listened for in one language: patterns of complaints and of signs for an eye doctor, and what is denied.

English stands in ``recheck_words.py`` and ``recheck_sign_words.py``, every other language in a file of its own,
``data/heard/<code>.toml``. What they hold is common speech, no source.
"""

import re
import tomllib
import unicodedata
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache

from advisor.resources import data_file

PART = re.compile(r"<([A-Z_]+)>")
FOLDER = "heard"
TWO_LETTERS = {"\N{LATIN SMALL LIGATURE OE}": "oe", "\N{LATIN SMALL LETTER AE}": "ae"}


@dataclass(frozen=True)
class Ear:
    """The patterns of one language: a complaint by any of its own, a sign by every part of any of its lines."""

    complaints: Mapping[str, tuple[str, ...]]
    signs: Mapping[str, tuple[tuple[str, ...], ...]]
    denied: re.Pattern[str]

    def complaints_in(self, text: str) -> set[str]:
        """Return the complaints heard in words in small letters without accents."""
        return {key for key, parts in self.complaints.items() if any(re.search(part, text) for part in parts)}

    def signs_in(self, text: str) -> set[str]:
        """Return the signs heard in words in small letters without accents, from which what is denied was taken."""
        return {
            key
            for key, lines in self.signs.items()
            if any(all(re.search(part, text) for part in parts) for parts in lines)
        }


def folded(says: str) -> str:
    """Return words on one line in small letters, without accents, with plain apostrophes."""
    text = " ".join(says.casefold().replace("\N{RIGHT SINGLE QUOTATION MARK}", "'").split())
    for letter, two in TWO_LETTERS.items():
        text = text.replace(letter, two)
    return "".join(c for c in unicodedata.normalize("NFKD", text) if not unicodedata.combining(c))


@cache
def ears() -> Mapping[str, Ear]:
    """Return the ear of every language that has a file, by its code."""
    return {path.stem: _ear(path.read_text("utf-8")) for path in sorted(data_file("counsel", FOLDER).glob("*.toml"))}


def without_denied(text: str) -> str:
    """Return words without what is denied in them in any of these languages ("sin dolor")."""
    for ear in ears().values():
        text = ear.denied.sub(" ", text)
    return text


def _ear(content: str) -> Ear:
    tables = tomllib.loads(content)
    parts: dict[str, str] = {}
    for name, pattern in tables["parts"].items():  # a part may hold those above it
        parts[name] = _whole(pattern, parts)
    denied = tables["denied"]
    return Ear(
        complaints={key: tuple(_whole(one, parts) for one in some) for key, some in tables["complaints"].items()},
        signs={
            key: tuple(tuple(_whole(one, parts) for one in line) for line in lines)
            for key, lines in tables["signs"].items()
        },
        denied=re.compile(rf"{denied['lead']}\s*\b{denied['word']}\b(?:{denied['and']}\s*{denied['word']}\b)*"),
    )


def _whole(pattern: str, parts: Mapping[str, str]) -> str:
    return PART.sub(lambda found: parts[found[1]], pattern)
