"""Where the files that travel with the program are found."""

from functools import cache
from pathlib import Path

_PACKAGE = Path(__file__).resolve().parent


@cache
def resource_dir(name: str) -> Path:
    """Return the folder ``templates``, ``static`` or ``demo_patients``.

    A wheel carries it inside the package; a checkout has it beside the package.
    """
    inside = _PACKAGE / name
    folder = inside if inside.is_dir() else _PACKAGE.parent / name
    if not folder.is_dir():
        raise FileNotFoundError(f"The folder {name} that belongs to the program is missing.")
    return folder


def data_file(layer: str, name: str) -> Path:
    """Return the path of a data file kept in ``advisor/<layer>/data``."""
    return _PACKAGE / layer / "data" / name
