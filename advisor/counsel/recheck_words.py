"""The wearer's words: which complaints, and which signs for an eye doctor, are heard in them.

In English they are read freely; in the reader's own language as the list of complaints words them. Several complaints
may be heard at once.
"""

import re
from dataclasses import dataclass

from advisor.counsel.phrases import Translator
from advisor.counsel.recheck_sign_words import DOUBLE, LIGHT, signs_in
from advisor.counsel.recheck_texts import COMPLAINTS

MOST_LETTERS = 1000
COMPLAINT_WORDS: dict[str, tuple[str, ...]] = {
    "edge-rings": (r"rings?\b.*\b(?:edge|rim|side of (?:the|my) lens)", r"(?:edge|rim)\b.*\brings?"),
    "rings": (r"\b(?:rings?|halos?|haloes|rainbows?)\b",),
    "second-light": (
        rf"\b(?:second|double|two|twin|ghost|extra|shadow)\s+(?:\w+\s+)?{LIGHT}\b",
        rf"\bghost|double vision|\b(?:see|seeing|seen|saw)\b(?: everything)? {DOUBLE}|two of everything",
    ),
    "behind": (
        r"\bmy (?:own )?eyes? (?:in|mirrored)|\bown eyes?\b|\blash(?:es)?\b",
        r"behind me|from behind|window behind|reflections? (?:inside|in my)",
    ),
    "glare": (
        r"\b(?:glare|dazzl\w+|starbursts?|blinded)\b",
        r"(?:can't|cannot|can not|able to|afraid to|hard to|no longer|not) drive (?:at|by|in the) (?:night|dark)",
        r"\blights?\b(?: \w+){0,2} (?:hurts?|blinds?|bothers?) (?:my|the|both) eyes?",
    ),
    "fringes": (r"\b(?:fringes?|colou?red edges?|colou?rs? round)\b",),
    "smears": (r"never clean|\b(?:smear\w*|smudg\w*|fog\w*|mist\w*|scratch\w*|greasy|dirty)\b",),
    "crazed": (r"\b(?:craz\w+|peel\w*|flak\w+|cracks?|cracked)\b",),
    "colours-differ": (
        r"(?:different|differ\w*|not the same|unlike|two) (?:in )?colou?rs?|colou?rs? (?:are )?(?:different|differ)",
        r"(?:one|lens) (?:is )?(?:greener|bluer|brighter)",
    ),
    "not-right": (
        r"slop\w+|swim\w*|\b(?:bigger|smaller|larger) than|everything (?:is |looks )?(?:bigger|smaller|larger)",
        r"\bheadaches?\b|\bhead (?:hurts|aches)|\bdizz\w+|old (?:ones|pair|glasses) (?:were|was|are|is) better",
        r"straight ahead|one eye (?:is )?clearer|not used to",
        r"\bblur\w*|\bout of focus|\bunclear",
        r"\b(?:not|isn't|aren't|never) (?:very |quite |really )?(?:clear|sharp|in focus)\b",
    ),
    "steps": (
        r"\b(?:trip|trips|tripp\w+|stumbl\w+)\b|\b(?:stairs?|steps|kerbs?|curbs?)\b|\b(?:miss\w*|on|down) a step\b",
    ),
    "near-double": (
        rf"{DOUBLE}.*\b(?:read\w*|close up|near things|near work|book|screen|computer|phone)\b",
        rf"\b(?:read\w*|close up|near things|near work|book|screen|computer|phone)\b.*{DOUBLE}",
    ),
    "near": (r"\b(?:read|reading|chin|computer|screen|monitor)\b", r"jump when|line when|look down"),
    "fit": (
        r"\b(?:slid\w*|slip\w*|pinch\w*|loose|ears?|nose|skin|heavy)\b",
        r"\b(?:fell|fall\w*|came|come|comes|pop\w*|drop\w*|punched) out\b|\bpress\w*\b",
    ),
    "dark-mirror": (r"(?:dark|sun\w*|tint\w*) ?(?:glasses|lenses)?.*\b(?:mirrors?|reflect\w*|my face)\b",),
    "black-screens": (r"(?:screens?|dash\w*|phones?|displays?)\b.*\b(?:black|dark|blank)",),
    "not-dark": (r"(?:not?|don't|doesn't|never) (?:go|get|turn|goes|gets)? ?dark|stays? clear in",),
    "yellow": (r"\byellow\w*",),
}
# Words for one complaint that are not another: what the first holds, the second is not read from.
_RATHER: dict[str, tuple[str, ...]] = {
    "edge-rings": ("rings",),
    "black-screens": ("near",),
    "dark-mirror": ("behind",),
    "near": ("not-right",),
    "near-double": ("near", "second-light", "not-right"),
}


@dataclass(frozen=True)
class Heard:
    """What is heard in the wearer's words, complaints and signs by key."""

    complaints: tuple[str, ...]
    signs: tuple[str, ...]


def hear(says: str, translator: Translator | None = None) -> Heard:
    """Return the complaints and signs in some words; a complaint's own key or its text is taken as it stands."""
    text = " ".join(says.lower().replace("\N{RIGHT SINGLE QUOTATION MARK}", "'").split())[:MOST_LETTERS]
    if text in COMPLAINTS:
        return Heard((text,), ("soon-rings",) if text == "rings" else ())
    for key, complaint in COMPLAINTS.items():
        if translator is not None and text == translator.gettext(complaint).lower():
            return hear(key)
    found = [key for key in COMPLAINTS if any(re.search(part, text) for part in COMPLAINT_WORDS[key])]
    unsaid = {other for key in found for other in _RATHER.get(key, ())}
    complaints = tuple(key for key in found if key not in unsaid)
    signs = signs_in(text)
    if "rings" in complaints and "today-rings" not in signs:
        signs.append("soon-rings")
    return Heard(complaints, tuple(signs))
