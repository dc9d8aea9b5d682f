"""Daily copies: one a day, so many kept, never in the way, and never fatal."""

import datetime
import logging
import os
import stat
import threading
from collections.abc import Iterator
from pathlib import Path

import pytest

from advisor.records import checking, copies, trouble
from advisor.records.copies import DailyCopies, copies_in, make_copy, number_kept
from advisor.records.store import Store
from tests.filled import everything, fill, in_folder

FIRST = datetime.date(2026, 11, 30)


@pytest.fixture(autouse=True)
def no_number_of_this_machine(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.delenv(copies.VARIABLE, raising=False)


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    return tmp_path / "data"


def names(folder: Path) -> list[str]:
    return sorted(path.name for path in (folder / "copies").iterdir())


def days(store: Store, folder: Path, count: int) -> None:
    for number in range(count):
        make_copy(store, folder, day=FIRST + datetime.timedelta(days=number))


def test_a_copy_of_either_database_holds_every_row_and_is_private(store: Store, folder: Path, tmp_path: Path) -> None:
    fill(store)
    make_copy(store, folder, day=FIRST)
    (copy,) = copies_in(folder)
    assert copy == folder / "copies" / "twolight-2026-11-30.sqlite3"
    assert checking.check(copy, file=copy).rows["visit"] == 12
    assert {name for name, rows in everything(in_folder(copy, tmp_path / "moved")).items() if not rows} == set()
    if os.name == "posix":
        assert stat.S_IMODE(copy.stat().st_mode) == 0o600
        assert stat.S_IMODE(copy.parent.stat().st_mode) == 0o700
        assert stat.S_IMODE(folder.stat().st_mode) == 0o700  # made here where a server holds the records


def test_the_first_copy_of_a_day_stays(store: Store, folder: Path) -> None:
    make_copy(store, folder, day=FIRST)
    fill(store)
    make_copy(store, folder, day=FIRST)
    (copy,) = copies_in(folder)
    assert checking.check(copy, file=copy).rows["visit"] == 0


def test_the_last_fourteen_are_kept_over_the_turn_of_the_year(store: Store, folder: Path) -> None:
    days(store, folder, 40)
    assert len(names(folder)) == 14
    assert names(folder)[0] == "twolight-2026-12-26.sqlite3"
    assert names(folder)[-1] == "twolight-2027-01-08.sqlite3"


def test_the_shop_says_how_many_and_the_environment_has_the_last_word(
    store: Store, folder: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    store.set_setting(copies.SETTING, "3")
    days(store, folder, 5)
    assert len(names(folder)) == 3
    monkeypatch.setenv(copies.VARIABLE, "2")
    make_copy(store, folder, day=FIRST + datetime.timedelta(days=5))
    assert names(folder) == ["twolight-2026-12-04.sqlite3", "twolight-2026-12-05.sqlite3"]


def test_none_makes_no_copy_and_takes_none_away(store: Store, folder: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    days(store, folder, 2)
    monkeypatch.setenv(copies.VARIABLE, "0")
    make_copy(store, folder, day=FIRST + datetime.timedelta(days=9))
    assert len(names(folder)) == 2


@pytest.mark.parametrize("text", ["many", "-1", "3.5", "٣", "99999999999999999999"])
def test_a_number_that_is_none_is_told(store: Store, monkeypatch: pytest.MonkeyPatch, text: str) -> None:
    monkeypatch.setenv(copies.VARIABLE, text)
    with pytest.raises(copies.CopiesUnclear, match="TWOLIGHT_COPIES is not a whole number"):
        number_kept(store)
    monkeypatch.setenv(copies.VARIABLE, " ")
    assert number_kept(store) == 14


def test_nothing_else_in_the_folder_is_touched_but_what_a_killed_copy_left(store: Store, folder: Path) -> None:
    place = folder / "copies"
    place.mkdir(parents=True)
    own = ["letter.txt", "twolight-2026-01-01.sqlite3.bak", "twolight-2026-99-99.sqlite3", ".twolight.part"]
    left = [".twolight-2026-11-01.sqlite3.77.part", ".twolight-2026-11-01.sqlite3.77.part-wal"]
    for name in (*own, *left):
        (place / name).write_text("kept")
    store.set_setting(copies.SETTING, "1")
    days(store, folder, 3)
    assert names(folder) == sorted([*own, "twolight-2026-12-02.sqlite3"])


@pytest.fixture
def daily(store: Store, folder: Path) -> Iterator[DailyCopies]:
    made = DailyCopies(lambda: store, folder)
    yield made
    made.wait()


def test_a_day_is_seen_to_once_in_a_thread_of_its_own(
    daily: DailyCopies, folder: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    begun: list[datetime.date] = []
    may_go_on = threading.Event()

    def held_up(store: Store, place: Path, *, day: datetime.date) -> None:
        begun.append(day)
        assert may_go_on.wait(60)
        make_copy(store, place, day=day)

    monkeypatch.setattr(copies, "make_copy", held_up)
    for _ in range(100):
        daily.see_to_it()  # comes back although the copy cannot be finished yet
    may_go_on.set()
    daily.wait()
    daily.see_to_it()
    daily.wait()
    assert begun == [datetime.date.today()]
    assert names(folder) == [f"twolight-{begun[0].isoformat()}.sqlite3"]
    assert daily.problem is None


def test_a_failure_is_told_and_logged_in_a_sentence_and_tried_again_later(
    daily: DailyCopies, folder: Path, caplog: pytest.LogCaptureFixture
) -> None:
    folder.mkdir(parents=True)
    (folder / "copies").write_text("a letter")
    with caplog.at_level(logging.WARNING):
        daily.see_to_it()
        daily.wait()
    assert isinstance(daily.problem, trouble.StoreReadOnly)
    assert [record.getMessage() for record in caplog.records] == [f"No daily copy: {daily.problem}"]
    (folder / "copies").unlink()
    daily.see_to_it()
    daily.wait()
    assert not (folder / "copies").exists(), "it was tried again at once"
    daily._not_before = 0.0
    daily.see_to_it()
    daily.wait()
    assert len(names(folder)) == 1
    assert daily.problem is None


def test_a_fault_of_the_program_is_told_without_what_it_quotes(
    daily: DailyCopies, monkeypatch: pytest.MonkeyPatch, caplog: pytest.LogCaptureFixture
) -> None:
    def fail(*_given: object, **_named: object) -> None:
        raise KeyError("Zoë Łukasik")

    monkeypatch.setattr(copies, "make_copy", fail)
    with caplog.at_level(logging.WARNING):
        daily.see_to_it()
        daily.wait()
    assert isinstance(daily.problem, copies.CopyFailed)
    assert "KeyError" in caplog.text
    assert "Zoë" not in caplog.text
