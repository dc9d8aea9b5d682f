"""Care of the lenses: what sources agree on, in the order that matters for this wearer.

The advice is what manufacturers' and professional bodies' care pages agree on (common practice, no single source).
Where they conflict (hot water, alcohol, dish soap) the sheet says "only a cleaner your optician supplies".
"""

from collections.abc import Iterable
from dataclasses import dataclass
from typing import Literal

from advisor.counsel.phrases import Phrase, mark


@dataclass(frozen=True)
class CareLine:
    """One line of care: a thing to do or not to do, and the answers that bring it to the front."""

    key: str
    kind: Literal["do", "dont"]
    text: str
    first_for: tuple[str, ...] = ()
    only_for: tuple[str, ...] = ()


CARE: tuple[CareLine, ...] = (
    CareLine("rinse-first", "do", mark("Rinse the lenses with lukewarm water before you wipe them.")),
    CareLine("soap", "do", mark("Add one drop of mild liquid soap without hand cream. Then rinse again.")),
    CareLine("soft-cloth", "do", mark("Dry them with a clean soft cloth.")),
    CareLine("wash-cloth", "do", mark("Wash the cloth often. Use no softener.")),
    CareLine("own-cleaner", "do", mark("For a spray or wipe, use only a cleaner your optician supplies.")),
    CareLine(
        "put-down",
        "do",
        mark("Put them down with the lenses up. Use both hands to take them off. Keep them in the case."),
    ),
    CareLine(
        "salt-sand",
        "do",
        mark("After the sea or the beach, rinse off salt and sand with tap water."),
        only_for=("water_salt_chlorine",),
    ),
    CareLine("dry-wipe", "dont", mark("Do not wipe a dry, dusty lens. Dust scratches."), ("dust",)),
    CareLine("paper-shirt", "dont", mark("No paper and no shirt. They scratch too.")),
    CareLine(
        "aerosol",
        "dont",
        mark("No hair spray, perfume or other spray on the lenses. Take the glasses off first."),
        ("sprays_solvents",),
    ),
    CareLine(
        "harsh-cleaners",
        "dont",
        mark("No window cleaner, vinegar, bleach, ammonia or nail polish remover."),
        ("sprays_solvents",),
    ),
    CareLine(
        "heat",
        "dont",
        mark("Keep them out of the sauna, the hot car, and the heat of an oven or grill."),
        ("heat_steam",),
    ),
    CareLine(
        "skin-products", "dont", mark("Keep insect spray, sun cream, alcohol wipes and glue off the lenses."), ("sun",)
    ),
    CareLine(
        "pool",
        "dont",
        mark("Do not wear them in the pool. Chlorine harms the coating."),
        ("water_salt_chlorine",),
        ("water_salt_chlorine",),
    ),
    CareLine(
        "child-strap",
        "do",
        mark("For a small child: a soft strap behind the head, never round the neck. Take it off for sleep."),
        only_for=("child",),
    ),
)


def care_lines(answered: Iterable[str], *, kind: Literal["do", "dont"]) -> list[Phrase]:
    """Return the lines of one kind: those that an answer brings to the front come first, else the order of the list.

    The steps of cleaning (rinse, soap, dry) always keep their order.
    """
    yes = set(answered)
    chosen = [line for line in CARE if line.kind == kind and (not line.only_for or yes & set(line.only_for))]
    chosen.sort(key=lambda line: not (yes & set(line.first_for)))
    return [Phrase(line.key) for line in chosen]


CARE_TEXTS = {line.key: line.text for line in CARE}
