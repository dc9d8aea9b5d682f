"""Counter cases written as data before the code, and what holds for all advice."""

import datetime as dt
import math
import tomllib
from functools import cache
from pathlib import Path
from typing import Any

import pytest

from advisor.counsel.advise import Field, advise, field_of
from advisor.counsel.compare import compare, compute
from advisor.counsel.comparison import AdvisedOption, Comparison
from advisor.counsel.stock import builtin_range, check_range
from advisor.counsel.visit import check_visit, read_visit
from advisor.resources import resource_dir
from advisor.web.language import language

CASES: list[dict[str, Any]] = tomllib.loads(Path(__file__).with_name("advice_cases.toml").read_text("utf-8"))["case"]
TODAY = dt.date(2026, 12, 1)


@cache
def answer_to(name: str) -> Comparison:
    case = next(case for case in CASES if case["name"] == name)
    stock = check_range(case["range"]) if "range" in case else builtin_range()
    return compare(check_visit(case["visit"]), stock, translator=language("en"), today=TODAY)


def coating(option: AdvisedOption) -> str:
    front, back = option.coating.front, option.coating.back
    return front if front == back else f"{front}|{back}"


def test_there_are_at_least_twenty_cases_each_with_its_reason() -> None:
    assert len(CASES) >= 20
    assert all(case["why"].endswith(".") and case["expect"] for case in CASES)
    assert len({case["name"] for case in CASES}) == len(CASES)


@pytest.mark.parametrize("case", CASES, ids=lambda case: case["name"])
def test_the_advice_is_what_a_good_dispenser_would_give(case: dict[str, Any]) -> None:
    expect = dict(case["expect"])
    advice = answer_to(case["name"]).advice
    assert advice is not None
    assert advice.because is not None
    best = advice.recommended
    if "none" in expect:
        assert best is None
        assert [reason.code for reason in advice.because] == [expect.pop("none")]
        assert [pair.use for pair in advice.two_pairs or []] == expect.pop("pairs", [])
    else:
        assert best is not None
        assert advice.two_pairs is None
        for name, found in {
            "material": best.material,
            "design": best.design,
            "coating": coating(best),
            "tint": best.tint,
        }.items():
            if name in expect:
                assert found in expect.pop(name), (name, found)
        if "option" in expect:
            assert best.index == expect.pop("option")
    told = [best, advice.next_best, *(advice.two_pairs or [])]
    for option in (option for option in told if option is not None):
        assert not {option.material, option.design, coating(option)} & set(expect.get("never", [])), option.label
    expect.pop("never", None)
    codes: dict[int, set[str]] = {}
    for entry in advice.excluded or []:
        codes.setdefault(entry.option, set()).add(entry.code)
    for place, code in expect.pop("excluded", {}).items():
        assert code in codes.get(int(place), set()), codes
    for place in expect.pop("kept", []):
        assert place not in codes, codes
    cheapest = advice.cheapest_that_meets_every_must
    if "cheapest" in expect:
        assert cheapest is not None
        assert {"material": cheapest.material, "coating": coating(cheapest)} == expect.pop("cheapest")
    if "price_at_most" in expect:
        limit = expect.pop("price_at_most")
        assert all(
            o is not None and o.price is not None and o.price <= limit for o in (best, advice.next_best, cheapest)
        )
    cautions = {caution.key for caution in advice.cautions}
    assert set(expect.pop("cautions", [])) <= cautions
    assert not set(expect.pop("no_cautions", [])) & cautions
    free = [remedy.code.removesuffix("-or-material") for remedy in advice.free_first or []]
    assert set(expect.pop("free", [])) <= set(free), free
    assert not set(expect.pop("not_free", [])) & set(free)
    if "robust" in expect:
        assert advice.robustness is not None
        assert advice.robustness.code in expect.pop("robust")
    if best is not None:
        assert set(expect.pop("own_cautions", [])) <= {caution.key for caution in best.cautions}
    near = [pair.design for pair in advice.two_pairs or [] if pair.use == "near"]
    assert set(near) <= set(expect.pop("near_design", near)), near
    reasons = {reason.code for reason in advice.because}
    assert set(expect.pop("because", [])) <= reasons, reasons
    changes = {change.code for change in advice.would_change or []}
    told_of = reasons | changes | {loss.code for loss in advice.gives_up or []}
    assert not set(expect.pop("not_told", [])) & told_of, told_of
    assert set(expect.pop("would_change", [])) <= changes, changes
    assert not expect, f"the test does not know {sorted(expect)}"


