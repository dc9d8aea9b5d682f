"""What a shop sells, item by item: materials, coatings, tints, designs, offers, scenes."""

from pathlib import Path
from typing import Annotated, Literal, Self

from pydantic import AfterValidator, BeforeValidator, Field, ValidationInfo, field_validator, model_validator

from advisor.counsel.fields import (
    Fraction,
    Key,
    Length,
    Line,
    Money,
    Number,
    Paragraph,
    Strict,
    Truth,
    alternatives,
    by_shape,
    refusal,
    tagged,
)
from advisor.counsel.prescription import DesignKind
from advisor.counsel.spectrum_file import read_spectrum_file
from advisor.optics.media import FILM_NAMES, UnknownFilm
from advisor.optics.spectrum_input import SpectrumFault, measured_spectrum

IN_PLACE = "in-place"  # the key of an item that a visit gives in place; items of a range carry their own

Hue = Literal["neutral", "red", "gold", "green", "teal", "blue", "purple", "pink"]
_Index = Annotated[float, Field(ge=1.3, le=2.2)]
_Power = Annotated[float, Field(ge=-60, le=60)]
_Direction = Annotated[float, Field(ge=0, le=90)]  # a light beyond it is behind


class Item(Strict):
    """What every item carries; prices are for a pair, with tax, and unknown where left out."""

    key: Key = IN_PLACE
    label: Line | None = None
    price: Number[Money | None] = None


class Limits(Strict):
    """What a lens is made in; a limit left out sets none."""

    sphere_range_d: tuple[Number[_Power], Number[_Power]] | None = None
    cylinder_max_d: Number[Length | None] = None
    blank_diameters_mm: tuple[Number[Length], ...] | None = None

    @field_validator("sphere_range_d")
    @classmethod
    def _in_order(cls, limits: tuple[float, float] | None) -> tuple[float, float] | None:
        if limits and limits[0] > limits[1]:
            raise refusal("range-order")
        return limits


class Material(Item, Limits):
    """A lens material; ``abbe`` is V_d beside ``n_d`` and V_e beside ``n_e``."""

    n_d: Number[_Index | None] = None
    n_e: Annotated[Number[_Index | None], Field(validate_default=True)] = None
    abbe: Number[Annotated[float, Field(ge=15, le=100)]]
    density_g_cm3: Number[Annotated[float, Field(ge=0.5, le=8)]]
    uv_cut_nm: Number[Annotated[float, Field(ge=200, le=500)] | None] = None
    least_centre_mm: Number[Annotated[float, Field(ge=0.3, le=20)] | None] = None
    least_centre_child_mm: Number[Annotated[float, Field(ge=0.3, le=20)] | None] = None
    tough: Truth | None = None
    drillable: Truth | None = None
    tintable: Truth | None = None
    hard_coat: Literal["always", "optional", "none"] | None = None
    base_powers_d: tuple[Number[_Power], ...] | None = None
    source: Paragraph | dict[str, Paragraph] | None = None

    @field_validator("n_e")
    @classmethod
    def _one_index(cls, n_e: float | None, info: ValidationInfo) -> float | None:
        if "n_d" in info.data and (info.data["n_d"] is None) == (n_e is None):
            raise refusal("one-index")
        return n_e

    @property
    def index(self) -> float:
        """The index at its own line."""
        return self.n_d or self.n_e or 0.0

    @property
    def line(self) -> Literal["d", "e"]:
        """The line that index and Abbe number are given at."""
        return "e" if self.n_d is None else "d"


class HardCoat(Strict):
    """A hard coat whose index differs from the lens."""

    index: Number[_Index]
    thickness_um: Number[Annotated[float, Field(gt=0, le=20)]]


class Declared(Strict):
    """What a supplier states about a film whose layers are not known."""

    luminous_reflectance: Number[Annotated[float, Field(gt=0, le=1)]]
    hue: Hue = "neutral"


class Top(Strict):
    """The top layer; left out means not stated."""

    water_repellent: Truth | None = None
    oil_repellent: Truth | None = None
    antistatic: Truth | None = None


def _known_film(name: str) -> str:
    if name not in FILM_NAMES:
        raise refusal("unknown-film", {"key": name, "nearest": UnknownFilm(name).nearest})
    return name


FILM_OR_INDEX = Annotated[
    Annotated[Key, AfterValidator(_known_film), tagged("film")]
    | Annotated[Number[Annotated[float, Field(ge=1, le=4)]], tagged("index")],
    alternatives(lambda v: {"key": "film", "number": "index"}.get(by_shape(v) or ""), code="film-or-index"),
]
Layer = tuple[FILM_OR_INDEX, Number[Annotated[float, Field(ge=0, le=20_000)]]]
SpectrumRow = tuple[Number[Annotated[float, Field(ge=100, le=5000)]], Number[Annotated[float, Field(ge=0)]]]


def _spectrum_rows(value: object, info: ValidationInfo) -> object:
    """Replace a file name by the rows of that file, which lies beside the one being read."""
    if not isinstance(value, str):
        return value
    folder = (info.context or {}).get("folder")
    if not isinstance(folder, Path):
        raise refusal("spectrum-place")
    return read_spectrum_file(value, folder=folder)


