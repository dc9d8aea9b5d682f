"""Colour of reflected light against colour-science (PyPI) and printed CIE values."""

import colour
import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from numpy.typing import NDArray

from advisor.optics import colour as ours
from advisor.optics.photometry import ILLUMINANTS, IlluminantName, illuminant, luminous_efficiency, luminous_mean

GRID = colour.SpectralShape(380, 780, 1)
OBSERVER = colour.MSDS_CMFS["CIE 1931 2 Degree Standard Observer"]
ROUND_OFF = 1e-12  # relative; double precision through a few hundred sums and a cube root


def film_like(phase: float = 0.0) -> NDArray[np.float64]:
    """A wavy reflectance as a film leaves it."""
    return 0.01 * (1.0 + np.sin(np.linspace(0.0, 9.0, 401) + phase)) + 0.001


def reference_xyz(reflectance: NDArray[np.float64], name: str) -> NDArray[np.float64]:
    light = colour.SDS_ILLUMINANTS[name].copy().align(GRID, interpolator=colour.LinearInterpolator)
    sd = colour.SpectralDistribution(reflectance, GRID.wavelengths)
    return np.asarray(colour.sd_to_XYZ(sd, OBSERVER.copy().align(GRID), light, method="Integration"))


@pytest.mark.parametrize("name", ILLUMINANTS)
def test_tristimulus_values_equal_the_reference(name: IlluminantName) -> None:
    for phase in (0.0, 1.0, 2.0):
        np.testing.assert_allclose(
            ours.xyz(film_like(phase), illuminant=name), reference_xyz(film_like(phase), name), rtol=ROUND_OFF
        )


def test_y_is_a_hundred_times_the_luminous_reflectance() -> None:
    many = np.stack([film_like(phase) for phase in (0.0, 1.0, 2.0)])
    np.testing.assert_allclose(ours.xyz(many)[:, 1], 100.0 * luminous_mean(many), rtol=ROUND_OFF)


def test_white_of_daylight_is_the_printed_one_once_the_light_outside_the_grid_is_added() -> None:
    # Printed (CIE 15): X 95.047, Y 100, Z 108.883; x 0.3127, y 0.3290: half the last digit each. Our grid ends at 380
    # and 780 nm; what the CIE tables hold outside it comes from colour-science.
    wide = colour.SpectralShape(360, 830, 1)
    light = colour.SDS_ILLUMINANTS["D65"].copy().align(wide, interpolator=colour.LinearInterpolator)
    cmfs = OBSERVER.copy().align(wide)
    outside = (wide.wavelengths < 380) | (wide.wavelengths > 780)
    tails = (cmfs.values * light.values[:, None])[outside].sum(axis=0)
    total = ours.white() / 100.0 * float(luminous_efficiency() @ illuminant("D65")) + tails
    np.testing.assert_allclose(100.0 * total / total[1], [95.047, 100.0, 108.883], rtol=0.0, atol=0.0005)
    np.testing.assert_allclose(ours.chromaticity(total), [0.3127, 0.3290], rtol=0.0, atol=0.00005)


def test_white_on_this_grid_lacks_only_what_lies_outside_380_to_780_nm() -> None:
    # The tails hold at most 0.03 % of Z and 0.006 % of X: colour-science, full tables.
    np.testing.assert_allclose(ours.white(), [95.047, 100.0, 108.883], rtol=3e-4)
    np.testing.assert_allclose(ours.white(), reference_xyz(np.ones(401), "D65"), rtol=ROUND_OFF)


@pytest.mark.parametrize("scale", [1.0, 0.3, 0.01, 0.0])
def test_cielab_equals_the_reference_on_both_branches(scale: float) -> None:
    values = scale * ours.xyz(np.stack([30.0 * film_like(phase) for phase in (0.0, 1.0, 2.0)]))
    white_xy = ours.white()[:2] / ours.white().sum()
    expected = colour.XYZ_to_Lab(values / 100.0, white_xy)
    np.testing.assert_allclose(ours.cielab(values), expected, rtol=1e-10, atol=1e-10)


def test_cielab_takes_another_white() -> None:
    white_a = ours.white("A")
    np.testing.assert_allclose(ours.cielab(white_a, white_xyz=white_a), [100.0, 0.0, 0.0], atol=1e-12)


def test_a_patch_inside_srgb_equals_the_reference() -> None:
    values = ours.xyz(0.002 + 0.02 * film_like())
    expected = colour.XYZ_to_sRGB(values / values[1] * ours.DISPLAYED_Y)
    assert expected.min() > 0.0  # inside, so nothing was moved
    assert expected.max() < 1.0
    np.testing.assert_allclose(ours.displayed_srgb(values), expected, rtol=ROUND_OFF)
    assert ours.display_srgb(values) == "#" + "".join(f"{round(255 * channel):02x}" for channel in expected)


def test_a_nearly_empty_channel_uses_the_straight_part_of_the_srgb_curve() -> None:
    # Linear red 0.002 and 0.02, either side of the corner at 0.0031308; green and blue equal, chosen for Y 0.4.
    for red in (0.002, 0.02):
        rest = (ours.DISPLAYED_Y - 0.2126 * red) / (0.7152 + 0.0722)
        values = colour.RGB_to_XYZ(np.array([red, rest, rest]), "sRGB")
        expected = colour.XYZ_to_sRGB(values / values[1] * ours.DISPLAYED_Y)
        assert expected.min() > 0.0
        np.testing.assert_allclose(ours.displayed_srgb(values), expected, rtol=1e-10)


