"""A measured reflectance spectrum kept in a text file beside a range file."""

import re
from pathlib import Path

from advisor.counsel.faults import Faults
from advisor.counsel.fields import refusal
from advisor.counsel.files import read_text

LARGEST_BYTES = 1_000_000
_SEPARATOR = re.compile(r"[;\t]\s*|,\s*|\s+")


def _row(line: str) -> tuple[float, float] | None:
    """Read a wavelength and a fraction; with a semicolon or tab between them the comma is a decimal sign."""
    plain = line.replace(",", ".") if ";" in line or "\t" in line else line
    parts = [part for part in _SEPARATOR.split(plain.strip()) if part]
    try:
        wavelength_nm, fraction = (float(part) for part in parts)
    except ValueError:
        return None
    return wavelength_nm, fraction


def read_spectrum_file(name: str, *, folder: Path) -> list[tuple[float, float]]:
    """Return the rows of a file in ``folder``; lines with ``#`` and one line of headings are passed over."""
    path = folder / name
    if not name or Path(name).name != name or "\\" in name or "\0" in name or name in (".", ".."):
        raise refusal("spectrum-place")
    if path.exists() and path.resolve().parent != folder.resolve():
        raise refusal("spectrum-place")
    try:
        text = read_text(path, largest_bytes=LARGEST_BYTES)
    except Faults as error:
        found = error.faults[0].phrase
        raise refusal(found.code, dict(found.figures)) from error
    lines = [
        (number, line)
        for number, line in enumerate(text.splitlines(), start=1)
        if line.strip() and not line.lstrip().startswith("#")
    ]
    rows = [(number, _row(line)) for number, line in lines]
    if rows and rows[0][1] is None:
        rows = rows[1:]
    for number, row in rows:
        if row is None:
            raise refusal("spectrum-rows", {"row": number})
    return [row for _, row in rows if row is not None]
