"""A prescription written in one line or several, read into the visit's fields; what is not understood is handed back.

The rules, all of them common practice, no source:

- An eye mark (R, RE, OD, right; L, LE, OS, left; OU, both) begins what is written of that eye: sphere, cylinder and
  axis, then add and prism in any order. Each figure is taken once; a second one of its kind is not read.
- A sphere has a sign, a decimal mark or the word "sphere" before it, or is "plano". A cylinder follows its sphere with
  nothing unknown between, or the word "cylinder". A power without a sign is plus, and that is said.
- An add belongs to the eye that it stands with. It belongs to both only where it says so ("both", OU), or where it
  stands once behind both eyes' powers and after a line break, a semicolon or an upright stroke; that is said. Behind
  the word, "1.50/1.75" and "R 1.50 L 1.75" are right and left.
- One PD from 42 to 80 mm is that of both eyes and is halved, which is said; up to 38 mm it is that of the eye it stands
  with; two, up to 38 mm each, are right and left. Anything else about it is not read.
- Text is a prescription where an eye has its sphere, a power has a sign or is "plano", and there are two such eyes, or
  a cylinder, or a decimal mark: "R-117" is somebody's reference, "left 2.5 hours ago" is talk.
"""

import re
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from itertools import groupby

from advisor.counsel.phrases import Phrase, mark
from advisor.counsel.prescription import EYES, Eye
from advisor.counsel.written_reader import Reader
from advisor.counsel.written_tokens import tokens_of

LONGEST = 2000

LINE_TEXTS: dict[str, str] = {
    "line-add-both": mark("The add stands once, behind both eyes: it is put in for both."),
    "line-add-one-eye": mark("The add stands with one eye only: it is put in for that eye alone."),
    "line-pd-halved": mark("The PD of both eyes together was halved: measure each eye."),
    "line-no-sign": mark("A power without a sign was read as plus."),
}


@dataclass(frozen=True)
class WrittenLine:
    """What a line says: texts by the visit's dotted paths, the pieces not read, and what should be looked at."""

    fields: Mapping[str, str]
    unread: tuple[str, ...] = ()
    notes: tuple[Phrase, ...] = ()

    def eyes_with(self, name: str) -> tuple[Eye, ...]:
        """Return the eyes for which the line gives this part of a prescription."""
        return tuple(eye for eye in EYES if f"prescription.{eye}.{name}" in self.fields)


def read_line(text: str) -> WrittenLine | None:
    """Read a written prescription, or return None where the text is none."""
    if len(text) > LONGEST:
        return None
    reader = Reader(tokens_of(text))
    reader.run()
    line = WrittenLine(reader.found, tuple(_unread(text, reader)))
    return WrittenLine(line.fields, line.unread, tuple(_notes(line, reader.said))) if _is_prescription(line) else None


def _is_prescription(line: WrittenLine) -> bool:
    spheres = [line.fields[f"prescription.{eye}.sphere"] for eye in line.eyes_with("sphere")]
    cylinders = [line.fields[f"prescription.{eye}.cylinder"] for eye in line.eyes_with("cylinder")]
    if not any(text.isalpha() or text[0] in "+-" for text in (*spheres, *cylinders)):
        return False
    return len(spheres) == len(EYES) or bool(cylinders) or any(re.search("[.,a-z]", text) for text in spheres)


def _notes(line: WrittenLine, said: set[str]) -> Iterator[Phrase]:
    """Yield what was decided and should be looked at."""
    if len(line.eyes_with("add")) == 1 and len(line.eyes_with("sphere")) == len(EYES):
        said = {*said, "line-add-one-eye"}
    yield from (Phrase(code) for code in LINE_TEXTS if code in said)


def _unread(text: str, reader: Reader) -> Iterator[str]:
    """Yield the pieces that were not read, each on one line."""
    for is_read, run in groupby(enumerate(reader.tokens), key=lambda part: part[0] in reader.read):
        tokens = [token for _, token in run]
        piece = "" if is_read else " ".join(text[tokens[0].start : tokens[-1].end].split()).strip(" /+&")
        if piece:
            yield piece
