"""Prescriptions of an HL7 FHIR file, as JSON: VisionPrescription in R4, R4B and R5, and in its older form.

The older form calls the list of lenses ``dispense`` and writes a prism as a number with its ``base`` beside it. Units
are implied (dioptres, degrees, prism dioptres); the cylinder keeps the sign it is written with; an axis is brought into
1 to 180. What a spectacle visit does not hold is named in the notes; any other unknown element is passed over, as the
standard asks.
"""

import datetime as dt
import re
from collections.abc import Iterator, Mapping
from typing import Any

from advisor.counsel.brought_in import Brought
from advisor.counsel.faults import Fault, Faults, fault
from advisor.counsel.fhir_lens import eye_content, is_contact, not_read, turned
from advisor.counsel.fhir_people import objects, people_of, wearer_of
from advisor.counsel.phrases import Phrase
from advisor.counsel.prescription import EYES, Eye
from advisor.counsel.visit import check_visit

MOST_ENTRIES = 200
MOST_LENSES = 20
RESOURCE = "VisionPrescription"
STATUSES = ("active", "draft", "cancelled", "entered-in-error")
WITHDRAWN = ("cancelled", "entered-in-error")

_DATE = re.compile(r"\d{4}-\d{2}-\d{2}(?=T|$)", re.ASCII)

Content = Mapping[str, Any]


def read_prescriptions(data: object, *, file: str = "") -> list[Brought]:
    """Return every prescription of a file's content, bad ones with their faults; raise Faults where none can be used.

    One resource, or a Bundle of ``MOST_ENTRIES`` at most, whose Patient resources give names and birth dates.
    """
    if not isinstance(data, dict):
        raise Faults([fault("not-a-prescription", file=file)])
    is_bundle = data.get("resourceType") == "Bundle"
    found = list(_of_bundle(data, file)) if is_bundle else [_brought(data, "", file, {})]
    if not any(one.visit for one in found):
        none = fault("not-a-prescription", file=file)
        raise Faults([one for bad in found for one in bad.faults] or [none])
    return found


def _of_bundle(bundle: Content, file: str) -> Iterator[Brought]:
    entries = bundle.get("entry")
    if not isinstance(entries, list):
        raise Faults([fault("not-a-list", file=file, field="entry")])
    if len(entries) > MOST_ENTRIES:
        raise Faults([fault("too-long", file=file, field="entry", figures={"limit": MOST_ENTRIES})])
    people = people_of(objects(entries))
    for place, entry in enumerate(entries):
        resource = entry.get("resource") if isinstance(entry, dict) else None
        if isinstance(resource, dict) and resource.get("resourceType") == RESOURCE:
            yield _brought(resource, f"entry[{place}].resource", file, people)


def _brought(resource: Content, place: str, file: str, people: Mapping[str, Content | None]) -> Brought:
    """Read one resource, or say what is wrong with it."""
    try:
        content, notes = _content(resource, people)
        visit = check_visit(content)
    except Faults as error:
        start = f"{place}." if place else ""
        faults = tuple(Fault(file, f"{start}{one.field}".rstrip("."), one.phrase) for one in error.faults)
        return Brought(None, faults=faults, place=place)
    return Brought(visit, tuple(notes), place=place)


def _content(resource: Content, people: Mapping[str, Content | None]) -> tuple[dict[str, Any], list[Phrase]]:
    """Return the visit that a resource describes, as a visit file's content, and the notes about it."""
    if resource.get("resourceType") != RESOURCE:
        raise Faults([fault("not-a-prescription")])
    notes = _status_notes(resource.get("status"))
    name, lenses = _lenses(resource)
    places = {k: lens for k, lens in enumerate(lenses) if not is_contact(lens)}
    if not places:
        raise Faults([fault("contact-lenses", field=name)])
    if len(places) < len(lenses):
        notes.append(Phrase("contact-left-out"))
    eyes = _by_eye(places, name)
    written = _written(resource.get("dateWritten"))
    wearer, asked = wearer_of(resource, people)
    read = {eye: eye_content(places[k], f"{name}[{k}]") for eye, k in eyes.items()}
    if faults := [one for found in read.values() for one in found[1]]:
        raise Faults(faults)
    notes += [note for eye, k in eyes.items() if (note := turned(eye, places[k]))]
    notes += not_read(places.values())
    notes += [*asked, *([] if written else [Phrase("written-not-read")]), Phrase("measure-the-rest")]
    content: dict[str, Any] = {"prescription": {eye: found[0] for eye, found in read.items()}}
    if written:
        content["prescription"]["written"] = written
    if wearer:
        content["wearer"] = wearer
    return content, notes


def _status_notes(status: object) -> list[Phrase]:
    """Refuse a prescription that is not to be used; the oldest form has no status."""
    if status is not None and status not in STATUSES:
        raise Faults([fault("not-one-of", field="status", figures={"expected": ", ".join(STATUSES)})])
    if status in WITHDRAWN:
        raise Faults([fault("withdrawn", field="status", figures={"status": str(status)})])
    return [Phrase("draft-status")] if status == "draft" else []


def _lenses(resource: Content) -> tuple[str, list[dict[str, Any]]]:
    """Return the list of lenses and what it is called."""
    name = "lensSpecification" if "lensSpecification" in resource else "dispense"
    lenses = resource.get(name)
    if lenses is None:
        raise Faults([fault("missing", field="lensSpecification")])
    if not isinstance(lenses, list):
        raise Faults([fault("not-a-list", field=name)])
    if not 0 < len(lenses) <= MOST_LENSES:
        code, limit = ("too-long", MOST_LENSES) if lenses else ("too-short", 1)
        raise Faults([fault(code, field=name, figures={"limit": limit})])
    if wrong := [k for k, lens in enumerate(lenses) if not isinstance(lens, dict)]:
        raise Faults([fault("not-an-object", field=f"{name}[{k}]") for k in wrong])
    return name, lenses


def _by_eye(lenses: Mapping[int, Content], name: str) -> dict[Eye, int]:
    """Return the place of each eye's one lens; two for an eye cannot be told apart."""
    places: dict[Eye, int] = {}
    faults: list[Fault] = []
    for k, lens in lenses.items():
        eye = lens.get("eye")
        if eye not in EYES:
            code = "missing" if eye is None else "not-one-of"
            faults.append(fault(code, field=f"{name}[{k}].eye", figures={"expected": ", ".join(EYES)}))
        elif eye in places:
            faults.append(fault("eye-twice", field=f"{name}[{k}].eye"))
        else:
            places["right" if eye == "right" else "left"] = k
    if not faults:
        faults = [fault(f"{eye}-eye-missing", field=name) for eye in EYES if eye not in places]
    if faults:
        raise Faults(faults)
    return {eye: places[eye] for eye in EYES}


def _written(text: object) -> str | None:
    """Return the day of a FHIR dateTime as it was written there, or None where it is not a whole real day."""
    match = _DATE.match(text) if isinstance(text, str) else None
    if match is None:
        return None
    try:
        return dt.date.fromisoformat(match[0]).isoformat()
    except ValueError:
        return None
