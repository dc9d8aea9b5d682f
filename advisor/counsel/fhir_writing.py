"""A visit's prescription as an HL7 FHIR VisionPrescription, as R4, R4B and R5 read it, and what it leaves out.

What the standard asks for and the visit does not tell (who prescribed, sometimes for whom and when) is said to be
absent by the standard's own extension for that.
"""

import datetime as dt
import json
from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

from advisor.counsel.phrases import Phrase
from advisor.counsel.prescription import EYES
from advisor.counsel.visit import EyePrescription, Visit

ABSENT = "http://hl7.org/fhir/StructureDefinition/data-absent-reason"
PRODUCT_CODES = "http://terminology.hl7.org/CodeSystem/ex-visionprescriptionproduct"


@dataclass(frozen=True)
class Written:
    """The resource as JSON content, and phrases of ``BROUGHT_TEXTS`` about what it could not take."""

    resource: dict[str, Any]
    notes: tuple[Phrase, ...]

    def text(self) -> str:
        """Write the resource as a JSON file."""
        return json.dumps(self.resource, ensure_ascii=False, indent=1) + "\n"


def to_fhir(visit: Visit, *, created: dt.date, with_name: bool = False) -> Written:
    """Return the prescription of a visit as one resource; the wearer's name goes in only where it is asked for."""
    prescription = visit.prescription
    resource: dict[str, Any] = {
        "resourceType": "VisionPrescription",
        "status": "active",
        "created": created.isoformat(),
        "patient": _patient(visit, with_name=with_name),
        **_day("dateWritten", prescription.written),
        "prescriber": _absent("unknown"),
        "lensSpecification": [_lens(eye, prescription.right if eye == "right" else prescription.left) for eye in EYES],
    }
    return Written(resource, tuple(_notes(visit)))


def _absent(reason: str) -> dict[str, Any]:
    return {"extension": [{"url": ABSENT, "valueCode": reason}]}


def _patient(visit: Visit, *, with_name: bool) -> dict[str, Any]:
    name = visit.wearer.name if visit.wearer else None
    if not name:
        return _absent("unknown")
    return {"display": name} if with_name else _absent("masked")


def _day(name: str, day: dt.date | None) -> dict[str, Any]:
    """Return a date; a date that is absent is told beside its own name, as the standard has it."""
    return {f"_{name}": _absent("unknown")} if day is None else {name: day.isoformat()}


def _lens(eye: str, written: EyePrescription) -> dict[str, Any]:
    lens: dict[str, Any] = {
        "product": {"coding": [{"system": PRODUCT_CODES, "code": "lens"}], "text": "lens"},
        "eye": eye,
        "sphere": written.sphere,
    }
    if written.cylinder is not None:
        lens["cylinder"] = written.cylinder
    if written.axis is not None:
        lens["axis"] = _whole_axis(written.axis)
    if written.prism:
        lens["prism"] = [{"amount": part.amount, "base": part.base} for part in written.prism]
    if written.add is not None:
        lens["add"] = written.add
    return lens


def _whole_axis(axis_deg: float) -> int:
    return round(axis_deg) or 180


def _notes(visit: Visit) -> Iterator[Phrase]:
    """Say what of this visit the format cannot carry, what changes how the powers are read first."""
    prescription = visit.prescription
    if prescription.for_ in ("near", "intermediate"):
        yield Phrase("use-not-written")
    if prescription.intermediate_add is not None:
        yield Phrase("add-in-between-not-written")
    eyes = (prescription.right, prescription.left)
    if any(eye.balance for eye in eyes):
        yield Phrase("balance-not-written")
    for eye in eyes:
        if eye.axis is not None and eye.axis != _whole_axis(eye.axis):
            yield Phrase("axis-rounded", {"axis_deg": eye.axis, "read": _whole_axis(eye.axis)})
    if prescription.written is None:
        yield Phrase("written-unknown")
    if names := ", ".join(_left_out(visit)):
        yield Phrase("parts-not-written", {"element_names": names})


def _left_out(visit: Visit) -> Iterator[str]:
    """Name the parts of a visit that have no place in the format."""
    fitting = visit.fitting
    eyes = [eye for eye in (fitting.right, fitting.left) if eye is not None] if fitting else []
    if any(eye.pd_mm is not None or eye.near_pd_mm is not None for eye in eyes):
        yield "pd"
    if any(eye.height_mm is not None for eye in eyes):
        yield "height"
    if visit.prescription.vertex_mm is not None or (fitting and fitting.vertex_mm is not None):
        yield "vertex"
    if fitting and (fitting.tilt_deg is not None or fitting.wrap_deg is not None):
        yield "position"
    parts = {"frame": visit.frame, "life": visit.daily_life, "worn": visit.worn_now, "options": visit.options}
    yield from (name for name, part in parts.items() if part)
