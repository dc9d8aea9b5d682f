"""Everything sold at once: 9 materials x 5 films, both eyes, 6 scenes; a script to be run by itself.

Prints milliseconds with caches filled and with every cache cleared before the call, and how many times faster the one
call is than going through the options one by one. Exits with 1 above a ceiling.
"""

import datetime as dt
import statistics
import sys
import time
from collections.abc import Callable

from advisor.counsel import light
from advisor.counsel.case import Case, build_case
from advisor.counsel.stock import builtin_range
from advisor.counsel.visit import read_visit
from advisor.counsel.whole_range import whole_range
from advisor.resources import resource_dir

RUNS = 7
CEILING_FILLED_MS, CEILING_CLEARED_MS = 100.0, 250.0
COATINGS = ["bare", "magnesium-fluoride", "broadband", "broadband-green", "broadband-wide"]
SCENES = 6


def milliseconds(work: Callable[[], object], *, before: Callable[[], object] = lambda: None) -> float:
    """Return the median time of some work, each time after something that does not count."""
    times = []
    for _ in range(RUNS):
        before()
        begin = time.perf_counter()
        work()
        times.append(1000 * (time.perf_counter() - begin))
    return statistics.median(times)


def clear_caches() -> None:
    """Empty every cache of the program but that of the range file itself."""
    light.forget()
    for name, module in list(sys.modules.items()):
        if name.startswith(("advisor.counsel", "advisor.optics")):
            for part in list(vars(module).values()):
                clear = getattr(part, "cache_clear", None)
                if clear is not None and part is not builtin_range:
                    clear()


def wearer() -> Case:
    """Return one demo wearer in the first scenes of the range."""
    stock = builtin_range()
    visit = read_visit(resource_dir("demo_patients") / "strong-cylinder.json")
    scenes = tuple(scene.key for scene in stock.scene[:SCENES])
    return build_case(visit.model_copy(update={"scenes": scenes}), stock, today=dt.date(2026, 12, 1))


def main() -> int:
    """Print the figures and return the exit status."""
    case = wearer()
    materials = [material.key for material in case.stock.material]

    def at_once() -> object:
        return whole_range(case, design="single-vision", materials=materials, coatings=COATINGS)

    def one_by_one() -> object:
        pairs = [(material, coating) for material in materials for coating in COATINGS]
        return [whole_range(case, design="single-vision", materials=[m], coatings=[c]) for m, c in pairs]

    cleared = milliseconds(at_once, before=clear_caches)
    filled = milliseconds(at_once)
    singly = milliseconds(one_by_one)
    options = len(materials) * len(COATINGS)
    print(f"{options} options, 2 eyes, {len(case.scenes)} scenes")
    print(f"caches filled: {filled:.0f} ms (ceiling {CEILING_FILLED_MS:.0f} ms)")
    print(f"caches cleared: {cleared:.0f} ms (ceiling {CEILING_CLEARED_MS:.0f} ms)")
    print(f"one by one: {singly:.0f} ms, {singly / filled:.1f} times as long")
    return int(filled >= CEILING_FILLED_MS or cleared >= CEILING_CLEARED_MS)


if __name__ == "__main__":
    sys.exit(main())
