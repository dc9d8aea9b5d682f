"""One language: its texts, and how it writes numbers, money and dates.

Everything shown to a person passes through here: the screen, the sheets and the text table. The sheet's language may
differ from the screen's, so a language is an object that is handed on, never a global.
"""

import datetime
from functools import cache, cached_property
from pathlib import Path

from advisor.counsel.phrases import mark
from advisor.errors import TwolightError

TRANSLATIONS = Path(__file__).resolve().parent.parent / "translations"
SOURCE_LANGUAGE = "en"
LABEL = mark("%(label)s:")
MINUS = "\N{MINUS SIGN}"
DIRECTION_MARKS = dict.fromkeys(map(ord, "\N{LEFT-TO-RIGHT MARK}\N{RIGHT-TO-LEFT MARK}"))  # none needed once apart
ISOLATE, END_OF_ISOLATE = "\N{LEFT-TO-RIGHT ISOLATE}", "\N{POP DIRECTIONAL ISOLATE}"


class UnknownLanguage(TwolightError):
    """The program has no texts in the language asked for."""

    text = mark("There are no texts in “%(code)s”; known languages are %(known)s.")


def languages() -> tuple[str, ...]:
    """Return the codes of the languages that have a catalogue, the source language first."""
    found = sorted(folder.parent.name for folder in TRANSLATIONS.glob("*/LC_MESSAGES"))
    return (SOURCE_LANGUAGE, *(code for code in found if code != SOURCE_LANGUAGE))


class Language:
    """Texts and number formats of one language; satisfies ``advisor.counsel.phrases.Translator``."""

    def __init__(self, code: str) -> None:
        from babel import Locale
        from babel.support import NullTranslations, Translations

        self.language = code
        # English dates and money are written the British way; the month is always a word, so no date can be misread.
        self.locale = Locale.parse("en_GB" if code == SOURCE_LANGUAGE else code, sep="_")
        self.catalogue: NullTranslations = (
            NullTranslations() if code == SOURCE_LANGUAGE else Translations.load(str(TRANSLATIONS), [code], "messages")
        )

    @cached_property
    def direction(self) -> str:
        """``ltr`` or ``rtl``."""
        return str(self.locale.text_direction)

    def gettext(self, message: str, /) -> str:
        """Return the text in this language."""
        return str(self.catalogue.gettext(message)) if message else ""

    def ngettext(self, singular: str, plural: str, number: int, /) -> str:
        """Return the form of a text for this number."""
        return str(self.catalogue.ngettext(singular, plural, number))

    def number(self, value: float, *, digits: int, signed: bool = False) -> str:
        """Return a number with a fixed count of decimals; a signed one shows plus too, and zero has no sign."""
        rounded = round(float(value), digits)
        sign = MINUS if rounded < 0 else "+" if signed and rounded > 0 else ""
        text = f"{abs(rounded):,.{digits}f}" if self.language == SOURCE_LANGUAGE else self._local(abs(rounded), digits)
        return self.apart(sign + text)

    def apart(self, figure: str) -> str:
        """Return a figure as it is, or, among words that run to the left, kept apart with its sign before it."""
        return figure if self.direction == "ltr" else f"{ISOLATE}{figure}{END_OF_ISOLATE}"

    def _local(self, value: float, digits: int) -> str:
        from babel.numbers import format_decimal

        pattern = "#,##0" + ("." + "0" * digits if digits else "")
        return format_decimal(value, format=pattern, locale=self.locale)

    def percent(self, fraction: float, *, digits: int = 1) -> str:
        """Return a fraction as a percentage."""
        return f"{self.number(100 * fraction, digits=digits)} %"

    def money(self, amount: float | None, *, currency: str, signed: bool = False) -> str:
        """Return a price, or a dash where none is known; a signed one is a difference and shows plus too."""
        if amount is None:
            return "–"
        from babel.numbers import format_currency

        sign = "" if not signed or not amount else "+" if amount > 0 else MINUS
        written = format_currency(abs(amount) if signed else amount, currency, locale=self.locale)
        return self.apart(sign + written.translate(DIRECTION_MARKS))

    def date(self, day: datetime.date) -> str:
        """Return a date with the month as a word, which no reader can take for the day."""
        from babel.dates import format_date

        written = format_date(day, format="long", locale=self.locale)
        # French says "the first" and counts from two on; the locale data leave a plain 1
        return f"1er{written[1:]}" if self.language == "fr" and day.day == 1 else written


@cache
def language(code: str) -> Language:
    """Return the language of this code.

    Raises
    ------
    UnknownLanguage
        If there is no catalogue for it.
    """
    if code not in languages():
        raise UnknownLanguage(code=code, known=", ".join(languages()))
    return Language(code)
