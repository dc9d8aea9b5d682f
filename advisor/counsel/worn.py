"""The pair the wearer came in with, worked out in the present frame: what the new pair is compared with."""

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from advisor.counsel.case import Case, build_case
from advisor.counsel.choices import Option
from advisor.counsel.form import LensForms, forms_of
from advisor.counsel.laid_out import lay_out_options


def worn_forms(case: Case, *, design: str) -> LensForms | None:
    """Return the form of the worn pair, (1, eye), or None where its material or power is not on file."""
    worn = case.visit.worn_now
    if worn is None or worn.material is None or worn.prescription is None:
        return None
    fitting = worn.fitting or case.visit.fitting
    visit = case.visit.model_copy(update={"prescription": worn.prescription, "fitting": fitting})
    then = replace(build_case(visit, case.stock, today=case.date), scenes=())
    option = Option(design=design, material=worn.material, coating=worn.coating, front_power_d=worn.front_power_d)
    return forms_of(then, lay_out_options(then, [option]))


def magnification_change_percent(forms: LensForms, worn: LensForms | None) -> NDArray[np.float64]:
    """Return by how many per cent things look larger than in the worn pair, (option, eye); NaN if unknown."""
    now = 100.0 + forms.magnification_percent
    if worn is None:
        return np.full_like(now, np.nan)
    return np.asarray(100.0 * (now / (100.0 + worn.magnification_percent) - 1.0))
