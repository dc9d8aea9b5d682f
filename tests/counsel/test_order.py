"""The order: nothing on it is a guess, and each thing that is missing is named, alone and exactly."""

import copy
import datetime as dt
from typing import Any

import pytest

from advisor.counsel.compare import Computed, compute
from advisor.counsel.order import NotReady, Order, missing, order_of
from advisor.counsel.stock import Range, builtin_range
from advisor.counsel.visit import check_visit
from advisor.web.language import language

TODAY = dt.date(2026, 12, 1)
COMPLETE: dict[str, Any] = {
    "date": "2026-12-01",
    "wearer": {"birth_date": "1980-05-04"},
    "prescription": {
        "vertex_mm": 14.0, "for": "distance",
        "right": {"sphere": -6.0, "cylinder": -2.0, "axis": 30, "add": 2.0,
                  "prism": [{"amount": 1.0, "base": "in"}, {"amount": 0.5, "base": "up"}]},
        "left": {"sphere": -5.25, "balance": True},
    },
    "fitting": {
        "right": {"pd_mm": 31.5, "near_pd_mm": 29.5, "height_mm": 20.5},
        "left": {"pd_mm": 32.0, "height_mm": 21.0},
        "vertex_mm": 12.0, "tilt_deg": 9.0, "wrap_deg": 4.0,
    },
    "frame": {"a_mm": 50.0, "b_mm": 38.0, "dbl_mm": 18.0, "ed_mm": 54.0, "rim": "grooved"},
    "daily_life": {"impact": "never", "one_good_eye": "no", "driving": "often"},
    "options": [
        {"design": "single-vision", "material": "thiourethane-167", "coating": {"front": "bare", "back": "broadband"}},
        {"design": "single-vision", "material": "hard-resin-150", "front_power_d": 30.0},
    ],
    "scenes": [],
}  # fmt: skip


def without(*fields: str, **more: Any) -> dict[str, Any]:
    content = copy.deepcopy(COMPLETE)
    for field in fields:
        *path, name = field.split(".")
        part = content
        for step in path:
            part = part[step]
        del part[name]
    return content | more


def computed(content: dict[str, Any], stock: Range | None = None) -> Computed:
    return compute(check_visit(content), stock or builtin_range(), today=TODAY)


def reasons(content: dict[str, Any]) -> list[tuple[str, Any]]:
    return [(reason.code, reason.figures.get("eye")) for reason in missing(computed(content))]


def test_a_complete_visit_is_ready() -> None:
    assert reasons(COMPLETE) == []


@pytest.mark.parametrize(
    ("fields", "expected"),
    [
        (["fitting.right.pd_mm"], [("missing-pd", "right")]),
        (["fitting.left.pd_mm"], [("missing-pd", "left")]),
        (["fitting.right.height_mm"], [("missing-height", "right")]),
        (["fitting.left.height_mm"], [("missing-height", "left")]),
        (["frame.rim"], [("missing-rim", None)]),
        (["frame.a_mm"], [("missing-box", None)]),
        (["frame.b_mm"], [("missing-box", None)]),
        (["frame.dbl_mm"], [("missing-box", None)]),
        (["frame.a_mm", "frame.b_mm", "frame.dbl_mm"], [("missing-box", None)]),
        (["prescription.vertex_mm"], [("missing-tested-vertex", None)]),
        (["fitting.vertex_mm"], [("missing-fitted-vertex", None)]),
        (
            ["prescription.vertex_mm", "fitting.vertex_mm"],
            [("missing-tested-vertex", None), ("missing-fitted-vertex", None)],
        ),
        (["daily_life.impact"], [("not-asked-impact", None)]),
        (["daily_life.one_good_eye"], [("not-asked-one_good_eye", None)]),
        (["daily_life.driving"], [("not-asked-driving", None)]),
        (["wearer.birth_date"], [("not-asked-child", None)]),
        (["wearer"], [("not-asked-child", None)]),
        # what may be left out
        (["frame.ed_mm"], []),
        (["fitting.tilt_deg"], []),
        (["fitting.wrap_deg"], []),
        (["fitting.right.near_pd_mm"], []),
        (["date"], []),
    ],
    ids=lambda value: "+".join(value) if value and isinstance(value[0], str) else "",
)  # fmt: skip
def test_each_gap_gives_its_reason_and_no_other(fields: list[str], expected: list[tuple[str, Any]]) -> None:
    assert reasons(without(*fields)) == expected


