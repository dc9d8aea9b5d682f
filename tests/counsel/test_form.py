"""The lens form of a visit, worked out again by textbook formulas and by plain numerical integration."""

import datetime as dt
import math
from collections.abc import Callable
from itertools import pairwise
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.typing import NDArray

from advisor.counsel.compare import answer_of, compute
from advisor.counsel.comparison import Comparison
from advisor.counsel.lens_figures import EyeFigures
from advisor.counsel.stock import Range, builtin_range, check_range
from advisor.counsel.visit import check_visit, read_visit
from advisor.resources import resource_dir
from advisor.web.language import language

TODAY = dt.date(2026, 12, 1)
DEMO = sorted(resource_dir("demo_patients").glob("*.json"))
EYES = ("right", "left")
RESIN: dict[str, Any] = {"n_d": 1.498, "abbe": 58.0, "density_g_cm3": 1.32, "least_centre_mm": 2.0}
FITTING: dict[str, Any] = {
    "right": {"pd_mm": 31.0, "height_mm": 21.0}, "left": {"pd_mm": 32.5, "height_mm": 20.0},
    "vertex_mm": 12.0, "tilt_deg": 8, "wrap_deg": 5,
}  # fmt: skip
FRAME: dict[str, Any] = {"a_mm": 52.0, "b_mm": 38.0, "dbl_mm": 18.0, "rim": "full"}
NO_SCENES = check_range({})  # form needs no scenes, and none make the tests quick


def visit(right: dict[str, Any] | float, left: dict[str, Any] | float | None = None, **more: Any) -> dict[str, Any]:
    """A visit as a file holds it; a bare number is a sphere."""
    eyes = [right if isinstance(right, dict) else {"sphere": right}]
    eyes.append(eyes[0] if left is None else left if isinstance(left, dict) else {"sphere": left})
    return {
        "prescription": {"vertex_mm": 12.0, "right": eyes[0], "left": eyes[1]},
        "fitting": FITTING,
        "frame": FRAME,
        "scenes": [],
        **more,
    }


def answer(content: dict[str, Any], *options: dict[str, Any], stock: Range | None = None) -> Comparison:
    wanted = [{"design": "single-vision", **option} for option in options]
    computed = compute(check_visit(content | ({"options": wanted} if wanted else {})), stock or NO_SCENES, today=TODAY)
    return answer_of(computed, translator=language("en"), with_advice=False)


def eyes(
    content: dict[str, Any], *options: dict[str, Any], stock: Range | None = None
) -> tuple[EyeFigures, EyeFigures]:
    option = answer(content, *options, stock=stock).options[0]
    assert option.refused == []
    assert option.right is not None
    assert option.left is not None
    return option.right, option.left


# --- the textbook, written out again ----------------------------------------------------------------------------------

Floats = NDArray[np.float64]


def sphere_sag(power_d: Floats | float, rho_mm: Floats, *, n: float) -> Floats:
    """Depth of a sphere of this surface power, r - sqrt(r^2 - rho^2), signed with the power."""
    radius = 1000.0 * (n - 1.0) / np.asarray(power_d)
    return np.asarray(radius - np.sign(radius) * np.sqrt(radius**2 - rho_mm**2))


def superellipse(angle: Floats, *, a: float, b: float, ed: float | None) -> Floats:
    """Radii of |2x/a|^p + |2y/b|^p = 1; p 2.5, or what makes the longest radius ED/2, searched by trying."""

    def radii(p: float, at: Floats) -> Floats:
        return np.asarray((np.abs(2 * np.cos(at) / a) ** p + np.abs(2 * np.sin(at) / b) ** p) ** (-1 / p))

    p = 2.5
    if ed is not None:
        dense, low, high = np.linspace(0, 2 * np.pi, 36001), 2.0, 60.0
        for _ in range(60):
            p = (low + high) / 2
            low, high = (p, high) if radii(p, dense).max() < ed / 2 else (low, p)
    return radii(p, angle)


