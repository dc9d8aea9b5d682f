"""The words a visit is found by, one row for each, so that a search reads an index and never every visit."""

from collections.abc import Iterable

from sqlalchemy import ColumnElement, Connection, delete, insert

from advisor.records import tables
from advisor.records.folding import fold

WORD_LENGTH = 40  # of a longer word its beginning is kept, and searched for
NOTE_WORDS = 60  # of a longer note its beginning is searched
_LAST = "\U0010ffff"  # sorts behind every letter, in UTF-8 as in code points

_WORD = tables.visit_word.c


def words_in(text: str) -> list[str]:
    """Return the words of a text as they are stored and searched for."""
    return [word[:WORD_LENGTH] for word in fold(text).split()]


def words_of(*, name: str, reference: str, note: str, date: str) -> set[str]:
    """Return the words by which a visit is found."""
    return {*words_in(name), *words_in(reference), *words_in(date), *words_in(note)[:NOTE_WORDS]}


def keep(connection: Connection, visit_id: str, words: Iterable[str]) -> None:
    """Store the words of a visit in place of those it had."""
    connection.execute(delete(tables.visit_word).where(_WORD.visit_id == visit_id))
    rows = [{"visit_id": visit_id, "word": word} for word in sorted(words)]
    if rows:
        connection.execute(insert(tables.visit_word), rows)


def begins(word: str, stored: ColumnElement[str] = _WORD.word) -> ColumnElement[bool]:
    """Return the condition that a stored word begins so; as a range, since LIKE is not always read from an index."""
    return (stored >= word) & (stored < word + _LAST)
