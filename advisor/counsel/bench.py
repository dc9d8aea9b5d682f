"""The bench slip: what the workshop needs to edge and fit one pair, and what this lens does not bear.

Nothing on it may be a guess, so it is ready when the order is ready. Edge thicknesses are those at the rim straight to
the nose, up, to the temple and down from the optical centre. The hints are common practice, no source, but where their
words name one.
"""

from collections.abc import Iterator, Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from advisor.counsel.answer import place
from advisor.counsel.case import Case
from advisor.counsel.compare import Computed
from advisor.counsel.form import centration_pd_mm, is_protective
from advisor.counsel.laid_out import Laid
from advisor.counsel.materials import is_glass, is_polycarbonate, softens_with_heat
from advisor.counsel.order import EyeOrder, order_of
from advisor.counsel.phrases import Phrase, Translator, mark
from advisor.counsel.prescription import EYES, in_minus_cylinder
from advisor.optics.centration import optical_centre
from advisor.optics.thickness import LEAST_EDGE_MM

SIDES: tuple[tuple[str, float], ...] = (
    (mark("nose"), 0.0),
    (mark("at the top"), 90.0),
    (mark("temple"), 180.0),
    (mark("at the bottom"), 270.0),
)
PLACE_TEXTS: Mapping[str, str] = {
    "nose": mark("nose"),
    "nose up": mark("nose up"),
    "up": mark("at the top"),
    "temple up": mark("temple up"),
    "temple": mark("temple"),
    "temple down": mark("temple down"),
    "down": mark("at the bottom"),
    "nose down": mark("nose down"),
}
THICK_EDGE_MM = 3.0

HINTS: dict[str, str] = {
    "grip-pad": mark("Slippery top layer: grip pad, and check the axis again after edging."),
    "no-ink": mark("Coated: mark lightly, no heavy ink; wipe marks off with a cleaner the supplier names."),
    "no-bath": mark("Coated: no ultrasonic bath, no salt or bead pan, no frame warmer with the lenses in the frame."),
    "no-acetone": mark("Polycarbonate: never acetone."),
    "rimless-bath": mark("Drilled: never in the ultrasonic bath. Thick edges strain the mounts."),
    "heat-soft": mark(
        "This material softens with heat: no frame warmer with the lenses in, cool edging, not for drilling."
    ),
    "faces-differ": mark("The faces are coated differently: keep front and back apart."),
    "prism": mark("Prescribed prism: check base and amount before and after edging. Do not move the centre for it."),
    "protective": mark("Impact comes first for this wearer: do not go below %(centre_mm)s mm at the centre."),
    "thin-edge": mark("The thinnest edge is %(edge_mm)s mm, %(rim_mm)s mm is the least for this rim: edge with care."),
    "matt-edge": mark("Thick minus edge: matt it; polish can brighten the rings that others see."),
    "glass": mark("Glass: no rough chips; the edge is safety-bevelled."),
    "us-impact": mark("US: the finished lens must pass the drop-ball test of 21 CFR 801.410."),
    "loose-rim": mark("Close the rim without pressing on the lens: pressure shows as crazing later."),
}


@dataclass(frozen=True)
class EyeBench:
    """One lens on the bench; lengths in mm, moves towards the nose and up from the box centre."""

    order: EyeOrder
    inward_mm: float
    upward_mm: float
    blank_mm: float
    sides_mm: tuple[float, float, float, float]
    thickest_mm: float
    thickest_at: str
    thinnest_mm: float
    thinnest_at: str


@dataclass(frozen=True)
class Bench:
    """Everything on the slip."""

    eyes: tuple[EyeBench, EyeBench]
    least_centre_mm: float | None
    least_edge_mm: float
    hints: tuple[Phrase, ...]


