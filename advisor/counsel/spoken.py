"""Ghosts in words an optician can say aloud, from the comparison's own figures.

At arm's length a finger covers about 1 degree and a thumb about 2 (common practice, no source). "Haze" is said where a
ghost is larger than 1 degree or reaches back over its lamp: then it is no second light, and is told by its contrast.
"""

from collections.abc import Iterable, Mapping

from advisor.counsel.lens_figures import EyeFigures, Ghost, LensPair
from advisor.counsel.phrases import Phrase, mark
from advisor.optics.visibility import VERDICTS

SHARP_BELOW_DEG = 0.25
LEAST_CONTRAST_BEHIND = 0.02  # ghost over what is looked at; common notice level of a step in luminance (Weber), memory

SPOKEN: dict[str, str] = {
    "second-not noticed": mark("no second light to be noticed"),
    "second-at the limit": mark("a second light at the limit of what is seen, %(place)s, %(edge)s"),
    "second-only if looked for": mark("a faint second light %(place)s, %(edge)s; seen if looked for"),
    "second-noticeable": mark("a noticeable second light %(place)s, %(edge)s"),
    "second-plain": mark("a plain second light %(place)s, %(edge)s"),
    "haze-seen": mark("a haze round the lamp, %(contrast_percent)s %% of the light about it"),
    "haze-unseen": mark("no haze to be noticed"),
    "spread": mark("spread over the lens: no place to state"),
    "behind-seen": mark("a light or window behind shows at %(contrast_percent)s %% of what is looked at"),
    "behind-brighter": mark("a light or window behind shows brighter than what is looked at"),
    "behind-unseen": mark("light from behind stays below 2 %% of what is looked at"),
}
PLACES: tuple[tuple[float, str], ...] = (
    (0.35, mark("close beside the lamp")),
    (0.75, mark("half a finger's width beside the lamp")),
    (1.5, mark("about a finger's width beside the lamp")),
    (3.0, mark("about a thumb's width beside the lamp")),
    (6.0, mark("about two thumbs' width beside the lamp")),
    (float("inf"), mark("far beside the lamp")),
)
EDGES: Mapping[bool, str] = {True: mark("sharp-edged"), False: mark("soft-edged")}


def ghosts_of(option: LensPair, *, paths: Iterable[str]) -> list[Ghost]:
    """Return the ghosts of both eyes that take one of these paths."""
    wanted = set(paths)
    eyes = [eye for eye in (option.right, option.left) if isinstance(eye, EyeFigures)]
    return [ghost for eye in eyes for ghost in eye.ghosts if ghost.path in wanted]


def worst_ghost(option: LensPair, *, paths: Iterable[str] = ("ahead-inner",), haze: bool | None = None) -> Ghost | None:
    """Return the ghost with the greatest visibility level, or None where none is computed; of haze alone or without.

    Scenes past the range of the threshold model (daylight, office, stage) are told by contrast and never ranked by it.
    """
    found = ghosts_of(option, paths=paths)
    known = [ghost for ghost in found if ghost.visibility_level is not None and not ghost.past_range]
    known = [ghost for ghost in known if haze is None or bool(ghost.haze) == haze]
    return max(known, key=lambda ghost: ghost.visibility_level or 0.0, default=None)


def ghost_phrase(ghost: Ghost) -> Phrase:
    """Return one ghost from ahead in words: what is seen, where, how sharp."""
    contrast = {"contrast_percent": 100.0 * (ghost.contrast or 0.0)}
    if ghost.spread:
        return Phrase("spread")
    unseen = ghost.verdict == VERDICTS[0]
    if ghost.haze:
        return Phrase("haze-unseen") if unseen else Phrase("haze-seen", contrast)
    if unseen or ghost.separation_deg is None:
        return Phrase("second-not noticed")
    separation, size = ghost.separation_deg, max(ghost.size_deg or (0.0, 0.0), key=lambda value: value or 0.0)
    place = next(words for limit, words in PLACES if separation < limit)
    return Phrase(f"second-{ghost.verdict}", {"place": place, "edge": EDGES[(size or 0.0) < SHARP_BELOW_DEG]})


def second_image(option: LensPair) -> Phrase | None:
    """Return the worst second image of an option in words, or None where none is computed."""
    ghost = worst_ghost(option)
    return None if ghost is None else ghost_phrase(ghost)


def from_behind(option: LensPair) -> Phrase | None:
    """Return what shows of light from behind, by its contrast, or None where no such scene is laid out."""
    found = [ghost.contrast for ghost in ghosts_of(option, paths=("behind-back", "behind-front")) if ghost.contrast]
    return behind_phrase(max(found)) if found else None


def behind_phrase(contrast: float) -> Phrase:
    """Return light from behind in words, by its contrast to what is looked at."""
    if contrast < LEAST_CONTRAST_BEHIND:
        return Phrase("behind-unseen")
    if contrast > 1.0:
        return Phrase("behind-brighter")
    return Phrase("behind-seen", {"contrast_percent": 100.0 * contrast})
