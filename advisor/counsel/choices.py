"""How a visit, or a shop's defaults, name what a pair of lenses is made of."""

from typing import Annotated

from pydantic import Field

from advisor.counsel.fields import Choice, Key, Number, Strict, alternatives, by_shape, tagged
from advisor.counsel.prescription import Eye
from advisor.counsel.stock_items import Coating, Material, Tint


def _key_or_object(value: object) -> str | None:
    return "key" if isinstance(value, str) else "object" if by_shape(value) == "object" else None


def _faces_or_coating(value: object) -> str | None:
    """Tell ``{front, back}`` from a coating given in place; names that belong to neither are faults of the faces."""
    if isinstance(value, Coating) or (isinstance(value, dict) and set(value) & set(Coating.model_fields)):
        return "coating"
    return "key" if isinstance(value, str) else "faces" if by_shape(value) == "object" else None


def _number_key_or_object(value: object) -> str | None:
    shape = by_shape(value)
    return None if shape == "pair" else shape


def _number_or_eyes(value: object) -> str | None:
    shape = by_shape(value)
    return shape if shape in ("number", "object") else None


_Transmittance = Annotated[float, Field(gt=0, le=1)]
_FrontPower = Annotated[float, Field(ge=-25, le=35)]
_Centre = Annotated[float, Field(ge=0.1, le=40)]

MaterialRef = Annotated[
    Annotated[Key, tagged("key")] | Annotated[Material, tagged("object")],
    alternatives(_key_or_object, code="key-or-object"),
]
FaceRef = Annotated[
    Annotated[Key, tagged("key")] | Annotated[Coating, tagged("object")],
    alternatives(_key_or_object, code="key-or-object"),
]
TintRef = Annotated[
    Annotated[Key, tagged("key")]
    | Annotated[Number[_Transmittance], tagged("number")]
    | Annotated[Tint, tagged("object")],
    alternatives(_number_key_or_object, code="number-key-or-object"),
]


class Faces(Strict):
    """Two faces coated differently; a face left out is bare."""

    front: FaceRef = "bare"
    back: FaceRef = "bare"


CoatingRef = Annotated[
    Annotated[Key, tagged("key")] | Annotated[Faces, tagged("faces")] | Annotated[Coating, tagged("coating")],
    alternatives(_faces_or_coating, code="key-or-object"),
]


class EyePowers(Strict):
    """A front power for each eye."""

    right: Number[_FrontPower | None] = None
    left: Number[_FrontPower | None] = None


class EyeCentres(Strict):
    """A centre thickness for each eye."""

    right: Number[_Centre | None] = None
    left: Number[_Centre | None] = None


FrontPower = Annotated[
    Annotated[Number[_FrontPower], tagged("number")] | Annotated[EyePowers, tagged("object")],
    alternatives(_number_or_eyes, code="number-or-pair"),
]
Centre = Annotated[
    Annotated[Number[_Centre], tagged("number")] | Annotated[EyeCentres, tagged("object")],
    alternatives(_number_or_eyes, code="number-or-pair"),
]


class Option(Strict):
    """One pair of lenses to lay out; what is left out is for the comparison to fill in and to report."""

    design: Choice[Key | None] = None
    material: Choice[MaterialRef | None] = None
    coating: Choice[CoatingRef | None] = None
    tint: Choice[TintRef | None] = None
    front_power_d: Choice[FrontPower | None] = None
    centre_mm: Choice[Centre | None] = None


def faces_of(coating: CoatingRef) -> tuple[FaceRef, FaceRef]:
    """Return what the front and the back are coated with."""
    return (coating.front, coating.back) if isinstance(coating, Faces) else (coating, coating)


def for_eye(value: float | EyePowers | EyeCentres | None, *, eye: Eye) -> float | None:
    """Return the figure that applies to one eye."""
    if isinstance(value, EyePowers | EyeCentres):
        return value.right if eye == "right" else value.left
    return value
