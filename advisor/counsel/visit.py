"""The visit file (JSON): who came, what is prescribed, fitted and wanted. What was left out stays None."""

import datetime as dt
import json
from collections.abc import Mapping
from pathlib import Path
from typing import Annotated, Any, Literal, Self

import numpy as np
from pydantic import Field, ValidationError, ValidationInfo, field_validator, model_validator

from advisor.counsel.choices import CoatingRef, FrontPower, MaterialRef, Option
from advisor.counsel.faults import Faults, faults_from
from advisor.counsel.fields import (
    Choice,
    Date,
    Key,
    Line,
    Money,
    Number,
    Paragraph,
    Strict,
    Truth,
    checked_axis,
    refusal,
)
from advisor.counsel.files import parse_json, read_text
from advisor.counsel.prescription import Base, PrismVector, SphereCylinder, combined_prism
from advisor.optics.outline import LEAST_POINTS, traced_rim
from advisor.optics.rim import OutlineError, ed_fits_box

Frequency = Literal["never", "sometimes", "often"]
YesNo = Literal["yes", "no"]

_Power = Annotated[float, Field(ge=-30, le=30)]
_Add = Annotated[float, Field(ge=0, le=30)]
_Vertex = Annotated[float, Field(ge=0, le=30)]
_Pd = Annotated[float, Field(ge=10, le=60)]


class Wearer(Strict):
    """The person; ``birth_date`` where the day matters, else ``birth_year``."""

    name: Line | None = None
    birth_date: Date = None
    birth_year: Number[Annotated[int, Field(ge=1900, le=2200)] | None] = None
    eye_colour: Choice[Literal["black", "brown", "light", "very-light"] | None] = None
    language: Choice[Annotated[str, Field(pattern=r"^[a-z]{2,3}(-[A-Za-z0-9]{2,8})*$")] | None] = None
    print: Choice[Literal["standard", "large"] | None] = None

    @field_validator("birth_year")
    @classmethod
    def _agrees_with_date(cls, year: int | None, info: ValidationInfo) -> int | None:
        birth_date: dt.date | None = info.data.get("birth_date")
        if year is not None and birth_date and birth_date.year != year:
            raise refusal("birth-year-differs", {"year": birth_date.year})
        return year


class PrismPart(Strict):
    """One written prism, in prism dioptres; an oblique one is two of these."""

    amount: Number[Annotated[float, Field(ge=0, le=30)]]
    base: Base


class EyePrescription(Strict):
    """What is written for one eye."""

    sphere: Number[_Power]
    cylinder: Number[_Power | None] = None
    axis: Annotated[Number[Annotated[float, Field(ge=0, le=180)] | None], Field(validate_default=True)] = None
    add: Number[_Add | None] = None
    prism: tuple[PrismPart, ...] | None = None
    balance: Truth | None = None

    @field_validator("cylinder")
    @classmethod
    def _within_bounds(cls, cylinder: float | None, info: ValidationInfo) -> float | None:
        total = (cylinder or 0.0) + info.data.get("sphere", 0.0)
        if abs(total) > 30:
            raise refusal("power-beyond", {"power": total})
        return cylinder

    @field_validator("axis")
    @classmethod
    def _axis(cls, axis: float | None, info: ValidationInfo) -> float | None:
        return checked_axis(axis, info)

    @property
    def power(self) -> SphereCylinder:
        """The distance power as the rules of a prescription take it."""
        return SphereCylinder(self.sphere, self.cylinder or 0.0, self.axis or 180.0)

    @property
    def prism_vector(self) -> PrismVector:
        """All written prisms added up."""
        return combined_prism((part.amount, part.base) for part in self.prism or ())


class Prescription(Strict):
    """A prescription for both eyes; ``vertex_mm`` is the distance it was tested at."""

    written: Date = None
    vertex_mm: Number[_Vertex | None] = None
    for_: Choice[Literal["distance", "near", "intermediate", "all"] | None] = Field(default=None, alias="for")
    intermediate_add: Number[_Add | None] = None
    right: EyePrescription
    left: EyePrescription


