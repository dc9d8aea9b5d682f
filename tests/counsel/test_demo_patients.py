from collections.abc import Callable
from functools import cache
from pathlib import Path

import pytest

from advisor.counsel.prescription import spherical_equivalent_d
from advisor.counsel.stock import builtin_range
from advisor.counsel.visit import DailyLife, Visit, parse_visit, read_visit, visit_to_json
from advisor.counsel.visit_checks import prescription_warnings, visit_faults
from advisor.resources import resource_dir

FILES = sorted(resource_dir("demo_patients").glob("*.json"))


@cache
def visits() -> tuple[Visit, ...]:
    return tuple(read_visit(path) for path in FILES)


def powers(visit: Visit) -> tuple[float, float]:
    return (
        spherical_equivalent_d(visit.prescription.right.power),
        spherical_equivalent_d(visit.prescription.left.power),
    )


def daily(visit: Visit) -> DailyLife:
    return visit.daily_life or DailyLife()


def is_child(visit: Visit) -> bool:
    age = visit.youngest_age(today=visit.date) if visit.date else None
    return daily(visit).child == "yes" and age is not None and age < 16


def age(visit: Visit) -> int:
    assert visit.date is not None
    years = visit.age(today=visit.date)
    assert years is not None
    return years


def front_powers(visit: Visit) -> list[object]:
    return [option.front_power_d for option in visit.options or ()]


def has_strong_cylinder(visit: Visit) -> bool:
    return min(abs(eye.cylinder or 0) for eye in (visit.prescription.right, visit.prescription.left)) >= 3


COVERED: dict[str, Callable[[Visit], bool]] = {
    "weak minus, drives at night": lambda v: daily(v).night_driving == "often" and all(-1.5 < p < 0 for p in powers(v)),
    "high minus in a flat form": lambda v: max(powers(v)) < -6 and None not in front_powers(v),
    "high plus child": lambda v: min(powers(v)) > 4 and is_child(v),
    "strong cylinder": has_strong_cylinder,
    "prism": lambda v: bool(v.prescription.right.prism),
    "one good eye, drilled rim": lambda v: (
        daily(v).one_good_eye == "yes" and v.frame is not None and v.frame.rim == "drilled"
    ),
    "tinted pair": lambda v: bool(v.options) and all(option.tint is not None for option in v.options or ()),
    "presbyope with a previous pair": lambda v: (
        bool(v.prescription.right.add) and v.worn_now is not None and v.worn_now.prescription is not None
    ),
    "very unequal eyes": lambda v: abs(powers(v)[0] - powers(v)[1]) >= 3,
    "sprays at work and a price limit": lambda v: (
        daily(v).sprays_solvents == "often" and daily(v).price_limit is not None
    ),
    "window behind the desk": lambda v: daily(v).lights_behind == "often" and "window-behind-desk" in (v.scenes or ()),
    "operation planned, still drives": lambda v: (
        daily(v).cataract_planned == "yes" and daily(v).driving == "often" and age(v) >= 65
    ),
}


def test_there_are_at_least_ten_wearers() -> None:
    assert len(FILES) >= 10


@pytest.mark.parametrize("path", FILES, ids=lambda path: path.stem)
def test_a_demo_patient_reads_without_fault_or_warning(path: Path) -> None:
    visit = read_visit(path)
    assert visit_faults(visit, stock=builtin_range()) == []
    assert prescription_warnings(visit) == []
    assert parse_visit(visit_to_json(visit)) == visit


@pytest.mark.parametrize("path", FILES, ids=lambda path: path.stem)
def test_a_demo_patient_is_a_whole_visit(path: Path) -> None:
    visit = read_visit(path)
    assert None not in (visit.date, visit.reference, visit.wearer, visit.fitting, visit.frame, visit.daily_life)
    assert visit.wearer is not None
    assert visit.wearer.name
    assert 2 <= len(visit.options or ()) <= 4


def test_no_two_wearers_share_a_name_or_a_reference() -> None:
    assert len({v.reference for v in visits()}) == len({v.wearer and v.wearer.name for v in visits()}) == len(FILES)


@pytest.mark.parametrize("kind", COVERED)
def test_every_kind_of_wearer_is_there(kind: str) -> None:
    assert [v.reference for v in visits() if COVERED[kind](v)], kind
