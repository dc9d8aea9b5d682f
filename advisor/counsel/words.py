"""Words for the names of questions and fields, where a person reads of them."""

from collections.abc import Mapping

from advisor.counsel.phrases import WORD, mark

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

HUES: Mapping[str, str] = {
    "neutral": mark("neutral"),
    "red": mark("red"),
    "gold": mark("gold"),
    "green": mark("green"),
    "teal": mark("teal"),
    "blue": mark("blue"),
    "purple": mark("purple"),
    "pink": mark("pink"),
}

# What ``say`` looks up for figures that are lists of names.
WORD_TEXTS: dict[str, str] = {WORD + name: text for name, text in (*QUESTIONS.items(), *PLACES.items())}
