"""A written prescription is read, what is not understood is handed back, and talk is no prescription.

The ways of writing are common practice, no source.
"""

from collections.abc import Iterable

import pytest
from hypothesis import given
from hypothesis import strategies as st

from advisor.counsel.phrases import Phrase
from advisor.counsel.written_line import LINE_TEXTS, LONGEST, WrittenLine, read_line


def short(line: WrittenLine) -> str:
    """The fields in one line, their names cut short: ``left.pd_mm=31 right.sphere=-4.25``."""
    return in_order(f"{name.partition('.')[2]}={text}" for name, text in line.fields.items())


def in_order(words: Iterable[str]) -> str:
    return " ".join(sorted(words))


def read(text: str) -> WrittenLine:
    line = read_line(text)
    assert line is not None
    return line


TWO_PRISMS = "right.prism.0.amount=1.00 right.prism.0.base=in right.prism.1.amount=2 right.prism.1.base=up"
TORIC = "right.sphere=-4.25 right.cylinder=-1.00 right.axis=175"


@pytest.mark.parametrize(
    "written",
    [
        "R -4.25/-1.00x175",
        "R -4.25 -1.00 x 175",
        "RE: -4.25/-1.00 @175",
        "OD −4.25 −1.00 × 175°",
        "right eye -4.25 (-1.00) 175°",
        "Right: sph -4.25 cyl -1.00 axis 175",
        "r -4.25-1.00x175",
        "R.E. -4.25DS / -1.00DC x 175",
        "OD - 4.25 / - 1.00 ax 175",
        "R 4.25- / 1.00- x 175",
        "R\t-4.25\t-1.00\t175",
        "R -4.25, -1.00, 175",
        "R -4.25,-1.00,175",
        "R S -4.25 C -1.00 A 175",
        "R\n-4.25\n-1.00\n175",
    ],
)
def test_a_power_is_read_however_it_is_set_down(written: str) -> None:
    line = read(written)
    assert short(line) == in_order(TORIC.split())
    assert line.unread == ()
    assert line.notes == ()


@pytest.mark.parametrize(
    ("written", "wanted"),
    [
        ("R -4,25 -1,00 x 175", "right.sphere=-4,25 right.cylinder=-1,00 right.axis=175"),
        ("R -425/-100x175", "right.sphere=-425 right.cylinder=-100 right.axis=175"),
        ("OS plano", "left.sphere=plano"),
        ("L pl/-0.50x90", "left.sphere=pl left.cylinder=-0.50 left.axis=90"),
        ("L -3.75 ds", "left.sphere=-3.75"),
        ("left -3.75 sph", "left.sphere=-3.75"),
        ("OU -2.00", "right.sphere=-2.00 left.sphere=-2.00"),
        ("R/L -2.00", "right.sphere=-2.00 left.sphere=-2.00"),
        (
            "R -4.25 1.00 BI / 2 base up",
            f"right.sphere=-4.25 {TWO_PRISMS}",
        ),
        ("L -1.00 prism 1.5 out", "left.sphere=-1.00 left.prism.0.amount=1.5 left.prism.0.base=out"),
        ("L -1.00 2Δ BD", "left.sphere=-1.00 left.prism.0.amount=2 left.prism.0.base=down"),
        ("R -4.25 VD 12", "right.sphere=-4.25 vertex_mm=12"),
        ("R -4.25 vertex distance 13.5 mm", "right.sphere=-4.25 vertex_mm=13.5"),
        ("R -4.25 PD 31.5/31", "right.sphere=-4.25 right.pd_mm=31.5 left.pd_mm=31"),
        ("R -4.25 L +1.00 PD R 31.5 L 31", "right.sphere=-4.25 left.sphere=+1.00 right.pd_mm=31.5 left.pd_mm=31"),
        ("R -4.25 PD 31.5 mm", "right.sphere=-4.25 right.pd_mm=31.5"),
        ("R -4.25 near PD 30/29,5", "right.sphere=-4.25 right.near_pd_mm=30 left.near_pd_mm=29,5"),
        ("R -4.25 L -3.75 Add 1.50/1.75", "right.sphere=-4.25 left.sphere=-3.75 right.add=1.50 left.add=1.75"),
        ("R -4.25 L -3.75 add R +1.50 L +1.75", "right.sphere=-4.25 left.sphere=-3.75 right.add=+1.50 left.add=+1.75"),
    ],
)  # fmt: skip
def test_every_part_that_people_write_is_read(written: str, wanted: str) -> None:
    line = read(written)
    assert short(line) == in_order(wanted.split())
    assert line.unread == ()


