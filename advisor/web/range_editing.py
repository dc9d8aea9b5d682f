"""Changing the range item by item: a form made from an item's own model, and the whole range checked before it is kept.

What a single line cannot hold (lists, layers, sources) is typed as the TOML value that stands in the range file.
"""

import types
import typing
from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass
from typing import Any, Literal, Union, get_args, get_origin

from pydantic import BaseModel
from pydantic.fields import FieldInfo

from advisor.counsel.faults import Fault, Faults, fault
from advisor.counsel.files import parse_toml
from advisor.counsel.phrases import mark
from advisor.counsel.stock import Range, Shop, check_range, parse_range, range_to_toml
from advisor.counsel.stock_items import Coating, Design, Material, Offer, Scene, Tint
from advisor.counsel.toml_writing import toml_text
from advisor.errors import TwolightError
from advisor.records.store import Store
from advisor.web.operators import current_operator
from advisor.web.range_words import UNITS
from advisor.web.stock_loader import current_shelf

Content = dict[str, Any]

SECTIONS: Mapping[str, type[BaseModel]] = {
    "material": Material,
    "coating": Coating,
    "tint": Tint,
    "design": Design,
    "offer": Offer,
    "scene": Scene,
}
LISTED: Mapping[str, tuple[str, ...]] = {
    "material": ("label", "n_d", "n_e", "abbe", "density_g_cm3", "price"),
    "coating": ("label", "hard_coat", "care", "price"),
    "tint": ("label", "kind", "luminous_transmittance", "price"),
    "design": ("label", "kind", "form", "price"),
    "offer": ("design", "material", "coating", "tint", "faces", "price", "days"),
    "scene": ("label", "kind", "where", "background_cd_m2"),
}


class RangeChanged(TwolightError):
    """Somebody changed the range after the editor saw it."""

    text = mark("The range was changed after you opened it; nothing was overwritten. Open it again.")


class NoSuchItem(TwolightError):
    """The range has no item at this place."""

    text = mark("The range has no such item; it may have been removed.")


@dataclass(frozen=True)
class Box:
    """One field of an item's form: ``kind`` is line, number, paragraph, choice, truth or value (TOML)."""

    name: str
    kind: str
    unit: str
    choices: tuple[str, ...] = ()
    required: bool = False


def _arms(annotation: Any) -> list[Any]:
    """Return the alternatives of an annotation, without None."""
    if get_origin(annotation) is typing.Annotated:
        return _arms(get_args(annotation)[0])
    if get_origin(annotation) in (Union, types.UnionType):
        return [arm for part in get_args(annotation) if part is not type(None) for arm in _arms(part)]
    return [annotation]


def _kind(info: FieldInfo) -> tuple[str, tuple[str, ...]]:
    arms = _arms(info.annotation)
    if len(arms) > 1:
        return "value", ()
    only = arms[0]
    if get_origin(only) is Literal:
        return "choice", tuple(map(str, get_args(only)))
    simple = {bool: "truth", int: "number", float: "number", str: "line"}
    return (simple[only], ()) if only in simple else ("value", ())


FIRST = ("key", "label", "design", "material", "coating", "tint", "price")  # the rest in the order of the model
PARAGRAPHS = frozenset({"care", "expect", "contact"})
ON_SHEET = ("paper", "paragraph", "lines_off")  # of the shop; they have a page of their own, and no box here


def boxes(section: str) -> list[Box]:
    """Return the fields of a section's form, in the order of the range file."""
    model = Shop if section == "shop" else SECTIONS[section]
    found = []
    ordered = sorted(model.model_fields, key=lambda name: FIRST.index(name) if name in FIRST else len(FIRST))
    for name in ordered:
        if model is Shop and name in ON_SHEET:
            continue
        info = model.model_fields[name]
        kind, choices = _kind(info)
        unit = "" if name == "n_d" else max((end for end in UNITS if name.endswith(end)), key=len, default="")
        kind = "paragraph" if name in PARAGRAPHS else kind
        found.append(Box(name, kind, UNITS.get(unit, ""), choices, info.is_required()))
    return found


def typed(section: str, item: BaseModel) -> dict[str, str]:
    """Return an item as its form shows it."""
    content = item.model_dump(mode="json", exclude_none=True)
    return {box.name: _shown(box, content.get(box.name)) for box in boxes(section)}


def _shown(box: Box, value: Any) -> str:
    if value is None:
        return ""
    if box.kind == "value":
        return toml_text({"x": {"v": value}}).split("=", 1)[1].strip()
    if box.kind == "truth":
        return "yes" if value else "no"
    return repr(value).removesuffix(".0") if isinstance(value, float) else str(value)


