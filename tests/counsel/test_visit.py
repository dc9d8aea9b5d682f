import datetime as dt
import json
import math
from pathlib import Path
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from advisor.counsel.choices import Faces, for_eye
from advisor.counsel.faults import Faults
from advisor.counsel.stock import builtin_range
from advisor.counsel.stock_items import Coating, Material
from advisor.counsel.visit import Visit, check_visit, parse_visit, read_visit, visit_to_json
from advisor.counsel.visit_checks import WARNING_TEXTS, prescription_warnings, visit_faults

FULL = """
{"format": "twolight-visit-1", "date": "2026-12-01", "reference": "A-117", "note": "...",
 "wearer": {"name": "...", "birth_year": 1979, "birth_date": null, "eye_colour": "brown", "language": "en",
   "print": "standard"},
 "prescription": {"written": "2026-11-20", "vertex_mm": 12.0, "for": "all", "intermediate_add": null,
   "right": {"sphere": -4.25, "cylinder": -1.0, "axis": 175, "add": 1.5, "prism": [{"amount": 1.0, "base": "in"}],
     "balance": false},
   "left":  {"sphere": -3.75}},
 "fitting": {"right": {"pd_mm": 31.5, "near_pd_mm": null, "height_mm": 20.0},
   "left": {"pd_mm": 31.0, "height_mm": 20.0}, "vertex_mm": null, "tilt_deg": 8, "wrap_deg": 5,
   "working_distance_cm": [60]},
 "frame": {"a_mm": 52, "b_mm": 38, "dbl_mm": 18, "ed_mm": 55, "rim": "full", "price": null, "outline": null},
 "daily_life": {"night_driving": "often", "screen_work": "often"},
 "worn_now": {"material": "hard-resin-150", "coating": "bare", "prescription": null, "fitting": null,
   "front_power_d": null, "liked": "", "disliked": ""},
 "options": [{"design": "single-vision", "material": "thiourethane-160", "coating": "broadband"},
   {"material": "episulfide-174", "coating": {"front": "bare", "back": "broadband"}, "tint": 0.85,
    "front_power_d": {"right": 2.0, "left": 2.25}, "centre_mm": 1.5}],
 "baseline": 0, "ordered": null, "declined": [{"key": "tough-material", "by": "wearer"}],
 "scenes": ["oncoming-headlamps-dark-road", "window-behind-desk"]}
"""


def minimal(**eye: object) -> dict[str, Any]:
    return {"prescription": {"right": {"sphere": -1.0, **eye}, "left": {"sphere": -1.0}}}


def lines(data: object, **options: Any) -> list[str]:
    with pytest.raises(Faults) as error:
        check_visit(data, **options)  # type: ignore[arg-type]  # bad input is the point
    return error.value.lines()


def test_the_documented_example_reads_and_keeps_every_figure() -> None:
    visit = parse_visit(FULL)
    assert visit.prescription.right.power.axis_deg == 175
    assert visit.prescription.right.prism_vector.inward_prism_d == 1.0
    assert visit.prescription.for_ == "all"
    assert visit.options is not None
    assert visit.options[1].coating == Faces(front="bare", back="broadband")
    assert visit.options[1].tint == 0.85
    assert [for_eye(visit.options[1].front_power_d, eye=eye) for eye in ("right", "left")] == [2.0, 2.25]
    assert for_eye(visit.options[1].centre_mm, eye="left") == 1.5
    assert visit_faults(visit, stock=builtin_range()) == []


def test_two_spheres_are_enough_and_nothing_else_is_filled_in() -> None:
    visit = check_visit(minimal())
    assert visit.model_fields_set == {"prescription"}
    empty = ("date", "wearer", "fitting", "frame", "daily_life", "options", "scenes")
    assert [getattr(visit, name) for name in empty] == [None] * 7
    assert visit.prescription.right.cylinder is None


@pytest.mark.parametrize("text", [FULL, json.dumps(minimal())])
def test_a_written_visit_reads_back_equal(text: str) -> None:
    visit = parse_visit(text)
    assert parse_visit(visit_to_json(visit)) == visit
    assert json.loads(visit_to_json(visit))["format"] == "twolight-visit-1"


def test_a_question_left_out_was_not_asked() -> None:
    daily = parse_visit(FULL).daily_life
    assert daily is not None
    assert daily.driving is None
    assert "driving" in daily.not_asked()
    assert "night_driving" not in daily.not_asked()
    assert lines({**minimal(), "daily_life": {"child": "often"}}) == ["daily_life.child: use one of: 'yes', 'no'."]


def test_a_missing_sphere_is_named() -> None:
    assert lines({"prescription": {"right": {"sphere": 1}}}) == ["prescription.left: this is missing; give a value."]