class Hand:
    """One lens by hand: a spherical front, a back of two principal powers, sags of spheres along each direction."""

    def __init__(
        self, sphere: float, cylinder: float, axis: float, *, side: int, n: float, front: float, centre: float,
        a: float, b: float, dbl: float, ed: float | None, pd: float, height: float,
    ) -> None:  # fmt: skip
        self.n, self.front, self.centre = n, front, centre
        self.inset, self.raised = (a + dbl) / 2 - pd, height - b / 2
        self.local_axis = axis if side == 0 else 180 - axis  # x runs to the nose, on the left side against TABO
        self.sphere, self.cylinder = sphere, cylinder
        self.outline: Callable[[Floats], Floats] = lambda angle: superellipse(angle, a=a, b=b, ed=ed)

    def back_powers(self) -> tuple[float, float]:
        """F2 = Fv - F1/(1 - (t/n)F1), more positive first."""
        bent = self.front / (1 - self.centre / 1000 / self.n * self.front)
        both = self.sphere - bent, self.sphere + self.cylinder - bent
        return max(both), min(both)

    def thickness(self, x: Floats, y: Floats) -> Floats:
        """Centre + sag of the back - sag of the front at a place from the box centre."""
        x, y = x - self.inset, y - self.raised
        rho, angle = np.hypot(x, y), np.arctan2(y, x)
        along = np.sin(angle - math.radians(self.local_axis)) ** 2
        bent = self.front / (1 - self.centre / 1000 / self.n * self.front)
        back = self.sphere + self.cylinder * along - bent  # Euler: the power along a direction
        return np.asarray(self.centre + sphere_sag(-back, rho, n=self.n) - sphere_sag(self.front, rho, n=self.n))

    def edge(self) -> Floats:
        """Every 2 degrees round the box centre, as the rim is sampled."""
        angle = np.radians(np.arange(0.0, 360.0, 2.0))
        radius = self.outline(angle)
        return self.thickness(radius * np.cos(angle), radius * np.sin(angle))

    def longest_radius(self) -> float:
        angle = np.radians(np.arange(0.0, 360.0, 2.0))
        radius = self.outline(angle)
        return float(np.hypot(radius * np.cos(angle) - self.inset, radius * np.sin(angle) - self.raised).max())

    def weight_g(self, density: float) -> float:
        """Midpoint rule, 720 sectors and 150 rings about the box centre."""
        angle = np.linspace(0.0, 2 * np.pi, 720, endpoint=False) + np.pi / 720
        depth = np.linspace(0.0, 1.0, 150, endpoint=False) + 0.5 / 150
        radius = self.outline(angle)[:, None] * depth
        area = self.outline(angle)[:, None] ** 2 * depth / 150 * (2 * np.pi / 720)
        here = self.thickness(radius * np.cos(angle[:, None]), radius * np.sin(angle[:, None]))
        return float((here * area).sum() * density / 1000)


