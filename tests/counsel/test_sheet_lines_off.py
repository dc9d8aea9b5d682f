"""Lines of the sheet that a shop switches off: they go, whatever keeps the wearer safe stays, and faults say why."""

from collections.abc import Iterator

import pytest

from advisor.counsel.care import CARE_TEXTS
from advisor.counsel.caution_texts import CAUTION_TEXTS
from advisor.counsel.compare import answer_of, compute
from advisor.counsel.faults import Faults
from advisor.counsel.phrases import Phrase
from advisor.counsel.sheet import Block, Sheet, care_sheet, choose, wearer_sheet, without_lines
from advisor.counsel.sheet_switches import MAY_BE_OFF, SWITCHES
from advisor.counsel.sheet_texts import HEADINGS, LINES
from advisor.counsel.stock import builtin_range, check_range, parse_range, range_to_toml
from advisor.counsel.visit import read_visit
from advisor.resources import resource_dir
from advisor.web.language import language

DEMO = sorted(resource_dir("demo_patients").glob("*.json"))
# By hand: lines without which somebody might come to harm, or believe too much.
SAFE = (
    *CAUTION_TEXTS,
    *(key for key in LINES if key.startswith("today-")),
    "first-drive", "first-keep-old", "first-power", "first-axis", "first-of-kind", "first-multifocal",
    "for-all", "for-far", "for-near", "for-desk", "for-far-and-near-line", "for-far-to-near",
    "wear-all-day", "wear-far", "wear-near", "wear-desk", "wear-bright",
    "coating-does-not", "coating-glare", "coating-colour", "coating-colour-varies",
    "may-see-second", "may-see-haze",
    "back-unclear", "back-sick", "back-second", "back-damage", "back-soon",
    "child-strap",
)  # fmt: skip


def sheets() -> Iterator[Sheet]:
    """The sheet of every demo wearer, and the page about care."""
    chosen = language("en")
    for path in DEMO:
        computed = compute(read_visit(path), builtin_range())
        answer = answer_of(computed, translator=chosen)
        index = choose(computed, number=None, answer=answer)
        yield wearer_sheet(computed, answer, index=index, price="€1", day=chosen.date)
    yield care_sheet(None)


def codes(sheet: Sheet) -> list[str]:
    return [line.code for block in sheet.blocks for line in block.lines]


def refused(*keys: str) -> list[str]:
    with pytest.raises(Faults) as caught:
        check_range({"shop": {"lines_off": list(keys)}})
    return caught.value.lines()


# --- the range file ---------------------------------------------------------------------------------------------------


@pytest.mark.parametrize("key", SAFE)
def test_a_caution_cannot_be_switched_off_and_the_sentence_says_so(key: str) -> None:
    (line,) = refused(key)
    assert line.startswith("shop.lines_off[0]: ")
    assert key in line
    assert line.endswith("cautions cannot be switched off.")


def test_every_line_either_may_be_off_or_is_named_as_safe() -> None:
    assert set(MAY_BE_OFF).isdisjoint(SAFE)
    assert set(MAY_BE_OFF) | set(SAFE) == {*LINES, *CARE_TEXTS, *CAUTION_TEXTS}
    assert len(MAY_BE_OFF) == len(set(MAY_BE_OFF))


def test_a_mistyped_line_is_refused_with_the_nearest_and_its_place() -> None:
    first, second = refused("soap", "soft-clothe", "qqqq")
    assert first == "shop.lines_off[1]: “soft-clothe” is no line of the wearer's sheet; did you mean “soft-cloth”?"
    assert second == "shop.lines_off[2]: “qqqq” is no line of the wearer's sheet."


def test_paper_and_paragraph_have_their_limits() -> None:
    with pytest.raises(Faults) as caught:
        check_range({"shop": {"paper": "A5", "paragraph": "x" * 601}})
    assert [line.partition(":")[0] for line in caught.value.lines()] == ["shop.paper", "shop.paragraph"]
    assert "at most 600 letters" in caught.value.lines()[1]
    assert check_range({"shop": {"paper": "letter", "paragraph": "x" * 600}}).shop.paper == "letter"


def test_the_shops_own_comes_back_from_its_range_file() -> None:
    shop = {"name": "A", "paragraph": "Come in.\nAlways.", "paper": "letter", "lines_off": ["soap", "chosen-price"]}
    stock = check_range({"shop": shop})
    assert parse_range(range_to_toml(stock)) == stock
    assert stock.shop.lines_off == ("soap", "chosen-price")


# --- the sheet --------------------------------------------------------------------------------------------------------


def test_lines_switched_off_are_gone_and_every_other_stays_in_its_place() -> None:
    off = {"soap", "chosen-price", "back-fit", "coating-smears"}
    seen = set()
    for sheet in sheets():
        before, after = codes(sheet), codes(without_lines(sheet, off))
        assert after == [code for code in before if code not in off]
        seen |= off.intersection(before)
    assert seen == off


def test_with_everything_off_that_may_be_the_cautions_and_the_signs_for_today_stay() -> None:
    for sheet in sheets():
        bare = without_lines(sheet, MAY_BE_OFF)
        assert codes(bare) == [code for code in codes(sheet) if code in SAFE]
        assert bare.urgent == sheet.urgent
        assert all(block.lines for block in bare.blocks)


def test_a_caution_stays_even_where_a_range_was_not_checked() -> None:
    for sheet in sheets():
        assert without_lines(sheet, SAFE) == sheet


def test_the_bars_go_with_the_line_they_draw() -> None:
    block = Block("why", "lines", (Phrase("mirrors-stated"), Phrase("passes")))
    sheet = Sheet("t", None, None, (block,), bars=(("a", 0.1),))
    assert without_lines(sheet, ["mirrors-stated"]).bars == ()
    assert without_lines(sheet, ["passes"]).bars == sheet.bars
    assert without_lines(sheet, ["mirrors-uncoated"]).bars == sheet.bars  # which this sheet does not hold


def test_each_switch_stands_under_the_heading_its_line_prints_under() -> None:
    assert list(SWITCHES) == [key for key in HEADINGS if key in SWITCHES]
    met = {(block.key, line.code) for sheet in sheets() for block in sheet.blocks for line in block.lines}
    table = {(heading, key) for heading, keys in SWITCHES.items() for key in keys}
    assert {pair for pair in met if pair[1] in MAY_BE_OFF} <= table
