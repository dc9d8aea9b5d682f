"""The form of a return visit: asked, answered and measured, read as typed, every fault beside its field."""

import datetime as dt
import re
from collections.abc import Mapping
from dataclasses import dataclass, field

from pydantic import ValidationError
from werkzeug.datastructures import MultiDict

from advisor.counsel.faults import Fault, Faults, fault, faults_from
from advisor.counsel.measured import Measured, check_measured
from advisor.counsel.phrases import mark
from advisor.counsel.recheck import recheck
from advisor.counsel.recheck_answer import OUTCOMES_TODAY, RecheckAnswer, RecheckRecord
from advisor.counsel.recheck_texts import SIGNS, TESTS
from advisor.counsel.recheck_words import hear
from advisor.counsel.stock import Range
from advisor.counsel.visit import Visit
from advisor.errors import TwolightError
from advisor.web.screen import screen
from advisor.web.sentences import fault_sentence

EYES = ("right", "left")
PLAIN = ("sphere", "cylinder", "axis", "add", "pd_mm", "height_mm", "centre_mm")
PRISM = tuple(f"prism.{k}.{part}" for k in range(2) for part in ("amount", "base"))
MEASURED = tuple(f"measured.{eye}.{name}" for eye in EYES for name in (*PLAIN, *PRISM))
OTHERS = ("says", "option", "none_of_these", "outcome", "who_pays", "new_visit", "new_reference", "remedy", "note")
ANSWERS = tuple(f"answer.{key}" for key in SIGNS | TESTS)
MOST_LETTERS = 4000
MOST_SAID = 200
TOKEN = re.compile(r"[A-Za-z0-9_-]{20,32}")


class NotToday(TwolightError):
    """An outcome that sells or mends something was to be recorded of a return that is for today."""

    text = mark("This is for an eye doctor today: record that the wearer was referred, or that nothing came of it.")


@dataclass(frozen=True)
class Asked:
    """A form as sent, with sentences beside its fields; ``answer`` is None where nothing has been sent yet."""

    fields: Mapping[str, str]
    answer: RecheckAnswer | None = None
    faults: Mapping[str, list[str]] = field(default_factory=dict)


def fields_of(form: MultiDict[str, str]) -> dict[str, str]:
    """Return what was typed, without names that the form does not have."""
    return {name: form.get(name, "")[:MOST_LETTERS] for name in (*OTHERS, *ANSWERS, *MEASURED)}


def answers_of(fields: Mapping[str, str]) -> dict[str, str]:
    """Return the answers to signs and tests; one tick answers every sign with no that has no answer and was not heard.

    A sign that is heard in the wearer's words is answered by itself.
    """
    given = {key: fields.get(f"answer.{key}", "") for key in SIGNS | TESTS}
    if fields.get("none_of_these"):
        heard = hear(fields.get("says", ""), screen()).signs
        given |= {key: "no" for key in SIGNS if not given[key] and key not in heard}
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
    """Work the form out; measurements that cannot be read hold up no sign, they are told beside their fields."""
    number = fields.get("option", "")
    chosen = int(number) if number.isascii() and number.isdigit() and len(number) < 3 else None
    faults: Mapping[str, list[str]] = {}
    try:
        measured = measured_of(fields)
    except Faults as error:
        measured, faults = None, _beside(error.faults)
    answer = recheck(
        visit,
        stock,
        says=fields.get("says", ""),
        tests=answers_of(fields),
        measured=measured,
        number=chosen or None,
        translator=screen(),
    )
    return Asked(fields, answer, faults)


def _beside(faults: tuple[Fault, ...]) -> dict[str, list[str]]:
    found: dict[str, list[str]] = {}
    for one in faults:
        place = "measured." + re.sub(r"\[(\d+)\]", r".\1", one.field)
        found.setdefault(place if place in MEASURED else "measured", []).append(fault_sentence(one, screen()))
    return found


def record_of(asked: Asked) -> RecheckRecord:
    """Return the outcome to be kept.

    Raises
    ------
    NotToday
        If the return is for today and the outcome is another than a referral or none.
    Faults
        If no outcome is chosen, or something of it cannot be kept.
    """
    fields, answer = asked.fields, asked.answer
    if not fields.get("outcome"):
        raise Faults([fault("missing", field="outcome")])
    if answer is not None and answer.refer == "today" and fields["outcome"] not in OUTCOMES_TODAY:
        raise NotToday
    measured = measured_of(fields)
    causes = [] if answer is None else answer.causes
    by = [cause for cause in causes if any(remedy.key == fields.get("remedy") for remedy in cause.remedies)]
    cause = next((found.key for found in (*by, *causes)), None)
    content = {
        "says": fields["says"][:MOST_SAID],
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
