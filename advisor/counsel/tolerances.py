"""How far finished glasses may be from what was ordered, by region. Neither table was read in its standard.

The figures of ANSI Z80.1-2015 were seen in a public quick reference to it; those of the ISO 21987 type are from memory.
Both must be checked against the standard in force before anybody relies on them, and no statement about safety rests on
them. Bands run up to and including their upper end.
"""

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import Literal

from advisor.counsel.phrases import mark

Bands = Sequence[tuple[float, float]]
CENTRE_OFF_MM = 0.3  # ANSI Z80.1, seen; taken for both regions
ROUNDING = 1e-9

SOURCES: dict[str, str] = {
    "iso": mark("of the ISO 21987 type, from memory; check them against the standard"),
    "ansi": mark("of ANSI Z80.1-2015, from a public summary; check them against the standard"),
}


def _banded(value: float, bands: Bands) -> float:
    return next(figure for upper, figure in bands if value <= upper + ROUNDING)


# The ISO type: by the stronger meridian, then by the cylinder up to 0.75, 4.00, 6.00 and above.
_ISO_ROWS: tuple[tuple[float, float, tuple[float, ...]], ...] = (
    (3.0, 0.12, (0.09, 0.12, 0.18, 0.25)),
    (6.0, 0.12, (0.12, 0.12, 0.18, 0.25)),
    (9.0, 0.12, (0.12, 0.18, 0.18, 0.25)),
    (12.0, 0.18, (0.12, 0.18, 0.25, 0.25)),
    (20.0, 0.25, (0.18, 0.25, 0.25, 0.25)),
    (math.inf, 0.37, (0.25, 0.25, 0.37, 0.37)),
)
_ISO_PROGRESSIVE_ROWS: tuple[tuple[float, float, tuple[float, ...]], ...] = (
    (6.0, 0.12, (0.12, 0.18, 0.18, 0.25)),
    (9.0, 0.18, (0.18, 0.18, 0.18, 0.25)),
    (12.0, 0.18, (0.18, 0.18, 0.25, 0.25)),
    (20.0, 0.25, (0.18, 0.25, 0.25, 0.25)),
    (math.inf, 0.37, (0.25, 0.25, 0.37, 0.37)),
)
_ISO_CYLINDERS = (0.75, 4.0, 6.0, math.inf)
_ISO_AXIS: Bands = ((0.25, 16.0), (0.5, 9.0), (0.75, 6.0), (1.5, 4.0), (2.5, 3.0), (math.inf, 2.0))
_ANSI_AXIS: Bands = ((0.25, 14.0), (0.5, 7.0), (0.75, 5.0), (1.5, 3.0), (math.inf, 2.0))
_ADD: Bands = ((4.0, 0.12), (math.inf, 0.18))
LEAST_CYLINDER_D = 0.125  # below it an axis has no tolerance


def _iso_power(strongest_d: float, cylinder_d: float, progressive: bool) -> tuple[float, float]:
    rows = _ISO_PROGRESSIVE_ROWS if progressive else _ISO_ROWS
    power, cylinders = next((p, c) for upper, p, c in rows if strongest_d <= upper + ROUNDING)
    return power, _banded(cylinder_d, tuple(zip(_ISO_CYLINDERS, cylinders, strict=True)))


def _ansi_power(strongest_d: float, cylinder_d: float, progressive: bool) -> tuple[float, float]:
    limit, least, middle, share, strong = (8.0, 0.16, 0.18, 0.05, 3.5) if progressive else (6.5, 0.13, 0.15, 0.04, 4.5)
    power = least if strongest_d <= limit + ROUNDING else 0.02 * strongest_d
    cylinder = _banded(cylinder_d, ((2.0, least), (strong, middle), (math.inf, share * cylinder_d)))
    return power, cylinder


@dataclass(frozen=True)
class Tolerances:
    """One region's tolerances; prism is of the pair, in weak lenses a prism and in stronger ones a shift in mm."""

    key: Literal["iso", "ansi"]
    both_meridians: bool
    _power: Callable[[float, float, bool], tuple[float, float]]
    _axis: Bands
    horizontal: tuple[float, float, float]  # prism dioptres up to a power in D, beyond it a shift in mm
    vertical: tuple[float, float, float]
    horizontal_progressive: tuple[float, float, float]
    vertical_progressive: tuple[float, float, float]
    place_mm: float = 1.0

    @property
    def source(self) -> str:
        """Where the figures come from, marked for translation."""
        return SOURCES[self.key]

    def power_d(self, strongest_d: float, *, cylinder_d: float = 0.0, progressive: bool = False) -> float:
        """Return how far a principal power may be off; the ANSI type judges the sphere in minus-cylinder writing."""
        return self._power(abs(strongest_d), abs(cylinder_d), progressive)[0]

    def cylinder_d(self, cylinder_d: float, *, strongest_d: float, progressive: bool = False) -> float:
        """Return how far the cylinder may be off."""
        return self._power(abs(strongest_d), abs(cylinder_d), progressive)[1]

    def axis_deg(self, cylinder_d: float) -> float | None:
        """Return how far the axis may be off; None where the cylinder is too weak to have one."""
        return None if abs(cylinder_d) < LEAST_CYLINDER_D else _banded(abs(cylinder_d), self._axis)

    def add_d(self, add_d: float) -> float:
        """Return how far the add may be off."""
        return _banded(add_d, _ADD)

    def horizontal_prism_d(self, power_d: float, *, progressive: bool = False) -> float:
        """Return how much horizontal prism the pair may have beyond what was ordered."""
        return _prism(power_d, self.horizontal_progressive if progressive else self.horizontal)

    def vertical_prism_d(self, power_d: float, *, progressive: bool = False) -> float:
        """Return how much vertical prism the pair may have beyond what was ordered."""
        return _prism(power_d, self.vertical_progressive if progressive else self.vertical)


def _prism(power_d: float, rule: tuple[float, float, float]) -> float:
    """Return the prism allowed, or that of the shift allowed by Prentice's rule."""
    prism, limit, shift_mm = rule
    return prism if abs(power_d) <= limit + ROUNDING else abs(power_d) * shift_mm / 10.0


ISO_TYPE = Tolerances(
    "iso", True, _iso_power, _ISO_AXIS, (0.67, 3.25, 2.0), (0.5, 5.0, 1.0), (0.67, 3.25, 2.0), (0.5, 5.0, 1.0)
)
# in progressive lenses 1.0 mm for each reference point, so 2.0 mm for the two
ANSI_TYPE = Tolerances(
    "ansi",
    False,
    _ansi_power,
    _ANSI_AXIS,
    (0.67, 2.75, 2.5),
    (0.33, 3.375, 1.0),
    (0.67, 3.375, 2.0),
    (0.33, 3.375, 1.0),
)


def tolerances_of(region: str | None) -> Tolerances:
    """Return the tolerances of a region: the ANSI type in the US, else the ISO type."""
    return ANSI_TYPE if region == "us" else ISO_TYPE
