"""How hard a text is to read, by the published formula of each language; syllables as pyphen parts words.

Every list item, cell and heading is a sentence even without a full stop. pyphen parts a word where it may be
hyphenated; in English it counts within about a tenth of a dictionary's syllables, and the limits are set on its scale.

Formulas, with words a sentence (ws) and syllables a word (sw):
English, Flesch-Kincaid grade, Kincaid et al. 1975: 0.39 ws + 11.8 sw - 15.59.
Spanish, Fernandez-Huerta 1959: 206.84 - 60 sw - 1.02 ws. French, Kandel and Moles 1958: 207 - 1.015 ws - 73.6 sw.
German, Amstad 1978: 180 - ws - 58.5 sw. The constants are those commonly published.
"""

import re
from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass
from functools import cache

import pyphen  # type: ignore[import-untyped]  # comes without types

_END = re.compile(r"(?<=[.!?])\s+")
_WORD = re.compile(r"[^\W_]+(?:['’-][^\W_]+)*")


@dataclass(frozen=True)
class Counted:
    """How many sentences, words and syllables."""

    sentences: int
    words: int
    syllables: int

    @property
    def words_a_sentence(self) -> float:
        return self.words / self.sentences

    @property
    def syllables_a_word(self) -> float:
        return self.syllables / self.words


@dataclass(frozen=True)
class Measure:
    """A language's formula and its limit: a grade has a most, an ease a least."""

    score: Callable[[Counted], float]
    most: float | None = None
    least: float | None = None

    def is_met(self, counted: Counted) -> bool:
        score = self.score(counted)
        return (self.most is None or score <= self.most) and (self.least is None or score >= self.least)


MEASURES: Mapping[str, Measure] = {
    "en": Measure(lambda c: 0.39 * c.words_a_sentence + 11.8 * c.syllables_a_word - 15.59, most=7.0),
    "es": Measure(lambda c: 206.84 - 60.0 * c.syllables_a_word - 1.02 * c.words_a_sentence, least=65.0),
    "fr": Measure(lambda c: 207.0 - 1.015 * c.words_a_sentence - 73.6 * c.syllables_a_word, least=65.0),
    "de": Measure(lambda c: 180.0 - c.words_a_sentence - 58.5 * c.syllables_a_word, least=60.0),
}
_DICTIONARIES = {"en": "en_US", "es": "es", "fr": "fr", "de": "de_DE"}


@cache
def _dictionary(code: str) -> pyphen.Pyphen:
    return pyphen.Pyphen(lang=_DICTIONARIES[code], left=1, right=1)


def sentences(block: str) -> list[str]:
    """Part one block of text into sentences."""
    return [part for part in _END.split(" ".join(block.split())) if part and _WORD.search(part)]


def words(sentence: str) -> list[str]:
    """Return the words of a sentence; a number is a word."""
    return _WORD.findall(sentence)


def syllables(word: str, *, code: str) -> int:
    """Return into how many parts pyphen parts a word; a number counts as one."""
    return 1 if word.isdigit() else len(_dictionary(code).positions(word.lower())) + 1


def count(blocks: Iterable[str], *, code: str) -> Counted:
    """Count the sentences, words and syllables of blocks of text: items, cells, headings."""
    parts = [sentence for block in blocks for sentence in sentences(block)]
    found = [word for part in parts for word in words(part)]
    return Counted(len(parts), len(found), sum(syllables(word, code=code) for word in found))
