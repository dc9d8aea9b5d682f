import datetime as dt
from typing import Any

import pytest

from advisor.counsel.case import DEFAULTS, Case, build_case
from advisor.counsel.stock import builtin_range
from advisor.counsel.visit import DailyLife, check_visit

TODAY = dt.date(2026, 12, 1)


def case(**visit: Any) -> Case:
    content = {"prescription": {"right": {"sphere": -6.0}, "left": {"sphere": 4.0}}, **visit}
    return build_case(check_visit(content), builtin_range(), today=TODAY)


def test_every_default_that_stands_in_is_the_stated_one() -> None:
    made = case()
    assert made.age_years == DEFAULTS["wearer.birth_year"]
    assert made.pd_mm.tolist() == [DEFAULTS["fitting.pd_mm"]] * 2
    assert (made.a_mm, made.b_mm, made.dbl_mm) == tuple(DEFAULTS[f"frame.{name}_mm"] for name in ("a", "b", "dbl"))
    assert (made.tilt_deg, made.wrap_deg) == (DEFAULTS["fitting.tilt_deg"], DEFAULTS["fitting.wrap_deg"])
    assert made.rim == "full"
    assert made.pigment == 0.5  # brown; CIE 146:2002
    assert made.date == TODAY
    assert made.ed_mm is None


def test_a_given_figure_is_used_and_no_longer_listed() -> None:
    made = case(fitting={"tilt_deg": 0, "left": {"pd_mm": 29}}, wearer={"eye_colour": "very-light"})
    assert made.tilt_deg == 0.0
    assert made.pd_mm.tolist() == [31.5, 29.0]
    assert made.pigment == 1.2  # very light; CIE 146:2002
    assert not made.is_default("fitting.tilt_deg")
    assert not made.is_default("fitting.left.pd_mm")
    assert made.is_default("fitting.right.pd_mm")


def test_a_height_left_out_is_half_of_the_box_that_was_measured() -> None:
    assert case(frame={"b_mm": 30}).height_mm.tolist() == [15.0, 15.0]


def test_an_empty_list_of_distances_is_as_good_as_none() -> None:
    reads = {"right": {"sphere": 0, "add": 2}, "left": {"sphere": 0, "add": 2}}
    made = case(fitting={"working_distance_cm": []}, prescription=reads)
    assert made.working_distance_cm == DEFAULTS["fitting.working_distance_cm"]
    assert made.is_default("fitting.working_distance_cm")
    assert not case(fitting={"working_distance_cm": []}).is_default("fitting.working_distance_cm")  # nothing uses it
    assert case(fitting={"working_distance_cm": [65, 40]}).working_distance_cm == 65


# F/(1 - dF): -6.00 moved 2 mm further out is -6.073, +4.00 is +3.968
@pytest.mark.parametrize(
    ("tested", "fitted", "right", "left"),
    [(12, 12, -6.0, 4.0), (12, 14, -6.0 / (1 - 0.002 * 6.0), 4.0 / (1 + 0.002 * 4.0)), (12, None, -6.0, 4.0)],
)
def test_the_power_moves_with_the_vertex_distance(
    tested: float, fitted: float | None, right: float, left: float
) -> None:
    prescription = {"vertex_mm": tested, "right": {"sphere": -6.0}, "left": {"sphere": 4.0}}
    made = case(prescription=prescription, fitting={"vertex_mm": fitted})
    assert made.compensated("right").sphere_d == pytest.approx(right, rel=1e-12)
    assert made.compensated("left").sphere_d == pytest.approx(left, rel=1e-12)


def test_a_power_whose_tested_distance_is_not_known_stays_as_written() -> None:
    made = case(fitting={"vertex_mm": 16})
    assert made.compensated("right").sphere_d == -6.0
    assert made.fitted_vertex_mm == 16
    assert made.is_default("prescription.vertex_mm")


def test_the_strongest_power_is_that_of_the_strongest_meridian() -> None:
    eyes = {
        "right": {"sphere": -4.0, "cylinder": -1.5, "axis": 10},
        "left": {"sphere": 5.0, "cylinder": -1, "axis": 10},
    }
    assert case(prescription=eyes).strongest_d == 5.5


# An age from the year alone may be a year too high, so the rules for children count one less.
@pytest.mark.parametrize(
    ("wearer", "child"),
    [
        ({"birth_year": 2010}, True),
        ({"birth_year": 2009}, False),
        ({"birth_date": "2010-12-02"}, True),
        ({"birth_date": "2010-12-01"}, False),
        ({}, False),
    ],
)
def test_a_child_is_under_sixteen_by_the_youngest_age_that_fits(wearer: dict[str, Any], child: bool) -> None:
    assert case(wearer=wearer).is_child is child


def test_an_answer_of_no_does_not_make_a_child_older() -> None:
    assert case(wearer={"birth_year": 2015}, daily_life={"child": "no"}).is_child


def test_the_day_of_the_visit_counts_and_not_today() -> None:
    made = case(date="2020-12-01", wearer={"birth_year": 1979})
    assert made.age_years == 41
    assert made.date == dt.date(2020, 12, 1)


def test_what_was_not_asked_is_neither_never_nor_yes() -> None:
    made = case(daily_life={"driving": "never", "dust": "sometimes", "new_glare": "yes", "falls": "no"})
    assert (made.life("driving"), made.life("night_driving"), made.life("falls")) == ("never", "not-asked", "no")
    assert case().life("driving") == "not-asked"
    assert made.answers() == {"driving": "never", "dust": "sometimes", "new_glare": "yes", "falls": "no"}
    assert case().answers() == {}


def test_every_question_can_be_asked_for() -> None:
    made = case()
    assert {made.life(question) for question in DailyLife.model_fields} == {"not-asked"}


def test_scenes_left_out_are_all_and_an_empty_list_is_none() -> None:
    assert case().scenes == builtin_range().scene
    assert case(scenes=[]).scenes == ()
    assert [scene.key for scene in case(scenes=["window-behind-desk"]).scenes] == ["window-behind-desk"]
