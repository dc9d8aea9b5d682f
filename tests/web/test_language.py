import datetime
import re
from collections.abc import Iterator
from pathlib import Path

import pytest
from babel.messages.catalog import Catalog
from babel.messages.mofile import write_mo

from advisor.web import language as module
from advisor.web.language import Language, UnknownLanguage, language, languages

ENGLISH = language("en")
NARROW, NO_BREAK = "\N{NARROW NO-BREAK SPACE}", "\N{NO-BREAK SPACE}"
DAY = datetime.date(2026, 12, 1)


@pytest.mark.parametrize(
    ("value", "digits", "signed", "text"),
    [
        (1234.56, 1, False, "1,234.6"),
        (-2.25, 2, False, "−2.25"),
        (2.25, 2, True, "+2.25"),
        (-2.25, 2, True, "−2.25"),
        (0.0, 2, True, "0.00"),
        (-0.0, 2, True, "0.00"),
        (-0.004, 2, True, "0.00"),  # a figure that shows as nothing has no sign
        (0.004, 2, True, "0.00"),
        (73.0, 0, False, "73"),
    ],
)
def test_a_number_has_a_fixed_count_of_decimals_and_a_real_minus(
    value: float, digits: int, signed: bool, text: str
) -> None:
    assert ENGLISH.number(value, digits=digits, signed=signed) == text


# Separators of the Unicode CLDR; the minus is ours in every language, and so is the French first of a month, which the
# CLDR writes as a plain 1 (French usage: premier for the first, plain numbers from 2 on; common practice, no source).
@pytest.mark.parametrize(
    ("code", "number", "money", "day"),
    [
        ("en", "−1,234.50", "€80.00", "1 December 2026"),
        ("de", "−1.234,50", f"80,00{NO_BREAK}€", "1. Dezember 2026"),
        ("fr", f"−1{NARROW}234,50", f"80,00{NO_BREAK}€", "1er décembre 2026"),
        ("es", "−1234,50", f"80,00{NO_BREAK}€", "1 de diciembre de 2026"),
    ],
)
def test_numbers_money_and_dates_are_written_as_the_language_does(code: str, number: str, money: str, day: str) -> None:
    chosen = Language(code)
    written = chosen.number(-1234.5, digits=2)
    assert written in (number, number.replace("1234", "1.234"))  # CLDR groups four digits in Spanish from five on
    assert chosen.money(80, currency="EUR") == money
    assert chosen.date(DAY) == day


def test_in_french_the_first_of_a_month_alone_is_an_ordinal() -> None:
    days = [Language("fr").date(datetime.date(2026, 7, day)) for day in (1, 2, 11, 31)]
    assert days == ["1er juillet 2026", "2 juillet 2026", "11 juillet 2026", "31 juillet 2026"]


def test_a_date_is_never_a_row_of_figures() -> None:
    assert re.search("[A-Za-z]{3}", ENGLISH.date(DAY))


def test_an_unknown_price_is_a_dash_and_nothing_is_a_price() -> None:
    assert ENGLISH.money(None, currency="EUR") == "–"
    assert ENGLISH.money(0.0, currency="EUR") == "€0.00"


# Where the sign of a currency stands, and what it is called abroad, by the Unicode CLDR.
@pytest.mark.parametrize(
    ("code", "currency", "text"),
    [
        ("en", "GBP", "£80.00"),
        ("en", "USD", "US$80.00"),
        ("de", "GBP", f"80,00{NO_BREAK}£"),
        ("fr", "USD", f"80,00{NO_BREAK}$US"),
        ("es", "USD", f"80,00{NO_BREAK}US$"),
        ("fr", "CHF", f"80,00{NO_BREAK}CHF"),
    ],
)
def test_money_is_written_by_language_and_currency(code: str, currency: str, text: str) -> None:
    assert Language(code).money(80, currency=currency) == text


def test_a_difference_of_prices_shows_its_sign() -> None:
    german = Language("de")
    assert german.money(35, currency="EUR", signed=True) == f"+35,00{NO_BREAK}€"
    assert german.money(-35, currency="EUR", signed=True) == f"−35,00{NO_BREAK}€"
    assert german.money(0, currency="EUR", signed=True) == f"0,00{NO_BREAK}€"
    assert ENGLISH.money(-1234.5, currency="EUR", signed=True) == "−€1,234.50"


def test_a_fraction_is_written_as_a_percentage() -> None:
    assert ENGLISH.percent(0.0769) == "7.7 %"
    assert ENGLISH.percent(0.0769, digits=2) == "7.69 %"


def test_a_language_knows_which_way_it_runs() -> None:
    assert ENGLISH.direction == "ltr"
    assert Language("ar").direction == "rtl"


@pytest.mark.parametrize("code", ["xx", "EN", "", "../en", "en/LC_MESSAGES"])
def test_a_language_without_texts_is_refused_with_the_known_ones(code: str) -> None:
    with pytest.raises(UnknownLanguage, match="known languages are en"):
        language(code)


@pytest.fixture
def spanish(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Iterator[Language]:
    """A catalogue of two texts, in a folder of its own."""
    folder = tmp_path / "es" / "LC_MESSAGES"
    folder.mkdir(parents=True)
    catalogue = Catalog(locale="es")
    catalogue.add("price of the pair", "precio del par")
    plurals = ("%(num)d lentes",) * (catalogue.num_plurals - 1)
    catalogue.add(("%(num)d lens", "%(num)d lenses"), ("%(num)d lente", *plurals))
    with (folder / "messages.mo").open("wb") as stream:
        write_mo(stream, catalogue)
    (tmp_path / "not-a-language").mkdir()
    monkeypatch.setattr(module, "TRANSLATIONS", tmp_path)
    language.cache_clear()
    yield language("es")
    language.cache_clear()


@pytest.mark.usefixtures("spanish")
def test_the_source_language_comes_first_and_a_folder_without_texts_is_none() -> None:
    assert languages() == ("en", "es")


def test_a_catalogue_gives_its_texts_and_leaves_the_others_as_they_are(spanish: Language) -> None:
    assert spanish.gettext("price of the pair") == "precio del par"
    assert spanish.gettext("light passed") == "light passed"
    assert spanish.gettext("") == ""  # not the head of the catalogue
    assert [spanish.ngettext("%(num)d lens", "%(num)d lenses", n) for n in (1, 2)] == [
        "%(num)d lente",
        "%(num)d lentes",
    ]
    assert language("en").gettext("price of the pair") == "price of the pair"


def test_where_no_catalogue_lies_there_is_the_source_language(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(module, "TRANSLATIONS", tmp_path / "nowhere")
    assert languages() == ("en",)
