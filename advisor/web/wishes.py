"""What a button of the Counter asks for: the value it is sent with, and the form after it."""

from collections.abc import Callable, Mapping

from advisor.web.advice_view import LAY, laid_out_fields
from advisor.web.form_fields import Fields
from advisor.web.option_columns import (
    with_option_added,
    with_option_copied,
    with_option_laid_out,
    with_option_moved,
    with_option_removed,
)
from advisor.web.pasted_line import filled

ADD = "add"
FILL = "line"  # fill the prescription from the line typed in the form
UNDO, REDO = "undo", "redo"
APART = "apart"  # go on as a form of its own, where another window has changed this one

# Buttons of one option: their value ends in its place, counted from 0, as in ``copy-1``.
AT_PLACE: Mapping[str, Callable[[Mapping[str, str], int], Fields]] = {
    "copy": with_option_copied,
    "left": lambda fields, place: with_option_moved(fields, place, by=-1),
    "right": lambda fields, place: with_option_moved(fields, place, by=1),
    "remove": with_option_removed,
}


def wished(fields: Mapping[str, str], wish: str) -> Fields:
    """Return the form after a button; a value that no button has changes nothing."""
    if wish == ADD:
        return with_option_added(fields)
    if wish == FILL:
        return filled(fields)
    if wish.startswith(LAY):
        return with_option_laid_out(fields, laid_out_fields(wish))
    kind, _, place = wish.partition("-")
    if kind in AT_PLACE and place.isascii() and place.isdigit() and len(place) < 3:
        return AT_PLACE[kind](fields, int(place))
    return dict(fields)
