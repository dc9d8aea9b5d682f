"""What is weighed of a lens in a life: the count of what harms it, by hand."""

import datetime as dt
from typing import Any

import pytest

from advisor.counsel.case import build_case
from advisor.counsel.laid_out import lay_out
from advisor.counsel.stock import builtin_range
from advisor.counsel.visit import check_visit
from advisor.counsel.weighed import care_burden, harms

RESIN, TOUGH, POLY, HOT = "hard-resin-150", "polyurethane-urea-153", "polycarbonate-159", "episulfide-174"
BACK_ONLY = {"back": "broadband"}


def burden(material: str, coating: Any, **life: str) -> float:
    content = {
        "prescription": {"right": {"sphere": -2.0}, "left": {"sphere": -2.0}},
        "options": [{"design": "single-vision", "material": material, "coating": coating}],
        "daily_life": life,
    }
    case = build_case(check_visit(content), builtin_range(), today=dt.date(2026, 12, 1))
    return care_burden(case, lay_out(case)[0])


@pytest.mark.parametrize(
    ("material", "coating", "life", "expected"),
    [
        (RESIN, "broadband", {}, 0.0),
        (RESIN, "broadband", {"heat_steam": "often"}, 1.0),
        (RESIN, "broadband", {"heat_steam": "sometimes"}, 0.5),
        (RESIN, "bare", {"heat_steam": "often", "sprays_solvents": "often", "water_salt_chlorine": "often"}, 0.0),
        # salt is rinsed off: half, and half of that on a top that repels water, which a single layer has not
        (RESIN, "magnesium-fluoride", {"water_salt_chlorine": "often"}, 0.5),
        (RESIN, "broadband", {"water_salt_chlorine": "often"}, 0.25),
        # a film on the back alone is out of the spray
        (RESIN, BACK_ONLY, {"water_salt_chlorine": "often"}, 0.125),
        (RESIN, BACK_ONLY, {"sprays_solvents": "often"}, 0.5),
        # solvents craze polycarbonate whatever is on it, and no other tough material
        (POLY, "hard-coat-only", {"sprays_solvents": "often"}, 1.0),
        (POLY, "broadband", {"sprays_solvents": "often"}, 2.0),
        (TOUGH, "broadband", {"sprays_solvents": "often"}, 1.0),
        (HOT, "broadband", {"heat_steam": "often"}, 2.0),
        (RESIN, "bare", {"dust": "often"}, 1.0),
        (RESIN, "broadband", {"dust": "often"}, 0.5),
        (RESIN, "magnesium-fluoride", {"bothered_smears": "often"}, 1.0),
        (RESIN, "broadband", {"bothered_smears": "often"}, 0.5),
    ],
)
def test_what_harms_a_lens_is_counted(material: str, coating: Any, life: dict[str, str], expected: float) -> None:
    assert burden(material, coating, **life) == pytest.approx(expected)


def test_only_what_was_answered_bears_on_care() -> None:
    content = {
        "prescription": {"right": {"sphere": -2.0}, "left": {"sphere": -2.0}},
        "daily_life": {"dust": "sometimes", "heat_steam": "never", "bothered_smears": "often"},
    }
    case = build_case(check_visit(content), builtin_range(), today=dt.date(2026, 12, 1))
    assert harms(case) == ("dust", "bothered_smears")
