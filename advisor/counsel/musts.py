"""Conditions that exclude a lens: one short function a condition, its limit, words and source in ``data/musts.toml``.

A function returns the figures of its text where the lens breaks the condition, else None. What an unanswered question
does to a condition is written beside it in the table: not asked is never read as "never".
"""

import math
import tomllib
from collections.abc import Callable, Collection, Iterator, Mapping
from dataclasses import dataclass
from functools import cache

from advisor.counsel.case import Case
from advisor.counsel.cautions import CAUTIONS, MULTIFOCAL, ROUNDING, LensLight, shown_percent
from advisor.counsel.form import PROTECTIVE_CENTRE_MM, is_protective
from advisor.counsel.laid_out import Laid
from advisor.counsel.materials import is_glass
from advisor.counsel.phrases import Figure, Phrase, mark
from advisor.counsel.reach import (
    blur_at,
    far_is_needed,
    intermediate_add_d,
    near_is_needed,
    screen_cm,
    screen_is_measured,
    screen_is_needed,
    usable_d,
    wanted,
)
from advisor.resources import data_file

Figures = Mapping[str, Figure]
Limits = Mapping[str, float]
NOTHING: Figures = {}


@dataclass(frozen=True)
class Finished:
    """What some conditions need of the finished pair: its light, and the least centre of its two lenses."""

    light: LensLight
    centre_mm: float


Condition = Callable[[Case, Laid, Finished, Limits], Figures | None]


def unfinished(imbalance_prism_d: float = 0.0) -> Finished:
    """Return what is known of a pair before its lenses are worked out; it breaks no condition of the finished lens."""
    return Finished(LensLight(1.0, 1.0, imbalance_prism_d), math.inf)


UNKNOWN = unfinished()


@dataclass(frozen=True)
class Must:
    """One condition as the table writes it."""

    key: str
    text: str
    source: str
    not_asked: str
    limits: Limits
    lifted_by: str | None


@cache
def musts() -> tuple[Must, ...]:
    """Return the table of conditions, in its order."""
    content = tomllib.loads(data_file("counsel", "musts.toml").read_text(encoding="utf-8"))
    return tuple(
        Must(
            key=row["key"],
            text=row["text"],
            source=row["source"],
            not_asked=row["not_asked"],
            limits=row.get("limits", {}),
            lifted_by=row.get("lifted_by"),
        )
        for row in content["must"]
    )


@cache
def must_texts() -> dict[str, str]:
    """Return the words of every condition, by its key."""
    return {must.key: must.text for must in musts()}


def _when(broken: bool, figures: Figures = NOTHING) -> Figures | None:
    return figures if broken else None


def _applies(caution: str, case: Case, option: Laid) -> bool:
    return CAUTIONS[caution](case, option, UNKNOWN.light) is not None


def _tough_child(case: Case, option: Laid, _lens: Finished, _limits: Limits) -> Figures | None:
    return _when(case.is_child and option.material.tough is not True)


def _tough_one_eye(case: Case, option: Laid, _lens: Finished, _limits: Limits) -> Figures | None:
    return _when(case.relies_on_one_eye and option.material.tough is not True)


def _tough_impact(case: Case, option: Laid, _lens: Finished, _limits: Limits) -> Figures | None:
    return _when(_applies("impact", case, option) and option.material.tough is not True)


def _protective_centre(case: Case, _option: Laid, lens: Finished, limits: Limits) -> Figures | None:
    least = max(limits["centre_mm"], PROTECTIVE_CENTRE_MM)
    thin = is_protective(case) and lens.centre_mm < least - ROUNDING
    return _when(thin, {"centre_mm": lens.centre_mm, "least_mm": least})


LIKELY, UNASKED = mark("a blow is likely here"), mark("whether a blow is likely was not asked")


def _glass(case: Case, option: Laid, _lens: Finished, _limits: Limits) -> Figures | None:
    if not is_glass(option.material):
        return None
    if is_protective(case) or case.says("impact") or case.says("two_wheeler"):
        return {"why": LIKELY}
    return _when(case.life("impact") == "not-asked", {"why": UNASKED})


def _drilled_rim(case: Case, option: Laid, _lens: Finished, _limits: Limits) -> Figures | None:
    return _when(case.rim == "drilled" and option.material.drillable is None)


def _heat(case: Case, option: Laid, _lens: Finished, _limits: Limits) -> Figures | None:
    return _when(case.life("heat_steam") == "often" and _applies("heat-soft-material", case, option))


def _night_driving_tint(case: Case, _option: Laid, lens: Finished, limits: Limits) -> Figures | None:
    return None if case.never_at_night else _too_dark(lens.light.transmittance, limits)


def _driving_tint(case: Case, _option: Laid, lens: Finished, limits: Limits) -> Figures | None:
    darkest = min(lens.light.transmittance, lens.light.transmittance_dark)
    return _too_dark(darkest, limits) if case.life("driving") != "never" else None


def _too_dark(transmittance: float, limits: Limits) -> Figures | None:
    limit = limits["luminous_percent"]
    figures: Figures = {"luminous_percent": shown_percent(transmittance), "limit_percent": limit}
    return _when(100 * transmittance < limit - ROUNDING, figures)


