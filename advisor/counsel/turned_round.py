"""The comparison turned round to the wearer: three rows, and what a pair must not be used for as a line of its own.

Every figure is the comparison's. Nothing is told of the wearer but a first name, and nothing of the pair worn now.
"""

from collections.abc import Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass

from advisor.counsel.cautions import cautions_for
from advisor.counsel.compare import Computed, lens_light
from advisor.counsel.comparison import Advice, Comparison, OptionFigures
from advisor.counsel.laid_out import Laid
from advisor.counsel.lens_figures import EyeFigures
from advisor.counsel.names import called, coating_name, material_name, tint_name
from advisor.counsel.phrases import Phrase, Translator
from advisor.counsel.reach import near_only
from advisor.counsel.spoken import from_behind, ghost_phrase, ghosts_of, worst_ghost
from advisor.counsel.turned_sizes import Size, listed, size_of, thick_and_heavy
from advisor.optics.visibility import VERDICTS

MOST_COLUMNS = 4
NOT_FOR = ("not-for-driving-tint", "not-for-night-driving-tint", "not-for-driving-design", "no-near", "glass-breaks")
DARK_AT_NIGHT = frozenset({"not-for-driving-tint", "not-for-night-driving-tint"})
NEEDS_TOUGH = frozenset({"child", "one-eye", "impact"})
BEHIND = ("behind-back", "behind-front")
FAINTER_FROM = 1.5  # a smaller ratio is not told


@dataclass(frozen=True)
class Column:
    """One option for the wearer's eyes; ``number`` is what it is called on the Counter."""

    number: int
    made_of: tuple[Phrase, ...]
    ours: Phrase | None
    not_for: tuple[Phrase, ...]
    price: float | None
    thick_mm: float | None
    thick: tuple[Phrase, ...]
    see: tuple[Phrase, ...]


@dataclass(frozen=True)
class TurnedRound:
    """Everything the turned page says; the template only lays it out."""

    first_name: str | None
    columns: tuple[Column, ...]
    for_all: tuple[Phrase, ...]

    @property
    def most_mm(self) -> float | None:
        """The thickest of all, which fills the scale of the bars."""
        return max((one.thick_mm for one in self.columns if one.thick_mm is not None), default=None)


def turned_round(computed: Computed, answer: Comparison, *, translator: Translator) -> TurnedRound:
    """Return the options that can be made, in the wearer's words."""
    made = [option for option in answer.options if option.right and option.left][:MOST_COLUMNS]
    sizes = [size for size in map(size_of, made) if size is not None]
    strengths = _strengths_from_behind(made)
    wearer = computed.case.visit.wearer
    return TurnedRound(
        first_name=first_name(wearer.name if wearer else None),
        columns=tuple(_column(computed, option, answer.advice, sizes, strengths, translator) for option in made),
        for_all=(Phrase("not-eye-protection"), Phrase("calculated")),
    )


def first_name(name: str | None) -> str | None:
    """Return the first word of a name; of "family name, first name" the word after the comma."""
    words = (name or "").rpartition(",")[2].split() or (name or "").replace(",", " ").split()
    return words[0] if words else None


def _column(
    computed: Computed,
    option: OptionFigures,
    advice: Advice | None,
    sizes: Sequence[Size],
    strengths: Mapping[int, float],
    translator: Translator,
) -> Column:
    case, laid = computed.case, computed.laid[option.index]
    codes = {applied.key for applied in cautions_for(case, laid, light=lens_light(computed, option.index))}
    size = next((one for one in sizes if one.number == option.index + 1), None)
    lamps = not (codes & DARK_AT_NIGHT) and not near_only(case, laid.design)
    return Column(
        number=option.index + 1,
        made_of=tuple(_made_of(laid, translator)),
        ours=_ours(option.index, advice),
        not_for=tuple(_not_for(codes, laid)),
        price=option.price,
        thick_mm=None if size is None else size.thick_mm,
        thick=() if size is None else tuple(thick_and_heavy(size, sizes)),
        see=(*_second_light(option, lamps=lamps), *_from_behind(option, strengths), *_seen_by_others(option.right)),
    )


