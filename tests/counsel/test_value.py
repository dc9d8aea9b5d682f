import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from hypothesis.extra import numpy as arrays

from advisor.counsel.priorities import level_weights
from advisor.counsel.value import Criterion, criteria, currency_size, leeway, values_of, worth

USED = list(criteria().values())
COUNT = len(USED)
LEVELS = st.lists(st.integers(1, 4), min_size=COUNT, max_size=COUNT)
FIGURES = arrays.arrays(np.float64, (3, COUNT), elements=st.floats(0.0, 3000.0))
FEW = settings(max_examples=60, deadline=None)


def linear(best: float, worst: float) -> Criterion:
    return Criterion("x", "x", best, worst, "linear", 0.0, "")


def test_a_linear_scale_runs_from_its_best_to_its_worst_and_no_further() -> None:
    values = linear(0.0, 10.0).value([-5.0, 0.0, 2.5, 10.0, 99.0])
    assert values == pytest.approx([1.0, 1.0, 0.75, 0.0, 0.0])


def test_a_scale_may_run_downwards() -> None:
    assert linear(0.99, 0.79).value([1.0, 0.89, 0.5]) == pytest.approx([1.0, 0.5, 0.0])


def test_a_log_scale_is_felt_by_ratios() -> None:
    scale = Criterion("x", "x", 0.4, 10.0, "log", 1.4, "")
    # 2 lies half way between 0.4 and 10 by ratio: 0.4 x 5 = 2, 2 x 5 = 10
    assert scale.value([0.0, 0.4, 2.0, 10.0, 1e9]) == pytest.approx([1.0, 1.0, 0.5, 0.0, 0.0])


def test_an_unknown_figure_is_worth_nothing_and_is_never_nan() -> None:
    assert linear(0.0, 600.0).value([np.nan, 300.0]) == pytest.approx([0.0, 0.5])


@pytest.mark.parametrize("criterion", USED, ids=lambda c: c.key)
def test_every_criterion_has_a_scale_a_reason_and_some_doubt(criterion: Criterion) -> None:
    assert criterion.best != criterion.worst
    assert criterion.why
    assert criterion.label
    assert criterion.value_uncertainty >= 0.0
    assert criterion.scale == "linear" or min(criterion.best, criterion.worst) > 0.0
    assert criterion.value([criterion.best, criterion.worst]) == pytest.approx([1.0, 0.0])


@FEW
@given(FIGURES, LEVELS)
def test_better_on_everything_is_never_below(figures: np.ndarray, levels: list[int]) -> None:
    best = np.array([criterion.best for criterion in USED])
    better = figures[0] + 0.3 * (best - figures[0])  # a step towards the best on every criterion
    beyond = np.where(figures[0] >= best, np.maximum(better, best), np.minimum(better, best))
    found = worth(values_of(np.stack([beyond, figures[0]]), USED), level_weights(levels))
    # a figure already better than its anchor counts as the anchor, so it loses nothing by the step
    assert found[0] >= found[1] - 1e-12


@FEW
@given(FIGURES, LEVELS, st.integers(0, 2))
def test_an_option_more_swaps_no_two_others(figures: np.ndarray, levels: list[int], extra: int) -> None:
    weights = level_weights(levels)
    with_it = worth(values_of(figures, USED), weights)
    without = worth(values_of(np.delete(figures, extra, axis=0), USED), weights)
    assert np.delete(with_it, extra) == pytest.approx(without, abs=1e-12)


@FEW
@given(st.floats(0.01, 100.0), st.floats(0.0, 50.0))
def test_units_change_nothing(times: float, figure: float) -> None:
    for scale in ("linear", "log"):
        one = Criterion("x", "x", 3.0, 14.0, scale, 1.1, "")
        other = Criterion("x", "x", 3.0 * times, 14.0 * times, scale, 1.1, "")
        assert other.value(figure * times) == pytest.approx(one.value(figure), abs=1e-6)


def test_worth_is_the_weighed_sum() -> None:
    values = np.array([[1.0, 0.0], [0.5, 0.5]])
    assert worth(values, [0.75, 0.25]) == pytest.approx([0.75, 0.5])
    assert worth(values, [[1.0, 0.0], [0.0, 1.0]]) == pytest.approx(np.array([[1.0, 0.5], [0.0, 0.5]]))


def test_leeway_counts_only_what_differs() -> None:
    used = [Criterion("a", "a", 0, 10, "linear", 1.0, ""), Criterion("b", "b", 0, 10, "linear", 2.0, "")]
    assert leeway([0.5, 0.5], [0.5, 0.5], [0.5, 0.5], used) == 0.0
    assert leeway([0.5, 0.5], [0.4, 0.5], [0.5, 0.5], used) == pytest.approx(0.5 * 0.1)
    # both differ: 0.5 x 0.1 and 0.5 x 0.2 in quadrature
    assert leeway([0.5, 0.5], [0.4, 0.1], [0.5, 0.5], used) == pytest.approx(np.hypot(0.05, 0.1))


def test_a_currency_has_about_its_size_and_an_unknown_one_counts_as_a_euro() -> None:
    assert currency_size("EUR") == 1.0
    assert currency_size("JPY") > 100.0
    assert currency_size("XXX") == 1.0