@pytest.mark.parametrize("side", [0, 1])
def test_a_demo_lens_by_hand(side: int) -> None:
    wearer = read_visit(resource_dir("demo_patients") / "strong-cylinder.json")
    computed = compute(wearer, builtin_range(), today=TODAY)
    figures = answer_of(computed, translator=language("en"), with_advice=False).options[0]
    eye = figures.right if side == 0 else figures.left
    written = wearer.prescription.right if side == 0 else wearer.prescription.left
    fitting, frame = wearer.fitting, wearer.frame
    assert eye is not None
    assert fitting is not None
    assert frame is not None
    place = fitting.right if side == 0 else fitting.left
    material = builtin_range().material_of(figures.material)
    assert material.n_d is not None
    assert place is not None
    assert wearer.prescription.vertex_mm == fitting.vertex_mm  # so the power is made as written
    assert written.cylinder is not None
    assert written.axis is not None
    assert place.pd_mm is not None
    assert place.height_mm is not None
    assert fitting.vertex_mm is not None

    # Vogel: half the spherical equivalent + 6 for minus, one curve for both eyes, then the nearest the shop has
    both = [e.sphere + (e.cylinder or 0) / 2 for e in (wearer.prescription.right, wearer.prescription.left)]
    assert max(both) < 0
    curves = [power / 2 + 6 for power in both]
    assert abs(curves[0] - curves[1]) <= 1
    front = min(material.base_powers_d or (), key=lambda base: abs(base - sum(curves) / 2))
    assert eye.front_power_d == front

    assert eye.centre_mm is not None
    assert eye.centre_mm == material.least_centre_mm  # minus: the middle decides
    hand = Hand(
        written.sphere, written.cylinder, written.axis, side=side, n=material.n_d, front=front, centre=eye.centre_mm,
        a=frame.a_mm or 0, b=frame.b_mm or 0, dbl=frame.dbl_mm or 0, ed=frame.ed_mm,
        pd=place.pd_mm, height=place.height_mm,
    )  # fmt: skip
    assert eye.back_power_d == pytest.approx(hand.back_powers(), abs=1e-9)
    assert eye.edge_thickest_mm == pytest.approx(hand.edge().max(), abs=1e-6)
    assert eye.edge_thinnest_mm == pytest.approx(hand.edge().min(), abs=1e-6)
    assert eye.blank_mm == pytest.approx(2 * hand.longest_radius() + 2, abs=1e-6)
    assert eye.weight_g == pytest.approx(hand.weight_g(material.density_g_cm3), rel=1e-3)  # two ways to integrate

    # Prentice's rule at 30 degrees: P = c F along the stronger meridian, TCA = P/V
    strongest = max(abs(written.sphere), abs(written.sphere + written.cylinder))
    prism = (fitting.vertex_mm + 15) * math.tan(math.radians(30)) / 10 * strongest
    assert eye.colour_fringe_prism_d == pytest.approx(prism / material.abbe, rel=1e-3)

    mean = written.sphere + written.cylinder / 2  # shape factor times power factor, pupil 3 mm behind the cornea
    larger = 1 / (1 - eye.centre_mm / 1000 / material.n_d * front) / (1 - (fitting.vertex_mm + 3) / 1000 * mean)
    assert eye.magnification_percent == pytest.approx(100 * (larger - 1), abs=1e-9)


def test_the_centre_of_a_plus_lens_brings_its_thinnest_edge_to_one_millimetre() -> None:
    right, _ = eyes(visit(5.0), {"material": RESIN | {"least_centre_mm": 1.0}, "front_power_d": 8.0})
    assert right.centre_mm is not None
    hand = Hand(5.0, 0, 180, side=0, n=1.498, front=8.0, centre=right.centre_mm, ed=None, pd=31, height=21,
                a=52, b=38, dbl=18)  # fmt: skip
    assert right.edge_thinnest_mm == pytest.approx(1.0, abs=1e-6)  # full rim: common practice, no source
    assert hand.edge().min() == pytest.approx(1.0, abs=1e-6)


@pytest.mark.parametrize(("rim", "least"), [("full", 1.0), ("grooved", 1.8), ("drilled", 1.8)])
def test_the_rim_decides_the_least_edge(rim: str, least: float) -> None:
    right, left = eyes(visit(4.0, frame=FRAME | {"rim": rim}), {"material": RESIN | {"least_centre_mm": 1.0}})
    assert (right.edge_thinnest_mm, left.edge_thinnest_mm) == pytest.approx((least, least), abs=1e-6)


def test_a_published_blank() -> None:
    # round outline of 63 mm centred on the box, a 60, DBL 20, PD 69: 76 mm with 2 mm allowance; published exercise
    outline = [[31.5 * math.cos(t), 31.5 * math.sin(t)] for t in np.radians(np.arange(0, 360, 5))]
    content = visit(
        -1.0,
        frame={"a_mm": 60, "b_mm": 60, "dbl_mm": 20, "rim": "full", "outline": {"right": outline}},
        fitting={"right": {"pd_mm": 34.5, "height_mm": 30}, "left": {"pd_mm": 34.5, "height_mm": 30}},
    )
    for eye in eyes(content, {"material": RESIN}):
        assert eye.blank_mm == pytest.approx(76.0, abs=0.05)


def test_vertical_imbalance_is_prentice_at_ten_millimetres() -> None:
    content = visit({"sphere": 1.0, "cylinder": -2.0, "axis": 180}, {"sphere": -3.0, "cylinder": -1.0, "axis": 90})
    # along the vertical: 1 - 2 sin^2(90 - 180) = -1 and -3 - sin^2(0) = -3; difference 2 x 1 cm
    assert answer(content, {"material": RESIN}).vertical_imbalance_prism_d == pytest.approx(2.0, abs=1e-9)


