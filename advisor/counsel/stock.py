"""The range file (TOML): everything a shop sells, read, completed from the built-in range, checked and written."""

from collections.abc import Iterable, Iterator, Mapping, Sequence
from functools import cache
from pathlib import Path
from typing import Annotated, Any, Literal, TypeVar

from pydantic import Field, ValidationError

from advisor.counsel.choices import CoatingRef, Faces, MaterialRef, Option, TintRef, faces_of
from advisor.counsel.faults import Fault, Faults, fault, faults_from, unknown_key
from advisor.counsel.fields import Choice, Key, Line, Number, Paragraph, Strict
from advisor.counsel.files import parse_toml, read_text
from advisor.counsel.phrases import mark
from advisor.counsel.regions import REGIONS
from advisor.counsel.sheet_switches import switch_faults
from advisor.counsel.stock_items import IN_PLACE, Coating, Design, Item, Material, Offer, Scene, Tint
from advisor.counsel.toml_writing import toml_text
from advisor.errors import TwolightError
from advisor.resources import data_file

CURRENCY = "EUR"  # where a range names none
MOST_OF_PARAGRAPH = 600  # letters of the shop's own paragraph, so that a sheet keeps to its pages
BARE = Coating(key="bare", label="Bare", price=0.0, layers=())

K = TypeVar("K", bound=Item | Scene)


class UnknownStock(TwolightError):
    """A key that the range does not hold."""

    text = mark("“%(key)s” is not in the range.")


class Shop(Strict):
    """The shop itself.

    ``region`` names the tolerances, paper, emergency wording and tint names that apply: one of ``regions.REGIONS``
    (international, eu, uk, us); left out, it is the built-in range's, international. ``paper`` left out is the
    region's. ``paragraph`` is printed on the wearer's sheet as written, in every language; ``lines_off`` names lines
    of that sheet that the shop leaves out, which no caution can be (see ``sheet_switches``).
    """

    name: Line | None = None
    contact: Paragraph | None = None
    region: Key | None = None
    currency: Annotated[str, Field(pattern=r"^[A-Z]{3}$")] | None = None
    retention_months: Number[Annotated[int, Field(ge=1, le=1200)] | None] = None
    paper: Choice[Literal["A4", "letter"] | None] = None
    paragraph: Annotated[Paragraph, Field(max_length=MOST_OF_PARAGRAPH)] | None = None
    lines_off: Annotated[tuple[Key, ...], Field(max_length=200)] | None = None
    cleaning: tuple[Key, ...] | None = None
    default_options: tuple[Option, ...] | None = None


class Range(Strict):
    """Everything a shop sells; the names are those of the file."""

    material: tuple[Material, ...] = ()
    coating: tuple[Coating, ...] = ()
    tint: tuple[Tint, ...] = ()
    design: tuple[Design, ...] = ()
    offer: tuple[Offer, ...] = ()
    scene: tuple[Scene, ...] = ()
    shop: Shop = Shop()

    @property
    def currency(self) -> str:
        """The currency that prices are in."""
        return self.shop.currency or CURRENCY

    def material_of(self, ref: MaterialRef) -> Material:
        """Return the material of a key, or the one given in place."""
        return ref if isinstance(ref, Material) else _named(self.material, ref)

    def coating_of(self, ref: Key | Coating) -> Coating:
        """Return the coating of a key, or the one given in place."""
        return ref if isinstance(ref, Coating) else _named(self.coating, ref)

    def faces_of(self, ref: CoatingRef) -> tuple[Coating, Coating]:
        """Return the coatings of the front and of the back."""
        front, back = faces_of(ref)
        return self.coating_of(front), self.coating_of(back)

    def tint_of(self, ref: TintRef | None) -> Tint | None:
        """Return the tint of a key, a number or one given in place; None is a clear lens."""
        if ref is None or isinstance(ref, Tint):
            return ref
        return _named(self.tint, ref) if isinstance(ref, str) else Tint(luminous_transmittance=ref)

    def design_of(self, key: Key) -> Design:
        """Return the design of a key."""
        return _named(self.design, key)

    def scenes_of(self, keys: Iterable[Key] | None) -> tuple[Scene, ...]:
        """Return the scenes of some keys; None means all."""
        return self.scene if keys is None else tuple(_named(self.scene, key) for key in keys)


def _named(items: Iterable[K], key: str) -> K:
    for item in items:
        if item.key == key:
            return item
    raise UnknownStock(key=key)


def keys_of(items: Iterable[Item | Scene]) -> list[str]:
    """List the keys of a section."""
    return [item.key for item in items]


