"""How long a wearer's sheet takes as PDF once the program is warm, in either print; a script to be run by itself.

Exits with 1 above a ceiling.
"""

import statistics
import sys
import time

from advisor.counsel.stock import builtin_range
from advisor.counsel.visit import read_visit
from advisor.resources import resource_dir
from advisor.web.pdf import write_pdf
from advisor.web.sheet_page import Print, wearer_sheet

RUNS = 9
CEILING_S: dict[Print, float] = {"standard": 0.4, "large": 0.6}
VISIT = resource_dir("demo_patients") / "weak-minus-night-driver.json"


def main() -> int:
    """Print the figures and return the exit status."""
    visit, stock = read_visit(VISIT), builtin_range()
    slow = False
    for size, ceiling in CEILING_S.items():
        pages, whole = [], []
        for _ in range(RUNS + 1):
            begin = time.perf_counter()
            html = wearer_sheet(visit, stock, code="en", print_size=size)
            middle = time.perf_counter()
            write_pdf(html)
            whole.append(time.perf_counter() - begin)
            pages.append(middle - begin)
        first, warm, page = whole[0], statistics.median(whole[1:]), statistics.median(pages[1:])
        if size == "standard":
            print(f"first sheet: {first:.2f} s, with the layout engine's import")
        print(f"warm sheet, {size} print: {warm:.2f} s (ceiling {ceiling} s), {page:.2f} s of it for the page itself")
        slow = slow or warm >= ceiling
    return int(slow)


if __name__ == "__main__":
    sys.exit(main())
