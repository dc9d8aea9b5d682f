"""The additive value of a lens: each figure on a fixed scale from nothing to everything, weighed and added.

The scales stand in ``data/rather.toml`` and never move with the options at hand.
"""

import tomllib
from collections.abc import Sequence
from dataclasses import dataclass
from functools import cache
from typing import Any, Literal

import numpy as np
from numpy.typing import ArrayLike, NDArray

from advisor.resources import data_file

Floats = NDArray[np.float64]
LEAST_FIGURE = 1e-12  # keeps a logarithm finite; far below every anchor


@dataclass(frozen=True)
class Criterion:
    """What is weighed, and the fixed scale of its figure."""

    key: str
    label: str
    best: float
    worst: float
    scale: Literal["linear", "log"]
    uncertainty: float
    why: str

    def value(self, figure: ArrayLike) -> Floats:
        """Return 1 at the best anchor or beyond, 0 at the worst or beyond or where the figure is unknown (NaN)."""
        given = np.asarray(figure, dtype=np.float64)
        known = ~np.isnan(given)
        place = np.where(known, given, self.worst)
        if self.scale == "log":
            span = np.log(self.worst / self.best)
            share = np.log(np.maximum(place, LEAST_FIGURE) / self.best) / span
        else:
            share = (place - self.best) / (self.worst - self.best)
        return np.where(known, 1.0 - np.clip(share, 0.0, 1.0), 0.0)

    @property
    def value_uncertainty(self) -> float:
        """How much of the scale the uncertainty of a difference is."""
        if self.scale == "log":
            return float(np.log(self.uncertainty) / abs(np.log(self.worst / self.best)))
        return self.uncertainty / abs(self.worst - self.best)


@cache
def _table() -> dict[str, Any]:
    return tomllib.loads(data_file("counsel", "rather.toml").read_text(encoding="utf-8"))


@cache
def criteria() -> dict[str, Criterion]:
    """Return every criterion of the table, by its key."""
    return {row["key"]: Criterion(**row) for row in _table()["criterion"]}


def currency_size(currency: str) -> float:
    """Return about how much of a currency is a euro; one that is not in the table counts as a euro."""
    return float(_table()["currency"].get(currency, 1.0))


def values_of(figures: ArrayLike, used: Sequence[Criterion]) -> Floats:
    """Return figures (option, criterion) as values (option, criterion) from 0 to 1, never NaN."""
    given = np.asarray(figures, dtype=np.float64)
    columns = [criterion.value(given[..., k]) for k, criterion in enumerate(used)]
    return np.stack(columns, axis=-1) if columns else np.zeros((*given.shape[:-1], 0))


def worth(values: ArrayLike, weights: ArrayLike) -> Floats:
    """Return the weighed sum of the values; weights (..., criterion) give (..., option)."""
    return np.asarray(np.asarray(weights, dtype=np.float64) @ np.asarray(values, dtype=np.float64).T)


def leeway(one: ArrayLike, other: ArrayLike, weights: ArrayLike, used: Sequence[Criterion]) -> Floats:
    """Return how far two options' worth may lie apart without meaning anything.

    The uncertainties of the criteria on which they differ, weighed and added in quadrature; where two figures are the
    same, or both beyond one anchor, there is nothing to be uncertain of.
    """
    differ = np.asarray(one) != np.asarray(other)
    unsure = np.array([criterion.value_uncertainty for criterion in used])
    return np.asarray(np.sqrt(np.sum((np.asarray(weights) * unsure * differ) ** 2, axis=-1)))