@pytest.mark.parametrize("case", CASES, ids=lambda case: case["name"])
def test_advice_keeps_its_shape(case: dict[str, Any]) -> None:
    answer = answer_to(case["name"])
    advice = answer.advice
    assert advice is not None
    assert len(advice.because or []) <= 3
    assert len(advice.gives_up or []) <= 3
    assert set(advice.ranking or []).isdisjoint({entry.option for entry in advice.excluded or []})
    assert sorted({*(advice.ranking or []), *(e.option for e in advice.excluded or [])}) == list(
        range(len(answer.options))
    )
    best, cheapest = advice.recommended, advice.cheapest_that_meets_every_must
    assert (best is None) == (cheapest is None)
    if best is not None and cheapest is not None:
        assert advice.because, "a recommendation has a reason"
        assert cheapest.price is None or best.price is None or cheapest.price <= best.price
        assert advice.next_best is None or advice.next_best.label != best.label
    text = answer.model_dump_json()
    assert "NaN" not in text
    assert "Infinity" not in text


def advice_on(options: list[dict[str, Any]], **visit: Any) -> Any:
    content = {"prescription": {"right": {"sphere": -3.0}, "left": {"sphere": -3.0}}, "options": options, **visit}
    found = compare(check_visit(content), builtin_range(), translator=language("en"), today=TODAY).advice
    assert found is not None
    return found


RESIN = {"design": "single-vision", "material": "hard-resin-150", "coating": "broadband"}


def test_what_is_recommended_may_be_sold_and_not_laid_out() -> None:
    found = advice_on([{**RESIN, "coating": "bare"}], daily_life={"night_driving": "often", "impact": "never"})
    assert found.recommended.index is None
    assert found.recommended.coating.front != "bare"
    assert found.ranking == [0]


def test_a_laid_out_option_is_named_by_its_index() -> None:
    weak = {"right": {"sphere": -0.75}, "left": {"sphere": -0.75}}
    life = {"night_driving": "often", "impact": "never"}
    found = advice_on([{**RESIN, "coating": "bare"}, RESIN], prescription=weak, daily_life=life)
    assert found.recommended.index == 1
    assert found.cheapest_that_meets_every_must.index == 0


def test_an_item_given_in_place_may_be_advised() -> None:
    light = {"n_d": 1.6, "abbe": 45.0, "density_g_cm3": 1.1, "price": 5.0, "tough": True, "least_centre_mm": 1.0}
    found = advice_on([{**RESIN, "material": light}], daily_life={"bothered_weight": "often"})
    assert found.recommended.material == "in-place"


def test_reasons_set_a_figure_beside_that_of_the_worn_pair() -> None:
    found = advice_on(
        [RESIN],
        daily_life={"night_driving": "often", "impact": "never"},
        worn_now={"material": "hard-resin-150", "coating": "bare"},
    )
    (reason,) = (r for r in found.because if r.code == "figure-second-image")
    assert reason.figures["this_level"] < 0.4 < reason.figures["other_level"]
    assert "worn now" in reason.text


def test_a_worn_lens_of_unknown_coating_is_not_compared_by_its_light() -> None:
    found = advice_on(
        [{**RESIN, "material": "polyurethane-urea-153"}],
        daily_life={"bothered_weight": "often", "face_to_face": "never"},
        worn_now={"material": "crown-glass-152"},
    )
    worn = [reason for reason in found.because if "worn now" in reason.text]
    assert all(reason.code in ("figure-thickness", "figure-weight", "figure-fringe") for reason in worn)
    assert worn


def test_the_answer_to_one_question_more_can_only_be_foreseen_where_it_was_not_asked() -> None:
    asked = advice_on([RESIN], daily_life={"impact": "never", "one_good_eye": "no", "child": "no", "price_limit": 900})
    told = {change.code for change in asked.would_change}
    assert not told & {"if-asked-impact", "if-asked-one-eye", "if-asked-child", "if-asked-price"}
    assert {"if-asked-impact", "if-asked-one-eye", "if-asked-child", "if-asked-price"} <= {
        change.code for change in advice_on([RESIN]).would_change
    }


def test_the_greatest_reflectance_is_null_where_even_bare_is_not_noticed() -> None:
    assert advice_on([RESIN], scenes=[]).greatest_reflectance_per_surface is None
    weak = advice_on([RESIN], prescription={"right": {"sphere": -0.75}, "left": {"sphere": -0.75}})
    assert 0.0 < weak.greatest_reflectance_per_surface < 0.04  # under a bare face of 1.5


def test_cautions_of_a_recommended_pair_are_told_though_it_is_not_laid_out() -> None:
    found = advice_on([{**RESIN, "coating": "bare"}], daily_life={"night_driving": "often", "impact": "never"})
    assert "not-promise-none" in {caution.key for caution in found.recommended.cautions}
    assert "not-promise-none" not in {caution.key for caution in found.cautions}  # nothing coated is laid out


