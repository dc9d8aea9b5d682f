"""Frame records after ISO 16284: lines of LABEL=value[;value], right before left, as frame tracers and labs write them.

Read are HBOX, VBOX, DBL and FED in millimetres, and traces: TRCFMT=format;points;E|U;R|L;kind, then radii in 0.01 mm as
R= over several lines, and angles in 0.01 degree as A= where the points are uneven (U). Control characters, packet
separators and labels that are not named here are passed over. A size of nothing counts as not given.
"""

import re
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field

from advisor.counsel.faults import Fault, Faults, fault
from advisor.counsel.files import LARGEST_BYTES
from advisor.counsel.prescription import EYES, Eye
from advisor.optics.outline import LEAST_POINTS

MOST_POINTS = 4000
SIDES: Mapping[str, Eye] = {"R": "right", "L": "left"}
# Label: whether it holds one value for each side, and the least and most that a frame can have, mm.
SIZES: Mapping[str, tuple[bool, float, float]] = {
    "HBOX": (True, 15, 90), "VBOX": (True, 10, 90), "FED": (True, 15, 130), "DBL": (False, 0, 50),
}  # fmt: skip

_LINE = re.compile(r"\s*([A-Za-z_][A-Za-z0-9_]*)\s*=(.*)", re.ASCII)
_NUMBER = re.compile(r"[+-]?(\d+(\.\d*)?|\.\d+)", re.ASCII)
_NO_TRACE, _AS_TEXT = "0", "1"


@dataclass
class RawTrace:
    """The trace of one side as written; ``uneven`` where its angles stand beside the radii."""

    eye: Eye
    points: int
    uneven: bool
    radii_mm: list[float] = field(default_factory=list)
    angles_deg: list[float] = field(default_factory=list)


@dataclass(frozen=True)
class RawRecord:
    """The sizes of a record by label and side, mm, and its traces, as written."""

    sizes_mm: Mapping[str, Mapping[Eye, float]]
    traces: Mapping[Eye, RawTrace]


def looks_like_a_record(content: bytes) -> bool:
    """Tell whether a file has a line that only a frame record has."""
    return any(label in (*SIZES, "TRCFMT") for label, _ in _lines(content))


def _lines(content: bytes) -> Iterator[tuple[str, str]]:
    """Yield the label and the value of every line; separators of packets end a line, other control characters go."""
    text = content.decode("ascii", "replace")
    for line in re.split(r"[\r\n\x1c-\x1f]+", text):
        match = _LINE.fullmatch("".join(sign for sign in line if sign.isprintable() or sign == "\t"))
        if match:
            yield match[1].upper(), match[2].strip()


def _values(text: str) -> list[str]:
    return [value.strip() for value in text.split(";")]


def _number(text: str) -> float | None:
    """Return a number of reasonable length; None for what is none."""
    return float(text) if len(text) <= 20 and _NUMBER.fullmatch(text) else None


class _Reader:
    """Reads line after line; what is wrong is collected, so that everything is told at once."""

    def __init__(self, file: str) -> None:
        self.file = file
        self.faults: list[Fault] = []
        self.sizes: dict[str, dict[Eye, float]] = {}
        self.traces: dict[Eye, RawTrace] = {}
        self._open: RawTrace | None = None

    def fault(self, code: str, name: str, **figures: float | str) -> None:
        """Note what is wrong, once for each place and reason."""
        found = fault(code, file=self.file, field=name, figures=figures)
        if found not in self.faults:
            self.faults.append(found)

    def take(self, label: str, text: str) -> None:
        """Read one line."""
        if label in SIZES:
            self._size(label, _values(text))
        elif label == "TRCFMT":
            self._open = self._trace(_values(text))
        elif label in ("R", "A") and self._open is not None:
            self._points(label, _values(text), self._open)

    def _size(self, label: str, values: list[str]) -> None:
        by_side, least, most = SIZES[label]
        given = dict(zip(EYES, values if by_side and len(values) > 1 else values[:1] * 2, strict=False))
        for eye, text in given.items():
            if text in ("", "?"):
                continue
            size = _number(text)
            if size is None:
                self.fault("not-a-number", label)
            elif size > 0 and not least <= size <= most:
                self.fault("at-least" if size < least else "at-most", label, limit=least if size < least else most)
            elif size > 0 and self.sizes.setdefault(label, {}).setdefault(eye, size) != size:
                self.fault("value-twice", label)

    def _trace(self, values: list[str]) -> RawTrace | None:
        """Begin a trace, or say why it cannot be read; its lines are then passed over."""
        if values[0] == _NO_TRACE:
            return None
        if values[0] != _AS_TEXT:
            code = "trace-format" if values[0].isascii() and values[0].isalnum() else "trace-head"
            self.fault(code, "TRCFMT", format=values[0][:10])
            return None
        head = [value.upper() for value in values[1:4]]
        if (
            len(head) < 3
            or not re.fullmatch(r"\d{1,6}", head[0], re.ASCII)
            or head[1] not in ("E", "U")
            or head[2] not in SIDES
        ):
            self.fault("trace-head", "TRCFMT")
            return None
        points, eye = int(head[0]), SIDES[head[2]]
        if not LEAST_POINTS <= points <= MOST_POINTS:
            few = points < LEAST_POINTS
            self.fault("at-least" if few else "at-most", "TRCFMT", limit=LEAST_POINTS if few else MOST_POINTS)
            return None
        if eye in self.traces:
            self.fault("trace-twice", "TRCFMT")
            return None
        self.traces[eye] = RawTrace(eye, points, head[1] == "U")
        return self.traces[eye]

    def _points(self, label: str, values: list[str], trace: RawTrace) -> None:
        held = trace.radii_mm if label == "R" else trace.angles_deg
        for text in values:
            number = _number(text) if text else None
            if text and number is None:
                self.fault("not-a-number", label)
            elif number is not None:
                held.append(number / 100.0)

    def counted(self) -> None:
        """Find a trace with more or fewer values than it announces."""
        for trace in self.traces.values():
            held = {"R": trace.radii_mm} | ({"A": trace.angles_deg} if trace.uneven else {})
            for label, values in held.items():
                if len(values) != trace.points:
                    self.fault("trace-count", label, points=trace.points, count=len(values))


def read_raw(content: bytes, *, file: str = "") -> RawRecord:
    """Read the lines of a frame record, or raise :class:`Faults` with everything that is wrong with them."""
    if len(content) > LARGEST_BYTES:
        raise Faults([fault("too-large", file=file, figures={"limit_mb": LARGEST_BYTES / 1e6})])
    reader = _Reader(file)
    for label, text in _lines(content):
        reader.take(label, text)
    reader.counted()
    if reader.faults:
        raise Faults(reader.faults)
    if not reader.sizes and not reader.traces:
        raise Faults([fault("not-a-frame-record", file=file)])
    return RawRecord(reader.sizes, reader.traces)


def plain_record(content: bytes) -> str:
    """Return the lines of a record that are read here, and no others: what else stands there concerns nobody here."""
    read = (*SIZES, "TRCFMT", "R", "A")
    return "".join(f"{label}={text}\n" for label, text in _lines(content) if label in read)