# --- what must not change a lens --------------------------------------------------------------------------------------


def flat(value: Any, place: str = "") -> dict[str, Any]:
    """Every leaf of an answer by its place."""
    if isinstance(value, dict):
        return {k: v for name, part in value.items() for k, v in flat(part, f"{place}.{name}").items()}
    if isinstance(value, list):
        return {k: v for at, part in enumerate(value) for k, v in flat(part, f"{place}[{at}]").items()}
    return {place: value}


def alike(one: EyeFigures | None, other: EyeFigures | None, *, rel: float = 1e-9) -> None:
    assert one is not None
    assert other is not None
    left, right = flat(one.model_dump(mode="json")), flat(other.model_dump(mode="json"))
    assert left.keys() == right.keys()
    for place, value in left.items():
        if isinstance(value, float):
            if "angle_deg" in place:
                value, right[place] = value % 360, right[place] % 360
            assert value == pytest.approx(right[place], rel=rel, abs=1e-7), place
        else:
            assert value == right[place], place


def test_an_index_at_the_e_line_is_the_same_material() -> None:
    # optics text: n_e 1.600, V_e 40 is n_d 1.59645, V_d 40.15
    common = {"density_g_cm3": 1.3, "least_centre_mm": 1.5}
    e_line, _ = eyes(visit(-4.0), {"material": {"n_e": 1.600, "abbe": 40.0, **common}, "front_power_d": 4.0})
    d_line, _ = eyes(visit(-4.0), {"material": {"n_d": 1.59645, "abbe": 40.15, **common}, "front_power_d": 4.0})
    as_if_d, _ = eyes(visit(-4.0), {"material": {"n_d": 1.600, "abbe": 40.0, **common}, "front_power_d": 4.0})
    for name in ("edge_thickest_mm", "weight_g", "magnification_percent", "colour_fringe_prism_d"):
        value, expected = getattr(e_line, name), getattr(d_line, name)
        assert value == pytest.approx(expected, rel=2e-4), name  # half the last printed digit of V_d 40.15
    assert e_line.edge_thickest_mm == pytest.approx(d_line.edge_thickest_mm, abs=1e-4)
    assert abs((as_if_d.edge_thickest_mm or 0) - (d_line.edge_thickest_mm or 0)) > 5e-3  # so the line matters


quarters = st.integers(-24, 24).map(lambda n: n / 4)
powers = st.builds(
    lambda s, c, x: {"sphere": s} | ({"cylinder": c, "axis": x} if c else {}),
    quarters, st.integers(-12, 12).map(lambda n: n / 4), st.integers(1, 180),
)  # fmt: skip


@settings(max_examples=15, deadline=None, derandomize=True)
@given(powers, powers, st.sampled_from(["in", "out", "up", "down"]))
def test_eyes_that_mirror_each_other_have_lenses_that_do(one: dict[str, Any], other: dict[str, Any], base: str) -> None:
    def mirrored(power: dict[str, Any]) -> dict[str, Any]:
        return power | ({"axis": 180 - power["axis"]} if "axis" in power else {})

    prism = {"prism": [{"amount": 1.5, "base": base}]}
    swapped = FITTING | {"right": FITTING["left"], "left": FITTING["right"]}
    here = answer(visit(one | prism, other), {"material": RESIN}).options[0]
    there = answer(visit(mirrored(other), mirrored(one | prism), fitting=swapped), {"material": RESIN}).options[0]
    assert [reason.code for reason in here.refused] == [reason.code for reason in there.refused]
    if not here.refused:
        alike(here.right, there.left)
        alike(here.left, there.right)


@settings(max_examples=15, deadline=None, derandomize=True)
@given(powers.filter(lambda power: "axis" in power))
def test_a_transposed_prescription_is_the_same_lens(power: dict[str, Any]) -> None:
    turned = (power["axis"] + 90) % 180 or 180
    transposed = {"sphere": power["sphere"] + power["cylinder"], "cylinder": -power["cylinder"], "axis": turned}
    one, other = (answer(visit(p), {"material": RESIN}).options[0] for p in (power, transposed))
    assert len(one.refused) == len(other.refused)
    if not one.refused:
        alike(one.right, other.right)
        alike(one.left, other.left)


