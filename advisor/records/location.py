"""Where a shop's records lie on this computer."""

import os
from pathlib import Path

import platformdirs

VARIABLE = "TWOLIGHT_DATA"
FILE_NAME = "twolight.sqlite3"


def data_folder(given: Path | None = None) -> Path:
    """Return the data folder: the one given, else ``TWOLIGHT_DATA``, else the user's own data folder."""
    if given is not None:
        return given.expanduser().absolute()
    named = os.environ.get(VARIABLE, "").strip()
    if named:
        return Path(named).expanduser().absolute()
    return Path(platformdirs.user_data_dir("twolight", appauthor=False))


def database_file(folder: Path) -> Path:
    """Return where the database of a data folder lies, whether it is there yet or not."""
    return folder / FILE_NAME
