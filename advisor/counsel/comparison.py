"""The answer, ``twolight-comparison-1``: names that other programs may rely on.

A key whose part is not built is absent, never 0: dump with ``exclude_unset=True``. A figure that does not exist for
this lens (no separation for a light behind the wearer) is null. Reflectances and transmittances are fractions. Pairs by
meridian run from the more positive power to the other.
"""

from typing import Literal

from pydantic import BaseModel, ConfigDict, Field

from advisor.counsel.phrases import Figure

FORMAT: Literal["twolight-comparison-1"] = "twolight-comparison-1"

Pair = tuple[float | None, float | None]
Spread = tuple[float, float, float]
Verdict = Literal["not noticed", "at the limit", "only if looked for", "noticeable", "plain"]
Path = Literal["ahead-inner", "behind-back", "behind-front", "cornea-back", "cornea-front"]


class _Part(BaseModel):
    model_config = ConfigDict(extra="forbid", allow_inf_nan=False, frozen=True)


class Notice(_Part):
    """A warning or reason: a code, its text in the language asked for, and the figures in the text."""

    code: str
    text: str
    figures: dict[str, Figure] = Field(default_factory=dict)


class Refusal(_Part):
    """Why an option cannot be made or is not sold, and the nearest that can."""

    code: str
    text: str
    nearest: dict[str, Figure] | None = None


class Faces(_Part):
    """Something named for each of the two faces."""

    front: str
    back: str


class AsMade(_Part):
    """The 5, 50 and 95 % points of the luminous reflectance as delivered; null for a face without layers."""

    front: Spread | None = None
    back: Spread | None = None
    first_pass_loss: Spread | None = None
    whole_lens: Spread | None = None


class LuminousReflectance(_Part):
    """Luminous reflectance under D65 near normal incidence, as designed."""

    front: float
    back: float
    first_pass_loss: float = Field(description="1 - (1 - front)(1 - back), the figure trade tables print")
    whole_lens: float = Field(description="all bounces, with the tint's absorption")
    as_made: AsMade = Field(default_factory=AsMade)
    estimated: bool = Field(default=False, description="true if a face is a supplier's declared figure")


class Uncoated(_Part):
    """The same lens without a film: bare, or hard coat only where the material is never sold without."""

    hard_coat_only: bool
    first_pass_loss: float
    whole_lens: float
    second_image: float = Field(description="strength of ahead-inner under D65")


class SecondImage(_Part):
    """How strong light mirrored twice inside the lens is against the light itself, under D65."""

    strength: float
    as_made: tuple[float, float] | None = Field(default=None, description="5 and 95 % points; null without layers")


class Colour(_Part):
    """Residual colour of a face: the hue word, a patch raised to a stated lightness, and the true chromaticity."""

    hue: str
    srgb: str
    xy: tuple[float, float]
    hue_at_45_deg: str | None = None
    as_made_hues: dict[str, float] | None = Field(default=None, description="share of faces as made by hue word")


class ResidualColour(_Part):
    """Residual colour of both faces."""

    front: Colour
    back: Colour


class Accommodated(_Part):
    """The same ghost when the eye focuses for it as far as it can."""

    defocus_d: Pair | None = None
    size_deg: Pair | None = None
    luminance_cd_m2: float | None = None
    threshold_cd_m2: float | None = None
    visibility_level: float | None = None
    verdict: Verdict | None = None


class Ghost(_Part):
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


class Place(_Part):
    """Where on the rim: degrees from the nose side by way of up, alike for both eyes, and a word."""

    angle_deg: float
    word: Literal["nose", "nose up", "up", "temple up", "temple", "temple down", "down", "nose down"]


class EyeFigures(_Part):
    """Every figure of one lens."""

    front_power_d: float | None = None
    back_power_d: Pair | None = None
    centre_mm: float | None = None
    edge_thickest_mm: float | None = None
    edge_thinnest_mm: float | None = None
    edge_thickest_at: Place | None = None
    edge_thinnest_at: Place | None = None
    weight_g: float | None = None
    blank_mm: float | None = None
    luminous_reflectance: LuminousReflectance
    second_image: SecondImage
    uncoated: Uncoated
    luminous_transmittance: float
    luminous_transmittance_dark: float | None = None
    residual_colour: ResidualColour
    observer_contrast: float | None = None
    colour_fringe_prism_d: float | None = None
    colour_fringe_rim_prism_d: float | None = Field(default=None, description="greatest along the rim")
    magnification_percent: float | None = None
    magnification_change_percent: float | None = Field(default=None, description="against the worn pair, if on file")
    smaller_frame: dict[str, float | None] | None = Field(
        default=None, description="the same lens in a smaller frame: by_mm, edge_thickest_mm, weight_g"
    )
    ghosts: list[Ghost] = Field(default_factory=list)


