"""Ghost images of a whole comparison: one chain worked out again, and what must hold for every wearer."""

import copy
import datetime as dt
import math
import random
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from advisor.counsel import ghosts
from advisor.counsel.compare import compare
from advisor.counsel.comparison import Comparison
from advisor.counsel.lens_figures import EyeFigures, Ghost
from advisor.counsel.stock import Range, builtin_range, check_range
from advisor.counsel.visit import check_visit, read_visit
from advisor.optics.ghost_inputs import LensOnFace
from advisor.optics.ghost_scene import see_ghosts
from advisor.resources import resource_dir
from advisor.web.language import language

TODAY = dt.date(2026, 12, 1)
DEMO = sorted(resource_dir("demo_patients").glob("*.json"))
ORDER = ("not noticed", "at the limit", "only if looked for", "noticeable", "plain")


def mirror(share: float) -> dict[str, Any]:
    """A measured face that mirrors one share of every wavelength."""
    return {"spectrum": [[nm, share] for nm in range(380, 781, 10)]}


def answer(content: dict[str, Any], stock: Range | None = None, *, advice: bool = False) -> Comparison:
    checked = check_visit(copy.deepcopy(content))
    return compare(checked, stock or builtin_range(), translator=language("en"), with_advice=advice, today=TODAY)


def eyes_of(found: Comparison) -> Iterator[EyeFigures]:
    for option in found.options:
        yield from (eye for eye in (option.right, option.left) if eye is not None)


def ghosts_of(found: Comparison) -> Iterator[Ghost]:
    for eye in eyes_of(found):
        yield from eye.ghosts


# --- one chain, written out again from the published formulas ---------------------------------------------------------

R = 0.04
AGE, PIGMENT, VERTEX_M = 38, 1.0, 0.012
PUPIL_M = VERTEX_M + 0.003
N, F1, T_M, SPHERE = 1.5, 4.0, 0.002, -4.0
K1 = F1 / (N - 1)
F2 = SPHERE - F1 / (1 - T_M / N * F1)
K2 = -F2 / (N - 1)

LAMP: dict[str, Any] = {
    "key": "lamp", "kind": "small-source", "where": "ahead", "intensity_cd": 350, "distance_m": 50, "size_deg": 0.17,
    "direction_deg": 4, "background_cd_m2": 0.1, "adapting_cd_m2": 0.1, "adapting_field_deg": 60,
    "exposure_s": 2.0, "illuminant": "LED-B4",
}  # fmt: skip
WINDOW: dict[str, Any] = {
    "key": "window", "kind": "extended", "where": "behind", "luminance_cd_m2": 3000, "size_deg": [28, 33],
    "incidence_deg": 0, "fixation_m": 0.6, "distance_m": 2.0, "background_cd_m2": 120, "adapting_cd_m2": 120,
    "adapting_field_deg": 46, "exposure_s": 2.0, "illuminant": "D65",
}  # fmt: skip
WEARER: dict[str, Any] = {
    "wearer": {"birth_year": 2026 - AGE, "eye_colour": "light"},
    "prescription": {"vertex_mm": 12.0, "right": {"sphere": SPHERE}, "left": {"sphere": SPHERE}},
    "fitting": {
        "right": {"pd_mm": 31, "height_mm": 19}, "left": {"pd_mm": 31, "height_mm": 19},
        "vertex_mm": 12.0, "tilt_deg": 0, "wrap_deg": 0,
    },
    "frame": {"a_mm": 50, "b_mm": 38, "dbl_mm": 18, "rim": "full"},
    "options": [
        {
            "design": "single-vision", "material": {"n_d": N, "abbe": 58, "density_g_cm3": 1.3},
            "coating": {"front": mirror(R), "back": mirror(R)}, "front_power_d": F1, "centre_mm": 1000 * T_M,
        }
    ],
}  # fmt: skip


class Beam:
    """Vergence and height of a beam, step by step; mirrors inside have 2n times the curvature."""

    def __init__(self, vergence: float) -> None:
        self.vergence, self.height = vergence, 1.0

    def bend(self, power: float) -> "Beam":
        self.vergence += power
        return self

    def travel(self) -> "Beam":
        step = 1 - T_M / N * self.vergence
        self.height *= step
        self.vergence /= step
        return self

    @property
    def at_pupil(self) -> float:
        return self.vergence / (1 - PUPIL_M * self.vergence)

    @property
    def magnification(self) -> float:
        return 1 / (self.height * (1 - PUPIL_M * self.vergence))


