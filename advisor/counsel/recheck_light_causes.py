"""How likely this very lens makes what the wearer sees: second lights, light from behind, edges, fringes, films, tints.

Each cause is a function of the lens on file; None means it does not apply to this lens at all. The steps are modelling
choices on computed figures, one table each.
"""

from dataclasses import dataclass

from advisor.counsel.batch import match_share
from advisor.counsel.choices import Faces
from advisor.counsel.comparison import OptionFigures
from advisor.counsel.lens_figures import Ghost
from advisor.counsel.phrases import Phrase, say
from advisor.counsel.recheck_answer import Level
from advisor.counsel.recheck_lens import OnFile, eyes_of, most, worst_behind, worst_second
from advisor.counsel.recheck_remedies import NOT_SEEN_LEVEL
from advisor.counsel.spoken import LEAST_CONTRAST_BEHIND, SPOKEN, ghost_phrase
from advisor.counsel.stock import BARE
from advisor.counsel.words import HUES
from advisor.optics.visibility import VERDICTS

LIKELY_LEVEL, HAZE_LEVEL = 3.0, 1.0
LIKELY_BEHIND = 0.1
FRINGE_NOTICED_PRISM_D = 0.1  # customary notice level, textbook, memory
THICK_EDGE_MM = 3.0
POOR_MATCH = 0.9
DARK_BELOW = 0.43  # category 2 and darker, ISO 12312-1 as quoted in public guidance


@dataclass(frozen=True)
class Rating:
    """How likely, and why."""

    level: Level
    why: tuple[Phrase, ...] = ()


def _second_level(ghost: Ghost, *, apart: bool) -> Level:
    """Return how likely a ghost is called a second light: a haze is none, unless it is bright.

    ``apart``: prescribed prism throws it clear of its lamp, so that even a large one stands by itself.
    """
    level = ghost.visibility_level or 0.0
    if ghost.spread:
        return "unlikely"
    if ghost.haze and not apart:
        return "possible" if level >= HAZE_LEVEL else "unlikely"
    if level >= LIKELY_LEVEL:
        return "likely"
    may = ghost.verdict_range is not None and ghost.verdict_range[1] != VERDICTS[0]
    return "possible" if level >= NOT_SEEN_LEVEL or may else "unlikely"


def _ghost_words(lens: OnFile, ghost: Ghost) -> dict[str, float | str | None]:
    apart = lens.prescribes_prism and not ghost.spread  # then it is no haze round its lamp, however large
    phrase = ghost_phrase(ghost.model_copy(update={"haze": False}) if apart else ghost)
    level = ghost.visibility_level or 0.0
    shown = lens.translator.number(level, digits=2 if level < 1.0 else 1)
    return {
        "ghost": say(phrase, SPOKEN, lens.translator),
        "visibility_level": shown,
        "scene": lens.scene_name(ghost.scene),
    }


def ahead_ghost(lens: OnFile) -> Rating:
    """Judge light mirrored twice inside."""
    ghost = worst_second(lens.option, lens.night_scenes())
    if ghost is None:
        return Rating("not worked out", (Phrase("no-scene"),))
    why = [Phrase("ghost-spread") if ghost.spread else Phrase("ghost", _ghost_words(lens, ghost))]
    if lens.prescribes_prism and ghost.separation_deg is not None:
        why.append(Phrase("prism", {"separation_deg": ghost.separation_deg}))
    return Rating(_second_level(ghost, apart=lens.prescribes_prism), tuple(why))


def bare_face(lens: OnFile) -> Rating | None:
    """Judge a coating left out on one face; only a pair ordered with both faces coated can have lost one."""
    if not (lens.laid.front_face.has_film and lens.laid.back_face.has_film):
        return None
    front, back = lens.with_parts().coating, BARE.key
    if not isinstance(front, Faces):
        return None
    missing = [Faces(front=back, back=front.back), Faces(front=front.front, back=back)]
    found = lens.laid_out([lens.with_parts(coating=faces) for faces in missing])
    ghosts = [g for option in found if (g := worst_second(option, lens.night_scenes())) is not None]
    if not ghosts:
        return Rating("not worked out", (Phrase("no-scene"),))
    worst = max(ghosts, key=lambda ghost: ghost.visibility_level or 0.0)
    level = _second_level(worst, apart=lens.prescribes_prism)
    return Rating("possible" if level == "likely" else level, (Phrase("face-bare", _ghost_words(lens, worst)),))


