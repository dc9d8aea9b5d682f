import datetime as dt
from typing import Any

import numpy as np
import pytest

from advisor.counsel.case import Case, build_case
from advisor.counsel.priorities import level_weights, levels_of, priority_sets, rank_order_centroid
from advisor.counsel.stock import builtin_range
from advisor.counsel.value import criteria
from advisor.counsel.visit import check_visit


def case(**life: Any) -> Case:
    content: dict[str, Any] = {"prescription": {"right": {"sphere": -2.0}, "left": {"sphere": -2.0}}}
    return build_case(check_visit({**content, "daily_life": life}), builtin_range(), today=dt.date(2026, 12, 1))


# Edwards and Barron 1994 print these to four and three digits; half a unit of the last.
@pytest.mark.parametrize(
    ("count", "published"),
    [(1, [1.0]), (2, [0.75, 0.25]), (3, [0.611, 0.278, 0.111]), (4, [0.521, 0.271, 0.146, 0.063])],
)
def test_rank_order_centroid_weights_are_the_published_ones(count: int, published: list[float]) -> None:
    assert rank_order_centroid(count) == pytest.approx(published, abs=5.1e-4)


def test_no_criteria_have_no_weights() -> None:
    with pytest.raises(ValueError, match="count"):
        rank_order_centroid(0)


def test_criteria_on_one_level_share_their_weights() -> None:
    # the middle of 0.611 and 0.278, and the last as it is
    assert level_weights([3, 1, 3]) == pytest.approx([(11 / 18 + 5 / 18) / 2, 1 / 9, (11 / 18 + 5 / 18) / 2])


def test_priority_sets_keep_the_order_and_add_up_to_one() -> None:
    sets = priority_sets((3, 2, 1))
    assert sets.shape == (2000, 3)
    assert sets.sum(axis=1) == pytest.approx(np.ones(2000))
    assert (np.diff(sets, axis=1) <= 0).all()
    assert (sets >= 0).all()


def test_the_mean_of_the_priority_sets_is_the_centroid() -> None:
    # the centroid is the mean of the even distribution by definition; 2,000 sets, sd up to 0.18: 4 sd are 0.016
    assert priority_sets((3, 2, 1)).mean(axis=0) == pytest.approx([11 / 18, 5 / 18, 2 / 18], abs=0.016)


def test_priority_sets_leave_criteria_on_one_level_in_no_order() -> None:
    sets = priority_sets((2, 2, 1))
    share = float(np.mean(sets[:, 0] > sets[:, 1]))
    assert share == pytest.approx(0.5, abs=0.045)  # 4 sd of a fair coin thrown 2,000 times
    assert (sets[:, 2] <= sets[:, :2].min(axis=1)).all()


def test_the_same_answers_give_the_same_sets() -> None:
    priority_sets.cache_clear()
    first = priority_sets((3, 1)).copy()
    priority_sets.cache_clear()
    assert (priority_sets((3, 1)) == first).all()


@pytest.mark.parametrize(
    ("question", "criterion"),
    [
        ("night_driving", "second-image"),
        ("lights_behind", "from-behind"),
        ("face_to_face", "seen-by-others"),
        ("bothered_thickness", "thickness"),
        ("bothered_weight", "weight"),
        ("bothered_smears", "care"),
    ],
)
def test_an_answer_moves_its_criterion_and_not_asked_is_not_never(question: str, criterion: str) -> None:
    often, sometimes = (levels_of(case(**{question: word})) for word in ("often", "sometimes"))
    silent, never = levels_of(case()), levels_of(case(**{question: "never"}))
    assert often[criterion] > sometimes[criterion] > silent[criterion] > 0
    assert never.get(criterion, 0) < silent[criterion] or question == "bothered_smears"


def test_an_exposure_counts_for_care_but_only_a_wish_comes_first() -> None:
    assert levels_of(case(sprays_solvents="often"))["care"] == 2
    assert levels_of(case(bothered_smears="often"))["care"] == 3
    nothing = dict.fromkeys(
        ("dust", "heat_steam", "sprays_solvents", "water_salt_chlorine", "bothered_smears"), "never"
    )
    assert "care" not in levels_of(case(**nothing))


def test_the_price_comes_first_only_before_an_operation_that_changes_the_power() -> None:
    assert levels_of(case(price_limit=100))["price"] == levels_of(case())["price"]
    levels = levels_of(case(cataract_planned="yes", bothered_weight="often"))
    assert levels["price"] > levels["weight"]


def test_one_who_never_drives_has_no_second_light_to_weigh() -> None:
    assert "second-image" not in levels_of(case(driving="never"))
    assert "second-image" in levels_of(case())


def test_a_pair_for_near_alone_has_no_second_light_to_weigh() -> None:
    for wanted in ("near", "intermediate"):
        content = {"prescription": {"for": wanted, "right": {"sphere": 1.75}, "left": {"sphere": 1.75}}}
        near = build_case(check_visit(content), builtin_range(), today=dt.date(2026, 12, 1))
        assert "second-image" not in levels_of(near)


def test_what_faces_and_tint_take_is_weighed_by_night_and_what_faces_take_by_day() -> None:
    night, day = levels_of(case()), levels_of(case(night_driving="never"))
    assert ("transmitted" in night, "not-mirrored" in night) == (True, False)
    assert ("transmitted" in day, "not-mirrored" in day) == (False, True)


def test_one_often_in_the_sun_has_it_behind_unless_that_was_asked() -> None:
    assert levels_of(case(sun="often"))["from-behind"] == levels_of(case(lights_behind="sometimes"))["from-behind"]
    assert levels_of(case(sun="often", lights_behind="often"))["from-behind"] == 3
    assert "from-behind" not in levels_of(case(sun="often", lights_behind="never"))


def test_every_level_belongs_to_a_criterion_of_the_table() -> None:
    assert set(levels_of(case())) <= set(criteria())
    assert list(levels_of(case()).values()) != []
