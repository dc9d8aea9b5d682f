"""The visit that the Counter's form stands for."""

from collections.abc import Iterator, Mapping
from typing import Any

from advisor.counsel.faults import Faults, fault
from advisor.counsel.files import parse_json
from advisor.counsel.visit import Visit, check_visit
from advisor.web.form_fields import (
    DECLINABLE,
    EYES,
    KEPT,
    NUMBERS,
    OPTION,
    PLAIN,
    TRUTHS,
    WORDS,
    Content,
    option_count,
    put,
)
from advisor.web.number_fields import number_field, number_of


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
            put(content, name.split("."), _value(name, text))
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
            put(option, name.split("."), _value(name, text))
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