def direct(distance_m: float) -> Beam:
    return Beam(-1 / distance_m).bend(F1).travel().bend(F2)


def ghost_beam(path: str, distance_m: float) -> Beam:
    start = Beam(-1 / distance_m)
    if path == "ahead-inner":  # the back is concave to the light inside and the front again on the way home
        return start.bend(F1).travel().bend(-2 * N * K2).travel().bend(2 * N * K1).travel().bend(F2)
    if path == "behind-back":
        return start.bend(2 * K2)
    return start.bend(F2).travel().bend(2 * N * K1).travel().bend(F2)


def pupil_watson_yellott(flux: float) -> float:
    """Watson & Yellott 2012, J Vis 12(10):12, equations for both eyes."""
    x = math.pow(flux / 846, 0.41)
    size = 7.75 - 5.75 * x / (x + 2)
    return size + (AGE - 28.58) * (0.02132 - 0.009562 * size)


def veil_cie146(angle: float) -> float:
    """CIE 146:2002, general disability glare."""
    return 10 / angle**3 + (5 / angle**2 + 0.1 * PIGMENT / angle) * (1 + (AGE / 62.5) ** 4) + 0.0025 * PIGMENT


def threshold_adrian(background: float, arcmin: float) -> float:
    """Adrian 1989, k = 2.6, 2 s, under 64 years, either of the two upper pieces."""
    arcmin, log = min(arcmin, 60.0), math.log10(background)
    if background >= 0.6:
        phi = math.log10(4.1925 * math.pow(background, 0.1556)) + 0.1684 * math.pow(background, 0.5867)
        root = 0.05946 * math.pow(background, 0.466)
    else:
        phi = math.pow(10, -0.072 + 0.3372 * log + 0.0866 * log**2)
        root = math.pow(10, -1.256 + 0.319 * log)
    a, b = math.log10(arcmin) + 0.523, log + 6
    size = 0.36 - 0.0972 * a**2 / (a**2 - 2.513 * a + 2.7895)
    level = 0.355 - 0.1217 * b**2 / (b**2 - 10.4 * b + 52.28)
    slow = (math.hypot(size, level) / 2.1 + 2.0) / 2.0
    return 2.6 * (phi / arcmin + root) ** 2 * slow * ((AGE - 19) ** 2 / 2160 + 0.99)


def found(path: str, scene: dict[str, Any], **more: Any) -> Ghost:
    eye = next(eyes_of(answer(WEARER | more, check_range({"scene": [scene]}))))
    (ghost,) = (ghost for ghost in eye.ghosts if ghost.path == path)
    return ghost


@pytest.mark.parametrize(
    ("path", "scene", "expected"),
    [  # -4.00, n 1.5, F1 +4, t 2 mm; computed twice, by matrices and by an exact trace
        ("ahead-inner", LAMP | {"distance_m": 1e5, "intensity_cd": 1e9}, -25.27),
        ("behind-back", WINDOW | {"distance_m": 1e5}, 32.09),
        ("behind-front", WINDOW | {"distance_m": 1e5}, 8.39),
    ],
)
def test_published_vergences(path: str, scene: dict[str, Any], expected: float) -> None:
    ghost = found(path, scene)
    assert ghost.vergence_d == pytest.approx((expected, expected), abs=0.005)


