"""Invented wearers by the hundred, the same in every run: every kind of lens, answer, age and gap in what is known."""

import random
from functools import cache
from typing import Any

from advisor.counsel.stock import builtin_range
from advisor.counsel.visit import DailyLife, Visit, check_visit

STOCK = builtin_range()
SEED = 20261201
NAMES = (
    "Ann Bo",
    "Maria de los Angeles Fernandez-Huertaschmidt von und zu Langenname",
    "\u05d3\u05d5\u05d3 \u05db\u05d4\u05df",
    "\u0644\u064a\u0644\u0649",
    "X",
    "Renee O'Dea",
)
FREQUENT = ("never", "sometimes", "often")


def _answers(kind: random.Random) -> dict[str, str]:
    found = {}
    for name, field in DailyLife.model_fields.items():
        words = [word for word in (*FREQUENT, "yes", "no") if word in str(field.annotation)]
        if words and kind.random() < 0.7 and name not in ("cleaning", "price_limit"):
            found[name] = kind.choice(words)
    return found


def _eye(kind: random.Random, *, add: float | None) -> dict[str, Any]:
    eye: dict[str, Any] = {"sphere": kind.randrange(-32, 25) / 4}
    if kind.random() < 0.5:
        eye |= {"cylinder": -kind.randrange(1, 13) / 4, "axis": kind.randrange(1, 181)}
    if add is not None:
        eye["add"] = add
    if kind.random() < 0.15:
        eye["prism"] = [{"amount": kind.randrange(1, 9) / 4, "base": base} for base in kind.sample(["in", "up"], 2)]
    return eye


def _option(kind: random.Random, *, add: float | None) -> dict[str, Any]:
    designs = [item for item in STOCK.design if add is not None or item.kind == "single-vision"]
    coatings = [item.key for item in STOCK.coating]
    material = kind.choice(STOCK.material)
    option: dict[str, Any] = {"design": kind.choice(designs).key, "material": material.key}
    option["coating"] = kind.choice(coatings)
    if kind.random() < 0.15:
        option["coating"] = {"front": kind.choice(coatings), "back": kind.choice(coatings)}
    if material.tintable and kind.random() < 0.4:
        option["tint"] = kind.choice([*(item.key for item in STOCK.tint), 0.05, 0.6])
    return option


def content(number: int) -> dict[str, Any]:
    """Return the content of one visit file."""
    kind = random.Random(SEED + number)  # noqa: S311  # no secret: the same wearers in every run
    age = kind.choice([7, 12, 20, 33, 44, 47, 58, 66, 81])
    add = kind.choice([0.75, 1.5, 2.25]) if age > 42 or kind.random() < 0.1 else None
    prescription: dict[str, Any] = {"right": _eye(kind, add=add), "left": _eye(kind, add=add)}
    prescription["for"] = kind.choice(["all", "near", "distance"])
    if kind.random() < 0.3:
        prescription["written"] = kind.choice(["2026-11-02", "2023-01-05"])
    found: dict[str, Any] = {
        "date": "2026-12-01",
        "reference": f"G-{number}",
        "wearer": {"name": kind.choice(NAMES), "birth_year": 2026 - age},
        "prescription": prescription,
        "daily_life": _answers(kind),
        "options": [_option(kind, add=add)],
        "frame": {"rim": kind.choice(["full", "grooved", "drilled"]), "a_mm": kind.choice([44, 50]), "b_mm": 34},
        "scenes": kind.sample([scene.key for scene in STOCK.scene], 2),
    }
    if kind.random() < 0.5:
        worn = {eye: _eye(kind, add=None) for eye in ("right", "left")}
        found["worn_now"] = {"material": "hard-resin-150", "prescription": worn}
    if kind.random() < 0.3:
        found["dispensed_by"] = "Sam Fitter"
    return found


@cache
def visits(count: int) -> tuple[Visit, ...]:
    """Return so many invented visits."""
    return tuple(check_visit(content(number)) for number in range(count))
