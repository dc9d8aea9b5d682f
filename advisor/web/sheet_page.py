"""What the wearer takes home, from a visit to HTML: the sheet and the page about care alone; no application needed."""

import datetime as dt
from typing import Any, Literal

from advisor.counsel.case import build_case
from advisor.counsel.compare import answer_of, compute
from advisor.counsel.phrases import say
from advisor.counsel.regions import region_of
from advisor.counsel.sheet import SHEET_TEXTS, Sheet, choose, without_lines
from advisor.counsel.sheet import care_sheet as care_content
from advisor.counsel.sheet import wearer_sheet as sheet_content
from advisor.counsel.stock import Range
from advisor.counsel.visit import Visit
from advisor.web.language import Language, language, languages
from advisor.web.logo import ADDRESS
from advisor.web.paper import OnPaper, page
from advisor.web.screen import screen

Print = Literal["standard", "large"]
WHOLE = "paper/sheet.html"
BAR_UNITS = 100  # length of a whole bar in drawing units


def sheet_language(visit: Visit | None, code: str | None) -> str:
    """Return a sheet's language: the one asked for, else the wearer's own if there are texts, else the screen's."""
    if code is not None:
        return language(code).language
    own = visit.wearer.language if visit and visit.wearer else None
    return own if own in languages() else screen().language


def wearer_sheet(
    visit: Visit,
    stock: Range,
    *,
    number: int | None = None,
    code: str | None = None,
    print_size: Print | None = None,
    today: dt.date | None = None,
    fonts: str = "print-fonts",
    logo: bytes | None = None,
    template: str = WHOLE,
) -> str:
    """Return the wearer's sheet as HTML; ``number`` counts options from 1, and print left out is the wearer's own.

    Where there is a ``logo`` the page asks for it; its bytes are handed to whoever lays the page out.
    """
    chosen = language(sheet_language(visit, code))
    computed = compute(visit, stock, today=today)
    undecided = number is None and visit.ordered is None
    answer = answer_of(computed, translator=chosen, with_advice=undecided, with_worn_now=False)
    index = choose(computed, number=number, answer=answer)
    price = computed.laid[index].price
    content = sheet_content(
        computed,
        answer,
        index=index,
        price=None if price is None else chosen.money(price, currency=stock.currency),
        day=chosen.date,
    )
    size = print_size or _own_print(visit)
    date = computed.case.date
    return sheet_html(
        content, stock, chosen, date=date, print_size=size, fonts=fonts, has_logo=bool(logo), template=template
    )


def care_sheet(
    visit: Visit | None,
    stock: Range,
    *,
    code: str | None = None,
    print_size: Print | None = None,
    today: dt.date | None = None,
    fonts: str = "print-fonts",
    logo: bytes | None = None,
) -> str:
    """Return the page about care alone as HTML: for the wearer of a visit, or for somebody who just walked in."""
    chosen = language(sheet_language(visit, code))
    day = today or dt.date.today()
    case = None if visit is None else build_case(visit, stock, today=day)
    size = print_size or _own_print(visit)
    date = day if case is None else case.date
    content = care_content(case)
    return sheet_html(content, stock, chosen, date=date, print_size=size, fonts=fonts, has_logo=bool(logo))


def _own_print(visit: Visit | None) -> Print:
    return (visit.wearer.print if visit and visit.wearer else None) or "standard"


def sheet_html(
    content: Sheet,
    stock: Range,
    chosen: Language,
    *,
    date: dt.date,
    print_size: Print,
    fonts: str,
    has_logo: bool = False,
    template: str = WHOLE,
) -> str:
    """Return what a sheet says, but for the lines the shop switched off, as a page in one language and one print."""
    speaker, content = OnPaper(chosen), without_lines(content, stock.shop.lines_off or ())
    return page(
        template,
        {
            "sheet": content,
            "shop": stock.shop,
            "date": date,
            "fonts": fonts,
            "print_size": print_size,
            "logo_address": ADDRESS if has_logo else "",
            "say": lambda phrase: say(phrase, SHEET_TEXTS, speaker),
            "bars": _bars(content, chosen),
            "urgent_help": region_of(stock.shop.region).urgent_help,
        },
        code=chosen.language,
    )


def _bars(sheet: Sheet, chosen: Language) -> list[dict[str, Any]]:
    """Return the bars of a sheet: lengths in drawing units on one scale, the longest filling three quarters."""
    most = max((share for _, share in sheet.bars), default=0.0) or 1.0
    return [
        {
            "label": label,
            "text": chosen.percent(share),
            "full": BAR_UNITS,
            "full_mm": 50,
            "length": round(0.75 * BAR_UNITS * share / most, 2),
        }
        for label, share in sheet.bars
    ]
