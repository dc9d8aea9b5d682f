"""A frame from its record: sizes, and traces as outlines in the visit's convention.

From memory, and therefore shown to the optician before it is used for nasal and temporal: a trace begins at 3 o'clock
and runs anticlockwise as seen from in front, on both sides, its radii measured from the centre of the box. Seen so, the
nose lies to the right of the right lens and to the left of the left one. Every outline is checked against the record's
own box, and moved to the centre of its box.
"""

from collections.abc import Iterator, Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from advisor.counsel.faults import Fault, Faults, fault
from advisor.counsel.frame_record import RawRecord, RawTrace, read_raw
from advisor.counsel.phrases import Phrase
from advisor.counsel.prescription import EYES, Eye
from advisor.counsel.visit import Frame, Outline
from advisor.optics.outline import outline_box, traced_rim
from advisor.optics.rim import OutlineError, ed_fits_box

Points = NDArray[np.float64]

LEAST_RADIUS_MM, MOST_RADIUS_MM = 5.0, 50.0
NEAR_MM, APART_MM = 0.5, 1.0  # a trace and its record's box: from here on told, from here on refused
UNLIKE_MM = 1.0  # between one trace and the mirror image of the other
LABELS = {"a_mm": "HBOX", "b_mm": "VBOX", "dbl_mm": "DBL", "ed_mm": "FED"}
STEEPEST = 6.0  # change of radius over radius and angle: a rim that leaves its circle by more than 80 degrees


@dataclass(frozen=True)
class FrameRecord:
    """The frame to use, its outlines as traced, the record's own sizes by label and side, and what to look at."""

    frame: Frame
    traced: Mapping[Eye, Points]
    sizes_mm: Mapping[str, Mapping[Eye, float]]
    notes: tuple[Phrase, ...]

    def given_mm(self) -> dict[str, float | None]:
        """Return the record's own sizes by the frame's names, the right one where the sides differ."""
        return {name: _first(self.sizes_mm, label) for name, label in LABELS.items()}


def read_frame_record(content: bytes, *, file: str = "") -> FrameRecord:
    """Read a frame record, or raise :class:`Faults`."""
    raw = read_raw(content, file=file)
    faults = [found for trace in raw.traces.values() for found in _unsound(trace, file)]
    if faults:
        raise Faults(faults)
    as_written = {eye: _points(raw.traces[eye]) for eye in EYES if eye in raw.traces}
    centred = {eye: points - _centre(points) for eye, points in as_written.items()}
    faults = [found for eye, points in centred.items() for found in _unfit(eye, points, raw, file)]
    if faults:
        raise Faults(faults)
    frame, notes = _frame(raw, centred)
    shifts = [
        Phrase("trace-shifted", {"distance_mm": off}) for off in map(_off_centre, as_written.values()) if off > NEAR_MM
    ]
    return FrameRecord(frame, centred, raw.sizes_mm, (*shifts, *notes))


def mirrored(frame: Frame) -> Frame:
    """Return the frame with nasal and temporal exchanged in its outline."""
    if frame.outline is None:
        return frame
    sides = {eye: getattr(frame.outline, eye) for eye in EYES}
    turned = {eye: tuple((-x, y) for x, y in points) for eye, points in sides.items() if points is not None}
    return frame.model_copy(update={"outline": Outline(**turned)})


def _unsound(trace: RawTrace, file: str) -> Iterator[Fault]:
    """Find radii that no rim has, angles out of order, and jumps; the first of each kind is enough."""
    radii, angles = np.array(trace.radii_mm), _angles_deg(trace)
    outside = radii[(radii < LEAST_RADIUS_MM) | (radii > MOST_RADIUS_MM)]
    if outside.size:
        yield fault("trace-radius", file=file, field="R", figures={"radius_mm": float(outside[0])})
        return
    steps = np.diff(angles, append=angles[0] + 360.0)
    if np.any(steps <= 0.0):
        yield fault("trace-angles", file=file, field="A")
        return
    rise = np.abs(np.diff(radii, append=radii[0])) / (np.minimum(radii, np.roll(radii, -1)) * np.radians(steps))
    if np.any(rise > STEEPEST):
        yield fault("trace-jump", file=file, field="R", figures={"point": int(np.argmax(rise)) + 1})


