"""From a written list of layers to the arrays that :func:`advisor.optics.thin_film.stack_spectra` takes."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from advisor.optics.media import film_index

Layer = tuple[str | float, float]
"""Name of a film material, or a constant index, and the thickness in nm."""


@dataclass(frozen=True)
class HardCoat:
    """A thick lacquer between film and lens material: constant index (about 1.49 to 1.60) and thickness (2 to 4 um)."""

    index: float
    thickness_um: float


def stack_arrays(
    layers: Sequence[Layer], *, wavelength_nm: ArrayLike, hard_coat: HardCoat | None = None
) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Index and thickness of every layer, from air inwards, the hard coat last.

    The hard coat is one more coherent layer: its fringes are 11 to 50 nm wide and live on the 1 nm grid. A real lacquer
    varies by some tenths of a micrometre over the lens, so where the fringes lie is not to be relied on.

    Parameters
    ----------
    layers
        From air inwards; an empty list is a bare face (or hard coat only). Index 1 to 4, thickness not negative.
    wavelength_nm
        (W,).
    hard_coat
        Left out: none.

    Returns
    -------
    layer_index (L, W) and layer_thickness_nm (L,).

    Raises
    ------
    ValueError
        When a constant index or a thickness is outside its range.
    advisor.optics.media.UnknownFilm
        When a film material has no dispersion here.
    """
    wavelengths = np.asarray(wavelength_nm, dtype=np.float64)
    listed: list[Layer] = list(layers)
    if hard_coat is not None:
        listed.append((hard_coat.index, 1000.0 * hard_coat.thickness_um))
    rows = np.empty((len(listed), wavelengths.size))
    thickness_nm = np.empty(len(listed))
    for place, (material, nm) in enumerate(listed):
        if not (np.isfinite(nm) and nm >= 0.0):
            raise ValueError(f"layer thickness must be 0 nm or more, not {nm}.")
        if not isinstance(material, str) and not 1.0 <= material <= 4.0:
            raise ValueError(f"layer index must lie between 1 and 4, not {material}.")
        rows[place] = film_index(wavelengths, name=material) if isinstance(material, str) else material
        thickness_nm[place] = nm
    return rows, thickness_nm


def pad_stacks(
    stacks: Sequence[tuple[NDArray[np.float64], NDArray[np.float64]]],
) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Put stacks of different length into one pair of arrays; the short ones end in layers of no thickness.

    Parameters
    ----------
    stacks
        Pairs (layer_index (L, W), layer_thickness_nm (L,)) as :func:`stack_arrays` gives them; at least one.

    Returns
    -------
    layer_index (S, greatest L, W) and layer_thickness_nm (S, greatest L).

    Raises
    ------
    ValueError
        When there is no stack.
    """
    if not stacks:
        raise ValueError("stacks must hold at least one stack.")
    deepest = max(thickness.size for _, thickness in stacks)
    index = np.ones((len(stacks), deepest, stacks[0][0].shape[-1]))
    thickness_nm = np.zeros((len(stacks), deepest))
    for place, (rows, thickness) in enumerate(stacks):
        index[place, : thickness.size] = rows
        thickness_nm[place, : thickness.size] = thickness
    return index, thickness_nm
