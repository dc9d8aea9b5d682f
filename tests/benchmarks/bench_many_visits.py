"""A thousand visits of four options without advice, from file text to JSON text; a script to be run by itself.

Prints visits a second, whether four times the visits take four times as long, and the greatest memory in use. Exits
with 1 past a limit.
"""

import json
import resource
import sys
import time
from typing import Any

import numpy as np

from advisor.counsel.compare import compare
from advisor.counsel.stock import builtin_range
from advisor.counsel.visit import parse_visit
from advisor.web.language import language

FEW, MANY = 250, 1000
LEAST_A_SECOND, MOST_MB, MOST_GROWTH = 100.0, 300.0, 1.25
SEED = 20261201


def visits(count: int, *, seed: int) -> list[str]:
    """Return the text of visit files, every wearer different."""
    pick, stock = np.random.default_rng(seed), builtin_range()
    materials = [material.key for material in stock.material]
    coatings = [coating.key for coating in stock.coating]
    texts = []
    for number in range(count):
        spheres, cylinders = pick.integers(-24, 17, 2) / 4, -pick.integers(0, 9, 2) / 4

        def eye(at: int, sphere: Any = spheres, cylinder: Any = cylinders) -> dict[str, float]:
            return {"sphere": float(sphere[at]), "cylinder": float(cylinder[at]), "axis": int(pick.integers(1, 181))}

        options = [
            {"design": "single-vision", "material": str(pick.choice(materials)), "coating": str(pick.choice(coatings))}
            for _ in range(4)
        ]
        content = {
            "reference": f"B-{number}",
            "wearer": {"birth_year": int(pick.integers(1940, 2010))},
            "prescription": {"right": eye(0), "left": eye(1)},
            "fitting": {"right": {"pd_mm": float(pick.integers(290, 350)) / 10}},
            "frame": {"a_mm": float(pick.integers(460, 560)) / 10, "b_mm": 38.0, "dbl_mm": 18.0, "rim": "full"},
            "options": options,
        }
        texts.append(json.dumps(content))
    return texts


def seconds(texts: list[str]) -> tuple[float, float]:
    """Return the time to compare all of them, by the clock and of the processor."""
    stock, words = builtin_range(), language("en")
    begin, busy = time.perf_counter(), time.process_time()
    for text in texts:
        compare(parse_visit(text), stock, translator=words, with_advice=False).model_dump_json(exclude_unset=True)
    return time.perf_counter() - begin, time.process_time() - busy


def main() -> int:
    """Print the figures and return the exit status."""
    seconds(visits(50, seed=SEED))  # fills the caches of films
    few, many = visits(FEW, seed=SEED + 1), visits(MANY, seed=SEED + 2)
    (_, first_busy), (whole, whole_busy) = seconds(few), seconds(many)
    rate = MANY / whole
    growth = whole_busy / MANY / (first_busy / FEW)
    peak_mb = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024  # kB on Linux
    print(
        f"{MANY} visits of 4 options: {rate:.0f} a second (floor {LEAST_A_SECOND:.0f}); "
        f"{MANY / whole_busy:.0f} a second of processor time"
    )
    print(f"a visit of {MANY} takes {growth:.2f} times one of {FEW} (ceiling {MOST_GROWTH})")
    print(f"greatest memory: {peak_mb:.0f} MB (ceiling {MOST_MB:.0f} MB)")
    return int(rate < LEAST_A_SECOND or growth > MOST_GROWTH or peak_mb >= MOST_MB)


if __name__ == "__main__":
    sys.exit(main())
