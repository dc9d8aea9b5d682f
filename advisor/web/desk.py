"""What an app holds between requests: the data folder, and the records in it, opened when first needed."""

import hashlib
import threading
from pathlib import Path

from flask import Flask, current_app

from advisor import __version__
from advisor.records.store import Store

EXTENSION = "twolight"


class Desk:
    """One shop's records behind one app; ``current_desk()`` finds it during a request."""

    def __init__(self, data_dir: Path) -> None:
        self.data_dir = data_dir
        self._lock = threading.Lock()
        self._store: Store | None = None

    @property
    def store(self) -> Store:
        """The records, opened now if they were not open yet; raises a StoreError with a sentence if it cannot be."""
        with self._lock:
            if self._store is None:
                self._store = Store.open(self.data_dir)
            return self._store

    def close(self) -> None:
        """Close the records; they open again when next needed."""
        with self._lock:
            if self._store is not None:
                self._store.close()
                self._store = None

    def health(self) -> dict[str, str]:
        """Say which program this is, and on which records, without telling where they lie."""
        folder = hashlib.sha256(str(self.data_dir.resolve()).encode()).hexdigest()[:16]
        return {"program": "twolight", "version": __version__, "records": folder}


def desk_of(app: Flask) -> Desk:
    """Return the desk of an app."""
    desk = app.extensions[EXTENSION]
    if not isinstance(desk, Desk):
        raise TypeError("the app was not made by create_app")
    return desk


def current_desk() -> Desk:
    """Return the desk of the app that answers this request."""
    return desk_of(current_app)
