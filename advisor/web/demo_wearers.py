"""The invented wearers that come with the program, for trying out and for showing."""

from collections.abc import Mapping
from functools import cache

from advisor.counsel.phrases import Translator, mark
from advisor.counsel.visit import Visit, read_visit
from advisor.errors import TwolightError
from advisor.resources import resource_dir


class DemoMissing(TwolightError):
    """There is no demo wearer of this name."""

    text = mark("There is no such demo wearer.")


@cache
def _wearers() -> dict[str, Visit]:
    return {file.stem: read_visit(file) for file in sorted(resource_dir("demo_patients").glob("*.json"))}


# What each is here to show.
CASES: Mapping[str, str] = {
    "cataract-planned-older-driver": mark("cataract planned older driver"),
    "hairdresser-price-limit": mark("hairdresser price limit"),
    "high-minus-flat-form": mark("high minus flat form"),
    "high-plus-child": mark("high plus child"),
    "office-window-behind": mark("office window behind"),
    "one-good-eye-drilled": mark("one good eye drilled"),
    "presbyope-previous-pair": mark("presbyope previous pair"),
    "prescribed-prism": mark("prescribed prism"),
    "strong-cylinder": mark("strong cylinder"),
    "tinted-pair": mark("tinted pair"),
    "very-unequal-eyes": mark("very unequal eyes"),
    "weak-minus-night-driver": mark("weak minus night driver"),
}


def names(translator: Translator) -> dict[str, str]:
    """Return what each demo wearer is called, and what each is here to show, by key."""
    return {key: f"{_name(visit)}: {translator.gettext(CASES[key])}" for key, visit in _wearers().items()}


def _name(visit: Visit) -> str:
    return (visit.wearer and visit.wearer.name) or "–"


def wearer(key: str) -> Visit:
    """Return the visit of a demo wearer, or raise DemoMissing."""
    if key not in _wearers():
        raise DemoMissing
    return _wearers()[key]