def _no_far(case: Case, option: Laid, _lens: Finished, _limits: Limits) -> Figures | None:
    return _when(far_is_needed(case) and blur_at(case, option.design, 0.0, usable=0.0) > ROUNDING)


def _near_alone(case: Case, option: Laid, _lens: Finished, _limits: Limits) -> Figures | None:
    return _when(not far_is_needed(case) and option.design.kind in MULTIFOCAL)


def _no_near(case: Case, option: Laid, _lens: Finished, _limits: Limits) -> Figures | None:
    add = max(case.eye("right").add or 0.0, case.eye("left").add or 0.0)
    return _when(near_is_needed(case) and option.design.kind == "single-vision", {"add_d": add})


def _no_screen(case: Case, option: Laid, _lens: Finished, limits: Limits) -> Figures | None:
    if not screen_is_needed(case):
        return None
    distance = screen_cm(case)
    blur = blur_at(case, option.design, 100.0 / distance, usable=usable_d(case))
    figures: Figures = {"screen_cm": distance, "blur_d": blur, "limit_blur_d": limits["blur_d"]}
    return _when(blur > limits["blur_d"], figures)


def _whole_add(case: Case, option: Laid, _lens: Finished, _limits: Limits) -> Figures | None:
    unknown = not screen_is_measured(case) and intermediate_add_d(case) is None
    return _when(wanted(case) == "intermediate" and option.design.kind == "reading" and unknown)


def _design_without_add(case: Case, option: Laid, _lens: Finished, _limits: Limits) -> Figures | None:
    return _when(not case.has_add and option.design.kind != "single-vision")


def _fitting_height(case: Case, option: Laid, lens: Finished, _limits: Limits) -> Figures | None:
    return CAUTIONS["fitting-height-too-low"](case, option, lens.light)


def _near_imbalance(case: Case, option: Laid, lens: Finished, limits: Limits) -> Figures | None:
    limit, imbalance = limits["imbalance_prism_d"], lens.light.imbalance_prism_d
    concerned = CAUTIONS["near-vertical-imbalance"](case, option, lens.light) is not None
    beyond = option.design.kind in MULTIFOCAL and concerned and imbalance > limit + ROUNDING
    return _when(beyond, {"imbalance_prism_d": imbalance, "limit_prism_d": limit})


def _limit_of_price(case: Case) -> float | None:
    life = case.visit.daily_life
    return None if life is None else life.price_limit


def _price_limit(case: Case, option: Laid, _lens: Finished, _limits: Limits) -> Figures | None:
    limit = _limit_of_price(case)
    if limit is None or option.price is None:
        return None
    figures: Figures = {"price": option.price, "limit_price": limit, "currency": currency_of(case)}
    return _when(option.price > limit + ROUNDING, figures)


def _price_unknown(case: Case, option: Laid, _lens: Finished, _limits: Limits) -> Figures | None:
    limit = _limit_of_price(case)
    figures: Figures = {"limit_price": limit, "currency": currency_of(case)}
    return _when(limit is not None and option.price is None, figures)


def currency_of(case: Case) -> str:
    """Return the currency the shop's prices are in."""
    return case.stock.currency


def _not_offered(case: Case, option: Laid, _lens: Finished, _limits: Limits) -> Figures | None:
    return _when(bool(case.stock.offer) and option.offer is None)


CONDITIONS: Mapping[str, Condition] = {
    "tough-child": _tough_child,
    "tough-one-eye": _tough_one_eye,
    "tough-impact": _tough_impact,
    "protective-centre": _protective_centre,
    "glass": _glass,
    "drilled-rim": _drilled_rim,
    "heat": _heat,
    "night-driving-tint": _night_driving_tint,
    "driving-tint": _driving_tint,
    "no-far": _no_far,
    "near-alone": _near_alone,
    "no-near": _no_near,
    "no-screen": _no_screen,
    "whole-add": _whole_add,
    "design-without-add": _design_without_add,
    "fitting-height": _fitting_height,
    "near-imbalance": _near_imbalance,
    "price-limit": _price_limit,
    "price-unknown": _price_unknown,
    "not-offered": _not_offered,
}
OF_THE_FINISHED_LENS = frozenset(("protective-centre", "night-driving-tint", "driving-tint"))
OF_THE_DESIGN = frozenset(
    ("no-far", "near-alone", "no-near", "no-screen", "whole-add", "design-without-add", "fitting-height")
)


def declined(case: Case) -> frozenset[str]:
    """Return the keys of what was advised and turned down, as recorded on the visit."""
    return frozenset(entry.key for entry in case.visit.declined or ())


def broken_by(
    case: Case, option: Laid, lens: Finished = UNKNOWN, *, only: Collection[str] | None = None
) -> Iterator[Phrase]:
    """Yield every condition an option breaks, as its key with figures; ``only`` some of them where asked for."""
    lifted = declined(case)
    for must in musts():
        if (only is not None and must.key not in only) or must.lifted_by in lifted:
            continue
        figures = CONDITIONS[must.key](case, option, lens, must.limits)
        if figures is not None:
            yield Phrase(must.key, figures)