def test_without_daily_life_every_safety_question_is_named() -> None:
    assert [code for code, _ in reasons(without("daily_life", "wearer"))] == [
        "not-asked-impact", "not-asked-one_good_eye", "not-asked-driving", "not-asked-child",
    ]  # fmt: skip


@pytest.mark.parametrize("answer", ["yes", "no"])
def test_the_answer_whether_it_is_a_child_stands_for_the_age(answer: str) -> None:
    content = without("wearer")
    content["daily_life"]["child"] = answer
    assert reasons(content) == []


@pytest.mark.parametrize(
    ("sphere", "cylinder", "needed"),
    [
        (-4.75, 0.0, False),
        (-5.0, 0.0, True),
        (4.75, 0.0, False),
        (5.0, 0.0, True),
        (-4.0, -1.0, True),
        (-4.0, -0.75, False),
        (6.0, -2.0, True),
    ],
)
def test_the_vertex_distance_matters_from_five_dioptres_along_any_meridian(
    sphere: float, cylinder: float, needed: bool
) -> None:
    content = without("prescription.vertex_mm", "fitting.vertex_mm")
    content["prescription"] |= {
        "right": {"sphere": -1.0},
        "left": {"sphere": sphere, "cylinder": cylinder, "axis": 90} if cylinder else {"sphere": sphere},
    }
    assert [code for code, _ in reasons(content)] == (
        ["missing-tested-vertex", "missing-fitted-vertex"] if needed else []
    )


def order(content: dict[str, Any], index: int = 0) -> Order:
    return order_of(computed(content), index=index, translator=language("en"))


def test_an_order_waits_with_every_reason_at_once() -> None:
    with pytest.raises(NotReady) as caught:
        order(without("frame.rim", "daily_life.driving"))
    assert len(caught.value.lines) == 2
    assert str(caught.value).splitlines() == ["Not ready to order:", *(f"- {line}" for line in caught.value.lines)]
    assert "%(" not in str(caught.value)


def test_an_option_that_cannot_be_made_is_not_ordered() -> None:
    with pytest.raises(NotReady, match=r"cannot be made: Hard resin 1\.50: the front curve does not reach the rim"):
        order(COMPLETE, index=1)


def moved(power: float, *, from_mm: float, to_mm: float) -> float:
    """The vertex formula by the far point: f' is longer by as much as the lens moves towards the eye."""
    return 1000 / (1000 / power - (from_mm - to_mm))


def test_the_power_made_is_the_one_written_moved_to_the_fitted_distance() -> None:
    right, left = order(COMPLETE).eyes
    assert (right.written.sphere_d, right.written.cylinder_d, right.written.axis_deg) == (-6.0, -2.0, 30.0)
    first, second = (moved(power, from_mm=14, to_mm=12) for power in (-6.0, -8.0))
    assert right.made.sphere_d == pytest.approx(first, abs=1e-9)
    assert right.made.cylinder_d == pytest.approx(second - first, abs=1e-9)
    assert right.made.axis_deg == 30.0
    assert left.made.sphere_d == pytest.approx(moved(-5.25, from_mm=14, to_mm=12), abs=1e-9)
    assert left.made.cylinder_d == 0.0


def test_a_published_vertex_figure() -> None:
    content = without()
    content["prescription"] |= {"vertex_mm": 12.0, "right": {"sphere": -10.0}, "left": {"sphere": -10.0}}
    content["fitting"]["vertex_mm"] = 0.0
    # -10.00 from 12 mm to the cornea is -8.93: the vertex formula; in a frame that a bare fitting of 0 mm allows
    assert order(content).eyes[0].made.sphere_d == pytest.approx(-8.93, abs=0.005)


