"""Kinds of field that the visit file and the range file share, and the strict base of their models."""

import datetime as dt
import re
from collections.abc import Callable
from typing import Annotated, Any, TypeVar

from pydantic import BaseModel, BeforeValidator, ConfigDict, Discriminator, Field, Tag, ValidationInfo
from pydantic_core import PydanticCustomError

from advisor.counsel.faults import TAG
from advisor.counsel.phrases import Figure

T = TypeVar("T")
FROM_FORM = {"from_form": True}  # validation context: numbers come as text, and an empty text means left out

_NUMBER = re.compile(r"[+-]?(\d+([.,]\d*)?|[.,]\d+)")
_DATE = re.compile(r"\d{4}-\d{2}-\d{2}", re.ASCII)
MINUS_SIGNS = str.maketrans({"\N{MINUS SIGN}": "-", "\N{EN DASH}": "-", "\N{NON-BREAKING HYPHEN}": "-"})


class Strict(BaseModel):
    """A part of a file: unknown names and numbers that are not finite are refused, and nothing changes later."""

    model_config = ConfigDict(extra="forbid", allow_inf_nan=False, frozen=True)


def refusal(code: str, figures: dict[str, Figure] | None = None) -> PydanticCustomError:
    """Make the error by which a validator names one of our sentences."""
    return PydanticCustomError(code, "", dict(figures or {}))


def _from_form(info: ValidationInfo) -> bool:
    return bool((info.context or {}).get("from_form"))


def number_from_text(text: str) -> float | None:
    """Read a number as people type it: comma or point, U+2212 minus, spaces; None where nothing is typed."""
    plain = "".join(text.translate(MINUS_SIGNS).split())
    if not plain:
        return None
    if len(plain) > 40 or not _NUMBER.fullmatch(plain):
        raise refusal("not-a-number")
    return float(plain.replace(",", "."))


def read_number(value: object, info: ValidationInfo) -> object:
    """Let numbers pass; text is a number only where a form was filled in, and true is never 1."""
    if isinstance(value, str):
        if _from_form(info):
            return number_from_text(value)
        raise refusal("number-as-text")
    if isinstance(value, bool):
        raise refusal("not-a-number")
    if isinstance(value, int) and abs(value) > 10**15:
        raise refusal("not-a-number")
    return value


def read_date(value: object, info: ValidationInfo) -> object:
    """Take a date as year-month-day only; a bare number is no date."""
    if isinstance(value, str):
        if not value.strip() and _from_form(info):
            return None
        if _DATE.fullmatch(value):
            try:
                return dt.date.fromisoformat(value)
            except ValueError as error:
                raise refusal("not-a-date") from error
    if value is None or (isinstance(value, dt.date) and not isinstance(value, dt.datetime)):
        return value
    raise refusal("not-a-date")


def checked_axis(axis: float | None, info: ValidationInfo) -> float | None:
    """Refuse a cylinder without an axis; 0 reads as 180."""
    if axis is None and info.data.get("cylinder"):
        raise refusal("cylinder-without-axis", {"cylinder": info.data["cylinder"]})
    return 180.0 if axis == 0 else axis


def empty_is_none(value: object, info: ValidationInfo) -> object:
    """Read an empty text of a form as left out."""
    return None if value == "" and _from_form(info) else value


Number = Annotated[T, BeforeValidator(read_number)]  # Number[Annotated[float, Field(ge=0)] | None]
Choice = Annotated[T, BeforeValidator(empty_is_none)]  # Choice[Literal["full", "grooved"] | None]
Date = Annotated[dt.date | None, BeforeValidator(read_date)]
Truth = Annotated[bool, Field(strict=True)]
Key = Annotated[str, Field(pattern=r"^[A-Za-z0-9][A-Za-z0-9._\-]*$", max_length=60)]
Line = Annotated[str, Field(max_length=200)]
Paragraph = Annotated[str, Field(max_length=4000)]

Money = Annotated[float, Field(ge=0, le=1_000_000)]
Fraction = Annotated[float, Field(ge=0, le=1)]
Length = Annotated[float, Field(ge=0, le=1000)]


def tagged(name: str) -> Tag:
    """Mark one alternative of a field; the mark never shows in a fault's place."""
    return Tag(TAG + name)


def alternatives(choose: Callable[[Any], str | None], *, code: str) -> Discriminator:
    """Choose among alternatives by what was given; ``code`` is the sentence where none fits."""
    return Discriminator(
        lambda value: None if (name := choose(value)) is None else TAG + name,
        custom_error_type=code,
        custom_error_message=code,
    )


def by_shape(value: object) -> str | None:
    """Name the shape of a value: key, number, pair or object; in a form a text may also be a number."""
    if isinstance(value, str):
        return "number" if _NUMBER.fullmatch("".join(value.translate(MINUS_SIGNS).split())) else "key"
    if isinstance(value, int | float) and not isinstance(value, bool):
        return "number"
    if isinstance(value, list | tuple):
        return "pair"
    return "object" if isinstance(value, dict | BaseModel) else None
