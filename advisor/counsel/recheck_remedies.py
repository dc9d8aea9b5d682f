"""What each remedy would change for this very lens: before and after, by running the comparison on a changed visit."""

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field, replace

from advisor.counsel.choices import Faces, Option
from advisor.counsel.comparison import OptionFigures
from advisor.counsel.phrases import Figure
from advisor.counsel.recheck_answer import Outcome
from advisor.counsel.recheck_lens import OnFile, eyes_of, most, worst_behind, worst_second
from advisor.counsel.visit import Fitting
from advisor.optics.visibility import VERDICTS

LEAST_GAIN = 0.1  # a remedy is named where it takes a tenth off its figure or more; a modelling choice
LEAST_FREE_GAIN = 0.02  # what is adjusted for nothing may gain less
ALIKE = 1.5  # films within so much of the least are alike: as made they vary more; a modelling choice
NOT_SEEN_LEVEL = 0.4  # below it a second image is not called one; a modelling choice
CURVES_OFF_D = (-2.0, -1.0, 1.0, 2.0)
CLOSER_BY_MM, LEAST_VERTEX_MM = 2.0, 8.0
BLIND_PASSES = 0.1

Changes = tuple[tuple[str, float, float], ...]


@dataclass(frozen=True)
class Worked:
    """A remedy worked out: figures for its text, figures before and after, and the price of the pair."""

    figures: Mapping[str, Figure] = field(default_factory=dict)
    changes: Changes = ()
    price: float | None = None


Work = Callable[[OnFile], Worked | None]
Measure = Callable[[OnFile, OptionFigures], float | None]

OUTCOMES: Mapping[str, Outcome] = {
    "remake-as-ordered": "remake", "coat-both": "remake", "coat-back": "remake", "other-form": "remake",
    "other-material": "remake", "another-pair": "remake", "smaller-frame": "remake", "thinner-material": "remake",
    "higher-abbe": "remake", "top-layer": "remake", "replace-same": "remake", "remake-as-pair": "remake",
    "keep-curve": "remake", "near-pair": "remake", "other-design": "remake", "rolled-edge": "remake",
    "film-on-faces": "remake",
    "walking-pair": "remake",
    "check-coating": "none", "turn-desk": "none", "shade-light": "none", "explain": "none", "measure-now": "none",
    "head-down": "none",
    "closer-fit": "adjust", "matt-edge": "adjust", "loosen-rim": "adjust", "adjust-fit": "adjust",
    "adjust-heights": "adjust", "clean-right": "clean", "refer-eye": "refer",
    "refer-eyes": "refer", "ask-prescriber": "refer",
}  # fmt: skip


def plain(_lens: OnFile) -> Worked:
    """Work out nothing: a remedy without figures."""
    return Worked()


def _level(lens: OnFile, option: OptionFigures) -> float | None:
    ghost = worst_second(option, lens.night_scenes())
    return None if ghost is None else ghost.visibility_level


def _second_changes(lens: OnFile, after: OptionFigures) -> Changes:
    """Return level, verdict and strength of the most visible second image, before and after."""
    was, now = (worst_second(option, lens.night_scenes()) for option in (lens.option, after))
    if was is None or now is None or was.visibility_level is None or now.visibility_level is None:
        return ()
    steps = [float(VERDICTS.index(ghost.verdict or VERDICTS[0])) for ghost in (was, now)]
    return (
        ("visibility_level", was.visibility_level, now.visibility_level),
        ("verdict_step", steps[0], steps[1]),
        ("second_image_percent", 100.0 * was.strength, 100.0 * now.strength),
    )


def _level_unless_stronger(lens: OnFile, option: OptionFigures) -> float | None:
    """Return the level of a second image, or None where it gets stronger and only its place makes it less visible."""
    was, now = (worst_second(pair, lens.night_scenes()) for pair in (lens.option, option))
    return None if was is None or now is None or now.strength > was.strength else now.visibility_level


def _worth_it(changes: Changes) -> bool:
    """Tell whether a second image becomes so much less visible that its verdict falls a step."""
    return is_less(changes) and changes[1][2] < changes[1][1]


def _behind(lens: OnFile, option: OptionFigures) -> float | None:
    ghost = worst_behind(option, lens.behind_scenes())
    return None if ghost is None else ghost.contrast


def _back(_lens: OnFile, option: OptionFigures) -> float | None:
    return max((eye.luminous_reflectance.back for eye in eyes_of(option)), default=None)


def _percent(figure: str, measure: Measure) -> Callable[[OnFile, OptionFigures], Changes]:
    """Return the change of a figure that is measured as a fraction."""

    def changes(lens: OnFile, after: OptionFigures) -> Changes:
        was, now = (measure(lens, option) for option in (lens.option, after))
        return () if was is None or now is None else ((figure, 100.0 * was, 100.0 * now),)

    return changes


_behind_change = _percent("behind_contrast_percent", _behind)
_back_change = _percent("back_reflectance_percent", _back)


def is_less(changes: Changes, *, by: float = LEAST_GAIN) -> bool:
    """Tell whether the first figure shrinks by enough to be worth naming."""
    return bool(changes) and changes[0][2] <= (1.0 - by) * changes[0][1]


def _best(lens: OnFile, options: Mapping[str, Option], measure: Measure) -> tuple[str, OptionFigures] | None:
    """Return the option sold with the least of a figure, by its name."""
    known = [(value, pair) for pair in lens.offered(options) if (value := measure(lens, pair[1])) is not None]
    return min(known, key=lambda entry: entry[0])[1] if known else None


def priced(worked: Worked, option: OptionFigures) -> Worked:
    """Return a remedy with the price of the pair it would be."""
    return replace(worked, price=option.price)


