"""Each condition: a visit and a lens that break it, and the nearest that do not."""

import datetime as dt
from dataclasses import replace
from typing import Any

import pytest

from advisor.counsel.case import Case, build_case
from advisor.counsel.cautions import LensLight
from advisor.counsel.laid_out import Laid, lay_out
from advisor.counsel.musts import CONDITIONS, UNKNOWN, Finished, broken_by, must_texts, musts
from advisor.counsel.phrases import say
from advisor.counsel.stock import builtin_range, check_range
from advisor.counsel.toml_texts import extract
from advisor.counsel.visit import check_visit
from advisor.resources import data_file
from advisor.web.language import language

TODAY = dt.date(2026, 12, 1)
ADD = {"right": {"sphere": 0.5, "add": 2.25}, "left": {"sphere": 0.5, "add": 2.25}}
FAR = {"right": {"sphere": -2.0}, "left": {"sphere": -2.0}}


def build(
    option: dict[str, Any] | None = None, *, stock: dict[str, Any] | None = None, **visit: Any
) -> tuple[Case, Laid]:
    chosen = {"design": "single-vision", "material": "hard-resin-150", "coating": "broadband", **(option or {})}
    content = {"prescription": FAR, "options": [chosen], **visit}
    sold = builtin_range() if stock is None else check_range(stock)
    case = build_case(check_visit(content), sold, today=TODAY)
    return case, lay_out(case)[0]


def codes(case: Case, laid: Laid, lens: Finished = UNKNOWN) -> set[str]:
    return {phrase.code for phrase in broken_by(case, laid, lens)}


def light(clear: float, dark: float | None = None, *, imbalance: float = 0.0, centre: float = 2.0) -> Finished:
    return Finished(LensLight(clear, clear if dark is None else dark, imbalance), centre)


def test_every_condition_stands_in_the_table_and_the_other_way_round() -> None:
    assert [must.key for must in musts()] == list(CONDITIONS)
    assert all(must.text.endswith(".") and must.source and must.not_asked for must in musts())


TOUGH = {"material": "polycarbonate-159"}
DECLINED = [{"key": "tough-material", "by": "wearer"}]


@pytest.mark.parametrize(
    ("code", "visit"),
    [
        ("tough-child", {"wearer": {"birth_year": 2015}}),
        ("tough-child", {"daily_life": {"child": "yes"}}),
        ("tough-one-eye", {"daily_life": {"one_good_eye": "yes"}}),
        ("tough-one-eye", {"prescription": {**FAR, "left": {"sphere": -2.0, "balance": True}}}),
        ("tough-impact", {"daily_life": {"impact": "often"}}),
    ],
)
def test_a_tough_material_comes_first_and_may_be_declined(code: str, visit: dict[str, Any]) -> None:
    assert code in codes(*build(**visit))
    assert code in codes(*build({"material": "thiourethane-160"}, **visit))  # drillable is not tough
    assert code not in codes(*build(TOUGH, **visit))
    assert code not in codes(*build(**visit, declined=DECLINED))
    assert code not in codes(*build(daily_life={"impact": "sometimes", "child": "no", "one_good_eye": "no"}))


def test_a_question_not_asked_excludes_no_material_but_glass() -> None:
    assert not codes(*build())
    assert codes(*build({"material": "crown-glass-152"})) == {"glass"}


@pytest.mark.parametrize(
    "life",
    [
        {"impact": "sometimes"},
        {"impact": "often"},
        {"impact": "never", "two_wheeler": "yes"},
        {"impact": "never", "child": "yes"},
        {"impact": "never", "one_good_eye": "yes"},
    ],
)
def test_glass_is_out_where_a_blow_is_likely_even_if_the_tough_material_was_declined(life: dict[str, str]) -> None:
    assert "glass" in codes(*build({"material": "crown-glass-152"}, daily_life=life, declined=DECLINED))


def test_glass_may_be_advised_where_knocks_were_answered_with_never() -> None:
    assert not codes(*build({"material": "crown-glass-152"}, daily_life={"impact": "never"}))


def test_a_given_centre_below_two_millimetres_is_out_for_one_who_needs_protection() -> None:
    child = build({**TOUGH, "centre_mm": 1.5}, daily_life={"child": "yes"})
    assert "protective-centre" in codes(*child, light(1.0, centre=1.5))
    assert "protective-centre" not in codes(*child, light(1.0, centre=2.0))
    assert "protective-centre" not in codes(*build(daily_life={"child": "no"}), light(1.0, centre=1.5))


def test_a_material_not_stated_to_hold_in_a_drilled_rim_is_out_there() -> None:
    silent = {"material": {"n_d": 1.6, "abbe": 41.0, "density_g_cm3": 1.3}}
    assert "drilled-rim" in codes(*build(silent, frame={"rim": "drilled"}))
    assert "drilled-rim" not in codes(*build(silent, frame={"rim": "full"}))
    assert "drilled-rim" not in codes(*build({"material": "thiourethane-160"}, frame={"rim": "drilled"}))


