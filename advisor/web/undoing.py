"""Undo and redo of a form: what each change replaced, so that it can be taken back, after a reload as well.

A step is the difference a change made: the earlier text of every field it changed. A field that a form has not got
counts as empty.
"""

from collections.abc import Mapping
from dataclasses import dataclass

from advisor.web.form_fields import COUNT, KEPT, WORDS, Fields, names_of

Step = dict[str, str]

MOST_STEPS = 40
MOST_CHARACTERS = 200_000  # of all steps of one side together; the oldest go first

_CHOSEN_ENDS = (
    ".eye_colour", ".language", ".print", ".for", ".rim", ".base", ".balance", ".material",
    ".coating.front", ".coating.back", ".tint", ".design",
)  # fmt: skip
_CHOSEN = frozenset({"baseline", "ordered", COUNT, KEPT}) | WORDS


@dataclass(frozen=True)
class Past:
    """The steps that can be taken back, and those that were and can be brought back; the newest last."""

    before: tuple[Step, ...] = ()
    after: tuple[Step, ...] = ()


def is_typed(name: str) -> bool:
    """Tell whether a field is typed into letter by letter, unlike one whose value is chosen."""
    asked = name.startswith("daily_life.") and name != "daily_life.price_limit"
    return not (asked or name in _CHOSEN or name.startswith("declined_by.") or name.endswith(_CHOSEN_ENDS))


def difference(old: Mapping[str, str], new: Mapping[str, str]) -> Step:
    """Return the earlier text of every field that changed."""
    return {name: old.get(name, "") for name in {**old, **new} if _read(name, old) != _read(name, new)}


def _read(name: str, fields: Mapping[str, str]) -> object:
    text = fields.get(name, "")
    return set(text.split()) if name in WORDS else text


def recorded(past: Past, old: Mapping[str, str], new: Mapping[str, str]) -> Past:
    """Return the past after a change; typing on in one field is one step, and typing it back is none."""
    step = difference(old, new)
    if not step:
        return past
    last = past.before[-1] if past.before and not past.after else {}
    if last.keys() == step.keys() and len(step) == 1 and is_typed(next(iter(step))):
        typed_back = difference(last, {name: new.get(name, "") for name in last}) == {}
        return Past(past.before[:-1] if typed_back else past.before)
    return Past(_bounded((*past.before, step)))


def undone(fields: Mapping[str, str], past: Past) -> tuple[Fields, Past]:
    """Return the form without its last change, which can be brought back; the same form where there is none."""
    if not past.before:
        return dict(fields), past
    earlier = _restored(fields, past.before[-1])
    return earlier, Past(past.before[:-1], _bounded((*past.after, difference(fields, earlier))))


def redone(fields: Mapping[str, str], past: Past) -> tuple[Fields, Past]:
    """Return the form with the change that was last taken back; the same form where there is none."""
    later, turned = undone(fields, Past(past.after, past.before))
    return later, Past(turned.after, turned.before)


def _restored(fields: Mapping[str, str], step: Step) -> Fields:
    merged = {**fields, **step}
    there = names_of(merged)
    return {name: text for name, text in merged.items() if not name.startswith("options.") or name in there}


def _bounded(steps: tuple[Step, ...]) -> tuple[Step, ...]:
    """Return the newest steps, as many as may be kept."""
    kept = steps[-MOST_STEPS:]
    while kept and sum(len(text) for step in kept for text in step.values()) > MOST_CHARACTERS:
        kept = kept[1:]
    return kept
