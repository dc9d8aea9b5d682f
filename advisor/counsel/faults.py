"""What is wrong with a file or a form: which file, which field, and one sentence that says what to do."""

import difflib
from collections.abc import Collection, Iterable, Mapping, Sequence
from dataclasses import dataclass
from typing import get_args

from pydantic import BaseModel, ValidationError

from advisor.counsel.phrases import Figure, Phrase, Translator, mark, short_number
from advisor.errors import TwolightError

MOST_LINES = 5
DETAIL = "detail"
TAG = "as:"  # alternatives of a field carry tags that begin so; a reader never sees them

SENTENCES: dict[str, str] = {
    "missing-file": mark("there is no such file."),
    "unreadable": mark("the file cannot be read; check that it is a file and that you may open it."),
    "too-large": mark("the file is larger than %(limit_mb)s MB; this is not a file of ours."),
    "not-utf8": mark("the file is not UTF-8 text; save it as UTF-8."),
    "not-json": mark("this is not JSON: line %(line)s, column %(column)s."),
    "not-toml": mark("this is not TOML: line %(line)s, column %(column)s."),
    "not-toml-at-all": mark("this is not TOML."),
    "too-deep": mark("the brackets are nested too deeply."),
    "not-finite": mark("write a finite number; NaN and Infinity are refused."),
    "repeated-name": mark("the name “%(name)s” stands twice; keep one."),
    "not-an-object": mark("put named fields between braces here."),
    "not-a-list": mark("put a list between square brackets here."),
    "missing": mark("this is missing; give a value."),
    "unknown-name": mark("this name is not known here; the names are: %(names)s."),
    "unknown-name-near": mark("this name is not known here; did you mean “%(nearest)s”?"),
    "unknown-key": mark("“%(key)s” is not in the range."),
    "unknown-key-near": mark("“%(key)s” is not in the range; did you mean “%(nearest)s”?"),
    "unknown-film": mark("“%(key)s” is no film we know; did you mean “%(nearest)s”?"),
    "unknown-line": mark("“%(key)s” is no line of the wearer's sheet."),
    "unknown-line-near": mark("“%(key)s” is no line of the wearer's sheet; did you mean “%(nearest)s”?"),
    "line-stays": mark("“%(key)s” keeps the wearer safe or says what stays; cautions cannot be switched off."),
    "repeated-key": mark("the key “%(key)s” stands twice in this section; give each its own."),
    "not-a-number": mark("write a number here."),
    "number-as-text": mark("write the number without quotation marks."),
    "not-whole": mark("write a whole number here."),
    "not-text": mark("write text between quotation marks here."),
    "not-a-key": mark("a key is made of letters, digits, dots and hyphens, and begins with a letter or digit."),
    "not-a-date": mark("write a real date as year-month-day, such as 2026-12-01."),
    "not-true-or-false": mark("write true or false here."),
    "not-one-of": mark("use one of: %(expected)s."),
    "at-least": mark("give %(limit)s or more."),
    "at-most": mark("give %(limit)s or less."),
    "above": mark("give more than %(limit)s."),
    "below": mark("give less than %(limit)s."),
    "too-short": mark("give at least %(limit)s."),
    "too-long": mark("give at most %(limit)s."),
    "too-many-letters": mark("this is too long; write at most %(limit)s letters."),
    "cylinder-without-axis": mark("a cylinder of %(cylinder)s needs an axis from 1 to 180."),
    "power-beyond": mark("sphere and cylinder together make %(power)s; powers beyond 30 are refused."),
    "birth-year-differs": mark("the birth date says %(year)s; correct one of the two."),
    "born-after-visit": mark("this lies after the visit of %(date)s."),
    "longest-diameter": mark("the longest diameter must lie between %(least)s and %(most)s mm for this box."),
    "outline-order": mark("the points must go once round the box centre, in order."),
    "outline-side": mark("give the outline of the right or the left side."),
    "key-or-object": mark("give a key of the range, or an object with its fields."),
    "number-key-or-object": mark("give a key of the range, a number, or an object with its fields."),
    "number-or-pair": mark("give one number, or one for each."),
    "one-index": mark("give exactly one of n_d and n_e."),
    "one-description": mark("give exactly one of layers, declared and spectrum."),
    "bare-has-film": mark("the coating “bare” has no layers and no hard coat; give this one another key."),
    "range-order": mark("put the lower number first."),
    "small-source-needs": mark("a small source needs intensity_cd, distance_m and size_deg."),
    "extended-source-needs": mark("an extended source needs luminance_cd_m2 and size_deg."),
    "lamps-need-spacing": mark("more than one lamp needs spacing_m."),
    "film-or-index": mark("give a film name or a constant index."),
    "spectrum-place": mark("name a file that lies beside this one, without a folder."),
    "spectrum-rows": mark("row %(row)s of the spectrum file is not a wavelength and a fraction."),
    "spectrum-refused": mark("the spectrum is refused: %(detail)s"),
    "not-brought": mark("this is neither a FHIR prescription, nor a visit file of ours, nor a frame record."),
    "not-a-prescription": mark("a FHIR VisionPrescription, or a Bundle that holds one, is needed here."),
    "withdrawn": mark("this prescription is marked “%(status)s”; it is not to be used. Ask the prescriber."),
    "contact-lenses": mark("this is for contact lenses; glasses need a prescription of their own."),
    "eye-twice": mark("there are two lenses for this eye; it cannot be told which one is meant."),
    "right-eye-missing": mark("there is no lens for the right eye; fill in the form by hand."),
    "left-eye-missing": mark("there is no lens for the left eye; fill in the form by hand."),
    "not-a-frame-record": mark("this is no frame record: neither sizes nor a trace stand in it."),
    "trace-head": mark("a trace begins with format, count of points, E or U, R or L, and kind, parted by semicolons."),
    "trace-format": mark("the trace is in format %(format)s; only format 1, radii as text, can be read."),
    "trace-twice": mark("there are two traces for this side; bring in one job at a time."),
    "trace-count": mark("%(points)s values are announced and %(count)s stand here; the trace is broken."),
    "trace-radius": mark("a radius of %(radius_mm)s mm is no spectacle rim; radii of 5 to 50 mm can be read."),
    "trace-angles": mark("the angles must rise from point to point, once round."),
    "trace-jump": mark("the rim jumps at point %(point)s; trace the frame again."),
    "trace-box": mark("the record says %(given_mm)s mm and the trace has %(traced_mm)s mm; trace the frame again."),
    "value-twice": mark("this stands twice with unlike values; bring in one job at a time."),
    "not-understood": mark("this value is not understood."),
}
MORE = mark("and %(count)s more")

