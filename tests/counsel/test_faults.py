from pathlib import Path
from typing import ClassVar

import pytest

from advisor.counsel.faults import MORE, SENTENCES, Faults, fault, field_path, nearest_name, unknown_key
from advisor.counsel.files import parse_json, parse_toml, read_text
from advisor.errors import TwolightError
from advisor.optics.spectrum_input import SpectrumGap


def only_line(error: pytest.ExceptionInfo[Faults]) -> str:
    (line,) = error.value.lines()
    return line


def test_a_fault_is_one_line_of_file_field_and_sentence() -> None:
    one = fault("at-most", file="visit.json", field="prescription.right.sphere", figures={"limit": 30.0})
    assert one.line() == "visit.json: prescription.right.sphere: give 30 or less."


def test_parts_that_do_not_apply_are_left_out() -> None:
    assert fault("missing-file", file="visit.json").line() == "visit.json: there is no such file."
    assert fault("missing", field="wearer.name").line() == "wearer.name: this is missing; give a value."


def test_a_hostile_name_stays_on_one_printable_line() -> None:
    line = fault("repeated-name", file="a\nb", field="x\x1b[31m\ud800", figures={"name": "y" * 900}).line()
    assert line.isprintable()
    assert len(line) < 500
    line.encode("utf-8")


def test_five_faults_are_told_and_the_rest_counted() -> None:
    many = Faults(fault("missing", file="f", field=f"field{n}") for n in range(8))
    lines = many.lines()
    assert len(lines) == 6
    assert lines[4].startswith("f: field4: ")
    assert lines[5] == "and 3 more"
    assert str(many).splitlines() == lines
    assert isinstance(many, TwolightError)


def test_exactly_five_faults_need_no_count() -> None:
    assert len(Faults(fault("missing") for _ in range(5)).lines()) == 5


class _German:
    """A language of a few texts that writes a comma."""

    language = "de"
    texts: ClassVar = {
        SENTENCES["at-most"]: "höchstens %(limit)s.",
        MORE: "und %(count)s weitere",
        SENTENCES["spectrum-refused"]: "Spektrum abgelehnt: %(detail)s",
        SpectrumGap.text: "Zwischen %(from_nm)s und %(to_nm)s nm fehlt eine Zeile.",
    }

    def gettext(self, message: str, /) -> str:
        return str(self.texts[message])

    def number(self, value: float, *, digits: int, signed: bool = False) -> str:
        assert not signed
        return f"{value:.{digits}f}".replace(".", ",")


def test_sentences_are_translated_and_figures_written_as_the_language_does() -> None:
    many = Faults(fault("at-most", figures={"limit": 2.5}) for _ in range(7))
    assert many.lines(_German()) == ["höchstens 2,5."] * 5 + ["und 2 weitere"]


def test_a_sentence_within_a_sentence_is_translated_too() -> None:
    gap = SpectrumGap(from_nm=400.0, to_nm=412.5)
    one = fault("spectrum-refused", figures={"detail": gap.text, **gap.figures})
    assert one.line(_German()) == "Spektrum abgelehnt: Zwischen 400 und 412,5 nm fehlt eine Zeile."
    assert one.line() == f"the spectrum is refused: {gap}"


@pytest.mark.parametrize("code", SENTENCES)
def test_every_sentence_is_one_short_line_that_takes_its_figures(code: str) -> None:
    sentence = SENTENCES[code] % _AnyFigure()
    assert sentence.isprintable()
    assert len(sentence) < 120
    assert "%" not in sentence


class _AnyFigure(dict[str, str]):
    def __missing__(self, _: str) -> str:
        return "7"


@pytest.mark.parametrize(
    ("typed", "nearest"), [("sphare", "sphere"), ("Axis", "axis"), ("cyl", "cylinder"), ("zzzzzz", None)]
)
def test_the_nearest_name_is_offered_where_one_comes_near(typed: str, nearest: str | None) -> None:
    assert nearest_name(typed, names=["sphere", "cylinder", "axis", "add"]) == nearest


def test_an_unknown_key_is_named_with_its_nearest() -> None:
    line = unknown_key("brodband", keys=["bare", "broadband"], field="options[0].coating").line()
    assert line == "options[0].coating: “brodband” is not in the range; did you mean “broadband”?"


def test_a_place_is_written_without_the_marks_of_alternatives() -> None:
    assert field_path(("options", 1, "coating", "as:faces", "front", "as:key")) == "options[1].coating.front"


def test_a_missing_file_is_a_fault(tmp_path: Path) -> None:
    with pytest.raises(Faults) as error:
        read_text(tmp_path / "none.json")
    assert only_line(error).endswith("none.json: there is no such file.")


def test_a_folder_is_no_file(tmp_path: Path) -> None:
    with pytest.raises(Faults, match="cannot be read"):
        read_text(tmp_path)


def test_a_huge_file_is_refused_without_reading_it_all(tmp_path: Path) -> None:
    path = tmp_path / "huge.json"
    with path.open("wb") as stream:
        stream.truncate(3_000_000_000)  # sparse: takes no room on disk
    with pytest.raises(Faults, match="larger than 2 MB"):
        read_text(path)


def test_text_in_another_encoding_is_refused(tmp_path: Path) -> None:
    path = tmp_path / "latin.json"
    path.write_bytes('{"note": "é"}'.encode("latin-1"))
    with pytest.raises(Faults, match="UTF-8"):
        read_text(path)


def test_a_byte_order_mark_is_passed_over(tmp_path: Path) -> None:
    path = tmp_path / "bom.json"
    path.write_bytes(b"\xef\xbb\xbf{}")
    assert parse_json(read_text(path)) == {}


@pytest.mark.parametrize(
    ("text", "sentence"),
    [
        ('{"a": 1,}', "not JSON: line 1, column 9"),
        ("", "not JSON"),
        ('{"a": NaN}', "NaN and Infinity are refused"),
        ('{"a": -Infinity}', "NaN and Infinity are refused"),
        ('{"a": {"b": 1, "b": 2}}', "f: b: the name “b” stands twice"),
        ('{"a": ' + "9" * 5000 + "}", "write a number"),
        ("[" * 100_000, "nested too deeply"),
    ],
)
def test_what_json_readers_let_through_or_trip_over_is_a_fault(text: str, sentence: str) -> None:
    with pytest.raises(Faults) as error:
        parse_json(text, file="f")
    assert sentence in only_line(error)


@pytest.mark.parametrize("text", ["a = ", "a = 1\na = 2", "[x]\n[x]", "a = 1979-13-40", "a = " + "[" * 100_000])
def test_bad_toml_is_a_fault_of_one_line(text: str) -> None:
    with pytest.raises(Faults) as error:
        parse_toml(text, file="f")
    assert only_line(error).startswith("f: ")
