"""The glasses as measured when the wearer comes back: what of it was measured, the rest left out."""

from collections.abc import Mapping
from pathlib import Path
from typing import Annotated, Any, Literal

from pydantic import Field, ValidationError, ValidationInfo, field_validator

from advisor.counsel.faults import Faults, faults_from
from advisor.counsel.fields import Number, Strict, checked_axis
from advisor.counsel.files import parse_json, read_text
from advisor.counsel.prescription import Eye, PrismVector, SphereCylinder, combined_prism
from advisor.counsel.visit import PrismPart

_Power = Annotated[float, Field(ge=-30, le=30)]


class MeasuredEye(Strict):
    """One lens in the focimeter; prism is what is read at the point where the eye is to look through."""

    sphere: Number[_Power | None] = None
    cylinder: Number[_Power | None] = None
    axis: Annotated[Number[Annotated[float, Field(ge=0, le=180)] | None], Field(validate_default=True)] = None
    add: Number[Annotated[float, Field(ge=0, le=30)] | None] = None
    prism: tuple[PrismPart, ...] | None = None
    pd_mm: Number[Annotated[float, Field(ge=10, le=60)] | None] = None
    height_mm: Number[Annotated[float, Field(ge=-20, le=80)] | None] = None
    centre_mm: Number[Annotated[float, Field(ge=0.1, le=40)] | None] = None

    @field_validator("axis")
    @classmethod
    def _axis(cls, axis: float | None, info: ValidationInfo) -> float | None:
        return checked_axis(axis, info)

    @property
    def power(self) -> SphereCylinder | None:
        """The power read, or None where no sphere was."""
        return None if self.sphere is None else SphereCylinder(self.sphere, self.cylinder or 0.0, self.axis or 180.0)

    @property
    def prism_vector(self) -> PrismVector | None:
        """All prism read added up, or None where none was read."""
        return None if self.prism is None else combined_prism((part.amount, part.base) for part in self.prism)


class Measured(Strict):
    """Both lenses as measured."""

    format: Literal["twolight-measured-1"] = "twolight-measured-1"
    right: MeasuredEye | None = None
    left: MeasuredEye | None = None

    def eye(self, eye: Eye) -> MeasuredEye:
        """Return what was measured of one lens, empty where nothing was."""
        return (self.right if eye == "right" else self.left) or MeasuredEye()


def check_measured(data: Mapping[str, Any], *, file: str = "", from_form: bool = False) -> Measured:
    """Check what was measured, or raise :class:`Faults`."""
    try:
        return Measured.model_validate(data, context={"from_form": from_form})
    except ValidationError as error:
        raise Faults(faults_from(error, model=Measured, file=file)) from error


def read_measured(path: Path) -> Measured:
    """Read a file of measurements, or raise :class:`Faults`."""
    return check_measured(parse_json(read_text(path), file=str(path)), file=str(path))