def _made_of(laid: Laid, translator: Translator) -> Iterator[Phrase]:
    if laid.design.kind != "single-vision":
        yield Phrase("design", {"design": called(laid.design, translator)})
    yield Phrase("material", {"material": material_name(laid.material, translator)})
    front, back = (coating_name(coating, translator) for coating in (laid.front, laid.back))
    filmed = laid.front_face.has_film, laid.back_face.has_film
    if not any(filmed):
        yield Phrase("coating-none")
    elif all(filmed) and front == back:
        yield Phrase("coating", {"coating": front})
    else:
        faces = (("coating-front", front, filmed[0]), ("coating-back", back, filmed[1]))
        yield from (Phrase(code, {"coating": name}) for code, name, has_film in faces if has_film)
    if laid.tint is not None:
        yield Phrase("tint", {"tint": tint_name(laid.tint, translator)})


def _ours(index: int, advice: Advice | None) -> Phrase | None:
    """Return that we would choose this option, alone or as one of two pairs, or None."""
    if advice is None:
        return None
    if advice.recommended is not None and advice.recommended.index == index:
        return Phrase("ours")
    pair = next((one for one in advice.two_pairs or () if one.index == index), None)
    return None if pair is None else Phrase(f"ours-{pair.use}" if pair.use else "ours")


def _not_for(codes: Iterable[str], laid: Laid) -> Iterator[Phrase]:
    """Yield each use that a caution forbids; no figures and no reason, which may be the wearer's own affair."""
    found = set(codes)
    yield from (Phrase(code) for code in NOT_FOR if code in found)
    if found & NEEDS_TOUGH and not laid.material.tough:
        yield Phrase("not-tough")


def _second_light(option: OptionFigures, *, lamps: bool) -> Iterator[Phrase]:
    """Yield the worst second image beside lamps at night, where the pair is meant for looking at lamps by night."""
    ghost = worst_ghost(option) if lamps else None
    if ghost is not None:
        unseen = ghost.spread and ghost.verdict in (None, VERDICTS[0])
        yield Phrase("second-not noticed") if unseen else ghost_phrase(ghost)


def _strengths_from_behind(made: Sequence[OptionFigures]) -> dict[int, float]:
    """Return how strongly each option mirrors light from behind, over the scenes that all of them are met in."""
    ghosts = {option.index + 1: ghosts_of(option, paths=BEHIND) for option in made}
    shared = set.intersection(*({ghost.scene for ghost in found} for found in ghosts.values())) if ghosts else set()
    if not shared:
        return {}
    return {number: max(g.strength for g in found if g.scene in shared) for number, found in ghosts.items()}


def _from_behind(option: OptionFigures, strengths: Mapping[int, float]) -> Iterator[Phrase]:
    """Yield what may show of light from behind: where it is plainly fainter than in the others, how much fainter."""
    behind = from_behind(option)
    if behind is None or behind.code == "behind-unseen":
        return
    own, most = strengths.get(option.index + 1, 0.0), max(strengths.values(), default=0.0)
    if own > 0.0 and most / own >= FAINTER_FROM:
        strongest = listed(number for number, strength in strengths.items() if most / strength < FAINTER_FROM)
        yield Phrase("behind-fainter", {"fainter": round(most / own), "others": strongest})
    else:
        yield behind


def _seen_by_others(eye: EyeFigures | None) -> Iterator[Phrase]:
    """Yield how much others see mirrored, as made where that is known; both lenses of a pair have the same faces."""
    if eye is None:
        return
    mirrors = eye.luminous_reflectance
    spread = mirrors.as_made.whole_lens
    share = mirrors.whole_lens if spread is None else spread[2]
    yield Phrase("mirrored-about" if spread is None else "mirrored-most", {"mirrored_percent": 100.0 * share})
