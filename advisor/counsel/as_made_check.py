"""Verify as made: what was measured against what was ordered, by the region's tolerances.

What was ordered is the power the lens was made to (moved to the fitted vertex distance, the add or its share put in).
Prism is judged for the pair: as read where it was read at the ordered points, else as the shift of the centres makes it
by Prentice's rule (along the two directions; what an oblique cylinder adds across is left out).
"""

from collections.abc import Iterator
from dataclasses import dataclass

from advisor.counsel.form import centration_pd_mm
from advisor.counsel.measured import Measured, MeasuredEye
from advisor.counsel.phrases import Translator, mark
from advisor.counsel.prescription import (
    EYES,
    Eye,
    SphereCylinder,
    in_minus_cylinder,
    power_along_d,
    principal_meridians,
)
from advisor.counsel.recheck_answer import AsMade, Finding
from advisor.counsel.recheck_lens import OnFile
from advisor.counsel.tolerances import CENTRE_OFF_MM, ROUNDING, Tolerances, tolerances_of

MULTIFOCAL = ("bifocal", "progressive")
MEASURED: dict[str, tuple[str, str]] = {
    "sphere": (mark("sphere"), "D"),
    "meridian": (mark("other principal power"), "D"),
    "cylinder": (mark("cylinder"), "D"),
    "axis": (mark("axis"), "°"),
    "add": (mark("add"), "D"),
    "pd": (mark("PD"), "mm"),
    "height": (mark("height"), "mm"),
    "centre": (mark("centre thickness"), "mm"),
    "horizontal-prism": (mark("horizontal prism of the pair"), "Δ"),
    "vertical-prism": (mark("vertical prism of the pair"), "Δ"),
}


@dataclass(frozen=True)
class _Judge:
    """Makes findings in one language by one region's tolerances."""

    lens: OnFile
    rules: Tolerances
    translator: Translator

    @property
    def progressive(self) -> bool:
        return self.lens.laid.design.kind == "progressive"

    def finding(
        self,
        figure: str,
        *,
        eye: Eye | None,
        ordered: float,
        measured: float,
        tolerance: float | None,
        off: float | None = None,
    ) -> Finding:
        away = measured - ordered if off is None else off
        label, unit = MEASURED[figure]
        return Finding(
            eye=eye or "both",
            figure=figure,
            label=self.translator.gettext(label),
            unit=unit,
            ordered=ordered,
            measured=measured,
            off=away,
            tolerance=tolerance,
            within=None if tolerance is None else abs(away) <= tolerance + ROUNDING,
        )

    def powers(self, eye: Eye, made: SphereCylinder, read: SphereCylinder) -> Iterator[Finding]:
        """Judge one lens's power: sphere, the other meridian by the ISO type, cylinder and axis."""
        want, got, rules = in_minus_cylinder(made), in_minus_cylinder(read), self.rules
        strongest = max(abs(part.power_d) for part in principal_meridians(made))
        judged = strongest if rules.both_meridians else want.sphere_d
        allowed = rules.power_d(judged, cylinder_d=want.cylinder_d, progressive=self.progressive)
        yield self.finding("sphere", eye=eye, ordered=want.sphere_d, measured=got.sphere_d, tolerance=allowed)
        if rules.both_meridians and (want.cylinder_d or got.cylinder_d):
            second = want.sphere_d + want.cylinder_d, got.sphere_d + got.cylinder_d
            yield self.finding("meridian", eye=eye, ordered=second[0], measured=second[1], tolerance=allowed)
        cylinder = rules.cylinder_d(want.cylinder_d, strongest_d=judged, progressive=self.progressive)
        yield self.finding("cylinder", eye=eye, ordered=want.cylinder_d, measured=got.cylinder_d, tolerance=cylinder)
        if want.cylinder_d and got.cylinder_d:
            turn = (got.axis_deg - want.axis_deg + 90.0) % 180.0 - 90.0
            limit = rules.axis_deg(want.cylinder_d)
            yield self.finding("axis", eye=eye, ordered=want.axis_deg, measured=got.axis_deg, tolerance=limit, off=turn)

    def places(self, eye: Eye, k: int, read: MeasuredEye) -> Iterator[Finding]:
        """Judge one lens's place and thickness; in single vision the place is judged as prism of the pair."""
        place = self.rules.place_mm if self.lens.laid.design.kind in MULTIFOCAL else None
        case = self.lens.case
        if read.pd_mm is not None and not case.is_default(f"fitting.{eye}.pd_mm"):
            yield self.finding("pd", eye=eye, ordered=ordered_pd_mm(self.lens, k), measured=read.pd_mm, tolerance=place)
        if read.height_mm is not None and not case.is_default(f"fitting.{eye}.height_mm"):
            height = float(case.height_mm[k])
            yield self.finding("height", eye=eye, ordered=height, measured=read.height_mm, tolerance=place)
        if read.centre_mm is not None:
            centre = float(self.lens.computed.forms.shape.centre_mm[0, k])
            yield self.finding("centre", eye=eye, ordered=centre, measured=read.centre_mm, tolerance=CENTRE_OFF_MM)