@pytest.mark.parametrize(
    ("eye", "line"),
    [
        ({"sphare": 1}, "prescription.right.sphare: this name is not known here; did you mean “sphere”?"),
        ({"cylinder": -1.5}, "prescription.right.axis: a cylinder of -1.5 needs an axis from 1 to 180."),
        ({"cylinder": -1.5, "axis": 181}, "prescription.right.axis: give 180 or less."),
        ({"cylinder": -1.5, "axis": -1}, "prescription.right.axis: give 0 or more."),
        ({"sphere": 30.25}, "prescription.right.sphere: give 30 or less."),
        ({"sphere": -30.25}, "prescription.right.sphere: give -30 or more."),
        ({"sphere": "-4.25"}, "prescription.right.sphere: write the number without quotation marks."),
        ({"sphere": True}, "prescription.right.sphere: write a number here."),
        ({"sphere": [1]}, "prescription.right.sphere: write a number here."),
        ({"sphere": None}, "prescription.right.sphere: write a number here."),
        ({"sphere": math.nan}, "prescription.right.sphere: write a finite number; NaN and Infinity are refused."),
        ({"sphere": 10**400}, "prescription.right.sphere: write a number here."),
        ({"balance": "yes"}, "prescription.right.balance: write true or false here."),
        ({"prism": {"amount": 1}}, "prescription.right.prism: put a list between square brackets here."),
        ({"prism": [{"amount": 1, "base": "inn"}]}, "prescription.right.prism[0].base: use one of: 'in', 'out', 'up'"),
    ],
)
def test_a_bad_figure_of_an_eye_is_refused_in_our_words(eye: dict[str, object], line: str) -> None:
    (found,) = lines(minimal(**eye))
    assert found.startswith(line)


def test_sphere_and_cylinder_together_stay_within_thirty() -> None:
    (found,) = lines(minimal(sphere=-28, cylinder=-4, axis=90))
    assert found == "prescription.right.cylinder: sphere and cylinder together make -32; powers beyond 30 are refused."


def test_an_axis_of_zero_reads_as_180_and_no_cylinder_needs_no_axis() -> None:
    assert check_visit(minimal(cylinder=-1, axis=0)).prescription.right.axis == 180
    assert check_visit(minimal(cylinder=0)).prescription.right.axis is None


@pytest.mark.parametrize(
    ("part", "line"),
    [
        ({"format": "twolight-visit-2"}, "format: use one of: 'twolight-visit-1'."),
        ({"date": "2026-02-30"}, "date: write a real date as year-month-day, such as 2026-12-01."),
        ({"date": 20261201}, "date: write a real date as year-month-day, such as 2026-12-01."),
        ({"wearer": []}, "wearer: put named fields between braces here."),
        ({"wearer": {"birth_year": 1979.5}}, "wearer.birth_year: write a whole number here."),
        ({"wearer": {"birth_date": "1980-01-02", "birth_year": 1979}}, "wearer.birth_year: the birth date says 1980;"),
        ({"date": "2026-12-01", "wearer": {"birth_year": 2027}}, "wearer: this lies after the visit of 2026-12-01."),
        ({"frame": {"a_mm": 50, "b_mm": 40, "ed_mm": 45}}, "frame.ed_mm: the longest diameter must lie between 50 and"),
        ({"frame": {"outline": {}}}, "frame.outline: give the outline of the right or the left side."),
        ({"frame": {"outline": {"right": [[1, 2]] * 9}}}, "frame.outline.right: give at least 36."),
        ({"options": [{"coating": {"frnt": "bare"}}]}, "options[0].coating.frnt: this name is not known here; did you"),
        ({"options": [{"coating": 5}]}, "options[0].coating: give a key of the range, or an object with its fields."),
        ({"options": [{"tint": 85}]}, "options[0].tint: give 1 or less."),
        ({"options": [{"tint": "0.85"}]}, "options[0].tint: write the number without quotation marks."),
        (
            {"options": [{"material": {"n_d": 1.6, "n_e": 1.6, "abbe": 40, "density_g_cm3": 1.3}}]},
            "options[0].material",
        ),
        ({"options": [{}], "baseline": 1}, "baseline: give 0 or less."),
        ({"scenes": "window-behind-desk"}, "scenes: put a list between square brackets here."),
        ({"reference": "\ud800"}, "reference: write text between quotation marks here."),
    ],
)
def test_a_bad_part_of_a_visit_is_refused_in_our_words(part: dict[str, object], line: str) -> None:
    (found,) = lines({**minimal(), **part})
    assert found.startswith(line)


@pytest.mark.parametrize("data", [None, [], "text", 5])
def test_a_file_that_holds_no_object_is_refused(data: object) -> None:
    assert lines(data, file="f") == ["f: put named fields between braces here."]


