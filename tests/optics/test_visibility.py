"""Adrian's threshold against a second evaluation of the printed formulas, and the words for its level."""

from decimal import Decimal

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from advisor.optics.visibility import (
    NEAR_CERTAIN_K,
    VERDICT_LIMITS,
    VERDICTS,
    _age_factor,
    _exposure_term,
    _flux_and_luminance_functions,
    is_haze,
    threshold_adrian_1989,
    verdict_code,
)

# background cd/m2, size arcmin, sqrt Phi, sqrt L, a_alpha, a_L, a: Adrian 1989, Lighting Research & Technology 21:181,
# worked with a calculator of 30 digits; one row or more for each of the three pieces
PIECES = [
    (0.1, 10.0, 0.475773228, 0.026607251, 0.184098508, 0.234647943, 0.142022896),
    (1.0, 10.0, 0.790873071, 0.059460000, 0.184098508, 0.185710974, 0.124522513),
    (0.001, 30.0, 0.322849412, 0.005380220, 0.139525155, 0.318587101, 0.165619164),
    (100.0, 2.0, 3.444068221, 0.508422667, 0.312779942, 0.119546554, 0.159451064),
    (0.002, 60.0, 0.363980560, 0.007090063, 0.136410954, 0.309027025, 0.160854895),
]


@pytest.mark.parametrize(("background", "size", "root_phi", "root_l", "a_size", "a_level", "a"), PIECES)
def test_pieces_of_the_threshold(
    background: float, size: float, root_phi: float, root_l: float, a_size: float, a_level: float, a: float
) -> None:
    phi, lum = _flux_and_luminance_functions(np.array(background))
    assert phi == pytest.approx(root_phi, abs=5e-10)
    assert lum == pytest.approx(root_l, abs=5e-10)
    assert (a_size**2 + a_level**2) ** 0.5 / 2.1 == pytest.approx(a, abs=1e-9)
    assert _exposure_term(np.array(size), np.array(background)) == pytest.approx(a, abs=5e-10)


@pytest.mark.parametrize(
    ("age", "factor"),
    [
        # (23-19)^2/2160 + 0.99; (64-19)^2/2160 + 0.99; (70-56.6)^2/116.3 + 1.43; (75-56.6)^2/116.3 + 1.43
        (23.0, 0.997407),
        (10.0, 0.997407),
        (64.0, 1.9275),
        (70.0, 2.973938),
        (75.0, 4.341092),
        (90.0, 4.341092),
    ],
)
def test_age_factor(age: float, factor: float) -> None:
    assert _age_factor(age) == pytest.approx(factor, abs=5e-7)


def by_hand(background: float, size: float, age: float, exposure: float) -> float:
    """Adrian's formulas once more, in decimal arithmetic and in the order of the printed text."""

    def power_of(base: Decimal, exponent: str) -> Decimal:
        return (Decimal(exponent) * base.ln()).exp()

    lb, alpha, y, t = Decimal(background), Decimal(size), Decimal(age), Decimal(exposure)
    log_lb = lb.log10()
    if lb >= Decimal("0.6"):
        phi = (Decimal("4.1925") * power_of(lb, "0.1556")).log10() + Decimal("0.1684") * power_of(lb, "0.5867")
        lum = Decimal("0.05946") * power_of(lb, "0.466")
    elif lb > Decimal("0.00418"):
        phi = Decimal(10) ** (Decimal("-0.072") + Decimal("0.3372") * log_lb + Decimal("0.0866") * log_lb**2)
        lum = Decimal(10) ** (Decimal("-1.256") + Decimal("0.319") * log_lb)
    else:
        phi = Decimal(10) ** (Decimal("0.028") + Decimal("0.173") * log_lb)
        lum = Decimal(10) ** (Decimal("-0.891") + Decimal("0.5275") * log_lb + Decimal("0.0227") * log_lb**2)
    a = alpha.log10() + Decimal("0.523")
    a_size = Decimal("0.36") - Decimal("0.0972") * (a * a / (a * a - Decimal("2.513") * a + Decimal("2.7895")))
    b = log_lb + 6
    a_level = Decimal("0.355") - Decimal("0.1217") * (b * b / (b * b - Decimal("10.4") * b + Decimal("52.28")))
    seconds = (a_size**2 + a_level**2).sqrt() / Decimal("2.1")
    factor = (
        (y - 19) ** 2 / 2160 + Decimal("0.99")
        if y <= 64
        else (y - Decimal("56.6")) ** 2 / Decimal("116.3") + Decimal("1.43")
    )
    return float(Decimal("2.6") * (phi / alpha + lum) ** 2 * (seconds + t) / t * factor)


