"""The wearer's sheet: its figures are the comparison's, its words are plain, and it promises nothing."""

import datetime as dt
import json
import re
from collections.abc import Iterator
from functools import cache
from pathlib import Path
from typing import Any

import pytest

from advisor.counsel.caution_texts import CAUTION_TEXTS
from advisor.counsel.compare import compare
from advisor.counsel.comparison import Comparison
from advisor.counsel.sheet import SHEET_TEXTS, NoSuchOption
from advisor.counsel.sheet_texts import HEADINGS
from advisor.counsel.stock import builtin_range
from advisor.counsel.visit import Visit, check_visit, read_visit
from advisor.resources import resource_dir
from advisor.web.language import language
from advisor.web.sheet_page import wearer_sheet
from tests.sheet_text import Text, read

TODAY = dt.date(2026, 12, 1)
DEMO = sorted(resource_dir("demo_patients").glob("*.json"))
STOCK = builtin_range()


@cache
def visit_of(path: Path) -> Visit:
    return read_visit(path)


@cache
def answer_of(path: Path) -> Comparison:
    return compare(visit_of(path), STOCK, translator=language("en"), today=TODAY)


@cache
def sheet_of(path: Path, number: int) -> Text:
    return read(wearer_sheet(visit_of(path), STOCK, number=number, code="en", today=TODAY))


def every_sheet() -> list[Any]:
    """Every demo wearer with every option that can be made; options count from 1."""
    return [
        pytest.param(path, option.index, id=f"{path.stem}-{option.index + 1}")
        for path in DEMO
        for option in answer_of(path).options
        if not option.refused
    ]


SHEETS = every_sheet()


@cache
def whole(path: Path) -> dict[str, Any]:
    """The answer as another program would read it: from JSON, with no help from the program."""
    content: dict[str, Any] = json.loads(answer_of(path).model_dump_json(exclude_unset=True))
    return content


def plain(path: Path, index: int) -> dict[str, Any]:
    option: dict[str, Any] = whole(path)["options"][index]
    return option


def size_line(visit: Visit, option: dict[str, Any], *, design: str) -> str | None:
    """What a second comparison, of the worn pair alone, says of the size of what is seen.

    The worn pair is taken to be of the design that is laid out first.
    """
    worn = visit.worn_now
    if worn is None or worn.prescription is None or worn.material is None:
        return None
    pair: dict[str, Any] = {"design": design, "material": worn.material}
    if worn.front_power_d is not None:
        pair["front_power_d"] = worn.front_power_d
    content = visit.model_dump(mode="json", by_alias=True, exclude_none=True)
    content["prescription"] = worn.prescription.model_dump(mode="json", by_alias=True, exclude_none=True)
    content |= {"options": [pair], "scenes": [], "ordered": 0, "baseline": 0}
    if worn.fitting is not None:
        content["fitting"] = worn.fitting.model_dump(mode="json", by_alias=True, exclude_none=True)
    old = compare(check_visit(content), STOCK, translator=language("en"), with_advice=False, today=TODAY).options[0]
    changes = [
        100 * ((100 + option[eye]["magnification_percent"]) / (100 + (getattr(old, eye).magnification_percent)) - 1)
        for eye in ("right", "left")
    ]
    most = max(changes, key=abs)
    if abs(most) < 1:  # about the least difference of size that people speak of
        return None
    return f"Things may look about {abs(most):.1f} % {'bigger' if most > 0 else 'smaller'} than in your old pair."


def two_figures(parts: float) -> str:
    """A count to two figures, thousands parted."""
    return f"{int(float(f'{parts:.1e}')):,}"


def is_coated(option: dict[str, Any]) -> bool:
    films = {coating.key for coating in STOCK.coating if coating.layers != ()}
    return bool(films & set(option["coating"].values()))


def expected_lines(option: dict[str, Any]) -> Iterator[str]:
    """Say again, from the JSON alone, every sentence with a figure that is on every sheet."""
    eye = option["right"]
    mirrors, uncoated = eye["luminous_reflectance"], eye["uncoated"]
    if not is_coated(option):
        yield f"These lenses mirror away about {100 * mirrors['whole_lens']:.1f} % of the light."
    else:
        low, _, high = (f"{100 * part:.1f}" for part in mirrors["as_made"]["whole_lens"])
        bare = f"{100 * uncoated['whole_lens']:.1f} %."
        against = (
            f"With a hard coat only it is {bare}" if uncoated["hard_coat_only"] else f"Bare lenses mirror away {bare}"
        )
        yield f"Your lenses mirror away {low} to {high} % of the light. {against}"
    if option["tint"] is not None:
        share = 100 * eye["luminous_transmittance"]
        yield f"The tinted lens lets about {share:.1f} % of the light through."
    if option["price"] is not None:
        yield f"Price of the pair of lenses: €{option['price']:,.2f}"
    coatings = [STOCK.coating_of(key) for key in option["coating"].values()]
    months = [coating.warranty_months for coating in coatings if coating.warranty_months]
    if months:
        yield f"Warranty on the coating, in months: {min(months)}"