_OURS = {  # pydantic's error type -> our code and the figure that carries its limit
    "missing": ("missing", ""), "model_type": ("not-an-object", ""), "dict_type": ("not-an-object", ""),
    "model_attributes_type": ("not-an-object", ""), "list_type": ("not-a-list", ""), "tuple_type": ("not-a-list", ""),
    "float_type": ("not-a-number", ""), "float_parsing": ("not-a-number", ""), "int_type": ("not-a-number", ""),
    "int_parsing": ("not-a-number", ""), "int_from_float": ("not-whole", ""), "finite_number": ("not-finite", ""),
    "string_type": ("not-text", ""), "string_unicode": ("not-text", ""), "string_pattern_mismatch": ("not-a-key", ""),
    "bool_type": ("not-true-or-false", ""), "bool_parsing": ("not-true-or-false", ""),
    "date_type": ("not-a-date", ""), "literal_error": ("not-one-of", "expected"),
    "greater_than_equal": ("at-least", "ge"), "less_than_equal": ("at-most", "le"),
    "greater_than": ("above", "gt"), "less_than": ("below", "lt"),
    "too_short": ("too-short", "min_length"), "too_long": ("too-long", "max_length"),
    "string_too_short": ("too-short", "min_length"), "string_too_long": ("too-many-letters", "max_length"),
}  # fmt: skip


def _show(value: Figure, translator: Translator | None = None) -> str:
    """Write one figure of a sentence: short numbers, and text on one line whatever it holds."""
    if isinstance(value, float):
        return f"{value:g}" if translator is None else short_number(value, translator)
    text = "".join(c if c.isprintable() else "\N{REPLACEMENT CHARACTER}" for c in str(value))
    return text if len(text) <= 200 else text[:199] + "…"


