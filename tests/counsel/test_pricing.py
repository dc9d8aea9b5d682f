from typing import Any

import pytest

from advisor.counsel.prescription import SphereCylinder, transposed
from advisor.counsel.pricing import best_offer, matching_offers, outside_limits, parts_price
from advisor.counsel.stock import BARE, check_range
from advisor.counsel.stock_items import Coating, Design, Limits, Material, Offer, Tint

PLAIN = SphereCylinder(-2.0)
LENS: dict[str, Any] = {"design": "single-vision", "material": "hard-resin-150", "coating": "broadband"}


def coating(price: float | None) -> Coating:
    return Coating(key="film", layers=(("SiO2", 90.0),), price=price)


def price(
    *, design: float | None = 60, material: float | None = 20, front: float | None = 70, back: float | None = 70,
    tint: float | None = 0.0, tinted: bool = False,
) -> float | None:  # fmt: skip
    return parts_price(
        Design(key="d", kind="single-vision", price=design),
        material=Material(key="m", n_d=1.5, abbe=58, density_g_cm3=1.3, price=material),
        front=coating(front),
        back=coating(back),
        tint=Tint(key="t", luminous_transmittance=0.5, price=tint) if tinted else None,
    )


def test_a_pair_costs_design_material_coating_and_tint() -> None:
    assert price() == 150.0
    assert price(tint=25, tinted=True) == 175.0


def test_two_unlike_faces_cost_the_mean_of_the_two() -> None:
    assert price(front=0, back=70) == 115.0


@pytest.mark.parametrize("part", ["design", "material", "front", "back"])
def test_one_unknown_price_makes_the_whole_unknown(part: str) -> None:
    prices: dict[str, Any] = {part: None}
    assert price(**prices) is None


def test_a_tint_of_unknown_price_makes_the_whole_unknown_and_no_tint_costs_nothing() -> None:
    assert price(tint=None, tinted=True) is None
    assert price(tint=None, tinted=False) == 150.0


# Ranges are listed in minus-cylinder writing: -6.00 with -2.00 is within a sphere of -6.00 and a cylinder of 2.00.
@pytest.mark.parametrize(
    ("power", "broken"),
    [
        (SphereCylinder(-6.0, -2.0, 30.0), None),
        (SphereCylinder(-6.25, -1.0, 30.0), ("sphere_range_d", -6.25)),
        (SphereCylinder(4.0), None),
        (SphereCylinder(4.25), ("sphere_range_d", 4.25)),
        (SphereCylinder(-1.0, -2.25, 30.0), ("cylinder_max_d", -1.0)),
    ],
)
def test_limits_hold_at_their_edge_in_either_writing(power: SphereCylinder, broken: tuple[str, float] | None) -> None:
    limits = Limits(sphere_range_d=(-6.0, 4.0), cylinder_max_d=2.0)
    for written in (power, transposed(power)):
        found = outside_limits(limits, [PLAIN, written])
        assert (found and (found[0], found[1].sphere_d)) == broken


def test_limits_left_out_set_none() -> None:
    assert outside_limits(Limits(), [SphereCylinder(-25.0, -9.0, 5.0)]) is None


def offers_for(
    offers: list[dict[str, Any]], *, front: str = "broadband", back: str = "broadband"
) -> list[float | None]:
    stock = check_range({"offer": offers})
    material = stock.material_of(offers[0]["material"])
    found = matching_offers(
        stock,
        design="single-vision",
        material=material,
        front=stock.coating_of(front),
        back=stock.coating_of(back),
        tint=None,
    )
    return [offer.price for offer in found]


def test_an_offer_is_this_very_pair() -> None:
    offers = [
        {**LENS, "price": 1},
        {**LENS, "coating": "bare", "price": 2},
        {**LENS, "tint": "grey-50", "price": 3},
        {**LENS, "design": "reading", "price": 4},
        {**LENS, "material": "mid-index-156", "price": 5},
        {**LENS, "faces": "back", "price": 6},
    ]
    assert offers_for(offers) == [1]
    assert offers_for(offers, front="bare") == [6]
    assert offers_for(offers, back="bare", front="bare") == [2]
    assert offers_for(offers, front="magnesium-fluoride") == []


def test_an_offer_of_a_bare_lens_never_sold_bare_is_the_hard_coated_one() -> None:
    lens = {"design": "single-vision", "material": "thiourethane-160", "coating": "bare", "price": 7}
    assert offers_for([lens], front="hard-coat-only", back="hard-coat-only") == [7]


def offer(price: float | None, low: float = -4.0) -> Offer:
    return Offer(**LENS, price=price, sphere_range_d=(low, 4.0))


def test_the_cheapest_offer_made_in_both_powers_wins_and_an_unpriced_one_comes_last() -> None:
    powers = [PLAIN, SphereCylinder(-5.0)]
    assert best_offer([offer(50), offer(90, low=-6.0), offer(80, low=-6.0)], powers) == offer(80, low=-6.0)
    assert best_offer([offer(None, low=-6.0), offer(80, low=-6.0)], powers) == offer(80, low=-6.0)
    assert best_offer([offer(None, low=-6.0)], powers) == offer(None, low=-6.0)
    assert best_offer([offer(0.0, low=-6.0), offer(80, low=-6.0)], powers) == offer(0.0, low=-6.0)
    assert best_offer([offer(50)], powers) is None
    assert best_offer([], powers) is None


def test_bare_costs_nothing() -> None:
    assert BARE.price == 0.0
