"""What a wearer's sheet says: blocks of phrases with figures, every figure taken from the comparison."""

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from typing import Literal

from advisor.counsel.care import CARE_TEXTS, care_lines
from advisor.counsel.case import Case
from advisor.counsel.caution_texts import CAUTION_TEXTS
from advisor.counsel.cautions import BLUE_FROM, cautions_for
from advisor.counsel.changes import changes_from_worn
from advisor.counsel.compare import Computed, lens_light
from advisor.counsel.comparison import Comparison, EyeFigures, Ghost, OptionFigures
from advisor.counsel.faces import blue_turned_away
from advisor.counsel.laid_out import Laid
from advisor.counsel.phrases import Phrase, mark
from advisor.counsel.reach import near_only
from advisor.counsel.sheet_texts import HEADINGS, LINES
from advisor.counsel.spoken import from_behind, worst_ghost
from advisor.counsel.stock_items import IN_PLACE, Item
from advisor.counsel.words import HUES
from advisor.errors import TwolightError
from advisor.optics.visibility import VERDICTS

Kind = Literal["lines", "do", "dont", "urgent"]
READS_WITH_HELP_FROM = 45  # years; common practice, no source
MOST_PARTS = 10_000
LEAST_COLOURED = 0.004  # luminous reflectance of a face below which its colour is too faint to name
NOT_FOR = (
    "not-for-driving-tint",
    "not-for-night-driving-tint",
    "not-for-driving-design",
    "no-near",
    "not-eye-protection",
)
SAID_ELSEWHERE = ("coating-adds-no-strength", "not-promise-none", "blue-film-no-relief")

SHEET_TEXTS: Mapping[str, str] = LINES | CARE_TEXTS | {key: words.sheet for key, words in CAUTION_TEXTS.items()}


class NoSuchOption(TwolightError):
    """An option that is not laid out, or cannot be made, was asked for on paper."""


class NothingChosen(NoSuchOption):
    """Several options are laid out and none is marked as to be ordered."""


@dataclass(frozen=True)
class Block:
    """One part of a sheet: a heading and its lines."""

    key: str
    kind: Kind
    lines: tuple[Phrase, ...]

    @property
    def heading(self) -> str:
        """The heading, in English, marked for translation."""
        return HEADINGS[self.key]


@dataclass(frozen=True)
class Sheet:
    """Everything a wearer's sheet says; the template only lays it out."""

    name: str | None
    reference: str | None
    option: OptionFigures
    before: tuple[Block, ...]
    urgent: Block
    bars: tuple[tuple[str, float], ...]


def choose(computed: Computed, *, number: int | None, answer: Comparison | None = None) -> int:
    """Return the index of the option a paper is about.

    ``number`` counts from 1. Left out: what was ordered, else the only one that can be made. A sheet may go on from
    there: with an ``answer``, what it recommends or ranks first among the options laid out. An order never guesses.

    Raises
    ------
    NoSuchOption
        If it is not laid out, cannot be made, or nobody has said which one.
    """
    laid, visit = computed.laid, computed.case.visit
    makeable = [option.index for option in laid if not option.refused]
    if number is not None and number > len(laid):
        raise NoSuchOption(f"There is no option {number}; {len(laid)} are laid out.")
    index = visit.ordered if number is None else number - 1
    if index is None and len(makeable) == 1:
        index = makeable[0]
    if index is None and answer is not None and answer.advice is not None:
        best = answer.advice.recommended
        ranked = [best.index] if best is not None and best.index is not None else answer.advice.ranking or ()
        index = next(iter(ranked), None)
    if index is None and makeable:
        raise NothingChosen("Nobody has said which option: mark one as to be ordered, or give its number.")
    if index is None or index not in makeable:
        raise NoSuchOption("This option cannot be made, so there is nothing to print; choose another one.")
    return index


def one_part_in(strength: float) -> int:
    """Return n for "1 part in n", to two figures: nobody can use more."""
    if strength <= 0.0:
        return 10**9
    parts = 1.0 / strength
    step = 10 ** max(0, len(str(int(parts))) - 2)
    return int(round(parts / step) * step)