def ordered_pd_mm(lens: OnFile, k: int) -> float:
    """Return the PD one lens is ordered at: a lens for near alone at the near PD."""
    return float(centration_pd_mm(lens.case, [lens.laid])[0, k])


def verify(lens: OnFile, measured: Measured | None) -> AsMade:
    """Return what was measured against the order; nothing measured gives no findings."""
    rules = tolerances_of(lens.stock.shop.region)
    judge = _Judge(lens, rules, lens.translator)
    found: list[Finding] = []
    for k, eye in enumerate(EYES):
        read = (measured or Measured()).eye(eye)
        if read.power is not None:
            found += judge.powers(eye, lens.laid.powers[k], read.power)
        add = lens.case.eye(eye).add
        if read.add is not None and add is not None and lens.laid.design.kind in MULTIFOCAL:
            found.append(judge.finding("add", eye=eye, ordered=add, measured=read.add, tolerance=rules.add_d(add)))
        found += judge.places(eye, k, read)
    if measured is not None:
        found += _prism_of_the_pair(judge, measured)
    return AsMade(tolerances=rules.key, source=lens.translator.gettext(rules.source), findings=found)


def _prism_of_the_pair(judge: _Judge, measured: Measured) -> Iterator[Finding]:
    """Judge horizontal prism added up over the eyes (base in positive) and vertical prism right against left."""
    lens, rules = judge.lens, judge.rules
    ordered = [lens.case.eye(eye).prism_vector for eye in EYES]
    wanted = (
        ordered[0].inward_prism_d + ordered[1].inward_prism_d,
        ordered[0].upward_prism_d - ordered[1].upward_prism_d,
    )
    off = _prism_off(lens, measured)
    allowed = (rules.horizontal_prism_d, 180.0), (rules.vertical_prism_d, 90.0)
    for figure, want, away, (rule, along) in zip(
        ("horizontal-prism", "vertical-prism"), wanted, off, allowed, strict=True
    ):
        if away is None:
            continue
        strongest = max(abs(power_along_d(power, meridian_deg=along)) for power in lens.laid.powers)
        limit = rule(strongest, progressive=judge.progressive)
        yield judge.finding(figure, eye=None, ordered=want, measured=want + away, tolerance=limit)


def _prism_off(lens: OnFile, measured: Measured) -> tuple[float | None, float | None]:
    """Return how far the pair's prism is from the order, horizontally and vertically; None where nothing tells."""
    read = [measured.eye(eye).prism_vector for eye in EYES]
    if read[0] is not None and read[1] is not None:
        want = [lens.case.eye(eye).prism_vector for eye in EYES]
        inward = sum(got.inward_prism_d - was.inward_prism_d for got, was in zip(read, want, strict=True) if got)
        upward = [got.upward_prism_d - was.upward_prism_d for got, was in zip(read, want, strict=True) if got]
        return inward, upward[0] - upward[1]
    inwards: list[float] = []
    upwards: list[float] = []
    for k, eye in enumerate(EYES):
        got = measured.eye(eye)
        power, case = lens.laid.powers[k], lens.case
        if got.pd_mm is not None and not case.is_default(f"fitting.{eye}.pd_mm"):
            outward = got.pd_mm - ordered_pd_mm(lens, k)
            inwards.append(-power_along_d(power, meridian_deg=180.0) * outward / 10.0)
        if got.height_mm is not None and not case.is_default(f"fitting.{eye}.height_mm"):
            higher = got.height_mm - float(case.height_mm[k])
            upwards.append(power_along_d(power, meridian_deg=90.0) * higher / 10.0)
    horizontal = sum(inwards) if len(inwards) == 2 else None
    return horizontal, upwards[0] - upwards[1] if len(upwards) == 2 else None
