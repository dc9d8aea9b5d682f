"""The second image of an option as a row of words: what is said aloud, how sure it is, and what contrast tells.

The page and the text table say it alike. Where a scene is brighter than the threshold was measured for (a stage, the
day), nobody can say from a threshold whether a ghost is noticed: its contrast is told instead.
"""

from advisor.counsel.layout import VERDICTS
from advisor.counsel.lens_figures import LensPair, Verdict
from advisor.counsel.phrases import Phrase, Translator, mark, say
from advisor.counsel.spoken import SPOKEN, from_behind, ghost_phrase, ghosts_of, worst_ghost
from advisor.optics import visibility

VERDICT_RANGE = mark("as lenses and eyes vary: %(least)s to %(most)s")
BRIGHT = mark("on a stage or by day, told by contrast: %(contrast_percent)s %%")
PAST_RANGE: dict[str, str] = {"past-range": BRIGHT}
AHEAD = ("ahead-inner",)


def verdict_range(option: LensPair) -> tuple[Verdict, Verdict] | None:
    """Return the verdicts between which the worst second image may lie, or None where one word says it."""
    order = visibility.VERDICTS
    ranges = [ghost.verdict_range for ghost in ghosts_of(option, paths=AHEAD) if not ghost.past_range]
    known = [pair for pair in ranges if pair is not None]
    if not known:
        return None
    least = max((pair[0] for pair in known), key=order.index)
    most = max((pair[1] for pair in known), key=order.index)
    return None if least == most else (least, most)


def past_range(option: LensPair) -> Phrase | None:
    """Return the greatest contrast of a second image in scenes past the threshold's range, or None without any."""
    found = [ghost.contrast for ghost in ghosts_of(option, paths=AHEAD) if ghost.past_range and ghost.contrast]
    return Phrase("past-range", {"contrast_percent": 100.0 * max(found)}) if found else None


def lead(option: LensPair, translator: Translator) -> str | None:
    """Return what an optician says aloud of the second image, or None where no light ahead is laid out."""
    ghost = worst_ghost(option)
    if ghost is None:
        return None
    spoken = say(ghost_phrase(ghost), SPOKEN, translator)
    # spread over the lens there is no place to say, so the verdict is said instead
    return f"{translator.gettext(VERDICTS[ghost.verdict])}; {spoken}" if ghost.spread and ghost.verdict else spoken


def beside(option: LensPair, translator: Translator) -> list[str]:
    """Return what stands under the lead: how sure it is, bright scenes by contrast, and light from behind."""
    found = []
    between = verdict_range(option)
    if between is not None:
        words = {"least": translator.gettext(VERDICTS[between[0]]), "most": translator.gettext(VERDICTS[between[1]])}
        found.append(translator.gettext(VERDICT_RANGE) % words)
    bright, behind = past_range(option), from_behind(option)
    if bright is not None:
        found.append(say(bright, PAST_RANGE, translator))
    if behind is not None:
        found.append(say(behind, SPOKEN, translator))
    return found