def test_a_material_that_softens_is_out_where_heat_is_frequent() -> None:
    soft = {"material": "episulfide-174"}
    assert "heat" in codes(*build(soft, daily_life={"heat_steam": "often"}))
    assert "heat" not in codes(*build(soft, daily_life={"heat_steam": "sometimes"}))
    assert "heat" not in codes(*build(soft))
    assert "heat" not in codes(*build({"material": "thiourethane-167"}, daily_life={"heat_steam": "often"}))


# ISO 12312-1 as quoted in public guidance: below 75 % not for driving at night, below 8 % never for driving.
@pytest.mark.parametrize(
    ("life", "passed", "expected"),
    [
        ({"night_driving": "sometimes"}, 0.7499, {"night-driving-tint"}),
        ({"night_driving": "sometimes"}, 0.75, set()),
        ({}, 0.7499, {"night-driving-tint"}),  # not asked is not never
        ({"night_driving": "never"}, 0.15, set()),
        ({"night_driving": "never"}, 0.0799, {"driving-tint"}),
        ({"night_driving": "never"}, 0.08, set()),
        ({"driving": "never"}, 0.05, set()),
        ({}, 0.05, {"night-driving-tint", "driving-tint"}),
    ],
)
def test_the_finished_lens_decides_about_driving(life: dict[str, str], passed: float, expected: set[str]) -> None:
    found = codes(*build({"tint": 0.85}, daily_life=life), light(passed))
    assert found & {"night-driving-tint", "driving-tint"} == expected


def test_a_photochromic_lens_is_judged_clear_for_the_night_and_dark_for_driving() -> None:
    case, laid = build({"tint": "photochromic-grey"}, daily_life={"night_driving": "often"})
    assert not codes(case, laid, light(0.84, 0.15))
    assert codes(case, laid, light(0.84, 0.05)) == {"driving-tint"}


@pytest.mark.parametrize(
    ("design", "wanted", "expected"),
    [
        ("single-vision", "all", {"no-near"}),
        ("single-vision", "distance", set()),
        ("single-vision", "near", {"no-near"}),
        ("reading", "all", {"no-far"}),
        ("reading", "distance", {"no-far"}),
        ("reading", "near", set()),
        ("occupational", "all", {"no-far"}),
        ("occupational", "intermediate", set()),
        ("reading", "intermediate", {"whole-add", "no-screen"}),  # and 2.25 is 0.58 too strong at 60 cm
        ("bifocal", "near", {"near-alone"}),
        ("progressive", "near", {"near-alone"}),
        ("progressive", "intermediate", {"near-alone"}),
        ("bifocal", "all", set()),
        ("progressive", "all", set()),
        (None, "all", {"no-near"}),
    ],
)
def test_a_design_must_reach_what_the_pair_is_for(design: str | None, wanted: str, expected: set[str]) -> None:
    case, laid = build(
        {"design": design or "single-vision"}, prescription={**ADD, "for": wanted}, wearer={"birth_year": 1960}
    )
    assert codes(case, laid) == expected
    if wanted == "all":  # left out means the same
        assert (
            codes(*build({"design": design or "single-vision"}, prescription=ADD, wearer={"birth_year": 1960}))
            == expected
        )


def test_the_screen_between_the_two_parts_of_a_bifocal() -> None:
    # 66 years: amplitude 15 - 0.25 x 66 < 0, so none. At 65 cm, 1.54 D: 0.71 D from the 2.25 of the near part.
    life: dict[str, Any] = {
        "daily_life": {"screen_work": "often"},
        "fitting": {"working_distance_cm": [65]},
        "wearer": {"birth_year": 1960},
    }
    case, laid = build({"design": "bifocal"}, prescription=ADD, **life)
    (phrase,) = (p for p in broken_by(case, laid) if p.code == "no-screen")
    assert phrase.figures["blur_d"] == pytest.approx(2.25 - 100 / 65, abs=1e-9)
    assert "no-screen" not in codes(*build({"design": "progressive"}, prescription=ADD, **life))
    # at 40, the least amplitude is 5 D and half of it reaches the screen from far
    young = {**life, "wearer": {"birth_year": 1986}}
    assert "no-screen" not in codes(*build({"design": "bifocal"}, prescription=ADD, **young))
    unasked: dict[str, Any] = {"fitting": life["fitting"], "wearer": life["wearer"]}
    assert "no-screen" not in codes(*build({"design": "bifocal"}, prescription=ADD, **unasked))


def test_a_reading_lens_serves_the_screen_where_its_add_is_known_to_fit() -> None:
    # 66 years, no focusing left. The screen at 70 cm asks for 1.43 D, at 45 cm for 2.22 D
    old: dict[str, Any] = {"wearer": {"birth_year": 1960}}
    screen = {**ADD, "for": "intermediate"}

    def found(cm: float | None, **prescription: Any) -> set[str]:
        fitting: dict[str, Any] = {} if cm is None else {"fitting": {"working_distance_cm": [cm]}}
        return codes(*build({"design": "reading"}, prescription=screen | prescription, **fitting, **old))

    assert "whole-add" in found(None)
    assert found(70) == {"no-screen"}  # 2.25 is 0.82 D too strong
    assert found(45) == set()
    assert found(70, intermediate_add=1.5) == set()
    assert found(None, intermediate_add=1.5) == set()  # 60 cm, 1.67 D
    assert found(45, intermediate_add=1.5) == {"no-screen"}  # 0.72 D too weak


