"""Every caution beside a near-identical visit that does not call for it.

The wearer, the lens and the limits are given here; nothing expected is taken from the code under test.
"""

import copy
import re
from typing import Any

import pytest

from advisor.counsel.caution_texts import CAUTION_TEXTS
from advisor.counsel.cautions import CAUTIONS
from advisor.counsel.compare import compare, compute
from advisor.counsel.comparison import Caution
from advisor.counsel.stock import Range, builtin_range, check_range
from advisor.counsel.visit import check_visit
from advisor.web.language import language

Change = dict[str, Any]

# A wearer of 36 with weak lenses, measured throughout, in a bare pair of a resin that stops the ultraviolet.
CALM: dict[str, Any] = {
    "date": "2026-12-01",
    "wearer": {"birth_year": 1990},
    "prescription": {
        "written": "2026-06-01", "vertex_mm": 12, "right": {"sphere": -2.0}, "left": {"sphere": -2.0}
    },
    "fitting": {
        "right": {"pd_mm": 31, "height_mm": 20}, "left": {"pd_mm": 31, "height_mm": 20}, "vertex_mm": 12
    },
    "frame": {"a_mm": 52, "b_mm": 38, "dbl_mm": 18, "rim": "full"},
    "daily_life": {},
    "options": [{"design": "single-vision", "material": "polyurethane-urea-153", "coating": "bare"}],
    "scenes": [],
}  # fmt: skip


def changed(changes: Change) -> dict[str, Any]:
    """Return the calm visit with some fields set; a dotted name leads to each."""
    visit = copy.deepcopy(CALM)
    for name, value in changes.items():
        place: Any = visit
        *path, last = name.split(".")
        for part in path:
            place = place[int(part)] if part.isdigit() else place.setdefault(part, {})
        place[last] = value
    return visit


def cautions(changes: Change, stock: Range | None = None) -> dict[str, Caution]:
    answer = compare(check_visit(changed(changes)), stock or builtin_range(), translator=language("en"))
    assert answer.advice is not None
    return {caution.key: caution for caution in answer.advice.cautions}


def tint(luminous_transmittance: float, **more: Any) -> dict[str, Any]:
    """A supplier's finished-lens figure, so that the finished lens passes exactly this."""
    return {"luminous_transmittance": luminous_transmittance, "finished": True, "uv_filter": True, **more}


def material(**fields: Any) -> dict[str, Any]:
    return {"n_d": 1.6, "abbe": 40, "density_g_cm3": 1.3, "uv_cut_nm": 395, **fields}


def mirror(share: float) -> dict[str, Any]:
    """A face that mirrors one share of every wavelength."""
    return {"spectrum": [[nm, share] for nm in range(380, 781, 10)]}


BOTH = ("prescription.right.sphere", "prescription.left.sphere")
TINT, COATING, MATERIAL, DESIGN = ("options.0.tint", "options.0.coating", "options.0.material", "options.0.design")
ADDS: Change = {"prescription.right.add": 2.0, "prescription.left.add": 2.0}
SOLVENTS: Change = {"daily_life.sprays_solvents": "often"}
UNEQUAL: Change = {"prescription.left.sphere": -3.0}


def spheres(power: float) -> Change:
    return dict.fromkeys(BOTH, power)


def toric(sphere: float, cylinder: float, axis: float) -> Change:
    return {f"prescription.{eye}": {"sphere": sphere, "cylinder": cylinder, "axis": axis} for eye in ("right", "left")}


def worn(right: float, left: float | None = None, **more: float) -> Change:
    other = right if left is None else left
    return {"worn_now.prescription": {"right": {"sphere": right, **more}, "left": {"sphere": other, **more}}}


def fitted(mm: float) -> Change:
    return {"fitting.vertex_mm": mm}


