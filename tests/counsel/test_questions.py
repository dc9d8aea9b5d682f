import datetime as dt
from typing import Any

from advisor.counsel.case import Case, build_case
from advisor.counsel.questions import FIRST, NEXT, asked_fields, is_answered, next_questions
from advisor.counsel.stock import builtin_range
from advisor.counsel.visit import DailyLife, check_visit


def case(**visit: Any) -> Case:
    content = {"prescription": {"right": {"sphere": -2.0}, "left": {"sphere": -2.0}}, **visit}
    return build_case(check_visit(content), builtin_range(), today=dt.date(2026, 12, 1))


def keys(**visit: Any) -> list[str]:
    return [question.key for question in next_questions(case(**visit))]


def test_six_questions_come_first() -> None:
    assert len(FIRST) == 6
    assert keys()[:6] == [question.key for question in FIRST]


def test_every_field_a_question_fills_is_one_of_the_visit() -> None:
    empty = case()
    for question in (*FIRST, *(opening.question for opening in NEXT)):
        assert question.text.endswith(("?", "."))
        assert not any(is_answered(empty, field) for field in question.fields if not field.startswith("prescription"))


def test_every_question_about_daily_life_can_be_reached() -> None:
    assert asked_fields() == set(DailyLife.model_fields)


def test_an_answer_closes_its_question_and_opens_the_next() -> None:
    assert "new-glare" not in keys()
    found = keys(daily_life={"night_driving": "often", "screen_work": "often"})
    assert "drive" not in found
    assert {"new-glare", "lights-behind"} <= set(found)
    assert "new-glare" not in keys(daily_life={"night_driving": "often", "new_glare": "no"})


def test_age_power_rim_and_add_open_questions() -> None:
    assert "child" in keys()
    assert "child" not in keys(wearer={"birth_year": 1980})
    assert {"falls", "cataract"} <= set(keys(wearer={"birth_year": 1950}))
    assert "falls" not in keys(wearer={"birth_year": 1990})
    strong = {"right": {"sphere": -6.0}, "left": {"sphere": -6.0}}
    assert {"thickness", "weight", "tested-vertex", "worn-pair"} <= set(keys(prescription=strong))
    assert "tested-vertex" not in keys(prescription={**strong, "vertex_mm": 12})
    assert "thickness" in keys(frame={"rim": "drilled"})
    reader = {"right": {"sphere": 0.0, "add": 2.0}, "left": {"sphere": 0.0, "add": 2.0}}
    assert {"first-multifocal", "heights"} <= set(keys(prescription=reader))
