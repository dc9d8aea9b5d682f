"""What was said of a saved visit on its day, beside what would be said now with today's range and program."""

from dataclasses import dataclass

from flask import Blueprint, render_template
from pydantic import ValidationError

from advisor import __version__
from advisor.counsel.compare import compare
from advisor.counsel.comparison import Comparison
from advisor.counsel.faults import Faults
from advisor.counsel.phrases import mark
from advisor.counsel.stock import Range
from advisor.counsel.then_now import Part, Prices, then_and_now
from advisor.counsel.visit import parse_visit
from advisor.records.visits import SavedVisit
from advisor.web.desk import current_desk
from advisor.web.screen import screen
from advisor.web.stock_loader import Shelf, current_shelf, shelf_of

then_now = Blueprint("then_now", __name__)

OLD_ANSWER = mark("What was said then was kept in a form that this version of the program cannot read.")
NOT_NOW = mark("With today's range nothing can be worked out for this visit:")


@dataclass(frozen=True)
class Shown:
    """Both answers row by row, or the sentences that say why they cannot be laid side by side."""

    parts: tuple[Part, ...] = ()
    hindrance: str = ""
    lines: tuple[str, ...] = ()

    @property
    def differing(self) -> int:
        """How many rows differ."""
        return sum(part.differing for part in self.parts)


def is_of_today(saved: SavedVisit, shelf: Shelf) -> bool:
    """Tell whether a visit was worked out with the range and the program of today."""
    return saved.range_hash == shelf.hash and saved.version == __version__


@then_now.get("/visits/<visit_id>/then")
def then(visit_id: str) -> str:
    """Show what was said then beside what would be said now; nothing that is stored changes."""
    store = current_desk().store
    saved, shelf = store.get_visit(visit_id), current_shelf(store)
    return render_template(
        "then_now.html",
        saved=saved,
        shown=_shown(saved, shelf.stock, shelf_of(store, saved.range_hash).stock),
        same_range=saved.range_hash == shelf.hash,
        version=__version__,
    )


def _shown(saved: SavedVisit, stock: Range, stock_then: Range) -> Shown:
    try:
        answer_then = Comparison.model_validate_json(saved.answer_json)
    except ValidationError:
        return Shown(hindrance=OLD_ANSWER)
    try:
        answer_now = compare(parse_visit(saved.visit_json), stock, translator=screen())
    except Faults as error:
        return Shown(hindrance=NOT_NOW, lines=tuple(error.lines(screen())))
    prices = _prices(stock_then.currency, stock.currency)
    return Shown(tuple(then_and_now(answer_then, answer_now, prices=prices, translator=screen())))


def _prices(currency_then: str, currency_now: str) -> Prices:
    """Return how prices are written; those of two currencies have no difference."""
    speaker = screen()
    one_currency = currency_then == currency_now
    return Prices(
        lambda price: speaker.money(price, currency=currency_then),
        lambda price: speaker.money(price, currency=currency_now),
        (lambda more: speaker.money(more, currency=currency_now, signed=True)) if one_currency else None,
    )