@pytest.mark.parametrize("lamps", [1, 2])
def test_a_lamp_mirrored_twice_from_the_lens_to_the_verdict(lamps: int) -> None:
    ghost = found("ahead-inner", LAMP | ({"lamps": 2, "spacing_m": 10.0} if lamps == 2 else {}))
    passed = (1 - R) / (1 + R)  # all bounces of two like faces
    beam, straight, focus = ghost_beam("ahead-inner", 50), direct(50), direct(math.inf).at_pupil
    one_lx = 350 / 50**2
    seen_lx = lamps * one_lx * passed * straight.magnification**2
    pupil = pupil_watson_yellott(passed * 0.1 * math.pi / 4 * 60**2 + 3283 * seen_lx)  # deg^2 in a steradian
    blur = pupil / 1000 * abs(beam.at_pupil - focus) / abs(beam.magnification)  # before the lens
    bare = math.radians(0.17)
    luminance = one_lx * R**2 * passed / (math.pi / 4 * (blur**2 + bare**2))
    size = math.degrees(abs(beam.magnification) * math.hypot(blur, bare))
    apart = abs(4 * (beam.magnification - straight.magnification))
    background = passed * 0.1 + seen_lx * veil_cie146(apart)
    threshold = threshold_adrian(background, 60 * size)

    assert ghost.strength == pytest.approx(R**2, rel=1e-9)
    assert ghost.vergence_d == pytest.approx((beam.vergence, beam.vergence), rel=1e-9)
    assert ghost.defocus_d == pytest.approx(2 * (beam.at_pupil - focus,), rel=1e-9)
    assert ghost.pupil_mm == pytest.approx(pupil, rel=1e-4)  # 3283 is rounded
    assert ghost.separation_deg == pytest.approx(apart, rel=1e-9)
    assert ghost.size_deg == pytest.approx((size, size), rel=1e-4)
    assert ghost.luminance_cd_m2 == pytest.approx(luminance, rel=3e-4)
    assert ghost.background_cd_m2 == pytest.approx(background, rel=1e-9)
    assert ghost.threshold_cd_m2 == pytest.approx(threshold, rel=1e-6)
    assert ghost.visibility_level == pytest.approx(luminance / threshold, rel=3e-4)
    assert ghost.contrast == pytest.approx(luminance / background, rel=3e-4)
    assert ghost.haze is (size > 1 or size / 2 > apart)
    assert ghost.past_range is False


@pytest.mark.parametrize("path", ["behind-back", "behind-front"])
def test_a_window_behind_from_the_lens_to_the_contrast(path: str) -> None:
    ghost = found(path, WINDOW)
    passed = (1 - R) / (1 + R)
    beam, focus = ghost_beam(path, 2.0), direct(0.6).at_pupil
    pupil = pupil_watson_yellott(passed * 120 * math.pi / 4 * 46**2)
    blur = pupil / 1000 * abs(beam.at_pupil - focus) / abs(beam.magnification)
    sizes = [math.radians(part) for part in (28, 33)]  # much larger than the blur: as bright as the window allows
    strength = R if path == "behind-back" else R * (1 - R) ** 2
    luminance = 3000 * strength * math.prod(min(1.0, size / blur) for size in sizes)

    assert ghost.strength == pytest.approx(strength, rel=1e-9)
    assert ghost.vergence_d == pytest.approx((beam.vergence, beam.vergence), rel=1e-9)
    assert ghost.pupil_mm == pytest.approx(pupil, rel=1e-9)
    assert ghost.luminance_cd_m2 == pytest.approx(luminance, rel=1e-9)
    assert ghost.background_cd_m2 == pytest.approx(passed * 120, rel=1e-9)  # what is looked at, and no veil
    assert ghost.contrast == pytest.approx(luminance / (passed * 120), rel=1e-9)
    assert sorted(size or 0 for size in ghost.size_deg or ()) == pytest.approx(
        [min(180, math.degrees(abs(beam.magnification) * math.hypot(blur, size))) for size in sizes], rel=1e-9
    )
    assert ghost.separation_deg is None
    assert ghost.past_range is True


def test_a_young_eye_can_focus_on_a_near_ghost() -> None:
    # defocus of the ghost is -25.3 D at the back vertex, about -13 D from the eye's focus; Hofstetter 15 - 0.25 age
    young = found("ahead-inner", LAMP, wearer={"birth_year": 2016, "eye_colour": "light"})
    old = found("ahead-inner", LAMP, wearer={"birth_year": 1956, "eye_colour": "light"})
    assert young.accommodated is not None
    assert old.accommodated is not None
    assert young.defocus_d == old.defocus_d
    assert young.defocus_d is not None
    assert young.accommodated.defocus_d is not None
    amplitude = 15 - 0.25 * 10
    left = min(0.0, (young.defocus_d[0] or 0) + amplitude)
    assert young.accommodated.defocus_d[0] == pytest.approx(left, abs=1e-9)
    assert old.accommodated.defocus_d == old.defocus_d  # no amplitude is left at 70


# --- what the shown wearers must show ---------------------------------------------------------------------------------


def demo(name: str) -> dict[str, Any]:
    wearer = read_visit(resource_dir("demo_patients") / f"{name}.json")
    return wearer.model_dump(mode="json", by_alias=True, exclude_none=True)


def worst(eye: EyeFigures) -> Ghost:
    return max(eye.ghosts, key=lambda ghost: ghost.visibility_level or 0.0)


