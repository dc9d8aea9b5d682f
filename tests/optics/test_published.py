"""Every printed value of ``published/checks.csv``, met within half its last printed digit."""

import csv
from collections.abc import Callable
from decimal import Decimal
from pathlib import Path

import numpy as np
import pytest

from advisor.optics.centration import centred_rim, minimum_blank, optical_centre
from advisor.optics.eye import pupil_watson_yellott_2012, veil_cie146_2002
from advisor.optics.fresnel import normal_reflectance
from advisor.optics.ghost_path import PATHS, ghost_images
from advisor.optics.lens_form import back_curvature, back_power, front_curvature
from advisor.optics.lens_section import LensSection
from advisor.optics.prism import prentice_prism
from advisor.optics.rim import box_rim
from advisor.optics.thin_film import stack_spectra
from advisor.optics.vertex import vertex_change

WHERE = Path(__file__).parent / "published" / "checks.csv"
ROWS = list(csv.DictReader(line for line in WHERE.read_text(encoding="utf-8").splitlines() if not line.startswith("#")))


def loss_percent(index: float) -> float:
    return 100 * (1 - (1 - float(normal_reflectance(index))) ** 2)


def film_reflectance(film: float, substrate: float, thickness_nm: float) -> float:
    spectra, _ = stack_spectra(
        [550.0], layer_index=np.full((1, 1), film), layer_thickness_nm=[thickness_nm], substrate_index=substrate
    )
    return float(spectra[0, 0, 0, 0])


def best_index(substrate: float) -> float:
    """The index of a quarter wave that mirrors least, found by trying."""
    tried = np.linspace(1.2, 1.5, 30001)
    mirrored = ((substrate - tried**2) / (substrate + tried**2)) ** 2
    chosen = float(tried[mirrored.argmin()])
    assert film_reflectance(chosen, substrate, 550 / 4 / chosen) < 1e-9  # by the program's own matrices
    return chosen


def best_substrate(film: float) -> float:
    tried = np.linspace(1.5, 2.2, 7001)
    mirrored = [film_reflectance(film, float(n), 550 / 4 / film) for n in tried[::10]]
    return float(tried[::10][int(np.argmin(mirrored))])


def least_thickness_nm(film: float) -> float:
    """The thinnest film of least reflectance at 550 nm on 1.52, found by trying."""
    tried = np.linspace(80, 150, 7001)
    spectra, _ = stack_spectra(
        [550.0], layer_index=np.full((1, 1), film), layer_thickness_nm=tried[:, None], substrate_index=1.52
    )
    return float(tried[spectra[:, 0, 0, 0].argmin()])


def ghost_d(path: str, *, front_d: float, back_d: float) -> float:
    section = LensSection(
        front_curvature_per_mm=np.repeat(front_curvature(front_d, index=1.5), 2),
        back_curvature_per_mm=np.repeat(back_curvature(back_d, index=1.5), 2),
        index=np.array(1.5),
        thickness_mm=np.array(2.0),
        vertex_mm=np.array(12.0),
    )
    return float(ghost_images(section, distance_m=np.inf).vergence_d[PATHS.index(path), 0])


BACK_D = float(back_power(-4.0, front_power_d=4.0, centre_mm=2.0, index=1.5))
FLUX = 0.1 * np.pi / 4 * 60**2


def round_blank_mm() -> float:
    centre = optical_centre(60.0, b_mm=60.0, dbl_mm=20.0, monocular_pd_mm=34.5)
    return float(minimum_blank(centred_rim(box_rim(63.0, b_mm=63.0, ed_mm=63.0), optical_centre_mm=centre)))


COMPUTED: dict[str, Callable[[], float]] = {
    "first-pass loss of two bare faces at constant index 1.498 in %": lambda: loss_percent(1.498),
    "first-pass loss of two bare faces at constant index 1.74 in %": lambda: loss_percent(1.74),
    "ideal single-film index on 1.523": lambda: best_index(1.523),
    "substrate for which 1.38 is ideal": lambda: best_substrate(1.38),
    "quarter wave of 550 nm as optical thickness in nm": lambda: 1.38 * least_thickness_nm(1.38),
    "quarter wave of 550 nm at 1.38 as physical thickness in nm": lambda: least_thickness_nm(1.38),
    "quarter wave of 1.38 on 1.52 at 550 nm in %": lambda: 100 * film_reflectance(1.38, 1.52, 550 / 4 / 1.38),
    "veil at 1 degree age 25 brown eyes per sr": lambda: float(veil_cie146_2002(1.0, age_y=25.0, pigment=0.5)),
    "pupil at 25 years in mm": lambda: float(pupil_watson_yellott_2012(FLUX, age_y=25.0)),
    "pupil at 65 years in mm": lambda: float(pupil_watson_yellott_2012(FLUX, age_y=65.0)),
    "smallest blank of a round 63 mm rim in mm": round_blank_mm,
    "Prentice 4 mm at -4.00 in prism dioptres": lambda: abs(float(prentice_prism(-4.0, offset_mm=4.0))),
    "-10.00 from 12 mm to the cornea in D": lambda: float(vertex_change(-10.0, from_mm=12.0, to_mm=0.0)),
    "ahead-inner of +6 -10 n 1.5 t 2 mm in D": lambda: ghost_d("ahead-inner", front_d=6.0, back_d=-10.0),
    "ahead-inner of -4.00 with front +4 n 1.5 t 2 mm in D": lambda: ghost_d("ahead-inner", front_d=4.0, back_d=BACK_D),
    "behind-back of -4.00 with front +4 n 1.5 t 2 mm in D": lambda: ghost_d("behind-back", front_d=4.0, back_d=BACK_D),
    "behind-front of -4.00 with front +4 n 1.5 t 2 mm in D": lambda: ghost_d(
        "behind-front", front_d=4.0, back_d=BACK_D
    ),
}


def test_every_printed_row_is_computed_and_names_its_source() -> None:
    assert [row["name"] for row in ROWS] == list(COMPUTED)
    assert all(row["source"] for row in ROWS)


@pytest.mark.parametrize("row", ROWS, ids=lambda row: row["name"])
def test_a_printed_value_is_met_within_half_its_last_digit(row: dict[str, str]) -> None:
    exponent = Decimal(row["value"]).as_tuple().exponent
    assert isinstance(exponent, int)
    assert COMPUTED[row["name"]]() == pytest.approx(float(row["value"]), abs=0.5 * 10.0**exponent)
