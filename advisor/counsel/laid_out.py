"""The options of a visit laid out: keys resolved to items, gaps filled, prices found, what is not sold refused."""

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, replace
from functools import cached_property
from typing import TypeVar

from advisor.counsel.case import Case
from advisor.counsel.choices import Option
from advisor.counsel.faces import Face, face_of, known_coating, sold_coating
from advisor.counsel.phrases import Figure, Phrase, mark
from advisor.counsel.prescription import EYES, SphereCylinder, power_for_design
from advisor.counsel.pricing import best_offer, matching_offers, outside_limits, parts_price
from advisor.counsel.reach import add_made_d
from advisor.counsel.stock import BARE, Range
from advisor.counsel.stock_items import Coating, Design, Item, Material, Offer, Scene, Tint
from advisor.errors import TwolightError

K = TypeVar("K", bound=Item)


class NothingToLayOut(TwolightError):
    """The visit names no options and the range has none to fall back on, or no design or material at all."""

    text = mark("There is nothing to compare: give the visit options, or the range default_options.")


class NoneToTake(NothingToLayOut):
    """An option names no design or no material, and the range has none at all."""

    text = mark("%(place)s is left out and the range has none to take instead.")


@dataclass(frozen=True)
class Refused:
    """Why an option is refused, and the nearest thing that is not."""

    phrase: Phrase
    nearest: Mapping[str, Figure] | None = None


DARK_FROM = 0.43  # sun tints begin here (category 2 of ISO 12312-1, as quoted in public guidance)


@dataclass(frozen=True)
class Laid:
    """One option with everything looked up."""

    index: int
    option: Option
    design: Design
    material: Material
    front: Coating
    back: Coating
    tint: Tint | None
    offer: Offer | None
    price: float | None
    powers: tuple[SphereCylinder, SphereCylinder]
    refused: tuple[Refused, ...] = ()
    notes: tuple[Phrase, ...] = ()
    defaults_used: tuple[str, ...] = ()

    @cached_property
    def front_face(self) -> Face:
        """What the front is made of."""
        return face_of(self.material, known_coating(self.material, self.front))

    @cached_property
    def back_face(self) -> Face:
        """What the back is made of."""
        return face_of(self.material, known_coating(self.material, self.back))

    @property
    def goes_dark(self) -> bool:
        """Whether its tint is dark, or turns dark: what scenes of a dark tint are about."""
        tint = self.tint
        return (
            tint is not None and min(tint.luminous_transmittance, tint.luminous_transmittance_dark or 1.0) <= DARK_FROM
        )

    def is_met_in(self, scene: Scene) -> bool:
        """Whether a scene can be met in this lens: one of a dark tint needs a tint that is dark."""
        return scene.tint_state != "dark" or self.goes_dark

    @property
    def made(self) -> str:
        """Whether it is cut from a round stock blank or surfaced for the frame."""
        return (self.offer.made if self.offer else None) or "surfaced"


def without_film(option: Laid, stock: Range) -> Laid:
    """Return the same lens without a film on either face: bare, or hard coat only where it is never sold without."""
    plain = sold_coating(option.material, BARE, stock)
    return replace(option, front=plain, back=plain)


