"""The lens form of every option in this wearer's frame: curves, thickness, weight, blank, fringes, magnification.

Arrays with named axes (option, eye); a last axis of two runs over the principal meridians, the more positive first.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

from advisor.counsel.case import Case
from advisor.counsel.choices import for_eye
from advisor.counsel.laid_out import Laid
from advisor.counsel.prescription import EYES, SphereCylinder
from advisor.counsel.reach import near_only
from advisor.counsel.stock_items import Material
from advisor.optics.centration import CentredRim, centred_rim, minimum_blank, optical_centre
from advisor.optics.eye import ENTRANCE_PUPIL_MM
from advisor.optics.fringe import field_fringe, rim_fringe
from advisor.optics.lens_form import nearest_base_power, vogel_front_power
from advisor.optics.magnification import magnification_percent, spectacle_magnification
from advisor.optics.media import abbe_at_line, index_at_line
from advisor.optics.meridians import local_direction, principal_meridians
from advisor.optics.outline import traced_rim
from advisor.optics.rim import box_rim, smaller_frame
from advisor.optics.thickness import LEAST_EDGE_MM, LensShape, lens_shape
from advisor.optics.weight import lens_weight_g

Floats = NDArray[np.float64]
SMALLER_BY_MM = 4.0
PROTECTIVE_CENTRE_MM = 2.0  # child, one good eye, frequent impact: common practice, no source
ONE_CURVE_WITHIN_D = 1.0
EYE_INDEX = np.array([0, 1])


@dataclass(frozen=True)
class Powers:
    """What each lens is made to. Axes (option, eye); ``power_d`` (option, eye, meridian)."""

    power_d: Floats
    first_deg: Floats
    prism_d: Floats
    front_power_d: Floats
    centre_mm: Floats
    index: Floats
    abbe: Floats


@dataclass(frozen=True)
class LensForms:
    """Axes (option, eye); ``smaller_*`` are those of the same lens in a frame 4 mm smaller."""

    powers: Powers
    shape: LensShape
    rim: CentredRim
    weight_g: Floats
    blank_mm: Floats
    fringe_prism_d: Floats
    rim_fringe_prism_d: Floats
    magnification_percent: Floats
    smaller_thickest_mm: Floats
    smaller_weight_g: Floats
    smaller_fits: NDArray[np.bool_]


def index_d(material: Material) -> float:
    """Return n_d of a material, whichever line it is given at."""
    if material.line == "d":
        return material.index
    return float(index_at_line(material.index, abbe=material.abbe, line="e", wanted_line="d"))


def abbe_d(material: Material) -> float:
    """Return V_d of a material, whichever line it is given at."""
    if material.line == "d":
        return material.abbe
    return float(abbe_at_line(material.index, abbe=material.abbe, line="e", wanted_line="d"))


def is_protective(case: Case) -> bool:
    """Whether a tough lens with a centre of 2.0 mm or more comes first: child, one good eye, frequent impact."""
    return case.is_child or case.relies_on_one_eye or case.life("impact") == "often"


def least_centre_mm(case: Case, material: Material) -> float:
    """Return the least centre for this wearer; not a number where neither the material nor the wearer sets one."""
    limits = [material.least_centre_mm]
    if case.is_child:
        limits.append(material.least_centre_child_mm)
    if is_protective(case):
        limits.append(PROTECTIVE_CENTRE_MM)
    known = [limit for limit in limits if limit is not None]
    return max(known, default=np.nan)


def rims_of(case: Case, *, smaller_by_mm: float = 0.0) -> Floats:
    """Return both rims about their box centres, (eye, points, 2), x towards the nose; one traced side serves both."""
    frame = case.visit.frame
    outline = frame.outline if frame else None
    if outline is not None:
        sides = [outline.right or outline.left, outline.left or outline.right]
        traced = np.stack([traced_rim(np.array(side)) for side in sides])
        return traced * (1.0 - smaller_by_mm / case.a_mm)
    a_mm, b_mm, ed_mm = case.a_mm, case.b_mm, case.ed_mm
    if smaller_by_mm:
        small = smaller_frame(a_mm, b_mm=b_mm, ed_mm=np.nan if ed_mm is None else ed_mm, by_mm=smaller_by_mm)
        a_mm, b_mm = float(small[0]), float(small[1])
        ed_mm = None if ed_mm is None else float(small[2])
    return _box_rims(a_mm, b_mm, ed_mm)


@lru_cache(maxsize=256)
def _box_rims(a_mm: float, b_mm: float, ed_mm: float | None) -> Floats:
    rim = box_rim(a_mm, b_mm=b_mm, ed_mm=ed_mm)
    return np.broadcast_to(rim, (2, *rim.shape))


def centration_pd_mm(case: Case, laid: Sequence[Laid]) -> Floats:
    """Return where each lens is centred, (option, eye): a lens for near alone at the near PD, others at the PD."""
    return np.array([case.near_pd_mm if near_only(case, option.design) else case.pd_mm for option in laid])


def centred_rims(case: Case, laid: Sequence[Laid], *, smaller_by_mm: float = 0.0) -> CentredRim:
    """Return every rim about its optical centre, (option, eye, points).

    In the smaller frame the eye keeps its height above the middle.
    """
    scale = 1.0 - smaller_by_mm / case.a_mm
    centre = optical_centre(
        case.a_mm - smaller_by_mm,
        b_mm=case.b_mm * scale,
        dbl_mm=case.dbl_mm,
        monocular_pd_mm=centration_pd_mm(case, laid),
        height_mm=case.height_mm - case.b_mm * (1.0 - scale) / 2.0,
    )
    return centred_rim(rims_of(case, smaller_by_mm=smaller_by_mm), optical_centre_mm=centre)


def paired_curves(front_power_d: Floats) -> Floats:
    """Return one curve for a pair whose two rule curves lie within 1 D, (option, eye): common practice, no source."""
    apart = np.abs(front_power_d[..., :1] - front_power_d[..., 1:])
    return np.where(apart <= ONE_CURVE_WITHIN_D, front_power_d.mean(axis=-1, keepdims=True), front_power_d)


def base_powers(materials: Sequence[Material]) -> Floats:
    """Return the lists of base powers padded to one length, (material, 1, powers)."""
    most = max((len(m.base_powers_d or ()) for m in materials), default=0)
    table = np.full((len(materials), 1, max(most, 1)), np.nan)
    for place, material in enumerate(materials):
        listed = material.base_powers_d or ()
        table[place, 0, : len(listed)] = listed
    return table


def powers_of(case: Case, laid: Sequence[Laid], materials: Sequence[Material] | None = None) -> Powers:
    """Return what every option is made to: principal powers, front curves by list or rule, centres asked for."""
    stuff = [option.material for option in laid] if materials is None else list(materials)
    written = np.array([[_numbers(power) for power in option.powers] for option in laid])
    power_d, tabo_deg = principal_meridians(written[..., 0], cylinder_d=written[..., 1], axis_deg=written[..., 2])
    ruled = paired_curves(vogel_front_power(written[..., 0] + written[..., 1] / 2.0))
    listed = nearest_base_power(ruled, base_powers_d=base_powers(stuff))
    asked = np.array([[_given(for_eye(o.option.front_power_d, eye=eye)) for eye in EYES] for o in laid])
    prisms = [case.eye(eye).prism_vector for eye in EYES]
    return Powers(
        power_d=power_d,
        first_deg=local_direction(tabo_deg[..., 0], eye=EYE_INDEX),
        prism_d=np.array([[p.inward_prism_d, p.upward_prism_d] for p in prisms]),
        front_power_d=np.where(np.isnan(asked), listed, asked),
        centre_mm=np.array([[_given(for_eye(o.option.centre_mm, eye=eye)) for eye in EYES] for o in laid]),
        index=np.array([[index_d(m)] for m in stuff]),
        abbe=np.array([[abbe_d(m)] for m in stuff]),
    )


def _numbers(power: SphereCylinder) -> tuple[float, float, float]:
    return power.sphere_d, power.cylinder_d, power.axis_deg


def _given(value: float | None) -> float:
    return np.nan if value is None else value


def shape_of(
    case: Case,
    laid: Sequence[Laid],
    powers: Powers,
    rim: CentredRim,
    *,
    front_power_d: Floats | None = None,
    centre_mm: Floats | None = None,
) -> LensShape:
    """Return thickness and curves of every option, (option, eye); other curves and centres may add leading axes."""
    needed = minimum_blank(rim)
    return lens_shape(
        powers.power_d,
        first_deg=powers.first_deg,
        front_power_d=powers.front_power_d if front_power_d is None else front_power_d,
        index=powers.index,
        rim=rim,
        least_centre_mm=np.array([[least_centre_mm(case, option.material)] for option in laid]),
        least_edge_mm=LEAST_EDGE_MM[case.rim],
        prism_d=powers.prism_d,
        blank_mm=np.array(
            [
                [stock_blank_mm(option, blank) for blank in row]
                for option, row in zip(laid, needed.tolist(), strict=True)
            ]
        ),
        centre_mm=powers.centre_mm if centre_mm is None else centre_mm,
    )


def stock_blank_mm(option: Laid, needed_mm: float) -> float:
    """Return the round blank a stock lens is cut from: the smallest sold that is large enough, else not a number."""
    if option.made != "stock":
        return np.nan
    sold = (option.offer.blank_diameters_mm if option.offer else None) or option.material.blank_diameters_mm or ()
    large = [diameter for diameter in sold if diameter >= needed_mm]
    return min(large, default=np.nan)


def magnification_of(case: Case, powers: Powers, shape: LensShape) -> Floats:
    """Return by how many per cent things look larger; not a number where the light meets before the pupil."""
    power, front = powers.power_d.mean(axis=-1), shape.front_power_d
    bent = shape.centre_mm / 1000.0 / powers.index * front < 1.0
    meets_behind = bent & ((case.fitted_vertex_mm + ENTRANCE_PUPIL_MM) / 1000.0 * power < 1.0)
    ratio = spectacle_magnification(
        np.where(meets_behind, power, 0.0),
        front_power_d=np.where(meets_behind, front, 0.0),
        centre_mm=shape.centre_mm,
        index=powers.index,
        vertex_mm=case.fitted_vertex_mm,
    )
    return np.where(meets_behind, magnification_percent(ratio), np.nan)


def forms_of(case: Case, laid: Sequence[Laid]) -> LensForms:
    """Work out the form of every option, and beside it the same lens in a frame 4 mm smaller."""
    powers, rim = powers_of(case, laid), centred_rims(case, laid)
    shape = shape_of(case, laid, powers, rim)
    small_rim = centred_rims(case, laid, smaller_by_mm=SMALLER_BY_MM)
    small = shape_of(case, laid, powers, small_rim)
    density = np.array([[option.material.density_g_cm3] for option in laid])
    return LensForms(
        powers=powers,
        shape=shape,
        rim=rim,
        weight_g=lens_weight_g(shape, rim=rim, density_g_cm3=density),
        blank_mm=minimum_blank(rim),
        fringe_prism_d=field_fringe(
            powers.power_d,
            first_deg=powers.first_deg,
            abbe=powers.abbe,
            vertex_mm=case.fitted_vertex_mm,
            prism_d=powers.prism_d,
        ),
        rim_fringe_prism_d=rim_fringe(
            powers.power_d, first_deg=powers.first_deg, abbe=powers.abbe, rim=rim, prism_d=powers.prism_d
        ),
        magnification_percent=magnification_of(case, powers, shape),
        smaller_thickest_mm=small.thickest_mm,
        smaller_weight_g=lens_weight_g(small, rim=small_rim, density_g_cm3=density),
        smaller_fits=small.refusal == 0,
    )