@dataclass(frozen=True)
class Fault:
    """One thing to mend: where it stands and, as a code of ``SENTENCES`` with figures, what to do."""

    file: str
    field: str
    phrase: Phrase

    def line(self, translator: Translator | None = None) -> str:
        """Write ``FILE: field: sentence``, in English without a translator; parts that do not apply are left out."""
        translate = str if translator is None else translator.gettext
        figures = {name: _show(value, translator) for name, value in self.phrase.figures.items()}
        if DETAIL in figures:  # a sentence of its own, with places for the other figures
            figures[DETAIL] = translate(str(self.phrase.figures[DETAIL])) % figures
        sentence = translate(SENTENCES[self.phrase.code]) % figures
        return ": ".join([_show(part) for part in (self.file, self.field) if part] + [sentence])


class Faults(TwolightError):
    """A file or form that cannot be used, with everything that was found wrong with it."""

    def __init__(self, faults: Iterable[Fault]) -> None:
        self.faults = tuple(faults)
        super().__init__("\n".join(self.lines()))

    def lines(self, translator: Translator | None = None) -> list[str]:
        """Write one line for each fault, five at most, then how many more there are."""
        lines = [fault.line(translator) for fault in self.faults[:MOST_LINES]]
        more = len(self.faults) - len(lines)
        told = MORE if translator is None else translator.gettext(MORE)
        return [*lines, told % {"count": more}] if more else lines


def fault(code: str, *, file: str = "", field: str = "", figures: Mapping[str, Figure] | None = None) -> Fault:
    """Make one fault."""
    return Fault(file, field, Phrase(code, figures or {}))


def nearest_name(name: str, *, names: Collection[str]) -> str | None:
    """Return the name that a mistyped one most resembles, or None where none comes near."""
    lowered = {known.lower(): known for known in names}
    close = difflib.get_close_matches(name.lower()[:100], lowered, n=1, cutoff=0.5)
    return lowered[close[0]] if close else None


def unknown_key(key: str, *, keys: Collection[str], file: str = "", field: str = "") -> Fault:
    """Make the fault for a key that the range does not hold."""
    nearest = nearest_name(key, names=keys)
    code = "unknown-key-near" if nearest else "unknown-key"
    return fault(code, file=file, field=field, figures={"key": key, "nearest": nearest})


def field_path(place: Sequence[str | int]) -> str:
    """Write where a value stands, as in ``options[1].coating.front``."""
    parts = (f"[{p}]" if isinstance(p, int) else f".{p}" for p in place if not str(p).startswith(TAG))
    return "".join(parts).removeprefix(".")


def _models_in(annotation: object) -> set[type[BaseModel]]:
    """Collect the models that an annotation can hold, through options, lists and alternatives."""
    if isinstance(annotation, type) and issubclass(annotation, BaseModel):
        return {annotation}
    return {model for part in get_args(annotation) for model in _models_in(part)}


def _names_at(model: type[BaseModel], place: Sequence[str | int]) -> list[str]:
    """List the names known at a place in a file."""
    models = {model}
    for part in place:
        if isinstance(part, int) or part.startswith(TAG):
            continue
        annotations = [
            info.annotation for m in models for name, info in m.model_fields.items() if part in (name, info.alias)
        ]
        models = {found for annotation in annotations for found in _models_in(annotation)}
    return sorted({info.alias or name for m in models for name, info in m.model_fields.items()})


def faults_from(error: ValidationError, *, model: type[BaseModel], file: str = "") -> list[Fault]:
    """Turn everything pydantic found into faults with our own sentences."""
    faults = []
    for found in error.errors(include_url=False, include_input=False):
        place, kind, context = found["loc"], found["type"], found.get("ctx", {})
        if kind == "extra_forbidden":
            names = _names_at(model, place[:-1])
            near = nearest_name(str(place[-1]), names=names)
            code = "unknown-name-near" if near else "unknown-name"
            figures: dict[str, Figure] = {"nearest": near, "names": ", ".join(names)}
        elif kind in SENTENCES:
            code, figures = kind, context
        else:
            code, limit = _OURS.get(kind, ("not-understood", ""))
            value = context.get(limit)
            if limit == "expected":  # a list in English words
                value = str(value).replace(" or ", ", ")
            figures = {"expected" if limit == "expected" else "limit": value} if limit else {}
        faults.append(fault(code, file=file, field=field_path(place), figures=figures))
    return faults
