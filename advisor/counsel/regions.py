"""What differs by region: paper, the emergency wording. Local rules always come before anything said here.

The keys are the words a range file may give as ``shop.region``; the range file refuses any other.
"""

from dataclasses import dataclass
from typing import Literal

from advisor.counsel.phrases import mark


@dataclass(frozen=True)
class Region:
    """One region's paper and the words for urgent help."""

    key: str
    paper: Literal["A4", "Letter"]
    urgent_help: str


REGIONS: dict[str, Region] = {
    "international": Region(
        "international", "A4", mark("Call an eye doctor. In an emergency, call your local emergency number.")
    ),
    "eu": Region("eu", "A4", mark("Call an eye doctor. In an emergency, call 112.")),
    "uk": Region("uk", "A4", mark("Call your optician or 111. In an emergency, call 999 or 112.")),
    "us": Region("us", "Letter", mark("Call an eye doctor. In an emergency, call 911.")),
}


def region_of(key: str | None) -> Region:
    """Return the region of a key; none or an unknown one is international."""
    return REGIONS.get(key or "", REGIONS["international"])


def paper_of(own: str | None, *, region: str | None) -> Literal["A4", "Letter"]:
    """Return the size of paper: the shop's own choice (A4 or letter), else what the region's printers hold."""
    if own is None:
        return region_of(region).paper
    return "Letter" if own == "letter" else "A4"