def second_image_line(option: dict[str, Any]) -> str:
    """Say again, from the JSON alone, how strong the twice-mirrored image is."""
    eye, coated = option["right"], is_coated(option)
    uncoated, image = eye["uncoated"], eye["second_image"]
    twice = "Light mirrored twice inside a lens makes a second image"
    now = 1 / (image["as_made"][1] if image["as_made"] else image["strength"])
    before = 1 / uncoated["second_image"]
    if coated and now <= 10_000:
        parts = f"{two_figures(now)} of the light, not 1 in {two_figures(before)}"
        return f"{twice}. Yours has at most 1 part in {parts}."
    if coated and before <= 5_000:
        return f"{twice}. Yours has less than 1 part in 10,000 of the light, not 1 in {two_figures(before)}."
    if now <= 10_000:
        return f"{twice}: here about 1 part in {two_figures(now)} of the light."
    return f"{twice}. Here it has less than 1 part in 10,000 of the light."


def day_line(visit: Visit) -> str:
    """Say again when to come back: two weeks on, or three months on for a child's fit (common practice, no source)."""
    day = visit.date or TODAY
    if visit.daily_life is not None and visit.daily_life.child == "yes":
        assert (day.month, day.day) == (11, 26)  # the one child's visit: 26 November 2026
        again = "Please have the fit checked around 26 February 2027, and then every 3 months."
        return f"{again} We adjust them for free."
    day += dt.timedelta(days=14)
    return f"Please come back around {day.day} {day:%B %Y}. We check how they sit, and we adjust them for free."


@pytest.mark.parametrize(("path", "index"), SHEETS)
def test_every_figure_is_the_comparisons(path: Path, index: int) -> None:
    sheet = sheet_of(path, index + 1)
    lines = [line for found in sheet.sections.values() for line in found]
    expected = [*expected_lines(plain(path, index)), day_line(visit_of(path))]
    size = size_line(visit_of(path), plain(path, index), design=plain(path, 0)["design"])
    if size is not None:
        expected.append(size)
    why = sheet.sections["What that means for you"]
    if any("makes a second image" in line for line in why):
        expected.append(second_image_line(plain(path, index)))
    else:  # three facts come before it
        assert len(why) + (size is not None) == 3
    for sentence in expected:
        assert lines.count(sentence) == 1, sentence
    # and no other line holds a number, but for labels of the shop and the fixed words of care
    free = {text.replace("%%", "%") for text in SHEET_TEXTS.values() if "%(" not in text}
    labels = {item.label for part in (STOCK.material, STOCK.coating, STOCK.tint) for item in part if item.label}
    for line in lines:
        if line not in expected and line not in free and not any(label in line for label in labels):
            assert not re.search(r"\d", line), line


@pytest.mark.parametrize(("path", "index"), SHEETS)
def test_a_bar_is_as_long_as_its_figure(path: Path, index: int) -> None:
    html = wearer_sheet(visit_of(path), STOCK, number=index + 1, code="en", today=TODAY)
    bars = re.findall(r'<title>[^<]*: ([\d.]+)\s%</title><rect [^>]*width="([\d.]+)"', html)
    eye = plain(path, index)["right"]
    mirrors = eye["luminous_reflectance"]
    if mirrors["as_made"]["whole_lens"] is None:  # no film to compare with: where the light goes
        shares = [eye["luminous_transmittance"], mirrors["whole_lens"]]
    else:
        shares = [eye["uncoated"]["whole_lens"], mirrors["as_made"]["whole_lens"][2]]
    assert [text for text, _ in bars] == [f"{100 * share:.1f}" for share in shares]
    lengths = [float(length) for _, length in bars]
    assert lengths[1] / lengths[0] == pytest.approx(shares[1] / shares[0], abs=0.001)  # one scale
    assert max(lengths) <= 100  # drawing units


# --- ghosts -----------------------------------------------------------------------------------------------------------

GHOSTS = re.compile(r"second(, fainter)? light beside|haze|second image of a lamp|behind you")


@pytest.mark.parametrize(("path", "index"), SHEETS)
def test_at_most_two_sentences_tell_of_ghosts_and_each_says_may(path: Path, index: int) -> None:
    lines = sheet_of(path, index + 1).sections["What that means for you"]
    told = [line for line in lines if GHOSTS.search(line)]
    assert len(told) <= 2
    for line in told:
        assert re.search(r"\b[Yy]ou may\b", line), line
    assert "you will" not in sheet_of(path, index + 1).text.lower()