# key: (what applies, a near-identical visit to which it does not)
PAIRS: dict[str, list[tuple[Change, Change]]] = {
    "new-glare-exam": [
        ({"daily_life.new_glare": "yes"}, {"daily_life.new_glare": "no"}),
        ({"daily_life.new_glare": "yes"}, {}),
    ],
    "child": [
        ({"daily_life.child": "yes"}, {"daily_life.child": "no"}),
        # with the year alone a child rule counts one year less: 16 by the year may still be 15
        ({"wearer.birth_year": 2010}, {"wearer.birth_year": 2009}),
        ({"wearer": {"birth_date": "2010-12-02"}}, {"wearer": {"birth_date": "2010-12-01"}}),
        ({"daily_life.child": "yes", "wearer": {}}, {"wearer": {}}),
    ],
    "one-eye": [
        ({"daily_life.one_good_eye": "yes"}, {"daily_life.one_good_eye": "no"}),
        ({"prescription.left.balance": True}, {"prescription.left.balance": True, "daily_life.one_good_eye": "no"}),
        ({"prescription.right.balance": True}, {"prescription.right.balance": False}),
    ],
    "impact": [({"daily_life.impact": "often"}, {"daily_life.impact": "sometimes"})],
    "glass-breaks": [
        ({MATERIAL: "crown-glass-152"}, {MATERIAL: "hard-resin-150"}),
        ({MATERIAL: material(density_g_cm3=2.0)}, {MATERIAL: material(density_g_cm3=1.99)}),
    ],
    "not-for-driving-tint": [
        ({TINT: tint(0.079)}, {TINT: tint(0.081)}),
        ({TINT: tint(0.079)}, {TINT: tint(0.08)}),
        # a photochromic lens is judged at its darkest here
        (
            {TINT: tint(0.85, kind="photochromic", luminous_transmittance_dark=0.079)},
            {TINT: tint(0.85, kind="photochromic", luminous_transmittance_dark=0.081)},
        ),
        ({COATING: mirror(0.9)}, {COATING: mirror(0.8)}),  # (1-R)/(1+R): 5.3 and 11.1 %
    ],
    "not-for-night-driving-tint": [
        ({TINT: tint(0.749)}, {TINT: tint(0.751)}),
        ({TINT: tint(0.749)}, {TINT: tint(0.75)}),
        ({TINT: tint(0.5)}, {}),
        ({TINT: tint(0.081)}, {TINT: tint(0.079)}),  # darker still is never for driving, the graver caution
        # a photochromic lens is judged in its clear state here
        (
            {TINT: tint(0.749, kind="photochromic", luminous_transmittance_dark=0.15)},
            {TINT: tint(0.85, kind="photochromic", luminous_transmittance_dark=0.15)},
        ),
        # the finished lens counts, and the same tint passes more light behind coated faces
        ({TINT: 0.73, COATING: "bare"}, {TINT: 0.73, COATING: "broadband"}),
        ({COATING: mirror(0.15)}, {COATING: mirror(0.14)}),  # (1-R)/(1+R): 73.9 and 75.4 %
    ],
    "not-for-driving-design": [
        ({**ADDS, DESIGN: "reading"}, {**ADDS, DESIGN: "progressive"}),
        ({**ADDS, DESIGN: "occupational"}, {**ADDS, DESIGN: "bifocal"}),
        # single vision made to a near power is no better for driving than a reading lens
        ({"prescription.for": "near"}, {"prescription.for": "distance"}),
        ({"prescription.for": "intermediate"}, {}),
        # with an add the sphere is the distance power, whatever the pair is said to be for
        ({"prescription.for": "near"}, {**ADDS, "prescription.for": "near"}),
    ],
    "no-power": [
        (spheres(0.0), {"prescription.right.sphere": 0.0}),
        (spheres(0.0), {**spheres(0.0), **ADDS}),
        (spheres(0.0), toric(0.0, -0.25, 90)),
        (spheres(0.0), {**spheres(0.0), "prescription.right.prism": [{"amount": 1.0, "base": "in"}]}),
    ],
    "solvent-soft-material": [
        ({MATERIAL: "polycarbonate-159", **SOLVENTS}, {MATERIAL: "polyurethane-urea-153", **SOLVENTS}),
        ({MATERIAL: "polycarbonate-159", **SOLVENTS}, {MATERIAL: "polycarbonate-159"}),
        (
            {MATERIAL: "polycarbonate-159", "daily_life.sprays_solvents": "sometimes"},
            {MATERIAL: "polycarbonate-159", "daily_life.sprays_solvents": "never"},
        ),
        # told by its figures where the name does not say it
        (
            {MATERIAL: material(n_d=1.59, abbe=30, tough=True), **SOLVENTS},
            {MATERIAL: material(n_d=1.59, abbe=30), **SOLVENTS},
        ),
    ],
    "no-near": [
        (ADDS, {}),
        (ADDS, {**ADDS, DESIGN: "progressive"}),
        (ADDS, {**ADDS, DESIGN: "reading"}),
        ({**ADDS, "prescription.for": "distance"}, {"prescription.for": "distance"}),
        ({"prescription.left.add": 1.0}, {"prescription.left.add": 0.0}),
    ],
    "rx-old": [
        ({"prescription.written": "2024-11-30"}, {"prescription.written": "2024-12-01"}),
        ({"prescription.written": "2024-11-30"}, {"prescription.written": None}),
        (
            {"date": "2028-02-29", "prescription.written": "2026-02-28"},
            {"date": "2028-02-29", "prescription.written": "2026-03-01"},
        ),
    ],
    "vertex-missing": [
        ({**spheres(-5.0), "prescription.vertex_mm": None}, {**spheres(-5.0)}),
        ({**spheres(-5.0), "prescription.vertex_mm": None}, {**spheres(-4.75), "prescription.vertex_mm": None}),
        (
            {**toric(-4.0, -1.0, 90), "prescription.vertex_mm": None},
            {**toric(-4.0, -0.75, 90), "prescription.vertex_mm": None},
        ),
    ],
    "vertex-differs": [
        ({**spheres(5.0), **fitted(14)}, spheres(5.0)),
        ({**spheres(5.0), **fitted(14)}, {**spheres(4.75), **fitted(14)}),
        ({**spheres(5.0), **fitted(14)}, {**spheres(5.0), **fitted(14), "prescription.vertex_mm": None}),
        ({**spheres(5.0), **fitted(14)}, {**spheres(5.0), "fitting.vertex_mm": None}),
    ],
    "add-for-age": [
        ({**ADDS, "wearer.birth_year": 1992}, {**ADDS, "wearer.birth_year": 1991}),  # 34, 35
        ({"wearer.birth_year": 1980}, {"wearer.birth_year": 1981}),  # 46, 45
        ({"wearer.birth_year": 1980}, {**ADDS, "wearer.birth_year": 1980}),
        ({"wearer.birth_year": 1980}, {"wearer.birth_year": 1980, "prescription.for": "distance"}),
        ({"wearer.birth_year": 1980}, {"wearer": {}}),
        ({**ADDS, "wearer.birth_year": 1995}, {**ADDS, "wearer": {}}),
    ],
    "unequal-add": [
        ({"prescription.right.add": 1.0, "prescription.left.add": 1.25}, ADDS),
        ({"prescription.right.add": 1.0}, {"prescription.right.add": 1.0, "prescription.left.balance": True}),
    ],
    "large-change": [
        (worn(-0.75), worn(-1.0)),  # 1.25 and 1.00 D
        (worn(-3.25), {}),
        (worn(-0.95), worn(-1.0)),  # 1.05 D
        # each eye against its own lens
        (
            {"prescription.left.sphere": -4.0, **worn(-2.0, -2.5)},
            {"prescription.left.sphere": -4.0, **worn(-2.0, -4.0)},
        ),
        # the axis of a weak cylinder says little; from 0.50 on both it counts
        (
            {**toric(-2.0, -0.5, 60), **worn(-2.0, cylinder=-0.5, axis=20)},
            {**toric(-2.0, -0.5, 60), **worn(-2.0, cylinder=-0.25, axis=20)},
        ),
        ({**worn(-1.0), "wearer.birth_year": 1961}, {**worn(-1.25), "wearer.birth_year": 1961}),  # 65 years
        ({**worn(-1.0), "wearer.birth_year": 1961}, {**worn(-1.0), "wearer.birth_year": 1962}),
        ({**worn(-1.0), "daily_life.falls": "yes"}, {**worn(-1.0), "daily_life.falls": "no"}),
        ({**worn(-1.0), "daily_life.falls": "yes"}, worn(-1.0)),
        (
            {**toric(-2.0, -1.0, 91), **worn(-2.0, cylinder=-1.0, axis=80)},
            {**toric(-2.0, -1.0, 90), **worn(-2.0, cylinder=-1.0, axis=80)},
        ),
        # across 180: 175 to 6 is a turn of 11, not of 169
        (
            {**toric(-2.0, -1.0, 6), **worn(-2.0, cylinder=-1.0, axis=175)},
            {**toric(-2.0, -1.0, 5), **worn(-2.0, cylinder=-1.0, axis=175)},
        ),
        # exactly 1.00 D along every meridian is not over 1.00, whatever the rounding of sin2 of 37 degrees
        (
            {**toric(-3.25, -0.75, 37), **worn(-2.0, cylinder=-0.75, axis=37)},
            {**toric(-3.0, -0.75, 37), **worn(-2.0, cylinder=-0.75, axis=37)},
        ),
    ],
    "near-vertical-imbalance": [
        # Prentice: 1 cm x 1.00 D is 1.0 prism dioptre
        ({**ADDS, **UNEQUAL}, {**ADDS, "prescription.left.sphere": -2.75}),
        ({**ADDS, **UNEQUAL}, UNEQUAL),
        ({**UNEQUAL, "daily_life.first_multifocal": "yes"}, {**UNEQUAL, "daily_life.first_multifocal": "no"}),
        ({**UNEQUAL, **worn(-2.0, -2.0)}, {**UNEQUAL, **worn(-1.5, -2.5)}),
        ({**UNEQUAL, **worn(-2.0, -2.5)}, {**UNEQUAL, **worn(-2.0, -2.75)}),
        ({**ADDS, **UNEQUAL, DESIGN: "progressive"}, {**ADDS, **UNEQUAL, DESIGN: "reading"}),
        ({**ADDS, **UNEQUAL}, {**ADDS, **UNEQUAL, "prescription.left.balance": True}),
        ({**ADDS, **UNEQUAL}, {**ADDS, **UNEQUAL, **toric(-2.0, -1.0, 180)}),
    ],
    "fitting-height-too-low": [
        # 18 mm is the least height of the built-in progressive
        (
            {**ADDS, DESIGN: "progressive", "fitting.left.height_mm": 17.9},
            {**ADDS, DESIGN: "progressive", "fitting.left.height_mm": 18.0},
        ),
        (
            {**ADDS, DESIGN: "progressive", "fitting.left.height_mm": 17.9},
            {**ADDS, DESIGN: "single-vision", "fitting.left.height_mm": 17.9},
        ),
        # not measured, but half the box is already too low
        (
            {DESIGN: "progressive", "fitting": {}, "frame.b_mm": 35},
            {DESIGN: "progressive", "fitting": {}, "frame.b_mm": 36},
        ),
    ],
    "decentred-outwards": [
        ({"fitting.right.pd_mm": 35.1}, {"fitting.right.pd_mm": 35.0}),  # (52 + 18) / 2 = 35
        ({"fitting.left.pd_mm": 36.0}, {"fitting.left.pd_mm": 36.0, "frame.a_mm": 54}),
        ({"frame.a_mm": 40}, {"frame.a_mm": 40, "fitting": {}}),  # a default PD is no measurement
        ({"fitting.left.pd_mm": 36.0}, {"fitting.left.pd_mm": 36.0, "frame.a_mm": None}),
        ({"fitting.left.pd_mm": 36.0}, {"fitting.left.pd_mm": 36.0, "frame.dbl_mm": None}),
    ],
    "steps": [
        ({"wearer.birth_year": 1961}, {"wearer.birth_year": 1962}),  # 65, 64
        ({"daily_life.falls": "yes"}, {"daily_life.falls": "no"}),
        ({**ADDS, DESIGN: "progressive"}, {**ADDS, DESIGN: "single-vision"}),
        ({**ADDS, DESIGN: "bifocal"}, {**ADDS, DESIGN: "reading"}),
    ],
    "drilled-caution": [({"frame.rim": "drilled"}, {"frame.rim": "grooved"})],
    "heat-soft-material": [
        ({MATERIAL: "episulfide-174"}, {MATERIAL: "thiourethane-167"}),
        ({MATERIAL: "episulfide-174"}, {MATERIAL: "titanium-glass-180"}),
        ({MATERIAL: material(n_d=1.70)}, {MATERIAL: material(n_d=1.69)}),
    ],
    "uv-not-darkness": [
        ({TINT: 0.5, MATERIAL: "hard-resin-150"}, {TINT: 0.5}),
        ({TINT: 0.5, MATERIAL: "hard-resin-150"}, {MATERIAL: "hard-resin-150"}),
        (
            {TINT: tint(0.5, uv_filter=False), MATERIAL: "hard-resin-150"},
            {TINT: tint(0.5, uv_filter=True), MATERIAL: "hard-resin-150"},
        ),
        ({TINT: 0.5, MATERIAL: material(uv_cut_nm=379)}, {TINT: 0.5, MATERIAL: material(uv_cut_nm=380)}),
        ({TINT: 0.5, MATERIAL: material(uv_cut_nm=None)}, {TINT: 0.5, MATERIAL: material()}),  # unstated is no filter
    ],
    "night-tint-no-benefit": [
        ({TINT: 0.85, "daily_life.night_driving": "often"}, {"daily_life.night_driving": "often"}),
        (
            {TINT: 0.85, "daily_life.night_driving": "sometimes"},
            {TINT: 0.85, "daily_life.night_driving": "never"},
        ),
        ({TINT: 0.85}, {TINT: 0.85, "daily_life.night_driving": "never"}),  # not asked is never read as never
        ({TINT: 0.85, "daily_life": None}, {"daily_life": None}),
    ],
    "photochromic-windscreen": [({TINT: tint(0.85, kind="photochromic")}, {TINT: tint(0.85, kind="fixed")})],
    "polarising": [({TINT: tint(0.15, kind="polarising")}, {TINT: tint(0.15, kind="fixed")})],
    "tint-colour-unknown": [
        ({TINT: 0.85}, {}),
        ({TINT: 0.85}, {TINT: "grey-50"}),  # nobody asks whether plain grey or brown is a strong pink
        ({TINT: "light-85"}, {TINT: "brown-75"}),
        ({TINT: tint(0.8, label="Yellow 80")}, {TINT: tint(0.8, label="Smoky gray 80")}),
    ],
    "blue-film-no-relief": [
        ({COATING: "blue-reflecting"}, {COATING: "broadband"}),
        ({COATING: mirror(0.081)}, {COATING: mirror(0.079)}),
        ({COATING: {"back": mirror(0.081)}}, {COATING: {"back": mirror(0.079)}}),
        ({COATING: "blue-reflecting"}, {MATERIAL: material(n_d=1.9), COATING: "bare"}),  # no film, no claim
    ],
    "not-promise-none": [
        ({COATING: "broadband"}, {COATING: "hard-coat-only"}),
        ({COATING: {"back": "broadband"}}, {}),
        ({COATING: {"front": {"declared": {"luminous_reflectance": 0.01}}}}, {}),
    ],
    "coating-adds-no-strength": [
        ({COATING: "broadband"}, {COATING: "hard-coat-only"}),
        ({COATING: {"front": "magnesium-fluoride"}}, {COATING: {"front": "hard-coat-only"}}),
    ],
}  # fmt: skip

