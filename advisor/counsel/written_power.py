"""One number of a prescription or a fitting as people type it into a field.

Conventions, all of them common practice, no source:

- A comma is a decimal mark as the point is. U+2212, an en dash and a non-breaking hyphen are minus signs. Spaces count
  for nothing, and a figure may begin with its decimal mark.
- A power (sphere, cylinder, add) may carry its sign behind it: "4,25-" is -4.25.
- A power without a decimal mark is read as hundredths where it has three digits or more, or begins with 0: "425" is
  4.25, "1025" is 10.25, "075" is 0.75. "25" stays 25 D. Prisms, axes, curves, lengths and angles are never divided.
- A sphere of "pl", "plano" or "pla" is 0. A cylinder of "ds", "sph" or a dash alone is no cylinder.
- An axis of 0 is the axis 180.

``static/js/powers.js`` reads by the same conventions; one table of cases tests both.
"""

import re
from dataclasses import dataclass
from typing import Literal

from advisor.counsel.fields import MINUS_SIGNS

Kind = Literal["sphere", "cylinder", "add", "axis", "prism", "curve", "length", "angle"]

POWERS: frozenset[Kind] = frozenset({"sphere", "cylinder", "add"})
PLANO = frozenset({"pl", "plano", "pla"})
NO_CYLINDER = frozenset({"ds", "sph", "-"})
LONGEST = 40

_NUMBER = re.compile(r"[+-]?([0-9]+([.,][0-9]*)?|[.,][0-9]+)")
_HUNDREDTHS = re.compile(r"[+-]?(0[0-9]+|[0-9]{3,})")
_SIGN_BEHIND = re.compile(r"([0-9.,]+)([+-])")


@dataclass(frozen=True)
class Reading:
    """What a text was read as; ``value`` is None for nothing written, or for no cylinder.

    ``is_literal`` tells whether a reader would take the text for that very number without knowing the conventions.
    """

    value: float | None
    is_literal: bool = True


def read_written(text: str, *, kind: Kind) -> Reading | None:
    """Read a number as it is typed, or return None where it is none."""
    plain = "".join(text.translate(MINUS_SIGNS).split()).lower()
    if not plain:
        return Reading(None)
    if kind == "sphere" and plain in PLANO:
        return Reading(0.0, is_literal=False)
    if kind == "cylinder" and plain in NO_CYLINDER:
        return Reading(None, is_literal=False)
    behind = _SIGN_BEHIND.fullmatch(plain) if kind in POWERS else None
    turned = behind[2] + behind[1] if behind else plain
    if len(turned) > LONGEST or not _NUMBER.fullmatch(turned):
        return None
    return _valued(float(turned.replace(",", ".")), turned, kind=kind, is_turned=behind is not None)


def _valued(number: float, plain: str, *, kind: Kind, is_turned: bool) -> Reading:
    """Apply what a kind of field makes of the number that stands there."""
    if kind == "axis" and number == 0:
        return Reading(180.0, is_literal=False)
    if kind in POWERS and _HUNDREDTHS.fullmatch(plain):
        return Reading(number / 100, is_literal=number == 0)
    return Reading(number, is_literal=not is_turned)