def test_the_night_driver_notices_a_bare_lens_and_not_a_coated_one() -> None:
    bare, coated, *_ = answer(demo("weak-minus-night-driver")).options
    for option, least, most in ((bare, "noticeable", "plain"), (coated, "not noticed", "not noticed")):
        for eye in (option.right, option.left):
            assert eye is not None
            assert ORDER.index(least) <= ORDER.index(worst(eye).verdict or "") <= ORDER.index(most)
    # facts of the model: weak minus makes the sharpest ghosts; it is a second light beside the lamp, not a haze
    assert bare.right is not None
    assert worst(bare.right).path == "ahead-inner"
    assert worst(bare.right).haze is False


def test_a_prescribed_prism_throws_the_coated_ghost_clear_of_its_lamp() -> None:
    content = demo("prescribed-prism")
    plain = copy.deepcopy(content)
    for eye in ("right", "left"):
        plain["prescription"][eye].pop("prism")
    with_prism, without = (next(eyes_of(answer(visit))) for visit in (content, plain))
    for here, there in zip(with_prism.ghosts, without.ghosts, strict=True):
        if here.path != "ahead-inner":
            continue
        assert here.separation_deg is not None
        assert there.separation_deg is not None
        assert here.separation_deg > max(size or 0 for size in here.size_deg or ()) / 2  # clear: past its own edge
        assert (here.background_cd_m2 or 0) < (there.background_cd_m2 or 0)  # out of the veil
        assert (here.visibility_level or 0) > (there.visibility_level or 0)
    # P[((3n-1)/(n-1)) M_ghost - M_direct] for the base in and up of 2.0 and 0.5, thin form, M about 0.75 and 1:
    # 2.06/100 x (7.0 x 0.75 - 1) is 5 degrees
    night = with_prism.ghosts[0]
    assert night.path == "ahead-inner"
    assert 3.5 < (night.separation_deg or 0) < 7.0


def test_haze_is_never_more_than_noticeable_and_never_hides_that_it_is_haze() -> None:
    seen = 0
    for path in DEMO:
        for ghost in ghosts_of(answer(read_visit(path).model_dump(mode="json", by_alias=True, exclude_none=True))):
            width, height = ghost.size_deg or (0.0, 0.0)
            diameter = math.sqrt((width or 0) * (height or 0))
            reaches = ghost.separation_deg is not None and diameter / 2 > ghost.separation_deg
            assert ghost.haze is bool(diameter > 1 or reaches or ghost.spread)
            if ghost.haze:
                seen += 1
                assert ghost.verdict != "plain"
    assert seen > 20


# --- what must hold for every wearer ----------------------------------------------------------------------------------

faces = st.floats(0.001, 0.15)


@settings(max_examples=25, deadline=None, derandomize=True)
@given(faces, faces, st.floats(0.05, 0.999), st.integers(-40, 32), st.sampled_from([0, -8, 6]), st.booleans())
def test_less_mirrored_on_both_faces_never_raises_a_ghost(
    front: float, back: float, factor: float, sphere: int, cylinder: int, tinted: bool
) -> None:
    power = {"sphere": sphere / 4, "cylinder": cylinder / 4, "axis": 30} if cylinder else {"sphere": sphere / 4}
    options = [
        {
            "design": "single-vision", "material": {"n_d": 1.6, "abbe": 41, "density_g_cm3": 1.3},
            "coating": {"front": mirror(front * share), "back": mirror(back * share)},
            **({"tint": {"luminous_transmittance": 0.5}} if tinted else {}),
        }
        for share in (1.0, factor)
    ]  # fmt: skip
    more, less = answer(WEARER | {"prescription": {"right": power, "left": power}, "options": options}).options
    if more.refused:
        return
    for eye in ("right", "left"):
        for high, low in zip(getattr(more, eye).ghosts, getattr(less, eye).ghosts, strict=True):
            assert (high.path, high.scene) == (low.path, low.scene)
            assert low.luminance_cd_m2 <= high.luminance_cd_m2 * (1 + 1e-12)
            assert low.visibility_level <= high.visibility_level * (1 + 1e-12)
            assert low.accommodated.visibility_level <= high.accommodated.visibility_level * (1 + 1e-12)


def whole(value: Any, place: str = "") -> Iterator[tuple[str, Any]]:
    if isinstance(value, dict):
        for name, part in value.items():
            yield from whole(part, f"{place}.{name}")
    elif isinstance(value, list):
        for at, part in enumerate(value):
            yield from whole(part, f"{place}[{at}]")
    else:
        yield place, value


