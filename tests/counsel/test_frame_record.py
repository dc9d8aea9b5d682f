"""Frame records after ISO 16284: sizes, traces, and what is refused."""

import math
from collections.abc import Callable

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from advisor.counsel.brought_texts import BROUGHT_TEXTS
from advisor.counsel.faults import Faults
from advisor.counsel.frame_record import MOST_POINTS
from advisor.counsel.frame_trace import FrameRecord, mirrored, read_frame_record
from advisor.counsel.phrases import say
from advisor.counsel.recognised import recognise
from advisor.counsel.trace_drawing import trace_drawing
from advisor.optics.outline import outline_box
from advisor.web.language import language

HALF_A, HALF_B = 26.0, 19.0
NASAL_CUT = 0.85  # the lower nasal quarter is drawn in, so that a mirrored lens differs


def ellipse_mm(turn: float) -> float:
    """The radius of an ellipse of 52 by 38 mm, by its own equation."""
    return HALF_A * HALF_B / math.hypot(HALF_B * math.cos(turn), HALF_A * math.sin(turn))


def shape_mm(turn: float) -> float:
    """The ellipse with its quarter between 270 and 360 degrees drawn in smoothly; the box stays 52 by 38 mm."""
    inside = math.sin(2 * (turn - 1.5 * math.pi)) ** 2 if turn > 1.5 * math.pi else 0.0
    return ellipse_mm(turn) * (1 - (1 - NASAL_CUT) * inside)


def even(points: int) -> list[float]:
    return [2 * math.pi * k / points for k in range(points)]


def trace(
    side: str = "R", points: int = 400, radius: Callable[[float], float] = shape_mm, *, from_temple: bool = False
) -> str:
    """A trace as a tracer writes it, from 3 o'clock anticlockwise seen from in front; the left one is mirrored."""
    turns = [(math.pi - turn) % (2 * math.pi) if side == "L" or from_temple else turn for turn in even(points)]
    hundredths = [str(round(100 * radius(turn))) for turn in turns]
    rows = [";".join(hundredths[k : k + 10]) for k in range(0, points, 10)]
    return f"TRCFMT=1;{points};E;{side};F\r\n" + "".join(f"R={row}\r\n" for row in rows)


SIZES = "JOB=17\r\nHBOX=52.00;52.00\r\nVBOX=38.00;38.00\r\nDBL=18.00\r\nFED=54.00;54.00\r\n"
WHOLE = SIZES + trace("R") + trace("L")


def read(text: str) -> FrameRecord:
    return read_frame_record(text.encode("latin-1"))


def refused(text: str) -> list[tuple[str, str]]:
    with pytest.raises(Faults) as caught:
        read(text)
    assert caught.value.lines()
    return [(one.field, one.phrase.code) for one in caught.value.faults]


def codes(text: str) -> list[str]:
    return [note.code for note in read(text).notes]


def test_sizes_and_both_outlines_are_read() -> None:
    record = read(WHOLE)
    frame = record.frame
    assert (frame.a_mm, frame.b_mm, frame.dbl_mm, frame.ed_mm) == (52.0, 38.0, 18.0, 54.0)
    assert record.notes == ()
    assert frame.outline is not None
    for points in (frame.outline.right, frame.outline.left):
        assert points is not None
        assert len(points) == 400
        width, height, x, y = outline_box(np.array(points))
        assert (width, height, x, y) == pytest.approx((52.0, 38.0, 0.0, 0.0), abs=0.03)  # written to 0.01 mm


def test_three_o_clock_of_the_right_lens_is_towards_the_nose_and_of_the_left_one_towards_the_temple() -> None:
    """From memory: both traces begin at 3 o'clock as seen from in front and run anticlockwise."""
    outline = read(WHOLE).frame.outline
    assert outline is not None
    assert outline.right is not None
    assert outline.left is not None
    assert outline.right[0] == pytest.approx((26.0, 0.0), abs=0.02)
    assert outline.right[100] == pytest.approx((0.0, 19.0), abs=0.02)
    assert outline.left[0] == pytest.approx((-26.0, 0.0), abs=0.02)
    assert outline.left[100] == pytest.approx((0.0, 19.0), abs=0.02)
    low_nasal_mm = NASAL_CUT * ellipse_mm(1.75 * math.pi)
    for points in (outline.right, outline.left):
        radii = {round(math.degrees(math.atan2(y, x))): math.hypot(x, y) for x, y in points}
        assert radii[-45] == pytest.approx(low_nasal_mm, abs=0.02)
        assert radii[-135] == pytest.approx(ellipse_mm(1.25 * math.pi), abs=0.02)


