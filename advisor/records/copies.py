"""A copy a day, made beside the work and never in its way: so many are kept, and a failure is told and never fatal."""

import datetime
import logging
import os
import re
import threading
import time
from collections.abc import Callable
from pathlib import Path

from advisor.counsel.phrases import mark
from advisor.errors import TwolightError
from advisor.records import parts
from advisor.records.store import Store
from advisor.records.trouble import explained

FOLDER = "copies"
VARIABLE = "TWOLIGHT_COPIES"
SETTING = "daily-copies"
KEPT = 14
MOST = 3650
AGAIN_S = 600  # a copy that failed is tried again with the next saving after so long
CLOSING_S = 20  # a copy in the making is waited for when the program ends

_NAME = re.compile(r"twolight-[0-9]{4}-[0-9]{2}-[0-9]{2}\.sqlite3")
_PART = re.compile(r"\.twolight-[0-9-]{10}\.sqlite3\.[0-9]+\.part(-wal|-shm|-journal)?")
_LOG = logging.getLogger("twolight.copies")


class CopiesUnclear(TwolightError):
    """How many copies to keep is given as something that is no number."""

    text = mark("%(variable)s is not a whole number from 0 to %(most)s; no daily copy was made.")


class CopyFailed(TwolightError):
    """A copy failed for a reason that the program does not know."""

    text = mark("The daily copy failed because of a fault in the program; what you save is not touched by it.")


def number_kept(store: Store) -> int:
    """Return how many daily copies are kept: as the environment says, else the shop's setting, else 14."""
    text = (os.environ[VARIABLE].strip() if is_fixed() else store.get_setting(SETTING)) or str(KEPT)
    if not is_number(text):
        raise CopiesUnclear(variable=VARIABLE if is_fixed() else SETTING, most=str(MOST))
    return int(text)


def is_fixed() -> bool:
    """Tell whether the environment says how many copies are kept."""
    return bool(os.environ.get(VARIABLE, "").strip())


def is_number(text: str) -> bool:
    """Tell whether a text is a number of copies."""
    return text.isascii() and text.isdigit() and len(text) <= len(str(MOST)) and int(text) <= MOST


def _is_copy(path: Path) -> bool:
    if not _NAME.fullmatch(path.name):
        return False
    try:
        datetime.date.fromisoformat(day_of(path))
    except ValueError:
        return False
    return True


def day_of(copy: Path) -> str:
    """Return the day of a daily copy, as its name has it."""
    return copy.name.removeprefix("twolight-").removesuffix(".sqlite3")


def copies_in(folder: Path) -> list[Path]:
    """Return the daily copies in a data folder, the oldest first; whatever else lies there is none."""
    place = folder / FOLDER
    found = [path for path in place.iterdir() if _is_copy(path)] if place.is_dir() else []
    return sorted(found, key=day_of)


def make_copy(store: Store, folder: Path, *, day: datetime.date) -> None:
    """Make the copy of a day unless it is there, and let go of those beyond the number that is kept."""
    number = number_kept(store)
    if number == 0:
        return
    place = folder / FOLDER
    with explained(str(place)):
        folder.mkdir(mode=0o700, parents=True, exist_ok=True)  # there is none yet where a server holds the records
        place.mkdir(mode=0o700, exist_ok=True)
        for left in (path for path in place.iterdir() if _PART.fullmatch(path.name)):  # by a program that was killed
            parts.clear(left)
        file = place / f"twolight-{day.isoformat()}.sqlite3"
        if not file.exists():
            store.backup(file)
        for old in copies_in(folder)[:-number]:
            old.unlink()


class DailyCopies:
    """Makes at most one copy a day, in a thread of its own; ``problem`` is what kept the last one from being made."""

    def __init__(self, store: Callable[[], Store], folder: Path) -> None:
        self._store = store
        self.folder = folder
        self.problem: TwolightError | None = None
        self._lock = threading.Lock()
        self._thread: threading.Thread | None = None
        self._done: datetime.date | None = None
        self._not_before = 0.0

    def see_to_it(self) -> None:
        """Begin today's copy if nobody has; returns at once."""
        today = datetime.date.today()
        with self._lock:
            busy = self._thread is not None and self._thread.is_alive()
            if busy or self._done == today or time.monotonic() < self._not_before:
                return
            self._thread = threading.Thread(target=self._make, args=(today,), name="daily copy", daemon=True)
            self._thread.start()

    def _make(self, day: datetime.date) -> None:
        try:
            make_copy(self._store(), self.folder, day=day)
        except TwolightError as error:
            self._failed(error)
        except Exception as error:  # noqa: BLE001 - a copy never ends the program; the error's text may quote a visit
            _LOG.error("%s in the daily copy", type(error).__name__)
            self._failed(CopyFailed())
        else:
            self.problem = None
            self._done = day

    def _failed(self, error: TwolightError) -> None:
        self.problem = error
        self._not_before = time.monotonic() + AGAIN_S
        _LOG.warning("No daily copy: %s", error)

    def wait(self, seconds: float = CLOSING_S) -> None:
        """Wait until a copy in the making is done, or so long."""
        with self._lock:
            thread = self._thread
        if thread is not None:
            thread.join(seconds)
