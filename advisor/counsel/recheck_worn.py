"""What changed from the worn pair: curve, cylinder, power, size, material; None where the worn pair is not on file."""

from dataclasses import dataclass
from math import cos, hypot, radians, sin

from advisor.counsel.choices import Option, for_eye
from advisor.counsel.comparison import OptionFigures
from advisor.counsel.form import abbe_d
from advisor.counsel.prescription import EYES, Eye, SphereCylinder, spherical_equivalent_d
from advisor.counsel.recheck_lens import OnFile
from advisor.counsel.visit import Prescription


def worn_prescription(lens: OnFile) -> Prescription | None:
    """Return what the worn pair was made to, where that is on file."""
    worn = lens.visit.worn_now
    return None if worn is None else worn.prescription


def worn_pair(lens: OnFile) -> OptionFigures | None:
    """Return the worn pair worked out in the present frame, or None where its material is not on file."""
    worn = lens.visit.worn_now
    if worn is None or worn.material is None:
        return None
    pair = Option(
        design=lens.laid.design.key,
        material=worn.material,
        coating="bare" if worn.coating is None else worn.coating,
        front_power_d=worn.front_power_d,
    )
    figures = lens.laid_out([pair], prescription=worn.prescription or lens.visit.prescription)[0]
    return None if figures.refused else figures


def _astigmatism(power: SphereCylinder) -> tuple[float, float]:
    """Return the cylinder as a vector of twice its angle (Thibos et al. 1997, Optometry and Vision Science 74:367)."""
    twice = radians(2.0 * power.axis_deg)
    return power.cylinder_d * cos(twice), power.cylinder_d * sin(twice)


def cylinder_change_d(now: SphereCylinder, then: SphereCylinder) -> float:
    """Return the cylinder that turns one into the other, the turn of the axis included."""
    (a, b), (c, d) = _astigmatism(now), _astigmatism(then)
    return hypot(a - c, b - d)


@dataclass(frozen=True)
class PowerChange:
    """The greatest change over both eyes."""

    cylinder_d: float
    mean_power_d: float


def power_change(lens: OnFile) -> PowerChange | None:
    """Return how the written power changed from the worn pair."""
    worn = worn_prescription(lens)
    if worn is None:
        return None
    pairs = [(lens.case.eye(eye).power, (worn.right if eye == "right" else worn.left).power) for eye in EYES]
    return PowerChange(
        max(cylinder_change_d(now, then) for now, then in pairs),
        max(abs(spherical_equivalent_d(now) - spherical_equivalent_d(then)) for now, then in pairs),
    )


def curve_change(lens: OnFile) -> tuple[float, float] | None:
    """Return the front curve now and in the worn pair, of the eye where they are furthest apart."""
    worn = lens.visit.worn_now
    if worn is None or worn.front_power_d is None:
        return None
    pairs: list[tuple[float, float]] = []
    for eye in EYES:
        then, figures = for_eye(worn.front_power_d, eye=eye), _eye(lens.option, eye)
        if then is not None and figures is not None:
            pairs.append((figures, then))
    return max(pairs, key=lambda pair: abs(pair[0] - pair[1]), default=None)


def _eye(option: OptionFigures, eye: Eye) -> float | None:
    figures = option.right if eye == "right" else option.left
    return None if figures is None else figures.front_power_d


def size_change_percent(lens: OnFile, now: OptionFigures) -> float | None:
    """Return by how many per cent things look larger or smaller than in the worn pair, the greater over both eyes."""
    worn = worn_pair(lens)
    if worn is None:
        return None
    changes = []
    for after, before in ((now.right, worn.right), (now.left, worn.left)):
        if after and before and after.magnification_percent is not None and before.magnification_percent is not None:
            ratio = (100.0 + after.magnification_percent) / (100.0 + before.magnification_percent)
            changes.append(100.0 * abs(ratio - 1.0))
    return max(changes, default=None)


def abbe_change(lens: OnFile) -> tuple[float, float] | None:
    """Return the Abbe number now and in the worn pair."""
    worn = lens.visit.worn_now
    if worn is None or worn.material is None:
        return None
    return abbe_d(lens.laid.material), abbe_d(lens.stock.material_of(worn.material))
