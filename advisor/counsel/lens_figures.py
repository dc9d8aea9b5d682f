"""Every figure of one lens as the answer holds it: its form, and what it does with light."""

from typing import Literal, Protocol

from pydantic import BaseModel, ConfigDict, Field

Pair = tuple[float | None, float | None]
Spread = tuple[float, float, float]
Verdict = Literal["not noticed", "at the limit", "only if looked for", "noticeable", "plain"]
Path = Literal["ahead-inner", "behind-back", "behind-front", "cornea-back", "cornea-front"]


class Part(BaseModel):
    """A part of the answer: nothing but what is named here, and no figure that is not finite."""

    model_config = ConfigDict(extra="forbid", allow_inf_nan=False, frozen=True)


class Faces(Part):
    """Something named for each of the two faces."""

    front: str
    back: str


class AsMade(Part):
    """The 5, 50 and 95 % points of the luminous reflectance as delivered; null for a face without layers."""

    front: Spread | None = None
    back: Spread | None = None
    first_pass_loss: Spread | None = None
    whole_lens: Spread | None = None


class LuminousReflectance(Part):
    """Luminous reflectance under D65 near normal incidence, as designed."""

    front: float
    back: float
    first_pass_loss: float = Field(description="1 - (1 - front)(1 - back), the figure trade tables print")
    whole_lens: float = Field(description="all bounces, with the tint's absorption")
    as_made: AsMade = Field(default_factory=AsMade)
    estimated: bool = Field(default=False, description="true if a face is a supplier's declared figure")


class Uncoated(Part):
    """The same lens without a film: bare, or hard coat only where the material is never sold without."""

    hard_coat_only: bool
    first_pass_loss: float
    whole_lens: float
    second_image: float = Field(description="strength of ahead-inner under D65")


class SecondImage(Part):
    """How strong light mirrored twice inside the lens is against the light itself, under D65."""

    strength: float
    as_made: tuple[float, float] | None = Field(default=None, description="5 and 95 % points; null without layers")


class Colour(Part):
    """Residual colour of a face: the hue word, a patch raised to a stated lightness, and the true chromaticity."""

    hue: str
    srgb: str
    xy: tuple[float, float]
    hue_at_45_deg: str | None = None
    as_made_hues: dict[str, float] | None = Field(default=None, description="share of faces as made by hue word")


class ResidualColour(Part):
    """Residual colour of both faces."""

    front: Colour
    back: Colour


class Accommodated(Part):
    """The same ghost when the eye focuses for it as far as it can."""

    defocus_d: Pair | None = None
    size_deg: Pair | None = None
    luminance_cd_m2: float | None = None
    threshold_cd_m2: float | None = None
    visibility_level: float | None = None
    verdict: Verdict | None = None


class Ghost(Part):
    """One ghost image: one path in one scene."""

    path: Path
    scene: str
    strength: float = Field(description="relative to direct light for ahead and cornea paths, else of the light behind")
    strength_range: tuple[float, float] | None = Field(
        default=None, description="over the built-in shapes, if estimated"
    )
    vergence_d: Pair | None = Field(default=None, description="at the back vertex")
    defocus_d: Pair | None = Field(default=None, description="at the pupil, relaxed")
    pupil_mm: float | None = None
    size_deg: Pair | None = None
    separation_deg: float | None = Field(default=None, description="a length; null for light from behind")
    spread: bool | None = Field(default=None, description="spread over the lens: there is no place to state")
    luminance_cd_m2: float | None = None
    background_cd_m2: float | None = None
    threshold_cd_m2: float | None = None
    visibility_level: float | None = None
    contrast: float | None = None
    verdict: Verdict | None = None
    verdict_range: tuple[Verdict, Verdict] | None = None
    haze: bool | None = None
    past_range: bool | None = Field(default=None, description="outside the luminances the threshold was measured for")
    accommodated: Accommodated | None = None


class Place(Part):
    """Where on the rim: degrees from the nose side by way of up, alike for both eyes, and a word."""

    angle_deg: float
    word: Literal["nose", "nose up", "up", "temple up", "temple", "temple down", "down", "nose down"]


class FormFigures(Part):
    """The figures of form and weight of one lens; all that is known of one whose coating is not."""

    front_power_d: float | None = None
    back_power_d: Pair | None = None
    centre_mm: float | None = None
    edge_thickest_mm: float | None = None
    edge_thinnest_mm: float | None = None
    edge_thickest_at: Place | None = None
    edge_thinnest_at: Place | None = None
    weight_g: float | None = None
    blank_mm: float | None = None
    colour_fringe_prism_d: float | None = None
    colour_fringe_rim_prism_d: float | None = Field(default=None, description="greatest along the rim")
    magnification_percent: float | None = None
    magnification_change_percent: float | None = Field(default=None, description="against the worn pair, if on file")
    smaller_frame: dict[str, float | None] | None = Field(
        default=None, description="the same lens in a smaller frame: by_mm, edge_thickest_mm, weight_g"
    )


class EyeFigures(FormFigures):
    """Every figure of one lens."""

    luminous_reflectance: LuminousReflectance
    second_image: SecondImage
    uncoated: Uncoated
    luminous_transmittance: float
    luminous_transmittance_dark: float | None = None
    residual_colour: ResidualColour
    observer_contrast: float | None = None
    ghosts: list[Ghost] = Field(default_factory=list)


class LensPair(Protocol):
    """A pair of lenses with what is known of each: an option, or the pair worn now."""

    @property
    def right(self) -> FormFigures | None:
        """The lens before the right eye."""

    @property
    def left(self) -> FormFigures | None:
        """The lens before the left eye."""
