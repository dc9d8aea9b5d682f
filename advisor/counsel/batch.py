"""How well two lenses of a pair match in the colour they mirror: coated in different runs, or in one."""

from functools import lru_cache

from advisor.counsel.faces import SAMPLES, Face, substrate
from advisor.optics import colour
from advisor.optics.as_made import match_probability, thickness_factors
from advisor.optics.grid import WAVELENGTHS_NM
from advisor.optics.layers import HardCoat, stack_arrays
from advisor.optics.surface import film_surface

RUN_SD = 0.02  # as in optics/as_made.py: common to a run


@lru_cache(maxsize=256)
def match_share(face: Face, *, one_run: bool) -> float | None:
    """Return how many of all pairs match on this face, 0 to 1, or None where no layers are known.

    In one run both lenses share the run's error and differ only layer by layer.
    """
    if not face.coating.layers:
        return None
    hard_coat = face.coating.hard_coat
    index, thickness_nm = stack_arrays(
        face.coating.layers,
        wavelength_nm=WAVELENGTHS_NM,
        hard_coat=None if hard_coat is None else HardCoat(hard_coat.index, hard_coat.thickness_um),
    )
    factors = thickness_factors(len(thickness_nm), samples=SAMPLES, run_sd=0.0 if one_run else RUN_SD)
    made = film_surface(substrate(face), layer_index=index, layer_thickness_nm=thickness_nm * factors)
    return match_probability(colour.xyz(made.outside))
