"""Many writers at once through the app, and a database server that dies under them: nothing lost, nothing twice."""

import contextlib
import json
import random
import secrets
import signal
import threading
import time
from collections.abc import Callable, Iterator
from pathlib import Path

import pytest
from flask import Flask

from advisor.records.store import Store
from advisor.web.app import create_app
from advisor.web.desk import desk_of
from tests.databases import Place, Postgres, rows, started_postgres

WRITERS = 8
FORM = {
    "date": "2026-12-01",
    "prescription.right.sphere": "-4.25",
    "prescription.left.sphere": "-3.75",
    "scenes": "",
    "option_count": "1",
    "options.0.design": "single-vision",
    "options.0.material": "hard-resin-150",
    "options.0.coating.front": "bare",
}


@contextlib.contextmanager
def app_on(place: Place, folder: Path) -> Iterator[Flask]:
    app = create_app(data_dir=folder, database=place if isinstance(place, str) else None, testing=True)
    app.config["PROPAGATE_EXCEPTIONS"] = False  # as when it is served
    try:
        yield app
    finally:
        desk_of(app).close()


class Writer(threading.Thread):
    """A counter that saves one form after another, each until it is told where the visit is."""

    def __init__(self, app: Flask, number: int, goes_on: Callable[[], bool]) -> None:
        super().__init__(name=f"writer {number}", daemon=True)
        self._client, self._number, self._goes_on = app.test_client(), number, goes_on
        self.saved: dict[str, str] = {}  # the visit of each form's reference
        self.statuses: list[int] = []
        self.told: set[str] = set()

    def run(self) -> None:
        while self._goes_on():
            reference = f"W{self._number}-{len(self.saved)}"
            form = {**FORM, "token": secrets.token_hex(16), "reference": reference}
            while reference not in self.saved:
                answer = self._client.post("/visits", data=form)
                self.statuses.append(answer.status_code)
                if answer.status_code == 303:
                    self.saved[reference] = answer.headers["Location"].rsplit("/", 1)[1]
                elif answer.status_code == 503 and self._goes_on():
                    self.told |= {line for line in answer.text.splitlines() if "do not answer" in line}
                    time.sleep(0.02)
                else:
                    return


def everything_is_there_once(place: Place, writers: list[Writer]) -> None:
    saved = {visit: reference for writer in writers for reference, visit in writer.saved.items()}
    assert len(saved) == sum(len(writer.saved) for writer in writers)
    with Store.open(place) as store:
        for visit, reference in saved.items():
            stored = store.get_visit(visit)
            assert json.loads(stored.visit_json)["reference"] == reference
            assert json.loads(stored.answer_json)["format"] == "twolight-comparison-1"
            assert [
                line.id for line in store.list_visits(reference.lower(), limit=500) if line.reference == reference
            ] == [visit]
    assert rows(place, "SELECT visit_id FROM saved_form GROUP BY visit_id HAVING count(*) > 1") == []
    # A form whose saving was cut off before anyone was told may be there as well: one for each writer at most.
    assert len(saved) <= rows(place, "SELECT count(*) FROM visit")[0][0] <= len(saved) + len(writers)


@pytest.mark.parametrize("seconds", [3, pytest.param(30, marks=pytest.mark.soak)])
def test_eight_counters_that_save_at_once_lose_nothing(place: Place, tmp_path: Path, seconds: float) -> None:
    until = time.monotonic() + seconds
    folder = place if isinstance(place, Path) else tmp_path
    with app_on(place, folder) as app:
        writers = [Writer(app, number, lambda: time.monotonic() < until) for number in range(WRITERS)]
        for writer in writers:
            writer.start()
        for writer in writers:
            writer.join()
    assert {status for writer in writers for status in writer.statuses} == {303}
    assert all(writer.saved for writer in writers)
    everything_is_there_once(place, writers)


@pytest.fixture
def own_postgres(needs_postgres: None) -> Iterator[Postgres]:  # noqa: ARG001 - it skips
    """A server for this test alone: with few files, it is back sooner after each death."""
    yield from started_postgres()


@pytest.mark.parametrize(("deaths", "counters"), [(2, 2), pytest.param(6, WRITERS, marks=pytest.mark.soak)])
def test_a_server_that_dies_under_the_writers_loses_nothing_and_is_found_again(
    own_postgres: Postgres, tmp_path: Path, deaths: int, counters: int
) -> None:
    place, done = own_postgres.new_database(), threading.Event()
    moments = random.Random(5)  # noqa: S311 - moments, not secrets
    with app_on(place, tmp_path) as app:
        writers = [Writer(app, number, lambda: not done.is_set()) for number in range(counters)]
        for writer in writers:
            writer.start()
        try:
            for death in range(deaths):
                everyone_saves_again(writers)
                time.sleep(moments.uniform(0.0, 0.3))
                own_postgres.kill() if death % 2 == 0 else own_postgres.stop(signal.SIGQUIT)
                time.sleep(0.3)  # while it is away, every counter is told so
                own_postgres.start()
            everyone_saves_again(writers)
        finally:
            done.set()
        for writer in writers:
            writer.join()
    assert {status for writer in writers for status in writer.statuses} == {303, 503}
    assert any(writer.told for writer in writers)
    everything_is_there_once(place, writers)


def everyone_saves_again(writers: list[Writer]) -> None:
    """Wait until every writer has saved once more."""
    before = {writer: len(writer.saved) for writer in writers}
    until = time.monotonic() + 60
    while any(len(writer.saved) == before[writer] for writer in writers):
        assert time.monotonic() < until, [writer.statuses[-5:] for writer in writers]
        assert all(writer.is_alive() for writer in writers), [writer.statuses[-5:] for writer in writers]
        time.sleep(0.02)
