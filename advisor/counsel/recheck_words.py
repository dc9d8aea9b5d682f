"""The wearer's words: which complaints, and which signs for an eye doctor, are heard in them.

English, because it is the optician who types them. A sign is heard rather once too often: what was denied in the same
breath ("no pain") is left out first, nothing else is weighed.
"""

import re
from dataclasses import dataclass

from advisor.counsel.recheck_texts import COMPLAINTS

MOST_LETTERS = 500
_DENIED = re.compile(r"\b(?:no|not|without|never any|isn't|don't have|do not have)\s+(?:any\s+)?(?:new\s+)?\w+")
_LIGHT = r"(?:light|lamp|headl\w+|head lamp|image|moon|tail ?light)s?"

COMPLAINT_WORDS: dict[str, tuple[str, ...]] = {
    "edge-rings": (r"rings?\b.*\b(?:edge|rim|side of (?:the|my) lens)", r"(?:edge|rim)\b.*\brings?"),
    "rings": (r"\b(?:rings?|halos?|haloes|rainbows?)\b",),
    "second-light": (
        rf"\b(?:second|double|two|twin|ghost|extra)\s+(?:\w+\s+)?{_LIGHT}\b",
        r"\bghost|double vision|(?:see|seeing) (?:everything )?double|two of everything",
    ),
    "behind": (
        r"\bmy (?:own )?eyes? (?:in|mirrored)|\bown eyes?\b|\blash(?:es)?\b",
        r"behind me|from behind|window behind|reflections? (?:inside|in my)",
    ),
    "glare": (r"\b(?:glare|dazzl\w+)\b",),
    "fringes": (r"\b(?:fringes?|colou?red edges?|colou?rs? round)\b",),
    "smears": (r"never clean|\b(?:smear\w*|smudg\w*|fog\w*|mist\w*|scratch\w*|greasy|dirty)\b",),
    "crazed": (r"\b(?:craz\w+|peel\w*|flak\w+|cracks?|cracked)\b",),
    "colours-differ": (
        r"(?:different|differ\w*|not the same|unlike|two) (?:in )?colou?rs?|colou?rs? (?:are )?(?:different|differ)",
        r"(?:one|lens) (?:is )?(?:greener|bluer|brighter)",
    ),
    "not-right": (
        r"slop\w+|swim\w*|\b(?:bigger|smaller|larger) than|everything (?:is |looks )?(?:bigger|smaller|larger)",
        r"\bheadaches?\b|\bdizz\w+|old (?:ones|pair|glasses) (?:were|was|are|is) better",
        r"straight ahead|one eye (?:is )?clearer|not used to",
    ),
    "near": (r"\b(?:read|reading|chin|computer|screen|monitor)\b", r"jump when|line when|look down"),
    "fit": (r"\b(?:slid\w*|slip\w*|pinch\w*|loose|ears?|nose|skin|heavy)\b",),
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
}

_DOUBLE = r"(?:\bdouble\b|two of everything)"
_PAIN = r"(?:pain\w*|hurt\w*|ach(?:e|es|ing)|sore|sick\w*|nause\w*|vomit\w*)"
SIGN_WORDS: dict[str, tuple[str, ...]] = {
    "today-loss": (
        r"(?:sudden\w*|lost|loss of)\b.*\b(?:sight|blind|vision gone|cannot see|can't see)|\bcurtain\b|\bshadow\b",
    ),
    "today-flashes": (r"\b(?:flash\w*|floaters?|floating spots?)\b",),
    "today-double": (r"\b(?:sudden\w*|overnight|since (?:yesterday|today|this morning))\b", _DOUBLE),
    "today-red": (rf"\beyes?\b.*\b{_PAIN}|\b(?:painful|sore|aching|red)\b.*\beyes?\b",),
    "today-rings": (r"\b(?:rings?|halos?|haloes)\b", rf"\b{_PAIN}"),
    "today-headache": (r"\bheadaches?\b", r"\b(?:scalp|jaw|temples?)\b"),
    "today-splash": (r"\b(?:splash\w*|chemical\w*|bleach in|acid|blow to|hit in|punch\w*)\b",),
    "today-bent": (r"lines?\b.*\b(?:bent|wavy|crooked|broken)|\b(?:bent|wavy|crooked) (?:straight )?lines?",),
    "soon-glare": (r"\b(?:glare|dazzl\w+)\b", r"\b(?:new\w*|worse\w*|grow\w*|lately|recent\w*|more and more)\b"),
}


@dataclass(frozen=True)
class Heard:
    """What is heard in the wearer's words, complaints and signs by key."""

    complaints: tuple[str, ...]
    signs: tuple[str, ...]


def hear(says: str) -> Heard:
    """Return the complaints and signs in some words; a complaint's own key is taken as it stands."""
    text = " ".join(says.lower().replace("\N{RIGHT SINGLE QUOTATION MARK}", "'").split())[:MOST_LETTERS]
    if text in COMPLAINTS:
        return Heard((text,), ("soon-rings",) if text == "rings" else ())
    found = [key for key in COMPLAINTS if any(re.search(part, text) for part in COMPLAINT_WORDS[key])]
    unsaid = {other for key in found for other in _RATHER.get(key, ())}
    complaints = tuple(key for key in found if key not in unsaid)
    said = _DENIED.sub(" ", text)
    signs = [key for key, parts in SIGN_WORDS.items() if all(re.search(part, said) for part in parts)]
    if "rings" in complaints and "today-rings" not in signs:
        signs.append("soon-rings")
    return Heard(complaints, tuple(signs))
