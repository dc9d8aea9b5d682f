"""``twolight backup`` and ``twolight restore``: one sentence each, whatever happens."""

import os
import shutil
import sqlite3
import subprocess
import sys
import tempfile
from contextlib import closing
from pathlib import Path

import pytest
from click.testing import CliRunner, Result

from advisor.cli import main
from advisor.records.location import FILE_NAME, database_file
from advisor.records.store import Store
from tests.filled import fill


@pytest.fixture(autouse=True)
def no_database_of_this_machine(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.delenv("TWOLIGHT_DATABASE", raising=False)


@pytest.fixture
def data(tmp_path: Path) -> Path:
    folder = tmp_path / "data"
    with Store.open(folder) as store:
        fill(store)
    return folder


def run(*arguments: object, status: int = 0) -> Result:
    result = CliRunner().invoke(main, [str(argument) for argument in arguments])
    assert result.exception is None or isinstance(result.exception, SystemExit), repr(result.exception)
    assert result.exit_code == status, result.output
    assert result.output.count("\n") == 1
    return result


def events(folder: Path) -> list[str]:
    with Store.open(folder) as store:
        return [event.what for event in store.list_events(limit=1)]


def test_a_backup_says_what_it_holds_and_that_it_was_read_again(data: Path, tmp_path: Path) -> None:
    file = tmp_path / "copy.sqlite3"
    said = run("--data", data, "backup", file).stdout
    assert said.startswith(f"{file}: 12 visits, 0.")
    assert said.endswith(" MB, read again and found whole.\n")
    assert "say --replace" in run("--data", data, "backup", file, status=1).stderr
    run("--data", data, "backup", file, "--replace")
    assert events(data) == ["backup"]


def test_a_backup_of_nothing_makes_nothing(tmp_path: Path) -> None:
    said = run("--data", tmp_path / "none", "backup", tmp_path / "copy.sqlite3", status=1).stderr
    assert said == f"There are no records in {tmp_path / 'none'}; nothing was written.\n"
    assert list(tmp_path.iterdir()) == []


def test_a_restore_says_where_the_former_records_are_kept(data: Path, tmp_path: Path) -> None:
    file = tmp_path / "copy.sqlite3"
    run("--data", data, "backup", file)
    said = run("--data", data, "restore", file).stdout
    (kept,) = data.glob("twolight-before-restore-*.sqlite3")
    assert said == f"{file}: 12 visits put into {database_file(data)}. What was there before is kept in {kept}.\n"
    assert events(data) == ["restored"]
    fresh = tmp_path / "fresh"
    assert "Nothing was there before." in run("--data", fresh, "restore", file).stdout


@pytest.mark.parametrize("command", ["backup", "restore", "range import"])
@pytest.mark.parametrize("damage", ["random", "cut", "overwritten"])
def test_damaged_records_are_one_sentence_for_every_command(
    data: Path, tmp_path: Path, command: str, damage: str
) -> None:
    file, good = database_file(data), tmp_path / "good.sqlite3"
    run("--data", data, "backup", good)
    whole = file.read_bytes()
    spoilt = {"random": b"noise" * 4000, "cut": whole[: len(whole) // 2], "overwritten": whole[:4096] + b"\xa5" * 60000}
    file.write_bytes(spoilt[damage])
    if command == "restore":
        run("--data", data, "restore", good)
        with Store.open(data) as store:
            assert len(store.list_visits()) == 12
    elif command == "backup":
        said = run("--data", data, "backup", tmp_path / "copy.sqlite3", status=1).stderr
        assert said == f"The records in {file} are damaged or are not records; put a backup in their place.\n"
        assert not (tmp_path / "copy.sqlite3").exists()
    else:
        (tmp_path / "range.toml").write_text("")
        said = run("--data", data, "range", "import", tmp_path / "range.toml", status=1).stderr
        assert said.startswith(f"The records in {file} are damaged")


def test_records_that_another_program_keeps_locked_are_one_sentence(
    data: Path, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    good = tmp_path / "good.sqlite3"
    run("--data", data, "backup", good)
    monkeypatch.setattr("advisor.records.replacing.PATIENCE_MS", 200)
    with closing(sqlite3.connect(database_file(data), isolation_level=None)) as holder:
        holder.execute("BEGIN IMMEDIATE")
        assert "Stop Twolight first" in run("--data", data, "restore", good, status=1).stderr


@pytest.mark.skipif(not hasattr(os, "setuid"), reason="another user is taken on")
@pytest.mark.parametrize("command", ["backup", "restore"])
def test_a_folder_that_may_not_be_written_is_one_sentence(data: Path, command: str) -> None:
    """In a program of its own, as a user who is not root: root may write anywhere."""
    place = Path(tempfile.mkdtemp(dir=tempfile.gettempdir()))
    try:
        with Store.open(data) as store:
            store.backup(place / "good.sqlite3")
        shutil.copy(data / FILE_NAME, place / FILE_NAME)
        for path in (place, *place.iterdir()):
            path.chmod(0o555)
        code = (
            "import os, sys\n"
            "from advisor.cli import main\n"
            "data, *command, file, spare = sys.argv[1:]\n"
            "main(['--data', data, 'backup', spare], standalone_mode=False)\n"  # what is imported late is read by root
            "main(['--data', data + '/new', 'restore', spare], standalone_mode=False)\n"
            "os.geteuid() == 0 and os.setuid(65534)\n"
            "main(['--data', os.path.dirname(file), *command, file])"
        )
        file = place / ("good.sqlite3" if command == "restore" else "copy.sqlite3")
        done = subprocess.run(
            [sys.executable, "-c", code, str(data), command, str(file), str(data / "spare")],
            capture_output=True, text=True, check=False,
        )  # fmt: skip
        assert (done.returncode, done.stdout.count("\n")) == (1, 2), done.stdout  # those two of root
        assert done.stderr.count("\n") == 1, done.stderr
        assert str(place) in done.stderr
        assert sorted(path.name for path in place.iterdir()) == ["good.sqlite3", FILE_NAME]
    finally:
        place.chmod(0o755)
        shutil.rmtree(place)
