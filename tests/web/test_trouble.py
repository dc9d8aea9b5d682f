"""Trouble with the records, as the screen tells it: one sentence, nothing saved is lost, what was typed stays."""

import os
import random
import re
import shutil
import sqlite3
import subprocess
import sys
import tempfile
from contextlib import closing
from pathlib import Path

import pytest
from flask import Flask
from flask.testing import FlaskClient
from werkzeug.test import TestResponse

from advisor.counsel.stock import builtin_range, range_to_toml
from advisor.records import engine
from advisor.records.location import database_file
from advisor.records.store import Store
from advisor.resources import resource_dir
from advisor.web.app import create_app
from advisor.web.desk import desk_of

LIVE = {"HX-Request": "true"}
FORM = {
    "token": "a" * 32,
    "wearer.name": "Łucja Ábel",
    "reference": "A-7",
    "note": "likes thin rims & says “so”",
    "prescription.right.sphere": "-4,2",
    "prescription.left.sphere": "-3.75",
    "option_count": "1",
    "options.0.design": "single-vision",
    "options.0.material": "hard-resin-150",
    "options.0.coating.front": "broadband",
}
READABLE = {**FORM, "prescription.right.sphere": "-4.25"}


def typed_stays(answer: TestResponse, form: dict[str, str] = FORM) -> bool:
    """Tell whether the page holds the whole form as it was sent."""
    page = answer.text
    fields = ("wearer.name", "reference", "prescription.right.sphere", "prescription.left.sphere")
    values = dict(re.findall(r'<input[^>]* name="([^"]+)" value="([^"]*)"', page))
    chosen = all(
        re.search(rf'<option value="{form[name]}" selected', page)
        for name in ("options.0.material", "options.0.coating.front")
    )
    note = "likes thin rims &amp; says “so”</textarea>" in page
    return all(values.get(name) == form[name] for name in fields) and chosen and note


def fill_the_disk(app: Flask, monkeypatch: pytest.MonkeyPatch) -> Store:
    """From now on the file may not grow by a page."""
    store = desk_of(app).store
    store.close()
    monkeypatch.setattr(engine, "_PRAGMAS", (*engine._PRAGMAS, "max_page_count = 1"))
    return store


def filled_up(client: FlaskClient) -> None:
    """Save until the last free page is used; a file keeps a few from its making."""
    for number in range(200):
        if client.post("/visits", data={**READABLE, "token": f"{number:032x}"}).status_code == 507:
            return
    raise AssertionError("the disk never became full")


def test_on_a_full_disk_the_counter_is_shown_again_with_everything_typed(
    app: Flask, client: FlaskClient, monkeypatch: pytest.MonkeyPatch
) -> None:
    store = fill_the_disk(app, monkeypatch)
    filled_up(client)
    before = [line.id for line in store.list_visits()]
    for form in (READABLE, {**READABLE, "do": "new"}):
        answer = client.post("/visits", data={**form, "token": "f" * 32})
        assert answer.status_code == 507
        assert "is full; nothing was saved. Make room and save again." in answer.text
        assert "What you typed still stands in the form" in answer.text
        assert typed_stays(answer, READABLE)
    assert [line.id for line in store.list_visits()] == before
    monkeypatch.undo()
    store.close()
    again = client.post("/visits", data={**READABLE, "token": "f" * 32})
    assert again.status_code == 303
    assert len(store.list_visits()) == len(before) + 1


def test_on_a_full_disk_a_change_of_a_saved_visit_stays_tied_to_it(
    app: Flask, client: FlaskClient, monkeypatch: pytest.MonkeyPatch
) -> None:
    visit_id = client.post("/visits", data=READABLE).headers["Location"].rsplit("/", 1)[1]
    store = fill_the_disk(app, monkeypatch)
    filled_up(client)
    changed = {**READABLE, "token": "e" * 32, "visit": visit_id, "visit_edit": "1", "reference": "B" * 9000}
    answer = client.post("/visits", data=changed)
    assert answer.status_code == 507
    assert f'name="visit" value="{visit_id}"' in answer.text
    assert 'name="visit_edit" value="1"' in answer.text
    assert store.get_visit(visit_id).edit == 1


