"""The answer, ``twolight-comparison-1``: names that other programs may rely on.

A key whose part is not built is absent, never 0: dump with ``exclude_unset=True``. A figure that does not exist for
this lens (no separation for a light behind the wearer) is null. Reflectances and transmittances are fractions. Pairs by
meridian run from the more positive power to the other.
"""

from typing import Literal

from pydantic import Field

from advisor.counsel.lens_figures import EyeFigures, Faces, FormFigures, Part
from advisor.counsel.phrases import Figure

FORMAT: Literal["twolight-comparison-1"] = "twolight-comparison-1"


class Notice(Part):
    """A warning or reason: a code, its text in the language asked for, and the figures in the text."""

    code: str
    text: str
    figures: dict[str, Figure] = Field(default_factory=dict)


class Refusal(Part):
    """Why an option cannot be made or is not sold, and the nearest that can."""

    code: str
    text: str
    nearest: dict[str, Figure] | None = None


class ReflectanceLimit(Part):
    """The most each face may mirror, alike on both, so that the worst ghost stays below a visibility level.

    Judged on roads by night. Null where even a bare face keeps the level; ``reached_by`` are the coatings sold with
    which the worst ghost is not noticed, as designed.
    """

    not_noticed: float | None
    at_the_limit: float | None
    scene: str
    reached_by: list[str]


class OptionFigures(Part):
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


class WornFigures(Part):
    """The pair worn now, laid out beside the options and never one of them: not priced, not advised, not ordered.

    ``basis`` says how it is worked out and what is missing. The eyes hold figures of form alone where its coating is
    not known; where its material is not, they are absent and so is the way they would be worked out (null).
    """

    label: str
    design: str | None
    material: str | None
    coating: Faces | None
    prescription: Literal["own", "today"] | None
    fitting: Literal["own", "today"] | None
    basis: list[Notice]
    notes: list[Notice] = Field(default_factory=list)
    right: EyeFigures | FormFigures | None = None
    left: EyeFigures | FormFigures | None = None


class Caution(Part):
    """A caution that applies to this wearer: always deferring to local rules and licensed practice."""

    key: str
    text: str
    rule: str
    source: str
    figures: dict[str, Figure] = Field(default_factory=dict)
    options: list[int] = Field(default_factory=list, description="the options it applies to")


class AdvisedOption(Part):
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


class Excluded(Part):
    """A condition that an option laid out breaks, or why it cannot be made."""

    option: int
    code: str
    text: str
    figures: dict[str, Figure] = Field(default_factory=dict)
    source: str | None = None


class Priority(Part):
    """What the wearer's answers make count, and its middle weight."""

    key: str
    label: str
    weight: float


class Robustness(Part):
    """The share of the priority sets in which the advice holds, and what it turns on in the others."""

    code: Literal["holds", "mostly", "turns"]
    share: float
    turns_on: str | None = None


class Advice(Part):
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


class Comparison(Part):
    """The whole answer for one visit."""

    format: Literal["twolight-comparison-1"] = FORMAT
    twolight: str
    reference: str | None = None
    defaults_used: list[str]
    warnings: list[Notice]
    options: list[OptionFigures]
    worn_now: WornFigures | None = Field(default=None, description="absent where nothing of the worn pair is known")
    vertical_imbalance_prism_d: float | None = None
    advice: Advice | None = None
