"""What the commands share: sentences instead of tracebacks, the records and range meant, files written whole."""

import os
import sys
from collections.abc import Iterable
from contextlib import suppress
from pathlib import Path
from typing import TYPE_CHECKING, Any

import click

from advisor.errors import TwolightError

if TYPE_CHECKING:
    from advisor.counsel.stock import Range
    from advisor.records.store import Store


MANY_FILES = 5  # from here on a progress bar is shown
DATABASE = "advisor.database"  # where a command finds what was given before it


class Sentence(click.ClickException):
    """A problem told in its own words, without a traceback."""

    def show(self, file: Any = None) -> None:  # noqa: ARG002  # click's signature
        """Print the sentence alone on the error stream."""
        click.echo(self.format_message(), err=True)


class Group(click.Group):
    """Turns every error that has a sentence of its own into that sentence and exit status 1."""

    def invoke(self, ctx: click.Context) -> Any:
        """Run the command; what has a sentence of its own ends with status 1."""
        try:
            return super().invoke(ctx)
        except TwolightError as error:
            raise Sentence(str(error)) from error


def database_given() -> str | None:
    """Return the address of the database given, or named in the environment, whatever the command."""
    given: str | None = click.get_current_context().meta[DATABASE]
    return given


def records(data: Path | None) -> Path | str:
    """Return where the records lie: at the address of a database, else in the data folder."""
    from advisor.records.location import data_folder

    given = database_given()
    if given is None:
        return data_folder(data)
    from advisor.records.server import address_of

    address_of(given)  # anything else would be taken for a folder
    return given


def _opened(data: Path | None) -> "Store | None":
    """Open the records meant; None where nothing was ever kept in the data folder."""
    from advisor.records.location import database_file

    place = records(data)
    if isinstance(place, Path) and not database_file(place).exists():
        return None
    from advisor.records.store import Store

    return Store.open(place)


def stock_of(data: Path | None, file: Path | None = None) -> "Range":
    """Return the range of a file, else the shop's own, else the built-in one."""
    from advisor.counsel.stock import builtin_range, parse_range, read_range

    if file is not None:
        return read_range(file)
    store = _opened(data)
    if store is None:
        return builtin_range()
    with store:
        current = store.current_range()
    return builtin_range() if current is None else parse_range(current.toml)


def logo_of(data: Path | None, file: Path | None) -> bytes | None:
    """Return the shop's logo from the records; a range file given alone is of no shop here."""
    store = None if file is not None and data is None else _opened(data)
    if store is None:
        return None
    with store:
        return store.get_logo()


def bar(files: list[Path]) -> Iterable[Path]:
    """Yield the files, with a progress bar on the error stream if there are many and somebody watches."""
    if len(files) < MANY_FILES or not sys.stderr.isatty():
        return files
    from tqdm import tqdm

    return tqdm(files, unit="visit", file=sys.stderr)


def write_file(out: Path, content: bytes) -> None:
    """Write a file whole or not at all."""
    part = out.parent / f".{out.name}.{os.getpid()}.part"
    try:
        part.write_bytes(content)
        part.replace(out)
    except OSError as error:
        with suppress(OSError):
            part.unlink(missing_ok=True)
        raise Sentence(f"{out} cannot be written: {error.strerror}.") from error
