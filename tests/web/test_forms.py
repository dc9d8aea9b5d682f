"""The form and the visit file are each turned into the other without loss."""

import json
import math
from pathlib import Path
from typing import Any

import pytest
from werkzeug.datastructures import MultiDict

from advisor.counsel.faults import Faults
from advisor.counsel.visit import Visit, check_visit, read_visit, visit_to_json
from advisor.resources import resource_dir
from advisor.web import filled_form, form_fields, forms

DEMOS = sorted(resource_dir("demo_patients").glob("*.json"))


def content(visit: Visit) -> dict[str, Any]:
    """A visit as its file says it, with what the file may write in two ways written in one."""
    found: dict[str, Any] = json.loads(visit_to_json(visit))
    for option in found.get("options", []):
        for name in ("front_power_d", "centre_mm"):
            eyes = option.get(name)
            if isinstance(eyes, dict) and eyes.get("right") == eyes.get("left"):
                option[name] = eyes["right"]
    worn = found.get("worn_now", {})
    for name in ("liked", "disliked"):
        if worn.get(name) == "":
            del worn[name]
    return found


@pytest.mark.parametrize("file", DEMOS, ids=lambda file: file.stem)
def test_a_visit_comes_back_from_its_form(file: Path) -> None:
    visit = read_visit(file)
    assert content(forms.visit_from_fields(filled_form.visit_to_fields(visit))) == content(visit)


def everything() -> dict[str, Any]:
    """What the file can say and a plain form has no field for."""
    ring = [[25.0 * x, 15.0 * y] for x, y in _circle(40)]
    return {
        "prescription": {
            "right": {"sphere": -4.125, "cylinder": -1, "axis": 175, "prism": [{"amount": 1, "base": "in"}] * 3},
            "left": {"sphere": 0},
        },
        "frame": {"outline": {"right": ring}},
        "declined": [{"key": "tough-material", "by": "wearer"}],
        "worn_now": {"coating": {"front": "bare", "back": "broadband"}, "fitting": {"vertex_mm": 12}},
        "options": [
            {
                "material": {"n_d": 1.6, "abbe": 40, "density_g_cm3": 1.3, "label": "own"},
                "coating": {"front": "bare", "back": {"layers": [["SiO2", 90.7]]}},
                "tint": 0.85,
                "front_power_d": {"right": 2.0, "left": 2.25},
                "centre_mm": 1.5,
            },
            {"tint": {"luminous_transmittance": 0.4}},
            *[{"material": "hard-resin-150"}] * 4,
        ],
    }


def _circle(points: int) -> list[tuple[float, float]]:
    return [(math.cos(2 * math.pi * k / points), math.sin(2 * math.pi * k / points)) for k in range(points)]


def test_what_the_form_has_no_field_for_travels_along() -> None:
    visit = check_visit(everything())
    back = content(forms.visit_from_fields(filled_form.visit_to_fields(visit)))
    wanted = content(visit)
    # Three prisms of 1 base in are one of 3: prisms along one direction add up.
    wanted["prescription"]["right"]["prism"] = [{"amount": 3.0, "base": "in"}]
    assert back == wanted


def test_numbers_are_shown_so_that_they_read_back_the_same() -> None:
    fields = filled_form.visit_to_fields(check_visit(everything()))
    assert fields["prescription.right.sphere"] == "-4.125"
    assert fields["prescription.right.cylinder"] == "-1.00"
    assert fields["prescription.right.axis"] == "175"


def test_a_form_takes_commas_the_minus_sign_and_spaces() -> None:
    fields = {"prescription.right.sphere": " − 4,25 ", "prescription.left.sphere": "+0.5", "option_count": "1"}
    visit = forms.visit_from_fields(fields)
    assert (visit.prescription.right.sphere, visit.prescription.left.sphere) == (-4.25, 0.5)


@pytest.mark.parametrize(
    ("path", "field"),
    [
        ("prescription.right.axis", "prescription.right.axis"),
        ("options[0].coating.front", "options.0.coating.front"),
        ("options[0].coating", "options.0.coating.front"),
        ("options[0].material.abbe", "options.0.material"),
        ("options[0].tint", "options.0.tint"),
        ("prescription.left.prism[1].amount", "prescription.left.prism.1.amount"),
        ("prescription.left", "prescription.left.sphere"),
        ("fitting.working_distance_cm[0]", "fitting.working_distance_cm"),
        ("options[7].material", ""),
        ("", ""),
    ],
)
def test_a_fault_finds_its_field(path: str, field: str) -> None:
    assert form_fields.field_of(path, form_fields.names_of({"option_count": "2"})) == field


def test_every_fault_of_a_form_is_told_at_once() -> None:
    fields = {
        "prescription.right.sphere": "minus four",
        "prescription.left.sphere": "-2",
        "prescription.left.cylinder": "-1",
        "frame.a_mm": "5",
        "option_count": "1",
    }
    with pytest.raises(Faults) as caught:
        forms.visit_from_fields(fields)
    found = form_fields.by_field(caught.value.faults, form_fields.names_of(fields))
    assert set(found) == {"prescription.right.sphere", "prescription.left.axis", "frame.a_mm"}


def test_names_that_the_form_does_not_have_are_left_out() -> None:
    typed = [("wearer.name", "Ada"), ("wearer.shoe", "39"), ("option_count", "9999"), ("scenes", "a"), ("scenes", "b")]
    sent = MultiDict(typed)
    fields = form_fields.fields_from_form(sent)
    assert fields["wearer.name"] == "Ada"
    assert fields["scenes"] == "a b"
    assert "wearer.shoe" not in fields
    assert fields["option_count"] == "1"
