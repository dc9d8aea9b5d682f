"""Text as it is searched: without case, accents or double spaces."""

import unicodedata

# Letters that Unicode does not take apart into a base letter and a mark.
_LETTERS = str.maketrans({"ø": "o", "ł": "l", "đ": "d", "ð": "d", "þ": "th", "æ": "ae", "œ": "oe", "ı": "i"})


def fold(text: str) -> str:
    """Return the text for comparing: "  Łucja  ÁBEL" gives "lucja abel"."""
    apart = unicodedata.normalize("NFKD", text.casefold())
    plain = "".join(letter for letter in apart if not unicodedata.combining(letter))
    return " ".join(plain.translate(_LETTERS).split())
