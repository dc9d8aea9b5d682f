"""A restore puts a checked backup in place, keeps what was there, and refuses everything else without a change."""

import os
import random
import shutil
import signal
import sqlite3
import stat
import subprocess
import sys
import time
from collections.abc import Callable
from contextlib import closing
from pathlib import Path

import pytest

from advisor.records import checking, parts, replacing, trouble
from advisor.records.backup import FileIsRecords
from advisor.records.location import FILE_NAME, database_file
from advisor.records.replacing import StoreInUse
from advisor.records.restore import restore
from advisor.records.schema import REVISIONS
from advisor.records.store import Store
from tests.databases import Place, Postgres, rows
from tests.filled import everything, fill, in_folder


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    """The data folder, where the former records are kept."""
    return tmp_path / "records"


@pytest.fixture
def copy(tmp_path: Path) -> Path:
    """A backup of filled records."""
    with Store.open(tmp_path / "elsewhere") as store:
        fill(store)
        return store.backup(tmp_path / "copy.sqlite3").file


def content(file: Path, folder: Path) -> object:
    return everything(in_folder(file, folder))


def filled_otherwise(place: Place) -> object:
    with Store.open(place) as store:
        fill(store, 5)
    return everything(place)


def test_a_restore_puts_every_row_in_place_and_keeps_what_was_there(
    place: Place, folder: Path, copy: Path, tmp_path: Path
) -> None:
    former = filled_otherwise(place)
    done = restore(place, copy, folder=folder)
    assert done.visits == 12
    assert everything(place) == content(copy, tmp_path / "copied")
    assert done.kept is not None
    assert done.kept.parent == folder
    assert done.kept.name.startswith("twolight-before-restore-2")
    assert stat.S_IMODE(done.kept.stat().st_mode) == 0o600
    assert content(done.kept, tmp_path / "kept") == former
    left = {path.name for path in folder.iterdir()}
    assert left == {done.kept.name} | ({FILE_NAME} if isinstance(place, Path) else set())
    with Store.open(place) as store:
        assert len(store.list_visits("zaneta")) == 12
        store.backup(tmp_path / "again.sqlite3")


def test_a_restore_where_nothing_was_keeps_nothing(
    empty_place: Place, folder: Path, copy: Path, tmp_path: Path
) -> None:
    done = restore(empty_place, copy, folder=folder)
    assert done.kept is None
    assert everything(empty_place) == content(copy, tmp_path / "copied")
    assert stat.S_IMODE(folder.stat().st_mode) == 0o700


def test_a_shop_moves_to_a_server_and_back_without_losing_a_row(postgres: Postgres, copy: Path, tmp_path: Path) -> None:
    start = everything(tmp_path / "elsewhere")
    server, back = postgres.new_database(), tmp_path / "back"
    restore(server, copy, folder=tmp_path / "desk")
    assert everything(server) == start
    with Store.open(server) as store:
        second = store.backup(tmp_path / "second.sqlite3").file
    restore(back, second, folder=back)
    assert everything(back) == start
    assert stat.S_IMODE(database_file(back).stat().st_mode) == 0o600
    with Store.open(back) as store:
        third = store.backup(tmp_path / "third.sqlite3").file
    assert checking.check(third, file=third) == checking.check(copy, file=copy)