class ReflectanceLimit(_Part):
    """The most each face may mirror, alike on both, so that the worst ghost stays below a visibility level.

    Judged on roads by night. Null where even a bare face keeps the level; ``reached_by`` are the coatings sold with
    which the worst ghost is not noticed, as designed.
    """

    not_noticed: float | None
    at_the_limit: float | None
    scene: str
    reached_by: list[str]


class OptionFigures(_Part):
    """One option laid out; an option that cannot be made keeps its place and has no eyes."""

    index: int
    label: str
    design: str
    material: str
    coating: Faces
    tint: str | float | None = None
    price: float | None
    refused: list[Refusal] = Field(default_factory=list)
    notes: list[Notice] = Field(default_factory=list)
    reflectance_limit: ReflectanceLimit | None = None
    right: EyeFigures | None = None
    left: EyeFigures | None = None


class Caution(_Part):
    """A caution that applies to this wearer: always deferring to local rules and licensed practice."""

    key: str
    text: str
    rule: str
    source: str
    figures: dict[str, Figure] = Field(default_factory=dict)
    options: list[int] = Field(default_factory=list, description="the options it applies to")


class AdvisedOption(_Part):
    """A pair that advice names: by its index where it is laid out, else null, and always by what it is made of."""

    index: int | None
    label: str
    design: str
    material: str
    coating: Faces
    tint: str | float | None = None
    price: float | None
    figures: dict[str, float | None] = Field(
        default_factory=dict, description="what it is weighed by; price in about as many euros"
    )
    cautions: list[Caution] = Field(default_factory=list, description="that apply to this pair, laid out or not")
    because: list[Notice] | None = Field(default=None, description="gains against the recommended pair")
    gives_up: list[Notice] | None = Field(default=None, description="losses against the recommended pair")
    use: Literal["far", "near", "clear", "tinted"] | None = Field(default=None, description="of one of two pairs")
    text: str | None = None


class Excluded(_Part):
    """A condition that an option laid out breaks, or why it cannot be made."""

    option: int
    code: str
    text: str
    figures: dict[str, Figure] = Field(default_factory=dict)
    source: str | None = None


class Priority(_Part):
    """What the wearer's answers make count, and its middle weight."""

    key: str
    label: str
    weight: float


class Robustness(_Part):
    """The share of the priority sets in which the advice holds, and what it turns on in the others."""

    code: Literal["holds", "mostly", "turns"]
    share: float
    turns_on: str | None = None


class Advice(_Part):
    """Advice: the cheapest that meets every must, the recommended, the next best, or two pairs where one does not do.

    Where ``recommended`` is null, ``because`` holds the reason: ``no-single-option`` (then ``two_pairs``) or
    ``nothing-meets-every-must``. ``ranking`` holds the laid-out options that meet every must, by worth.
    """

    recommended: AdvisedOption | None = None
    next_best: AdvisedOption | None = None
    cheapest_that_meets_every_must: AdvisedOption | None = None
    ranking: list[int] | None = None
    excluded: list[Excluded] | None = None
    because: list[Notice] | None = None
    gives_up: list[Notice] | None = None
    would_change: list[Notice] | None = None
    robust: str | None = None
    robustness: Robustness | None = None
    free_first: list[Notice] | None = Field(default=None, description="remedies that cost nothing, before any lens")
    two_pairs: list[AdvisedOption] | None = None
    priorities: list[Priority] | None = None
    cautions: list[Caution] = Field(default_factory=list)
    greatest_reflectance_per_surface: float | None = None


class Comparison(_Part):
    """The whole answer for one visit."""

    format: Literal["twolight-comparison-1"] = FORMAT
    twolight: str
    reference: str | None = None
    defaults_used: list[str]
    warnings: list[Notice]
    options: list[OptionFigures]
    vertical_imbalance_prism_d: float | None = None
    advice: Advice | None = None
