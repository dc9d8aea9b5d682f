"""What a readable visit may still have wrong: keys the range does not hold, and figures worth a second look."""

import datetime as dt
from collections.abc import Iterator

from advisor.counsel.case import traced_box
from advisor.counsel.choices import CoatingRef, Faces
from advisor.counsel.faults import Fault, fault, unknown_key
from advisor.counsel.phrases import Phrase, mark
from advisor.counsel.prescription import EYES
from advisor.counsel.stock import Range, keys_of, option_faults
from advisor.counsel.visit import Frame, Prescription, Visit

MOST_PD_DIFFERENCE_MM = 3.0
MOST_BOX_DIFFERENCE_MM = 1.0
LEAST_SWAPPED_D = 1.0  # spheres nearer to zero differ in sign often enough
ALIKE_D = 0.5  # magnitudes no further apart than this count as alike
STEP_D = 0.25
OLDEST_YEARS = 130

WARNING_TEXTS: dict[str, str] = {
    "signs-swapped": mark(
        "One eye is plus and the other minus with about the same power: right %(right_d)s, left %(left_d)s."
        " Check the signs."
    ),
    "unequal-add": mark("The adds differ: right %(right_d)s, left %(left_d)s. Check with the prescriber."),
    "pd-difference": mark(
        "The distances from the nose differ by %(difference_mm)s mm: right %(right_mm)s, left %(left_mm)s."
        " Measure again."
    ),
    "box-differs": mark("The box says %(box)s %(given_mm)s mm and the traced outline %(traced_mm)s mm. Measure again."),
    "quarter-steps": mark("%(value_d)s is not a quarter-dioptre step. Check the figure."),
}


def _prescription_notes(prescription: Prescription) -> Iterator[Phrase]:
    right, left = prescription.right, prescription.left
    signs_differ = right.sphere * left.sphere < 0
    alike = abs(abs(right.sphere) - abs(left.sphere)) <= ALIKE_D
    if signs_differ and alike and min(abs(right.sphere), abs(left.sphere)) >= LEAST_SWAPPED_D:
        yield Phrase("signs-swapped", {"right_d": right.sphere, "left_d": left.sphere})
    balanced = right.balance or left.balance
    if (right.add or 0.0) != (left.add or 0.0) and not balanced:
        yield Phrase("unequal-add", {"right_d": right.add, "left_d": left.add})
    for eye in EYES:
        written = prescription.right if eye == "right" else prescription.left
        for name in ("sphere", "cylinder", "add"):
            value: float | None = getattr(written, name)
            if value is not None and value % STEP_D != 0:
                yield Phrase("quarter-steps", {"eye": eye, "field": name, "value_d": value})


def prescription_warnings(visit: Visit) -> list[Phrase]:
    """Return what in the prescription and its fitting looks like a slip of the pen; none of it stops the work."""
    notes = list(_prescription_notes(visit.prescription))
    fitting = visit.fitting
    right_mm = fitting.right.pd_mm if fitting and fitting.right else None
    left_mm = fitting.left.pd_mm if fitting and fitting.left else None
    if right_mm is not None and left_mm is not None and abs(right_mm - left_mm) > MOST_PD_DIFFERENCE_MM:
        figures = {"right_mm": right_mm, "left_mm": left_mm, "difference_mm": abs(right_mm - left_mm)}
        notes.append(Phrase("pd-difference", figures))
    notes.extend(_box_notes(visit.frame))
    return notes


def _box_notes(frame: Frame | None) -> Iterator[Phrase]:
    """Find a box that the traced outline contradicts."""
    traced = traced_box(frame)
    if frame is None or traced is None:
        return
    for name, given, measured in (("a", frame.a_mm, traced[0]), ("b", frame.b_mm, traced[1])):
        if given is not None and abs(given - measured) > MOST_BOX_DIFFERENCE_MM:
            yield Phrase("box-differs", {"box": name, "given_mm": given, "traced_mm": measured})


def _coating_refs(coating: CoatingRef | None, place: str) -> Iterator[tuple[str, object]]:
    if isinstance(coating, Faces):
        yield f"{place}.front", coating.front
        yield f"{place}.back", coating.back
    else:
        yield place, coating


def age_faults(visit: Visit, *, today: dt.date, file: str = "") -> list[Fault]:
    """Find an age that nobody has on the day of the visit, or today where it has no date."""
    age, day = visit.age(today=today), visit.date or today
    if age is None or visit.wearer is None or 0 <= age <= OLDEST_YEARS:
        return []
    field = "wearer.birth_date" if visit.wearer.birth_date else "wearer.birth_year"
    if age < 0:
        return [fault("born-after-visit", file=file, field=field, figures={"date": day.isoformat()})]
    return [fault("at-least", file=file, field=field, figures={"limit": str(day.year - OLDEST_YEARS)})]


def visit_faults(visit: Visit, *, stock: Range, file: str = "") -> list[Fault]:
    """Find the keys of a visit that the range does not hold: options, the worn pair, scenes, cleaning words."""
    faults = [
        found
        for place, option in enumerate(visit.options or ())
        for found in option_faults(option, stock=stock, place=f"options[{place}]", file=file)
    ]
    named: list[tuple[str, object, list[str]]] = []
    if worn := visit.worn_now:
        named.append(("worn_now.material", worn.material, keys_of(stock.material)))
        named += [(p, ref, keys_of(stock.coating)) for p, ref in _coating_refs(worn.coating, "worn_now.coating")]
    named += [(f"scenes[{place}]", key, keys_of(stock.scene)) for place, key in enumerate(visit.scenes or ())]
    words = visit.daily_life.cleaning if visit.daily_life else None
    if words and stock.shop.cleaning is not None:
        named += [
            (f"daily_life.cleaning[{place}]", word, list(stock.shop.cleaning)) for place, word in enumerate(words)
        ]
    faults += [
        unknown_key(ref, keys=keys, file=file, field=place)
        for place, ref, keys in named
        if isinstance(ref, str) and ref not in keys
    ]
    return faults
