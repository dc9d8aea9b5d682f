"""The form of a return visit: asked, answered and measured, read as typed, every fault beside its field."""

import datetime as dt
import re
from collections.abc import Mapping
from dataclasses import dataclass, field

from pydantic import ValidationError
from werkzeug.datastructures import MultiDict

from advisor.counsel.faults import Fault, Faults, fault, faults_from
from advisor.counsel.measured import Measured, check_measured
from advisor.counsel.recheck import NotUnderstood, recheck
from advisor.counsel.recheck_answer import RecheckAnswer, RecheckRecord
from advisor.counsel.recheck_texts import SIGNS, TESTS
from advisor.counsel.stock import Range
from advisor.counsel.visit import Visit
from advisor.web.language import SOURCE_LANGUAGE, language

EYES = ("right", "left")
PLAIN = ("sphere", "cylinder", "axis", "add", "pd_mm", "height_mm", "centre_mm")
PRISM = tuple(f"prism.{k}.{part}" for k in range(2) for part in ("amount", "base"))
MEASURED = tuple(f"measured.{eye}.{name}" for eye in EYES for name in (*PLAIN, *PRISM))
OTHERS = ("says", "option", "none_of_these", "outcome", "who_pays", "new_visit", "new_reference", "remedy", "note")
ANSWERS = tuple(f"answer.{key}" for key in SIGNS | TESTS)
MOST_LETTERS = 4000
TOKEN = re.compile(r"[A-Za-z0-9_-]{20,32}")


@dataclass(frozen=True)
class Asked:
    """A form as sent; ``answer`` is None where something keeps it from being worked out."""

    fields: Mapping[str, str]
    answer: RecheckAnswer | None = None
    faults: Mapping[str, list[Fault]] = field(default_factory=dict)
    sentence: str = ""


def fields_of(form: MultiDict[str, str]) -> dict[str, str]:
    """Return what was typed, without names that the form does not have."""
    return {name: form.get(name, "")[:MOST_LETTERS] for name in (*OTHERS, *ANSWERS, *MEASURED)}


def answers_of(fields: Mapping[str, str]) -> dict[str, str]:
    """Return the answers to signs and tests; one tick answers every sign that has none with no."""
    given = {key: fields.get(f"answer.{key}", "") for key in SIGNS | TESTS}
    if fields.get("none_of_these"):
        given |= {key: "no" for key in SIGNS if not given[key]}
    return {key: answer for key, answer in given.items() if answer in ("yes", "no")}


def measured_of(fields: Mapping[str, str]) -> Measured | None:
    """Return what was measured, or None where nothing was typed; raises Faults."""
    if not any(fields.get(name, "").strip() for name in MEASURED):
        return None
    return check_measured({eye: _eye(fields, f"measured.{eye}") for eye in EYES}, from_form=True)


def _eye(fields: Mapping[str, str], start: str) -> dict[str, object]:
    parts = [
        {"amount": amount, "base": fields.get(f"{start}.prism.{k}.base", "")}
        for k in range(2)
        if (amount := fields.get(f"{start}.prism.{k}.amount", "").strip())
    ]
    return {name: fields.get(f"{start}.{name}", "") for name in PLAIN} | ({"prism": parts} if parts else {})


def ask(fields: Mapping[str, str], visit: Visit, stock: Range) -> Asked:
    """Work the form out, or say beside its fields what keeps it from that."""
    screen, number = language(SOURCE_LANGUAGE), fields.get("option", "")
    chosen = int(number) if number.isascii() and number.isdigit() and len(number) < 3 else None
    try:
        answer = recheck(
            visit,
            stock,
            says=fields.get("says", "")[:200],
            tests=answers_of(fields),
            measured=measured_of(fields),
            number=chosen or None,
            translator=screen,
        )
    except Faults as error:
        return Asked(fields, faults=_beside(error.faults))
    except NotUnderstood as error:
        return Asked(fields, sentence=screen.gettext(error.text) % error.figures)
    return Asked(fields, answer)


def _beside(faults: tuple[Fault, ...]) -> dict[str, list[Fault]]:
    found: dict[str, list[Fault]] = {}
    for one in faults:
        place = "measured." + re.sub(r"\[(\d+)\]", r".\1", one.field)
        found.setdefault(place if place in MEASURED else "measured", []).append(one)
    return found


def record_of(asked: Asked) -> RecheckRecord:
    """Return the outcome to be kept; raises Faults where none is chosen."""
    fields, answer = asked.fields, asked.answer
    if not fields.get("outcome"):
        raise Faults([fault("missing", field="outcome")])
    measured = measured_of(fields)
    causes = [] if answer is None else answer.causes
    by = [cause for cause in causes if any(remedy.key == fields.get("remedy") for remedy in cause.remedies)]
    cause = next((found.key for found in (*by, *causes)), None)
    content = {
        "says": fields["says"][:200],
        "outcome": fields["outcome"],
        "who_pays": fields.get("who_pays") or "nobody",
        "new_reference": fields.get("new_reference") or None,
        "cause": cause,
        "remedy": fields.get("remedy") or None,
        "note": fields.get("note") or None,
        "option": None if answer is None else answer.option,
        "answers": answers_of(fields),
        "measured": measured,
    }
    try:
        return RecheckRecord.model_validate(content).dated(dt.date.today())
    except ValidationError as error:
        raise Faults(faults_from(error, model=RecheckRecord)) from error
