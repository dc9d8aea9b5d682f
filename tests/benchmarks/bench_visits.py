"""A hundred thousand visits against a thousand, in a file and on a PostgreSQL server: what the counter waits for.

Prints, for each, the time of the first page of the list, of a page deep in it, of searches by a beginning that every
visit has, that one has, and that only visits of long ago have, and of saving. Exits with 1 where a hundred thousand
take more than three times as long as a thousand. A search for days of long ago finds a hundred times as many visits
among a hundred times as many, and looks at each; it has a ceiling in milliseconds instead.

Run as ``python -m tests.benchmarks.bench_visits`` in the project's folder; takes some minutes and four gigabytes.
"""

import datetime
import json
import statistics
import sys
import tempfile
import time
import zlib
from collections.abc import Callable, Iterator
from itertools import islice
from pathlib import Path
from typing import Any

import numpy as np
from sqlalchemy import insert, text

from advisor.records import tables
from advisor.records.ranges import content_hash
from advisor.records.store import Store
from advisor.records.visits import PageKey
from advisor.records.words import words_of
from tests.databases import PROGRAMS, Place, engine_at, started_postgres

FEW, MANY = 1_000, 100_000
MOST_RATIO = 3.0
LONG_AGO, MOST_LONG_AGO_MS = "of ten years ago", 150.0
RUNS, BATCH, PAGE = 31, 2_000, 51
SEED = 20261201
RANGE = "key = 1"
VISIT_CHARACTERS, ANSWER_BYTES = 2_000, 12_000  # about what the demo wearers come to
SYLLABLES = ("ba", "del", "fri", "gon", "hu", "kel", "lo", "mir", "nas", "ot", "pe", "quin", "ros", "sta", "tul", "vi")
NOTE = ("drives", "evenings", "lorry", "reads", "music", "stands", "screens", "glare", "thin", "rims", "nose", "pads")


def word(pick: np.random.Generator, syllables: int) -> str:
    return "".join(SYLLABLES[at] for at in pick.integers(0, len(SYLLABLES), syllables))


def visits(count: int) -> Iterator[tuple[dict[str, Any], set[str]]]:
    """Yield rows of visits and their words, the oldest first; one in the middle is the only one called Unmistakable."""
    pick, day = np.random.default_rng(SEED), datetime.date(2016, 1, 1)
    answer = zlib.compress(pick.bytes(ANSWER_BYTES), level=0)
    for number in range(count):
        date = (day + datetime.timedelta(days=number * 3650 // count)).isoformat()
        name = "Unmistakable Wearer" if number == count // 2 else f"{word(pick, 2)} {word(pick, 3)}".title()
        note = " ".join(NOTE[at] for at in pick.integers(0, len(NOTE), 20))
        known = {"name": name, "reference": f"A-{number}", "note": note}
        content = {"date": date, "reference": known["reference"], "note": note, "wearer": {"name": name}}
        padding = {"padding": "x" * (VISIT_CHARACTERS - len(json.dumps(content)))}
        moment = f"{date}T12:00:00.{number:06d}+00:00"
        row = {"id": f"v{number:021d}", "created_at": moment, "changed_at": moment, "edit": 1, "date": date}
        row |= {"visit": json.dumps(content | padding), "range_hash": content_hash(RANGE), "version": "0"}
        yield row | {"answer": answer}, words_of(**known, date=date)


def fill(place: Place, count: int) -> None:
    """Store so many visits, past the store."""
    with Store.open(place) as store:
        store.set_range(RANGE)
    engine, made = engine_at(place), visits(count)
    while batch := list(islice(made, BATCH)):
        with engine.begin() as connection:
            connection.execute(insert(tables.visit), [row for row, _ in batch])
            rows = [{"visit_id": row["id"], "word": one} for row, words in batch for one in sorted(words)]
            connection.execute(insert(tables.visit_word), rows)
    if engine.dialect.name == "postgresql":  # does by itself within minutes what is done here at once
        with engine.connect().execution_options(isolation_level="AUTOCOMMIT") as connection:
            connection.execute(text("VACUUM ANALYZE"))
    engine.dispose()


def medians_ms(*works: Callable[[], object]) -> list[float]:
    """Return the median of each work's milliseconds; they take turns, so that a busy computer is busy for all."""
    taken: list[list[float]] = [[] for _ in works]
    for run in range(RUNS + 1):  # the first, which fills caches, does not count
        for work, times in zip(works, taken, strict=True):
            begun = time.perf_counter()
            work()
            if run:
                times.append(time.perf_counter() - begun)
    return [1000 * statistics.median(times) for times in taken]


def save(store: Store) -> None:
    content = {"reference": "S-1", "note": " ".join(NOTE * 2), "wearer": {"name": "Saved Now"}}
    answer = json.dumps(list(range(4_000)))
    store.save_visit(json.dumps(content), range_toml=RANGE, version="0", answer_json=answer)


def works(store: Store, count: int) -> dict[str, Callable[[], object]]:
    """Return what is timed, by its name."""
    row, _ = next(islice(visits(count), count // 10, None))
    deep = PageKey(row["changed_at"], row["id"])  # nine tenths of the list stand before it

    def find(search: str, expected: int) -> Callable[[], object]:
        def look() -> None:
            found = store.list_visits(search, limit=PAGE)
            assert len(found) >= expected, (search, len(found))

        return look

    return {
        "first page": lambda: store.list_visits(limit=PAGE),
        "deep page": lambda: store.list_visits(limit=PAGE, after=deep),
        "beginning that every visit has": find("a", PAGE),
        "beginning that one visit has": find("unmis", 1),
        "two words that many have": find("music b", PAGE),
        "nine days of ten years ago": find("2016-03-0", 1),
        "year of ten years ago": find("2016", PAGE),
        "save one": lambda: save(store),
    }


def compared(kind: str, few: Place, many: Place) -> bool:
    """Print the figures of one kind of database; tell whether all is within the limits."""
    fill(few, FEW)
    begun = time.perf_counter()
    fill(many, MANY)
    print(f"{kind}: {MANY} visits stored in {time.perf_counter() - begun:.0f} s")
    all_quick = True
    with Store.open(few) as small_store, Store.open(many) as large_store:
        large_works = works(large_store, MANY)
        for what, work in works(small_store, FEW).items():
            small, large = medians_ms(work, large_works[what])
            is_quick = large <= (MOST_LONG_AGO_MS if what.endswith(LONG_AGO) else MOST_RATIO * small)
            all_quick &= is_quick
            note = "" if is_quick else "  too slow"
            print(f"  {what:32}{small:8.2f} ms{large:8.2f} ms{large / small:7.2f}{note}", flush=True)
    return all_quick


def main() -> int:
    """Print the figures and return the exit status."""
    with tempfile.TemporaryDirectory() as folder:
        quick = [compared("SQLite", Path(folder) / "few", Path(folder) / "many")]
    if PROGRAMS is None:
        print("PostgreSQL is not installed here")
        return 1
    for server in started_postgres():
        quick.append(compared("PostgreSQL", server.new_database(), server.new_database()))
    return int(not all(quick))


if __name__ == "__main__":
    sys.exit(main())