class Coating(Item):
    """A coating: exactly one of its layers from air inwards, a declared figure and a measured spectrum."""

    care: Paragraph | None = None
    top: Top | None = None
    warranty_months: Number[Annotated[int, Field(ge=0, le=600)] | None] = None
    hard_coat: HardCoat | None = None
    layers: Annotated[tuple[Layer, ...], Field(max_length=200)] | None = None
    declared: Declared | None = None
    spectrum: Annotated[
        Annotated[tuple[SpectrumRow, ...], Field(max_length=20_000)] | None,
        BeforeValidator(_spectrum_rows, json_schema_input_type=str | list[tuple[float, float]] | None),
    ] = None

    @field_validator("spectrum")
    @classmethod
    def _usable(cls, rows: tuple[SpectrumRow, ...] | None) -> tuple[SpectrumRow, ...] | None:
        if rows is not None:
            try:
                measured_spectrum(rows)
            except SpectrumFault as error:
                raise refusal("spectrum-refused", {"detail": error.text, **error.figures}) from error
        return rows

    @model_validator(mode="after")
    def _one_description(self) -> Self:
        if sum(part is not None for part in (self.layers, self.declared, self.spectrum)) != 1:
            raise refusal("one-description")
        return self


class Tint(Item):
    """A tint; its transmittance is that of a lens with bare faces unless ``finished`` says otherwise."""

    kind: Literal["fixed", "photochromic", "polarising"] = "fixed"
    luminous_transmittance: Number[Annotated[float, Field(gt=0, le=1)]]
    luminous_transmittance_dark: Number[Annotated[float, Field(gt=0, le=1)] | None] = None
    finished: Truth = False
    uv_filter: Truth | None = None


class Design(Item):
    """A lens design; ``near_share`` is the part of the add that an occupational lens is computed at."""

    kind: DesignKind
    form: Literal["spherical", "aspheric"] = "spherical"
    near_share: Annotated[Number[Fraction | None], Field(validate_default=True)] = None
    least_height_mm: Number[Length | None] = None
    expect: Paragraph | None = None

    @field_validator("near_share")
    @classmethod
    def _share_of_occupational(cls, share: float | None, info: ValidationInfo) -> float | None:
        if share is None and info.data.get("kind") == "occupational":
            raise refusal("missing")
        return share


class Offer(Limits):
    """What the shop sells as one thing, at one price for the pair; it names items of the range by key."""

    design: Key
    material: Key
    coating: Key
    tint: Key | None = None
    faces: Literal["both", "back"] = "both"
    made: Literal["stock", "surfaced"] | None = None
    price: Number[Money | None] = None
    days: Number[Annotated[int, Field(ge=0, le=365)] | None] = None
    supplier_code: Line | None = None


def _one_or_two(value: object) -> str | None:
    shape = by_shape(value)
    return shape if shape in ("number", "pair") else None


_Size = Annotated[float, Field(gt=0, le=180)]
Size = Annotated[
    Annotated[Number[_Size], tagged("number")] | Annotated[tuple[Number[_Size], Number[_Size]], tagged("pair")],
    alternatives(_one_or_two, code="number-or-pair"),
]
_Luminance = Annotated[float, Field(ge=0, le=1e10)]


class Scene(Strict):
    """A light that may be mirrored and what stands round it; luminances are those without a lens.

    ``intensity_cd`` is one lamp's. ``distance_m`` and ``fixation_m`` left out mean very far away.
    """

    key: Key = IN_PLACE
    label: Line | None = None
    kind: Literal["small-source", "extended"]
    where: Literal["ahead", "behind"]
    intensity_cd: Number[Annotated[float, Field(gt=0, le=1e9)] | None] = None
    lamps: Number[Annotated[int, Field(ge=1, le=1000)]] = 1
    spacing_m: Number[Length | None] = None
    luminance_cd_m2: Number[Annotated[float, Field(gt=0, le=1e10)] | None] = None
    size_deg: Size | None = None
    distance_m: Number[Annotated[float, Field(ge=0.01, le=1e6)] | None] = None
    direction_deg: Number[_Direction | None] = None
    incidence_deg: Number[Annotated[float, Field(ge=0, le=89)] | None] = None
    fixation_m: Number[Annotated[float, Field(ge=0.01, le=1e6)] | None] = None
    background_cd_m2: Number[_Luminance]
    adapting_cd_m2: Number[_Luminance]
    adapting_field_deg: Number[Annotated[float, Field(gt=0, le=180)] | None] = None
    exposure_s: Number[Annotated[float, Field(gt=0, le=3600)] | None] = None
    illuminant: Literal["D65", "A", "LED-B4"] = "D65"
    tint_state: Literal["clear", "dark"] = "clear"

    @model_validator(mode="after")
    def _enough_to_compute(self) -> Self:
        small = self.kind == "small-source"
        needed = (self.intensity_cd, self.distance_m) if small else (self.luminance_cd_m2,)
        if self.size_deg is None or None in needed:
            raise refusal("small-source-needs" if small else "extended-source-needs")
        if self.lamps > 1 and self.spacing_m is None:
            raise refusal("lamps-need-spacing")
        return self
