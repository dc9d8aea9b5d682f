"""Files that come about whole or not at all: written beside their place under another name, and then put there.

Only this user may read them. Nothing is put beside the log of another database: SQLite would play it into the new file.
"""

import errno
import os
from collections.abc import Iterator
from contextlib import contextmanager, suppress
from pathlib import Path

from advisor.counsel.phrases import mark
from advisor.records.checking import FileError
from advisor.records.trouble import StoreFull

LOGS = ("-wal", "-journal")
_SIDES = (*LOGS, "-shm")


class FileExists(FileError):
    """There is a file of that name, and nobody said that it may go."""

    text = mark("There is a file %(file)s already; nothing was written. Choose another name, or say --replace.")


class FileInUse(FileError):
    """A program has the file open, or has not closed it properly."""

    text = mark("Another program is using the file %(file)s; nothing was written. Choose another name.")


class FileNotWritten(FileError):
    """The folder is missing or may not be written."""

    text = mark("The file %(file)s cannot be written; choose a folder that is there and may be written.")


@contextmanager
def writing(file: Path) -> Iterator[None]:
    """Turn the system's errors into sentences about the file that was to be written."""
    try:
        yield
    except FileExistsError as error:
        raise FileExists(file) from error
    except OSError as error:
        raise (StoreFull(str(file)) if error.errno == errno.ENOSPC else FileNotWritten(file)) from error


@contextmanager
def part_of(file: Path) -> Iterator[Path]:
    """Give an empty file beside the place of another; what is left of it in the end goes."""
    part = file.parent / f".{file.name}.{os.getpid()}.part"
    with writing(file):
        clear(part)
        os.close(os.open(part, os.O_RDWR | os.O_CREAT | os.O_EXCL, 0o600))
    try:
        yield part
    finally:
        with suppress(OSError):
            clear(part)


def clear(part: Path) -> None:
    """Remove a file and what SQLite keeps beside it; that it is not there is no error."""
    for name in ("", *_SIDES):
        part.with_name(part.name + name).unlink(missing_ok=True)


def refuse_what_is_there(file: Path, *, replace: bool) -> None:
    """Refuse a place that holds a file already, or a folder, or the log of a database."""
    if any(file.with_name(file.name + name).exists() for name in LOGS):
        raise FileInUse(file)
    if file.is_dir():
        raise FileNotWritten(file)
    if file.exists() and not replace:
        raise FileExists(file)


def put(part: Path, file: Path, *, replace: bool) -> None:
    """Put a finished part in its place; a file that came there meanwhile stays, unless it may be replaced."""
    refuse_what_is_there(file, replace=replace)
    with writing(file):
        if replace:
            part.replace(file)
        else:
            _put_beside(part, file)
        _settle(file.parent)


def _put_beside(part: Path, file: Path) -> None:
    """Give a part its name without ever overwriting: by a link, or, where a disk knows none, by a name held for it."""
    try:
        os.link(part, file)
    except FileExistsError:
        raise
    except OSError:
        os.close(os.open(file, os.O_WRONLY | os.O_CREAT | os.O_EXCL, 0o600))
        part.replace(file)
    else:
        part.unlink()


def _settle(folder: Path) -> None:
    """Make sure that the new name outlives a power cut; Windows sees to it by itself."""
    if os.name == "posix":
        handle = os.open(folder, os.O_RDONLY)
        try:
            os.fsync(handle)
        finally:
            os.close(handle)
