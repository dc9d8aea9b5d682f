"""What an app holds between requests: the data folder, and the records there or on a server, opened when needed."""

import hashlib
import threading
from pathlib import Path

from flask import Flask, current_app

from advisor import __version__
from advisor.records.copies import DailyCopies
from advisor.records.server import address_of, shown
from advisor.records.store import Store

EXTENSION = "twolight"


class Desk:
    """One shop's records behind one app; ``current_desk()`` finds it during a request."""

    def __init__(self, data_dir: Path, *, database: str | None = None) -> None:
        self.data_dir = data_dir
        self._database = database
        self._place = str(data_dir.resolve()) if database is None else shown(address_of(database), with_user=False)
        self._lock = threading.Lock()
        self._store: Store | None = None
        self.copies = DailyCopies(lambda: self.store, data_dir)
        self._makes_copies = False

    @property
    def store(self) -> Store:
        """The records, opened now if they were not open yet; raises a StoreError with a sentence if it cannot be."""
        with self._lock:
            if self._store is None:
                self._store = Store.open(self.data_dir if self._database is None else self._database)
            return self._store

    @property
    def opened(self) -> Store | None:
        """The records if they are open; they are not opened for this."""
        return self._store

    def begin_copies(self) -> None:
        """From now on see to one copy a day, the first of them at once; only a served app makes copies."""
        self._makes_copies = True
        self.copies.see_to_it()

    def see_to_copies(self) -> None:
        """See to today's copy after something was saved."""
        if self._makes_copies:
            self.copies.see_to_it()

    def close(self) -> None:
        """Close the records, after a copy in the making; they open again when next needed."""
        self.copies.wait()
        with self._lock:
            if self._store is not None:
                self._store.close()
                self._store = None

    def health(self) -> dict[str, str]:
        """Say which program this is, and on which records, without telling where they lie."""
        place = hashlib.sha256(self._place.encode()).hexdigest()[:16]
        return {"program": "twolight", "version": __version__, "records": place}


def desk_of(app: Flask) -> Desk:
    """Return the desk of an app."""
    desk = app.extensions[EXTENSION]
    if not isinstance(desk, Desk):
        raise TypeError("the app was not made by create_app")
    return desk


def current_desk() -> Desk:
    """Return the desk of the app that answers this request."""
    return desk_of(current_app)
