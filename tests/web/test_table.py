import csv
import io
import unicodedata
from typing import Any

import pytest

from advisor.counsel.compare import compare
from advisor.counsel.comparison import Comparison
from advisor.counsel.form import SMALLER_BY_MM
from advisor.counsel.layout import ROWS
from advisor.counsel.stock import builtin_range
from advisor.counsel.visit import check_visit
from advisor.web.language import language
from advisor.web.table import CSV_HEAD, csv_rows, csv_text, harmless, one_line, shown_width, text_table

ENGLISH = language("en")
PAIR: dict[str, Any] = {"design": "single-vision", "material": "hard-resin-150", "coating": "bare"}


def answer(*options: dict[str, Any], left: float = -2.0, **visit: Any) -> Comparison:
    content = {"prescription": {"right": {"sphere": -2.0}, "left": {"sphere": left}}, "scenes": [], **visit}
    content["options"] = [{**PAIR, **option} for option in options] or [PAIR]
    return compare(check_visit(content), builtin_range(), translator=ENGLISH)


def table(comparison: Comparison, title: str = "Title") -> list[str]:
    return text_table(comparison, title=title, currency="EUR", language=ENGLISH).splitlines()


def line(lines: list[str], start: str) -> str:
    (found,) = (one for one in lines if one.startswith(start))
    return found


def test_columns_of_figures_end_below_each_other() -> None:
    lines = table(answer({}, {"coating": "broadband"}, {"coating": "blue-reflecting"}))
    rule = next(one for one in lines if set(one) == {"-"})
    assert len(line(lines, "price of the pair")) == len(rule)
    assert line(lines, "price of the pair").split()[-3:] == ["€80.00", "€150.00", "€160.00"]
    figures = [one for one in lines if one.endswith(" %")]
    assert {len(one) for one in figures} == {len(rule)}


def test_two_lenses_shown_alike_are_one_figure_and_others_two() -> None:
    assert "/" not in line(table(answer()), "thickest edge")
    assert line(table(answer(left=-5.0)), "thickest edge").count("/") == 1


def test_a_refused_option_has_dashes_and_its_reason_below() -> None:
    lines = table(answer({}, {"material": "crown-glass-152", "tint": 0.5}))
    assert line(lines, "light passed").endswith("–")
    assert "Option 2: Crown glass 1.52 is not sold with a tint." in lines


def test_a_caution_for_some_options_names_them_and_one_for_all_does_not() -> None:
    lines = table(answer({}, {"coating": "broadband"}, {"tint": 0.5, "coating": "broadband"}))
    assert line(lines, "Caution (3): The finished lens passes")
    assert line(lines, "Caution (2, 3): A coating adds no strength")
    assert line(lines, "Caution: An ordinary spectacle lens")


def test_an_unknown_price_is_a_dash() -> None:
    lines = table(answer({"material": {"n_d": 1.5, "abbe": 58, "density_g_cm3": 1.3}}))
    assert line(lines, "price of the pair").endswith("–")


def test_wide_letters_take_two_columns_and_accents_none() -> None:
    assert shown_width("眼鏡") == 4
    assert shown_width(unicodedata.normalize("NFD", "é")) == 1
    lines = table(answer({"material": {"label": "眼鏡", "n_d": 1.5, "abbe": 58, "density_g_cm3": 1.3}}, {}))
    head = next(one for one in lines if "眼鏡" in one)
    rule = next(one for one in lines if set(one) == {"-"})
    assert shown_width(head) == len(rule)


@pytest.mark.parametrize("sign", ["\n", "\r", "\x1b", "\x07", "\u202e", "\u2028", "\x9b"])
def test_no_sign_that_steers_a_terminal_is_printed(sign: str) -> None:
    assert one_line(f"a{sign}b") == "a\N{REPLACEMENT CHARACTER}b"
    lines = table(
        answer({"material": {"label": f"L{sign}X", "n_d": 1.5, "abbe": 58, "density_g_cm3": 1.3}}), f"T{sign}U"
    )
    assert lines[0] == "T\N{REPLACEMENT CHARACTER}U"
    assert not [one for one in lines if sign in one]


# OWASP, CSV injection
@pytest.mark.parametrize(
    ("cell", "written"),
    [("=1+1", "'=1+1"), ("+1+1", "'+1+1"), ("-1-x", "'-1-x"), ("@A1", "'@A1"), ("\tx", "'\tx"), ("\nx", "'\nx"),
     ("\uff1d1", "'\uff1d1"), ("a;=1+1", "a;'=1+1"), ("a; @x;-x", "a; '@x;'-x"), ("+1", "+1"), ("-4.25", "-4.25"),
     ("-1\n", "'-1\n"), ("A-117", "A-117"), ("", ""), ("a=1", "a=1"), ("'=1", "'=1"), (" =1+1", "' =1+1"),
     ('"=1+1', "'\"=1+1"), ("\ufeff\u00a0=1", "'\ufeff\u00a0=1"), ('a;"=1;', "a;\"'=1;"), ("a\t=1", "a\t'=1"),
     ("a\r\n=1;", "a\r\n'=1;"), ("a; b", "a; b"), (" a", " a"), ("4,25", "4,25"), ("-4,25", "-4,25")],
)  # fmt: skip
def test_a_text_cell_is_never_a_formula(cell: str, written: str) -> None:
    assert harmless(cell) == written


