"""How long one picture takes to draw, beside one exponential over as many pixels; a script to be run by itself.

The fastest of ten calls for each picture and several demo wearers; the slowest counts. Exits with 1 above the limit.
"""

import sys
import time

import numpy as np

from advisor.counsel.compare import Computed, compute
from advisor.counsel.picture_shapes import HEIGHT, WIDTH
from advisor.counsel.pictures import Name, draw, names_of
from advisor.counsel.stock import builtin_range
from advisor.counsel.visit import read_visit
from advisor.resources import resource_dir

LIMIT_TIMES = 1000.0  # of one exponential over the picture's three channels
WEARERS = ("hairdresser-price-limit", "weak-minus-night-driver", "office-window-behind")
CALLS = 10


def fastest_s(computed: Computed, picture: Name) -> float:
    """Return the time of the fastest call."""
    times = []
    for _ in range(CALLS):
        begin = time.perf_counter()
        draw(computed, picture, option=1, film=False)
        times.append(time.perf_counter() - begin)
    return min(times)


def yardstick_s() -> float:
    """Return the time of one exponential over as many numbers as a picture holds."""
    numbers = np.linspace(-3.0, 3.0, HEIGHT * WIDTH * 3)
    times = []
    for _ in range(CALLS):
        begin = time.perf_counter()
        np.exp(numbers)
        times.append(time.perf_counter() - begin)
    return min(times)


def main() -> int:
    """Print the figures; return the exit code."""
    unit, worst = yardstick_s(), 0.0
    for name in WEARERS:
        computed = compute(read_visit(resource_dir("demo_patients") / f"{name}.json"), builtin_range())
        for picture in names_of(computed, 1):
            took = fastest_s(computed, picture)
            worst = max(worst, took / unit)
            print(f"{name} {picture}: {1e3 * took:.0f} ms, {took / unit:.1f} times the exponential")
    print(f"slowest {worst:.1f} times (limit {LIMIT_TIMES:.0f})")
    return 0 if worst <= LIMIT_TIMES else 1


if __name__ == "__main__":
    sys.exit(main())
