"""Care of the lenses: what sources agree on, in the order that matters for this wearer.

The advice is what manufacturers' and professional bodies' care pages agree on (common practice, no single source).
Where they conflict (hot water, alcohol, dish soap) the sheet says "only a cleaner your optician supplies".
"""

from collections.abc import Mapping
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
    CareLine("soap", "do", mark("Add one drop of mild liquid soap with no cream in it. Then rinse again.")),
    CareLine("soft-cloth", "do", mark("Dry them with a clean soft cloth.")),
    CareLine("wash-cloth", "do", mark("Wash the cloth often. Use no softener.")),
    CareLine("own-cleaner", "do", mark("For a spray or wipe, use only a cleaner your optician supplies.")),
    CareLine(
        "put-down",
        "do",
        mark("Put them down with the lenses up. Use both hands to take them off. Keep them in the case."),
        ("child",),
    ),
    CareLine(
        "salt-sand",
        "do",
        mark("After the sea or the beach, rinse off salt and sand with tap water."),
        ("water_salt_chlorine",),
        ("water_salt_chlorine",),
    ),
    CareLine("dry-wipe", "dont", mark("Do not wipe a dry, dusty lens. Dust scratches."), ("dust",)),
    CareLine("paper-shirt", "dont", mark("Do not wipe them with paper or a shirt. That scratches too.")),
    CareLine(
        "aerosol",
        "dont",
        mark("Keep hair spray, perfume and other sprays off them. Take the glasses off first."),
        ("sprays_solvents",),
    ),
    CareLine(
        "harsh-cleaners",
        "dont",
        mark("Do not use window cleaner, vinegar, bleach, ammonia or nail polish remover."),
        ("sprays_solvents",),
    ),
    CareLine(
        "heat",
        "dont",
        mark("Keep them out of the sauna, the hot car, and the heat of an oven or grill."),
        ("heat_steam",),
    ),
    CareLine("skin-products", "dont", mark("Keep insect spray, sun cream, alcohol wipes and glue off them."), ("sun",)),
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
        mark("For a small child, use a soft strap behind the head, never round the neck. Take it off for sleep."),
        ("child",),
        ("child",),
    ),
)


def care_lines(answers: Mapping[str, str], *, kind: Literal["do", "dont"]) -> list[Phrase]:
    """Return the lines of one kind: what this life meets often comes first, then what it meets at times, then the rest.

    The steps of cleaning (rinse, soap, dry) always keep their order.
    """
    chosen = [line for line in CARE if line.kind == kind and (not line.only_for or _most(answers, line.only_for))]
    chosen.sort(key=lambda line: -_most(answers, line.first_for))
    return [Phrase(line.key) for line in chosen]


def _most(answers: Mapping[str, str], questions: tuple[str, ...]) -> int:
    """Return how strongly any of the questions was answered: 2 for often or yes, 1 for sometimes, else 0."""
    return max((STRENGTH.get(answers.get(question, ""), 0) for question in questions), default=0)


STRENGTH = {"often": 2, "yes": 2, "sometimes": 1}
CARE_TEXTS = {line.key: line.text for line in CARE}
