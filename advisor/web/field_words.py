"""Where a field of the Counter's form stands, in words: for a list of faults that leads to it."""

from collections.abc import Mapping

from advisor.counsel.phrases import Translator, mark
from advisor.counsel.words import PLACES, QUESTIONS

# The parts of a dotted name, as a reader knows them; a number counts options, or prisms, from 1.
PARTS: Mapping[str, str] = {
    "wearer": mark("wearer"),
    "name": mark("name"),
    "birth_date": mark("birth date"),
    "birth_year": mark("birth year"),
    "eye_colour": mark("eye colour"),
    "language": mark("language"),
    "print": mark("print"),
    "prescription": mark("prescription"),
    "right": mark("right"),
    "left": mark("left"),
    "sphere": mark("sphere"),
    "cylinder": mark("cylinder"),
    "axis": mark("axis"),
    "add": mark("add"),
    "prism": mark("prism"),
    "amount": mark("amount"),
    "base": mark("base"),
    "balance": mark("balance"),
    "written": mark("written"),
    "vertex_mm": mark("vertex"),
    "for": mark("for"),
    "intermediate_add": mark("intermediate add"),
    "fitting": mark("fitting"),
    "pd_mm": mark("PD"),
    "near_pd_mm": mark("near PD"),
    "height_mm": mark("height"),
    "tilt_deg": mark("tilt"),
    "wrap_deg": mark("wrap"),
    "working_distance_cm": mark("working distance"),
    "frame": mark("frame"),
    "rim": mark("rim"),
    "price": mark("price"),
    "daily_life": mark("daily life"),
    "worn_now": mark("worn now"),
    "material": mark("material"),
    "coating": mark("coating"),
    "front": mark("front"),
    "back": mark("back"),
    "front_power_d": mark("front curve"),
    "centre_mm": mark("centre"),
    "design": mark("design"),
    "tint": mark("tint"),
    "tint_own": mark("tint given as a number"),
    "liked": mark("liked"),
    "disliked": mark("disliked"),
    "options": mark("option"),
    "date": mark("date"),
    "reference": mark("reference"),
    "note": mark("note"),
    "dispensed_by": mark("dispensed by"),
    "scenes": mark("scenes"),
    "baseline": mark("baseline"),
    "ordered": mark("to be ordered"),
    "option_count": mark("number of options"),
    "kept": mark("what this form has no field for"),
    "declined": mark("declined"),
    "declined_by": mark("turned down by"),
    **QUESTIONS,
}


def place_words(name: str, translator: Translator) -> str:
    """Write the place of a field for a reader: ``options.0.coating.front`` is "option 1, coating, front"."""
    if name in PLACES:
        return translator.gettext(PLACES[name])
    words: list[str] = []
    for part in name.split("."):
        if part.isdigit() and words:
            words[-1] += f" {int(part) + 1}"
        else:
            words.append(translator.gettext(PARTS.get(part, part)))
    return ", ".join(words)