def test_uneven_angles_stand_beside_the_radii() -> None:
    turns = [2 * math.pi * (k / 60) ** 1.2 for k in range(60)]
    angles = ";".join(str(round(100 * math.degrees(turn))) for turn in turns)
    radii = ";".join(str(round(100 * shape_mm(turn))) for turn in turns)
    outline = read(f"{SIZES}TRCFMT=1;60;U;R;F\nR={radii}\nA={angles}\n").frame.outline
    assert outline is not None
    assert outline.right is not None
    expected = [(shape_mm(turn) * math.cos(turn), shape_mm(turn) * math.sin(turn)) for turn in turns]
    box = outline_box(np.array(expected))  # uneven points may miss the rim's outermost place
    assert np.array(outline.right) + np.array(box[2:]) == pytest.approx(np.array(expected), abs=0.03)


def test_lines_may_end_in_any_way_and_stand_in_a_packet() -> None:
    expected = read(WHOLE).frame
    packet = "\x02\x1cREQ=TRC\x1e" + WHOLE.replace("\r\n", "\x1e") + "CRC=12345\x1e\x1d\x03\x11"
    for text in (WHOLE.replace("\r\n", "\n"), WHOLE.replace("\r\n", "\r"), packet, WHOLE.replace("=", " = ").lower()):
        assert read(text).frame == expected
    assert read(WHOLE.replace("\r\nR=", ";\r\nR=") + "# made by hand\n;;\n\xff\xfe\n").frame == expected


def test_one_side_serves_both_and_one_value_serves_both_sides() -> None:
    for side in ("R", "L"):
        record = read("HBOX=52\nVBOX=38\n" + trace(side))
        outline = record.frame.outline
        assert outline is not None
        assert (outline.right is None, outline.left is None) == (side == "L", side == "R")
        assert [note.code for note in record.notes] == ["one-side"]


def test_unknown_sizes_are_not_given() -> None:
    frame = read("HBOX=?;51.5\nVBOX=;38\nDBL=0\nFED=?\nFTYP=3\n").frame
    assert (frame.a_mm, frame.b_mm, frame.dbl_mm, frame.ed_mm, frame.outline) == (51.5, 38.0, None, None, None)


def test_sizes_alone_are_read_with_a_note() -> None:
    assert codes(SIZES) == ["no-trace"]


def test_a_trace_alone_gives_the_box() -> None:
    record = read(trace("R") + trace("L"))
    assert (record.frame.a_mm, record.frame.b_mm) == (52.0, 38.0)
    assert [note.code for note in record.notes] == ["box-from-trace"]


@pytest.mark.parametrize(
    ("given_mm", "outcome"), [(52.4, None), (51.6, None), (52.6, "note"), (51.4, "note"), (53.1, "no"), (50.9, "no")]
)
def test_a_box_unlike_its_trace_is_told_from_half_a_millimetre_and_refused_from_one(
    given_mm: float, outcome: str | None
) -> None:
    text = WHOLE.replace("HBOX=52.00;52.00", f"HBOX={given_mm};{given_mm}")
    if outcome == "no":
        assert refused(text) == [("HBOX", "trace-box")] * 2
    else:
        assert ("box-near" in codes(text)) is (outcome == "note")


def test_a_trace_off_its_box_centre_is_moved_there() -> None:
    def aside(turn: float) -> float:  # a circle of 24 mm seen from a point 3 mm to the right of its centre
        return -3 * math.cos(turn) + math.sqrt(24**2 - (3 * math.sin(turn)) ** 2)

    record = read(trace("R", radius=aside))
    assert record.notes[0].code == "trace-shifted"
    assert record.notes[0].figures["distance_mm"] == pytest.approx(3.0, abs=0.01)
    assert np.hypot(*record.traced["right"].T) == pytest.approx(np.full(400, 24.0), abs=0.02)


