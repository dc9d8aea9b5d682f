"""The mapping from light to codes: the published curves, and how thresholds become steps."""

import numpy as np
import pytest

from advisor.optics.tone import (
    BASE_WHITE_CODE,
    base_codes,
    finished,
    key_krawczyk_2005,
    light_paint,
    photographic_reinhard_2002,
    srgb_encoded,
    steps_above,
)


@pytest.mark.parametrize(
    ("adapting", "key"),
    # 0: 1.03 - 2/2. 9: log10 is 1, 1.03 - 2/3. 99: 1.03 - 2/4. 9999: 1.03 - 2/6
    [(0.0, 0.03), (9.0, 0.363333), (99.0, 0.53), (9999.0, 0.696667)],
)
def test_the_key_rises_with_the_light(adapting: float, key: float) -> None:
    assert float(key_krawczyk_2005(adapting)) == pytest.approx(key, abs=1e-6)


def test_the_photographic_curve_in_closed_form() -> None:
    """Equation 3 of Reinhard et al.: with scaled luminance 1 it gives 1/2, with 3 it gives 3/4."""
    key = float(key_krawczyk_2005(10.0))
    one = 10.0 / key
    shown = photographic_reinhard_2002([0.0, one, 3.0 * one], adapting_cd_m2=10.0)
    assert shown == pytest.approx([0.0, 0.5, 0.75])


def test_the_white_point_is_full_white_and_all_above_it() -> None:
    """Equation 4 of Reinhard et al.: L = W gives 1."""
    shown = photographic_reinhard_2002([300.0, 301.0, 1e5], adapting_cd_m2=100.0, white_cd_m2=300.0)
    assert shown == pytest.approx([1.0, 1.0, 1.0])


def test_codes_of_the_screen_are_those_of_the_colour_library() -> None:
    colour = pytest.importorskip("colour")
    values = np.linspace(0.0, 1.0, 101)
    assert srgb_encoded(values) == pytest.approx(colour.models.eotf_inverse_sRGB(values), abs=1e-6)


def test_the_base_leaves_room_above() -> None:
    grey = np.ones((3, 3))
    codes = base_codes(np.array([0.0, 10.0, 1e9]), paint=grey, adapting_cd_m2=10.0)
    assert codes[0] == pytest.approx([0.0, 0.0, 0.0])
    assert (np.diff(codes, axis=0) > 0.0).all()
    assert codes.max() <= BASE_WHITE_CODE + 1e-9


def test_the_limit_of_not_noticed_is_one_step_and_plain_is_25() -> None:
    assert steps_above([0.0, 0.4, 1.0, 10.0]) == pytest.approx([0.0, 1.0, 2.5, 25.0])


def test_steps_rise_without_a_jump_and_slower_above_plain() -> None:
    level = np.geomspace(0.01, 1e4, 2000)
    steps = steps_above(level)
    assert (np.diff(steps) > 0.0).all()
    assert float(steps_above(10.0 + 1e-9)) == pytest.approx(25.0)
    assert float(steps_above(10.0 * np.e)) == pytest.approx(50.0)  # the logarithm in closed form


def test_no_channel_gets_more_than_the_steps() -> None:
    paint = light_paint([[95.0, 100.0, 108.9], [5.0, 1.0, 40.0], [0.0, 0.0, 0.0]])
    assert paint.max(axis=-1) == pytest.approx([1.0, 1.0, 1.0])
    assert paint[0] == pytest.approx([1.0, 1.0, 1.0], abs=0.01)
    assert paint[1, 2] > paint[1, 1]


def test_codes_are_whole_and_kept_within_eight_bits() -> None:
    assert finished(np.array([-3.0, 0.4, 254.6, 999.0])).tolist() == [0, 0, 255, 255]


@pytest.mark.parametrize(
    "call",
    [
        lambda: key_krawczyk_2005(-1.0),
        lambda: photographic_reinhard_2002(-1.0, adapting_cd_m2=1.0),
        lambda: photographic_reinhard_2002(1.0, adapting_cd_m2=0.0),
        lambda: steps_above(-0.1),
    ],
)
def test_what_is_no_light_is_refused(call: object) -> None:
    assert callable(call)
    with pytest.raises(ValueError, match="must be"):
        call()
