"""Why a pair is advised and what it gives up: phrases with computed figures.

A reason sets a figure of this pair beside a limit or beside the same figure of another pair: what is worn now (made
anew in this frame), else the cheapest that meets every must. Only differences the figures are sure of are told.
"""

from bisect import bisect_right
from collections.abc import Callable, Iterator

import numpy as np

from advisor.counsel import layout
from advisor.counsel.advice_texts import (
    CHEAPEST,
    EASIER,
    FAINTER,
    HARDER,
    NEXT_BEST,
    RECOMMENDED,
    STRONGER,
    WORN,
)
from advisor.counsel.advise import Counsel, Field
from advisor.counsel.cautions import CAUTIONS
from advisor.counsel.limits import NOT_NOTICED
from advisor.counsel.musts import UNKNOWN, currency_of, musts
from advisor.counsel.phrases import Figure, Phrase
from advisor.counsel.pool import is_dark
from advisor.counsel.reach import add_d
from advisor.counsel.spoken import LEAST_CONTRAST_BEHIND
from advisor.counsel.value import criteria
from advisor.counsel.weighed import behind_by_scene, harms
from advisor.optics import visibility

MOST = 3
NOTABLE = 0.08  # of a criterion's scale: what is worth a sentence; a modelling choice
NOTABLE_PRICE = 0.01
MOST_IN_PERCENT = 10.0  # beyond ten times as bright nobody thinks in per cent
LEAST_BLUR_D = 0.05  # what would be written as nothing, or nearly; a modelling choice
Label = Callable[[Field, int], str]
OF_LIGHT = frozenset(("second-image", "from-behind", "seen-by-others", "transmitted", "not-mirrored", "care", "sun"))
# How the two figures of a criterion are named in its text, and what they are multiplied by.
NAMES: dict[str, tuple[str, float]] = {
    "seen-by-others": ("times", 1.0),
    "thickness": ("mm", 1.0),
    "weight": ("g", 1.0),
    "fringe": ("prism_d", 1.0),
    "transmitted": ("percent", 100.0),
    "not-mirrored": ("percent", 100.0),
    "sun": ("percent", 100.0),
}


def differences(
    field: Field, one: int, other: int, *, against: str, notable: float = NOTABLE
) -> list[tuple[float, str, Phrase]]:
    """Return what sets two pairs apart, as (weighed gain of the first, criterion, phrase), the greatest gain first."""
    found = []
    for column, criterion in enumerate(field.used):
        gain = float(field.values[one, column] - field.values[other, column])
        least = NOTABLE_PRICE if criterion.key == "price" else max(notable, criterion.value_uncertainty)
        # what is weighed may differ from what is shown (a tint on two materials); told is what both say
        this, that = criterion.value(field.figures[criterion.key][[one, other]]).tolist()
        if min(abs(gain), np.sign(gain) * (this - that)) > least and (
            other != field.pool.worn or _known_of_worn(field, criterion.key)
        ):
            phrase = _figure(field, criterion.key, one, other, against)
            if phrase is not None:
                found.append((float(field.weights[column]) * gain, criterion.key, phrase))
    return sorted(found, key=lambda entry: -entry[0])


def _known_of_worn(field: Field, key: str) -> bool:
    """Whether a figure of the worn lens is known: its price never is, its light only where its coating is."""
    return key not in ("price", "in-between") and (field.pool.worn_coated or key not in OF_LIGHT)


def _figure(field: Field, key: str, one: int, other: int, against: str) -> Phrase | None:
    """Return one difference in words, or None where its figures would not say what they seem to."""
    pair = (field.pool.laid[one], field.pool.laid[other])
    if key == "not-mirrored" and any(laid.tint is not None for laid in pair):
        return None  # beside a tint nobody reads it as what the faces alone take
    if key in ("from-behind", "seen-by-others") and is_dark(pair[0].tint) != is_dark(pair[1].tint):
        return None  # a dark lens hides the eye, and shows what is behind, because it is dark
    figures: dict[str, Figure] = {"against": against}
    code = f"figure-{key}"
    if key in OWN_WORDS:
        own = OWN_WORDS[key](field, one, other)
        return None if own is None else Phrase(code + own.code, figures | dict(own.figures))
    if key == "price":
        prices = {"this_price": pair[0].price, "other_price": pair[1].price}
        return Phrase(code, figures | prices | {"currency": currency_of(field.case)})
    name, times = NAMES[key]
    this, that = (times * float(field.figures[key][k]) for k in (one, other))
    return Phrase(code, figures | {f"this_{name}": this, f"other_{name}": that})