class EyeFitting(Strict):
    """Where one eye looks through the frame; the height is from the lowest line of the box."""

    pd_mm: Number[_Pd | None] = None
    near_pd_mm: Number[_Pd | None] = None
    height_mm: Number[Annotated[float, Field(ge=-20, le=80)] | None] = None


class Fitting(Strict):
    """How the frame sits."""

    right: EyeFitting | None = None
    left: EyeFitting | None = None
    vertex_mm: Number[_Vertex | None] = None
    tilt_deg: Number[Annotated[float, Field(ge=-20, le=40)] | None] = None
    wrap_deg: Number[Annotated[float, Field(ge=-10, le=40)] | None] = None
    working_distance_cm: tuple[Number[Annotated[float, Field(ge=5, le=1000)]], ...] | None = None


_Coordinate = Number[Annotated[float, Field(ge=-100, le=100)]]
_Points = Annotated[tuple[tuple[_Coordinate, _Coordinate], ...], Field(min_length=LEAST_POINTS, max_length=4000)]


class Outline(Strict):
    """The traced rim about the box centre, x towards the nose, y up; one side alone is mirrored."""

    right: _Points | None = None
    left: _Points | None = None

    @field_validator("right", "left")
    @classmethod
    def _once_round(cls, points: _Points | None) -> _Points | None:
        if points is not None:
            try:
                traced_rim(np.array(points))
            except OutlineError as error:
                raise refusal("outline-order") from error
        return points

    @model_validator(mode="after")
    def _one_side(self) -> Self:
        if self.right is None and self.left is None:
            raise refusal("outline-side")
        return self


class Frame(Strict):
    """The chosen frame: box width and height, bridge, longest diameter, rim."""

    a_mm: Number[Annotated[float, Field(ge=15, le=90)] | None] = None
    b_mm: Number[Annotated[float, Field(ge=10, le=90)] | None] = None
    dbl_mm: Number[Annotated[float, Field(ge=0, le=50)] | None] = None
    ed_mm: Number[Annotated[float, Field(ge=15, le=130)] | None] = None
    rim: Choice[Literal["full", "grooved", "drilled"] | None] = None
    price: Number[Money | None] = None
    outline: Outline | None = None

    @field_validator("ed_mm")
    @classmethod
    def _fits_box(cls, ed_mm: float | None, info: ValidationInfo) -> float | None:
        a_mm, b_mm = info.data.get("a_mm"), info.data.get("b_mm")
        if ed_mm and a_mm and b_mm and not ed_fits_box(ed_mm, a_mm=a_mm, b_mm=b_mm):
            raise refusal("longest-diameter", {"least": max(a_mm, b_mm), "most": float(np.hypot(a_mm, b_mm))})
        return ed_mm


class DailyLife(Strict):
    """What the glasses will meet; a question left out was not asked, which is never the same as "never"."""

    driving: Choice[Frequency | None] = None
    night_driving: Choice[Frequency | None] = None
    screen_work: Choice[Frequency | None] = None
    lights_behind: Choice[Frequency | None] = None
    face_to_face: Choice[Frequency | None] = None
    sun: Choice[Frequency | None] = None
    dust: Choice[Frequency | None] = None
    heat_steam: Choice[Frequency | None] = None
    sprays_solvents: Choice[Frequency | None] = None
    water_salt_chlorine: Choice[Frequency | None] = None
    impact: Choice[Frequency | None] = None
    light_sensitive: Choice[Frequency | None] = None
    bothered_thickness: Choice[Frequency | None] = None
    bothered_weight: Choice[Frequency | None] = None
    bothered_smears: Choice[Frequency | None] = None
    child: Choice[YesNo | None] = None
    one_good_eye: Choice[YesNo | None] = None
    new_glare: Choice[YesNo | None] = None
    falls: Choice[YesNo | None] = None
    first_multifocal: Choice[YesNo | None] = None
    cataract_planned: Choice[YesNo | None] = None
    two_wheeler: Choice[YesNo | None] = None
    cleaning: tuple[Key, ...] | None = None
    price_limit: Number[Money | None] = None

    def not_asked(self) -> tuple[str, ...]:
        """List the questions that were left out."""
        return tuple(name for name in type(self).model_fields if getattr(self, name) is None)


