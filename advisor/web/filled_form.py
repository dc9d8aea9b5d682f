"""The Counter's form filled from a visit: every value as the text that reads back the same."""

import json
from collections.abc import Iterator, Mapping, Sequence
from typing import Any

from advisor.counsel.choices import Option
from advisor.counsel.prescription import written_prism
from advisor.counsel.visit import Visit
from advisor.web.form_fields import (
    COUNT,
    DECLINABLE,
    EYES,
    KEPT,
    MOST_OPTIONS,
    PLAIN,
    PRISM_PARTS,
    Content,
    Fields,
    names_of,
    put,
)


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
        children = {str(k): part for k, part in enumerate(value[:PRISM_PARTS])}
    if not children or not any(name.startswith(f"{path}.") for name in names):
        put(kept, path.split("."), value)
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
        if len(written.prism or ()) > PRISM_PARTS:
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