def test_unknown_prices_everywhere_still_give_advice() -> None:
    stock = builtin_range()
    free = stock.model_copy(update={"material": tuple(m.model_copy(update={"price": None}) for m in stock.material)})
    content = {"prescription": {"right": {"sphere": -3.0}, "left": {"sphere": -3.0}}, "options": [RESIN]}
    found = compare(check_visit(content), free, translator=language("en"), today=TODAY).advice
    assert found is not None
    assert found.recommended is not None
    assert found.recommended.price is None


def test_a_dearer_currency_changes_no_advice() -> None:
    # about 150 yen to a euro: the same range at 150 times the price
    stock = builtin_range()
    parts = {
        name: tuple(
            item.model_copy(update={"price": None if item.price is None else 150 * item.price})
            for item in getattr(stock, name)
        )
        for name in ("material", "coating", "tint", "design")
    }
    yen = stock.model_copy(update={**parts, "shop": stock.shop.model_copy(update={"currency": "JPY"})})
    content = {"prescription": {"right": {"sphere": -4.0}, "left": {"sphere": -4.0}}, "options": [RESIN]}
    one, other = (compare(check_visit(content), s, translator=language("en"), today=TODAY).advice for s in (stock, yen))
    assert one is not None
    assert other is not None
    assert one.recommended is not None
    assert other.recommended is not None
    assert one.recommended.label == other.recommended.label
    assert math.isclose(other.recommended.price or 0.0, 150 * (one.recommended.price or 0.0))


@pytest.mark.parametrize("file", sorted(resource_dir("demo_patients").glob("*.json")), ids=lambda path: path.stem)
def test_every_demo_wearer_gets_advice_without_promises(file: Path) -> None:
    found = compare(read_visit(file), builtin_range(), translator=language("en")).advice
    assert found is not None
    assert found.recommended is not None or found.two_pairs
    parts = [*(found.because or []), *(found.gives_up or []), *(found.would_change or []), *(found.free_first or [])]
    said = " ".join(part.text for part in parts).lower()
    assert not [
        word
        for word in ("fit to drive", "unbreakable", "get used to", "protects your", "no reflections", "gone")
        if word in said
    ]


def field_on(options: list[dict[str, Any]], **visit: Any) -> Field:
    content = {"prescription": {"right": {"sphere": -3.0}, "left": {"sphere": -3.0}}, "options": options, **visit}
    computed = compute(check_visit(content), builtin_range(), today=TODAY)
    return field_of(computed.case, computed.laid, imbalance_prism_d=0.0)


def sold(field: Field) -> set[tuple[str, str, str]]:
    return {(laid.material.key, laid.front.key, laid.back.key) for laid in field.pool.laid[field.pool.given :]}


def test_a_single_layer_and_glass_are_advised_only_where_they_are_laid_out() -> None:
    life = {"impact": "never"}
    plain = sold(field_on([RESIN], daily_life=life))
    assert plain
    assert not [parts for parts in plain if "magnesium-fluoride" in parts or "glass" in parts[0]]
    with_glass = sold(field_on([{**RESIN, "material": "crown-glass-152"}], daily_life=life))
    layered = {material for material, front, _ in with_glass if front == "magnesium-fluoride"}
    assert layered == {"crown-glass-152"}
    worn = sold(field_on([RESIN], daily_life=life, worn_now={"material": "crown-glass-152"}))
    assert "crown-glass-152" in {material for material, _, _ in worn}


def test_a_dark_tint_is_also_had_with_a_bare_front_and_a_clear_lens_is_not() -> None:
    life = {"night_driving": "never", "impact": "never"}
    dark = sold(field_on([{**RESIN, "tint": "grey-15"}], daily_life=life))
    assert ("hard-resin-150", "bare", "broadband") in dark
    assert ("hard-resin-150", "bare", "broadband") not in sold(field_on([RESIN], daily_life=life))
    turning = sold(field_on([{**RESIN, "tint": "photochromic-grey"}], daily_life=life))
    assert ("hard-resin-150", "bare", "broadband") not in turning


def test_a_tint_is_weighed_alike_on_every_index_and_shown_as_computed() -> None:
    options = [{**RESIN, "tint": 0.8}, {**RESIN, "material": "thiourethane-167", "tint": 0.8}]
    field = field_on(options, daily_life={"night_driving": "often", "impact": "never"})
    column = list(field.levels).index("transmitted")
    shown = field.figures["transmitted"][:2]
    # one figure for bare faces: the higher index is taken to be tinted less, by what its bare faces mirror more
    low, high = (1 - ((n - 1) / (n + 1)) ** 2 for n in (1.498, 1.665))
    assert shown[1] / shown[0] == pytest.approx((low / high) ** 2, abs=0.01)
    assert abs(field.values[0, column] - field.values[1, column]) < 0.03  # what is left is the two films