@pytest.mark.parametrize("power", [-6.0, 4.0])
def test_weight_is_linear_in_density(power: float) -> None:
    light, heavy = (eyes(visit(power), {"material": RESIN | {"density_g_cm3": d}})[0] for d in (1.1, 3.3))
    assert light.weight_g is not None
    assert heavy.weight_g == pytest.approx(3 * light.weight_g, rel=1e-12)
    assert heavy.edge_thickest_mm == light.edge_thickest_mm


# --- rules of the counter ---------------------------------------------------------------------------------------------

THIN: dict[str, Any] = RESIN | {"least_centre_mm": 1.2}


@pytest.mark.parametrize(
    ("life", "wearer", "centre"),
    [
        ({}, {}, 1.2),
        ({"impact": "sometimes"}, {}, 1.2),
        ({"impact": "often"}, {}, 2.0),
        ({"one_good_eye": "no"}, {}, 1.2),
        ({"one_good_eye": "yes"}, {}, 2.0),
        ({"child": "no"}, {}, 1.2),
        ({"child": "yes"}, {}, 2.0),
        ({}, {"birth_year": 2012}, 2.0),
        ({}, {"birth_year": 2010}, 2.0),  # 16 or 15: one year less counts for a child's rule
        ({}, {"birth_year": 2009}, 1.2),
    ],
)
def test_who_needs_a_centre_of_two_millimetres(life: dict[str, Any], wearer: dict[str, Any], centre: float) -> None:
    for eye in eyes(visit(-4.0, daily_life=life, wearer=wearer), {"material": THIN}):
        assert eye.centre_mm == centre


def test_the_greater_of_all_least_centres_counts() -> None:
    child = {"daily_life": {"child": "yes"}}
    assert eyes(visit(-4.0, **child), {"material": THIN | {"least_centre_child_mm": 2.4}})[0].centre_mm == 2.4
    assert eyes(visit(-4.0, **child), {"material": THIN | {"least_centre_mm": 3.0}})[0].centre_mm == 3.0
    assert eyes(visit(-4.0), {"material": THIN | {"least_centre_child_mm": 2.4}})[0].centre_mm == 1.2


def stock_range(*blanks: float, made: str = "stock") -> Range:
    offer = {"design": "single-vision", "material": "resin", "coating": "bare", "made": made, "price": 50.0}
    content = {
        "material": [RESIN | {"key": "resin", "least_centre_mm": 1.0}],
        "offer": [offer | ({"blank_diameters_mm": list(blanks)} if blanks else {})],
    }
    return check_range(content)


def test_a_stock_lens_is_as_thick_as_the_smallest_blank_that_covers_the_rim() -> None:
    content, option = visit(5.0), {"material": "resin", "coating": "bare", "front_power_d": 8.0}
    needed = eyes(content, option, stock=stock_range(made="surfaced"))[0].blank_mm
    assert needed is not None
    assert 60 < needed < 65
    right, _ = eyes(content, option, stock=stock_range(75.0, 60.0, 65.0))
    # by hand: 1.0 mm at the edge of a blank of 65 mm, F2 with the centre that gives; settled by repeating
    centre, rho = 2.0, np.array(32.5)
    for _ in range(50):
        back = 5.0 - 8.0 / (1 - centre / 1000 / 1.498 * 8.0)
        centre = float(1.0 + sphere_sag(8.0, rho, n=1.498) - sphere_sag(-back, rho, n=1.498))
    assert right.centre_mm == pytest.approx(centre, abs=1e-6)
    assert right.blank_mm == needed
    surfaced, _ = eyes(content, option, stock=stock_range(made="surfaced"))
    assert (surfaced.centre_mm or 0) < centre - 0.2
    assert (surfaced.weight_g or 0) < (right.weight_g or 0)