def test_traces_that_are_no_mirror_images_are_told() -> None:
    other_way_round = trace("R").replace(";R;", ";L;")  # the left one begun at the nose
    assert codes(SIZES + trace("R") + other_way_round) == ["sides-unlike"]


def test_a_bent_frame_is_told() -> None:
    assert codes("HBOX=52;52.8\nVBOX=38;38\n" + trace("R")) == ["box-sides-differ", "one-side"]


def test_a_longest_diameter_that_does_not_fit_is_left_out() -> None:
    text = WHOLE.replace("FED=54.00;54.00", "FED=40;40")
    assert read(text).frame.ed_mm is None
    assert codes(text) == ["longest-left-out"]


@pytest.mark.parametrize(
    ("text", "found"),
    [
        ("", ("", "not-a-frame-record")),
        ("JOB=4\nFTYP=1\n", ("", "not-a-frame-record")),
        ("HBOX=wide;52\n", ("HBOX", "not-a-number")),
        ("HBOX=1e3;52\n", ("HBOX", "not-a-number")),
        ("HBOX=9;52\n", ("HBOX", "at-least")),
        ("VBOX=99;38\n", ("VBOX", "at-most")),
        ("HBOX=52;52\nHBOX=54;54\n", ("HBOX", "value-twice")),
        ("TRCFMT=2;400;E;R;F\n", ("TRCFMT", "trace-format")),
        ("TRCFMT=4;400;E;R;F\nR=\x01\x02\n", ("TRCFMT", "trace-format")),
        ("TRCFMT=\n", ("TRCFMT", "trace-head")),
        ("TRCFMT=1;400\n", ("TRCFMT", "trace-head")),
        ("TRCFMT=1;many;E;R;F\n", ("TRCFMT", "trace-head")),
        ("TRCFMT=1;400;X;R;F\n", ("TRCFMT", "trace-head")),
        ("TRCFMT=1;400;;R;F\n", ("TRCFMT", "trace-head")),
        ("TRCFMT=1;400;E;B;F\n", ("TRCFMT", "trace-head")),
        ("TRCFMT=1;35;E;R;F\n", ("TRCFMT", "at-least")),
        (f"TRCFMT=1;{MOST_POINTS + 1};E;R;F\n", ("TRCFMT", "at-most")),
        (trace("R") + trace("R"), ("TRCFMT", "trace-twice")),
        (trace("R").rpartition("R=")[0], ("R", "trace-count")),
        (trace("R") + "R=2500\n", ("R", "trace-count")),
        (trace("R").replace("2600", "x", 1), ("R", "not-a-number")),
        (trace("R", radius=lambda _: 4.9), ("R", "trace-radius")),
        (trace("R", radius=lambda _: 50.1), ("R", "trace-radius")),
        (trace("R", radius=lambda turn: 20 + 5 * (turn > 3)), ("R", "trace-jump")),
        (trace("R").replace(";E;", ";U;"), ("A", "trace-count")),
    ],
)  # fmt: skip
def test_a_record_that_cannot_be_used_is_told_in_a_sentence(text: str, found: tuple[str, str]) -> None:
    assert found in refused(text)


def test_angles_that_go_back_are_refused() -> None:
    radii, angles = ";".join(["2500"] * 40), [k * 900 for k in range(40)]
    for wrong in (angles[::-1], [*angles[:20], angles[18], *angles[21:]], [*angles[:-1], 36000], [0] * 40):
        text = f"TRCFMT=1;40;U;R;F\nR={radii}\nA={';'.join(map(str, wrong))}\n"
        assert refused(text) == [("A", "trace-angles")]


def test_no_trace_may_be_announced() -> None:
    assert codes(SIZES + "TRCFMT=0\nR=1;2;3\n") == ["no-trace"]


def test_a_mirrored_frame_has_nasal_and_temporal_exchanged() -> None:
    frame = read(WHOLE).frame
    turned = mirrored(frame)
    assert frame.outline is not None
    assert turned.outline is not None
    assert turned.outline.right == tuple((-x, y) for x, y in frame.outline.right or ())
    assert mirrored(turned) == frame
    assert mirrored(read(SIZES).frame) == read(SIZES).frame