@pytest.mark.parametrize(
    ("written", "adds", "notes"),
    [
        ("R -4.25/-1.00x175 Add 1.50  L -3.75", "right.add=1.50", ["line-add-one-eye"]),
        ("R -4.25 L -3.75 Add 1.50", "left.add=1.50", ["line-add-one-eye"]),
        ("R -4.25 Add 1.50 L -3.75 Add 1.75", "right.add=1.50 left.add=1.75", []),
        ("R -4.25\nL -3.75\nAdd 1.50", "right.add=1.50 left.add=1.50", ["line-add-both"]),
        ("R -4.25; L -3.75; Add 1.50", "right.add=1.50 left.add=1.50", ["line-add-both"]),
        ("R -4.25 L -3.75 both add 1.50", "right.add=1.50 left.add=1.50", []),
        ("R -4.25 L -3.75 add 1.50 OU", "right.add=1.50 left.add=1.50", []),
        ("R -4.25\nAdd 1.50\nL -3.75\nAdd 1.75", "right.add=1.50 left.add=1.75", []),
        ("R -4.25 Add 1.50", "right.add=1.50", []),
    ],
)
def test_an_add_goes_to_the_eye_it_stands_with_and_what_was_decided_is_said(
    written: str, adds: str, notes: list[str]
) -> None:
    line = read(written)
    assert in_order(part for part in short(line).split() if ".add=" in part) == in_order(adds.split())
    assert [note.code for note in line.notes] == notes


def test_one_pd_of_both_eyes_is_halved_and_that_is_said() -> None:
    line = read("R -4.25 L -3.75 PD 63")
    assert (line.fields["fitting.right.pd_mm"], line.fields["fitting.left.pd_mm"]) == ("31.5", "31.5")
    assert line.notes == (Phrase("line-pd-halved"),)


def test_a_power_without_a_sign_is_plus_and_that_is_said() -> None:
    line = read("R 4.25 -1.00 x 5")
    assert line.fields["prescription.right.sphere"] == "4.25"
    assert line.notes == (Phrase("line-no-sign"),)


@pytest.mark.parametrize(
    ("written", "wanted", "unread"),
    [
        ("Rx of Ada: R -4.25, thanks", "right.sphere=-4.25", ("Rx of Ada", "thanks")),
        ("R -4.25 was -3.75", "right.sphere=-4.25", ("was -3.75",)),
        ("R -4.25 L -2.00 2026-11-20", "right.sphere=-4.25 left.sphere=-2.00", ("2026-11-20",)),
        ("R -4.25 L -2.00 20.11.2026", "right.sphere=-4.25 left.sphere=-2.00", ("20.11.2026",)),
        ("R -4.25 L -2.00 tel 020-7946-0958", "right.sphere=-4.25 left.sphere=-2.00", ("tel 020-7946-0958",)),
        ("R -4.25 R -2.00", "right.sphere=-4.25", ("-2.00",)),
        ("R -4.25 -1.00 x 190", "right.sphere=-4.25 right.cylinder=-1.00", ("x 190",)),
        ("R -4.25 -1.00 2 base 90", "right.sphere=-4.25 right.cylinder=-1.00", ("2 base 90",)),
        ("R -4.25 prism 2", "right.sphere=-4.25", ("prism 2",)),
        ("R -4.25 L -1.00 PD 63/60", "right.sphere=-4.25 left.sphere=-1.00", ("PD 63/60",)),
        ("R -4.25 L -1.00 PD 40", "right.sphere=-4.25 left.sphere=-1.00", ("PD 40",)),
        ("R -4.25 L -31.00", "right.sphere=-4.25", ("-31.00",)),
        ("R -4.25 x 90", "right.sphere=-4.25", ("x 90",)),
        ("R -4.25 L 3", "right.sphere=-4.25", ("3",)),
        ("R -4.25 add -1.00", "right.sphere=-4.25", ("add -1.00",)),
        ("R +4.25 1.00 base in, 1 up, 2 BU 3 BI", f"right.sphere=+4.25 {TWO_PRISMS}", ("1 up", "3 BI")),
    ],
)  # fmt: skip
def test_what_is_not_understood_is_handed_back_and_never_guessed(
    written: str, wanted: str, unread: tuple[str, ...]
) -> None:
    line = read(written)
    assert short(line) == in_order(wanted.split())
    assert line.unread == unread


