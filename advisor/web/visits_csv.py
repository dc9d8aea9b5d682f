"""One visit as a row of a table of visits; powers are bare numbers, and the names of the columns are stable keys."""

from collections.abc import Iterator

from advisor.counsel.choices import Option, faces_of
from advisor.counsel.visit import EyePrescription, Visit

Cell = str | float

_EYE = ("sphere", "cylinder", "axis", "add", "prism_in", "prism_up")
HEAD = [
    "date", "reference", "name", "written", *(f"{eye}_{name}" for eye in ("right", "left") for name in _EYE),
    "ordered", "ordered_design", "ordered_material", "ordered_coating",
]  # fmt: skip


def visit_row(visit: Visit, *, with_note: bool = False) -> list[Cell]:
    """Return one visit; what is not written is empty, and a prism out or down is a negative one in or up."""
    name = (visit.wearer.name if visit.wearer else None) or ""
    prescription = visit.prescription
    written = prescription.written.isoformat() if prescription.written else ""
    row: list[Cell] = [visit.date.isoformat() if visit.date else "", visit.reference or "", name, written]
    row += [*_powers(prescription.right), *_powers(prescription.left), *_ordered(visit)]
    return [*row, visit.note or ""] if with_note else row


def _powers(eye: EyePrescription) -> Iterator[Cell]:
    for value in (eye.sphere, eye.cylinder, eye.axis, eye.add):
        yield "" if value is None else value
    prism = eye.prism_vector
    yield from (prism.inward_prism_d, prism.upward_prism_d) if eye.prism else ("", "")


def _ordered(visit: Visit) -> list[Cell]:
    """Return the number of the ordered option, counted from 1, and the keys of what it is made of."""
    options, ordered = visit.options or (), visit.ordered
    if ordered is None:
        return ["", "", "", ""]
    option = options[ordered] if ordered < len(options) else Option()
    faces = [] if option.coating is None else [_key(face) for face in faces_of(option.coating)]
    return [ordered + 1, option.design or "", _key(option.material), " / ".join(dict.fromkeys(faces))]


def _key(part: object) -> str:
    """Return the key of a part; one given in place may have none."""
    return part if isinstance(part, str) else str(getattr(part, "key", None) or "")