CASES = [(key, place, *pair) for key, pairs in PAIRS.items() for place, pair in enumerate(pairs)]


@pytest.mark.parametrize(("key", "place", "call", "spare"), CASES, ids=[f"{case[0]}-{case[1]}" for case in CASES])
def test_a_caution_applies_to_one_and_not_to_the_other(key: str, place: int, call: Change, spare: Change) -> None:
    assert key in cautions(call)
    assert key not in cautions(spare), place


def test_every_caution_has_its_pair_of_visits_and_its_words() -> None:
    tested_elsewhere = {"not-eye-protection", "restricted-supply"}
    assert set(PAIRS) | tested_elsewhere == set(CAUTIONS) == set(CAUTION_TEXTS)


def test_the_calm_visit_has_the_one_caution_that_always_applies() -> None:
    assert list(cautions({})) == ["not-eye-protection"]


def test_nothing_said_about_the_wearer_brings_no_caution_but_that_one() -> None:
    bare_visit: Change = {"wearer": None, "fitting": None, "frame": None, "daily_life": None}
    assert list(cautions(bare_visit)) == ["not-eye-protection"]


@pytest.mark.parametrize(
    ("region", "call", "applies"),
    [
        ("uk", {"wearer.birth_year": 2010}, True),
        ("uk", {"wearer": {}, "daily_life.child": "yes"}, True),
        ("uk", {"wearer.birth_year": 2009}, False),
        ("eu", {"wearer.birth_year": 2010}, False),
        ("international", {"wearer.birth_year": 2010}, False),
    ],
)
def test_supply_to_the_young_is_restricted_in_the_uk(region: str, call: Change, applies: bool) -> None:
    assert ("restricted-supply" in cautions(call, check_range({"shop": {"region": region}}))) is applies


