"""The measure of readability itself, against sentences counted by hand and the formulas worked out on paper."""

import pytest

from tests.readability import MEASURES, Counted, count, sentences, syllables, words


def test_items_and_headings_are_sentences_without_a_full_stop() -> None:
    assert count(["The first days", "a red eye that hurts"], code="en").sentences == 2


def test_a_block_is_parted_at_its_full_stops_and_not_inside_a_figure() -> None:
    assert sentences("It is 7.9 %. Wash it often! Why? Ask us.") == [
        "It is 7.9 %.",
        "Wash it often!",
        "Why?",
        "Ask us.",
    ]
    assert sentences("1 part in 10,000 of the light") == ["1 part in 10,000 of the light"]
    assert sentences("  ") == []


def test_words_are_counted_as_people_do() -> None:
    assert words("The maker's anti-fog spray, 24 months.") == ["The", "maker's", "anti-fog", "spray", "24", "months"]


# Syllables as a speaker counts them; words on which the parting of words and speech agree.
@pytest.mark.parametrize(
    ("code", "word", "spoken"),
    [
        ("en", "cat", 1), ("en", "glasses", 2), ("en", "doctor", 2), ("en", "emergency", 4),
        ("es", "gafas", 2), ("es", "limpio", 2), ("es", "ventana", 3), ("es", "médico", 3),
        ("fr", "chiffon", 2), ("fr", "matin", 2), ("fr", "lunettes", 2),
        ("de", "Brille", 2), ("de", "sauber", 2), ("de", "Gläser", 2), ("de", "Fensterreiniger", 5),
        ("en", "24", 1),
    ],
)  # fmt: skip
def test_syllables_of_plain_words_are_those_spoken(code: str, word: str, spoken: int) -> None:
    assert syllables(word, code=code) == spoken


# "The cat sat on the mat.": 1 sentence, 6 words, 6 syllables, by hand; the grade -1.45 is the printed example of the
# Flesch-Kincaid grade (0.39 x 6 + 11.8 - 15.59). The others by the formulas on paper, for the same counts of sentences.
def test_the_english_grade_of_the_printed_example() -> None:
    counted = count(["The cat sat on the mat."], code="en")
    assert counted == Counted(1, 6, 6)
    assert MEASURES["en"].score(counted) == pytest.approx(-1.45, abs=0.005)


@pytest.mark.parametrize(
    ("code", "text", "counted", "score"),
    [
        # 1 sentence, 5 words, 10 syllables: 206.84 - 60 x 2 - 1.02 x 5 = 81.74
        ("es", "Limpie las gafas cada mañana.", Counted(1, 5, 10), 81.74),
        # 1 sentence, 5 words, 7 syllables: 207 - 1.015 x 5 - 73.6 x 1.4 = 98.885
        ("fr", "Lavez bien le chiffon doux.", Counted(1, 5, 7), 98.885),
        # 1 sentence, 5 words, 7 syllables: 180 - 5 - 58.5 x 1.4 = 93.1
        ("de", "Putzen Sie die Brille gut.", Counted(1, 5, 7), 93.1),
    ],
)
def test_the_ease_of_a_sentence_counted_by_hand(code: str, text: str, counted: Counted, score: float) -> None:
    assert count([text], code=code) == counted
    assert MEASURES[code].score(counted) == pytest.approx(score, abs=0.005)


HARD = {
    "en": "The luminous reflectance of the uncoated ophthalmic substrate considerably exceeds the specified limit.",
    "es": "La reflectancia luminosa del sustrato oftálmico supera considerablemente el límite especificado.",
    "fr": "La réflectance lumineuse du substrat ophtalmique dépasse considérablement la limite spécifiée.",
    "de": "Der Lichtreflexionsgrad der unbeschichteten Glasoberfläche überschreitet den vorgeschriebenen Grenzwert.",
}
EASY = {
    "en": "Wash the lens. Dry it with a soft cloth.",
    "es": "Lave las gafas. No las deje al sol.",
    "fr": "Lavez vos verres. Ne les frottez pas à sec.",
    "de": "Spülen Sie das Glas ab. Wischen Sie es nie trocken.",
}


@pytest.mark.parametrize("code", MEASURES)
def test_the_measure_tells_an_easy_text_from_a_hard_one(code: str) -> None:
    assert MEASURES[code].is_met(count([EASY[code]], code=code))
    assert not MEASURES[code].is_met(count([HARD[code]], code=code))