@pytest.mark.parametrize(
    "text",
    ["", "R", "-4.25", "R-117", "A-117", "L 203", "Ada Lovelace", "left 2.5 hours ago, right 3.5", "turn left", "OD 5",
     "Sph -4.25 Cyl -1.00", "R -4.25" + " " * LONGEST],
)  # fmt: skip
def test_text_without_an_eye_and_its_power_is_no_prescription(text: str) -> None:
    assert read_line(text) is None


@given(st.text(max_size=200))
def test_no_text_is_too_odd(text: str) -> None:
    read_line(text)


PIECES = st.sampled_from(
    ["R", "L", "OU", "-4.25", "+1,00", "425", "x", "175", "/", "\n", ";", "add", "PD", "63", "31.5", "near", "VD", "12",
     "BI", "base", "up", "prism", "sph", "cyl", "ds", "plano", "(", ")", "word", "mm", "°", "-", "both", "eye"]
)  # fmt: skip


@given(st.lists(PIECES, max_size=25).map(" ".join))
def test_every_word_and_number_is_either_read_or_handed_back(text: str) -> None:
    line = read_line(text)
    if line is not None:
        assert all(
            name.partition(".")[0] in ("prescription", "fitting") and value for name, value in line.fields.items()
        )
        assert {note.code for note in line.notes} <= set(LINE_TEXTS)
        told = {
            *line.fields.values(),
            *" ".join(line.unread).split(),
            *(["63"] if Phrase("line-pd-halved") in line.notes else []),
        }
        signless = {part.lstrip("+-") for part in told}
        assert {part.lstrip("+-") for part in text.split() if part[-1].isdigit()} <= signless


def quarters(least: int, most: int) -> st.SearchStrategy[str]:
    return st.integers(least, most).map(lambda quarter: f"{quarter / 4:+.2f}")


EYES = st.fixed_dictionaries(
    {"sphere": quarters(-100, 100)},
    optional={
        "cylinder": st.tuples(quarters(-20, -1), st.integers(1, 180).map(str)),
        "add": quarters(1, 14),
        "prism": st.tuples(st.sampled_from(["0.50", "1.25", "3"]), st.sampled_from(["in", "out", "up", "down"])),
    },
)
BASES = {"in": "BI", "out": "base out", "up": "BU", "down": "Base Down"}


@given(
    right=EYES,
    left=EYES,
    marks=st.sampled_from([("R", "L"), ("RE:", "LE:"), ("OD", "OS"), ("Right", "Left")]),
    cross=st.sampled_from(["x", " x ", "×", " @", " ax ", " axis "]),
    between=st.sampled_from([" ", "  ", "\n", "; ", " / ", "\t"]),
    comma=st.booleans(),
    minus=st.sampled_from(["-", "\N{MINUS SIGN}"]),
)
def test_a_written_prescription_reads_back_as_it_was(
    right: dict[str, object],
    left: dict[str, object],
    marks: tuple[str, str],
    cross: str,
    between: str,
    comma: bool,
    minus: str,
) -> None:
    wanted: dict[str, str] = {}
    lines = []
    for eye, mark, given_eye in (("right", marks[0], right), ("left", marks[1], left)):
        text, fields = written_eye(eye, given_eye, cross=cross)
        lines.append(f"{mark} {text}")
        wanted |= fields
    text = between.join(lines)
    if comma:
        text = text.replace(".", ",")
        wanted = {name: value.replace(".", ",") for name, value in wanted.items()}
    line = read(text.replace("-", minus))
    assert short(line) == in_order(f"{name}={value}" for name, value in wanted.items())
    assert line.unread == ()


def written_eye(eye: str, powers: dict[str, object], *, cross: str) -> tuple[str, dict[str, str]]:
    """One eye written in a line, and the fields that say the same."""
    sphere = str(powers["sphere"])
    parts, fields = [sphere], {f"{eye}.sphere": sphere}
    if isinstance(found := powers.get("cylinder"), tuple):
        cylinder, axis = found
        parts.append(f"/ {cylinder}{cross}{axis}")
        fields |= {f"{eye}.cylinder": cylinder, f"{eye}.axis": axis}
    if isinstance(found := powers.get("prism"), tuple):
        amount, base = found
        parts.append(f"{amount} {BASES[base]}")
        fields |= {f"{eye}.prism.0.amount": amount, f"{eye}.prism.0.base": base}
    if "add" in powers:
        parts.append(f"Add {powers['add']}")
        fields[f"{eye}.add"] = str(powers["add"])
    return " ".join(parts), fields
