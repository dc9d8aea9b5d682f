"""The fields of the Counter's form, named by dotted paths, and which of them a fault belongs to.

A form is kept as typed: a flat table of texts, so that a draft shows again exactly what stood in it, wrong or not. An
empty text means left out. What a visit holds and the form has no field for travels along in the field ``kept``.
"""

from collections.abc import Iterable, Iterator, Mapping, Sequence
from typing import Any

from werkzeug.datastructures import MultiDict

from advisor.counsel.faults import Fault
from advisor.counsel.musts import musts
from advisor.counsel.visit import DailyLife

Fields = dict[str, str]
Content = dict[str, Any]

MOST_OPTIONS = 4
EYES = ("right", "left")
KEPT = "kept"
COUNT = "option_count"
LINE = "line"  # a written prescription to fill the form from; it is kept as typed, and no visit holds it

_POWERS = ("sphere", "cylinder", "axis", "add")
PRISM_PARTS = 2


def _prescription_names(start: str) -> Iterator[str]:
    for eye in EYES:
        yield from (f"{start}.{eye}.{name}" for name in _POWERS)
        for part in range(PRISM_PARTS):
            yield from (f"{start}.{eye}.prism.{part}.{name}" for name in ("amount", "base"))
        yield f"{start}.{eye}.balance"


LIFE = tuple(name for name in DailyLife.model_fields if name != "cleaning")
# What a wearer may turn down, each ticked in one field, with a field of its own for who turned it down.
DECLINABLE = tuple(dict.fromkeys(must.lifted_by for must in musts() if must.lifted_by is not None))
DECLINED = ("declined", *(f"declined_by.{key}" for key in DECLINABLE))
WORDS = frozenset({"daily_life.cleaning", "scenes", "declined"})  # several words in one field, parted by spaces
NUMBERS = frozenset({"fitting.working_distance_cm"})  # several numbers in one field, parted by spaces
TRUTHS = frozenset(f"{start}.{eye}.balance" for start in ("prescription", "worn_now.prescription") for eye in EYES)

PLAIN: tuple[str, ...] = (
    "date", "reference", "note", "dispensed_by", "wearer.name", "wearer.birth_date", "wearer.birth_year",
    "wearer.eye_colour", "wearer.language", "wearer.print",
    *_prescription_names("prescription"),
    "prescription.written", "prescription.vertex_mm", "prescription.for", "prescription.intermediate_add",
    *(f"fitting.{eye}.{name}" for eye in EYES for name in ("pd_mm", "near_pd_mm", "height_mm")),
    "fitting.vertex_mm", "fitting.tilt_deg", "fitting.wrap_deg", "fitting.working_distance_cm",
    *(f"frame.{name}" for name in ("a_mm", "b_mm", "dbl_mm", "ed_mm", "rim", "price")),
    *(f"daily_life.{name}" for name in LIFE), "daily_life.cleaning",
    "worn_now.material", "worn_now.coating.front", "worn_now.coating.back", "worn_now.front_power_d.right",
    "worn_now.front_power_d.left", "worn_now.liked", "worn_now.disliked",
    *_prescription_names("worn_now.prescription"),
    "worn_now.prescription.written", "worn_now.prescription.vertex_mm",
    "scenes", "baseline", "ordered",
)  # fmt: skip
OPTION: tuple[str, ...] = (
    "design", "material", "coating.front", "coating.back", "tint", "tint_own",
    "front_power_d.right", "front_power_d.left", "centre_mm.right", "centre_mm.left",
)  # fmt: skip


def option_count(fields: Mapping[str, str]) -> int:
    """Return how many options the form holds, one at least."""
    text = fields.get(COUNT, "")
    return min(max(int(text), 1), MOST_OPTIONS) if text.isascii() and text.isdigit() and len(text) < 3 else 1


def names_of(fields: Mapping[str, str]) -> list[str]:
    """List the names of every field that the form has now."""
    return [*PLAIN, *DECLINED, *(f"options.{k}.{name}" for k in range(option_count(fields)) for name in OPTION)]


def fields_from_form(form: MultiDict[str, str]) -> Fields:
    """Return what was typed, without names that the form does not have."""
    fields = {COUNT: str(option_count(form)), KEPT: form.get(KEPT, ""), LINE: form.get(LINE, "")}
    for name in names_of(fields):
        text = " ".join(form.getlist(name)) if name in WORDS else form.get(name, "")
        fields[name] = text.replace("\r\n", "\n")  # as browsers send the lines of a paragraph
    return fields


def is_untouched(fields: Mapping[str, str]) -> bool:
    """Tell whether neither eye, nor a name, was typed yet: there is nothing to keep."""
    marks = ("prescription.", "wearer.", "reference", "note", "frame.", "fitting.")
    return not any(text.strip() for name, text in fields.items() if name.startswith(marks))


def put(content: Content, place: Sequence[str], value: Any) -> None:
    """Put a value at its place, making what holds it."""
    for key in place[:-1]:
        content = content.setdefault(key, {})
    content[place[-1]] = value


def dotted(path: str) -> str:
    """Write a fault's place as a form names it: ``options[0].coating`` is ``options.0.coating``."""
    return path.replace("[", ".").replace("]", "")


def field_of(path: str, names: Sequence[str]) -> str:
    """Return the field that a fault belongs beside: that of its place, of the whole it is in, or of its first part.

    An empty text means that no field fits.
    """
    place = dotted(path)
    if place in names:
        return place
    within = [name for name in names if place.startswith(f"{name}.")]
    parts = [name for name in names if name.startswith(f"{place}.")]
    return max(within, key=len, default=parts[0] if place and parts else "")


def by_field(faults: Iterable[Fault], names: Sequence[str]) -> dict[str, list[Fault]]:
    """Sort faults by the field they belong beside; those of no field stand under an empty name."""
    found: dict[str, list[Fault]] = {}
    for one in faults:
        found.setdefault(field_of(one.field, names), []).append(one)
    return found