@pytest.mark.parametrize(
    ("design", "share"), [("single-vision", 0.0), ("reading", 1.0), ("occupational", 0.6), ("progressive", 0.0)]
)
def test_near_designs_are_made_with_their_share_of_the_add(design: str, share: float) -> None:
    content = without()
    content["options"][0]["design"] = design
    content["prescription"]["for"] = {"single-vision": "distance", "progressive": "all"}.get(design, "near")
    content["prescription"]["vertex_mm"] = 12.0  # nothing to compensate
    right, left = order(content).eyes
    assert right.made.sphere_d == pytest.approx(-6.0 + 2.0 * share, abs=1e-12)
    assert left.made.sphere_d == -5.25  # no add
    assert right.add_d == 2.0


def test_the_rest_of_the_order_is_what_was_measured() -> None:
    placed = order(COMPLETE)
    right, left = placed.eyes
    assert (right.eye, left.eye) == ("right", "left")
    assert (right.pd_mm, right.near_pd_mm, right.height_mm) == (31.5, 29.5, 20.5)
    assert (left.pd_mm, left.near_pd_mm, left.height_mm) == (32.0, None, 21.0)
    assert right.prism == ((1.0, "in"), (0.5, "up"))
    assert left.prism == ()
    assert (right.balance, left.balance) == (False, True)
    assert placed.least_edge_mm == 1.8  # grooved; common practice, no source
    assert placed.least_centre_mm == 1.2  # thiourethane 1.67 of the built-in range
    child = without(declined=[{"key": "tough-material", "by": "parent"}])
    child["daily_life"]["child"] = "yes"
    assert order(child).least_centre_mm == 2.0
    assert order(child).eyes[0].centre_mm >= 2.0


PLAIN = {"right": {"sphere": -2.0}, "left": {"sphere": -2.0}}
RESIN = {"design": "single-vision", "material": "hard-resin-150", "coating": "bare"}
TEEN = {"birth_date": "2012-05-05"}
BY_DAY = [{"key": "night-driving", "by": "wearer"}]
DECLINED_TOUGH = [{"key": "tough-material", "by": "parents"}]


def against(option: dict[str, Any], **more: Any) -> list[str]:
    """The musts that hold an otherwise complete order back, by key."""
    life = COMPLETE["daily_life"] | more.pop("daily_life", {})
    content = without(options=[option], daily_life=life, **{"prescription": PLAIN, **more})
    return [reason.code for reason in missing(computed(content), index=0)]


LOW = {"right": {"pd_mm": 31, "height_mm": 17}, "left": {"pd_mm": 31, "height_mm": 20}, "vertex_mm": 12}
HIGH = {"right": {"pd_mm": 31, "height_mm": 18}, "left": {"pd_mm": 31, "height_mm": 20}, "vertex_mm": 12}
ADDED = {"right": {"sphere": -2.0, "add": 2.0}, "left": {"sphere": -2.0, "add": 2.0}}