def test_a_height_is_not_called_too_low_when_neither_it_nor_the_box_was_measured() -> None:
    tall = {"key": "tall", "kind": "progressive", "least_height_mm": 30}
    stock = check_range({"design": [tall], "shop": {"default_options": [{"design": "tall"}]}})
    call: Change = {"options": None, "fitting": {}, "frame": {}}
    assert "fitting-height-too-low" not in cautions(call, stock)
    assert "fitting-height-too-low" in cautions({**call, "frame": {"b_mm": 50}}, stock)


def test_a_caution_names_the_options_it_applies_to_and_the_gravest_comes_first() -> None:
    pairs: list[Change] = [
        {"coating": "broadband", "tint": tint(0.15)},
        {"coating": "bare"},
        {"coating": "bare", "tint": tint(0.15)},
    ]
    found = cautions({"options": [{"design": "single-vision", **pair} for pair in pairs]})
    assert found["not-for-night-driving-tint"].options == [0, 2]
    assert found["not-promise-none"].options == [0]
    assert found["not-eye-protection"].options == [0, 1, 2]
    assert next(iter(found)) == "not-for-night-driving-tint"
    assert list(found)[-1] == "not-eye-protection"


@pytest.mark.parametrize(("key", "call"), [(key, pairs[0][0]) for key, pairs in PAIRS.items()], ids=list(PAIRS))
def test_a_caution_reads_as_a_sentence_with_its_figures_rule_and_source(key: str, call: Change) -> None:
    caution = cautions(call)[key]
    assert caution.rule
    assert caution.source
    assert re.fullmatch(r"[A-Z].*\.", caution.text)
    assert not re.search(r"%\(|%%|–|nan|None", caution.text)
    placeholders = re.findall(r"%\((\w+)\)", CAUTION_TEXTS[key].text_for(caution.figures))
    assert sorted(placeholders) == sorted(caution.figures)