def verdict(level: float) -> str:
    """Return the word for a visibility level, as people are shown it."""
    return list(layout.VERDICTS.values())[bisect_right(visibility.VERDICT_LIMITS, level)]


def _second_light(field: Field, one: int, other: int) -> Phrase:
    this, that = (float(field.figures["second-image"][k]) for k in (one, other))
    words = verdict(this), verdict(that)
    figures: dict[str, Figure] = {"this_level": this, "other_level": that, "this_verdict": words[0]}
    if words[0] == words[1]:
        return Phrase("-alike", figures | {"how": FAINTER if this < that else STRONGER})
    return Phrase("", figures | {"other_verdict": words[1]})


def _from_behind(field: Field, one: int, other: int) -> Phrase | None:
    """Tell one scene, a window before a lamp: one that both are met in and in which they differ."""
    sure = criteria()["from-behind"].uncertainty
    for scene, (this, that) in behind_told(field, one, other):
        if max(this, that) > sure * min(this, that):
            if max(this, that) > MOST_IN_PERCENT:
                return Phrase("-brighter", {"scene": scene, "this_times": this, "other_times": that})
            return Phrase("", {"scene": scene, "this_percent": 100.0 * this, "other_percent": 100.0 * that})
    return None


def behind_told(field: Field, *pairs: int) -> list[tuple[str, tuple[float, ...]]]:
    """Return the scenes with light behind in which something shows in one of the pairs, each with its contrast in all.

    Of dark tints the scene that is about them comes first, else windows before lamps, the worst first; a scene of a
    dark tint is left out where a pair does not go dark.
    """
    by_scene = behind_by_scene(field.computed)
    dark = all(is_dark(field.pool.laid[k].tint) for k in pairs)
    found = []
    for place, scene in enumerate(field.scenes):
        shown = tuple(float(by_scene[k, place]) for k in pairs)
        if all(field.pool.laid[k].is_met_in(scene) for k in pairs) and max(shown) >= LEAST_CONTRAST_BEHIND:
            rank = (dark and scene.tint_state != "dark", scene.kind != "extended", -max(shown))
            found.append((rank, scene.label or scene.key, shown))
    return [(label, shown) for _, label, shown in sorted(found)]


def _care(field: Field, one: int, other: int) -> Phrase:
    this, that = (float(field.figures["care"][k]) for k in (one, other))
    figures: dict[str, Figure] = {"this_level": this, "other_level": that}
    return Phrase("", figures | {"harm_names": ", ".join(harms(field.case)), "how": EASIER if this < that else HARDER})


def _in_between(field: Field, one: int, other: int) -> Phrase:
    this, that = (float(field.figures["in-between"][k]) for k in (one, other))
    figures: dict[str, Figure] = {"this_blur_d": this, "other_blur_d": that}
    return Phrase("-none" if this < LEAST_BLUR_D else "-other-none" if that < LEAST_BLUR_D else "", figures)


# What is told of a criterion whose figure alone is not an optician's word; the code is put behind the criterion's.
OWN_WORDS: dict[str, Callable[[Field, int, int], Phrase | None]] = {
    "second-image": _second_light,
    "from-behind": _from_behind,
    "care": _care,
    "in-between": _in_between,
}


def because(counsel: Counsel, k: int, label: Label) -> list[Phrase]:
    """Return at most three reasons for the recommended pair."""
    field = counsel.field
    found = list(_kept(field, k))
    cheaper, decided = list(_cheaper(counsel, k, label)), _deciding(counsel, k)
    if decided is not None and decided[0] == "price" and cheaper:
        decided = None  # it says the same
    gains: dict[str, tuple[float, Phrase]] = {}
    for reference, against in ((field.pool.worn, WORN), (counsel.cheapest, CHEAPEST)):
        if reference is not None and reference != k:
            for gain, key, phrase in differences(field, k, reference, against=against):
                if gain > 0.0:
                    gains.setdefault(key, (gain, phrase))
    if decided is not None:
        gains.pop(decided[0], None)
    found += [phrase for _, phrase in sorted(gains.values(), key=lambda entry: -entry[0])]
    last = [*([] if decided is None else [decided[1]]), *cheaper]
    if not any(phrase.code.startswith("figure-second-image") for phrase in (*found, *last)):
        found += _unnoticed(field, k)
    return found[: MOST - len(last)] + last