@pytest.mark.parametrize("address", ["/counter", "/counter/turn"])
def test_a_form_that_cannot_be_kept_while_it_is_typed_stays_on_the_page(
    app: Flask, client: FlaskClient, monkeypatch: pytest.MonkeyPatch, address: str
) -> None:
    fill_the_disk(app, monkeypatch)
    filled_up(client)
    long = {**FORM, "worn_now.liked": "x" * 19_000}
    answer = client.post(address, data=long)
    assert answer.status_code == 507
    assert typed_stays(answer)
    live = client.post("/counter", data=long, headers=LIVE)
    assert (live.status_code, live.headers["HX-Retarget"]) == (200, "#figures")
    assert "is full; nothing was saved" in live.text
    assert "<html" not in live.text


def test_other_pages_tell_of_a_full_disk_in_one_sentence(
    app: Flask, client: FlaskClient, monkeypatch: pytest.MonkeyPatch
) -> None:
    fill_the_disk(app, monkeypatch)
    filled_up(client)
    wearer = sorted(resource_dir("demo_patients").glob("*.json"))[0].stem
    answer = client.post("/demo", data={"wearer": wearer})
    assert answer.status_code == 507
    assert "is full; nothing was saved" in answer.text
    assert client.get("/visits").status_code == 200
    assert client.get("/").status_code == 200


def test_while_another_program_holds_the_records_what_was_typed_stays(
    app: Flask, client: FlaskClient, monkeypatch: pytest.MonkeyPatch, tmp_path: Path
) -> None:
    monkeypatch.setattr(engine, "_PRAGMAS", ("busy_timeout = 50", *engine._PRAGMAS[1:]))
    store = desk_of(app).store
    with closing(sqlite3.connect(database_file(tmp_path), isolation_level=None)) as holder:
        holder.execute("BEGIN IMMEDIATE")
        answer = client.post("/visits", data=READABLE)
        assert answer.status_code == 503
        assert "Another program is using the records" in answer.text
        assert typed_stays(answer, READABLE)
        assert store.list_visits() == []
    assert client.post("/visits", data=READABLE).status_code == 303


def test_records_that_are_gone_take_no_save_and_are_used_again_once_they_are_back(
    client: FlaskClient, store: Store, tmp_path: Path
) -> None:
    """A file that was removed while it is open takes every write and loses it."""
    assert client.post("/visits", data=READABLE).status_code == 303
    away = tmp_path / "away"
    away.mkdir()
    for path in tmp_path.glob("twolight.sqlite3*"):
        path.rename(away / path.name)
    for address, form in (("/visits", READABLE), ("/counter", FORM)):
        answer = client.post(address, data={**form, "token": "b" * 32})
        assert answer.status_code == 503
        assert "no longer there; nothing was saved" in answer.text
        assert typed_stays(answer, form)
    assert client.get("/visits").status_code == 503
    assert [path.name for path in tmp_path.iterdir()] == ["away"], "an empty file was made in their place"
    for path in away.iterdir():
        path.rename(tmp_path / path.name)
    assert client.post("/visits", data={**READABLE, "token": "b" * 32}).status_code == 303
    assert len(store.list_visits()) == 2


def test_a_file_that_was_put_in_place_of_another_is_the_one_that_is_used(
    client: FlaskClient, store: Store, tmp_path: Path
) -> None:
    client.post("/visits", data=READABLE)
    copy = store.backup(tmp_path / "copy.sqlite3").file
    client.post("/visits", data={**READABLE, "token": "b" * 32})
    for name in ("-wal", "-shm"):
        (tmp_path / f"twolight.sqlite3{name}").unlink(missing_ok=True)
    copy.replace(database_file(tmp_path))
    assert len(store.list_visits()) == 1
    assert client.post("/visits", data={**READABLE, "token": "c" * 32}).status_code == 303
    with closing(sqlite3.connect(database_file(tmp_path))) as connection:
        assert connection.execute("SELECT count(*) FROM visit").fetchall() == [(2,)]


