"""The Counter's form and the visit file, each turned into the other; a form's fields are named by dotted paths.

A form is kept as typed: a flat table of texts, so that a draft shows again exactly what stood in it, wrong or not. An
empty text means left out. What a visit holds and the form has no field for travels along in the field ``kept``.
"""

import json
from collections.abc import Iterable, Iterator, Mapping, Sequence
from typing import Any

from werkzeug.datastructures import MultiDict

from advisor.counsel.choices import Option
from advisor.counsel.faults import Fault, Faults, fault
from advisor.counsel.files import parse_json
from advisor.counsel.musts import musts
from advisor.counsel.prescription import written_prism
from advisor.counsel.visit import DailyLife, Visit, check_visit
from advisor.web.number_fields import number_field, number_of

Fields = dict[str, str]
Content = dict[str, Any]

MOST_OPTIONS = 4
EYES = ("right", "left")
KEPT = "kept"
COUNT = "option_count"
LINE = "line"  # a written prescription to fill the form from; it is kept as typed, and no visit holds it

_POWERS = ("sphere", "cylinder", "axis", "add")
_PRISM_PARTS = 2


def _prescription_names(start: str) -> Iterator[str]:
    for eye in EYES:
        yield from (f"{start}.{eye}.{name}" for name in _POWERS)
        for part in range(_PRISM_PARTS):
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


# From a visit to the form.


def number_text(value: float, *, power: bool = False) -> str:
    """Write a number for a field so that it reads back the same; powers carry a sign and quarters."""
    if power and round(value, 2) == value:
        return f"{value:+.2f}"
    text = repr(float(value))
    return text.removesuffix(".0")


def _text(name: str, value: Any) -> str:
    if isinstance(value, Mapping):
        return json.dumps(value, ensure_ascii=False)
    if isinstance(value, bool):
        return "1" if value else ""
    if isinstance(value, int | float):
        return number_text(value, power=name.endswith(("sphere", "cylinder", "add")))
    if isinstance(value, list):
        return " ".join(_text(name, part) for part in value)
    return str(value)


def visit_to_fields(visit: Visit, *, default_options: Sequence[Option] = ()) -> Fields:
    """Return the form filled with a visit; one without options shows the shop's default ones."""
    content = visit.model_dump(mode="json", by_alias=True, exclude_none=True)
    content.pop("format", None)
    given = content.pop("options", None) or [o.model_dump(mode="json", exclude_none=True) for o in default_options]
    options = given[:MOST_OPTIONS]
    fields: Fields = {COUNT: str(max(len(options), 1))}
    kept: Content = {"options": given[MOST_OPTIONS:]} if given[MOST_OPTIONS:] else {}
    fields |= _declined_fields(content.pop("declined", None), kept)
    names = frozenset(PLAIN)
    for key, value in _worn_apart(_with_two_prisms(content, visit)).items():
        _split(key, value, names, fields, kept)
    for k, option in enumerate(options):
        fields |= {f"options.{k}.{name}": text for name, text in _option_fields(option)}
    fields[KEPT] = json.dumps(kept, ensure_ascii=False) if kept else ""
    return {name: fields.get(name, "") for name in [COUNT, KEPT, *names_of(fields)]}


def _split(path: str, value: Any, names: frozenset[str], fields: Fields, kept: Content) -> None:
    """Put a value into its field, or, where the form has none, into what is kept."""
    if path in names:
        fields[path] = _text(path, value)
        return
    children = dict(value) if isinstance(value, Mapping) else {}
    if isinstance(value, list) and any(name.startswith(f"{path}.") for name in names):
        children = {str(k): part for k, part in enumerate(value[:_PRISM_PARTS])}
    if not children or not any(name.startswith(f"{path}.") for name in names):
        _put(kept, path.split("."), value)
        return
    for key, part in children.items():
        _split(f"{path}.{key}", part, names, fields, kept)


def _declined_fields(declined: Sequence[Content] | None, kept: Content) -> Fields:
    """Return the fields of what was turned down; what the form does not ask goes into what is kept."""
    if declined is None:
        return {}
    first = {part["key"]: part for part in reversed(declined) if part["key"] in DECLINABLE}
    others = [part for part in declined if first.get(part["key"]) is not part]
    if others or not first:
        kept["declined"] = others
    by = {f"declined_by.{key}": part.get("by") or "" for key, part in first.items()}
    return {"declined": " ".join(first), **by}


def _with_two_prisms(content: Content, visit: Visit) -> Content:
    """Return the content with prisms added up where more were written than the form has fields for."""
    for eye in EYES:
        written = visit.prescription.right if eye == "right" else visit.prescription.left
        if len(written.prism or ()) > _PRISM_PARTS:
            parts = written_prism(written.prism_vector)
            content["prescription"][eye]["prism"] = [{"amount": amount, "base": base} for amount, base in parts]
    return content


def _worn_apart(content: Content) -> Content:
    """Return the content with the worn pair's coating by face and its front power by eye."""
    worn = content.get("worn_now")
    if worn is None:
        return content
    apart = {**worn}
    apart.update(_apart(worn))
    return {**content, "worn_now": apart}


