"""Which distances a design makes clear, and which this wearer needs.

A design is a stretch of the add, from 0 (the distance power) to the whole of it (near). An occupational lens runs from
its share to the whole add, a progressive over all of it; a bifocal has the two ends only. Of the eye's own focusing,
half the least amplitude of Hofstetter 1950 counts as usable, the other half is kept in reserve (common practice).
"""

from advisor.counsel.case import Case
from advisor.counsel.stock_items import Design
from advisor.optics.eye import accommodation_hofstetter_1950

SCREEN_CM = 60.0  # where no such working distance was measured: common practice, no source
SCREEN_FROM_CM = 50.0
ONE_PURPOSE = ("near", "intermediate")


def wanted(case: Case) -> str:
    """Return what the prescription is for; left out, all distances."""
    return case.visit.prescription.for_ or "all"


def far_is_needed(case: Case) -> bool:
    """Whether the pair must be clear far away."""
    return wanted(case) not in ONE_PURPOSE


def near_is_needed(case: Case) -> bool:
    """Whether the add must be in the pair: an add for all distances, or for near or the screen alone."""
    return case.has_add and wanted(case) != "distance"


def screen_is_needed(case: Case) -> bool:
    """Whether the screen's distance must be clear, by what the pair is for or because screen work is frequent."""
    if not case.has_add:
        return False
    return wanted(case) == "intermediate" or (wanted(case) == "all" and case.life("screen_work") == "often")


def screen_cm(case: Case) -> float:
    """Return the screen's distance: the longest working distance measured from 50 cm on, else a stated default."""
    fitting = case.visit.fitting
    measured = (fitting.working_distance_cm if fitting else None) or ()
    return max((float(cm) for cm in measured if cm >= SCREEN_FROM_CM), default=SCREEN_CM)


def add_d(case: Case) -> float:
    """Return the lesser add of the two eyes that have one."""
    adds = [add for add in (case.eye("right").add, case.eye("left").add) if add]
    return min(adds, default=0.0)


def usable_d(case: Case) -> float:
    """Return how much of the eye's own focusing is counted on."""
    return float(accommodation_hofstetter_1950(case.age_years)) / 2.0


def stretches(design: Design, add: float) -> tuple[tuple[float, float], ...]:
    """Return the parts of the add that a design holds, each from and to, in dioptres over the distance power."""
    if design.kind == "progressive":
        return ((0.0, add),)
    if design.kind == "bifocal":
        return ((0.0, 0.0), (add, add))
    if design.kind == "reading":
        return ((add, add),)
    if design.kind == "occupational":
        return (((design.near_share or 0.0) * add, add),)
    return ((0.0, 0.0),)


def blur_at(case: Case, design: Design, demand_d: float, *, usable: float) -> float:
    """Return by how many dioptres a distance (its vergence) stays out of focus, the eye helping by up to ``usable``."""
    off = [max(low - demand_d, demand_d - high - usable, 0.0) for low, high in stretches(design, add_d(case))]
    return min(off)


def worst_between_d(case: Case, design: Design) -> float:
    """Return the greatest blur between far and near, in dioptres: none in a progressive, the gap of a bifocal."""
    add, usable = add_d(case), usable_d(case)
    steps = [add * k / 20.0 for k in range(21)]
    return max(blur_at(case, design, step, usable=usable) for step in steps)
