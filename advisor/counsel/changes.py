"""What is new against the pair worn now, for the first days: power, axis, and the size of what is seen."""

from collections.abc import Iterator

from advisor.counsel.case import Case
from advisor.counsel.cautions import LARGE_TURN_DEG, power_change
from advisor.counsel.phrases import Phrase

POWER_FROM_D = 0.5  # common practice, no source
SIZE_FROM_PERCENT = 1.0  # about the least difference of size people speak of (textbook, from memory)


def changes_from_worn(case: Case, *, size_percent: float | None) -> Iterator[Phrase]:
    """Yield what has changed since the worn pair, or that little has; nothing where its prescription is unknown.

    ``size_percent`` is the comparison's change of size against the worn pair, None where that is not known.
    """
    changed = power_change(case)
    if changed is None:
        return
    found = []
    if changed[0] >= POWER_FROM_D:
        found.append(Phrase("first-power"))
    if changed[1] >= LARGE_TURN_DEG:
        found.append(Phrase("first-axis"))
    if size_percent is not None and abs(size_percent) >= SIZE_FROM_PERCENT:
        found.append(
            Phrase("first-bigger" if size_percent > 0.0 else "first-smaller", {"size_percent": abs(size_percent)})
        )
    yield from found or [Phrase("first-same")]