def option_faults(option: Option | Offer, *, stock: Range, place: str, file: str = "") -> Iterator[Fault]:
    """Find keys of an option or offer that the range does not hold."""
    named: list[tuple[str, object, Sequence[Item]]] = [
        ("design", option.design, stock.design),
        ("material", option.material, stock.material),
        ("tint", option.tint, stock.tint),
    ]
    if isinstance(option.coating, Faces):
        named += [(f"coating.{face}", getattr(option.coating, face), stock.coating) for face in ("front", "back")]
    else:
        named.append(("coating", option.coating, stock.coating))
    for name, ref, items in named:
        if isinstance(ref, str) and ref not in keys_of(items):
            yield unknown_key(ref, keys=keys_of(items), file=file, field=f"{place}.{name}")


def _section_faults(stock: Range, section: str, file: str) -> Iterator[Fault]:
    """Find items without a key of their own and keys that stand twice."""
    keys = keys_of(getattr(stock, section))
    for place, key in enumerate(keys):
        field = f"{section}[{place}].key"
        if key == IN_PLACE:
            yield fault("missing", file=file, field=field)
        elif key in keys[:place]:
            yield fault("repeated-key", file=file, field=field, figures={"key": key})


def range_faults(stock: Range, *, file: str = "") -> Iterator[Fault]:
    """Find everything in a range that its fields alone do not show: keys, references, and a bare that is not bare."""
    for section in ("material", "coating", "tint", "design", "scene"):
        yield from _section_faults(stock, section, file)
    for place, coating in enumerate(stock.coating):
        if coating.key == "bare" and (coating.layers != () or coating.hard_coat):
            yield fault("bare-has-film", file=file, field=f"coating[{place}]")
    if stock.shop.region is not None and stock.shop.region not in REGIONS:
        yield fault("not-one-of", file=file, field="shop.region", figures={"expected": ", ".join(REGIONS)})
    yield from switch_faults(stock.shop.lines_off or (), file=file)
    for place, offer in enumerate(stock.offer):
        yield from option_faults(offer, stock=stock, place=f"offer[{place}]", file=file)
    for place, option in enumerate(stock.shop.default_options or ()):
        yield from option_faults(option, stock=stock, place=f"shop.default_options[{place}]", file=file)


def _fitting_defaults(stock: Range) -> tuple[Option, ...]:
    """Choose default options for a shop that names none: ours where it sells them, else what it sells first."""
    kept = [o for o in stock.shop.default_options or () if not any(option_faults(o, stock=stock, place=""))]
    if stock.offer:
        kept = [
            Option(
                design=offer.design,
                material=offer.material,
                coating=offer.coating if offer.faces == "both" else Faces(back=offer.coating),
                tint=offer.tint,
            )
            for offer in stock.offer[:3]
            if not any(option_faults(offer, stock=stock, place=""))
        ]
    elif not kept and stock.design and stock.material:
        kept = [
            Option(design=stock.design[0].key, material=stock.material[0].key, coating=coating.key)
            for coating in stock.coating[:3]
        ]
    return tuple(kept)


def check_range(
    data: Mapping[str, Any], *, file: str = "", folder: Path | None = None, from_form: bool = False
) -> Range:
    """Check the content of a range file and complete it from the built-in range, or raise :class:`Faults`.

    A section left out, and a field left out of ``[shop]``, is the built-in one. ``folder`` is where spectrum files may
    lie; without it they are refused.
    """
    complete = {**_builtin_content(), **data}
    given_shop = data.get("shop", {})
    if isinstance(given_shop, dict):
        complete["shop"] = {**_builtin_content()["shop"], **given_shop}
    context = {"folder": folder, "from_form": from_form}
    try:
        stock = Range.model_validate(complete, context=context)
    except ValidationError as error:
        raise Faults(faults_from(error, model=Range, file=file)) from error
    if "bare" not in keys_of(stock.coating):
        stock = stock.model_copy(update={"coating": (BARE, *stock.coating)})
    if "default_options" not in given_shop:
        shop = stock.shop.model_copy(update={"default_options": _fitting_defaults(stock)})
        stock = stock.model_copy(update={"shop": shop})
    if faults := list(range_faults(stock, file=file)):
        raise Faults(faults)
    return stock


def parse_range(text: str, *, file: str = "", folder: Path | None = None) -> Range:
    """Read the text of a range file, or raise :class:`Faults`."""
    return check_range(parse_toml(text, file=file), file=file, folder=folder)


def read_range(path: Path) -> Range:
    """Read a range file, with spectrum files beside it, or raise :class:`Faults`."""
    return parse_range(read_text(path), file=str(path), folder=path.parent)


@cache
def _builtin_content() -> dict[str, Any]:
    return parse_toml(data_file("counsel", "range.toml").read_text(encoding="utf-8"), file="range.toml")


@cache
def builtin_range() -> Range:
    """Return the range that comes with the program."""
    return check_range({}, file="range.toml")


def range_to_toml(stock: Range) -> str:
    """Write everything in a range as one file that reads back to an equal range; measured spectra become rows.

    An empty section is stated, or it would read as the built-in one.
    """
    return toml_text(stock.model_dump(exclude_none=True))
