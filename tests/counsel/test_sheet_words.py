"""What every sheet says, for the demo wearers and 200 invented ones, in every language there are texts in.

Plain words and short sentences, no claim that nobody can keep, no figure that is not the comparison's, and the cautions
that apply, no more and no fewer.
"""

import datetime as dt
import json
import re
import tomllib
from collections.abc import Iterator
from dataclasses import dataclass
from functools import cache
from pathlib import Path
from typing import Any

import pytest

from advisor.counsel.caution_texts import CAUTION_TEXTS
from advisor.counsel.cautions import cautions_for
from advisor.counsel.compare import answer_of, compute, lens_light
from advisor.counsel.sheet import SHEET_TEXTS, NoSuchOption, Sheet, care_sheet, choose, wearer_sheet
from advisor.counsel.sheet_texts import HEADINGS
from advisor.counsel.visit import Visit, read_visit
from advisor.resources import resource_dir
from advisor.web.language import language, languages
from advisor.web.sheet_page import sheet_html
from tests.readability import MEASURES, count, sentences, words
from tests.sheet_text import Text, read
from tests.wearers import STOCK, visits

TODAY = dt.date(2026, 12, 1)
DEMO = sorted(resource_dir("demo_patients").glob("*.json"))
INVENTED = 200
MOST_WORDS = 20
EVERYBODY = "not-eye-protection"


@dataclass(frozen=True)
class Made:
    """One sheet, and the answer it was made from as another program would read it."""

    visit: Visit
    content: Sheet
    option: dict[str, Any]
    cautions: frozenset[str]


def _made(visit: Visit, *, with_advice: bool) -> Made | None:
    computed = compute(visit, STOCK, today=TODAY)
    answer = answer_of(computed, translator=language("en"), with_advice=with_advice)
    try:
        index = choose(computed, number=None, answer=answer)
    except NoSuchOption:
        return None
    content = wearer_sheet(computed, answer, index=index, price=None, day=language("en").date)
    whole = json.loads(answer.model_dump_json(exclude_unset=True))
    if with_advice:
        applied = {part["key"] for part in whole["advice"]["cautions"] if index in part["options"]}
    else:  # five times as fast
        found = cautions_for(computed.case, computed.laid[index], light=lens_light(computed, index))
        applied = {caution.key for caution in found}
    return Made(visit, content, whole["options"][index], frozenset(applied))


def _all() -> Iterator[Made]:
    yield from (made for path in DEMO if (made := _made(read_visit(path), with_advice=True)) is not None)
    invented = (made for visit in visits(INVENTED + 80) if (made := _made(visit, with_advice=False)) is not None)
    yield from (made for made, _ in zip(invented, range(INVENTED), strict=False))


@cache
def sheets() -> tuple[Made, ...]:
    return tuple(_all())


def page(content: Sheet, code: str) -> str:
    return sheet_html(content, STOCK, language(code), date=TODAY, print_size="standard", fonts="print-fonts")


@cache
def texts(code: str) -> tuple[Text, ...]:
    return tuple(read(page(made.content, code)) for made in sheets())


@cache
def list_of(code: str) -> dict[str, list[str]]:
    """Return a language's lists; a language without one fails."""
    content: dict[str, list[str]] = tomllib.loads(
        (Path(__file__).with_name("sheet_words") / f"{code}.toml").read_text("utf-8")
    )
    assert set(content) == {"never_claims", "never_words"}
    return content


def test_there_are_as_many_sheets_as_promised() -> None:
    assert len(sheets()) == len(DEMO) + INVENTED


# --- words ------------------------------------------------------------------------------------------------------------


@pytest.mark.parametrize("code", languages())
def test_every_sheet_is_easy_to_read(code: str) -> None:
    for made, text in zip(sheets(), texts(code), strict=True):
        counted = count(text.blocks, code=code)
        assert MEASURES[code].is_met(counted), (made.visit.reference, MEASURES[code].score(counted))


@pytest.mark.parametrize("code", languages())
def test_the_page_about_care_is_easy_to_read(code: str) -> None:
    counted = count(read(page(care_sheet(None), code)).blocks, code=code)
    assert MEASURES[code].is_met(counted), MEASURES[code].score(counted)


@pytest.mark.parametrize("code", languages())
def test_no_sentence_is_longer_than_twenty_words(code: str) -> None:
    found = {sentence for text in texts(code) for block in text.blocks for sentence in sentences(block)}
    assert len(found) > 60
    assert [sentence for sentence in found if len(words(sentence)) > MOST_WORDS] == []


@pytest.mark.parametrize("code", languages())
@pytest.mark.parametrize("which", ["never_claims", "never_words"])
def test_no_sheet_holds_a_word_of_the_list(code: str, which: str) -> None:
    said = {block.lower() for text in texts(code) for block in text.blocks}
    said |= {re.sub(r"%\(\w+\)s", "", language(code).gettext(text)).lower() for text in SHEET_TEXTS.values()}
    said |= {language(code).gettext(text).lower() for text in HEADINGS.values()}
    forbidden = list_of(code)[which]
    assert len(forbidden) > 10
    assert [(word, line) for line in said for word in forbidden if word in line] == []


