"""Reading a text file that somebody else wrote: size, encoding and syntax, each refused with its own fault."""

import json
import re
import tomllib
from pathlib import Path
from typing import Any, NoReturn

from advisor.counsel.faults import Fault, Faults, fault

LARGEST_BYTES = 2_000_000


class _RefusedError(ValueError):
    """A value that JSON readers let through and we do not; carries its fault."""

    def __init__(self, reason: Fault) -> None:
        super().__init__(reason.phrase.code)
        self.reason = reason


def read_text(path: Path, *, largest_bytes: int = LARGEST_BYTES) -> str:
    """Return the text of a file, or raise :class:`Faults`; never reads more than the limit."""
    name = str(path)
    try:
        if not path.exists():
            raise Faults([fault("missing-file", file=name)])
        if not path.is_file():
            raise Faults([fault("unreadable", file=name)])
        with path.open("rb") as stream:
            content = stream.read(largest_bytes + 1)
    except (OSError, ValueError) as error:  # ValueError: a path with a null character
        raise Faults([fault("unreadable", file=name)]) from error
    if len(content) > largest_bytes:
        raise Faults([fault("too-large", file=name, figures={"limit_mb": largest_bytes / 1e6})])
    try:
        return content.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        raise Faults([fault("not-utf8", file=name)]) from error


def _refuse_constant(_: str) -> NoReturn:
    raise _RefusedError(fault("not-finite"))


def _unique(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
    """Build an object and refuse a name that stands twice."""
    found: dict[str, Any] = {}
    for name, value in pairs:
        if name in found:
            raise _RefusedError(fault("repeated-name", field=name, figures={"name": name}))
        found[name] = value
    return found


def parse_json(text: str, *, file: str = "") -> Any:
    """Parse strict JSON: no NaN, no Infinity, no name twice in one object."""
    try:
        return json.loads(text, parse_constant=_refuse_constant, object_pairs_hook=_unique)
    except _RefusedError as error:
        found = error.reason
    except json.JSONDecodeError as error:
        found = fault("not-json", figures={"line": error.lineno, "column": error.colno})
    except RecursionError:
        found = fault("too-deep")
    except ValueError:  # a whole number with thousands of digits
        found = fault("not-a-number")
    raise Faults([Fault(file, found.field, found.phrase)])


def parse_toml(text: str, *, file: str = "") -> dict[str, Any]:
    """Parse TOML, which itself refuses a name that stands twice."""
    try:
        return tomllib.loads(text)
    except tomllib.TOMLDecodeError as error:
        found = _not_toml(error, file)
    except RecursionError:
        found = fault("too-deep", file=file)
    except ValueError:  # an impossible date or a whole number with thousands of digits
        found = fault("not-toml-at-all", file=file)
    raise Faults([found])


def _not_toml(error: tomllib.TOMLDecodeError, file: str) -> Fault:
    """Say where the text stops being TOML; the parser tells it at the end of its message, the end of the text apart."""
    place = re.search(r"\(at line (\d+), column (\d+)\)$", str(error))
    if place is None:
        return fault("not-toml-at-all", file=file)
    return fault("not-toml", file=file, figures={"line": int(place[1]), "column": int(place[2])})
