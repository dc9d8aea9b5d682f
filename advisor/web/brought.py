"""What the page "Bring in" shows of a file: each prescription with its powers, or a traced frame with its drawing."""

from dataclasses import dataclass

from advisor.counsel.brought_in import Brought
from advisor.counsel.brought_texts import BROUGHT_TEXTS
from advisor.counsel.faults import Faults
from advisor.counsel.frame_trace import FrameRecord
from advisor.counsel.phrases import Phrase, mark, say
from advisor.counsel.trace_drawing import TraceDrawing, trace_drawing
from advisor.counsel.visit import EyePrescription, Frame, visit_to_json
from advisor.optics.outline import outline_box
from advisor.web.labels import BASES
from advisor.web.language import Language

SIZES = (("a_mm", mark("box a")), ("b_mm", mark("box b")), ("dbl_mm", mark("DBL")), ("ed_mm", mark("ED")))


@dataclass(frozen=True)
class Card:
    """One prescription or visit: whose and when, its powers, and the visit to begin with where it can be used."""

    name: str
    written: str
    powers: tuple[tuple[str, ...], ...]
    notes: tuple[str, ...]
    faults: tuple[str, ...]
    visit_json: str


@dataclass(frozen=True)
class Traced:
    """A frame as it would be used, with its drawing and its sizes beside those of the trace."""

    drawing: TraceDrawing | None
    sizes: tuple[tuple[str, str, str], ...]
    points: tuple[tuple[str, int], ...]
    notes: tuple[str, ...]


def said(notes: tuple[Phrase, ...], speaker: Language) -> tuple[str, ...]:
    """Return notes as sentences."""
    return tuple(say(note, BROUGHT_TEXTS, speaker) for note in notes)


def card(brought: Brought, speaker: Language) -> Card:
    """Return what is shown of one prescription; of a bad one, its faults alone."""
    faults = tuple(Faults(brought.faults).lines(speaker))
    if brought.visit is None:
        return Card("", "", (), (), faults, "")
    visit = brought.visit
    written = visit.prescription.written
    eyes = (("right", visit.prescription.right), ("left", visit.prescription.left))
    return Card(
        (visit.wearer.name if visit.wearer else None) or "",
        speaker.date(written) if written else "",
        tuple((speaker.gettext(eye), *_powers(power, speaker)) for eye, power in eyes),
        said(brought.notes, speaker),
        faults,
        visit_to_json(visit),
    )


def _powers(eye: EyePrescription, speaker: Language) -> tuple[str, ...]:
    """Return sphere, cylinder, axis, add and prism as texts; what is not written is a dash."""

    def power(value: float | None, *, signed: bool = True) -> str:
        return "–" if value is None else speaker.number(value, digits=2, signed=signed)

    prisms = [f"{power(part.amount, signed=False)} {speaker.gettext(BASES[part.base])}" for part in eye.prism or ()]
    axis = "–" if eye.axis is None else speaker.number(eye.axis, digits=0 if eye.axis == round(eye.axis) else 1)
    return power(eye.sphere), power(eye.cylinder), axis, power(eye.add), "; ".join(prisms) or "–"


def traced(record: FrameRecord, frame: Frame, speaker: Language) -> Traced:
    """Return what is shown of a frame record; ``frame`` is the record's own or its mirror image."""
    return Traced(trace_drawing(frame), _sizes(record, speaker), _counts(record, speaker), said(record.notes, speaker))


def _counts(record: FrameRecord, speaker: Language) -> tuple[tuple[str, int], ...]:
    return tuple((speaker.gettext(eye), len(points)) for eye, points in record.traced.items())


def _sizes(record: FrameRecord, speaker: Language) -> tuple[tuple[str, str, str], ...]:
    """Return the name of each size, what the record gives, and what the trace measures."""
    boxes = [outline_box(points) for points in record.traced.values()]
    measured = {"a_mm": boxes[0][0], "b_mm": boxes[0][1]} if boxes else {}
    given = record.given_mm()

    def size(value: float | None) -> str:
        return "–" if value is None else speaker.number(value, digits=1)

    return tuple((speaker.gettext(words), size(given[name]), size(measured.get(name))) for name, words in SIZES)