def test_a_patch_outside_srgb_moves_straight_towards_white_to_the_edge() -> None:
    narrow = np.exp(-0.5 * ((np.arange(380, 781) - 460.0) / 5.0) ** 2)
    patch = ours.displayed_srgb(ours.xyz(narrow))
    assert patch.min() == pytest.approx(0.0, abs=1e-12) or patch.max() == pytest.approx(1.0, abs=1e-12)
    back = colour.sRGB_to_XYZ(patch)
    # The luminance stays; 1e-3 because the standard prints its two matrices with four decimals.
    assert back[1] == pytest.approx(ours.DISPLAYED_Y, abs=1e-3)
    wanted, white, moved = (
        ours.chromaticity(ours.xyz(narrow)),
        ours.chromaticity(ours.white()),
        ours.chromaticity(back),
    )
    full, part = wanted - white, moved - white
    assert abs(full[0] * part[1] - full[1] * part[0]) / np.hypot(*full) < 1e-3  # on the line
    assert 0.0 < part @ full < full @ full  # between white and the colour


# Colour names of CSS (W3C, CSS Color 4), whose sRGB values everybody can look up, and the word a person would use here.
NAMED = {
    "red": (255, 0, 0),
    "gold": (255, 215, 0),
    "green": (0, 128, 0),
    "teal": (0, 128, 128),
    "blue": (65, 105, 225),  # royalblue
    "purple": (147, 112, 219),  # mediumpurple
    "pink": (255, 105, 180),  # hotpink
    "neutral": (128, 128, 128),  # gray
}


@pytest.mark.parametrize("word", NAMED)
def test_a_colour_that_has_a_name_gets_it(word: str) -> None:
    assert ours.hue_word(100.0 * colour.sRGB_to_XYZ(np.array(NAMED[word]) / 255.0)) == word


@pytest.mark.parametrize(
    ("name", "rgb", "word"),
    [
        ("blue", (0, 0, 255), "blue"),
        ("cornflowerblue", (100, 149, 237), "blue"),
        ("skyblue", (135, 206, 235), "blue"),
        ("purple", (128, 0, 128), "purple"),
        ("blueviolet", (138, 43, 226), "purple"),
        ("plum", (221, 160, 221), "purple"),
        ("deeppink", (255, 20, 147), "pink"),
        ("crimson", (220, 20, 60), "red"),
        ("orange", (255, 165, 0), "gold"),
        ("yellow", (255, 255, 0), "gold"),
        ("forestgreen", (34, 139, 34), "green"),
        ("cyan", (0, 255, 255), "teal"),
    ],
)
def test_more_names_fall_where_people_put_them(name: str, rgb: tuple[int, int, int], word: str) -> None:
    # CSS Color 4
    assert ours.hue_word(100.0 * colour.sRGB_to_XYZ(np.array(rgb) / 255.0)) == word, name


@given(st.floats(0.001, 1.0), st.floats(0.0, 6.28))
def test_the_word_and_the_patch_do_not_depend_on_brightness(scale: float, phase: float) -> None:
    values = ours.xyz(film_like(phase))
    np.testing.assert_allclose(ours.displayed_srgb(scale * values), ours.displayed_srgb(values), atol=1e-9)


def test_chroma_8_parts_neutral_from_the_rest() -> None:
    for chroma, word in ((7.99, "neutral"), (8.01, "gold")):
        lab = np.array([colour.XYZ_to_Lab(ours.white() * ours.DISPLAYED_Y / 100.0)[0], 0.0, chroma])
        white = ours.white()
        values = 100.0 * colour.Lab_to_XYZ(lab, white[:2] / white.sum())
        assert ours.hue_word(values) == word


def test_words_run_over_leading_axes() -> None:
    many = np.stack([100.0 * colour.sRGB_to_XYZ(np.array(rgb) / 255.0) for rgb in NAMED.values()]).reshape(2, 4, 3)
    assert ours.hue_words(many).ravel().tolist() == list(NAMED)
    assert ours.displayed_srgb(many).shape == (2, 4, 3)


def test_no_light_is_neutral_grey_and_never_nan() -> None:
    dark = ours.xyz(np.zeros(401))
    assert ours.hue_word(dark) == "neutral"
    np.testing.assert_array_equal(ours.cielab(dark), [0.0, 0.0, 0.0])
    np.testing.assert_allclose(ours.chromaticity(dark), ours.chromaticity(ours.white()))
    grey = ours.display_srgb(dark)
    # Y 0.4 grey by the sRGB curve of colour-science; the white of this grid differs from sRGB's by one step at most.
    level = round(255.0 * float(colour.cctf_encoding(0.4)))
    assert all(abs(int(grey[start : start + 2], 16) - level) <= 1 for start in (1, 3, 5))


def test_the_shift_with_the_angle_is_measured_from_the_first() -> None:
    pale = 0.02 + np.stack([film_like(), film_like(), film_like(1.5)])  # inside sRGB, so shown as it is
    spectra = pale * np.array([[1.0], [0.5], [1.0]])
    shift = ours.hue_shift(spectra)
    np.testing.assert_allclose(shift[:2], 0.0, atol=1e-12)
    values = ours.xyz(spectra)
    lab = colour.XYZ_to_Lab(values / values[:, 1:2] * ours.DISPLAYED_Y, ours.chromaticity(ours.white()))
    np.testing.assert_allclose(shift[2], np.hypot(*(lab[2] - lab[0])[1:]), rtol=1e-10)


def test_values_of_the_wrong_shape_are_refused() -> None:
    with pytest.raises(ValueError, match="xyz_values"):
        ours.cielab([0.1, 0.2])
    with pytest.raises(ValueError, match="spectrum must have 401"):
        ours.xyz(np.ones(31))