def _films(lens: OnFile, *, back_only: bool) -> dict[str, Option]:
    """Return this lens with each film sold, by the name of the film."""
    made = {}
    for film in lens.films():
        front = lens.laid.front.key if back_only and lens.laid.front in lens.stock.coating else film.key
        made[film.label or film.key] = lens.with_parts(coating=Faces(front=front, back=film.key))
    return made


def _film(
    measure: Measure,
    changes: Callable[[OnFile, OptionFigures], Changes],
    *,
    enough: float = 0.0,
    back_only: bool = False,
) -> Work:
    """Return the remedy of the cheapest film that brings a figure to ``enough``, or nearly to the least there is."""

    def work(lens: OnFile) -> Worked | None:
        known = [
            (value, pair)
            for pair in lens.offered(_films(lens, back_only=back_only))
            if (value := measure(lens, pair[1])) is not None
        ]
        limit = max(enough, ALIKE * min((value for value, _ in known), default=0.0))
        reached = [pair for value, pair in known if value <= limit]
        if not reached:
            return None
        name, figures = min(reached, key=lambda pair: (pair[1].price is None, pair[1].price or 0.0))
        found = changes(lens, figures)
        return priced(Worked({"coating": name}, found), figures) if is_less(found) else None

    return work


coat_both_ahead = _film(_level, _second_changes, enough=NOT_SEEN_LEVEL)
coat_both_behind = _film(_behind, _behind_change)
coat_back_dark = _film(_back, _back_change, back_only=True)


def other_form(lens: OnFile) -> Worked | None:
    """Another front curve, within what the material is made in, against the second image."""
    now = most(lens.option, "front_power_d")
    if now is None:
        return None
    made = lens.laid.material.base_powers_d
    curves = made or tuple(now + step for step in CURVES_OFF_D)
    near = [curve for curve in curves if abs(curve - now) <= max(CURVES_OFF_D)]
    best = _best(lens, {f"{curve}": lens.with_parts(front_power_d=curve) for curve in near}, _level)
    if best is None:
        return None
    changes = _second_changes(lens, best[1])
    figures = {"front_power_d": most(best[1], "front_power_d")}
    return priced(Worked(figures, changes), best[1]) if _worth_it(changes) else None


def _other_material(
    measure: Measure, changes: Callable[[OnFile, OptionFigures], Changes], worth: Callable[[Changes], bool]
) -> Work:
    """Return the remedy of the material with the least of a figure; its edge and weight are told beside it."""

    def work(lens: OnFile) -> Worked | None:
        options = {m.label or m.key: lens.with_parts(material=m.key, front_power_d=None) for m in lens.materials()}
        best = _best(lens, options, measure)
        if best is None:
            return None
        name, figures = best
        found = changes(lens, figures)
        if not worth(found):
            return None
        told = {entry[0] for entry in found}
        beside = [entry for figure in (EDGE, WEIGHT) if figure not in told for entry in _one(figure)(lens, figures)]
        return priced(Worked({"material": name}, (*found, *beside)), figures)

    return work


def _one(figure: str) -> Callable[[OnFile, OptionFigures], Changes]:
    """Return the change of one figure of the lens that has more of it."""

    def changes(lens: OnFile, after: OptionFigures) -> Changes:
        was, now = most(lens.option, figure), most(after, figure)
        return () if was is None or now is None else ((figure, was, now),)

    return changes


FRINGE, EDGE, WEIGHT = "colour_fringe_prism_d", "edge_thickest_mm", "weight_g"
higher_abbe = _other_material(lambda _, option: most(option, FRINGE), _one(FRINGE), is_less)
thinner_material = _other_material(lambda _, option: most(option, EDGE), _one(EDGE), is_less)
_material_ahead = _other_material(_level_unless_stronger, _second_changes, _worth_it)


def other_material_ahead(lens: OnFile) -> Worked | None:
    """Another material against the second image, where no film does it."""
    film = coat_both_ahead(lens)
    does = film is not None and film.changes[0][2] <= NOT_SEEN_LEVEL
    return None if does else _material_ahead(lens)


def turn_desk(lens: OnFile) -> Worked | None:
    """The desk turned: a wall as bright as what is looked at takes the place of a window behind."""
    stock = lens.behind_relit(
        lambda scene: {"luminance_cd_m2": scene.background_cd_m2} if scene.luminance_cd_m2 is not None else {}
    )
    changes = _behind_change(lens, lens.changed(stock=stock))
    return Worked({}, changes) if is_less(changes) else None


def shade_light(lens: OnFile) -> Worked | None:
    """A blind that passes a tenth of every light behind."""
    names = ("luminance_cd_m2", "intensity_cd")
    stock = lens.behind_relit(
        lambda scene: {n: BLIND_PASSES * getattr(scene, n) for n in names if getattr(scene, n) is not None}
    )
    changes = _behind_change(lens, lens.changed(stock=stock))
    return Worked({}, changes) if is_less(changes) else None


def _closer(changes: Callable[[OnFile, OptionFigures], Changes]) -> Work:
    def work(lens: OnFile) -> Worked | None:
        closer = lens.case.fitted_vertex_mm - CLOSER_BY_MM
        if closer < LEAST_VERTEX_MM:
            return None
        fitting = (lens.visit.fitting or Fitting()).model_copy(update={"vertex_mm": closer})
        found = changes(lens, lens.changed(fitting=fitting))
        return Worked({"by_mm": CLOSER_BY_MM}, found) if is_less(found, by=LEAST_FREE_GAIN) else None

    return work


closer_fit_behind = _closer(_behind_change)
closer_fit_fringe = _closer(_one("colour_fringe_prism_d"))
