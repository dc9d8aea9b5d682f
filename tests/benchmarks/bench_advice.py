"""How long the advice for one visit takes, everything sold considered; a script to be run by itself.

Warm, the median of nine calls for each demo wearer; the slowest counts. And `twolight compare` of one visit as a
process, the median of five. Exits with 1 above a limit.
"""

import statistics
import subprocess
import sys
import time
from pathlib import Path

from advisor.counsel.advise import advise
from advisor.counsel.compare import compute
from advisor.counsel.stock import builtin_range
from advisor.counsel.visit import read_visit
from advisor.resources import resource_dir

WARM_LIMIT_MS, PROCESS_LIMIT_S = 80.0, 0.6
CALLS, PROCESSES = 9, 5


def warm_ms(file: Path) -> tuple[float, int]:
    """Median time of the advice for one visit, and how many pairs it considers."""
    computed = compute(read_visit(file), builtin_range())
    times, considered = [], 0
    for _ in range(CALLS + 1):
        begin = time.perf_counter()
        counsel = advise(computed.case, computed.laid, imbalance_prism_d=computed.vertical_imbalance_prism_d)
        times.append(1e3 * (time.perf_counter() - begin))
        considered = len(counsel.field.pool.laid)
    return statistics.median(times[1:]), considered


def process_s(file: Path) -> float:
    """Median time of the command for one visit."""
    times = []
    for _ in range(PROCESSES):
        begin = time.perf_counter()
        subprocess.run(
            [sys.executable, "-m", "advisor", "compare", str(file), "--json"], check=True, capture_output=True
        )
        times.append(time.perf_counter() - begin)
    return statistics.median(times)


def main() -> int:
    """Print the figures and return the exit status."""
    files = sorted(resource_dir("demo_patients").glob("*.json"))
    slowest = 0.0
    for file in files:
        spent, considered = warm_ms(file)
        slowest = max(slowest, spent)
        print(f"{file.stem:32} {spent:6.1f} ms, {considered} pairs")
    process = max(process_s(file) for file in files[:3])
    print(f"slowest warm {slowest:.1f} ms (limit {WARM_LIMIT_MS:.0f})")
    print(f"compare as a process {process:.2f} s (limit {PROCESS_LIMIT_S})")
    return int(slowest > WARM_LIMIT_MS or process > PROCESS_LIMIT_S)


if __name__ == "__main__":
    sys.exit(main())