def test_figures_are_written_as_a_person_writes_them() -> None:
    text = cautions({**spheres(5.0), **fitted(14)})["vertex-differs"].text
    assert text.startswith("Fitted at 14.0 mm, tested at 12.0 mm:")
    assert "passes 15.0 % of the light, below 75 %:" in cautions({TINT: tint(0.15)})["not-for-night-driving-tint"].text
    # a figure just below a limit is cut, never rounded up to the limit it is said to be below
    assert "passes 74.9 % of" in cautions({TINT: tint(0.7499)})["not-for-night-driving-tint"].text
    assert "changes by up to 1.25 D against" in cautions(worn(-0.75))["large-change"].text  # a size, without a sign
    low = cautions({DESIGN: "progressive", "fitting.left.height_mm": 17.9})["fitting-height-too-low"].text
    assert low == "The fitting height of 17.9 mm is below the 18.0 mm this design needs."
    assert "differ by 1.00 prism" in cautions({**ADDS, **UNEQUAL})["near-vertical-imbalance"].text


# What the program never says (facts of the trade, "cautions").
FORBIDDEN = ("fit to drive", "safe to drive", "unbreakable", "shatterproof", "100 % UV", "anti-glare", "no reflection",
             "get used to", "protects your eyes", "invisible")  # fmt: skip


