"""Everything sold, at once: every material with every coating for this wearer, on nominal spectra, as arrays."""

from collections.abc import Sequence
from dataclasses import dataclass

from advisor.counsel.case import Case
from advisor.counsel.choices import Option
from advisor.counsel.form import LensForms, forms_of
from advisor.counsel.ghosts import ghosts_of
from advisor.counsel.laid_out import Laid, lay_out_options
from advisor.counsel.light import Light, light_of
from advisor.optics.ghost_scene import Ghosts


@dataclass(frozen=True)
class WholeRange:
    """Options in the order of ``laid``; the arrays have the axes of ``light``, ``form`` and ``ghosts``."""

    laid: tuple[Laid, ...]
    light: Light
    forms: LensForms
    ghosts: Ghosts


def whole_range(case: Case, *, design: str, materials: Sequence[str], coatings: Sequence[str]) -> WholeRange:
    """Work out every material with every coating on both faces, in one call a part."""
    options = [Option(design=design, material=m, coating=c) for m in materials for c in coatings]
    laid = lay_out_options(case, options)
    light, forms = light_of(laid, case.scenes), forms_of(case, laid)
    return WholeRange(tuple(laid), light, forms, ghosts_of(case, laid, forms=forms, light=light))
