"""Measured rows and declared figures: what is accepted, and one plain refusal for each reason."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from numpy.typing import NDArray

from advisor.errors import TwolightError
from advisor.optics import spectrum_input as module
from advisor.optics.colour import HUE_WORDS
from advisor.optics.grid import WAVELENGTHS_NM
from advisor.optics.photometry import luminous_mean
from advisor.optics.spectrum_input import (
    DeclaredOutOfReach,
    SpectrumFault,
    hue_distance_deg,
    measured_spectrum,
    scaled_shape,
    square_ratio,
)


def rows(step_nm: float = 10.0, start_nm: float = 380.0, end_nm: float = 780.0) -> NDArray[np.float64]:
    wavelength = np.arange(start_nm, end_nm + 0.5 * step_nm, step_nm)
    return np.stack([wavelength, 0.01 + 1e-5 * (wavelength - 380.0)], axis=-1)


# --- measured -----------------------------------------------------------------------------------------------------


@pytest.mark.parametrize("step_nm", [1.0, 5.0, 10.0])
def test_a_straight_line_stays_one_however_it_was_sampled(step_nm: float) -> None:
    np.testing.assert_allclose(measured_spectrum(rows(step_nm)), 0.01 + 1e-5 * (WAVELENGTHS_NM - 380.0), rtol=1e-12)


def test_rows_beyond_the_grid_are_used_only_to_reach_its_ends() -> None:
    wider = np.concatenate([[[300.0, 0.5]], rows(10.0, 375.0, 785.0), [[900.0, 0.5]]])
    np.testing.assert_allclose(measured_spectrum(wider), 0.01 + 1e-5 * (WAVELENGTHS_NM - 380.0), rtol=1e-12)


def test_lists_as_json_gives_them_are_taken() -> None:
    assert measured_spectrum(rows().tolist()).shape == (401,)


def changed(row: int, column: int, value: float) -> NDArray[np.float64]:
    table = rows()
    table[row, column] = value
    return table


@pytest.mark.parametrize(
    ("table", "error", "says"),
    [
        (changed(3, 1, 1.7), "SpectrumInPercent", r"1\.7 at 410 nm is above 1; give fractions"),
        (changed(3, 1, -0.001), "SpectrumNegative", r"-0\.001 at 410 nm is negative"),
        (changed(3, 1, float("nan")), "SpectrumNotANumber", "Row 4"),
        (changed(0, 0, float("inf")), "SpectrumNotANumber", "Row 1"),
        (changed(3, 0, 405.0), None, None),
        (changed(3, 0, 395.0), "SpectrumOutOfOrder", "395 nm in row 4 does not rise; sort"),
        (changed(3, 0, 400.0), "SpectrumOutOfOrder", "400 nm in row 4"),
        (rows(10.0, 390.0), "SpectrumNotCovered", "covers 390 to 780 nm; it must reach from 380"),
        (rows(10.0, 380.0, 770.0), "SpectrumNotCovered", "covers 380 to 770 nm"),
        (np.delete(rows(), 7, axis=0), "SpectrumGap", "Between 440 and 460 nm"),
        (rows(11.0, 373.0, 790.0), "SpectrumGap", "Between 373 and 384 nm"),
        (rows()[:, 0], "SpectrumRowsUnreadable", "two numbers each"),
        ([[380.0, 0.1]], "SpectrumRowsUnreadable", "two or more rows"),
        ([["a", "b"], ["c", "d"]], "SpectrumRowsUnreadable", "two numbers each"),
        ([[380.0, 0.1], [390.0]], "SpectrumRowsUnreadable", "two numbers each"),
        ([], "SpectrumRowsUnreadable", "two or more rows"),
    ],
)
def test_each_reason_has_its_own_plain_sentence(table: object, error: str | None, says: str | None) -> None:
    if error is None:
        with pytest.raises(SpectrumFault, match="Between 405 and 420"):
            measured_spectrum(table)  # type: ignore[arg-type]  # rows as a file may hold them
        return
    with pytest.raises(getattr(module, error), match=says) as caught:
        measured_spectrum(table)  # type: ignore[arg-type]  # rows as a file may hold them
    assert isinstance(caught.value, SpectrumFault)
    assert all(f"{float(figure):g}" in str(caught.value) for figure in caught.value.figures.values())


def test_every_fault_is_an_error_for_a_person() -> None:
    assert issubclass(SpectrumFault, TwolightError)


def test_one_row_in_percent_is_enough_to_refuse_all() -> None:
    table = rows()
    table[:, 1] *= 100.0  # 1.0 to 1.4: one unit wrong, seen at the greatest
    with pytest.raises(SpectrumFault, match="780 nm is above 1"):
        measured_spectrum(table)


# --- declared -----------------------------------------------------------------------------------------------------

FLAT = np.full(401, 0.01)
BLUE = 0.002 + 0.03 * np.exp(-0.5 * ((WAVELENGTHS_NM - 440.0) / 25.0) ** 2)
GREEN = 0.002 + 0.03 * np.exp(-0.5 * ((WAVELENGTHS_NM - 530.0) / 25.0) ** 2)
SHAPES = np.stack([FLAT, BLUE, GREEN])
HUES = ("neutral", "blue", "green")


def test_the_shape_of_that_hue_is_scaled_to_the_declared_figure() -> None:
    estimate = scaled_shape(SHAPES, HUES, declared=0.007, hue="green")
    assert estimate.shape == 2
    assert luminous_mean(estimate.spectrum) == pytest.approx(0.007, rel=1e-12)
    np.testing.assert_allclose(estimate.spectrum, GREEN * estimate.factor, rtol=1e-12)


def test_the_range_holds_every_shape_that_can_be_scaled_and_all_have_the_declared_figure() -> None:
    estimate = scaled_shape(SHAPES, HUES, declared=0.007, hue="green")
    own = luminous_mean(SHAPES)
    possible = [place for place in range(3) if 0.007 / own[place] <= 2.0]
    assert list(estimate.shapes) == possible
    np.testing.assert_allclose(luminous_mean(estimate.candidates), 0.007, rtol=1e-12)
    ratios = square_ratio(estimate.candidates)
    assert ratios.min() <= square_ratio(estimate.spectrum) <= ratios.max()


def test_without_that_hue_the_neighbour_on_the_circle_is_taken() -> None:
    assert scaled_shape(SHAPES, HUES, declared=0.004, hue="purple").shape == 1
    assert scaled_shape(SHAPES, HUES, declared=0.004, hue="gold").shape == 2


def test_of_two_shapes_of_one_hue_the_one_that_needs_less_scaling_is_taken() -> None:
    shapes = np.stack([GREEN * 0.6, GREEN, GREEN * 3.0])
    declared = 1.1 * float(luminous_mean(GREEN))
    assert scaled_shape(shapes, ("green",) * 3, declared=declared, hue="green").shape == 1


def test_a_shape_is_at_most_doubled_and_never_beyond_1() -> None:
    assert scaled_shape(FLAT, ["neutral"], declared=0.02, hue="neutral").factor == pytest.approx(2.0)
    with pytest.raises(DeclaredOutOfReach, match=r"0\.021; the most is 0\.02\..*layers or a measured spectrum"):
        scaled_shape(FLAT, ["neutral"], declared=0.021, hue="neutral")
    tall = 0.01 + 0.79 * np.exp(-0.5 * ((WAVELENGTHS_NM - 400.0) / 10.0) ** 2)
    with pytest.raises(DeclaredOutOfReach):
        scaled_shape(tall, ["blue"], declared=1.5 * float(luminous_mean(tall)), hue="blue")
    inside = scaled_shape(tall, ["blue"], declared=1.2 * float(luminous_mean(tall)), hue="blue")
    assert inside.spectrum.max() <= 1.0


def test_what_cannot_be_meant_is_refused_by_name() -> None:
    with pytest.raises(ValueError, match="declared"):
        scaled_shape(SHAPES, HUES, declared=0.0, hue="green")
    with pytest.raises(ValueError, match="hue must be one of neutral"):
        scaled_shape(SHAPES, HUES, declared=0.007, hue="verdigris")
    with pytest.raises(ValueError, match="shape_hues must hold one"):
        scaled_shape(SHAPES, HUES[:2], declared=0.007, hue="green")
    with pytest.raises(ValueError, match="shapes must reflect"):
        scaled_shape(np.zeros(401), ["neutral"], declared=0.007, hue="green")


@given(st.sampled_from(HUE_WORDS), st.sampled_from(HUE_WORDS))
def test_hue_distance_is_a_distance(one: str, other: str) -> None:
    assert hue_distance_deg(one, other) == hue_distance_deg(other, one)
    assert (hue_distance_deg(one, other) == 0.0) == (one == other)
    assert hue_distance_deg(one, other) <= 180.0


def test_the_square_ratio_of_a_flat_spectrum_is_1_and_of_half_a_spectrum_is_its_inverse_share() -> None:
    assert square_ratio(FLAT) == pytest.approx(1.0, rel=1e-12)
    half = np.where(WAVELENGTHS_NM < 555.0, 0.02, 0.0)
    share = luminous_mean(np.where(WAVELENGTHS_NM < 555.0, 1.0, 0.0))  # E[R^2]/E[R]^2 = 1/share for a two-valued R
    assert square_ratio(half) == pytest.approx(1.0 / share, rel=1e-12)
    with pytest.raises(ValueError, match="dark"):
        square_ratio(np.zeros(401))
