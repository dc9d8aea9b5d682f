"""Which distances a design makes clear, and which this wearer needs.

A design is a stretch of the add, from 0 (the distance power) to the whole of it (near). An occupational lens runs from
its share to the whole add, a progressive over all of it; a bifocal has the two ends only. Of the eye's own focusing,
half the least amplitude of Hofstetter 1950 counts as usable, the other half is kept in reserve (common practice).
"""

from advisor.counsel.case import Case
from advisor.counsel.prescription import Eye
from advisor.counsel.stock_items import Design
from advisor.optics.eye import accommodation_hofstetter_1950

SCREEN_CM = 60.0  # where no such working distance was measured: common practice, no source
SCREEN_FROM_CM = 50.0
NEAR_DESIGNS = ("reading", "occupational")
_ONE_PURPOSE = ("near", "intermediate")


def wanted(case: Case) -> str:
    """Return what the prescription is for; left out, all distances."""
    return case.visit.prescription.for_ or "all"


def far_is_needed(case: Case) -> bool:
    """Whether the pair must be clear far away."""
    return wanted(case) not in _ONE_PURPOSE


def near_only(case: Case, design: Design) -> bool:
    """Whether a lens is clear near or at the screen alone: a near design, or single vision made to a near power."""
    made_near = design.kind == "single-vision" and not case.has_add and not far_is_needed(case)
    return design.kind in NEAR_DESIGNS or made_near


def near_is_needed(case: Case) -> bool:
    """Whether the add must be in the pair: an add for all distances, or for near or the screen alone."""
    return case.has_add and wanted(case) != "distance"


def screen_is_needed(case: Case) -> bool:
    """Whether the screen's distance must be clear, by what the pair is for or because screen work is frequent."""
    if not case.has_add:
        return False
    return wanted(case) == "intermediate" or (wanted(case) == "all" and case.life("screen_work") == "often")


def screen_cm(case: Case) -> float:
    """Return the screen's distance: the longest working distance measured from 50 cm on, else a stated default.

    For a pair that is for the screen alone any measured distance is the screen's.
    """
    least = 0.0 if wanted(case) == "intermediate" else SCREEN_FROM_CM
    return max((cm for cm in _measured_cm(case) if cm >= least), default=SCREEN_CM)


def screen_is_measured(case: Case) -> bool:
    """Whether somebody measured how far away the work is."""
    return bool(_measured_cm(case))


def _measured_cm(case: Case) -> tuple[float, ...]:
    fitting = case.visit.fitting
    return tuple(float(cm) for cm in (fitting.working_distance_cm if fitting else None) or ())


def add_d(case: Case) -> float:
    """Return the lesser add of the two eyes that have one."""
    adds = [add for add in (case.eye("right").add, case.eye("left").add) if add]
    return min(adds, default=0.0)


def intermediate_add_d(case: Case) -> float | None:
    """Return the add for the screen where the pair is for the screen alone and the prescriber wrote one."""
    return case.visit.prescription.intermediate_add if wanted(case) == "intermediate" else None


def add_made_d(case: Case, eye: Eye, design: Design) -> float:
    """Return the add a lens is made with: in a reading lens for the screen alone, the one written for the screen."""
    own, screen = case.eye(eye).add or 0.0, intermediate_add_d(case)
    return min(own, screen) if design.kind == "reading" and screen is not None else own


def usable_d(case: Case) -> float:
    """Return how much of the eye's own focusing is counted on."""
    return float(accommodation_hofstetter_1950(case.age_years)) / 2.0


def stretches(case: Case, design: Design) -> tuple[tuple[float, float], ...]:
    """Return the parts of the add that a design holds, each from and to, in dioptres over the distance power."""
    add = add_d(case)
    if design.kind == "progressive":
        return ((0.0, add),)
    if design.kind == "bifocal":
        return ((0.0, 0.0), (add, add))
    if design.kind == "reading":
        screen = intermediate_add_d(case)
        made = add if screen is None else min(add, screen)
        return ((made, made),)
    if design.kind == "occupational":
        return (((design.near_share or 0.0) * add, add),)
    return ((0.0, 0.0),)


def blur_at(case: Case, design: Design, demand_d: float, *, usable: float) -> float:
    """Return by how many dioptres a distance (its vergence) stays out of focus, the eye helping by up to ``usable``."""
    off = [max(low - demand_d, demand_d - high - usable, 0.0) for low, high in stretches(case, design)]
    return min(off)


def worst_between_d(case: Case, design: Design) -> float:
    """Return the greatest blur between far and near, in dioptres: none in a progressive, the gap of a bifocal."""
    add, usable = add_d(case), usable_d(case)
    steps = [add * k / 20.0 for k in range(21)]
    return max(blur_at(case, design, step, usable=usable) for step in steps)