def right_and_left(option: dict[str, Any]) -> Iterator[dict[str, Any]]:
    yield from (option["right"], option["left"])


@pytest.mark.parametrize(("path", "index"), SHEETS)
def test_a_second_light_or_a_haze_is_told_only_where_it_was_computed(path: Path, index: int) -> None:
    option = plain(path, index)
    ghosts = [ghost for eye in right_and_left(option) for ghost in eye["ghosts"]]
    # by day or on a stage the threshold model is past its range, and no sentence rests on it
    inner = [ghost for ghost in ghosts if ghost["path"] == "ahead-inner" and not ghost["past_range"]]
    text = " ".join(sheet_of(path, index + 1).sections["What that means for you"])
    noticed = [g for g in inner if g["verdict"] in ("only if looked for", "noticeable", "plain")]
    if "a second, fainter light beside a lamp" in text:
        assert any(not ghost["haze"] for ghost in noticed)
    if "haze" in text:
        assert any(ghost["haze"] for ghost in noticed)
    if "may never notice" in text:
        assert inner
        assert noticed == []
    if "behind you" in text:
        assert any(
            g["contrast"] >= 0.02 for eye in right_and_left(option) for g in eye["ghosts"] if "behind" in g["path"]
        )


# --- cautions ---------------------------------------------------------------------------------------------------------

SAID_AMONG_THE_COATING = {"coating-adds-no-strength", "not-promise-none", "blue-film-no-relief"}


@pytest.mark.parametrize(("path", "index"), SHEETS)
def test_the_cautions_are_exactly_those_that_apply_and_have_words_for_a_wearer(path: Path, index: int) -> None:
    sheet, advice = sheet_of(path, index + 1), answer_of(path).advice
    assert advice is not None
    apply = {caution.key for caution in advice.cautions if index in caution.options}
    said = [*sheet.sections.get("What they are not for", []), *sheet.sections.get("Please note", [])]
    words = {CAUTION_TEXTS[key].sheet for key in apply - SAID_AMONG_THE_COATING} - {""}
    assert sorted(said) == sorted(words)
    for line in said:
        assert "%" not in line
    coating = " ".join(sheet.sections["The coating, and what stays"])
    assert ("Trials found no relief" in coating) is ("blue-film-no-relief" in apply)
    if apply & SAID_AMONG_THE_COATING:
        assert "It does not stop all reflections." in coating
        assert "It does not make the lens stronger." in coating


@pytest.mark.parametrize(("path", "index"), SHEETS)
def test_the_sheet_has_its_parts_in_order(path: Path, index: int) -> None:
    found = list(sheet_of(path, index + 1).sections)
    wanted = [heading for heading in HEADINGS.values() if heading in found]
    assert found == wanted
    must = {"for", "not-for", "chosen", "why", "coating", "do", "dont", "first-days", "come-back", "today"}
    assert {HEADINGS[key] for key in must} <= set(found)
    assert found[-1] == "See an eye doctor today for any of these"


# --- what is never said -----------------------------------------------------------------------------------------------


@pytest.mark.parametrize(("path", "index"), SHEETS)
def test_no_note_no_other_price_and_no_working_figure_is_printed(path: Path, index: int) -> None:
    text, visit, answer = sheet_of(path, index + 1).text, visit_of(path), answer_of(path)
    secret = [
        visit.note,
        visit.worn_now.disliked if visit.worn_now else None,
        visit.worn_now.liked if visit.worn_now else None,
    ]
    for words in secret:
        assert not words or words not in text
    own = answer.options[index].price
    for option in answer.options:
        if option.price is not None and option.price != own:
            assert f"€{option.price:,.2f}" not in text
    assert "visibility" not in text.lower()
    assert "cd/m" not in text
    assert "dioptre" not in text


def test_hostile_text_stays_text() -> None:
    content = visit_of(DEMO[0]).model_dump(mode="json", by_alias=True, exclude_none=True)
    content["wearer"]["name"] = '<script>alert("1")</script>'
    content["reference"] = "<img src=x onerror=alert(2)>"
    content["note"] = "<b>secret</b>"
    shop = STOCK.shop.model_copy(update={"name": "<iframe src='//evil.example'>", "contact": "{{ 7*7 }} %(x)s & <i>"})
    material = STOCK.material[1].model_copy(update={"label": "</title><svg onload=alert(3)> 100 %"})
    assert material.key == "hard-resin-150"
    others = (STOCK.material[0], material, *STOCK.material[2:])
    stock = STOCK.model_copy(update={"shop": shop, "material": others})
    html = wearer_sheet(check_visit(content), stock, code="en", today=TODAY)
    for tag in ("<script", "<img", "<b>", "<iframe", "<i>", "<svg onload", "49 "):
        assert tag not in html
    text = read(html).text
    assert '<script>alert("1")</script>' in text
    assert "{{ 7*7 }} %(x)s & <i>" in text
    assert "Material: </title><svg onload=alert(3)> 100 %" in text
    assert "secret" not in text