class WornNow(Strict):
    """The pair the wearer came in with."""

    material: Choice[MaterialRef | None] = None
    coating: Choice[CoatingRef | None] = None
    prescription: Prescription | None = None
    fitting: Fitting | None = None
    front_power_d: Choice[FrontPower | None] = None
    liked: Paragraph | None = None
    disliked: Paragraph | None = None


class Declined(Strict):
    """Something advised that was turned down, and by whom."""

    key: Key
    by: Line | None = None


_OptionIndex = Annotated[int, Field(ge=0, le=99)]


class Visit(Strict):
    """One visit; the two spheres are all that must be there."""

    format: Literal["twolight-visit-1"] = "twolight-visit-1"
    date: Date = None
    reference: Line | None = None
    dispensed_by: Line | None = None
    note: Paragraph | None = None
    wearer: Wearer | None = None
    prescription: Prescription
    fitting: Fitting | None = None
    frame: Frame | None = None
    daily_life: DailyLife | None = None
    worn_now: WornNow | None = None
    options: Annotated[tuple[Option, ...], Field(max_length=20)] | None = None
    baseline: Number[_OptionIndex | None] = None
    ordered: Number[_OptionIndex | None] = None
    declined: tuple[Declined, ...] | None = None
    scenes: tuple[Key, ...] | None = None

    @field_validator("wearer")
    @classmethod
    def _born_before(cls, wearer: Wearer | None, info: ValidationInfo) -> Wearer | None:
        date: dt.date | None = info.data.get("date")
        born = wearer and (wearer.birth_date or (wearer.birth_year and dt.date(wearer.birth_year, 1, 1)))
        if date and born and born > date:
            raise refusal("born-after-visit", {"date": date.isoformat()})
        return wearer

    @field_validator("baseline", "ordered")
    @classmethod
    def _is_an_option(cls, index: int | None, info: ValidationInfo) -> int | None:
        options = info.data.get("options")
        if index is not None and options and index >= len(options):
            raise refusal("at-most", {"limit": len(options) - 1})
        return index

    def age(self, *, today: dt.date) -> int | None:
        """Return the age on the day of the visit (``today`` where it has no date): exact from a birth date."""
        if self.wearer is None:
            return None
        day, born = self.date or today, self.wearer.birth_date
        if born:
            return day.year - born.year - ((day.month, day.day) < (born.month, born.day))
        return None if self.wearer.birth_year is None else day.year - self.wearer.birth_year

    def youngest_age(self, *, today: dt.date) -> int | None:
        """Return the age that rules for children use: one less where only the year of birth is known."""
        age = self.age(today=today)
        exact = self.wearer is not None and self.wearer.birth_date is not None
        return age if age is None or exact else age - 1


def check_visit(
    data: Mapping[str, Any], *, file: str = "", folder: Path | None = None, from_form: bool = False
) -> Visit:
    """Check the content of a visit, or raise :class:`Faults`.

    With ``from_form`` numbers may be text as people type it (comma, U+2212, spaces) and an empty text means left out;
    a file holds numbers as numbers, and text in their place is a fault.
    """
    try:
        return Visit.model_validate(data, context={"folder": folder, "from_form": from_form})
    except ValidationError as error:
        raise Faults(faults_from(error, model=Visit, file=file)) from error


def parse_visit(text: str, *, file: str = "", folder: Path | None = None) -> Visit:
    """Read the text of a visit file, or raise :class:`Faults`."""
    return check_visit(parse_json(text, file=file), file=file, folder=folder)


def read_visit(path: Path) -> Visit:
    """Read a visit file, with spectrum files beside it, or raise :class:`Faults`."""
    return parse_visit(read_text(path), file=str(path), folder=path.parent)


def visit_to_json(visit: Visit) -> str:
    """Write a visit as a file that reads back to an equal visit; what was left out stays out."""
    content = visit.model_dump(mode="json", by_alias=True, exclude_none=True)
    return json.dumps(content, ensure_ascii=False, indent=1) + "\n"