def test_records_that_are_open_anywhere_are_not_replaced(
    place: Place, folder: Path, copy: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr(replacing, "PATIENCE_MS", 300)
    with Store.open(place) as store:
        fill(store, 5)
        former = everything(place)
        with pytest.raises(StoreInUse, match=r"in use; nothing was changed\. Stop Twolight first"):
            restore(place, copy, folder=folder)
        assert everything(place) == former
        assert not list(folder.glob("twolight-before-*"))
        assert not list(folder.glob(".*"))
        store.set_setting("still", "works")
    assert restore(place, copy, folder=folder).visits == 12


def test_a_program_that_opens_the_file_while_it_is_replaced_waits_and_sees_the_new_rows(
    folder: Path, copy: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    filled_otherwise(folder)
    overwrite, said = replacing._overwrite, []
    code = (
        "import sys; from advisor.records.store import Store; print('began', flush=True);"
        "print(len(Store.open(sys.argv[1]).list_visits()))"
    )

    def while_another_opens(live: sqlite3.Connection, ready: Path) -> None:
        other = subprocess.Popen([sys.executable, "-c", code, folder], stdout=subprocess.PIPE, text=True)
        assert other.stdout is not None
        assert other.stdout.readline() == "began\n"
        with pytest.raises(subprocess.TimeoutExpired):
            other.wait(0.5)
        overwrite(live, ready)
        said.append(other)

    monkeypatch.setattr(replacing, "_overwrite", while_another_opens)
    restore(folder, copy, folder=folder)
    assert said[0].communicate(timeout=20)[0] == "12\n"


def untouched(folder: Path, file: Path, kind: type[Exception], match: str) -> None:
    """See that a restore is refused and neither the records nor the folder change."""
    before, there = everything(folder), {path.name for path in folder.iterdir()}
    with pytest.raises(kind, match=match):
        restore(folder, file, folder=folder)
    assert everything(folder) == before
    assert {path.name for path in folder.iterdir()} == there


def other_program(file: Path) -> None:
    file.unlink()
    with closing(sqlite3.connect(file)) as connection, connection:
        connection.execute("CREATE TABLE visit (name TEXT)")


def changed(statement: str) -> Callable[[Path], None]:
    def change(file: Path) -> None:
        with closing(sqlite3.connect(file)) as connection, connection:
            connection.execute(statement)

    return change


def cut(share: float) -> Callable[[Path], None]:
    def shorten(file: Path) -> None:
        file.write_bytes(file.read_bytes()[: int(file.stat().st_size * share)])

    return shorten


def into_a_folder(file: Path) -> None:
    file.unlink()
    file.mkdir()


NOISE = random.Random(1).randbytes(50_000)  # noqa: S311 - bytes of a broken file, not secrets
REFUSED: dict[str, tuple[Callable[[Path], object], type[Exception], str]] = {
    "missing": (lambda file: file.unlink(), checking.FileMissing, "There is no file"),
    "a folder": (into_a_folder, checking.FileMissing, "There is no file"),
    "empty": (lambda file: file.write_bytes(b""), checking.NoRecords, "holds no records"),
    "random": (lambda file: file.write_bytes(NOISE), checking.NoRecords, "holds no records"),
    "another program's": (other_program, checking.NoRecords, "holds no records"),
    "with a trigger": (
        changed("CREATE TRIGGER t AFTER INSERT ON visit BEGIN SELECT 1; END"), checking.NoRecords, "holds no records",
    ),
    "newer": (changed("UPDATE alembic_version SET version_num = '9999'"), checking.FileNewer, "newer version"),
    "cut to half": (cut(0.5), checking.FileDamaged, "is damaged"),
    "cut by one page": (cut(0.97), checking.FileDamaged, "is damaged"),
    "with a table missing": (changed("DROP TABLE setting"), checking.FileDamaged, "is damaged"),
    "with a row missing": (changed("DELETE FROM setting"), checking.FileDamaged, "is damaged"),
    "with half a visit": (changed("UPDATE visit SET visit = '{'"), checking.FileDamaged, "is damaged"),
    "with half an answer": (changed("UPDATE visit SET answer = X'789c'"), checking.FileDamaged, "is damaged"),
    "without a range": (changed("DELETE FROM range_version"), checking.FileDamaged, "is damaged"),
}  # fmt: skip


@pytest.mark.parametrize("what", REFUSED)
def test_a_file_that_is_no_whole_backup_changes_nothing(folder: Path, copy: Path, what: str) -> None:
    spoil, kind, match = REFUSED[what]
    filled_otherwise(folder)
    spoil(copy)
    untouched(folder, copy, kind, match)


def test_a_server_is_not_touched_by_a_damaged_file(postgres: Postgres, folder: Path, copy: Path) -> None:
    server = postgres.new_database()
    former = filled_otherwise(server)
    cut(0.8)(copy)
    with pytest.raises(checking.FileDamaged):
        restore(server, copy, folder=folder)
    assert everything(server) == former


def test_bytes_overwritten_anywhere_are_found_or_change_nothing(copy: Path, tmp_path: Path) -> None:
    """Damage at 150 random places: either the file is refused, or every row reads as before."""
    whole, draw, refused = copy.read_bytes(), random.Random(7), 0  # noqa: S311 - places, not secrets
    expected = checking.check(copy, file=copy)
    for number in range(150):
        spoilt = bytearray(whole)
        at, length = draw.randrange(100, len(whole)), draw.choice([1, 4, 64, 2000])
        spoilt[at : at + length] = draw.randbytes(len(spoilt[at : at + length]))
        file = tmp_path / f"{number}.sqlite3"
        file.write_bytes(spoilt)
        try:
            found = checking.check(file, file=file)
        except (checking.FileDamaged, checking.NoRecords, checking.FileNewer):
            refused += 1
        else:
            assert found == expected
        file.unlink()
    assert refused > 75


def test_the_records_themselves_are_no_backup_of_themselves(folder: Path) -> None:
    filled_otherwise(folder)
    untouched(folder, database_file(folder), FileIsRecords, "the records themselves")


@pytest.mark.parametrize("revision", REVISIONS)
def test_an_older_backup_is_brought_up_to_date_and_stays_as_it_is(
    place: Place, folder: Path, tmp_path: Path, revision: str
) -> None:
    from tests.records.test_migrations import ROWS, database_at  # the rows of every version stand there

    old = tmp_path / "old"
    database_at(old, revision)
    with closing(sqlite3.connect(old / FILE_NAME)) as connection, connection:
        for statement in ROWS[revision]:
            connection.execute(statement)
    file = Path(shutil.copy(old / FILE_NAME, tmp_path / "old.sqlite3"))
    before = file.read_bytes()
    assert restore(place, file, folder=folder).visits == 1
    assert file.read_bytes() == before
    assert rows(place, "SELECT version_num FROM alembic_version") == [(REVISIONS[-1],)]
    with Store.open(place) as store:
        assert store.get_visit("v1").date == "2026-01-02"
        assert [line.id for line in store.list_visits("ada")] == ["v1"]


def test_a_copy_with_its_log_beside_it_loses_nothing_that_the_log_holds(folder: Path, tmp_path: Path) -> None:
    live = tmp_path / "live"
    with Store.open(live) as store:
        fill(store)
        copied = Path(shutil.copytree(live, tmp_path / "by hand"))  # the last saves are in the log
        expected = everything(live)
    assert (copied / f"{FILE_NAME}-wal").stat().st_size > 0
    restore(folder, copied / FILE_NAME, folder=folder)
    assert everything(folder) == expected


@pytest.mark.parametrize("spoil", [lambda file: file.write_bytes(b"no records" * 999), cut(0.6)], ids=["random", "cut"])
def test_damaged_records_are_replaced_and_kept_as_they_are(
    folder: Path, copy: Path, tmp_path: Path, spoil: Callable[[Path], object]
) -> None:
    filled_otherwise(folder)
    spoil(database_file(folder))
    damaged = database_file(folder).read_bytes()
    done = restore(folder, copy, folder=folder)
    assert done.kept is not None
    assert done.kept.read_bytes()[100:] == damaged[100:]  # SQLite notes in the head how the file was last closed
    assert everything(folder) == content(copy, tmp_path / "copied")
    assert stat.S_IMODE(database_file(folder).stat().st_mode) == 0o600


def with_its_log(folder: Path, tmp_path: Path) -> object:
    """Lay a file that is damaged into a folder beside a log that holds all its pages; return the rows of both."""
    live = tmp_path / "live"
    with Store.open(live) as store:
        fill(store, 5)
        shutil.copytree(live, folder)
        database_file(folder).write_bytes(b"no records" * 999)
        return everything(live)


def test_what_the_log_of_a_damaged_file_still_holds_is_kept(folder: Path, copy: Path, tmp_path: Path) -> None:
    former = with_its_log(folder, tmp_path)
    done = restore(folder, copy, folder=folder)
    assert done.kept is not None
    assert content(done.kept, tmp_path / "kept") == former
    assert everything(folder) == content(copy, tmp_path / "copied")


def test_a_log_that_is_laid_aside_is_not_played_into_the_new_file(folder: Path, copy: Path, tmp_path: Path) -> None:
    with_its_log(folder, tmp_path)
    expected = content(copy, tmp_path / "copied")
    kept = replacing._aside(copy, database_file(folder), folder / "former.sqlite3")
    assert {path.name for path in folder.iterdir()} == {FILE_NAME, kept.name, f"{kept.name}-wal"}
    assert everything(folder) == expected


def test_a_full_disk_leaves_the_former_records_in_place(
    folder: Path, copy: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    former = filled_otherwise(folder)
    lock = replacing._lock

    def small(live: sqlite3.Connection, target: Path) -> None:
        lock(live, target)
        live.execute("PRAGMA max_page_count = 1")  # raised by SQLite to the pages that there are

    monkeypatch.setattr(replacing, "_lock", small)
    with pytest.raises(trouble.StoreFull, match="is full"):
        restore(folder, copy, folder=folder)
    monkeypatch.undo()
    assert everything(folder) == former
    assert [path.name for path in folder.iterdir()] == [FILE_NAME]


def test_a_server_that_refuses_a_row_keeps_the_former_ones(
    postgres: Postgres, folder: Path, copy: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    server = postgres.new_database()
    former = filled_otherwise(server)
    monkeypatch.setattr(replacing, "row_counts", lambda connection: {"visit": id(connection)})
    with pytest.raises(trouble.StoreUnreadable):
        restore(server, copy, folder=folder)
    monkeypatch.undo()
    assert everything(server) == former


def test_a_part_left_by_a_program_that_was_killed_is_no_hindrance(folder: Path, copy: Path) -> None:
    folder.mkdir()
    with parts.part_of(folder / "restore.sqlite3") as part:
        name = part.name
    (folder / name).write_bytes(b"half")
    assert restore(folder, copy, folder=folder).visits == 12
    assert not (folder / name).exists()


@pytest.mark.skipif(not hasattr(os, "fork"), reason="the restore is forked")
@pytest.mark.filterwarnings("ignore:.*multi-threaded, use of fork.*:DeprecationWarning")  # the child only restores
@pytest.mark.parametrize("kills", [15, pytest.param(200, marks=pytest.mark.soak)])
def test_a_restore_that_is_killed_leaves_the_former_records_or_the_new_ones(
    folder: Path, copy: Path, tmp_path: Path, kills: int
) -> None:
    moments, seen = random.Random(11), set()  # noqa: S311 - moments, not secrets
    other = tmp_path / "other"
    filled_otherwise(other)
    with Store.open(other) as store:
        files = [copy, store.backup(tmp_path / "other.sqlite3").file]
    states = [content(file, tmp_path / f"state {number}") for number, file in enumerate(files)]
    restore(folder, files[0], folder=folder)
    now = 0
    for _ in range(kills):
        child = os.fork()
        if child == 0:
            try:
                restore(folder, files[1 - now], folder=folder)
            finally:
                os._exit(0)
        time.sleep(moments.uniform(0.0, 0.08))
        os.kill(child, signal.SIGKILL)
        os.waitpid(child, 0)
        found = everything(folder)
        assert found in states
        seen.add(found == states[now])
        now = states.index(found)
        checking.check(database_file(folder), file=folder)
    assert kills < 100 or seen == {True, False}, "no kill came before the change, or none after it"