def test_damage_anywhere_is_a_page_with_a_sentence_or_no_harm(tmp_path: Path) -> None:
    """Noise of 4 kB at one of eleven places, or the second half cut off: never a fault that nobody foresaw."""
    first = create_app(data_dir=tmp_path / "whole", testing=True)
    key = first.test_client().post("/visits", data=READABLE).headers["Location"].rsplit("/", 1)[1]
    with desk_of(first).store as store:
        saved, current = store.get_visit(key), range_to_toml(builtin_range())
        for _ in range(20):
            store.save_visit(saved.visit_json, range_toml=current, version="1", answer_json=saved.answer_json)
    whole, told = database_file(tmp_path / "whole").read_bytes(), 0
    own, noise = {"Sec-Fetch-Site": "same-origin"}, random.Random(3)  # noqa: S311 - noise, not secrets
    for where in range(12):
        at, folder = len(whole) * where // 12, tmp_path / f"{where}"
        folder.mkdir()
        spoilt = whole[:at] + noise.randbytes(4096) + whole[at + 4096 :] if where else whole[: len(whole) // 2]
        database_file(folder).write_bytes(spoilt)
        app = create_app(data_dir=folder)
        client = app.test_client()
        answers = [client.get(address) for address in ("/visits", f"/visits/{key}")]
        answers.append(client.post("/visits/find", data={"search": "luc"}, headers=own))
        answers.append(client.post("/visits", data={**READABLE, "token": "f" * 32}, headers=own))
        for answer in answers:
            assert answer.status_code in (200, 303, 404, 503), where
            assert answer.status_code != 503 or "are damaged or are not records; put a backup" in answer.text
        assert answers[-1].status_code == 303 or typed_stays(answers[-1], READABLE)
        told += any(answer.status_code == 503 for answer in answers)
        desk_of(app).close()
    assert told > 3


@pytest.mark.skipif(not hasattr(os, "setuid"), reason="another user is taken on")
def test_a_folder_that_may_only_be_read_keeps_what_was_typed_on_the_page(tmp_path: Path) -> None:
    """In a program of its own, as a user who is not root: root may write anywhere."""
    place = Path(tempfile.mkdtemp(dir=tempfile.gettempdir()))
    code = (
        "import os, sys\n"
        "from pathlib import Path\n"
        "from advisor.web.app import create_app\n"
        "form = {'token': 'a' * 32, 'option_count': '1', 'wearer.name': 'Lucja', 'prescription.right.sphere': '-4'}\n"
        "def send(folder):\n"
        "    return create_app(data_dir=Path(folder), testing=True).test_client().post('/visits', data=form)\n"
        "assert send(sys.argv[2]).status_code == 422\n"  # what is imported late must be read by root here
        "os.geteuid() == 0 and os.setuid(65534)\n"
        "answer = send(sys.argv[1])\n"
        "print(answer.status_code, 'value=\"Lucja\"' in answer.text, 'may not be opened or written' in answer.text)\n"
    )
    try:
        Store.open(place).close()
        for path in (*place.iterdir(), place):
            path.chmod(0o555 if path.is_dir() else 0o444)
        done = subprocess.run(
            [sys.executable, "-c", code, str(place), str(tmp_path)], capture_output=True, text=True, check=False
        )
        assert done.stdout == "503 True True\n", done.stderr
    finally:
        place.chmod(0o755)
        shutil.rmtree(place)


def test_a_copy_that_failed_is_told_on_the_visits_page(app: Flask, client: FlaskClient, tmp_path: Path) -> None:
    (tmp_path / "copies").write_text("a letter")
    desk_of(app).begin_copies()
    desk_of(app).copies.wait()
    page = client.get("/visits").text
    assert f"The records in {tmp_path / 'copies'} may not be opened or written here" in page
    assert client.post("/visits", data=READABLE).status_code == 303
    desk_of(app).close()


def test_saving_makes_the_copy_of_the_day_and_the_page_tells_it(
    app: Flask, client: FlaskClient, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.delenv("TWOLIGHT_COPIES", raising=False)
    assert client.post("/copies", data={"kept": "0"}).status_code == 303
    assert "No daily copy has been made yet." in client.get("/visits").text
    assert client.post("/copies", data={"kept": "2"}).status_code == 303
    assert client.post("/copies", data={"kept": "2 or 3"}).status_code == 400
    assert not (tmp_path / "copies").exists(), "an app that is not served makes no copies"
    desk = desk_of(app)
    desk._makes_copies = True
    client.post("/visits", data=READABLE)
    desk.copies.wait()
    page = client.get("/visits").text
    assert 'name="kept" value="2"' in page
    assert "The last daily copy is of" in page
    monkeypatch.setenv("TWOLIGHT_COPIES", "5")
    assert "TWOLIGHT_COPIES says that 5 daily copies are kept" in client.get("/visits").text
    desk.close()