def item_content(section: str, form: Mapping[str, str], *, place: str) -> Content:
    """Return what a form says, as the range file writes it; numbers stay text, which the model reads.

    Raises
    ------
    Faults
        For a value that is not TOML.
    """
    content: Content = {}
    faults: list[Fault] = []
    for box in boxes(section):
        text = form.get(box.name, "").strip()
        if not text:
            continue
        try:
            content[box.name] = _read(box, text)
        except Faults as error:
            faults += [Fault("", f"{place}.{box.name}", one.phrase) for one in error.faults]
    if faults:
        raise Faults(faults)
    return content


def _read(box: Box, text: str) -> Any:
    if box.kind == "truth":
        return {"yes": True, "no": False}.get(text, text)
    if box.kind != "value":
        return text
    if box.name == "source" and not text.startswith(("{", '"', "'")):
        return text
    found = parse_toml(f"v = {text}")
    if set(found) != {"v"}:
        raise Faults([fault("not-understood")])
    return found["v"]


def _all(stock: Range) -> Content:
    return stock.model_dump(mode="json", exclude_none=True)


def items(stock: Range, section: str) -> tuple[BaseModel, ...]:
    """Return the items of a section, or raise NoSuchItem for a section that does not exist."""
    if section not in SECTIONS:
        raise NoSuchItem
    return typing.cast("tuple[BaseModel, ...]", getattr(stock, section))


def item(stock: Range, section: str, place: int) -> BaseModel:
    """Return one item, or raise NoSuchItem."""
    found = items(stock, section)
    if not 0 <= place < len(found):
        raise NoSuchItem
    return found[place]


def copied(section: str, shown: Mapping[str, str], stock: Range) -> dict[str, str]:
    """Return an item's form for a copy, with a key of its own."""
    keys = {getattr(one, "key", "") for one in items(stock, section)}
    wanted = key = f"{shown.get('key', '')}-copy"[:56]
    for number in range(2, 100):
        if key not in keys:
            break
        key = f"{wanted}-{number}"
    return {**shown, "key": key} if "key" in shown else dict(shown)


def with_item(stock: Range, section: str, place: int, form: Mapping[str, str]) -> Range:
    """Return the range with one item changed, or with a new one where ``place`` is just behind the last.

    Raises
    ------
    Faults
        With the places of the range file, as ``material[3].abbe``.
    """
    items(stock, section)
    content = _all(stock)
    row = content[section]
    if not 0 <= place <= len(row):
        raise NoSuchItem
    content[section] = [*row[:place], item_content(section, form, place=f"{section}[{place}]"), *row[place + 1 :]]
    return check_range(content, from_form=True)


def without_item(stock: Range, section: str, place: int) -> Range:
    """Return the range without one item; refused while something else names it."""
    item(stock, section, place)
    content = _all(stock)
    content[section] = [one for k, one in enumerate(content[section]) if k != place]
    return check_range(content)


def with_shop(stock: Range, form: Mapping[str, str]) -> Range:
    """Return the range with the shop's own fields changed, but for those of the wearer's sheet."""
    content = _all(stock)
    kept = {name: content["shop"][name] for name in ON_SHEET if name in content["shop"]}
    return check_range({**content, "shop": kept | item_content("shop", form, place="shop")}, from_form=True)


def with_sheet(stock: Range, changed: Mapping[str, Any]) -> Range:
    """Return the range with some of the shop's fields changed; an empty one is left out from now on."""
    content = _all(stock)
    shop = {name: value for name, value in {**content["shop"], **changed}.items() if value not in ("", [])}
    return check_range({**content, "shop": shop})


def from_file(data: bytes, *, name: str) -> Range:
    """Return the range of a file that was sent, or raise Faults."""
    try:
        text = data.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        raise Faults([fault("not-utf8", file=name)]) from error
    return parse_range(text, file=name)


def keep(store: Store, stock: Range, *, seen: str, logo: bytes | None = None) -> None:
    """Make this the shop's range, unless it was changed since the editor saw it; ``logo`` is stored with it."""
    if current_shelf(store).hash != seen:
        raise RangeChanged
    store.set_range(range_to_toml(stock), who=current_operator(), logo=logo)


def beside(faults: Iterable[Fault], *, place: str, names: Iterable[str]) -> tuple[dict[str, list[Fault]], list[Fault]]:
    """Sort faults into those of one item's fields and the rest."""
    known = set(names)
    found: dict[str, list[Fault]] = {}
    rest: list[Fault] = []
    for one in faults:
        name = _name_in(one.field, place)
        if name in known:
            found.setdefault(name, []).append(one)
        else:
            rest.append(one)
    return found, rest


def _name_in(path: str, place: str) -> str:
    inside = path.removeprefix(f"{place}.") if path.startswith(f"{place}.") else ""
    return inside.split(".", 1)[0].split("[", 1)[0]


def listed(section: str, stock: Range) -> Iterator[tuple[int, dict[str, str]]]:
    """Yield the items of a section as a table shows them."""
    kinds = {box.name: box for box in boxes(section)}
    for place, one in enumerate(items(stock, section)):
        content = one.model_dump(mode="json", exclude_none=True)
        yield place, {name: _shown(kinds[name], content.get(name)) for name in LISTED[section]}