def test_the_drawing_has_the_right_lens_on_the_left_and_the_nose_between() -> None:
    drawing = trace_drawing(read(WHOLE).frame)
    assert drawing is not None

    def xs(path: str) -> list[float]:
        return [float(pair.split(",")[0]) for pair in path.strip("MZ ").split(" ")]

    right, left, nose = xs(drawing.rims[0]), xs(drawing.rims[1]), xs(drawing.nose)
    assert max(right) < sum(nose) / 3 < min(left)
    assert min(left) - max(right) == pytest.approx(18.0, abs=0.05)
    assert max(right) - min(right) == pytest.approx(52.0, abs=0.05)
    assert drawing.width_mm == pytest.approx(2 * 52 + 18 + 4, abs=0.05)
    assert trace_drawing(read(SIZES).frame) is None


# --- random and broken records ---------------------------------------------------------------------------------------


def what_is_said(content: bytes) -> list[str]:
    """Read a file; return its faults, or the notes of a frame whose outline must be a sane one."""
    try:
        record = read_frame_record(content)
    except Faults as error:
        return error.lines()
    for points in record.traced.values():
        radius = np.hypot(*points.T)
        assert 0.0 < radius.min() <= radius.max() <= 100.0
        assert 36 <= len(points) <= MOST_POINTS
    return [say(note, BROUGHT_TEXTS, language("en")) for note in record.notes] or ["-"]


@given(st.binary(max_size=300))
def test_any_bytes_are_read_or_told(content: bytes) -> None:
    assert what_is_said(content)
    assert what_is_said(WHOLE.encode() + content)


@given(
    place=st.integers(0, len(WHOLE) - 1),
    length=st.integers(0, 400),
    instead=st.text("0123456789;=RA.EUL\r\n", max_size=9),
)
def test_a_broken_record_is_read_or_told(place: int, length: int, instead: str) -> None:
    assert what_is_said((WHOLE[:place] + instead + WHOLE[place + length :]).encode())


@given(st.lists(st.integers(-100, 9000) | st.integers(2400, 2600), min_size=36, max_size=60))
def test_a_random_trace_is_read_or_told(hundredths: list[int]) -> None:
    row = ";".join(map(str, hundredths))
    assert what_is_said(f"TRCFMT=1;{len(hundredths)};E;L;F\nR={row}\n".encode())


@given(st.lists(st.floats(20, 30), min_size=6, max_size=6), st.sampled_from([36, 60, 400, 1000]))
def test_a_smooth_rim_is_read_to_a_hundredth_of_a_millimetre(knots: list[float], points: int) -> None:
    def radius(turn: float) -> float:
        at = turn / (2 * math.pi) * 6
        k, u = int(at) % 6, at % 1
        weight = (1 - math.cos(math.pi * u)) / 2
        return knots[k] * (1 - weight) + knots[(k + 1) % 6] * weight

    record = read(trace("R", points, radius))
    expected = np.array([(radius(t) * math.cos(t), radius(t) * math.sin(t)) for t in even(points)])
    off = record.traced["right"] - expected
    assert np.ptp(off, axis=0) == pytest.approx([0.0, 0.0], abs=0.0101)  # the same move for all, each rounded once


def test_a_file_is_known_by_what_stands_in_it() -> None:
    assert isinstance(recognise(WHOLE.encode()), FrameRecord)
    visit = recognise('\ufeff {"prescription": {"right": {"sphere": -1}, "left": {"sphere": -1}}}'.encode())
    assert isinstance(visit, list)
    assert visit[0].visit is not None
    for other in (b"", b"<VisionPrescription/>", b"%PDF-1.7", b"a=1\nb=2", b'{"a": 1}', b"[1]"):
        with pytest.raises(Faults) as caught:
            recognise(other)
        assert [one.phrase.code for one in caught.value.faults] == ["not-brought"]
    with pytest.raises(Faults, match="larger than 2 MB"):
        recognise(b" " * 2_000_001)
