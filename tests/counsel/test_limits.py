"""The reflectance limit, fed back: a lens that mirrors just so much is at the level the limit was solved for."""

import copy
import datetime as dt
from typing import Any

import pytest

from advisor.counsel.compare import compare
from advisor.counsel.comparison import OptionFigures
from advisor.counsel.stock import Range, builtin_range, check_range
from advisor.counsel.visit import check_visit
from advisor.web.language import language

TODAY = dt.date(2026, 12, 1)
ROAD = "oncoming-headlamps-dark-road"
RESIN: dict[str, Any] = {"n_d": 1.498, "abbe": 58, "density_g_cm3": 1.32, "least_centre_mm": 2.0}
BARE = (0.498 / 2.498) ** 2  # Fresnel, normal incidence
LAMP: dict[str, Any] = {
    "key": "lamp", "kind": "small-source", "where": "ahead", "intensity_cd": 350, "distance_m": 50, "size_deg": 0.17,
    "direction_deg": 4, "background_cd_m2": 0.1, "adapting_cd_m2": 0.1, "illuminant": "LED-B4",
}  # fmt: skip
WINDOW: dict[str, Any] = {
    "key": "window", "kind": "extended", "where": "behind", "luminance_cd_m2": 1, "size_deg": 30,
    "incidence_deg": 0, "background_cd_m2": 100, "adapting_cd_m2": 100, "illuminant": "D65",
}  # fmt: skip


def mirror(share: float) -> dict[str, Any]:
    """A measured face that mirrors one share of every wavelength."""
    return {"spectrum": [[nm, share] for nm in range(380, 781, 10)]}


def one(option: dict[str, Any], *, stock: Range | None = None, **visit: Any) -> OptionFigures:
    content = {
        "prescription": {"right": {"sphere": -0.75}, "left": {"sphere": -0.5, "cylinder": -0.5, "axis": 90}},
        "wearer": {"birth_year": 1988, "eye_colour": "light"},
        "options": [{"design": "single-vision", "material": RESIN, **option}],
        "scenes": [ROAD],
        **visit,
    }
    checked = check_visit(copy.deepcopy(content))
    (found,) = compare(checked, stock or builtin_range(), translator=language("en"), today=TODAY).options
    return found


def worst_level(option: OptionFigures) -> float:
    eyes = [eye for eye in (option.right, option.left) if eye is not None]
    return max(ghost.visibility_level or 0.0 for eye in eyes for ghost in eye.ghosts)


@pytest.mark.parametrize(("name", "level"), [("not_noticed", 0.4), ("at_the_limit", 1.0)])
@pytest.mark.parametrize("tint", [None, 0.85])
@pytest.mark.parametrize(
    "power",
    [
        {"right": {"sphere": -0.75}, "left": {"sphere": -0.5, "cylinder": -0.5, "axis": 90}},
        {"right": {"sphere": -3.0}, "left": {"sphere": -0.25}},
        {"right": {"sphere": -1.5, "prism": [{"amount": 2, "base": "in"}]}, "left": {"sphere": -1.25}},
    ],
)
def test_a_lens_that_mirrors_the_limit_is_at_its_level(
    name: str, level: float, tint: float | None, power: dict[str, Any]
) -> None:
    coloured = {} if tint is None else {"tint": tint}
    limit = one(coloured, prescription=power).reflectance_limit
    assert limit is not None
    solved = getattr(limit, name)
    assert solved is not None
    assert 1e-6 < solved < BARE
    fed_back = one(coloured | {"coating": mirror(solved)}, prescription=power)
    assert worst_level(fed_back) == pytest.approx(level, rel=0.02)
    over = one(coloured | {"coating": mirror(1.1 * solved)}, prescription=power)
    assert worst_level(over) > level


def test_the_coating_asked_for_does_not_move_the_limit() -> None:
    plain, coated = (one({"coating": coating}).reflectance_limit for coating in ("bare", "broadband"))
    assert plain is not None
    assert coated is not None
    assert coated.not_noticed == pytest.approx(plain.not_noticed, rel=1e-6)


def test_the_worst_scene_asks_for_the_limit() -> None:
    keys = [ROAD, "oncoming-headlamps-lit-road", "oncoming-headlamps-dark-road-10deg"]
    alone = {key: one({}, scenes=[key]).reflectance_limit for key in keys}
    together = one({}, scenes=keys).reflectance_limit
    assert together is not None
    least = {key: limit.not_noticed or 1.0 for key, limit in alone.items() if limit is not None}
    assert together.not_noticed == pytest.approx(min(least.values()), rel=1e-6)
    assert together.scene == min(least, key=lambda key: least[key])


def test_no_limit_where_bare_is_not_noticed() -> None:
    dim = check_range({"scene": [LAMP | {"intensity_cd": 0.5, "background_cd_m2": 1.0}]})
    option = one({"coating": "bare"}, stock=dim, scenes=None)
    assert worst_level(option) < 0.4
    assert option.reflectance_limit is not None
    assert option.reflectance_limit.not_noticed is None
    assert option.reflectance_limit.at_the_limit is None
    sold = [coating.key for coating in dim.coating if coating.key != "bare"]
    assert option.reflectance_limit.reached_by == sold  # any will do


def test_the_upper_limit_falls_away_before_the_lower() -> None:
    # a lamp whose bare ghost lies between the two levels, found by trying: it grows with the lamp
    for candela in range(1, 60):
        stock = check_range({"scene": [LAMP | {"intensity_cd": candela, "background_cd_m2": 1.0}]})
        option = one({"coating": "bare"}, stock=stock, scenes=None)
        if 0.5 < worst_level(option) < 0.9:
            break
    else:
        pytest.fail("no lamp in between")
    assert option.reflectance_limit is not None
    assert option.reflectance_limit.not_noticed is not None
    assert option.reflectance_limit.at_the_limit is None


def test_no_scene_no_limit() -> None:
    assert one({}, scenes=[]).reflectance_limit is None
    refused = one({"front_power_d": 30.0})
    assert refused.refused
    assert refused.reflectance_limit is None


def test_coatings_reach_the_limit_as_made_and_not_only_as_drawn() -> None:
    option = one({"coating": "bare"})
    assert option.reflectance_limit is not None
    limit = option.reflectance_limit.not_noticed
    assert limit is not None
    reached = option.reflectance_limit.reached_by
    assert "bare" not in reached
    for coating in builtin_range().coating:
        eye = one({"coating": coating.key}).right
        assert eye is not None
        figures = eye.luminous_reflectance
        high = figures.front if figures.as_made.front is None else figures.as_made.front[2]
        assert (coating.key in reached) is (high <= limit and coating.key != "bare"), coating.key
    assert 0 < len(reached) < len(builtin_range().coating) - 1


def test_light_from_behind_and_scenes_by_day_are_told_by_contrast_and_set_no_limit() -> None:
    bright = check_range({"scene": [WINDOW | {"luminance_cd_m2": 3000}]})
    assert one({}, stock=bright, scenes=None).reflectance_limit is None
    stage = check_range({"scene": [LAMP | {"background_cd_m2": 30}]})
    assert one({}, stock=stage, scenes=None).reflectance_limit is None
