"""Many options at once: the lens form once a material and power, the light once a pair of faces, as arrays."""

from collections.abc import Hashable, Sequence
from dataclasses import dataclass, fields, is_dataclass, replace
from typing import Any, TypeVar

import numpy as np
from numpy.typing import NDArray

from advisor.counsel.case import Case
from advisor.counsel.choices import Option
from advisor.counsel.form import LensForms, forms_of
from advisor.counsel.ghosts import ghosts_of
from advisor.counsel.laid_out import Laid, lay_out_options
from advisor.counsel.light import Light, light_of
from advisor.counsel.reach import near_only
from advisor.counsel.stock_items import IN_PLACE, Material
from advisor.optics.ghost_scene import Ghosts

Part = TypeVar("Part")
NOT_BY_OPTION = ("prism_d",)  # the same for every option


@dataclass(frozen=True)
class WholeRange:
    """Options in the order of ``laid``; the arrays have the axes of ``light``, ``form`` and ``ghosts``."""

    laid: tuple[Laid, ...]
    light: Light
    forms: LensForms
    ghosts: Ghosts


def whole_range(case: Case, *, design: str, materials: Sequence[str], coatings: Sequence[str]) -> WholeRange:
    """Work out every material with every coating on both faces."""
    options = [Option(design=design, material=m, coating=c) for m in materials for c in coatings]
    return work_out(case, lay_out_options(case, options))


def work_out(case: Case, laid: Sequence[Laid]) -> WholeRange:
    """Work out these options on nominal spectra; what two of them share is worked out once."""
    formed, form_row = _distinct([_form_key(case, option) for option in laid])
    lit, light_row = _distinct([(option.front_face, option.back_face, option.tint) for option in laid])
    seen, ghost_row = _distinct(list(zip(form_row.tolist(), light_row.tolist(), strict=True)))
    forms = forms_of(case, _picked(laid, formed))
    light = light_of(_picked(laid, lit), case.scenes)
    ghosts = ghosts_of(
        case, _picked(laid, seen), forms=rows_of(forms, form_row[seen]), light=rows_of(light, light_row[seen])
    )
    return WholeRange(
        laid=tuple(laid),
        light=rows_of(light, light_row),
        forms=rows_of(forms, form_row),
        ghosts=rows_of(ghosts, ghost_row),
    )


def _form_key(case: Case, option: Laid) -> Hashable:
    """Return everything the form of a lens depends on beside the wearer and the frame."""
    blanks = option.offer.blank_diameters_mm if option.offer else None
    asked = (option.option.front_power_d, option.option.centre_mm)
    return option.powers, material_key(option.material), asked, option.made, blanks, near_only(case, option.design)


def material_key(material: Material) -> Hashable:
    """Return what tells materials apart: the key of one the shop sells, all of one given in place."""
    return material.model_dump_json() if material.key == IN_PLACE else material.key


def _distinct(keys: Sequence[Hashable]) -> tuple[NDArray[np.intp], NDArray[np.intp]]:
    """Return where each distinct key first stands, and the row of every key among those."""
    places: dict[Hashable, int] = {}
    first: list[int] = []
    rows = []
    for place, key in enumerate(keys):
        if key not in places:
            places[key] = len(first)
            first.append(place)
        rows.append(places[key])
    return np.array(first, dtype=np.intp), np.array(rows, dtype=np.intp)


def _picked(laid: Sequence[Laid], places: NDArray[np.intp]) -> list[Laid]:
    return [replace(laid[place], index=k) for k, place in enumerate(places.tolist())]


def rows_of(part: Part, rows: NDArray[np.intp]) -> Part:
    """Return a block of arrays at these places of its option axis, the first one."""
    taken: dict[str, Any] = {}
    for field in fields(part):  # type: ignore[arg-type]  # a dataclass, which the type system cannot say
        value = getattr(part, field.name)
        if field.name in NOT_BY_OPTION:
            taken[field.name] = value
        else:
            taken[field.name] = rows_of(value, rows) if is_dataclass(value) else value[rows]
    return type(part)(**taken)
