"""Cross-sections: the drawn path measured again as a picture would be."""

import datetime as dt
import re
from pathlib import Path

import numpy as np
import pytest
from numpy.typing import NDArray

from advisor.counsel.compare import Computed, compute
from advisor.counsel.section_drawing import Section, sections
from advisor.counsel.stock import builtin_range
from advisor.counsel.visit import check_visit, read_visit
from advisor.resources import resource_dir

TODAY = dt.date(2026, 12, 1)
DEMO = sorted(resource_dir("demo_patients").glob("*.json"))
HUNDREDTH = 0.011  # points are printed to a hundredth of a millimetre


def points(section: Section) -> NDArray[np.float64]:
    assert re.fullmatch(r"M[-\d., ]+ Z", section.path)
    pairs = section.path.removeprefix("M").removesuffix(" Z").split()
    return np.array([[float(value) for value in pair.split(",")] for pair in pairs])


def faces(section: Section) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Front and back as drawn, both from temple to nose; down the page is away from the nose."""
    both = points(section)
    half = len(both) // 2
    return both[:half], both[half:][::-1]


def computed_for(path: Path) -> Computed:
    return compute(read_visit(path), builtin_range(), today=TODAY)


@pytest.mark.parametrize("path", DEMO, ids=lambda path: path.stem)
def test_a_drawing_has_the_thickness_it_says(path: Path) -> None:
    computed = computed_for(path)
    drawn = sections(computed)
    places = [option.index for option in computed.laid if not option.refused]
    places += [len(computed.laid)] if computed.case.visit.worn_now else []  # every demo wearer's old pair can be drawn
    assert [(part.index, part.eye) for part in drawn] == [(k, eye) for k in places for eye in ("right", "left")]
    for part in drawn:
        front, back = faces(part)
        assert front[:, 1] == pytest.approx(back[:, 1])  # a straight cut at every place across
        thick = back[:, 0] - front[:, 0]
        assert thick.min() > 0
        assert thick[-1] == pytest.approx(part.nose_edge_mm, abs=2 * HUNDREDTH)
        assert thick[0] == pytest.approx(part.temple_edge_mm, abs=2 * HUNDREDTH)
        level = front[:, 0].argmin()  # the front stands farthest forward at its centre
        assert thick[level] == pytest.approx(part.centre_mm, abs=0.25)  # the next drawn place is under 1 mm away
        assert part.thinnest_mm - HUNDREDTH <= thick[0] <= part.thickest_mm + 0.1
        assert part.thinnest_mm - HUNDREDTH <= thick[-1] <= part.thickest_mm + 0.1


@pytest.mark.parametrize("path", DEMO, ids=lambda path: path.stem)
def test_all_drawings_share_one_scale_and_fit_their_box(path: Path) -> None:
    drawn = sections(computed_for(path))
    assert len({(part.width_mm, part.height_mm) for part in drawn}) == 1
    margin = 1.0
    for part in drawn:
        xy = points(part)
        assert xy.min() >= margin - HUNDREDTH
        assert xy[:, 0].max() <= part.width_mm - margin + HUNDREDTH
        assert xy[:, 1].max() <= part.height_mm - margin + HUNDREDTH
    # to scale: the longest drawing fills the height but for the margins
    longest = max(float(np.ptp(points(part)[:, 1])) for part in drawn)
    assert longest <= drawn[0].height_mm - 2 * margin + HUNDREDTH


def test_a_level_cut_is_as_long_as_the_frame_is_wide() -> None:
    content = {
        "prescription": {"right": {"sphere": -4.0}, "left": {"sphere": 3.0}},
        "frame": {"a_mm": 50.0, "b_mm": 36.0, "dbl_mm": 18.0, "rim": "full"},
        "fitting": {"right": {"pd_mm": 32.0, "height_mm": 18.0}, "left": {"pd_mm": 30.0, "height_mm": 18.0}},
        "options": [{"material": "hard-resin-150"}],
        "scenes": [],
    }
    right, left = sections(compute(check_visit(content), builtin_range(), today=TODAY))
    for part, pd in ((right, 32.0), (left, 30.0)):
        front, _ = faces(part)
        assert np.ptp(front[:, 1]) == pytest.approx(50.0, abs=0.05)
        nose = 25 - ((50 + 18) / 2 - pd)  # from the optical centre: half the box less the inset
        centre = np.interp(front[-1, 1] + nose, front[::-1, 1], front[::-1, 0])
        assert centre <= front[:, 0].min() + 0.02  # so the front's foremost point is the optical centre
    minus, plus = (np.subtract(*[face[:, 0] for face in faces(part)[::-1]]) for part in (right, left))
    assert minus[0] > minus.min() < minus[-1]
    assert plus[0] < plus.max() > plus[-1]


def test_refused_options_are_not_drawn_and_nothing_is_no_fault() -> None:
    content = {
        "prescription": {"right": {"sphere": -2.0}, "left": {"sphere": -2.0}},
        "options": [{"material": "hard-resin-150", "front_power_d": 30.0}, {"material": "hard-resin-150"}],
        "scenes": [],
    }
    computed = compute(check_visit(content), builtin_range(), today=TODAY)
    assert {part.index for part in sections(computed)} == {1}
    alone = compute(check_visit(content | {"options": content["options"][:1]}), builtin_range(), today=TODAY)  # type: ignore[index]  # plain content
    assert sections(alone) == []