def test_a_given_front_and_centre_are_honoured_and_noted() -> None:
    option = answer(
        visit(-4.0),
        {"material": RESIN, "front_power_d": {"right": 2.0, "left": 2.25}, "centre_mm": {"left": 1.5}},
    ).options[0]
    assert option.right is not None
    assert option.left is not None
    assert (option.right.front_power_d, option.left.front_power_d) == (2.0, 2.25)
    assert (option.right.centre_mm, option.left.centre_mm) == (2.0, 1.5)
    codes = [note.code for note in option.notes]
    assert "front-given" in codes
    (thin,) = (note for note in option.notes if note.code == "centre-below-limit")
    assert thin.figures["centre_mm"] == 1.5


def test_a_front_given_for_one_eye_leaves_the_other_to_the_rule() -> None:
    right, left = eyes(visit(-4.0), {"material": RESIN, "front_power_d": {"right": 1.0}})
    assert right.front_power_d == 1.0
    assert left.front_power_d == 4.0  # Vogel: -4/2 + 6


@pytest.mark.parametrize(
    ("right", "left", "curves"),
    [
        (-2.0, -2.0, (5.0, 5.0)),
        (-2.0, -3.0, (4.75, 4.75)),  # 5.0 and 4.5
        (-2.0, -4.0, (4.5, 4.5)),  # 5.0 and 4.0: 1 D apart is still a pair
        (-2.0, -4.5, (5.0, 3.75)),
        (2.0, 3.0, (8.5, 8.5)),
        (2.0, 3.25, (8.0, 9.25)),
        (1.0, -0.5, (7.0, 5.75)),
    ],
)
def test_a_pair_has_one_curve_where_the_rule_asks_for_nearly_one(
    right: float, left: float, curves: tuple[float, float]
) -> None:
    got = eyes(visit(right, left), {"material": RESIN})
    assert (got[0].front_power_d, got[1].front_power_d) == pytest.approx(curves, abs=1e-9)  # Vogel's rule, by head


def test_the_curve_is_the_nearest_the_material_is_made_in() -> None:
    listed = RESIN | {"base_powers_d": [2.0, 4.25, 6.0]}
    assert eyes(visit(-2.0, -3.0), {"material": listed})[0].front_power_d == 4.25  # rule 4.75


@pytest.mark.parametrize("path", DEMO, ids=lambda path: path.stem)
def test_a_smaller_frame_makes_no_lens_thicker_or_heavier(path: Path) -> None:
    computed = compute(read_visit(path), builtin_range(), today=TODAY)
    for option in answer_of(computed, translator=language("en"), with_advice=False).options:
        for eye in (option.right, option.left):
            if eye is None or eye.smaller_frame is None:
                continue
            small = eye.smaller_frame
            assert small["by_mm"] == 4.0
            assert small["weight_g"] is not None
            assert small["edge_thickest_mm"] is not None
            assert eye.weight_g is not None
            assert eye.edge_thickest_mm is not None
            assert small["weight_g"] < eye.weight_g
            minus = max(power or 0.0 for power in eye.back_power_d or ()) + (eye.front_power_d or 0.0) < -0.5
            if minus:
                assert small["edge_thickest_mm"] < eye.edge_thickest_mm  # little where a prism's base faces the nose


def test_the_smaller_frame_is_the_same_lens_in_a_box_four_millimetres_narrower() -> None:
    ed = FRAME | {"ed_mm": 56.0}
    here, _ = eyes(visit(-5.0, frame=ed), {"material": RESIN})
    scale = 48 / 52
    small = {"a_mm": 48.0, "b_mm": 38 * scale, "dbl_mm": 18.0, "ed_mm": 56 * scale, "rim": "full"}
    lower = {
        side: {"pd_mm": FITTING[side]["pd_mm"], "height_mm": FITTING[side]["height_mm"] - 19 * (1 - scale)}
        for side in EYES
    }
    there, _ = eyes(visit(-5.0, frame=small, fitting=FITTING | lower), {"material": RESIN})
    assert here.smaller_frame is not None
    assert here.smaller_frame["edge_thickest_mm"] == pytest.approx(there.edge_thickest_mm, abs=1e-9)
    assert here.smaller_frame["weight_g"] == pytest.approx(there.weight_g, abs=1e-9)


# --- traced outlines --------------------------------------------------------------------------------------------------


