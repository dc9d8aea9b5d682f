"""How each figure is worked out: the formula, what goes into it, its source, and what the model leaves out."""

from collections.abc import Callable
from dataclasses import dataclass

from advisor.counsel.case import Case
from advisor.counsel.laid_out import Laid
from advisor.counsel.names import OWN_COATING
from advisor.counsel.phrases import mark
from advisor.counsel.stock_items import IN_PLACE, Coating

Given = float | str | None


@dataclass(frozen=True)
class At:
    """Where a number is read: the visit, one of its options, and the eye (0 right, 1 left)."""

    case: Case
    laid: Laid
    eye: int


@dataclass(frozen=True)
class PutIn:
    """One number put into a formula: its words, where it is read, and how it is written."""

    label: str
    read: Callable[[At], Given]
    digits: int = 2
    unit: str = ""


@dataclass(frozen=True)
class Explanation:
    """What a row opens to; ``rows`` names other rows of the comparison whose figures go in."""

    formula: str
    source: str
    leaves_out: str
    put_in: tuple[PutIn, ...] = ()
    rows: tuple[str, ...] = ()


def _film(coating: Coating) -> str:
    return coating.label or (OWN_COATING if coating.key == IN_PLACE else coating.key)


SPHERE = PutIn(mark("sphere as made"), lambda at: at.laid.powers[at.eye].sphere_d, 2, "D")
CYLINDER = PutIn(mark("cylinder as made"), lambda at: at.laid.powers[at.eye].cylinder_d, 2, "D")
INDEX = PutIn(mark("index"), lambda at: at.laid.material.index, 3)
ABBE = PutIn(mark("Abbe number"), lambda at: at.laid.material.abbe, 1)
DENSITY = PutIn(mark("density"), lambda at: at.laid.material.density_g_cm3, 2, "g/cm³")
LEAST_CENTRE = PutIn(mark("least centre of the material"), lambda at: at.laid.material.least_centre_mm, 1, "mm")
BOX_A = PutIn(mark("box a"), lambda at: at.case.a_mm, 1, "mm")
BOX_B = PutIn(mark("box b"), lambda at: at.case.b_mm, 1, "mm")
DBL = PutIn(mark("DBL"), lambda at: at.case.dbl_mm, 1, "mm")
PD = PutIn(mark("PD"), lambda at: float(at.case.pd_mm[at.eye]), 1, "mm")
HEIGHT = PutIn(mark("height"), lambda at: float(at.case.height_mm[at.eye]), 1, "mm")
VERTEX = PutIn(mark("vertex distance"), lambda at: at.case.fitted_vertex_mm, 1, "mm")
FRONT_FILM = PutIn(mark("front coating"), lambda at: _film(at.laid.front))
BACK_FILM = PutIn(mark("back coating"), lambda at: _film(at.laid.back))
TINT = PutIn(mark("tint, bare faces"), lambda at: at.laid.tint.luminous_transmittance if at.laid.tint else None, 2)
AGE = PutIn(mark("age"), lambda at: at.case.age_years, 0, mark("years"))
DESIGN_PRICE = PutIn(mark("price of the design"), lambda at: at.laid.design.price, 2)
MATERIAL_PRICE = PutIn(mark("price of the material"), lambda at: at.laid.material.price, 2)
FRONT_PRICE = PutIn(mark("price of the front's coating"), lambda at: at.laid.front.price, 2)
BACK_PRICE = PutIn(mark("price of the back's coating"), lambda at: at.laid.back.price, 2)
TINT_PRICE = PutIn(mark("price of the tint"), lambda at: at.laid.tint.price if at.laid.tint else None, 2)

_LENS = (SPHERE, CYLINDER, INDEX)
_RIM = (BOX_A, BOX_B, DBL, PD, HEIGHT)
_FILMS = (INDEX, FRONT_FILM, BACK_FILM)
_GHOST_SOURCE = mark(
    "Products along the path, each mirroring and passing by Fresnel's equations and the layer matrices."
)
_GHOST_LEAVES_OUT = mark(
    "Further bounces, which are weaker by the product of both faces; scatter from dirt and scratches."
)
_FACE_FORMULA = mark(
    "The layers' reflectance at each nanometre from 380 to 780, weighted with the eye's V(λ) and daylight D65."
)
_FACE_SOURCE = mark("Abelès' matrices for thin layers; Fresnel for a bare face; V(λ): CIE 1924; D65: CIE.")
_FACE_LEAVES_OUT = mark("Slanting light, dirt, and errors in making, which are shown as the least and the most.")
_SPREAD_FORMULA = mark(
    "64 coating runs by chance: all layers together 2 % thicker or thinner, each alone 1 %; the 5 and 95 % points."
)
_SPREAD_SOURCE = mark("A modelling choice of this program, not a measurement of any plant.")
_SPREAD_LEAVES_OUT = mark("Errors of a layer's index, and a plant that is worse or better than that.")

