"""The questions of the Counter: six first, what age, power, rim and answers open next, and the rest folded away.

Every answer has one field in the form. A question whose fields stand elsewhere in the form leads to the first of them.
"""

from collections.abc import Mapping
from dataclasses import dataclass

from advisor.counsel.case import Case
from advisor.counsel.questions import FIRST, NEXT, Question, is_open

_FIRST_FIELDS = frozenset(field for question in FIRST for field in question.fields)


@dataclass(frozen=True)
class Asked:
    """One question: the fields it shows, or the field it leads to, and whether it stands open."""

    key: str
    text: str
    fields: tuple[str, ...] = ()
    leads_to: str = ""
    is_shown: bool = True


def first_questions() -> tuple[Asked, ...]:
    """Return the six questions that are always asked first."""
    return tuple(Asked(question.key, question.text, question.fields) for question in FIRST)


def further_questions(fields: Mapping[str, str], opened: frozenset[str]) -> tuple[Asked, ...]:
    """Return every other question in its order; one that was opened, or answered, is shown."""
    found = []
    for question in (opening.question for opening in NEXT):
        own = own_fields(question)
        answered = any(fields.get(field, "").strip() for field in own)
        shown = question.key in opened or answered
        found.append(Asked(question.key, question.text, own, "" if own else leads_to(question), shown))
    return tuple(found)


def own_fields(question: Question) -> tuple[str, ...]:
    """Return the answers that a question shows itself: those of daily life that none of the six asks for."""
    return tuple(field for field in question.fields if field.startswith("daily_life.") and field not in _FIRST_FIELDS)


def leads_to(question: Question) -> str:
    """Return the field that a question leads to, where its fields stand elsewhere in the form."""
    field = question.fields[0]
    return {"worn_now.prescription": "worn_now.prescription.right.sphere"}.get(field, field)


def opened_by(case: Case) -> frozenset[str]:
    """Return the questions that this visit opens; one whose fields stand elsewhere closes once they are filled in."""
    return frozenset(
        opening.question.key
        for opening in NEXT
        if opening.opens(case) and (own_fields(opening.question) or is_open(case, opening.question))
    )