def bench_of(computed: Computed, *, index: int, translator: Translator) -> Bench:
    """Return the bench slip of one option.

    Raises
    ------
    NotReady
        With every reason, while the order is not ready.
    """
    order = order_of(computed, index=index, translator=translator)
    right, left = (_eye(computed, order.eyes[k], index=index, k=k) for k in range(len(EYES)))
    thinnest = min(right.thinnest_mm, left.thinnest_mm)
    hints = _hints(computed, computed.laid[index], least_centre_mm=order.least_centre_mm, thinnest_mm=thinnest)
    return Bench((right, left), order.least_centre_mm, order.least_edge_mm, tuple(hints))


def _eye(computed: Computed, order: EyeOrder, *, index: int, k: int) -> EyeBench:
    case, forms = computed.case, computed.forms
    moved = optical_centre(
        case.a_mm,
        b_mm=case.b_mm,
        dbl_mm=case.dbl_mm,
        monocular_pd_mm=float(centration_pd_mm(case, computed.laid)[index, k]),
        height_mm=float(case.height_mm[k]),
    )
    shape = forms.shape
    angles = np.broadcast_to(forms.rim.angle_deg, shape.edge_mm.shape)[index, k]
    edge = shape.edge_mm[index, k]
    nose, up, temple, down = (_edge_at(edge, angles, side) for _, side in SIDES)
    return EyeBench(
        order=order,
        inward_mm=float(moved[0]),
        upward_mm=float(moved[1]),
        blank_mm=float(forms.blank_mm[index, k]),
        sides_mm=(nose, up, temple, down),
        thickest_mm=float(shape.thickest_mm[index, k]),
        thickest_at=place(shape.thickest_deg[index, k])["word"],
        thinnest_mm=float(shape.thinnest_mm[index, k]),
        thinnest_at=place(shape.thinnest_deg[index, k])["word"],
    )


def _edge_at(edge: NDArray[np.float64], angles_deg: NDArray[np.float64], side_deg: float) -> float:
    """Return the edge nearest to a direction from the optical centre."""
    apart = np.abs((angles_deg - side_deg + 180.0) % 360.0 - 180.0)
    return float(edge[int(np.argmin(apart))])


def _hints(computed: Computed, laid: Laid, *, least_centre_mm: float | None, thinnest_mm: float) -> Iterator[Phrase]:
    case = computed.case
    if is_protective(case) and least_centre_mm is not None:
        yield Phrase("protective", {"centre_mm": least_centre_mm})
    if any(any(part.amount for part in case.eye(eye).prism or ()) for eye in EYES):
        yield Phrase("prism")
    yield from _of_the_coating(laid)
    yield from _of_the_material(case, laid)
    yield from _of_the_edge(case, computed, laid, thinnest_mm)


def _of_the_coating(laid: Laid) -> Iterator[Phrase]:
    coatings = (laid.front, laid.back)
    tops = [coating.top for coating in coatings]
    if any(top is not None and (top.water_repellent or top.oil_repellent) for top in tops):
        yield Phrase("grip-pad")
    if laid.front_face.has_film or laid.back_face.has_film:
        yield Phrase("no-ink")
        yield Phrase("no-bath")
    if coatings[0] != coatings[1]:
        yield Phrase("faces-differ")


def _of_the_material(case: Case, laid: Laid) -> Iterator[Phrase]:
    if is_polycarbonate(laid.material):
        yield Phrase("no-acetone")
    if softens_with_heat(laid.material):
        yield Phrase("heat-soft")
    if is_glass(laid.material):
        yield Phrase("glass")
    if case.stock.shop.region == "us":
        yield Phrase("us-impact")


def _of_the_edge(case: Case, computed: Computed, laid: Laid, thinnest_mm: float) -> Iterator[Phrase]:
    least = LEAST_EDGE_MM[case.rim]
    if thinnest_mm < least:
        yield Phrase("thin-edge", {"edge_mm": thinnest_mm, "rim_mm": least})
    if case.rim == "drilled":
        yield Phrase("rimless-bath")
    else:
        yield Phrase("loose-rim")
    minus = all(in_minus_cylinder(power).sphere_d < 0.0 for power in laid.powers)
    if minus and case.rim != "drilled" and float(computed.forms.shape.thickest_mm[laid.index].max()) >= THICK_EDGE_MM:
        yield Phrase("matt-edge")
