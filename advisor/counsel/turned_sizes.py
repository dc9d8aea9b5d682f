"""How thick and heavy each pair is, and how that is against the others: compared as shown, to a tenth and to a gram."""

from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass

from advisor.counsel.comparison import OptionFigures
from advisor.counsel.phrases import Phrase

MM_DIGITS = 1


@dataclass(frozen=True)
class Size:
    """How thick and heavy the pair of one option is, as shown."""

    number: int
    thick_mm: float
    at_edge: bool
    pair_g: float


def size_of(option: OptionFigures) -> Size | None:
    """Return how thick and heavy the pair of an option is, or None where a figure is not known."""
    eyes = [eye for eye in (option.right, option.left) if eye is not None]
    edges = [eye.edge_thickest_mm for eye in eyes if eye.edge_thickest_mm is not None]
    centres = [eye.centre_mm for eye in eyes if eye.centre_mm is not None]
    weights = [eye.weight_g for eye in eyes if eye.weight_g is not None]
    if not (len(edges) == len(centres) == len(weights) == len(eyes)):
        return None
    thick_mm = round(max(*edges, *centres), MM_DIGITS)
    return Size(option.index + 1, thick_mm, max(edges) >= max(centres), round(sum(weights)))


def thick_and_heavy(size: Size, sizes: Sequence[Size]) -> Iterator[Phrase]:
    """Yield how thick, how that is against the others, and how heavy; compared as shown."""
    yield Phrase("edge" if size.at_edge else "middle", {"thick_mm": size.thick_mm})
    least_mm = min(one.thick_mm for one in sizes)
    alike = [one.number for one in sizes if one.thick_mm == size.thick_mm and one is not size]
    if alike:
        yield Phrase("as-thick", {"others": listed(alike)})
    elif size.thick_mm > least_mm:
        thinnest = [one.number for one in sizes if one.thick_mm == least_mm]
        yield Phrase("thicker", {"more_mm": size.thick_mm - least_mm, "others": listed(thinnest)})
    elif len(sizes) > 1:
        yield Phrase("thinnest")
    lightest = len(sizes) > 1 and all(one.pair_g > size.pair_g for one in sizes if one is not size)
    yield Phrase("lightest" if lightest else "weight", {"pair_g": size.pair_g})


def listed(numbers: Iterable[int]) -> str:
    """Return the numbers of options as one text."""
    return ", ".join(str(number) for number in numbers)
