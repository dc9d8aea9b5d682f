"""Advice in two visible steps: what every lens must keep, and what this wearer would rather have among those that do.

Ranking is by worth alone, on fixed scales, so an option more or less swaps no two others. Lenses whose worth lies
closer than the figures are sure of are level; of those level with the best, the cheapest is recommended.
"""

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from advisor.counsel.case import Case
from advisor.counsel.laid_out import Laid
from advisor.counsel.musts import OF_THE_FINISHED_LENS, broken_by
from advisor.counsel.phrases import Phrase
from advisor.counsel.pool import Pool, conditions_broken, finished, fits, pool_of
from advisor.counsel.priorities import level_weights, levels_of, priority_sets
from advisor.counsel.reach import wanted
from advisor.counsel.stock_items import Scene
from advisor.counsel.value import Criterion, criteria, leeway, values_of, worth
from advisor.counsel.visit import DailyLife
from advisor.counsel.weighed import figures_of, scenes_that_count, with_tints_alike
from advisor.counsel.whole_range import WholeRange, material_key, work_out

Floats = NDArray[np.float64]
HOLDS, MOSTLY = 0.85, 0.6  # shares of the priority sets; modelling choices


@dataclass(frozen=True)
class Field:
    """Everything considered, as arrays over the options of the pool, and what this wearer weighs by."""

    case: Case
    pool: Pool
    computed: WholeRange
    eligible: NDArray[np.bool_]
    broken: Mapping[int, Sequence[Phrase]]
    figures: Mapping[str, Floats]
    scenes: tuple[Scene, ...]
    levels: Mapping[str, int]
    values: Floats
    weights: Floats
    imbalance_prism_d: float

    @cached_property
    def used(self) -> list[Criterion]:
        """The criteria that count, in the order of the columns of ``values``."""
        return [criteria()[key] for key in self.levels]

    @cached_property
    def worth(self) -> Floats:
        """The worth of every option by the middle weights, (option,)."""
        return worth(self.values, self.weights)

    def price(self, k: int) -> float:
        """Return a price to sort by; an unknown one comes last."""
        price = self.pool.laid[k].price
        return np.inf if price is None else price

    def level(self, options: Sequence[int], with_one: int) -> NDArray[np.bool_]:
        """Which options' worth differs from that of one by no more than their figures are sure of."""
        rows = list(options)
        apart = np.abs(self.worth[rows] - self.worth[with_one])
        return np.asarray(apart <= leeway(self.values[rows], self.values[with_one], self.weights, self.used))

    def best(self, among: Iterable[int]) -> int | None:
        """Return the cheapest of those level with the best; one laid out before one that is not."""
        options = list(among)
        if not options:
            return None
        top = max(options, key=lambda k: (self.worth[k], -self.price(k)))
        alike = [k for k, level in zip(options, self.level(options, top), strict=True) if level]
        return min(alike, key=lambda k: (self.price(k), k >= self.pool.given, -self.worth[k]))

    def top(self, among: Iterable[int]) -> int | None:
        """Return the option of the greatest worth."""
        return max(among, key=lambda k: (self.worth[k], -self.price(k)), default=None)


@dataclass(frozen=True)
class Robustness:
    """In which share of the priority sets the advice holds, and the criterion it turns on where it does not."""

    share: float
    turns_on: str | None

    @property
    def code(self) -> str:
        """How it is told."""
        if self.share >= HOLDS or self.turns_on is None:
            return "holds"
        return "mostly" if self.share >= MOSTLY else "turns"


@dataclass(frozen=True)
class Pair:
    """One of two pairs proposed: what it is for, and the field it was chosen in."""

    use: str
    field: Field
    chosen: int


@dataclass(frozen=True)
class Counsel:
    """The outcome. Options are places in the pool of ``field``; ``none`` says why nothing is recommended."""

    field: Field
    recommended: int | None
    next_best: int | None
    cheapest: int | None
    ranking: tuple[int, ...]
    robustness: Robustness | None
    if_first: tuple[tuple[str, int], ...]
    none: str | None = None
    pairs: tuple[Pair, ...] = ()
    least_price: float | None = None


def field_of(case: Case, laid: Sequence[Laid], *, imbalance_prism_d: float) -> Field:
    """Work out everything that may be advised."""
    pool = pool_of(case, laid, imbalance_prism_d=imbalance_prism_d)
    judged = replace(case, scenes=scenes_that_count(case, laid))
    computed = work_out(judged, pool.laid)
    levels = levels_of(case)
    figures = figures_of(case, computed)
    alike = with_tints_alike(figures, computed)
    chosen = [criteria()[key] for key in levels]
    eligible = fits(computed)
    broken = {k: conditions_broken(case, computed, k, imbalance_prism_d=imbalance_prism_d) for k in range(pool.given)}
    for k in range(len(pool.laid)):
        if k == pool.worn:
            eligible[k] = False
        elif k < pool.given:
            eligible[k] &= not broken[k]
        elif eligible[k]:
            lens = finished(computed, k, imbalance_prism_d=imbalance_prism_d)
            eligible[k] = not any(broken_by(case, pool.laid[k], lens, only=OF_THE_FINISHED_LENS))
    return Field(
        case=case,
        pool=pool,
        computed=computed,
        eligible=eligible,
        broken=broken,
        figures=figures,
        scenes=judged.scenes,
        levels=levels,
        values=values_of(np.stack([alike[key] for key in levels], axis=-1), chosen),
        weights=level_weights(list(levels.values())),
        imbalance_prism_d=imbalance_prism_d,
    )


