"""Written layers become the arrays of the thin-film function."""

import numpy as np
import pytest

from advisor.optics.grid import WAVELENGTHS_NM
from advisor.optics.layers import HardCoat, pad_stacks, stack_arrays
from advisor.optics.media import UnknownFilm, film_index
from advisor.optics.surface import film_surface


def test_names_constants_and_hard_coat_keep_their_order_from_air_inwards() -> None:
    index, thickness = stack_arrays(
        [("SiO2", 90.7), (1.46, 20.0)], wavelength_nm=WAVELENGTHS_NM, hard_coat=HardCoat(1.6, 3.0)
    )
    np.testing.assert_array_equal(thickness, [90.7, 20.0, 3000.0])
    np.testing.assert_array_equal(index[0], film_index(WAVELENGTHS_NM, name="SiO2"))
    assert index[1:].tolist() == [[1.46] * 401, [1.6] * 401]


def test_no_layers_is_a_bare_face() -> None:
    index, thickness = stack_arrays([], wavelength_nm=WAVELENGTHS_NM)
    assert index.shape == (0, 401)
    surface = film_surface(1.5, layer_index=index, layer_thickness_nm=thickness)
    np.testing.assert_allclose(surface.outside, 0.04, rtol=1e-12)  # Fresnel, ((n-1)/(n+1))^2


def test_padding_a_short_stack_changes_nothing() -> None:
    short = stack_arrays([("MgF2", 99.6)], wavelength_nm=WAVELENGTHS_NM)
    long = stack_arrays([("SiO2", 90.0), ("TiO2", 110.0), ("SiO2", 30.0)], wavelength_nm=WAVELENGTHS_NM)
    index, thickness = pad_stacks([short, long, stack_arrays([], wavelength_nm=WAVELENGTHS_NM)])
    assert (index.shape, thickness.shape) == ((3, 3, 401), (3, 3))
    together = film_surface(1.6, layer_index=index, layer_thickness_nm=thickness).outside
    for row, (rows, nm) in zip(together, (short, long), strict=False):
        np.testing.assert_allclose(row, film_surface(1.6, layer_index=rows, layer_thickness_nm=nm).outside, rtol=1e-12)


@pytest.mark.parametrize(
    ("layer", "named"),
    [((1.46, -1.0), "thickness"), ((1.46, float("nan")), "thickness"), ((0.5, 10.0), "index"), ((7.0, 10.0), "index")],
)
def test_an_impossible_layer_is_refused_by_what_is_wrong(layer: tuple[float, float], named: str) -> None:
    with pytest.raises(ValueError, match=f"layer {named}"):
        stack_arrays([layer], wavelength_nm=WAVELENGTHS_NM)


def test_an_unknown_film_and_an_empty_batch_are_refused() -> None:
    with pytest.raises(UnknownFilm):
        stack_arrays([("SiO3", 10.0)], wavelength_nm=WAVELENGTHS_NM)
    with pytest.raises(ValueError, match="stacks"):
        pad_stacks([])
