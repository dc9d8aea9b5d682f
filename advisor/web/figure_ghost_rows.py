"""Rows of the Counter on mirrored images: the second image in words, and the most that a face may mirror."""

from collections.abc import Iterable

from advisor.counsel.comparison import OptionFigures
from advisor.counsel.layout import second_image_strength, strength_words, times_apart
from advisor.counsel.lens_figures import LensPair
from advisor.counsel.names import called
from advisor.counsel.phrases import mark
from advisor.counsel.second_image_words import beside, lead
from advisor.counsel.stock import Range
from advisor.web.figure_cells import DASH, SAME, Cell, Desk, FigureRow, Line
from advisor.web.language import Language
from advisor.web.sentences import capital


def second_image_rows(desk: Desk) -> list[FigureRow]:
    """Return the row of the second image, or none where no pair has one."""
    if all(second_image_strength(pair) is None for pair in desk.pairs):
        return []
    return [desk.row("second_image", mark("second image"), desk.cells(lambda pair: _ghost_cell(desk, pair)))]


def _ghost_cell(desk: Desk, pair: LensPair) -> Cell:
    """Say aloud what is seen of the second image, where a light ahead is laid out; how strong it is stands under it."""
    strength, base = second_image_strength(pair), second_image_strength(desk.base)
    if strength is None:
        return DASH
    difference = ""
    if base is not None and pair is not desk.base:
        difference = times_apart(strength, base, desk.speaker) or desk.speaker.gettext(SAME)
    words, spoken = strength_words(strength, desk.speaker), lead(pair, desk.speaker)
    notes = tuple(beside(pair, desk.speaker))
    if spoken is None:
        return Cell((Line(words, difference=difference),), notes)
    return Cell((Line(capital(spoken)), Line(words, difference=difference)), notes)


def limit_rows(desk: Desk) -> list[FigureRow]:
    """Return how much each face may mirror before the second image is noticed, and which coatings stay below."""
    if all(option.reflectance_limit is None for option in desk.answer.options):
        return []

    def cell(option: OptionFigures) -> Cell:
        limit = option.reflectance_limit
        if limit is None:
            return DASH
        if limit.not_noticed is None:
            return Cell((Line(desk.speaker.gettext(mark("even bare faces are not noticed"))),))
        most = desk.speaker.gettext(mark("at most %(percent)s %% a face"))
        first = Line(most % {"percent": desk.speaker.number(100.0 * limit.not_noticed, digits=2)})
        reached = _coating_words(limit.reached_by, desk.computed.case.stock, desk.speaker)
        scenes = {scene.key: called(scene, desk.speaker) for scene in desk.computed.case.scenes}
        by = desk.speaker.gettext(mark("reached by: %(coatings)s")) % {
            "coatings": reached or desk.speaker.gettext(mark("none sold"))
        }
        notes = [by, scenes.get(limit.scene, limit.scene)]
        return Cell((first,), tuple(notes))

    return [desk.row("reflectance_limit", mark("reflectance limit, second image not noticed"), desk.option_cells(cell))]


def _coating_words(keys: Iterable[str], stock: Range, speaker: Language) -> str:
    """Return the names of coatings sold, as the shop calls them."""
    labels = {coating.key: called(coating, speaker) for coating in stock.coating}
    return ", ".join(labels.get(key, key) for key in keys)
