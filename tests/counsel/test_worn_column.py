"""The pair worn now beside the options: the same figures by the same functions, nothing of what is missing guessed."""

import datetime as dt
import json
import re
from typing import Any

import pytest
from click.testing import CliRunner

from advisor.cli import main
from advisor.counsel.compare import answer_of, compare, compute
from advisor.counsel.comparison import Comparison, WornFigures
from advisor.counsel.lens_figures import EyeFigures, FormFigures
from advisor.counsel.schemas import schema_path
from advisor.counsel.section_drawing import sections
from advisor.counsel.stock import Range, builtin_range, check_range
from advisor.counsel.visit import check_visit, read_visit
from advisor.resources import resource_dir
from advisor.web.language import language

TODAY = dt.date(2026, 12, 1)
ENGLISH = language("en")
NOW = {
    "vertex_mm": 12,
    "right": {"sphere": -4.25, "cylinder": -1.0, "axis": 175, "prism": [{"amount": 1.0, "base": "in"}]},
    "left": {"sphere": -3.75},
}
THEN = {"vertex_mm": 13, "right": {"sphere": -3.5, "cylinder": -0.5, "axis": 170}, "left": {"sphere": -3.0}}
FITTING = {
    "right": {"pd_mm": 31.5, "height_mm": 20},
    "left": {"pd_mm": 31, "height_mm": 20},
    "vertex_mm": 12,
    "tilt_deg": 8,
    "wrap_deg": 5,
}
ELSEWHERE = {**FITTING, "vertex_mm": 15, "right": {"pd_mm": 33, "height_mm": 17}}
LENS = {"material": "thiourethane-160", "coating": {"front": "bare", "back": "broadband"}, "front_power_d": 3.0}
OPTION = {"design": "single-vision", "material": "hard-resin-150", "coating": "broadband"}


def content(worn: dict[str, Any] | None, **changes: Any) -> dict[str, Any]:
    base = {"wearer": {"birth_year": 1979}, "prescription": NOW, "fitting": FITTING, "options": [OPTION]}
    return {**base, **({} if worn is None else {"worn_now": worn}), **changes}


def answer(worn: dict[str, Any] | None, *, stock: Range | None = None, **changes: Any) -> Comparison:
    visit = check_visit(content(worn, **changes))
    return compare(visit, stock or builtin_range(), translator=ENGLISH, today=TODAY)


def worn_of(found: Comparison) -> WornFigures:
    assert found.worn_now is not None
    return found.worn_now


def codes(worn: WornFigures) -> list[str]:
    return [part.code for part in worn.basis]


# One lens worked out twice: as the worn pair, and as the option of a visit that has the worn pair's prescription.


def flat(part: Any, place: str = "") -> dict[str, Any]:
    """Every figure by its place, so that two lenses can be compared field by field."""
    if isinstance(part, dict):
        return {key: value for name in part for key, value in flat(part[name], f"{place}.{name}").items()}
    if isinstance(part, list | tuple):
        return {key: value for k, one in enumerate(part) for key, value in flat(one, f"{place}.{k}").items()}
    return {place: part}


@pytest.mark.parametrize("worn_fitting", [None, ELSEWHERE])
@pytest.mark.parametrize("worn_prescription", [None, THEN])
def test_a_lens_has_the_same_figures_worn_and_as_an_option_of_its_own_visit(
    worn_prescription: dict[str, Any] | None, worn_fitting: dict[str, Any] | None
) -> None:
    worn = worn_of(answer({**LENS, "prescription": worn_prescription, "fitting": worn_fitting}))
    own: dict[str, Any] = {"prescription": worn_prescription or NOW, "fitting": worn_fitting or FITTING}
    option = answer(None, **own, options=[{"design": "single-vision", **LENS}]).options[0]
    for one, other in ((worn.right, option.right), (worn.left, option.left)):
        assert isinstance(one, EyeFigures)
        assert isinstance(other, EyeFigures)
        figures, expected = (flat(eye.model_dump(exclude_unset=True)) for eye in (one, other))
        assert len(figures) > 100
        assert figures.keys() == expected.keys()
        for place, value in expected.items():
            if isinstance(value, float):
                assert figures[place] == pytest.approx(value, rel=1e-12, abs=1e-12), place
            else:
                assert figures[place] == value, place
        assert {ghost.scene for ghost in one.ghosts} == {
            scene.key for scene in builtin_range().scene if scene.tint_state == "clear"
        }


def test_its_own_prescription_and_fitting_matter() -> None:
    def edges(**more: Any) -> tuple[float | None, float | None]:
        worn = worn_of(answer({**LENS, **more}))
        assert worn.right is not None
        return worn.right.edge_thickest_mm, worn.right.magnification_percent

    now, then, elsewhere = edges(), edges(prescription=THEN), edges(fitting=ELSEWHERE)
    assert now[0] is not None
    assert then[0] is not None
    assert then[0] < now[0]  # a weaker minus lens is thinner at the edge
    assert elsewhere != now