@given(
    log_background=st.floats(-6, 4),
    size=st.floats(0.1, 60),
    age=st.floats(23, 75),
    exposure=st.floats(0.05, 10),
)
def test_threshold_equals_the_second_evaluation(
    log_background: float, size: float, age: float, exposure: float
) -> None:
    background = max(10.0**log_background, 1e-6)
    model = threshold_adrian_1989(background, size_arcmin=size, age_y=age, exposure_s=exposure)
    assert model == pytest.approx(by_hand(background, size, age, exposure), rel=1e-10)


@pytest.mark.parametrize(
    ("background", "size", "age", "threshold"),
    [(0.1, 10.0, 40.0, 1.830036e-2), (1.0, 10.0, 70.0, 1.576641e-1), (0.001, 30.0, 23.0, 7.316536e-4)],
)
def test_thresholds_worked_with_a_calculator(background: float, size: float, age: float, threshold: float) -> None:
    # from the pieces above: 2.6 (sqrtPhi/alpha + sqrtL)^2 (a + 2)/2 x age factor
    assert threshold_adrian_1989(background, size_arcmin=size, age_y=age) == pytest.approx(threshold, rel=5e-7)


@pytest.mark.parametrize(("join", "step"), [(0.00418, 0.2), (0.6, 0.05)])
def test_the_pieces_do_not_join_smoothly_but_nearly(join: float, step: float) -> None:
    below, above = threshold_adrian_1989([join * (1 - 1e-9), join * (1 + 1e-9)], size_arcmin=10.0, age_y=30.0)
    assert 1e-4 < abs(np.log(above / below)) < step


def test_large_and_dark_targets_are_held_to_the_range() -> None:
    large = threshold_adrian_1989(0.1, size_arcmin=[60.0, 600.0, 0.0, 0.1], age_y=30.0)
    assert large[0] == large[1]
    assert large[2] == large[3]
    dark = threshold_adrian_1989([0.0, 1e-6], size_arcmin=10.0, age_y=30.0)
    assert dark[0] == dark[1] > 0.0


def test_a_point_needs_a_fixed_product_of_luminance_and_area() -> None:
    # Ricco's law: for a vanishing target the threshold goes as 1/alpha^2 (a changes by under 2 %)
    small = threshold_adrian_1989(0.01, size_arcmin=[0.1, 0.2], age_y=30.0)
    assert small[0] / small[1] == pytest.approx(4.0, rel=0.05)


@pytest.mark.parametrize(
    ("level", "word"),
    [
        (0.0, "not noticed"),
        (0.385, "not noticed"),
        (0.4, "at the limit"),
        (0.99, "at the limit"),
        (1.0, "only if looked for"),
        (2.99, "only if looked for"),
        (3.0, "noticeable"),
        (9.9, "noticeable"),
        (10.0, "plain"),
        (1e9, "plain"),
    ],
)
def test_verdict_words(level: float, word: str) -> None:
    assert VERDICTS[verdict_code(level)] == word


def test_half_detection_lies_in_not_noticed() -> None:
    # k = 2.6 is near-certain, k = 1 half the time
    half_seen = 1.0 / NEAR_CERTAIN_K
    assert half_seen == pytest.approx(0.385, abs=5e-4)
    assert half_seen < VERDICT_LIMITS[0]


def test_haze_is_never_called_plain() -> None:
    codes = verdict_code([0.1, 2.0, 5.0, 50.0], haze=True)
    assert [VERDICTS[code] for code in codes] == ["not noticed", "only if looked for", "noticeable", "noticeable"]


@pytest.mark.parametrize(
    ("size_deg", "separation_deg", "haze"),
    [
        ([0.9, 0.9], 2.0, False),
        ([1.1, 1.1], 2.0, True),  # 66 arcmin
        ([2.0, 0.4], 2.0, False),  # geometric mean 53.7 arcmin
        ([0.6, 0.6], 0.31, False),
        ([0.6, 0.6], 0.29, True),  # its radius of 0.3 covers the source
        ([0.6, 0.6], np.inf, False),
    ],
)
def test_haze_is_wide_or_covers_its_source(size_deg: list[float], separation_deg: float, haze: bool) -> None:
    assert bool(is_haze(size_deg, separation_deg=separation_deg)) is haze


def test_values_outside_the_range_are_refused_by_name() -> None:
    with pytest.raises(ValueError, match="background_cd_m2"):
        threshold_adrian_1989(-1.0, size_arcmin=10.0, age_y=30.0)
    with pytest.raises(ValueError, match="size_arcmin"):
        threshold_adrian_1989(1.0, size_arcmin=-1.0, age_y=30.0)
    with pytest.raises(ValueError, match="exposure_s"):
        threshold_adrian_1989(1.0, size_arcmin=10.0, age_y=30.0, exposure_s=0.0)
