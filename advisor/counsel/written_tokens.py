"""A written prescription cut into words, numbers and marks, each with its kind and its place in the text.

A kind is one letter, so that the kinds of a text are a string in which :mod:`advisor.counsel.written_line` finds its
patterns: N a number, E the mark of an eye and O that of both, S C X A P the words for sphere, cylinder, axis, add and
prism, L a sphere of 0, B the word "base", Q a base by its letters, D a direction, K a PD, R the word "near", V a vertex
distance, U a unit, T a tie (/ + &), G a gap (a line break ; |), and W anything else.

Conventions (common practice, no source): a sign belongs to the number behind it, also with spaces between, except
where it is glued to the end of an unsigned number ("4,25- "). A comma with one or two figures behind it is a decimal
mark; one with three is none, for "-1,175" may be a cylinder with its axis. A row of figures tied by hyphens, and three
parted by strokes or points, is a date or a telephone number, not a power.
"""

import re
from collections.abc import Mapping
from dataclasses import dataclass

from advisor.counsel.fields import MINUS_SIGNS

# Words by what they stand for, without their points ("r.e." is "re").
_KINDS: Mapping[str, Mapping[str, str]] = {
    "E": {
        **dict.fromkeys(("r", "re", "rt", "right", "od"), "right"),
        **dict.fromkeys(("l", "le", "lt", "left", "os", "og", "oi"), "left"),
    },
    "O": dict.fromkeys(("ou", "both"), ""),
    "S": dict.fromkeys(("s", "sph", "sphere"), ""),
    "C": dict.fromkeys(("c", "cyl", "cylinder"), ""),
    "X": dict.fromkeys(("x", "ax", "axis", "a", "dcx", "@", "×", "*"), ""),
    "A": dict.fromkeys(("add", "addition"), ""),
    "P": dict.fromkeys(("prism", "prisms", "δ", "∆", "^"), ""),
    "L": {"pl": "pl", "pla": "pla", "plano": "plano"},
    "B": dict.fromkeys(("base", "b"), ""),
    "Q": {"bi": "in", "bo": "out", "bu": "up", "bd": "down"},
    "D": {"in": "in", "out": "out", "up": "up", "down": "down", "dn": "down"},
    "K": dict.fromkeys(("pd", "ipd"), ""),
    "R": {"near": ""},
    "V": dict.fromkeys(("vd", "bvd", "vertex"), ""),
    "U": dict.fromkeys(("d", "ds", "dc", "dpt", "mm", "°", "deg", "degrees", "eye", "eyes", "distance"), ""),
}
_WORDS = {word: (kind, says) for kind, words in _KINDS.items() for word, says in words.items()}

_TOKEN = re.compile(
    r"""
    (?P<date> (?<![\w.,+-]) (?:
        [0-9]+ (?:-[0-9]+)+ (?![\w.,])
      | [0-9]{1,4} (?P<mark>[/.]) [0-9]{1,2} (?P=mark) [0-9]{1,4} (?!\w)
    ) )
  | (?P<number>
      (?: (?P<before>[+-]) [^\S\r\n]* )?
      (?P<body> (?<![0-9]) (?:
          [0-9]+ (?! [0-9] | [.,][0-9] )
        | [0-9]*\.[0-9]{1,3} (?! [0-9] | \.[0-9] )
        | [0-9]*,[0-9]{1,2} (?! [0-9] | \.[0-9] )
      ) )
      (?(before) | (?: (?P<behind>[+-]) (?= [\s/;|)x×@] | $ ) )? )
    )
  | (?P<word> (?:[^\W\d_]\.){2,} | (?:(?!Δ)[^\W\d_])+ | [Δ∆^°@×*] )
  | (?P<gap> [\r\n;|]+ )
  | (?P<tie> [/+&] )
  | (?P<figures> [0-9][0-9.,]* )
    """,
    re.VERBOSE | re.IGNORECASE,
)  # fmt: skip


@dataclass(frozen=True)
class Token:
    """One piece of the text: its kind, what it says, and where it stands."""

    kind: str
    says: str
    start: int
    end: int


def tokens_of(text: str) -> list[Token]:
    """Cut a text into its tokens; brackets, colons and the like are left out."""
    return [_token(found) for found in _TOKEN.finditer(text.translate(MINUS_SIGNS))]


def _token(found: re.Match[str]) -> Token:
    kind, says = "W", found[0]
    if found["number"]:
        kind, says = "N", (found["before"] or found["behind"] or "") + found["body"]
    elif found["word"]:
        kind, says = _WORDS.get(says.replace(".", "").lower(), ("W", says))
    elif found["gap"] or found["tie"]:
        kind = "G" if found["gap"] else "T"
    return Token(kind, says, *found.span())
