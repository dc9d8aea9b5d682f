"""Pupil, accommodation and veil against printed values and the formulas worked by hand."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from advisor.optics.eye import (
    DEG2_PER_SR,
    accommodation_for,
    accommodation_hofstetter_1950,
    pupil_watson_yellott_2012,
    veil_cie146_2002,
)


@pytest.mark.parametrize(("age_y", "diameter_mm"), [(25.0, 6.50), (65.0, 4.92)])
def test_pupil_of_a_dark_field_is_the_published_one(age_y: float, diameter_mm: float) -> None:
    # Watson & Yellott, J Vis 12(10):12: 0.1 cd/m2 over 60 degrees (2827 deg^2), no lamp, both eyes
    assert pupil_watson_yellott_2012(282.7, age_y=age_y) == pytest.approx(diameter_mm, abs=5e-3)


def test_pupil_at_the_reference_age_is_the_standard_curve() -> None:
    # at 28.58 years the age term is 0; flux 846 gives x = 1 and 7.75 - 5.75/3 = 5.8333; no light gives 7.75
    assert pupil_watson_yellott_2012([846.0, 0.0], age_y=28.58) == pytest.approx([7.75 - 5.75 / 3.0, 7.75])


def test_one_eye_counts_a_tenth_of_the_light() -> None:
    one = pupil_watson_yellott_2012(8460.0, age_y=28.58, both_eyes=[False, True])
    assert one[0] == pytest.approx(7.75 - 5.75 / 3.0)
    assert one[1] < one[0]


def test_pupil_age_is_held_to_the_range_of_the_formula() -> None:
    ages = pupil_watson_yellott_2012(100.0, age_y=[5.0, 20.0, 83.0, 99.0])
    assert ages[0] == ages[1]
    assert ages[2] == ages[3]


def test_square_degrees_in_a_steradian() -> None:
    assert pytest.approx(3282.806, abs=5e-4) == DEG2_PER_SR  # (180/pi)^2, closed form


def test_hofstetters_least_amplitude_falls_a_quarter_dioptre_a_year_to_nothing_at_60() -> None:
    # Hofstetter 1950, minimum amplitude 15 - 0.25 age
    assert accommodation_hofstetter_1950([10.0, 20.0, 40.0, 60.0, 85.0]) == pytest.approx([12.5, 10.0, 5.0, 0.0, 0.0])


def test_veil_is_the_printed_one() -> None:
    # CIE 146:2002 at 1 degree, age 25, p 0.5: 10 + 5.05 (1 + 0.4^4) + 0.00125
    assert veil_cie146_2002(1.0, age_y=25.0, pigment=0.5) == pytest.approx(15.1805, abs=5e-5)


def test_veil_pieces_worked_by_hand() -> None:
    # at 62.5 years the age bracket is 2: 10/8 + (5/4 + 0.1/2) 2 + 0.0025 at 2 degrees, p 1
    assert veil_cie146_2002(2.0, age_y=62.5, pigment=1.0) == pytest.approx(1.25 + 2.6 + 0.0025)
    # black eyes, far off: 10/10^3 + 5/10^2 at age 0
    assert veil_cie146_2002(10.0, age_y=0.0, pigment=0.0) == pytest.approx(0.06)


def test_veil_is_held_to_a_tenth_of_a_degree_and_a_hundred() -> None:
    near = veil_cie146_2002([0.0, 0.1], age_y=40.0, pigment=0.5)
    far = veil_cie146_2002([100.0, 170.0], age_y=40.0, pigment=0.5)
    assert near[0] == near[1]
    assert far[0] == far[1]


@pytest.mark.parametrize(
    ("defocus_d", "in_use_d", "left_d"),
    [
        # amplitude 5 D; looking far away (0 in use): -5..0 can be focused
        (-3.0, 0.0, 0.0),
        (-7.0, 0.0, -2.0),
        (2.0, 0.0, 2.0),
        # 2 D in use: -3..+2
        (2.0, 2.0, 0.0),
        (3.5, 2.0, 1.5),
        (-4.0, 2.0, -1.0),
        # more asked for than there is: all 5 in use, 0..+5
        (4.0, 9.0, 0.0),
        (-1.0, 9.0, -1.0),
        # beyond the far point: none in use
        (1.0, -2.0, 1.0),
    ],
)
def test_focus_reaches_what_amplitude_leaves_free(defocus_d: float, in_use_d: float, left_d: float) -> None:
    change = accommodation_for(defocus_d, amplitude_d=5.0, in_use_d=in_use_d)
    assert defocus_d - change == pytest.approx(left_d)


@given(
    flux=st.floats(0, 1e12),
    age=st.floats(0, 130),
    both=st.booleans(),
    angle=st.floats(0, 180),
    pigment=st.floats(0, 1.2),
)
def test_the_eye_stays_within_sense(flux: float, age: float, both: bool, angle: float, pigment: float) -> None:
    pupil = pupil_watson_yellott_2012(flux, age_y=age, both_eyes=both)
    assert 1.5 < pupil < 8.5
    veil = veil_cie146_2002(angle, age_y=age, pigment=pigment)
    assert 0.0 < veil < 2e4
    assert np.isfinite(veil)


def test_values_outside_the_range_are_refused_by_name() -> None:
    with pytest.raises(ValueError, match="flux_cd_m2_deg2"):
        pupil_watson_yellott_2012(-1.0, age_y=30.0)
    with pytest.raises(ValueError, match="age_y"):
        accommodation_hofstetter_1950(-1.0)
    with pytest.raises(ValueError, match="pigment"):
        veil_cie146_2002(1.0, age_y=30.0, pigment=2.0)
    with pytest.raises(ValueError, match="amplitude_d"):
        accommodation_for(1.0, amplitude_d=-1.0, in_use_d=0.0)
