import re
from itertools import groupby
from pathlib import Path

import pytest
from babel.messages.pofile import read_po
from fontTools.ttLib import TTFont

from advisor.resources import resource_dir
from advisor.web.language import SOURCE_LANGUAGE, TRANSLATIONS, languages

FONTS = resource_dir("static") / "fonts"
SHEETS = sorted((resource_dir("static") / "css").glob("*.css"))
FACE = re.compile(r"@font-face\s*\{(.*?)\}", re.DOTALL)
# What the program prints: figures, the letters of the languages planned, signs of the trade, and the spaces and hyphens
# that number formats use.
SHOWN = (
    "0123456789+-−×÷±°≤≥≈½µμ%‰.,:;/()[]–—…“”‘’«»„¿¡€£$"
    + "\N{NO-BREAK SPACE}\N{NARROW NO-BREAK SPACE}\N{NON-BREAKING HYPHEN}"
)
LETTERS = "ABCXYZabcxyzéèêëçàâîïôûùœŒæßÄÖÜäöüñÑáíóúåøÅØąćęłńśźżŁčďěňřšťůžőűăâîșțğışİ"


def declared(sheet: Path) -> list[dict[str, str]]:
    faces = FACE.findall(sheet.read_text("utf-8"))
    return [dict(re.findall(r"([\w-]+)\s*:\s*([^;]+);", face)) for face in faces]


def key(font: TTFont) -> tuple[str, int, bool]:
    return font["name"].getBestFamilyName(), font["OS/2"].usWeightClass, bool(font["OS/2"].fsSelection & 1)


def opened(path: Path) -> TTFont:
    return TTFont(path, lazy=False)


def test_both_sheets_declare_faces() -> None:
    assert {sheet.name: len(declared(sheet)) for sheet in SHEETS if declared(sheet)} == {
        "fonts.css": 4,
        "print-fonts.css": 4,
    }


@pytest.mark.parametrize("sheet", SHEETS, ids=lambda sheet: sheet.name)
def test_no_two_faces_of_a_sheet_share_family_weight_and_style(sheet: Path) -> None:
    """Two files under one face print wrong letters while text extraction still reads right."""
    keys = [(face["font-family"], face["font-weight"], face["font-style"]) for face in declared(sheet)]
    assert len(set(keys)) == len(keys)


@pytest.mark.parametrize("sheet", SHEETS, ids=lambda sheet: sheet.name)
def test_every_face_is_one_file_that_is_what_the_sheet_says(sheet: Path) -> None:
    for face in declared(sheet):
        (name,) = re.findall(r'url\("\.\./fonts/([\w.-]+)"\)', face["src"])
        _, weight, italic = key(opened(FONTS / name))
        assert (str(weight), "italic" if italic else "normal") == (face["font-weight"], face["font-style"]), name


def test_no_two_files_of_a_kind_share_family_weight_and_style() -> None:
    for ending in ("ttf", "woff2"):
        keys = sorted(key(opened(path)) for path in FONTS.glob(f"*.{ending}"))
        assert len(keys) == 4
        assert [len(list(group)) for _, group in groupby(keys)] == [1, 1, 1, 1]


def test_every_font_file_is_declared_once() -> None:
    text = "".join(sheet.read_text("utf-8") for sheet in SHEETS)
    files = [path.name for path in FONTS.iterdir() if path.suffix in (".ttf", ".woff2")]
    assert {name: text.count(name) for name in files} == dict.fromkeys(files, 1)


@pytest.mark.parametrize("path", sorted(FONTS.glob("twolight-text-*.*")), ids=lambda path: path.name)
def test_the_font_has_a_shape_for_everything_we_print(path: Path) -> None:
    font = opened(path)
    shapes = font.getBestCmap()
    assert [letter for letter in SHOWN + LETTERS if ord(letter) not in shapes] == []
    blank = {
        shapes[ord(letter)] for letter in SHOWN + LETTERS if not font["glyf"][shapes[ord(letter)]].numberOfContours
    }
    spaces = {shapes[ord(letter)] for letter in SHOWN if letter.isspace()}
    assert blank == spaces


@pytest.mark.parametrize("code", [code for code in languages() if code != SOURCE_LANGUAGE])
def test_the_font_has_a_shape_for_every_letter_a_translation_adds(code: str) -> None:
    """Languages of another script bring a face of their own, see DEVELOPERS.md; formulas are the screen's."""
    shapes = {chr(number) for number in opened(FONTS / "twolight-text-400.ttf").getBestCmap()}
    with (TRANSLATIONS / code / "LC_MESSAGES" / "messages.po").open("rb") as stream:
        texts = [message for message in read_po(stream, locale=code) if message.id]
    assert set("".join(str(one.string) for one in texts)) - shapes - set("".join(str(one.id) for one in texts)) == set()


def test_letters_that_differ_have_shapes_that_differ() -> None:
    for path in FONTS.glob("twolight-text-*.ttf"):
        font = opened(path)
        shapes = font.getBestCmap()
        drawn = {letter: font["glyf"][shapes[ord(letter)]].getCoordinates(font["glyf"])[0] for letter in "0O1lI|5S8B6b"}
        assert len({str(list(points)) for points in drawn.values()}) == len(drawn)


def test_figures_can_be_set_in_columns() -> None:
    for path in FONTS.glob("twolight-text-*.ttf"):
        features = {record.FeatureTag for record in opened(path)["GSUB"].table.FeatureList.FeatureRecord}
        assert "tnum" in features


def test_the_licence_lies_beside_the_font_and_reserves_no_name() -> None:
    for name in ("OFL.txt", "OFL-hebrew.txt"):
        licence = (FONTS / name).read_text("utf-8")
        assert "SIL OPEN FONT LICENSE Version 1.1" in licence
        assert "with Reserved Font Name" not in licence
