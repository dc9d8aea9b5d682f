"""What advice considers: the options laid out, everything the shop sells that may fit, and the lens worn now."""

from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass, replace
from typing import TypeVar

import numpy as np
from numpy.typing import NDArray

from advisor.counsel.case import Case
from advisor.counsel.cautions import LensLight
from advisor.counsel.choices import Faces, Option, TintRef
from advisor.counsel.laid_out import DARK_FROM, Laid, lay_out_options
from advisor.counsel.materials import is_glass
from advisor.counsel.musts import CONDITIONS, OF_THE_DESIGN, OF_THE_FINISHED_LENS, Finished, broken_by, unfinished
from advisor.counsel.phrases import Phrase
from advisor.counsel.stock_items import IN_PLACE, Coating, Design, Material, Tint
from advisor.counsel.whole_range import WholeRange, material_key

Part = TypeVar("Part", Material, Coating)
BEFORE = frozenset(CONDITIONS) - OF_THE_FINISHED_LENS


@dataclass(frozen=True)
class Pool:
    """Options in one order: first those laid out (``given``), then what else is sold, last the worn lens if known.

    ``worn_coated`` is false where nobody said what the worn lens is coated with, so that its light is not known.
    """

    laid: tuple[Laid, ...]
    given: int
    worn: int | None
    worn_coated: bool


def pool_of(case: Case, laid: Sequence[Laid], *, imbalance_prism_d: float) -> Pool:
    """Gather the options laid out with whatever else the shop sells that keeps every condition known beforehand."""
    before = unfinished(imbalance_prism_d)
    known = {_same(option) for option in laid}
    sold = []
    for option in lay_out_options(case, list(_sold_options(case, laid))):
        same = _same(option)
        if same in known or option.refused or any(broken_by(case, option, before, only=BEFORE)):
            continue
        known.add(same)
        sold.append(option)
    worn = _worn(case, laid)
    everything = [*laid, *sold, *worn]
    return Pool(
        laid=tuple(replace(option, index=k) for k, option in enumerate(everything)),
        given=len(laid),
        worn=len(everything) - 1 if worn else None,
        worn_coated=bool(worn) and case.visit.worn_now is not None and case.visit.worn_now.coating is not None,
    )


def _same(option: Laid) -> object:
    """Return what makes two options one: all that is ordered, labels and prices aside."""
    asked = (option.option.front_power_d, option.option.centre_mm)
    return option.design.key, material_key(option.material), option.front_face, option.back_face, option.tint, asked


def _sold_options(case: Case, laid: Sequence[Laid]) -> Iterator[Option]:
    """Yield what a shop sells: its offers where it lists any, else every part with every other, both faces alike.

    Tints are only those laid out, and a clear lens only where one is: a tint is the wearer's choice, not weighed here.
    A dark tint is also had with a bare front, as sun lenses mostly are: light from behind is what shows in them. Glass
    is considered only where it is laid out or worn now: it is had on demand (common practice, no source).
    """
    stock = case.stock
    tints = _distinct_tints(laid)
    designs = [design.key for design in _designs(case, laid)]
    if stock.offer:
        keys = {tint if isinstance(tint, str) else None for tint in tints}
        for offer in stock.offer:
            if offer.tint in keys and offer.design in designs:
                faces = offer.coating if offer.faces == "both" else Faces(back=offer.coating)
                yield Option(design=offer.design, material=offer.material, coating=faces, tint=offer.tint)
        return
    had = {option.material.key for option in (*laid, *_worn(case, laid))}
    sold = [material for material in stock.material if not is_glass(material) or material.key in had]
    materials: list[str | Material] = [material.key for material in sold]
    materials += _in_place(option.material for option in laid)
    coatings: list[str | Coating] = [coating.key for coating in stock.coating]
    coatings += _in_place(face for option in laid for face in (option.front, option.back))
    for design in designs:
        for material in materials:
            for coating in coatings:
                if _is_cold(stock.coating_of(coating), stock.material_of(material)):
                    continue
                for tint in tints:
                    yield Option(design=design, material=material, coating=coating, tint=tint)
                    if stock.coating_of(coating).layers != () and is_dark(stock.tint_of(tint)):
                        yield Option(design=design, material=material, coating=Faces(back=coating), tint=tint)