def test_rows_carry_the_keys_of_the_table_and_bare_numbers() -> None:
    rows = csv_rows(answer({}, {"coating": "broadband"}, reference='A, "1"'), file="a.json")
    read = list(csv.reader(io.StringIO(csv_text(rows), newline="")))
    assert read[0] == CSV_HEAD
    assert {row[1] for row in read[1:]} == {'A, "1"'}
    assert {row[2] for row in read[1:]} == {"1", "2"}
    assert {row[4] for row in read[1:]} <= {row.key for row in ROWS} | {"price"}
    by_name = {(row[2], row[3], row[4]): float(row[5]) for row in read[1:]}
    assert by_name["1", "both", "price"] == 80.0
    right = answer().options[0].right
    assert right is not None
    loss = right.luminous_reflectance.first_pass_loss
    assert by_name["1", "right", "first_pass_loss"] == pytest.approx(loss, rel=1e-12)


def test_the_head_is_written_once_where_asked_and_lines_end_as_the_standard_says() -> None:
    rows = csv_rows(answer(), file="a.json")
    assert csv_text(rows).startswith(",".join(CSV_HEAD) + "\r\n")  # RFC 4180
    assert not csv_text(rows, head=False).startswith(CSV_HEAD[0] + ",")


def test_a_refused_option_has_no_rows_of_figures() -> None:
    rows = csv_rows(answer({}, {"material": "crown-glass-152", "tint": 0.5}), file="a.json")
    assert {row[3] for row in rows if row[2] == 2} <= {"both"}


NIGHT = ["oncoming-headlamps-dark-road"]


def test_a_weak_ghost_is_one_part_in_many_and_never_nothing_per_cent() -> None:
    lines = table(answer({}, {"coating": "broadband"}, scenes=NIGHT))
    # Fresnel at n = 1.498: 0.0397 squared is 1 in 634; two digits are told.
    assert "1 in 630" in line(lines, "mirrored twice inside")
    assert "0.000" not in "\n".join(lines)


def test_the_second_image_stands_in_words_with_its_place() -> None:
    weak = {"right": {"sphere": -0.75}, "left": {"sphere": -0.75}}
    lines = table(answer({}, {"coating": "broadband"}, prescription=weak, scenes=NIGHT))
    rule = next(k for k, one in enumerate(lines) if one.startswith("second image "))
    words = " ".join(" ".join(lines[rule : rule + 5]).split())
    assert "second light" in words
    assert "beside the" in words
    width = len(next(one for one in lines if set(one) == {"-"}))
    assert all(len(one) <= width for one in lines[rule : rule + 5])
    assert not [one for one in table(answer()) if one.startswith("second image")]  # no scene, no words


def test_the_smaller_frame_has_rows_of_its_own() -> None:
    lines = table(answer(frame={"a_mm": 52, "b_mm": 36}))
    less = table(answer(frame={"a_mm": 48, "b_mm": 36 * 48 / 52}))  # the smaller frame laid out as the frame itself
    edge, weight = (line(lines, f"frame 4 mm smaller: {name}").split()[-2] for name in ("thickest edge", "weight"))
    assert edge == line(less, "thickest edge").split()[-2]
    assert weight == line(less, "weight of the lens").split()[-2]
    assert SMALLER_BY_MM == 4.0  # the label says so


def test_rows_say_what_they_are_measured_against() -> None:
    lines = table(answer({}))
    assert line(lines, "window over the eye behind it").endswith(" times")
    assert line(lines, "size of what is seen, against no glasses")


WORN = {
    "material": "hard-resin-150",
    "coating": "bare",
    "prescription": {"right": {"sphere": -1.5}, "left": {"sphere": -1.5}},
}


def test_the_worn_pair_has_the_last_column_and_no_price() -> None:
    lines = table(answer({}, {"coating": "broadband"}, worn_now=WORN))
    rule = next(one for one in lines if set(one) == {"-"})
    head = lines[2 : lines.index(rule)]
    assert head[0].rindex("Worn now: Hard resin") > head[0].rindex("2 Hard resin")
    assert line(lines, "price of the pair").split()[-3:] == ["\N{EURO SIGN}80.00", "\N{EURO SIGN}150.00", "\N{EN DASH}"]
    figures = line(lines, "first-pass loss")
    assert figures.split()[-6::2] == ["7.83", "0.64", "7.83"]  # bare faces of n 1.498 again: Fresnel, 1 - (1 - R)^2
    assert len(figures) == len(rule)
    # -1.50 against -2.00: the worn pair is the thinner one at the edge
    edges = [float(text) for text in line(lines, "thickest edge").split() if text[0].isdigit()]
    assert edges[2] < edges[0]
    (stated,) = (one for one in lines if one.startswith("Worn now: As single vision"))
    assert "its own prescription and today's fitting" in stated


def test_what_is_missing_of_the_worn_pair_is_dashes_and_a_sentence() -> None:
    lines = table(answer({}, worn_now={"coating": "broadband"}))
    assert "Worn now: Say the worn pair's material to see it beside." in lines
    assert line(lines, "thickest edge").endswith("\N{EN DASH}")
    lines = table(answer({}, worn_now={"material": "hard-resin-150"}))
    assert line(lines, "thickest edge").endswith(" mm")
    assert line(lines, "light passed").endswith("\N{EN DASH}")
    assert not [one for one in table(answer({})) if "Worn now" in one]


def test_rows_of_the_worn_pair_stand_last_under_a_name_of_their_own() -> None:
    rows = csv_rows(answer({}, worn_now=WORN), file="a.json")
    names = [row[2] for row in rows]
    assert set(names) == {1, "worn_now"}
    assert names == sorted(names, key=lambda name: name == "worn_now")
    worn = [row for row in rows if row[2] == "worn_now"]
    assert "price" not in {row[4] for row in worn}
    assert {row[4] for row in worn} == {row[4] for row in rows if row[2] == 1} - {"price"}
    assert {row[2] for row in csv_rows(answer({}), file="a.json")} == {1}