def wearer_sheet(computed: Computed, answer: Comparison, *, index: int, price: str | None) -> Sheet:
    """Return the sheet of one option; ``price`` is the pair's price as the language writes it."""
    laid, option = computed.laid[index], answer.options[index]
    if option.right is None or option.left is None:
        raise NoSuchOption("This option cannot be made, so there is nothing to print; choose another one.")
    visit = computed.case.visit
    applied = cautions_for(computed.case, laid, light=lens_light(computed, index))
    answered = (*computed.case.yes_answers(), *(("child",) if computed.case.is_child else ()))
    cautions = [Phrase(a.key, a.figures) for a in applied if CAUTION_TEXTS[a.key].sheet]
    blocks = [
        Block("for", "lines", tuple(_purpose(computed, laid))),
        Block("not-for", "dont", tuple(c for c in cautions if c.code in NOT_FOR)),
        Block("chosen", "lines", tuple(_chosen(laid, price))),
        Block(
            "why",
            "lines",
            (*_facts(option.right, laid), *_ghosts(option, drives=_is_driven_in_at_night(computed.case, laid))),
        ),
        Block("coating", "lines", tuple(_coating(option.right, laid))),
        Block("do", "do", tuple(care_lines(answered, kind="do"))),
        Block("dont", "dont", tuple(care_lines(answered, kind="dont"))),
        Block("first-days", "lines", tuple(_first_days(computed, laid))),
        Block(
            "come-back",
            "lines",
            _phrases("back-fit", "back-unclear", "back-sick", "back-second", "back-damage", "back-soon"),
        ),
        Block("notes", "lines", tuple(c for c in cautions if c.code not in (*NOT_FOR, *SAID_ELSEWHERE))),
    ]
    return Sheet(
        name=visit.wearer.name if visit.wearer else None,
        reference=visit.reference,
        option=option,
        before=tuple(block for block in blocks if block.lines),
        urgent=Block("today", "urgent", _phrases(*(key for key in LINES if key.startswith("today-")))),
        bars=tuple(_bars(option.right, laid)),
    )


def _phrases(*keys: str) -> tuple[Phrase, ...]:
    return tuple(Phrase(key) for key in keys)


def _purpose(computed: Computed, laid: Laid) -> Iterable[Phrase]:
    case = computed.case
    kind, wanted = laid.design.kind, case.visit.prescription.for_
    if kind == "single-vision":
        far_alone = case.has_add or wanted == "distance" or case.age_years >= READS_WITH_HELP_FROM
        near = "for-desk" if wanted == "intermediate" else "for-near"
        yield Phrase(near if near_only(case, laid.design) else "for-far" if far_alone else "for-all")
    else:
        keys = {
            "reading": "for-desk" if wanted == "intermediate" else "for-near",
            "occupational": "for-desk",
            "bifocal": "for-far-and-near-line",
            "progressive": "for-far-to-near",
        }
        yield Phrase(keys[kind])


def _is_driven_in_at_night(case: Case, laid: Laid) -> bool:
    return not case.never_at_night and not near_only(case, laid.design)


def _name(item: Item) -> str:
    """Return what an item is called on paper; one given in place has no name of its own."""
    if item.label is not None:
        return item.label
    return OWN_ITEM if item.key == IN_PLACE else item.key


OWN_ITEM = mark("as agreed")


def _chosen(laid: Laid, price: str | None) -> Iterable[Phrase]:
    yield Phrase("chosen-design", {"design": _name(laid.design)})
    yield Phrase("chosen-lens", {"material": _name(laid.material)})
    front, back = _name(laid.front), _name(laid.back)
    if front == back:
        yield Phrase("chosen-coating", {"coating": front})
    else:
        yield Phrase("chosen-coating-front", {"coating": front})
        yield Phrase("chosen-coating-back", {"coating": back})
    if laid.tint is not None:
        share = f"{100 * laid.tint.luminous_transmittance:.0f} %"
        yield Phrase("chosen-tint", {"tint": share if laid.tint.key == IN_PLACE else _name(laid.tint)})
    if price is not None:
        yield Phrase("chosen-price", {"price": price})


def is_coated(laid: Laid) -> bool:
    """Whether either face has a film."""
    return laid.front_face.has_film or laid.back_face.has_film


