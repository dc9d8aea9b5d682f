"""The lens on file, and what it would be if one thing were changed: every remedy's figures come from here."""

import datetime as dt
from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass
from functools import cached_property
from typing import Any

from advisor.counsel.case import Case
from advisor.counsel.choices import Faces, Option
from advisor.counsel.compare import Computed, answer_of, compute, lens_light
from advisor.counsel.comparison import Comparison, OptionFigures
from advisor.counsel.form import is_protective
from advisor.counsel.laid_out import Laid
from advisor.counsel.lens_figures import EyeFigures, Ghost
from advisor.counsel.materials import is_glass
from advisor.counsel.musts import OF_THE_DESIGN, Finished, broken_by
from advisor.counsel.phrases import Translator
from advisor.counsel.sheet import choose
from advisor.counsel.stock import Range
from advisor.counsel.stock_items import Coating, Item, Material, Scene
from advisor.counsel.visit import Visit

NIGHT_BELOW_CD_M2 = 5.0  # about where the mesopic range ends, CIE 191:2010 (from memory)
# What a lens on file may break already and a remedy for it leaves as it was; every other condition holds for a remedy.
LEFT_AS_IT_IS = OF_THE_DESIGN | {"near-imbalance", "not-offered", "night-driving-tint", "driving-tint"}
BEHIND = ("behind-back", "behind-front")


def _ref(item: Any, sold: Iterable[Item]) -> Any:
    """Return the key of an item that the range holds, else the item itself."""
    return item.key if item in tuple(sold) else item


def option_as_laid(laid: Laid, stock: Range, **changes: Any) -> Option:
    """Return an option that names everything the laid one has, with some parts changed."""
    parts: dict[str, Any] = {
        "design": laid.design.key,
        "material": _ref(laid.material, stock.material),
        "coating": Faces(front=_ref(laid.front, stock.coating), back=_ref(laid.back, stock.coating)),
        "tint": None if laid.tint is None else _ref(laid.tint, stock.tint),
        "front_power_d": laid.option.front_power_d,
        "centre_mm": laid.option.centre_mm,
    }
    return Option(**(parts | changes))


def eyes_of(option: OptionFigures) -> list[EyeFigures]:
    """Return the figures of the lenses of an option that can be made."""
    return [eye for eye in (option.right, option.left) if eye is not None]


@dataclass(frozen=True)
class OnFile:
    """The lens a wearer came back with, in every scene of the range; ``index`` is its place in the visit."""

    visit: Visit
    stock: Range
    computed: Computed
    index: int
    named_scenes: tuple[str, ...]
    translator: Translator
    today: dt.date

    @property
    def case(self) -> Case:
        """The visit made ready to compute."""
        return self.computed.case

    @property
    def laid(self) -> Laid:
        """The lens with everything looked up."""
        return self.computed.laid[0]

    @cached_property
    def answer(self) -> Comparison:
        """The comparison of this one lens."""
        return answer_of(self.computed, translator=self.translator, with_advice=False, with_worn_now=False)

    @property
    def option(self) -> OptionFigures:
        """Every figure of this lens."""
        return self.answer.options[0]

    @property
    def prescribes_prism(self) -> bool:
        """Whether prism is prescribed for either eye."""
        return any(any(part.amount for part in self.case.eye(eye).prism or ()) for eye in ("right", "left"))

    def changed(self, *, stock: Range | None = None, **parts: Any) -> OptionFigures:
        """Return this lens in a changed visit or range."""
        return self.laid_out([option_as_laid(self.laid, self.stock)], stock=stock, **parts)[0]

    def laid_out(self, options: Iterable[Option], *, stock: Range | None = None, **parts: Any) -> list[OptionFigures]:
        """Return the figures of some options for this wearer, by the same call as the comparison's own."""
        return self._figures(self._computed(options, stock=stock, **parts))

    def _computed(self, options: Iterable[Option], *, stock: Range | None = None, **parts: Any) -> Computed:
        visit = self.visit.model_copy(update={"options": tuple(options), **parts})
        return compute(visit, stock or self.stock, today=self.today)

    def _figures(self, computed: Computed) -> list[OptionFigures]:
        return answer_of(computed, translator=self.translator, with_advice=False, with_worn_now=False).options

    def offered(self, options: Mapping[str, Option], *, own_pair: bool = False) -> list[tuple[str, OptionFigures]]:
        """Return what of some named options can be made, is sold and may be advised to this wearer, with its figures.

        ``own_pair``: a second pair for one task, which need not do what the first is for.
        """
        if not options:
            return []
        computed = self._computed(options.values())
        known = LEFT_AS_IT_IS if own_pair else LEFT_AS_IT_IS & _broken(self.computed, 0)
        return [
            (name, figures)
            for k, (name, figures) in enumerate(zip(options, self._figures(computed), strict=True))
            if not figures.refused and not _outside_offers(figures) and _broken(computed, k) <= known
        ]

    def with_parts(self, **changes: Any) -> Option:
        """Return this lens as an option with some parts changed."""
        return option_as_laid(self.laid, self.stock, **changes)

    def films(self) -> list[Coating]:
        """Return the coatings the shop sells that are more than a hard coat."""
        return [coating for coating in self.stock.coating if coating.layers != ()]

    def materials(self) -> list[Material]:
        """Return the other materials, tough where this one is or this wearer needs it; glass only for glass."""
        here = self.laid.material
        needed = here.tough or is_protective(self.case)
        tough = [m for m in self.stock.material if m.tough or not needed]
        return [m for m in tough if m != here and (is_glass(here) or not is_glass(m))]

    def night_scenes(self) -> tuple[str, ...]:
        """Return the scenes of lamps ahead at night, else of any lamps ahead."""
        ahead = [s for s in self.case.scenes if s.where == "ahead" and s.kind == "small-source"]
        night = [scene for scene in ahead if scene.adapting_cd_m2 <= NIGHT_BELOW_CD_M2]
        return tuple(scene.key for scene in night or ahead)

    def behind_scenes(self) -> tuple[str, ...]:
        """Return the scenes of light from behind a clear lens: the visit's own first, windows before lamps."""
        found = [s for s in self.case.scenes if s.where == "behind" and s.tint_state == "clear"]
        found = [s for s in found if s.key in self.named_scenes] or found
        return tuple(s.key for s in [s for s in found if s.kind == "extended"] or found)

    def scene_name(self, key: str) -> str:
        """Return what a scene is called."""
        return next((scene.label or scene.key for scene in self.case.scenes if scene.key == key), key)

    def behind_relit(self, relight: Callable[[Scene], dict[str, float]]) -> Range:
        """Return the range with the light of every scene from behind changed."""
        scenes = [s.model_copy(update=relight(s)) if s.where == "behind" else s for s in self.stock.scene]
        return self.stock.model_copy(update={"scene": tuple(scenes)})