def test_what_is_on_file_as_turned_down_lifts_its_own_must_alone() -> None:
    by_day = [{"key": "night-driving", "by": "wearer"}]
    case, laid = build({"tint": 0.15}, daily_life={"night_driving": "often"}, declined=by_day)
    assert codes(case, laid, light(0.15)) == set()
    assert codes(case, laid, light(0.05)) == {"driving-tint"}
    life: dict[str, Any] = {
        "daily_life": {"screen_work": "often"},
        "fitting": {"working_distance_cm": [65]},
        "wearer": {"birth_year": 1960},
    }
    kept = [{"key": "screen-distance", "by": "wearer"}]
    assert "no-screen" not in codes(*build({"design": "bifocal"}, prescription=ADD, declined=kept, **life))


def test_a_design_with_an_add_needs_one() -> None:
    assert "design-without-add" in codes(*build({"design": "progressive"}))
    assert "design-without-add" not in codes(*build({"design": "single-vision"}))


def test_a_measured_height_below_the_design_is_out_and_a_default_is_not() -> None:
    low = {"right": {"height_mm": 17.9}, "left": {"height_mm": 19}}
    assert "fitting-height" in codes(*build({"design": "progressive"}, prescription=ADD, fitting=low))
    enough = {"right": {"height_mm": 18.0}, "left": {"height_mm": 19}}
    assert "fitting-height" not in codes(*build({"design": "progressive"}, prescription=ADD, fitting=enough))
    assert "fitting-height" not in codes(*build({"design": "progressive"}, prescription=ADD))


def test_lenses_that_differ_too_much_below_need_a_near_pair_unless_it_was_declined() -> None:
    case, laid = build({"design": "progressive"}, prescription=ADD)
    assert "near-imbalance" in codes(case, laid, light(1.0, imbalance=2.01))
    assert "near-imbalance" not in codes(case, laid, light(1.0, imbalance=2.0))
    declined = build({"design": "progressive"}, prescription=ADD, declined=[{"key": "near-pair"}])
    assert "near-imbalance" not in codes(*declined, light(1.0, imbalance=3.0))
    single = build(prescription={**ADD, "for": "distance"})
    assert "near-imbalance" not in codes(*single, light(1.0, imbalance=3.0))


def test_the_price_limit_holds_and_an_unknown_price_keeps_no_limit() -> None:
    # hard resin 20, single vision 60, broadband 70
    assert "price-limit" in codes(*build(daily_life={"price_limit": 149.99}))
    assert not codes(*build(daily_life={"price_limit": 150})) & {"price-limit", "price-unknown"}
    case, laid = build(daily_life={"price_limit": 150})
    assert "price-unknown" in codes(case, replace(laid, price=None))
    assert not codes(*build()) & {"price-limit", "price-unknown"}


def test_a_shop_with_offers_sells_nothing_else() -> None:
    offer = {"design": "single-vision", "material": "hard-resin-150", "coating": "broadband", "price": 120.0}
    assert "not-offered" not in codes(*build(stock={"offer": [offer]}))
    assert "not-offered" in codes(*build({"coating": "bare"}, stock={"offer": [offer]}))
    assert "not-offered" not in codes(*build({"coating": "bare"}))


def test_every_broken_condition_can_be_said() -> None:
    speaker = language("en")
    many = [
        build(
            {"material": "crown-glass-152", "tint": 0.5},
            daily_life={"impact": "often", "child": "yes", "one_good_eye": "yes", "price_limit": 10},
        ),
        build(
            {"design": "bifocal"},
            prescription=ADD,
            daily_life={"screen_work": "often"},
            wearer={"birth_year": 1950},
            fitting={"right": {"height_mm": 10}},
        ),
        build({"design": "reading"}, prescription=ADD),
        build({"design": "reading"}, prescription={**ADD, "for": "intermediate"}),
        build({"design": "bifocal"}, prescription={**ADD, "for": "near"}),
        build({"material": "episulfide-174"}, daily_life={"heat_steam": "often"}),
    ]
    for case, laid in many:
        for phrase in broken_by(case, laid, light(0.05, imbalance=3.0, centre=1.0)):
            text = say(phrase, must_texts(), speaker)
            assert "%(" not in text
            assert "None" not in text


def test_the_words_of_both_tables_are_found_for_translation() -> None:
    for name, shown in (("musts.toml", "an impact material first"), ("rather.toml", "the second light at night")):
        with data_file("counsel", name).open("rb") as file:
            found = list(extract(file, (), (), {}))
        texts = [text for _, _, text, _ in found]
        assert any(shown in text for text in texts)
        assert all(line > 0 and text for line, _, text, _ in found)
    with data_file("counsel", "musts.toml").open("rb") as file:
        assert {must.text for must in musts()} <= {text for _, _, text, _ in extract(file, (), (), {})}