def random_visit(seed: int) -> dict[str, Any]:
    """A visit from anywhere in what the format allows; every second one from what a shop meets."""
    pick = random.Random(seed)  # noqa: S311  # invented visits, nothing secret
    wide = seed % 2 == 0
    shop = builtin_range()

    def quarter(low: float, high: float) -> float:
        return round(pick.uniform(low, high) * 4) / 4

    def eye() -> dict[str, Any]:
        sphere, cylinder = quarter(-30, 30) if wide else quarter(-8, 6), quarter(-4, 4) if pick.random() < 0.6 else 0.0
        power: dict[str, Any] = {"sphere": sphere}
        if cylinder and abs(sphere + cylinder) <= 30:
            power |= {"cylinder": cylinder, "axis": pick.randint(0, 180)}
        if pick.random() < 0.3:
            power["add"] = quarter(0.5, 30 if wide else 3)
        if pick.random() < 0.3:
            most = 30 if wide else 4
            power["prism"] = [{"amount": quarter(0, most), "base": pick.choice(["in", "out", "up", "down"])}]
        return power

    def some(whole: dict[str, Any]) -> dict[str, Any]:
        return {name: part for name, part in whole.items() if pick.random() < 0.7}

    coats = [coating.key for coating in shop.coating]
    material: Any = pick.choice([item.key for item in shop.material])
    if wide and pick.random() < 0.5:
        density = round(pick.uniform(0.5, 8), 2)
        material = {"n_d": round(pick.uniform(1.3, 2.2), 3), "abbe": pick.uniform(15, 100), "density_g_cm3": density}
    option: dict[str, Any] = {
        "design": pick.choice([item.key for item in shop.design]),
        "material": material,
        "coating": pick.choice(
            [
                pick.choice(coats),
                {"front": pick.choice(coats), "back": pick.choice(coats)},
                {"spectrum": [[nm, pick.choice([0, 0.01, 0.5, 1])] for nm in range(380, 781, 10)]},
                {"declared": {"luminous_reflectance": 0.01, "hue": "green"}},
            ]
        ),
    }
    if pick.random() < 0.3:
        option["tint"] = pick.choice([item.key for item in shop.tint])
    if pick.random() < 0.3:
        option["front_power_d"] = pick.uniform(-25, 35) if wide else pick.uniform(1, 9)
    if pick.random() < 0.3:
        option["centre_mm"] = pick.uniform(0.1, 40) if wide else pick.uniform(1, 5)
    a_mm, b_mm = (pick.uniform(15, 90), pick.uniform(10, 90)) if wide else (pick.uniform(42, 58), pick.uniform(28, 46))
    vertex = (0, 30) if wide else (8, 16)
    return {
        "prescription": some({"vertex_mm": pick.uniform(*vertex)}) | {"right": eye(), "left": eye()},
        "wearer": some(
            {
                "birth_year": pick.randint(1900, 2026),
                "eye_colour": pick.choice(["black", "brown", "light", "very-light"]),
            }
        ),
        "fitting": some(
            {
                "right": {"pd_mm": pick.uniform(10, 60) if wide else pick.uniform(27, 36)},
                "left": {"height_mm": pick.uniform(-20, 80) if wide else pick.uniform(14, 24)},
                "vertex_mm": pick.uniform(*vertex),
                "tilt_deg": pick.uniform(-20, 40),
                "wrap_deg": pick.uniform(-10, 40),
            }
        ),
        "frame": some({"a_mm": a_mm, "b_mm": b_mm, "dbl_mm": 18.0, "rim": pick.choice(["full", "grooved", "drilled"])}),
        "options": [option],
    }


@pytest.mark.parametrize("block", range(6))
def test_nothing_computed_is_ever_not_a_number(block: int) -> None:
    made = 0
    for seed in range(50 * block, 50 * block + 50):
        compared = answer(random_visit(seed), advice=seed % 5 == 0)
        for place, value in whole(compared.model_dump(mode="json", exclude_unset=True)):
            assert not isinstance(value, float) or math.isfinite(value), (seed, place)
        for option in compared.options:
            assert (option.right is None) == (option.left is None) == bool(option.refused), seed
            made += not option.refused
        for ghost in ghosts_of(compared):
            assert ghost.verdict is not None
            assert ghost.verdict_range is not None
            least, most = (ORDER.index(word) for word in ghost.verdict_range)
            assert least <= ORDER.index(ghost.verdict) <= most, seed
            assert (ghost.separation_deg is None) == (ghost.path.startswith("behind") or bool(ghost.spread)), seed
            assert 0 <= ghost.strength <= 1, seed
    assert made >= 12


