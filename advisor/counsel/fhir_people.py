"""The people of an HL7 FHIR file: whose prescription it is, as far as the file itself tells."""

import datetime as dt
import re
from collections.abc import Iterable, Mapping
from typing import Any

from advisor.counsel.phrases import Phrase

MOST_LETTERS = 200
_FIRST_YEAR, _LAST_YEAR = 1900, 2200
_DAY = re.compile(r"(\d{4})(-\d{2}(-\d{2})?)?", re.ASCII)

Content = Mapping[str, Any]


def texts(value: object) -> list[str]:
    """Return the texts of a list, one line each."""
    return [" ".join(part.split()) for part in value if isinstance(part, str)] if isinstance(value, list) else []


def objects(value: object) -> list[dict[str, Any]]:
    """Return the objects of a list."""
    return [part for part in value if isinstance(part, dict)] if isinstance(value, list) else []


def people_of(entries: Iterable[Content]) -> dict[str, Content | None]:
    """Return the Patient resources of a Bundle by every way to refer to them; None where a reference is not unique."""
    found: dict[str, Content | None] = {}
    for entry in entries:
        person = entry.get("resource")
        if not isinstance(person, dict) or person.get("resourceType") != "Patient":
            continue
        names = {entry.get("fullUrl"), f"Patient/{person['id']}" if isinstance(person.get("id"), str) else None}
        for name in names:
            if isinstance(name, str):
                found[name] = person if found.get(name, person) == person else None
    return found


def _person(resource: Content, people: Mapping[str, Content | None]) -> Content | None:
    """Return the Patient that a prescription refers to, in itself or beside itself in the file."""
    patient = resource.get("patient")
    reference = patient.get("reference") if isinstance(patient, dict) else None
    if not isinstance(reference, str):
        return None
    own = {f"#{one.get('id')}": one for one in objects(resource.get("contained"))}
    return own.get(reference) or people.get(reference.partition("/_history/")[0])


def _name(person: Content) -> str:
    """Return the name in use: the official one first, then any that is not called old or maiden."""
    order = {"official": 0, "usual": 1, "old": 8, "maiden": 9}
    named = sorted(objects(person.get("name")), key=lambda one: order.get(str(one.get("use")), 5))
    for one in named:
        whole, family = one.get("text"), one.get("family")  # before R4 the family name was a list
        last = texts([family]) or texts(family)
        name = " ".join(texts([whole]) or [*texts(one.get("given")), *last])
        if name:
            return name
    return ""


def _born(person: Content) -> dict[str, Any] | None:
    """Return the birth date, or the year where there is no more; None where it cannot be read."""
    text = person.get("birthDate")
    match = _DAY.fullmatch(text) if isinstance(text, str) else None
    if match is None or not _FIRST_YEAR <= int(match[1]) <= _LAST_YEAR:
        return None if text is not None else {}
    if match[3] is None:
        return {"birth_year": int(match[1])}
    try:
        return {"birth_date": dt.date.fromisoformat(match[0]).isoformat()}
    except ValueError:
        return None


def wearer_of(resource: Content, people: Mapping[str, Content | None]) -> tuple[dict[str, Any], list[Phrase]]:
    """Return what a visit says of its wearer, and what is to be asked."""
    person, patient = _person(resource, people), resource.get("patient")
    notes: list[Phrase] = []
    name, born = ("", {}) if person is None else (_name(person), _born(person))
    if born is None:
        notes.append(Phrase("birth-date-not-read"))
    if not name and isinstance(patient, dict) and (shown := " ".join(texts([patient.get("display")]))):
        name = shown
        notes.append(Phrase("name-as-shown"))
    if not name:
        notes.append(Phrase("name-missing"))
    return ({"name": name[:MOST_LETTERS]} if name else {}) | (born or {}), notes