def _angles_deg(trace: RawTrace) -> Points:
    even = np.arange(trace.points, dtype=np.float64) * (360.0 / trace.points)
    return np.array(trace.angles_deg, dtype=np.float64) if trace.uneven else even


def _points(trace: RawTrace) -> Points:
    """Return the points of a trace as a visit holds them, x towards the nose and y up, about the trace's own centre."""
    radius, angle = np.array(trace.radii_mm), np.radians(_angles_deg(trace))
    across = radius * np.cos(angle)
    return np.stack([across if trace.eye == "right" else -across, radius * np.sin(angle)], axis=-1)


def _centre(points: Points) -> Points:
    return np.array(outline_box(points)[2:])


def _off_centre(points: Points) -> float:
    return float(np.hypot(*_centre(points)))


def _unfit(eye: Eye, points: Points, raw: RawRecord, file: str) -> Iterator[Fault]:
    """Find an outline that does not go once round its box, or that the record's own box contradicts."""
    try:
        traced_rim(points)
    except OutlineError:
        yield fault("outline-order", file=file, field="R")
        return
    for label, traced_mm in zip(("HBOX", "VBOX"), outline_box(points)[:2], strict=True):
        given_mm = raw.sizes_mm.get(label, {}).get(eye)
        if given_mm is not None and abs(given_mm - traced_mm) > APART_MM:
            figures = {"given_mm": given_mm, "traced_mm": round(traced_mm, 1)}
            yield fault("trace-box", file=file, field=label, figures=figures)


def _frame(raw: RawRecord, traced: Mapping[Eye, Points]) -> tuple[Frame, list[Phrase]]:
    """Return the frame of a record and what is to be told about it."""
    notes = [note for eye in traced for note in _box_notes(eye, traced[eye], raw)] + list(_side_notes(raw, traced))
    boxes = [outline_box(points) for points in traced.values()]
    a_mm, b_mm, dbl_mm, ed_mm = (_first(raw.sizes_mm, label) for label in LABELS.values())
    if boxes and (a_mm is None or b_mm is None):
        notes.append(Phrase("box-from-trace"))
        a_mm, b_mm = (a_mm or round(boxes[0][0], 1), b_mm or round(boxes[0][1], 1))
    if ed_mm and a_mm and b_mm and not ed_fits_box(ed_mm, a_mm=a_mm, b_mm=b_mm):
        notes.append(Phrase("longest-left-out", {"ed_mm": ed_mm}))
        ed_mm = None
    outline = Outline(**{eye: np.round(points, 3).tolist() for eye, points in traced.items()}) if traced else None
    return Frame(a_mm=a_mm, b_mm=b_mm, dbl_mm=dbl_mm, ed_mm=ed_mm, outline=outline), notes


def _first(sizes_mm: Mapping[str, Mapping[Eye, float]], label: str) -> float | None:
    sizes = sizes_mm.get(label, {})
    return next((sizes[eye] for eye in EYES if eye in sizes), None)


def _box_notes(eye: Eye, points: Points, raw: RawRecord) -> Iterator[Phrase]:
    for label, traced_mm in zip(("HBOX", "VBOX"), outline_box(points)[:2], strict=True):
        given_mm = raw.sizes_mm.get(label, {}).get(eye)
        if given_mm is not None and abs(given_mm - traced_mm) > NEAR_MM:
            yield Phrase("box-near", {"box": label, "given_mm": given_mm, "traced_mm": traced_mm})


def _side_notes(raw: RawRecord, traced: Mapping[Eye, Points]) -> Iterator[Phrase]:
    """Tell where the sides differ, or where one of them, or both, are not traced."""
    for label in ("HBOX", "VBOX"):
        sizes = list(raw.sizes_mm.get(label, {}).values())
        if sizes and max(sizes) - min(sizes) > NEAR_MM:
            yield Phrase("box-sides-differ", {"difference_mm": max(sizes) - min(sizes)})
    if len(traced) < len(EYES):
        yield Phrase("one-side" if traced else "no-trace")
        return
    right, left = (np.hypot(*traced_rim(traced[eye]).T) for eye in EYES)  # radii at the same angles from the nose
    apart_mm = float(np.max(np.abs(right - left)))
    if apart_mm > UNLIKE_MM:
        yield Phrase("sides-unlike", {"difference_mm": apart_mm})
