"""Why a pair is advised, what it gives up, what would change the advice: phrases with computed figures.

A reason sets a figure of this pair beside a limit or beside the same figure of another pair: what is worn now (made
anew in this frame), else the cheapest that meets every must. Only differences the figures are sure of are told.
"""

from collections.abc import Callable, Iterator

from advisor.counsel.advice_texts import CHEAPEST, NEXT_BEST, RECOMMENDED, WORN
from advisor.counsel.advise import Counsel, Field
from advisor.counsel.cautions import CAUTIONS
from advisor.counsel.limits import NOT_NOTICED
from advisor.counsel.musts import UNKNOWN, currency_of, musts
from advisor.counsel.phrases import Figure, Phrase
from advisor.counsel.reach import add_d
from advisor.counsel.value import criteria

MOST = 3
NOTABLE = 0.08  # of a criterion's scale: what is worth a sentence; a modelling choice
NOTABLE_PRICE = 0.01
Label = Callable[[Field, int], str]
OF_LIGHT = frozenset(("second-image", "from-behind", "seen-by-others", "transmitted", "care", "sun"))
# How the two figures of a criterion are named in its text, and what they are multiplied by.
NAMES: dict[str, tuple[str, float]] = {
    "second-image": ("level", 1.0),
    "from-behind": ("times", 1.0),
    "seen-by-others": ("times", 1.0),
    "thickness": ("mm", 1.0),
    "weight": ("g", 1.0),
    "fringe": ("prism_d", 1.0),
    "transmitted": ("percent", 100.0),
    "care": ("level", 1.0),
    "in-between": ("blur_d", 1.0),
    "sun": ("percent", 100.0),
}


def differences(field: Field, one: int, other: int, *, against: str) -> list[tuple[float, str, Phrase]]:
    """Return what sets two pairs apart, as (weighed gain of the first, criterion, phrase), the greatest gain first."""
    found = []
    for column, criterion in enumerate(field.used):
        gain = float(field.values[one, column] - field.values[other, column])
        least = NOTABLE_PRICE if criterion.key == "price" else max(NOTABLE, criterion.value_uncertainty)
        if abs(gain) > least and (other != field.pool.worn or _known_of_worn(field, criterion.key)):
            weighed = float(field.weights[column]) * gain
            found.append((weighed, criterion.key, _figure(field, criterion.key, one, other, against)))
    return sorted(found, key=lambda entry: -entry[0])


def _known_of_worn(field: Field, key: str) -> bool:
    """Whether a figure of the worn lens is known: its price never is, its light only where its coating is."""
    return key not in ("price", "in-between") and (field.pool.worn_coated or key not in OF_LIGHT)


def _figure(field: Field, key: str, one: int, other: int, against: str) -> Phrase:
    if key == "price":
        figures: dict[str, Figure] = {
            "this_price": field.pool.laid[one].price,
            "other_price": field.pool.laid[other].price,
            "currency": currency_of(field.case),
        }
    else:
        name, times = NAMES[key]
        figures = {
            f"this_{name}": times * float(field.figures[key][one]),
            f"other_{name}": times * float(field.figures[key][other]),
        }
    return Phrase(f"figure-{key}", figures | {"against": against})


def because(counsel: Counsel, k: int, label: Label) -> list[Phrase]:
    """Return at most three reasons for the recommended pair."""
    field = counsel.field
    found = list(_kept(field, k))
    gains: dict[str, tuple[float, Phrase]] = {}
    for reference, against in ((field.pool.worn, WORN), (counsel.cheapest, CHEAPEST)):
        if reference is not None and reference != k:
            for gain, key, phrase in differences(field, k, reference, against=against):
                if gain > 0.0:
                    gains.setdefault(key, (gain, phrase))
    found += [phrase for _, phrase in sorted(gains.values(), key=lambda entry: -entry[0])]
    last = list(_cheaper(counsel, k, label))
    told = {phrase.code for phrase in found}
    if "figure-second-image" not in told:
        found += _unnoticed(field, k)
    return found[: MOST - len(last)] + last


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
            yield Phrase("reaches-both", {"this_blur_d": float(field.figures["in-between"][k])})
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


def would_change(counsel: Counsel, label: Label) -> list[Phrase]:
    """Return what would change the advice: questions not asked, another order of priorities, a higher limit."""
    field, k = counsel.field, counsel.recommended
    found: list[Phrase] = []
    if counsel.least_price is not None:
        figures: dict[str, Figure] = {"price": counsel.least_price, "currency": currency_of(field.case)}
        found.append(Phrase("if-limit-raised", figures))
    if counsel.pairs:
        found += _one_pair(field)
    if k is not None:
        found += _unasked(counsel, k, label)
    for key, other in counsel.if_first[:MOST]:
        found.append(Phrase("if-first", {"criterion": criteria()[key].label, "label": label(field, other)}))
    return found


def _one_pair(field: Field) -> Iterator[Phrase]:
    """Yield what would let one pair do where two are proposed."""
    broken = {phrase.code: phrase.figures for phrases in field.broken.values() for phrase in phrases}
    if "fitting-height" in broken:
        yield Phrase("if-frame-taller", {"least_height_mm": broken["fitting-height"]["least_height_mm"]})
    if "near-imbalance" in broken:
        yield Phrase("if-prescriber-agrees")


def _unasked(counsel: Counsel, k: int, label: Label) -> Iterator[Phrase]:
    """Yield the questions that were not asked and might change this very advice: not asked is not never."""
    field = counsel.field
    case, laid = field.case, field.pool.laid[k]
    if not laid.material.tough:
        if case.life("impact") == "not-asked":
            yield Phrase("if-asked-impact")
        if case.life("one_good_eye") == "not-asked":
            yield Phrase("if-asked-one-eye")
        if case.youngest_age is None and case.life("child") == "not-asked":
            yield Phrase("if-asked-child")
    if case.life("night_driving") == "not-asked" and "second-image" in field.levels:
        yield Phrase("if-asked-night")
    life, cheapest = case.visit.daily_life, counsel.cheapest
    if (life is None or life.price_limit is None) and cheapest not in (None, k):
        price = field.pool.laid[cheapest].price
        figures: dict[str, Figure] = {"label": label(field, cheapest), "price": price, "currency": currency_of(case)}
        yield Phrase("if-asked-price", figures)
    least = laid.design.least_height_mm
    if least is not None and case.is_default("fitting.right.height_mm") and case.is_default("fitting.left.height_mm"):
        yield Phrase("if-height-measured", {"least_height_mm": least})
