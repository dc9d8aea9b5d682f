"""The plot of both faces read back against the spectra; the grid of scenes; the lenses from in front."""

import datetime as dt
import re
from pathlib import Path

import numpy as np
import pytest
from numpy.typing import NDArray

from advisor.counsel.compare import Computed, answer_of, compute
from advisor.counsel.ghost_grid import ghost_grid
from advisor.counsel.section_drawing import outlines
from advisor.counsel.spectra_plot import HEIGHT, TABLE_NM, TOPS_PERCENT, WIDTH, SpectraPlot, spectra_plot
from advisor.counsel.stock import builtin_range
from advisor.counsel.visit import check_visit, read_visit
from advisor.resources import resource_dir
from advisor.web.language import language

TODAY = dt.date(2026, 12, 1)
DEMO = sorted(resource_dir("demo_patients").glob("*.json"))
TENTH = 0.051  # points are printed to a tenth


def computed_for(path: Path) -> Computed:
    return compute(read_visit(path), builtin_range(), today=TODAY)


def points(path: str) -> NDArray[np.float64]:
    assert re.fullmatch(r"M[-\d., ]+( Z)?", path)
    pairs = path.removeprefix("M").removesuffix(" Z").split()
    return np.array([[float(value) for value in pair.split(",")] for pair in pairs])


def plots() -> list[SpectraPlot]:
    return [spectra_plot(option) for path in DEMO for option in computed_for(path).laid]


def test_a_bare_face_is_drawn_at_fresnels_value() -> None:
    """((n - 1)/(n + 1))^2 with n_d = 1.498 at the d line, 587.56 nm: 3.974 %."""
    content = {
        "prescription": {"right": {"sphere": 0.0}, "left": {"sphere": 0.0}},
        "options": [{"material": {"n_d": 1.498, "abbe": 58.0, "density_g_cm3": 1.32}, "coating": "bare"}],
        "scenes": [],
    }
    plot = spectra_plot(compute(check_visit(content), builtin_range(), today=TODAY).laid[0])
    for curve in plot.curves:
        xy = points(curve.line)
        nm = 380.0 + 400.0 * xy[:, 0] / WIDTH
        percent = plot.top_percent * (1.0 - xy[:, 1] / HEIGHT)
        expected = 100.0 * (0.498 / 2.498) ** 2
        assert float(np.interp(587.56, nm, percent)) == pytest.approx(expected, abs=plot.top_percent * TENTH / HEIGHT)
        assert curve.band is None
        assert curve.low is None


def test_every_plot_stays_inside_its_box_and_fills_it() -> None:
    for plot in plots():
        assert plot.top_percent in TOPS_PERCENT
        highest = HEIGHT
        for curve in plot.curves:
            for path in filter(None, (curve.line, curve.band)):
                xy = points(path)
                assert -TENTH <= xy[:, 0].min() < xy[:, 0].max() <= WIDTH + TENTH
                assert -TENTH <= xy[:, 1].min() < xy[:, 1].max() <= HEIGHT + TENTH
                highest = min(highest, float(xy[:, 1].min()))
        assert highest < 0.6 * HEIGHT  # no scale much larger than what it shows


def test_the_band_holds_the_table_and_the_table_is_the_line() -> None:
    banded = 0
    for plot in plots():
        for curve in plot.curves:
            xy = points(curve.line)
            nm, percent = 380.0 + 400.0 * xy[:, 0] / WIDTH, plot.top_percent * (1.0 - xy[:, 1] / HEIGHT)
            read = np.interp(TABLE_NM, nm, percent)
            # the table stands at drawn places; a tenth of a point is 0.04 % of the height and of a nm
            assert read == pytest.approx(np.array(curve.values), abs=0.005 * plot.top_percent)
            if curve.low is not None and curve.high is not None:
                banded += 1
                assert all(low <= high for low, high in zip(curve.low, curve.high, strict=True))
    assert banded > 10


def test_the_eye_behind_is_highest_at_555_nm() -> None:
    """V(lambda) is 1 at 555 nm (CIE 018)."""
    xy = points(plots()[0].sensitivity)
    top = xy[xy[:, 1].argmin()]
    assert 380.0 + 400.0 * top[0] / WIDTH == pytest.approx(555.0, abs=2.0)  # drawn every 2 nm
    assert top[1] == pytest.approx(0.0, abs=0.3)


@pytest.mark.parametrize("path", DEMO, ids=lambda path: path.stem)
def test_the_grid_has_the_worse_eye_of_every_image(path: Path) -> None:
    computed = computed_for(path)
    answer = answer_of(computed, translator=language("en"), with_advice=False)
    for option in answer.options:
        if option.right is None or option.left is None:
            continue
        rows = ghost_grid(option, computed.case.scenes)
        cells = {(row.scene, way): cell for row in rows for way, cell in row.cells.items()}
        levels: dict[tuple[str, str], float] = {}
        for ghost in [*option.right.ghosts, *option.left.ghosts]:
            key = (ghost.scene, ghost.path)
            levels[key] = max(levels.get(key, 0.0), ghost.visibility_level or 0.0)
        assert set(cells) == set(levels)
        for key, cell in cells.items():
            limits = [0.4, 1.0, 3.0, 10.0]  # the table of verdicts
            place = sum(levels[key] >= limit for limit in limits)
            assert cell.place == (min(place, 3) if cell.haze else place)


@pytest.mark.parametrize("path", DEMO, ids=lambda path: path.stem)
def test_an_outline_is_the_frame_with_its_marks_on_the_rim(path: Path) -> None:
    computed = computed_for(path)
    drawn = outlines(computed)
    assert len({(one.width_mm, one.height_mm) for one in drawn} or {0}) == 1
    for one in drawn:
        rim = points(one.rim)
        assert np.ptp(rim[:, 0]) == pytest.approx(computed.case.a_mm, abs=0.1)
        assert np.ptp(rim[:, 1]) == pytest.approx(computed.case.b_mm, abs=0.1)
        for mark in (one.thickest, one.thinnest):
            assert np.hypot(*(rim - mark).T).min() < 0.02
        inner = points(one.band.split(" Z ")[1])
        thickness = np.array([np.hypot(*(inner - point).T).min() for point in rim])
        assert thickness.max() <= one.thickest_mm + 0.05
        assert rim.min() >= 0.0
        assert rim[:, 0].max() <= one.width_mm


def test_from_in_front_the_noses_face_each_other() -> None:
    """A minus lens centred towards the nose is thickest at the temple: left for the right eye, seen from in front."""
    content = {
        "prescription": {"right": {"sphere": -6.0}, "left": {"sphere": -6.0}},
        "fitting": {"right": {"pd_mm": 29.0}, "left": {"pd_mm": 29.0}},
        "frame": {"a_mm": 54.0, "b_mm": 40.0, "dbl_mm": 18.0},
        "options": [{"material": "hard-resin-150"}],
        "scenes": [],
    }
    right, left = outlines(compute(check_visit(content), builtin_range(), today=TODAY))
    assert right.thickest[0] < right.centre[0] < right.thinnest[0] or right.thickest_at.startswith("temple")
    assert right.thickest[0] < right.centre[0]
    assert left.thickest[0] > left.centre[0]
    assert "temple" in right.thickest_at
    assert "temple" in left.thickest_at
