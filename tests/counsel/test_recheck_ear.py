"""Wearers' words in other languages than English: signs above all, complaints as people say them."""

import tomllib
from pathlib import Path
from typing import Any

import pytest

from advisor.counsel.recheck import recheck
from advisor.counsel.recheck_ear import ears, folded
from advisor.counsel.recheck_sign_words import SIGN_WORDS
from advisor.counsel.recheck_texts import COMPLAINTS
from advisor.counsel.recheck_words import COMPLAINT_WORDS, hear
from advisor.counsel.stock import builtin_range
from advisor.counsel.visit import read_visit
from advisor.resources import resource_dir
from advisor.web.language import SOURCE_LANGUAGE, language, languages

FOLDER = Path(__file__).parent / "recheck_words"
CODES = [code for code in languages() if code != SOURCE_LANGUAGE]
WORDS: list[tuple[str, dict[str, Any]]] = [
    (path.stem, word)
    for path in sorted(FOLDER.glob("*.toml"))
    for word in tomllib.loads(path.read_text(encoding="utf-8"))["words"]
]
WEAK_DRIVER = resource_dir("demo_patients") / "weak-minus-night-driver.json"


def today(signs: tuple[str, ...]) -> list[str]:
    return [sign for sign in signs if sign.startswith("today")]


def test_every_language_of_the_program_has_an_ear_and_words_to_try_it_with() -> None:
    assert set(ears()) == set(CODES) == {code for code, _ in WORDS}


@pytest.mark.parametrize("code", CODES)
def test_an_ear_listens_for_every_complaint_and_every_sign(code: str) -> None:
    assert list(ears()[code].complaints) == list(COMPLAINT_WORDS)
    assert list(ears()[code].signs) == list(SIGN_WORDS)
    tried = [word for spoken, word in WORDS if spoken == code]
    assert {word.get("sign") for word in tried} >= set(SIGN_WORDS)
    assert {key for word in tried for key in word.get("complaints", ())} == set(COMPLAINT_WORDS)


@pytest.mark.parametrize(("code", "word"), WORDS, ids=lambda part: part if isinstance(part, str) else part["says"])
def test_words_are_heard_as_wearers_mean_them(code: str, word: dict[str, Any]) -> None:
    heard = hear(word["says"], language(code))
    if "sign" in word:
        assert word["sign"] in heard.signs
    if word.get("today") == "no":
        assert today(heard.signs) == []
    if "complaints" in word:
        assert set(word["complaints"]) <= set(heard.complaints)
    if word.get("only"):
        assert set(word["complaints"]) == set(heard.complaints)


@pytest.mark.parametrize(
    ("code", "word"), [(code, word) for code, word in WORDS if "sign" in word and "complaints" not in word]
)
def test_a_sign_is_heard_in_every_language_whatever_the_screen_speaks(code: str, word: dict[str, Any]) -> None:
    del code
    assert word["sign"] in hear(word["says"], language("en")).signs


@pytest.mark.parametrize(("code", "word"), WORDS, ids=lambda part: part if isinstance(part, str) else part["says"])
def test_words_are_heard_without_accents_and_in_capitals_too(code: str, word: dict[str, Any]) -> None:
    assert hear(folded(word["says"]).upper(), language(code)) == hear(word["says"], language(code))


@pytest.mark.parametrize("code", CODES)
@pytest.mark.parametrize("key", COMPLAINTS)
def test_the_list_of_complaints_is_heard_as_it_stands_and_with_a_word_more(code: str, key: str) -> None:
    text = language(code).gettext(COMPLAINTS[key])
    assert hear(text, language(code)).complaints == (key,)
    more = hear(f"{text}!", language(code))
    assert key in more.complaints
    assert today(more.signs) == []


def test_complaints_are_heard_in_the_wearers_language_on_an_english_screen() -> None:
    assert hear("Geisterbild", language("en")).complaints == ()
    assert hear("Geisterbild", language("en"), languages=["de", None]).complaints == ("second-light",)
    visit = read_visit(WEAK_DRIVER)
    assert visit.wearer is not None
    german = visit.model_copy(update={"wearer": visit.wearer.model_copy(update={"language": "de"})})
    answer = recheck(german, builtin_range(), says="Geisterbild", translator=language("en"))
    assert [complaint.key for complaint in answer.complaints] == ["second-light"]


@pytest.mark.parametrize("says", ["second light, no flashes or floaters", "segunda luz, sin flashes"])
def test_what_one_language_denies_is_not_heard_by_the_ear_of_another(says: str) -> None:
    assert today(hear(says, language("es")).signs) == []
