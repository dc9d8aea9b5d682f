"""Rows of a comparison for people: what the text table, the CSV file and the page show, in the same order."""

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass

from advisor.counsel.comparison import Comparison
from advisor.counsel.lens_figures import EyeFigures, FormFigures, LensPair, Verdict
from advisor.counsel.phrases import Translator, mark

Value = float | None
POINTS = mark("points")  # what percentages differ by
TIMES = mark("times")
ONE_PART = mark("1 in %(parts)s")
TIMES_FROM = 1.05  # a smaller ratio is called the same


@dataclass(frozen=True)
class Row:
    """One row: a stable key, its words, how the figure is read from an eye, and how it is written.

    A row in ``parts`` writes a small strength as "1 in 72,000"; such rows, and those told in times, differ by a ratio.
    """

    key: str
    label: str
    value: Callable[[FormFigures], Value]
    digits: int = 1
    unit: str = ""
    scale: float = 1.0
    open: bool = False
    parts: bool = False

    def text(self, value: Value, translator: Translator) -> str:
        """Return the figure with its unit, or a dash where there is none."""
        if value is None:
            return "–"
        if self.parts:
            return translator.gettext(ONE_PART) % {"parts": _parts(value, translator)}
        shown = translator.number(value * self.scale, digits=self.digits)
        return f"{shown} {translator.gettext(self.unit)}".rstrip()

    def difference(self, value: Value, base: Value, translator: Translator) -> str:
        """Return by how much a figure as shown differs from the baseline's as shown; empty where none shows."""
        if value is None or base is None:
            return ""
        if self.parts or self.unit == TIMES:
            return times_apart(value, base, translator)
        shown, shown_base = (round(figure * self.scale, self.digits) for figure in (value, base))
        number = translator.number(shown - shown_base, digits=self.digits, signed=True)
        unit = translator.gettext(POINTS) if self.unit == "%" else self.unit
        return f"{number} {unit}".rstrip() if shown != shown_base else ""


def two_digits(value: float) -> float:
    """Round to two digits, as many as a strength is known to."""
    return float(f"{value:.1e}")


def one_part_in(strength: float) -> float:
    """Return n for a strength of "1 part in n", to two digits; infinite where there is nothing."""
    return two_digits(1.0 / strength) if strength > 0.0 else math.inf


def _parts(strength: float, translator: Translator) -> str:
    parts = one_part_in(strength)
    return translator.number(parts, digits=0) if math.isfinite(parts) else "∞"


def times_apart(value: float, base: float, translator: Translator) -> str:
    """Return how many times weaker or stronger one figure is than another; empty where about the same."""
    least, most = sorted((value, base))
    if least <= 0.0 or most / least < TIMES_FROM:
        return ""
    times = two_digits(most / least)
    text = mark("%(times)s times weaker") if value < base else mark("%(times)s times stronger")
    return translator.gettext(text) % {"times": translator.number(times, digits=1 if times < 10 else 0)}


def _of_light(read: Callable[[EyeFigures], Value]) -> Callable[[FormFigures], Value]:
    """Return a reader of a figure of light, which a lens has none of while its coating is not known."""
    return lambda eye: read(eye) if isinstance(eye, EyeFigures) else None


def ghost_strength(path: str) -> Callable[[FormFigures], Value]:
    """Return a reader of the greatest strength of one path over the scenes laid out."""
    return _of_light(lambda eye: max((ghost.strength for ghost in eye.ghosts if ghost.path == path), default=None))


def _smaller(name: str) -> Callable[[FormFigures], Value]:
    return lambda eye: None if eye.smaller_frame is None else eye.smaller_frame.get(name)


def _mirrored(name: str) -> Callable[[FormFigures], Value]:
    return _of_light(lambda eye: float(getattr(eye.luminous_reflectance, name)))


def _as_made(face: str, place: int) -> Callable[[FormFigures], Value]:
    def read(eye: EyeFigures) -> Value:
        spread = getattr(eye.luminous_reflectance.as_made, face)
        return None if spread is None else float(spread[place])

    return _of_light(read)