def test_many_faults_are_all_found_and_five_told() -> None:
    eye = {"sphere": "x", "cylinder": 99, "wrong": 1}
    data = {"prescription": {"right": eye, "left": eye}, "scenes": 1, "date": "soon", "oder": 0}
    with pytest.raises(Faults) as error:
        check_visit(data, file="visit.json")
    assert len(error.value.faults) == 9
    told = error.value.lines()
    assert len(told) == 6
    assert told[-1] == "and 4 more"
    assert all(line.startswith("visit.json: ") for line in told[:-1])


def test_an_outline_goes_once_round_the_box_centre() -> None:
    circle = [[25 * math.cos(k * math.tau / 40), 20 * math.sin(k * math.tau / 40)] for k in range(40)]
    kept = check_visit({**minimal(), "frame": {"outline": {"right": circle}}})
    assert kept.frame is not None
    assert kept.frame.outline is not None
    assert kept.frame.outline.right is not None
    assert len(kept.frame.outline.right) == 40
    aside = [[x + 60, y] for x, y in circle]
    mixed = [circle[(7 * k) % 40] for k in range(40)]
    for bad in (aside, mixed):
        (found,) = lines({**minimal(), "frame": {"outline": {"left": bad}}})
        assert found == "frame.outline.left: the points must go once round the box centre, in order."


def test_items_may_be_given_in_place() -> None:
    option = {
        "material": {"n_e": 1.6, "abbe": 40, "density_g_cm3": 1.3},
        "coating": {"back": {"layers": [["SiO2", 90.7], [1.46, 20.0]]}},
        "tint": {"luminous_transmittance": 0.8, "kind": "polarising"},
    }
    (made,) = check_visit({**minimal(), "options": [option]}).options or ()
    assert isinstance(made.material, Material)
    assert (made.material.index, made.material.line) == (1.6, "e")
    assert isinstance(made.coating, Faces)
    assert made.coating.front == "bare"
    assert isinstance(made.coating.back, Coating)
    assert made.coating.back.layers == (("SiO2", 90.7), (1.46, 20.0))


def test_age_is_exact_from_a_birth_date_and_one_less_for_children_without_one() -> None:
    day = dt.date(2026, 12, 1)
    dated = check_visit({**minimal(), "wearer": {"birth_date": "2012-12-02"}})
    assert (dated.age(today=day), dated.youngest_age(today=day)) == (13, 13)
    assert dated.age(today=dt.date(2026, 12, 2)) == 14
    by_year = check_visit({**minimal(), "date": "2026-12-01", "wearer": {"birth_year": 2012}})
    assert (by_year.age(today=dt.date(2030, 1, 1)), by_year.youngest_age(today=day)) == (14, 13)
    assert check_visit(minimal()).age(today=day) is None


@pytest.mark.parametrize(
    ("typed", "read"),
    [("−4,25", -4.25), (" + 1.50 ", 1.5), ("-\u202f0,75", -0.75), ("–2", -2.0), (".5", 0.5), ("\xa03", 3.0)],
)
def test_numbers_typed_into_a_form_are_read_as_people_write_them(typed: str, read: float) -> None:
    form = {"prescription": {"right": {"sphere": typed}, "left": {"sphere": "0"}}}
    assert check_visit(form, from_form=True).prescription.right.sphere == read


@pytest.mark.parametrize("typed", ["", "1,234.5", "1e3", "nan", "four", "--1", "1-", "inf", "9" * 60])
def test_what_is_no_number_in_a_form_is_refused(typed: str) -> None:
    form = {"prescription": {"right": {"sphere": typed}, "left": {"sphere": "0"}}}
    assert lines(form, from_form=True) == ["prescription.right.sphere: write a number here."]


def test_an_empty_field_of_a_form_is_left_out() -> None:
    form = {
        "date": "",
        "wearer": {"birth_year": "", "eye_colour": "", "birth_date": ""},
        "prescription": {"for": "", "right": {"sphere": "1", "cylinder": "", "axis": ""}, "left": {"sphere": "1"}},
        "frame": {"a_mm": "", "rim": ""},
        "daily_life": {"driving": "", "price_limit": ""},
        "options": [{"design": "", "material": "", "coating": "", "tint": "0,85", "centre_mm": ""}],
    }
    visit = check_visit(form, from_form=True)
    assert visit.wearer is not None
    assert (visit.date, visit.wearer.eye_colour, visit.prescription.right.axis) == (None, None, None)
    assert visit.options is not None
    assert (visit.options[0].design, visit.options[0].tint) == (None, 0.85)