NOTE_TEXTS: dict[str, str] = {
    "hard-coat-assumed": mark(
        "This material is never sold without a hard coat: bare faces are computed as hard coat only."
    ),
    "estimated-spectrum": mark(
        "Estimated spectrum: a supplier's declared figure on the shape of the nearest built-in film."
    ),
    "price-unknown": mark("The price of a part is unknown, so the pair has none."),
    "not-an-offer": mark("The shop lists offers and this pair is none of them."),
    "centre-below-limit": mark(
        "The centre asked for, %(centre_mm)s mm, is below the least for this material and wearer."
    ),
    "edge-below-limit": mark("The thinnest edge, %(edge_mm)s mm, is below the least for this rim."),
    "front-given": mark("The front curve is the one asked for, not the shop's or the rule's."),
    "shown-as-spherical": mark("Shown as spherical curves; the real lens will be flatter."),
    "tilt-changes-power": mark(
        "The tilt of %(tilt_deg)s degrees changes the %(eye)s power by %(change_d)s D "
        "and adds a cylinder of %(cylinder_d)s D at axis %(axis)s."
    ),
    "wrap-changes-power": mark(
        "The wrap of %(wrap_deg)s degrees changes the %(eye)s power by %(change_d)s D "
        "and adds a cylinder of %(cylinder_d)s D at axis %(axis)s."
    ),
    "centre-outside-rim": mark("The optical centre lies outside the rim: choose another frame, or ask the prescriber."),
    "measured-straight-on": mark("The measured spectrum holds straight on; for light from behind it is more."),
    "finished-tint": mark("The tint's figure is the supplier's for the finished lens."),
}
REFUSAL_TEXTS: dict[str, str] = {
    "sphere-not-made": mark("%(material)s is made from %(low_d)s to %(high_d)s D; this lens needs %(sphere_d)s D."),
    "cylinder-not-made": mark(
        "%(material)s is made up to a cylinder of %(most_d)s D; this lens needs %(cylinder_d)s D."
    ),
    "not-tintable": mark("%(material)s is not sold with a tint."),
    "not-drillable": mark("%(material)s is not sold for a drilled rim."),
    "front-surface": mark("%(material)s: the front curve does not reach the rim; choose a flatter one."),
    "back-surface": mark(
        "%(material)s: the back curve does not reach the rim; choose another front or a smaller frame."
    ),
    "too-thick": mark("%(material)s: no centre up to 30 mm gives this rim its least edge."),
    "too-thin": mark("The centre asked for is too thin; the least is %(centre_mm)s mm."),
    "blank-too-small": mark("The largest blank is %(largest_mm)s mm and this frame needs %(blank_mm)s mm."),
    "tint-out-of-reach": mark("With these faces even a clear lens passes less than %(luminous_percent)s %%."),
    "tint-too-light": mark("Even a clear, bare lens of %(material)s passes less than %(luminous_percent)s %%."),
    "declared-out-of-reach": mark(
        "No built-in film can stand for a declared %(declared_percent)s %% on %(material)s: give layers or a spectrum."
    ),
}


def options_of(case: Case) -> tuple[tuple[Option, ...], bool]:
    """Return the options to lay out, and whether they are the range's default ones."""
    if case.visit.options:
        return case.visit.options, False
    return case.stock.shop.default_options or (), True


def lay_out(case: Case) -> list[Laid]:
    """Return every option of the visit, resolved.

    A design or material left out is the first option's, else that of the shop's first default option, else the first
    of the range; a coating left out is bare.

    Raises
    ------
    NothingToLayOut
        If there is no option, or the range has no design or material for one that names none.
    """
    options, _ = options_of(case)
    if not options:
        raise NothingToLayOut
    return lay_out_options(case, options)


def lay_out_options(case: Case, options: Sequence[Option]) -> list[Laid]:
    """Return these options, resolved; what one leaves out it takes from the first."""
    laid: list[Laid] = []
    for index, option in enumerate(options):
        laid.append(_one(case, option, index, laid[0] if laid else None))
    return laid


def _first(items: Sequence[K], name: str) -> K:
    if not items:
        raise NoneToTake(place=name)
    return items[0]