def _facts(eye: EyeFigures, laid: Laid) -> Iterable[Phrase]:
    """Tell three computed facts at most, of the right lens; both lenses of a pair have the same faces."""
    mirrors, bare = eye.luminous_reflectance, {"bare_percent": 100 * eye.uncoated.whole_lens}
    spread = mirrors.as_made.whole_lens
    if not is_coated(laid):
        yield Phrase("mirrors-uncoated", {"mirrored_percent": 100 * mirrors.whole_lens})
    elif spread is None:
        yield Phrase("mirrors-stated", {"mirrored_percent": 100 * mirrors.whole_lens} | bare)
    else:
        key = "mirrors-against-hard-coat" if eye.uncoated.hard_coat_only else "mirrors-against-bare"
        yield Phrase(key, {"low_percent": 100 * spread[0], "high_percent": 100 * spread[2]} | bare)
    if laid.tint is not None:
        yield Phrase("passes", {"luminous_percent": 100 * eye.luminous_transmittance})
    yield _second_image(eye, coated=is_coated(laid))


def _second_image(eye: EyeFigures, *, coated: bool) -> Phrase:
    """Tell how strong the twice-mirrored image is; beyond one part in ten thousand nobody can use the number."""
    image = eye.second_image
    strength = image.strength if image.as_made is None else image.as_made[1]
    without = one_part_in(eye.uncoated.second_image)
    if one_part_in(strength) <= MOST_PARTS:
        parts = {"parts": one_part_in(strength)}
        return (
            Phrase("second-image-coated", parts | {"bare_parts": without}) if coated else Phrase("second-image", parts)
        )
    if coated and without <= MOST_PARTS / 2:  # else the two numbers say the same
        return Phrase("second-image-coated-faint", {"bare_parts": without})
    return Phrase("second-image-faint")


def _ghosts(option: OptionFigures, *, drives: bool) -> list[Phrase]:
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


def _coating(eye: EyeFigures, laid: Laid) -> Iterable[Phrase]:
    if not is_coated(laid):
        yield Phrase("coating-none")
        return
    yield from _phrases("coating-does" if laid.tint is None else "coating-does-tinted", "coating-does-not")
    yield from _phrases("coating-glare", "coating-smears")
    blue = max(blue_turned_away(face) for face in (laid.front_face, laid.back_face))
    if blue >= BLUE_FROM:
        yield Phrase("coating-blue", {"blue_percent": 100.0 * blue})
    hue = eye.residual_colour.front.hue
    if laid.front_face.has_film and eye.luminous_reflectance.front >= LEAST_COLOURED and hue != "neutral":
        yield Phrase("coating-colour", {"hue": HUES[hue]})
    else:
        yield Phrase("coating-colour-varies")


def _first_days(computed: Computed, laid: Laid) -> Iterable[Phrase]:
    yield Phrase("first-wear")
    changes = list(changes_from_worn(computed.case, laid))
    yield from changes or [Phrase("first-size")]
    if computed.case.life("first_multifocal") == "yes" and laid.design.kind in ("bifocal", "progressive"):
        yield Phrase("first-of-kind")
    if laid.design.kind in ("bifocal", "progressive"):
        yield Phrase("first-multifocal")
    if computed.case.life("driving") != "never" and not near_only(computed.case, laid.design):
        yield Phrase("first-drive")
    yield Phrase("first-keep-old")


def _bars(eye: EyeFigures, laid: Laid) -> Iterable[tuple[str, float]]:
    """Return the shares of light mirrored away that are drawn as bars of one scale; none without a coating."""
    if is_coated(laid):
        spread = eye.luminous_reflectance.as_made.whole_lens
        yield (BAR_HARD_COAT if eye.uncoated.hard_coat_only else BAR_BARE, eye.uncoated.whole_lens)
        yield (BAR_WITH, eye.luminous_reflectance.whole_lens if spread is None else spread[2])


BAR_BARE = mark("Mirrored away by bare lenses")
BAR_HARD_COAT = mark("Mirrored away with a hard coat only")
BAR_WITH = mark("Mirrored away by yours, at most")
