"""The built-in films: what they must do, and that the program still designs them."""

import tomllib
from typing import Any

import numpy as np
import pytest
import tmm
from numpy.typing import NDArray

from advisor.optics.as_made import thickness_factors
from advisor.optics.colour import hue_word, hue_words, xyz
from advisor.optics.film_design import (
    DESIGNS,
    GREATEST_LAYER_NM,
    LEAST_LAYER_NM,
    RUN_FACTORS,
    FilmSpec,
    design,
    film_reflectance,
    main,
    merit,
)
from advisor.optics.grid import WAVELENGTHS_NM
from advisor.optics.media import film_index, lens_index
from advisor.optics.photometry import luminous_mean
from advisor.resources import data_file

Floats = NDArray[np.float64]


def shipped_layers() -> dict[str, Any]:
    """Layers of every coating in the range file, by key."""
    with data_file("counsel", "range.toml").open("rb") as handle:
        return {coating["key"]: coating.get("layers") for coating in tomllib.load(handle)["coating"]}


def shipped_nm(key: str) -> Floats:
    return np.array([nm for _, nm in shipped_layers()[key]])


def as_designed(key: str, angle_deg: float = 0.0) -> Floats:
    return film_reflectance(DESIGNS[key], thickness_nm=shipped_nm(key), angle_deg=angle_deg)


def as_made(key: str) -> Floats:
    nominal = shipped_nm(key)
    return film_reflectance(DESIGNS[key], thickness_nm=nominal * thickness_factors(nominal.size))


# ---- what each film must do: the limits are the project's own --------------------------------------------------------


def test_the_lowest_film_reflects_0_15_percent_and_as_made_0_25_at_most() -> None:
    assert luminous_mean(as_designed("broadband")) <= 0.0015
    assert np.percentile(luminous_mean(as_made("broadband")), 95.0) <= 0.0025


def test_the_lowest_film_keeps_its_figure_on_other_high_index_materials() -> None:
    spec, nominal = DESIGNS["broadband"], shipped_nm("broadband")
    for index, abbe in [(1.586, 30.0), (1.60, 40.0), (1.665, 32.0)]:
        on_other = FilmSpec(spec.key, spec.films, index, abbe, spec.bands)
        assert luminous_mean(film_reflectance(on_other, thickness_nm=nominal)) <= 0.0025, index


def test_the_green_film_is_green_and_mostly_so_as_made() -> None:
    assert luminous_mean(as_designed("broadband-green")) <= 0.008
    assert hue_word(xyz(as_designed("broadband-green"))) == "green"
    assert np.mean(hue_words(xyz(as_made("broadband-green"))) == "green") >= 0.9


def test_the_wide_film_holds_at_45_degrees_on_the_highest_organic_index() -> None:
    assert DESIGNS["broadband-wide"].index == 1.735
    assert luminous_mean(as_designed("broadband-wide")) <= 0.0035
    assert luminous_mean(as_designed("broadband-wide", angle_deg=45.0)) <= 0.009


def test_the_blue_film_mirrors_the_short_end_and_little_else() -> None:
    spectrum = as_designed("blue-reflecting")
    short = (WAVELENGTHS_NM >= 400.0) & (WAVELENGTHS_NM <= 440.0)
    assert 0.10 <= spectrum[short].mean() <= 0.25
    assert luminous_mean(spectrum) <= 0.008
    assert hue_word(xyz(spectrum)) == "blue"
    assert np.mean(hue_words(xyz(as_made("blue-reflecting"))) == "blue") >= 0.8


# ---- the design ------------------------------------------------------------------------------------------------------


@pytest.mark.parametrize("key", DESIGNS)
def test_the_shipped_film_is_what_its_design_finds(key: str) -> None:
    spec = DESIGNS[key]
    assert [film for film, _ in shipped_layers()[key]] == list(spec.films)
    again = design(spec)
    assert again.merit == pytest.approx(float(merit(spec, thickness_nm=shipped_nm(key))), rel=0.02)


@pytest.mark.parametrize("key", DESIGNS)
def test_no_layer_of_a_shipped_film_could_be_changed_for_the_better(key: str) -> None:
    # An optimum by definition: half a nanometre more or less of any layer is worse
    spec, nominal = DESIGNS[key], shipped_nm(key)
    assert nominal.min() >= LEAST_LAYER_NM
    assert nominal.max() <= GREATEST_LAYER_NM
    steps = 0.5 * np.vstack([np.eye(nominal.size), -np.eye(nominal.size)])
    assert np.all(merit(spec, thickness_nm=nominal + steps) > merit(spec, thickness_nm=nominal))


@pytest.mark.parametrize("key", ["broadband-wide", "blue-reflecting"])
def test_the_merit_equals_a_sum_written_out_with_tmm(key: str) -> None:
    # PyPI tmm, point by point; the merit's definition is written out again here
    spec, nominal = DESIGNS[key], shipped_nm(key)
    per_band = []
    for band in spec.bands:
        squares = []
        for wavelength in np.arange(band.from_nm, band.to_nm + 1.0, 10.0):
            index = [1.0, *(float(film_index(wavelength, name=film)) for film in spec.films)]
            index.append(float(lens_index(wavelength, index=spec.index, abbe=spec.abbe)))
            for factor in RUN_FACTORS:
                stack = [np.inf, *(nominal * factor), np.inf]
                pair = [tmm.coh_tmm(pol, index, stack, np.radians(band.angle_deg), wavelength)["R"] for pol in "sp"]
                squares.append(((np.mean(pair) - band.reflectance) / band.tolerance) ** 2)
        per_band.append(np.mean(squares))
    assert float(merit(spec, thickness_nm=nominal)) == pytest.approx(np.sqrt(np.mean(per_band)), rel=1e-9)


def test_a_design_is_the_same_every_time() -> None:
    assert design(DESIGNS["broadband"]) == design(DESIGNS["broadband"])


def test_thicknesses_that_do_not_fit_the_films_are_refused() -> None:
    with pytest.raises(ValueError, match="thickness_nm must have 4 layers"):
        merit(DESIGNS["broadband"], thickness_nm=[90.0, 110.0])


def test_the_command_prints_every_film_as_the_range_file_lists_it(capsys: pytest.CaptureFixture[str]) -> None:
    main()
    printed = tomllib.loads(
        capsys.readouterr().out.replace("# ", "[").replace(": on", "]  # on")  # each heading becomes a table
    )
    for key in DESIGNS:
        for (film, nm), (shipped_film, shipped) in zip(printed[key]["layers"], shipped_layers()[key], strict=True):
            assert film == shipped_film
            assert nm == pytest.approx(shipped, abs=0.5), key