def advise(case: Case, laid: Sequence[Laid], *, imbalance_prism_d: float) -> Counsel:
    """Return what a good dispenser would advise for this wearer, from everything that is laid out or sold."""
    field = field_of(case, laid, imbalance_prism_d=imbalance_prism_d)
    eligible = np.flatnonzero(field.eligible).tolist()
    recommended = field.best(eligible)
    if recommended is None:
        return _nothing(field, laid, imbalance_prism_d=imbalance_prism_d)
    own = field.pool.laid[recommended]
    others = [k for k in eligible if k != recommended]
    unlike = [k for k in others if _parts(field.pool.laid[k]) != _parts(own)]
    return Counsel(
        field=field,
        recommended=recommended,
        next_best=field.best(unlike or others),
        cheapest=min(eligible, key=lambda k: (field.price(k), -field.worth[k])),
        ranking=_ranking(field),
        robustness=robustness_of(field, recommended, eligible),
        if_first=_if_first(field, recommended, eligible),
    )


def _parts(option: Laid) -> tuple[object, ...]:
    return option.design.key, material_key(option.material), option.tint


def _ranking(field: Field) -> tuple[int, ...]:
    kept = [k for k in range(field.pool.given) if field.eligible[k]]
    return tuple(sorted(kept, key=lambda k: (-field.worth[k], field.price(k), k)))


def robustness_of(field: Field, chosen: int, among: Sequence[int]) -> Robustness:
    """Try the choice against every priority set; the criterion it turns on speaks most for what beats it."""
    weights = priority_sets(tuple(field.levels.values()))
    values = field.values[list(among)]
    winner = values[np.argmax(worth(values, weights), axis=-1)]
    ahead = np.sum(weights * (winner - field.values[chosen]), axis=-1)
    beaten = ahead > leeway(winner, field.values[chosen], weights, field.used)
    if not beaten.any():
        return Robustness(1.0, None)
    speaks = (weights * (winner - field.values[chosen]))[beaten].mean(axis=0)
    return Robustness(float(1.0 - beaten.mean()), field.used[int(np.argmax(speaks))].key)


def _if_first(field: Field, chosen: int, among: Sequence[int]) -> tuple[tuple[str, int], ...]:
    """Return what would be recommended instead if one criterion came before all others, where that differs."""
    found: dict[int, str] = {}
    for key in sorted(field.levels, key=lambda key: -field.levels[key]):
        levels = {**field.levels, key: max(field.levels.values()) + 1}
        moved = replace(field, weights=level_weights(list(levels.values())))
        best = moved.best(among)
        column = list(field.levels).index(key)
        if best is None or best == chosen or field.values[best, column] <= field.values[chosen, column]:
            continue  # what is no better on a criterion does not win by it, but by what then counts less
        if not moved.level([best], chosen)[0]:
            found.setdefault(best, key)
    return tuple((key, k) for k, key in found.items())


def _nothing(field: Field, laid: Sequence[Laid], *, imbalance_prism_d: float) -> Counsel:
    """Return advice without a recommendation: two pairs where two serve, else what stands in the way."""
    case = field.case
    pairs: tuple[Pair, ...] = ()
    if case.has_add and wanted(case) == "all":
        pairs = _pairs(laid, {"far": _for(case, "distance"), "near": _for(case, "near")}, imbalance_prism_d)
    elif all(option.tint is not None for option in laid):
        clear = [replace(option, tint=None, option=option.option.model_copy(update={"tint": None})) for option in laid]
        by_day = with_life(case, night_driving="never")
        first = _pairs(clear, {"clear": case}, imbalance_prism_d)
        second = _pairs(laid, {"tinted": by_day}, imbalance_prism_d)
        pairs = first + second if first and second else ()
    limit = case.visit.daily_life.price_limit if case.visit.daily_life else None
    least = None
    if limit is not None:
        free = field_of(with_life(case, price_limit=None), laid, imbalance_prism_d=imbalance_prism_d)
        prices = [free.price(k) for k in np.flatnonzero(free.eligible).tolist()]
        least = min((price for price in prices if np.isfinite(price)), default=None)
        if sum(pair.field.price(pair.chosen) for pair in pairs) > limit:
            pairs = ()
    return Counsel(
        field=field,
        recommended=None,
        next_best=None,
        cheapest=None,
        ranking=(),
        robustness=None,
        if_first=(),
        none="no-single-option" if pairs else "nothing-meets-every-must",
        pairs=pairs,
        least_price=least,
    )


def _for(case: Case, use: str) -> Case:
    prescription = case.visit.prescription.model_copy(update={"for_": use})
    return replace(case, visit=case.visit.model_copy(update={"prescription": prescription}))


def with_life(case: Case, **answers: object) -> Case:
    """Return the case with other answers about daily life."""
    life = (case.visit.daily_life or DailyLife()).model_copy(update=answers)
    return replace(case, visit=case.visit.model_copy(update={"daily_life": life}))


def _pairs(laid: Sequence[Laid], uses: Mapping[str, Case], imbalance_prism_d: float) -> tuple[Pair, ...]:
    """Return the best lens for each use, or nothing where one use has none."""
    found = []
    for use, case in uses.items():
        field = field_of(case, laid, imbalance_prism_d=imbalance_prism_d)
        best = field.best(np.flatnonzero(field.eligible).tolist())
        if best is None:
            return ()
        found.append(Pair(use, field, best))
    return tuple(found)
