"""The Counter's fields that hold one number: how each is read as typed, how it steps, and how its reading is told."""

from collections.abc import Iterator, Mapping
from dataclasses import dataclass

from jinja2 import Environment

from advisor.counsel.phrases import mark
from advisor.counsel.written_power import POWERS, Kind, Reading, read_written
from advisor.web.labels import PLACEHOLDERS
from advisor.web.screen import screen

READ_AS = mark("read as %(value)s")
NO_CYLINDER = mark("read as no cylinder")
ROOTS = frozenset({"prescription", "worn_now", "fitting", "frame", "options"})  # the parts of the form that step


@dataclass(frozen=True)
class Step:
    """How a number steps: by an arrow key, by a page key, and with how many decimals it is always written."""

    arrow: float
    page: float
    decimals: int


STEPS: Mapping[Kind, Step] = {
    **dict.fromkeys(("sphere", "cylinder", "add", "prism", "curve"), Step(0.25, 1.0, 2)),
    "axis": Step(1, 10, 0),
    "length": Step(0.5, 5, 0),
    "angle": Step(1, 5, 0),
}


@dataclass(frozen=True)
class NumberField:
    """What a field holds, and the least and the most that a visit allows there (``tests`` hold them to its model)."""

    kind: Kind
    least: float
    most: float


FIELDS: Mapping[str, NumberField] = {
    "sphere": NumberField("sphere", -30, 30),
    "cylinder": NumberField("cylinder", -30, 30),
    "axis": NumberField("axis", 1, 180),
    "add": NumberField("add", 0, 30),
    "intermediate_add": NumberField("add", 0, 30),
    "amount": NumberField("prism", 0, 30),
    "vertex_mm": NumberField("length", 0, 30),
    "pd_mm": NumberField("length", 10, 60),
    "near_pd_mm": NumberField("length", 10, 60),
    "height_mm": NumberField("length", -20, 80),
    "tilt_deg": NumberField("angle", -20, 40),
    "wrap_deg": NumberField("angle", -10, 40),
    "a_mm": NumberField("length", 15, 90),
    "b_mm": NumberField("length", 10, 90),
    "dbl_mm": NumberField("length", 0, 50),
    "ed_mm": NumberField("length", 15, 130),
    "front_power_d": NumberField("curve", -25, 35),
    "centre_mm": NumberField("length", 0.1, 40),
}


def number_field(name: str) -> NumberField | None:
    """Return what a field of this name holds, or None where it does not hold one number."""
    parts = [part for part in name.split(".") if part not in ("right", "left")]
    return FIELDS.get(parts[-1]) if parts else None


def read_field(name: str, text: str) -> Reading | None:
    """Read what is typed in a field, or return None where it holds no number or nothing that can be read."""
    field = number_field(name)
    return None if field is None else read_written(text, kind=field.kind)


def number_of(name: str, text: str) -> str:
    """Return a field's text for the visit's own model: a reading that is not literal is written out in full."""
    reading = read_field(name, text)
    if reading is None or reading.is_literal:
        return text
    return "" if reading.value is None else repr(reading.value)


def read_as(name: str, text: str) -> str:
    """Return the words that say how a field was read, or an empty text where it was read as it stands."""
    field, reading = number_field(name), read_field(name, text)
    if field is None or reading is None or reading.is_literal:
        return ""
    if reading.value is None:
        return screen().gettext(NO_CYLINDER)
    return screen().gettext(READ_AS) % {"value": _shown(reading.value, field.kind)}


def _shown(value: float, kind: Kind) -> str:
    """Write a value with the decimals of its kind, or with more where it has more."""
    own = len(f"{value:.4f}".rstrip("0").partition(".")[2])
    return screen().number(value, digits=max(STEPS[kind].decimals, own), signed=kind in POWERS)


def read_fields(fields: Mapping[str, str]) -> Iterator[tuple[str, str]]:
    """Yield each field that was not read as it stands, with the words that say how."""
    for name, text in fields.items():
        if words := read_as(name, text):
            yield name, words


def stepping(name: str, text: str) -> dict[str, str]:
    """Return the attributes by which a field of the Counter steps and tells its value; empty for any other field."""
    field = number_field(name)
    if field is None or name.partition(".")[0] not in ROOTS:
        return {}
    step, start = STEPS[field.kind], "180" if field.kind == "axis" else PLACEHOLDERS.get(name, "0")
    return {
        "role": "spinbutton",
        "aria-valuemin": f"{field.least:g}",
        "aria-valuemax": f"{field.most:g}",
        "data-kind": field.kind,
        "data-step": f"{step.arrow:g}",
        "data-page": f"{step.page:g}",
        "data-decimals": str(step.decimals),
        "data-start": start,
        **_told(field, text),
    }


def _told(field: NumberField, text: str) -> dict[str, str]:
    """Return the value as it is told to a reader of the screen; what cannot be read is told as it stands."""
    reading = read_written(text, kind=field.kind)
    if reading is None or reading.value is None:
        return {"aria-valuetext": text} if text.strip() else {}
    return {"aria-valuenow": f"{reading.value:.10g}", "aria-valuetext": _shown(reading.value, field.kind)}


def install(environment: Environment) -> None:
    """Let the templates ask how a field steps and how it was read."""
    environment.globals.update(stepping=stepping, read_as=read_as, read_fields=read_fields)