_SMALLER = mark("The same lens in a rim 4 mm narrower and lower in proportion, with the same PD and bridge.")
_SMALLER_SOURCE = mark("Geometry, as for the thickest edge; it costs nothing beside a dearer index.")
_SMALLER_LEAVES_OUT = mark("Whether such a frame suits the face.")

EXPLANATIONS: dict[str, Explanation] = {
    "price": Explanation(
        mark(
            "The offer's price where the shop offers this very pair; else design + material + mean of both "
            "coatings + tint."
        ),
        mark("The shop's own range."),
        mark("The frame, and whatever an insurance pays."),
        (DESIGN_PRICE, MATERIAL_PRICE, FRONT_PRICE, BACK_PRICE, TINT_PRICE),
    ),
    "edge_thickest_mm": Explanation(
        mark(
            "t = centre + sag of the back − sag of the front + prism wedge, the greatest along the rim; s = r − "
            "√(r² − h²)."
        ),
        mark("Geometry of spheres and toric surfaces; least edge by kind of rim: common practice, no source."),
        mark("Aspheric forms, which are flatter and thinner; the bevel and any rounding of the edge."),
        (*_LENS, *_RIM),
        ("front_power_d", "centre_mm"),
    ),
    "centre_mm": Explanation(
        mark("The material's least centre, or more where the edge would come out too thin for the rim."),
        mark("The shop's range; least edge by kind of rim: common practice, no source."),
        mark("What a supplier adds for a larger blank or for safety."),
        (*_LENS, LEAST_CENTRE, *_RIM),
        ("edge_thinnest_mm",),
    ),
    "weight_g": Explanation(
        mark("Volume inside the rim × density."),
        mark("Numerical integration of the lens's thickness over the rim; density from the shop's range."),
        mark("Bevel, groove and drill holes; the frame."),
        (*_LENS, DENSITY, *_RIM),
        ("centre_mm", "edge_thickest_mm"),
    ),
    "smaller_edge_mm": Explanation(_SMALLER, _SMALLER_SOURCE, _SMALLER_LEAVES_OUT, (*_LENS, *_RIM)),
    "smaller_weight_g": Explanation(_SMALLER, _SMALLER_SOURCE, _SMALLER_LEAVES_OUT, (*_LENS, DENSITY, *_RIM)),
    "reflectance_limit": Explanation(
        mark(
            "The most both faces may mirror alike so that the worst second image of the scene named keeps a visibility "
            "level of 0.4, found by halving."
        ),
        mark("The same ghost, veil and threshold models as the second image; roads by night alone, where they hold."),
        mark("A coating that mirrors more than its design as made; light from behind, which is told by contrast."),
        (INDEX, TINT, AGE, VERTEX),
    ),
    "edge_thinnest_mm": Explanation(
        mark("t = centre + sag of the back − sag of the front + prism wedge, the least along the rim."),
        mark("Geometry of spheres and toric surfaces."),
        mark("Aspheric forms; the bevel."),
        (*_LENS, *_RIM),
        ("front_power_d", "centre_mm"),
    ),
    "front_power_d": Explanation(
        mark(
            "Half the spherical equivalent + 6 for minus, all of it + 6 for plus, then the nearest base the "
            "material comes in."
        ),
        mark("Vogel's rule, dispensing textbooks (from memory)."),
        mark("What a supplier's own table chooses; give the front curve where it is known."),
        _LENS,
    ),
    "blank_mm": Explanation(
        mark("Twice the greatest distance from the lens's centre to the rim, with a margin for edging."),
        mark("Geometry; the margin is common practice, no source."),
        mark("Decentred blanks."),
        _RIM,
    ),
    "reflectance_front": Explanation(_FACE_FORMULA, _FACE_SOURCE, _FACE_LEAVES_OUT, (INDEX, ABBE, FRONT_FILM)),
    "reflectance_front_low": Explanation(_SPREAD_FORMULA, _SPREAD_SOURCE, _SPREAD_LEAVES_OUT, (INDEX, FRONT_FILM)),
    "reflectance_front_high": Explanation(_SPREAD_FORMULA, _SPREAD_SOURCE, _SPREAD_LEAVES_OUT, (INDEX, FRONT_FILM)),
    "reflectance_back": Explanation(_FACE_FORMULA, _FACE_SOURCE, _FACE_LEAVES_OUT, (INDEX, ABBE, BACK_FILM)),
    "reflectance_back_low": Explanation(_SPREAD_FORMULA, _SPREAD_SOURCE, _SPREAD_LEAVES_OUT, (INDEX, BACK_FILM)),
    "reflectance_back_high": Explanation(_SPREAD_FORMULA, _SPREAD_SOURCE, _SPREAD_LEAVES_OUT, (INDEX, BACK_FILM)),
    "first_pass_loss": Explanation(
        mark("1 − (1 − front)(1 − back)."),
        mark("The figure trade tables print."),
        mark("Light that goes to and fro inside the lens, and what the tint takes."),
        _FILMS,
        ("reflectance_front", "reflectance_back"),
    ),
    "whole_lens": Explanation(
        mark(
            "R = front + T² back τ² ∕ (1 − inner front × inner back × τ²) at each wavelength, weighted with V(λ) "
            "and D65."
        ),
        mark("All bounces added up without interference, as a lens is far thicker than light is coherent."),
        mark("Slanting light; dirt."),
        (*_FILMS, TINT),
        ("reflectance_front", "reflectance_back"),
    ),
    "luminous_transmittance": Explanation(
        mark("T = passed front × passed back × τ ∕ (1 − inner front × inner back × τ²), weighted with V(λ) and D65."),
        mark("All bounces added up without interference; τ solved from the tint's figure with bare faces."),
        mark("The colour of the tint, which is not known: it is taken as neutral."),
        (*_FILMS, TINT),
    ),
    "second_image": Explanation(
        mark(
            "Mirrored inside the back × mirrored inside the front × τ², as a part of the light seen directly; "
            "other paths below."
        ),
        _GHOST_SOURCE,
        _GHOST_LEAVES_OUT,
        (*_FILMS, TINT, AGE, VERTEX),
        ("ahead-inner", "behind-back", "behind-front", "cornea-back", "cornea-front"),
    ),
    "ahead-inner": Explanation(
        mark("Mirrored inside the back × mirrored inside the front × τ², as a part of the light seen directly."),
        _GHOST_SOURCE,
        _GHOST_LEAVES_OUT,
        (*_FILMS, TINT),
    ),
    "behind-back": Explanation(
        mark("What the back mirrors, as a part of the light behind."),
        _GHOST_SOURCE,
        _GHOST_LEAVES_OUT,
        (INDEX, BACK_FILM),
    ),
    "behind-front": Explanation(
        mark("Passed back² × mirrored inside the front × τ², as a part of the light behind."),
        _GHOST_SOURCE,
        _GHOST_LEAVES_OUT,
        (*_FILMS, TINT),
    ),
    "cornea-back": Explanation(
        mark("Mirrored by the cornea (2.5 %) × mirrored by the back, as a part of the light seen directly."),
        _GHOST_SOURCE,
        mark("The cornea's 2.5 %: published indices give 2.1 to 3.1 %; further bounces; scatter."),
        (INDEX, BACK_FILM),
    ),
    "cornea-front": Explanation(
        mark("Mirrored by the cornea (2.5 %) × passed back² × mirrored inside the front × τ²."),
        _GHOST_SOURCE,
        mark("The cornea's 2.5 %: published indices give 2.1 to 3.1 %; further bounces; scatter."),
        (*_FILMS, TINT),
    ),
    "seen_by_others": Explanation(
        mark(
            "What the whole lens mirrors towards a person in front, and the colour left over of the front's "
            "reflection."
        ),
        mark("As for the whole lens; hue from the CIE 1931 observer under D65."),
        mark("Where the window is; two faces whose images do not overlap; dirt."),
        _FILMS,
        ("whole_lens", "observer_contrast"),
    ),
    "observer_contrast": Explanation(
        mark("Mirrored window ∕ eye and skin seen through the lens twice: R × L window ∕ (T² × L face)."),
        mark("Luminances of the scene laid out; an upper bound, as the images of both faces are taken to overlap."),
        mark("Where the window is, and the colour of skin and iris."),
        (),
        ("whole_lens", "luminous_transmittance"),
    ),
    "colour_fringe_prism_d": Explanation(
        mark("Prism where the eye turned by 30° looks through ∕ Abbe number."),
        mark("Prentice's rule; thin-lens chromatic spread."),
        mark("The rule falls short of an exact trace by 1 to 17 %; how well the eye copes."),
        (*_LENS, ABBE, VERTEX),
    ),
    "magnification_percent": Explanation(
        mark("1 ∕ (1 − (t∕n) F₁) × 1 ∕ (1 − d F), d from the back of the lens to the eye's entrance pupil."),
        mark("Spectacle magnification, textbooks; entrance pupil 3 mm behind the cornea."),
        mark("Near objects, and distortion away from the centre."),
        (*_LENS, VERTEX),
        ("front_power_d", "centre_mm"),
    ),
    "cannot": Explanation(
        mark(
            "Every caution is a rule on this wearer's answers and this lens; every refusal a limit of the range "
            "or of geometry."
        ),
        mark("The rule and the source stand beside each caution."),
        mark("Local rules, which come first, and whatever was not asked."),
    ),
}  # fmt: skip
