"""Advice as the answer writes it: options by index or by what the range calls them, phrases as code, text, figures."""

from collections.abc import Mapping
from dataclasses import replace
from functools import partial
from typing import Any

import numpy as np

from advisor.counsel.advice_texts import ADVICE_TEXTS, ROBUST_TEXTS
from advisor.counsel.advise import Counsel, Field, Pair
from advisor.counsel.answer import caution, label_of, notice, number
from advisor.counsel.cautions import cautions_for
from advisor.counsel.laid_out import REFUSAL_TEXTS
from advisor.counsel.limits import limits_of
from advisor.counsel.musts import must_texts, musts
from advisor.counsel.phrases import Phrase, Translator, say
from advisor.counsel.pool import finished
from advisor.counsel.reasons import because, beside_recommended, gives_up
from advisor.counsel.remedies import free_first
from advisor.counsel.value import criteria
from advisor.counsel.weighed import scenes_that_count
from advisor.counsel.whole_range import rows_of
from advisor.counsel.would_change import would_change

Content = dict[str, Any]
TEXTS: Mapping[str, str] = ADVICE_TEXTS


def advice_content(counsel: Counsel, *, translator: Translator) -> Content:
    """Return every part of the advice but its cautions."""
    field, k = counsel.field, counsel.recommended
    label = partial(_label, translator)
    said = partial(notice, texts=TEXTS, translator=translator)
    content: Content = {
        "recommended": None if k is None else advised(field, k, translator=translator),
        "next_best": _beside(counsel, counsel.next_best, translator),
        "cheapest_that_meets_every_must": _beside(counsel, counsel.cheapest, translator),
        "ranking": list(counsel.ranking),
        "excluded": excluded(field, translator=translator),
        "would_change": [said(phrase) for phrase in would_change(counsel, label)],
        "priorities": [
            {"key": key, "label": translator.gettext(criteria()[key].label), "weight": float(weight)}
            for key, weight in sorted(zip(field.levels, field.weights, strict=True), key=lambda pair: -pair[1])
        ],
        "two_pairs": [_pair(pair, translator) for pair in counsel.pairs] or None,
    }
    if k is None:
        content |= {"because": [said(Phrase(counsel.none or ""))], "gives_up": [], "free_first": [], "robust": None}
        content["greatest_reflectance_per_surface"] = None
        return content
    content |= {
        "because": [said(phrase) for phrase in because(counsel, k, label)],
        "gives_up": [said(phrase) for phrase in gives_up(counsel, k)],
        "free_first": [said(phrase) for phrase in free_first(counsel, k, label)],
        "greatest_reflectance_per_surface": _greatest_reflectance(field, k),
    }
    if counsel.robustness is not None:
        key = counsel.robustness.turns_on
        figures = {} if key is None else {"criterion": criteria()[key].label}
        content["robust"] = say(Phrase(counsel.robustness.code, figures), ROBUST_TEXTS, translator)
        content["robustness"] = {
            "code": counsel.robustness.code,
            "share": counsel.robustness.share,
            "turns_on": key,
        }
    return content


def _label(translator: Translator, field: Field, k: int) -> str:
    return label_of(field.pool.laid[k], translator)


def advised(field: Field, k: int, *, translator: Translator) -> Content:
    """Return an option by its index where it is laid out, and always by what it is made of."""
    option = field.pool.laid[k]
    tint = option.option.tint
    lens = finished(field.computed, k, imbalance_prism_d=field.imbalance_prism_d)
    return {
        "index": k if k < field.pool.given else None,
        "label": label_of(option, translator),
        "design": option.design.key,
        "material": option.material.key,
        "coating": {"front": option.front.key, "back": option.back.key},
        "tint": tint if tint is None or isinstance(tint, str | float) else tint.key,
        "price": option.price,
        "cautions": [caution(applied, translator) for applied in cautions_for(field.case, option, light=lens.light)],
        "figures": {key: number(float(values[k])) for key, values in field.figures.items() if key in field.levels},
    }


def _beside(counsel: Counsel, k: int | None, translator: Translator) -> Content | None:
    if k is None:
        return None
    gains, losses = beside_recommended(counsel, k)
    return advised(counsel.field, k, translator=translator) | {
        "because": [notice(phrase, TEXTS, translator) for phrase in gains],
        "gives_up": [notice(phrase, TEXTS, translator) for phrase in losses],
    }


def _pair(pair: Pair, translator: Translator) -> Content:
    text = say(Phrase(f"pair-{pair.use}"), TEXTS, translator)
    return advised(pair.field, pair.chosen, translator=translator) | {"use": pair.use, "text": text}


def excluded(field: Field, *, translator: Translator) -> list[Content]:
    """Return every condition that an option laid out breaks, and every reason why one cannot be made."""
    sources = {must.key: must.source for must in musts()}
    found: list[Content] = []
    for k in range(field.pool.given):
        for refusal in field.pool.laid[k].refused:
            text = say(refusal.phrase, REFUSAL_TEXTS, translator)
            figures = dict(refusal.phrase.figures)
            found.append({"option": k, "code": refusal.phrase.code, "text": text, "figures": figures})
        for phrase in field.broken[k]:
            content = notice(phrase, must_texts(), translator)
            found.append({"option": k, **content, "source": translator.gettext(sources[phrase.code])})
    return found


def _greatest_reflectance(field: Field, k: int) -> float | None:
    """Return the most each face of the recommended pair may mirror unnoticed; None where even bare is enough."""
    laid = field.pool.laid[k]
    scenes = scenes_that_count(field.case, [laid])
    forms = rows_of(field.computed.forms, np.array([k]))
    limits = limits_of(replace(field.case, scenes=scenes), [laid], forms=forms)
    return None if limits is None else number(float(limits.not_noticed[0]))
