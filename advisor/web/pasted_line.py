"""A written prescription pasted at the Counter: the form's fields that it fills, and what is said about it."""

from collections.abc import Iterator, Mapping

from flask import Blueprint, Response, jsonify, request

from advisor.counsel.phrases import mark, say
from advisor.counsel.written_line import LINE_TEXTS, WrittenLine, read_line
from advisor.web.form_fields import LINE, PLAIN, Fields
from advisor.web.screen import screen

pasted_line = Blueprint("pasted_line", __name__)

MOST_PIECES = 6
FILLED = mark("Filled in from the line: %(places)s.")
REPLACED = mark(
    "An eye whose sphere the line gives is replaced as a whole: what the line does not say of it is empty now."
)
UNREAD = mark("Not read: %(pieces)s.")
NO_PRESCRIPTION = mark("No prescription was found in the line: it needs an eye and its power, such as “R -4.25”.")
PLACES: Mapping[str, str] = {
    "prescription.right.sphere": mark("right sphere"),
    "prescription.right.cylinder": mark("right cylinder"),
    "prescription.right.axis": mark("right axis"),
    "prescription.right.add": mark("right add"),
    "prescription.right.prism": mark("right prism"),
    "prescription.left.sphere": mark("left sphere"),
    "prescription.left.cylinder": mark("left cylinder"),
    "prescription.left.axis": mark("left axis"),
    "prescription.left.add": mark("left add"),
    "prescription.left.prism": mark("left prism"),
    "prescription.vertex_mm": mark("tested vertex distance"),
    "fitting.right.pd_mm": mark("right PD"),
    "fitting.left.pd_mm": mark("left PD"),
    "fitting.right.near_pd_mm": mark("right near PD"),
    "fitting.left.near_pd_mm": mark("left near PD"),
}


@pasted_line.post("/counter/line")
def read() -> Response:
    """Say which fields a pasted line fills; none where it holds no prescription."""
    line = read_line(request.form.get(LINE, ""))
    if line is None:
        return jsonify(fields={}, unread=[], said="")
    return jsonify(fields=filling(line), unread=list(line.unread), said=" ".join(_sentences(line)))


def filling(line: WrittenLine) -> Fields:
    """Return the fields that a line fills; an eye whose sphere it gives is emptied of what it does not say."""
    starts = tuple(
        f"prescription.{eye}.{part}" for eye in line.eyes_with("sphere") for part in ("cyl", "ax", "add", "pr")
    )
    return {name: "" for name in PLAIN if name.startswith(starts)} | dict(line.fields)


def filled(fields: Mapping[str, str]) -> Fields:
    """Return the form filled from the line that was typed in it, or as it is where that is no prescription."""
    line = read_line(fields.get(LINE, ""))
    return {**fields, **(filling(line) if line else {})}


def said_of(fields: Mapping[str, str]) -> str:
    """Say what the line in the form filled; nothing where there is none, or the fields hold something else by now."""
    if not fields.get(LINE, "").strip():
        return ""
    line = read_line(fields[LINE])
    if line is None:
        return screen().gettext(NO_PRESCRIPTION)
    holds = all(fields.get(name, "") == text for name, text in filling(line).items())
    return " ".join(_sentences(line)) if holds else ""


def _sentences(line: WrittenLine) -> Iterator[str]:
    speak = screen().gettext
    places = [words for name, words in PLACES.items() if any(given.startswith(name) for given in line.fields)]
    yield speak(FILLED) % {"places": ", ".join(map(speak, places))}
    if line.unread:
        pieces = [f"“{piece}”" for piece in line.unread[:MOST_PIECES]]
        yield speak(UNREAD) % {"pieces": ", ".join([*pieces, "…"] if len(line.unread) > MOST_PIECES else pieces)}
    yield from (say(note, LINE_TEXTS, screen()) for note in line.notes)
    yield speak(REPLACED)
