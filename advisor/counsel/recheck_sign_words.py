"""The signs for an eye doctor as wearers say them, in any order of words.

A sign is heard rather once too often than not at all: an explicit "no" of the wearer is what takes it back. What is
denied in the same breath ("no pain") is left out first; "no sight" and "not see" deny nothing, they are the sign.
"""

import re
from collections.abc import Mapping

_KEPT = r"(?!sight\b|eyesight\b|vision\b|see\w*\b|have\b|able\b|get\b)"
_DENIED = re.compile(
    r"\b(?:no|not|without|never any|isn't|don't have|do not have)\s+(?:(?:any|new|sudden|more)\s+)*+"
    rf"{_KEPT}\w+(?:\s+(?:or|nor)\s+{_KEPT}\w+)*"
)

LIGHT = r"(?:light|lamp|headl\w+|head lamp|image|moon|tail ?light)s?"
DOUBLE = rf"(?:\bdouble\b(?!\s+(?:\w+\s+)?{LIGHT}\b)|two of everything)"

_SIGHT = r"\b(?:eye)?(?:sight|(?<!double )vision)\b"
_EYE = r"(?<!own )\beyes?\b"
_IN_EYE = r"\b(?:in|into|to|on|by|at|near) (?:(?:my|the|one|both|his|her|their|an|each) )?(?:(?:left|right) )?eyes?\b"
_SUDDEN = r"\b(?:sudden\w*|overnight|all at once|out of nowhere)\b"
_WENT = r"(?:went(?! (?:a (?:bit|little) )?(?:blur|fuzz|haz))|gone|vanish|disappear|black|dark|grey|gray)"
_CANNOT_SEE = r"(?:can't|cannot|can not|couldn't|could not|unable to|not able to|no longer|not) see\b"
_VEIL = r"\b(?:curtain|veil|shadow(?! images?\b)|shutter)\b"
_WORN = r"(?:glasses|lens(?:es)?|pair|frames?|specs|spectacles|ones|prescription|\w*focals?|progressives?|readers)"
_DAY = r"(?:yesterday|today|this morning|last night|this week|mon|tues|wednes|thurs|fri|satur|sun)"
_BEGUN = (
    rf"(?:{_SUDDEN}|\bnew(?:ly)?\b(?!\s+{_WORN}\b)|\b(?:start\w*|began|begun|came on)\b"
    rf"|\blast night\b|\bsince (?:\w+ )?{_DAY}|\b(?:yesterday|today|this morning)\b|\bdroop\w*)"
)
_PAIN = r"(?:pain\w*|hurt\w*|ach(?:e|es|ing)|sore|sick\w*|nause\w*|vomit\w*)"
_BENT = r"\b(?:bent|bend|wavy|waves|crooked|broken|kinked|distorted)\b"
_LINE = r"\b(?:lines?|(?:door|window) ?frames?|edges of (?:doors?|walls?))\b"
_SORE_TEMPLE = (
    r"(?:\b(?:sore|tender|pain\w*|throb\w*|aching)\b(?: \w+){0,2} temples?\b"
    r"|\btemples?\b(?: \w+){0,2} (?:sore|tender|painful|throb\w*))"
)
_SPOTS = r"(?:spots?|dots?|specks?|threads?)"
_STUFF = (
    r"\b(?:splash\w*|chemical\w*|bleach|acid|clean\w*|solvent|detergent|glue|superglue|lime|cement|product|spray\w*"
    r"|acetone|alcohol|ammonia|paint)\b"
)
_BLOW = r"\b(?:hit|struck|blow|punch\w*|pok(?:e|ed)|kick\w*|elbow\w*|ball|knock\w*|bang\w*|whack\w*)\b"

# Each sign is heard where every part of one of its lines is found.
SIGN_WORDS: Mapping[str, tuple[tuple[str, ...], ...]] = {
    "today-loss": (
        (rf"\b(?:lost|lose|losing|loss)\b(?: \w+){{0,4}} {_SIGHT}|{_SIGHT}(?: \w+){{0,4}} (?:lost|loss)\b",),
        (rf"{_SIGHT}(?: \w+){{0,2}} {_WENT}",),
        (r"\b(?:went|go|gone|going|am|became|turned|almost|half|suddenly) blind\b|\bblind in (?:\w+ ){0,3}eyes?\b",),
        (rf"{_CANNOT_SEE}(?! (?:well|clear\w*|properly|sharp\w*)\b)", _EYE),
        (_SUDDEN, rf"{_CANNOT_SEE}|{_SIGHT}|\bblur\w*|\bblind\b"),
        (rf"\b(?:no|without|(?:do not|don't) have)(?: any)? {_SIGHT}",),
        (rf"{_VEIL}.*\b(?:over|across|in|before|in front of)\b.*(?:{_EYE}|{_SIGHT})",),
        (rf"(?:{_EYE}|{_SIGHT})(?: \w+){{0,4}} (?:an?|the|like an?)(?: \w+)? {_VEIL}(?! behind)",),
        (rf"\b(?:dark|black|grey|gray) {_VEIL}|\bcurtain (?:came|coming|comes|fell|falling|falls|goes|went)\b",),
    ),
    "today-flashes": (
        (rf"\bfloaters?\b|\bfloating {_SPOTS}|\b{_SPOTS}\b(?: \w+)? float\w*",),
        (r"(?<!reflection )(?<!reflections )(?<!lens )(?<!lenses )\bflashes\b|\bflash(?:es|ing)? (?:of )?lights?\b",),
        (r"\bflash\w*", rf"{_EYE}|{_SIGHT}"),
        (r"\bsparks?\b|\blightning\b",),
    ),
    "today-double": ((_BEGUN, DOUBLE),),
    "today-red": ((rf"\beyes?\b.*\b{_PAIN}|\b(?:painful|sore|aching|red)\b.*\beyes?\b",),),
    "today-rings": ((r"\b(?:rings?|halos?|haloes|rainbows?)\b", rf"\b{_PAIN}"),),
    "today-headache": ((r"\bheadaches?\b|\bhead (?:hurts|aches)\b", rf"\b(?:scalp|jaw)\b|{_SORE_TEMPLE}"),),
    "today-splash": (
        (rf"{_STUFF}.*{_IN_EYE}",),
        (rf"{_BLOW}.*{_IN_EYE}|\beyes?\b(?: \w+)? (?:got|was|were|been) (?:hit|punched|poked|struck|kicked)\b",),
    ),
    "today-bent": ((_LINE, _BENT),),
    "soon-glare": (
        (r"\b(?:glare|dazzl\w+|starbursts?)\b", r"\b(?:new\w*|worse\w*|grow\w*|lately|recent\w*|more and more)\b"),
    ),
}  # fmt: skip


def signs_in(text: str) -> list[str]:
    """Return the signs heard in words that were put on one line in small letters."""
    said = _DENIED.sub(" ", text)
    return [
        key for key, lines in SIGN_WORDS.items() if any(all(re.search(part, said) for part in parts) for parts in lines)
    ]