def _deciding(counsel: Counsel, k: int) -> tuple[str, Phrase] | None:
    """Return what speaks most for the pair against the next best: the price where they are level, if it is less."""
    field, other = counsel.field, counsel.next_best
    if other is None:
        return None
    found = [entry for entry in differences(field, k, other, against=NEXT_BEST, notable=0.0) if entry[0] > 0.0]
    if field.level([other], k)[0]:
        found = [entry for entry in found if entry[1] == "price"] or found
    return next(((key, phrase) for _, key, phrase in found), None)


def _kept(field: Field, k: int) -> Iterator[Phrase]:
    """Yield what the pair does that a must asked for."""
    case, laid = field.case, field.pool.laid[k]
    tough = any(CAUTIONS[key](case, laid, UNKNOWN.light) is not None for key in ("child", "one-eye", "impact"))
    if tough and laid.material.tough:
        yield Phrase("is-tough", {"centre_mm": float(field.computed.forms.shape.centre_mm[k].min())})
    if laid.design.kind in ("bifocal", "progressive"):
        if laid.design.kind == "progressive":
            yield Phrase("reaches-all", {"add_d": add_d(case)})
        else:
            blur = float(field.figures["in-between"][k])
            code = "reaches-both" if blur >= LEAST_BLUR_D else "reaches-both-clear"
            yield Phrase(code, {"this_blur_d": blur})
    if laid.tint is not None and case.says("night_driving"):
        limit = next(must.limits["luminous_percent"] for must in musts() if must.key == "night-driving-tint")
        passed = 100.0 * float(field.computed.light.transmittance[k])
        yield Phrase("passes-enough", {"this_percent": passed, "limit_percent": limit})


def _unnoticed(field: Field, k: int) -> Iterator[Phrase]:
    level = float(field.figures["second-image"][k])
    if "second-image" in field.levels and 0.0 < level < NOT_NOTICED:
        yield Phrase("not-noticed", {"this_level": level, "limit_level": NOT_NOTICED})


def _cheaper(counsel: Counsel, k: int, label: Label) -> Iterator[Phrase]:
    """Yield how the price decided: cheapest of all, or cheaper than one that is level with it and worth more."""
    field = counsel.field
    eligible = [j for j in range(len(field.eligible)) if field.eligible[j]]
    top = field.top(eligible)
    if k == counsel.cheapest:
        yield Phrase("is-cheapest")
    elif top is not None and top != k and field.price(top) > field.price(k):
        own, other = field.pool.laid[k].price, field.pool.laid[top].price
        figures = {"this_price": own, "other_price": other, "currency": currency_of(field.case)}
        yield Phrase("level-cheaper", {"label": label(field, top), **figures})


def gives_up(counsel: Counsel, k: int) -> list[Phrase]:
    """Return at most three things in which the recommended pair is worse than the next best or the cheapest."""
    field = counsel.field
    found: dict[str, tuple[float, Phrase]] = {}
    for other, against in ((counsel.next_best, NEXT_BEST), (counsel.cheapest, CHEAPEST)):
        if other is None or other == k:
            continue
        for gain, key, phrase in differences(field, k, other, against=against):
            if gain < found.get(key, (0.0, phrase))[0]:
                found[key] = (gain, phrase)
    return [phrase for _, phrase in sorted(found.values(), key=lambda entry: entry[0])][:MOST]


def beside_recommended(counsel: Counsel, k: int) -> tuple[list[Phrase], list[Phrase]]:
    """Return at most three gains and three losses of another pair against the recommended one."""
    if counsel.recommended is None or k == counsel.recommended:
        return [], []
    found = differences(counsel.field, k, counsel.recommended, against=RECOMMENDED)
    gains = [phrase for gain, _, phrase in found if gain > 0.0]
    losses = [phrase for gain, _, phrase in reversed(found) if gain < 0.0]
    return gains[:MOST], losses[:MOST]
