"""Pictures of one option: which a visit allows, drawn with its coating or without, and told in words."""

from typing import Literal, get_args

from advisor.counsel.compare import Computed
from advisor.counsel.lens_figures import Ghost, Verdict
from advisor.counsel.phrases import Figure, Phrase, Translator, mark, say
from advisor.counsel.picture_drawing import draw_desk, draw_road, road_sheet
from advisor.counsel.picture_face import FaceView, draw_face, face_view
from advisor.counsel.picture_shapes import HEIGHT as HEIGHT  # the size of every picture, for who shows them
from advisor.counsel.picture_shapes import WIDTH as WIDTH
from advisor.counsel.picture_texts import EYE_WORDS, PICTURE_TEXTS
from advisor.counsel.picture_views import Seen, desk_scene, road_scene, scene_seen, seen_through
from advisor.counsel.prescription import EYES
from advisor.counsel.spoken import SPOKEN, behind_phrase, ghost_phrase
from advisor.counsel.words import HUES
from advisor.errors import TwolightError
from advisor.optics.ghost_path import FROM_BEHIND
from advisor.optics.ghost_strength import PATHS
from advisor.optics.tone import LEAST_CONTRAST

Name = Literal["road", "desk", "face"]
NAMES: tuple[Name, ...] = get_args(Name)
VERDICT_WORDS: tuple[Verdict, ...] = get_args(Verdict)  # in the order of the visibility levels


class NoSuchPicture(TwolightError):
    """The visit has no such option, the option cannot be made, or no scene of the visit suits the picture."""

    text = mark("There is no such picture for this visit.")


def names_of(computed: Computed, k: int) -> tuple[Name, ...]:
    """Return the pictures that the scenes of this visit allow for one option; none for one that cannot be made."""
    if not 0 <= k < len(computed.laid) or computed.laid[k].refused:
        return ()
    found = {"road": road_scene(computed, k), "desk": desk_scene(computed, k), "face": (0, 0)}
    return tuple(name for name in NAMES if found[name] is not None)


def has_film(computed: Computed, k: int) -> bool:
    """Whether an option has a film to leave away."""
    return computed.laid[k].front_face.has_film or computed.laid[k].back_face.has_film


def draw(computed: Computed, name: Name, *, option: int, film: bool) -> bytes:
    """Draw one picture of one option: rows of red, green and blue bytes, WIDTH by HEIGHT.

    Raises
    ------
    NoSuchPicture
        If `names_of` does not hold the name.
    """
    if name == "face" and name in names_of(computed, option):
        return draw_face(face_view(computed, option, film=film)).tobytes()
    seen, s, eye = _place(computed, name, option, film=film)
    shown = scene_seen(computed, seen, option, scene_index=s, eye=eye)
    if name == "desk":
        return draw_desk(shown).tobytes()
    coated = shown if film else scene_seen(computed, seen_through(computed, film=True), option, scene_index=s, eye=eye)
    return draw_road(shown, sheet=road_sheet(coated)).tobytes()  # one frame for both


def words(computed: Computed, name: Name, *, option: int, film: bool, translator: Translator) -> str:
    """Tell in words what one picture shows; see `draw`."""
    if name == "face" and name in names_of(computed, option):
        return say(_face_phrase(face_view(computed, option, film=film)), PICTURE_TEXTS, translator)
    seen, s, eye = _place(computed, name, option, film=film)
    spoken = _road_phrase(seen, option, s, eye) if name == "road" else _desk_phrase(seen, option, s, eye)
    shown: dict[str, Figure] = {"eye": EYE_WORDS[EYES[eye]], "seen": say(spoken, SPOKEN, translator)}
    return say(Phrase(name, shown), PICTURE_TEXTS, translator)


def road_wide_deg(computed: Computed, k: int) -> float:
    """Return how many degrees the road picture of an option is wide."""
    seen, s, eye = _place(computed, "road", k, film=True)
    return road_sheet(scene_seen(computed, seen, k, scene_index=s, eye=eye)).unit * WIDTH


def _place(computed: Computed, name: Name, k: int, *, film: bool) -> tuple[Seen, int, int]:
    """Return the ghosts, and the scene and the eye that a picture shows: the same with the coating and without."""
    if name not in names_of(computed, k):
        raise NoSuchPicture
    chosen = road_scene(computed, k) if name == "road" else desk_scene(computed, k)
    if chosen is None:
        raise NoSuchPicture
    return seen_through(computed, film=film), *chosen


def _road_phrase(seen: Seen, k: int, s: int, eye: int) -> Phrase:
    """Return the second image in words; one spread over the lens and not noticed is no haze to be noticed."""
    ghosts, at = seen.ghosts, (k, eye, s, PATHS.index("ahead-inner"))
    place = int(ghosts.relaxed.verdict[at])
    spread, size = bool(ghosts.spread[at]) and place > 0, ghosts.relaxed.size_deg[at]
    return ghost_phrase(
        Ghost(
            path="ahead-inner",
            scene="",
            strength=0.0,
            size_deg=(float(size[0]), float(size[1])),
            separation_deg=None if spread else float(ghosts.separation_deg[at]),
            spread=spread,
            contrast=float(ghosts.relaxed.contrast[at]),
            verdict=VERDICT_WORDS[place],
            haze=bool(ghosts.relaxed.haze[at]),
        )
    )


def _desk_phrase(seen: Seen, k: int, s: int, eye: int) -> Phrase:
    """Return the stronger of the two images in words, as the Counter does; the picture shows both."""
    return behind_phrase(float(seen.ghosts.relaxed.contrast[k, eye, s, FROM_BEHIND].max()))


def _face_phrase(view: FaceView) -> Phrase:
    figures: dict[str, Figure] = {"contrast_percent": 100.0 * view.contrast, "hue": HUES[view.hue]}
    if view.contrast < LEAST_CONTRAST:
        return Phrase("face-unseen", figures)
    return Phrase("face-brighter" if view.contrast > 1.0 else "face-seen", figures)
