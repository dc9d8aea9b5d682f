"""What is new against the pair worn now, for the first days: power, axis, and the size of what is seen."""

from collections.abc import Iterator
from dataclasses import replace

import numpy as np

from advisor.counsel.case import Case, build_case
from advisor.counsel.cautions import LARGE_TURN_DEG, power_change
from advisor.counsel.choices import Option
from advisor.counsel.form import forms_of
from advisor.counsel.laid_out import Laid, lay_out_options
from advisor.counsel.phrases import Phrase

POWER_FROM_D = 0.5  # common practice, no source
SIZE_FROM_PERCENT = 1.0  # about the least difference of size people speak of (textbook, from memory)


def changes_from_worn(case: Case, laid: Laid) -> Iterator[Phrase]:
    """Yield what has changed since the worn pair, or that little has; nothing where its prescription is unknown."""
    changed = power_change(case)
    if changed is None:
        return
    found = []
    if changed[0] >= POWER_FROM_D:
        found.append(Phrase("first-power"))
    if changed[1] >= LARGE_TURN_DEG:
        found.append(Phrase("first-axis"))
    size = size_change_percent(case, laid)
    if size is not None and abs(size) >= SIZE_FROM_PERCENT:
        found.append(Phrase("first-bigger" if size > 0.0 else "first-smaller", {"size_percent": abs(size)}))
    yield from found or [Phrase("first-same")]


def size_change_percent(case: Case, laid: Laid) -> float | None:
    """Return by how many per cent things look larger than in the worn pair, for the eye of the greatest change.

    The worn pair is worked out from its own power, material and curve, where it sat; None where one is not known.
    """
    worn = case.visit.worn_now
    if worn is None or worn.prescription is None or worn.material is None:
        return None
    then = build_case(
        case.visit.model_copy(
            update={"prescription": worn.prescription, "fitting": worn.fitting or case.visit.fitting}
        ),
        case.stock,
        today=case.date,
    )
    option = Option(design=laid.design.key, material=worn.material, front_power_d=worn.front_power_d)
    old = forms_of(then, lay_out_options(then, [option])).magnification_percent[0]
    new = forms_of(case, [replace(laid, index=0)]).magnification_percent[0]
    change = 100.0 * ((100.0 + new) / (100.0 + old) - 1.0)
    known = change[np.isfinite(change)]
    return float(known[np.argmax(np.abs(known))]) if known.size else None
