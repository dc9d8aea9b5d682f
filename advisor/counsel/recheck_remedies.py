"""What each remedy would change for this very lens: before and after, by running the comparison on a changed visit."""

from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass, field, replace

from advisor.counsel.batch import match_share
from advisor.counsel.choices import Faces, Option
from advisor.counsel.comparison import OptionFigures
from advisor.counsel.form import SMALLER_BY_MM
from advisor.counsel.phrases import Figure
from advisor.counsel.recheck_answer import Outcome
from advisor.counsel.recheck_lens import OnFile, behind_contrast, eyes_of, most, worst_second
from advisor.counsel.visit import Fitting
from advisor.optics.visibility import VERDICTS

LEAST_GAIN = 0.1  # a remedy is named where it takes a tenth off its figure or more; a modelling choice
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
    "check-coating": "none", "turn-desk": "none", "shade-light": "none", "explain": "none",
    "closer-fit": "adjust", "matt-edge": "adjust", "loosen-rim": "adjust", "adjust-fit": "adjust",
    "adjust-heights": "adjust", "clean-right": "clean", "refer-eye": "refer", "refer-eyes-today": "refer",
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


def _behind(dark: bool) -> Measure:
    def measure(lens: OnFile, option: OptionFigures) -> float | None:
        return behind_contrast(option, lens.behind_scenes(dark=dark))

    return measure


def _behind_change(lens: OnFile, after: OptionFigures, *, dark: bool = False) -> Changes:
    was, now = (_behind(dark)(lens, option) for option in (lens.option, after))
    return () if was is None or now is None else (("behind_contrast_percent", 100.0 * was, 100.0 * now),)


def _less(changes: Changes) -> bool:
    """Tell whether the first figure shrinks by enough to be worth naming."""
    return bool(changes) and changes[0][2] <= (1.0 - LEAST_GAIN) * changes[0][1]


def _best(lens: OnFile, options: Iterable[Option], measure: Measure) -> tuple[Option, OptionFigures] | None:
    """Return the option sold with the least of a figure."""
    known = [(value, pair) for pair in lens.offered(options) if (value := measure(lens, pair[1])) is not None]
    return min(known, key=lambda entry: entry[0], default=(0.0, None))[1]


def _priced(worked: Worked, option: OptionFigures) -> Worked:
    return replace(worked, price=option.price)


def _films(lens: OnFile, *, back_only: bool) -> dict[str, Option]:
    """Return this lens with each film sold, by the name of the film."""
    made = {}
    for film in lens.films():
        front = lens.laid.front.key if back_only and lens.laid.front in lens.stock.coating else film.key
        made[film.label or film.key] = lens.with_parts(coating=Faces(front=front, back=film.key))
    return made


def _coated(lens: OnFile, measure: Measure, enough: float, *, back_only: bool = False) -> tuple[str, OptionFigures] | None:
    """Return the cheapest film that brings a figure down to ``enough``, else the one with the least of it."""
    names = _films(lens, back_only=back_only)
    sold = lens.offered(names.values())
    labels = {id(option): name for name, option in names.items()}
    known = [(v, figures, labels[id(option)]) for option, figures in sold if (v := measure(lens, figures)) is not None]
    reached = [entry for entry in known if entry[0] <= enough]
    if reached:
        _, figures, name = min(reached, key=lambda e: (e[1].price is None, e[1].price or 0.0, e[0]))
        return name, figures
    if not known:
        return None
    _, figures, name = min(known, key=lambda entry: entry[0])
    return name, figures


def coat_both_ahead(lens: OnFile) -> Worked | None:
    """Both faces coated, against the second image."""
    found = _coated(lens, _level, 0.4)
    return None if found is None else _with_film(found, _second_changes(lens, found[1]))


def coat_both_behind(lens: OnFile) -> Worked | None:
    """Both faces coated, against light from behind: the best film sold, as even it stays above what is noticed."""
    found = _coated(lens, _behind(False), 0.0)
    return None if found is None else _with_film(found, _behind_change(lens, found[1]))


def coat_back_dark(lens: OnFile) -> Worked | None:
    """The back coated behind a tint."""
    found = _coated(lens, _behind(True), 0.0, back_only=True)
    return None if found is None else _with_film(found, _behind_change(lens, found[1], dark=True))


def _with_film(found: tuple[str, OptionFigures], changes: Changes) -> Worked | None:
    name, figures = found
    return _priced(Worked({"coating": name}, changes), figures) if _less(changes) else None


def other_form(lens: OnFile) -> Worked | None:
    """Another front curve, within what the material is made in, against the second image."""
    now = most(lens.option, "front_power_d")
    if now is None:
        return None
    made = lens.laid.material.base_powers_d
    curves = made or tuple(now + step for step in CURVES_OFF_D)
    near = [curve for curve in curves if abs(curve - now) <= max(CURVES_OFF_D)]
    best = _best(lens, [lens.with_parts(front_power_d=curve) for curve in near], _level)
    if best is None:
        return None
    changes = _second_changes(lens, best[1])
    figures = {"front_power_d": most(best[1], "front_power_d")}
    return _priced(Worked(figures, changes), best[1]) if _less(changes) else None