scalars = st.none() | st.booleans() | st.floats() | st.integers() | st.text(max_size=8)
trees = st.recursive(scalars, lambda inner: st.lists(inner, max_size=3) | st.dictionaries(st.text(), inner, max_size=3))


@given(st.sampled_from(list(Visit.model_fields)), trees, st.booleans())
def test_whatever_stands_in_a_file_it_reads_or_is_a_fault(name: str, value: object, from_form: bool) -> None:
    told: list[str] | None = None
    try:
        visit = check_visit({**minimal(), name: value}, from_form=from_form)
    except Faults as error:
        told = error.lines()
    if told is None:
        assert check_visit(json.loads(visit_to_json(visit))) == visit
    else:
        assert 1 <= len(told) <= 6
        assert all(line.isprintable() for line in told)


def test_read_visit_names_the_file(tmp_path: Path) -> None:
    path = tmp_path / "visit.json"
    path.write_text('{"prescription": {}}', encoding="utf-8")
    with pytest.raises(Faults) as error:
        read_visit(path)
    assert error.value.lines() == [
        f"{path}: prescription.{eye}: this is missing; give a value." for eye in ("right", "left")
    ]


def test_keys_that_the_range_does_not_hold_are_found_with_their_places() -> None:
    data = {
        **minimal(),
        "options": [{"design": "singel-vision", "coating": {"back": "brodband"}, "tint": "grey-16"}],
        "worn_now": {"material": "hard-resin-151"},
        "scenes": ["window-behind"],
        "daily_life": {"cleaning": ["papier"]},
    }
    found = visit_faults(check_visit(data), stock=builtin_range(), file="f")
    assert [(fault.field, fault.phrase.figures["nearest"]) for fault in found] == [
        ("options[0].design", "single-vision"),
        ("options[0].tint", "grey-15"),
        ("options[0].coating.back", "broadband"),
        ("worn_now.material", "hard-resin-150"),
        ("scenes[0]", "window-behind-desk"),
        ("daily_life.cleaning[0]", "paper"),
    ]


def codes(right: dict[str, object], left: dict[str, object], **rest: object) -> list[str]:
    visit = check_visit({"prescription": {"right": right, "left": left}, **rest})
    return [phrase.code for phrase in prescription_warnings(visit)]


def test_signs_that_look_swapped_are_warned_about() -> None:
    assert codes({"sphere": 2.5}, {"sphere": -2.25}) == ["signs-swapped"]
    assert codes({"sphere": 0.25}, {"sphere": -0.25}) == []
    assert codes({"sphere": 1.0}, {"sphere": -5.0}) == []


def test_unequal_adds_are_warned_about() -> None:
    assert codes({"sphere": 1, "add": 2.0}, {"sphere": 1, "add": 2.25}) == ["unequal-add"]
    assert codes({"sphere": 1, "add": 2.0}, {"sphere": 1}) == ["unequal-add"]
    assert codes({"sphere": 1, "add": 2.0}, {"sphere": 1, "balance": True}) == []
    assert codes({"sphere": 1, "add": 0.0}, {"sphere": 1}) == []


@pytest.mark.parametrize(("left_mm", "expected"), [(29.0, []), (28.9, ["pd-difference"])])
def test_distances_from_the_nose_over_three_millimetres_apart_are_warned_about(
    left_mm: float, expected: list[str]
) -> None:
    fitting = {"right": {"pd_mm": 32.0}, "left": {"pd_mm": left_mm}}
    assert codes({"sphere": 1}, {"sphere": 1}, fitting=fitting) == expected


def test_steps_that_are_not_a_quarter_dioptre_are_warned_about_one_by_one() -> None:
    visit = check_visit(minimal(sphere=-4.3, cylinder=-0.6, axis=90))
    found = [(p.code, p.figures["eye"], p.figures["field"], p.figures["value_d"]) for p in prescription_warnings(visit)]
    assert found == [
        ("quarter-steps", "right", "sphere", -4.3),
        ("quarter-steps", "right", "cylinder", -0.6),
    ]


CIRCLE_OF_40 = [[20 * math.cos(math.tau * k / 48), 20 * math.sin(math.tau * k / 48)] for k in range(48)]


@pytest.mark.parametrize("code", WARNING_TEXTS)
def test_every_warning_has_a_text_that_its_figures_fill(code: str) -> None:
    visit = check_visit(
        {
            "prescription": {"right": {"sphere": 2.3, "add": 1}, "left": {"sphere": -2.3}},
            "fitting": {"right": {"pd_mm": 35}, "left": {"pd_mm": 30}},
            "frame": {"a_mm": 60, "outline": {"right": CIRCLE_OF_40}},
        }
    )
    (phrase, *_) = [p for p in prescription_warnings(visit) if p.code == code]
    assert "%" not in WARNING_TEXTS[code] % phrase.figures