@pytest.mark.parametrize("key", CAUTION_TEXTS)
def test_no_text_promises_what_nobody_can(key: str) -> None:
    words = CAUTION_TEXTS[key]
    for text in (words.text, words.sheet):
        assert not [phrase for phrase in FORBIDDEN if phrase.lower() in text.lower()]


@pytest.mark.parametrize("key", [key for key, words in CAUTION_TEXTS.items() if words.sheet])
def test_the_words_for_the_wearer_are_short_sentences_without_figures(key: str) -> None:
    sheet = CAUTION_TEXTS[key].sheet
    assert sheet % {} == sheet
    sentences = [sentence for sentence in re.split(r"(?<=[.?!])\s+", sheet) if sentence]
    assert all(len(sentence.split()) <= 20 for sentence in sentences)  # clear print guidance: 15 to 20 words


def test_the_wearer_is_told_of_everything_grave() -> None:
    for key in ("not-eye-protection", "child", "one-eye", "not-for-driving-tint", "not-for-night-driving-tint",
                "not-for-driving-design", "new-glare-exam", "steps", "no-near", "glass-breaks"):  # fmt: skip
        assert CAUTION_TEXTS[key].sheet


def test_a_large_change_tells_only_what_is_large() -> None:
    turned: Change = {**toric(-2.0, -1.0, 91), **worn(-2.0, cylinder=-1.0, axis=80)}
    both: Change = {**toric(-4.0, -1.0, 91), **worn(-2.0, cylinder=-1.0, axis=80)}
    texts = [cautions(call)["large-change"].text for call in (worn(-0.75), turned, both)]
    assert ["axis" in text for text in texts] == [False, True, True]
    assert ["power" in text for text in texts] == [True, False, True]
    assert not [text for text in texts if " 0.0 " in text or "0.00" in text]


def test_the_caution_on_steps_names_the_wearer_it_is_about() -> None:
    child: Change = {**ADDS, DESIGN: "bifocal", "wearer": {"birth_date": "2018-03-01"}}
    assert "Older" not in cautions(child)["steps"].text
    assert cautions({"wearer.birth_year": 1950})["steps"].text.startswith("Older or unsteady wearers:")


def test_one_function_says_who_relies_on_one_eye() -> None:
    # the caution, the centre and the must agree for a balance lens without an answer
    balanced: Change = {"prescription.left.balance": True, MATERIAL: "polycarbonate-159", "daily_life.impact": "never"}
    assert "one-eye" in cautions(balanced)
    assert compute(check_visit(changed(balanced)), builtin_range()).forms.shape.centre_mm.min() >= 2.0
    two_eyes = changed({**balanced, "daily_life.one_good_eye": "no"})
    assert "one-eye" not in cautions({**balanced, "daily_life.one_good_eye": "no"})
    # the material's own least centre
    assert compute(check_visit(two_eyes), builtin_range()).forms.shape.centre_mm.min() == pytest.approx(1.5)