def _apart(part: Mapping[str, Any]) -> Iterator[tuple[str, Any]]:
    """Yield the fields of a part that the file may give as one value and the form shows as two."""
    coating = part.get("coating")
    if coating is not None:
        faces = isinstance(coating, Mapping) and not coating.keys() & {"key", "layers", "declared", "spectrum"}
        yield "coating", {"front": "bare", "back": "bare", **coating} if faces else {"front": coating}
    for name in ("front_power_d", "centre_mm"):
        if name in part:
            value = part[name]
            yield name, value if isinstance(value, Mapping) else dict.fromkeys(EYES, value)


def _option_fields(option: Mapping[str, Any]) -> Iterator[tuple[str, str]]:
    shown = {**option, **dict(_apart(option))}
    for name, value in shown.items():
        if name == "tint" and isinstance(value, int | float):
            yield "tint_own", number_text(value)
        elif name in ("coating", "front_power_d", "centre_mm"):
            yield from ((f"{name}.{key}", _text(name, part)) for key, part in value.items())
        else:
            yield name, _text(name, value)


# From the form to a visit.


def _put(content: Content, place: Sequence[str], value: Any) -> None:
    for key in place[:-1]:
        content = content.setdefault(key, {})
    content[place[-1]] = value


def _value(name: str, text: str) -> Any:
    """Return what a field's text stands for; numbers stay text, which the visit's own model reads in full."""
    if name in TRUTHS:
        return True
    if name in WORDS:
        return text.split()
    if name in NUMBERS:
        return text.replace(";", " ").split()
    if number_field(name) is not None:
        return number_of(name, text)
    return _named_or_object(name, text)


def _named_or_object(name: str, text: str) -> Any:
    """Return a key, or the item that the file gave in place of one."""
    if text.startswith("{") and name.rpartition(".")[2] in ("material", "front", "back", "tint"):
        return parse_json(text)
    return text


def fields_to_content(fields: Mapping[str, str]) -> Content:
    """Return the visit that the form describes, as a visit file's content whose numbers are still text."""
    content: Content = {"prescription": {eye: {} for eye in EYES}}
    for name in PLAIN:
        text = fields.get(name, "").strip()
        if text:
            _put(content, name.split("."), _value(name, text))
    for prescription in (content["prescription"], content.get("worn_now", {}).get("prescription", {})):
        for eye in EYES:
            parts = prescription.get(eye, {}).get("prism")
            if parts:
                prescription[eye]["prism"] = [parts[key] for key in sorted(parts)]
    if "worn_now" in content:
        _join(content["worn_now"])
    content["options"] = [_option(fields, k) for k in range(option_count(fields))]
    if declined := list(_declined(fields)):
        content["declined"] = declined
    return _with_kept(content, fields.get(KEPT, ""))


def _declined(fields: Mapping[str, str]) -> Iterator[Content]:
    """Yield what is ticked as turned down, in the form's order, with who turned it down where that is written."""
    ticked = fields.get("declined", "").split()
    for key in DECLINABLE:
        by = fields.get(f"declined_by.{key}", "").strip()
        if key in ticked:
            yield {"key": key, "by": by} if by else {"key": key}


def _option(fields: Mapping[str, str], k: int) -> Content:
    option: Content = {}
    for name in OPTION:
        text = fields.get(f"options.{k}.{name}", "").strip()
        if text:
            _put(option, name.split("."), _value(name, text))
    if "tint_own" in option:
        option["tint"] = option.pop("tint_own")
    _join(option)
    return option


def _join(part: Content) -> None:
    """Write as one value what is alike on both faces or for both eyes."""
    coating = part.get("coating")
    if coating is not None and coating.get("back", coating.get("front")) == coating.get("front"):
        part["coating"] = coating["front"]
    for name in ("front_power_d", "centre_mm"):
        eyes = part.get(name, {})
        if len(eyes) == len(EYES) and eyes["right"] == eyes["left"]:
            part[name] = eyes["right"]


def _with_kept(content: Content, text: str) -> Content:
    """Add what the form has no field for; parts of a worn prescription only where one still stands there."""
    if not text.strip():
        return content
    kept = parse_json(text)
    if not isinstance(kept, dict):
        raise Faults([fault("not-an-object", field=KEPT)])
    for name in kept.keys() & {"options", "declined"}:
        more = kept.pop(name)
        if not isinstance(more, list):
            raise Faults([fault("not-a-list", field=KEPT)])
        content[name] = content.get(name, []) + more
    worn = kept.get("worn_now")
    if isinstance(worn, dict) and "prescription" not in content.get("worn_now", {}):
        worn.pop("prescription", None)
    merged: Content = _merged(kept, content)
    return merged


def _merged(under: Any, over: Any) -> Any:
    if isinstance(under, dict) and isinstance(over, dict):
        return {**under, **over, **{key: _merged(under[key], over[key]) for key in under.keys() & over.keys()}}
    return over


def visit_from_fields(fields: Mapping[str, str]) -> Visit:
    """Return the visit that the form describes, or raise ``Faults`` by dotted field path."""
    return check_visit(fields_to_content(fields), from_form=True)


# Faults beside their fields.


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
