"""The wearer's words: which complaints, and which signs for an eye doctor, are heard in them.

Complaints are heard in English, in the language of the screen and in the wearer's own; signs in every language there is
an ear for, since a sign is heard rather once too often than not at all. Several complaints may be heard at once.
"""

import re
from collections.abc import Iterable
from dataclasses import dataclass

from advisor.counsel.phrases import Translator
from advisor.counsel.recheck_ear import ears, folded, without_denied
from advisor.counsel.recheck_sign_words import DOUBLE, LIGHT, SIGN_WORDS, signs_in
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


def hear(says: str, translator: Translator | None = None, *, languages: Iterable[str | None] = ()) -> Heard:
    """Return the complaints and signs in some words; a complaint's own key or its text is taken as it stands.

    ``languages`` are those that complaints are heard in beside English and the translator's.
    """
    text = folded(says[:MOST_LETTERS])
    if text in COMPLAINTS:
        return Heard((text,), ("soon-rings",) if text == "rings" else ())
    for key, complaint in COMPLAINTS.items():
        if translator is not None and text == folded(translator.gettext(complaint)):
            return hear(key)
    spoken = {*languages, None if translator is None else translator.language}
    heard = {key for key in COMPLAINTS if any(re.search(part, text) for part in COMPLAINT_WORDS[key])}
    heard |= {key for code, ear in ears().items() if code in spoken for key in ear.complaints_in(text)}
    unsaid = {other for key in heard for other in _RATHER.get(key, ())}
    complaints = tuple(key for key in COMPLAINTS if key in heard - unsaid)
    return Heard(complaints, tuple(_signs(text, complaints)))


def _signs(text: str, complaints: Iterable[str]) -> list[str]:
    """Return the signs in words, in the order of their list, and rings as one for soon where nothing makes it today."""
    said = without_denied(text)
    heard = set(signs_in(text)) & set(signs_in(said))  # a word that two languages share may be denied in the other
    heard = heard.union(*(ear.signs_in(said) for ear in ears().values()))
    signs = [key for key in SIGN_WORDS if key in heard]
    return [*signs, "soon-rings"] if "rings" in complaints and "today-rings" not in signs else signs
