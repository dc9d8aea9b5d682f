"""A traced frame in the Counter's form: sizes in their fields, the outline in what the form has no field for."""

import json
from collections.abc import Mapping
from typing import Any

from advisor.counsel.faults import Faults
from advisor.counsel.files import parse_json
from advisor.counsel.visit import Frame, check_visit
from advisor.web.filled_form import number_text
from advisor.web.form_fields import EYES, KEPT, Fields

SIZES = ("a_mm", "b_mm", "dbl_mm")
LONGEST = "frame.ed_mm"


def with_frame(fields: Mapping[str, str], frame: Frame) -> Fields:
    """Return the form with a record's frame; a size that it does not give stays as typed.

    The outline and the longest diameter of another shape go.
    """
    given = {f"frame.{name}": getattr(frame, name) for name in SIZES}
    filled = {**fields} | {name: number_text(size) for name, size in given.items() if size is not None}
    filled[LONGEST] = "" if frame.ed_mm is None else number_text(frame.ed_mm)
    outline = None if frame.outline is None else frame.outline.model_dump(mode="json", exclude_none=True)
    return _with_outline(filled, outline)


def without_outline(fields: Mapping[str, str]) -> Fields:
    """Return the form without an outline; its sizes stay."""
    return _with_outline(fields, None)


def frame_in(fields: Mapping[str, str]) -> Frame | None:
    """Return the frame of a form as far as it holds an outline: the outline, and the bridge where it can be read."""
    outline = _kept(fields).get("frame", {}).get("outline")
    if outline is None:
        return None
    frame = {"outline": outline, "dbl_mm": fields.get("frame.dbl_mm", "")}
    eyes: dict[str, Any] = {eye: {"sphere": 0.0} for eye in EYES}
    for content in (frame, {"outline": outline}):
        try:
            return check_visit({"prescription": eyes, "frame": content}, from_form=True).frame
        except Faults:
            continue
    return None


def _kept(fields: Mapping[str, str]) -> dict[str, Any]:
    """Return what the form has no field for, with a place for the frame; what cannot be read is nothing."""
    text = fields.get(KEPT, "").strip()
    try:
        kept = parse_json(text) if text else {}
    except Faults:
        return {}
    kept = kept if isinstance(kept, dict) else {}
    return kept | {"frame": kept["frame"]} if isinstance(kept.get("frame"), dict) else {**kept, "frame": {}}


def _with_outline(fields: Mapping[str, str], outline: object) -> Fields:
    kept = _kept(fields)
    frame = {name: part for name, part in kept["frame"].items() if name != "outline"}
    frame |= {} if outline is None else {"outline": outline}
    rest = {name: part for name, part in kept.items() if name != "frame"} | ({"frame": frame} if frame else {})
    return {**fields, KEPT: json.dumps(rest, ensure_ascii=False) if rest else ""}
