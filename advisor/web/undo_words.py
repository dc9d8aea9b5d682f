"""What "Undo" and "Redo" will do, in words, where a few words say it."""

from collections.abc import Mapping
from dataclasses import dataclass

from advisor.counsel.phrases import Translator, mark
from advisor.web.field_words import PARTS, place_words
from advisor.web.form_fields import COUNT, EYES
from advisor.web.undoing import Past, Step

ADDING = mark("adding an option")
REMOVING = mark("removing an option")
MOVING = mark("moving an option")
OF_EYE = mark("%(field)s, %(eye)s")


@dataclass(frozen=True)
class Turns:
    """Whether there is something to undo and to redo, and what; without words where they would be many."""

    can_undo: bool
    can_redo: bool
    undo: str
    redo: str


def turns(fields: Mapping[str, str], past: Past, translator: Translator) -> Turns:
    """Return what the two buttons will do to a form."""
    return Turns(
        bool(past.before),
        bool(past.after),
        _words(past.before[-1], fields, translator, ADDING, REMOVING) if past.before else "",
        _words(past.after[-1], fields, translator, REMOVING, ADDING) if past.after else "",
    )


def _words(step: Step, fields: Mapping[str, str], translator: Translator, fewer: str, more: str) -> str:
    """Write what a step is about; ``fewer`` where the step leads to fewer options than there are, else ``more``."""
    if COUNT in step:
        return translator.gettext(fewer if step[COUNT] < fields.get(COUNT, "") else more)
    if len(step) == 1:
        return _field(next(iter(step)), translator)
    sections = {name.partition(".")[0] for name in step}
    if sections <= {"options", "baseline", "ordered"}:
        return translator.gettext(MOVING)
    (section, *others) = sections
    return "" if others else translator.gettext(PARTS.get(section, section))


def _field(name: str, translator: Translator) -> str:
    section, *parts = name.split(".")
    if len(parts) == 2 and parts[0] in EYES and section == "prescription":
        eye, field = parts
        return translator.gettext(OF_EYE) % {"field": place_words(field, translator), "eye": translator.gettext(eye)}
    return place_words(name, translator)