def _broken(computed: Computed, k: int) -> frozenset[str]:
    """Return the conditions that an option breaks for this wearer."""
    finished = Finished(lens_light(computed, k), float(computed.forms.shape.centre_mm[k].min()))
    return frozenset(phrase.code for phrase in broken_by(computed.case, computed.laid[k], finished))


def _outside_offers(option: OptionFigures) -> bool:
    return any(note.code == "not-an-offer" for note in option.notes)


def on_file(
    visit: Visit, stock: Range, *, number: int | None, translator: Translator, today: dt.date | None = None
) -> OnFile:
    """Return the lens on file: what was ordered, else what a sheet would be about; ``number`` counts from 1.

    Raises
    ------
    Faults
        If the visit names what the range does not hold.
    NoSuchOption
        If that option is not laid out or cannot be made.
    """
    day = today or dt.date.today()
    whole = compute(visit, stock, today=day)
    index = choose(whole, number=number)
    alone = {"options": (option_as_laid(whole.laid[index], stock),), "baseline": None, "ordered": None, "scenes": None}
    lens = visit.model_copy(update=alone)
    computed = compute(lens, stock, today=day)
    return OnFile(lens, stock, computed, index, visit.scenes or (), translator, day)


def worst_second(option: OptionFigures, scenes: Iterable[str]) -> Ghost | None:
    """Return the most visible image mirrored twice inside, over both eyes and some scenes."""
    wanted = set(scenes)
    found = [g for eye in eyes_of(option) for g in eye.ghosts if g.path == "ahead-inner" and g.scene in wanted]
    return max(found, key=lambda ghost: (ghost.visibility_level or 0.0, ghost.strength), default=None)


def worst_behind(option: OptionFigures, scenes: Iterable[str], paths: Iterable[str] = BEHIND) -> Ghost | None:
    """Return the image of light from behind with the greatest contrast, or None where none is computed."""
    wanted, taken = set(scenes), set(paths)
    found = [g for eye in eyes_of(option) for g in eye.ghosts if g.path in taken and g.scene in wanted]
    return max((g for g in found if g.contrast is not None), key=lambda ghost: ghost.contrast or 0.0, default=None)


def most(option: OptionFigures, figure: str) -> float | None:
    """Return the greater of both lenses of a figure, or None where neither has it."""
    values = [getattr(eye, figure) for eye in eyes_of(option)]
    return max((float(value) for value in values if value is not None), default=None)
