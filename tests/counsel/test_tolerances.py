import csv
from collections.abc import Callable
from pathlib import Path

import pytest

from advisor.counsel.tolerances import ANSI_TYPE, ISO_TYPE, Tolerances, tolerances_of

HALF_DIGIT = 0.005  # of the printed two decimals
FILE = Path(__file__).parent / "published" / "ansi_z80_1_2015_quick_reference.csv"
ROWS = list(csv.DictReader(FILE.read_text(encoding="utf-8").splitlines()[1:]))


def allowed(rules: Tolerances, row: dict[str, str]) -> float | None:
    power, cylinder, progressive = float(row["power_d"]), float(row["cylinder_d"]), row["progressive"] == "yes"
    read: dict[str, Callable[[], float | None]] = {
        "power": lambda: rules.power_d(power, cylinder_d=cylinder, progressive=progressive),
        "cylinder": lambda: rules.cylinder_d(cylinder, strongest_d=power, progressive=progressive),
        "axis": lambda: rules.axis_deg(cylinder),
        "add": lambda: rules.add_d(power),
        "vertical": lambda: rules.vertical_prism_d(power, progressive=progressive),
        "horizontal": lambda: rules.horizontal_prism_d(power, progressive=progressive),
    }
    return read[row["figure"]]()


# the last rows in mm (1.0 and 2.5) are written as the prism that shift makes by Prentice's rule
@pytest.mark.parametrize("row", ROWS, ids=lambda row: "-".join(row.values()))
def test_the_ansi_type_is_what_the_public_summary_prints(row: dict[str, str]) -> None:
    assert allowed(ANSI_TYPE, row) == pytest.approx(float(row["tolerance"]), abs=HALF_DIGIT)


def test_an_axis_of_next_to_no_cylinder_has_no_tolerance() -> None:
    assert ANSI_TYPE.axis_deg(-0.12) is None
    assert ISO_TYPE.axis_deg(0.0) is None


@pytest.mark.parametrize("rules", [ISO_TYPE, ANSI_TYPE], ids=["iso", "ansi"])
def test_a_stronger_cylinder_never_has_a_wider_axis(rules: Tolerances) -> None:
    turns = [rules.axis_deg(quarter / 4) or 0.0 for quarter in range(1, 33)]
    assert turns == sorted(turns, reverse=True)


@pytest.mark.parametrize("rules", [ISO_TYPE, ANSI_TYPE], ids=["iso", "ansi"])
def test_a_stronger_lens_never_has_less_leeway_in_power(rules: Tolerances) -> None:
    for progressive in (False, True):
        steps = [rules.power_d(quarter / 4, progressive=progressive) for quarter in range(0, 100)]
        assert steps[0] == min(steps)
        assert steps[-1] == max(steps)


def test_the_region_decides_and_neither_hides_where_it_is_from() -> None:
    assert tolerances_of("us") is ANSI_TYPE
    assert tolerances_of("uk") is tolerances_of(None) is tolerances_of("eu") is ISO_TYPE
    assert "from memory" in ISO_TYPE.source
    assert all("check them against the standard" in rules.source for rules in (ISO_TYPE, ANSI_TYPE))


# a few figures of the ISO 21987 type as remembered: a guard against slips of the pen, no proof of the standard
@pytest.mark.parametrize(
    ("power", "cylinder", "wanted"),
    [(3.0, 0.75, (0.12, 0.09)), (3.0, 4.0, (0.12, 0.12)), (9.0, 4.0, (0.12, 0.18)), (12.5, 0.5, (0.25, 0.18))],
)
def test_the_iso_type_reads_its_rows(power: float, cylinder: float, wanted: tuple[float, float]) -> None:
    assert (ISO_TYPE.power_d(power), ISO_TYPE.cylinder_d(cylinder, strongest_d=power)) == wanted
