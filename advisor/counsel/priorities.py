"""What this wearer cares about, in order, as the answers put it; and weights that follow from an order alone.

An answer gives a criterion a level: "often" 3, "sometimes" 2, not asked 1 (scored as nothing: it stands behind every
answer), "never" 0, which drops it. Criteria on one level are in no order among themselves.
"""

from collections.abc import Callable, Mapping, Sequence
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

from advisor.counsel.case import OLDER_FROM, Case
from advisor.counsel.reach import far_is_needed, wanted

Floats = NDArray[np.float64]
OFTEN, SOMETIMES, NOT_ASKED, DROPPED = 3, 2, 1, 0
LEVELS = {"often": OFTEN, "yes": OFTEN, "sometimes": SOMETIMES, "no": DROPPED, "never": DROPPED}
EXPOSURES = ("dust", "heat_steam", "sprays_solvents", "water_salt_chlorine")
PRIORITY_SETS, SEED = 2000, 20260301


def rank_order_centroid(count: int) -> Floats:
    """Return the rank-order-centroid weights of ``count`` criteria, the most important first.

    The mean of all weights that add up to one and keep the order: w_k = (1/n) sum of 1/i over i from k to n.

    References
    ----------
    W. Edwards and F. H. Barron, Organizational Behavior and Human Decision Processes 60:306 (1994).
    """
    if count < 1:
        raise ValueError("count must be 1 or more")
    return np.cumsum(1.0 / np.arange(count, 0, -1))[::-1] / count


def level_weights(levels: Sequence[int]) -> Floats:
    """Return rank-order-centroid weights in the order of the criteria; those on one level share theirs equally."""
    ranks = np.asarray(levels)
    order = np.argsort(-ranks, kind="stable")
    weights = np.empty(len(ranks))
    weights[order] = rank_order_centroid(len(ranks))
    for level in np.unique(ranks):
        weights[ranks == level] = weights[ranks == level].mean()
    return weights


@lru_cache(maxsize=256)
def priority_sets(levels: tuple[int, ...], *, count: int = PRIORITY_SETS, seed: int = SEED) -> Floats:
    """Return weights drawn evenly from all that keep the order, (count, criterion); one seed, so one answer.

    A point drawn evenly from the simplex (Dirichlet of ones) and sorted is one drawn evenly from the part of it that
    keeps an order; criteria on one level are put in a random order in each draw.

    References
    ----------
    R. Lahdelma, J. Hokkanen, P. Salminen, European Journal of Operational Research 106:137 (1998).
    """
    random = np.random.default_rng(seed)
    drawn = -np.sort(-random.dirichlet(np.ones(len(levels)), size=count), axis=1)
    shuffled = np.asarray(levels) + random.uniform(0.0, 0.5, size=drawn.shape)
    weights = np.empty_like(drawn)
    np.put_along_axis(weights, np.argsort(-shuffled, axis=1), drawn, axis=1)
    weights.setflags(write=False)
    return weights


def _answer(case: Case, *questions: str) -> int:
    """Return the highest level of some questions; dropped only if every one of them was answered with never."""
    return max(LEVELS.get(case.life(question), NOT_ASKED) for question in questions)


def _asked(case: Case, *questions: str) -> int:
    """Return the highest level that was answered; a question not asked counts as nothing."""
    return max(LEVELS.get(case.life(question), DROPPED) for question in questions)


def _second_image(case: Case) -> int:
    if case.never_at_night or not far_is_needed(case):  # a near pair is not driven in
        return DROPPED
    return _answer(case, "night_driving")


def _passed(case: Case) -> int:
    at_night = case.life("night_driving") == "often"
    older = case.age_years >= OLDER_FROM and not case.is_default("wearer.birth_year")
    return SOMETIMES if at_night or older else NOT_ASKED


def _fringe(case: Case) -> int:
    # through the lower part of a lens for reading, or to the side of a screen, one looks off its centre
    return SOMETIMES if case.has_add or case.life("screen_work") == "often" else NOT_ASKED


def _in_between(case: Case) -> int:
    return _answer(case, "screen_work") if case.has_add and wanted(case) == "all" else DROPPED


def _from_behind(case: Case) -> int:
    level = _answer(case, "lights_behind")
    if case.life("sun") == "often" and level == NOT_ASKED:
        level = SOMETIMES  # out in the sun it is behind one half of the time
    named = case.visit.scenes is not None and any(scene.where == "behind" for scene in case.scenes)
    return max(level, SOMETIMES) if named and level else level  # somebody thought of such a light for this wearer


IMPORTANCE: Mapping[str, Callable[[Case], int]] = {
    "second-image": _second_image,
    "from-behind": _from_behind,
    "seen-by-others": lambda case: _answer(case, "face_to_face"),
    "thickness": lambda case: _answer(case, "bothered_thickness"),
    "weight": lambda case: _answer(case, "bothered_weight"),
    "fringe": _fringe,
    # by day a tint takes light away on purpose, and only what the faces take is unwanted
    "transmitted": lambda case: DROPPED if case.never_at_night else _passed(case),
    "not-mirrored": lambda case: _passed(case) if case.never_at_night else DROPPED,
    # what a life does to lenses is a fact about it; being bothered is a wish, and only a wish comes first
    "care": lambda case: max(min(_answer(case, *EXPOSURES), SOMETIMES), _answer(case, "bothered_smears")),
    "in-between": _in_between,
    "sun": lambda case: SOMETIMES if _asked(case, "sun", "light_sensitive") == OFTEN else DROPPED,
    # always asked for; a limit is a condition, and says no more about prices below it. Before an operation that will
    # change the power, a lens is worn for some months only
    "price": lambda case: OFTEN + 1 if case.life("cataract_planned") == "yes" else SOMETIMES,
}


def levels_of(case: Case) -> dict[str, int]:
    """Return the level of every criterion that counts for this wearer; a dropped one is left out."""
    found = {key: importance(case) for key, importance in IMPORTANCE.items()}
    return {key: level for key, level in found.items() if level != DROPPED}
