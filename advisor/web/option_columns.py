"""Changing the row of options: added, copied, moved, removed; baseline and order point at the same one."""

from collections.abc import Mapping, Sequence

from advisor.web.form_fields import COUNT, MOST_OPTIONS, OPTION, Fields, option_count

POINTERS = ("baseline", "ordered")
AS_FIRST = ("design", "material")  # left empty, an option takes these from the first


def with_option_added(fields: Mapping[str, str]) -> Fields:
    """Return the form with one more option at the end, a copy of the last, up to the most there may be."""
    return with_option_copied(fields, option_count(fields) - 1)


def with_option_copied(fields: Mapping[str, str], place: int) -> Fields:
    """Return the form with a copy of one option right beside it, up to the most there may be."""
    row = list(range(option_count(fields)))
    if len(row) >= MOST_OPTIONS or place not in row:
        return dict(fields)
    return _rowed(fields, [*row[: place + 1], place, *row[place + 1 :]])


def with_option_moved(fields: Mapping[str, str], place: int, *, by: int) -> Fields:
    """Return the form with one option in the place of its neighbour; at the end of the row nothing moves."""
    row = list(range(option_count(fields)))
    if place not in row or place + by not in row:
        return dict(fields)
    row[place], row[place + by] = row[place + by], row[place]
    return _rowed(fields, row)


def with_option_removed(fields: Mapping[str, str], place: int) -> Fields:
    """Return the form without one option; the last one stays, and what pointed behind it moves up."""
    row = list(range(option_count(fields)))
    if len(row) == 1 or place not in row:
        return dict(fields)
    return _rowed(fields, [k for k in row if k != place])


def with_option_laid_out(fields: Mapping[str, str], parts: Mapping[str, str]) -> Fields:
    """Return the form with one more option made of these fields, up to the most there may be."""
    place = option_count(fields)
    if place >= MOST_OPTIONS or not parts or not parts.keys() <= set(OPTION):
        return dict(fields)
    laid = {f"options.{place}.{name}": parts.get(name, "") for name in OPTION}
    grown = _rowed(fields, [*range(place), place - 1])
    return {**grown, **laid}


def _rowed(fields: Mapping[str, str], row: Sequence[int]) -> Fields:
    """Return the form with its options in the order of ``row``, which names each by where it stood before."""
    changed = {name: text for name, text in fields.items() if not name.startswith("options.")}
    for new, old in enumerate(row):
        changed |= {f"options.{new}.{name}": _part(fields, old, name, stays=row[0] == 0) for name in OPTION}
    count = option_count(fields)
    changed |= {name: _pointer(name, fields.get(name, ""), row, count) for name in POINTERS}
    return {**changed, COUNT: str(len(row))}


def _part(fields: Mapping[str, str], place: int, name: str, *, stays: bool) -> str:
    """Return a field of an option; where the first option does not stay so, what is taken from it is written out."""
    text = fields.get(f"options.{place}.{name}", "")
    return text or ("" if stays or name not in AS_FIRST else fields.get(f"options.0.{name}", ""))


def _pointer(name: str, text: str, row: Sequence[int], count: int) -> str:
    """Return what points at the same option in the new row; a visit may hold options beyond those the form shows."""
    if not (text.isascii() and text.isdigit() and len(text) < 3):
        return text
    if int(text) >= count:
        return str(int(text) + len(row) - count)
    if int(text) in row:
        return str(row.index(int(text)))
    return "0" if name == "baseline" else ""