def is_dark(tint: Tint | None) -> bool:
    """Whether a tint is dark always, not only in the sun."""
    return tint is not None and tint.luminous_transmittance <= DARK_FROM


def _is_cold(coating: Coating, material: Material) -> bool:
    """Whether a single layer of magnesium fluoride would go on a resin: it is hard only when fired on hot glass.

    It stays among the options where it is laid out or offered (common practice, no source).
    """
    films = [film for film, _ in coating.layers or ()]
    return films == ["MgF2"] and coating.key != IN_PLACE and not is_glass(material)


def _in_place(items: Iterable[Part]) -> list[Part]:
    return list({item.model_dump_json(): item for item in items if item.key == IN_PLACE}.values())


def _distinct_tints(laid: Sequence[Laid]) -> list[TintRef | None]:
    return list({option.tint: option.option.tint for option in laid}.values())


def _designs(case: Case, laid: Sequence[Laid]) -> list[Design]:
    """Return the designs to consider: of each kind those laid out, else the cheapest that serves.

    Figures tell one design of a kind from another only by its price, so the choice within a kind is the dispenser's.
    """
    probe = laid[0]
    given = {option.design.key: option.design for option in laid}
    found: dict[object, list[Design]] = {}
    for design in {**{d.key: d for d in case.stock.design}, **given}.values():
        if not any(broken_by(case, replace(probe, design=design), only=OF_THE_DESIGN)):
            found.setdefault((design.kind, design.near_share), []).append(design)
    chosen = []
    for designs in found.values():
        own = [design for design in designs if design.key in given]
        chosen += own or [min(designs, key=lambda design: (design.price is None, design.price or 0.0))]
    return chosen


def _worn(case: Case, laid: Sequence[Laid]) -> list[Laid]:
    """Return the lens worn now as it would be made today: its material, coating and curve in this frame and power."""
    worn = case.visit.worn_now
    if worn is None or worn.material is None:
        return []
    option = Option(
        design=laid[0].design.key, material=worn.material, coating=worn.coating, front_power_d=worn.front_power_d
    )
    return lay_out_options(case, [option])


def fits(computed: WholeRange) -> NDArray[np.bool_]:
    """Return which options can be made in this frame and power, (option,), by form, blank and tint."""
    made = np.all(computed.forms.shape.refusal == 0, axis=-1) & computed.light.tint_fits
    needed = computed.forms.blank_mm.max(axis=-1)
    largest = [_largest_blank(option) for option in computed.laid]
    return np.asarray(made & (np.array(largest) >= needed) & [not option.refused for option in computed.laid])


def _largest_blank(option: Laid) -> float:
    sold = (option.offer.blank_diameters_mm if option.offer else None) or option.material.blank_diameters_mm
    return max(sold) if sold else np.inf


def finished(computed: WholeRange, k: int, *, imbalance_prism_d: float) -> Finished:
    """Return what the conditions need of one finished pair."""
    light = LensLight(
        transmittance=float(computed.light.transmittance[k]),
        transmittance_dark=float(computed.light.transmittance_dark[k]),
        imbalance_prism_d=imbalance_prism_d,
    )
    return Finished(light, float(computed.forms.shape.centre_mm[k].min()))


def conditions_broken(case: Case, computed: WholeRange, k: int, *, imbalance_prism_d: float) -> list[Phrase]:
    """Return every condition that an option of the pool breaks."""
    return list(broken_by(case, computed.laid[k], finished(computed, k, imbalance_prism_d=imbalance_prism_d)))
