"""How long the command takes for one visit, start to answer; a script to be run by itself.

Prints the median of five in seconds and against ``python -c "import numpy"``. Exits with 1 above its ceiling.
"""

import statistics
import subprocess
import sys
import time

from advisor.resources import resource_dir

RUNS = 5
CEILING_S = 0.6
VISIT = str(resource_dir("demo_patients") / "weak-minus-night-driver.json")


def seconds(*arguments: str) -> float:
    """Return the median time of a fresh Python process."""
    times = []
    for _ in range(RUNS):
        begin = time.perf_counter()
        subprocess.run([sys.executable, *arguments], check=True, stdout=subprocess.DEVNULL)
        times.append(time.perf_counter() - begin)
    return statistics.median(times)


def main() -> int:
    """Print the figures and return the exit status."""
    seconds("-c", "import numpy")  # warm the file cache
    plain = seconds("-c", "import numpy")
    taken = seconds("-m", "advisor", "compare", VISIT, "--json")
    print(f"one visit: {taken:.2f} s (ceiling {CEILING_S} s), {taken / plain:.1f} times importing numpy")
    return int(taken >= CEILING_S)


if __name__ == "__main__":
    sys.exit(main())