def test_a_forbidden_claim_would_be_found() -> None:
    said = "these lenses have no reflections and you will see perfectly."
    assert [claim for claim in list_of("en")["never_claims"] if claim in said] == [
        "no reflections",
        "you will",
        "perfect",
    ]


@pytest.mark.parametrize("code", languages())
def test_every_line_of_do_and_dont_has_its_symbol_beside_words(code: str) -> None:
    for made, text in zip(sheets(), texts(code), strict=True):
        for block in made.content.blocks:
            lines = text.sections[language(code).gettext(block.heading)]
            assert len(lines) == len(block.lines)
            assert {text.symbols[line] for line in lines} == {block.kind}
            assert all(re.search(r"\w", line) for line in lines)


# --- figures ----------------------------------------------------------------------------------------------------------

FIGURE = re.compile(r'<bdi dir="ltr">([^<]*)</bdi>')
KEPT = ("luminous_reflectance", "uncoated", "second_image", "luminous_transmittance", "magnification_change_percent")


def numbers_in(part: Any) -> Iterator[float]:
    if isinstance(part, dict):
        for inner in part.values():
            yield from numbers_in(inner)
    elif isinstance(part, list):
        for inner in part:
            yield from numbers_in(inner)
    elif isinstance(part, float | int) and not isinstance(part, bool):
        yield float(part)


def as_printed(value: float, *, name: str) -> Iterator[str]:
    """Every way a number of the answer may be printed: a share of light, a part of it, a change of size."""
    if name == "magnification_change_percent":
        yield f"{abs(value):.1f}"
        return
    yield f"{100 * value:.1f}"
    yield f"{100 * value:.1f} %"
    if value > 0:
        yield f"{int(float(f'{1 / value:.1e}')):,}"


def test_every_figure_on_every_sheet_is_a_figure_of_the_answer() -> None:
    seen = 0
    for made in sheets():
        known = {
            text
            for eye in ("right", "left")
            for name in KEPT
            for value in numbers_in(made.option[eye].get(name))
            for text in as_printed(value, name=name)
        }
        for part in page(made.content, "en").replace("\N{NO-BREAK SPACE}", " ").split("<section")[1:]:
            printed = [text for text in FIGURE.findall(part) if not part.startswith(' class="block block-chosen"')]
            assert set(printed) <= known, (made.visit.reference, set(printed) - known)
            seen += len(printed)
    assert seen > 4 * len(sheets())


def test_no_sheet_tells_more_than_three_computed_facts() -> None:
    for made in sheets():
        why = next(block for block in made.content.blocks if block.key == "why")
        sizes = [line for block in made.content.blocks for line in block.lines if "size_percent" in line.figures]
        assert 2 <= len(why.lines) + len(sizes) <= 3


# --- cautions ---------------------------------------------------------------------------------------------------------

ELSEWHERE = {"coating-adds-no-strength", "not-promise-none"}  # said in other words among what the coating does not do
KEYS = [key for key, words in CAUTION_TEXTS.items() if words.sheet and key not in ELSEWHERE]


def said(content: Sheet) -> list[str]:
    return [line.code for block in content.blocks for line in block.lines if line.code in CAUTION_TEXTS]


def test_a_caution_is_on_a_sheet_exactly_when_it_applies() -> None:
    for made in sheets():
        assert sorted(said(made.content)) == sorted(key for key in made.cautions if key in KEYS), made.visit.reference


@pytest.mark.parametrize("key", KEYS)
def test_every_caution_is_met_among_the_wearers_and_missed(key: str) -> None:
    with_it = [made for made in sheets() if key in made.cautions]
    assert with_it
    assert all(key in said(made.content) for made in with_it)
    if key != EVERYBODY:
        without = [made for made in sheets() if key not in made.cautions]
        assert without
        assert not any(key in said(made.content) for made in without)


def test_a_coated_lens_is_never_told_to_be_stronger_or_free_of_reflections() -> None:
    for made in sheets():
        lines = [line.code for block in made.content.blocks for line in block.lines]
        assert ("coating-does-not" in lines) is bool(made.cautions & ELSEWHERE)


# --- the first days and coming back -----------------------------------------------------------------------------------


def test_nobody_drives_before_it_is_steady_and_clear() -> None:
    for made in sheets():
        lines = {line.code for block in made.content.blocks for line in block.lines}
        assert lines & {"first-drive", "not-for-driving-design", "not-for-driving-tint"}
        assert len(lines & {"first-drive", "not-for-driving-tint"}) < 2


def test_a_lens_with_several_zones_is_never_called_much_like_the_old_pair() -> None:
    """What the worn pair was made for is not kept, so only a single-vision lens can be likened to it."""
    told = [{line.code for block in made.content.blocks for line in block.lines} for made in sheets()]
    zones = [lines for lines in told if lines & {"for-desk", "for-far-and-near-line", "for-far-to-near"}]
    assert len(zones) > 20
    assert not any("first-same" in lines for lines in zones)
    assert any("first-same" in lines for lines in told)


def test_everybody_is_given_a_day_to_come_back() -> None:
    for made, text in zip(sheets(), texts("en"), strict=True):
        (line,) = [line for line in text.sections[HEADINGS["come-back"]] if "around" in line]
        if "child" in made.cautions:
            assert "every 3 months" in line
        else:
            assert "every 3 months" not in line
