"""The computed facts of a wearer's sheet, three at most, and its one drawing: every figure is the comparison's own."""

from collections.abc import Iterator

from advisor.counsel.comparison import OptionFigures
from advisor.counsel.laid_out import Laid
from advisor.counsel.layout import one_part_in
from advisor.counsel.lens_figures import EyeFigures, Ghost
from advisor.counsel.phrases import Phrase
from advisor.counsel.sheet_texts import BAR_BARE, BAR_HARD_COAT, BAR_MIRRORED, BAR_THROUGH, BAR_WITH
from advisor.counsel.spoken import from_behind, worst_ghost
from advisor.optics.visibility import VERDICTS

MOST_FACTS = 3
MOST_PARTS = 10_000  # beyond one part in so many nobody can use the number


def is_coated(laid: Laid) -> bool:
    """Whether either face has a film."""
    return laid.front_face.has_film or laid.back_face.has_film


def facts(option: OptionFigures, eye: EyeFigures, laid: Laid, *, drives: bool, room: int) -> list[Phrase]:
    """Tell what the lens does with light, the most useful first and never more than ``room`` lines.

    Figures are of the right lens; both lenses of a pair have the same faces.
    """
    found = [_mirrored(eye, laid)]
    if laid.tint is not None:
        found.append(Phrase("passes", {"luminous_percent": 100 * eye.luminous_transmittance}))
    found += ghosts(option, drives=drives)
    found.append(_second_image(eye, coated=is_coated(laid)))
    return found[:room]


def size_change_percent(option: OptionFigures) -> float | None:
    """Return by how many per cent things look larger than in the worn pair, for the eye of the greatest change."""
    eyes = (eye for eye in (option.right, option.left) if eye is not None)
    changes = [eye.magnification_change_percent for eye in eyes]
    return max((change for change in changes if change is not None), key=abs, default=None)


def _mirrored(eye: EyeFigures, laid: Laid) -> Phrase:
    mirrors, bare = eye.luminous_reflectance, {"bare_percent": 100 * eye.uncoated.whole_lens}
    spread = mirrors.as_made.whole_lens
    if not is_coated(laid):
        return Phrase("mirrors-uncoated", {"mirrored_percent": 100 * mirrors.whole_lens})
    if spread is None:
        return Phrase("mirrors-stated", {"mirrored_percent": 100 * mirrors.whole_lens} | bare)
    key = "mirrors-against-hard-coat" if eye.uncoated.hard_coat_only else "mirrors-against-bare"
    return Phrase(key, {"low_percent": 100 * spread[0], "high_percent": 100 * spread[2]} | bare)


def _second_image(eye: EyeFigures, *, coated: bool) -> Phrase:
    """Tell how strong the twice-mirrored image is, to two figures."""
    image = eye.second_image
    parts = one_part_in(image.strength if image.as_made is None else image.as_made[1])
    without = one_part_in(eye.uncoated.second_image)
    if parts <= MOST_PARTS:
        both = {"parts": parts, "bare_parts": without}
        return Phrase("second-image-coated", both) if coated else Phrase("second-image", {"parts": parts})
    if coated and without <= MOST_PARTS / 2:  # else the two numbers say the same
        return Phrase("second-image-coated-faint", {"bare_parts": without})
    return Phrase("second-image-faint")


def ghosts(option: OptionFigures, *, drives: bool) -> list[Phrase]:
    """Tell at most two things about ghosts, "you may" and never "you will", and only what was computed."""
    found: list[Phrase] = []
    if drives and worst_ghost(option) is not None:
        second, haze = (worst_ghost(option, haze=haze) for haze in (False, True))
        found += [Phrase("may-see-second")] if _noticed(second) else []
        found += [Phrase("may-see-haze")] if _noticed(haze) else []
        found = found or [Phrase("may-not-see-second")]
    behind = from_behind(option)
    if behind is not None and behind.code != "behind-unseen":
        found.append(Phrase("may-see-behind"))
    return found[:2]


def _noticed(ghost: Ghost | None) -> bool:
    return ghost is not None and VERDICTS.index(ghost.verdict or VERDICTS[0]) >= VERDICTS.index("only if looked for")


def bars(eye: EyeFigures, laid: Laid) -> Iterator[tuple[str, float]]:
    """Yield the shares of light that are drawn as bars: with the coating and without, else where the light goes."""
    mirrors = eye.luminous_reflectance
    if is_coated(laid):
        spread = mirrors.as_made.whole_lens
        yield (BAR_HARD_COAT if eye.uncoated.hard_coat_only else BAR_BARE, eye.uncoated.whole_lens)
        yield (BAR_WITH, mirrors.whole_lens if spread is None else spread[2])
    else:
        yield (BAR_THROUGH, eye.luminous_transmittance)
        yield (BAR_MIRRORED, mirrors.whole_lens)
