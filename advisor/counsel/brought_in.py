"""What a file from elsewhere was read as: a visit to begin with, what was not read of it, and what is wrong with it."""

from dataclasses import dataclass

from advisor.counsel.faults import Fault
from advisor.counsel.phrases import Phrase
from advisor.counsel.visit import Visit


@dataclass(frozen=True)
class Brought:
    """One prescription or visit of a file; ``visit`` is None where its ``faults`` keep it from being used.

    ``place`` says where it stands in the file, ``notes`` are phrases of ``BROUGHT_TEXTS``.
    """

    visit: Visit | None
    notes: tuple[Phrase, ...] = ()
    faults: tuple[Fault, ...] = ()
    place: str = ""
