"""Rules of a written prescription: notation, meridians, prism, vertex distance, and the power a design is made to.

Axes and meridians are in the standard (TABO) notation: degrees anticlockwise as seen by a person facing the wearer,
0 at that person's right, the same for both eyes. Power along a meridian phi is S + C sin^2(phi - axis). Prism is in
prism dioptres, inward (base in) and upward (base up) positive.
"""

import math
from collections.abc import Iterable
from dataclasses import dataclass
from typing import Literal

from advisor.optics import meridians as optics_meridians
from advisor.optics.vertex import vertex_change

Base = Literal["in", "out", "up", "down"]
Eye = Literal["right", "left"]
DesignKind = Literal["single-vision", "reading", "occupational", "bifocal", "progressive"]
EYES: tuple[Eye, Eye] = ("right", "left")

_BASES: dict[Base, tuple[int, int]] = {"in": (1, 0), "out": (-1, 0), "up": (0, 1), "down": (0, -1)}


@dataclass(frozen=True)
class SphereCylinder:
    """A power as it is written; the axis runs from just above 0 to 180."""

    sphere_d: float
    cylinder_d: float = 0.0
    axis_deg: float = 180.0


@dataclass(frozen=True)
class MeridianPower:
    """The power along one principal meridian."""

    power_d: float
    meridian_deg: float


@dataclass(frozen=True)
class PrismVector:
    """A prism by its two parts: towards the nose and upwards."""

    inward_prism_d: float
    upward_prism_d: float


@dataclass(frozen=True)
class PrismPolar:
    """A prism by its size and the direction of its base, 0 up to 360 degrees."""

    amount_prism_d: float
    base_deg: float


def normal_axis(axis_deg: float) -> float:
    """Bring an axis into 0 < axis <= 180; 0 reads as 180."""
    axis = math.fmod(axis_deg, 180.0)
    return axis if axis > 0 else axis + 180.0


def transposed(power: SphereCylinder) -> SphereCylinder:
    """Write the same power with the cylinder's other sign."""
    return SphereCylinder(power.sphere_d + power.cylinder_d, -power.cylinder_d, normal_axis(power.axis_deg + 90.0))


def in_minus_cylinder(power: SphereCylinder) -> SphereCylinder:
    """Write the power with a minus cylinder, or none."""
    return transposed(power) if power.cylinder_d > 0 else power


def in_plus_cylinder(power: SphereCylinder) -> SphereCylinder:
    """Write the power with a plus cylinder, or none."""
    return transposed(power) if power.cylinder_d < 0 else power


def spherical_equivalent_d(power: SphereCylinder) -> float:
    """Return sphere plus half the cylinder."""
    return power.sphere_d + power.cylinder_d / 2


def power_along_d(power: SphereCylinder, *, meridian_deg: float) -> float:
    """Return S + C sin^2(phi - axis)."""
    return float(
        optics_meridians.power_along(
            power.sphere_d, cylinder_d=power.cylinder_d, axis_deg=power.axis_deg, direction_deg=meridian_deg
        )
    )


def principal_meridians(power: SphereCylinder) -> tuple[MeridianPower, MeridianPower]:
    """Return both principal powers, the more positive first."""
    powers, directions = optics_meridians.principal_meridians(
        power.sphere_d, cylinder_d=power.cylinder_d, axis_deg=power.axis_deg
    )
    first, second = (MeridianPower(float(p), normal_axis(float(d))) for p, d in zip(powers, directions, strict=True))
    return first, second


def at_vertex(power: SphereCylinder, *, from_mm: float, to_mm: float) -> SphereCylinder:
    """Move a back vertex power from one vertex distance to another, each principal meridian by itself.

    A ValueError names the distances where the focus lies between them.
    """
    written = (power.sphere_d, power.sphere_d + power.cylinder_d)
    along_axis, across = (float(moved) for moved in vertex_change(written, from_mm=from_mm, to_mm=to_mm))
    return SphereCylinder(along_axis, across - along_axis, power.axis_deg)


def combined_prism(components: Iterable[tuple[float, Base]]) -> PrismVector:
    """Add up written prisms, each an amount and a base."""
    parts = [(amount * _BASES[base][0], amount * _BASES[base][1]) for amount, base in components]
    return PrismVector(math.fsum(inward for inward, _ in parts), math.fsum(upward for _, upward in parts))


def written_prism(prism: PrismVector) -> list[tuple[float, Base]]:
    """Write a prism as at most two amounts with their bases."""
    written: list[tuple[float, Base]] = []
    if prism.inward_prism_d:
        written.append((abs(prism.inward_prism_d), "in" if prism.inward_prism_d > 0 else "out"))
    if prism.upward_prism_d:
        written.append((abs(prism.upward_prism_d), "up" if prism.upward_prism_d > 0 else "down"))
    return written


def prism_polar(prism: PrismVector, *, eye: Eye) -> PrismPolar:
    """Return size and base direction; base in lies at 0 for the right eye and at 180 for the left."""
    rightwards = prism.inward_prism_d if eye == "right" else -prism.inward_prism_d
    amount = math.hypot(rightwards, prism.upward_prism_d)
    direction = math.degrees(math.atan2(prism.upward_prism_d, rightwards)) % 360.0
    return PrismPolar(amount, 0.0 if direction == 360.0 else direction)


def prism_vector(prism: PrismPolar, *, eye: Eye) -> PrismVector:
    """Return the two parts of a prism given by size and base direction."""
    rightwards = prism.amount_prism_d * math.cos(math.radians(prism.base_deg))
    upward = prism.amount_prism_d * math.sin(math.radians(prism.base_deg))
    return PrismVector(rightwards if eye == "right" else -rightwards, upward)


def power_for_design(
    power: SphereCylinder, *, kind: DesignKind, add_d: float = 0.0, near_share: float | None = None
) -> SphereCylinder:
    """Return the power a lens is computed at.

    A reading lens has the whole add; an occupational lens its share of it (``near_share``, 0 to 1); a single-vision,
    bifocal or progressive lens is computed at the distance power.
    """
    if kind == "reading":
        share = 1.0
    elif kind == "occupational":
        if near_share is None or not 0 <= near_share <= 1:
            raise ValueError(f"near_share = {near_share} must lie from 0 to 1 for an occupational lens.")
        share = near_share
    else:
        share = 0.0
    return SphereCylinder(power.sphere_d + share * add_d, power.cylinder_d, power.axis_deg)
