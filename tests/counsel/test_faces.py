import numpy as np
import pytest

from advisor.counsel.faces import (
    Face,
    blue_turned_away,
    face_of,
    luminous_reflectance,
    made,
    made_reflectance,
    nominal,
    residual_colour,
    shapes,
)
from advisor.counsel.stock import BARE, builtin_range
from advisor.counsel.stock_items import Coating, Declared, HardCoat, Material

RESIN = Material(key="m", n_d=1.5, abbe=58, density_g_cm3=1.3)


def face(coating: Coating, material: Material = RESIN) -> Face:
    return face_of(material, coating)


def measured(values: list[tuple[float, float]]) -> Face:
    return face(Coating(spectrum=tuple(values)))


def test_a_name_or_a_price_makes_no_other_face() -> None:
    one = Coating(key="a", label="A", price=1, layers=(("SiO2", 90.0),))
    other = Coating(key="b", label="B", price=2, layers=(("SiO2", 90.0),))
    assert face(one) == face(other)
    assert face(one) != face(Coating(layers=(("SiO2", 91.0),)))


def test_an_index_at_the_e_line_is_not_taken_for_one_at_the_d_line() -> None:
    # n_e 1.600, V_e 40 is n_d 1.59645, V_d 40.15: the same glass, so the same face to the digits given
    at_e = Material(key="e", n_e=1.600, abbe=40, density_g_cm3=1.3)
    at_d = Material(key="d", n_d=1.59645, abbe=40.15, density_g_cm3=1.3)
    mistaken = Material(key="x", n_d=1.600, abbe=40, density_g_cm3=1.3)
    same, right, wrong = (luminous_reflectance(face(BARE, m)) for m in (at_e, at_d, mistaken))
    assert same == pytest.approx(right, abs=1e-6)
    assert abs(wrong - right) > 1e-4


def test_a_hard_coat_lowers_an_uncoated_high_index_lens() -> None:
    # Fresnel at the d line: 6.30 %. With the coat, fringes averaged: R1 = (0.49/2.49)^2 = 3.873 % of its outside and
    # R2 = (0.18/3.16)^2 = 0.325 % below it, so R1 + (1-R1)^2 R2/(1-R1 R2) = 4.17 %. Dispersion may add a thousandth.
    lens = Material(key="h", n_d=1.67, abbe=32, density_g_cm3=1.36)
    coat = Coating(layers=(), hard_coat=HardCoat(index=1.49, thickness_um=3))
    assert luminous_reflectance(face(BARE, lens)) == pytest.approx((0.67 / 2.67) ** 2, abs=1e-3)
    assert luminous_reflectance(face(coat, lens)) == pytest.approx(0.0417, abs=1e-3)
    assert not face(coat, lens).has_film


def test_a_measured_face_mirrors_what_was_measured_and_is_the_same_at_every_angle() -> None:
    mirror = measured([(float(nm), 0.01) for nm in range(380, 781, 10)])
    assert nominal(mirror).outside == pytest.approx(0.01)
    assert nominal(mirror).transmittance == pytest.approx(0.99)
    np.testing.assert_array_equal(nominal(mirror, 40.0).outside, nominal(mirror).outside)
    assert made(mirror) is None
    assert mirror.has_film


def test_the_blue_turned_away_is_the_mean_from_400_to_440() -> None:
    # 0.1 there and nothing elsewhere, with edges 10 nm wide outside the band
    stepped = [(float(nm), 0.1 if 400 <= nm <= 440 else 0.0) for nm in range(380, 781, 10)]
    assert blue_turned_away(measured(stepped)) == pytest.approx(0.1, rel=1e-12)
    slope = [(float(nm), (nm - 380) / 1000) for nm in range(380, 781, 10)]
    assert blue_turned_away(measured(slope)) == pytest.approx(0.04, rel=1e-12)  # the middle, 420 nm


def test_layers_are_varied_as_made_and_a_bare_face_is_not() -> None:
    film = face(Coating(layers=(("MgF2", 99.6),)))
    spread = made_reflectance(film)
    assert spread is not None
    assert spread.shape == (64,)
    assert spread.std() > 0
    assert made_reflectance(face(BARE)) is None


def test_a_declared_face_has_a_range_of_shapes_and_a_known_one_has_one() -> None:
    declared = face(Coating(declared=Declared(luminous_reflectance=0.006, hue="blue")))
    assert declared.is_estimated
    assert len(shapes(declared).outside) > 1
    assert shapes(face(BARE)).outside.shape == (1, 401)
    assert luminous_reflectance(declared) == pytest.approx(0.006, rel=1e-9)


@pytest.mark.parametrize(("low_nm", "high_nm", "hue"), [(430, 490, "blue"), (510, 560, "green"), (620, 780, "red")])
def test_the_hue_word_is_that_of_the_light_a_face_mirrors(low_nm: int, high_nm: int, hue: str) -> None:
    band = [(float(nm), 0.1 if low_nm <= nm <= high_nm else 0.0) for nm in range(380, 781, 5)]
    assert residual_colour(measured(band))["hue"] == hue


def test_a_face_that_mirrors_nothing_has_the_colour_of_white() -> None:
    found = residual_colour(measured([(float(nm), 0.0) for nm in range(380, 781, 10)]))
    hue, srgb, xy = found["hue"], found["srgb"], found["xy"]
    assert hue == "neutral"
    assert srgb.startswith("#")
    assert xy == pytest.approx((0.31272, 0.32903), abs=5e-5)  # D65, CIE 15


def test_every_built_in_film_takes_most_of_the_reflection_from_every_material() -> None:
    films = [coating for coating in builtin_range().coating if coating.layers and len(coating.layers) > 1]
    assert len(films) >= 4
    for material in builtin_range().material:
        bare = luminous_reflectance(face(BARE, material))
        for film in films:
            assert luminous_reflectance(face(film, material)) < 0.025 < bare  # ISO 8980-4's limit, from memory


def test_a_film_has_the_hues_its_samples_have_and_a_measured_face_has_none() -> None:
    hues = residual_colour(face(builtin_range().coating_of("broadband-green")))["as_made_hues"]
    assert isinstance(hues, dict)
    assert sum(hues.values()) == pytest.approx(1.0)
    assert max(hues, key=lambda hue: hues[hue]) == "green"
    assert (
        residual_colour(measured([(380.0, 0.01), *((float(nm), 0.01) for nm in range(390, 781, 10))]))["as_made_hues"]
        is None
    )


def test_a_declared_figure_rises_with_the_angle_like_the_film_whose_shape_it_borrows() -> None:
    film = face(builtin_range().coating_of("broadband-green"))
    declared = face(Coating(declared=Declared(luminous_reflectance=luminous_reflectance(film), hue="green")))
    straight, aslant = nominal(declared), nominal(declared, 35.0)
    np.testing.assert_allclose(straight.outside, nominal(film).outside, rtol=1e-9)
    np.testing.assert_allclose(aslant.outside, nominal(film, 35.0).outside, rtol=1e-9)
    assert aslant.luminous_reflectance() > 1.1 * straight.luminous_reflectance()
    assert len(shapes(declared, 35.0).outside) == len(shapes(declared).outside)