@pytest.mark.parametrize("path", DEMO, ids=lambda path: path.stem)
def test_the_range_of_every_verdict_holds_the_verdict(path: Path) -> None:
    moved = 0
    for ghost in ghosts_of(answer(demo(path.stem))):
        assert ghost.verdict_range is not None
        least, most = (ORDER.index(word) for word in ghost.verdict_range)
        assert least <= ORDER.index(ghost.verdict or "") <= most
        moved += least < most
    if path.stem == "weak-minus-night-driver":
        assert moved > 0  # a border case says so


def inner(compared: Comparison) -> Ghost:
    """The twice-mirrored image in the right lens."""
    return next(ghost for ghost in ghosts_of(compared) if ghost.path == "ahead-inner")


@pytest.mark.parametrize("change", ["thickness", "front curve", "direction"])
def test_a_verdict_ranges_over_what_a_lens_may_be_off_by(change: str) -> None:
    # each change made by itself in a visit of its own: 0.3 mm of centre, 0.5 D of front, 2 degrees of direction
    base = copy.deepcopy(WEARER)
    base["prescription"] |= {"right": {"sphere": -0.75}, "left": {"sphere": -0.75}}
    base["options"][0] |= {"front_power_d": 6.0}
    flipped = 0
    for step in range(24):
        share = 0.002 * 1.15**step
        base["options"][0]["coating"] = mirror(share)
        nominal = inner(answer(base, check_range({"scene": [LAMP]})))
        assert nominal.verdict_range is not None
        low, high = (ORDER.index(word) for word in nominal.verdict_range)
        for sign in (-1, 1):
            other, scene = copy.deepcopy(base), dict(LAMP)
            if change == "thickness":
                other["options"][0]["centre_mm"] = 2.0 + 0.3 * sign
            elif change == "front curve":
                other["options"][0]["front_power_d"] = 6.0 + 0.5 * sign
            else:
                scene["direction_deg"] = 4 + 2 * sign
            there = inner(answer(other, check_range({"scene": [scene]})))
            assert low <= ORDER.index(there.verdict or "") <= high
            flipped += there.verdict != nominal.verdict
    assert flipped > 0  # so the change was felt


def test_the_changes_are_made_one_at_a_time_and_the_power_is_kept(monkeypatch: pytest.MonkeyPatch) -> None:
    seen: dict[str, Any] = {}

    def watched(lens: LensOnFace, **others: Any) -> Any:
        seen.update(lens=lens, **others)
        return see_ghosts(lens, **others)

    monkeypatch.setattr(ghosts, "see_ghosts", watched)
    answer(WEARER, check_range({"scene": [LAMP]}))
    section = seen["lens"].section
    front_mm, back_mm = section.front_curvature_per_mm[:, 0, 0, 0, 0], section.back_curvature_per_mm[:, 0, 0, 0, 0]
    thick = np.broadcast_to(section.thickness_mm[:, 0, 0, 0], front_mm.shape)
    front = front_mm * 1000 * (N - 1)
    changed = {
        "mm": thick - 2.0,
        "D": front - F1,
        "degrees": seen["scene"].direction_deg[:, 0, 0, 0] - 4,
        "pupil": seen["wearer"].pupil_scale[:, 0, 0, 0] - 1,
    }
    # thickness 0.3 mm (ANSI Z80.1 order tolerance), front 0.5 D, pupil 15 %, direction 2 degrees: modelling choices
    for unit, amount in (("mm", 0.3), ("D", 0.5), ("degrees", 2.0), ("pupil", 0.15)):
        moved = changed[unit][np.abs(changed[unit]) > 1e-9]
        assert sorted(moved) == pytest.approx([-amount, amount], abs=1e-9), unit
    assert sum(np.abs(part) > 1e-9 for part in changed.values()).max() == 1
    assert all(abs(part[0]) < 1e-9 for part in changed.values())  # the first is the lens as it is
    for f1, t_mm, k2 in zip(front, thick, back_mm, strict=True):  # back vertex power: F1/(1 - (t/n)F1) + F2
        assert f1 / (1 - t_mm / 1000 / N * f1) - k2 * 1000 * (N - 1) == pytest.approx(SPHERE, abs=1e-9)
