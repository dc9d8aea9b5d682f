"""How likely it is how the glasses are used, kept, fitted, or how they differ from the worn pair."""

from collections.abc import Mapping

from advisor.counsel.cautions import MULTIFOCAL
from advisor.counsel.phrases import Phrase, mark
from advisor.counsel.prescription import EYES, power_along_d
from advisor.counsel.reach import near_only
from advisor.counsel.recheck_answer import Level
from advisor.counsel.recheck_lens import OnFile, most
from advisor.counsel.recheck_light_causes import Rating
from advisor.counsel.recheck_wear_remedies import has_repellent_top
from advisor.counsel.recheck_worn import abbe_change, curve_change, power_change, size_change_percent

CURVE_D, CYLINDER_D, MEAN_POWER_D, SIZE_PERCENT = 1.0, 0.5, 0.5, 2.0  # modelling choices; half of each is "possible"
ABBE_LOWER_BY = 8.0
IMBALANCE_PRISM_D = 1.0
NEAR_PRISM_D = 1.0  # sideways, for the pair; a modelling choice
UNKNOWN = Rating("not worked out", (Phrase("worn-unknown"),))
HABITS = {
    "heat_steam": mark("heat or steam"),
    "sprays_solvents": mark("sprays or solvents"),
}
LEVELS: Mapping[str, Level] = {"often": "likely", "sometimes": "possible", "never": "unlikely"}


def _step(value: float, likely: float) -> Level:
    return "likely" if value >= likely else "possible" if value >= likely / 2.0 else "unlikely"


def _life(lens: OnFile, question: str) -> Rating:
    answer = lens.case.life(question)
    if answer == "not-asked":
        return Rating("not worked out")
    return Rating(LEVELS[answer], (Phrase("life", {"habit": HABITS[question], "answer": answer}),))


def soap_film(_lens: OnFile) -> Rating:
    """Judge a film: every lens can carry one."""
    return Rating("possible")


def top_layer_worn(lens: OnFile) -> Rating:
    """Judge wear of the top layer."""
    return Rating("possible", (Phrase("repellent" if has_repellent_top(lens) else "no-repellent"),))


def breath_fog(lens: OnFile) -> Rating:
    """Judge breath and steam."""
    return _life(lens, "heat_steam")


def heat_stress(lens: OnFile) -> Rating:
    """Judge heat on a coating."""
    return _life(lens, "heat_steam")


def solvent(lens: OnFile) -> Rating:
    """Judge sprays and solvents on a coating."""
    return _life(lens, "sprays_solvents")


def tight_rim(_lens: OnFile) -> Rating:
    """Judge a rim that presses: only looking tells."""
    return Rating("not worked out")


def adhesion(lens: OnFile) -> Rating:
    """Judge a coating that loses its hold."""
    coated = lens.laid.front_face.has_film or lens.laid.back_face.has_film
    return Rating("possible") if coated else Rating("unlikely", (Phrase("no-film"),))


def changed_curve(lens: OnFile) -> Rating:
    """Judge another front curve."""
    pair = curve_change(lens)
    if pair is None:
        return UNKNOWN
    why = Phrase("curve", {"front_power_d": pair[0], "worn_d": pair[1]})
    return Rating(_step(abs(pair[0] - pair[1]), CURVE_D), (why,))


def changed_cylinder(lens: OnFile) -> Rating:
    """Judge another cylinder or axis."""
    change = power_change(lens)
    if change is None:
        return UNKNOWN
    return Rating(_step(change.cylinder_d, CYLINDER_D), (Phrase("cylinder", {"changed_by_d": change.cylinder_d}),))


def changed_power(lens: OnFile) -> Rating:
    """Judge another power."""
    change = power_change(lens)
    if change is None:
        return UNKNOWN
    return Rating(_step(change.mean_power_d, MEAN_POWER_D), (Phrase("power", {"changed_by_d": change.mean_power_d}),))


def changed_size(lens: OnFile) -> Rating:
    """Judge larger or smaller than in the worn pair."""
    change = size_change_percent(lens, lens.option)
    if change is None:
        return UNKNOWN
    return Rating(_step(change, SIZE_PERCENT), (Phrase("size", {"magnification_change_percent": change}),))


