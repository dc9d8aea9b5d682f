"""The invented wearers that come with the program, for trying out and for showing."""

from functools import cache

from advisor.counsel.visit import Visit, read_visit
from advisor.errors import TwolightError
from advisor.resources import resource_dir


class DemoMissing(TwolightError):
    """There is no demo wearer of this name."""


@cache
def _wearers() -> dict[str, Visit]:
    return {file.stem: read_visit(file) for file in sorted(resource_dir("demo_patients").glob("*.json"))}


def names() -> dict[str, str]:
    """Return what each demo wearer is called, by key."""
    return {key: f"{_name(visit)}: {key.replace('-', ' ')}" for key, visit in _wearers().items()}


def _name(visit: Visit) -> str:
    return (visit.wearer and visit.wearer.name) or "–"


def wearer(key: str) -> Visit:
    """Return the visit of a demo wearer, or raise DemoMissing."""
    if key not in _wearers():
        raise DemoMissing("There is no such demo wearer.")
    return _wearers()[key]
