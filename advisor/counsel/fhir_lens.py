"""One lens of an HL7 FHIR VisionPrescription: what a visit says of that eye, and what is wrong with it."""

from collections.abc import Iterable, Mapping
from dataclasses import replace
from typing import Any

from pydantic import ValidationError

from advisor.counsel.faults import Fault, fault, faults_from
from advisor.counsel.fhir_people import objects
from advisor.counsel.phrases import Phrase
from advisor.counsel.prescription import Eye, normal_axis
from advisor.counsel.visit import EyePrescription

MOST_AXIS = 36_000
CONTACT = "contact"
NOT_READ = ("power", "backCurve", "diameter", "duration", "color", "brand", "note")

_READ = ("sphere", "cylinder", "add")

Content = Mapping[str, Any]


def is_contact(lens: Content) -> bool:
    """Tell whether a lens is a contact lens, by the code of its product or, without one, by its name."""
    product = lens.get("product")
    if not isinstance(product, dict):
        return False
    codes = [one.get("code") for one in [product, *objects(product.get("coding"))]]  # once the product was the code
    named = str(product.get("text", "")).casefold()
    return CONTACT in codes or (not any(codes) and CONTACT in named)


def eye_content(lens: Content, place: str) -> tuple[dict[str, Any], list[Fault]]:
    """Return what a visit says of one eye, with every fault, each at its place in the file."""
    eye: dict[str, Any] = {name: lens[name] for name in _READ if lens.get(name) is not None}
    faults: list[Fault] = []
    axis = lens.get("axis")
    if axis is not None:
        eye["axis"], faults = _axis(axis)
    if prism := _prism(lens):
        eye["prism"] = prism
    try:
        EyePrescription.model_validate(eye)
    except ValidationError as error:
        wrong_already = {one.field for one in faults}
        faults += [one for one in faults_from(error, model=EyePrescription) if one.field not in wrong_already]
    return eye, [replace(one, field=f"{place}.{one.field}") for one in faults]


def _axis(axis: object) -> tuple[object, list[Fault]]:
    """Return an axis from 1 to 180; the standard holds whole degrees and sets no limits."""
    if isinstance(axis, bool) or not isinstance(axis, int | float):
        return axis, []  # the eye's own rules name this fault
    if abs(axis) > MOST_AXIS:
        return None, [fault("at-most", field="axis", figures={"limit": MOST_AXIS})]
    if axis != round(axis):
        return None, [fault("not-whole", field="axis")]
    return normal_axis(axis), []


def turned(eye: Eye, lens: Content) -> Phrase | None:
    """Tell where an axis was brought into 1 to 180."""
    axis = lens.get("axis")
    if axis is None or 0 <= axis <= 180:
        return None
    return Phrase(f"axis-turned-{eye}", {"written": int(axis), "read": int(normal_axis(axis))})


def _prism(lens: Content) -> Any:
    """Return the prisms as a list of amounts and bases; the older form has one number and its base beside it."""
    prism = lens.get("prism")
    if isinstance(prism, list):
        return [_known(part, ("amount", "base")) for part in prism]
    if prism is None or isinstance(prism, dict):
        return None if prism is None else [_known(prism, ("amount", "base"))]
    part = {"amount": prism} | _known({"base": lens.get("base")}, ("base",))
    return None if prism == 0 and "base" not in part else [part]


def _known(part: Any, names: tuple[str, ...]) -> Any:
    if not isinstance(part, dict):
        return part
    return {name: part[name] for name in names if part.get(name) is not None}


def not_read(lenses: Iterable[Content]) -> list[Phrase]:
    """Name the elements that a spectacle visit does not hold."""
    there = {name for lens in lenses for name in NOT_READ if lens.get(name) not in (None, [], "")}
    names = ", ".join(name for name in NOT_READ if name in there)
    return [Phrase("elements-not-read", {"element_names": names})] if names else []
