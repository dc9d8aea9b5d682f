"""The form of what is the shop's own on the wearer's sheet: read as typed, its lines in words, its preview."""

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any

from werkzeug.datastructures import FileStorage, MultiDict

from advisor.counsel.phrases import Translator
from advisor.counsel.regions import region_of
from advisor.counsel.sheet_switches import MAY_BE_OFF, SWITCH_TEXTS, SWITCHES
from advisor.counsel.sheet_texts import HEADINGS
from advisor.counsel.stock import Range, Shop, builtin_range
from advisor.web import demo_wearers
from advisor.web.language import Language
from advisor.web.logo import MOST_BYTES, logo_from
from advisor.web.sheet_page import wearer_sheet

TEXTS = ("name", "contact", "paragraph", "paper")
FIRST_SHOWN = "weak-minus-night-driver"
LEFT_OUT = "…"  # where a figure of the wearer's own will stand


@dataclass(frozen=True)
class Typed:
    """The form as it stands: its texts, the lines that print, and whose sheet the preview shows."""

    texts: Mapping[str, str]
    lines: frozenset[str]
    wearer: str = FIRST_SHOWN
    without_logo: bool = False

    def content(self) -> dict[str, Any]:
        """Return the shop's fields as the range file writes them; empty where nothing is said."""
        return {**self.texts, "lines_off": [key for key in MAY_BE_OFF if key not in self.lines]}


@dataclass(frozen=True)
class Told:
    """What is said back: faults beside fields, faults of no field, and one sentence above."""

    faults: Mapping[str, list[str]] = field(default_factory=dict)
    rest: tuple[str, ...] = ()
    above: str = ""


def typed_from(form: MultiDict[str, str]) -> Typed:
    """Read the form as it was sent."""
    texts = {name: form.get(name, "").replace("\r\n", "\n").strip() for name in TEXTS}
    wearer = form.get("wearer", FIRST_SHOWN)
    return Typed(texts, frozenset(form.getlist("line")), wearer, bool(form.get("without_logo")))


def typed_of(shop: Shop) -> Typed:
    """Return the form as the shop's stored fields fill it."""
    texts = {name: getattr(shop, name) or "" for name in TEXTS}
    return Typed(texts, frozenset(MAY_BE_OFF) - frozenset(shop.lines_off or ()))


def sent_logo(typed: Typed, file: FileStorage | None) -> bytes | None:
    """Return the picture that was sent, written anew; empty where the logo is to go, None where it stays as it is.

    Raises
    ------
    advisor.web.logo.LogoRefused
        For a picture that cannot be used.
    """
    data = b"" if file is None else file.read(MOST_BYTES + 1)
    if data:
        return logo_from(data)
    return b"" if typed.without_logo else None


class _LeftOut(dict[str, str]):
    def __missing__(self, name: str) -> str:
        return LEFT_OUT


def groups(typed: Typed, translator: Translator) -> list[dict[str, Any]]:
    """Return the lines that may be switched off, under their headings, worded as they print."""
    return [
        {
            "key": heading,
            "heading": HEADINGS[heading],
            "has_off": not typed.lines.issuperset(keys),
            "lines": [(key, translator.gettext(SWITCH_TEXTS[key]) % _LeftOut(), key in typed.lines) for key in keys],
        }
        for heading, keys in SWITCHES.items()
    ]


def regions_paper(shop: Shop) -> str:
    """Return the size of paper that is printed on where the shop names none."""
    return region_of(shop.region).paper


def preview(shop: Shop, typed: Typed, *, logo: bytes | None, speaker: Language) -> str:
    """Return the sheet of a demo wearer as this shop would print it, as a part of a page.

    The lenses are of the built-in range, which the demo wearers' visits name.
    """
    stock: Range = builtin_range()
    own = shop.model_copy(update={"default_options": stock.shop.default_options})
    return wearer_sheet(
        demo_wearers.wearer(typed.wearer),
        stock.model_copy(update={"shop": own}),
        code=speaker.language,
        print_size="standard",
        logo=None if typed.without_logo else logo,
        template="paper/sheet_preview.html",
    )
