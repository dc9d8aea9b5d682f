"""Words of the form: what fields and choices are called, and the stated default shown in a field while it is empty."""

from collections.abc import Mapping

from advisor.counsel.case import DEFAULTS
from advisor.counsel.phrases import mark

QUESTIONS: Mapping[str, str] = {
    "driving": mark("driving"),
    "night_driving": mark("driving at night"),
    "screen_work": mark("screen work"),
    "lights_behind": mark("lights or windows behind"),
    "face_to_face": mark("face to face with people"),
    "sun": mark("out in the sun"),
    "dust": mark("dust"),
    "heat_steam": mark("heat or steam"),
    "sprays_solvents": mark("sprays or solvents"),
    "water_salt_chlorine": mark("sea or pool water"),
    "impact": mark("knocks to the glasses"),
    "light_sensitive": mark("bothered by bright light"),
    "bothered_thickness": mark("bothered by thick lenses"),
    "bothered_weight": mark("bothered by weight"),
    "bothered_smears": mark("bothered by smears"),
    "child": mark("a child"),
    "one_good_eye": mark("one good eye only"),
    "new_glare": mark("glare that is new"),
    "falls": mark("falls"),
    "first_multifocal": mark("first multifocal pair"),
    "cataract_planned": mark("cataract operation planned"),
    "two_wheeler": mark("rides on two wheels"),
    "cleaning": mark("cleaned with"),
    "price_limit": mark("price limit"),
}
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

# What stands in a field while it is empty: the stated default, so that nothing is assumed unseen.
_SAME_AS = {f"fitting.{eye}.pd_mm": "fitting.pd_mm" for eye in ("right", "left")}
PLACEHOLDERS: Mapping[str, str] = {
    name: f"{DEFAULTS[_SAME_AS.get(name, name)]:g}"
    for name in (
        "fitting.right.pd_mm", "fitting.left.pd_mm", "fitting.vertex_mm", "fitting.tilt_deg", "fitting.wrap_deg",
        "fitting.working_distance_cm", "prescription.vertex_mm", "frame.a_mm", "frame.b_mm", "frame.dbl_mm",
    )
}  # fmt: skip

# Words for a place that a warning or a list of defaults names.
PLACES: Mapping[str, str] = {
    "wearer.birth_year": mark("age"),
    "wearer.eye_colour": mark("eye colour"),
    "prescription.vertex_mm": mark("tested vertex distance"),
    "fitting.vertex_mm": mark("vertex distance"),
    "fitting.tilt_deg": mark("tilt"),
    "fitting.wrap_deg": mark("wrap"),
    "fitting.working_distance_cm": mark("working distance"),
    "fitting.right.pd_mm": mark("right PD"),
    "fitting.left.pd_mm": mark("left PD"),
    "fitting.right.height_mm": mark("right height"),
    "fitting.left.height_mm": mark("left height"),
    "frame.a_mm": mark("box a"),
    "frame.b_mm": mark("box b"),
    "frame.dbl_mm": mark("DBL"),
    "frame.rim": mark("rim"),
    "frame.ed_mm": mark("ED"),
}