def _one(case: Case, option: Option, index: int, first: Laid | None) -> Laid:
    stock, defaults = case.stock, list[str]()
    design, material = (first.design, first.material) if first else (None, None)
    if option.design is not None:
        design = stock.design_of(option.design)
    else:
        defaults.append(f"options[{index}].design")
    if option.material is not None:
        material = stock.material_of(option.material)
    else:
        defaults.append(f"options[{index}].material")
    usual = next(iter(stock.shop.default_options or ()), Option())
    if design is None:
        place = f"options[{index}].design"
        design = _first(stock.design, place) if usual.design is None else stock.design_of(usual.design)
    if material is None:
        place = f"options[{index}].material"
        material = _first(stock.material, place) if usual.material is None else stock.material_of(usual.material)
    asked = (BARE, BARE) if option.coating is None else stock.faces_of(option.coating)
    if option.coating is None:
        defaults.append(f"options[{index}].coating")
    front, back = (sold_coating(material, coating, stock) for coating in asked)
    tint = stock.tint_of(option.tint)
    right, left = (
        power_for_design(
            case.compensated(eye), add_d=add_made_d(case, eye, design), kind=design.kind, near_share=design.near_share
        )
        for eye in EYES
    )
    powers = (right, left)
    offers = matching_offers(stock, design=design.key, material=material, front=front, back=back, tint=tint)
    offer = best_offer(offers, powers)
    price = parts_price(design, material=material, front=front, back=back, tint=tint) if offer is None else offer.price
    notes = list(_notes(stock, offer, price, (front, back), asked, tint))
    return Laid(
        index=index,
        option=option,
        design=design,
        material=material,
        front=front,
        back=back,
        tint=tint,
        offer=offer,
        price=price,
        powers=powers,
        refused=(
            *not_sold(case, stock, material, tint, powers),
            *_not_known(material, {front.key: front, back.key: back}),
        ),
        notes=tuple(notes),
        defaults_used=tuple(defaults),
    )


def _not_known(material: Material, coatings: Mapping[str, Coating]) -> list[Refused]:
    """Refuse a declared figure that no built-in film on this material can stand for."""
    return [
        Refused(
            Phrase(
                "declared-out-of-reach",
                {
                    "declared_percent": 100 * coating.declared.luminous_reflectance,
                    "material": material.label or material.key,
                },
            )
        )
        for coating in coatings.values()
        if coating.declared is not None and known_coating(material, coating) is not coating
    ]


def _notes(
    stock: Range,
    offer: Offer | None,
    price: float | None,
    faces: tuple[Coating, Coating],
    asked: tuple[Coating, Coating],
    tint: Tint | None,
) -> list[Phrase]:
    found = []
    if faces != asked:
        found.append(Phrase("hard-coat-assumed"))
    if any(face.declared is not None for face in faces):
        found.append(Phrase("estimated-spectrum"))
    if any(face.spectrum is not None for face in faces):
        found.append(Phrase("measured-straight-on"))
    if price is None:
        found.append(Phrase("price-unknown"))
    if stock.offer and offer is None:
        found.append(Phrase("not-an-offer"))
    if tint is not None and tint.finished:
        found.append(Phrase("finished-tint"))
    return found


def not_sold(
    case: Case, stock: Range, material: Material, tint: Tint | None, powers: tuple[SphereCylinder, SphereCylinder]
) -> list[Refused]:
    """Say what of the material's limits this pair breaks, each with the nearest material that does not."""
    found = []
    name = material.label or material.key
    outside = outside_limits(material, powers)
    if outside is not None:
        broken, worst = outside
        nearest = _nearest(stock, material, lambda other: outside_limits(other, powers) is None)
        if broken == "sphere_range_d" and material.sphere_range_d is not None:
            low, high = material.sphere_range_d
            figures: dict[str, Figure] = {"material": name, "low_d": low, "high_d": high, "sphere_d": worst.sphere_d}
            found.append(Refused(Phrase("sphere-not-made", figures), nearest))
        else:
            figures = {"material": name, "most_d": material.cylinder_max_d, "cylinder_d": worst.cylinder_d}
            found.append(Refused(Phrase("cylinder-not-made", figures), nearest))
    if tint is not None and material.tintable is False:
        nearest = _nearest(stock, material, lambda other: other.tintable is not False)
        found.append(Refused(Phrase("not-tintable", {"material": name}), nearest))
    if case.rim == "drilled" and material.drillable is False:
        nearest = _nearest(stock, material, lambda other: other.drillable is not False)
        found.append(Refused(Phrase("not-drillable", {"material": name}), nearest))
    return found


def _nearest(stock: Range, material: Material, fits: Callable[[Material], bool]) -> dict[str, Figure] | None:
    """Return the material nearest in index for which a condition holds."""
    fitting = [other for other in stock.material if fits(other)]
    if not fitting:
        return None
    best = min(fitting, key=lambda other: abs(other.index - material.index))
    return {"material": best.key}