@pytest.mark.parametrize(
    ("more", "code", "words"),
    [
        ({}, "worn-today-today", "worked out at today's prescription and fitting"),
        ({"prescription": THEN}, "worn-own-today", "at its own prescription and today's fitting"),
        ({"fitting": ELSEWHERE}, "worn-today-own", "worked out at today's prescription and its own fitting"),
        ({"prescription": THEN, "fitting": ELSEWHERE}, "worn-own-own", "at its own prescription and fitting"),
    ],
)
def test_it_says_whose_prescription_and_fitting_it_is_worked_out_with(
    more: dict[str, Any], code: str, words: str
) -> None:
    worn = worn_of(answer({**LENS, **more}))
    assert codes(worn) == [code]
    (part,) = worn.basis
    assert words in part.text
    assert "present frame's shape" in part.text
    assert (worn.prescription, worn.fitting) == tuple(
        "own" if n in more else "today" for n in ("prescription", "fitting")
    )


# What is missing.


def test_without_its_material_nothing_is_worked_out_and_the_material_is_asked_for() -> None:
    worn = worn_of(answer({"coating": "broadband", "prescription": THEN, "front_power_d": 4.0}))
    assert (worn.right, worn.left) == (None, None)
    assert (worn.material, worn.design, worn.prescription, worn.fitting) == (None, None, None, None)
    assert worn.coating is not None
    assert worn.label == "material not known, Broadband"
    assert [part.text for part in worn.basis] == ["Say the worn pair's material to see it beside."]


def test_without_its_coating_the_form_stands_and_nothing_of_light() -> None:
    worn = worn_of(answer({"material": "hard-resin-150", "prescription": THEN}))
    coated = worn_of(answer({"material": "hard-resin-150", "coating": "broadband", "prescription": THEN}))
    assert worn.coating is None
    assert worn.label == "Hard resin 1.50, coating not known"
    assert codes(worn) == ["worn-own-today", "worn-no-coating"]
    assert coated.right is not None
    for name in FormFigures.model_fields:
        assert getattr(worn.right, name) == getattr(coated.right, name)
    assert not isinstance(worn.right, EyeFigures)
    dumped = worn.model_dump(exclude_unset=True)["right"]
    assert not {"luminous_reflectance", "ghosts", "second_image", "observer_contrast"} & dumped.keys()


def test_a_declared_figure_that_no_film_can_have_is_not_taken_for_bare() -> None:
    declared = {"label": "Dull", "declared": {"luminous_reflectance": 0.9, "hue": "green"}}
    worn = worn_of(answer({"material": "hard-resin-150", "coating": declared}))
    assert codes(worn) == ["worn-today-today", "worn-coating-unfit"]
    assert worn.label == "Hard resin 1.50, Dull"
    assert worn.right is not None
    assert not isinstance(worn.right, EyeFigures)


def test_a_curve_that_does_not_reach_the_rim_shows_no_figures() -> None:
    worn = worn_of(answer({"material": "hard-resin-150", "coating": "bare", "front_power_d": 34.0}))
    assert codes(worn)[1:] == ["worn-no-form"]
    assert worn.right is worn.left is None


@pytest.mark.parametrize("worn", [None, {}, {"prescription": THEN, "front_power_d": 4.0, "liked": "light"}])
def test_the_key_is_absent_where_neither_material_nor_coating_is_known(worn: dict[str, Any] | None) -> None:
    found = answer(worn)
    assert found.worn_now is None
    assert "worn_now" not in json.loads(found.model_dump_json(exclude_unset=True))


def test_a_bare_lens_of_a_material_never_sold_bare_says_so() -> None:
    worn = worn_of(answer({"material": "polycarbonate-159", "coating": "bare"}))
    assert worn.coating is not None
    assert worn.coating.front == "hard-coat-only"
    assert [note.code for note in worn.notes] == ["hard-coat-assumed"]


# It is no option.


def test_it_is_not_for_sale_and_changes_nothing_of_the_options() -> None:
    with_it, without = answer({**LENS, "prescription": NOW}), answer(None)
    assert not {"price", "index", "refused"} & worn_of(with_it).model_dump().keys()
    assert [option.index for option in with_it.options] == [0]
    for one, other in zip(with_it.options, without.options, strict=True):
        for eye, same in ((one.right, other.right), (one.left, other.left)):
            assert eye is not None
            assert same is not None
            assert eye.model_dump(exclude={"magnification_change_percent"}) == same.model_dump(
                exclude={"magnification_change_percent"}
            )
            assert eye.magnification_change_percent is not None
    assert with_it.advice is not None
    assert without.advice is not None
    assert all(caution.options == [0] for caution in with_it.advice.cautions)