def test_what_others_see_is_told_by_the_figure_of_the_table() -> None:
    content = {
        "prescription": {"right": {"sphere": -3.0}, "left": {"sphere": -3.0}},
        "options": [{**RESIN, "tint": "grey-15"}, {**RESIN, "tint": "grey-15", "coating": "bare"}, RESIN],
        "daily_life": {"night_driving": "never", "impact": "never"},
    }
    computed = compute(check_visit(content), builtin_range(), today=TODAY)
    field = field_of(computed.case, computed.laid, imbalance_prism_d=0.0)
    answer = compare(check_visit(content), builtin_range(), translator=language("en"), today=TODAY)
    for k, option in enumerate(answer.options):
        assert option.right is not None
        assert option.right.observer_contrast == pytest.approx(float(field.figures["seen-by-others"][k]))


def words_of(advice: Any) -> str:
    parts = [*advice.because, *advice.gives_up, *advice.would_change, *advice.free_first]
    for pair in (advice.next_best, advice.cheapest_that_meets_every_must):
        parts += [*(pair.because or []), *(pair.gives_up or [])] if pair is not None else []
    return " ".join(part.text for part in parts)


@pytest.mark.parametrize("case", CASES, ids=lambda case: case["name"])
def test_reasons_are_in_an_opticians_words(case: dict[str, Any]) -> None:
    advice = answer_to(case["name"]).advice
    assert advice is not None
    if advice.recommended is not None:
        said = words_of(advice)
        assert not [word for word in ("visibility level", "as a count", " 0.00 D", "%(") if word in said]


def test_care_is_told_in_words_that_name_what_harms() -> None:
    advice = answer_to("nail technician with one good eye").advice
    assert advice is not None
    care = [reason for reason in advice.because or [] if reason.code == "figure-care"]
    assert [reason.text for reason in care] == [
        "Care in this life (sprays or solvents): easier than with the next best."
    ]


def test_polycarbonate_beside_solvents_carries_its_caution() -> None:
    advice = answer_to("nail technician with one good eye").advice
    assert advice is not None
    assert advice.next_best is not None
    assert advice.next_best.material == "polycarbonate-159"
    assert "solvent-soft-material" in {caution.key for caution in advice.next_best.cautions}


def test_the_scene_of_a_light_behind_is_named_and_the_window_comes_first() -> None:
    advice = answer_to("window and lamp behind").advice
    assert advice is not None
    texts = [part.text for part in (*(advice.because or []), *(advice.free_first or [])) if "behind" in part.text]
    assert texts
    assert all("window behind" in text for text in texts)


def test_what_decides_against_the_next_best_is_told() -> None:
    for name in ("football at fourteen", "minus twelve, thickness and weight disliked", "bifocal for a child"):
        advice = answer_to(name).advice
        assert advice is not None
        assert [reason for reason in advice.because or [] if "the next best" in reason.text], name


def test_a_lens_that_relies_on_one_eye_is_two_millimetres_thick() -> None:
    advice = answer_to("balance lens, one good eye not asked").advice
    assert advice is not None
    (reason,) = (reason for reason in advice.because or [] if reason.code == "is-tough")
    assert float(str(reason.figures["centre_mm"])) >= 2.0


def test_two_pairs_instead_are_priced_by_their_parts() -> None:
    # hard resin 20 and broadband 70 twice, single vision 60, reading 60
    advice = answer_to("first multifocal at 76, with falls").advice
    assert advice is not None
    assert advice.recommended is not None
    assert (advice.recommended.material, coating(advice.recommended)) == ("hard-resin-150", "broadband")
    (change,) = (change for change in advice.would_change or [] if change.code == "if-two-pairs")
    assert change.figures["price"] == 2 * (20 + 70) + 60 + 60


def test_an_order_of_priorities_is_named_only_by_what_is_better_there() -> None:
    for case in CASES:
        computed = compute(check_visit(case["visit"]), builtin_range(), today=TODAY)
        counsel = advise(computed.case, computed.laid, imbalance_prism_d=computed.vertical_imbalance_prism_d)
        for key, other in counsel.if_first:
            column = list(counsel.field.levels).index(key)
            assert counsel.recommended is not None
            assert counsel.field.values[other, column] > counsel.field.values[counsel.recommended, column]