def changed_index(lens: OnFile) -> Rating:
    """Judge a material of lower Abbe number than the worn one."""
    pair = abbe_change(lens)
    if pair is None:
        return UNKNOWN
    why = Phrase("abbe", {"abbe": pair[0], "worn_abbe": pair[1]})
    return Rating("possible" if pair[1] - pair[0] >= ABBE_LOWER_BY else "unlikely", (why,))


def how_it_sits(_lens: OnFile) -> Rating:
    """Judge how the frame sits: always worth a look, and free."""
    return Rating("possible", (Phrase("sits"),))


def heights(lens: OnFile) -> Rating:
    """Judge the fitting heights."""
    least, lowest = lens.laid.design.least_height_mm, float(lens.case.height_mm.min())
    if lens.laid.design.kind not in MULTIFOCAL:
        return Rating("unlikely")
    if least is None or lowest >= least:
        return Rating("possible")
    return Rating("likely", (Phrase("height-low", {"height_mm": lowest, "least_height_mm": least}),))


def wrong_design(lens: OnFile) -> Rating:
    """Judge a design asked to do what it is not made for."""
    kind = lens.laid.design.kind
    if lens.case.has_add and kind == "single-vision":
        return Rating("likely", (Phrase("design-near"),))
    if kind == "bifocal" and lens.case.life("screen_work") not in ("never", "not-asked"):
        return Rating("likely", (Phrase("design-screen"),))
    return Rating("unlikely")


def near_part_on_steps(lens: OnFile) -> Rating:
    """Judge a near part that lies where a step is looked at; a lens for near alone is worse still."""
    kind = lens.laid.design.kind
    if kind in MULTIFOCAL:
        return Rating("likely", (Phrase("near-part"),))
    alone = near_only(lens.case, lens.laid.design)
    return Rating("likely", (Phrase("near-only"),)) if alone else Rating("unlikely")


def near_pd(lens: OnFile) -> Rating:
    """Judge the horizontal prism of lenses that are not centred where the eyes look when reading."""
    case, kind = lens.case, lens.laid.design.kind
    if any(case.is_default(f"fitting.{eye}.pd_mm") for eye in EYES):
        return Rating("possible", (Phrase("pd-unknown"),))
    if kind in MULTIFOCAL:  # its near part is set in by the maker for an eye that turns as most do
        return Rating("possible", (Phrase("near-part-in"),))
    centred = case.near_pd_mm if near_only(case, lens.laid.design) else case.pd_mm
    off_mm = [float(off) for off in centred - case.near_pd_mm]
    prism = sum(power_along_d(power, meridian_deg=180.0) * off / 10.0
                for power, off in zip(lens.laid.powers, off_mm, strict=True))  # fmt: skip
    why = Phrase("near-pd", {"off_mm": sum(off_mm), "near_prism_d": abs(prism)})
    return Rating("possible" if abs(prism) >= NEAR_PRISM_D else "unlikely", (why,))


def near_power(lens: OnFile) -> Rating:
    """Judge the add against the distance it is used at."""
    add = max(lens.case.eye(eye).add or 0.0 for eye in ("right", "left"))
    figures = {"add_d": add, "working_distance_cm": lens.case.working_distance_cm}
    return Rating("possible", (Phrase("has-add", figures),) if add else ())


def near_imbalance(lens: OnFile) -> Rating:
    """Judge the prism between the eyes when looking down."""
    prism = lens.answer.vertical_imbalance_prism_d
    if prism is None:
        return Rating("not worked out")
    level: Level = "likely" if prism >= IMBALANCE_PRISM_D else "unlikely"
    # a lens made for near alone is looked through at its centre
    level = "possible" if level == "likely" and lens.laid.design.kind == "reading" else level
    return Rating(level, (Phrase("imbalance", {"imbalance_prism_d": prism}),))


def frame_fit(lens: OnFile) -> Rating:
    """Judge the fit: looked at, never worked out."""
    weight = most(lens.option, "weight_g")
    return Rating("possible", () if weight is None else (Phrase("weight", {"weight_g": weight}),))


def not_measured(lens: OnFile) -> Rating | None:
    """Judge prescribed prism that nobody has measured in the finished glasses."""
    return Rating("possible", (Phrase("prism-unmeasured"),)) if lens.prescribes_prism else None


def only_asking_tells(_lens: OnFile) -> Rating:
    """Judge what lies outside the lens: no figure of the lens tells."""
    return Rating("not worked out")
