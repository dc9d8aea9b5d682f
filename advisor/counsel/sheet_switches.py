"""Which lines of a wearer's sheet a shop may switch off. Whatever keeps the wearer safe is none of them.

The table names what may be left out; a line that stands in no table stays, so that a new caution cannot be lost.
"""

from collections.abc import Iterator, Mapping, Sequence

from advisor.counsel.care import CARE, CARE_TEXTS
from advisor.counsel.caution_texts import CAUTION_TEXTS
from advisor.counsel.faults import Fault, fault, nearest_name
from advisor.counsel.sheet_texts import LINES

PLACE = "shop.lines_off"
DRAWN = ("mirrors-against-bare", "mirrors-against-hard-coat", "mirrors-stated", "mirrors-uncoated")  # as bars, too
_KEPT_CARE = ("child-strap",)  # a strap round the neck can choke

# By the heading they stand under, in the order of the page.
SWITCHES: Mapping[str, tuple[str, ...]] = {
    "chosen": (
        "chosen-design", "chosen-lens", "chosen-coating", "chosen-coating-front", "chosen-coating-back", "chosen-tint",
        "chosen-price", "chosen-warranty", "chosen-by",
    ),
    "why": (
        *DRAWN, "passes", "second-image", "second-image-faint", "second-image-coated", "second-image-coated-faint",
        "may-not-see-second", "may-see-behind",
    ),
    "coating": ("coating-does", "coating-does-tinted", "coating-smears", "coating-none"),
    "first-days": ("first-wear", "first-size", "first-bigger", "first-smaller", "first-same"),
    "do": tuple(line.key for line in CARE if line.kind == "do" and line.key not in _KEPT_CARE),
    "dont": tuple(line.key for line in CARE if line.kind == "dont"),
    "come-back": ("back-date", "back-date-child", "back-fit"),
}  # fmt: skip
MAY_BE_OFF = tuple(key for keys in SWITCHES.values() for key in keys)
SWITCH_TEXTS: Mapping[str, str] = {key: (LINES | CARE_TEXTS)[key] for key in MAY_BE_OFF}
_KNOWN = frozenset({*LINES, *CARE_TEXTS, *CAUTION_TEXTS})


def switch_faults(keys: Sequence[str], *, file: str = "") -> Iterator[Fault]:
    """Find keys that name no line of the sheet, or one that cannot be switched off."""
    for place, key in enumerate(keys):
        field = f"{PLACE}[{place}]"
        if key in _KNOWN and key not in MAY_BE_OFF:
            yield fault("line-stays", file=file, field=field, figures={"key": key})
        elif key not in _KNOWN:
            nearest = nearest_name(key, names=MAY_BE_OFF)
            code = "unknown-line-near" if nearest else "unknown-line"
            yield fault(code, file=file, field=field, figures={"key": key, "nearest": nearest})
