"""Writers killed at any moment: whatever was acknowledged is there, and whole."""

import json
import os
import random
import select
import signal
import time
from pathlib import Path

import pytest

from advisor.records.store import Store
from tests.databases import Place, rows

pytestmark = [
    pytest.mark.skipif(not hasattr(os, "fork"), reason="the writer is forked"),
    # the child makes its own records and locks, and ends by being killed
    pytest.mark.filterwarnings("ignore:.*multi-threaded, use of fork.*:DeprecationWarning"),
]


def text(run: int, number: int) -> str:
    """Return a visit of many pages, so that a kill finds many moments inside a write."""
    return json.dumps({"reference": f"{run}-{number}", "note": f"{run}-{number} " * 60_000})


def write_until_killed(place: Place, run: int, pipe: int) -> None:
    store = Store.open(place)
    number = 0
    while True:
        saved = store.save_visit(
            text(run, number), range_toml=f"run {run}", version="0", answer_json=json.dumps([run, number] * 3000)
        )
        os.write(pipe, f"{saved.id} {number}\n".encode())
        number += 1


def kill_a_writer(place: Place, run: int, wait_s: float) -> dict[str, int]:
    """Start a writer, kill it some moment after its first save, and return what it acknowledged."""
    ours, theirs = os.pipe()
    child = os.fork()
    if child == 0:
        try:
            write_until_killed(place, run, theirs)
        finally:
            os._exit(1)
    os.close(theirs)
    assert select.select([ours], [], [], 30)[0], "the writer never saved anything"
    time.sleep(wait_s)
    os.kill(child, signal.SIGKILL)
    os.waitpid(child, 0)
    with os.fdopen(ours) as pipe:
        lines = [line.split() for line in pipe.read().split("\n") if line]
    return {visit_id: int(number) for visit_id, number in lines}


@pytest.mark.parametrize("kills", [30, pytest.param(300, marks=pytest.mark.soak)])
def test_every_acknowledged_save_survives_the_kills(place: Place, kills: int) -> None:
    moments = random.Random(20)  # noqa: S311 - moments, not secrets
    Store.open(place).close()
    acknowledged: dict[str, tuple[int, int]] = {}
    for run in range(kills):
        acks = kill_a_writer(place, run, moments.uniform(0.0, 0.03))
        acknowledged |= {visit_id: (run, number) for visit_id, number in acks.items()}
    assert len(acknowledged) >= kills
    with Store.open(place) as store:
        for visit_id, (run, number) in acknowledged.items():
            saved = store.get_visit(visit_id)
            assert saved.visit_json == text(run, number)
            assert json.loads(saved.answer_json) == [run, number] * 3000
    if isinstance(place, Path):
        assert rows(place, "PRAGMA integrity_check") == [("ok",)]
        assert rows(place, "PRAGMA foreign_key_check") == []
    # A kill between the save and its acknowledgement may leave one more row each time, never fewer.
    assert len(acknowledged) <= rows(place, "SELECT count(*) FROM visit")[0][0] <= len(acknowledged) + kills
    # None is there in half: each with the words it is found by, and with the row that says who saved it.
    assert (
        rows(place, "SELECT id FROM visit WHERE id NOT IN (SELECT visit_id FROM visit_word WHERE word LIKE '%-%')")
        == []
    )
    assert rows(place, "SELECT id FROM visit WHERE id NOT IN (SELECT visit_id FROM event WHERE what = 'saved')") == []
