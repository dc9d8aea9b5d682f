"""Bringing in a file from the command line: a visit made of a prescription, or a visit with a frame put into it."""

from pathlib import Path

from advisor.counsel.faults import Faults, fault
from advisor.counsel.files import LARGEST_BYTES
from advisor.counsel.frame_trace import FrameRecord, mirrored
from advisor.counsel.phrases import mark
from advisor.counsel.recognised import recognise
from advisor.counsel.visit import Frame, Visit
from advisor.errors import TwolightError
from advisor.web.brought import said
from advisor.web.language import Language


class BringInError(TwolightError):
    """A file that cannot be brought in as asked."""


NO_VISIT = mark("A frame record needs a visit to go into: give one with --into.")
NO_FRAME = mark("This is no frame record; leave --into and --mirror out.")
NO_ENTRY = mark("This file holds %(count)s prescriptions; there is no number %(entry)s.")


def _content(file: Path) -> bytes:
    """Return a file's bytes, one more than the limit at most, or raise Faults."""
    try:
        with file.open("rb") as stream:
            return stream.read(LARGEST_BYTES + 1)
    except FileNotFoundError as error:
        raise Faults([fault("missing-file", file=str(file))]) from error
    except (OSError, ValueError) as error:  # ValueError: a path with a null character
        raise Faults([fault("unreadable", file=str(file))]) from error


def brought_visit(
    file: Path, *, into: Visit | None, entry: int, mirror: bool, speaker: Language
) -> tuple[Visit, tuple[str, ...]]:
    """Return the visit and what is said about the file; ``entry`` counts from 1."""
    found = recognise(_content(file), file=str(file))
    if isinstance(found, FrameRecord):
        if into is None:
            raise BringInError(NO_VISIT)
        used = mirrored(found.frame) if mirror else found.frame
        return _with_frame(into, used), said(found.notes, speaker)
    if into is not None or mirror:
        raise BringInError(NO_FRAME)
    if entry > len(found):
        raise BringInError(NO_ENTRY, count=str(len(found)), entry=str(entry))
    chosen = found[entry - 1]
    if chosen.visit is None:
        raise Faults(chosen.faults)
    return chosen.visit, said(chosen.notes, speaker)


def _with_frame(visit: Visit, used: Frame) -> Visit:
    """Return the visit with a record's frame: what the record does not give stays, but for another frame's shape."""
    kept = {} if visit.frame is None else visit.frame.model_dump(exclude={"outline", "ed_mm"}, exclude_none=True)
    frame = Frame.model_validate(kept | used.model_dump(exclude_none=True))
    return visit.model_copy(update={"frame": frame})