# --- which option -----------------------------------------------------------------------------------------------------

PAIR: dict[str, Any] = {
    "prescription": {"right": {"sphere": -2.0}, "left": {"sphere": -2.0}},
    "options": [
        {"design": "single-vision", "material": "hard-resin-150"},
        {"design": "single-vision", "material": "hard-resin-150", "front_power_d": 30.0},
        {"design": "single-vision", "material": "thiourethane-160", "coating": "broadband"},
    ],
    "scenes": [],
}


def sheet(number: int | None = None, **more: Any) -> str:
    return wearer_sheet(check_visit(PAIR | more), STOCK, number=number, code="en", today=TODAY)


@pytest.mark.parametrize("number", [4, 99])
def test_an_option_out_of_range_is_refused_in_a_sentence(number: int) -> None:
    with pytest.raises(NoSuchOption, match=f"There is no option {number}; 3 are laid out."):
        sheet(number)


def test_a_refused_option_is_refused_in_a_sentence() -> None:
    with pytest.raises(NoSuchOption, match="cannot be made, so there is nothing to print"):
        sheet(2)
    with pytest.raises(NoSuchOption, match="cannot be made"):
        sheet(ordered=1)
    with pytest.raises(NoSuchOption, match="cannot be made"):
        wearer_sheet(check_visit(PAIR | {"options": PAIR["options"][1:2]}), STOCK, code="en", today=TODAY)


def test_what_was_ordered_or_asked_for_is_printed() -> None:
    assert "Material: Hard resin 1.50" in sheet(ordered=0)
    assert "Material: Thiourethane 1.60" in sheet(ordered=2)
    assert "Material: Hard resin 1.50" in sheet(1, ordered=2)  # the number asked for goes before


def test_else_what_is_recommended_or_ranked_first_is_printed() -> None:
    advice = compare(check_visit(PAIR), STOCK, translator=language("en"), today=TODAY).advice
    assert advice is not None
    best = getattr(advice.recommended, "index", None)
    first = (advice.ranking or [2])[0] if best is None else best
    assert first in (0, 2)  # 1 cannot be made
    assert ("Material: Hard resin 1.50" if first == 0 else "Material: Thiourethane 1.60") in sheet()


# --- other wearers ----------------------------------------------------------------------------------------------------


def test_a_makers_figure_is_told_as_one() -> None:
    declared = {"declared": {"luminous_reflectance": 0.007, "hue": "green"}, "label": "House coating"}
    option = {"design": "single-vision", "material": "hard-resin-150", "coating": declared}
    html = wearer_sheet(check_visit(PAIR | {"options": [option]}), STOCK, code="en", today=TODAY)
    lines = read(html).sections["What that means for you"]
    # two faces of 0.7 %, all bounces: 0.007 + 0.993^2 x 0.007; bare 7.69 % with V 58 (closed form in the optics tests)
    made = f"{100 * (0.007 + 0.993**2 * 0.007):.1f}"
    assert (
        f"Your lenses mirror away about {made} % of the light, by the maker's figure. Without the coating it is 7.7 %."
        in lines
    )
    assert "Coating on both sides: House coating" in read(html).sections["What you chose"]


def near_sheet(**prescription: Any) -> str:
    eyes = {"right": {"sphere": 1.75}, "left": {"sphere": 1.75}}
    life = {"driving": "often", "night_driving": "often"}
    option = {"design": "single-vision", "material": "hard-resin-150", "coating": "bare"}
    content = {"prescription": eyes | prescription, "daily_life": life, "options": [option]}
    return read(wearer_sheet(check_visit(content), STOCK, code="en", today=TODAY)).text


def test_single_vision_made_for_near_is_not_driven_in() -> None:
    near, far = near_sheet(**{"for": "near"}), near_sheet(**{"for": "distance"})
    assert "made for reading and near work" in near
    assert "Do not drive, walk about or use stairs in them." in near
    assert "Do not drive or cycle until" not in near
    assert "second light" not in near.split("When to come back")[0]
    assert "Do not drive or cycle until" in far
    assert "Do not drive, walk about" not in far
    assert "made for the desk and the screen" in near_sheet(**{"for": "intermediate"})