def test_what_the_shop_would_refuse_to_sell_is_worked_out_all_the_same() -> None:
    range_file = {
        "material": [{"key": "old", "n_d": 1.5, "abbe": 58, "density_g_cm3": 1.32, "sphere_range_d": [-1, 1]}]
    }
    stock = check_range(range_file)
    worn = {"material": "old", "coating": "bare"}
    found = answer(worn, stock=stock, options=[{**OPTION, "material": "old"}])
    assert [refusal.code for refusal in found.options[0].refused] == ["sphere-not-made"]
    assert isinstance(worn_of(found).right, EyeFigures)


def test_beside_reading_lenses_it_is_still_single_vision() -> None:
    reading = {"design": "reading", "material": "hard-resin-150", "coating": "bare"}
    eyes = {eye: {"sphere": 1.0, "add": 2.0} for eye in ("right", "left")}
    worn = {"material": "hard-resin-150", "coating": "bare"}
    found = answer(worn, prescription=eyes, options=[reading, {**reading, "design": "single-vision"}])
    assert worn_of(found).design == "single-vision"
    near, far = found.options
    assert near.right is not None
    assert far.right is not None
    assert worn_of(found).right is not None
    assert worn_of(found).right.edge_thickest_mm == far.right.edge_thickest_mm  # type: ignore[union-attr]  # asserted
    assert worn_of(found).right.centre_mm != near.right.centre_mm  # type: ignore[union-attr]  # asserted


def test_a_shop_without_single_vision_lenses_still_shows_it() -> None:
    stock = check_range({"design": [{"key": "only", "kind": "progressive"}]})
    worn = worn_of(answer(LENS, stock=stock, options=[{**OPTION, "design": "only"}]))
    assert worn.design == "single-vision"
    assert isinstance(worn.right, EyeFigures)


def test_it_can_be_left_out_where_nobody_looks_at_it() -> None:
    computed = compute(check_visit(content(LENS | {"prescription": THEN})), builtin_range(), today=TODAY)
    beside = answer_of(computed, translator=ENGLISH, with_advice=False)
    alone = answer_of(computed, translator=ENGLISH, with_advice=False, with_worn_now=False)
    assert alone.worn_now is None
    assert alone.options == beside.options  # sizes are compared with the worn pair either way


def test_its_section_stands_after_the_options() -> None:
    with_it, without = (
        sections(compute(check_visit(content(worn)), builtin_range(), today=TODAY)) for worn in (LENS, None)
    )
    assert [part.index for part in without] == [0, 0]
    assert [part.index for part in with_it] == [0, 0, 1, 1]
    right = worn_of(answer(LENS)).right
    assert right is not None
    assert with_it[2].thickest_mm == pytest.approx(right.edge_thickest_mm, rel=1e-12)
    assert len({(part.width_mm, part.height_mm) for part in with_it}) == 1


# Demo patients, the command and the schema.


def test_a_demo_wearers_old_bare_lenses_show_more_than_coated_ones() -> None:
    visit = read_visit(resource_dir("demo_patients") / "weak-minus-night-driver.json")
    found = compare(visit, builtin_range(), translator=ENGLISH, today=TODAY)
    worn, coated = worn_of(found), found.options[1]
    assert isinstance(worn.right, EyeFigures)
    assert coated.right is not None
    # Fresnel at n 1.498: ((n - 1) / (n + 1))^2 on each of two faces
    face = (0.498 / 2.498) ** 2
    assert worn.right.luminous_reflectance.first_pass_loss == pytest.approx(1 - (1 - face) ** 2, rel=0.02)
    assert worn.right.second_image.strength > 50 * coated.right.second_image.strength


def test_the_command_shows_a_column_and_a_key(tmp_path: Any) -> None:
    path = str(resource_dir("demo_patients") / "office-window-behind.json")
    run = CliRunner().invoke(main, ["--data", str(tmp_path), "compare", path])
    assert run.exit_code == 0
    assert "Worn now: Thiourethane" in re.sub(r"\s+", " ", run.output)
    assert "Worn now: As single vision, worked out at today's prescription and fitting" in run.output
    out = CliRunner().invoke(main, ["--data", str(tmp_path), "compare", path, "--json", "--no-advice"]).output
    assert json.loads(out)["worn_now"]["material"] == "thiourethane-160"


def test_the_published_schema_knows_it() -> None:
    schema = json.loads(schema_path("comparison").read_text(encoding="utf-8"))
    assert "worn_now" in schema["properties"]
    assert "worn_now" not in schema["required"]
    assert {"price", "index"}.isdisjoint(schema["$defs"]["WornFigures"]["properties"])