ROWS: tuple[Row, ...] = (
    Row("edge_thickest_mm", mark("thickest edge"), lambda eye: eye.edge_thickest_mm, 1, "mm", open=True),
    Row("centre_mm", mark("centre"), lambda eye: eye.centre_mm, 1, "mm", open=True),
    Row("weight_g", mark("weight of the lens"), lambda eye: eye.weight_g, 1, "g", open=True),
    Row("smaller_edge_mm", mark("frame 4 mm smaller: thickest edge"), _smaller("edge_thickest_mm"), 1, "mm"),
    Row("smaller_weight_g", mark("frame 4 mm smaller: weight"), _smaller("weight_g"), 1, "g"),
    Row("edge_thinnest_mm", mark("thinnest edge"), lambda eye: eye.edge_thinnest_mm, 1, "mm"),
    Row("front_power_d", mark("front curve"), lambda eye: eye.front_power_d, 2, "D"),
    Row("blank_mm", mark("smallest blank"), lambda eye: eye.blank_mm, 0, "mm"),
    Row("reflectance_front", mark("front mirrors, as designed"), _mirrored("front"), 2, "%", 100),
    Row("reflectance_front_low", mark("front mirrors, as made, least"), _as_made("front", 0), 2, "%", 100),
    Row("reflectance_front_high", mark("front mirrors, as made, most"), _as_made("front", 2), 2, "%", 100),
    Row("reflectance_back", mark("back mirrors, as designed"), _mirrored("back"), 2, "%", 100),
    Row("reflectance_back_low", mark("back mirrors, as made, least"), _as_made("back", 0), 2, "%", 100),
    Row("reflectance_back_high", mark("back mirrors, as made, most"), _as_made("back", 2), 2, "%", 100),
    Row("first_pass_loss", mark("first-pass loss"), _mirrored("first_pass_loss"), 2, "%", 100),
    Row("whole_lens", mark("whole lens mirrors"), _mirrored("whole_lens"), 2, "%", 100),
    Row("luminous_transmittance", mark("light passed"), _of_light(lambda eye: eye.luminous_transmittance), 1, "%", 100),
    Row("ahead-inner", mark("mirrored twice inside, from ahead"), ghost_strength("ahead-inner"), parts=True),
    Row("behind-back", mark("off the back, from behind"), ghost_strength("behind-back"), 2, "%", 100),
    Row("behind-front", mark("off the front, from behind"), ghost_strength("behind-front"), 2, "%", 100),
    Row("cornea-back", mark("off the eye, then the back"), ghost_strength("cornea-back"), parts=True),
    Row("cornea-front", mark("off the eye, then the front"), ghost_strength("cornea-front"), parts=True),
    Row(
        "observer_contrast",
        mark("window over the eye behind it"),
        _of_light(lambda eye: eye.observer_contrast),
        2,
        TIMES,
    ),
    Row("colour_fringe_prism_d", mark("colour fringe at the side"), lambda eye: eye.colour_fringe_prism_d, 2, "Δ"),
    Row(
        "magnification_percent",
        mark("size of what is seen, against no glasses"),
        lambda eye: eye.magnification_percent,
        1,
        "%",
    ),
)


def pairs_of(comparison: Comparison) -> list[LensPair]:
    """Return the pairs that stand side by side: every option, and last the pair worn now where something is known."""
    worn = comparison.worn_now
    return [*comparison.options, *([] if worn is None else [worn])]


def rows_present(comparison: Comparison) -> list[Row]:
    """Return the rows for which at least one eye of one pair has a figure."""
    eyes = [eye for pair in pairs_of(comparison) for eye in (pair.right, pair.left) if eye is not None]
    return [row for row in ROWS if any(row.value(eye) is not None for eye in eyes)]


def two_eyes(row: Row, option: LensPair, translator: Translator) -> str:
    """Return the figure of both eyes: one where they are shown alike, else right and left parted by a stroke."""
    texts = [row.text(row.value(eye), translator) for eye in (option.right, option.left) if eye is not None]
    return parted(texts, unit=translator.gettext(row.unit)) if texts else "–"


def parted(texts: Sequence[str], *, unit: str) -> str:
    """Join the texts of both eyes: one where they are alike, else parted by a stroke, with their unit once."""
    if len(set(texts)) == 1:
        return texts[0]
    first = texts[0].removesuffix(f" {unit}") if unit and all(text.endswith(f" {unit}") for text in texts) else texts[0]
    return " / ".join([first, *texts[1:]])


VERDICTS: dict[Verdict, str] = {
    "not noticed": mark("not noticed"),
    "at the limit": mark("at the limit"),
    "only if looked for": mark("only if looked for"),
    "noticeable": mark("noticeable"),
    "plain": mark("plain to see"),
}
PART_OF_THE_LIGHT = mark("1 part in %(parts)s of the light itself")


def second_image_strength(option: LensPair) -> float | None:
    """Return how strong the image mirrored twice inside the lens is, under daylight; the greater of the two eyes."""
    eyes = [eye for eye in (option.right, option.left) if isinstance(eye, EyeFigures)]
    return max((eye.second_image.strength for eye in eyes), default=None)


def strength_words(strength: float, translator: Translator) -> str:
    """Return a strength as a part of the light that makes it: "1 part in 630 of the light itself"."""
    return translator.gettext(PART_OF_THE_LIGHT) % {"parts": _parts(strength, translator)}
