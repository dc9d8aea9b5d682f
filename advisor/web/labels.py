"""Words of the form: what fields and choices are called, and the stated default shown in a field while it is empty."""

from collections.abc import Mapping

from advisor.counsel.case import DEFAULTS
from advisor.counsel.phrases import mark

YES_NO = frozenset({
    "child", "one_good_eye", "new_glare", "falls", "first_multifocal", "cataract_planned", "two_wheeler",
})  # fmt: skip
FREQUENCIES: Mapping[str, str] = {"never": mark("never"), "sometimes": mark("sometimes"), "often": mark("often")}
ANSWERS: Mapping[str, str] = {"yes": mark("yes"), "no": mark("no")}
BASES: Mapping[str, str] = {"in": mark("in"), "out": mark("out"), "up": mark("up"), "down": mark("down")}
RIMS: Mapping[str, str] = {
    "full": mark("full"),
    "grooved": mark("grooved (nylon)"),
    "drilled": mark("drilled (rimless)"),
}
USES: Mapping[str, str] = {
    "all": mark("all"),
    "distance": mark("distance"),
    "intermediate": mark("intermediate"),
    "near": mark("near"),
}
EYE_COLOURS: Mapping[str, str] = {
    "black": mark("black"),
    "brown": mark("brown"),
    "light": mark("light"),
    "very-light": mark("very light"),
}
PRINTS: Mapping[str, str] = {"standard": mark("standard"), "large": mark("large")}
CLEANING: Mapping[str, str] = {
    "water": mark("water"),
    "mild-soap": mark("mild soap"),
    "soft-cloth": mark("soft cloth"),
    "supplied-cleaner": mark("supplied cleaner"),
    "dry-cloth": mark("dry cloth"),
    "shirt": mark("shirt"),
    "paper": mark("paper"),
    "hot-water": mark("hot water"),
    "alcohol-wipe": mark("alcohol wipe"),
    "window-cleaner": mark("window cleaner"),
}
# What a wearer may turn down, and who may.
DECLINABLE: Mapping[str, str] = {
    "tough-material": mark("an impact material (child, one good eye, knocks)"),
    "near-pair": mark("a near pair of its own (very unequal eyes)"),
    "night-driving": mark("driving at night in this pair (it is for the day)"),
    "screen-distance": mark("a clear screen between far and near"),
}
DECLINERS: Mapping[str, str] = {"wearer": mark("the wearer"), "parent": mark("a parent or guardian")}
# The cautions that a wearer may turn down, by what is then recorded.
DECLINED_CAUTIONS: Mapping[str, str] = {
    **dict.fromkeys(("child", "one-eye", "impact"), "tough-material"),
    "near-vertical-imbalance": "near-pair",
    "not-for-night-driving-tint": "night-driving",
}
OTHER_FIELDS: Mapping[str, str] = {
    "fitting.working_distance_cm": mark("works at"),
    "worn_now.liked": mark("liked"),
    "worn_now.disliked": mark("disliked"),
}

# What stands in a field while it is empty: the stated default, so that nothing is assumed unseen.
_SAME_AS = {f"fitting.{eye}.pd_mm": "fitting.pd_mm" for eye in ("right", "left")}
PLACEHOLDERS: Mapping[str, str] = {
    name: f"{DEFAULTS[_SAME_AS.get(name, name)]:g}"
    for name in (
        "fitting.right.pd_mm", "fitting.left.pd_mm", "fitting.vertex_mm", "fitting.tilt_deg", "fitting.wrap_deg",
        "fitting.working_distance_cm", "prescription.vertex_mm", "frame.a_mm", "frame.b_mm", "frame.dbl_mm",
    )
}  # fmt: skip