def drop(points: int = 72) -> list[list[float]]:
    """An outline that droops to the temple: nothing about it is the same left and right."""
    angle = np.arange(points) * (2 * np.pi / points)
    radius = 24 + 3 * np.cos(2 * angle) + 2.5 * np.cos(angle - math.radians(215))
    return [[float(r * math.cos(t)), float(r * math.sin(t))] for r, t in zip(radius, angle, strict=True)]


@pytest.mark.parametrize("given", ["right", "left"])
def test_one_traced_side_is_mirrored_for_the_other(given: str) -> None:
    place = {"pd_mm": 31.0, "height_mm": 21.0}
    same = FITTING | {"right": place, "left": place}
    content = visit(-4.0, frame=FRAME | {"outline": {given: drop()}}, fitting=same)
    right, left = eyes(content, {"material": RESIN})
    alike(right, left)
    assert right.edge_thickest_at is not None
    assert right.edge_thickest_at.word.startswith("temple")  # where the drop reaches farthest from the centre
    both = visit(-4.0, frame=FRAME | {"outline": {"right": drop(), "left": drop()}}, fitting=same)
    alike(right, eyes(both, {"material": RESIN})[0])


def test_a_traced_edge_by_hand() -> None:
    content = visit(-4.0, frame=FRAME | {"outline": {"right": drop(180)}})
    right, _ = eyes(content, {"material": RESIN, "front_power_d": 4.0})
    hand = Hand(-4.0, 0, 180, side=0, n=1.498, front=4.0, centre=2.0, a=52, b=38, dbl=18, ed=None, pd=31, height=21)
    xy = np.array(drop(3600))
    dense = hand.thickness(xy[:, 0], xy[:, 1])
    assert right.edge_thickest_mm == pytest.approx(dense.max(), abs=5e-3)
    assert right.edge_thinnest_mm == pytest.approx(dense.min(), abs=5e-3)


# --- signs ------------------------------------------------------------------------------------------------------------


def test_more_minus_makes_a_thicker_edge_and_more_index_a_thinner_one() -> None:
    edges = [eyes(visit(power), {"material": RESIN})[0].edge_thickest_mm or 0 for power in (-1.0, -3.0, -5.0)]
    assert all(a < b for a, b in pairwise(edges))
    dense = [eyes(visit(-5.0), {"material": RESIN | {"n_d": n}})[0].edge_thickest_mm or 0 for n in (1.5, 1.6, 1.74)]
    assert all(a > b for a, b in pairwise(dense))


@pytest.mark.parametrize(("base", "word"), [("in", "nose"), ("out", "temple"), ("up", "up"), ("down", "down")])
def test_a_prism_is_thickest_towards_its_base(base: str, word: str) -> None:
    content = visit(
        {"sphere": 0.0, "prism": [{"amount": 4.0, "base": base}]},
        frame=FRAME | {"a_mm": 46.0, "b_mm": 46.0},
        fitting={"right": {"pd_mm": 32.0, "height_mm": 23}, "left": {"pd_mm": 32.0, "height_mm": 23}},
    )
    for eye in eyes(content, {"material": RESIN}):
        assert eye.edge_thickest_at is not None
        assert eye.edge_thickest_at.word == word
        # thickness difference across the lens P x width/(100 (n - 1)); the sags cancel at opposite points
        across = 4.0 * 46.0 / (100 * 0.498)
        assert (eye.edge_thickest_mm or 0) - (eye.edge_thinnest_mm or 0) == pytest.approx(across, rel=2e-2)


def test_a_lens_that_focuses_before_the_pupil_has_no_magnification() -> None:
    # a reading lens of 28 + 20 D, 27 mm before the cornea and 30 mm before the pupil: 1 - 0.030 x 48 is below 0
    place = {"pd_mm": 32.5, "height_mm": 5.0}
    content = visit(
        {"sphere": 28.0, "add": 20.0},
        fitting={"right": place, "left": place, "vertex_mm": 27.0},
        frame={"a_mm": 15.0, "b_mm": 10.0, "dbl_mm": 50.0, "rim": "full"},
    )
    content["prescription"]["vertex_mm"] = 27.0
    for eye in eyes(content, {"design": "reading", "material": RESIN | {"n_d": 1.9}}):
        assert eye.magnification_percent is None
        assert eye.centre_mm is not None
