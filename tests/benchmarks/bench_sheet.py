"""How long a wearer's sheet takes as PDF once the program is warm; a script to be run by itself.

Exits with 1 above its ceiling.
"""

import statistics
import sys
import time

from advisor.counsel.stock import builtin_range
from advisor.counsel.visit import read_visit
from advisor.resources import resource_dir
from advisor.web.documents import wearer_sheet
from advisor.web.pdf import write_pdf

RUNS = 9
CEILING_S = 0.4
VISIT = resource_dir("demo_patients") / "weak-minus-night-driver.json"


def main() -> int:
    """Print the figures and return the exit status."""
    visit, stock = read_visit(VISIT), builtin_range()
    pages, whole = [], []
    for _ in range(RUNS + 1):
        begin = time.perf_counter()
        html = wearer_sheet(visit, stock, code="en")
        middle = time.perf_counter()
        write_pdf(html)
        whole.append(time.perf_counter() - begin)
        pages.append(middle - begin)
    first, warm, page = whole[0], statistics.median(whole[1:]), statistics.median(pages[1:])
    print(f"first sheet: {first:.2f} s, with the layout engine's import")
    print(f"warm sheet: {warm:.2f} s (ceiling {CEILING_S} s), of which {page:.2f} s for the comparison and its page")
    return int(warm >= CEILING_S)


if __name__ == "__main__":
    sys.exit(main())