def _behind(lens: OnFile, path: str) -> Rating:
    ghost = worst_behind(lens.option, lens.behind_scenes(), (path,))
    if ghost is None or ghost.contrast is None:
        return Rating("not worked out", (Phrase("no-scene"),))
    contrast, scene = ghost.contrast, lens.scene_name(ghost.scene)
    why = [Phrase("behind", {"behind_contrast_percent": 100.0 * contrast, "scene": scene})]
    here, other = lens.laid.front_face, lens.laid.back_face
    if path == "behind-front" and other.has_film and not here.has_film:
        why.append(Phrase("other-face-coated"))
    level: Level = "likely" if contrast >= LIKELY_BEHIND else "possible"
    return Rating(level if contrast >= LEAST_CONTRAST_BEHIND else "unlikely", tuple(why))


def behind_back(lens: OnFile) -> Rating:
    """Judge light from behind off the back."""
    return _behind(lens, "behind-back")


def behind_front(lens: OnFile) -> Rating:
    """Judge light from behind off the front."""
    return _behind(lens, "behind-front")


def edge_rings(lens: OnFile) -> Rating:
    """Judge rings in the edge: a thick edge that is thicker than the centre."""
    thick = [e.edge_thickest_mm for e in eyes_of(lens.option) if (e.edge_thickest_mm or 0.0) > (e.centre_mm or 0.0)]
    edge = max((value for value in thick if value is not None), default=None)
    if edge is None:
        return Rating("unlikely", (Phrase("not-minus"),))
    return Rating("likely" if edge >= THICK_EDGE_MM else "possible", (Phrase("edge", {"edge_thickest_mm": edge}),))


def chromatic(lens: OnFile) -> Rating:
    """Judge colour spread at the side."""
    fringe = most(lens.option, "colour_fringe_prism_d")
    if fringe is None:
        return Rating("not worked out")
    level: Level = "likely" if fringe >= FRINGE_NOTICED_PRISM_D else "possible"
    level = level if fringe >= FRINGE_NOTICED_PRISM_D / 2.0 else "unlikely"
    return Rating(level, (Phrase("fringe", {"colour_fringe_prism_d": fringe}),))


def different_batch(lens: OnFile) -> Rating | None:
    """Judge two lenses of different runs by how often such lenses match."""
    faces = [face for face in (lens.laid.front_face, lens.laid.back_face) if face.has_film]
    if not faces:
        return None
    shares = [share for face in faces if (share := match_share(face, one_run=False)) is not None]
    if not shares:
        return Rating("not worked out", (Phrase("no-layers"),))
    worst = min(shares)
    level: Level = "likely" if worst < POOR_MATCH else "possible"
    return Rating(level, (Phrase("match", {"match_percent": 100.0 * worst}),))


def one_bare_face(_lens: OnFile) -> Rating:
    """Judge one face unlike its fellow: only looking tells."""
    return Rating("not worked out")


def bare_back_tint(lens: OnFile) -> Rating | None:
    """Judge the back behind a tint."""
    eyes = eyes_of(lens.option)
    if lens.laid.tint is None or not eyes:
        return Rating("unlikely", (Phrase("no-such-tint"),))
    figures = _tint_figures(lens.option)
    dark = min(e.luminous_transmittance_dark or e.luminous_transmittance for e in eyes) < DARK_BELOW
    level: Level = "likely" if dark and not lens.laid.back_face.has_film else "possible"
    return Rating(level, (Phrase("tint", figures),))


def _tint_figures(option: OptionFigures) -> dict[str, float | str | None]:
    eye = eyes_of(option)[0]
    back = eye.luminous_reflectance.back
    return {"luminous_percent": 100.0 * eye.luminous_transmittance, "back_percent": 100.0 * back}


def polariser(lens: OnFile) -> Rating:
    """Judge the polarising lens."""
    return _kind(lens, "polarising")


def windscreen_uv(lens: OnFile) -> Rating:
    """Judge the photochromic lens in a car."""
    return _kind(lens, "photochromic")


def _kind(lens: OnFile, kind: str) -> Rating:
    fits = lens.laid.tint is not None and lens.laid.tint.kind == kind
    return Rating("likely", (Phrase(kind),)) if fits else Rating("unlikely", (Phrase("no-such-tint"),))


def film_or_tint(lens: OnFile) -> Rating:
    """Judge the colour of what is seen through film and tint."""
    eyes = eyes_of(lens.option)
    if not eyes:
        return Rating("not worked out")
    hue = HUES[eyes[0].residual_colour.front.hue]
    why = Phrase("hue", {"hue": hue, "luminous_percent": 100.0 * eyes[0].luminous_transmittance})
    coloured = lens.laid.tint is not None or lens.laid.front_face.has_film
    return Rating("possible" if coloured else "unlikely", (why,))