@pytest.mark.parametrize(
    ("option", "visit", "expected"),
    [
        (RESIN, {"wearer": TEEN, "daily_life": {"impact": "often"}}, ["tough-child", "tough-impact"]),
        (RESIN, {"wearer": TEEN, "daily_life": {"impact": "often"}, "declined": DECLINED_TOUGH}, []),
        (RESIN | {"material": "polycarbonate-159"}, {"wearer": TEEN, "daily_life": {"impact": "often"}}, []),
        (RESIN, {"daily_life": {"one_good_eye": "yes"}}, ["tough-one-eye"]),
        # 7.5 % is never for driving, 15 % never by night; neither where nobody drives
        (RESIN | {"tint": 0.075}, {"daily_life": {"night_driving": "never"}}, ["driving-tint"]),
        (RESIN | {"tint": 0.075}, {"daily_life": {"driving": "never"}}, []),
        (RESIN | {"tint": 0.15}, {"daily_life": {"night_driving": "often"}}, ["night-driving-tint"]),
        (RESIN | {"tint": 0.15}, {"daily_life": {"night_driving": "never"}}, []),
        # a day pair for one who drives at night is ordered once that is on file
        (RESIN | {"tint": 0.15}, {"daily_life": {"night_driving": "often"}, "declined": BY_DAY}, []),
        (RESIN | {"tint": 0.075}, {"declined": BY_DAY}, ["driving-tint"]),
        (RESIN | {"design": "progressive"}, {"prescription": ADDED, "fitting": LOW}, ["fitting-height"]),
        (RESIN | {"design": "progressive"}, {"prescription": ADDED, "fitting": HIGH}, []),
        (RESIN, {"prescription": ADDED}, ["no-near"]),
        (RESIN, {"prescription": ADDED | {"for": "distance"}}, []),
        (RESIN | {"design": "reading"}, {"prescription": ADDED}, ["no-far"]),
        (RESIN | {"design": "reading"}, {"prescription": ADDED | {"for": "near"}}, []),
        (RESIN | {"material": "crown-glass-152"}, {"daily_life": {"impact": "sometimes"}}, ["glass"]),
        (RESIN, {"daily_life": {"price_limit": 70}}, ["price-limit"]),  # hard resin 20 and single vision 60
        (RESIN, {"daily_life": {"price_limit": 80}}, []),
    ],
)  # fmt: skip
def test_a_must_that_the_chosen_pair_breaks_holds_the_order_back(
    option: dict[str, Any], visit: dict[str, Any], expected: list[str]
) -> None:
    assert against(option, **visit) == expected


def test_only_the_chosen_pair_must_keep_the_musts() -> None:
    content = without(wearer=TEEN, prescription=PLAIN, options=[RESIN, RESIN | {"material": "polycarbonate-159"}])
    assert missing(computed(content)) == []
    assert [reason.code for reason in missing(computed(content), index=0)] == ["tough-child"]
    assert order(content, index=1).least_centre_mm == 2.0
    with pytest.raises(NotReady, match="impact material first"):
        order(content, index=0)


def test_an_order_says_what_may_be_done_about_a_must() -> None:
    with pytest.raises(NotReady, match="or record who turned this down"):
        order(without(wearer=TEEN, prescription=PLAIN, options=[RESIN]))
    with pytest.raises(NotReady, match="or say what this one is for"):
        order(without(prescription=ADDED, options=[RESIN]))


def test_an_option_that_cannot_be_made_gives_that_reason_alone() -> None:
    assert missing(computed(without(wearer=TEEN)), index=1) == []
    with pytest.raises(NotReady) as caught:
        order(without(wearer=TEEN), index=1)
    assert len(caught.value.lines) == 1


def test_a_reading_lens_for_the_screen_is_made_with_the_add_written_for_it() -> None:
    screen = {"for": "intermediate", "intermediate_add": 1.25, "vertex_mm": 12, **ADDED}
    content = without(prescription=screen, options=[RESIN | {"design": "reading"}])
    for eye in order(content).eyes:
        assert eye.made.sphere_d == pytest.approx(-2.0 + 1.25, abs=1e-12)
    content["prescription"] = screen | {"for": "near"}
    assert order(content).eyes[0].made.sphere_d == pytest.approx(0.0, abs=1e-12)


def test_a_lens_for_near_alone_is_ordered_with_the_pd_it_is_centred_at() -> None:
    # measured on the right; on the left by similar triangles from the centre of rotation: 400/(400 + 12 + 15) x 32
    made_near = {"for": "near", "right": {"sphere": 2.0}, "left": {"sphere": 2.0}}
    right, left = order(without(prescription=made_near, options=[RESIN])).eyes
    assert right.near_pd_mm == 29.5
    assert left.near_pd_mm == pytest.approx(32.0 * 400 / 427, abs=1e-9)