def _other_material(measure: Measure, changes: Callable[[OnFile, OptionFigures], Changes]) -> Work:
    def work(lens: OnFile) -> Worked | None:
        options = [lens.with_parts(material=m.key, front_power_d=None) for m in lens.materials()]
        best = _best(lens, options, measure)
        if best is None:
            return None
        found, key = changes(lens, best[1]), best[1].material
        name = next((m.label or m.key for m in lens.stock.material if m.key == key), key)
        return _priced(Worked({"material": name}, found), best[1]) if _less(found) else None

    return work


def _one(figure: str) -> Callable[[OnFile, OptionFigures], Changes]:
    """Return the change of one figure of the lens that has more of it."""

    def changes(lens: OnFile, after: OptionFigures) -> Changes:
        was, now = most(lens.option, figure), most(after, figure)
        return () if was is None or now is None else ((figure, was, now),)

    return changes


other_material_ahead = _other_material(_level, _second_changes)
higher_abbe = _other_material(lambda _, option: most(option, "colour_fringe_prism_d"), _one("colour_fringe_prism_d"))
thinner_material = _other_material(lambda _, option: most(option, "edge_thickest_mm"), _one("edge_thickest_mm"))


def turn_desk(lens: OnFile) -> Worked | None:
    """The desk turned: a wall as bright as what is looked at takes the place of a window behind."""
    stock = lens.behind_relit(
        lambda scene: {"luminance_cd_m2": scene.background_cd_m2} if scene.luminance_cd_m2 is not None else {}
    )
    changes = _behind_change(lens, lens.changed(stock=stock))
    return Worked({}, changes) if _less(changes) else None


def shade_light(lens: OnFile) -> Worked | None:
    """A blind that passes a tenth of every light behind."""
    names = ("luminance_cd_m2", "intensity_cd")
    stock = lens.behind_relit(
        lambda scene: {n: BLIND_PASSES * getattr(scene, n) for n in names if getattr(scene, n) is not None}
    )
    changes = _behind_change(lens, lens.changed(stock=stock))
    return Worked({}, changes) if _less(changes) else None


def _closer(changes: Callable[[OnFile, OptionFigures], Changes]) -> Work:
    def work(lens: OnFile) -> Worked | None:
        closer = lens.case.fitted_vertex_mm - CLOSER_BY_MM
        if closer < LEAST_VERTEX_MM:
            return None
        fitting = (lens.visit.fitting or Fitting()).model_copy(update={"vertex_mm": closer})
        found = changes(lens, lens.changed(fitting=fitting))
        return Worked({"by_mm": CLOSER_BY_MM}, found) if _less(found) else None

    return work


closer_fit_behind = _closer(_behind_change)
closer_fit_fringe = _closer(_one("colour_fringe_prism_d"))


def smaller_frame(lens: OnFile) -> Worked | None:
    """The same lens in a frame 4 mm smaller."""
    pairs = []
    for eye in eyes_of(lens.option):
        small = (eye.smaller_frame or {}).get("edge_thickest_mm")
        if small is not None and eye.edge_thickest_mm is not None:
            pairs.append((eye.edge_thickest_mm, small))
    if not pairs:
        return None
    changes: Changes = (("edge_thickest_mm", *max(pairs)),)
    return Worked({"by_mm": SMALLER_BY_MM}, changes) if _less(changes) else None


def remake_as_pair(lens: OnFile) -> Worked | None:
    """Both lenses coated in one run; the face that matches least counts."""
    faces = [face for face in (lens.laid.front_face, lens.laid.back_face) if face.coating.layers]
    apart = [match_share(face, one_run=False) for face in faces]
    together = [match_share(face, one_run=True) for face in faces]
    known, better = [x for x in apart if x is not None], [x for x in together if x is not None]
    changes: Changes = (("match_percent", 100.0 * min(known), 100.0 * min(better)),) if known and better else ()
    return _priced(Worked({}, changes), lens.option)


def replace_same(lens: OnFile) -> Worked | None:
    """The same lens again; the coating's guarantee says who may have to pay."""
    months = [coating.warranty_months for coating in (lens.laid.front, lens.laid.back)]
    known = [month for month in months if month is not None]
    return _priced(Worked({"warranty_months": max(known, default=None)}), lens.option)


def top_layer(lens: OnFile) -> Worked | None:
    """A coating with a repellent top, where this lens has none that is known."""
    if has_repellent_top(lens):
        return None
    tops = [film for film in lens.films() if film.top and film.top.water_repellent and film.top.oil_repellent]
    sold = lens.offered(lens.with_parts(coating=film.key) for film in tops)
    best = min(sold, key=lambda pair: (pair[1].price is None, pair[1].price or 0.0), default=None)
    if best is None:
        return None
    name = next((f.label or f.key for f in tops if f.key == best[1].coating.front), best[1].coating.front)
    return _priced(Worked({"coating": name}), best[1])


def has_repellent_top(lens: OnFile) -> bool:
    """Tell whether both faces are known to have a repellent top."""
    tops = [coating.top for coating in (lens.laid.front, lens.laid.back)]
    return all(top is not None and bool(top.water_repellent) and bool(top.oil_repellent) for top in tops)
