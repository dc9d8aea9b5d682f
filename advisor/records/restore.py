"""Put a backup in the place of the records: checked first, brought up to date in a copy, and what was there kept."""

import datetime
import sqlite3
from contextlib import closing
from pathlib import Path
from typing import NamedTuple

from advisor.records import checking, parts, replacing, server
from advisor.records.backup import FileIsRecords
from advisor.records.checking import FileDamaged, FileMissing, damage_told
from advisor.records.engine import make_private, sqlite_engine
from advisor.records.location import database_file
from advisor.records.schema import REVISIONS, bring_up_to_date
from advisor.records.trouble import explained


class Restored(NamedTuple):
    """What was put in place: how many visits, where, and where the records are kept that were there before."""

    visits: int
    place: str
    kept: Path | None


def restore(place: Path | str, file: Path, *, folder: Path) -> Restored:
    """Put the records of a file into a data folder or a database; what was there is kept in the data folder.

    Raises
    ------
    FileMissing, FileDamaged, NoRecords, FileNewer, FileIsRecords
        If the file cannot be used; nothing is changed.
    StoreInUse
        If any program has the records open; nothing is changed.
    """
    file, target = file.expanduser().absolute(), database_file(folder)
    if not file.is_file():
        raise FileMissing(file)
    if target.exists() and target.samefile(file):
        raise FileIsRecords(file)
    with explained(str(folder)):
        folder.mkdir(mode=0o700, parents=True, exist_ok=True)
    keep = folder / f"twolight-before-restore-{_moment()}.sqlite3"
    with parts.part_of(folder / "restore.sqlite3") as ready:
        visits = _make_ready(file, ready)
        if isinstance(place, str) and server.is_address(place):
            return _on_server(place, ready, keep, visits)
        return Restored(visits, str(target), replacing.in_file(ready, target, keep=keep))


def _on_server(place: str, ready: Path, keep: Path, visits: int) -> Restored:
    address = server.address_of(place)
    engine, shown = server.server_engine(address), server.shown(address)
    try:
        with explained(shown):
            bring_up_to_date(engine, place=shown)
        return Restored(visits, shown, replacing.in_database(ready, engine, keep=keep, place=shown))
    finally:
        engine.dispose()


def _moment() -> str:
    return f"{datetime.datetime.now(datetime.UTC):%Y%m%dT%H%M%S.%fZ}"


def _make_ready(file: Path, ready: Path) -> int:
    """Copy a file, check the copy, and bring it up to date; return how many visits it holds."""
    with damage_told(file):
        _copy(file, ready)
    found = checking.check(ready, file=file)
    checking.set_mark(ready, None)
    if checking.revision(ready) != REVISIONS[-1]:
        _upgrade(ready)
        upgraded = checking.check(ready, file=file)
        if upgraded.rows["visit"] != found.rows["visit"]:
            raise FileDamaged(file)
    if not checking.is_as_declared(ready):
        raise FileDamaged(file)
    return found.rows["visit"]


def _copy(file: Path, ready: Path) -> None:
    """Copy a file with what its log holds; one without a log is read without touching the folder it lies in."""
    has_log = any(file.with_name(file.name + name).exists() for name in parts.LOGS)
    address = f"{file.as_uri()}?{'mode=ro' if has_log else 'immutable=1'}"
    with closing(sqlite3.connect(address, uri=True)) as source, closing(sqlite3.connect(ready)) as target:
        source.backup(target)
        target.execute("PRAGMA journal_mode = DELETE")


def _upgrade(ready: Path) -> None:
    make_private(ready)
    engine = sqlite_engine(ready)
    try:
        with explained(str(ready)):
            bring_up_to_date(engine, place=str(ready))
    finally:
        engine.dispose()
    with closing(checking.opened(ready)) as connection:
        connection.execute("PRAGMA journal_mode = DELETE")
