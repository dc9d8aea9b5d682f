"""What a pair costs: an offer beats the sum of its parts; a part whose price is unknown makes the whole unknown."""

from collections.abc import Iterable

from advisor.counsel.faces import sold_coating
from advisor.counsel.prescription import SphereCylinder, in_minus_cylinder
from advisor.counsel.stock import BARE, Range
from advisor.counsel.stock_items import Coating, Design, Limits, Material, Offer, Tint


def parts_price(
    design: Design, *, material: Material, front: Coating, back: Coating, tint: Tint | None
) -> float | None:
    """Return design + material + coating + tint for the pair; two unlike faces cost the mean of the two coatings."""
    coating = _sum([front.price, back.price])
    parts = [design.price, material.price, None if coating is None else coating / 2]
    return _sum([*parts, 0.0 if tint is None else tint.price])


def _sum(prices: Iterable[float | None]) -> float | None:
    known = list(prices)
    return None if None in known else float(sum(price for price in known if price is not None))


def matching_offers(
    stock: Range, *, design: str, material: Material, front: Coating, back: Coating, tint: Tint | None
) -> list[Offer]:
    """Return the offers that are this very pair, whatever their limits of power.

    An offer for the back alone leaves the front bare, or hard coated only where the material is never sold without.
    """
    front_is_bare = front.key == BARE.key or front.layers == ()
    return [
        offer
        for offer in stock.offer
        if offer.design == design
        and offer.material == material.key
        and sold_coating(material, stock.coating_of(offer.coating), stock).key == back.key
        and offer.tint == (None if tint is None else tint.key)
        and (front.key == back.key if offer.faces == "both" else front_is_bare)
    ]


def outside_limits(limits: Limits, powers: Iterable[SphereCylinder]) -> tuple[str, SphereCylinder] | None:
    """Return the name of a limit and the power that breaks it, or None; a limit left out sets none.

    The power is judged, and returned, in minus-cylinder writing, as ranges are listed.
    """
    for power in powers:
        minus = in_minus_cylinder(power)
        if limits.sphere_range_d is not None:
            low, high = limits.sphere_range_d
            if not low <= minus.sphere_d <= high:
                return "sphere_range_d", minus
        if limits.cylinder_max_d is not None and abs(minus.cylinder_d) > limits.cylinder_max_d:
            return "cylinder_max_d", minus
    return None


def best_offer(offers: Iterable[Offer], powers: Iterable[SphereCylinder]) -> Offer | None:
    """Return the cheapest offer made in these powers; one without a price comes last."""
    wanted = list(powers)
    made = [offer for offer in offers if outside_limits(offer, wanted) is None]
    return min(made, key=lambda offer: (offer.price is None, offer.price or 0.0), default=None)
