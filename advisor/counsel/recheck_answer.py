"""The answer to a return visit, ``twolight-recheck-1``, and the outcome that is recorded beside the visit."""

import datetime as dt
from typing import Annotated, Literal

from pydantic import BaseModel, ConfigDict, Field

from advisor.counsel.comparison import Notice
from advisor.counsel.fields import Date, Key, Line, Paragraph, Strict
from advisor.counsel.measured import Measured

FORMAT: Literal["twolight-recheck-1"] = "twolight-recheck-1"

Refer = Literal["today", "soon", "refer"]
Offer = Literal["nothing", "after-asking", "remake-as-ordered", "open"]
Level = Literal["likely", "possible", "unlikely", "not worked out"]
Outcome = Literal["adjust", "clean", "remake", "refer", "none"]
Payer = Literal["nobody", "shop", "maker", "wearer"]
OUTCOMES_TODAY: tuple[Outcome, ...] = ("refer", "none")  # all that may be recorded of a return that is for today
SignAnswer = Literal["yes", "no", "heard", "not-asked"]


class _Part(BaseModel):
    model_config = ConfigDict(extra="forbid", allow_inf_nan=False, frozen=True)


class Sign(_Part):
    """A sign for an eye doctor; ``heard`` was in the wearer's own words."""

    key: str
    when: Literal["today", "soon"]
    text: str
    answer: SignAnswer


class Finding(_Part):
    """One measured figure against the ordered one; ``within`` is null where no tolerance is stated."""

    eye: Literal["right", "left", "both"]
    figure: str
    label: str
    unit: str
    ordered: float
    measured: float
    off: float
    tolerance: float | None
    within: bool | None


class AsMade(_Part):
    """The glasses as measured against the order; the tolerances' source is always named."""

    tolerances: Literal["iso", "ansi"]
    source: str
    findings: list[Finding] = Field(default_factory=list)


class Test(_Part):
    """A quick test and what was answered; null where it was not done."""

    __test__ = False  # pytest would take the name for a test class
    key: str
    text: str
    answer: Literal["yes", "no"] | None


class Change(_Part):
    """A figure before and after a remedy, with its words where the figure is a step of a scale."""

    figure: str
    label: str
    unit: str
    before: float
    after: float
    before_text: str
    after_text: str


class Remedy(_Part):
    """What may help, in figures of this very lens; ``price`` is of the pair it would be."""

    key: str
    outcome: Outcome
    text: str
    figures: list[Change] = Field(default_factory=list)
    price: float | None = None


class Cause(_Part):
    """What may lie behind the words: as worked out, as the quick tests told, and why."""

    key: str
    kind: Literal["lens", "made", "eye", "surroundings", "use", "fit"]
    text: str
    level: Level
    told: Literal["for", "against"] | None
    why: list[Notice]
    remedies: list[Remedy] = Field(default_factory=list)


class Named(_Part):
    """A key with its text."""

    key: str
    text: str


class RecheckAnswer(_Part):
    """The whole answer for one return visit."""

    format: Literal["twolight-recheck-1"] = FORMAT
    twolight: str
    reference: str | None = None
    option: int | None = Field(
        description="the lens on file, as an option of the visit counted from 0; null where a sign is there and it "
        "cannot be worked out"
    )
    lens: str
    says: str
    complaints: list[Named]
    refer: Refer | None
    urgent_help: str | None = Field(description="the region's wording, where it is for today")
    offer: Offer
    signs: list[Sign]
    as_made: AsMade
    tests: list[Test]
    causes: list[Cause]
    ruled_out: list[Cause]
    notes: list[Notice]


class RecheckRecord(Strict):
    """What came of a return visit, as it is kept beside the visit."""

    format: Literal["twolight-recheck-record-1"] = "twolight-recheck-record-1"
    date: Date = None
    says: Line
    outcome: Outcome
    who_pays: Payer = "nobody"
    new_reference: Line | None = None
    cause: Key | None = None
    remedy: Key | None = None
    note: Paragraph | None = None
    answers: Annotated[dict[Key, Literal["yes", "no"]], Field(max_length=60)] = Field(default_factory=dict)
    measured: Measured | None = None
    option: Annotated[int, Field(ge=0, le=99)] | None = None

    def dated(self, day: dt.date) -> "RecheckRecord":
        """Return the record with a date where it has none."""
        return self if self.date else self.model_copy(update={"date": day})
